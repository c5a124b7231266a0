//! The invented scenarios: forecasts of the fit against one independent calculation, and their second solutions.
#![allow(
    clippy::unwrap_used,
    clippy::panic,
    reason = "test helpers stop where a value is missing"
)]

use widthwise_core::amplitude::born::Energy;
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::counts::Exposure;
use widthwise_core::fit::compare::separate;
use widthwise_core::fit::equivalent::equivalent_solutions;
use widthwise_core::fit::limits::{WindowSettings, mass_window};
use widthwise_core::fit::{Constraint, FitResult, FitSettings, fit};
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::*;
use widthwise_core::units::{M_ELECTRON_GEV, M_PROTON_GEV};

const DEGREE: f64 = std::f64::consts::PI / 180.0;

fn beams(name: &str, mass_gev: f64) -> Beams {
    let particle = BeamParticle {
        name: name.into(),
        mass_gev,
        spin_states: 2,
    };
    Beams {
        first: particle.clone(),
        second: particle,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    }
}

fn resonance(mass_gev: f64, width_gev: f64, strength: Strength, phase_deg: f64) -> Resonance {
    Resonance {
        name: format!("V({mass_gev})"),
        mass_gev,
        width_gev,
        strength,
        phase_rad: phase_deg * DEGREE,
        form: Form::ConstantWidth,
        entrance: Vertex::Constant,
        exit: Vertex::Constant,
    }
}

