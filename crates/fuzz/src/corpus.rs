//! The kept corpus: `tests/fuzz/TARGET/*`, one input a file. Inputs that once broke a promise stay for ever.

use std::path::{Path, PathBuf};

/// The kept inputs of a target, sorted.
#[must_use]
pub fn files(target: &str) -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("../../tests/fuzz")
        .join(target);
    let entries = std::fs::read_dir(folder).into_iter().flatten().flatten();
    let mut files: Vec<PathBuf> = entries.map(|entry| entry.path()).collect();
    files.sort();
    files
}
