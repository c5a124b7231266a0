//! What the sheet says of the plan, as the core wants it.

use super::goal;
use crate::check::{self, PlanReading};
use crate::doc::Sheet;
use crate::requests::{first_problem, fit};
use crate::times;
use widthwise_core::error::{Answer, Refusal, Warning};
use widthwise_core::plan::clock::{Fills, Machine, Settle};
use widthwise_core::plan::for_scan::PlanSettings;
use widthwise_core::plan::goal::Goal;
use widthwise_core::plan::problem::VisitErrors;
use widthwise_core::plan::rival::Rival;
use widthwise_core::plan::timetable::Demands;
use widthwise_core::scan::Scan;

/// Most allowed energies of one plan.
const MOST_ENERGIES: f64 = 10_001.0;
/// Truths drawn from what is known where the sheet does not say.
const TRUTHS: u32 = 16;

/// Candidate nearest to W.
pub(super) fn nearest(list: &[f64], w_gev: f64) -> Option<usize> {
    (0..list.len()).min_by(|&a, &b| {
        let distance = |i: usize| list.get(i).map_or(f64::INFINITY, |w| (w - w_gev).abs());
        distance(a).total_cmp(&distance(b))
    })
}

/// Hours from the beginning to the end of the last row; 0 where the sheet does not say when the hours begin.
fn used_by_rows(sheet: &Sheet, scan: &Scan, reading: &PlanReading) -> f64 {
    let Some(starts) = reading.starts else {
        return 0.0;
    };
    let read = |text: &Option<String>| times::parse("", text.as_deref()?).ok();
    let mut used = 0.0_f64;
    for row in &sheet.data.rows {
        let live = scan.points.iter().find(|p| p.id == row.id);
        let end = match (read(&row.stop), read(&row.start)) {
            (Some(stop), _) => times::hours_between(starts, stop),
            (None, Some(start)) => {
                times::hours_between(starts, start) + live.map_or(0.0, |p| p.live_time_h)
            }
            (None, None) => continue,
        };
        used = used.max(end);
    }
    used
}

/// W of the running row, else of the last one: where the machine stands if nobody says otherwise.
fn stands_at(sheet: &Sheet, scan: &Scan) -> Option<f64> {
    let rows = &sheet.data.rows;
    let running = rows.iter().find(|r| r.running).or_else(|| rows.last())?;
    let point = scan.points.iter().find(|p| p.id == running.id)?;
    Some(point.w_gev)
}

/// The rival of the sheet, as a scan with its own fit.
fn rival(sheet: &Sheet) -> Answer<Option<Rival>> {
    let Some(rival) = &sheet.plan.rival else {
        return Ok(None);
    };
    let mut other = sheet.clone();
    other.model = rival.model.clone();
    other.fit.free.clone_from(&rival.free);
    let theirs = other.clone();
    let known = |id: &str| crate::requests::find_parameter(&theirs, id).is_ok();
    other.fit.constraints.retain(|c| known(&c.parameter));
    let named = |refusal: Refusal| Refusal {
        field: format!("plan.rival: {}", refusal.field),
        message: format!("The rival hypothesis: {}", refusal.message),
        ..refusal
    };
    let scan = check::understand(&other)
        .scan()
        .map_err(|problems| named(first_problem(problems)))?;
    let fit = fit::settings(&other).map_err(named)?;
    if fit.varying()?.is_empty() {
        return Err(Refusal::new(
            "plan.rival",
            "",
            "a rival with at least one free parameter",
            "Nothing is free in the rival hypothesis: what it may still adapt has to be named.",
        ));
    }
    Ok(Some(Rival { scan, fit }))
}

fn needed(value: Option<f64>, field: &str, what: &str) -> Answer<f64> {
    value.ok_or_else(|| {
        Refusal::new(
            format!("plan.{field}"),
            "",
            format!("{what}, with its unit"),
            format!("to plan, the sheet has to say {what}"),
        )
    })
}

