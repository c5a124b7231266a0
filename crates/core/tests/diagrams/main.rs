//! Tree-level reactions against explicit Dirac spinors and matrices.
//!
//! tests/reference/data/yukawa_points.json: computed independently with explicit spinors in two
//! representations. tests/reference/spinor_points.json: from spinors.py beside it, several
//! mediators at once, by diagram, totals inside a cut. No closed form enters either.
#![allow(clippy::unwrap_used)] // a test may

mod parameters;

use num_complex::Complex64;
use serde_json::Value;
use widthwise_core::amplitude::Region;
use widthwise_core::amplitude::born::{Born, Energy};
use widthwise_core::amplitude::diagrams::PreparedDiagrams;
use widthwise_core::amplitude::diagrams::total::DiagramTotal;
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::{ChainSettings, Spread, Stage};

fn reaction(name: &str) -> Reaction {
    match name {
        "f fbar -> F Fbar" => Reaction::PairToOtherPair,
        "f F -> f F" => Reaction::OtherElastic,
        "f fbar -> f fbar" => Reaction::PairElastic,
        "f f -> f f" => Reaction::SameElastic,
        "f phi -> f phi" => Reaction::Compton,
        "f fbar -> phi phi" => Reaction::PairToScalars,
        _ => unreachable!("unknown reaction {name}"),
    }
}

fn beams(reaction: Reaction, m: f64, other: f64, phi: f64) -> Beams {
    let particle = |mass_gev, spin_states| BeamParticle {
        name: "x".into(),
        mass_gev,
        spin_states,
    };
    let second = match reaction {
        Reaction::OtherElastic => particle(other, 2),
        Reaction::Compton => particle(phi, 1),
        _ => particle(m, 2),
    };
    Beams {
        first: particle(m, 2),
        second,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    }
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or(0.0)
}

fn mediator(kind: &str, mass_gev: f64, width_gev: f64, g: f64, g_other: f64) -> Mediator {
    let form = if width_gev > 0.0 {
        Form::ConstantWidth
    } else {
        Form::Free
    };
    Mediator {
        name: "phi".into(),
        pseudoscalar: kind == "pseudoscalar",
        mass_gev,
        g,
        g_other,
        propagator: MediatorPropagator::Form { form, width_gev },
    }
}

fn model(
    name: &str,
    mediators: Vec<Mediator>,
    m: f64,
    other: f64,
    cos_cut: Option<f64>,
) -> (Diagrams, Beams) {
    let reaction = reaction(name);
    let phi = mediators.first().map_or(0.0, |m| m.mass_gev);
    (
        Diagrams {
            reaction,
            other_mass_gev: other,
            mediators,
            cos_cut,
            incoherent: None,
        },
        beams(reaction, m, other, phi),
    )
}

fn whole(model: &Diagrams, beams: &Beams) -> DiagramTotal {
    let region = model
        .cos_cut
        .map_or(Region::all(), |cut| Region::cos(-cut, cut).unwrap());
    DiagramTotal::new(PreparedDiagrams::new(model, beams).unwrap(), region)
}

fn of_point(point: &Value, cut: Option<f64>) -> (Diagrams, Beams) {
    let mediators = point["mediators"]
        .as_array()
        .unwrap()
        .iter()
        .map(|m| {
            mediator(
                m["kind"].as_str().unwrap(),
                number(&m["mass_gev"]),
                number(&m["width_gev"]),
                number(&m["g_f"]),
                number(&m["g_F"]),
            )
        })
        .collect();
    let name = point["process"].as_str().unwrap();
    model(
        name,
        mediators,
        number(&point["m_f_gev"]),
        number(&point["m_F_gev"]),
        cut,
    )
}

