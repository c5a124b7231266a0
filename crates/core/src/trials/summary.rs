//! Bias, pulls and coverage of a set of trials.

use super::TrialRow;
use crate::numerics::probability::binomial_interval;
use serde::{Deserialize, Serialize};

/// Summary of trials.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Summary {
    /// Trials.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub trials: u64,
    /// Of these, fits that ended in a minimum; the others are in no number below.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub converged: u64,
    /// Mean of 2 NLL at the minimum.
    pub mean_statistic: f64,
    /// By parameter.
    pub parameters: Vec<ParameterSummary>,
}

/// One parameter in the trials.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ParameterSummary {
    /// Id.
    pub id: String,
    /// True value.
    pub truth: f64,
    /// Mean of the fitted values minus truth.
    pub bias: f64,
    /// Its statistical error.
    pub bias_error: f64,
    /// Standard deviation of the fitted values.
    pub spread: f64,
    /// Mean curvature error.
    pub mean_error: f64,
    /// Fits at a limit (no pull, no curvature interval).
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub at_limit: u64,
    /// Mean of (fitted - truth)/error.
    pub pull_mean: f64,
    /// Its error.
    pub pull_mean_error: f64,
    /// Standard deviation of the pull.
    pub pull_width: f64,
    /// Its error.
    pub pull_width_error: f64,
    /// Coverage of the curvature intervals at 1 and 2 errors.
    pub curvature: Vec<CoverageOf>,
    /// Coverage of the profile intervals at rises of 1 and 4; empty if not asked for.
    pub profile: Vec<CoverageOf>,
}

/// Coverage with its binomial (Wilson) interval of one standard deviation.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct CoverageOf {
    /// What the interval claims.
    pub nominal: f64,
    /// Fraction of trials whose interval holds the truth.
    pub fraction: f64,
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
    /// Trials counted.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub trials: u64,
}

/// Probability content of one and two standard deviations.
const NOMINAL: [f64; 2] = [0.682_689_492_137_085_9, 0.954_499_736_103_641_6];

/// Summarises `rows` (any order, doubles of a trial counted once) for parameters with these ids and true values.
#[must_use]
pub fn summarise(rows: &[TrialRow], ids: &[String], truth: &[f64]) -> Summary {
    let mut ordered: Vec<&TrialRow> = rows.iter().collect();
    ordered.sort_by_key(|r| r.k);
    ordered.dedup_by_key(|r| r.k);
    let good: Vec<&TrialRow> = ordered
        .iter()
        .copied()
        .filter(|r| r.converged && r.values.len() == ids.len())
        .collect();
    let statistics: Vec<f64> = good.iter().map(|r| r.statistic).collect();
    Summary {
        trials: ordered.len() as u64,
        converged: good.len() as u64,
        mean_statistic: moments(&statistics).0,
        parameters: ids
            .iter()
            .zip(truth)
            .enumerate()
            .map(|(i, (id, &truth))| one(&good, i, id, truth))
            .collect(),
    }
}

fn one(rows: &[&TrialRow], i: usize, id: &str, truth: f64) -> ParameterSummary {
    let values: Vec<f64> = rows
        .iter()
        .filter_map(|r| r.values.get(i).copied())
        .collect();
    let (mean, spread) = moments(&values);
    let pairs: Vec<(f64, f64)> = rows
        .iter()
        .filter_map(|r| Some((*r.values.get(i)?, (*r.errors.get(i)?)?)))
        .collect();
    let errors: Vec<f64> = pairs.iter().map(|p| p.1).collect();
    let pulls: Vec<f64> = pairs.iter().map(|(v, e)| (v - truth) / e).collect();
    let (pull_mean, pull_width) = moments(&pulls);
    let n = pulls.len() as f64;
    let rises: Vec<f64> = rows
        .iter()
        .filter_map(|r| r.rise_at_truth.get(i).copied())
        .collect();
    ParameterSummary {
        id: id.into(),
        truth,
        bias: mean - truth,
        bias_error: spread / (values.len() as f64).sqrt(),
        spread,
        mean_error: moments(&errors).0,
        at_limit: (rows.len() - pairs.len()) as u64,
        pull_mean,
        pull_mean_error: pull_width / n.sqrt(),
        pull_width,
        pull_width_error: pull_width / (2.0 * n).sqrt(),
        curvature: (1..=2u32)
            .map(|z| {
                let inside = pulls.iter().filter(|p| p.abs() <= f64::from(z)).count();
                coverage(z, inside, pulls.len())
            })
            .collect(),
        profile: if rises.is_empty() {
            Vec::new()
        } else {
            (1..=2u32)
                .map(|z| {
                    let inside = rises.iter().filter(|r| **r <= f64::from(z * z)).count();
                    coverage(z, inside, rises.len())
                })
                .collect()
        },
    }
}

