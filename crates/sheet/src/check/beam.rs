//! Beams, spread and calibration of a sheet.

use super::log::Log;
use crate::doc::{self, Arrangement, Dial, ParticleChoice, SpreadKind};
use crate::particles;
use crate::quantity::Dimension;
use widthwise_core::beam::{self, BeamParticle, BeamSpread, Beams, SettingKind};
use widthwise_core::error::Answer;
use widthwise_core::math;
use widthwise_core::scan::{Scan, Spread};

/// Everything of a sheet but its rows, as the core understands it.
#[derive(Debug, Clone)]
pub struct Frame {
    /// Tie between dialled and true W: (offset in GeV, slope).
    pub calibration: (f64, f64),
    /// The scan without points.
    pub scan: Scan,
}

impl Frame {
    /// True W of a dialled setting, both GeV.
    ///
    /// # Errors
    /// A setting that the beams cannot have.
    pub fn w_of_setting(&self, setting_gev: f64) -> Answer<f64> {
        let beams = &self.scan.beams;
        Ok(self.true_w(beams.w_gev(beams.dial, setting_gev)?))
    }

    /// True W of a dialled W, GeV.
    #[must_use]
    pub fn true_w(&self, dialled_w_gev: f64) -> f64 {
        let (offset, slope) = self.calibration;
        dialled_w_gev + (slope * dialled_w_gev + offset)
    }

    /// Dialled W of a true W, GeV.
    #[must_use]
    pub fn dialled_w(&self, w_gev: f64) -> f64 {
        let (offset, slope) = self.calibration;
        (w_gev - offset) / (1.0 + slope)
    }

    /// The number to dial for a true W, GeV, in the dial's kind.
    ///
    /// # Errors
    /// A W that the beams cannot reach.
    pub fn setting_of_w(&self, w_gev: f64) -> Answer<f64> {
        let beams = &self.scan.beams;
        beams.setting_gev(beams.dial, self.dialled_w(w_gev))
    }
}

/// What a number on this dial measures.
#[must_use]
pub fn dial_dimension(dial: Dial) -> Dimension {
    match dial {
        Dial::Momentum => Dimension::Momentum,
        _ => Dimension::Energy,
    }
}

/// The core's name of a dial.
#[must_use]
pub fn setting_kind(dial: Dial) -> SettingKind {
    match dial {
        Dial::W => SettingKind::W,
        Dial::TotalEnergy => SettingKind::TotalEnergy,
        Dial::KineticEnergy => SettingKind::KineticEnergy,
        Dial::Momentum => SettingKind::Momentum,
    }
}

/// The beams.
pub fn beams(beam: &doc::Beam, log: &mut Log) -> Option<Beams> {
    let first = particle("beam.first", &beam.first, log);
    let second = particle("beam.second", &beam.second, log);
    let crossing_rad = log
        .optional(
            "beam.crossing_angle",
            beam.crossing_angle.as_ref(),
            Dimension::Angle,
        )
        .unwrap_or(0.0);
    let arrangement = match beam.arrangement {
        Arrangement::EqualBeams => beam::Arrangement::EqualBeams { crossing_rad },
        Arrangement::FixedTarget => beam::Arrangement::FixedTarget,
        Arrangement::UnequalBeams => {
            let dimension = dial_dimension(beam.dial);
            let Some(text) = beam.second_setting.as_ref() else {
                log.refuse(
                    "beam.second_setting",
                    "",
                    "the energy of beam 2, in the dial's kind",
                    "beam 2 is not dialled, so its energy is needed",
                );
                return None;
            };
            let setting = log.value("beam.second_setting", text, dimension);
            let mass = second.as_ref()?.mass_gev;
            let total = match beam.dial {
                Dial::Momentum => math::hypot(setting, mass),
                Dial::KineticEnergy => setting + mass,
                Dial::W | Dial::TotalEnergy => setting,
            };
            beam::Arrangement::UnequalBeams {
                crossing_rad,
                second_total_energy_gev: total,
            }
        }
    };
    let beams = Beams {
        first: first?,
        second: second?,
        arrangement,
        dial: setting_kind(beam.dial),
    };
    if crossing_rad.is_nan() {
        return None;
    }
    if let Err(refusal) = widthwise_core::amplitude::born::Checked::check(&beams, "beam") {
        // The text of the sheet says more than the number the core saw.
        log.problems.push(refusal);
        return None;
    }
    Some(beams)
}

fn particle(path: &str, choice: &ParticleChoice, log: &mut Log) -> Option<BeamParticle> {
    let known = particles::find(&choice.name);
    let mass_path = format!("{path}.mass");
    let spin_path = format!("{path}.spin");
    let typed_mass = log.optional(&mass_path, choice.mass.as_ref(), Dimension::Energy);
    let typed_spin = match choice.spin.as_deref().map(|text| (text, twice(text))) {
        Some((_, Some(twice_spin))) => Some(twice_spin),
        Some((text, None)) => {
            log.refuse(
                &spin_path,
                text,
                "0, 1/2, 1, 3/2, ... up to 10",
                "this is no spin",
            );
            return None;
        }
        None => None,
    };
    let (mass_gev, twice_spin) = match (known, typed_mass, typed_spin) {
        (Some(p), mass, spin) => (mass.unwrap_or(p.mass_gev), spin.unwrap_or(p.twice_spin)),
        (None, Some(mass), Some(spin)) => (mass, spin),
        (None, mass, _) => {
            let (field, what) = if mass.is_none() {
                (mass_path, "mass")
            } else {
                (spin_path, "spin")
            };
            log.refuse(
                &field,
                "",
                "a particle of the table, or mass and spin",
                format!(
                    "\"{}\" is not in the table, so its {what} is needed",
                    choice.name
                ),
            );
            return None;
        }
    };
    let spin_states = if mass_gev == 0.0 { 2 } else { twice_spin + 1 };
    (!mass_gev.is_nan()).then(|| BeamParticle {
        name: choice.name.clone(),
        mass_gev,
        spin_states,
    })
}

