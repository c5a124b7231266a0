//! What can be asked of a sheet, and the answers. Page and batch program send the same requests.

mod convert;
mod csv;
mod cursor;
mod curve;
mod fit;
mod parameter;
mod points;
mod ready;
mod reply;
mod sheets;
mod table;
mod tables;

pub use csv::csv_of;
pub use fit::settings as fit_settings;
pub use parameter::{Parameter, find as find_parameter};
pub use ready::Ready;
pub use reply::*;
pub use table::range as energy_range;

use crate::doc::Sheet;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};

/// One request. The sheet travels as the document itself.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Request {
    /// Which particles are known, what every parameter may be, which units are understood.
    Tables,
    /// Reads a file's text as a sheet; answers with the sheet or with what is wrong.
    Open {
        /// Text of the file.
        text: String,
    },
    /// Everything that is wrong with the sheet, and what was understood.
    Check {
        /// The sheet.
        sheet: Sheet,
    },
    /// The curve between two energies.
    Curve {
        /// The sheet.
        sheet: Sheet,
        /// From, GeV.
        from_gev: f64,
        /// To, GeV.
        to_gev: f64,
        /// Number of energies, 2 to 20,000.
        points: u32,
    },
    /// Everything about one W: contributions, dial, rate, derivative.
    Cursor {
        /// The sheet.
        sheet: Sheet,
        /// W, GeV.
        w_gev: f64,
    },
    /// Converts one setting into all others.
    Convert {
        /// The sheet (its beams).
        sheet: Sheet,
        /// Kind of the value.
        from: crate::doc::Dial,
        /// The value as typed.
        value: String,
    },
    /// Per row: W, dial, expected, seen, pull, p-value, times.
    Points {
        /// The sheet.
        sheet: Sheet,
    },
    /// The fit.
    Fit {
        /// The sheet.
        sheet: Sheet,
    },
    /// Reads a table (CSV or pasted cells): how each column was understood, and the rows.
    ReadTable {
        /// The sheet the rows will join.
        sheet: Sheet,
        /// Text of the table.
        text: String,
        /// Answers to questions asked before: (column header, meaning).
        answers: Vec<(String, String)>,
    },
    /// A table as CSV text (RFC 4180, units in headers).
    WriteTable {
        /// The sheet.
        sheet: Sheet,
        /// Which table.
        table: Table,
    },
}

/// Tables that can be taken away.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Table {
    /// The data rows.
    Rows,
    /// The curve over the data's range.
    Curve,
    /// The fit's result.
    Fit,
    /// Lines for an electronic log.
    Log,
}

/// Answers a request, telling `progress(done, total)` as long work moves on.
///
/// # Errors
/// The request's first problem; a sheet that cannot be computed with is refused with its first one
/// (ask [`Request::Check`] for all).
pub fn answer(request: &Request, progress: &mut dyn FnMut(u32, u32)) -> Answer<Reply> {
    let _ = progress;
    match request {
        Request::Tables => Ok(tables::answer()),
        Request::Open { text } => sheets::open(text),
        Request::Check { sheet } => Ok(sheets::check(sheet)),
        Request::Convert { sheet, from, value } => convert::answer(sheet, *from, value),
        Request::ReadTable {
            sheet,
            text,
            answers,
        } => table::read_table(sheet, text, answers),
        Request::WriteTable { sheet, table } => table::write_table(sheet, *table),
        Request::Curve {
            sheet,
            from_gev,
            to_gev,
            points,
        } => curve::answer(sheet, *from_gev, *to_gev, *points),
        Request::Cursor { sheet, w_gev } => cursor::answer(sheet, *w_gev),
        Request::Points { sheet } => points::answer(sheet),
        Request::Fit { sheet } => fit::answer(sheet),
    }
}

/// The first of several problems, for requests that need a sound sheet.
fn first_problem(problems: Vec<Refusal>) -> Refusal {
    problems
        .into_iter()
        .next()
        .unwrap_or_else(|| Refusal::new("", "", "", "The sheet cannot be computed with."))
}
