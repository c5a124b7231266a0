//! What the plan may do.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// What the plan may do (grows with the planning room).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Plan {
    /// Parameter whose error is to be least; absent: all (D-optimal).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub goal: Option<String>,
    /// Least W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity>,
    /// Largest W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity>,
    /// Step between allowed settings.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub step: Option<Quantity>,
    /// Hours left.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hours: Option<Quantity>,
    /// Unit of dwell time.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub dwell_step: Option<Quantity>,
    /// Least dwell.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub least_dwell: Option<Quantity>,
    /// Settle time per change.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub settle: Option<Quantity>,
}
