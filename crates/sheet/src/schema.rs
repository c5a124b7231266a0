//! The published JSON Schema is generated from the document's types; this test keeps it current.
//! That the demos validate against it is checked with another library: `tests/reference/schema.py`.

use crate::doc::Sheet;

const PATH: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/schema/scan-sheet.schema.json");

fn generated() -> serde_json::Value {
    let mut schema = serde_json::to_value(schemars::schema_for!(Sheet)).unwrap();
    let properties = schema.get_mut("properties").unwrap();
    properties["format"]["const"] = crate::json::FORMAT.into();
    properties["version"]["const"] = crate::json::VERSION.into();
    schema
}

/// `cargo xtask types` writes it anew.
#[test]
fn the_published_schema_is_current() {
    let text = serde_json::to_string_pretty(&generated()).unwrap() + "\n";
    if std::env::var_os("UPDATE_SCHEMA").is_some() {
        std::fs::write(PATH, &text).unwrap();
        return;
    }
    assert_eq!(
        include_str!("../schema/scan-sheet.schema.json"),
        text,
        "run: cargo xtask types"
    );
}
