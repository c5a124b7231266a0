//! A plan for the invented scenario "Saltmere": forecasts against an independent calculation.

#![allow(clippy::unwrap_used)]

use widthwise_core::amplitude::hypothesis::{
    CoherentBackground, Form, Hypothesis, PartialWave, Resonance, Strength, Vertex,
};
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::fit::{Constraint, FitSettings};
use widthwise_core::plan::clock::{Fills, Machine, Settle};
use widthwise_core::plan::for_scan::{PlanSettings, ScanPlanner};
use widthwise_core::plan::goal::Goal;
use widthwise_core::plan::problem::VisitErrors;
use widthwise_core::plan::timetable::{Demands, Row};
use widthwise_core::scan::{ChainSettings, CommonErrors, Detection, Scan, Spread, Stage};
use widthwise_core::trials::{Ensemble, TrialSettings, summarise};

const M: f64 = 2.8742;

/// Scenario A: e+e- ring, invented state V(2874).
fn saltmere() -> Scan {
    let electron = |name: &str| BeamParticle {
        name: name.into(),
        mass_gev: 0.510_998_950_69e-3,
        spin_states: 2,
    };
    Scan {
        beams: Beams {
            first: electron("e+"),
            second: electron("e-"),
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::W,
        },
        hypothesis: Hypothesis::PartialWave(PartialWave {
            twice_j: 2,
            resonances: vec![Resonance {
                name: "V".into(),
                mass_gev: M,
                width_gev: 0.62e-3,
                strength: Strength::GammaInBf { gev: 24.6e-9 },
                phase_rad: 0.0,
                form: Form::ConstantWidth,
                entrance: Vertex::Constant,
                exit: Vertex::Constant,
            }],
            coherent: Some(CoherentBackground::OnePhoton {
                c_nb: 1.90,
                w0_gev: M,
                phase_rad: -130.0_f64.to_radians(),
            }),
            incoherent: None,
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        }),
        chain: ChainSettings {
            w_min_gev: Some(2.65),
            spread: Spread::Gaussian {
                sigma_gev: 0.71e-3,
                w0_gev: M,
                power: 0.0,
            },
            accuracy: 1e-6,
        },
        detection: Detection {
            efficiency: 0.42,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 1.5,
            luminosity_nbinv_per_h: 32.4,
        },
        stage: Stage::Observed,
        points: Vec::new(),
        common: CommonErrors::default(),
        covariance_nb2: None,
        exits: Vec::new(),
    }
}

fn free() -> FitSettings {
    FitSettings {
        free: [
            "r1.mass",
            "r1.width",
            "r1.strength",
            "coherent.0",
            "coherent.phase",
        ]
        .map(String::from)
        .to_vec(),
        constraints: vec![Constraint {
            parameter: "spread".into(),
            value: 0.71e-3,
            error: 0.03 * 0.71e-3,
        }],
        extra_starts: 0,
        seed: 1,
    }
}

fn settings(w_gev: Vec<f64>) -> PlanSettings {
    PlanSettings {
        fit: free(),
        goals: vec![Goal::parameter("r1.mass")],
        rival: None,
        others_share: 0.0,
        w_gev,
        machine: Machine {
            hours: 40.0,
            fills: None,
            elapsed_h: 0.0,
            blocked_h: Vec::new(),
            calibration_h: None,
            dwell_step_h: 0.5,
            least_dwell_h: 1.0,
            settle: Settle::default(),
            one_way: None,
            current_w_gev: None,
        },
        demands: Demands::default(),
        visit_errors: VisitErrors::default(),
        fill_energy_gev: 0.0,
        luminosity: Vec::new(),
        truths: 1,
        wanted: 0.999,
        effort: 2000,
    }
}

/// The scenario's own scan, twelve points in four fills, against the independent calculation of
/// tests/reference/scenarios.json (radiation and spread by another rule, fills by a dense covariance).
#[test]
fn forecast_of_the_scenarios_scan() {
    let offsets = [
        -30.0, -4.0, -2.2, -1.5, -1.0, -0.6, 0.0, 0.6, 1.0, 1.5, 2.4, 5.0,
    ];
    let hours = [4.0, 3.0, 3.0, 3.0, 4.0, 3.0, 3.0, 3.0, 4.0, 3.0, 3.0, 4.0];
    let w_gev: Vec<f64> = offsets.iter().map(|o| M + 1e-3 * o).collect();
    let rows: Vec<Row> = hours
        .iter()
        .enumerate()
        .map(|(j, &h)| Row {
            fill: j / 3,
            candidate: j,
            start_h: 0.0,
            live_h: h,
            bright_h: h,
            settle_h: 0.0,
        })
        .collect();
    // (point error, fill error, keV of M, keV of Gamma), the spread known to 3 %.
    let cases = [
        (0.0, 0.0, 44.4575, 111.2036),
        (20e-6, 0.0, 45.9075, 112.7082),
        (20e-6, 60e-6, 63.0133, 123.9702),
    ];
    for (point, fill, mass_kev, width_kev) in cases {
        let mut s = settings(w_gev.clone());
        s.fit.free = [
            "r1.mass",
            "r1.width",
            "r1.strength",
            "coherent.phase",
            "background.rate",
        ]
        .map(String::from)
        .to_vec();
        s.goals.clear();
        s.visit_errors.energy_gev = point;
        s.fill_energy_gev = fill;
        let planner = ScanPlanner::new(&saltmere(), &s, &mut |_, _| {}).unwrap();
        let variances = planner.planner.variances(&rows, 0);
        let mass = 1e6 * variances[0].unwrap().sqrt();
        let width = 1e6 * variances[1].unwrap().sqrt();
        assert!((mass / mass_kev - 1.0).abs() < 5e-3, "{mass} {mass_kev}");
        assert!(
            (width / width_kev - 1.0).abs() < 5e-3,
            "{width} {width_kev}"
        );
    }
}

