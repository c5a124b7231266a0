//! Choices made from bytes.

use arbitrary::Unstructured;
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

/// Choices from bytes; when they are used up, the first of every choice.
pub struct Choices<'a>(Unstructured<'a>);

impl<'a> Choices<'a> {
    /// From these bytes.
    #[must_use]
    pub fn new(bytes: &'a [u8]) -> Self {
        Self(Unstructured::new(bytes))
    }

    /// A number below `count` (0 if there is nothing to choose from).
    pub fn below(&mut self, count: usize) -> usize {
        if count < 2 {
            return 0;
        }
        self.0.int_in_range(0..=count - 1).unwrap_or(0)
    }

    /// One of these.
    pub fn one<'b, T>(&mut self, of: &'b [T]) -> &'b T {
        of.get(self.below(of.len()))
            .expect("a list to choose from is never empty")
    }

    /// True in one case of `cases`, never when the bytes are used up.
    pub fn rarely(&mut self, cases: u8) -> bool {
        !self.0.is_empty() && self.below(usize::from(cases)) == usize::from(cases) - 1
    }

    /// A number from 0 up to 1.
    pub fn fraction(&mut self) -> f64 {
        f64::from(self.0.arbitrary::<u32>().unwrap_or(0)) / f64::from(u32::MAX)
    }

    /// Any double, infinities and NaN included.
    pub fn any_double(&mut self) -> f64 {
        f64::from_bits(self.0.arbitrary::<u64>().unwrap_or(0))
    }

    /// Any text up to `most` bytes.
    pub fn text(&mut self, most: usize) -> String {
        let length = self.below(most).min(self.0.len());
        let bytes = self.0.bytes(length).unwrap_or_default();
        String::from_utf8_lossy(bytes).into_owned()
    }

    /// Whether bytes are left.
    #[must_use]
    pub fn more(&self) -> bool {
        !self.0.is_empty()
    }
}

/// Bytes from a seed, the same everywhere.
#[must_use]
pub fn bytes(seed: u64, length: usize) -> Vec<u8> {
    let mut bytes = vec![0; length];
    ChaCha8Rng::seed_from_u64(seed).fill_bytes(&mut bytes);
    bytes
}
