//! A comb for a scan: where a peak of unknown mass is looked for, and how surely it is found.

use super::clock::Machine;
use super::comb::{Comb, detection, points};
use super::for_scan::PlanSettings;
use super::problem::refuse;
use super::report::PlannedRow;
use super::timetable::in_order;
use crate::error::{Answer, Warning};
use crate::fit::limits::{WindowSettings, mass_window, templates};
use crate::math;
use crate::scan::{Measured, Point, Scan, Spread};
use serde::{Deserialize, Serialize};

/// What comb is asked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CombSettings {
    /// Where the peak is believed, GeV, and how well: Gaussian, or anywhere within the reach.
    pub mass_gev: (f64, Option<f64>),
    /// Reach to either side, GeV.
    pub reach_gev: f64,
    /// Spacing in units of the observed FWHM.
    pub spacing: f64,
    /// Live time of a point, h; `None`: the hours of beam, shared out.
    pub dwell_h: Option<f64>,
    /// Global significance that counts as found.
    pub significance: f64,
    /// Pseudo-experiments.
    pub trials: u32,
    /// Their seed.
    pub seed: u64,
}

/// A comb with what it finds.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct CombPlan {
    /// Observed FWHM, GeV.
    pub fwhm_gev: f64,
    /// Timetable.
    pub rows: Vec<PlannedRow>,
    /// Live time of each point, h.
    pub dwell_h: f64,
    /// Hours on the clock left after it, for measuring what was found.
    pub left_h: f64,
    /// Probability of finding the peak at the wanted global significance, and its statistical error.
    pub probability: (f64, f64),
    /// Local significance that this takes.
    pub local_needed: f64,
    /// Expected local significance, averaged over where the peak may be.
    pub expected_local: f64,
    /// The same for other live times: (h a point, probability, expected local significance).
    pub by_dwell: Vec<(f64, f64, f64)>,
    /// The same beam time at other spacings: (FWHM, points, probability).
    pub by_spacing: Vec<(f64, u32, f64)>,
    /// Strongest excess of the points so far: (mass in GeV, global significance).
    pub found: Option<(f64, f64)>,
    /// What the user should know.
    pub warnings: Vec<Warning>,
}

/// Mass hypotheses per FWHM.
const MASSES_PER_FWHM: f64 = 6.0;
/// Most of them.
const MOST_MASSES: f64 = 400.0;

