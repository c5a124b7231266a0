//! Several exit channels, angular bins, a thermometer and runs with the beams apart in one fit.

use super::*;
use widthwise_core::fit::compare::compare;
use widthwise_core::fit::{Constraint, fit};

fn two_channels() -> Scan {
    let mut all = scan(Hypothesis::PartialWave(wave(2.9, 1.2e-3, 30e-9, 2)), 2.9);
    all.exits.push(Exit {
        name: "mumu".into(),
        hypothesis: Hypothesis::PartialWave(PartialWave {
            coherent: Some(CoherentBackground::OnePhoton {
                c_nb: 3.0,
                w0_gev: 2.9,
                phase_rad: core::f64::consts::PI,
            }),
            ..wave(2.9, 1.2e-3, 12e-9, 2)
        }),
        same_resonances: true,
        detection: Detection {
            efficiency: 0.7,
            rate_bg_per_h: 0.5,
            ..all.detection.clone()
        },
        w_min_gev: None,
    });
    let others: Vec<Point> = all
        .points
        .iter()
        .map(|p| Point {
            channel: Some("mumu".into()),
            id: format!("{} mumu", p.id),
            ..p.clone()
        })
        .collect();
    all.points.extend(others);
    as_expected(&mut all);
    all
}

/// Two channels fitted together know the mass as well as the weighted mean of the two fits apart
/// would (their strengths are their own), because nothing but mass and width is shared; and the
/// shared width makes both strengths better than apart.
#[test]
fn channels_share_mass_and_width() {
    let all = two_channels();
    let both = fit(
        &all,
        &settings(&["r1.mass", "r1.width", "r1.strength", "c1.r1.strength"]),
    )
    .unwrap();
    assert!(both.statistic < 1e-9);
    assert_eq!(both.points.len(), 14);
    let alone = |exit: usize| {
        let free = ["r1.mass", "r1.width", "r1.strength"];
        fit(&all.of_exit(exit), &settings(&free)).unwrap()
    };
    let (first, second) = (alone(0), alone(1));
    // Information adds: with the strengths profiled, on (mass, width).
    let information = |r: &FitResult| {
        let c = &r.covariance;
        let det = c[0][0] * c[1][1] - c[0][1] * c[0][1];
        [c[1][1] / det, -c[0][1] / det, c[0][0] / det]
    };
    let (a, b) = (information(&first), information(&second));
    let sum = [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
    let det = sum[0] * sum[2] - sum[1] * sum[1];
    let wanted = [(sum[2] / det).sqrt(), (sum[0] / det).sqrt()];
    for (id, wanted) in ["r1.mass", "r1.width"].into_iter().zip(wanted) {
        assert!((error(&both, id) / wanted - 1.0).abs() < 2e-3, "{id}");
    }
    assert!(error(&both, "c1.r1.strength") < error(&second, "r1.strength"));
    assert!((both.parameter("c1.r1.strength").unwrap().value - 12e-9).abs() < 1e-13);
}

/// Rows of two channels at one setting are one visit: its energy error is one nuisance for both.
#[test]
fn channels_of_a_visit_share_its_energy_error() {
    let mut all = two_channels();
    for p in &mut all.points {
        p.w_error_gev = 50e-6;
        p.luminosity_error_nbinv = 2.0;
    }
    let result = fit(&all, &settings(&["r1.mass", "r1.width", "r1.strength"])).unwrap();
    let names: Vec<&str> = result.nuisances.iter().map(|n| n.name.as_str()).collect();
    assert_eq!(names.len(), 14, "{names:?}");
    assert!(names.contains(&"energy of point 1") && !names.contains(&"energy of point 1 mumu"));
    // Apart they would average out better than one common shift does.
    let mut apart = all.clone();
    for (i, p) in apart.points.iter_mut().enumerate() {
        p.start_h = Some(i as f64);
    }
    let wrong = fit(&apart, &settings(&["r1.mass", "r1.width", "r1.strength"])).unwrap();
    assert_eq!(wrong.nuisances.len(), 28);
    assert!(error(&result, "r1.mass") > 1.02 * error(&wrong, "r1.mass"));
}

/// A known narrow peak at another energy gives offset and spread, which grow as W^2 here: with it the
/// mass of the wanted state is known to the thermometer's statistics instead of the offset's prior.
#[test]
fn a_thermometer_measures_offset_and_spread() {
    let mut all = scan(
        Hypothesis::PartialWave(wave(3.686, 0.3e-3, 0.1e-6, 2)),
        3.686,
    );
    all.common.energy_gev = 0.4e-3;
    let without = {
        let mut s = all.clone();
        as_expected(&mut s);
        fit(
            &s,
            &settings(&["r1.mass", "r1.width", "r1.strength", "spread"]),
        )
        .unwrap()
    };
    all.exits.push(Exit {
        name: "thermometer".into(),
        hypothesis: Hypothesis::PartialWave(wave(3.0969, 0.093e-3, 1e-6, 2)),
        same_resonances: false,
        detection: all.detection.clone(),
        w_min_gev: None,
    });
    for (i, o) in OFFSETS_MEV.iter().enumerate() {
        let mut p = point(&format!("t{i}"), 3.0969 + 0.5e-3 * o, Some("thermometer"));
        p.luminosity_nbinv = 3000.0;
        all.points.push(p);
    }
    as_expected(&mut all);
    let free = [
        "r1.mass",
        "r1.width",
        "r1.strength",
        "spread",
        "c1.r1.strength",
    ];
    let with = fit(&all, &settings(&free)).unwrap();
    assert!(with.statistic < 1e-9);
    assert!(error(&without, "r1.mass") > 0.39e-3);
    assert!(
        error(&with, "r1.mass") < 0.05e-3,
        "{}",
        error(&with, "r1.mass")
    );
    assert!(
        error(&with, "r1.width") < 0.7 * error(&without, "r1.width"),
        "{} {}",
        error(&with, "r1.width"),
        error(&without, "r1.width")
    );
    // The offset that the thermometer has seen is found: points of both moved by 0.4 MeV.
    for p in &mut all.points {
        p.w_gev -= 0.4e-3;
    }
    let moved = fit(&all, &settings(&free)).unwrap();
    let m = moved.parameter("r1.mass").unwrap();
    assert!((m.value - 3.686).abs() < 8e-6, "{}", m.value);
    assert!((moved.nuisances[0].pull - 1.0).abs() < 0.02);
}

/// Runs with the beams apart see the background rate alone: with the same live time as the scan they
/// determine it by themselves, with error sqrt(n)/t.
#[test]
fn separated_beams_measure_the_background_rate() {
    let mut all = scan(Hypothesis::PartialWave(wave(2.9, 1.2e-3, 30e-9, 2)), 2.9);
    let mut apart = point("apart", 2.9, None);
    apart.measured = Measured::BeamsApart { n: 0.0 };
    apart.luminosity_nbinv = 0.0;
    apart.live_time_h = 5000.0;
    all.points.push(apart);
    as_expected(&mut all);
    let free = ["r1.mass", "r1.width", "r1.strength", "background.rate"];
    let result = fit(&all, &settings(&free)).unwrap();
    let wanted = (2.0_f64 * 5000.0).sqrt() / 5000.0;
    assert!((error(&result, "background.rate") / wanted - 1.0).abs() < 0.01);
    all.points.last_mut().unwrap().live_time_h = 0.0;
    let refused = fit(&all, &settings(&free)).unwrap_err();
    assert!(refused.message.contains("live time"), "{}", refused.message);
}

fn helicity(states: &[(i8, i8)]) -> Couplings {
    Couplings::Helicity {
        amplitudes: states
            .iter()
            .map(|&(twice_l1, twice_l2)| HelicityCoupling {
                twice_l1,
                twice_l2,
                magnitude: 1.0,
                phase_rad: 0.0,
            })
            .collect(),
    }
}

fn bins(edges: &[f64], absolute: bool) -> Measured {
    Measured::Bins {
        bins: edges
            .windows(2)
            .map(|e| CountedBin {
                from: e[0],
                to: e[1],
                absolute,
                n: 0.0,
                efficiency: None,
            })
            .collect(),
    }
}

/// Two waves of opposite parity overlap: the total does not know their phase, forward against backward
/// does (J = 0 and 1 with common helicities).
#[test]
fn angular_bins_measure_the_phase_between_waves() {
    let angular = |w: PartialWave, phase_rad| AngularWave {
        wave: w,
        phase_rad,
        entrance: helicity(&[(1, 1)]),
        exit: helicity(&[(0, 0)]),
    };
    let model = Waves {
        waves: vec![
            angular(wave(2.9, 3e-3, 40e-9, 0), 0.0),
            angular(wave(2.901, 4e-3, 20e-9, 2), 0.8),
        ],
        cos_cut: None,
        incoherent: None,
    };
    let mut all = scan(Hypothesis::Waves(model), 2.9);
    as_expected(&mut all);
    let free = ["r1.strength", "r2.strength", "w2.phase"];
    let total = fit(&all, &settings(&free)).unwrap();
    assert!(
        total
            .parameter("w2.phase")
            .unwrap()
            .error
            .is_none_or(|e| e > 10.0)
    );
    for p in &mut all.points {
        p.measured = bins(&[-1.0, 0.0, 1.0], false);
    }
    as_expected(&mut all);
    let result = fit(&all, &settings(&free)).unwrap();
    assert_eq!(result.points.len(), 14);
    assert!(
        error(&result, "w2.phase") < 0.2,
        "{}",
        error(&result, "w2.phase")
    );
    // The sign of the phase is not free: starting elsewhere ends at the same place.
    let mut elsewhere = all.clone();
    elsewhere.hypothesis.set("w2.phase", 0.3).unwrap();
    let again = fit(&elsewhere, &settings(&free)).unwrap();
    assert!((again.parameter("w2.phase").unwrap().value - 0.8).abs() < 1e-3);
}

/// J is told by angular bins and refused without them, with the reason.
#[test]
fn spin_needs_angular_bins() {
    let with_j = |twice_j: u8, gamma: f64| {
        Hypothesis::Waves(Waves {
            waves: vec![AngularWave {
                wave: wave(2.9, 3e-3, gamma, twice_j),
                phase_rad: 0.0,
                entrance: helicity(&[(1, -1), (-1, 1)]),
                exit: helicity(&[(0, 0)]),
            }],
            cos_cut: None,
            incoherent: None,
        })
    };
    let mut vector = scan(with_j(2, 40e-9), 2.9);
    as_expected(&mut vector);
    let tensor = Scan {
        hypothesis: with_j(4, 24e-9),
        ..vector.clone()
    };
    let free = settings(&["r1.strength"]);
    let refused = compare((&vector, &free), (&tensor, &free), (0, 1), &mut |_| ()).unwrap_err();
    assert!(refused.message.contains("(2J+1)"), "{}", refused.message);
    for p in &mut vector.points {
        p.measured = bins(&[0.0, 0.25, 0.5, 0.75, 1.0], true);
    }
    as_expected(&mut vector);
    let tensor = Scan {
        hypothesis: with_j(4, 24e-9),
        ..vector.clone()
    };
    // sin^2 against sin^2 cos^2 in the limit of many counts: the wrong one is far off.
    let found = compare((&tensor, &free), (&vector, &free), (0, 1), &mut |_| ()).unwrap();
    assert!(found.ratio > 25.0, "{}", found.ratio);
    assert!(found.wilks_p.is_none());
}

/// A constraint may tie a channel's own parameter; a channel that is not there is refused by name.
#[test]
fn ids_of_channels() {
    let all = two_channels();
    let mut with = settings(&["r1.mass", "r1.width", "r1.strength", "c1.r1.strength"]);
    with.constraints.push(Constraint {
        parameter: "c1.background.rate".into(),
        value: 0.5,
        error: 0.1,
    });
    let result = fit(&all, &with).unwrap();
    let rate = result.parameter("c1.background.rate").unwrap();
    assert!((rate.value - 0.5).abs() < 1e-6 && rate.label.contains("mumu"));
    for wrong in ["c2.background.rate", "c1.r1.mass", "c3.r1.strength"] {
        let refused = fit(&all, &settings(&[wrong])).unwrap_err();
        assert!(refused.message.contains(wrong), "{}", refused.message);
    }
}
