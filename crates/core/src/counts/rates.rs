//! Count rate against energy with its derivatives: what a plan of beam time is made from.

use super::Exposure;
use crate::error::{Answer, Refusal};
use crate::fit::{
    BACKGROUND_CROSS_SECTION, BACKGROUND_RATE, CurveModel, Need, ScanCurve, Site, differentiate,
};
use crate::scan::{Scan, Stage};

/// Rates at a list of energies, per hour of live beam at the luminosity of the scan's detection.
#[derive(Debug, Clone, PartialEq)]
pub struct Rates {
    /// Counts per hour.
    pub rate_per_h: Vec<f64>,
    /// Of these, signal.
    pub signal_per_h: Vec<f64>,
    /// d rate/dW, per hour and GeV.
    pub slope_per_h_gev: Vec<f64>,
    /// d rate/d parameter, by parameter, then energy, per hour and unit of the parameter.
    pub gradient_per_h: Vec<Vec<f64>>,
}

/// Rate and gradient at `w_gev` for the parameters `ids` (hypothesis, `spread`,
/// `background.cross_section`, `background.rate`), at the values that the scan holds.
/// The chain always runs to the observed stage: beam time is spent on observed events.
///
/// Accuracy: values as the chain's; derivatives by central differences, about 1e-4 relative.
///
/// # Errors
/// Unknown ids; what chain and hypothesis refuse; a luminosity or efficiency that is not above 0.
pub fn rate_and_gradient(scan: &Scan, ids: &[String], w_gev: &[f64]) -> Answer<Rates> {
    let exposure = Exposure::per_hour(&scan.detection);
    if !(exposure.signal_nbinv > 0.0 && exposure.signal_nbinv.is_finite()) {
        return Err(Refusal::new(
            "detection",
            exposure.signal_nbinv,
            "a luminosity and an efficiency above 0",
            "without luminosity and efficiency there is no rate",
        ));
    }
    let mut observed = scan.clone();
    observed.stage = Stage::Observed;
    // Points' own sigma_W belong to the points, not to planned energies.
    observed.points.clear();
    observed.exits.clear();
    let curve = ScanCurve::new(&observed, ids)?;
    let sites: Vec<Site> = w_gev
        .iter()
        .enumerate()
        .map(|(point, &w_gev)| Site {
            point,
            bin: None,
            w_gev,
            spread_factor: 1.0,
        })
        .collect();
    let values: Vec<f64> = curve.parameters().iter().map(|p| p.value).collect();
    let steps: Vec<f64> = curve
        .parameters()
        .iter()
        .map(|p| 0.05 * p.scale)
        .chain([1.0, 1.0])
        .collect();
    let need = Need {
        w: true,
        spread: false,
        slope: false,
    };
    let d = differentiate(&curve, &sites, &values, &steps, need, false)?;
    let background = exposure.background(&scan.detection);
    let signal_per_h: Vec<f64> = d.sigma.iter().map(|s| exposure.signal(*s)).collect();
    let gradient_per_h = ids
        .iter()
        .map(|id| match id.as_str() {
            BACKGROUND_CROSS_SECTION => vec![exposure.luminosity_nbinv; w_gev.len()],
            BACKGROUND_RATE => vec![1.0; w_gev.len()],
            other => curve
                .parameters()
                .iter()
                .position(|p| p.id == other)
                .and_then(|at| d.d_sigma.get(at))
                .map(|column| column.iter().map(|s| exposure.signal(*s)).collect())
                .unwrap_or_default(),
        })
        .collect();
    Ok(Rates {
        rate_per_h: signal_per_h.iter().map(|s| s + background).collect(),
        signal_per_h,
        slope_per_h_gev: d.slope.iter().map(|s| exposure.signal(*s)).collect(),
        gradient_per_h,
    })
}
