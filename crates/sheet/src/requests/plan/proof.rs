//! Proof by experiment: a plan, the uniform scan and a steered shift, drawn and fitted.

use super::settings::nearest;
use super::{Body, Made, Reply, prepare};
use crate::doc::Sheet;
use crate::requests::TrialRange;
use crate::requests::trials::{STEP, check_range};
use serde::{Deserialize, Serialize};
use widthwise_core::error::Answer;
use widthwise_core::plan::for_scan::PlanSettings;
use widthwise_core::plan::replay::{Replay, uniform_rows, with_timetable};
use widthwise_core::plan::report::PlannedRow;
use widthwise_core::plan::scan_rates::value_of;
use widthwise_core::plan::timetable::Row;
use widthwise_core::trials::{Ensemble, TrialRow, TrialSettings, summarise};

/// How the hours of a trial are spent.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Steering {
    /// By the timetable given.
    Timetable,
    /// Equally everywhere.
    Uniform,
    /// Planned again after every point.
    Again,
}

/// Runs a range of trials of the hours left. Truth: the values that the plan is made for.
pub fn run(
    sheet: &Sheet,
    rows: &[PlannedRow],
    steering: Steering,
    range: &TrialRange,
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<Reply> {
    check_range(range)?;
    let Made { scan, settings, .. } = prepare(sheet)?;
    let numbers = (0..range.count).map(|i| (i, range.first.saturating_add(u64::from(i))));
    let mut found = Vec::with_capacity(range.count as usize);
    if steering == Steering::Again {
        let replay = Replay {
            truth: &scan,
            settings: &settings,
            seed: range.seed,
        };
        for (i, k) in numbers {
            progress(i, range.count);
            found.push(replay.run(k));
        }
        return Ok(Body::Trials { rows: found }.into());
    }
    let timetable = match steering {
        Steering::Uniform => uniform_rows(&settings),
        _ => laid(&settings, rows),
    };
    let mut ensemble = Ensemble::new(
        &with_timetable(&scan, &settings, &timetable),
        &settings.fit,
        TrialSettings {
            seed: range.seed,
            profiles: range.profiles,
        },
    )?;
    for (i, k) in numbers {
        if i % STEP == 0 {
            progress(i, range.count);
        }
        found.push(ensemble.trial(k));
    }
    Ok(Body::Trials { rows: found }.into())
}

/// Rows of an answer as rows of the core.
fn laid(settings: &PlanSettings, rows: &[PlannedRow]) -> Vec<Row> {
    let windows = settings.machine.windows();
    rows.iter()
        .filter_map(|row| {
            let fill = (row.fill as usize).saturating_sub(1);
            let window = windows.get(fill)?;
            let age = window.age_h + row.start_h - window.start_h;
            Some(Row {
                fill,
                candidate: nearest(&settings.w_gev, row.w_gev)?,
                start_h: row.start_h,
                live_h: row.live_h,
                bright_h: settings.machine.bright_hours(age, row.live_h),
                settle_h: row.settle_h,
            })
        })
        .collect()
}

/// Bias, spread, pulls and coverage of rows from any number of ranges.
pub fn merge(sheet: &Sheet, rows: &[TrialRow]) -> Answer<Reply> {
    let Made { scan, settings, .. } = prepare(sheet)?;
    let ids = settings.fit.varying()?;
    let truth = ids
        .iter()
        .map(|id| value_of(&scan, id))
        .collect::<Answer<Vec<_>>>()?;
    Ok(Body::Summary {
        summary: summarise(rows, &ids, &truth),
    }
    .into())
}
