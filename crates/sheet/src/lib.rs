//! The scan sheet: the one document that page, batch program and tests read.
//!
//! * [`doc`] - the document itself: every number is the text a person typed, unit included.
//! * [`requests`] - what can be asked of a sheet, and the answers; the page's worker and the
//!   batch program are thin shells over it.

pub mod doc;
pub mod requests;
