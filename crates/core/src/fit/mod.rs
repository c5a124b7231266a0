//! Fits: likelihoods, minimiser, intervals.
//!
//! [`fit`] is the door: a scan and what is to be free in, a [`FitResult`] out. [`Fitter`] is the
//! same in steps, for what goes on from a minimum (profiles, contours, trials).

pub mod compare;
mod contour;
mod covariance;
mod curve;
mod data;
mod derivatives;
pub mod derived;
pub mod equivalent;
mod fitter;
pub mod goodness;
pub mod history;
pub mod influence;
mod likelihood;
pub mod limits;
pub mod looks;
mod nuisance;
mod problem;
mod profile;
mod result;
mod scan_curve;
mod settings;
mod terms;
mod warnings;

#[cfg(test)]
mod robustness;
#[cfg(test)]
pub(crate) mod stand_in;

pub use contour::{Contour, PAIR_RISE_ONE, PAIR_RISE_TWO};
pub use covariance::Covariance;
pub use curve::{Curve, CurveModel, CurveParameter, Probe, Site};
pub use derivatives::{Derivatives, Need, differentiate, pair};
pub use fitter::{Fitter, fit};
pub use likelihood::{Likelihood, Prediction};
pub use nuisance::{Effect, Nuisance, NuisanceKind, nuisances};
pub use problem::{
    BACKGROUND_CROSS_SECTION, BACKGROUND_RATE, Coordinate, CoordinateInfo, Datum, Kind, Problem,
};
pub use profile::{End, Interval, ProfilePlace, RISE_ONE, RISE_TWO};
pub use result::{FitResult, FittedNuisance, FittedPoint, FittedValue};
pub use scan_curve::{SPREAD, ScanCurve, has_angles};
pub use settings::{Constraint, FitSettings};
pub use terms::{Term, counts as counts_term, on_off, profiled_background};
