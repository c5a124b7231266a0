//! The hypothesis with its backgrounds, and radiation.

use super::{Diagrams, KMatrix, ModelKind, Quantity, Resonance, Wave};
use serde::{Deserialize, Serialize};

/// Hypothesis.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Model {
    /// What it is made of; absent = the resonances in one coherent sum.
    #[serde(default, skip_serializing_if = "ModelKind::is_usual")]
    pub hypothesis: ModelKind,
    /// J of the coherent sum or the K-matrix ("0", "1/2", "1", ...).
    #[serde(default)]
    pub j: String,
    /// Resonances, those of one wave together and in the order of the waves.
    #[serde(default)]
    pub resonances: Vec<Resonance>,
    /// K-matrix.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub k_matrix: Option<KMatrix>,
    /// Tree-level diagrams.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub diagrams: Option<Diagrams>,
    /// Several partial waves.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub waves: Vec<Wave>,
    /// Total inside |cos theta| < this (diagrams, waves); absent = all angles.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub cos_cut: Option<Quantity>,
    /// Background inside the modulus.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub coherent: Option<Coherent>,
    /// Background outside the modulus.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub incoherent: Option<Incoherent>,
    /// Final state as shown ("b bbar").
    #[serde(default)]
    pub final_state: String,
    /// Sum of the final state's masses.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub final_threshold: Option<Quantity>,
    /// Radiation.
    pub radiation: Radiation,
    /// Number on the continuum.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub continuum_factor: Option<Quantity>,
    /// Requested relative accuracy; 1e-6 if absent.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub accuracy: Option<Quantity>,
}

/// Initial-state radiation.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Radiation {
    /// On or off.
    pub on: bool,
    /// Least W left after radiation; required if on.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub w_min: Option<Quantity>,
}

/// Background inside the modulus.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Coherent {
    /// Polynomial in (W-W0)/GeV.
    Polynomial {
        /// W0.
        w0: Quantity,
        /// Coefficients.
        coefficients: Vec<Quantity>,
        /// Phase.
        phase: Quantity,
    },
    /// C/M_1^2 v_1(s).
    SharedVertices {
        /// C.
        c: Quantity,
    },
    /// One-photon continuum.
    OnePhoton {
        /// c at W0.
        c: Quantity,
        /// W0.
        w0: Quantity,
        /// Phase.
        phase: Quantity,
    },
}

/// Background outside the modulus.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Incoherent {
    /// c0 (W0/W)^n.
    Power {
        /// c0.
        c0: Quantity,
        /// W0.
        w0: Quantity,
        /// n.
        n: Quantity,
    },
    /// Polynomial in (W-W0)/GeV.
    Polynomial {
        /// W0.
        w0: Quantity,
        /// Coefficients (cross sections; per GeV^i understood).
        coefficients: Vec<Quantity>,
    },
}
