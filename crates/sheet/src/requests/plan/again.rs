//! The plan made again: what changed, why, and what is lost by keeping the old one.

use super::forecast::unit_of;
use super::settings::nearest;
use crate::doc::Sheet;
use crate::quantity::format;
use serde::{Deserialize, Serialize};
use widthwise_core::error::Answer;
use widthwise_core::plan::for_scan::ScanPlanner;
use widthwise_core::plan::report::{Forecast, PlannedRow, ScanPlan};
use widthwise_core::plan::task::Plan;
use widthwise_core::plan::timetable::in_order;

/// An older plan, as it was answered.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(deny_unknown_fields)]
pub struct KeptPlan {
    /// Its stops that are still ahead, in order.
    pub rows: Vec<PlannedRow>,
    /// Its forecasts for the parameters.
    pub parameters: Vec<Forecast>,
}

/// What became of an older plan.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Changes {
    /// Share of the information that is lost by keeping the old plan over the hours left.
    pub loss_by_keeping: f64,
    /// What changed and why, a sentence each.
    pub sentences: Vec<String>,
}

pub(super) fn compare(
    sheet: &Sheet,
    old: &KeptPlan,
    planner: &ScanPlanner,
    timetable: &Plan,
    new: &ScanPlan,
    to_dial: &dyn Fn(f64) -> Answer<String>,
) -> Answer<Changes> {
    let task = planner.planner.task();
    let visits: Vec<(usize, f64)> = old
        .rows
        .iter()
        .filter_map(|r| Some((nearest(&task.w_gev, r.w_gev)?, r.live_h)))
        .collect();
    let laid = in_order(&task.machine, &task.w_gev, &visits);
    let mut sentences = Vec::new();
    if let (Some(before), Some(now)) = (old.rows.first(), new.rows.first()) {
        let (before, now) = (to_dial(before.w_gev)?, to_dial(now.w_gev)?);
        sentences.push(if before == now {
            format!("The next setting stays {now}.")
        } else {
            format!("The next setting is {now} instead of {before}.")
        });
    }
    sentences.push(moved_hours(old, new));
    for now in &new.parameters {
        let Some(before) = old.parameters.iter().find(|p| p.name == now.name) else {
            continue;
        };
        if let Some(sentence) = shift(sheet, before, now) {
            sentences.push(sentence);
        }
    }
    Ok(Changes {
        loss_by_keeping: planner.planner.loss_by_keeping(&laid, timetable),
        sentences,
    })
}

/// Hours that the new plan spends elsewhere: energies within a tenth of the window are the same place.
fn moved_hours(old: &KeptPlan, new: &ScanPlan) -> String {
    let span = match (new.w_gev.first(), new.w_gev.last()) {
        (Some(a), Some(b)) => b - a,
        _ => 0.0,
    };
    let mut spare: Vec<(f64, f64)> = old.rows.iter().map(|r| (r.w_gev, r.live_h)).collect();
    let mut elsewhere = 0.0;
    for row in &new.rows {
        let mut left = row.live_h;
        for (w, hours) in &mut spare {
            if (*w - row.w_gev).abs() <= 0.01 * span {
                let same = left.min(*hours);
                left -= same;
                *hours -= same;
            }
        }
        elsewhere += left;
    }
    let all: f64 = new.rows.iter().map(|r| r.live_h).sum();
    format!(
        "{elsewhere:.1} h of the {all:.1} h ahead go to settings that the plan before did not have."
    )
}

/// How a fitted value moved, in its error before; nothing for less than a fifth of it with no gain in precision.
fn shift(sheet: &Sheet, before: &Forecast, now: &Forecast) -> Option<String> {
    let (error_before, error_now) = (before.now?, now.now?);
    let moved = (now.value - before.value) / error_before;
    let gain = 1.0 - error_now / error_before;
    if moved.abs() < 0.2 && gain.abs() < 0.02 {
        return None;
    }
    let (unit, per) = unit_of(sheet, &now.name);
    let text = |v: f64| format::significant(v / per, 2);
    Some(format!(
        "Because {} moved by {:+.1} of its error and that error went from {} to {} {unit}.",
        now.name,
        moved,
        text(error_before),
        text(error_now),
    ))
}