#[test]
fn points_of_the_independent_table() {
    let file: Value = serde_json::from_str(include_str!(
        "../../../../tests/reference/data/yukawa_points.json"
    ))
    .unwrap();
    let points = file["points"].as_array().unwrap();
    assert!(points.len() > 20);
    for point in points {
        let (g, g_other) = (number(&point["g_f"]), number(&point["g_F"]));
        let phi = mediator(
            point["coupling"].as_str().unwrap(),
            number(&point["M_phi"]),
            number(&point["Gamma_phi"]),
            g,
            g_other,
        );
        let name = point["process"].as_str().unwrap();
        let (model, beams) = model(
            name,
            vec![phi],
            number(&point["m_f"]),
            number(&point["m_F"]),
            None,
        );
        let prepared = PreparedDiagrams::new(&model, &beams).unwrap();
        let at = Energy::at(number(&point["sqrt_s"]));
        let cos = number(&point["cos_theta"]);
        let m2 = prepared.m2(at, cos);
        let expected = number(&point["M2_avg"]);
        let sigma = prepared.dsigma_dcos_nb(at, cos) * 1e-6;
        if expected == 0.0 {
            assert!(m2.abs() < 1e-25 && sigma.abs() < 1e-25);
            continue;
        }
        assert!((m2 / expected - 1.0).abs() < 1e-10, "{point} {m2}");
        // mb, made with the shorter constant 0.3893793721 GeV^2 mb.
        let sigma_ratio = sigma / number(&point["dsigma_dcos_mb"]);
        assert!((sigma_ratio - 1.0).abs() < 1e-9, "{point} {sigma}");
    }
}

#[test]
fn random_points_by_diagram() {
    let file: Value = serde_json::from_str(include_str!(
        "../../../../tests/reference/spinor_points.json"
    ))
    .unwrap();
    let points = file["points"].as_array().unwrap();
    assert!(points.len() >= 200);
    for point in points {
        let (model, beams) = of_point(point, None);
        let prepared = PreparedDiagrams::new(&model, &beams).unwrap();
        let at = Energy::at(number(&point["w_gev"]));
        let cos = number(&point["cos_theta"]);
        let mut parts = vec![0.0; prepared.names().len()];
        prepared.m2_parts(at, cos, &mut parts);
        let scale: f64 = parts.iter().map(|part| part.abs()).sum();
        let expected = number(&point["m2_avg"]);
        // Relative to the sum of moduli: diagrams may cancel.
        assert!(
            (prepared.m2(at, cos) - expected).abs() < 1e-10 * scale,
            "{point}"
        );
        assert!(
            (parts.iter().sum::<f64>() - expected).abs() < 1e-10 * scale,
            "{point}"
        );
        // by_diagram is keyed "<channel><mediator>*<channel><mediator>", in any order of the pair.
        let mediators = model.mediators.len();
        let keys: Vec<String> = model
            .reaction
            .channels()
            .iter()
            .flat_map(|channel| {
                (0..mediators).map(move |i| format!("{}{i}", format!("{channel:?}").to_lowercase()))
            })
            .collect();
        let by = point["by_diagram"].as_object().unwrap();
        let mut names = Vec::new();
        for i in 0..keys.len() {
            names.push((i, i));
        }
        for i in 0..keys.len() {
            for j in i + 1..keys.len() {
                names.push((i, j));
            }
        }
        assert_eq!(names.len(), parts.len());
        for ((i, j), part) in names.into_iter().zip(&parts) {
            let expected = by
                .get(&format!("{}*{}", keys[i], keys[j]))
                .or_else(|| by.get(&format!("{}*{}", keys[j], keys[i])))
                .unwrap();
            assert!(
                (part - number(expected)).abs() < 1e-10 * scale,
                "{} {} {part} {expected} {point}",
                keys[i],
                keys[j]
            );
        }
        let sigma = prepared.dsigma_dcos_nb(at, cos);
        assert!(
            (sigma - number(&point["dsigma_dcos_nb"])).abs()
                < 1e-10 * scale * prepared.prefactor_nb(at.w_gev())
        );
    }
}

