//! Tree-level reactions against explicit Dirac spinors.

use crate::{Row, list, number, table, text};
use serde_json::Value;
use widthwise_core::amplitude::Region;
use widthwise_core::amplitude::born::{Born, Energy};
use widthwise_core::amplitude::diagrams::PreparedDiagrams;
use widthwise_core::amplitude::diagrams::total::DiagramTotal;
use widthwise_core::amplitude::hypothesis::{
    Diagrams, Form, Mediator, MediatorPropagator, Reaction,
};
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};

const SOURCE: &str = "tests/reference/spinors.py: explicit Dirac spinors and matrices, NumPy";

fn prepared(entry: &Value) -> PreparedDiagrams {
    let reaction = match text(&entry["process"]) {
        "f fbar -> F Fbar" => Reaction::PairToOtherPair,
        "f F -> f F" => Reaction::OtherElastic,
        "f fbar -> f fbar" => Reaction::PairElastic,
        "f f -> f f" => Reaction::SameElastic,
        "f phi -> f phi" => Reaction::Compton,
        _ => Reaction::PairToScalars,
    };
    let mediators: Vec<Mediator> = list(&entry["mediators"])
        .iter()
        .map(|of| {
            let width_gev = number(&of["width_gev"]);
            Mediator {
                name: "phi".into(),
                pseudoscalar: text(&of["kind"]) == "pseudoscalar",
                mass_gev: number(&of["mass_gev"]),
                g: number(&of["g_f"]),
                g_other: number(&of["g_F"]),
                propagator: MediatorPropagator::Form {
                    form: if width_gev > 0.0 {
                        Form::ConstantWidth
                    } else {
                        Form::Free
                    },
                    width_gev,
                },
            }
        })
        .collect();
    let particle = |mass_gev, spin_states| BeamParticle {
        name: "x".into(),
        mass_gev,
        spin_states,
    };
    let (m, other) = (number(&entry["m_f_gev"]), number(&entry["m_F_gev"]));
    let beams = Beams {
        first: particle(m, 2),
        second: match reaction {
            Reaction::OtherElastic => particle(other, 2),
            Reaction::Compton => particle(mediators[0].mass_gev, 1),
            _ => particle(m, 2),
        },
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    };
    let model = Diagrams {
        reaction,
        other_mass_gev: other,
        mediators,
        cos_cut: None,
        incoherent: None,
    };
    PreparedDiagrams::new(&model, &beams).unwrap()
}

pub fn rows() -> Vec<Row> {
    let file = table!("spinor_points.json");
    let mut squared = Row::new(
        "spin-averaged |M|^2 of the six reactions",
        "amplitude::diagrams::PreparedDiagrams::m2",
        SOURCE,
        "relative to the largest diagram",
        1e-10,
        "the spinor products cancel by up to 1e5 next to threshold",
    );
    let mut differential = Row::new(
        "dsigma/dcos of the six reactions",
        "amplitude::diagrams::PreparedDiagrams::dsigma_dcos_nb",
        SOURCE,
        "relative to the largest diagram",
        1e-10,
        "as |M|^2",
    );
    for entry in list(&file["points"]) {
        let (w, cos) = (number(&entry["w_gev"]), number(&entry["cos_theta"]));
        let model = prepared(entry);
        let theirs = number(&entry["m2_avg"]);
        let largest = entry["by_diagram"]
            .as_object()
            .unwrap()
            .values()
            .map(number)
            .fold(theirs, f64::max);
        let at = format!("{}, W = {w} GeV, cos = {cos}", text(&entry["process"]));
        squared.take(
            (model.m2(Energy::at(w), cos) - theirs) / largest,
            at.as_str(),
        );
        let theirs_nb = number(&entry["dsigma_dcos_nb"]);
        let deviation = model.dsigma_dcos_nb(Energy::at(w), cos) / theirs_nb - 1.0;
        differential.take(deviation * theirs / largest, at);
    }
    let mut total = Row::new(
        "total inside |cos theta| < 0.9",
        "amplitude::diagrams::total::DiagramTotal",
        "tests/reference/spinors.py, integrated with scipy.integrate.quad",
        "relative",
        1e-9,
        "accuracy of the quadrature",
    );
    for entry in list(&file["cut_totals"]) {
        let w = number(&entry["w_gev"]);
        let edge = number(&entry["abs_cos_below"]);
        let region = Region::cos(-edge, edge).unwrap();
        let ours = DiagramTotal::new(prepared(entry), region).sigma_nb(Energy::at(w));
        total.relative(
            ours,
            number(&entry["sigma_nb"]),
            format!("{}, W = {w} GeV", text(&entry["process"])),
        );
    }
    vec![squared, differential, total]
}
