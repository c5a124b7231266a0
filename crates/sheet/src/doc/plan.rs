//! What the plan may do.

use super::{Model, Quantity};
use serde::{Deserialize, Serialize};

/// What the plan may do. Everything but `from`, `to`, `step` and `hours` may be left out.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Plan {
    /// Parameter whose error is to be least (id); absent, and no goals: all (D-optimal).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub goal: Option<String>,
    /// Further goals, or goals with a wanted error.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub goals: Vec<PlanGoal>,
    /// Share of the weight for the other parameters, so that they stay determined.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub others_share: Option<Quantity>,
    /// The hypothesis that the data shall tell from the sheet's own: the one goal, if given.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub rival: Option<Box<PlanRival>>,
    /// A comb of points for a peak of unknown mass.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub comb: Option<PlanComb>,
    /// Least W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub from: Option<Quantity>,
    /// Largest W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to: Option<Quantity>,
    /// Step of W between allowed settings.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub step: Option<Quantity>,
    /// When the hours begin (RFC 3339 with zone); fills and blocked times count from here.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub starts: Option<String>,
    /// Hours on the clock in all.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hours: Option<Quantity>,
    /// Of these, hours used up; absent: from `starts` to the end of the last row.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub hours_used: Option<Quantity>,
    /// Unit of dwell time.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub dwell_step: Option<Quantity>,
    /// Least dwell.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub least_dwell: Option<Quantity>,
    /// Settle time of any change.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub settle: Option<Quantity>,
    /// Further settle time for each step of W upwards.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub settle_up: Option<Quantity>,
    /// Further settle time for each step of W downwards.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub settle_down: Option<Quantity>,
    /// Within a fill energies only go "up" or "down" (hysteresis).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub one_way: Option<String>,
    /// Where the machine stands now, W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stands_at: Option<Quantity>,
    /// Beam of one fill; absent: continuous beam.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub fill: Option<Quantity>,
    /// From the end of one fill's beam to the next one's.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub refill: Option<Quantity>,
    /// Lifetime of the luminosity within a fill.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lifetime: Option<Quantity>,
    /// Luminosity at an energy, (W, luminosity), W rising: on straight lines between, constant outside.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub luminosity_at: Vec<(Quantity, Quantity)>,
    /// A calibration after each of these times.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub calibration_every: Option<Quantity>,
    /// How long it lasts.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub calibration_time: Option<Quantity>,
    /// Times without beam, (from, to) after the hours began.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub blocked: Vec<(Quantity, Quantity)>,
    /// At least so many distinct energies.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub least_distinct: Option<Quantity>,
    /// Off resonance is at or below this W ...
    #[serde(skip_serializing_if = "Option::is_none")]
    pub off_below: Option<Quantity>,
    /// ... and at or above this.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub off_above: Option<Quantity>,
    /// At least so many hours off resonance.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub off_hours: Option<Quantity>,
    /// This W in every fill.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reference: Option<Quantity>,
    /// Every fill on both sides of this W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub both_flanks_of: Option<Quantity>,
    /// Energy error of each visit.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub visit_energy_error: Option<Quantity>,
    /// Relative luminosity error of each visit.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub visit_luminosity_error: Option<Quantity>,
    /// Truths drawn from what is known; "1": plan for the best guess alone.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub truths: Option<Quantity>,
}

/// One goal.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct PlanGoal {
    /// A parameter's id, a product or quotient ("r1.strength / r1.width"), a sum or difference
    /// ("r2.mass - r1.mass").
    pub quantity: String,
    /// Error wanted, in the quantity's unit ("20 keV", "5 deg") or relative ("2 %").
    #[serde(skip_serializing_if = "Option::is_none")]
    pub wanted: Option<Quantity>,
    /// Weight beside other goals; 1 if absent.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub weight: Option<Quantity>,
}

/// A rival hypothesis.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct PlanRival {
    /// Its model.
    pub model: Model,
    /// What its fit would leave free (ids of its own parameters).
    #[serde(default)]
    pub free: Vec<String>,
}

/// A comb of points around the first resonance's mass.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct PlanComb {
    /// How far to either side of the mass it reaches; absent: two errors of the mass's constraint.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reach: Option<Quantity>,
    /// Spacing in units of the observed FWHM; absent: 0.6.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub spacing: Option<Quantity>,
    /// Live time of each point; absent: the hours left, shared out.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub dwell: Option<Quantity>,
    /// Global significance that counts as found, in standard deviations; absent: 5.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub significance: Option<Quantity>,
}
