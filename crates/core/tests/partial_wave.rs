//! Partial-wave resonances against values from outside.
#![allow(clippy::unwrap_used)] // a test may

use widthwise_core::amplitude::born::{Born, Energy, Feature};
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::units::{HBARC2_GEV2_NB, M_ELECTRON_GEV, M_MUON_GEV, M_PROTON_GEV};

fn pair(name: &str, mass_gev: f64) -> Beams {
    let particle = BeamParticle {
        name: name.into(),
        mass_gev,
        spin_states: 2,
    };
    Beams {
        first: particle.clone(),
        second: particle,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::TotalEnergy,
    }
}

fn resonance(mass_gev: f64, width_gev: f64, strength: Strength, form: Form) -> Resonance {
    let vertex = match form {
        Form::MasslessChannels => Vertex::Massless,
        _ => Vertex::Constant,
    };
    Resonance {
        name: "R".into(),
        mass_gev,
        width_gev,
        strength,
        phase_rad: 0.0,
        form,
        entrance: vertex.clone(),
        exit: vertex,
    }
}

fn wave(twice_j: u8, resonances: Vec<Resonance>) -> PartialWave {
    PartialWave {
        twice_j,
        resonances,
        coherent: None,
        incoherent: None,
        final_threshold_gev: 0.0,
        continuum_factor: 1.0,
    }
}

fn prepare(wave: PartialWave, beams: &Beams) -> Box<dyn Born + Send + Sync> {
    Hypothesis::PartialWave(wave).prepare(beams).unwrap()
}

#[test]
fn peak_of_z_to_hadrons() {
    // PDG: M = 91.1876 GeV, Gamma = 2.4952, B_ee = 3.3632 %, B_had = 69.911 %;
    // sigma = 12 pi/M^2 B_ee B_had = 41.51 nb (listed 41.480(33)).
    for form in [Form::ConstantWidth, Form::MasslessChannels] {
        let strength = Strength::Branchings {
            b_in: 0.033632,
            b_f: 0.69911,
        };
        let z = wave(2, vec![resonance(91.1876, 2.4952, strength, form)]);
        let model = prepare(z, &pair("e", M_ELECTRON_GEV));
        assert!((model.sigma_nb(Energy::at(91.1876)) - 41.51).abs() < 0.005);
    }
}

#[test]
fn massless_channels_are_the_running_width_of_light_pairs() {
    // l = 0 pairs of vanishing mass run as q/q0 M/W = 1; one factor (W/M)^2 more is the
    // massless form, so at the Z the running form with `massless` channels is the same curve.
    let strength = Strength::BinBf { product: 0.0235 };
    let running = Form::RunningWidth {
        channels: vec![
            WidthChannel {
                name: "quarks".into(),
                fraction: 0.7,
                shape: ChannelShape::Massless,
            },
            WidthChannel {
                name: "leptons".into(),
                fraction: 0.3,
                shape: ChannelShape::Massless,
            },
        ],
    };
    let mut other = resonance(91.1876, 2.4952, strength, running);
    other.entrance = Vertex::Massless;
    other.exit = Vertex::Massless;
    let beams = pair("e", M_ELECTRON_GEV);
    let a = prepare(wave(2, vec![other]), &beams);
    let b = prepare(
        wave(
            2,
            vec![resonance(91.1876, 2.4952, strength, Form::MasslessChannels)],
        ),
        &beams,
    );
    // LEP form by hand: sigma0 s Gamma^2/((s-M^2)^2 + s^2 Gamma^2/M^2), exact for m = 0.
    let (m, g) = (91.1876_f64, 2.4952_f64);
    let sigma0 = 12.0 * std::f64::consts::PI / (m * m) * 0.0235 * HBARC2_GEV2_NB;
    for i in 0..50 {
        let w = 80.0 + 0.5 * f64::from(i);
        let s = w * w;
        let by_hand = sigma0 * s * g * g / ((s - m * m) * (s - m * m) + s * s * g * g / (m * m));
        let at = Energy::at(w);
        assert!((a.sigma_nb(at) / b.sigma_nb(at) - 1.0).abs() < 1e-14);
        assert!((b.sigma_nb(at) / by_hand - 1.0).abs() < 1e-8);
    }
}

