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

pub mod amplitude;
pub mod beam;
pub mod counts;
pub mod error;
pub mod fit;
pub mod kinematics;
pub mod line_shape;
pub mod math;
pub mod numerics;
pub mod plan;
pub mod propagator;
pub mod scan;
pub mod trials;
pub mod units;
