//! What rows have in common: stage, common errors, pasted covariances; texts of fit and plan.

use super::log::Log;
use crate::doc::{self, Sheet};
use crate::quantity::Dimension::{
    self, CrossSectionSquared, Energy, EnergySquared, Number, NumberPerEnergy,
};
use widthwise_core::scan::{CommonErrors, Stage};

/// The stage; counts are always as the detector saw them.
pub fn stage(data: &doc::Data, log: &mut Log) -> Stage {
    let stage = match data.stage {
        doc::Stage::Observed => Stage::Observed,
        doc::Stage::RadiationRemoved => Stage::RadiationRemoved,
        doc::Stage::Born => Stage::Born,
    };
    log.optional("data.photon_cut", data.photon_cut.as_ref(), Energy);
    if stage == Stage::RadiationRemoved && data.photon_cut.is_none() {
        log.warn(
            "photon-cut-unknown",
            "Radiation has been removed from these data, but with which cut on W is not said.",
        );
    }
    stage
}

/// Errors common to rows.
pub fn common_errors(sheet: &Sheet, log: &mut Log) -> CommonErrors {
    let data = &sheet.data;
    let mut value = |field: &str, text: &Option<String>, dimension| {
        log.optional(&format!("data.{field}"), text.as_ref(), dimension)
            .unwrap_or(0.0)
    };
    let group_energy_gev = value("group_energy_error", &data.group_energy_error, Energy);
    let group_scale = value("group_scale_error", &data.group_scale_error, Number);
    let group_luminosity = value(
        "group_luminosity_error",
        &data.group_luminosity_error,
        Number,
    );
    let common = CommonErrors {
        energy_gev: value("common_energy_error", &data.common_energy_error, Energy),
        energy_slope: value("common_slope_error", &data.common_slope_error, Number),
        group_energy_gev,
        energy_covariance_gev2: None,
        scale: value("common_scale_error", &data.common_scale_error, Number),
        group_scale,
        luminosity: value(
            "common_luminosity_error",
            &data.common_luminosity_error,
            Number,
        ),
        group_luminosity,
        efficiency_slope_per_gev: value(
            "efficiency_slope_error",
            &data.efficiency_slope_error,
            NumberPerEnergy(1),
        ),
        point_spread: value("point_spread_error", &data.point_spread_error, Number),
        gaussian_factors: data.gaussian_factors,
        spread: 0.0,
    };
    let grouped = data.rows.iter().any(|row| row.group.is_some());
    if (group_energy_gev > 0.0 || group_scale > 0.0 || group_luminosity > 0.0)
        && !grouped
        && !data.rows.is_empty()
    {
        log.warn(
            "group-missing",
            "An error common to a fill is given, but no row says which fill it belongs to.",
        );
    }
    if let Some(monitor) = data.luminosity_monitor {
        let fed = match monitor {
            doc::LuminosityMonitor::WideAngle => Some("elastic scattering at wide angles"),
            doc::LuminosityMonitor::MuonPairs => Some("muon pairs"),
            _ => None,
        };
        if let Some(process) = fed {
            log.warn(
                "luminosity-fed-by-resonance",
                format!("The luminosity is measured with {process}: the resonance decays into them too, so on the peak it counts its own events as luminosity and comes out too low. Take small angles or two photons, or subtract the resonance's part."),
            );
        }
    }
    // A free spread carries its own constraint; otherwise how well it is known is an error of the model.
    let free = sheet.fit.free.iter().any(|id| id == "spread");
    let constrained = sheet
        .fit
        .constraints
        .iter()
        .any(|c| c.parameter == "spread");
    let known_to = sheet
        .beam
        .spread
        .known_to
        .as_ref()
        .and_then(|text| crate::limits::number("beam.spread.known_to", text, Number).ok())
        .map_or(0.0, |r| r.value);
    CommonErrors {
        spread: if free || constrained { 0.0 } else { known_to },
        ..common
    }
}

/// Covariance of all rows' cross sections, nb^2.
pub fn cross_section_covariance(sheet: &Sheet, log: &mut Log) -> Vec<Vec<f64>> {
    matrix(
        "data.covariance",
        &sheet.data.covariance,
        sheet.data.rows.len(),
        CrossSectionSquared,
        log,
    )
}

/// Covariance of all rows' energies, GeV^2.
pub fn energy_covariance(sheet: &Sheet, log: &mut Log) -> Vec<Vec<f64>> {
    matrix(
        "data.energy_covariance",
        &sheet.data.energy_covariance,
        sheet.data.rows.len(),
        EnergySquared,
        log,
    )
}

fn matrix(
    path: &str,
    texts: &[Vec<String>],
    n: usize,
    dimension: Dimension,
    log: &mut Log,
) -> Vec<Vec<f64>> {
    if texts.is_empty() {
        return Vec::new();
    }
    if texts.len() != n || texts.iter().any(|row| row.len() != n) {
        log.refuse(
            path,
            &format!("{} rows", texts.len()),
            &format!("{n} rows of {n} numbers"),
            "a covariance has one row and one column for each row of data",
        );
        return Vec::new();
    }
    let matrix: Vec<Vec<f64>> = texts
        .iter()
        .enumerate()
        .map(|(i, row)| {
            row.iter()
                .enumerate()
                .map(|(j, text)| log.value(&format!("{path}[{i}][{j}]"), text, dimension))
                .collect()
        })
        .collect();
    let entry = |i: usize, j: usize| matrix.get(i).and_then(|r| r.get(j)).copied();
    for i in 0..n {
        for j in 0..i {
            if let (Some(a), Some(b)) = (entry(i, j), entry(j, i))
                && (a - b).abs() > 1e-9 * a.abs().max(b.abs())
            {
                log.refuse(
                    &format!("{path}[{i}][{j}]"),
                    &a.to_string(),
                    &format!("{b}, as across the diagonal"),
                    "a covariance is symmetric",
                );
                return matrix;
            }
        }
    }
    matrix
}
