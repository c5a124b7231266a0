//! The sheet as a file: versioned JSON.

use crate::doc::Sheet;
use serde::de::{Error as _, MapAccess, SeqAccess, Visitor};
use serde::{Deserialize, Deserializer};
use serde_json::Value;
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
    let Strict(value) = serde_json::from_str(text).map_err(|e| not_json(&e))?;
    let format = value.get("format").and_then(Value::as_str).unwrap_or("");
    let version = value.get("version").map_or(Some(1), Value::as_u64);
    let version = version.ok_or_else(|| {
        Refusal::new(
            "version",
            "",
            format!("1 to {VERSION}"),
            "the version is not a whole number",
        )
    })?;
    check_header(format, version)?;
    crate::plain::typed(value).map_err(|(path, reason)| {
        Refusal::new(path, "", "what the scan sheet's schema allows", reason)
    })
}

/// JSON in which no object says the same field twice: of two values one would be lost silently.
struct Strict(Value);

impl<'de> Deserialize<'de> for Strict {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(StrictVisitor).map(Strict)
    }
}

struct StrictVisitor;

impl<'de> Visitor<'de> for StrictVisitor {
    type Value = Value;

    fn expecting(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("JSON")
    }
    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }
    fn visit_bool<E>(self, value: bool) -> Result<Value, E> {
        Ok(value.into())
    }
    fn visit_i64<E>(self, value: i64) -> Result<Value, E> {
        Ok(value.into())
    }
    fn visit_u64<E>(self, value: u64) -> Result<Value, E> {
        Ok(value.into())
    }
    fn visit_f64<E>(self, value: f64) -> Result<Value, E> {
        Ok(value.into())
    }
    fn visit_str<E>(self, value: &str) -> Result<Value, E> {
        Ok(value.into())
    }
    fn visit_seq<A: SeqAccess<'de>>(self, mut seq: A) -> Result<Value, A::Error> {
        let mut list = Vec::new();
        while let Some(Strict(value)) = seq.next_element()? {
            list.push(value);
        }
        Ok(list.into())
    }
    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Value, A::Error> {
        let mut fields = serde_json::Map::new();
        while let Some(key) = map.next_key::<String>()? {
            let Strict(value) = map.next_value()?;
            if fields.contains_key(&key) {
                let twice = format!("the field \"{key}\" is given twice");
                return Err(A::Error::custom(twice));
            }
            fields.insert(key, value);
        }
        Ok(fields.into())
    }
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
