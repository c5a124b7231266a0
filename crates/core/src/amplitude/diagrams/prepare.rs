//! Checks of a reaction against its beams, and preparation of its mediators.

use super::{Channel, PreparedMediator};
use crate::amplitude::background::finite;
use crate::amplitude::hypothesis::{Diagrams, Form, Loop, Mediator, MediatorPropagator, Reaction};
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::kinematics::FourMasses;
use crate::propagator::Propagator;

/// Names of the diagrams, then of each pair's interference.
pub(super) fn names(model: &Diagrams, diagrams: &[(Channel, usize)]) -> Vec<String> {
    let alone: Vec<String> = diagrams
        .iter()
        .map(|(channel, i)| {
            let mediator = model.mediators.get(*i).map_or("", |m| m.name.as_str());
            if model.reaction.exchanges_fermion() {
                format!("{} channel", channel.name())
            } else {
                format!("{} channel, {mediator}", channel.name())
            }
        })
        .collect();
    let mut all = alone.clone();
    for (i, a) in alone.iter().enumerate() {
        for b in alone.iter().skip(i + 1) {
            all.push(format!("interference {a} \u{d7} {b}"));
        }
    }
    if model.incoherent.is_some() {
        all.push("incoherent background".into());
    }
    all
}

/// The four external masses, if the beams are those of the reaction.
pub(super) fn check_beams(model: &Diagrams, beams: &Beams, phi: f64) -> Answer<FourMasses> {
    let m = beams.first.mass_gev;
    let reaction = model.reaction;
    let second = match reaction {
        Reaction::OtherElastic => model.other_mass_gev,
        Reaction::Compton => phi,
        _ => m,
    };
    let close = |a: f64, b: f64| (a - b).abs() <= 1e-9 * (a + b);
    let states = if reaction == Reaction::Compton { 1 } else { 2 };
    if beams.first.spin_states != 2
        || beams.second.spin_states != states
        || !close(beams.second.mass_gev, second)
    {
        return Err(Refusal::new(
            "beam",
            format!("{}, {}", beams.first.name, beams.second.name),
            match reaction {
                Reaction::OtherElastic => "a fermion f and a fermion F of the model's mass",
                Reaction::Compton => "a fermion and the scalar of the model's mass",
                _ => "two spin-1/2 particles of one mass",
            },
            "the beams are not those of this reaction",
        ));
    }
    if reaction.has_other_fermion()
        && !(model.other_mass_gev.is_finite() && model.other_mass_gev >= 0.0)
    {
        return Err(Refusal::new(
            "model.diagrams.other_mass",
            model.other_mass_gev,
            "0 or more",
            "the mass of the second fermion is a number, 0 or more",
        ));
    }
    let (m3, m4) = match reaction {
        Reaction::PairToOtherPair => (model.other_mass_gev, model.other_mass_gev),
        Reaction::OtherElastic => (m, model.other_mass_gev),
        Reaction::PairElastic | Reaction::SameElastic => (m, m),
        Reaction::Compton => (m, phi),
        Reaction::PairToScalars => (phi, phi),
    };
    Ok(FourMasses {
        m1_gev: m,
        m2_gev: second,
        m3_gev: m3,
        m4_gev: m4,
    })
}

/// One mediator with its propagator; refused where the s channel meets it on shell without a width.
pub(super) fn mediator(
    model: &Diagrams,
    of: &Mediator,
    m: f64,
    masses: FourMasses,
    path: &str,
) -> Answer<PreparedMediator> {
    finite(of.g, path, "g")?;
    finite(of.g_other, path, "g_other")?;
    let reaction = model.reaction;
    if reaction.exchanges_fermion() {
        return Ok(PreparedMediator {
            pseudoscalar: of.pseudoscalar,
            couplings: of.g * of.g,
            propagator: Propagator::new(&Form::Free, of.mass_gev, 0.0, path)?,
        });
    }
    let propagator = match &of.propagator {
        MediatorPropagator::Form { form, width_gev } => {
            Propagator::new(form, of.mass_gev, *width_gev, path)?
        }
        MediatorPropagator::Dressed { others } => {
            let fermion = |name: &str, g, m_gev| Loop::Fermion {
                name: name.into(),
                g,
                m_gev,
                colours: 1,
            };
            let mut loops = vec![fermion("f", of.g, m)];
            if reaction.has_other_fermion() {
                loops.push(fermion("F", of.g_other, model.other_mass_gev));
            }
            loops.extend(others.iter().cloned());
            let form = Form::Dressed {
                pseudoscalar: of.pseudoscalar,
                loops,
            };
            Propagator::new(&form, of.mass_gev, 0.0, path)?
        }
    };
    let on_shell = propagator.is_stable() && of.mass_gev > masses.threshold_gev();
    if on_shell && reaction.channels().contains(&Channel::S) {
        return Err(Refusal::new(
            format!("{path}.propagator"),
            format!("M = {} GeV", of.mass_gev),
            "a form with a width, or a mass below the reaction's threshold",
            "the s channel reaches this mediator on shell, s = M^2, where a propagator without width has no value; its decay channels dress it and make it finite",
        ));
    }
    let couplings = if reaction.has_other_fermion() {
        of.g * of.g_other
    } else {
        of.g * of.g
    };
    Ok(PreparedMediator {
        pseudoscalar: of.pseudoscalar,
        couplings,
        propagator,
    })
}
