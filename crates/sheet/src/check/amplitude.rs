//! K-matrix, diagrams and several partial waves of a sheet.

use super::beam::twice;
use super::log::Log;
use super::resonance::{FormFields, form, loops, width};
use crate::doc;
use crate::quantity::Dimension::{Angle, Energy, Number};
use widthwise_core::amplitude::hypothesis::{
    AngularWave, Couplings, Diagrams, HelicityCoupling, IncoherentBackground, KChannel, KMatrix,
    KPole, LsTerm, Mediator, MediatorPropagator, PartialWave, Reaction, Waves,
};
use widthwise_core::amplitude::selection::fermion_pair_states;
use widthwise_core::beam::{BeamParticle, Beams};

/// The two-channel K-matrix.
pub fn k_matrix(
    model: &doc::KMatrix,
    twice_j: u8,
    incoherent: Option<IncoherentBackground>,
    log: &mut Log,
) -> Option<KMatrix> {
    let path = "model.k_matrix";
    if model.channels.len() != 2 {
        log.refuse(
            &format!("{path}.channels"),
            &format!("{} channels", model.channels.len()),
            "two channels",
            "the K-matrix has exactly two channels",
        );
        return None;
    }
    let mut channel = |i: usize| {
        model.channels.get(i).map(|of| KChannel {
            name: of.name.clone(),
            m1_gev: log.value(&format!("{path}.channels[{i}].m1"), &of.m1, Energy),
            m2_gev: log.value(&format!("{path}.channels[{i}].m2"), &of.m2, Energy),
        })
    };
    let channels = [channel(0)?, channel(1)?];
    let poles = model
        .poles
        .iter()
        .enumerate()
        .map(|(i, pole)| {
            let mut value =
                |field: &str, text| log.value(&format!("{path}.poles[{i}].{field}"), text, Energy);
            KPole {
                mass_gev: value("mass", &pole.mass),
                g1_gev: value("g1", &pole.g1),
                g2_gev: value("g2", &pole.g2),
            }
        })
        .collect::<Vec<_>>();
    if poles.is_empty() {
        log.refuse(
            &format!("{path}.poles"),
            "none",
            "one bare pole or more",
            "a K-matrix without a bare pole has no resonance to scan",
        );
    }
    let mut constant = |field: &str, text: &Option<String>| {
        log.optional(&format!("{path}.{field}"), text.as_ref(), Number)
            .unwrap_or(0.0)
    };
    let constant = [
        constant("c11", &model.c11),
        constant("c12", &model.c12),
        constant("c22", &model.c22),
    ];
    let mut side = |field: &str, number: u8| {
        if !(1..=2).contains(&number) {
            log.refuse(
                &format!("{path}.{field}"),
                &number.to_string(),
                "1 or 2",
                "the K-matrix has two channels",
            );
        }
        number.saturating_sub(1)
    };
    Some(KMatrix {
        twice_j,
        poles,
        constant,
        channels,
        chew_mandelstam: model.chew_mandelstam,
        entrance: side("entrance", model.entrance),
        exit: side("exit", model.exit),
        incoherent,
    })
}

/// Tree-level diagrams.
pub fn diagrams(
    model: &doc::Diagrams,
    cos_cut: Option<f64>,
    incoherent: Option<IncoherentBackground>,
    log: &mut Log,
) -> Diagrams {
    let path = "model.diagrams";
    let reaction = match model.reaction {
        doc::Reaction::PairToOtherPair => Reaction::PairToOtherPair,
        doc::Reaction::OtherElastic => Reaction::OtherElastic,
        doc::Reaction::PairElastic => Reaction::PairElastic,
        doc::Reaction::SameElastic => Reaction::SameElastic,
        doc::Reaction::Compton => Reaction::Compton,
        doc::Reaction::PairToScalars => Reaction::PairToScalars,
    };
    let other_mass_gev = if reaction.has_other_fermion() {
        let text = model.other_mass.as_deref().unwrap_or("");
        log.value(&format!("{path}.other_mass"), text, Energy)
    } else {
        0.0
    };
    let mediators = model
        .mediators
        .iter()
        .enumerate()
        .map(|(i, of)| mediator(&format!("{path}.mediators[{i}]"), of, reaction, log))
        .collect();
    Diagrams {
        reaction,
        other_mass_gev,
        mediators,
        cos_cut,
        incoherent,
    }
}

fn mediator(path: &str, of: &doc::Mediator, reaction: Reaction, log: &mut Log) -> Mediator {
    let g_other = if reaction.has_other_fermion() {
        let text = of.g_other.as_deref().unwrap_or("");
        log.value(&format!("{path}.g_other"), text, Number)
    } else {
        0.0
    };
    let propagator = if reaction.exchanges_fermion() {
        // phi is an external particle there: only the fermion is exchanged.
        MediatorPropagator::Dressed { others: Vec::new() }
    } else if of.form == doc::Form::Dressed {
        MediatorPropagator::Dressed {
            others: loops(path, &of.loops, log),
        }
    } else {
        MediatorPropagator::Form {
            form: form(path, &FormFields::of_mediator(of), log),
            width_gev: width(path, of.form, of.width.as_ref(), log),
        }
    };
    Mediator {
        name: of.name.clone(),
        pseudoscalar: of.pseudoscalar,
        mass_gev: log.value(&format!("{path}.mass"), &of.mass, Energy),
        g: log.value(&format!("{path}.g"), &of.g, Number),
        g_other,
        propagator,
    }
}

