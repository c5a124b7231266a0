//! What can be asked of a sheet, and the answers. Page and batch program send the same requests.

use crate::doc::{Row, Sheet};
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Refusal, Warning};

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

/// A column of numbers that leaves as one transferred array.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    /// Name, e.g. "observed", "resonance V", "interference".
    pub name: String,
    /// Unit.
    pub unit: String,
    /// Values.
    pub values: Vec<f64>,
}

/// An answer: the body as plain data, long columns beside it.
#[derive(Debug, Clone, PartialEq)]
pub struct Reply {
    /// Plain data.
    pub body: Body,
    /// Columns, e.g. of a curve (the first is W in GeV).
    pub columns: Vec<Column>,
}

/// Plain data of an answer.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Body {
    /// A sheet and what is wrong with it.
    Sheet {
        /// The sheet.
        sheet: Sheet,
        /// Problems; empty if it can be computed with.
        problems: Vec<Refusal>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// A curve (numbers in the columns).
    Curve {
        /// Relative accuracy reached.
        accuracy: f64,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Rows read from a table.
    Rows {
        /// Rows.
        rows: Vec<Row>,
    },
    /// Text of a file.
    Text {
        /// Text.
        text: String,
    },
}
