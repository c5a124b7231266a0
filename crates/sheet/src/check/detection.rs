//! From cross section to counts.

use super::log::Log;
use crate::doc::Sheet;
use crate::quantity::Dimension::{CrossSection, Energy, LuminosityRate, Number, Rate};
use widthwise_core::scan::Detection;

/// The detection part of the scan; a luminosity that is not given is 0, which means unknown.
pub fn detection(sheet: &Sheet, log: &mut Log) -> Detection {
    let typed = &sheet.detection;
    let efficiency = log.optional("detection.efficiency", typed.efficiency.as_ref(), Number);
    efficiency_of_one_cut(sheet, log);
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

/// An efficiency is a number for one photon cut: with another, events that the radiation takes
/// away are counted differently in efficiency and curve.
fn efficiency_of_one_cut(sheet: &Sheet, log: &mut Log) {
    let typed = sheet.detection.photon_cut.as_ref();
    let Some(cut) = log.optional("detection.photon_cut", typed, Energy) else {
        return;
    };
    let radiation = &sheet.model.radiation;
    let w_min = radiation
        .w_min
        .as_ref()
        .filter(|_| radiation.on)
        .and_then(|text| crate::quantity::read(text, Energy).ok())
        .map(|r| r.value);
    match w_min {
        Some(w_min) if (w_min / cut - 1.0).abs() > 1e-6 => log.warn(
            "efficiency-of-another-cut",
            format!("The efficiency belongs to a photon cut of W above {cut} GeV after radiation, the curve to {w_min} GeV: take both for one cut."),
        ),
        None => log.warn(
            "efficiency-of-another-cut",
            "The efficiency belongs to a photon cut, but radiation is off: its radiative losses are in no curve.",
        ),
        Some(_) => {}
    }
}
