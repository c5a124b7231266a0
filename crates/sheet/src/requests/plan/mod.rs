//! The plan of the hours left.

mod again;
mod find;
mod forecast;
mod goal;
mod proof;
mod settings;

pub use again::{Changes, KeptPlan};
pub use find::{CombReading, answer as comb};
pub use forecast::ForecastReading;
pub use proof::{Steering, merge, run};

use super::cursor::dial_unit;
use super::{Body, Column, Reply, StayOrMove, first_problem};
use crate::check;
use crate::doc::Sheet;
use crate::quantity::format;
use settings::nearest;
use widthwise_core::error::{Answer, Warning};
use widthwise_core::fit::{FitSettings, fit};
use widthwise_core::plan::for_scan::{PlanSettings, ScanPlanner};
use widthwise_core::plan::scan_rates::set_value;
use widthwise_core::scan::{Measured, Scan};

/// Everything a plan is made from.
pub(super) struct Made {
    pub scan: Scan,
    /// The scan with the sheet's own values.
    pub sheets: Scan,
    pub settings: PlanSettings,
    pub warnings: Vec<Warning>,
    /// Where its values come from, in a sentence.
    pub basis: &'static str,
    frame: check::Frame,
    begins_h: f64,
}

/// Reads the sheet and fits what has been measured.
pub(super) fn prepare(sheet: &Sheet) -> Answer<Made> {
    let understood = check::understand(sheet);
    let mut scan = understood.scan().map_err(first_problem)?;
    let reading = check::plan(sheet).map_err(first_problem)?;
    let mut warnings = understood.warnings.clone();
    let mut settings = settings::settings(sheet, &scan, &reading, &mut warnings)?;
    let sheets = scan.clone();
    let basis = take_fit(&mut scan, &settings.fit, &mut warnings);
    // Goals in relative terms mean the values planned for.
    settings.goals = settings::goals(sheet, &scan, &reading)?;
    let begins_h = settings.machine.elapsed_h;
    let Some(frame) = understood.frame else {
        return Err(first_problem(understood.problems));
    };
    Ok(Made {
        scan,
        sheets,
        settings,
        warnings,
        basis,
        frame,
        begins_h,
    })
}

/// Moves the scan to the fit of its points, where there is one.
fn take_fit(scan: &mut Scan, free: &FitSettings, warnings: &mut Vec<Warning>) -> &'static str {
    let measured = |m: &Measured| !matches!(m, Measured::Nothing);
    if !scan.points.iter().any(|p| measured(&p.measured)) {
        return "Planned from the sheet's values: nothing has been measured yet.";
    }
    let mut moved = scan.clone();
    let found = fit(scan, free).and_then(|result| {
        for p in &result.parameters {
            set_value(&mut moved, &p.id, p.value)?;
        }
        Ok(result.stop.is_minimum() && result.parameters.iter().all(|p| p.error.is_some()))
    });
    match found {
        Ok(true) => {
            *scan = moved;
            "Planned from the present fit: its values, and its errors as a Gaussian."
        }
        _ => {
            warnings.push(Warning::new(
                "no-fit",
                "The points so far do not determine a fit; the plan starts from the sheet's values.",
            ));
            "Planned from the sheet's values: the points so far do not determine a fit."
        }
    }
}

/// Plans the hours left. `costs`: also what each property of the machine and each demand costs
/// (the plan is made again without it). `keep`: an older plan to be compared with.
pub fn answer(
    sheet: &Sheet,
    costs: bool,
    keep: Option<&KeptPlan>,
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<Reply> {
    let Made {
        scan,
        settings,
        warnings,
        basis,
        frame,
        begins_h,
        ..
    } = prepare(sheet)?;
    let planner = ScanPlanner::new(&scan, &settings, progress)?;
    let (mut plan, timetable) = planner.report(costs, progress)?;
    plan.warnings.splice(0..0, warnings);
    let stay = match settings.machine.current_w_gev {
        Some(w) => stay_or_move(&planner, &settings, w)?,
        None => None,
    };
    let to_dial = |w_gev: f64| to_dial(sheet, &frame, w_gev);
    let dial = plan
        .rows
        .iter()
        .map(|row| to_dial(row.w_gev))
        .collect::<Answer<Vec<_>>>()?;
    let changes = keep
        .map(|old| again::compare(sheet, old, &planner, &timetable, &plan, &to_dial))
        .transpose()?;
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
            forecasts: forecast::readings(sheet, &plan),
            plan: Box::new(plan),
            dial,
            stay,
            basis: basis.to_string(),
            begins_h,
            changes,
        },
        columns,
    })
}

/// The number to dial for W, with unit.
fn to_dial(sheet: &Sheet, frame: &check::Frame, w_gev: f64) -> Answer<String> {
    let dimension = check::dial_dimension(sheet.beam.dial);
    let setting = frame.setting_of_w(w_gev)?;
    let unit = dial_unit(sheet, dimension);
    Ok(format::for_the_eye(
        setting,
        None,
        dimension,
        unit.as_ref(),
        8,
    ))
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

#[cfg(test)]
mod tests {
    use crate::doc::Sheet;
    use crate::requests::{Request, answer as ask};

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
                    keep: None,
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
