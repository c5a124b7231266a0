//! Beams: two particles, an arrangement, and the conversion of a setting into W and back.

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
