//! What the fit leaves free.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// What the fit leaves free. Parameter ids: `r1.mass`, `r1.width`, `r1.strength`, `r1.phase`,
/// `coherent.phase`, `coherent.0`..., `incoherent.0`..., `spread`, `background.cross_section`, `background.rate`.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Fit {
    /// Ids of free parameters.
    pub free: Vec<String>,
    /// Constraints (id, value with error).
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub constraints: Vec<Constraint>,
}

/// A Gaussian constraint on a parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Constraint {
    /// Id.
    pub parameter: String,
    /// Value with error, "0.71(2) MeV".
    pub value: Quantity,
}
