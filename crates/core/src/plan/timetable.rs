//! Whole visits laid into the machine's windows, and what they are worth.
//!
//! A visit of bright time u (luminosity-weighted) and live time t at rate m = s + r_bg expects
//! N = s u + r_bg t counts; its gain, in the units of [`super::problem`], is
//! u^2 m/(N + u^2 (m_W^2 s_E^2 + s^2 d^2)). The energy error of a fill is common to its visits:
//! with A = sum f h h^T, b = sum f h h_W, q = sum f h_W^2 it leaves A - b b^T/(1/s_F^2 + q).

use super::clock::{Machine, Window};
use super::criterion::Scaled;
use super::problem::{Draw, Problem, add_outer, mirror};
use nalgebra::{DMatrix, DVector};
use serde::{Deserialize, Serialize};

/// Some time at one energy.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Visit {
    pub candidate: usize,
    /// Dwell steps.
    pub units: u32,
}

/// The visits of one window, each candidate once, in rising order of candidates.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub(crate) struct Stretch {
    pub visits: Vec<Visit>,
    /// Run through from the top down.
    pub falling: bool,
}

/// A visit on the clock.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Row {
    /// Window (fill) from 0.
    pub fill: usize,
    /// Candidate.
    pub candidate: usize,
    /// Start of data taking, h from now.
    pub start_h: f64,
    /// Live hours.
    pub live_h: f64,
    /// Hours of full luminosity they are worth.
    pub bright_h: f64,
    /// Settling before it, h.
    pub settle_h: f64,
}

/// What the user asks of every timetable.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
pub struct Demands {
    /// At least this many distinct energies (0: no demand).
    pub least_distinct: usize,
    /// At least so many hours at candidates within (or at) these bounds: (below GeV, above GeV, hours).
    pub off_resonance: Option<(f64, f64, f64)>,
    /// This candidate in every fill that is used.
    pub reference: Option<usize>,
    /// Every fill that is used visits both sides of this W, GeV.
    pub both_flanks_of_gev: Option<f64>,
}

/// Everything a draft is judged by.
#[derive(Clone)]
pub(crate) struct Judge<'a> {
    pub problem: &'a Problem,
    pub criterion: &'a Scaled,
    pub w_gev: &'a [f64],
    pub machine: &'a Machine,
    pub windows: &'a [Window],
    pub demands: &'a Demands,
    pub fill_energy_gev: f64,
    /// Truths used.
    pub draws: Vec<usize>,
}

impl Judge<'_> {
    /// Lays a draft on the clock; `None` if a window is too short for it.
    pub(crate) fn rows(&self, draft: &[Stretch]) -> Option<Vec<Row>> {
        let mut rows = Vec::new();
        let mut at_gev = self.machine.current_w_gev;
        // Settling goes on while the ring is refilled.
        let mut credit_h = 0.0;
        for (fill, (stretch, window)) in draft.iter().zip(self.windows).enumerate() {
            let mut now = window.start_h;
            let mut lay = |visit: &Visit| {
                let w = self.w_gev[visit.candidate];
                let settle_h =
                    (at_gev.map_or(0.0, |from| self.machine.settle_h(from, w)) - credit_h).max(0.0);
                credit_h = 0.0;
                let start_h = now + settle_h;
                let live_h = f64::from(visit.units) * self.machine.dwell_step_h;
                at_gev = Some(w);
                now = start_h + live_h;
                rows.push(Row {
                    fill,
                    candidate: visit.candidate,
                    start_h,
                    live_h,
                    bright_h: self
                        .machine
                        .bright_hours(window.age_h + start_h - window.start_h, live_h),
                    settle_h,
                });
            };
            if stretch.falling {
                stretch.visits.iter().rev().for_each(&mut lay);
            } else {
                stretch.visits.iter().for_each(&mut lay);
            }
            if now > window.end_h + 1e-9 {
                return None;
            }
            credit_h = self.machine.fills.map_or(0.0, |f| f.refill_h);
        }
        Some(rows)
    }

    /// How far a draft is from the demands; 0 if all are met.
    pub(crate) fn shortfall(&self, draft: &[Stretch]) -> f64 {
        let d = self.demands;
        let mut missing = 0.0;
        if d.least_distinct > 0 {
            let mut seen: Vec<usize> = draft
                .iter()
                .flat_map(|s| s.visits.iter().map(|v| v.candidate))
                .collect();
            seen.sort_unstable();
            seen.dedup();
            missing += d.least_distinct.saturating_sub(seen.len()) as f64;
        }
        if let Some((below, above, hours)) = d.off_resonance {
            let units: f64 = draft
                .iter()
                .flat_map(|s| &s.visits)
                .filter(|v| self.w_gev[v.candidate] <= below || self.w_gev[v.candidate] >= above)
                .map(|v| f64::from(v.units))
                .sum();
            missing += ((hours / self.machine.dwell_step_h - 1e-9).ceil() - units).max(0.0);
        }
        // A fill that is running now has had its chance at what every fill must contain.
        let whole = draft
            .iter()
            .zip(self.windows)
            .filter(|(_, w)| w.age_h <= 0.0);
        for (stretch, _) in whole.filter(|(s, _)| !s.visits.is_empty()) {
            let at = |test: &dyn Fn(f64) -> bool| {
                stretch.visits.iter().any(|v| test(self.w_gev[v.candidate]))
            };
            if let Some(c) = d.reference
                && !stretch.visits.iter().any(|v| v.candidate == c)
            {
                missing += 1.0;
            }
            if let Some(centre) = d.both_flanks_of_gev {
                missing += f64::from(u8::from(!at(&|w| w < centre)))
                    + f64::from(u8::from(!at(&|w| w > centre)));
            }
        }
        missing
    }

    /// Scaled information of rows for one truth.
    pub(crate) fn information(&self, draw: &Draw, rows: &[Row]) -> DMatrix<f64> {
        timetable_information(self.problem, draw, rows, self.fill_energy_gev)
    }

    /// phi averaged over the truths in use.
    pub(crate) fn value(&self, rows: &[Row]) -> f64 {
        let (mut sum, mut weight) = (0.0, 0.0);
        for &k in &self.draws {
            let Some(draw) = self.problem.draws.get(k) else {
                continue;
            };
            sum += draw.weight * self.criterion.value(&self.information(draw, rows));
            weight += draw.weight;
        }
        sum / weight
    }
}

