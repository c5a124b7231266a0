//! Opening and checking a sheet.

use super::{Body, Reply};
use crate::doc::Sheet;
use crate::{check, json};
use widthwise_core::error::Answer;

/// Reads a file's text; what cannot be computed with comes back as problems beside the sheet.
pub fn open(text: &str) -> Answer<Reply> {
    json::open(text).map(|sheet| check(&sheet))
}

/// Everything that is wrong with the sheet.
pub fn check(sheet: &Sheet) -> Reply {
    let understood = check::understand(sheet);
    Reply {
        body: Body::Sheet {
            sheet: Box::new(sheet.clone()),
            problems: understood.problems,
            warnings: understood.warnings,
        },
        columns: Vec::new(),
    }
}
