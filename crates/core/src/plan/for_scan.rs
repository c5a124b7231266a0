//! A plan for a scan: goals in words, truths from the prior, timetable.

use super::clock::Machine;
use super::criterion::Criterion;
use super::goal::Goal;
use super::problem::{VisitErrors, refuse};
use super::rival::{Rival, settle, settle_on};
use super::scan_rates::{
    DIFFERENCE, Parameters, Sources, brightness, known_covariance, moved, rates,
};
use super::task::{Planner, Task};
use super::timetable::{Demands, Row};
use crate::error::Answer;
use crate::fit::FitSettings;
use crate::scan::{Measured, Point, Scan};
use nalgebra::DMatrix;

/// What to plan.
#[derive(Debug, Clone, PartialEq)]
pub struct PlanSettings {
    /// What the fit will leave free, with its constraints.
    pub fit: FitSettings,
    /// Goals; none: all free parameters together (D-optimal).
    pub goals: Vec<Goal>,
    /// The one goal is to tell the scan's hypothesis from this one; no goals beside it.
    pub rival: Option<Rival>,
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
    /// Luminosity over that of the detection against W, as [`Sources::luminosity`].
    pub luminosity: Vec<(f64, f64)>,
    /// Truths drawn from what is known (0 or 1: plan for the best guess alone).
    pub truths: u32,
    /// Guaranteed efficiency wanted, e.g. 0.999.
    pub wanted: f64,
    /// Drafts judged per start of the search.
    pub effort: usize,
}

/// A planner for a scan.
pub struct ScanPlanner {
    /// The planner over arrays.
    pub planner: Planner,
    /// What holds.
    pub(crate) truth: Scan,
    /// What the parameters belong to: the truth, or the rival as it describes the truth best.
    pub(crate) scan: Scan,
    pub(crate) settings: PlanSettings,
    pub(crate) parameters: Parameters,
    pub(crate) goals: Vec<(Goal, f64, Vec<f64>)>,
    pub(crate) covariance_now: DMatrix<f64>,
    pub(crate) skipped: u32,
}

impl ScanPlanner {
    /// Prepares: computes rates for every truth, telling `progress(done, total)`.
    ///
    /// # Errors
    /// A goal that is not free, energies, hours and demands that cannot be, an undetermined goal;
    /// everything the chain refuses.
    pub fn new(
        truth: &Scan,
        settings: &PlanSettings,
        progress: &mut dyn FnMut(u32, u32),
    ) -> Answer<Self> {
        let scan = match &settings.rival {
            Some(rival) => settle(truth, rival, settings)?,
            None => truth.clone(),
        };
        let fit = settings.fit_of_parameters();
        let mut parameters = Parameters::new(&scan, fit)?;
        if settings.rival.is_some() {
            parameters = parameters.with_difference();
        }
        let names = parameters.names();
        let sources = settings.sources(&parameters, truth);
        let first = rates(&scan, sources, 1.0)?;
        let covariance_now = known_covariance(&first.prior, fit, &parameters);
        let mut truths = vec![first];
        let mut skipped = 0;
        if settings.rival.is_none() && covariance_now.iter().any(|&x| x != 0.0) {
            for k in 1..settings.truths {
                progress(k, settings.truths + STEPS_AFTER);
                match moved(&scan, &parameters, &covariance_now, k) {
                    Some(other) => truths.push(rates(&other, sources, 1.0)?),
                    None => skipped += 1,
                }
            }
        }
        let goals = match &settings.rival {
            Some(_) => {
                let mut last = vec![0.0; names.len()];
                if let Some(slot) = last.last_mut() {
                    *slot = 1.0;
                }
                vec![(Goal::parameter(DIFFERENCE), 1.0, last)]
            }
            None => settings
                .goals
                .iter()
                .map(|g| {
                    let (value, gradient) = g.gradient(&scan, &parameters, names.len())?;
                    Ok((g.clone(), value, gradient))
                })
                .collect::<Answer<_>>()?,
        };
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
        let mut planner = Planner::new(Task { criterion, ..task })?;
        if let Some(rival) = &settings.rival {
            for _ in 0..REFITS {
                let rows = planner.relaxed_rows()?;
                let adapted = settle_on(truth, rival, settings, &rows)?;
                let mut task = planner.task().clone();
                task.truths.push(rates(&adapted, sources, 1.0)?);
                planner = Planner::new(task)?;
            }
        }
        Ok(Self {
            planner,
            truth: truth.clone(),
            scan,
            settings: settings.clone(),
            parameters,
            goals,
            covariance_now,
            skipped,
        })
    }

    /// Points of the timetable as planned points of a scan, to be filled by pseudo-experiments.
    #[must_use]
    pub fn points(&self, rows: &[Row]) -> Vec<Point> {
        self.settings.points(&self.truth, rows)
    }
}

/// How often a rival adapts to the design and the design to it.
const REFITS: usize = 4;

/// Steps of progress after the truths.
pub(crate) const STEPS_AFTER: u32 = 6;

impl PlanSettings {
    /// What the fit of the scan leaves free that the parameters belong to.
    fn fit_of_parameters(&self) -> &FitSettings {
        self.rival.as_ref().map_or(&self.fit, |r| &r.fit)
    }

    pub(crate) fn sources<'a>(
        &'a self,
        parameters: &'a Parameters,
        truth: &'a Scan,
    ) -> Sources<'a> {
        Sources {
            fit: self.fit_of_parameters(),
            parameters,
            w_gev: &self.w_gev,
            luminosity: &self.luminosity,
            first: self.rival.as_ref().map(|_| truth),
        }
    }

    /// Rows of a timetable as points of a scan that have counted nothing yet.
    #[must_use]
    pub fn points(&self, scan: &Scan, rows: &[Row]) -> Vec<Point> {
        let grouped = self.fill_energy_gev > 0.0;
        rows.iter()
            .enumerate()
            .map(|(i, row)| {
                let w_gev = self.w_gev.get(row.candidate).copied().unwrap_or(0.0);
                let luminosity_nbinv = scan.detection.luminosity_nbinv_per_h
                    * brightness(&self.luminosity, w_gev)
                    * row.bright_h;
                Point {
                    id: format!("plan {}", i + 1),
                    group: grouped.then(|| format!("planned fill {}", row.fill + 1)),
                    w_gev,
                    w_error_gev: self.visit_errors.energy_gev,
                    sigma_w_gev: None,
                    luminosity_nbinv,
                    luminosity_error_nbinv: luminosity_nbinv * self.visit_errors.luminosity,
                    live_time_h: row.live_h,
                    live_fraction: 1.0,
                    efficiency: None,
                    efficiency_error: 0.0,
                    channel: None,
                    measured: Measured::Counts { n: 0.0, off: None },
                    start_h: Some(row.start_h),
                }
            })
            .collect()
    }
}

fn criterion(
    task: &Task,
    settings: &PlanSettings,
    goals: &[(Goal, f64, Vec<f64>)],
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
    for (goal, _, gradient) in goals {
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