#[test]
fn totals_inside_a_cut() {
    let file: Value = serde_json::from_str(include_str!(
        "../../../../tests/reference/spinor_points.json"
    ))
    .unwrap();
    let cuts = file["cut_totals"].as_array().unwrap();
    assert!(cuts.len() >= 30);
    for point in cuts {
        let (model, beams) = of_point(point, Some(number(&point["abs_cos_below"])));
        let total = whole(&model, &beams);
        let at = Energy::at(number(&point["w_gev"]));
        let expected = number(&point["sigma_nb"]);
        assert!(
            (total.sigma_nb(at) / expected - 1.0).abs() < 1e-9,
            "{point} {}",
            total.sigma_nb(at)
        );
        let mut parts = vec![0.0; total.contribution_names().len()];
        total.contributions_nb(at, &mut parts);
        let scale: f64 = parts.iter().map(|part| part.abs()).sum();
        assert!((parts.iter().sum::<f64>() - expected).abs() < 1e-9 * scale);
    }
}

#[test]
fn sharp_forward_peaks_are_integrated() {
    // Light mediator at high energy: integral of t^2/(t - M^2)^2 type over all angles, by hand for a
    // pseudoscalar between two massless fermions: |M|^2 = g^4 t^2/(t-M^2)^2, with a = M^2/s:
    // int dcos = 2 [1 - 2 a ln((1+a)/a) + a/(1+a)].
    for mass in [1e-6_f64, 1e-3, 0.1, 10.0] {
        let (model, beams) = model(
            "f F -> f F",
            vec![mediator("pseudoscalar", mass, 0.0, 1.0, 1.0)],
            0.0,
            0.0,
            None,
        );
        let total = whole(&model, &beams);
        let w = 20.0;
        let a = mass * mass / (w * w);
        let by_hand =
            2.0 * (1.0 - 2.0 * a * widthwise_core::math::ln((1.0 + a) / a) + a / (1.0 + a));
        let ours = total.sigma_nb(Energy::at(w)) / total.diagrams().prefactor_nb(w);
        assert!((ours - by_hand).abs() < 1e-11, "{mass}: {ours} {by_hand}");
    }
}

#[test]
fn crossing_turns_pair_into_same() {
    // s <-> u of f fbar -> f fbar is f f -> f f: with free real propagators the polynomials coincide.
    for kind in ["scalar", "pseudoscalar"] {
        let phi = || vec![mediator(kind, 0.3, 0.0, 1.3, 1.0)];
        let (pair, beams) = model("f fbar -> f fbar", phi(), 0.5, 0.5, None);
        let pair = PreparedDiagrams::new(&pair, &beams).unwrap();
        let (same, beams) = model("f f -> f f", phi(), 0.5, 0.5, None);
        let same = PreparedDiagrams::new(&same, &beams).unwrap();
        // |M|^2 of f f as a function of (s, t, u); the pair's at (u, t, s) is reached where u > 4 m^2
        // is not physical, so compare the rational functions through their parts: t channel alone is
        // common, and at cos = 0 of both the symmetric point fixes the rest.
        let at = Energy::at(1.7);
        let mut parts = vec![0.0; pair.names().len()];
        pair.m2_parts(at, 0.2, &mut parts);
        let mut same_parts = vec![0.0; same.names().len()];
        same.m2_parts(at, 0.2, &mut same_parts);
        assert!((parts[1] / same_parts[0] - 1.0).abs() < 1e-13);
        let x = pair.stu(1.7, 0.2);
        let (s, t, u, m2, mass2) = (x.s, x.t, x.u, 0.25, 0.09);
        let g4 = 1.3_f64 * 1.3 * 1.3 * 1.3;
        let cross = |a: f64, b: f64, c: f64| {
            if kind == "scalar" {
                a * b - 4.0 * m2 * c
            } else {
                a * b
            }
        };
        assert!(
            (parts[2] / (g4 * cross(s, t, u) / ((s - mass2) * (t - mass2))) - 1.0).abs() < 1e-12
        );
        assert!(
            (same_parts[2] / (g4 * cross(u, t, s) / ((u - mass2) * (t - mass2))) - 1.0).abs()
                < 1e-12
        );
    }
}

