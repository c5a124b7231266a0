//! A rival hypothesis: brought as near to the truth as its own parameters allow, and told from it.
//!
//! The rival adapts to whatever design is chosen, and not only to first order: a design of as many
//! energies as it has parameters it may fit perfectly. So the rival is refitted to each design, and
//! the next design has to serve against that one too (the idea of the sequential T-optimal designs of
//! Atkinson & Fedorov, Biometrika 62 (1975) 57, from memory); the timetable's expected likelihood
//! ratio is computed with the rival refitted to it.

use super::for_scan::PlanSettings;
use super::problem::refuse;
use super::scan_rates::set_value;
use super::timetable::Row;
use crate::counts::{Exposure, rate_and_gradient};
use crate::error::Answer;
use crate::fit::{FitResult, FitSettings, fit};
use crate::scan::{Measured, Point, Scan};

/// A hypothesis that the data shall tell from the scan's own.
#[derive(Debug, Clone, PartialEq)]
pub struct Rival {
    /// The same scan with the rival hypothesis.
    pub scan: Scan,
    /// What a fit of it leaves free.
    pub fit: FitSettings,
}

/// Energies of the scan that the rival is fitted to.
pub(crate) const PLACES: usize = 41;

/// Expected 2 ln of the likelihood ratio below which all the hours decide nothing.
const INDISTINCT: f64 = 1e-2;

/// The rival with the parameters that describe the truth best over the allowed energies
/// (equal time at up to 41 of them, counts as expected: no fluctuations).
///
/// # Errors
/// What the fit refuses; a rival that describes the truth as well as itself.
pub(crate) fn settle(truth: &Scan, rival: &Rival, settings: &PlanSettings) -> Answer<Scan> {
    let rows = even(settings, PLACES);
    if expected_log_ratio(truth, rival, settings, &rows)? < INDISTINCT {
        return Err(refuse(
            "plan.rival",
            "",
            "a rival that differs by more than what it may adapt",
            "Counts at these energies cannot tell the two hypotheses apart: with its free parameters the rival describes the other one as well. A wider window, or fewer free parameters of the rival, may help; another J alone shows in angular bins only, which are not planned.",
        ));
    }
    settle_on(truth, rival, settings, &rows)
}

/// The rival with the parameters that describe the truth best at these rows.
///
/// # Errors
/// What the fit refuses.
pub(crate) fn settle_on(
    truth: &Scan,
    rival: &Rival,
    settings: &PlanSettings,
    rows: &[Row],
) -> Answer<Scan> {
    let found = refit(truth, rival, settings, rows)?;
    let mut scan = rival.scan.clone();
    for p in &found.parameters {
        set_value(&mut scan, &p.id, p.value)?;
    }
    Ok(scan)
}

/// Expected 2 ln of the likelihood ratio after these rows if the truth holds and the rival is
/// refitted: its 2 NLL at the expected counts.
///
/// # Errors
/// What the fit refuses.
pub(crate) fn expected_log_ratio(
    truth: &Scan,
    rival: &Rival,
    settings: &PlanSettings,
    rows: &[Row],
) -> Answer<f64> {
    Ok(refit(truth, rival, settings, rows)?.statistic)
}

fn refit(truth: &Scan, rival: &Rival, settings: &PlanSettings, rows: &[Row]) -> Answer<FitResult> {
    let mut points = settings.points(truth, rows);
    expect(truth, &mut points)?;
    let mut scan = rival.scan.clone();
    scan.points = points;
    scan.common.energy_covariance_gev2 = None;
    scan.covariance_nb2 = None;
    fit(&scan, &rival.fit)
}

/// Fills points with the counts that a scan expects of them.
pub(crate) fn expect(scan: &Scan, points: &mut [Point]) -> Answer<()> {
    let hour = Exposure::per_hour(&scan.detection);
    let w: Vec<f64> = points.iter().map(|p| p.w_gev).collect();
    let rates = rate_and_gradient(scan, &[], &w)?;
    for (point, signal) in points.iter_mut().zip(&rates.signal_per_h) {
        let e = Exposure::of(point, &scan.detection);
        let n = signal * e.signal_nbinv / hour.signal_nbinv + e.background(&scan.detection);
        point.measured = Measured::Counts { n, off: None };
    }
    Ok(())
}

/// The hours of beam spread over evenly spaced candidates, each fill over all of them.
pub(crate) fn even(settings: &PlanSettings, most: usize) -> Vec<Row> {
    let machine = &settings.machine;
    let windows = machine.windows();
    let (mut live, mut bright) = (0.0, 0.0);
    for w in &windows {
        live += w.end_h - w.start_h;
        bright += machine.bright_hours(w.age_h, w.end_h - w.start_h);
    }
    let n = settings.w_gev.len();
    let count = n.min(most);
    let share = 1.0 / count.max(1) as f64;
    (0..count)
        .map(|i| Row {
            fill: i % windows.len().max(1),
            candidate: i * n.saturating_sub(1) / (count.saturating_sub(1)).max(1),
            start_h: 0.0,
            live_h: live * share,
            bright_h: bright * share,
            settle_h: 0.0,
        })
        .collect()
}
