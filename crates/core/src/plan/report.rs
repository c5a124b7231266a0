//! A plan with everything beside it: forecasts, curves, costs, words.

use super::for_scan::{STEPS_AFTER, ScanPlanner};
use super::problem::Rates;
use super::rival::{PLACES, even, expected_log_ratio};
use super::scan_rates::{Sources, rates, set_value, value_of};
use super::task::{Cost, Plan, bars};
use crate::error::{Answer, Warning};
use serde::{Deserialize, Serialize};

/// A row of the timetable.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct PlannedRow {
    /// Fill from 1.
    pub fill: u32,
    /// Start of data taking, h from now.
    pub start_h: f64,
    /// W, GeV.
    pub w_gev: f64,
    /// Live hours.
    pub live_h: f64,
    /// Settling before it, h.
    pub settle_h: f64,
    /// Counts expected.
    pub expected_counts: f64,
    /// Why it is there.
    pub why: String,
}

/// What the plan promises for one quantity.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Forecast {
    /// Id of a parameter or name of a goal.
    pub name: String,
    /// Value planned for.
    pub value: f64,
    /// Error wanted.
    pub wanted: Option<f64>,
    /// Error now; `None`: undetermined.
    pub now: Option<f64>,
    /// After the timetable.
    pub planned: Option<f64>,
    /// After the relaxed optimum: no timetable gets below the goal's.
    pub relaxed: Option<f64>,
    /// After the same beam spent equally at every allowed energy.
    pub uniform: Option<f64>,
    /// What no amount of beam gets below (errors of visits and common ones; visits as often as planned for).
    pub floor: Option<f64>,
}

/// The plan with everything beside it.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ScanPlan {
    /// Timetable.
    pub rows: Vec<PlannedRow>,
    /// Relaxed optimum as bars: (W in GeV, hours).
    pub bars: Vec<(f64, f64)>,
    /// Parameters.
    pub parameters: Vec<Forecast>,
    /// Goals.
    pub goals: Vec<Forecast>,
    /// Energies of the curves below, GeV.
    pub w_gev: Vec<f64>,
    /// Relative gain of information per further hour there, on top of the plan, 1/h.
    pub gain_per_h: Vec<f64>,
    /// The same on top of what is known now; empty while the goal is undetermined.
    pub gain_now_per_h: Vec<f64>,
    /// (hours of beam, error of the first goal or of the first parameter) of the best allocation.
    pub best_against_hours: Vec<(f64, Option<f64>)>,
    /// Hours of beam in the windows.
    pub beam_h: f64,
    /// Guaranteed efficiency of the relaxed optimum.
    pub certificate: f64,
    /// Lower bound of the timetable's efficiency against it.
    pub efficiency: f64,
    /// Every timetable was judged: it is the best one.
    pub exact: bool,
    /// Efficiency of equal time everywhere.
    pub uniform_efficiency: f64,
    /// What each property of the machine and each demand costs: (what, share of the information).
    pub costs: Vec<(String, f64)>,
    /// Share of the information that the plan loses if the mass is off by one prior standard deviation: (that deviation in GeV, loss).
    pub loss_if_mass_off: Option<(f64, f64)>,
    /// With a rival hypothesis: expected 2 ln of the likelihood ratio, the rival refitted, after the
    /// timetable and after the same hours spread evenly.
    pub log_ratio: Option<(f64, f64)>,
    /// Truths planned for.
    pub truths: u32,
    /// Relative difference of the criterion between the two halves of the truths: how well their number represents the prior.
    pub truths_accuracy: Option<f64>,
    /// What the user should know.
    pub warnings: Vec<Warning>,
}

