//! Any sheet that the limits allow computes or is refused with a sentence; any value that they do
//! not allow is refused by its path. The generator is the table of limits itself.

use proptest::prelude::*;
use serde_json::Value;
use widthwise_sheet::demos::DEMOS;
use widthwise_sheet::limits::{self, Limit, TABLE};
use widthwise_sheet::quantity::{Dimension, format};
use widthwise_sheet::requests::{Request, answer};
use widthwise_sheet::{check, json};

/// Paths of all strings in a sheet that are numbers by the table of limits.
fn numbers(value: &Value, path: &str, out: &mut Vec<(String, Vec<&'static Limit>)>) {
    match value {
        Value::Object(map) => {
            for (key, inner) in map {
                let path = if path.is_empty() {
                    key.clone()
                } else {
                    format!("{path}.{key}")
                };
                numbers(inner, &path, out);
            }
        }
        Value::Array(list) => {
            for (i, inner) in list.iter().enumerate() {
                numbers(inner, &format!("{path}[{i}]"), out);
            }
        }
        Value::String(text) => {
            let pattern = limits::pattern(path);
            let limits: Vec<&Limit> = TABLE
                .iter()
                .filter(|l| {
                    l.field == pattern && widthwise_sheet::quantity::read(text, l.dimension).is_ok()
                })
                .collect();
            if !limits.is_empty() {
                out.push((path.to_string(), limits));
            }
        }
        _ => {}
    }
}

fn set(value: &mut Value, path: &str, text: String) {
    let pointer: String = path
        .replace('[', ".")
        .replace(']', "")
        .split('.')
        .map(|part| format!("/{part}"))
        .collect();
    *value.pointer_mut(&pointer).unwrap() = Value::String(text);
}

/// A value inside a limit: at its ends, or spread over its orders of magnitude.
fn inside(limit: &Limit, place: u8, fraction: f64, negative: bool) -> f64 {
    let reach = limit.largest.min(1e6);
    let value = match place {
        0 if limit.least_allowed => limit.least,
        1 => limit.largest,
        _ => {
            let size = widthwise_core::math::pow(10.0, fraction * 18.0 - 12.0) * reach.min(1.0);
            let sign = if negative && limit.least < 0.0 {
                -1.0
            } else {
                1.0
            };
            (sign * size).clamp(limit.least, limit.largest)
        }
    };
    let value = if limit.whole { value.floor() } else { value };
    if limit.allows(value) {
        value
    } else {
        limit.largest
    }
}

fn demo(which: usize) -> Value {
    serde_json::from_str(DEMOS[which % DEMOS.len()].1).unwrap()
}

fn text_of(value: f64, dimension: Dimension) -> String {
    format::exact(value, None, dimension, None)
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, max_shrink_iters: 50, ..ProptestConfig::default() })]

    #[test]
    fn any_sheet_within_the_limits_computes_or_is_refused(
        which in 0_usize..3,
        changes in proptest::collection::vec((any::<prop::sample::Index>(), 0_u8..5, 0.0..1.0, any::<bool>()), 1..4),
    ) {
        let mut value = demo(which);
        let mut known = Vec::new();
        numbers(&value, "", &mut known);
        for (index, place, fraction, negative) in changes {
            let (path, limits) = &known[index.index(known.len())];
            let limit = limits[0];
            set(&mut value, path, text_of(inside(limit, place, fraction, negative), limit.dimension));
        }
        let sheet = json::open(&value.to_string()).unwrap();
        let understood = check::understand(&sheet);
        for problem in &understood.problems {
            prop_assert!(!problem.message.is_empty());
        }
        let (from_gev, to_gev) = (2.8, 2.9);
        let curve = answer(&Request::Curve { sheet: sheet.clone(), from_gev, to_gev, points: 3 }, &mut |_, _| ());
        match curve {
            Ok(reply) => {
                for column in &reply.columns {
                    prop_assert!(column.values.iter().all(|v| v.is_finite()), "{} {:?}", column.name, column.values);
                }
            }
            Err(refusal) => prop_assert!(!refusal.message.is_empty()),
        }
        if understood.problems.is_empty() {
            let checked = answer(&Request::Check { sheet: sheet.clone() }, &mut |_, _| ());
            prop_assert!(checked.is_ok());
            prop_assert_eq!(&json::open(&json::write(&sheet)).unwrap(), &sheet);
        }
    }
}

proptest! {
    #[test]
    fn a_value_out_of_range_is_refused_by_its_path(
        which in 0_usize..3,
        index in any::<prop::sample::Index>(),
        factor in 1.001_f64..1e3,
        below in any::<bool>(),
    ) {
        let mut value = demo(which);
        let mut known = Vec::new();
        numbers(&value, "", &mut known);
        let (path, limits) = &known[index.index(known.len())];
        let limit = limits[0];
        let wrong = if below {
            if limit.least < 0.0 { limit.least * factor } else { -factor }
        } else {
            limit.largest * factor
        };
        set(&mut value, path, text_of(wrong, limit.dimension));
        let sheet = json::open(&value.to_string()).unwrap();
        let problems = check::understand(&sheet).problems;
        prop_assert!(problems.iter().any(|p| p.field == *path), "{} in {:?}", path, problems);
    }

    #[test]
    fn any_text_is_opened_or_refused(text in ".{0,200}") {
        prop_assert!(json::open(&text).is_err());
    }

    #[test]
    fn any_table_is_read_or_refused(text in "[-a-zA-Z0-9.,;\t\n\"'#=\\[\\] ]{0,200}") {
        let sheet = widthwise_sheet::demos::open("ostrel").unwrap();
        let request = Request::ReadTable { sheet, text, answers: Vec::new() };
        if let Err(refusal) = answer(&request, &mut |_, _| ()) {
            prop_assert!(!refusal.message.is_empty());
        }
    }
}
