//! Propagators, self-energies and poles against mpmath.

use crate::{Row, list, number, table, text};
use num_complex::Complex64;
use serde_json::Value;
use widthwise_core::amplitude::born::Energy;
use widthwise_core::amplitude::hypothesis::{
    ChannelShape, FlatteChannel, Form, KChannel, KMatrix, KPole, Loop, TwoBody, WidthChannel,
};
use widthwise_core::math;
use widthwise_core::propagator::Propagator;
use widthwise_core::propagator::dressed::SelfEnergy;
use widthwise_core::propagator::kmatrix::PreparedKMatrix;
use widthwise_core::propagator::loops::PairLoop;
use widthwise_core::propagator::running::barrier_polynomial;

const POLES: &str = "tests/reference/poles.py: mpmath, 30 digits";
const ROUNDING: &str = "rounding, amplified by cancellation next to thresholds";

fn complex(value: &Value) -> Complex64 {
    Complex64::new(number(&value[0]), number(&value[1]))
}

fn apart(row: &mut Row, ours: Complex64, theirs: Complex64, at: String) {
    row.take(math::abs(ours - theirs) / math::abs(theirs), at);
}

pub fn rows() -> Vec<Row> {
    let mut rows = loops();
    rows.extend(forms());
    rows.push(k_matrix());
    let mut barrier = Row::new(
        "barrier polynomials",
        "propagator::running::barrier_polynomial",
        "tests/reference/special_functions.py: spherical Hankel functions, mpmath",
        "relative",
        1e-14,
        "rounding of a short polynomial",
    );
    for entry in list(&table!("special_functions.json")["barrier"]) {
        let (l, z) = (number(&entry[0]), number(&entry[1]));
        barrier.relative(
            barrier_polynomial(l as u8, z),
            number(&entry[2]),
            format!("l = {l}, z = {z}"),
        );
    }
    rows.push(barrier);
    rows
}