/// Scenario A, "Saltmere": e+e-, 2874.20 MeV, 0.62 MeV, Gamma_ee B_f = 24.6 eV, continuum 1.90 nb at -130 degrees.
fn saltmere() -> Scan {
    let wave = PartialWave {
        twice_j: 2,
        resonances: vec![resonance(
            2.8742,
            0.62e-3,
            Strength::GammaInBf { gev: 24.6e-9 },
            0.0,
        )],
        coherent: Some(CoherentBackground::OnePhoton {
            c_nb: 1.90,
            w0_gev: 2.8742,
            phase_rad: -130.0 * DEGREE,
        }),
        incoherent: None,
        final_threshold_gev: 0.5,
        continuum_factor: 1.0,
    };
    let offsets_mev = [
        -30.0, -4.0, -2.2, -1.5, -1.0, -0.6, 0.0, 0.6, 1.0, 1.5, 2.4, 5.0,
    ];
    let hours = [4.0, 3.0, 3.0, 3.0, 4.0, 3.0, 3.0, 3.0, 4.0, 3.0, 3.0, 4.0];
    let points = offsets_mev
        .iter()
        .zip(hours)
        .enumerate()
        .map(|(i, (offset, hours))| Point {
            id: format!("{}", i + 1),
            group: Some(format!("fill {}", i / 3 + 1)),
            w_gev: 2.8742 + 1e-3 * offset,
            w_error_gev: 0.0,
            sigma_w_gev: None,
            luminosity_nbinv: 32.4 * hours,
            luminosity_error_nbinv: 0.0,
            live_time_h: hours,
            live_fraction: 1.0,
            efficiency: None,
            efficiency_error: 0.0,
            channel: None,
            measured: Measured::Nothing,
            start_h: None,
        })
        .collect();
    Scan {
        beams: beams("e-", M_ELECTRON_GEV),
        hypothesis: Hypothesis::PartialWave(wave),
        chain: ChainSettings {
            w_min_gev: Some(2.65),
            spread: Spread::Gaussian {
                sigma_gev: 0.71e-3,
                w0_gev: 2.8742,
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
        points,
        common: CommonErrors::default(),
        covariance_nb2: None,
        exits: Vec::new(),
    }
}

/// Every point counts what it expects: a fit's errors are then the forecast.
fn as_expected(scan: &mut Scan) -> Vec<f64> {
    let born = scan.hypothesis.prepare(&scan.beams).unwrap();
    let chain = Chain::new(&scan.chain, &scan.beams).unwrap();
    let w: Vec<f64> = scan.points.iter().map(|p| p.w_gev).collect();
    let sigma = chain
        .cross_sections(born.as_ref(), &w, None, scan.stage)
        .unwrap();
    let mut out = Vec::new();
    for (p, s) in scan.points.iter_mut().zip(sigma.values_nb) {
        let n = Exposure::of(p, &scan.detection).expected(s, &scan.detection);
        out.push(n);
        p.measured = Measured::Counts { n, off: None };
    }
    out
}

fn error(result: &FitResult, id: &str) -> f64 {
    result.parameter(id).unwrap().error.unwrap()
}

#[test]
fn saltmere_forecast_by_the_fit() {
    let mut scan = saltmere();
    let expected = as_expected(&mut scan);
    let table = [
        96.0, 52.0, 56.0, 112.0, 313.0, 386.0, 582.0, 572.0, 625.0, 334.0, 204.0, 172.0,
    ];
    for (e, t) in expected.iter().zip(table) {
        assert!((e - t).abs() < 0.5 + 0.005 * t, "{e} against {t}");
    }
    // Mass, width, strength, continuum and its phase free. Statistics alone; with 20 keV a point and
    // sigma_W known to 3 %; with 60 keV common to a fill of three points.
    for (e_w, fill, known, mass_kev, width_kev) in [
        (0.0, 0.0, false, 44.0, 95.0),
        (20e-6, 0.0, false, 46.0, 97.0),
        (0.0, 0.0, true, 44.5, 111.0),
        (20e-6, 60e-6, true, 63.0, 124.0),
    ] {
        let settings = FitSettings {
            free: [
                "r1.mass",
                "r1.width",
                "r1.strength",
                "coherent.0",
                "coherent.phase",
            ]
            .map(String::from)
            .to_vec(),
            constraints: if known {
                vec![Constraint {
                    parameter: "spread".into(),
                    value: 0.71e-3,
                    error: 0.03 * 0.71e-3,
                }]
            } else {
                Vec::new()
            },
            ..FitSettings::default()
        };
        scan.common.group_energy_gev = fill;
        for p in &mut scan.points {
            p.w_error_gev = e_w;
        }
        let result = fit(&scan, &settings).unwrap();
        let found = (
            1e6 * error(&result, "r1.mass"),
            1e6 * error(&result, "r1.width"),
        );
        assert!(
            (found.0 - mass_kev).abs() < 0.51 && (found.1 - width_kev).abs() < 0.51,
            "{found:?} keV"
        );
    }
}

/// Second solution of scenario A: Gamma_ee B_f = 14.9 eV, phi_bg = +145.7 degrees.
#[test]
fn saltmere_has_a_second_solution() {
    let scan = saltmere();
    let all = equivalent_solutions(&scan.hypothesis, &scan.beams).unwrap();
    assert_eq!(all.len(), 2);
    let other = &all[1].hypothesis;
    let strength = other.get("r1.strength").unwrap();
    let phase = other.get("coherent.phase").unwrap();
    assert!((1e9 * strength - 14.9).abs() < 0.06, "{strength}");
    assert!((phase / DEGREE - 145.7).abs() < 0.06, "{}", phase / DEGREE);
    let w: Vec<f64> = (0..7).map(|i| 2.871 + 1e-3 * f64::from(i)).collect();
    for place in separate(&scan, &scan.hypothesis, other, &w).unwrap() {
        assert!(place.hours > 1e6, "{place:?}");
    }
    same_curve(&scan, other, &[2.85, 2.8732, 2.8742, 2.8745, 2.88]);
}

/// Scenario B, "Greyfell": two 2++ states in antiproton-proton, 3218.0/0.90 and 3220.2/1.50 MeV,
/// B_in B_f 3.0e-6 and 1.6e-6 at 115 degrees; second solution 6.54e-6 and 3.72e-6 at -139.6 degrees.
#[test]
fn greyfell_has_a_second_solution() {
    let mut scan = saltmere();
    scan.beams = beams("p", M_PROTON_GEV);
    scan.chain.w_min_gev = None;
    scan.hypothesis = Hypothesis::PartialWave(PartialWave {
        twice_j: 4,
        resonances: vec![
            resonance(3.2180, 0.90e-3, Strength::BinBf { product: 3.0e-6 }, 0.0),
            resonance(3.2202, 1.50e-3, Strength::BinBf { product: 1.6e-6 }, 115.0),
        ],
        coherent: None,
        incoherent: None,
        final_threshold_gev: 1.0,
        continuum_factor: 1.0,
    });
    let all = equivalent_solutions(&scan.hypothesis, &scan.beams).unwrap();
    assert_eq!(all.len(), 2);
    let other = &all[1].hypothesis;
    let found = ["r1.strength", "r2.strength", "r2.phase"].map(|id| other.get(id).unwrap());
    assert!((1e6 * found[0] - 6.54).abs() < 0.006, "{found:?}");
    assert!((1e6 * found[1] - 3.72).abs() < 0.006, "{found:?}");
    assert!((found[2] / DEGREE + 139.6).abs() < 0.06, "{found:?}");
    same_curve(&scan, other, &[3.21, 3.2174, 3.218, 3.2192, 3.226]);
}

fn same_curve(scan: &Scan, other: &Hypothesis, w: &[f64]) {
    let a = scan.hypothesis.prepare(&scan.beams).unwrap();
    let b = other.prepare(&scan.beams).unwrap();
    for &w in w {
        let (x, y) = (a.sigma_nb(Energy::at(w)), b.sigma_nb(Energy::at(w)));
        // The continuum's k/W carries (2 m/W)^2/2 = 6e-8 of the electron's mass.
        assert!((x / y - 1.0).abs() < 1e-6, "{x} against {y} at {w}");
    }
}

/// Scenario C, "Ostrel": a scalar of 47.3042 GeV, 3.1 MeV in mu+mu-, B_mumu 9.7e-5, B_bb 0.80, 14 pb of continuum;
/// comb of 9 points 3 MeV apart around 47.300: expected 1.8 ... 9.4 8.8 ... 2.7 in 3 h each; expected local significance
/// 4.9 with 2 h a point, 6.9 with 4 h.
#[test]
fn ostrel_is_searched_for() {
    let mut scan = saltmere();
    scan.beams = beams("mu-", widthwise_core::units::M_MUON_GEV);
    scan.chain.w_min_gev = Some(10.0);
    scan.chain.spread = Spread::Gaussian {
        sigma_gev: 1.34e-3,
        w0_gev: 47.3,
        power: 0.0,
    };
    scan.detection = Detection {
        efficiency: 0.45,
        decay_fraction: 1.0,
        sigma_bg_nb: 0.45 * 14e-3,
        rate_bg_per_h: 0.0,
        luminosity_nbinv_per_h: 90.0,
    };
    scan.hypothesis = Hypothesis::PartialWave(PartialWave {
        twice_j: 0,
        resonances: vec![resonance(
            47.3042,
            3.1e-3,
            Strength::Branchings {
                b_in: 9.7e-5,
                b_f: 0.80,
            },
            0.0,
        )],
        coherent: None,
        incoherent: None,
        final_threshold_gev: 10.0,
        continuum_factor: 1.0,
    });
    let template = scan.points[0].clone();
    let counted = [2.0, 1.0, 1.0, 1.0, 4.0, 6.0, 5.0, 3.0, 3.0];
    let comb = |hours: f64| -> Vec<Point> {
        (0..9)
            .map(|i| Point {
                id: format!("{}", i + 1),
                group: None,
                w_gev: 47.300 + 3e-3 * (f64::from(i) - 4.0),
                luminosity_nbinv: 90.0 * hours,
                live_time_h: hours,
                measured: Measured::Counts {
                    n: counted[i as usize],
                    off: None,
                },
                ..template.clone()
            })
            .collect()
    };
    for (hours, significance) in [(2.0, 4.9), (4.0, 6.9)] {
        scan.points = comb(hours);
        as_expected(&mut scan);
        let settings = WindowSettings {
            masses_gev: vec![47.3042],
            level: 0.95,
            trials: 0,
            seed: 1,
        };
        let (places, _) = mass_window(&scan, &settings).unwrap();
        let found = places[0].local_significance;
        assert!(
            (found - significance).abs() < 0.06,
            "{found} with {hours} h"
        );
        let strength = 9.7e-5 * 0.80;
        assert!((places[0].best / strength - 1.0).abs() < 1e-6);
    }
    scan.points = comb(3.0);
    let expected = as_expected(&mut scan);
    let table = [1.8, 1.9, 2.0, 2.4, 3.7, 9.4, 8.8, 3.9, 2.7];
    for (e, t) in expected.iter().zip(table) {
        assert!((e - t).abs() < 0.06, "{expected:?}");
    }
    scan.points = comb(3.0);
    let settings = WindowSettings {
        masses_gev: (0..31).map(|i| 47.285 + 1e-3 * f64::from(i)).collect(),
        level: 0.95,
        trials: 300,
        seed: 5,
    };
    let (places, global) = mass_window(&scan, &settings).unwrap();
    let global = global.unwrap();
    assert!(global.global_significance < global.local_significance);
    assert!(global.global_p >= global.local_p);
    for place in &places {
        let limit = place.limit.as_ref().unwrap();
        assert!(limit.observed > place.best && limit.expected.windows(2).all(|p| p[0] < p[1]));
    }
}
