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
    /// Width; without meaning in forms whose couplings make it.
    #[serde(default)]
    pub width: Quantity,
    /// Strength.
    pub strength: Strength,
    /// Phase; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase: Option<Quantity>,
    /// Propagator.
    pub form: Form,
    /// Which of several waves it belongs to, counted from 1; absent = the first.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub wave: Option<u8>,
    /// Width channels (running width).
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub channels: Vec<Channel>,
    /// The two channels of the Flatte form.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub flatte: Vec<FlatteChannel>,
    /// Mass of each daughter (Gounaris-Sakurai).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub daughter: Option<Quantity>,
    /// Loops of a dressed mediator.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub loops: Vec<Loop>,
    /// A dressed mediator that couples to fermions with gamma5.
    #[serde(default, skip_serializing_if = "core::ops::Not::not")]
    pub pseudoscalar: bool,
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
    /// The partial width of the one side whose vertex is not the form's own.
    OneWidth {
        /// Energy.
        value: Quantity,
    },
    /// Both vertices are the form's own and bring their strength.
    FromForm,
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
    /// Two channels near a threshold (Flatte).
    Flatte,
    /// Gounaris-Sakurai.
    GounarisSakurai,
    /// Dressed by loops, on-shell scheme.
    Dressed,
    /// 1/(s - M^2), where the scan cannot reach s = M^2.
    Free,
}

/// One channel of the Flatte form.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct FlatteChannel {
    /// Name.
    pub name: String,
    /// Squared coupling (a squared energy).
    pub g_squared: Quantity,
    /// Mass 1.
    pub m1: Quantity,
    /// Mass 2.
    pub m2: Quantity,
}

/// One loop of a dressed mediator.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Loop {
    /// Dirac fermion pair.
    Fermion {
        /// Name.
        name: String,
        /// Yukawa coupling.
        g: Quantity,
        /// Mass.
        mass: Quantity,
        /// Colour factor; absent = 1.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        colours: Option<u8>,
    },
    /// Scalar pair.
    Scalar {
        /// Name.
        name: String,
        /// Coupling h (an energy).
        h: Quantity,
        /// Mass 1.
        m1: Quantity,
        /// Mass 2.
        m2: Quantity,
        /// One real field twice.
        #[serde(default)]
        identical: bool,
    },
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
    /// A channel or loop of the form itself, counted from 1; brings its own strength.
    Own {
        /// Which.
        channel: u8,
    },
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
