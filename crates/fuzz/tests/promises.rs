//! The kept corpus, and a small fresh sample of every target, in every test run.
#![allow(missing_docs, clippy::unwrap_used)]

use widthwise_fuzz::choices::bytes;
use widthwise_fuzz::requests::{KINDS, kind, read, request};
use widthwise_fuzz::sheets::Mood;
use widthwise_fuzz::targets::TARGETS;
use widthwise_fuzz::{choices::Choices, corpus, golden};

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
    for name in KINDS {
        let data = bytes(3, 4000);
        let drawn = request(name, Mood::Calm, &mut Choices::new(&data));
        assert_eq!(kind(&read(drawn).unwrap()), name);
    }
}

#[test]
fn the_golden_set_is_mostly_answered() {
    let requests = golden::requests();
    assert_eq!(requests.len() as u64, golden::SIZE);
    assert_eq!(requests, golden::requests(), "the same seed, other requests");
}
