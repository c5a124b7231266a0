//! What is fuzzed. A target panics when a promise is broken: no panic inside, every refusal says something,
//! nothing that was accepted changes on its way out and in again.

use crate::choices::Choices;
use crate::requests::{self, KINDS};
use crate::sheets::{self, Mood};
use serde_json::Value;
use widthwise_core::error::Refusal;
use widthwise_sheet::requests::{Reply, Request, answer};
use widthwise_sheet::{check, demos, json as file};

/// A target: its name, also that of its corpus, and what it does with bytes.
pub type Target = (&'static str, fn(&[u8]));

/// All targets.
pub const TARGETS: [Target; 5] = [
    ("sheet-text", sheet_text),
    ("sheet-drawn", sheet_drawn),
    ("table-text", table_text),
    ("request-text", request_text),
    ("request-drawn", request_drawn),
];

/// The target of this name.
#[must_use]
pub fn find(name: &str) -> Option<Target> {
    TARGETS.into_iter().find(|(known, _)| *known == name)
}

fn says_something(refusal: &Refusal) {
    assert!(!refusal.message.is_empty(), "a refusal without a sentence");
}

fn opened(text: &str) {
    match file::open(text) {
        Err(refusal) => says_something(&refusal),
        Ok(sheet) => {
            let understood = check::understand(&sheet);
            understood.problems.iter().for_each(says_something);
            let again = file::open(&file::write(&sheet)).expect("what we write, we read");
            assert_eq!(again, sheet, "a sheet changed on its way out and in");
        }
    }
}

/// Any bytes as a sheet's text.
pub fn sheet_text(data: &[u8]) {
    opened(&String::from_utf8_lossy(data));
}

/// A sheet from schema and limits.
pub fn sheet_drawn(data: &[u8]) {
    opened(&sheets::sheet(Mood::Wild, &mut Choices::new(data)).to_string());
}

/// Any bytes as a pasted table.
pub fn table_text(data: &[u8]) {
    let text = String::from_utf8_lossy(data).into_owned();
    let sheet = demos::open("ostrel").expect("an example opens");
    let request = Request::ReadTable {
        sheet,
        text,
        answers: Vec::new(),
    };
    check_answer(&request, answer(&request, &mut |_, _| ()));
}

/// Any bytes as a request's JSON.
pub fn request_text(data: &[u8]) {
    if let Ok(value) = serde_json::from_slice::<Value>(data) {
        ask(value);
    }
}

/// A request of any kind, its sheet from schema and limits.
pub fn request_drawn(data: &[u8]) {
    let c = &mut Choices::new(data);
    let kind = *c.one(&KINDS);
    ask(requests::request(kind, Mood::Wild, c));
}

fn ask(value: Value) {
    if let Ok(request) = Request::read(value) {
        check_answer(&request, answer(&request, &mut |_, _| ()));
    }
}

fn check_answer(request: &Request, answer: Result<Reply, Refusal>) {
    match answer {
        Err(refusal) => says_something(&refusal),
        Ok(reply) => {
            let length = reply
                .columns
                .first()
                .map_or(0, |column| column.values.len());
            if let Request::Curve { .. } = request {
                for column in &reply.columns {
                    assert_eq!(column.values.len(), length, "{}", column.name);
                    assert!(
                        column.values.iter().all(|v| v.is_finite()),
                        "{} is not finite: {:?}",
                        column.name,
                        column.values
                    );
                }
            }
        }
    }
}