impl ScanPlanner {
    /// The plan and everything beside it. `with_costs` makes the plan again without each demand.
    ///
    /// # Errors
    /// As [`crate::plan::task::Planner::plan`].
    pub fn report(
        &self,
        with_costs: bool,
        progress: &mut dyn FnMut(u32, u32),
    ) -> Answer<(ScanPlan, Plan)> {
        let total_steps = self.settings.truths + STEPS_AFTER;
        let mut step = self.settings.truths;
        let mut further = |by: u32| {
            step += by;
            progress(step, total_steps);
        };
        further(0);
        let plan = self.planner.plan()?;
        further(2);
        let mut costs = Vec::new();
        if with_costs {
            costs = self.planner.costs(&plan)?;
            if !self.settings.luminosity.is_empty() {
                let sources = Sources {
                    luminosity: &[],
                    ..self.settings.sources(&self.parameters, &self.truth)
                };
                costs.push(Cost {
                    what: "the luminosity against energy".to_string(),
                    loss: self
                        .planner
                        .cost_against(&rates(&self.scan, sources, 1.0)?)?,
                });
            }
        }
        further(2);
        let total: f64 = plan.relaxed.hours.iter().sum();
        let mut warnings = plan.warnings.clone();
        if self.skipped > 0 {
            warnings.push(Warning::new("truths", format!(
                "{} of the drawn truths lie outside the allowed range of a parameter and are left out.", self.skipped)));
        }
        if self.planner.task().truths.len() == 1
            && self.settings.truths > 1
            && self.settings.rival.is_none()
        {
            warnings.push(Warning::new("no-prior", "Nothing says how well the parameters are known, so the plan is for the best guess alone. A constraint on the mass would make it robust."));
        }
        let floors = self.planner.best_against_hours(&[1e8])?;
        let steps = [0.25, 0.5, 1.0, 2.0, 4.0, 8.0];
        let hours: Vec<f64> = steps.iter().map(|s| s * plan.bright_h).collect();
        let curve = self
            .planner
            .best_goal_against_hours(&hours, self.main_goal())?;
        further(1);
        let log_ratio = match &self.settings.rival {
            Some(rival) => {
                let of = |rows| expected_log_ratio(&self.truth, rival, &self.settings, rows);
                Some((of(&plan.rows)?, of(&even(&self.settings, PLACES))?))
            }
            None => None,
        };
        let report = ScanPlan {
            rows: self.rows(&plan),
            bars: bars(&plan.relaxed)
                .into_iter()
                .map(|(j, share)| {
                    (
                        self.settings.w_gev.get(j).copied().unwrap_or(0.0),
                        share * total,
                    )
                })
                .collect(),
            parameters: self.parameter_forecasts(&plan, floors.first()),
            goals: self.goal_forecasts(&plan)?,
            w_gev: self.settings.w_gev.clone(),
            gain_per_h: plan.relaxed.gain_per_h.clone(),
            gain_now_per_h: self.planner.gain_now_per_h().unwrap_or_default(),
            best_against_hours: hours.into_iter().zip(curve).collect(),
            beam_h: plan.beam_h,
            certificate: plan.relaxed.efficiency,
            efficiency: plan.efficiency,
            exact: plan.exact,
            uniform_efficiency: plan.uniform_efficiency,
            costs: costs.into_iter().map(|c| (c.what, c.loss)).collect(),
            loss_if_mass_off: self.loss_if_mass_off(&plan)?,
            truths: self.planner.task().truths.len() as u32,
            truths_accuracy: self.planner.truths_accuracy(&plan.rows),
            log_ratio,
            warnings,
        };
        Ok((report, plan))
    }

    fn main_goal(&self) -> Vec<f64> {
        match self.goals.first() {
            Some((_, _, gradient)) => gradient.clone(),
            None => {
                let mut c = vec![0.0; self.planner.task().names.len()];
                if let Some(first) = c.first_mut() {
                    *first = 1.0;
                }
                c
            }
        }
    }

    fn parameter_forecasts(&self, plan: &Plan, floor: Option<&Vec<Option<f64>>>) -> Vec<Forecast> {
        let root = |list: &[Option<f64>], i: usize| list.get(i).copied().flatten().map(f64::sqrt);
        let planned = self.planner.variances(&plan.rows, 0);
        let relaxed = self.planner.relaxed_variances(&plan.relaxed.hours, 0);
        let uniform = self.planner.relaxed_variances(&self.planner.uniform(), 0);
        let now = self.planner.variances(&[], 0);
        self.parameters
            .free
            .iter()
            .enumerate()
            .map(|(i, id)| Forecast {
                name: id.clone(),
                value: value_of(&self.scan, id).unwrap_or(f64::NAN),
                wanted: None,
                now: root(&now, i),
                planned: root(&planned, i),
                relaxed: root(&relaxed, i),
                uniform: root(&uniform, i),
                floor: floor.and_then(|f| root(f, i)),
            })
            .collect()
    }

