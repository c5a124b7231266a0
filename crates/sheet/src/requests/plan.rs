//! The plan of the hours left.

use super::{Body, Column, Reply, StayOrMove, first_problem, fit};
use crate::check::{self, GoalReading, PlanReading, Wanted};
use crate::doc::Sheet;
use crate::quantity::format;
use widthwise_core::error::{Answer, Refusal, Warning};
use widthwise_core::plan::clock::{Fills, Machine, Settle};
use widthwise_core::plan::for_scan::{Goal, PlanSettings, ScanPlanner};
use widthwise_core::plan::problem::VisitErrors;
use widthwise_core::plan::timetable::Demands;
use widthwise_core::scan::Scan;

/// Most allowed energies of one plan.
const MOST_ENERGIES: f64 = 10_001.0;
/// Truths drawn from what is known where the sheet does not say.
const TRUTHS: u32 = 16;

/// Plans the hours left. `costs`: also what each property of the machine and each demand costs
/// (the plan is made again without it).
pub fn answer(sheet: &Sheet, costs: bool) -> Answer<Reply> {
    let understood = check::understand(sheet);
    let scan = understood.scan().map_err(first_problem)?;
    let reading = check::plan(sheet).map_err(first_problem)?;
    let mut warnings = understood.warnings.clone();
    let settings = settings(sheet, &scan, &reading, &mut warnings)?;
    let planner = ScanPlanner::new(&scan, &settings)?;
    let mut plan = planner.report(costs)?;
    plan.warnings.splice(0..0, warnings);
    let stay = match settings.machine.current_w_gev {
        Some(w) => stay_or_move(&planner, &settings, w)?,
        None => None,
    };
    let Some(frame) = understood.frame.as_ref() else {
        return Err(first_problem(understood.problems));
    };
    let dimension = check::dial_dimension(sheet.beam.dial);
    let mut dial = Vec::with_capacity(plan.rows.len());
    for row in &plan.rows {
        let setting = frame.setting_of_w(row.w_gev)?;
        dial.push(format::for_the_eye(setting, None, dimension, None, 8));
    }
    let column = |name: &str, unit: &str, values: &[f64]| Column {
        name: name.to_string(),
        unit: unit.to_string(),
        values: values.to_vec(),
    };
    let mut columns = vec![
        column("W", "GeV", &plan.w_gev),
        column("gain per hour on top of the plan", "1/h", &plan.gain_per_h),
    ];
    if !plan.gain_now_per_h.is_empty() {
        columns.push(column("gain per hour now", "1/h", &plan.gain_now_per_h));
    }
    Ok(Reply {
        body: Body::Plan {
            plan: Box::new(plan),
            dial,
            stay,
        },
        columns,
    })
}

fn stay_or_move(
    planner: &ScanPlanner,
    settings: &PlanSettings,
    w_gev: f64,
) -> Answer<Option<StayOrMove>> {
    let Some(candidate) = nearest(&settings.w_gev, w_gev) else {
        return Ok(None);
    };
    let hours = settings
        .machine
        .least_dwell_h
        .max(settings.machine.dwell_step_h);
    if hours >= settings.machine.hours {
        return Ok(None);
    }
    let (loss_by_staying, loss_by_moving) =
        planner
            .planner
            .stay_or_move(candidate, hours, settings.machine.settle.fixed_h)?;
    Ok(Some(StayOrMove {
        hours,
        loss_by_staying,
        loss_by_moving,
    }))
}

