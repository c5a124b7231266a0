//! A plan for a scan: goals in words, truths from the prior, timetable and everything beside it.

use super::clock::Machine;
use super::criterion::Criterion;
use super::problem::{Rates, VisitErrors, refuse};
use super::scan_rates::{Parameters, known_covariance, moved, rates, set_value, value_of};
use super::task::{Cost, Plan, Planner, Task, bars};
use super::timetable::{Demands, Row};
use crate::error::{Answer, Warning};
use crate::fit::FitSettings;
use crate::scan::Scan;
use nalgebra::DMatrix;
use serde::{Deserialize, Serialize};

/// A quantity whose error is to be small.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Goal {
    /// As shown.
    pub name: String,
    /// Parameters with their powers (product) or coefficients (sum); one parameter with 1: itself.
    pub terms: Vec<(String, f64)>,
    /// True: sum of coefficient times parameter (a splitting); false: product of powers (a ratio).
    pub sum: bool,
    /// Wanted error, in the quantity's unit; `None`: as small as can be.
    pub wanted_error: Option<f64>,
    /// Weight beside other goals, above 0.
    pub weight: f64,
}

impl Goal {
    /// One parameter.
    #[must_use]
    pub fn parameter(id: &str) -> Self {
        Self {
            name: id.to_string(),
            terms: vec![(id.to_string(), 1.0)],
            sum: false,
            wanted_error: None,
            weight: 1.0,
        }
    }

    /// Its value at the scan's present parameters.
    ///
    /// # Errors
    /// An unknown id.
    pub fn value(&self, scan: &Scan) -> Answer<f64> {
        let mut value = if self.sum { 0.0 } else { 1.0 };
        for (id, factor) in &self.terms {
            let v = value_of(scan, id)?;
            if self.sum {
                value += factor * v;
            } else {
                value *= crate::math::pow(v, *factor);
            }
        }
        Ok(value)
    }

    /// Value and gradient over the free parameters.
    fn gradient(
        &self,
        scan: &Scan,
        parameters: &Parameters,
        width: usize,
    ) -> Answer<(f64, Vec<f64>)> {
        let value = self.value(scan)?;
        let mut gradient = vec![0.0; width];
        for (id, factor) in &self.terms {
            let Some(i) = parameters.free.iter().position(|f| f == id) else {
                return Err(refuse(
                    "plan.goal",
                    id,
                    "a free parameter",
                    &format!(
                        "{id} is not free in the fit, so beam time does not change its error. Free it, or choose another goal."
                    ),
                ));
            };
            gradient[i] += if self.sum || (*factor == 1.0 && self.terms.len() == 1) {
                *factor
            } else {
                value * factor / value_of(scan, id)?
            };
        }
        if !(value.is_finite() && gradient.iter().all(|g| g.is_finite())) {
            return Err(refuse(
                "plan.goal",
                &self.name,
                "a quantity that has a value here",
                &format!("{} has no value at the present parameters.", self.name),
            ));
        }
        Ok((value, gradient))
    }
}

/// What to plan.
#[derive(Debug, Clone, PartialEq)]
pub struct PlanSettings {
    /// What the fit will leave free, with its constraints.
    pub fit: FitSettings,
    /// Goals; none: all free parameters together (D-optimal).
    pub goals: Vec<Goal>,
    /// Share (0 to below 1) of weight for the other parameters, so that they stay determined.
    pub others_share: f64,
    /// Allowed energies, strictly rising, GeV.
    pub w_gev: Vec<f64>,
    /// Machine.
    pub machine: Machine,
    /// Demands.
    pub demands: Demands,
    /// Errors of each visit.
    pub visit_errors: VisitErrors,
    /// Energy error common to a fill, GeV.
    pub fill_energy_gev: f64,
    /// Truths drawn from what is known (0 or 1: plan for the best guess alone).
    pub truths: u32,
    /// Guaranteed efficiency wanted, e.g. 0.999.
    pub wanted: f64,
    /// Drafts judged per start of the search.
    pub effort: usize,
}

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
    /// Truths planned for.
    pub truths: u32,
    /// Relative difference of the criterion between the two halves of the truths: how well their number represents the prior.
    pub truths_accuracy: Option<f64>,
    /// What the user should know.
    pub warnings: Vec<Warning>,
}