fn loops() -> Vec<Row> {
    let file = table!("self_energy.json");
    let source = "tests/reference/self_energy.py: dispersion integrals, mpmath, 25 digits";
    let mut j = Row::new(
        "loop function B0(s) - B0(0)",
        "propagator::loops::PairLoop::j",
        source,
        "relative",
        1e-12,
        ROUNDING,
    );
    for entry in list(&file["j_at_m_1"]) {
        let s = number(&entry["s"]);
        let ours = PairLoop::new(1.0, 1.0, 1.0, "")
            .unwrap()
            .j(Complex64::new(s, 0.0));
        apart(
            &mut j,
            ours,
            complex(&entry["j"]),
            format!("m = 1, s = {s}"),
        );
    }
    let mut edge = Row::new(
        "loop function and self-energy at the rounded threshold",
        "propagator::loops, propagator::dressed",
        source,
        "relative",
        1e-7,
        "a rounding of s by 1e-16 acts as its square root",
    );
    let at_edge = |s: f64, m1: f64, m2: f64| (s / ((m1 + m2) * (m1 + m2)) - 1.0).abs() < 1e-13;
    for entry in list(&file["b0_difference"]) {
        let (m1, m2, s) = (
            number(&entry["m1_gev"]),
            number(&entry["m2_gev"]),
            number(&entry["s_gev2"]),
        );
        let ours = PairLoop::new(m1, m2, 1.0, "")
            .unwrap()
            .j(Complex64::new(s, 0.0));
        let at = format!("m = {m1}, {m2} GeV, s = {s} GeV^2");
        let row = if at_edge(s, m1, m2) {
            &mut edge
        } else {
            &mut j
        };
        apart(row, ours, complex(&entry["b0_minus_b0_at_0"]), at);
    }
    let mut sigma = Row::new(
        "self-energy in the on-shell scheme",
        "propagator::dressed::SelfEnergy",
        source,
        "relative to the larger of |Sigma|, M^2/1000",
        1e-12,
        "Re Sigma vanishes to second order at M, where it stands beside s - M^2",
    );
    let mut width = Row::new(
        "tree width of a dressed mediator",
        "propagator::dressed::SelfEnergy::width_gev",
        source,
        "relative",
        1e-13,
        "rounding",
    );
    let mut pole = Row::new(
        "second-sheet pole of a dressed mediator",
        "propagator::poles",
        source,
        "relative in sqrt(s_R)",
        1e-11,
        "the stated accuracy of the search",
    );
    for case in list(&file["dressed"]) {
        let name = text(&case["name"]);
        let mass_gev = number(&case["mass_gev"]);
        let pseudoscalar = name.contains("pseudoscalar");
        let loops: Vec<Loop> = list(&case["loops"])
            .iter()
            .map(|of| {
                let (coupling, m1_gev) = (number(&of["coupling"]), number(&of["m1_gev"]));
                if text(&of["kind"]) == "scalar" {
                    Loop::Scalar {
                        name: name.into(),
                        h_gev: coupling,
                        m1_gev,
                        m2_gev: number(&of["m2_gev"]),
                        identical: of["identical"].as_bool().unwrap(),
                    }
                } else {
                    Loop::Fermion {
                        name: name.into(),
                        g: coupling,
                        m_gev: m1_gev,
                        colours: 1,
                    }
                }
            })
            .collect();
        let energy = SelfEnergy::new(&loops, pseudoscalar, mass_gev, "").unwrap();
        for entry in list(&case["points"]) {
            let s = number(&entry["s_gev2"]);
            let theirs = complex(&entry["sigma_os_gev2"]);
            let ours = energy.on_sheet(Complex64::new(s, 0.0), &[]);
            let scale = math::abs(theirs).max(1e-3 * mass_gev * mass_gev);
            let on_edge = list(&case["loops"])
                .iter()
                .any(|of| at_edge(s, number(&of["m1_gev"]), number(&of["m2_gev"])));
            let row = if on_edge { &mut edge } else { &mut sigma };
            row.take(
                math::abs(ours - theirs) / scale,
                format!("{name}, s = {s} GeV^2"),
            );
        }
        let tree = number(&case["width_tree_gev"]);
        if tree > 0.0 {
            width.relative(energy.width_gev(), tree, name);
        }
        let form = Form::Dressed {
            pseudoscalar,
            loops,
        };
        if let Some(found) = list(&case["poles_second_sheet"]).first() {
            let theirs = Complex64::new(
                number(&found["m_pole_gev"]),
                -0.5 * number(&found["gamma_pole_gev"]),
            );
            nearest(&mut pole, &form, mass_gev, 0.0, theirs, name);
        }
    }
    vec![j, sigma, edge, width, pole]
}

fn nearest(row: &mut Row, form: &Form, mass: f64, width: f64, theirs: Complex64, name: &str) {
    let found = Propagator::new(form, mass, width, "").unwrap().poles();
    let distance = found
        .poles
        .iter()
        .map(|p| {
            math::abs(Complex64::new(p.mass_gev, -0.5 * p.width_gev) - theirs) / math::abs(theirs)
        })
        .fold(f64::INFINITY, f64::min);
    row.take(distance, name);
}

