//! The golden set: the same requests for every engine. Kept as a seed; answers are compared with one
//! another, never with a stored one.

use crate::choices::{Choices, bytes};
use crate::hash;
use crate::requests::{self, KINDS};
use crate::sheets::Mood;
use serde_json::{Value, json};
use widthwise_sheet::requests::{Request, answer};

/// How many.
pub const SIZE: u64 = 200;
/// Seed of the first; the others follow.
const SEED: u64 = 20_261_201;

/// The requests as JSON, every kind equally often.
#[must_use]
pub fn requests() -> Vec<Value> {
    (0..SIZE)
        .map(|number| {
            let bytes = bytes(SEED + number, 4096);
            let kind = KINDS[number as usize % KINDS.len()];
            requests::request(kind, Mood::Calm, &mut Choices::new(&bytes))
        })
        .collect()
}

/// Each request with the fingerprint of its native answer and whether it was answered.
#[must_use]
pub fn answered() -> Vec<Value> {
    let one = |request: Value| {
        let read = Request::read(request.clone()).expect("a calm request is one");
        let answer = answer(&read, &mut |_, _| ());
        json!({ "request": request, "answered": answer.is_ok(), "print": hash::of_answer(&answer) })
    };
    requests().into_iter().map(one).collect()
}
