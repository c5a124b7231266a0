//! The same state in other words: conventions of mass and width.

use super::Words;
use crate::quantity::{Dimension, format, read};
use crate::requests::{Body, MassConvention, Named, Reply};
use widthwise_core::amplitude::hypothesis::Form;
use widthwise_core::error::Answer;
use widthwise_core::propagator::conventions::{Convention, MassAndWidth};

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
