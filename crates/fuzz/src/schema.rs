//! The published JSON Schema of the sheet: what may stand where.

use crate::choices::Choices;
use crate::numbers;
use serde_json::{Map, Value, json};
use std::sync::LazyLock;

static SCHEMA: LazyLock<Value> = LazyLock::new(|| {
    serde_json::from_str(include_str!("../../sheet/schema/scan-sheet.schema.json"))
        .expect("the published schema is JSON")
});

/// Deepest nesting that is made up.
const DEEPEST: u8 = 6;

/// The schema of a whole sheet.
#[must_use]
pub fn of_sheet() -> &'static Value {
    &SCHEMA
}

/// The node without references and without "or null".
#[must_use]
pub fn resolved(node: &'static Value) -> &'static Value {
    let target = node
        .get("$ref")
        .and_then(Value::as_str)
        .and_then(|name| SCHEMA.pointer(name.trim_start_matches('#')));
    if let Some(target) = target {
        return resolved(target);
    }
    let real = node
        .get("anyOf")
        .and_then(Value::as_array)
        .and_then(|list| {
            list.iter()
                .find(|one| one.get("type").is_none_or(|kind| kind != "null"))
        });
    real.map_or(node, resolved)
}

/// The variant of a `oneOf` that fits a value by its `kind`, or the node itself.
#[must_use]
pub fn variant(node: &'static Value, value: &Value) -> &'static Value {
    let node = resolved(node);
    let Some(variants) = node.get("oneOf").and_then(Value::as_array) else {
        return node;
    };
    let fits = |one: &&'static Value| {
        let kind = resolved(one).pointer("/properties/kind/const");
        kind.is_some() && kind == value.get("kind")
    };
    variants.iter().find(fits).map_or(node, resolved)
}

/// The node of a property or of an array's items.
#[must_use]
pub fn child(node: &'static Value, key: &str) -> Option<&'static Value> {
    node.get("properties").and_then(|list| list.get(key))
}

/// Anything that the schema allows at this path.
pub fn make_up(node: &'static Value, path: &str, depth: u8, c: &mut Choices) -> Value {
    let node = resolved(node);
    if let Some(constant) = node.get("const") {
        return constant.clone();
    }
    if let Some(variants) = node.get("oneOf").and_then(Value::as_array) {
        return make_up(c.one(variants), path, depth, c);
    }
    if let Some(values) = node.get("enum").and_then(Value::as_array) {
        return c.one(values).clone();
    }
    let kind = node.get("type");
    let is = |name: &str| {
        kind.is_some_and(|kind| {
            kind == name
                || kind
                    .as_array()
                    .is_some_and(|list| list.iter().any(|one| one == name))
        })
    };
    if is("object") {
        return object(node, path, depth, c);
    }
    if is("array") {
        let item = format!("{path}[0]");
        if let Some(places) = node.get("prefixItems").and_then(Value::as_array) {
            let places = places.iter().enumerate();
            return places
                .map(|(i, one)| make_up(one, &format!("{path}.{i}"), depth + 1, c))
                .collect();
        }
        let count = if depth < DEEPEST { c.below(4) } else { 0 };
        let Some(items) = node.get("items") else {
            return json!([]);
        };
        return (0..count)
            .map(|_| make_up(items, &item, depth + 1, c))
            .collect();
    }
    if is("string") {
        return Value::String(numbers::text_at(path, None, c));
    }
    if is("boolean") {
        return Value::Bool(c.rarely(2));
    }
    if is("integer") || is("number") {
        return json!(c.below(6));
    }
    Value::Null
}

fn object(node: &'static Value, path: &str, depth: u8, c: &mut Choices) -> Value {
    let required: Vec<&str> = node
        .get("required")
        .and_then(Value::as_array)
        .into_iter()
        .flatten()
        .filter_map(Value::as_str)
        .collect();
    let mut made = Map::new();
    let properties = node.get("properties").and_then(Value::as_object);
    for (key, inner) in properties.into_iter().flatten() {
        if required.contains(&key.as_str()) || (depth < DEEPEST && c.rarely(3)) {
            let path = if path.is_empty() {
                key.clone()
            } else {
                format!("{path}.{key}")
            };
            made.insert(key.clone(), make_up(inner, &path, depth + 1, c));
        }
    }
    Value::Object(made)
}
