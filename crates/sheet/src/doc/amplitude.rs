//! Hypotheses beside the one coherent sum: K-matrix, tree-level diagrams, several partial waves.

use super::Quantity;
use super::resonance::{Channel, FlatteChannel, Form, Loop};
use serde::{Deserialize, Serialize};

/// Which of its hypotheses a model stands for; the others are kept and do not count.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum ModelKind {
    /// The resonances in one coherent sum of one J.
    #[default]
    PartialWave,
    /// A two-channel K-matrix.
    KMatrix,
    /// Tree-level diagrams.
    Diagrams,
    /// The resonances in several partial waves, with angles.
    Waves,
}

impl ModelKind {
    /// Left out of the file then.
    pub(super) fn is_usual(&self) -> bool {
        *self == Self::PartialWave
    }
}

/// Two-channel K-matrix: K_ij = sum g_pi g_pj/(M_p^2 - s) + c_ij.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct KMatrix {
    /// Bare poles.
    pub poles: Vec<KPole>,
    /// The two channels.
    pub channels: Vec<KChannel>,
    /// c_11; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub c11: Option<Quantity>,
    /// c_12; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub c12: Option<Quantity>,
    /// c_22; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub c22: Option<Quantity>,
    /// Chew-Mandelstam functions; false: i rho.
    pub chew_mandelstam: bool,
    /// Channel of the beams, 1 or 2.
    pub entrance: u8,
    /// Channel that is seen, 1 or 2.
    pub exit: u8,
}

/// A bare pole.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct KPole {
    /// M_p.
    pub mass: Quantity,
    /// g_p1 (an energy).
    pub g1: Quantity,
    /// g_p2 (an energy).
    pub g2: Quantity,
}

/// A channel of the K-matrix.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct KChannel {
    /// Name.
    pub name: String,
    /// Mass 1.
    pub m1: Quantity,
    /// Mass 2.
    pub m2: Quantity,
}

/// Tree-level Yukawa diagrams; f is beam 1.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Diagrams {
    /// Reaction.
    pub reaction: Reaction,
    /// Mass of F, where the reaction has one.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub other_mass: Option<Quantity>,
    /// Mediators; where phi is a beam or in the final state exactly one, phi itself.
    pub mediators: Vec<Mediator>,
}

/// The six reactions.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum Reaction {
    /// f fbar -> F Fbar: s channel.
    PairToOtherPair,
    /// f F -> f F: t channel.
    OtherElastic,
    /// f fbar -> f fbar: s and t.
    PairElastic,
    /// f f -> f f: t and u.
    SameElastic,
    /// f phi -> f phi: s and u.
    Compton,
    /// f fbar -> phi phi: t and u.
    PairToScalars,
}

/// A scalar or pseudoscalar mediator.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Mediator {
    /// Name.
    pub name: String,
    /// Couples with gamma5.
    #[serde(default, skip_serializing_if = "core::ops::Not::not")]
    pub pseudoscalar: bool,
    /// Mass.
    pub mass: Quantity,
    /// Yukawa coupling to f.
    pub g: Quantity,
    /// Yukawa coupling to F, where the reaction has one; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub g_other: Option<Quantity>,
    /// Propagator in the s channel. `dressed`: loops of f and F with the couplings above.
    pub form: Form,
    /// Width, where the form has one.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub width: Option<Quantity>,
    /// Width channels (running width).
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub channels: Vec<Channel>,
    /// The two channels of the Flatte form.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub flatte: Vec<FlatteChannel>,
    /// Mass of each daughter (Gounaris-Sakurai).
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub daughter: Option<Quantity>,
    /// Further loops of a dressed mediator.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub loops: Vec<Loop>,
}

/// One partial wave of several; resonances say which one they belong to.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Wave {
    /// J.
    pub j: String,
    /// Parity and charge conjugation of a fermion-antifermion state ("--", "++"): what cannot be
    /// formed is refused, and LS couplings are held against it. Absent: not asked.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub pc: Option<String>,
    /// Phase against the first wave; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase: Option<Quantity>,
    /// Helicities of the beams.
    pub entrance: Couplings,
    /// Helicities of the final state.
    pub exit: Couplings,
}

/// How a state of given J is made of two particles; only ratios count.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Couplings {
    /// Helicity amplitudes.
    Helicity {
        /// Those that are not zero.
        amplitudes: Vec<HelicityTerm>,
    },
    /// LS couplings.
    Ls {
        /// Spin of particle 1.
        s1: String,
        /// Spin of particle 2.
        s2: String,
        /// Terms.
        terms: Vec<LsTerm>,
    },
}

/// One helicity amplitude.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct HelicityTerm {
    /// Helicity of particle 1 ("1/2", "-1").
    pub l1: String,
    /// Helicity of particle 2.
    pub l2: String,
    /// Modulus.
    pub magnitude: Quantity,
    /// Phase; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase: Option<Quantity>,
}

/// One LS coupling.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct LsTerm {
    /// L.
    pub l: u8,
    /// S ("0", "1/2", "1").
    pub s: String,
    /// Modulus.
    pub magnitude: Quantity,
    /// Phase; absent = 0.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub phase: Option<Quantity>,
}
