//! Beams: two particles, an arrangement, and the conversion of a setting into W and back.

use crate::amplitude::born::Checked;
use crate::error::{Answer, Refusal};
use serde::{Deserialize, Serialize};

/// A beam particle.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct BeamParticle {
    /// Name as shown.
    pub name: String,
    /// Mass, GeV.
    pub mass_gev: f64,
    /// Number of spin states n in the average: 2s+1; photon: 2.
    pub spin_states: u8,
}

/// How the beams meet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum Arrangement {
    /// Two beams of equal energy per beam of the dialled kind, crossing angle in rad (0 = head-on).
    EqualBeams {
        /// chi, rad.
        crossing_rad: f64,
    },
    /// The dialled setting is beam 1's; beam 2 has a fixed total energy.
    UnequalBeams {
        /// chi, rad.
        crossing_rad: f64,
        /// Total energy of beam 2, GeV.
        second_total_energy_gev: f64,
    },
    /// Beam 2 is at rest.
    FixedTarget,
}

/// What the dial shows.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum SettingKind {
    /// W itself.
    W,
    /// Total energy of beam 1 (of each beam, if equal).
    TotalEnergy,
    /// Kinetic energy of beam 1.
    KineticEnergy,
    /// Momentum of beam 1.
    Momentum,
}

/// The two beams.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Beams {
    /// Beam 1 (the one that is dialled).
    pub first: BeamParticle,
    /// Beam 2 or target.
    pub second: BeamParticle,
    /// How they meet.
    pub arrangement: Arrangement,
    /// What the dial shows.
    pub dial: SettingKind,
}

mod convert;
mod spread;

pub use convert::{BeamsAt, Settings};
pub use spread::BeamSpread;

impl Checked for Beams {
    fn check(&self, path: &str) -> Answer<()> {
        for (name, particle) in [("first", &self.first), ("second", &self.second)] {
            let mass = particle.mass_gev;
            if !(mass.is_finite() && mass >= 0.0) {
                return Err(Refusal::new(
                    format!("{path}.{name}.mass"),
                    mass,
                    "a mass of 0 or more",
                    "a beam particle's mass has to be a number, 0 or more",
                ));
            }
            if particle.spin_states == 0 {
                return Err(Refusal::new(
                    format!("{path}.{name}.spin"),
                    particle.spin_states,
                    "1 or more spin states",
                    "a beam particle has at least one spin state",
                ));
            }
        }
        let (Arrangement::EqualBeams { crossing_rad }
        | Arrangement::UnequalBeams { crossing_rad, .. }) = self.arrangement
        else {
            if self.second.mass_gev == 0.0 {
                return Err(Refusal::new(
                    format!("{path}.second.mass"),
                    0.0,
                    "a mass above 0",
                    "a massless particle cannot be a target at rest",
                ));
            }
            return Ok(());
        };
        if !(0.0..core::f64::consts::FRAC_PI_2).contains(&crossing_rad) {
            return Err(Refusal::new(
                format!("{path}.crossing_angle"),
                crossing_rad,
                "0 (head-on) to below 90 degrees",
                "the crossing angle is counted from head-on and has to stay below 90 degrees",
            ));
        }
        if let Arrangement::UnequalBeams {
            second_total_energy_gev: energy,
            ..
        } = self.arrangement
            && !(energy.is_finite() && energy >= self.second.mass_gev && energy > 0.0)
        {
            return Err(Refusal::new(
                format!("{path}.second_setting"),
                energy,
                "a total energy of at least the particle's mass",
                "the energy of beam 2 lies below its particle's mass",
            ));
        }
        Ok(())
    }
}
