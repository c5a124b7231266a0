//! Born, radiated and observed cross sections against nested quadrature.

use crate::{Row, list, number, table};
use widthwise_core::amplitude::born::Energy;
use widthwise_core::amplitude::hypothesis::{
    CoherentBackground, Form, Hypothesis, PartialWave, Resonance, Strength, Vertex,
};
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::{ChainSettings, Spread, Stage};
use widthwise_core::units::M_ELECTRON_GEV;

const SOURCE: &str =
    "tests/reference/lineshape_nested.py: composite Gauss-Legendre, own error below 2e-10";

pub fn rows() -> Vec<Row> {
    let mut born_row = Row::new(
        "Born cross section",
        "amplitude::partial_wave, propagator",
        SOURCE,
        "relative",
        1e-11,
        "rounding of W - M carried in two parts, times the steepness of the curve",
    );
    let mut radiated_row = Row::new(
        "radiated cross section",
        "line_shape::Chain",
        SOURCE,
        "relative",
        1e-7,
        "W enters as one number: its rounding is 4e-9 of the narrowest width",
    );
    let mut observed_row = Row::new(
        "observed cross section, accuracy 1e-9 requested",
        "line_shape::Chain",
        SOURCE,
        "relative",
        1e-8,
        "ten times the requested accuracy, which no value may miss by more",
    );
    let mut default_row = Row::new(
        "observed cross section, accuracy 1e-6 requested",
        "line_shape::Chain",
        SOURCE,
        "accuracy reached, as the answer claims it",
        1.0,
        "the accuracy that is claimed bounds the true error",
    );
    let file = table!("lineshape_nested.json");
    for case in file["cases"].as_array().unwrap() {
        let name = case["name"].as_str().unwrap();
        let scan = &case["scan"];
        let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
        let hypothesis: Hypothesis = serde_json::from_value(scan["hypothesis"].clone()).unwrap();
        let settings: ChainSettings = serde_json::from_value(scan["chain"].clone()).unwrap();
        let born = hypothesis.prepare(&beams).unwrap();
        let fine = Chain::new(&settings, &beams).unwrap();
        let usual = Chain::new(
            &ChainSettings {
                accuracy: 1e-6,
                ..settings.clone()
            },
            &beams,
        )
        .unwrap();
        let monochromatic = Chain::new(
            &ChainSettings {
                spread: Spread::None,
                ..settings.clone()
            },
            &beams,
        )
        .unwrap();
        let points = case["points"].as_array().unwrap();
        let w_gev: Vec<f64> = points.iter().map(|p| number(&p["w_gev"])).collect();
        let at = |i: usize| format!("{name}, W = {} GeV", w_gev[i]);
        let values = |chain: &Chain| {
            chain
                .cross_sections(born.as_ref(), &w_gev, None, Stage::Observed)
                .unwrap()
        };
        let (radiated, observed, default) = (values(&monochromatic), values(&fine), values(&usual));
        for (i, point) in points.iter().enumerate() {
            let offset_gev = number(&point["offset_gev"]);
            let energy = Energy {
                reference_gev: number(&scan["hypothesis"]["resonances"][0]["mass_gev"]),
                offset_gev,
            };
            born_row.relative(born.sigma_nb(energy), number(&point["born_nb"]), at(i));
            radiated_row.relative(radiated.values_nb[i], number(&point["radiated_nb"]), at(i));
            observed_row.relative(observed.values_nb[i], number(&point["observed_nb"]), at(i));
            let (ours, theirs) = (default.values_nb[i], number(&point["observed_nb"]));
            let deviation = if ours == theirs {
                0.0
            } else {
                ours / theirs - 1.0
            };
            default_row.take(deviation / default.accuracy, at(i));
        }
    }
    vec![born_row, radiated_row, observed_row, default_row]
}

/// The map of random points, every `stride`-th.
pub fn map(stride: usize) -> Row {
    let mut row = Row::new(
        "observed cross section over Gamma/sigma_W, M/sigma_W, position and interference",
        "line_shape::Chain",
        "tests/reference/accuracy_map.py: 1,000 random points, own error below 2e-9",
        "accuracy that the answer claims (1e-6 requested)",
        1.0,
        "the accuracy that is claimed bounds the true error",
    );
    let electron = BeamParticle {
        name: "e".into(),
        mass_gev: M_ELECTRON_GEV,
        spin_states: 2,
    };
    let beams = Beams {
        first: electron.clone(),
        second: electron,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    };
    let file = table!("accuracy_map.json");
    for (i, entry) in list(&file["rows"]).iter().enumerate().step_by(stride) {
        let value = |k: usize| number(&entry[k]);
        let mass_gev = value(0);
        let hypothesis = Hypothesis::PartialWave(PartialWave {
            twice_j: 2,
            resonances: vec![Resonance {
                name: "R".into(),
                mass_gev,
                width_gev: value(1),
                strength: Strength::GammaInBf { gev: value(3) },
                phase_rad: 0.0,
                form: Form::ConstantWidth,
                entrance: Vertex::Constant,
                exit: Vertex::Constant,
            }],
            coherent: Some(CoherentBackground::OnePhoton {
                c_nb: value(4),
                w0_gev: mass_gev,
                phase_rad: value(5),
            }),
            incoherent: None,
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        });
        let settings = ChainSettings {
            w_min_gev: Some(value(6)),
            spread: Spread::Gaussian {
                sigma_gev: value(2),
                w0_gev: mass_gev,
                power: 0.0,
            },
            accuracy: 1e-6,
        };
        let born = hypothesis.prepare(&beams).unwrap();
        let answer = Chain::new(&settings, &beams)
            .unwrap()
            .cross_sections(born.as_ref(), &[mass_gev + value(7)], None, Stage::Observed)
            .unwrap();
        let deviation = answer.values_nb[0] / value(8) - 1.0;
        row.take(deviation / answer.accuracy, format!("row {i}"));
    }
    row
}