/// Lays the comb into the hours, and finds by pseudo-experiments how surely it finds the peak.
///
/// The peak is an incoherent signal over everything else that the scan expects.
///
/// # Errors
/// What chain, hypothesis and machine refuse; a comb that does not fit into window or hours.
pub fn comb_for_scan(
    scan: &Scan,
    settings: &PlanSettings,
    comb: &CombSettings,
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<CombPlan> {
    settings.machine.check()?;
    let machine = &settings.machine;
    let fwhm_gev = observed_fwhm(scan, comb.mass_gev.0)?;
    let candidates = teeth(settings, comb, fwhm_gev, comb.spacing)?;
    let beam_h = beam_hours(machine);
    let dwell_h = match comb.dwell_h {
        Some(hours) => hours,
        None => even_dwell(machine, &candidates, beam_h),
    };
    let visits: Vec<(usize, f64)> = candidates.iter().map(|&j| (j, dwell_h)).collect();
    let laid = in_order(machine, &settings.w_gev, &visits);
    let lived: f64 = laid.iter().map(|r| r.live_h).sum();
    if dwell_h <= 0.0 || lived + 1e-6 < dwell_h * candidates.len() as f64 {
        return Err(refuse(
            "plan.hours",
            &format!("{} h", machine.hours),
            &format!(
                "{} points of {dwell_h:.2} h and their settling",
                candidates.len()
            ),
            "The comb does not fit into the hours left. Fewer points (a wider spacing or a shorter reach), less time at each, or more hours would help.",
        ));
    }
    let mut step = 0;
    let mut further = || {
        step += 1;
        progress(step, 10);
    };
    let at = |list: &[usize], dwell: f64, trials: u32| {
        let model = model(scan, settings, comb, fwhm_gev, list, dwell)?;
        let found = detection(&model, comb.significance, trials, comb.seed)?;
        Ok((model, found))
    };
    let (model_here, here) = at(&candidates, dwell_h, comb.trials)?;
    further();
    let fewer = (comb.trials / 2).max(1);
    let mut by_dwell = Vec::new();
    for factor in [0.5, 1.0, 2.0, 4.0] {
        let (_, d) = at(&candidates, factor * dwell_h, fewer)?;
        by_dwell.push((factor * dwell_h, d.probability, d.expected_local));
        further();
    }
    let mut by_spacing = Vec::new();
    let total = dwell_h * candidates.len() as f64;
    for spacing in [0.4, 0.6, 0.8, 1.0, 1.5] {
        let list = teeth(settings, comb, fwhm_gev, spacing)?;
        let (_, d) = at(&list, total / list.len() as f64, fewer)?;
        by_spacing.push((spacing, list.len() as u32, d.probability));
        further();
    }
    let end = laid.last().map_or(0.0, |r| r.start_h + r.live_h);
    let mean = |j: usize| {
        let (mut sum, mut weight) = (0.0, 0.0);
        for (signal, w) in model_here.signal.iter().zip(&model_here.weight) {
            sum += w * signal.get(j).copied().unwrap_or(0.0);
            weight += w;
        }
        sum / weight + model_here.background.get(j).copied().unwrap_or(0.0)
    };
    let rows = laid
        .iter()
        .map(|row| {
            let j = candidates.iter().position(|&c| c == row.candidate);
            PlannedRow {
                fill: row.fill as u32 + 1,
                start_h: row.start_h,
                w_gev: settings.w_gev.get(row.candidate).copied().unwrap_or(0.0),
                live_h: row.live_h,
                settle_h: row.settle_h,
                expected_counts: j.map_or(0.0, |j| mean(j) * row.live_h / dwell_h),
                why: "comb: is the peak here?".to_string(),
            }
        })
        .collect();
    Ok(CombPlan {
        fwhm_gev,
        rows,
        dwell_h,
        left_h: (machine.hours - end).max(0.0),
        probability: (here.probability, here.probability_error),
        local_needed: here.q_needed.sqrt(),
        expected_local: here.expected_local,
        by_dwell,
        by_spacing,
        found: found(scan, comb, fwhm_gev)?,
        warnings: vec![Warning::new(
            "comb",
            "The peak is taken as a signal beside the background, without interference; its width, form and strength as in the sheet.",
        )],
    })
}

fn beam_hours(machine: &Machine) -> f64 {
    machine.windows().iter().map(|w| w.end_h - w.start_h).sum()
}

/// Largest whole dwell steps at each that the hours hold with settling (one change of energy per point).
fn even_dwell(machine: &Machine, candidates: &[usize], beam_h: f64) -> f64 {
    let n = candidates.len().max(1) as f64;
    let rest = beam_h - n * machine.settle.fixed_h;
    ((rest / n / machine.dwell_step_h) + 1e-9).floor() * machine.dwell_step_h
}

/// Allowed settings nearest to the comb's points.
fn teeth(
    settings: &PlanSettings,
    comb: &CombSettings,
    fwhm_gev: f64,
    spacing: f64,
) -> Answer<Vec<usize>> {
    let (Some(&low), Some(&high)) = (settings.w_gev.first(), settings.w_gev.last()) else {
        return Ok(Vec::new());
    };
    let half = 0.5 * (high - low) / (settings.w_gev.len().max(2) - 1) as f64 + 1e-12;
    let mut list: Vec<usize> = points(comb.mass_gev.0, fwhm_gev, spacing, comb.reach_gev)?
        .into_iter()
        .filter(|w| *w >= low - half && *w <= high + half)
        .filter_map(|w| {
            (0..settings.w_gev.len()).min_by(|&a, &b| {
                let distance = |i: usize| {
                    settings
                        .w_gev
                        .get(i)
                        .map_or(f64::INFINITY, |x| (x - w).abs())
                };
                distance(a).total_cmp(&distance(b))
            })
        })
        .collect();
    list.dedup();
    if list.len() < 2 {
        return Err(refuse(
            "plan.comb.reach",
            &format!("{} MeV", comb.reach_gev * 1e3),
            "at least two points inside the window",
            "The comb has fewer than two points inside the allowed window. A longer reach, a closer spacing or a wider window would help.",
        ));
    }
    Ok(list)
}

fn masses(comb: &CombSettings, fwhm_gev: f64) -> Vec<f64> {
    let wanted = (2.0 * comb.reach_gev / fwhm_gev * MASSES_PER_FWHM).ceil();
    let count = wanted.clamp(8.0, MOST_MASSES);
    (0..=count as u32)
        .map(|i| comb.mass_gev.0 + comb.reach_gev * (2.0 * f64::from(i) / count - 1.0))
        .collect()
}

/// The scan at planned energies with nothing counted.
fn planned(scan: &Scan, luminosity: &[(f64, f64)], w_gev: &[f64], hours: f64) -> Scan {
    let mut other = scan.clone();
    other.stage = crate::scan::Stage::Observed;
    other.points = w_gev
        .iter()
        .enumerate()
        .map(|(i, &w_gev)| Point {
            id: format!("comb {}", i + 1),
            group: None,
            w_gev,
            w_error_gev: 0.0,
            sigma_w_gev: None,
            luminosity_nbinv: scan.detection.luminosity_nbinv_per_h
                * super::scan_rates::brightness(luminosity, w_gev)
                * hours,
            luminosity_error_nbinv: 0.0,
            live_time_h: hours,
            live_fraction: 1.0,
            efficiency: None,
            efficiency_error: 0.0,
            channel: None,
            measured: Measured::Counts { n: 0.0, off: None },
            start_h: None,
        })
        .collect();
    other
}

/// Signal of every mass and background at the comb's points.
fn model(
    scan: &Scan,
    settings: &PlanSettings,
    comb: &CombSettings,
    fwhm_gev: f64,
    candidates: &[usize],
    dwell_h: f64,
) -> Answer<Comb> {
    let w: Vec<f64> = candidates
        .iter()
        .filter_map(|&j| settings.w_gev.get(j).copied())
        .collect();
    let masses = masses(comb, fwhm_gev);
    let found = templates(&planned(scan, &settings.luminosity, &w, dwell_h), &masses)?;
    let (mut signal, mut weight, mut background) = (Vec::new(), Vec::new(), Vec::new());
    for (mass, template) in masses.iter().zip(found.templates) {
        let Some(template) = template else {
            continue;
        };
        let scaled = template.signal.iter().map(|s| s * found.strength);
        signal.push(scaled.collect());
        weight.push(match comb.mass_gev.1 {
            Some(error) => {
                let z = (mass - comb.mass_gev.0) / error;
                math::exp(-0.5 * z * z)
            }
            None => 1.0,
        });
        background = template.background;
    }
    Ok(Comb {
        signal,
        weight,
        background,
    })
}

/// Width at half height of the first resonance as observed, GeV, to 1 %.
fn observed_fwhm(scan: &Scan, mass_gev: f64) -> Answer<f64> {
    let sigma = match scan.chain.spread {
        Spread::Gaussian { sigma_gev, .. } => sigma_gev,
        Spread::Table { ref rows } => match (rows.first(), rows.last()) {
            (Some(a), Some(b)) => 0.3 * (b.0 - a.0),
            _ => 0.0,
        },
        Spread::None => 0.0,
    };
    let width = scan.hypothesis.get("r1.width").unwrap_or(0.0);
    // Wider than any Voigt profile of the two, on a grid fine against it.
    let reach = 1.2 * (width + 2.355 * sigma);
    let w: Vec<f64> = (0..=160)
        .map(|i| mass_gev + reach * (f64::from(i) / 80.0 - 1.0))
        .collect();
    let mut flat = planned(scan, &[], &w, 1.0);
    // Only the signal counts; a template needs some background.
    flat.detection.rate_bg_per_h = flat.detection.rate_bg_per_h.max(1.0);
    let found = templates(&flat, &[mass_gev])?;
    let nothing = || {
        refuse(
            "plan.comb",
            "",
            "a resonance with a width above 0",
            "The comb needs a resonance that is seen: with a strength and a width or a beam spread above 0.",
        )
    };
    let Some(Some(template)) = found.templates.first() else {
        return Err(nothing());
    };
    let s = &template.signal;
    let top = s.iter().copied().fold(0.0, f64::max);
    let crossing = |rising: bool| {
        (1..s.len()).find_map(|i| {
            let (a, b) = (s.get(i - 1)? - 0.5 * top, s.get(i)? - 0.5 * top);
            let hit = if rising {
                a < 0.0 && b >= 0.0
            } else {
                a >= 0.0 && b < 0.0
            };
            hit.then(|| {
                w.get(i - 1)
                    .zip(w.get(i))
                    .map(|(x, y)| x + (y - x) * a / (a - b))
            })?
        })
    };
    match (crossing(true), crossing(false)) {
        (Some(a), Some(b)) if b > a => Ok(b - a),
        _ => Err(nothing()),
    }
}

/// Strongest excess of what has been counted so far.
fn found(scan: &Scan, comb: &CombSettings, fwhm_gev: f64) -> Answer<Option<(f64, f64)>> {
    let counts = |p: &Point| matches!(p.measured, Measured::Counts { .. });
    let mut taken = scan.clone();
    taken.points.retain(counts);
    if taken.points.is_empty() {
        return Ok(None);
    }
    let window = WindowSettings {
        masses_gev: masses(comb, fwhm_gev),
        level: 0.95,
        trials: u64::from(comb.trials),
        seed: comb.seed,
    };
    let (_, strongest) = mass_window(&taken, &window)?;
    Ok(strongest.map(|s| (s.mass_gev, s.global_significance)))
}
