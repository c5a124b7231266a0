//! What a page has to know before anything is typed.

use super::{Body, KnownLimit, KnownParticle, Reply};
use crate::limits;
use crate::particles;
use crate::quantity::Dimension;

/// Known particles, limits and units.
pub fn answer() -> Reply {
    Reply {
        body: Body::Tables {
            particles: particles::all().iter().map(particle).collect(),
            limits: limits::TABLE.iter().map(limit).collect(),
            units: [
                Dimension::Energy,
                Dimension::Momentum,
                Dimension::CrossSection,
                Dimension::Luminosity,
                Dimension::LuminosityRate,
                Dimension::Time,
                Dimension::Rate,
                Dimension::Angle,
                Dimension::Radius,
                Dimension::Number,
            ]
            .iter()
            .map(|d| format!("{}: {}", d.noun(), d.units()))
            .collect(),
        },
        columns: Vec::new(),
    }
}

fn particle(p: &particles::Particle) -> KnownParticle {
    let half = p.twice_spin % 2 == 1;
    KnownParticle {
        name: p.name.to_string(),
        mass_gev: p.mass_gev,
        spin: if half {
            format!("{}/2", p.twice_spin)
        } else {
            (p.twice_spin / 2).to_string()
        },
        width_gev: (p.width_gev > 0.0).then_some(p.width_gev),
    }
}

fn limit(l: &limits::Limit) -> KnownLimit {
    KnownLimit {
        field: l.field.to_string(),
        name: l.name.to_string(),
        unit: l.dimension.core_unit().to_string(),
        least: l.least,
        least_allowed: l.least_allowed,
        largest: l.largest,
        whole: l.whole,
        why: format!("{} ({})", l.allowed(), l.why),
    }
}
