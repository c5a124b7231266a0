//! Plans asked through the sheet, on the invented scenarios: aims, re-planning, trials, bad input.

use widthwise_core::error::Refusal;
use widthwise_core::plan::report::ScanPlan;
use widthwise_sheet::demos;
use widthwise_sheet::doc::{PlanComb, PlanGoal, PlanRival, Sheet};
use widthwise_sheet::requests::{
    Body, Changes, CombReading, ForecastReading, KeptPlan, Request, Steering, TrialRange, answer,
};

struct Answered {
    plan: ScanPlan,
    forecasts: Vec<ForecastReading>,
    begins_h: f64,
    changes: Option<Changes>,
    basis: String,
}

fn try_plan(sheet: &Sheet, costs: bool, keep: Option<KeptPlan>) -> Result<Answered, Refusal> {
    let request = Request::Plan {
        sheet: sheet.clone(),
        costs,
        keep,
    };
    match answer(&request, &mut |_, _| ())?.body {
        Body::Plan {
            plan,
            forecasts,
            begins_h,
            changes,
            basis,
            ..
        } => Ok(Answered {
            plan: *plan,
            forecasts,
            begins_h,
            changes,
            basis,
        }),
        _ => panic!("no plan"),
    }
}

fn plan(sheet: &Sheet) -> Answered {
    try_plan(sheet, false, None).unwrap()
}

fn refused(sheet: &Sheet) -> Refusal {
    match try_plan(sheet, false, None) {
        Ok(_) => panic!("this should be refused"),
        Err(refusal) => refusal,
    }
}

/// Scenario A on a coarse grid for its best guess alone, so that the tests are quick.
fn saltmere() -> Sheet {
    let mut sheet = demos::open("saltmere").unwrap();
    sheet.plan.from = Some("2868 MeV".into());
    sheet.plan.to = Some("2880 MeV".into());
    sheet.plan.step = Some("0.5 MeV".into());
    sheet.plan.truths = Some("1".into());
    sheet
}

fn greyfell() -> Sheet {
    let mut sheet = demos::open("greyfell").unwrap();
    sheet.plan.from = Some("3.212 GeV".into());
    sheet.plan.to = Some("3.226 GeV".into());
    sheet.plan.step = Some("0.4 MeV".into());
    sheet.plan.truths = Some("1".into());
    sheet
}

#[test]
fn goals_in_the_users_words_shrink_what_they_name() {
    let mut sheet = saltmere();
    let all = plan(&sheet);
    assert!(all.basis.contains("Gaussian"), "{}", all.basis);
    let error = |answered: &Answered, name: &str| {
        let found = answered.forecasts.iter().find(|f| f.name == name).unwrap();
        found.numbers.planned.unwrap()
    };
    for goal in [
        "r1.mass",
        "r1.width",
        "r1.strength",
        "coherent.phase",
        "r1.strength / r1.width",
    ] {
        sheet.plan.goal = Some(goal.into());
        let one = plan(&sheet);
        let of = |answered: &Answered| {
            let mut goals = answered.plan.goals.iter();
            goals.find(|g| g.name == goal).map(|g| g.relaxed.unwrap())
        };
        // No allocation is better for the goal than its own optimum (to the certificate).
        let own = of(&one).unwrap();
        if let Some(free) = all.forecasts.iter().find(|f| f.name == goal) {
            let raw = all.plan.parameters.iter().find(|p| p.name == goal).unwrap();
            assert!(own <= raw.relaxed.unwrap() * 1.001, "{goal}: {free:?}");
        }
        assert!(one.forecasts.iter().any(|f| f.goal && f.name == goal));
        assert!(error(&one, goal) > 0.0);
    }
    // Two goals with weights: between their own optima.
    sheet.plan.goal = None;
    sheet.plan.goals = vec![
        PlanGoal {
            quantity: "r1.mass".into(),
            wanted: Some("20 keV".into()),
            weight: None,
        },
        PlanGoal {
            quantity: "coherent.phase".into(),
            wanted: Some("3 deg".into()),
            weight: Some("2".into()),
        },
    ];
    let both = plan(&sheet);
    assert_eq!(both.plan.goals.len(), 2);
    let phase = both
        .forecasts
        .iter()
        .find(|f| f.name == "coherent.phase")
        .unwrap();
    assert_eq!(phase.unit, "deg");
    assert!((phase.numbers.wanted.unwrap() - 3.0).abs() < 1e-9);
}

