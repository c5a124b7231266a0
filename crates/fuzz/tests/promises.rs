//! The kept corpus, and a small fresh sample of every target, in every test run.
#![allow(missing_docs, clippy::unwrap_used)]

use widthwise_fuzz::choices::bytes;
use widthwise_fuzz::requests::{KINDS, request};
use widthwise_fuzz::sheets::Mood;
use widthwise_fuzz::targets::TARGETS;
use widthwise_fuzz::{choices::Choices, corpus, golden};
use widthwise_sheet::requests::Request;

#[test]
fn the_kept_corpus_keeps_its_promises() {
    for (name, target) in TARGETS {
        let files = corpus::files(name);
        assert!(!files.is_empty(), "no corpus of {name}");
        for file in files {
            println!("{}", file.display());
            target(&std::fs::read(file).unwrap());
        }
    }
}

#[test]
fn fresh_inputs_keep_the_promises() {
    for (name, target) in TARGETS {
        for seed in 0..60 {
            println!("{name} {seed}");
            target(&bytes(seed, 600));
        }
    }
}

#[test]
fn every_kind_of_request_is_drawn_and_read() {
    let types = include_str!("../../../www/shared/generated/Request.ts");
    let known: Vec<&str> = types
        .split("\"kind\": \"")
        .skip(1)
        .filter_map(|rest| rest.split('"').next())
        .collect();
    assert!(known.len() > 10, "{known:?}");
    for name in known {
        assert!(
            KINDS.contains(&name),
            "{name} is not drawn: crates/fuzz/src/requests.rs"
        );
        let data = bytes(3, 4000);
        let drawn = request(name, Mood::Calm, &mut Choices::new(&data));
        Request::read(drawn).unwrap();
    }
}

/// Also writes the native fingerprints, which the browsers' tests compare with theirs.
#[test]
fn the_golden_set_is_answered_and_written() {
    assert_eq!(
        golden::requests(),
        golden::requests(),
        "the same seed, other requests"
    );
    let answered = golden::answered();
    assert_eq!(answered.len() as u64, golden::SIZE);
    let told = answered
        .iter()
        .filter(|one| one["answered"] == true)
        .count();
    assert!(
        2 * told > answered.len(),
        "{told} of {} answered",
        answered.len()
    );
    let file = std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("golden.json");
    std::fs::write(file, serde_json::to_string(&answered).unwrap()).unwrap();
}
