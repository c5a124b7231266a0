//! Goodness of a fit by pseudo-experiments, where counts are too low for the chi-squared distribution.

use super::result::FitResult;
use super::settings::FitSettings;
use crate::error::Answer;
use crate::numerics::probability::binomial_interval;
use crate::scan::Scan;
use crate::trials::{Ensemble, TrialSettings};
use serde::{Deserialize, Serialize};

/// p-value from pseudo-experiments.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct TrialsPValue {
    /// Fraction of trials with a statistic at least as large.
    pub p_value: f64,
    /// Binomial interval (one standard deviation).
    pub interval: (f64, f64),
    /// Trials whose fit ended in a minimum.
    pub trials: u64,
}

/// Draws data from the fitted parameters, fits each, and counts how often 2 NLL is at least the fit's.
///
/// # Errors
/// As the fit.
pub fn p_value_by_trials(
    scan: &Scan,
    settings: &FitSettings,
    fit: &FitResult,
    (trials, seed): (u64, u64),
    progress: &mut dyn FnMut(u64),
) -> Answer<TrialsPValue> {
    let count = fit.parameters.len();
    let mut ensemble = Ensemble::at(
        scan,
        settings,
        fit.coordinates.get(..count).unwrap_or_default(),
        TrialSettings {
            seed,
            profiles: false,
        },
    )?;
    let (mut above, mut total) = (0u64, 0u64);
    for k in 0..trials {
        progress(k);
        let minimum = ensemble.minimum(k)?;
        if minimum.stop.is_minimum() {
            total += 1;
            if minimum.expansion.value >= fit.statistic {
                above += 1;
            }
        }
    }
    Ok(TrialsPValue {
        p_value: above as f64 / (total as f64).max(1.0),
        interval: binomial_interval(above as f64, total as f64, 1.0),
        trials: total,
    })
}
