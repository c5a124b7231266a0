//! Amplitudes: partial-wave resonances with backgrounds; tree-level diagrams.

pub mod born;
pub mod hypothesis;
