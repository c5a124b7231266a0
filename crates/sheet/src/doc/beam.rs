//! Beams, dial, spread and calibration.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// Beams.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Beam {
    /// How the beams meet.
    pub arrangement: Arrangement,
    /// Beam 1.
    pub first: ParticleChoice,
    /// Beam 2, or the target.
    pub second: ParticleChoice,
    /// What the dial shows.
    pub dial: Dial,
    /// Crossing angle, 0 = head-on.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub crossing_angle: Option<Quantity>,
    /// Fixed energy of beam 2, in the dial's kind (total, kinetic or momentum; total if the dial is W).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub second_setting: Option<Quantity>,
    /// Spread.
    pub spread: Spread,
    /// Instantaneous luminosity.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub luminosity: Option<Quantity>,
    /// Tie between dialled value and true W.
    #[serde(default)]
    pub calibration: Calibration,
}

/// How the beams meet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum Arrangement {
    /// Two beams dialled alike.
    EqualBeams,
    /// Beam 1 dialled, beam 2 fixed.
    UnequalBeams,
    /// Beam 2 at rest.
    FixedTarget,
}

/// What the dial shows.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum Dial {
    /// W.
    W,
    /// Total energy of beam 1.
    TotalEnergy,
    /// Kinetic energy of beam 1.
    KineticEnergy,
    /// Momentum of beam 1.
    Momentum,
}

/// A particle from the table (name alone) or typed in.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct ParticleChoice {
    /// Name.
    pub name: String,
    /// Mass, if not from the table.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub mass: Option<Quantity>,
    /// Spin ("0", "1/2", "1"), if not from the table.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub spin: Option<String>,
}

/// Spread of the beams.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Spread {
    /// Which of the numbers below count.
    pub kind: SpreadKind,
    /// sigma_W (kind w), or relative spread of each beam (kind relative), or absolute spread of beam 1 in the dial's kind (kind each).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub first: Option<Quantity>,
    /// Spread of beam 2 where it differs.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub second: Option<Quantity>,
    /// How well it is known, relative ("3 %").
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub known_to: Option<Quantity>,
    /// Growth with W: "0", "1" or "2" (power).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub power: Option<String>,
    /// Rows (offset, weight) of a tabulated shape.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub table: Vec<(Quantity, Quantity)>,
}

/// Kind of spread.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum SpreadKind {
    /// None.
    None,
    /// Gaussian of W.
    W,
    /// Gaussian, relative per beam (of the dial's kind).
    Relative,
    /// Gaussian, absolute per beam (of the dial's kind).
    Each,
    /// Tabulated in W.
    Table,
}

/// Dialled value -> true W: W_true = (1 + slope) W_dialled + offset.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Calibration {
    /// Offset of W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub offset: Option<Quantity>,
    /// Relative slope.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub slope: Option<Quantity>,
    /// When it was taken (RFC 3339 with zone).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub at: Option<String>,
    /// How, by whom.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub note: String,
}
