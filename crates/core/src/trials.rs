//! Pseudo-experiments: seeded, order-independent.
