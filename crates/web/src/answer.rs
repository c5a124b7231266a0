//! From a request to an answer in JavaScript's terms.

use js_sys::{Array, Float64Array, Object, Reflect};
use serde::Serialize;
use wasm_bindgen::JsValue;
use widthwise_core::error::Refusal;
use widthwise_sheet::requests::{Column, Reply};

/// A refusal as a plain object.
pub fn refused(refusal: &Refusal) -> JsValue {
    plain(refusal).unwrap_or_else(|_| JsValue::from_str(&refusal.message))
}

/// A reply as a plain object with one `Float64Array` per column.
pub fn reply_to_js(reply: Reply) -> Result<JsValue, JsValue> {
    let columns = Array::new();
    for column in reply.columns {
        columns.push(&column_to_js(&column)?);
    }
    object(&[("body", plain(&reply.body)?), ("columns", columns.into())])
}

fn column_to_js(column: &Column) -> Result<JsValue, JsValue> {
    object(&[
        ("name", JsValue::from_str(&column.name)),
        ("unit", JsValue::from_str(&column.unit)),
        (
            "values",
            Float64Array::from(column.values.as_slice()).into(),
        ),
    ])
}

fn object(entries: &[(&str, JsValue)]) -> Result<JsValue, JsValue> {
    let object = Object::new();
    for (key, value) in entries {
        Reflect::set(&object, &JsValue::from_str(key), value)?;
    }
    Ok(object.into())
}

/// Plain data: objects instead of `Map`, `null` for what is absent, numbers for 64-bit integers.
fn plain<T: Serialize>(value: &T) -> Result<JsValue, JsValue> {
    let serializer = serde_wasm_bindgen::Serializer::json_compatible();
    Ok(value.serialize(&serializer)?)
}