/// One resonance fitted to two: the plan for telling them apart expects more than equal times,
/// and a rival that is the hypothesis itself is refused.
#[test]
fn two_hypotheses_are_told_apart_where_the_data_can() {
    let mut sheet = greyfell();
    let mut rival = sheet.model.clone();
    rival.resonances.truncate(1);
    sheet.plan.rival = Some(Box::new(PlanRival {
        model: rival,
        free: vec!["r1.mass".into(), "r1.width".into(), "r1.strength".into()],
    }));
    let found = plan(&sheet);
    let (planned, uniform) = found.plan.log_ratio.unwrap();
    assert!(
        planned > 9.0 && planned > 1.2 * uniform,
        "{planned} {uniform}"
    );
    let mut same = greyfell();
    same.plan.rival = Some(Box::new(PlanRival {
        model: same.model.clone(),
        free: same.fit.free.clone(),
    }));
    let refusal = refused(&same);
    assert!(
        refusal.message.contains("cannot tell"),
        "{}",
        refusal.message
    );
}

fn comb(sheet: &Sheet, trials: u32) -> CombReading {
    let request = Request::Comb {
        sheet: sheet.clone(),
        trials,
        seed: 3,
    };
    match answer(&request, &mut |_, _| ()).unwrap().body {
        Body::Comb { reading } => *reading,
        _ => panic!("no comb"),
    }
}

/// Scenario C: observed FWHM 5.373 MeV (tests/reference/scenarios.json, another integration); a comb of 9 points 3 MeV apart expects 4.9 deviations with
/// 2 h a point at the true mass, 4.2 MeV off the hint.
#[test]
fn a_comb_for_an_unknown_mass() {
    let mut sheet = demos::open("ostrel").unwrap();
    sheet.data.rows.clear();
    sheet.fit.constraints.clear();
    sheet.plan.hours = Some("24 h".into());
    sheet.model.resonances[0].mass = "47.3000 GeV".into();
    sheet.plan.comb = Some(PlanComb {
        reach: Some("12 MeV".into()),
        dwell: Some("2 h".into()),
        ..PlanComb::default()
    });
    let found = comb(&sheet, 60);
    assert!(
        (found.comb.fwhm_gev - 5.3731e-3).abs() < 0.02e-3,
        "{}",
        found.comb.fwhm_gev
    );
    assert_eq!(found.comb.rows.len(), 9);
    assert_eq!(found.dial.len(), 9);
    assert!(
        (found.comb.expected_local - 4.9).abs() < 0.5,
        "{}",
        found.comb.expected_local
    );
    let chances: Vec<f64> = found.comb.by_dwell.iter().map(|d| d.1).collect();
    assert!(chances[0] < chances[3], "{chances:?}");
    assert!(found.comb.found.is_none() && !found.hand_over);
    // 9 points of 2 h and 8 changes of 20 min in 24 h.
    assert!(
        (found.comb.left_h - (24.0 - 18.0 - 8.0 / 3.0)).abs() < 0.4,
        "{}",
        found.comb.left_h
    );

    // With the scenario's counts a modest significance is enough to hand over.
    let mut taken = demos::open("ostrel").unwrap();
    taken.plan.comb = Some(PlanComb {
        reach: Some("12 MeV".into()),
        significance: Some("2".into()),
        ..PlanComb::default()
    });
    let found = comb(&taken, 60);
    let (mass, z) = found.comb.found.unwrap();
    assert!(
        (mass - 47.304).abs() < 3e-3 && z > 2.0 && found.hand_over,
        "{mass} {z}"
    );

    // What is missing is said.
    let mut nothing = taken.clone();
    nothing.fit.constraints.clear();
    nothing.plan.comb = Some(PlanComb::default());
    let request = Request::Comb {
        sheet: nothing,
        trials: 10,
        seed: 1,
    };
    assert_eq!(
        answer(&request, &mut |_, _| ()).unwrap_err().field,
        "plan.comb.reach"
    );
}

