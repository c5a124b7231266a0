//! Fits of published data through the chain.
#![allow(
    clippy::unwrap_used,
    clippy::panic,
    reason = "test helpers stop where a value is missing"
)]

use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::fit::influence::influences;
use widthwise_core::fit::{End, FitResult, FitSettings, Fitter, fit};
use widthwise_core::scan::*;
use widthwise_core::units::M_ELECTRON_GEV;

fn electrons() -> Beams {
    let particle = |name: &str| BeamParticle {
        name: name.into(),
        mass_gev: M_ELECTRON_GEV,
        spin_states: 2,
    };
    Beams {
        first: particle("e-"),
        second: particle("e+"),
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    }
}

fn point(id: String, w_gev: f64, w_error_gev: f64, sigma_nb: f64, error_nb: f64) -> Point {
    Point {
        id,
        group: None,
        w_gev,
        w_error_gev,
        sigma_w_gev: None,
        luminosity_nbinv: 0.0,
        luminosity_error_nbinv: 0.0,
        live_time_h: 0.0,
        live_fraction: 1.0,
        efficiency: None,
        efficiency_error: 0.0,
        channel: None,
        measured: Measured::CrossSection { sigma_nb, error_nb },
        start_h: None,
    }
}

fn scan(wave: PartialWave, points: Vec<Point>) -> Scan {
    Scan {
        beams: electrons(),
        hypothesis: Hypothesis::PartialWave(wave),
        chain: ChainSettings {
            w_min_gev: None,
            spread: Spread::None,
            accuracy: 1e-6,
        },
        detection: Detection {
            efficiency: 1.0,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 0.0,
            luminosity_nbinv_per_h: 1.0,
        },
        stage: Stage::Born,
        points,
        common: CommonErrors::default(),
        covariance_nb2: None,
        exits: Vec::new(),
    }
}

fn numbers(text: &str) -> Vec<Vec<f64>> {
    text.lines()
        .filter_map(|line| {
            let cells: Result<Vec<f64>, _> = line.split(',').map(str::parse).collect();
            cells.ok()
        })
        .collect()
}

fn check(result: &FitResult, id: &str, scale: f64, value: f64, error: f64, digits: f64) {
    let p = result.parameter(id).unwrap();
    let found = (p.value * scale, p.error.unwrap() * scale);
    assert!(
        (found.0 - value).abs() <= digits && (found.1 - error).abs() <= digits,
        "{id}: {} +- {}, published {value} +- {error}",
        found.0,
        found.1
    );
}

/// Teaching data set of seven LEP energies (tests/reference/data), running-width fit given with
/// it: M = 91.1905(22), Gamma = 2.5000(21) GeV, sigma0 = 41.466(33) nb, chi2 2.515 for 4.
#[test]
fn lep_seven_points() {
    let rows = numbers(include_str!(
        "../../../tests/reference/data/lep_avg_hadron_7points.csv"
    ));
    assert_eq!(rows.len(), 7);
    let points = rows
        .iter()
        .enumerate()
        .map(|(i, r)| point(format!("{}", i + 1), r[0], r[1], r[2], r[3]))
        .collect();
    let wave = PartialWave {
        twice_j: 2,
        resonances: vec![Resonance {
            name: "Z".into(),
            mass_gev: 91.1876,
            width_gev: 2.4952,
            strength: Strength::BinBf { product: 0.0235 },
            phase_rad: 0.0,
            form: Form::MasslessChannels,
            entrance: Vertex::Massless,
            exit: Vertex::Massless,
        }],
        coherent: None,
        incoherent: None,
        final_threshold_gev: 0.0,
        continuum_factor: 1.0,
    };
    let mut scan = scan(wave, points);
    scan.common.energy_gev = 0.0017;
    scan.common.scale = 0.0007;
    let settings = FitSettings {
        free: vec!["r1.mass".into(), "r1.width".into(), "r1.strength".into()],
        ..FitSettings::default()
    };
    let result = fit(&scan, &settings).unwrap();
    check(&result, "r1.mass", 1.0, 91.1905, 0.0022, 0.6e-4);
    check(&result, "r1.width", 1.0, 2.5000, 0.0021, 0.6e-4);
    // sigma0 = 12 pi/M^2 B_in B_f (hbar c)^2.
    let m = result.parameter("r1.mass").unwrap().value;
    let to_nb = 12.0 * std::f64::consts::PI / (m * m) * 389_379.372_171_859_5;
    check(&result, "r1.strength", to_nb, 41.466, 0.033, 0.6e-3);
    assert!(
        (result.statistic - 2.515).abs() < 6e-4,
        "{}",
        result.statistic
    );
    assert_eq!(result.degrees_of_freedom, 4);
    assert!(result.stop.is_minimum());
    for nuisance in &result.nuisances {
        assert!(nuisance.pull.abs() < 0.01 && (nuisance.error - 1.0).abs() < 0.01);
    }
    // The peak as a derived quantity, with its profile: the strength's relative error, nearly symmetric.
    let mut fitter = Fitter::new(&scan, &settings).unwrap();
    let minimum = fitter.minimum().unwrap();
    let covariance = fitter.covariance(&minimum).unwrap();
    let derived = fitter.derived(&minimum, &covariance, true).unwrap();
    let get = |id: &str| derived.iter().find(|d| d.id == id).unwrap();
    let peak = get("r1.peak");
    assert!((peak.value - 41.466).abs() < 6e-4 && (peak.error - 0.033).abs() < 6e-4);
    for (end, sign) in [(peak.low.unwrap(), -1.0), (peak.high.unwrap(), 1.0)] {
        let End::Found { value } = end else {
            panic!("an end: {end:?}")
        };
        assert!(
            ((value - peak.value) / peak.error - sign).abs() < 0.02,
            "{value}"
        );
    }
    // Pole of massless channels (PDG: M and sqrt(s_R) differ by 26 and 1.2 MeV at the Z; hep-ph/0001206).
    let width = result.parameter("r1.width").unwrap().value;
    assert!((1e3 * (m - get("r1.pole_mass").value) - 26.0).abs() < 0.5);
    assert!((1e3 * (width - get("r1.pole_width").value) - 1.2).abs() < 0.1);
    // The profile intervals agree with the curvature errors: nothing here is asymmetric.
    for p in &result.parameters {
        let i = fitter.interval(&p.id, 1.0, &minimum, &covariance).unwrap();
        let error = p.error.unwrap();
        assert!(
            ((i.high.value(1.0) - p.value) / error - 1.0).abs() < 0.02,
            "{i:?}"
        );
        assert!(
            ((p.value - i.low.value(-1.0)) / error - 1.0).abs() < 0.02,
            "{i:?}"
        );
    }
    let degenerate = result
        .warnings
        .iter()
        .filter(|w| w.code == "common-error-degenerate")
        .count();
    assert_eq!(degenerate, 2);
}

