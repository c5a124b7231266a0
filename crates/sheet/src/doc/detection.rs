//! From cross section to counts.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// From cross section to counts.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Detection {
    /// Efficiency where a row brings none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub efficiency: Option<Quantity>,
    /// Least W after radiation for which the efficiency was determined.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub photon_cut: Option<Quantity>,
    /// Decay fractions of the final state's particles.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub decay_fraction: Option<Quantity>,
    /// Visible background cross section.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub background_cross_section: Option<Quantity>,
    /// Background rate.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub background_rate: Option<Quantity>,
    /// Live fraction where a row brings none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub live_fraction: Option<Quantity>,
    /// tau where a row with off-region counts brings none.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub tau: Option<Quantity>,
}