fn forms() -> Vec<Row> {
    let file = table!("poles.json");
    let mut pole = Row::new(
        "poles of Z, rho, f0(980), phi and running widths up to l = 4",
        "propagator::poles",
        POLES,
        "relative in sqrt(s_R)",
        1e-11,
        "the stated accuracy of the search",
    );
    let mut delta = Row::new(
        "propagator on the real axis",
        "propagator::Propagator",
        POLES,
        "relative",
        1e-11,
        ROUNDING,
    );
    let mut cases: Vec<(String, Form, f64, f64, &Value)> = Vec::new();
    let z = &file["Z, massless channels"];
    cases.push((
        "Z".into(),
        Form::MasslessChannels,
        number(&z["mass_gev"]),
        number(&z["width_gev"]),
        z,
    ));
    let rho = &file["rho, Gounaris-Sakurai"];
    let form = Form::GounarisSakurai {
        m_gev: number(&rho["pion_mass_gev"]),
    };
    cases.push((
        "rho".into(),
        form,
        number(&rho["mass_gev"]),
        number(&rho["width_gev"]),
        rho,
    ));
    let f0 = &file["f0(980), Flatte"];
    let channel = |g: &str, m: &str| FlatteChannel {
        name: m.into(),
        g2_gev2: number(&f0[g]),
        m1_gev: number(&f0[m][0]),
        m2_gev: number(&f0[m][1]),
    };
    let form = Form::Flatte {
        channels: [
            channel("g1_squared_gev2", "m1_gev"),
            channel("g2_squared_gev2", "m2_gev"),
        ],
    };
    cases.push(("f0(980)".into(), form, number(&f0["mass_gev"]), 0.0, f0));
    for case in list(&file["running widths"]) {
        let channels = list(&case["channels"])
            .iter()
            .map(|of| WidthChannel {
                name: "c".into(),
                fraction: number(&of["fraction"]),
                shape: ChannelShape::TwoBody(TwoBody {
                    m1_gev: number(&of["m1_gev"]),
                    m2_gev: number(&of["m2_gev"]),
                    l: number(&of["l"]) as u8,
                    radius_per_gev: number(&of["radius_per_gev"]),
                }),
            })
            .collect();
        let form = Form::RunningWidth { channels };
        let (mass, width) = (number(&case["mass_gev"]), number(&case["width_gev"]));
        cases.push((text(&case["name"]).into(), form, mass, width, case));
    }
    for (name, form, mass, width, case) in &cases {
        for found in list(&case["poles"]) {
            let theirs = complex(&found["sqrt_s_r_gev"]);
            nearest(&mut pole, form, *mass, *width, theirs, name);
        }
        let propagator = Propagator::new(form, *mass, *width, "").unwrap();
        for entry in case["delta"].as_array().into_iter().flatten() {
            let w = number(&entry["w_gev"]);
            let ours = propagator.inverse_gev2(Energy::at(w)).inv();
            apart(
                &mut delta,
                ours,
                complex(&entry["delta"]),
                format!("{name}, W = {w} GeV"),
            );
        }
    }
    vec![pole, delta]
}

fn k_matrix() -> Row {
    let mut row = Row::new(
        "two-channel K-matrix amplitudes",
        "propagator::kmatrix::PreparedKMatrix",
        POLES,
        "relative to the largest element",
        1e-12,
        ROUNDING,
    );
    for case in list(&table!("poles.json")["K-matrix"]) {
        let c = |i: usize, k: usize| number(&case["c"][i][k]);
        let channel = |i: usize| KChannel {
            name: "c".into(),
            m1_gev: number(&case["channels_gev"][i][0]),
            m2_gev: number(&case["channels_gev"][i][1]),
        };
        for (chew_mandelstam, key) in [(true, "t_chew_mandelstam"), (false, "t_i_rho")] {
            let model = KMatrix {
                twice_j: 0,
                poles: list(&case["poles_of_k"])
                    .iter()
                    .map(|p| KPole {
                        mass_gev: number(&p["mass_gev"]),
                        g1_gev: number(&p["g_gev"][0]),
                        g2_gev: number(&p["g_gev"][1]),
                    })
                    .collect(),
                constant: [c(0, 0), c(0, 1), c(1, 1)],
                channels: [channel(0), channel(1)],
                chew_mandelstam,
                entrance: 0,
                exit: 0,
                incoherent: None,
            };
            let matrix = PreparedKMatrix::new(&model, "").unwrap();
            for point in list(&case["points"]) {
                let w = number(&point["w_gev"]);
                let t = &point[key];
                let theirs = [complex(&t[0][0]), complex(&t[0][1]), complex(&t[1][1])];
                let scale = theirs.iter().map(|x| math::abs(*x)).fold(0.0, f64::max);
                for (ours, theirs) in matrix.at(w).t.iter().zip(theirs) {
                    let at = format!("{}, {key}, W = {w} GeV", text(&case["name"]));
                    row.take(math::abs(*ours - theirs) / scale, at);
                }
            }
        }
    }
    row
}
