//! What has been measured.

use super::Quantity;
use serde::{Deserialize, Serialize};

/// What has been measured.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Data {
    /// How far the data are corrected.
    pub stage: Stage,
    /// With which cut on W radiation was removed (stage radiation_removed).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub photon_cut: Option<Quantity>,
    /// Energy error common to all rows.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub common_energy_error: Option<Quantity>,
    /// Relative scale error common to all rows.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub common_scale_error: Option<Quantity>,
    /// Energy error common to a fill or group.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub group_energy_error: Option<Quantity>,
    /// Relative error of the energy scale common to all rows (W becomes W (1 + r)).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub common_slope_error: Option<Quantity>,
    /// Relative scale error common to a fill or group.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub group_scale_error: Option<Quantity>,
    /// Relative luminosity error common to all rows (signal and background cross section).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub common_luminosity_error: Option<Quantity>,
    /// Relative luminosity error common to a fill or group.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub group_luminosity_error: Option<Quantity>,
    /// Error of d ln(efficiency)/dW (1/MeV).
    #[serde(skip_serializing_if = "Option::is_none")]
    pub efficiency_slope_error: Option<Quantity>,
    /// Relative error of sigma_W of each row on its own.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub point_spread_error: Option<Quantity>,
    /// Scale factors are 1 + delta eta (Gaussian) instead of exp(delta eta).
    #[serde(skip_serializing_if = "core::ops::Not::not")]
    pub gaussian_factors: bool,
    /// Process that the luminosity is measured with.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub luminosity_monitor: Option<LuminosityMonitor>,
    /// Which luminosity counts where rows bring both.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub luminosity_source: Option<LuminositySource>,
    /// Rows.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub rows: Vec<Row>,
    /// Pasted covariance of the rows' cross sections (row by row, with unit).
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub covariance: Vec<Vec<Quantity>>,
    /// Pasted covariance of the rows' energies (row by row, with unit), beside the rows' own errors.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub energy_covariance: Vec<Vec<Quantity>>,
}

/// How far the data are corrected.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum Stage {
    /// As observed.
    #[default]
    Observed,
    /// Radiation removed.
    RadiationRemoved,
    /// Radiation and spread removed.
    Born,
}

/// Source of a luminosity.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum LuminositySource {
    /// Monitor while running.
    Online,
    /// Final analysis.
    Final,
}

/// Process that a luminosity is measured with.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Copy, Eq)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(rename_all = "snake_case")]
pub enum LuminosityMonitor {
    /// Elastic scattering of the beams at small angles.
    SmallAngle,
    /// Elastic scattering of the beams at wide angles: a resonance decays into it.
    WideAngle,
    /// Annihilation into two photons.
    TwoPhotons,
    /// Muon pairs: a resonance decays into them.
    MuonPairs,
    /// Something that no resonance feeds.
    Other,
}

/// One row of data. Every field but setting or w, and counts or cross section, is optional.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, Default)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields, default)]
pub struct Row {
    /// Id, unique in the sheet.
    pub id: String,
    /// Start, RFC 3339 with zone.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub start: Option<String>,
    /// Stop, RFC 3339 with zone.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stop: Option<String>,
    /// Fill or group.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub group: Option<String>,
    /// Setting as dialled, in the dial's kind.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub setting: Option<Quantity>,
    /// W as calibrated; wins over setting.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub w: Option<Quantity>,
    /// Error of this W.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub w_error: Option<Quantity>,
    /// sigma_W of this point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sigma_w: Option<Quantity>,
    /// Integrated luminosity.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub luminosity: Option<Quantity>,
    /// Its statistical error.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub luminosity_error: Option<Quantity>,
    /// Where it comes from.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub luminosity_source: Option<LuminositySource>,
    /// The luminosity from the other source, kept for the swap.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub other_luminosity: Option<Quantity>,
    /// Live fraction.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub live_fraction: Option<Quantity>,
    /// Live time, if not stop - start.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub live_time: Option<Quantity>,
    /// Counts n.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub counts: Option<Quantity>,
    /// Counts in the off region.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub off_counts: Option<Quantity>,
    /// Ratio of off to on region.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub tau: Option<Quantity>,
    /// Efficiency.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub efficiency: Option<Quantity>,
    /// Its error.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub efficiency_error: Option<Quantity>,
    /// Exit channel: the name of a further one, else the sheet's own.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub channel: Option<String>,
    /// Counted with the beams apart: background rate alone.
    #[serde(skip_serializing_if = "core::ops::Not::not")]
    pub beams_apart: bool,
    /// Angular bins, which make up the row's counts: edges in |cos theta|, or in cos theta if one is below 0.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub angle_bins: Vec<AngleBin>,
    /// Cross section instead of counts.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub cross_section: Option<Quantity>,
    /// Its error.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub cross_section_error: Option<Quantity>,
    /// Left out of the fit.
    #[serde(skip_serializing_if = "core::ops::Not::not")]
    pub left_out: bool,
    /// Running now.
    #[serde(skip_serializing_if = "core::ops::Not::not")]
    pub running: bool,
    /// Comment.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub comment: String,
    /// Columns of a loaded file that mean nothing to us, kept: (header, text).
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub other: Vec<(String, String)>,
}

/// One angular bin of a row.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[cfg_attr(test, derive(schemars::JsonSchema))]
#[serde(deny_unknown_fields)]
pub struct AngleBin {
    /// Lower edge.
    pub from: Quantity,
    /// Upper edge.
    pub to: Quantity,
    /// Counts.
    pub counts: Quantity,
    /// Efficiency, if not the row's.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub efficiency: Option<Quantity>,
}
