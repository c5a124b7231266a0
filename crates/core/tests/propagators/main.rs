//! Propagators, self-energies and poles against values from outside.
#![allow(clippy::unwrap_used)] // a test may

mod kmatrix;

use num_complex::Complex64;
use serde_json::Value;
use widthwise_core::amplitude::born::Energy;
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::math;
use widthwise_core::propagator::Propagator;
use widthwise_core::propagator::dressed::SelfEnergy;
use widthwise_core::propagator::kmatrix::PreparedKMatrix;
use widthwise_core::propagator::loops::PairLoop;

fn c(re: f64, im: f64) -> Complex64 {
    Complex64::new(re, im)
}

fn json(text: &str) -> Value {
    serde_json::from_str(text).unwrap()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

fn complex(value: &Value) -> Complex64 {
    match value.as_array() {
        Some(parts) => c(number(&parts[0]), number(&parts[1])),
        None => c(number(value), 0.0),
    }
}

fn list(value: &Value) -> &Vec<Value> {
    value.as_array().unwrap()
}

/// Dispersion integrals in mpmath, only the imaginary part goes in (tests/reference/self_energy.py).
fn self_energies() -> Value {
    json(include_str!("../../../../tests/reference/self_energy.json"))
}

/// Denominators and poles in mpmath (tests/reference/poles.py).
fn pole_table() -> Value {
    json(include_str!("../../../../tests/reference/poles.json"))
}

#[test]
fn two_point_function_is_its_dispersion_integral() {
    let table = self_energies();
    let mut rows = 0;
    let mut check = |pair: &PairLoop, s: f64, expected: Complex64| {
        let j = pair.j(c(s, 0.0));
        // J moves as the root of the distance to threshold, which is known to rounding only.
        let threshold = pair.threshold2_gev2();
        let rounding =
            f64::EPSILON * threshold / (s - threshold).abs().max(f64::EPSILON * threshold);
        let tolerance =
            1e-12 * math::abs(expected).min(1.0) + 4.0 * rounding.sqrt() * f64::EPSILON.sqrt();
        assert!(math::abs(j - expected) < tolerance, "{s}: {j} {expected}");
        rows += 1;
    };
    let unit = PairLoop::new(1.0, 1.0, 1.0, "").unwrap();
    for row in list(&table["j_at_m_1"]) {
        check(&unit, number(&row["s"]), complex(&row["j"]));
    }
    for row in list(&table["b0_difference"]) {
        let pair = PairLoop::new(number(&row["m1_gev"]), number(&row["m2_gev"]), 1.0, "").unwrap();
        check(
            &pair,
            number(&row["s_gev2"]),
            complex(&row["b0_minus_b0_at_0"]),
        );
    }
    assert!(rows >= 60);
}

#[test]
fn slope_of_the_two_point_function() {
    // Against a central difference of J itself, checked above.
    for (m1, m2) in [(1.0, 1.0), (1.0, 0.3), (0.5, 0.45), (1.0, 0.0), (0.0, 0.0)] {
        let pair = PairLoop::new(m1, m2, 1.0, "").unwrap();
        for s in [
            c(-3.0, 0.0),
            c(0.05, 0.0),
            c(0.7, 0.0),
            c(9.0, 0.0),
            c(2.0, 0.7),
            c(0.1, -0.3),
        ] {
            let h = 1e-4;
            let difference = (pair.j(s - 2.0 * h) - pair.j(s + 2.0 * h)
                + (pair.j(s + h) - pair.j(s - h)) * 8.0)
                / (12.0 * h);
            assert!(
                math::abs(pair.derivative(s) - difference) < 1e-9 * (1.0 + math::abs(difference)),
                "{m1} {m2} {s}"
            );
        }
    }
}

#[test]
fn dressed_mediators_are_their_dispersion_integrals() {
    let table = self_energies();
    for case in list(&table["dressed"]) {
        let mass = number(&case["mass_gev"]);
        let mut pseudoscalar = false;
        let loops: Vec<Loop> = list(&case["loops"])
            .iter()
            .map(|of| {
                let kind = of["kind"].as_str().unwrap();
                pseudoscalar |= kind == "fermion_pseudoscalar";
                let (coupling, m1) = (number(&of["coupling"]), number(&of["m1_gev"]));
                if kind == "scalar" {
                    Loop::Scalar {
                        name: kind.into(),
                        h_gev: coupling,
                        m1_gev: m1,
                        m2_gev: number(&of["m2_gev"]),
                        identical: of["identical"].as_bool().unwrap(),
                    }
                } else {
                    fermion(coupling, m1)
                }
            })
            .collect();
        let energy = SelfEnergy::new(&loops, pseudoscalar, mass, "").unwrap();
        let width = number(&case["width_tree_gev"]);
        assert!(
            (energy.width_gev() - width).abs() <= 1e-13 * width,
            "{}",
            case["name"]
        );
        for point in list(&case["points"]) {
            let s = complex(&point["s_gev2"]);
            let Some(expected) = point.get("sigma_os_gev2") else {
                continue;
            };
            let ours = energy.on_sheet(s, &[]);
            // Subtraction cancels: relative to the unsubtracted size. Exactly at a threshold an
            // s wave moves as the root of a distance that is known to rounding only.
            let scale = (math::abs(complex(expected)) + 1e-2).max(math::abs(s) * 1e-2);
            let at_threshold = energy.loops().iter().any(|of| {
                let threshold = of.threshold_gev() * of.threshold_gev();
                math::abs(s - threshold) < 1e-12 * threshold
            });
            let tolerance = if at_threshold { 1e-7 } else { 1e-12 };
            assert!(
                math::abs(ours - complex(expected)) < tolerance * scale,
                "{} {s}: {ours} {expected}",
                case["name"]
            );
        }
    }
}

fn compare_poles(case: &Value, propagator: &Propagator) {
    let found = propagator.poles();
    for pole in list(&case["poles"]) {
        let expected = complex(&pole["sqrt_s_r_gev"]);
        let sheet: Vec<bool> = list(&pole["sheet"])
            .iter()
            .map(|sign| number(sign) > 0.0)
            .collect();
        let ours = found
            .poles
            .iter()
            .find(|ours| {
                (ours.mass_gev - expected.re).abs() + (0.5 * ours.width_gev + expected.im).abs()
                    < 1e-9
            })
            .unwrap_or_else(|| unreachable!("{pole} not in {found:?}"));
        assert_eq!(ours.sheet, sheet);
        assert!((ours.width_gev - number(&pole["gamma_pole_gev"])).abs() < 1e-11);
        if let Some(mass_bar) = pole["m_bar_gev"].as_f64() {
            assert!((ours.mass_bar_gev.unwrap() - mass_bar).abs() < 1e-11);
            assert!((ours.width_bar_gev.unwrap() - number(&pole["gamma_bar_gev"])).abs() < 1e-11);
        }
        let residue = ours.residue.unwrap();
        assert!(
            math::abs(residue - complex(&pole["residue"])) < 1e-9,
            "{residue} {pole}"
        );
    }
}

fn compare_delta(case: &Value, propagator: &Propagator) {
    for point in list(&case["delta"]) {
        let w = number(&point["w_gev"]);
        let expected = complex(&point["delta"]);
        let ours = propagator.delta_per_gev2(Energy::at(w)).unwrap();
        // W itself is rounded: near a narrow pole that is eps M/Gamma.
        assert!(
            math::abs(ours - expected) < 1e-11 * math::abs(expected),
            "{w}: {ours} {expected}"
        );
    }
}

#[test]
fn denominators_and_poles_of_the_table() {
    let table = pole_table();
    let z = &table["Z, massless channels"];
    compare_poles(
        z,
        &Propagator::new(
            &Form::MasslessChannels,
            number(&z["mass_gev"]),
            number(&z["width_gev"]),
            "",
        )
        .unwrap(),
    );
    let rho = &table["rho, Gounaris-Sakurai"];
    let form = Form::GounarisSakurai {
        m_gev: number(&rho["pion_mass_gev"]),
    };
    let gs = Propagator::new(
        &form,
        number(&rho["mass_gev"]),
        number(&rho["width_gev"]),
        "",
    )
    .unwrap();
    compare_poles(rho, &gs);
    compare_delta(rho, &gs);
    let f = &table["f0(980), Flatte"];
    let flatte = Propagator::new(&f0(), number(&f["mass_gev"]), 0.0, "").unwrap();
    compare_poles(f, &flatte);
    for case in list(&table["running widths"]) {
        let channels = list(&case["channels"])
            .iter()
            .map(|channel| WidthChannel {
                name: "c".into(),
                fraction: number(&channel["fraction"]),
                shape: ChannelShape::TwoBody(TwoBody {
                    m1_gev: number(&channel["m1_gev"]),
                    m2_gev: number(&channel["m2_gev"]),
                    l: channel["l"].as_u64().unwrap() as u8,
                    radius_per_gev: number(&channel["radius_per_gev"]),
                }),
            })
            .collect();
        let form = Form::RunningWidth { channels };
        let running = Propagator::new(
            &form,
            number(&case["mass_gev"]),
            number(&case["width_gev"]),
            "",
        )
        .unwrap();
        compare_poles(case, &running);
        compare_delta(case, &running);
    }
    for row in list(&table["Chew-Mandelstam"]) {
        let pair = PairLoop::new(number(&row["m1_gev"]), number(&row["m2_gev"]), 1.0, "").unwrap();
        let cm = pair.j_from_threshold(c(number(&row["s_gev2"]), 0.0)) / core::f64::consts::PI;
        assert!(
            math::abs(cm - complex(&row["cm"])) < 1e-12 * (1.0 + math::abs(cm)),
            "{row} {cm}"
        );
    }
}

#[test]
fn two_point_values_by_hand() {
    // m = 1: J(2) = 2 - pi/2, J(4) = 2; J(5) from an independent calculation; the series s/6 + s^2/60.
    let pair = PairLoop::new(1.0, 1.0, 1.0, "").unwrap();
    let j = |s| pair.j(c(s, 0.0));
    assert!((j(2.0).re - (2.0 - core::f64::consts::FRAC_PI_2)).abs() < 1e-15);
    assert!((j(4.0).re - 2.0).abs() < 1e-15);
    assert!(math::abs(j(5.0) - c(1.569591059036, 1.404962946208)) < 1e-12);
    assert!((j(1e-10).re / (1e-10 / 6.0 + 1e-20 / 60.0) - 1.0).abs() < 1e-14);
    // Second sheet: continuous through the real axis above threshold.
    let (above, below) = (pair.j(c(6.0, 0.0)), pair.j_second(c(6.0, -1e-13)));
    assert!(math::abs(above - below) < 1e-12);
    // Both massless: J = -ln(-s/scale^2).
    let light = PairLoop::new(0.0, 0.0, 3.0, "").unwrap();
    assert!(math::abs(light.j(c(18.0, 0.0)) - c(-math::ln(2.0), core::f64::consts::PI)) < 1e-15);
    // One massless: limit of a small mass.
    let (one, small) = (
        PairLoop::new(1.0, 0.0, 1.0, "").unwrap(),
        PairLoop::new(1.0, 1e-7, 1.0, "").unwrap(),
    );
    for s in [-2.0, 0.1, 0.7, 3.0] {
        assert!(
            math::abs(one.j(c(s, 0.0)) - small.j(c(s, 0.0))) < 1e-11,
            "{s}"
        );
        assert!(
            math::abs(one.derivative(c(s, 0.0)) - small.derivative(c(s, 0.0))) < 1e-10,
            "{s}"
        );
    }
}

fn fermion(g: f64, m_gev: f64) -> Loop {
    Loop::Fermion {
        name: "f".into(),
        g,
        m_gev,
        colours: 1,
    }
}

#[test]
fn on_shell_width_is_the_tree_width() {
    use widthwise_core::propagator::conventions::Decay;
    let (mass, m, g) = (3.0, 0.7, 1.3);
    for pseudoscalar in [false, true] {
        let energy = SelfEnergy::new(&[fermion(g, m)], pseudoscalar, mass, "").unwrap();
        let decay = if pseudoscalar {
            Decay::PseudoscalarToFermions {
                m_gev: m,
                colours: 1,
            }
        } else {
            Decay::ScalarToFermions {
                m_gev: m,
                colours: 1,
            }
        };
        let tree = decay.width_gev(mass, g);
        let at_mass = energy.on_sheet(c(mass * mass, 0.0), &[]);
        assert!((-at_mass.im / mass / tree - 1.0).abs() < 1e-14);
        assert!(at_mass.re.abs() < 1e-15);
        assert!((energy.width_gev() / tree - 1.0).abs() < 1e-14);
        let h = 1e-4;
        let slope = (energy.on_sheet(c(mass * mass + h, 0.0), &[]).re
            - energy.on_sheet(c(mass * mass - h, 0.0), &[]).re)
            / (2.0 * h);
        assert!(slope.abs() < 1e-9);
    }
    let scalar = Loop::Scalar {
        name: "chi".into(),
        h_gev: 2.0,
        m1_gev: 1.0,
        m2_gev: 0.4,
        identical: false,
    };
    let energy = SelfEnergy::new(&[scalar], false, mass, "").unwrap();
    let tree = Decay::ToScalars {
        m1_gev: 1.0,
        m2_gev: 0.4,
        identical: false,
    }
    .width_gev(mass, 2.0);
    assert!((energy.width_gev() / tree - 1.0).abs() < 1e-13);
}

#[test]
fn scalar_loop_spectral_function_integrates_to_one() {
    // -(1/pi) int ds Im Delta(s) = 1 for an unstable mediator (no bound pole, no ghost: the scalar
    // loop falls off), and residue + continuum = 1 for a stable one.
    let loops = [Loop::Scalar {
        name: "chi".into(),
        h_gev: 4.0,
        m1_gev: 1.0,
        m2_gev: 1.0,
        identical: true,
    }];
    for mass in [3.0_f64, 1.5] {
        let energy = SelfEnergy::new(&loops, false, mass, "").unwrap();
        // s = 4/(1 - y^2), y = 1 - e^-u: both ends smooth.
        let n = 40_000;
        let end = 34.0;
        let mut sum = 0.0;
        for i in 0..n {
            let u = end * (f64::from(i) + 0.5) / f64::from(n);
            let one_minus_y = math::exp(-u);
            let y = 1.0 - one_minus_y;
            let bottom = one_minus_y * (1.0 + y);
            let s = 4.0 / bottom;
            let jacobian = 8.0 * y / (bottom * bottom) * one_minus_y;
            let delta = (c(s - mass * mass, 0.0) - energy.on_sheet(c(s, 0.0), &[])).inv();
            sum -= delta.im * jacobian * end / f64::from(n) / core::f64::consts::PI;
        }
        // A stable mediator's pole has residue 1 in the on-shell scheme with real slope 0: the sum rule
        // is then for the bare field, 1 + continuum = 1/Z with 1/Z = 1 + slope... counted here by the
        // asymptotic normalisation: Delta -> 1/(s (1 + slope)).
        let far = 1e18;
        let norm = far / (far - mass * mass - energy.on_sheet(c(far, 0.0), &[]).re);
        let pole = if mass < 2.0 { 1.0 } else { 0.0 };
        assert!(
            ((sum + pole) / norm - 1.0).abs() < 1e-6,
            "{mass}: {sum} {norm}"
        );
    }
}

fn poles(form: Form, mass: f64, width: f64) -> widthwise_core::propagator::poles::PoleSearch {
    Propagator::new(&form, mass, width, "").unwrap().poles()
}

#[test]
fn pole_of_the_z() {
    // Exact: Mb = M/sqrt(1+g^2), Gb = Gamma/sqrt(1+g^2), g = Gamma/M.
    let (m, g) = (91.1876_f64, 2.4952_f64);
    let found = poles(Form::MasslessChannels, m, g);
    assert_eq!(found.poles.len(), 1);
    let root = (1.0 + g * g / (m * m)).sqrt();
    assert!((found.poles[0].mass_bar_gev.unwrap() - m / root).abs() < 1e-12);
    assert!((found.poles[0].width_bar_gev.unwrap() - g / root).abs() < 1e-12);
    assert!(((m - found.poles[0].mass_gev) * 1e3 - 26.0).abs() < 0.5);
    let constant = poles(Form::ConstantWidth, m, g);
    assert!((constant.poles[0].s_gev2 - c(m * m, -m * g)).norm_sqr() < 1e-20);
    assert!((constant.poles[0].residue.unwrap() - 1.0).norm_sqr() < 1e-24);
}

#[test]
fn pole_of_the_rho_by_gounaris_sakurai() {
    // 775.26/149.1 MeV: 761.3 - i 71.5; PDG T-matrix pole (761-765) - i (71-74).
    let found = poles(Form::GounarisSakurai { m_gev: 0.13957039 }, 0.77526, 0.1491);
    let pole = &found.poles[0];
    assert!((pole.mass_gev * 1e3 - 761.3).abs() < 0.05, "{pole:?}");
    assert!((pole.width_gev * 500.0 - 71.5).abs() < 0.05, "{pole:?}");
    assert_eq!(pole.sheet, [false]);
}

fn f0() -> Form {
    let channel = |name: &str, g2_gev2, m_gev| FlatteChannel {
        name: name.into(),
        g2_gev2,
        m1_gev: m_gev,
        m2_gev: m_gev,
    };
    Form::Flatte {
        channels: [
            channel("pi pi", 0.165, 0.13957039),
            channel("K K", 4.21 * 0.165, 0.493677),
        ],
    }
}

#[test]
fn poles_of_the_f0_by_flatte() {
    // hep-ex/0411001 parameters; poles from an independent calculation: 998.443 - i 17.225 on the
    // sheet next to the axis at M, 851.328 - i 418.054 beyond the kaon threshold.
    let found = poles(f0(), 0.965, 0.0);
    let near = &found.poles[0];
    assert!((near.mass_gev * 1e3 - 998.443).abs() < 5e-4, "{near:?}");
    assert!((near.width_gev * 500.0 - 17.225).abs() < 5e-4, "{near:?}");
    assert_eq!(near.sheet, [false, true]);
    let third = found
        .poles
        .iter()
        .find(|pole| pole.sheet == [false, false])
        .unwrap();
    assert!((third.mass_gev * 1e3 - 851.328).abs() < 5e-4, "{third:?}");
    assert!(
        (third.width_gev * 500.0 - 418.054).abs() < 5e-4,
        "{third:?}"
    );
}

#[test]
fn continuation_meets_the_real_axis() {
    let running = Form::RunningWidth {
        channels: vec![
            WidthChannel {
                name: "a".into(),
                fraction: 0.6,
                shape: ChannelShape::TwoBody(TwoBody {
                    m1_gev: 0.3,
                    m2_gev: 0.2,
                    l: 2,
                    radius_per_gev: 3.0,
                }),
            },
            WidthChannel {
                name: "b".into(),
                fraction: 0.4,
                shape: ChannelShape::Massless,
            },
        ],
    };
    let dressed = Form::Dressed {
        pseudoscalar: true,
        loops: vec![fermion(1.0, 0.2), fermion(0.7, 0.1)],
    };
    for (form, width) in [
        (running, 0.1),
        (f0(), 0.0),
        (Form::GounarisSakurai { m_gev: 0.2 }, 0.1),
        (dressed, 0.0),
        (Form::MasslessChannels, 0.1),
    ] {
        let propagator = Propagator::new(&form, 0.95, width, "").unwrap();
        for w in [0.7, 0.94, 1.1, 1.4] {
            let sheet: Vec<bool> = propagator
                .branches()
                .iter()
                .map(|b| b.threshold_gev >= w)
                .collect();
            let on_axis = propagator.inverse_gev2(Energy::at(w));
            let below = propagator.on_sheet(c(w * w, -1e-12), &sheet).unwrap();
            assert!(
                math::abs(on_axis - below) < 1e-10,
                "{form:?} {w}: {on_axis} {below}"
            );
            let first = vec![true; sheet.len()];
            let above = propagator.on_sheet(c(w * w, 1e-12), &first).unwrap();
            assert!(
                math::abs(on_axis - above) < 1e-10,
                "{form:?} {w}: {on_axis} {above}"
            );
        }
        let found = propagator.poles();
        assert!(!found.poles.is_empty(), "{form:?}");
        for pole in found.poles {
            let zero = propagator.on_sheet(pole.s_gev2, &pole.sheet).unwrap();
            assert!(math::abs(zero) < 1e-11, "{form:?}");
        }
    }
}

#[test]
fn limits_of_the_forms() {
    // One channel of two.
    let Form::Flatte { mut channels } = f0() else {
        unreachable!()
    };
    channels[1].g2_gev2 = 0.0;
    let one = Propagator::new(&Form::Flatte { channels }, 0.965, 0.0, "").unwrap();
    let m_gamma = |w: f64| 0.165 * (1.0 - 4.0 * 0.13957039_f64 * 0.13957039 / (w * w)).sqrt();
    for w in [0.5, 0.965, 1.2] {
        assert!((one.inverse_gev2(Energy::at(w)).im - m_gamma(w)).abs() < 1e-15);
    }
    // A massless fermion pair from a pseudoscalar runs as the massless-channel form: Im Sigma = -g^2 s/(8 pi).
    let dressed = Propagator::new(
        &Form::Dressed {
            pseudoscalar: true,
            loops: vec![fermion(0.5, 0.0)],
        },
        2.0,
        0.0,
        "",
    )
    .unwrap();
    let light = Propagator::new(
        &Form::Dressed {
            pseudoscalar: true,
            loops: vec![fermion(0.5, 1e-6)],
        },
        2.0,
        0.0,
        "",
    )
    .unwrap();
    for w in [1.0, 2.0, 3.0] {
        let (a, b) = (
            dressed.inverse_gev2(Energy::at(w)),
            light.inverse_gev2(Energy::at(w)),
        );
        assert!(math::abs(a - b) < 1e-9, "{w}: {a} {b}");
        assert!((a.im - 0.25 * w * w / (8.0 * core::f64::consts::PI)).abs() < 1e-15);
    }
}

#[test]
fn on_shell_and_ghost_are_said() {
    let free = Propagator::new(&Form::Free, 2.0, 0.0, "").unwrap();
    assert!(
        free.delta_per_gev2(Energy::at(2.0))
            .unwrap_err()
            .message
            .contains("on shell")
    );
    assert!(free.delta_per_gev2(Energy::at(2.1)).is_ok());
    assert!(free.is_stable() && free.warnings().iter().any(|w| w.code == "stable-mediator"));
    let strong = Form::Dressed {
        pseudoscalar: true,
        loops: vec![fermion(4.0, 0.1)],
    };
    let strong = Propagator::new(&strong, 2.0, 0.0, "").unwrap();
    assert!(
        strong
            .warnings()
            .iter()
            .any(|w| w.code == "space-like-ghost")
    );
    // Exactly at an s-wave threshold the on-shell scheme does not exist.
    let at_threshold = Form::Dressed {
        pseudoscalar: true,
        loops: vec![fermion(1.0, 1.0)],
    };
    assert!(Propagator::new(&at_threshold, 2.0, 0.0, "x").is_err());
    let p_wave = Form::Dressed {
        pseudoscalar: false,
        loops: vec![fermion(1.0, 1.0)],
    };
    let p_wave = Propagator::new(&p_wave, 2.0, 0.0, "x").unwrap();
    assert!(p_wave.inverse_gev2(Energy::at(2.5)).im > 0.0);
    assert!(Propagator::new(&f0(), 0.965, 0.1, "x").is_err());
}