#[test]
fn s_channel_is_the_spin_zero_resonance() {
    // f fbar -> F Fbar through a scalar: sigma = (4 pi/k^2)/4 |T|^2 with the tree widths as running
    // (P-wave) vertices and the dressed propagator on both sides.
    use widthwise_core::amplitude::hypothesis::{PartialWave, Resonance};
    let (m, other, mass, g, g_other) = (0.5, 0.8, 2.2, 1.1, 0.6);
    for pseudoscalar in [false, true] {
        let dressed = Mediator {
            propagator: MediatorPropagator::Dressed { others: vec![] },
            pseudoscalar,
            ..mediator("scalar", mass, 0.0, g, g_other)
        };
        let (diagrams, beams) = model("f fbar -> F Fbar", vec![dressed], m, other, None);
        let loop_of = |g, m_gev| Loop::Fermion {
            name: "f".into(),
            g,
            m_gev,
            colours: 1,
        };
        let wave = PartialWave {
            twice_j: 0,
            resonances: vec![Resonance {
                name: "phi".into(),
                mass_gev: mass,
                width_gev: 0.0,
                strength: Strength::FromForm,
                phase_rad: 0.0,
                form: Form::Dressed {
                    pseudoscalar,
                    loops: vec![loop_of(g, m), loop_of(g_other, other)],
                },
                entrance: Vertex::Dressed { index: 0 },
                exit: Vertex::Dressed { index: 1 },
            }],
            coherent: None,
            incoherent: None,
            final_threshold_gev: 2.0 * other,
            continuum_factor: 1.0,
        };
        let a = Hypothesis::Diagrams(diagrams).prepare(&beams).unwrap();
        let b = Hypothesis::PartialWave(wave).prepare(&beams).unwrap();
        for w in [1.61, 2.0, 2.2, 2.3, 5.0] {
            let at = Energy::at(w);
            assert!((a.sigma_nb(at) / b.sigma_nb(at) - 1.0).abs() < 1e-12, "{w}");
        }
        assert_eq!(a.sigma_nb(Energy::at(1.6)), 0.0);
        assert!(a.radiation().unwrap().is_empty());
    }
}

#[test]
fn contact_limit() {
    // M -> infinity at fixed g^2/M^2: |M|^2 of a point interaction, G^2 (4m^2-t)(4mF^2-t).
    let mass = 1e6;
    let (model, beams) = model(
        "f F -> f F",
        vec![mediator("scalar", mass, 0.0, mass, 1.0)],
        0.5,
        0.7,
        None,
    );
    let prepared = PreparedDiagrams::new(&model, &beams).unwrap();
    let x = prepared.stu(3.0, 0.3);
    let expected = (1.0 - x.t) * (1.96 - x.t) / (mass * mass);
    assert!((prepared.m2(Energy::at(3.0), 0.3) / expected - 1.0).abs() < 1e-10);
}

#[test]
fn grid_is_the_pointwise_function() {
    let phis = vec![
        mediator("scalar", 1.4, 0.1, 1.0, 1.0),
        mediator("pseudoscalar", 2.0, 0.2, 0.7, 1.0),
    ];
    let (model, beams) = model("f fbar -> f fbar", phis, 0.3, 0.3, None);
    let prepared = PreparedDiagrams::new(&model, &beams).unwrap();
    let w: Vec<f64> = (0..40).map(|i| 0.5 + 0.07 * f64::from(i)).collect();
    let cos: Vec<f64> = (0..30).map(|i| -1.0 + 2.0 * f64::from(i) / 29.0).collect();
    let grid = prepared.m2_grid(&w, &cos);
    for (i, w) in w.iter().enumerate() {
        for (j, cos) in cos.iter().enumerate() {
            let (a, b) = (grid[i * 30 + j], prepared.m2(Energy::at(*w), *cos));
            assert!(
                (a - b).abs() <= 1e-9 * b.abs().max(1e-6),
                "{w} {cos} {a} {b}"
            );
        }
    }
}