/// Made again after a point: only the hours left, the schedule goes on, the old plan loses something or nothing.
#[test]
fn planned_again_after_a_point() {
    let mut sheet = saltmere();
    sheet.plan.fill = Some("6 h".into());
    sheet.plan.refill = Some("1 h".into());
    sheet.plan.starts = Some("2026-11-26T06:00:00+01:00".into());
    let first = plan(&sheet);
    // The last row of the scenario ends before: nothing is used up yet.
    assert!(first.begins_h >= 0.0);
    let row = &first.plan.rows[0];
    let mut taken = sheet.data.rows[6].clone();
    taken.id = "A13".into();
    taken.group = Some("fill 5".into());
    taken.start = Some("2026-11-26T06:15:00+01:00".into());
    taken.stop = Some("2026-11-26T09:15:00+01:00".into());
    taken.setting = None;
    taken.w = Some(format!("{} GeV", row.w_gev));
    taken.counts = Some("450".into());
    sheet.data.rows.push(taken);
    let keep = KeptPlan {
        rows: first.plan.rows[1..].to_vec(),
        parameters: first.plan.parameters.clone(),
    };
    let second = try_plan(&sheet, false, Some(keep)).unwrap();
    assert!((second.begins_h - 3.25).abs() < 1e-9, "{}", second.begins_h);
    let changes = second.changes.unwrap();
    assert!((0.0..1.0).contains(&changes.loss_by_keeping));
    assert!(
        changes.sentences[0].starts_with("The next setting"),
        "{:?}",
        changes.sentences
    );
    // 24 h less 3.25 h are left, of them the rest of a fill of 6 h first.
    let in_first: Vec<_> = second.plan.rows.iter().filter(|r| r.fill == 1).collect();
    for r in &in_first {
        assert!(r.start_h + r.live_h <= 2.75 + 1e-9, "{r:?}");
    }
    let last = second.plan.rows.last().unwrap();
    assert!(last.start_h + last.live_h <= 20.75 + 1e-9);
}

/// Each constraint of the machine is kept and has its cost.
#[test]
fn the_machine_as_it_is_costs_something_each() {
    let mut sheet = saltmere();
    sheet.plan.goal = Some("r1.mass".into());
    sheet.plan.fill = Some("8 h".into());
    sheet.plan.refill = Some("1 h".into());
    sheet.plan.lifetime = Some("10 h".into());
    sheet.plan.settle_up = Some("1 min".into());
    sheet.plan.settle_down = Some("3 min".into());
    sheet.plan.one_way = Some("up".into());
    sheet.plan.calibration_every = Some("16 h".into());
    sheet.plan.calibration_time = Some("1 h".into());
    sheet.plan.blocked = vec![("3 h".into(), "4 h".into())];
    sheet.plan.least_distinct = Some("4".into());
    sheet.plan.off_hours = Some("2 h".into());
    sheet.plan.off_below = Some("2869 MeV".into());
    sheet.plan.reference = Some("2873 MeV".into());
    sheet.plan.both_flanks_of = Some("2874.2 MeV".into());
    sheet.plan.luminosity_at = vec![
        ("2868 MeV".into(), "9.0e30 cm^-2 s^-1".into()),
        ("2880 MeV".into(), "6.0e30 cm^-2 s^-1".into()),
    ];
    let found = try_plan(&sheet, true, None).unwrap().plan;
    let names: Vec<&str> = found.costs.iter().map(|c| c.0.as_str()).collect();
    for word in [
        "dwell",
        "settling",
        "order",
        "distinct",
        "off resonance",
        "reference",
        "flanks",
        "refill",
        "calibration",
        "blocked",
        "decay",
        "luminosity",
        "fill",
    ] {
        assert!(names.iter().any(|n| n.contains(word)), "{word}: {names:?}");
    }
    assert!(
        found.costs.iter().all(|c| (0.0..1.0).contains(&c.1)),
        "{:?}",
        found.costs
    );
    let mut fill = 0;
    let mut w = 0.0;
    for row in &found.rows {
        assert!(
            row.start_h + row.live_h <= 3.0 + 1e-9 || row.start_h >= 4.0 - 1e-9,
            "{row:?}"
        );
        if row.fill == fill {
            assert!(row.w_gev > w, "only upwards: {row:?}");
        }
        (fill, w) = (row.fill, row.w_gev);
    }
    let off: f64 = found
        .rows
        .iter()
        .filter(|r| r.w_gev <= 2.869)
        .map(|r| r.live_h)
        .sum();
    assert!(off >= 2.0 - 1e-9);
}

