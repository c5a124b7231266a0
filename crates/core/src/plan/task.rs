//! One planning task from candidates to timetable.

mod costs;

pub use costs::Cost;

use super::clock::{Machine, Window};
use super::criterion::{Criterion, Scaled, covariance_of};
use super::exact;
use super::problem::{Problem, Rates, VisitErrors, refuse};
use super::relaxed::{Relaxed, evaluate, optimise};
use super::search::{self, search};
use super::timetable::{Demands, Judge, Row, Stretch, timetable_information};
use crate::error::{Answer, Warning};
use crate::math;
use nalgebra::DMatrix;

/// What is to be planned. The first truth is the best guess; forecasts are for it.
#[derive(Debug, Clone)]
pub struct Task {
    /// Names of the free parameters.
    pub names: Vec<String>,
    /// Allowed energies W, strictly rising, GeV.
    pub w_gev: Vec<f64>,
    /// Rates at them for each possible truth.
    pub truths: Vec<Rates>,
    /// What is to be small.
    pub criterion: Criterion,
    /// The machine.
    pub machine: Machine,
    /// What every timetable has to contain.
    pub demands: Demands,
    /// Errors of each visit.
    pub errors: VisitErrors,
    /// Energy error common to a fill, GeV.
    pub fill_energy_gev: f64,
    /// Guaranteed efficiency wanted of the relaxed optimum, e.g. 0.999.
    pub wanted: f64,
    /// Drafts judged per start of the search for a timetable.
    pub effort: usize,
}

/// The plan.
#[derive(Debug, Clone, PartialEq)]
pub struct Plan {
    /// The relaxed optimum over the same beam.
    pub relaxed: Relaxed,
    /// Hours of beam in the windows.
    pub beam_h: f64,
    /// The same, weighted with luminosity.
    pub bright_h: f64,
    /// The timetable.
    pub rows: Vec<Row>,
    /// Criterion of the timetable, in units of the parameters (see [`Relaxed::criterion`]).
    pub criterion: f64,
    /// Lower bound of its efficiency: the relaxed optimum is counted as reachable.
    pub efficiency: f64,
    /// True if every timetable was judged.
    pub exact: bool,
    /// Efficiency of equal time at every allowed energy, against the relaxed optimum.
    pub uniform_efficiency: f64,
    /// What the user should know.
    pub warnings: Vec<Warning>,
    draft: Vec<Stretch>,
}

/// A task with its problems built.
pub struct Planner {
    task: Task,
    windows: Vec<Window>,
    beam_h: f64,
    bright_h: f64,
    /// Parameters only: timetables are judged with it.
    base: Problem,
    base_criterion: Scaled,
    /// With the fills' common energy as one more parameter.
    relaxed: Problem,
    relaxed_criterion: Criterion,
    search_draws: Vec<usize>,
}

/// Truths used inside the search; all of them judge the result.
const SEARCH_TRUTHS: usize = 16;
/// Timetables up to which everything is enumerated.
const ENUMERATION_LIMIT: u64 = 60_000;

impl Planner {
    /// Checks and builds.
    ///
    /// # Errors
    /// Energies that do not rise, a machine without beam for one least dwell, a goal that the
    /// energies do not determine; everything [`Problem::new`] refuses.
    pub fn new(task: Task) -> Answer<Self> {
        if task
            .w_gev
            .windows(2)
            .any(|w| w[1] <= w[0] || !w[1].is_finite())
        {
            return Err(refuse(
                "plan.step",
                "",
                "energies that rise",
                "The allowed energies do not rise. The step between settings has to be above 0.",
            ));
        }
        if task.w_gev.is_empty() {
            return Err(refuse(
                "plan.from",
                "",
                "a window that holds at least one allowed setting",
                "There is no allowed energy in this window. Widen the window or take a finer step.",
            ));
        }
        task.machine.check()?;
        let windows = task.machine.windows();
        let beam_h: f64 = windows.iter().map(|w| w.end_h - w.start_h).sum();
        let bright_h = bright_hours(&task.machine, &windows);
        let visits = windows.len().max(1) as f64;
        let base = Problem::new(&task.names, &task.truths, task.errors, bright_h, visits)?;
        let base_criterion = Scaled::new(&task.criterion, &base)?;
        let (relaxed, relaxed_criterion) = with_fill_energy(&task, bright_h, visits)?;
        let k = task.truths.len();
        let search_draws = if k <= SEARCH_TRUTHS {
            (0..k).collect()
        } else {
            (0..SEARCH_TRUTHS).map(|i| i * k / SEARCH_TRUTHS).collect()
        };
        Ok(Self {
            task,
            windows,
            beam_h,
            bright_h,
            base,
            base_criterion,
            relaxed,
            relaxed_criterion,
            search_draws,
        })
    }

