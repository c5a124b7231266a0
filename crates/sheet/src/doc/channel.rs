//! A further exit channel that is fitted together with the sheet's own.

use super::{Coherent, Detection, Incoherent, Model, Quantity, Vertex};
use serde::{Deserialize, Serialize};

/// A further exit channel: another final state of the same resonances, or (with a model of its own)
/// a known narrow peak scanned as a thermometer of offset and spread. Rows name it in `channel`.
///
/// Parameter ids are those of the sheet with `c1.` before them: `c1.r1.strength`, `c1.background.rate`.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct ExitChannel {
    /// Name, as in the rows.
    pub name: String,
    /// A hypothesis of its own; absent: the sheet's resonances, whose masses, widths and entrance
    /// strengths are common.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub model: Option<Model>,
    /// Exit strength of each resonance, in the kind of the sheet's: `Gamma_in B_f`, `B_in B_f`, `B_f` or `Gamma_f`.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub strengths: Vec<Quantity>,
    /// Phase of each resonance from the second on; absent: as in the sheet's own channel.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub phases: Vec<Quantity>,
    /// Exit vertex of the resonances; absent: as in the sheet's own channel.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub exit: Option<Vertex>,
    /// Background inside the modulus; absent: none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub coherent: Option<Coherent>,
    /// Background outside the modulus; absent: none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub incoherent: Option<Incoherent>,
    /// Sum of the final state's masses.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub final_threshold: Option<Quantity>,
    /// Least W left after radiation; absent: as in the sheet's own channel.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub w_min: Option<Quantity>,
    /// From cross section to counts; an absent efficiency or decay fraction is the sheet's, absent
    /// backgrounds are none.
    pub detection: Detection,
}