/// A whole report: robust over a 0.5 MeV hint, fills, demands; nothing missing, nothing impossible.
#[test]
fn report_is_complete() {
    let w_gev: Vec<f64> = (0..9).map(|i| M + 1.25e-3 * (f64::from(i) - 4.0)).collect();
    let mut s = settings(w_gev);
    s.goals[0].wanted_error = Some(40e-6);
    s.fit.constraints.push(Constraint {
        parameter: "r1.mass".into(),
        value: M,
        error: 0.5e-3,
    });
    s.machine.hours = 60.0;
    s.machine.fills = Some(Fills {
        length_h: 10.0,
        refill_h: 2.0,
        lifetime_h: Some(20.0),
    });
    s.machine.settle = Settle {
        fixed_h: 0.25,
        up_h_per_gev: 0.0,
        down_h_per_gev: 0.0,
    };
    s.demands.both_flanks_of_gev = Some(M);
    s.visit_errors.energy_gev = 20e-6;
    s.fill_energy_gev = 60e-6;
    s.truths = 2;
    s.effort = 200;
    let planner = ScanPlanner::new(&saltmere(), &s, &mut |_, _| {}).unwrap();
    let report = planner.report(true, &mut |_, _| {}).unwrap().0;
    assert!(report.certificate >= 0.999);
    assert!(report.efficiency > 0.5 && report.efficiency <= 1.0);
    let goal = &report.goals[0];
    let (relaxed, planned) = (goal.relaxed.unwrap(), goal.planned.unwrap());
    assert!(planned > 0.9 * relaxed && planned < goal.now.unwrap());
    // Five fills of 60 keV each leave 60/sqrt(5) keV whatever is done.
    assert!(goal.floor.unwrap() > 26e-6 && goal.floor.unwrap() < planned);
    assert!(report.costs.len() >= 5 && report.costs.iter().all(|c| (0.0..1.0).contains(&c.1)));
    let (deviation, loss) = report.loss_if_mass_off.unwrap();
    assert!((deviation - 0.5e-3).abs() < 1e-9 && loss < 1.0);
    assert!(
        report
            .warnings
            .iter()
            .any(|w| w.message.contains("operators"))
    );
    assert_eq!(report.gain_per_h.len(), 9);
}

/// Errors of fitted mass and width in pseudo-experiments of the planned timetable, within 5 %
/// of the forecast (2000 trials: 1.6 % by themselves).
#[test]
fn fitted_errors_equal_the_forecast() {
    let w_gev: Vec<f64> = (0..31).map(|i| M + 3e-4 * (f64::from(i) - 15.0)).collect();
    let mut s = settings(w_gev);
    s.goals = Vec::new();
    s.machine.hours = 160.0;
    let scan = saltmere();
    let planner = ScanPlanner::new(&scan, &s, &mut |_, _| {}).unwrap();
    let plan = planner.planner.plan().unwrap();
    let forecast = planner.planner.variances(&plan.rows, 0);
    let mut planned = scan;
    planned.points = planner.points(&plan.rows);
    let mut ensemble = Ensemble::new(
        &planned,
        &s.fit,
        TrialSettings {
            seed: 5,
            profiles: false,
        },
    )
    .unwrap();
    let rows: Vec<_> = (0..2000).map(|k| ensemble.trial(k)).collect();
    let summary = summarise(&rows, &ensemble.ids(), ensemble.truth());
    assert!(summary.converged > 1930, "{}", summary.converged);
    for (i, id) in [(0, "r1.mass"), (1, "r1.width")] {
        let found = summary
            .parameters
            .iter()
            .find(|p| p.id == id)
            .unwrap()
            .spread;
        let expected = forecast[i].unwrap().sqrt();
        assert!(
            (found / expected - 1.0).abs() < 0.05,
            "{id}: {found} {expected}"
        );
    }
}
