//! The hypothesis of a sheet, radiation and accuracy.

use super::amplitude;
use super::beam::twice;
use super::log::Log;
use super::resonance;
use crate::doc::{self, Coherent, Incoherent, ModelKind, Sheet, Stage};
use crate::particles;
use crate::quantity::Dimension;
use widthwise_core::amplitude::diagrams::Channel;
use widthwise_core::amplitude::hypothesis::{
    CoherentBackground, Form, Hypothesis, IncoherentBackground, PartialWave,
};
use widthwise_core::beam::Beams;
use widthwise_core::scan::{ChainSettings, Spread};

/// Relative accuracy where the sheet asks for none.
const ACCURACY: f64 = 1e-6;

/// The hypothesis, checked against the beams.
pub fn hypothesis(model: &doc::Model, beams: Option<&Beams>, log: &mut Log) -> Option<Hypothesis> {
    let before = log.problems.len();
    let incoherent = model.incoherent.as_ref().and_then(|c| incoherent(c, log));
    let cos_cut = log.optional("model.cos_cut", model.cos_cut.as_ref(), Dimension::Number);
    let hypothesis = match model.hypothesis {
        ModelKind::PartialWave | ModelKind::Waves => {
            let whole = coherent_sum(model, beams, incoherent, log);
            if log.problems.len() > before {
                return None;
            }
            if model.hypothesis == ModelKind::Waves {
                amplitude::waves(model, whole?, beams?, cos_cut, log).map(Hypothesis::Waves)
            } else {
                whole.map(Hypothesis::PartialWave)
            }
        }
        ModelKind::KMatrix => {
            let twice_j = spin(model, log);
            let of = declared(model.k_matrix.as_ref(), "model.k_matrix", log);
            of.and_then(|of| amplitude::k_matrix(of, twice_j?, incoherent, log))
                .map(Hypothesis::KMatrix)
        }
        ModelKind::Diagrams => declared(model.diagrams.as_ref(), "model.diagrams", log)
            .map(|of| amplitude::diagrams(of, cos_cut, incoherent, log))
            .map(Hypothesis::Diagrams),
    };
    if log.problems.len() > before {
        return None;
    }
    let (hypothesis, beams) = (hypothesis?, beams?);
    let angles = matches!(model.hypothesis, ModelKind::Waves | ModelKind::Diagrams);
    if cos_cut.is_some() && !angles {
        log.warn(
            "cut-without-angles",
            "A cut on cos theta is given, but this hypothesis says nothing about angles: the cut does not act. Waves with helicities, or diagrams, have angles.",
        );
    }
    match hypothesis.prepare(beams) {
        Err(refusal) => log.problems.push(refusal),
        Ok(born) => {
            for warning in born.warnings() {
                if !log.warnings.contains(&warning) {
                    log.warnings.push(warning);
                }
            }
            if model.radiation.on
                && let Err(refusal) = born.radiation()
            {
                log.problems.push(refusal);
            }
        }
    }
    (log.problems.len() == before).then_some(hypothesis)
}

/// What this kind of hypothesis is made of, which has to be there.
fn declared<'a, T>(of: Option<&'a T>, path: &str, log: &mut Log) -> Option<&'a T> {
    if of.is_none() {
        log.refuse(
            path,
            "nothing",
            "what this kind of hypothesis is made of",
            "the model says that it is of this kind, but nothing is declared for it",
        );
    }
    of
}

/// 2J of the coherent sum.
fn spin(model: &doc::Model, log: &mut Log) -> Option<u8> {
    let twice_j = twice(&model.j);
    if twice_j.is_none() {
        log.refuse(
            "model.j",
            &model.j,
            "0, 1/2, 1, 3/2, ... up to 10",
            "this is no angular momentum",
        );
    }
    twice_j
}

/// All resonances with the backgrounds, as if they were one coherent sum.
fn coherent_sum(
    model: &doc::Model,
    beams: Option<&Beams>,
    incoherent: Option<IncoherentBackground>,
    log: &mut Log,
) -> Option<PartialWave> {
    // Each of several waves brings its own J.
    let twice_j = match model.hypothesis {
        ModelKind::Waves => Some(0),
        _ => spin(model, log),
    };
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
    let wave = PartialWave {
        twice_j: twice_j?,
        resonances,
        coherent,
        incoherent,
        final_threshold_gev,
        continuum_factor,
    };
    above_threshold(&wave, beams?, log);
    Some(wave)
}

/// Mass of what is scanned: the first resonance, bare pole or s-channel mediator, GeV.
pub fn resonance_gev(hypothesis: &Hypothesis) -> Option<f64> {
    match hypothesis {
        Hypothesis::PartialWave(wave) => wave.resonances.first().map(|r| r.mass_gev),
        Hypothesis::Waves(waves) => {
            let mut all = waves.waves.iter().flat_map(|wave| &wave.wave.resonances);
            all.next().map(|r| r.mass_gev)
        }
        Hypothesis::KMatrix(model) => model.poles.first().map(|pole| pole.mass_gev),
        Hypothesis::Diagrams(model) => {
            let in_s = model.reaction.channels().contains(&Channel::S)
                && !model.reaction.exchanges_fermion();
            let mediator = model.mediators.first().filter(|_| in_s)?;
            Some(mediator.mass_gev)
        }
    }
}

/// Where a spread holds that is given without an energy: at what is scanned, else at the first
/// row, else at twice the beams' threshold, GeV.
pub fn anchor_gev(sheet: &Sheet, hypothesis: &Hypothesis, beams: &Beams) -> f64 {
    let threshold = beams.first.mass_gev + beams.second.mass_gev;
    let number = |text: &Option<String>, dimension| {
        let reading = crate::quantity::read(text.as_ref()?, dimension).ok()?;
        Some(reading.value)
    };
    let row = || {
        let setting = super::dial_dimension(sheet.beam.dial);
        sheet.data.rows.iter().find_map(|row| {
            number(&row.w, Dimension::Energy).or_else(|| {
                let setting = number(&row.setting, setting)?;
                beams.w_gev(beams.dial, setting).ok()
            })
        })
    };
    resonance_gev(hypothesis)
        .filter(|mass| *mass > threshold)
        .or_else(row)
        .filter(|w| *w > threshold)
        .unwrap_or(2.0 * threshold)
}

fn above_threshold(wave: &PartialWave, beams: &Beams, log: &mut Log) {
    let beam_threshold = beams.first.mass_gev + beams.second.mass_gev;
    let (threshold, whose) = if beam_threshold >= wave.final_threshold_gev {
        (beam_threshold, "the beams'")
    } else {
        (wave.final_threshold_gev, "the final state's")
    };
    for (i, r) in wave.resonances.iter().enumerate() {
        let path = format!("model.resonances[{i}]");
        if r.form == Form::Free {
            if r.mass_gev > threshold {
                log.refuse(
                    &format!("{path}.form"),
                    "free",
                    &format!("a form with a width, or a mass below {threshold} GeV"),
                    "the scan reaches this state on shell, s = M^2, where the propagator without width has no value: a state that can decay is dressed by its own decay channels, and their width makes it finite",
                );
            }
            continue;
        }
        if r.mass_gev <= threshold {
            log.refuse(
                &format!("{path}.mass"),
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
