//! Estimates against time: the fit after each point as it came in.

use super::fitter::Fitter;
use super::influence::without;
use super::result::FitResult;
use super::settings::FitSettings;
use crate::error::Answer;
use crate::scan::{Measured, Scan};
use serde::{Deserialize, Serialize};

/// Most fits of one history; longer ones take every second, third, ... point.
const MOST: usize = 60;

/// The fit to all points up to one.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Snapshot {
    /// Id of the newest point.
    pub id: String,
    /// Points so far.
    pub points: u32,
    /// Its start, hours since the first point's; absent where the rows bring no times.
    pub start_h: Option<f64>,
    /// Values of the parameters, units of the core.
    pub values: Vec<f64>,
    /// Curvature errors; absent where the points so far do not determine one.
    pub errors: Vec<Option<f64>>,
}

/// Fits the first points in the order of their start (without times: of the list), then with one
/// more, up to all of them. It begins where there are as many points as free parameters.
///
/// # Errors
/// As the fit of the whole scan; stretches that cannot be fitted are left out.
pub fn history(scan: &Scan, settings: &FitSettings, whole: &FitResult) -> Answer<Vec<Snapshot>> {
    let mut order: Vec<usize> = (0..scan.points.len())
        .filter(|i| scan.points[*i].measured != Measured::Nothing)
        .collect();
    order.sort_by(|a, b| {
        let at = |i: &usize| scan.points[*i].start_h.unwrap_or(f64::INFINITY);
        at(a).total_cmp(&at(b))
    });
    let count = whole.parameters.len();
    let least = count.max(1);
    let stride = order.len().saturating_sub(least) / MOST + 1;
    let mut out = Vec::new();
    for n in least..=order.len() {
        if !(order.len() - n).is_multiple_of(stride) {
            continue;
        }
        let mut later: Vec<usize> = order[n..].to_vec();
        later.sort_unstable();
        let mut so_far = scan.clone();
        for i in later.into_iter().rev() {
            so_far = without(&so_far, i);
        }
        let newest = &scan.points[order[n - 1]];
        let found = Fitter::new(&so_far, settings).and_then(|mut f| {
            let mut start = f.problem().start();
            start[..count].copy_from_slice(&whole.coordinates[..count]);
            let minimum = f.minimum_from(&start)?;
            f.report(&minimum)
        });
        if let Ok(found) = found {
            out.push(Snapshot {
                id: newest.id.clone(),
                points: u32::try_from(n).unwrap_or(u32::MAX),
                start_h: newest.start_h,
                values: found.parameters.iter().map(|p| p.value).collect(),
                errors: found.parameters.iter().map(|p| p.error).collect(),
            });
        }
    }
    Ok(out)
}

/// Slope of the points' pulls against their start and its significance in standard deviations
/// (pulls of unit variance): something that drifts. `None` without times or with fewer than three points.
#[must_use]
pub fn drift(scan: &Scan, fit: &FitResult) -> Option<(f64, f64)> {
    let timed: Vec<(f64, f64)> = fit
        .points
        .iter()
        .filter_map(|f| {
            let point = scan.points.iter().find(|p| p.id == f.id)?;
            Some((point.start_h?, f.pull))
        })
        .collect();
    let n = timed.len() as f64;
    if timed.len() < 3 {
        return None;
    }
    let mean = timed.iter().map(|(t, _)| t).sum::<f64>() / n;
    let mean_pull = timed.iter().map(|(_, p)| p).sum::<f64>() / n;
    let square: f64 = timed.iter().map(|(t, _)| (t - mean) * (t - mean)).sum();
    if square <= 0.0 {
        return None;
    }
    let cross: f64 = timed
        .iter()
        .map(|(t, p)| (t - mean) * (p - mean_pull))
        .sum();
    let slope = cross / square;
    Some((slope, slope * square.sqrt()))
}
