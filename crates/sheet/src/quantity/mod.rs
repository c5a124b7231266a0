//! Numbers with units as people type them: one grammar for sheet, tables and page.
//!
//! `2874.20(5) MeV`, `19.6(4) nb`, `0.71 +- 0.02 MeV`, `9.0e30 cm^-2 s^-1`, `/nb`, `3 %`, `1h20`.
//! Reading is exact where units differ by powers of ten; nothing is guessed: what is not
//! understood is refused with the part that was not, and what is allowed.

pub mod decimal;
pub mod dimension;
pub mod format;
mod read;
pub mod unit;

pub use dimension::Dimension;
pub use read::{Problem, Reading, read, read_with};