/// Several partial waves: `whole` holds all resonances, and what belongs to all waves.
pub fn waves(
    model: &doc::Model,
    whole: PartialWave,
    beams: &Beams,
    cos_cut: Option<f64>,
    log: &mut Log,
) -> Option<Waves> {
    if model.waves.is_empty() {
        log.refuse(
            "model.waves",
            "none",
            "one partial wave or more",
            "the hypothesis has no partial wave",
        );
        return None;
    }
    let mut sorted: Vec<Vec<_>> = model.waves.iter().map(|_| Vec::new()).collect();
    let mut last = 1;
    for (i, (typed, resonance)) in model.resonances.iter().zip(whole.resonances).enumerate() {
        let number = typed.wave.unwrap_or(1);
        let place = usize::from(number)
            .checked_sub(1)
            .and_then(|n| sorted.get_mut(n));
        let (Some(place), true) = (place, number >= last) else {
            log.refuse(
                &format!("model.resonances[{i}].wave"),
                &number.to_string(),
                &format!("1 to {}, in rising order", model.waves.len()),
                "resonances stand in the order of the waves that they belong to, and every wave is there",
            );
            return None;
        };
        last = number;
        place.push(resonance);
    }
    let mut coherent = whole.coherent;
    let mut all = Vec::new();
    for (i, (of, resonances)) in model.waves.iter().zip(sorted).enumerate() {
        let path = format!("model.waves[{i}]");
        if resonances.is_empty() && (i > 0 || coherent.is_none()) {
            log.refuse(
                &path,
                "no resonance",
                "a resonance that says it belongs to this wave",
                format!("wave {} has no resonance", i + 1),
            );
        }
        let Some(twice_j) = twice(&of.j) else {
            log.refuse(
                &format!("{path}.j"),
                &of.j,
                "0, 1/2, 1, 3/2, ... up to 10",
                "this is no angular momentum",
            );
            continue;
        };
        selection(&path, of, twice_j, beams, log);
        let entrance_spins = Some((&beams.first, &beams.second));
        all.push(AngularWave {
            wave: PartialWave {
                twice_j,
                resonances,
                coherent: coherent.take(),
                incoherent: None,
                final_threshold_gev: whole.final_threshold_gev,
                continuum_factor: whole.continuum_factor,
            },
            phase_rad: log
                .optional(&format!("{path}.phase"), of.phase.as_ref(), Angle)
                .unwrap_or(0.0),
            entrance: couplings(
                &format!("{path}.entrance"),
                &of.entrance,
                entrance_spins,
                log,
            ),
            exit: couplings(&format!("{path}.exit"), &of.exit, None, log),
        });
    }
    Some(Waves {
        waves: all,
        cos_cut,
        incoherent: whole.incoherent,
    })
}

/// J^PC of a fermion-antifermion state: what cannot be formed, and LS terms that belong to another.
fn selection(path: &str, of: &doc::Wave, twice_j: u8, beams: &Beams, log: &mut Log) {
    let Some(text) = of.pc.as_deref() else {
        return;
    };
    let sign = |c: char| match c {
        '+' => Some(1),
        '-' | '\u{2212}' => Some(-1),
        _ => None,
    };
    let signs: Vec<Option<i8>> = text.trim().chars().map(sign).collect();
    let field = format!("{path}.pc");
    let ([Some(parity), Some(c_parity)], true) = (signs.as_slice(), twice_j.is_multiple_of(2))
    else {
        log.refuse(
            &field,
            text,
            "++, +-, -+ or --, with whole J",
            "these are no parity and charge conjugation of a fermion and its antifermion",
        );
        return;
    };
    if beams.first.spin_states != 2
        || beams.second.spin_states != 2
        || beams.first.mass_gev != beams.second.mass_gev
        || beams.first.mass_gev == 0.0
    {
        log.refuse(
            &field,
            text,
            "beams of a spin-1/2 particle and its antiparticle",
            "the selection rules are those of a fermion and its antifermion, which these beams are not",
        );
        return;
    }
    let states = match fermion_pair_states(twice_j / 2, *parity, *c_parity) {
        Ok(states) => states,
        Err(refusal) => {
            log.refuse(&field, &refusal.value, &refusal.allowed, refusal.message);
            return;
        }
    };
    let doc::Couplings::Ls { terms, .. } = &of.entrance else {
        return;
    };
    let listed: Vec<String> = states
        .iter()
        .map(|state| format!("L = {}, S = {}", state.l, state.s))
        .collect();
    for (i, term) in terms.iter().enumerate() {
        let fits = |s: &widthwise_core::amplitude::selection::PairState| {
            s.l == term.l && Some(2 * s.s) == twice(&term.s)
        };
        if !states.iter().any(fits) {
            log.refuse(
                &format!("{path}.entrance.terms[{i}]"),
                &format!("L = {}, S = {}", term.l, term.s),
                &listed.join(" or "),
                "this L and S belong to another J^PC: P = (-1)^(L+1), C = (-1)^(L+S), and L and S add to J",
            );
        }
    }
}