#[test]
fn born_peaks_of_three_invented_scenarios() {
    // A: 55.7 nb; dip below the peak. B: signal column (spread only). C: 169.9 pb.
    let mut a = wave(
        2,
        vec![resonance(
            2.8742,
            0.62e-3,
            Strength::GammaInBf { gev: 24.6e-9 },
            Form::ConstantWidth,
        )],
    );
    a.coherent = Some(CoherentBackground::OnePhoton {
        c_nb: 1.90,
        w0_gev: 2.8742,
        phase_rad: (-130.0_f64).to_radians(),
    });
    let a = prepare(a, &pair("e", M_ELECTRON_GEV));
    // The continuum moves the maximum off M.
    let peak = (-1000..1000)
        .map(|i| {
            a.sigma_nb(Energy {
                reference_gev: 2.8742,
                offset_gev: f64::from(i) * 1e-6,
            })
        })
        .fold(0.0, f64::max);
    assert!((peak - 55.7).abs() < 0.06, "{peak}");

    let strength = Strength::Branchings {
        b_in: 9.7e-5,
        b_f: 0.80,
    };
    let c = wave(
        0,
        vec![resonance(47.3042, 3.1e-3, strength, Form::ConstantWidth)],
    );
    let c = prepare(c, &pair("mu", M_MUON_GEV));
    let peak = c.sigma_nb(Energy::at(47.3042)) * 1e3;
    assert!((peak - 169.9).abs() < 0.6, "{peak}");
}

#[test]
fn two_hills_with_spread_give_the_signal_column() {
    let mut second = resonance(
        3.2202,
        1.5e-3,
        Strength::BinBf { product: 1.6e-6 },
        Form::ConstantWidth,
    );
    second.phase_rad = 115_f64.to_radians();
    let hills = wave(
        4,
        vec![
            resonance(
                3.2180,
                0.9e-3,
                Strength::BinBf { product: 3.0e-6 },
                Form::ConstantWidth,
            ),
            second,
        ],
    );
    let mut beams = pair("p", M_PROTON_GEV);
    beams.arrangement = Arrangement::FixedTarget;
    let model = prepare(hills, &beams);
    for (w, signal) in [
        (3.2100, 0.04),
        (3.2150, 0.22),
        (3.2166, 0.98),
        (3.2174, 4.66),
        (3.2180, 13.30),
        (3.2186, 9.30),
        (3.2192, 6.85),
        (3.2198, 8.25),
        (3.2204, 7.27),
        (3.2212, 2.47),
        (3.2225, 0.56),
        (3.2260, 0.09),
    ] {
        // Trapezium in units of sigma_W = 192 keV; exponentially accurate for a Gaussian.
        let (mut sum, mut norm) = (0.0, 0.0);
        for i in -1600..=1600 {
            let x = f64::from(i) / 200.0;
            let weight = widthwise_core::math::exp(-0.5 * x * x);
            norm += weight;
            sum += weight
                * model.sigma_nb(Energy {
                    reference_gev: w,
                    offset_gev: x * 192e-6,
                });
        }
        let seen = sum / norm;
        assert!(
            (seen - signal).abs() < 0.006 + 0.005 * signal,
            "{w}: {seen} {signal}"
        );
    }
}

#[test]
fn contributions_add_up() {
    let mut both = wave(
        2,
        vec![
            resonance(
                3.0,
                0.01,
                Strength::BinBf { product: 1e-3 },
                Form::ConstantWidth,
            ),
            Resonance {
                phase_rad: 1.0,
                ..resonance(
                    3.1,
                    0.02,
                    Strength::BinBf { product: 1e-4 },
                    Form::MasslessChannels,
                )
            },
        ],
    );
    both.coherent = Some(CoherentBackground::Polynomial {
        w0_gev: 3.0,
        coefficients: vec![0.01, 0.02],
        phase_rad: 0.4,
    });
    both.incoherent = Some(IncoherentBackground::Power {
        c0_nb: 2.0,
        w0_gev: 3.0,
        n: 1.5,
    });
    both.final_threshold_gev = 2.5;
    let model = prepare(both, &pair("e", M_ELECTRON_GEV));
    let names = model.contribution_names();
    assert_eq!(names.len(), 7);
    let mut parts = vec![0.0; names.len()];
    for w in [2.6, 2.99, 3.0, 3.05, 3.1, 3.3] {
        model.contributions_nb(Energy::at(w), &mut parts);
        let total: f64 = parts.iter().sum();
        assert!((total / model.sigma_nb(Energy::at(w)) - 1.0).abs() < 1e-13);
    }
    assert_eq!(model.sigma_nb(Energy::at(2.5)), 0.0);
    model.contributions_nb(Energy::at(2.4), &mut parts);
    assert!(parts.iter().all(|part| *part == 0.0));
    assert!(model.features().contains(&Feature::Peak {
        w_gev: 3.0,
        width_gev: 0.01
    }));
}

