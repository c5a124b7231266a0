//! Sheets: an example, changed a few times.

use crate::choices::Choices;
use crate::{numbers, schema};
use serde_json::{Map, Value};
use widthwise_sheet::demos::DEMOS;

/// How far a sheet may stray.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Mood {
    /// Numbers moved by a little: what people fit.
    Still,
    /// Numbers within their limits and what the schema allows: nearly all can be computed with.
    Calm,
    /// Also nonsense, near-degenerate numbers, missing and doubled parts.
    Wild,
}

/// A place in a sheet: its path, JSON pointer and schema.
struct Site {
    path: String,
    pointer: String,
    node: &'static Value,
}

/// A sheet as JSON.
pub fn sheet(mood: Mood, c: &mut Choices) -> Value {
    let (_, text) = c.one(&DEMOS);
    let mut sheet: Value = serde_json::from_str(text).expect("examples are JSON");
    let most = match mood {
        Mood::Still | Mood::Calm => 3,
        Mood::Wild => 8,
    };
    // Few rows: a fit of few points is the harder case.
    if mood == Mood::Wild && c.rarely(2) {
        let keep = c.below(6) + 2;
        if let Some(rows) = sheet
            .pointer_mut("/data/rows")
            .and_then(Value::as_array_mut)
        {
            rows.truncate(keep);
        }
    }
    for _ in 0..=c.below(most) {
        change(&mut sheet, mood, c);
    }
    sheet
}

fn change(sheet: &mut Value, mood: Mood, c: &mut Choices) {
    let mut sites = Vec::new();
    collect(sheet, schema::of_sheet(), "", "", &mut sites);
    // What the document is, stays: else every reading ends at its first line.
    sites.retain(|site| !matches!(site.path.as_str(), "" | "format" | "version"));
    if sites.is_empty() {
        return;
    }
    let at = c.below(sites.len());
    let site = sites.swap_remove(at);
    let neighbours = texts(sheet);
    let Some(place) = sheet.pointer_mut(&site.pointer) else {
        return;
    };
    if mood == Mood::Still {
        if let Value::String(text) = place
            && let Some(moved) = numbers::close(&site.path, text, c)
        {
            *text = moved;
        }
        return;
    }
    if mood == Mood::Wild && c.rarely(3) {
        disturb(place, &site, &neighbours, c);
        return;
    }
    match place {
        Value::String(text) if !numbers::limits(&site.path).is_empty() => {
            *text = numbers::text_at(&site.path, Some(text), c);
        }
        // A word or a choice is changed seldom in a calm sheet: most changes of a name are refusals.
        Value::String(_) if mood == Mood::Calm && c.below(3) > 0 => {}
        Value::Object(map) if mood == Mood::Calm || c.below(3) > 0 => add_to(map, &site, c),
        _ => *place = schema::make_up(site.node, &site.path, 2, c),
    }
}

/// Adds a part that is absent, or changes to another variant.
fn add_to(map: &mut Map<String, Value>, site: &Site, c: &mut Choices) {
    if site.node.get("oneOf").is_some() {
        if let Value::Object(other) = schema::make_up(site.node, &site.path, 2, c) {
            *map = other;
        }
        return;
    }
    let known = site.node.get("properties").and_then(Value::as_object);
    let absent: Vec<(&String, &'static Value)> = known
        .into_iter()
        .flatten()
        .filter(|(key, _)| !map.contains_key(*key))
        .collect();
    if !absent.is_empty() {
        let (key, node) = *c.one(&absent);
        let path = format!("{}.{key}", site.path);
        map.insert(key.clone(), schema::make_up(node, &path, 2, c));
    }
}

fn disturb(place: &mut Value, site: &Site, neighbours: &[String], c: &mut Choices) {
    match c.below(6) {
        0 => *place = Value::String(numbers::strange(c)),
        1 => *place = Value::Null,
        2 => {
            if let Some(text) = numbers::outside(&site.path, c) {
                *place = Value::String(text);
            }
        }
        3 => {
            if let Value::Array(list) = place
                && let Some(one) = list.get(c.below(list.len())).cloned()
            {
                // A resonance, row or channel twice: coincident poles, repeated ids.
                list.push(one);
            }
        }
        4 => {
            if let Value::Object(map) = place
                && let Some(key) = map.keys().nth(c.below(map.len())).cloned()
            {
                map.remove(&key);
            }
        }
        _ => {
            if !neighbours.is_empty()
                && let Some(text) = numbers::nearly(c.one::<String>(neighbours), c)
            {
                *place = Value::String(text);
            }
        }
    }
}

fn collect(value: &Value, node: &'static Value, path: &str, pointer: &str, sites: &mut Vec<Site>) {
    let node = schema::resolved(node);
    sites.push(Site {
        path: path.to_owned(),
        pointer: pointer.to_owned(),
        node,
    });
    let inner = schema::variant(node, value);
    match value {
        Value::Object(map) => {
            for (key, value) in map {
                if let Some(node) = schema::child(inner, key) {
                    let path = if path.is_empty() {
                        key.clone()
                    } else {
                        format!("{path}.{key}")
                    };
                    collect(value, node, &path, &format!("{pointer}/{key}"), sites);
                }
            }
        }
        Value::Array(list) => {
            let places = inner.get("prefixItems").and_then(Value::as_array);
            for (i, value) in list.iter().enumerate() {
                let (node, path) = match places {
                    Some(places) => (places.get(i), format!("{path}.{i}")),
                    None => (inner.get("items"), format!("{path}[{i}]")),
                };
                if let Some(node) = node {
                    collect(value, node, &path, &format!("{pointer}/{i}"), sites);
                }
            }
        }
        _ => {}
    }
}

/// All texts of a sheet.
fn texts(value: &Value) -> Vec<String> {
    match value {
        Value::String(text) => vec![text.clone()],
        Value::Array(list) => list.iter().flat_map(texts).collect(),
        Value::Object(map) => map.values().flat_map(texts).collect(),
        _ => Vec::new(),
    }
}