fn couplings(
    path: &str,
    of: &doc::Couplings,
    particles: Option<(&BeamParticle, &BeamParticle)>,
    log: &mut Log,
) -> Couplings {
    match of {
        doc::Couplings::Helicity { amplitudes } => Couplings::Helicity {
            amplitudes: amplitudes
                .iter()
                .enumerate()
                .map(|(i, term)| {
                    let path = format!("{path}.amplitudes[{i}]");
                    let mut helicity = |field: &str, text: &str, beam: Option<&BeamParticle>| {
                        let read = signed_twice(text);
                        let most = beam.map_or(20, |beam| match beam.mass_gev {
                            0.0 => 2,
                            _ => i8::try_from(beam.spin_states.saturating_sub(1)).unwrap_or(0),
                        });
                        let odd = beam.is_some_and(|beam| beam.mass_gev > 0.0 && beam.spin_states % 2 == 0);
                        let fits = read.is_some_and(|l| {
                            l.abs() <= most && (beam.is_none_or(|b| b.mass_gev == 0.0) || (l % 2 != 0) == odd)
                        });
                        if !fits {
                            log.refuse(
                                &format!("{path}.{field}"),
                                text,
                                "a helicity that the particle's spin allows: 0, 1/2, -1/2, 1, -1, ...",
                                "the particle has no such helicity",
                            );
                        }
                        read.unwrap_or(0)
                    };
                    let twice_l1 = helicity("l1", &term.l1, particles.map(|p| p.0));
                    let twice_l2 = helicity("l2", &term.l2, particles.map(|p| p.1));
                    HelicityCoupling {
                        twice_l1,
                        twice_l2,
                        magnitude: log.value(&format!("{path}.magnitude"), &term.magnitude, Number),
                        phase_rad: log
                            .optional(&format!("{path}.phase"), term.phase.as_ref(), Angle)
                            .unwrap_or(0.0),
                    }
                })
                .collect(),
        },
        doc::Couplings::Ls { s1, s2, terms } => {
            if particles.is_some_and(|(a, b)| a.mass_gev == 0.0 || b.mass_gev == 0.0) {
                log.refuse(
                    path,
                    "LS couplings",
                    "helicity amplitudes",
                    "a massless beam has no helicity 0, so LS couplings do not describe it",
                );
            }
            let mut spin = |field: String, text: &str| {
                let read = twice(text);
                if read.is_none() {
                    log.refuse(&field, text, "0, 1/2, 1, ...", "this is no spin");
                }
                read.unwrap_or(0)
            };
            let twice_s1 = spin(format!("{path}.s1"), s1);
            let twice_s2 = spin(format!("{path}.s2"), s2);
            let terms: Vec<LsTerm> = terms
                .iter()
                .enumerate()
                .map(|(i, term)| {
                    let path = format!("{path}.terms[{i}]");
                    LsTerm {
                        l: term.l,
                        twice_s: {
                            let read = twice(&term.s);
                            if read.is_none() || term.l > 10 {
                                log.refuse(
                                    &format!("{path}.s"),
                                    &term.s,
                                    "S of 0, 1/2, 1, ... and L up to 10",
                                    "these are no L and S",
                                );
                            }
                            read.unwrap_or(0)
                        },
                        magnitude: log.value(&format!("{path}.magnitude"), &term.magnitude, Number),
                        phase_rad: log
                            .optional(&format!("{path}.phase"), term.phase.as_ref(), Angle)
                            .unwrap_or(0.0),
                    }
                })
                .collect();
            if let Some((a, b)) = particles
                && (a.spin_states != twice_s1 + 1 || b.spin_states != twice_s2 + 1)
            {
                log.refuse(
                    path,
                    &format!("{s1}, {s2}"),
                    "the beams' own spins",
                    "the spins of the LS couplings are not those of the beams",
                );
            }
            Couplings::Ls {
                twice_s1,
                twice_s2,
                terms,
            }
        }
    }
}

/// Twice a helicity: "-1/2" is -1.
fn signed_twice(text: &str) -> Option<i8> {
    let text = text.trim();
    let (negative, size) = match text.strip_prefix(['-', '\u{2212}']) {
        Some(rest) => (true, rest),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    };
    let size = i8::try_from(twice(size)?).ok()?;
    Some(if negative { -size } else { size })
}
