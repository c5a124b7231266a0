//! The document. Version 1.
//!
//! Every number is kept as the text a person typed, with its unit ("2874.20(5) MeV",
//! "9.0e30 cm^-2 s^-1", "3 %"), so that nothing typed is lost, no digit is invented, a
//! half-typed field can be saved, and every number in the file carries its unit.
//! What the text means is decided in one place (`quantity`), what is allowed in another (`limits`).

mod amplitude;
mod beam;
mod channel;
mod data;
mod detection;
mod fit;
mod model;
mod plan;
mod resonance;

pub use amplitude::{
    Couplings, Diagrams, HelicityTerm, KChannel, KMatrix, KPole, LsTerm, Mediator, ModelKind,
    Reaction, Wave,
};
pub use beam::{Arrangement, Beam, Calibration, Dial, ParticleChoice, Spread, SpreadKind};
pub use channel::ExitChannel;
pub use data::{AngleBin, Data, LuminosityMonitor, LuminositySource, Row, Stage};
pub use detection::Detection;
pub use fit::{Constraint, Fit};
pub use model::{Coherent, Incoherent, Model, Radiation};
pub use plan::{Plan, PlanComb, PlanGoal, PlanRival};
pub use resonance::{Channel, FlatteChannel, Form, Loop, Resonance, Shape, Strength, Vertex};
use serde::{Deserialize, Serialize};

/// Text of one number with its unit, as typed.
pub type Quantity = String;

/// The scan sheet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct Sheet {
    /// Always "widthwise scan sheet".
    pub format: String,
    /// Version of the document's layout.
    pub version: u32,
    /// Title.
    #[serde(default)]
    pub title: String,
    /// True for invented data: shown wherever the sheet shows.
    #[serde(default)]
    pub invented: bool,
    /// Free note.
    #[serde(default)]
    pub note: String,
    /// Beams and their dial.
    pub beam: Beam,
    /// Hypothesis.
    pub model: Model,
    /// Further exit channels, fitted together.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub channels: Vec<ExitChannel>,
    /// From cross section to counts.
    pub detection: Detection,
    /// What has been measured.
    pub data: Data,
    /// What the fit leaves free.
    #[serde(default)]
    pub fit: Fit,
    /// What the plan may do.
    #[serde(default)]
    pub plan: Plan,
}