/// CMD-3, PLB 760 (2016) 314, Born cross sections of its table 1; own statistical refit by an
/// independent program: M = 1019.4556(84), Gamma = 4.2432(141) MeV, Gamma_ee B = 4.2863(107)e-4 MeV,
/// C = 0.941(130), chi2 12.42/21; without C: M = 1019.427, chi2 66.0/22. (Published, total errors: 1019.457(61), 4.240(17).)
#[test]
fn cmd3_phi_scan() {
    let rows = numbers(include_str!(
        "../../../tests/reference/data/cmd3_2016_kskl_phi_scan.csv"
    ));
    assert_eq!(rows.len(), 25);
    let points = rows
        .iter()
        .enumerate()
        .map(|(i, r)| point(format!("{}", i + 1), 1e-3 * r[0], 1e-3 * r[1], r[9], r[10]))
        .collect();
    let two_body = |m1_gev, m2_gev| TwoBody {
        m1_gev,
        m2_gev,
        l: 1,
        radius_per_gev: 0.0,
    };
    let channel = |name: &str, fraction, m1, m2| WidthChannel {
        name: name.into(),
        fraction,
        shape: ChannelShape::TwoBody(two_body(m1, m2)),
    };
    let wave = PartialWave {
        twice_j: 2,
        resonances: vec![Resonance {
            name: "phi".into(),
            mass_gev: 1.0195,
            width_gev: 4.25e-3,
            strength: Strength::GammaInBf { gev: 4.3e-7 },
            phase_rad: 0.0,
            form: Form::RunningWidth {
                channels: vec![
                    channel("K+ K-", 0.501, 0.493_677, 0.493_677),
                    channel("K_S K_L", 0.336, 0.497_611, 0.497_611),
                    channel("rho pi", 0.150, 0.7753, 0.138),
                    channel("eta gamma", 0.013, 0.547_86, 0.0),
                ],
            },
            entrance: Vertex::OnePhoton,
            exit: Vertex::Running(two_body(0.497_611, 0.497_611)),
        }],
        coherent: Some(CoherentBackground::SharedVertices { c: 0.5 }),
        incoherent: None,
        final_threshold_gev: 2.0 * 0.497_611,
        continuum_factor: 1.0,
    };
    let mut scan = scan(wave, points);
    let mut settings = FitSettings {
        free: ["r1.mass", "r1.width", "r1.strength", "coherent.0"]
            .map(String::from)
            .to_vec(),
        ..FitSettings::default()
    };
    let result = fit(&scan, &settings).unwrap();
    check(&result, "r1.mass", 1e3, 1019.4556, 0.0084, 0.9e-4);
    check(&result, "r1.width", 1e3, 4.2432, 0.0141, 1.5e-4);
    check(&result, "r1.strength", 1e7, 4.2863, 0.0107, 1.1e-4);
    check(&result, "coherent.0", 1.0, 0.941, 0.130, 1.3e-3);
    assert!(
        (result.statistic - 12.42).abs() < 0.006,
        "{}",
        result.statistic
    );
    assert_eq!(result.degrees_of_freedom, 21);
    assert!(result.stop.is_minimum());

    // Leaving out a point is fitting the other 24.
    let all = influences(&scan, &settings, &result).unwrap();
    assert_eq!(all.len(), 25);
    let mut fewer = scan.clone();
    fewer.points.remove(11);
    let again = fit(&fewer, &settings).unwrap();
    let shift = (again.parameters[0].value - result.parameters[0].value)
        / result.parameters[0].error.unwrap();
    assert!((all[11].shifts[0] - shift).abs() < 1e-3, "{shift}");
    assert!((all[11].statistic_drop - (result.statistic - again.statistic)).abs() < 1e-4);

    let Hypothesis::PartialWave(wave) = &mut scan.hypothesis else {
        unreachable!()
    };
    wave.coherent = None;
    settings.free.pop();
    let result = fit(&scan, &settings).unwrap();
    let m = result.parameter("r1.mass").unwrap().value;
    assert!((1e3 * m - 1019.427).abs() < 6e-4, "{m}");
    assert!(
        (result.statistic - 66.0).abs() < 0.06,
        "{}",
        result.statistic
    );
}