#[test]
fn partial_waves_are_those_of_explicit_spinors() {
    let file: Value = serde_json::from_str(include_str!(
        "../../../../tests/reference/spinor_points.json"
    ))
    .unwrap();
    let waves = file["partial_waves"].as_array().unwrap();
    assert!(waves.len() >= 50);
    for case in waves {
        let phi = mediator(
            case["kind"].as_str().unwrap(),
            number(&case["mass_gev"]),
            number(&case["width_gev"]),
            number(&case["g_f"]),
            number(&case["g_F"]),
        );
        let name = case["process"].as_str().unwrap();
        let (model, beams) = model(
            name,
            vec![phi],
            number(&case["m_f_gev"]),
            number(&case["m_F_gev"]),
            None,
        );
        let total = whole(&model, &beams);
        let at = Energy::at(number(&case["w_gev"]));
        let twice_j = case["twice_j"].as_u64().unwrap() as u8;
        let ours: Vec<_> = total
            .helicity_waves(at, twice_j)
            .into_iter()
            .filter(|wave| wave.twice_j == twice_j)
            .collect();
        let by = case["abs_by_helicity"].as_object().unwrap();
        assert_eq!(by.len(), ours.len(), "{case}");
        let mark = |h: i8| match h {
            0 => '0',
            1 => '+',
            _ => '-',
        };
        for wave in &ours {
            let ((a, b), (c, d)) = (wave.initial, wave.outgoing);
            let key: String = [a, b, c, d].map(mark).iter().collect();
            let found = widthwise_core::math::abs(wave.amplitude);
            assert!(
                (found - number(&by[&key])).abs() < 1e-10,
                "{key} {found} {case}"
            );
        }
        // The change to states of definite parity is unitary.
        let norm: f64 = total
            .waves(at, twice_j)
            .iter()
            .filter(|wave| wave.twice_j == twice_j)
            .map(|wave| wave.amplitude.norm_sqr())
            .sum();
        assert!((norm - number(&case["sum_abs2"])).abs() < 1e-10 * (1.0 + norm));
    }
}

#[test]
fn s_channel_wave_is_the_unitary_completion() {
    // a^0 = M Gamma(s) (-Delta) between states of definite parity, unitary: |S| = 1.
    for pseudoscalar in [false, true] {
        let phi = Mediator {
            propagator: MediatorPropagator::Dressed { others: vec![] },
            pseudoscalar,
            ..mediator("scalar", 2.2, 0.0, 1.5, 0.0)
        };
        let (model, beams) = model("f fbar -> F Fbar", vec![phi], 0.5, 0.5, None);
        // F = f with its own loop switched off: the pair's s channel alone.
        let mut model = model;
        model.mediators[0].g_other = 1.5;
        let total = whole(&model, &beams);
        let propagator = total.diagrams().mediator_propagators().next().unwrap();
        for w in [1.3, 2.2, 3.0] {
            let waves = total.waves(Energy::at(w), 8);
            assert_eq!(waves.len(), 1, "{waves:?}");
            // Two equal channels: half of the unitary amplitude each. Between different pairs the
            // sign is a convention of the states.
            let inverse = propagator.inverse_gev2(Energy::at(w));
            let expected = inverse.inv() * (-0.5 * inverse.im);
            let ours = waves[0].amplitude;
            let miss = (ours - expected)
                .norm_sqr()
                .min((ours + expected).norm_sqr());
            assert!(miss < 1e-22, "{w}");
            let s = Complex64::new(0.0, 4.0) * expected + 1.0;
            assert!((s.norm_sqr() - 1.0).abs() < 1e-13);
        }
    }
}