pub(super) fn settings(
    sheet: &Sheet,
    scan: &Scan,
    reading: &PlanReading,
    warnings: &mut Vec<Warning>,
) -> Answer<PlanSettings> {
    let from = needed(reading.from_gev, "from", "the least allowed W")?;
    let to = needed(reading.to_gev, "to", "the largest allowed W")?;
    let step = needed(
        reading.step_gev,
        "step",
        "the step of W between allowed settings",
    )?;
    let all_h = needed(reading.hours, "hours", "how many hours there are")?;
    let elapsed_h = match reading.hours_used {
        Some(hours) => hours,
        None => used_by_rows(sheet, scan, reading),
    };
    let hours = all_h - elapsed_h;
    if hours <= 0.0 {
        return Err(Refusal::new(
            "plan.hours_used",
            format!("{elapsed_h} h"),
            "fewer hours than there are",
            "all hours are used up: there is nothing left to plan",
        ));
    }
    let count = ((to - from) / step + 1e-6).floor() + 1.0;
    if count > MOST_ENERGIES {
        return Err(Refusal::new(
            "plan.step",
            format!("{count} settings"),
            format!("up to {MOST_ENERGIES} allowed settings"),
            "so many settings are not planned over: a coarser step or a narrower window loses nothing that matters",
        ));
    }
    let w_gev: Vec<f64> = (0..count as u32)
        .map(|i| from + step * f64::from(i))
        .collect();
    let fit = fit::settings(sheet)?;
    if fit.varying()?.is_empty() {
        return Err(Refusal::new(
            "fit.free",
            "",
            "at least one free parameter",
            "nothing is free, so there is nothing to plan for: free the parameter whose error is to shrink",
        ));
    }
    let dwell_step_h = reading.dwell_step_h.unwrap_or(0.5);
    if reading.dwell_step_h.is_none() {
        warnings.push(Warning::new(
            "dwell-step",
            "No unit of dwell time is given; half an hour is assumed.",
        ));
    }
    let (fixed_h, up_h, down_h) = reading.settle_h;
    Ok(PlanSettings {
        fit,
        goals: Vec::new(),
        rival: rival(sheet)?,
        others_share: reading.others_share,
        machine: Machine {
            hours,
            elapsed_h,
            fills: reading.fill_h.map(|length_h| Fills {
                length_h,
                refill_h: reading.refill_h,
                lifetime_h: reading.lifetime_h,
            }),
            blocked_h: reading.blocked_h.clone(),
            calibration_h: reading.calibration_h,
            dwell_step_h,
            least_dwell_h: reading.least_dwell_h.unwrap_or(dwell_step_h),
            settle: Settle {
                fixed_h,
                up_h_per_gev: up_h / step,
                down_h_per_gev: down_h / step,
            },
            one_way: reading.one_way,
            current_w_gev: reading.stands_at_gev.or_else(|| stands_at(sheet, scan)),
        },
        demands: Demands {
            least_distinct: reading.least_distinct,
            off_resonance: reading.off_resonance,
            reference: reading.reference_gev.and_then(|w| nearest(&w_gev, w)),
            both_flanks_of_gev: reading.both_flanks_of_gev,
        },
        visit_errors: VisitErrors {
            energy_gev: reading.visit_energy_gev,
            luminosity: reading.visit_luminosity,
        },
        fill_energy_gev: scan.common.group_energy_gev,
        luminosity: reading
            .luminosity_at
            .iter()
            .map(|(w, l)| (*w, l / scan.detection.luminosity_nbinv_per_h))
            .collect(),
        truths: reading.truths.unwrap_or(TRUTHS),
        wanted: 0.999,
        effort: 1500,
        w_gev,
    })
}

/// The goals, at the values that the scan holds.
pub(super) fn goals(sheet: &Sheet, scan: &Scan, reading: &PlanReading) -> Answer<Vec<Goal>> {
    let list = reading.goals.iter().enumerate();
    list.map(|(i, g)| goal::goal(sheet, scan, g, i)).collect()
}
