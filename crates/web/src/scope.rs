//! What the worker's scope is needed for: messages to the page outside an answer.

use js_sys::{Object, Reflect};
use wasm_bindgen::{JsCast, JsValue};
use web_sys::DedicatedWorkerGlobalScope;

/// Tells the page how far a long request has come.
pub fn post_progress(id: f64, done: u32, total: u32) {
    post(&[
        ("kind", JsValue::from_str("progress")),
        ("id", JsValue::from_f64(id)),
        ("done", JsValue::from_f64(f64::from(done))),
        ("total", JsValue::from_f64(f64::from(total))),
    ]);
}

/// Tells the page what a panic said.
pub fn post_panic(text: &str) {
    post(&[
        ("kind", JsValue::from_str("panic")),
        ("text", JsValue::from_str(text)),
    ]);
}

/// Outside a worker (tests under Node.js) there is nobody to tell, and nothing is lost.
fn post(entries: &[(&str, JsValue)]) {
    let message = Object::new();
    for (key, value) in entries {
        if Reflect::set(&message, &JsValue::from_str(key), value).is_err() {
            return;
        }
    }
    if let Ok(scope) = js_sys::global().dyn_into::<DedicatedWorkerGlobalScope>() {
        // A message that cannot be sent is a lost progress bar, not a lost answer.
        let _ = scope.post_message(&message);
    }
}
