//! One resonance: propagator, vertices, strength.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// One resonance.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Resonance {
    /// Name.
    pub name: String,
    /// Mass.
    pub mass: Quantity,
    /// Width.
    pub width: Quantity,
    /// Strength.
    pub strength: Strength,
    /// Phase; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase: Option<Quantity>,
    /// Propagator.
    pub form: Form,
    /// Width channels (running width).
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub channels: Vec<Channel>,
    /// Entrance vertex; absent = the form's default.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub entrance: Option<Vertex>,
    /// Exit vertex; absent = the form's default.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub exit: Option<Vertex>,
}

/// Strength of a resonance.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Strength {
    /// Gamma_in B_f.
    GammaInBf {
        /// Energy.
        value: Quantity,
    },
    /// B_in B_f.
    BinBf {
        /// Number.
        value: Quantity,
    },
    /// B_in and B_f.
    Branchings {
        /// Number.
        b_in: Quantity,
        /// Number.
        b_f: Quantity,
    },
    /// Gamma_in and Gamma_f.
    PartialWidths {
        /// Energy.
        gamma_in: Quantity,
        /// Energy.
        gamma_f: Quantity,
    },
}

/// Propagator.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum Form {
    /// Constant width.
    ConstantWidth,
    /// Massless channels.
    MasslessChannels,
    /// Running width over the declared channels.
    RunningWidth,
}

/// One declared channel.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Channel {
    /// Name.
    pub name: String,
    /// Gamma_c(M)/Gamma ("50.1 %").
    pub fraction: Quantity,
    /// How it runs.
    pub shape: Shape,
}

/// How a channel's width runs.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Shape {
    /// Constant.
    Constant,
    /// s/M^2.
    Massless,
    /// Two spinless daughters.
    TwoBody {
        /// Mass 1.
        m1: Quantity,
        /// Mass 2.
        m2: Quantity,
        /// Orbital momentum.
        l: u8,
        /// Barrier radius (fm or GeV^-1); absent = none.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        radius: Option<Quantity>,
    },
    /// Rows (W, ratio).
    Tabulated {
        /// Rows.
        rows: Vec<(Quantity, Quantity)>,
    },
}

/// Vertex.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Vertex {
    /// M Gamma_c.
    Constant,
    /// M Gamma_c M^2/s.
    OnePhoton,
    /// M Gamma_c s/M^2.
    Massless,
    /// Running two-body channel.
    Running {
        /// Mass 1.
        m1: Quantity,
        /// Mass 2.
        m2: Quantity,
        /// Orbital momentum.
        l: u8,
        /// Barrier radius.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        radius: Option<Quantity>,
    },
}