    fn goal_forecasts(&self, plan: &Plan) -> Answer<Vec<Forecast>> {
        let uniform = self.planner.uniform();
        self.goals
            .iter()
            .map(|(goal, value, gradient)| {
                let floor = self
                    .planner
                    .best_goal_against_hours(&[1e8], gradient.clone())?;
                Ok(Forecast {
                    name: goal.name.clone(),
                    value: *value,
                    wanted: goal.wanted_error,
                    now: self.planner.error_of(&[], gradient),
                    planned: self.planner.error_of(&plan.rows, gradient),
                    relaxed: self.planner.relaxed_error_of(&plan.relaxed.hours, gradient),
                    uniform: self.planner.relaxed_error_of(&uniform, gradient),
                    floor: floor.first().copied().flatten(),
                })
            })
            .collect()
    }

    fn loss_if_mass_off(&self, plan: &Plan) -> Answer<Option<(f64, f64)>> {
        if self.settings.rival.is_some() {
            return Ok(None);
        }
        let Some(i) = self
            .parameters
            .free
            .iter()
            .position(|f| f.ends_with(".mass"))
        else {
            return Ok(None);
        };
        let deviation = self.covariance_now[(i, i)].max(0.0).sqrt();
        if deviation <= 0.0 {
            return Ok(None);
        }
        let mut worst = 0.0_f64;
        for sign in [-1.0, 1.0] {
            let mut other = self.scan.clone();
            let id = &self.parameters.free[i];
            set_value(&mut other, id, value_of(&self.scan, id)? + sign * deviation)?;
            let sources = self.settings.sources(&self.parameters, &self.truth);
            let truth = rates(&other, sources, 1.0)?;
            worst = worst.max(1.0 - self.planner.efficiency_if(&plan.rows, &truth)?);
        }
        Ok(Some((deviation, worst)))
    }

    fn rows(&self, plan: &Plan) -> Vec<PlannedRow> {
        let truth: Option<&Rates> = self.planner.task().truths.first();
        plan.rows
            .iter()
            .map(|row| {
                let rate = truth
                    .and_then(|t| t.rate_per_h.get(row.candidate))
                    .copied()
                    .unwrap_or(0.0);
                let dark = truth.map_or(0.0, |t| t.rate_without_beam_per_h);
                PlannedRow {
                    fill: row.fill as u32 + 1,
                    start_h: row.start_h,
                    w_gev: self
                        .settings
                        .w_gev
                        .get(row.candidate)
                        .copied()
                        .unwrap_or(0.0),
                    live_h: row.live_h,
                    settle_h: row.settle_h,
                    expected_counts: (rate - dark) * row.bright_h + dark * row.live_h,
                    why: truth.map_or_else(String::new, |t| {
                        why(
                            &t.rate_per_h,
                            row.candidate,
                            self.settings.demands.reference,
                        )
                    }),
                }
            })
            .collect()
    }
}

/// Where on the curve a candidate lies, in words.
fn why(rate: &[f64], j: usize, reference: Option<usize>) -> String {
    if reference == Some(j) {
        return "reference point".to_string();
    }
    let top = rate.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let low = rate.iter().copied().fold(f64::INFINITY, f64::min);
    let Some(peak) = rate.iter().position(|&r| r == top) else {
        return String::new();
    };
    let height = (rate.get(j).copied().unwrap_or(low) - low) / (top - low).max(1e-300);
    let side = if j < peak { "lower" } else { "upper" };
    if height > 0.93 {
        "on the peak: height".to_string()
    } else if height > 0.15 {
        format!("{side} flank: position and width")
    } else if height > 0.03 {
        format!("{side} tail: width against background")
    } else {
        format!("{side} side, off resonance: background")
    }
}
