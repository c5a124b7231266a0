//! Which points drive the result, and whether repeated points agree.

use super::fitter::Fitter;
use super::result::FitResult;
use super::settings::FitSettings;
use crate::error::Answer;
use crate::numerics::probability::{chi2_sf, poisson_deviance};
use crate::scan::{Measured, Scan};
use serde::{Deserialize, Serialize};

/// What leaving out one point does.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Influence {
    /// Id of the point.
    pub id: String,
    /// Change of each parameter without the point, in units of its error with it (0 where there is none).
    pub shifts: Vec<f64>,
    /// Drop of 2 NLL without it.
    pub statistic_drop: f64,
    /// It moves a parameter by more than its error, or cannot be left out: it drives the result.
    pub drives: bool,
}

/// A group of points at one energy compared with each other.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Repeat {
    /// Ids of the points.
    pub ids: Vec<String>,
    /// W, GeV.
    pub w_gev: f64,
    /// 2 NLL of their counts against one common rate.
    pub statistic: f64,
    /// Points minus 1.
    pub degrees_of_freedom: u32,
    /// Probability of more, by the chi-squared distribution.
    pub p_value: f64,
}

/// The scan without its point `index`; pasted covariances lose its row and column.
#[must_use]
pub fn without(scan: &Scan, index: usize) -> Scan {
    let n = scan.points.len();
    let mut out = scan.clone();
    if index >= n {
        return out;
    }
    let drop = |rows: &[f64], k: usize, size: usize| -> Vec<f64> {
        rows.iter()
            .enumerate()
            .filter(|(at, _)| at / size != k && at % size != k)
            .map(|(_, v)| *v)
            .collect()
    };
    let crosses = |p: &crate::scan::Point| matches!(p.measured, Measured::CrossSection { .. });
    if let Some(rows) = &scan.covariance_nb2
        && crosses(&scan.points[index])
    {
        let size = scan.points.iter().filter(|p| crosses(p)).count();
        let k = scan.points[..index].iter().filter(|p| crosses(p)).count();
        out.covariance_nb2 = Some(drop(rows, k, size));
    }
    if let Some(rows) = &scan.common.energy_covariance_gev2 {
        out.common.energy_covariance_gev2 = Some(drop(rows, index, n));
    }
    out.points.remove(index);
    out
}

/// Leaves out each point in turn and fits again.
///
/// # Errors
/// As a fit of the whole scan; a scan that cannot be fitted without a point marks the point instead.
pub fn influences(
    scan: &Scan,
    settings: &FitSettings,
    whole: &FitResult,
) -> Answer<Vec<Influence>> {
    Ok(scan
        .points
        .iter()
        .enumerate()
        .filter(|(_, p)| p.measured != Measured::Nothing)
        .map(|(i, point)| {
            let again = Fitter::new(&without(scan, i), settings).and_then(|mut f| {
                let count = f.problem().parameter_count();
                // Start from the whole fit, whose coordinates agree in the parameters.
                let mut start = f.problem().start();
                start[..count].copy_from_slice(&whole.coordinates[..count]);
                f.minimum_from(&start)
            });
            match again {
                Ok(minimum) => {
                    let shifts: Vec<f64> = whole
                        .parameters
                        .iter()
                        .zip(&minimum.x)
                        .zip(&whole.coordinates)
                        .map(|((p, now), before)| p.error.map_or(0.0, |e| (now - before) / e))
                        .collect();
                    Influence {
                        id: point.id.clone(),
                        drives: shifts.iter().any(|s| s.abs() > 1.0),
                        shifts,
                        statistic_drop: whole.statistic - minimum.expansion.value,
                    }
                }
                Err(_) => Influence {
                    id: point.id.clone(),
                    shifts: Vec::new(),
                    statistic_drop: 0.0,
                    drives: true,
                },
            }
        })
        .collect())
}

/// Points at one energy and channel: do their counts follow one rate? The fit's expectation gives
/// their relative exposures.
#[must_use]
pub fn repeats(scan: &Scan, fit: &FitResult) -> Vec<Repeat> {
    let mut out: Vec<Repeat> = Vec::new();
    let mut done: Vec<usize> = Vec::new();
    for (i, a) in scan.points.iter().enumerate() {
        if done.contains(&i) {
            continue;
        }
        let mut group: Vec<(String, f64, f64)> = Vec::new();
        for (k, b) in scan.points.iter().enumerate().skip(i) {
            let same = b.w_gev == a.w_gev && b.channel == a.channel;
            if let Measured::Counts { n, .. } = b.measured
                && same
                && let Some(f) = fit.points.iter().find(|f| f.id == b.id && !f.off_region)
            {
                group.push((b.id.clone(), n, f.expected));
                done.push(k);
            }
        }
        if group.len() < 2 {
            continue;
        }
        let n: f64 = group.iter().map(|g| g.1).sum();
        let mu: f64 = group.iter().map(|g| g.2).sum();
        let statistic: f64 = group
            .iter()
            .map(|g| poisson_deviance(g.1, g.2 * n / mu))
            .sum();
        let degrees_of_freedom = group.len() as u32 - 1;
        out.push(Repeat {
            ids: group.into_iter().map(|g| g.0).collect(),
            w_gev: a.w_gev,
            statistic,
            degrees_of_freedom,
            p_value: chi2_sf(statistic, f64::from(degrees_of_freedom)),
        });
    }
    out
}
