//! Small sums of a shift: thresholds and momenta, coupling, width and lifetime, peak heights, times to n events.

use super::{Body, Named, Reply, first_problem};
use crate::check::{self, twice};
use crate::doc::Sheet;
use crate::particles;
use crate::quantity::unit::read_unit;
use crate::quantity::{Dimension, format, read};
use serde::{Deserialize, Serialize};
use widthwise_core::amplitude::peak::peak_cross_section_nb;
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::kinematics::break_up_momentum_gev;
use widthwise_core::propagator::conventions::{Decay, lifetime_s};
use widthwise_core::units::HBAR_GEV_S;

/// Digits shown.
const DIGITS: usize = 8;
/// Seconds of an hour.
const HOUR_S: f64 = 3600.0;

/// What is looked up; every value as typed, with its unit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "of", rename_all = "snake_case", deny_unknown_fields)]
pub enum LookUp {
    /// Threshold of a pair, and its momentum in its rest frame at a W.
    Pair {
        /// A particle of the table, or a mass.
        first: String,
        /// The other.
        second: String,
        /// W; empty: the threshold alone.
        w: String,
    },
    /// Coupling, width and lifetime of a scalar or pseudoscalar that decays into a pair of Dirac fermions.
    Coupling {
        /// A pseudoscalar; else a scalar.
        pseudoscalar: bool,
        /// Mass of the mediator.
        mass: String,
        /// A particle of the table, or a mass.
        fermion: String,
        /// Colour factor: 1, or 3 for quarks.
        colours: u8,
        /// Which of the three is given.
        given: Given,
        /// Its value.
        value: String,
    },
    /// Height of a resonance by itself at W = M, before radiation and spread, for the sheet's beams.
    Peak {
        /// Mass.
        mass: String,
        /// Spin of the wave ("1", "1/2").
        spin: String,
        /// Product of the branching fractions into entrance and exit.
        product: String,
    },
    /// Rate, and the time until so many events of the signal are there.
    Rate {
        /// Observed cross section.
        cross_section: String,
        /// Luminosity per time.
        luminosity: String,
        /// Efficiency; empty: 1.
        efficiency: String,
        /// Rate of the background; empty: none.
        background: String,
        /// Events wanted.
        events: String,
    },
}

/// Which of the three is given.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Given {
    /// The coupling g.
    Coupling,
    /// The width.
    Width,
    /// The lifetime.
    Lifetime,
}

/// Answers one.
pub fn answer(sheet: &Sheet, of: &LookUp) -> Answer<Reply> {
    let values = match of {
        LookUp::Pair { first, second, w } => pair(sheet, first, second, w)?,
        LookUp::Coupling {
            pseudoscalar,
            mass,
            fermion,
            colours,
            given,
            value,
        } => coupling(*pseudoscalar, mass, fermion, *colours, *given, value)?,
        LookUp::Peak {
            mass,
            spin,
            product,
        } => peak(sheet, mass, spin, product)?,
        LookUp::Rate {
            cross_section,
            luminosity,
            efficiency,
            background,
            events,
        } => rate(
            positive("cross_section", cross_section, Dimension::CrossSection)?,
            positive("luminosity", luminosity, Dimension::LuminosityRate)?,
            or("efficiency", efficiency, Dimension::Number, 1.0)?,
            or("background", background, Dimension::Rate, 0.0)?,
            positive("events", events, Dimension::Number)?,
        ),
    };
    Ok(Reply {
        body: Body::LookedUp { values },
        columns: Vec::new(),
    })
}

fn positive(field: &str, text: &str, dimension: Dimension) -> Answer<f64> {
    let value = read(text, dimension).map_err(|p| p.at(field, text))?.value;
    if value > 0.0 {
        return Ok(value);
    }
    Err(Refusal::new(
        field,
        text,
        "above 0",
        "this has to be above 0",
    ))
}

fn or(field: &str, text: &str, dimension: Dimension, else_it_is: f64) -> Answer<f64> {
    if text.trim().is_empty() {
        return Ok(else_it_is);
    }
    let value = read(text, dimension).map_err(|p| p.at(field, text))?.value;
    if value >= 0.0 {
        return Ok(value);
    }
    Err(Refusal::new(
        field,
        text,
        "0 or more",
        "this has to be 0 or more",
    ))
}

/// Mass of a particle of the table, or a typed one.
fn mass_of(field: &str, text: &str) -> Answer<f64> {
    if let Some(particle) = particles::find(text) {
        return Ok(particle.mass_gev);
    }
    read(text, Dimension::Energy)
        .ok()
        .map(|reading| reading.value)
        .filter(|mass| *mass >= 0.0)
        .ok_or_else(|| {
            Refusal::new(
                field,
                text,
                "a particle of the table, or a mass with its unit",
                "this is neither a known particle nor a mass",
            )
        })
}

