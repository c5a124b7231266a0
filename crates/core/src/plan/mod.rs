//! Where the next hour of beam is worth most.
//!
//! Two layers. The *relaxed* problem spreads hours over candidate energies without regard to
//! dwell steps, settling and order; it is convex, and [`relaxed`] solves it with a certificate
//! ([`certificate`]) that no allocation can beat by more than the stated margin. The *timetable*
//! lays whole visits into the machine's fills; its efficiency is quoted against the
//! relaxed optimum and is therefore a lower bound.
//!
//! The relaxed layer knows only arrays: per candidate energy a rate, its gradient and what a
//! visit's own errors cost ([`problem`]). How they were made does not matter to it.

pub mod certificate;
pub mod clock;
pub mod comb;
pub mod criterion;
pub mod design;
pub mod elfving;
mod exact;
pub mod find;
pub mod for_scan;
pub mod goal;
pub mod hypotheses;
pub mod problem;
pub mod relaxed;
pub mod replay;
pub mod report;
pub mod rival;
pub mod rounding;
pub mod scan_rates;
mod search;
pub mod task;
pub mod timetable;
