//! Where the next hour of beam is worth most.