    /// The task.
    #[must_use]
    pub fn task(&self) -> &Task {
        &self.task
    }

    /// The stretches of beam.
    #[must_use]
    pub fn windows(&self) -> &[Window] {
        &self.windows
    }

    fn judge<'a>(
        &'a self,
        machine: &'a Machine,
        windows: &'a [Window],
        demands: &'a Demands,
    ) -> Judge<'a> {
        Judge {
            problem: &self.base,
            criterion: &self.base_criterion,
            w_gev: &self.task.w_gev,
            machine,
            windows,
            demands,
            fill_energy_gev: self.task.fill_energy_gev,
            draws: self.search_draws.clone(),
        }
    }

    /// The plan.
    ///
    /// # Errors
    /// An undetermined goal, or demands that do not fit into the hours.
    pub fn plan(&self) -> Answer<Plan> {
        let relaxed = optimise(&self.relaxed, &self.relaxed_criterion, self.task.wanted)?;
        let judge = self.judge(&self.task.machine, &self.windows, &self.task.demands);
        let enumerated = exact::enumerate(&judge, ENUMERATION_LIMIT);
        let exact = enumerated.is_some() && self.search_draws.len() == self.task.truths.len();
        let draft = match enumerated {
            Some((draft, _)) => draft,
            None => {
                let found = search(&judge, &relaxed.hours, &[], self.task.effort);
                match found {
                    Some(f) if f.shortfall > 0.0 => {
                        return Err(refuse(
                            "plan.demands",
                            &format!("{} h", self.task.machine.hours),
                            "demands that fit into the hours",
                            "The demands on the plan (distinct energies, hours off resonance, reference point, both flanks) do not fit into the hours left. More hours, fewer demands or a shorter least dwell would help.",
                        ));
                    }
                    Some(f) if f.value.is_finite() => f.draft,
                    _ => {
                        return Err(refuse(
                            "plan.hours",
                            &format!("{} h", self.task.machine.hours),
                            "hours for as many settings as the goal needs",
                            "The hours left do not hold enough separate settings to determine the goal. More hours, a shorter least dwell, or a constraint on another parameter would help.",
                        ));
                    }
                }
            }
        };
        let rows = judge.rows(&draft).unwrap_or_default();
        let phi = self.value_of(&rows);
        let best = optimum_phi(&relaxed, &self.relaxed, &self.relaxed_criterion);
        let uniform = self.relaxed.uniform();
        let uniform_efficiency = evaluate(&self.relaxed, &self.relaxed_criterion, &uniform)
            .map_or(0.0, |u| {
                math::exp(best - optimum_phi(&u, &self.relaxed, &self.relaxed_criterion))
            });
        Ok(Plan {
            beam_h: self.beam_h,
            bright_h: self.bright_h,
            criterion: super::relaxed::in_units(&self.base, &self.base_criterion, phi),
            // phi of the relaxed optimum is at least that of the solution times its certificate.
            efficiency: (math::exp(best - phi) * relaxed.efficiency).min(1.0),
            exact,
            uniform_efficiency,
            warnings: self.warnings(&relaxed, &rows),
            relaxed,
            rows,
            draft,
        })
    }

    /// The relaxed optimum as rows without order.
    pub(crate) fn relaxed_rows(&self) -> Answer<Vec<Row>> {
        let best = optimise(&self.relaxed, &self.relaxed_criterion, self.task.wanted)?;
        let longest = best.hours.iter().copied().fold(0.0, f64::max);
        let used = best.hours.iter().enumerate();
        Ok(used
            .filter(|(_, h)| **h > 1e-3 * longest)
            .map(|(candidate, &hours)| Row {
                fill: 0,
                candidate,
                start_h: 0.0,
                live_h: hours,
                bright_h: hours,
                settle_h: 0.0,
            })
            .collect())
    }

    /// phi of rows over all truths, in the scale of the relaxed problem's phi.
    fn value_of(&self, rows: &[Row]) -> f64 {
        let mut judge = self.judge(&self.task.machine, &self.windows, &self.task.demands);
        judge.draws = (0..self.task.truths.len()).collect();
        judge.value(rows) + self.shift()
    }

    /// Both problems scale parameters on their own; this carries phi from one to the other.
    fn shift(&self) -> f64 {
        let Ok(scaled) = Scaled::new(&self.relaxed_criterion, &self.relaxed) else {
            return 0.0;
        };
        let base = super::relaxed::in_units(&self.base, &self.base_criterion, 0.0);
        let relaxed = super::relaxed::in_units(&self.relaxed, &scaled, 0.0);
        match &self.base_criterion {
            Scaled::Variance(_) => 0.0,
            Scaled::Determinant => (relaxed - base) / self.base.parameters as f64,
            Scaled::Subset(k) => (relaxed - base) / k.ncols() as f64,
        }
    }

    /// Share of the information that is lost if these rows are kept although `plan` is the better one
    /// (for re-planning: rows of the old plan that are still ahead, laid on the new clock).
    #[must_use]
    pub fn loss_by_keeping(&self, old: &[Row], plan: &Plan) -> f64 {
        let loss = 1.0 - math::exp(self.value_of(&plan.rows) - self.value_of(old));
        loss.max(0.0)
    }

    /// Covariance of the parameters after these rows for one truth, row by row in units of the
    /// parameters; `None` where a parameter is not determined.
    #[must_use]
    pub fn variances(&self, rows: &[Row], truth: usize) -> Vec<Option<f64>> {
        let Some(draw) = self.base.draws.get(truth) else {
            return vec![None; self.task.names.len()];
        };
        let info = timetable_information(&self.base, draw, rows, self.task.fill_energy_gev);
        self.variances_of(&info, &self.base)
    }

    /// The same for an allocation of the relaxed problem.
    #[must_use]
    pub fn relaxed_variances(&self, hours: &[f64], truth: usize) -> Vec<Option<f64>> {
        let Some(draw) = self.relaxed.draws.get(truth) else {
            return vec![None; self.task.names.len()];
        };
        let info = self.relaxed.scaled_information(draw, hours);
        self.variances_of(&info, &self.relaxed)
    }

    fn variances_of(&self, info: &DMatrix<f64>, problem: &Problem) -> Vec<Option<f64>> {
        (0..self.task.names.len())
            .map(|i| {
                let mut c = DMatrix::zeros(info.nrows(), 1);
                c[(i, 0)] = 1.0 / problem.scale[i];
                covariance_of(info, &c).map(|v| v[(0, 0)])
            })
            .collect()
    }

    /// Information for one truth after these rows, in units of the parameters.
    #[must_use]
    pub fn information(&self, rows: &[Row], truth: usize) -> Option<DMatrix<f64>> {
        let draw = self.base.draws.get(truth)?;
        let mut info = timetable_information(&self.base, draw, rows, self.task.fill_energy_gev);
        for i in 0..info.nrows() {
            for j in 0..info.ncols() {
                info[(i, j)] *= self.base.scale[i] * self.base.scale[j];
            }
        }
        Some(info)
    }

    /// Relative gain of information by one more hour at each candidate on top of what is known
    /// now, 1/h; `None` if the goal is not yet determined.
    #[must_use]
    pub fn gain_now_per_h(&self) -> Option<Vec<f64>> {
        let none = vec![0.0; self.task.w_gev.len()];
        evaluate(&self.relaxed, &self.relaxed_criterion, &none).map(|r| r.gain_per_h)
    }

    /// Variances of the relaxed optimum against hours of beam: what no plan can beat.
    ///
    /// # Errors
    /// Hours not above 0, an undetermined goal.
    pub fn best_against_hours(&self, hours: &[f64]) -> Answer<Vec<Vec<Option<f64>>>> {
        hours
            .iter()
            .map(|&h| {
                let problem = self.relaxed.with_hours(h)?;
                let best = optimise(&problem, &self.relaxed_criterion, 0.999)?;
                let Some(draw) = problem.draws.first() else {
                    return Ok(Vec::new());
                };
                let info = problem.scaled_information(draw, &best.hours);
                Ok(self.variances_of(&info, &problem))
            })
            .collect()
    }

    /// Error of a combination of the parameters after these rows, for the best guess.
    #[must_use]
    pub fn error_of(&self, rows: &[Row], gradient: &[f64]) -> Option<f64> {
        let info = timetable_information(
            &self.base,
            self.base.draws.first()?,
            rows,
            self.task.fill_energy_gev,
        );
        combination_error(&info, &self.base, gradient)
    }

    /// The same for an allocation of the relaxed problem.
    #[must_use]
    pub fn relaxed_error_of(&self, hours: &[f64], gradient: &[f64]) -> Option<f64> {
        let info = self
            .relaxed
            .scaled_information(self.relaxed.draws.first()?, hours);
        combination_error(&info, &self.relaxed, gradient)
    }

    /// Equal time at every allowed energy.
    #[must_use]
    pub fn uniform(&self) -> Vec<f64> {
        self.relaxed.uniform()
    }

    /// Error of a combination for the relaxed optimum of this planner's criterion against hours of beam.
    ///
    /// # Errors
    /// Hours not above 0, an undetermined goal.
    pub fn best_goal_against_hours(
        &self,
        hours: &[f64],
        gradient: Vec<f64>,
    ) -> Answer<Vec<Option<f64>>> {
        hours
            .iter()
            .map(|&h| {
                let problem = self.relaxed.with_hours(h)?;
                let best = optimise(&problem, &self.relaxed_criterion, self.task.wanted)?;
                Ok(problem.draws.first().and_then(|draw| {
                    let info = problem.scaled_information(draw, &best.hours);
                    combination_error(&info, &problem, &gradient)
                }))
            })
            .collect()
    }

    /// Square root of the criterion of the relaxed optimum, for a variance criterion.
    ///
    /// # Errors
    /// An undetermined goal.
    pub fn least_error(&self) -> Answer<f64> {
        let best = optimise(&self.relaxed, &self.relaxed_criterion, 0.99)?;
        Ok(math::exp(0.5 * best.criterion))
    }

    /// Relative difference of the criterion of rows between even and odd truths; `None` below 8 truths.
    #[must_use]
    pub fn truths_accuracy(&self, rows: &[Row]) -> Option<f64> {
        let k = self.task.truths.len();
        if k < 8 {
            return None;
        }
        let half = |first: usize| {
            let mut judge = self.judge(&self.task.machine, &self.windows, &self.task.demands);
            judge.draws = (first..k).step_by(2).collect();
            judge.value(rows)
        };
        Some(math::expm1((half(0) - half(1)).abs()))
    }

    /// Efficiency of rows if `truth` (not among those planned for) holds, against the best for it.
    ///
    /// # Errors
    /// As [`Planner::new`].
    pub fn efficiency_if(&self, rows: &[Row], truth: &Rates) -> Answer<f64> {
        let mut task = self.task.clone();
        task.truths = vec![truth.clone()];
        let other = Planner::new(task)?;
        let best = optimise(&other.relaxed, &other.relaxed_criterion, self.task.wanted)?;
        let phi = optimum_phi(&best, &other.relaxed, &other.relaxed_criterion);
        Ok(math::exp(phi - other.value_of(rows)).min(1.0))
    }

    fn warnings(&self, relaxed: &Relaxed, rows: &[Row]) -> Vec<Warning> {
        let mut warnings = vec![Warning::new(
            "operators",
            "Beam changes are made by the accelerator's operators under the facility's procedures; radiation and machine protection are not modelled.",
        )];
        let lost: Vec<&str> = self
            .variances(rows, 0)
            .iter()
            .zip(&self.task.names)
            .filter(|(v, _)| v.is_none())
            .map(|(_, n)| n.as_str())
            .collect();
        if !lost.is_empty() {
            warnings.push(Warning::new(
                "undetermined",
                format!("This plan is best for its goal but leaves {} undetermined. A share of the time for all parameters together would determine them.", lost.join(", ")),
            ));
        }
        if relaxed.efficiency < self.task.wanted {
            warnings.push(Warning::new(
                "certificate",
                format!(
                    "The guarantee of the relaxed optimum is {:.4}, less than the {:.4} wanted.",
                    relaxed.efficiency, self.task.wanted
                ),
            ));
        }
        warnings
    }
}