#[test]
fn strong_coupling_breaks_unitarity_somewhere() {
    let (strong, beams) = model(
        "f fbar -> f fbar",
        vec![mediator("scalar", 2.0, 0.02, 6.0, 1.0)],
        0.5,
        0.5,
        None,
    );
    let strong = whole(&strong, &beams);
    let breaches = strong.unitarity_breaches(1.01, 6.0, 40, 8);
    assert!(!breaches.is_empty());
    for breach in &breaches {
        let above = strong.waves(Energy::at(breach.w_gev), 8);
        let same = above
            .iter()
            .find(|w| {
                w.twice_j == breach.wave.twice_j
                    && w.initial == breach.wave.initial
                    && w.outgoing == breach.wave.outgoing
            })
            .unwrap();
        assert!(same.amplitude.re.abs() > 0.5);
    }
    let (weak, beams) = model(
        "f fbar -> f fbar",
        vec![mediator("scalar", 2.0, 0.02, 0.1, 1.0)],
        0.5,
        0.5,
        None,
    );
    let weak = whole(&weak, &beams);
    assert!(weak.unitarity_breaches(2.1, 6.0, 20, 8).is_empty());
}

#[test]
fn what_cannot_be_is_refused() {
    let refusal = |name: &str, mediators: Vec<Mediator>, m, other, cut| {
        let (model, beams) = model(name, mediators, m, other, cut);
        Hypothesis::Diagrams(model)
            .prepare(&beams)
            .err()
            .map(|r| r.field)
    };
    let phi = |mass, width| vec![mediator("scalar", mass, width, 1.0, 1.0)];
    assert_eq!(
        refusal("f fbar -> F Fbar", phi(3.0, 0.0), 0.5, 0.5, None).unwrap(),
        "model.diagrams.mediators[0].propagator"
    );
    assert_eq!(
        refusal("f fbar -> F Fbar", phi(0.9, 0.0), 0.5, 0.5, None),
        None
    );
    assert_eq!(
        refusal("f phi -> f phi", phi(1.1, 0.0), 0.5, 0.5, None).unwrap(),
        "model.diagrams.mediators[0].mass"
    );
    assert_eq!(
        refusal("f F -> f F", vec![], 0.5, 0.5, None).unwrap(),
        "model.diagrams.mediators"
    );
    assert_eq!(
        refusal("f F -> f F", phi(1.1, 0.0), 0.5, 0.5, Some(1.5)).unwrap(),
        "model.cos_cut"
    );
    // Radiation with exchange diagrams needs a cut, and says so.
    let (open, beams) = model("f fbar -> f fbar", phi(1.4, 0.1), 0.3, 0.3, None);
    let open = Hypothesis::Diagrams(open).prepare(&beams).unwrap();
    assert_eq!(open.radiation().unwrap_err().field, "model.cos_cut");
    let (cut, beams) = model("f fbar -> f fbar", phi(1.4, 0.1), 0.3, 0.3, Some(0.9));
    let cut = Hypothesis::Diagrams(cut).prepare(&beams).unwrap();
    assert_eq!(cut.radiation().unwrap().len(), 1);
    // The chain asks before it computes, and hands the warning on.
    let chain = |w_min_gev| {
        let settings = ChainSettings {
            w_min_gev,
            spread: Spread::None,
            accuracy: 1e-6,
        };
        Chain::new(&settings, &beams).unwrap()
    };
    let total = |chain: &Chain, model: &dyn Born, stage| {
        chain
            .cross_sections(model, &[1.4], None, stage)
            .map(|seen| seen.warnings)
    };
    let radiating = chain(Some(0.9));
    let refused = total(&radiating, open.as_ref(), Stage::Observed).unwrap_err();
    assert_eq!(refused.field, "model.cos_cut");
    let refused = radiating.curve(open.as_ref(), &[1.4]).unwrap_err();
    assert_eq!(refused.field, "model.cos_cut");
    for stage in [Stage::RadiationRemoved, Stage::Born] {
        assert!(total(&radiating, open.as_ref(), stage).is_ok());
    }
    assert!(total(&chain(None), open.as_ref(), Stage::Observed).is_ok());
    let warned = total(&radiating, cut.as_ref(), Stage::Observed).unwrap();
    assert!(warned.iter().any(|w| w.code == "s-channel-radiator"));
    let curve = radiating.curve(cut.as_ref(), &[1.4]).unwrap();
    assert_eq!(curve.warnings, warned);
}
