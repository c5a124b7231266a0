//! Line shape: Born, then radiation, then spread.