/// A planner for a scan.
pub struct ScanPlanner {
    /// The planner over arrays.
    pub planner: Planner,
    scan: Scan,
    settings: PlanSettings,
    parameters: Parameters,
    goals: Vec<(f64, Vec<f64>)>,
    covariance_now: DMatrix<f64>,
    skipped: u32,
}

impl ScanPlanner {
    /// Prepares: computes rates for every truth.
    ///
    /// # Errors
    /// A goal that is not free, energies, hours and demands that cannot be, an undetermined goal;
    /// everything the chain refuses.
    pub fn new(scan: &Scan, settings: &PlanSettings) -> Answer<Self> {
        let parameters = Parameters::new(scan, &settings.fit)?;
        let names = parameters.names();
        let first = rates(scan, &settings.fit, &parameters, &settings.w_gev, 1.0)?;
        let covariance_now = known_covariance(&first.prior, &settings.fit, &parameters);
        let mut truths = vec![first];
        let mut skipped = 0;
        if covariance_now.iter().any(|&x| x != 0.0) {
            for k in 1..settings.truths {
                match moved(scan, &parameters, &covariance_now, k) {
                    Some(other) => truths.push(rates(
                        &other,
                        &settings.fit,
                        &parameters,
                        &settings.w_gev,
                        1.0,
                    )?),
                    None => skipped += 1,
                }
            }
        }
        let goals: Vec<(f64, Vec<f64>)> = settings
            .goals
            .iter()
            .map(|g| g.gradient(scan, &parameters, names.len()))
            .collect::<Answer<_>>()?;
        let task = Task {
            criterion: Criterion::Subset((0..parameters.free.len()).collect()),
            names,
            w_gev: settings.w_gev.clone(),
            truths,
            machine: settings.machine.clone(),
            demands: settings.demands.clone(),
            errors: settings.visit_errors,
            fill_energy_gev: settings.fill_energy_gev,
            wanted: settings.wanted,
            effort: settings.effort,
        };
        let criterion = criterion(&task, settings, &goals, parameters.free.len())?;
        let planner = Planner::new(Task { criterion, ..task })?;
        Ok(Self {
            planner,
            scan: scan.clone(),
            settings: settings.clone(),
            parameters,
            goals,
            covariance_now,
            skipped,
        })
    }

    /// Points of the timetable as planned points of a scan, to be filled by pseudo-experiments.
    #[must_use]
    pub fn points(&self, rows: &[Row]) -> Vec<crate::scan::Point> {
        let lumi = self.scan.detection.luminosity_nbinv_per_h;
        let grouped = self.settings.fill_energy_gev > 0.0;
        rows.iter()
            .enumerate()
            .map(|(i, row)| crate::scan::Point {
                id: format!("plan {}", i + 1),
                group: grouped.then(|| format!("planned fill {}", row.fill + 1)),
                w_gev: self
                    .settings
                    .w_gev
                    .get(row.candidate)
                    .copied()
                    .unwrap_or(0.0),
                w_error_gev: self.settings.visit_errors.energy_gev,
                sigma_w_gev: None,
                luminosity_nbinv: lumi * row.bright_h,
                luminosity_error_nbinv: lumi * row.bright_h * self.settings.visit_errors.luminosity,
                live_time_h: row.live_h,
                live_fraction: 1.0,
                efficiency: None,
                efficiency_error: 0.0,
                channel: None,
                measured: crate::scan::Measured::Counts { n: 0.0, off: None },
                start_h: Some(row.start_h),
            })
            .collect()
    }

