//! The sheet from outside: scenarios, bad input, tables, and any sheet that the limits allow.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod amplitude;
mod bad_input;
mod channels;
mod hypotheses;
mod judge;
mod plan;
mod properties;
mod scenarios;
mod statistics;
mod tables;
