//! The hypothesis of a sheet, radiation and accuracy.

use super::beam::twice;
use super::log::Log;
use super::resonance;
use crate::doc::{self, Coherent, Incoherent, Sheet, Stage};
use crate::particles;
use crate::quantity::Dimension;
use widthwise_core::amplitude::hypothesis::{
    CoherentBackground, Hypothesis, IncoherentBackground, PartialWave,
};
use widthwise_core::beam::Beams;
use widthwise_core::scan::{ChainSettings, Spread};

/// Relative accuracy where the sheet asks for none.
const ACCURACY: f64 = 1e-6;

/// The hypothesis, checked against the beams.
pub fn hypothesis(model: &doc::Model, beams: Option<&Beams>, log: &mut Log) -> Option<Hypothesis> {
    let before = log.problems.len();
    let twice_j = twice(&model.j);
    if twice_j.is_none() {
        log.refuse(
            "model.j",
            &model.j,
            "0, 1/2, 1, 3/2, ... up to 10",
            "this is no angular momentum",
        );
    }
    if model.resonances.is_empty() {
        log.refuse(
            "model.resonances",
            "none",
            "one resonance or more",
            "the hypothesis has no resonance",
        );
    }
    let leptons = beams.is_some_and(is_lepton_pair);
    let resonances: Vec<_> = model
        .resonances
        .iter()
        .enumerate()
        .filter_map(|(i, r)| {
            resonance::resonance(&format!("model.resonances[{i}]"), r, leptons, log)
        })
        .collect();
    let coherent = model.coherent.as_ref().and_then(|c| coherent(c, log));
    let incoherent = model.incoherent.as_ref().and_then(|c| incoherent(c, log));
    let final_threshold_gev = log
        .optional(
            "model.final_threshold",
            model.final_threshold.as_ref(),
            Dimension::Energy,
        )
        .unwrap_or(0.0);
    let continuum_factor = log
        .optional(
            "model.continuum_factor",
            model.continuum_factor.as_ref(),
            Dimension::Number,
        )
        .unwrap_or(1.0);
    if log.problems.len() > before {
        return None;
    }
    let beams = beams?;
    let wave = PartialWave {
        twice_j: twice_j?,
        resonances,
        coherent,
        incoherent,
        final_threshold_gev,
        continuum_factor,
    };
    above_threshold(&wave, beams, log);
    let hypothesis = Hypothesis::PartialWave(wave);
    if let Err(refusal) = hypothesis.prepare(beams) {
        log.problems.push(refusal);
    }
    (log.problems.len() == before).then_some(hypothesis)
}

/// Where spreads and defaults are anchored: the first resonance's mass, GeV.
pub fn reference_gev(hypothesis: &Hypothesis) -> Option<f64> {
    match hypothesis {
        Hypothesis::PartialWave(wave) => wave.resonances.first().map(|r| r.mass_gev),
        // The sheet does not declare these yet.
        _ => None,
    }
}

fn above_threshold(wave: &PartialWave, beams: &Beams, log: &mut Log) {
    let beam_threshold = beams.first.mass_gev + beams.second.mass_gev;
    let (threshold, whose) = if beam_threshold >= wave.final_threshold_gev {
        (beam_threshold, "the beams'")
    } else {
        (wave.final_threshold_gev, "the final state's")
    };
    for (i, r) in wave.resonances.iter().enumerate() {
        if r.mass_gev <= threshold {
            log.refuse(
                &format!("model.resonances[{i}].mass"),
                &format!("{} GeV", r.mass_gev),
                &format!("a mass above {threshold} GeV"),
                format!("the mass lies below {whose} threshold, so there is no peak to scan"),
            );
        }
    }
}

/// Radiation, spread and accuracy.
pub fn chain(
    sheet: &Sheet,
    beams: Option<&Beams>,
    spread: Option<Spread>,
    mass_gev: Option<f64>,
    log: &mut Log,
) -> Option<ChainSettings> {
    let radiation = &sheet.model.radiation;
    let path = "model.radiation.w_min";
    let typed = log.optional(path, radiation.w_min.as_ref(), Dimension::Energy);
    let accuracy = log
        .optional(
            "model.accuracy",
            sheet.model.accuracy.as_ref(),
            Dimension::Number,
        )
        .unwrap_or(ACCURACY);
    let w_min_gev = if radiation.on {
        radiated(typed, beams, mass_gev, log)
    } else {
        if sheet.data.stage == Stage::Observed && beams.is_some_and(is_lepton_pair) {
            log.warn(
                "radiation-off",
                "Radiation is off although the beams are leptons: observed peaks are lower and shifted.",
            );
        }
        None
    };
    Some(ChainSettings {
        w_min_gev,
        spread: spread?,
        accuracy,
    })
}

