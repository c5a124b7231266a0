//! What the demands, the machine and not knowing the truth cost, and staying against moving on.

use super::{Plan, Planner, bright_hours, optimum_phi};
use crate::error::Answer;
use crate::math;
use crate::plan::clock::{Fills, Machine, Settle};
use crate::plan::criterion::Criterion;
use crate::plan::problem::Rates;
use crate::plan::relaxed::{Relaxed, evaluate, optimise};
use crate::plan::search::search;
use crate::plan::timetable::Demands;

/// What one demand or property of the machine costs.
#[derive(Debug, Clone, PartialEq)]
pub struct Cost {
    /// What.
    pub what: String,
    /// Share of the information that is lost to it: without it, the same hours would bring 1/(1 - loss).
    pub loss: f64,
}

impl Planner {
    /// Mean loss of information because one allocation has to serve every truth: against the
    /// relaxed optimum of each truth had it been known (up to `SEARCH_TRUTHS` of them).
    ///
    /// # Errors
    /// An undetermined goal for one of the truths.
    pub fn cost_of_not_knowing(&self, plan: &Plan) -> Answer<f64> {
        let (mut sum, mut weight) = (0.0, 0.0);
        for &k in &self.search_draws {
            let Some(draw) = self.relaxed.draws.get(k) else {
                continue;
            };
            let mut alone = self.relaxed.clone();
            let w = draw.weight;
            let mut draw = draw.clone();
            draw.weight = 1.0;
            alone.draws = vec![draw];
            let own = optimise(&alone, &self.relaxed_criterion, self.task.wanted)?;
            if let Some(shared) = evaluate(&alone, &self.relaxed_criterion, &plan.relaxed.hours) {
                let gap = optimum_phi(&own, &alone, &self.relaxed_criterion)
                    - optimum_phi(&shared, &alone, &self.relaxed_criterion);
                sum += w * (1.0 - math::exp(gap));
                weight += w;
            }
        }
        Ok(if weight > 0.0 {
            (sum / weight).max(0.0)
        } else {
            0.0
        })
    }

    /// What each property of the machine and each demand costs: the plan is made again without it.
    ///
    /// # Errors
    /// An undetermined goal.
    pub fn costs(&self, plan: &Plan) -> Answer<Vec<Cost>> {
        let judge = self.judge(&self.task.machine, &self.windows, &self.task.demands);
        let with = judge.value(&plan.rows);
        let mut costs = Vec::new();
        let mut add = |what: &str, machine: &Machine, demands: &Demands, scale: u32| {
            let windows = self.windows.clone();
            let judge = self.judge(machine, &windows, demands);
            let mut start = plan.draft.clone();
            for visit in start.iter_mut().flat_map(|s| &mut s.visits) {
                visit.units *= scale;
            }
            let without = search(&judge, &plan.relaxed.hours, &start, self.task.effort)
                .map_or(with, |f| f.value);
            costs.push(Cost {
                what: what.to_string(),
                loss: (1.0 - math::exp(without - with)).max(0.0),
            });
        };
        let (machine, demands) = (&self.task.machine, &self.task.demands);
        let mut finer = machine.clone();
        finer.dwell_step_h *= 0.125;
        finer.least_dwell_h = finer.dwell_step_h;
        add("whole dwell steps and the least dwell", &finer, demands, 8);
        if machine.settle != Settle::default() {
            let mut quick = machine.clone();
            quick.settle = Settle::default();
            add("settling after a change of energy", &quick, demands, 1);
        }
        let mut any_order = machine.clone();
        any_order.one_way = None;
        any_order.settle.up_h_per_gev = 0.0;
        any_order.settle.down_h_per_gev = 0.0;
        let ordered = any_order != *machine;
        if ordered {
            add("the order of the energies", &any_order, demands, 1);
        }
        let parts: [(&str, bool, Demands); 4] = [
            (
                "distinct energies",
                demands.least_distinct > 0,
                Demands {
                    least_distinct: 0,
                    ..demands.clone()
                },
            ),
            (
                "hours off resonance",
                demands.off_resonance.is_some(),
                Demands {
                    off_resonance: None,
                    ..demands.clone()
                },
            ),
            (
                "a reference point in each fill",
                demands.reference.is_some(),
                Demands {
                    reference: None,
                    ..demands.clone()
                },
            ),
            (
                "both flanks in each fill",
                demands.both_flanks_of_gev.is_some(),
                Demands {
                    both_flanks_of_gev: None,
                    ..demands.clone()
                },
            ),
        ];
        for (what, asked, without) in parts {
            if asked {
                add(what, machine, &without, 1);
            }
        }
        if !ordered {
            costs.push(Cost {
                what: "the order of the energies".to_string(),
                loss: 0.0,
            });
        }
        costs.extend(self.costs_of_beam(plan)?);
        if self.task.fill_energy_gev > 0.0 {
            let mut task = self.task.clone();
            task.fill_energy_gev = 0.0;
            let free = Planner::new(task)?;
            let best = optimise(&free.relaxed, &free.relaxed_criterion, self.task.wanted)?;
            costs.push(Cost {
                what: "the energy error common to a fill".to_string(),
                loss: (1.0
                    - math::exp(
                        best.criterion_down(&free.relaxed_criterion, free.base.parameters)
                            - plan
                                .relaxed
                                .criterion_down(&self.relaxed_criterion, self.base.parameters),
                    ))
                .max(0.0),
            });
        }
        if self.task.truths.len() > 1 {
            costs.push(Cost {
                what: "not knowing the parameters beforehand".to_string(),
                loss: self.cost_of_not_knowing(plan)?,
            });
        }
        Ok(costs)
    }

