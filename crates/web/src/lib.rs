//! The WebAssembly surface: free functions over [`widthwise_sheet::requests`], nothing to free
//! by hand, no state. It runs inside a worker and reaches the browser through its scope only.
#![deny(clippy::indexing_slicing)]

mod answer;
mod scope;

use wasm_bindgen::prelude::*;
use widthwise_sheet::requests::{self, Request};

/// Runs once per instance: a panic's text goes to the page before the trap that follows it.
#[wasm_bindgen(start)]
pub fn start() {
    std::panic::set_hook(Box::new(|panic| scope::post_panic(&panic.to_string())));
}

/// Answers one request. `id` is the page's number for it and comes back with every progress message.
///
/// The answer is `{ body, columns: { name, unit, values: Float64Array }[] }`; the arrays are copies
/// owned by JavaScript, ready to be transferred.
///
/// # Errors
/// A `Refusal` as a plain object: the request could not be read, or the sheet refuses it.
#[wasm_bindgen]
pub fn run(id: f64, request: JsValue) -> Result<JsValue, JsValue> {
    let request: serde_json::Value = serde_wasm_bindgen::from_value(request)?;
    let request = Request::read(request).map_err(|refusal| answer::refused(&refusal))?;
    let reply = requests::answer(&request, &mut |done, total| {
        scope::post_progress(id, done, total)
    })
    .map_err(|refusal| answer::refused(&refusal))?;
    answer::reply_to_js(reply)
}

/// Breaks this instance on purpose, so that tests can prove the page survives it:
/// `"trap"`, `"panic"`, `"memory"` (allocates until refused) or `"hang"`.
#[wasm_bindgen]
#[allow(clippy::panic)] // The purpose of this function.
pub fn force(what: &str) {
    match what {
        "panic" => panic!("forced panic"),
        "memory" => {
            // Only reserved, never touched: the browser's limit is met, not the machine's.
            let mut hoard: Vec<Vec<u8>> = Vec::new();
            loop {
                hoard.push(Vec::with_capacity(1 << 26));
                std::hint::black_box(&hoard);
            }
        }
        "hang" => loop {
            std::hint::black_box(());
        },
        _ => trap(),
    }
}

#[cfg(target_arch = "wasm32")]
fn trap() {
    core::arch::wasm32::unreachable()
}

#[cfg(not(target_arch = "wasm32"))]
fn trap() {
    std::process::abort()
}