/// Visits (candidate, live hours) one after the other on the clock: the rest of a fill that is
/// shorter than a least dwell is left, a visit that does not fit goes on in the next fill, and what
/// the hours do not hold falls away.
#[must_use]
pub fn in_order(machine: &Machine, w_gev: &[f64], visits: &[(usize, f64)]) -> Vec<Row> {
    let windows = machine.windows();
    let least = f64::from(machine.least_units()) * machine.dwell_step_h;
    let mut rows = Vec::new();
    let mut at_gev = machine.current_w_gev;
    let mut credit_h = 0.0;
    let (mut fill, mut now) = (0, windows.first().map_or(0.0, |w| w.start_h));
    for &(candidate, hours) in visits {
        let Some(&w) = w_gev.get(candidate) else {
            continue;
        };
        let mut left = hours;
        while left > 1e-9 {
            let Some(window) = windows.get(fill) else {
                return rows;
            };
            let settle_h =
                (at_gev.map_or(0.0, |from| machine.settle_h(from, w)) - credit_h).max(0.0);
            let start_h = now + settle_h;
            let live_h = left.min(window.end_h - start_h);
            if live_h + 1e-9 < least.min(left) {
                fill += 1;
                now = windows.get(fill).map_or(now, |w| w.start_h);
                credit_h = machine.fills.map_or(0.0, |f| f.refill_h);
                continue;
            }
            rows.push(Row {
                fill,
                candidate,
                start_h,
                live_h,
                bright_h: machine.bright_hours(window.age_h + start_h - window.start_h, live_h),
                settle_h,
            });
            credit_h = 0.0;
            at_gev = Some(w);
            now = start_h + live_h;
            left -= live_h;
        }
    }
    rows
}

/// Scaled information of rows: prior, visits with their own errors, fills with their common one.
pub(crate) fn timetable_information(
    problem: &Problem,
    draw: &Draw,
    rows: &[Row],
    fill_energy_gev: f64,
) -> DMatrix<f64> {
    let p = problem.parameters;
    let mut info = draw.prior.clone();
    let common = fill_energy_gev > 0.0 && !draw.slope_root.is_empty();
    let mut shared = DVector::<f64>::zeros(p);
    let mut start = 0;
    while start < rows.len() {
        let fill = rows[start].fill;
        let end = start + rows[start..].iter().take_while(|r| r.fill == fill).count();
        shared.fill(0.0);
        let mut q = 1.0 / (fill_energy_gev * fill_energy_gev);
        for row in &rows[start..end] {
            let f = gain(problem, draw, row);
            let h = draw.root(row.candidate, p);
            add_outer(&mut info, h, f);
            if common {
                let hw = draw.slope_root[row.candidate];
                q += f * hw * hw;
                for (s, x) in shared.iter_mut().zip(h) {
                    *s += f * hw * x;
                }
            }
        }
        if common {
            add_outer(&mut info, shared.as_slice(), -1.0 / q);
        }
        start = end;
    }
    mirror(&mut info);
    info
}

fn gain(problem: &Problem, draw: &Draw, row: &Row) -> f64 {
    let m = draw.rate[row.candidate];
    if m <= 0.0 {
        return 0.0;
    }
    let e = draw.visit_error.get(row.candidate).copied().unwrap_or(0.0) * problem.visits;
    let (u, t) = (row.bright_h, row.live_h);
    let counts = (m - draw.dark_rate) * u + draw.dark_rate * t;
    u * u * m / (counts + e * m * u * u)
}