fn radiated(
    typed: Option<f64>,
    beams: Option<&Beams>,
    mass_gev: Option<f64>,
    log: &mut Log,
) -> Option<f64> {
    let path = "model.radiation.w_min";
    let Some(w_min) = typed else {
        log.refuse(
            path,
            "",
            "the least W left after radiation",
            "with radiation on, the least W left after it is needed: the sum of the final state's masses, for inclusive hadrons two pion masses, or the photon cut",
        );
        return None;
    };
    if let Some(beams) = beams
        && !is_lepton_pair(beams)
    {
        log.refuse(
            "model.radiation.on",
            "true",
            "radiation for two leptons of one kind",
            format!(
                "the radiation formula holds for a lepton and its antiparticle, not for {} and {}",
                beams.first.name, beams.second.name
            ),
        );
    }
    if let Some(mass) = mass_gev
        && w_min >= mass
    {
        log.refuse(
            path,
            &format!("{w_min} GeV"),
            &format!("below the mass, {mass} GeV"),
            "the cut on W after radiation lies above the resonance, so nothing would be left",
        );
    }
    Some(w_min)
}

/// A charged lepton and its antiparticle (by the table), or two equal typed-in particles of spin 1/2.
pub fn is_lepton_pair(beams: &Beams) -> bool {
    let same = beams.first.mass_gev == beams.second.mass_gev;
    let lepton = |name: &str| particles::find(name).map(particles::Particle::is_charged_lepton);
    let spin_half = beams.first.spin_states == 2 && beams.second.spin_states == 2;
    let first = lepton(&beams.first.name);
    let second = lepton(&beams.second.name);
    same && spin_half && first.unwrap_or(true) && second.unwrap_or(true)
}

fn coherent(background: &Coherent, log: &mut Log) -> Option<CoherentBackground> {
    let w0 = "model.coherent.w0";
    let phase = "model.coherent.phase";
    Some(match background {
        Coherent::Polynomial {
            w0: at,
            coefficients,
            phase: angle,
        } => CoherentBackground::Polynomial {
            w0_gev: log.value(w0, at, Dimension::Energy),
            coefficients: polynomial(
                "model.coherent.coefficients",
                coefficients,
                Dimension::NumberPerEnergy,
                log,
            ),
            phase_rad: log.value(phase, angle, Dimension::Angle),
        },
        Coherent::SharedVertices { c } => CoherentBackground::SharedVertices {
            c: log.value("model.coherent.c", c, Dimension::Number),
        },
        Coherent::OnePhoton {
            c,
            w0: at,
            phase: angle,
        } => CoherentBackground::OnePhoton {
            c_nb: log.value("model.coherent.c", c, Dimension::CrossSection),
            w0_gev: log.value(w0, at, Dimension::Energy),
            phase_rad: log.value(phase, angle, Dimension::Angle),
        },
    })
}

fn incoherent(background: &Incoherent, log: &mut Log) -> Option<IncoherentBackground> {
    let at = "model.incoherent.w0";
    Some(match background {
        Incoherent::Power { c0, w0, n } => IncoherentBackground::Power {
            c0_nb: log.value("model.incoherent.c0", c0, Dimension::CrossSection),
            w0_gev: log.value(at, w0, Dimension::Energy),
            n: log.value("model.incoherent.n", n, Dimension::Number),
        },
        Incoherent::Polynomial { w0, coefficients } => IncoherentBackground::Polynomial {
            w0_gev: log.value(at, w0, Dimension::Energy),
            coefficients_nb: polynomial(
                "model.incoherent.coefficients",
                coefficients,
                Dimension::CrossSectionPerEnergy,
                log,
            ),
        },
    })
}

/// Longest polynomial: beyond this the coefficients cannot be told apart by any scan.
const MOST_COEFFICIENTS: usize = 8;

fn polynomial(
    path: &str,
    texts: &[String],
    dimension: impl Fn(u8) -> Dimension,
    log: &mut Log,
) -> Vec<f64> {
    if texts.is_empty() || texts.len() > MOST_COEFFICIENTS {
        log.refuse(
            path,
            &texts.len().to_string(),
            &format!("1 to {MOST_COEFFICIENTS} coefficients"),
            "a polynomial background has at least one coefficient and not too many",
        );
        return Vec::new();
    }
    (0_u8..)
        .zip(texts)
        .map(|(i, text)| log.value(&format!("{path}[{i}]"), text, dimension(i)))
        .collect()
}
