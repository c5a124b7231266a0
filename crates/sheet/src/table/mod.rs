//! Tables in and out: CSV files and cells pasted from a spreadsheet.
//!
//! In: `cells` cuts the text, `columns` says what each column means, `rows` makes rows of
//! data, [`join`] puts them beside the rows that are there. Out: `write` (RFC 4180, units in
//! headers). `fields` ties the names of columns to the fields of a row, for both directions.

mod cells;
mod columns;
mod fields;
mod guard;
mod join;
mod rows;
pub mod write;

pub use columns::Column;
pub(crate) use guard::guarded;
pub use join::{RowChange, join};
pub use rows::{Table, read};
