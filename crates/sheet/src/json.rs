//! The sheet as a file: versioned JSON.

use crate::doc::Sheet;
use serde::Deserialize;
use widthwise_core::error::{Answer, Refusal};

/// What every sheet says it is.
pub const FORMAT: &str = "widthwise scan sheet";
/// The version of the layout that this program writes.
pub const VERSION: u32 = 1;
/// Largest file that is read, bytes.
pub const LARGEST: usize = 64 * 1024 * 1024;

/// Whether a document is one of ours and not newer.
///
/// # Errors
/// Another format, or a version that this program does not know.
pub fn check_header(format: &str, version: u64) -> Answer<()> {
    if format != FORMAT {
        return Err(Refusal::new(
            "format",
            format,
            format!("\"{FORMAT}\""),
            "this file does not say that it is a scan sheet",
        ));
    }
    if version > u64::from(VERSION) {
        return Err(Refusal::new(
            "version",
            version,
            format!("up to {VERSION}"),
            format!(
                "this sheet was written by a newer version (layout {version}); open it with that one"
            ),
        ));
    }
    if version == 0 {
        return Err(Refusal::new(
            "version",
            version,
            format!("1 to {VERSION}"),
            "there is no layout 0",
        ));
    }
    Ok(())
}

/// The least that is read before anything else, so that a newer file is told as such.
#[derive(Deserialize)]
struct Header {
    format: Option<serde_json::Value>,
    version: Option<serde_json::Value>,
}

/// Reads a file's text as a sheet.
///
/// # Errors
/// Text that is no JSON or ends early, another program's file, a newer layout, a field that is
/// unknown or missing (with its path).
pub fn open(text: &str) -> Answer<Sheet> {
    if text.len() > LARGEST {
        return Err(Refusal::new(
            "",
            format!("{} bytes", text.len()),
            format!("at most {LARGEST} bytes"),
            "this file is too large to be a scan sheet",
        ));
    }
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    if text.trim().is_empty() {
        return Err(Refusal::new("", "", "a scan sheet", "this file is empty"));
    }
    let header: Header = serde_json::from_str(text).map_err(|e| not_json(&e))?;
    let format = header
        .format
        .as_ref()
        .and_then(|v| v.as_str())
        .unwrap_or("");
    let version = header
        .version
        .as_ref()
        .map_or(Some(1), serde_json::Value::as_u64);
    let version = version.ok_or_else(|| {
        Refusal::new(
            "version",
            "",
            format!("1 to {VERSION}"),
            "the version is not a whole number",
        )
    })?;
    check_header(format, version)?;
    let mut deserializer = serde_json::Deserializer::from_str(text);
    serde_path_to_error::deserialize(&mut deserializer).map_err(|e| {
        let path = e.path().to_string();
        let inner = e.into_inner();
        let (line, column) = (inner.line(), inner.column());
        let full = inner.to_string();
        let reason = full.split(" at line ").next().unwrap_or(&full);
        Refusal::new(
            if path == "." { String::new() } else { path },
            "",
            "what the scan sheet's schema allows",
            format!("line {line}, column {column}: {reason}"),
        )
    })
}

/// The sheet as text, for people and version control: two spaces, one field a line.
#[must_use]
pub fn write(sheet: &Sheet) -> String {
    // A sheet holds strings, booleans and small whole numbers only: nothing that JSON cannot say.
    serde_json::to_string_pretty(sheet).map_or_else(|_| String::new(), |text| text + "\n")
}

fn not_json(error: &serde_json::Error) -> Refusal {
    let (line, column) = (error.line(), error.column());
    if error.is_eof() {
        return Refusal::new(
            "",
            format!("ends at line {line}, column {column}"),
            "a complete file",
            "the file ends early: it was cut off while it was saved or copied",
        );
    }
    let full = error.to_string();
    let reason = full.split(" at line ").next().unwrap_or(&full);
    Refusal::new(
        "",
        format!("line {line}, column {column}"),
        "a scan sheet (JSON)",
        format!("this file is not a scan sheet: {reason}"),
    )
}
