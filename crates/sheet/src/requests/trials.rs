//! Pseudo-experiments of the present sheet, in ranges that merge to the same bits.

use super::fit::settings;
use super::{Body, Reply, first_problem};
use crate::check;
use crate::doc::Sheet;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::trials::{Ensemble, Summary, TrialRow, TrialSettings, summarise};

/// Most trials of one request; larger runs are made of several.
pub const MOST_TRIALS: u32 = 100_000;
/// Trials between two words of progress.
pub(super) const STEP: u32 = 20;

/// A range of pseudo-experiments.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(deny_unknown_fields)]
pub struct TrialRange {
    /// Seed.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub seed: u64,
    /// Number of the first trial.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub first: u64,
    /// How many.
    pub count: u32,
    /// Also the coverage of profile intervals (as many fits again as there are parameters).
    #[serde(default)]
    pub profiles: bool,
}

/// Refuses more trials than one request makes.
pub(super) fn check_range(range: &TrialRange) -> Answer<()> {
    if range.count <= MOST_TRIALS {
        return Ok(());
    }
    Err(Refusal::new(
        "range.count",
        range.count,
        format!("up to {MOST_TRIALS}"),
        "so many trials are not made in one request: ask for several ranges and merge them",
    ))
}

fn ensemble(sheet: &Sheet, range: &TrialRange) -> Answer<Ensemble> {
    check_range(range)?;
    let scan = check::understand(sheet).scan().map_err(first_problem)?;
    Ensemble::new(
        &scan,
        &settings(sheet)?,
        TrialSettings {
            seed: range.seed,
            profiles: range.profiles,
        },
    )
}

/// Runs a range; the sheet's present values are the truth.
pub fn run(sheet: &Sheet, range: &TrialRange, progress: &mut dyn FnMut(u32, u32)) -> Answer<Reply> {
    let mut ensemble = ensemble(sheet, range)?;
    let mut rows = Vec::with_capacity(range.count as usize);
    for i in 0..range.count {
        if i % STEP == 0 {
            progress(i, range.count);
        }
        rows.push(ensemble.trial(range.first.saturating_add(u64::from(i))));
    }
    Ok(Body::Trials { rows }.into())
}

/// Bias, pulls and coverage of rows from any number of ranges.
pub fn merge(sheet: &Sheet, rows: &[TrialRow]) -> Answer<Reply> {
    let none = TrialRange {
        seed: 0,
        first: 0,
        count: 0,
        profiles: false,
    };
    let ensemble = ensemble(sheet, &none)?;
    let summary: Summary = summarise(rows, &ensemble.ids(), ensemble.truth());
    Ok(Body::Summary { summary }.into())
}
