//! Counts: expected numbers, times, p-values.