/// Hours of full luminosity in these windows.
fn bright_hours(machine: &Machine, windows: &[Window]) -> f64 {
    windows
        .iter()
        .map(|w| machine.bright_hours(w.age_h, w.end_h - w.start_h))
        .sum()
}

fn combination_error(info: &DMatrix<f64>, problem: &Problem, gradient: &[f64]) -> Option<f64> {
    let mut c = DMatrix::zeros(info.nrows(), 1);
    for (i, g) in gradient.iter().enumerate().take(info.nrows()) {
        c[(i, 0)] = g / problem.scale[i];
    }
    covariance_of(info, &c).map(|v| v[(0, 0)].sqrt())
}

/// Adds the energy common to a fill as a parameter. With F fills alike (by concavity the best
/// relaxed plan treats them alike) F errors s_F act as one of s_F/sqrt(F).
fn with_fill_energy(task: &Task, hours: f64, visits: f64) -> Answer<(Problem, Criterion)> {
    if task.fill_energy_gev <= 0.0 {
        let problem = Problem::new(&task.names, &task.truths, task.errors, hours, visits)?;
        return Ok((problem, task.criterion.clone()));
    }
    let p = task.names.len();
    let mut names = task.names.clone();
    names.push("energy of a fill".to_string());
    let mut truths = Vec::with_capacity(task.truths.len());
    for truth in &task.truths {
        let n = truth.rate_per_h.len();
        if truth.slope_per_h_gev.len() != n || truth.gradient_per_h.len() != n * p {
            return Err(refuse(
                "plan",
                "",
                "one slope per energy",
                "The error common to a fill needs the slope of the curve at every energy.",
            ));
        }
        let mut wide = truth.clone();
        wide.gradient_per_h = truth
            .gradient_per_h
            .chunks_exact(p)
            .zip(&truth.slope_per_h_gev)
            .flat_map(|(g, s)| g.iter().copied().chain(core::iter::once(*s)))
            .collect();
        wide.prior = truth.prior.clone().resize(p + 1, p + 1, 0.0);
        wide.prior[(p, p)] = visits / (task.fill_energy_gev * task.fill_energy_gev);
        truths.push(wide);
    }
    let criterion = match &task.criterion {
        Criterion::Determinant => Criterion::Subset((0..p).collect()),
        Criterion::Subset(list) => Criterion::Subset(list.clone()),
        Criterion::Variance(c) => Criterion::Variance(c.clone().resize(p + 1, c.ncols(), 0.0)),
    };
    Ok((
        Problem::new(&names, &truths, task.errors, hours, visits)?,
        criterion,
    ))
}

/// Normalised phi of a solution, from its criterion in units, in the scale of `problem`.
fn optimum_phi(solution: &Relaxed, problem: &Problem, criterion: &Criterion) -> f64 {
    let Ok(scaled) = Scaled::new(criterion, problem) else {
        return f64::INFINITY;
    };
    let zero = super::relaxed::in_units(problem, &scaled, 0.0);
    match criterion {
        Criterion::Determinant => (zero - solution.criterion) / problem.parameters as f64,
        Criterion::Subset(list) => (zero - solution.criterion) / list.len() as f64,
        Criterion::Variance(_) => solution.criterion,
    }
}

/// Shares of the relaxed optimum at separate energies (candidate, share): what the bars show.
#[must_use]
pub fn bars(relaxed: &Relaxed) -> Vec<(usize, f64)> {
    search::clusters(&relaxed.hours)
}
