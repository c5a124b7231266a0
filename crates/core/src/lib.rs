//! Physics and statistics of an energy scan across a resonance.
//!
//! Pure: no I/O, no browser, no clock, no global state; randomness only from a seed.
//! The rooms follow the order of the work:
//! [`units`] and [`math`], [`kinematics`] and [`beam`], [`propagator`], [`amplitude`],
//! [`line_shape`] (Born, radiation, spread), [`counts`], [`plan`], [`fit`], [`trials`];
//! [`numerics`] is what they share.
//!
//! Units inside: energies, momenta, masses and widths in GeV, cross sections in nb,
//! luminosities in 1/nb, times in hours, angles in rad. Names say so.

#![deny(clippy::indexing_slicing)]

pub mod amplitude;
pub mod beam;
pub mod counts;
pub mod error;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod fit;
pub mod kinematics;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod line_shape;
pub mod math;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod numerics;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod plan;
pub mod propagator;
pub mod scan;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod trials;
pub mod units;
