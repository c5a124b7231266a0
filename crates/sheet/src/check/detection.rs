//! From cross section to counts.

use super::log::Log;
use crate::doc::Sheet;
use crate::quantity::Dimension::{CrossSection, LuminosityRate, Number, Rate};
use widthwise_core::scan::Detection;

/// The detection part of the scan; a luminosity that is not given is 0, which means unknown.
pub fn detection(sheet: &Sheet, log: &mut Log) -> Detection {
    let typed = &sheet.detection;
    let efficiency = log.optional("detection.efficiency", typed.efficiency.as_ref(), Number);
    let decay_fraction = log.optional(
        "detection.decay_fraction",
        typed.decay_fraction.as_ref(),
        Number,
    );
    let sigma_bg_nb = log.optional(
        "detection.background_cross_section",
        typed.background_cross_section.as_ref(),
        CrossSection,
    );
    let rate_bg_per_h = log.optional(
        "detection.background_rate",
        typed.background_rate.as_ref(),
        Rate,
    );
    log.optional(
        "detection.live_fraction",
        typed.live_fraction.as_ref(),
        Number,
    );
    log.optional("detection.tau", typed.tau.as_ref(), Number);
    let luminosity = log.optional(
        "beam.luminosity",
        sheet.beam.luminosity.as_ref(),
        LuminosityRate,
    );
    if luminosity.is_none() {
        log.warn(
            "luminosity-missing",
            "No instantaneous luminosity is given: rates and times cannot be told.",
        );
    }
    if efficiency.is_none()
        && sheet
            .data
            .rows
            .iter()
            .any(|row| row.counts.is_some() && row.efficiency.is_none())
    {
        log.warn(
            "efficiency-assumed",
            "No efficiency is given: it is taken as 1.",
        );
    }
    Detection {
        efficiency: efficiency.unwrap_or(1.0),
        decay_fraction: decay_fraction.unwrap_or(1.0),
        sigma_bg_nb: sigma_bg_nb.unwrap_or(0.0),
        rate_bg_per_h: rate_bg_per_h.unwrap_or(0.0),
        luminosity_nbinv_per_h: luminosity.unwrap_or(0.0),
    }
}