#[test]
fn keeps_its_digits_next_to_a_narrow_pole() {
    // Gamma = 1 eV at 10 GeV: half the height at W - M = Gamma/2, which one number cannot hold.
    let strength = Strength::BinBf { product: 1e-6 };
    let narrow = wave(
        2,
        vec![resonance(10.0, 1e-9, strength, Form::ConstantWidth)],
    );
    let model = prepare(narrow, &pair("e", M_ELECTRON_GEV));
    let at = |offset_gev| {
        model.sigma_nb(Energy {
            reference_gev: 10.0,
            offset_gev,
        })
    };
    assert!((at(0.5e-9) / at(0.0) - 0.5).abs() < 1e-9);
}

fn phi_model() -> PartialWave {
    let (k0, kc, rho, pi0) = (0.497611, 0.493677, 0.7753, 0.138);
    let two = |m1_gev, m2_gev| TwoBody {
        m1_gev,
        m2_gev,
        l: 1,
        radius_per_gev: 0.0,
    };
    let channel = |name: &str, fraction, pair| WidthChannel {
        name: name.into(),
        fraction,
        shape: ChannelShape::TwoBody(pair),
    };
    let channels = vec![
        channel("K+K-", 0.501, two(kc, kc)),
        channel("KSKL", 0.336, two(k0, k0)),
        channel("rho pi", 0.150, two(rho, pi0)),
        channel("eta gamma", 0.013, two(0.54786, 0.0)),
    ];
    let mut phi = resonance(
        1.0194556,
        4.2432e-3,
        Strength::GammaInBf { gev: 4.2863e-7 },
        Form::RunningWidth { channels },
    );
    phi.entrance = Vertex::OnePhoton;
    phi.exit = Vertex::Running(two(k0, k0));
    let mut model = wave(2, vec![phi]);
    model.coherent = Some(CoherentBackground::SharedVertices { c: 0.941 });
    model.final_threshold_gev = 2.0 * k0;
    model
}

#[test]
fn phi_to_neutral_kaons_describes_the_published_scan() {
    // CMD-3, PLB 760 (2016) 314, Born cross sections (table in tests/reference). An independent
    // refit gives chi2 = 12.42 at these parameters and 66.0 without the background (M = 1019.427).
    let text = include_str!("../../../tests/reference/data/cmd3_2016_kskl_phi_scan.csv");
    let chi2 = |model: &dyn Born| -> f64 {
        text.lines()
            .filter(|line| line.starts_with("10"))
            .map(|line| {
                let cells: Vec<f64> = line
                    .split(',')
                    .map(|cell| cell.trim().parse().unwrap())
                    .collect();
                let (w, dw) = (cells[0] * 1e-3, cells[1] * 1e-3);
                let sigma = |w| model.sigma_nb(Energy::at(w));
                let slope = (sigma(w + 1e-6) - sigma(w - 1e-6)) / 2e-6;
                let miss = cells[9] - sigma(w);
                miss * miss / (cells[10] * cells[10] + slope * slope * dw * dw)
            })
            .sum()
    };
    let mut beams = pair("e", M_ELECTRON_GEV);
    let found = chi2(prepare(phi_model(), &beams).as_ref());
    assert!((found - 12.42).abs() < 0.02, "{found}");
    // k = W/2 in that refit; the electron's mass changes nothing visible.
    beams.first.mass_gev = 0.0;
    beams.second.mass_gev = 0.0;
    let massless = chi2(prepare(phi_model(), &beams).as_ref());
    assert!((massless - found).abs() < 1e-3);
}