fn energy(name: &str, value: f64) -> Named {
    Named::new(name, value, Dimension::Energy, None, DIGITS)
}

fn pair(sheet: &Sheet, first: &str, second: &str, w: &str) -> Answer<Vec<Named>> {
    let (m1, m2) = (mass_of("first", first)?, mass_of("second", second)?);
    let threshold = m1 + m2;
    let mut values = vec![energy("threshold", threshold)];
    // A threshold may lie out of reach of the beams: then there is nothing to dial.
    if let Ok((frame, _)) = check::frame(sheet)
        && let Ok(setting) = frame.setting_of_w(threshold)
    {
        let dimension = check::dial_dimension(sheet.beam.dial);
        let name = "threshold, to dial";
        values.push(Named::new(name, setting, dimension, None, DIGITS));
    }
    if w.trim().is_empty() {
        return Ok(values);
    }
    let w_gev = positive("w", w, Dimension::Energy)?;
    if w_gev < threshold {
        let text = format::for_the_eye(threshold, None, Dimension::Energy, None, DIGITS);
        return Err(Refusal::new(
            "w",
            w,
            format!("at least {text}"),
            format!("the pair begins at {text}"),
        ));
    }
    let q = break_up_momentum_gev(w_gev, m1, m2);
    values.push(Named::new(
        "break-up momentum",
        q,
        Dimension::Momentum,
        None,
        DIGITS,
    ));
    values.push(energy("above threshold", w_gev - threshold));
    for (name, m) in [
        ("velocity of the first", m1),
        ("velocity of the second", m2),
    ] {
        let e = (q * q + m * m).sqrt();
        let beta = if e > 0.0 { q / e } else { 1.0 };
        values.push(Named::new(name, beta, Dimension::Number, None, 6));
    }
    Ok(values)
}

fn coupling(
    pseudoscalar: bool,
    mass: &str,
    fermion: &str,
    colours: u8,
    given: Given,
    value: &str,
) -> Answer<Vec<Named>> {
    let mass_gev = positive("mass", mass, Dimension::Energy)?;
    let m_gev = mass_of("fermion", fermion)?;
    if !matches!(colours, 1 | 3) {
        return Err(Refusal::new(
            "colours",
            colours,
            "1 or 3",
            "the colour factor is 1, for quarks 3",
        ));
    }
    let decay = if pseudoscalar {
        Decay::PseudoscalarToFermions { m_gev, colours }
    } else {
        Decay::ScalarToFermions { m_gev, colours }
    };
    let dimension = match given {
        Given::Coupling => Dimension::Number,
        Given::Width => Dimension::Energy,
        Given::Lifetime => Dimension::Time,
    };
    let number = positive("value", value, dimension)?;
    let width = match given {
        Given::Coupling => decay.width_gev(mass_gev, number),
        Given::Width => number,
        Given::Lifetime => HBAR_GEV_S / (number * HOUR_S),
    };
    let at_value = |refusal: Refusal| Refusal {
        field: "mass".into(),
        value: mass.into(),
        ..refusal
    };
    let g = decay.coupling(mass_gev, width).map_err(at_value)?;
    let mut values = vec![
        Named::new("coupling g", g, Dimension::Number, None, DIGITS),
        energy("width", width),
    ];
    if let Some(seconds) = lifetime_s(width) {
        let unit = read_unit("s").ok();
        values.push(Named::new(
            "lifetime",
            seconds / HOUR_S,
            Dimension::Time,
            unit.as_ref(),
            DIGITS,
        ));
    }
    Ok(values)
}

fn peak(sheet: &Sheet, mass: &str, spin: &str, product: &str) -> Answer<Vec<Named>> {
    let (frame, _) = check::frame(sheet).map_err(first_problem)?;
    let beams = &frame.scan.beams;
    let mass_gev = positive("mass", mass, Dimension::Energy)?;
    let twice_j = twice(spin).ok_or_else(|| {
        Refusal::new(
            "spin",
            spin,
            "0, 1/2, 1, 3/2, ... up to 10",
            "this is no spin",
        )
    })?;
    let product = positive("product", product, Dimension::Number)?;
    let largest = peak_cross_section_nb(beams, twice_j, mass_gev, 1.0);
    if largest <= 0.0 {
        return Err(Refusal::new(
            "mass",
            mass,
            "above the sum of the beam particles' masses",
            "the beams of this sheet cannot make this mass",
        ));
    }
    let nb = |name: &str, value| Named::new(name, value, Dimension::CrossSection, None, 6);
    Ok(vec![
        nb("peak, Born", largest * product),
        nb("largest by unitarity", largest),
    ])
}

