//! What a fit answers.

use crate::error::Warning;
use crate::numerics::minimise::Stop;
use serde::{Deserialize, Serialize};

/// A fitted parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct FittedValue {
    /// Id.
    pub id: String,
    /// In words.
    pub label: String,
    /// Unit: "GeV", "nb", "1/h", "rad" or "".
    pub unit: String,
    /// Value.
    pub value: f64,
    /// Curvature error; `None` at a limit or where it is undetermined.
    pub error: Option<f64>,
    /// Stands on a limit that the data push against.
    pub at_limit: bool,
}

/// A fitted nuisance.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct FittedNuisance {
    /// Name.
    pub name: String,
    /// Pull: its value in units of its constraint.
    pub pull: f64,
    /// Error of the pull: 1 where the data say nothing about it.
    pub error: f64,
    /// What one of its errors does to each parameter, in the parameter's unit: covariance with the parameter
    /// over the error of the pull, signed (the shift of the profiled parameter when the nuisance moves up by its fitted error).
    pub impacts: Vec<f64>,
}

/// One point after the fit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct FittedPoint {
    /// Id of the row.
    pub id: String,
    /// This is its off region.
    pub off_region: bool,
    /// Its angular bin in words, if it is one.
    pub bin: Option<String>,
    /// W with fitted shifts, GeV.
    pub w_gev: f64,
    /// Measured: counts, or nb.
    pub measured: f64,
    /// Expected in the same unit.
    pub expected: f64,
    /// Signed root of its contribution to the statistic (cross sections: residual over own error).
    pub pull: f64,
}

/// Result of a fit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct FitResult {
    /// Parameters in the order of the settings: curve parameters, then backgrounds.
    pub parameters: Vec<FittedValue>,
    /// Covariance of the parameters (2 H^-1 with nuisances profiled), row by row; rows of
    /// parameters without an error are 0.
    pub covariance: Vec<Vec<f64>>,
    /// Correlation, row by row.
    pub correlation: Vec<Vec<f64>>,
    /// Nuisances.
    pub nuisances: Vec<FittedNuisance>,
    /// Points, in the order of the data.
    pub points: Vec<FittedPoint>,
    /// 2 NLL at the minimum: Baker-Cousins form, cross sections, nuisances and constraints.
    pub statistic: f64,
    /// Part of it from data alone.
    pub data_statistic: f64,
    /// Data and constraints minus free parameters (may be negative).
    pub degrees_of_freedom: i64,
    /// Probability of a larger statistic by the chi-squared distribution; `None` without degrees of freedom.
    pub p_value: Option<f64>,
    /// The chi-squared distribution may be used for it: every expected count is at least 20.
    pub p_value_asymptotic: bool,
    /// Why the minimiser stopped.
    pub stop: Stop,
    /// Condition number of the scaled matrix of second derivatives.
    pub condition: f64,
    /// Batches of curve evaluations used.
    pub batches: u32,
    /// Warnings.
    pub warnings: Vec<Warning>,
    /// Every coordinate at the minimum, nuisances included.
    pub coordinates: Vec<f64>,
}

impl FitResult {
    /// A parameter by id.
    #[must_use]
    pub fn parameter(&self, id: &str) -> Option<&FittedValue> {
        self.parameters.iter().find(|p| p.id == id)
    }
}