#[test]
fn what_is_wrong_is_named() {
    let beams = pair("e", M_ELECTRON_GEV);
    let refusal = |change: &dyn Fn(&mut PartialWave)| {
        let mut model = phi_model();
        model.resonances.push(Resonance {
            phase_rad: 0.3,
            ..model.resonances[0].clone()
        });
        change(&mut model);
        Hypothesis::PartialWave(model)
            .prepare(&beams)
            .err()
            .map(|refusal| refusal.field)
            .unwrap_or_default()
    };
    assert_eq!(refusal(&|_| {}), "");
    assert_eq!(
        refusal(&|m| m.resonances[1].width_gev = -1.0),
        "model.resonances[1].width"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].width_gev = f64::NAN),
        "model.resonances[0].width"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].mass_gev = 0.0),
        "model.resonances[0].mass"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].mass_gev = 0.99),
        "model.resonances[0].channels[1].shape"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].phase_rad = 0.1),
        "model.resonances[0].phase"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].strength = Strength::BinBf { product: 1.5 }),
        "model.resonances[0].strength.value"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].exit = Vertex::Running(TwoBody {
            m1_gev: 1.0,
            m2_gev: 1.0,
            l: 0,
            radius_per_gev: 0.0
        })),
        "model.resonances[0].exit"
    );
    assert_eq!(
        refusal(&|m| m.resonances[0].entrance = Vertex::Running(TwoBody {
            m1_gev: 0.1,
            m2_gev: 0.1,
            l: 5,
            radius_per_gev: 0.0
        })),
        "model.resonances[0].entrance.l"
    );
    assert_eq!(refusal(&|m| m.twice_j = 1), "model.j");
    assert_eq!(
        refusal(&|m| m.final_threshold_gev = -1.0),
        "model.final_threshold"
    );
    assert_eq!(
        refusal(&|m| m.coherent = Some(CoherentBackground::OnePhoton {
            c_nb: -1.0,
            w0_gev: 1.0,
            phase_rad: 0.0
        })),
        "model.coherent.c"
    );
    assert_eq!(
        refusal(&|m| m.incoherent = Some(IncoherentBackground::Power {
            c0_nb: 1.0,
            w0_gev: 0.0,
            n: 2.0
        })),
        "model.incoherent.w0"
    );
    assert_eq!(
        refusal(&|m| {
            m.resonances.clear();
            m.coherent = Some(CoherentBackground::SharedVertices { c: 1.0 });
        }),
        "model.coherent"
    );
}

#[test]
fn parameters_can_be_listed_read_and_set() {
    let mut model = phi_model();
    model.resonances.push(Resonance {
        phase_rad: 0.3,
        strength: Strength::Branchings {
            b_in: 0.1,
            b_f: 0.2,
        },
        ..model.resonances[0].clone()
    });
    model.incoherent = Some(IncoherentBackground::Polynomial {
        w0_gev: 1.0,
        coefficients_nb: vec![0.1, 0.0],
    });
    let mut hypothesis = Hypothesis::PartialWave(model);
    let ids: Vec<String> = hypothesis
        .parameters()
        .iter()
        .map(|spec| spec.id.to_string())
        .collect();
    assert_eq!(
        ids,
        [
            "r1.mass",
            "r1.width",
            "r1.strength",
            "r2.mass",
            "r2.width",
            "r2.b_in",
            "r2.b_f",
            "r2.phase",
            "coherent.0",
            "incoherent.0",
            "incoherent.1"
        ]
    );
    for spec in hypothesis.parameters() {
        let id = spec.id.to_string();
        assert_eq!(hypothesis.get(&id), Ok(spec.value));
        assert!(spec.scale > 0.0);
        hypothesis.set(&id, 0.123).unwrap();
        assert_eq!(hypothesis.get(&id), Ok(0.123));
    }
    for wrong in [
        "r1.phase",
        "r3.mass",
        "r0.mass",
        "r1.b_in",
        "coherent.phase",
        "coherent.1",
        "nonsense",
        "incoherent.2",
    ] {
        assert!(hypothesis.set(wrong, 0.1).is_err(), "{wrong}");
    }
    assert!(hypothesis.set("r1.mass", f64::NAN).is_err());
}