/// s, b in 1/h; after t hours n = s t with relative error sqrt((s + b) t)/(s t).
fn rate(
    sigma_nb: f64,
    luminosity: f64,
    efficiency: f64,
    background: f64,
    events: f64,
) -> Vec<Named> {
    let signal = sigma_nb * luminosity * efficiency;
    if signal <= 0.0 {
        return vec![per_hour("rate of the signal", 0.0)];
    }
    let hours = events / signal;
    let error = ((signal + background) * hours).sqrt() / events;
    vec![
        per_hour("rate of the signal", signal),
        per_hour("rate of all", signal + background),
        Named::new("time to the events", hours, Dimension::Time, None, 4),
        Named::new("relative error then", error, Dimension::Number, None, 3),
        Named::new(
            "luminosity for them",
            hours * luminosity,
            Dimension::Luminosity,
            None,
            5,
        ),
    ]
}

fn per_hour(name: &str, value: f64) -> Named {
    Named::new(name, value, Dimension::Rate, None, 5)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn looked_up(of: &LookUp) -> Answer<Vec<Named>> {
        let sheet = crate::demos::open("saltmere").unwrap();
        match answer(&sheet, of)?.body {
            Body::LookedUp { values } => Ok(values),
            other => panic!("{other:?}"),
        }
    }

    fn named(values: &[Named], name: &str) -> f64 {
        values.iter().find(|v| v.name == name).unwrap().value
    }

    /// J/psi -> p pbar: p = 1232 MeV/c (Particle Data Group, summary tables, column p).
    #[test]
    fn pair_at_a_resonance() {
        let found = looked_up(&LookUp::Pair {
            first: "p".into(),
            second: "pbar".into(),
            w: "3096.900 MeV".into(),
        })
        .unwrap();
        assert!((named(&found, "break-up momentum") - 1.232).abs() < 5e-4);
        assert!((named(&found, "threshold") - 2.0 * 0.938_272_089_43).abs() < 1e-12);
    }

    #[test]
    fn below_threshold_there_is_no_momentum() {
        let refusal = looked_up(&LookUp::Pair {
            first: "p".into(),
            second: "pbar".into(),
            w: "1.8 GeV".into(),
        })
        .unwrap_err();
        assert_eq!(refusal.field, "w");
    }

    /// Scenario of an invented muon ring: g = 4.0e-4 and M = 47.3042 GeV make 0.301 keV.
    #[test]
    fn coupling_width_and_lifetime_go_round() {
        let of = |given, value: &str| LookUp::Coupling {
            pseudoscalar: false,
            mass: "47.3042 GeV".into(),
            fermion: "mu-".into(),
            colours: 1,
            given,
            value: value.into(),
        };
        let found = looked_up(&of(Given::Coupling, "4.0e-4")).unwrap();
        let width = named(&found, "width");
        assert!((width * 1e6 - 0.301).abs() < 5e-4, "{width} GeV");
        // hbar = 6.582119569509e-25 GeV s.
        assert!(
            (named(&found, "lifetime") * 3600.0 * width / 6.582_119_569_509e-25 - 1.0).abs()
                < 1e-12
        );
        let lifetime = found.iter().find(|v| v.name == "lifetime").unwrap();
        let back = looked_up(&of(Given::Lifetime, &lifetime.text)).unwrap();
        assert!((named(&back, "coupling g") / 4.0e-4 - 1.0).abs() < 1e-7);
    }

    /// 32.4 nb^-1/h and 42 % on 14.76 nb: 200.9 an hour (by hand).
    #[test]
    fn time_to_events() {
        let found = looked_up(&LookUp::Rate {
            cross_section: "14.76 nb".into(),
            luminosity: "9.0e30 cm^-2 s^-1".into(),
            efficiency: "0.42".into(),
            background: String::new(),
            events: "10000".into(),
        })
        .unwrap();
        assert!((named(&found, "rate of the signal") - 200.854).abs() < 1e-3);
        assert!((named(&found, "time to the events") - 49.787).abs() < 1e-3);
        assert!((named(&found, "relative error then") - 0.01).abs() < 1e-12);
    }

    #[test]
    fn what_is_no_number_is_named() {
        let refusal = looked_up(&LookUp::Peak {
            mass: "heavy".into(),
            spin: "1".into(),
            product: "1e-5".into(),
        })
        .unwrap_err();
        assert_eq!(refusal.field, "mass");
    }
}
