//! The scan sheet: the one document that page, batch program and tests read.
//!
//! * [`doc`] - the document itself: every number is the text a person typed, unit included.
//! * [`quantity`] - numbers with units as people type them, read and written.
//! * [`limits`] - the one table of what every number may be.
//! * [`particles`] - common beam and final-state particles.
//! * [`check`] - from the sheet to the core's scan, or everything that is wrong with it.
//! * [`table`] - CSV in and out.
//! * [`json`], [`demos`] - the sheet as a file, invented examples.
//! * [`requests`] - what can be asked of a sheet, and the answers; the page's worker and the
//!   batch program are thin shells over it.
#![deny(clippy::indexing_slicing)]

pub mod check;
pub mod demos;
pub mod doc;
pub mod json;
pub mod limits;
pub mod particles;
mod plain;
pub mod quantity;
pub mod requests;
#[cfg(test)]
mod schema;
pub mod table;
pub mod times;