fn nearest(list: &[f64], w_gev: f64) -> Option<usize> {
    (0..list.len()).min_by(|&a, &b| {
        let distance = |i: usize| list.get(i).map_or(f64::INFINITY, |w| (w - w_gev).abs());
        distance(a).total_cmp(&distance(b))
    })
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

fn settings(
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
    let hours = needed(reading.hours, "hours", "how many hours there are")? - reading.hours_used;
    if hours <= 0.0 {
        return Err(Refusal::new(
            "plan.hours_used",
            format!("{} h", reading.hours_used),
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
    let goals = reading
        .goals
        .iter()
        .enumerate()
        .map(|(i, g)| goal(scan, g, i))
        .collect::<Answer<Vec<_>>>()?;
    let (fixed_h, up_h, down_h) = reading.settle_h;
    Ok(PlanSettings {
        fit,
        goals,
        others_share: reading.others_share,
        machine: Machine {
            hours,
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
            current_w_gev: reading.stands_at_gev,
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
        truths: reading.truths.unwrap_or(TRUTHS),
        wanted: 0.999,
        effort: 1500,
        w_gev,
    })
}

/// "r1.mass", "r1.strength / r1.width", "r2.mass - r1.mass": ids between `*` and `/`, or `+` and `-`.
fn goal(scan: &Scan, reading: &GoalReading, i: usize) -> Answer<Goal> {
    let text = &reading.quantity;
    let wrong = || {
        Refusal::new(
            format!("plan.goals[{i}].quantity"),
            text,
            "a parameter, or parameters between * and /, or between + and -, with spaces: r2.mass - r1.mass",
            "this goal is not understood",
        )
    };
    let words: Vec<&str> = text.split_whitespace().collect();
    let mut terms = Vec::new();
    let (mut sum, mut product) = (false, false);
    let mut factor = 1.0;
    for (k, word) in words.iter().enumerate() {
        if k % 2 == 0 {
            terms.push(((*word).to_string(), factor));
            continue;
        }
        (factor, sum, product) = match *word {
            "+" => (1.0, true, product),
            "-" => (-1.0, true, product),
            "*" => (1.0, sum, true),
            "/" => (-1.0, sum, true),
            _ => return Err(wrong()),
        };
    }
    if words.len().is_multiple_of(2) || (sum && product) {
        return Err(wrong());
    }
    let mut goal = Goal {
        name: text.clone(),
        terms,
        sum,
        wanted_error: None,
        weight: reading.weight,
    };
    goal.wanted_error = match reading.wanted {
        Some(Wanted::Relative(relative)) => Some(relative * goal.value(scan)?.abs()),
        Some(Wanted::Energy(error_gev)) => Some(error_gev),
        None => None,
    };
    Ok(goal)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::requests::{Request, answer as ask};

    fn reading(quantity: &str) -> GoalReading {
        GoalReading {
            quantity: quantity.into(),
            wanted: None,
            weight: 1.0,
        }
    }

    fn scan() -> Scan {
        let sheet = crate::demos::open("saltmere").unwrap();
        check::understand(&sheet).scan().unwrap()
    }

    #[test]
    fn goals_in_words() {
        let ratio = goal(&scan(), &reading("r1.strength / r1.width"), 0).unwrap();
        assert!(!ratio.sum && ratio.terms[1] == ("r1.width".to_string(), -1.0));
        let splitting = goal(&scan(), &reading("r2.mass - r1.mass"), 0).unwrap();
        assert!(splitting.sum && splitting.terms[1].1 == -1.0);
        for nonsense in [
            "",
            "r1.mass r1.width",
            "r1.mass -",
            "r1.mass / r1.width + r1.mass",
        ] {
            assert!(goal(&scan(), &reading(nonsense), 0).is_err(), "{nonsense}");
        }
    }

    /// What is missing or impossible is said in one sentence that names the field.
    #[test]
    fn refusals_name_their_field() {
        let mut sheet = crate::demos::open("saltmere").unwrap();
        sheet.plan = crate::doc::Plan::default();
        let ask_plan = |sheet: &Sheet| {
            ask(
                &Request::Plan {
                    sheet: sheet.clone(),
                    costs: false,
                },
                &mut |_, _| {},
            )
            .unwrap_err()
        };
        assert_eq!(ask_plan(&sheet).field, "plan.from");
        sheet.plan.from = Some("2.87 GeV".into());
        sheet.plan.to = Some("2.88 GeV".into());
        sheet.plan.step = Some("1 MeV".into());
        assert_eq!(ask_plan(&sheet).field, "plan.hours");
        sheet.plan.hours = Some("10 h".into());
        sheet.plan.hours_used = Some("10 h".into());
        assert_eq!(ask_plan(&sheet).field, "plan.hours_used");
        sheet.plan.hours_used = None;
        sheet.plan.to = Some("2.86 GeV".into());
        assert_eq!(ask_plan(&sheet).field, "plan.to");
    }
}