fn coverage(z: u32, inside: usize, total: usize) -> CoverageOf {
    let (low, high) = binomial_interval(inside as f64, total as f64, 1.0);
    CoverageOf {
        nominal: NOMINAL.get(z as usize - 1).copied().unwrap_or(1.0),
        fraction: inside as f64 / (total as f64).max(1.0),
        low,
        high,
        trials: total as u64,
    }
}

/// Mean and standard deviation, summed in the given order; 0 for no values.
fn moments(values: &[f64]) -> (f64, f64) {
    let n = values.len() as f64;
    if values.is_empty() {
        return (0.0, 0.0);
    }
    let mean = values.iter().sum::<f64>() / n;
    let square = values.iter().map(|v| (v - mean) * (v - mean)).sum::<f64>();
    (mean, (square / (n - 1.0).max(1.0)).sqrt())
}

#[cfg(test)]
mod tests {
    use super::super::{Ensemble, TrialSettings};
    use super::*;
    use crate::fit::FitSettings;
    use crate::fit::stand_in::{BreitWigner, counting_scan};
    use std::rc::Rc;

    const FREE: [&str; 4] = ["r1.mass", "r1.width", "r1.strength", "incoherent.0"];

    fn ensemble(exposure: f64, profiles: bool) -> Ensemble {
        let w: Vec<f64> = (0..9).map(|i| 2.998 + 0.5e-3 * f64::from(i)).collect();
        let scan = counting_scan(&w, &[1.0; 9], exposure);
        let settings = FitSettings {
            free: FREE.map(String::from).to_vec(),
            ..FitSettings::default()
        };
        let model = BreitWigner::new([3.0001, 1.1e-3, 60.0, 6.0], &FREE);
        Ensemble::with_model(
            &scan,
            &settings,
            Rc::new(model),
            TrialSettings { seed: 11, profiles },
        )
        .unwrap()
    }

    /// Smallest expected count 7 exposures x (6 + ...) > 30: coverage of the 68.3 % profile interval between
    /// 66 and 71 % in 4,000 pseudo-experiments, pulls of unit width.
    #[test]
    fn intervals_cover() {
        let mut e = ensemble(7.0, true);
        let rows: Vec<TrialRow> = (0..4000).map(|k| e.trial(k)).collect();
        let summary = summarise(&rows, &e.ids(), e.truth());
        assert_eq!(summary.converged, 4000);
        for p in &summary.parameters {
            let f = p.profile[0].fraction;
            assert!(f > 0.66 && f < 0.71, "{}: {f}", p.id);
            assert!(
                (p.pull_width - 1.0).abs() < 0.05,
                "{}: {}",
                p.id,
                p.pull_width
            );
        }
        // Four parameters from nine counts: five degrees of freedom.
        assert!(
            (summary.mean_statistic - 5.0).abs() < 0.2,
            "{}",
            summary.mean_statistic
        );
    }

    #[test]
    fn shards_merge_to_the_same_bits() {
        let mut whole = ensemble(2.0, true);
        let all: Vec<TrialRow> = (0..60).map(|k| whole.trial(k)).collect();
        let mut parts = Vec::new();
        for range in [40..60, 0..17, 17..40] {
            let mut shard = ensemble(2.0, true);
            parts.extend(range.rev().map(|k| shard.trial(k)));
        }
        let a = serde_json::to_string(&summarise(&all, &whole.ids(), whole.truth())).unwrap();
        let b = serde_json::to_string(&summarise(&parts, &whole.ids(), whole.truth())).unwrap();
        assert_eq!(a, b);
    }
}
