//! Nuisances: what may be wrong in common, and how it acts on each point's prediction.

use crate::error::{Answer, Refusal};
use crate::scan::{CommonErrors, Measured, Point};
use nalgebra::DMatrix;
use serde::{Deserialize, Serialize};

/// What a nuisance stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum NuisanceKind {
    /// Shifts W.
    Energy,
    /// Multiplies the signal.
    SignalScale,
    /// Multiplies the luminosity: signal and background cross section.
    Luminosity,
    /// Multiplies sigma_W.
    Spread,
}

/// How a unit of a nuisance acts on one point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Effect {
    /// Index of the point.
    pub point: usize,
    /// GeV for energy; relative for the others.
    pub size: f64,
}

/// A nuisance eta with the constraint eta^2.
#[derive(Debug, Clone, PartialEq)]
pub struct Nuisance {
    /// Name as shown.
    pub name: String,
    /// What it acts on.
    pub kind: NuisanceKind,
    /// Points it acts on.
    pub effects: Vec<Effect>,
    /// Acts on every point alike (then it can be degenerate with a free parameter).
    pub common: bool,
}

/// The nuisances of a scan, common ones first.
///
/// A cross section's own energy error is not among them: it enters the covariance of the
/// cross sections. Luminosity and efficiency errors of single points act on counts only.
///
/// # Errors
/// A covariance of the energies that is not a covariance.
pub fn nuisances(points: &[Point], common: &CommonErrors) -> Answer<Vec<Nuisance>> {
    use NuisanceKind::{Energy, Luminosity, SignalScale, Spread};
    let mut out = Vec::new();
    let mean_w = if points.is_empty() {
        0.0
    } else {
        points.iter().map(|p| p.w_gev).sum::<f64>() / points.len() as f64
    };
    let mut add = |name: &str, kind, common, size: &dyn Fn(usize, &Point) -> f64| {
        let effects: Vec<Effect> = points
            .iter()
            .enumerate()
            .map(|(point, p)| Effect {
                point,
                size: size(point, p),
            })
            .filter(|e| e.size != 0.0)
            .collect();
        if !effects.is_empty() {
            out.push(Nuisance {
                name: name.into(),
                kind,
                effects,
                common,
            });
        }
    };
    add("energy offset", Energy, true, &|_, _| common.energy_gev);
    add("energy slope", Energy, false, &|_, p| {
        common.energy_slope * p.w_gev
    });
    add("signal scale", SignalScale, true, &|_, _| common.scale);
    add("luminosity", Luminosity, true, &|_, _| common.luminosity);
    add("efficiency slope", SignalScale, false, &|_, p| {
        common.efficiency_slope_per_gev * (p.w_gev - mean_w)
    });
    add("beam spread", Spread, true, &|_, _| common.spread);
    let mut groups: Vec<&str> = points.iter().filter_map(|p| p.group.as_deref()).collect();
    groups.sort_unstable();
    groups.dedup();
    for (what, kind, size) in [
        ("energy", Energy, common.group_energy_gev),
        ("signal scale", SignalScale, common.group_scale),
        ("luminosity", Luminosity, common.group_luminosity),
    ] {
        for group in &groups {
            add(&format!("{what} of {group}"), kind, false, &|_, p| {
                if p.group.as_deref() == Some(group) {
                    size
                } else {
                    0.0
                }
            });
        }
    }
    // What the channels of one visit have in common is named by its first point.
    let visits = crate::scan::visits(points);
    for (i, point) in points.iter().enumerate() {
        let visit = |k: usize, p: &Point| visits.get(k) == Some(&i) && is_counted(p);
        let name = |what: &str| format!("{what} of point {}", point.id);
        if common.energy_covariance_gev2.is_none() {
            add(&name("energy"), Energy, false, &|k, p| {
                if visit(k, p) { p.w_error_gev } else { 0.0 }
            });
        }
        add(&name("luminosity"), Luminosity, false, &|k, p| {
            if visit(k, p) {
                relative(p.luminosity_error_nbinv, p.luminosity_nbinv)
            } else {
                0.0
            }
        });
        add(&name("efficiency"), SignalScale, false, &|k, p| {
            if k == i && is_counted(p) {
                relative(p.efficiency_error, p.efficiency.unwrap_or(f64::INFINITY))
            } else {
                0.0
            }
        });
        add(&name("beam spread"), Spread, false, &|k, _| {
            if visits.get(k) == Some(&i) {
                common.point_spread
            } else {
                0.0
            }
        });
    }
    if let Some(rows) = &common.energy_covariance_gev2 {
        out.extend(from_covariance(rows, points.len())?);
    }
    Ok(out)
}

/// Energy and luminosity errors of single points act on counts only.
fn is_counted(point: &Point) -> bool {
    matches!(
        point.measured,
        Measured::Counts { .. } | Measured::Bins { .. }
    )
}

fn relative(error: f64, value: f64) -> f64 {
    if error > 0.0 && value > 0.0 {
        error / value
    } else {
        0.0
    }
}

/// Independent nuisances whose joint effect has the given covariance: columns of its Cholesky factor.
fn from_covariance(rows: &[f64], n: usize) -> Answer<Vec<Nuisance>> {
    let refusal = |what: &str| {
        Refusal::new(
            "common.energy_covariance_gev2",
            format!("{} numbers", rows.len()),
            "a symmetric, positive definite matrix with a row and a column for every point in use",
            format!("the covariance of the energies {what}"),
        )
    };
    if rows.len() != n * n {
        return Err(refusal(
            "does not have a row and a column for every point in use",
        ));
    }
    let matrix = DMatrix::from_row_slice(n, n, rows);
    if !is_symmetric(&matrix) {
        return Err(refusal("is not symmetric"));
    }
    let factor = matrix
        .cholesky()
        .ok_or_else(|| refusal("is not positive definite"))?
        .l();
    Ok((0..n)
        .map(|c| Nuisance {
            name: format!("energy, component {}", c + 1),
            kind: NuisanceKind::Energy,
            effects: (c..n)
                .map(|r| Effect {
                    point: r,
                    size: factor[(r, c)],
                })
                .filter(|e| e.size != 0.0)
                .collect(),
            common: false,
        })
        .collect())
}

/// Equal to its transpose within 1e-9 of the diagonal.
#[must_use]
pub(crate) fn is_symmetric(matrix: &DMatrix<f64>) -> bool {
    (0..matrix.nrows()).all(|i| {
        (0..i).all(|k| {
            let size = (matrix[(i, i)] * matrix[(k, k)]).abs().sqrt();
            (matrix[(i, k)] - matrix[(k, i)]).abs() <= 1e-9 * size
        })
    })
}
