//! Judging a fit: two hypotheses on the same data, goodness by pseudo-experiments, the fit against
//! time, and limits with every error profiled.

use super::fit::{fitted, settings};
use super::{Body, Column, Reply, first_problem};
use crate::check;
use crate::doc::Sheet;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::fit::compare::{Comparison, compare};
use widthwise_core::fit::goodness::p_value_by_trials;
use widthwise_core::fit::history::{drift, history};
use widthwise_core::fit::limits::{limit_against_phase, limit_with_errors};
use widthwise_core::fit::{FitSettings, fit};
use widthwise_core::scan::Scan;

/// Most pseudo-experiments of one request.
pub const MOST_TRIALS: u32 = 20_000;
/// Confidence of the limits.
const LEVEL: f64 = 0.95;

/// A fitted value with its error, in the sheet's unit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct At {
    /// Value.
    pub value: f64,
    /// Curvature error, where there is one.
    pub error: Option<f64>,
}

/// The fit to the points up to one of them.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct SoFar {
    /// Row id of the newest point.
    pub id: String,
    /// Points so far.
    pub points: u32,
    /// Its start, hours since the first row's.
    pub start_h: Option<f64>,
    /// Parameters, in the order of the fit.
    pub parameters: Vec<At>,
}

fn scan_of(sheet: &Sheet) -> Answer<(Scan, FitSettings)> {
    let scan = check::understand(sheet).scan().map_err(first_problem)?;
    Ok((scan, settings(sheet)?))
}

fn few_enough(trials: u32) -> Answer<u64> {
    if trials <= MOST_TRIALS {
        return Ok(u64::from(trials));
    }
    Err(Refusal::new(
        "trials",
        trials,
        format!("up to {MOST_TRIALS}"),
        "so many pseudo-experiments are not made in one request",
    ))
}

/// Likelihood ratio of two sheets with the same rows, the first the narrower hypothesis.
pub fn compared(
    null: &Sheet,
    alternative: &Sheet,
    (trials, seed): (u32, u64),
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<Reply> {
    let many = few_enough(trials)?;
    if null.data.rows != alternative.data.rows {
        return Err(Refusal::new(
            "data.rows",
            "",
            "the same rows in both sheets",
            "two hypotheses are compared on the same data",
        ));
    }
    let (first, second) = (scan_of(null)?, scan_of(alternative)?);
    let comparison: Comparison = compare(
        (&first.0, &first.1),
        (&second.0, &second.1),
        (many, seed),
        &mut |k| progress(u32::try_from(k).unwrap_or(0), trials),
    )?;
    Ok(Body::Comparison { comparison }.into())
}

/// p-value of the fit's 2 NLL by pseudo-experiments.
pub fn goodness(
    sheet: &Sheet,
    (trials, seed): (u32, u64),
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<Reply> {
    let many = few_enough(trials)?;
    let (scan, settings) = scan_of(sheet)?;
    let result = fit(&scan, &settings)?;
    let found = p_value_by_trials(&scan, &settings, &result, (many, seed), &mut |k| {
        progress(u32::try_from(k).unwrap_or(0), trials);
    })?;
    Ok(Body::Goodness { found }.into())
}

/// The fit after each point as it came in, and whether the residuals drift.
pub fn against_time(sheet: &Sheet) -> Answer<Reply> {
    let (scan, settings) = scan_of(sheet)?;
    let whole = fit(&scan, &settings)?;
    let shown: Vec<_> = whole.parameters.iter().map(|p| fitted(sheet, p)).collect();
    let fits = history(&scan, &settings, &whole)?
        .into_iter()
        .map(|s| SoFar {
            parameters: whole
                .parameters
                .iter()
                .zip(s.values.iter().zip(&s.errors))
                .map(|(p, (value, error))| {
                    let here = fitted(
                        sheet,
                        &widthwise_core::fit::FittedValue {
                            value: *value,
                            error: *error,
                            ..p.clone()
                        },
                    );
                    At {
                        value: here.value,
                        error: here.error,
                    }
                })
                .collect(),
            id: s.id,
            points: s.points,
            start_h: s.start_h,
        })
        .collect();
    let (mut hours, mut pulls) = (Vec::new(), Vec::new());
    for f in &whole.points {
        let start = scan.points.iter().find(|p| p.id == f.id);
        if let Some(h) = start.and_then(|p| p.start_h) {
            hours.push(h);
            pulls.push(f.pull);
        }
    }
    let column = |name: &str, unit: &str, values| Column {
        name: name.into(),
        unit: unit.into(),
        values,
    };
    Ok(Reply {
        columns: vec![column("start", "h", hours), column("pull", "", pulls)],
        body: Body::AgainstTime {
            parameters: shown,
            fits,
            drift: drift(&scan, &whole).map(|(_, significance)| significance),
        },
    })
}

/// Upper limit on a strength with everything else that is free, and all errors, profiled; with a
/// coherent background, against its phase: columns (phase in degrees, limit in the core's unit).
pub fn limit(sheet: &Sheet, id: &str, places: u32) -> Answer<Reply> {
    if !(4..=72).contains(&places) {
        return Err(Refusal::new(
            "places",
            places,
            "4 to 72 phases",
            "so many phases are not worked through in one request",
        ));
    }
    let (scan, mut settings) = scan_of(sheet)?;
    // A signal that is not there has neither mass nor width nor phase.
    let means_nothing =
        |id: &str| id.ends_with(".mass") || id.ends_with(".width") || id.ends_with("phase");
    settings.free.retain(|id| !means_nothing(id));
    settings
        .constraints
        .retain(|c| !means_nothing(&c.parameter));
    let interferes = scan.hypothesis.get("coherent.phase").is_ok();
    let (phases, limits) = if interferes {
        let step = 2.0 * core::f64::consts::PI / f64::from(places);
        let phases: Vec<f64> = (0..places)
            .map(|i| step * f64::from(i) - core::f64::consts::PI)
            .collect();
        let limits = limit_against_phase(&scan, id, &settings, &phases, LEVEL)?;
        (phases, limits)
    } else {
        (
            vec![0.0],
            vec![limit_with_errors(&scan, id, &settings, LEVEL)?],
        )
    };
    let column = |name: &str, unit: &str, values| Column {
        name: name.into(),
        unit: unit.into(),
        values,
    };
    Ok(Reply {
        columns: vec![
            column(
                "phase",
                "deg",
                phases.iter().map(|p| p.to_degrees()).collect(),
            ),
            column(
                "limit 95 % CLs",
                "",
                limits.iter().map(|l| l.unwrap_or(f64::NAN)).collect(),
            ),
        ],
        body: Body::Limit { interferes },
    })
}
