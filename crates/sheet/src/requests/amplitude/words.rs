//! The same state in other words: conventions of mass and width, coupling, width and lifetime.

use super::Words;
use crate::quantity::{Dimension, format, read};
use crate::requests::{Body, Decay, Known, MassConvention, Named, Reply};
use widthwise_core::amplitude::hypothesis::Form;
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::propagator::conventions::{self, Convention, MassAndWidth, lifetime_s};
use widthwise_core::units::HBAR_GEV_S;

const ALL: [(Convention, &str); 4] = [
    (Convention::ConstantWidth, "constant width"),
    (Convention::MasslessChannels, "massless channels"),
    (Convention::PoleInW, "pole: sqrt(s_R) = M - i Gamma/2"),
    (Convention::PoleInS, "pole: s_R = M^2 - i M Gamma"),
];

/// The convention that a form's mass and width follow, if it is one of the four.
pub fn convention_of(form: &Form) -> Option<Convention> {
    match form {
        Form::ConstantWidth => Some(Convention::ConstantWidth),
        Form::MasslessChannels => Some(Convention::MasslessChannels),
        _ => None,
    }
}

fn energy(gev: f64, digits: usize) -> String {
    format::for_the_eye(gev, None, Dimension::Energy, None, digits)
}

/// A mass and a width in every convention that can write them.
pub fn all(own: MassAndWidth) -> Vec<Words> {
    ALL.iter()
        .filter_map(|(convention, name)| {
            let other = own.to(*convention).ok()?;
            Some(Words {
                convention: (*name).to_string(),
                mass: energy(other.mass_gev, 9),
                width: energy(other.width_gev, 7),
                note: own.same_curve(*convention).to_string(),
            })
        })
        .collect()
}

/// A typed mass and width of one convention in all others.
pub fn reword(convention: MassConvention, mass: &str, width: &str) -> Answer<Reply> {
    let typed = |field: &str, text: &str| {
        read(text, Dimension::Energy)
            .map(|r| r.value)
            .map_err(|p| p.at(field, text))
    };
    let convention = match convention {
        MassConvention::ConstantWidth => Convention::ConstantWidth,
        MassConvention::MasslessChannels => Convention::MasslessChannels,
        MassConvention::PoleInW => Convention::PoleInW,
        MassConvention::PoleInS => Convention::PoleInS,
    };
    let own = MassAndWidth {
        convention,
        mass_gev: typed("mass", mass)?,
        width_gev: typed("width", width)?,
    };
    // A mass and width that no convention can write are refused by the conversion itself.
    own.to(if convention == Convention::PoleInS {
        Convention::PoleInW
    } else {
        Convention::PoleInS
    })?;
    let mut values = Vec::new();
    if let Some(seconds) = own.lifetime_s() {
        values.push(lifetime(seconds));
    }
    Ok(Reply {
        body: Body::Words {
            words: all(own),
            values,
        },
        columns: Vec::new(),
    })
}

fn lifetime(seconds: f64) -> Named {
    Named {
        name: "lifetime".into(),
        value: seconds,
        error: None,
        unit: "s".into(),
        text: format!("{} s", format::significant(seconds, 5)),
    }
}

/// Coupling, partial width and lifetime of a two-body decay, from any one of them.
pub fn coupling(mass: &str, decay: &Decay, known: Known, value: &str) -> Answer<Reply> {
    let number = |field: &str, text: &str, dimension| {
        read(text, dimension)
            .map(|r| r.value)
            .map_err(|p| p.at(field, text))
    };
    let mass_gev = number("mass", mass, Dimension::Energy)?;
    if mass_gev <= 0.0 {
        return Err(Refusal::new(
            "mass",
            mass,
            "above 0",
            "a mass has to be above 0",
        ));
    }
    let scalars = matches!(decay, Decay::Scalars { .. });
    let of = match decay {
        Decay::Fermions {
            pseudoscalar,
            m,
            colours,
        } => {
            let m_gev = number("m", m, Dimension::Energy)?;
            if *pseudoscalar {
                conventions::Decay::PseudoscalarToFermions {
                    m_gev,
                    colours: *colours,
                }
            } else {
                conventions::Decay::ScalarToFermions {
                    m_gev,
                    colours: *colours,
                }
            }
        }
        Decay::Scalars { m1, m2, identical } => conventions::Decay::ToScalars {
            m1_gev: number("m1", m1, Dimension::Energy)?,
            m2_gev: number("m2", m2, Dimension::Energy)?,
            identical: *identical,
        },
    };
    let dimension = if scalars {
        Dimension::Energy
    } else {
        Dimension::Number
    };
    let g = match known {
        Known::Coupling => number("value", value, dimension)?,
        Known::Width => of.coupling(mass_gev, number("value", value, Dimension::Energy)?)?,
        Known::Lifetime => {
            let hours = number("value", value, Dimension::Time)?;
            if hours <= 0.0 {
                return Err(Refusal::new(
                    "value",
                    value,
                    "above 0",
                    "a lifetime has to be above 0",
                ));
            }
            of.coupling(mass_gev, HBAR_GEV_S / (hours * 3600.0))?
        }
    };
    let width = of.width_gev(mass_gev, g);
    let factor = of.width_per_coupling2(mass_gev);
    let name = if scalars { "coupling h" } else { "coupling g" };
    let mut values = vec![
        Named::new(name, g, dimension, None, 9),
        Named::new("partial width", width, Dimension::Energy, None, 9),
        Named {
            name: "width per squared coupling".into(),
            value: factor,
            error: None,
            unit: if scalars { "1/GeV" } else { "GeV" }.into(),
            text: if scalars {
                format!("{} /GeV", format::significant(factor, 6))
            } else {
                energy(factor, 6)
            },
        },
    ];
    if let Some(seconds) = lifetime_s(width) {
        values.push(lifetime(seconds));
    } else {
        values.push(Named {
            name: "stable".into(),
            value: 0.0,
            error: None,
            unit: String::new(),
            text: "the mediator lies at or below this channel's threshold: it is stable against it"
                .into(),
        });
    }
    Ok(Reply {
        body: Body::Words {
            words: Vec::new(),
            values,
        },
        columns: Vec::new(),
    })
}