/// 2J of "0", "1/2", "1", ... up to 10.
pub fn twice(text: &str) -> Option<u8> {
    let text = text.trim();
    let twice = match text.strip_suffix("/2") {
        Some(half) => half.trim().parse::<u8>().ok().filter(|n| n % 2 == 1)?,
        None => text.parse::<u8>().ok()?.checked_mul(2)?,
    };
    (twice <= 20).then_some(twice)
}

/// (offset in GeV, slope).
pub fn calibration(calibration: &doc::Calibration, log: &mut Log) -> (f64, f64) {
    let offset = log.optional(
        "beam.calibration.offset",
        calibration.offset.as_ref(),
        Dimension::Energy,
    );
    let slope = log.optional(
        "beam.calibration.slope",
        calibration.slope.as_ref(),
        Dimension::Number,
    );
    if let Some(at) = &calibration.at {
        crate::times::parse("beam.calibration.at", at)
            .map_err(|refusal| log.problems.push(refusal))
            .ok();
    } else if offset.is_some() || slope.is_some() {
        log.warn(
            "calibration-undated",
            "The calibration of W has no date, so its age cannot be told.",
        );
    }
    (offset.unwrap_or(0.0), slope.unwrap_or(0.0))
}

/// The spread of W about `w0_gev`.
pub fn spread(
    beam: &doc::Beam,
    beams: Option<&Beams>,
    w0_gev: Option<f64>,
    log: &mut Log,
) -> Option<Spread> {
    let spread = &beam.spread;
    log.optional(
        "beam.spread.known_to",
        spread.known_to.as_ref(),
        Dimension::Number,
    );
    let typed_power = match spread.power.as_deref().map(str::trim) {
        None => None,
        Some("0") => Some(0.0),
        Some("1") => Some(1.0),
        Some("2") => Some(2.0),
        Some(other) => {
            log.refuse(
                "beam.spread.power",
                other,
                "0, 1 or 2",
                "the spread grows as W to the power 0, 1 or 2",
            );
            return None;
        }
    };
    if !matches!(spread.kind, SpreadKind::None | SpreadKind::Table) && spread.known_to.is_none() {
        log.warn(
            "spread-exact",
            "The beam spread is taken as exactly known; a narrow width is only as good as it.",
        );
    }
    let dimension = match spread.kind {
        SpreadKind::None => return Some(Spread::None),
        SpreadKind::Table => return table(&spread.table, log),
        SpreadKind::W => Dimension::Energy,
        SpreadKind::Relative => Dimension::Number,
        SpreadKind::Each => dial_dimension(beam.dial),
    };
    let Some(text) = spread.first.as_ref() else {
        log.refuse(
            "beam.spread.first",
            "",
            "a spread, or kind \"none\"",
            "the spread is missing",
        );
        return None;
    };
    let first = log.value("beam.spread.first", text, dimension);
    let second = log
        .optional("beam.spread.second", spread.second.as_ref(), dimension)
        .unwrap_or(first);
    let (beams, w0_gev) = (beams?, w0_gev?);
    if first.is_nan() || second.is_nan() {
        return None;
    }
    let (sigma_gev, power) = match spread.kind {
        SpreadKind::W => (first, 0.0),
        kind => {
            let relative = kind == SpreadKind::Relative;
            let each = BeamSpread {
                kind: beams.dial,
                relative,
                first,
                second,
            };
            match beams.sigma_w_gev(w0_gev, &each) {
                Ok(sigma) => (sigma, if relative { 1.0 } else { 0.0 }),
                Err(refusal) => {
                    log.problems.push(refusal);
                    return None;
                }
            }
        }
    };
    if sigma_gev == 0.0 {
        return Some(Spread::None);
    }
    Some(Spread::Gaussian {
        sigma_gev,
        w0_gev,
        power: typed_power.unwrap_or(power),
    })
}

fn table(rows: &[(String, String)], log: &mut Log) -> Option<Spread> {
    let before = log.problems.len();
    let rows: Vec<(f64, f64)> = rows
        .iter()
        .enumerate()
        .map(|(i, (offset, weight))| {
            let path = format!("beam.spread.table[{i}]");
            (
                log.value(&format!("{path}.0"), offset, Dimension::Energy),
                log.value(&format!("{path}.1"), weight, Dimension::Number),
            )
        })
        .collect();
    if log.problems.len() > before {
        return None;
    }
    let rising = rows.iter().zip(rows.iter().skip(1)).all(|(a, b)| a.0 < b.0);
    if rows.len() < 2 || !rising || rows.iter().all(|(_, weight)| *weight == 0.0) {
        log.refuse(
            "beam.spread.table",
            &format!("{} rows", rows.len()),
            "at least two rows, offsets strictly rising, a weight above 0",
            "this table is no shape of a spread",
        );
        return None;
    }
    Some(Spread::Table { rows })
}
