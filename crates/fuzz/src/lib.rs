//! Sheets and requests by chance, for fuzzing and for the golden set that is answered in every engine.
//!
//! Everything is drawn from bytes ([`choices::Choices`]): a fuzzer's, a kept corpus file's, or those of a
//! seeded generator. What may stand in a sheet comes from the published JSON Schema, how large a number
//! may be from the table of limits; so a new field or form is drawn as soon as it exists.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    clippy::indexing_slicing,
    reason = "a fuzz target stops where a promise is broken"
)]

pub mod choices;
pub mod corpus;
pub mod golden;
pub mod hash;
pub mod numbers;
pub mod requests;
pub mod schema;
pub mod sheets;
pub mod targets;