    /// The plan and everything beside it. `with_costs` makes the plan again without each demand.
    ///
    /// # Errors
    /// As [`Planner::plan`].
    pub fn report(&self, with_costs: bool) -> Answer<ScanPlan> {
        let plan = self.planner.plan()?;
        let costs: Vec<Cost> = if with_costs {
            self.planner.costs(&plan)?
        } else {
            Vec::new()
        };
        let total: f64 = plan.relaxed.hours.iter().sum();
        let mut warnings = plan.warnings.clone();
        if self.skipped > 0 {
            warnings.push(Warning::new("truths", format!(
                "{} of the drawn truths lie outside the allowed range of a parameter and are left out.", self.skipped)));
        }
        if self.planner.task().truths.len() == 1 && self.settings.truths > 1 {
            warnings.push(Warning::new("no-prior", "Nothing says how well the parameters are known, so the plan is for the best guess alone. A constraint on the mass would make it robust."));
        }
        let floors = self.planner.best_against_hours(&[1e8])?;
        let steps = [0.25, 0.5, 1.0, 2.0, 4.0, 8.0];
        let hours: Vec<f64> = steps.iter().map(|s| s * plan.bright_h).collect();
        let curve = self
            .planner
            .best_goal_against_hours(&hours, self.main_goal())?;
        Ok(ScanPlan {
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
            warnings,
        })
    }

    fn main_goal(&self) -> Vec<f64> {
        match self.goals.first() {
            Some((_, gradient)) => gradient.clone(),
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
        self.settings
            .goals
            .iter()
            .zip(&self.goals)
            .map(|(goal, (value, gradient))| {
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
            let truth = rates(
                &other,
                &self.settings.fit,
                &self.parameters,
                &self.settings.w_gev,
                1.0,
            )?;
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

fn criterion(
    task: &Task,
    settings: &PlanSettings,
    goals: &[(f64, Vec<f64>)],
    free: usize,
) -> Answer<Criterion> {
    if !(0.0..1.0).contains(&settings.others_share) {
        return Err(refuse(
            "plan.others",
            &settings.others_share.to_string(),
            "a share from 0 to below 1",
            "The share for the other parameters has to be below 1.",
        ));
    }
    if goals.is_empty() {
        return Ok(Criterion::Subset((0..free).collect()));
    }
    let p = task.names.len();
    let mut columns: Vec<Vec<f64>> = Vec::new();
    for (goal, (_, gradient)) in settings.goals.iter().zip(goals) {
        if !(goal.weight > 0.0 && goal.weight.is_finite()) {
            return Err(refuse(
                "plan.goal",
                &goal.weight.to_string(),
                "a weight above 0",
                "A goal needs a weight above 0.",
            ));
        }
        let unit = match goal.wanted_error {
            Some(e) if e > 0.0 => e,
            Some(e) => {
                return Err(refuse(
                    "plan.goal",
                    &e.to_string(),
                    "an error above 0",
                    "The wanted error has to be above 0.",
                ));
            }
            // One goal has no rival; several are measured by the least error each could have alone.
            None if goals.len() == 1 && settings.others_share == 0.0 => 1.0,
            None => least_error(task, gradient)?,
        };
        let factor = goal.weight.sqrt() / unit;
        columns.push(gradient.iter().map(|g| g * factor).collect());
    }
    if settings.others_share > 0.0 {
        let odds = (settings.others_share / (1.0 - settings.others_share) / free as f64).sqrt();
        for i in 0..free {
            let mut c = vec![0.0; p];
            c[i] = 1.0;
            let unit = least_error(task, &c)?;
            c[i] = odds / unit;
            columns.push(c);
        }
    }
    Ok(Criterion::Variance(DMatrix::from_column_slice(
        p,
        columns.len(),
        &columns.concat(),
    )))
}

/// Error of a combination if all beam served it alone, for the first truth.
fn least_error(task: &Task, gradient: &[f64]) -> Answer<f64> {
    let mut alone = task.clone();
    alone.truths.truncate(1);
    alone.criterion = Criterion::Variance(DMatrix::from_column_slice(gradient.len(), 1, gradient));
    Planner::new(alone)?.least_error()
}
