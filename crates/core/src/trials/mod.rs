//! Pseudo-experiments: seeded, order-independent.
//!
//! Trial k of a seed is drawn from its own stream and can be run alone, in any order, on any
//! machine: ranges of trials merge to the same bits as one run, because every summary is made
//! from the rows in the order of k.

mod draw;
mod summary;

pub use draw::Ensemble;
pub use summary::{CoverageOf, ParameterSummary, Summary, summarise};

use serde::{Deserialize, Serialize};

/// One pseudo-experiment's outcome.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct TrialRow {
    /// Number of the trial.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub k: u64,
    /// The fit ended in a minimum with an error for every parameter that is not at a limit.
    pub converged: bool,
    /// Fitted values, in the order of the parameters.
    pub values: Vec<f64>,
    /// Curvature errors; `None` at a limit or where undetermined.
    pub errors: Vec<Option<f64>>,
    /// 2 NLL at the minimum.
    pub statistic: f64,
    /// Rise of the profiled 2 NLL at the true value, by parameter; empty if not asked for.
    pub rise_at_truth: Vec<f64>,
}

/// What a run of trials is made of.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct TrialSettings {
    /// Seed.
    pub seed: u64,
    /// Also the profile intervals' coverage (one more minimisation per parameter).
    pub profiles: bool,
}