    /// What the machine's times without beam and its decay cost, each on its own, in the relaxed optimum.
    fn costs_of_beam(&self, plan: &Plan) -> Answer<Vec<Cost>> {
        let machine = &self.task.machine;
        let mut cases: Vec<(&str, Machine)> = Vec::new();
        let fills = |change: fn(&mut Fills)| {
            let mut other = machine.clone();
            other.fills.iter_mut().for_each(change);
            other
        };
        if machine.fills.is_some_and(|f| f.refill_h > 0.0) {
            cases.push(("refilling between the fills", fills(|f| f.refill_h = 0.0)));
        }
        if machine.fills.is_some_and(|f| f.lifetime_h.is_some()) {
            let other = fills(|f| f.lifetime_h = None);
            cases.push(("the decay of the luminosity", other));
        }
        if machine.calibration_h.is_some() {
            let mut other = machine.clone();
            other.calibration_h = None;
            cases.push(("calibrations", other));
        }
        if !machine.blocked_h.is_empty() {
            let mut other = machine.clone();
            other.blocked_h.clear();
            cases.push(("blocked times", other));
        }
        let here = optimum_phi(&plan.relaxed, &self.relaxed, &self.relaxed_criterion);
        let mut costs = Vec::new();
        for (what, other) in cases {
            let hours = bright_hours(&other, &other.windows());
            let mut loss = 0.0;
            if hours > self.bright_h {
                let whole = self.relaxed.with_hours(hours)?;
                let best = optimise(&whole, &self.relaxed_criterion, self.task.wanted)?;
                let gap = optimum_phi(&best, &whole, &self.relaxed_criterion) - here;
                loss = (1.0 - math::exp(gap)).max(0.0);
            }
            costs.push(Cost {
                what: what.to_string(),
                loss,
            });
        }
        Ok(costs)
    }

    /// Share of the information that the best guess would bring more at these rates (0 if less).
    ///
    /// # Errors
    /// An undetermined goal.
    pub fn cost_against(&self, better: &Rates) -> Answer<f64> {
        let best = |truth: Option<&Rates>| {
            let mut task = self.task.clone();
            task.truths = truth.cloned().into_iter().collect();
            let planner = Planner::new(task)?;
            let best = optimise(
                &planner.relaxed,
                &planner.relaxed_criterion,
                self.task.wanted,
            )?;
            Ok(best.criterion_down(&planner.relaxed_criterion, planner.base.parameters))
        };
        let gap = best(Some(better))? - best(self.task.truths.first())?;
        Ok((1.0 - math::exp(gap)).max(0.0))
    }

    /// Staying `hours` longer at `candidate` against moving on now: relative loss of information of
    /// (staying, moving) against the better of the two, both with the best use of the rest.
    ///
    /// # Errors
    /// Not enough hours, an undetermined goal.
    pub fn stay_or_move(&self, candidate: usize, hours: f64, settle_h: f64) -> Answer<(f64, f64)> {
        let stay = self.after_forced(Some((candidate, hours)), self.bright_h - hours)?;
        let moved = self.after_forced(None, self.bright_h - settle_h)?;
        let better = stay.min(moved);
        Ok((
            1.0 - math::exp(better - stay),
            1.0 - math::exp(better - moved),
        ))
    }

    /// phi of the best use of `rest` hours after some forced ones.
    fn after_forced(&self, forced: Option<(usize, f64)>, rest: f64) -> Answer<f64> {
        let mut problem = self.relaxed.with_hours(rest)?;
        if let Some((candidate, hours)) = forced {
            let mut given = vec![0.0; problem.candidates];
            if let Some(slot) = given.get_mut(candidate) {
                *slot = hours;
            }
            for k in 0..problem.draws.len() {
                let info = problem.scaled_information(&problem.draws[k], &given);
                problem.draws[k].prior = info;
            }
        }
        let best = optimise(&problem, &self.relaxed_criterion, self.task.wanted)?;
        Ok(optimum_phi(&best, &problem, &self.relaxed_criterion))
    }
}

impl Relaxed {
    /// The criterion as something to be small, per parameter of the goal.
    fn criterion_down(&self, criterion: &Criterion, parameters: usize) -> f64 {
        match criterion {
            Criterion::Determinant => -self.criterion / parameters as f64,
            Criterion::Subset(list) => -self.criterion / list.len() as f64,
            Criterion::Variance(_) => self.criterion,
        }
    }
}
