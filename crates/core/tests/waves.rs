//! Angles of partial-wave resonances.
#![allow(clippy::unwrap_used)] // a test may

use widthwise_core::amplitude::Region;
use widthwise_core::amplitude::born::{Born, Energy};
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::amplitude::partial_wave::PreparedPartialWave;
use widthwise_core::amplitude::waves::PreparedWaves;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::units::M_ELECTRON_GEV;

fn beams() -> Beams {
    let particle = BeamParticle {
        name: "e".into(),
        mass_gev: M_ELECTRON_GEV,
        spin_states: 2,
    };
    Beams {
        first: particle.clone(),
        second: particle,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::TotalEnergy,
    }
}

fn wave(twice_j: u8, mass_gev: f64, b_in: f64, b_f: f64) -> PartialWave {
    PartialWave {
        twice_j,
        resonances: vec![Resonance {
            name: format!("R{twice_j}"),
            mass_gev,
            width_gev: 0.1,
            strength: Strength::Branchings { b_in, b_f },
            phase_rad: 0.0,
            form: Form::ConstantWidth,
            entrance: Vertex::Constant,
            exit: Vertex::Constant,
        }],
        coherent: None,
        incoherent: None,
        final_threshold_gev: 0.0,
        continuum_factor: 1.0,
    }
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

fn one(wave: PartialWave, entrance: Couplings, exit: Couplings) -> Waves {
    Waves {
        waves: vec![AngularWave {
            wave,
            phase_rad: 0.0,
            entrance,
            exit,
        }],
        cos_cut: None,
        incoherent: None,
    }
}

#[test]
fn textbook_distributions() {
    // e+e- -> vector -> pseudoscalar pair: 3/4 sin^2; -> lepton pair (massless, both helicities):
    // 3/8 (1 + cos^2); acceptance of |cos| < c: (3c - c^3)/2 and (3c + c^3)/4.
    let massless = || helicity(&[(1, -1), (-1, 1)]);
    for (exit, density, acceptance) in [
        (
            helicity(&[(0, 0)]),
            (|x: f64| 0.75 * (1.0 - x * x)) as fn(f64) -> f64,
            (|c: f64| 0.5 * (3.0 * c - c * c * c)) as fn(f64) -> f64,
        ),
        (
            massless(),
            |x| 0.375 * (1.0 + x * x),
            |c| 0.25 * (3.0 * c + c * c * c),
        ),
    ] {
        let model = one(wave(2, 3.0, 0.1, 0.2), massless(), exit);
        let all = PreparedWaves::new(&model, &beams(), &Region::all()).unwrap();
        let at = Energy::at(3.01);
        let total = all.sigma_nb(at);
        let alone = PreparedPartialWave::new(&model.waves[0].wave, &beams()).unwrap();
        assert!((total / alone.sigma_nb(at) - 1.0).abs() < 1e-13);
        for x in [-0.9, 0.0, 0.3, 1.0] {
            assert!((all.dsigma_dcos_nb(at, x) / total - density(x)).abs() < 1e-13);
        }
        for c in [0.3, 0.8] {
            let cut = PreparedWaves::new(&model, &beams(), &Region::cos(-c, c).unwrap()).unwrap();
            assert!((cut.acceptance(0).unwrap() - acceptance(c)).abs() < 1e-13);
            assert!((cut.sigma_nb(at) / total - acceptance(c)).abs() < 1e-13);
        }
    }
}

fn mixture() -> Waves {
    let pair = || helicity(&[(0, 0)]);
    let entrance = |signs: [f64; 2]| Couplings::Helicity {
        amplitudes: [(1, 1), (-1, -1)]
            .into_iter()
            .zip(signs)
            .map(|((twice_l1, twice_l2), sign)| HelicityCoupling {
                twice_l1,
                twice_l2,
                magnitude: 1.0,
                phase_rad: if sign < 0.0 {
                    core::f64::consts::PI
                } else {
                    0.0
                },
            })
            .collect(),
    };
    Waves {
        waves: vec![
            AngularWave {
                wave: wave(0, 3.0, 0.1, 0.2),
                phase_rad: 0.0,
                entrance: entrance([1.0, 1.0]),
                exit: pair(),
            },
            AngularWave {
                wave: wave(2, 3.05, 0.05, 0.2),
                phase_rad: 0.7,
                entrance: entrance([1.0, 1.0]),
                exit: pair(),
            },
            AngularWave {
                wave: wave(4, 2.95, 0.02, 0.2),
                phase_rad: -0.4,
                entrance: entrance([1.0, -1.0]),
                exit: pair(),
            },
        ],
        cos_cut: None,
        incoherent: Some(IncoherentBackground::Power {
            c0_nb: 5.0,
            w0_gev: 3.0,
            n: 2.0,
        }),
    }
}

#[test]
fn waves_add_in_the_total_and_interfere_in_bins() {
    let model = mixture();
    let beams = beams();
    let at = Energy::at(3.02);
    let all = PreparedWaves::new(&model, &beams, &Region::all()).unwrap();
    let mut alone = 5.0 * (3.0 / 3.02) * (3.0 / 3.02);
    for wave in &model.waves {
        alone += PreparedPartialWave::new(&wave.wave, &beams)
            .unwrap()
            .sigma_nb(at);
    }
    assert!((all.sigma_nb(at) / alone - 1.0).abs() < 1e-13);
    // Bins add up to the total; forward and backward differ (J = 0 and 1 interfere).
    let hypothesis = Hypothesis::Waves(model.clone());
    let edges = [-1.0, -0.5, 0.0, 0.2, 1.0];
    let bins: Vec<f64> = edges
        .windows(2)
        .map(|pair| {
            let region = Region::cos(pair[0], pair[1]).unwrap();
            hypothesis.prepare_in(&beams, &region).unwrap().sigma_nb(at)
        })
        .collect();
    assert!((bins.iter().sum::<f64>() / alone - 1.0).abs() < 1e-13);
    let forward = bins[2] + bins[3];
    let backward = bins[0] + bins[1];
    assert!((forward - backward).abs() > 0.01 * alone);
    // |cos| bins are the sum of both sides, and agree with the integrated distribution.
    let outer = hypothesis
        .prepare_in(&beams, &Region::abs_cos(0.5, 1.0).unwrap())
        .unwrap();
    let n = 4000;
    let mut integral = 0.0;
    for i in 0..n {
        let x = 0.5 + 0.5 * (f64::from(i) + 0.5) / f64::from(n);
        integral += (all.dsigma_dcos_nb(at, x) + all.dsigma_dcos_nb(at, -x)) * 0.5 / f64::from(n);
    }
    assert!((outer.sigma_nb(at) / integral - 1.0).abs() < 1e-6);
    // Contributions add up in a bin as well.
    let mut parts = vec![0.0; outer.contribution_names().len()];
    outer.contributions_nb(at, &mut parts);
    assert!((parts.iter().sum::<f64>() / outer.sigma_nb(at) - 1.0).abs() < 1e-13);
}

#[test]
fn parameters_run_through_the_waves() {
    let mut hypothesis = Hypothesis::Waves(mixture());
    let ids: Vec<String> = hypothesis
        .parameters()
        .iter()
        .map(|p| p.id.to_string())
        .collect();
    assert!(
        ids.contains(&"r3.mass".into())
            && ids.contains(&"w2.phase".into())
            && ids.contains(&"w3.phase".into())
    );
    assert!(!ids.contains(&"w1.phase".into()));
    let region = Region::cos(0.0, 1.0).unwrap();
    let sigma = |h: &Hypothesis| {
        h.prepare_in(&beams(), &region)
            .unwrap()
            .sigma_nb(Energy::at(3.03))
    };
    let before = sigma(&hypothesis);
    for id in ids {
        let value = hypothesis.get(&id).unwrap();
        hypothesis.set(&id, 1.01 * value + 1e-3).unwrap();
        let change = (sigma(&hypothesis) / before - 1.0).abs();
        // The third wave has the other parity: its phase is seen at no angle.
        if id == "w3.phase" {
            assert!(change < 1e-13);
        } else {
            assert!(change > 1e-9, "{id}");
        }
        hypothesis.set(&id, value).unwrap();
    }
}

#[test]
fn unitarity_of_a_sum_of_resonances() {
    // Two overlapping elastic resonances of full strength add to more than the bound.
    let mut two = wave(2, 3.0, 1.0, 1.0);
    let mut second = two.resonances[0].clone();
    second.mass_gev = 3.02;
    two.resonances.push(second);
    let two = PreparedPartialWave::new(&two, &beams()).unwrap();
    let (w, ratio) = two.unitarity(2.5, 3.5, 50, true);
    assert!(ratio > 2.0 && (w - 3.01).abs() < 0.05, "{w} {ratio}");
    let single = PreparedPartialWave::new(&wave(2, 3.0, 1.0, 1.0), &beams()).unwrap();
    let (w, ratio) = single.unitarity(2.5, 3.5, 50, true);
    assert!((ratio - 1.0).abs() < 1e-12 && (w - 3.0).abs() < 1e-12);
}

#[test]
fn grid_is_the_pointwise_function() {
    let model = mixture();
    let waves = PreparedWaves::new(&model, &beams(), &Region::all()).unwrap();
    let (w, cos) = ([0.001, 2.9, 3.0, 3.1], [-1.0, -0.4, 0.3, 1.0]);
    let grid = waves.dsigma_dcos_grid_nb(&w, &cos);
    for (i, w) in w.iter().enumerate() {
        for (j, cos) in cos.iter().enumerate() {
            let one = waves.dsigma_dcos_nb(Energy::at(*w), *cos);
            let here = grid[i * 4 + j];
            assert!((here - one).abs() <= 1e-13 * one.abs(), "{here} {one}");
        }
    }
}

#[test]
fn what_cannot_be_is_refused() {
    let field = |model: Waves| {
        Hypothesis::Waves(model)
            .prepare(&beams())
            .err()
            .map(|r| r.field)
            .unwrap_or_default()
    };
    assert_eq!(
        field(one(
            wave(0, 3.0, 0.1, 0.1),
            helicity(&[(1, -1)]),
            helicity(&[(0, 0)])
        )),
        "model.waves[0].entrance"
    );
    let mut cut = mixture();
    cut.cos_cut = Some(0.0);
    assert_eq!(field(cut), "model.cos_cut");
    let mut phase = mixture();
    phase.waves[0].phase_rad = 1.0;
    assert_eq!(field(phase), "model.waves[0].phase");
    let plain = Hypothesis::PartialWave(wave(2, 3.0, 0.1, 0.1));
    assert!(
        plain
            .prepare_in(&beams(), &Region::all())
            .err()
            .unwrap()
            .message
            .contains("angles")
    );
    assert!(Region::cos(0.5, 0.2).is_err() && Region::abs_cos(-0.1, 0.5).is_err());
}