/// Trials of the timetable, of equal times and of a steered shift: drawn, fitted, summarised.
#[test]
fn trials_of_a_plan() {
    let mut sheet = saltmere();
    sheet.plan.hours = Some("8 h".into());
    let made = plan(&sheet);
    for (steering, count) in [
        (Steering::Timetable, 12),
        (Steering::Uniform, 6),
        (Steering::Again, 2),
    ] {
        let run = |first, count| {
            let request = Request::PlanTrials {
                sheet: sheet.clone(),
                rows: made.plan.rows.clone(),
                steering,
                range: TrialRange {
                    seed: 1,
                    first,
                    count,
                    profiles: false,
                },
            };
            match answer(&request, &mut |_, _| ()).unwrap().body {
                Body::Trials { rows } => rows,
                _ => panic!("no trials"),
            }
        };
        let whole = run(0, count);
        assert_eq!(
            run(u64::from(count / 2), count - count / 2),
            whole[count as usize / 2..]
        );
        let request = Request::PlanSummary {
            sheet: sheet.clone(),
            rows: whole,
        };
        let Body::Summary { summary } = answer(&request, &mut |_, _| ()).unwrap().body else {
            panic!("no summary");
        };
        assert!(
            summary.converged * 10 >= summary.trials * 8,
            "{steering:?}: {summary:?}"
        );
        let mass = &summary.parameters[0];
        assert!(
            (mass.truth - 2.8742).abs() < 2e-4 && mass.mean_error < 70e-6,
            "{mass:?}"
        );
    }
}

/// Every bad input in a plain sentence that names its field.
#[test]
fn bad_input_is_a_plain_sentence() {
    type Change = fn(&mut Sheet);
    let cases: [(Change, &str, &str); 10] = [
        // Without data and with energies on the peak alone nothing separates the parameters.
        (
            |s| {
                s.data.rows.clear();
                s.plan.from = Some("2874.2 MeV".into());
                s.plan.to = Some("2874.7 MeV".into());
            },
            "",
            "would",
        ),
        (
            |s| s.plan.hours = Some("30 min".into()),
            "plan.hours",
            "least dwell",
        ),
        (|s| s.plan.to = Some("2860 MeV".into()), "plan.to", "empty"),
        (|s| s.plan.step = Some("0 MeV".into()), "plan.step", ""),
        (
            |s| {
                s.fit.constraints = vec![widthwise_sheet::doc::Constraint {
                    parameter: "r1.mass".into(),
                    value: "2874.2(0) MeV".into(),
                }];
            },
            "fit.constraints[0].value",
            "error",
        ),
        (|s| s.fit.free.clear(), "fit.free", "free"),
        (
            |s| s.plan.goal = Some("spread".into()),
            "plan.goal",
            "not free",
        ),
        (
            |s| s.plan.goal = Some("the mass".into()),
            "plan.goals[0].quantity",
            "not understood",
        ),
        (
            |s| s.plan.hours_used = Some("24 h".into()),
            "plan.hours_used",
            "used up",
        ),
        (
            |s| {
                s.plan.luminosity_at = vec![
                    ("2880 MeV".into(), "9e30 cm^-2 s^-1".into()),
                    ("2870 MeV".into(), "9e30 cm^-2 s^-1".into()),
                ]
            },
            "plan.luminosity_at[1][0]",
            "rise",
        ),
    ];
    for (change, field, word) in cases {
        let mut sheet = saltmere();
        change(&mut sheet);
        let refusal = refused(&sheet);
        assert!(refusal.field.starts_with(field), "{field}: {refusal:?}");
        assert!(refusal.message.contains(word), "{word}: {refusal:?}");
        assert!(refusal.message.len() > 20 && refusal.message.contains(' '));
    }
}
