//! Remembers what something was made from, so that a second run makes nothing twice.

use crate::shell::{self, Outcome};
use std::hash::{DefaultHasher, Hash, Hasher};
use std::path::{Path, PathBuf};

/// The fingerprint of what goes into a product.
#[derive(Default)]
pub struct Ingredients(DefaultHasher);

impl Ingredients {
    /// Adds a text.
    pub fn text(mut self, text: &str) -> Self {
        text.hash(&mut self.0);
        self
    }

    /// Adds a file, or all files of a folder: names and contents.
    pub fn files(mut self, path: &Path) -> Outcome<Self> {
        let files = if path.is_dir() {
            shell::files_below(path)
        } else {
            vec![path.to_path_buf()]
        };
        for file in files {
            file.hash(&mut self.0);
            let bytes = std::fs::read(&file)
                .map_err(|error| format!("cannot read {}: {error}", file.display()))?;
            bytes.hash(&mut self.0);
        }
        Ok(self)
    }

    /// The fingerprint as text.
    pub fn print(&self) -> String {
        format!("{:016x}", self.0.finish())
    }
}

/// Runs `make` unless the product beside which `stamp` lies was made from the same ingredients.
pub fn unless_made(
    stamp: PathBuf,
    ingredients: &Ingredients,
    make: impl FnOnce() -> Outcome,
) -> Outcome {
    let print = ingredients.print();
    if std::fs::read_to_string(&stamp).is_ok_and(|before| before == print) {
        return Ok(());
    }
    // Half-made is not made: the stamp goes first and comes back last.
    if stamp.exists() {
        std::fs::remove_file(&stamp)
            .map_err(|error| format!("cannot remove {}: {error}", stamp.display()))?;
    }
    make()?;
    shell::write(&stamp, &print)
}
