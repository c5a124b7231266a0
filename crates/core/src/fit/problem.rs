//! A scan made ready for fitting: data, coordinates, bounds.
//!
//! Coordinates are the free curve parameters, then free backgrounds, then nuisances.

use super::curve::CurveModel;
use super::nuisance::{Nuisance, NuisanceKind, is_symmetric, nuisances};
use super::settings::{Constraint, FitSettings};
use crate::counts::Exposure;
use crate::error::{Answer, Refusal};
use crate::scan::{Detection, Measured, Point, Scan};
use nalgebra::DMatrix;
use std::rc::Rc;

/// Id of the free visible background cross section, nb.
pub const BACKGROUND_CROSS_SECTION: &str = "background.cross_section";
/// Id of the free background rate, counts per hour.
pub const BACKGROUND_RATE: &str = "background.rate";

/// How a datum enters the statistic.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Kind {
    /// Poisson count.
    Counts {
        /// n.
        n: f64,
    },
    /// Poisson count with its own unknown background, measured in an off region; the
    /// background is profiled in closed form.
    OnOff {
        /// n.
        n: f64,
        /// Off-region counts.
        n_off: f64,
        /// Ratio of off to on.
        tau: f64,
    },
    /// Gaussian cross section.
    CrossSection {
        /// nb.
        sigma_nb: f64,
    },
}

/// One number that is compared with the model: A F_s F_l sigma + B F_l sigma_bg + t r_bg.
#[derive(Debug, Clone, PartialEq)]
pub struct Datum {
    /// Index of the point in the scan.
    pub point: usize,
    /// Measured.
    pub kind: Kind,
    /// A: multiplies the cross section.
    pub signal: f64,
    /// B, 1/nb: multiplies the background cross section.
    pub luminosity_nbinv: f64,
    /// t, h: multiplies the background rate.
    pub live_time_h: f64,
    /// This is a point's off region (no signal in it).
    pub off_region: bool,
}

/// What a coordinate is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Coordinate {
    /// Parameter of the curve with this index.
    Curve(usize),
    /// sigma_bg, nb.
    BackgroundCrossSection,
    /// r_bg, per hour.
    BackgroundRate,
    /// Nuisance with this index.
    Nuisance(usize),
}

/// Name, unit and limits of a coordinate.
#[derive(Debug, Clone, PartialEq)]
pub struct CoordinateInfo {
    /// What it is.
    pub coordinate: Coordinate,
    /// Id, or the nuisance's name.
    pub id: String,
    /// In words.
    pub label: String,
    /// Unit.
    pub unit: &'static str,
    /// Start.
    pub start: f64,
    /// Limits.
    pub bounds: (f64, f64),
    /// A change that visibly changes the curve.
    pub scale: f64,
}

/// Scan and settings made ready.
#[derive(Clone)]
pub struct Problem {
    /// The curve with its free parameters.
    pub model: Rc<dyn CurveModel>,
    /// The points, for names and places.
    pub points: Rc<Vec<Point>>,
    /// What is compared.
    pub data: Vec<Datum>,
    /// Variance matrix of the cross sections' own errors, nb^2, over the cross-section data in their order.
    pub covariance_nb2: Rc<DMatrix<f64>>,
    /// Coordinates.
    pub coordinates: Vec<CoordinateInfo>,
    /// Nuisances.
    pub nuisances: Rc<Vec<Nuisance>>,
    /// (coordinate, value, error).
    pub constraints: Vec<(usize, f64, f64)>,
    /// Backgrounds where they are not free.
    pub detection: Detection,
    /// Scale factors 1 + delta eta.
    pub gaussian_factors: bool,
    /// A change of W that visibly changes the curve, GeV.
    pub w_scale_gev: f64,
    /// Off regions count the common background.
    pub common_off_regions: bool,
}

impl Problem {
    /// Prepares `scan` for a fit with `model`, whose free parameters are those of
    /// `settings` that are not backgrounds.
    ///
    /// # Errors
    /// Data that cannot be compared with a model: no data, errors or exposures that are not
    /// above 0, a covariance that is none, unknown ids.
    pub fn new(scan: &Scan, settings: &FitSettings, model: Rc<dyn CurveModel>) -> Answer<Self> {
        let varying = settings.varying()?;
        let mut coordinates: Vec<CoordinateInfo> = model
            .parameters()
            .iter()
            .enumerate()
            .map(|(i, p)| CoordinateInfo {
                coordinate: Coordinate::Curve(i),
                id: p.id.clone(),
                label: p.label.clone(),
                unit: p.unit,
                start: p.value,
                bounds: (p.lower, p.upper),
                scale: p.scale,
            })
            .collect();
        for id in &varying {
            let (coordinate, unit, start, label) = match id.as_str() {
                BACKGROUND_CROSS_SECTION => (
                    Coordinate::BackgroundCrossSection,
                    "nb",
                    scan.detection.sigma_bg_nb,
                    "visible background cross section",
                ),
                BACKGROUND_RATE => (
                    Coordinate::BackgroundRate,
                    "1/h",
                    scan.detection.rate_bg_per_h,
                    "background rate",
                ),
                other => {
                    if coordinates.iter().any(|c| c.id == *other) {
                        continue;
                    }
                    return Err(Refusal::new(
                        "fit.free",
                        other,
                        "a parameter of this hypothesis, spread, background.cross_section or background.rate",
                        format!("there is no parameter {other} to be fitted"),
                    ));
                }
            };
            coordinates.push(CoordinateInfo {
                coordinate,
                id: id.clone(),
                label: label.into(),
                unit,
                start,
                bounds: (0.0, f64::INFINITY),
                scale: f64::INFINITY,
            });
        }
        let free_background = coordinates
            .iter()
            .any(|c| !matches!(c.coordinate, Coordinate::Curve(_)));
        let nuisances = nuisances(&scan.points, &scan.common)?;
        for (i, n) in nuisances.iter().enumerate() {
            coordinates.push(CoordinateInfo {
                coordinate: Coordinate::Nuisance(i),
                id: n.name.clone(),
                label: n.name.clone(),
                unit: "",
                start: 0.0,
                bounds: (-12.0, 12.0),
                scale: 1.0,
            });
        }
        let constraints = constraints(&settings.constraints, &coordinates)?;
        let w_scale_gev = coordinates
            .iter()
            .filter(|c| c.id.ends_with(".mass"))
            .map(|c| c.scale)
            .fold(f64::INFINITY, f64::min);
        let (data, common_off_regions) = data(scan, free_background)?;
        let covariance_nb2 = covariance(scan, &data)?;
        Ok(Self {
            model,
            points: Rc::new(scan.points.clone()),
            data,
            covariance_nb2: Rc::new(covariance_nb2),
            coordinates,
            nuisances: Rc::new(nuisances),
            constraints,
            detection: scan.detection.clone(),
            gaussian_factors: scan.common.gaussian_factors,
            w_scale_gev: if w_scale_gev.is_finite() {
                w_scale_gev
            } else {
                model_scale(scan)
            },
            common_off_regions,
        })
    }

    /// Number of coordinates that are reported as parameters (the others are nuisances).
    #[must_use]
    pub fn parameter_count(&self) -> usize {
        self.coordinates
            .iter()
            .filter(|c| !matches!(c.coordinate, Coordinate::Nuisance(_)))
            .count()
    }

    /// Index of a parameter by id.
    #[must_use]
    pub fn find(&self, id: &str) -> Option<usize> {
        self.coordinates
            .iter()
            .take(self.parameter_count())
            .position(|c| c.id == id)
    }

    /// Starting values.
    #[must_use]
    pub fn start(&self) -> Vec<f64> {
        self.coordinates.iter().map(|c| c.start).collect()
    }

    /// Which kinds of nuisance there are.
    #[must_use]
    pub fn has(&self, kind: NuisanceKind) -> bool {
        self.nuisances.iter().any(|n| n.kind == kind)
    }
}

/// A tenth of sigma_W, else a thousandth of the spacing of the points.
fn model_scale(scan: &Scan) -> f64 {
    if let crate::scan::Spread::Gaussian { sigma_gev, .. } = scan.chain.spread {
        return 0.1 * sigma_gev;
    }
    let (low, high) = scan
        .points
        .iter()
        .fold((f64::INFINITY, 0.0f64), |(a, b), p| {
            (a.min(p.w_gev), b.max(p.w_gev))
        });
    if high > low {
        1e-3 * (high - low)
    } else {
        1e-6 * high.max(1e-3)
    }
}

fn constraints(
    asked: &[Constraint],
    coordinates: &[CoordinateInfo],
) -> Answer<Vec<(usize, f64, f64)>> {
    asked
        .iter()
        .enumerate()
        .map(|(i, c)| {
            coordinates
                .iter()
                .position(|k| k.id == c.parameter)
                .map(|at| (at, c.value, c.error))
                .ok_or_else(|| {
                    Refusal::new(
                        format!("fit.constraints[{i}]"),
                        &c.parameter,
                        "a parameter of this hypothesis or of the beam and background",
                        format!("there is no parameter {} to be constrained", c.parameter),
                    )
                })
        })
        .collect()
}

fn data(scan: &Scan, free_background: bool) -> Answer<(Vec<Datum>, bool)> {
    let mut out = Vec::new();
    let mut common_off = false;
    for (i, point) in scan.points.iter().enumerate() {
        let field = |what: &str| format!("points[{}].{what}", point.id);
        if !(point.w_gev > 0.0 && point.w_gev.is_finite()) {
            return Err(Refusal::new(
                field("w"),
                point.w_gev,
                "an energy above 0",
                format!("point {} has no W", point.id),
            ));
        }
        match point.measured {
            Measured::Nothing => {}
            Measured::CrossSection { sigma_nb, error_nb } => {
                let own = scan.covariance_nb2.is_none();
                if !sigma_nb.is_finite() || (own && !(error_nb > 0.0 && error_nb.is_finite())) {
                    return Err(Refusal::new(
                        field("cross_section_error"),
                        format!("{sigma_nb} +- {error_nb}"),
                        "a cross section with an error above 0",
                        format!("point {} has no usable cross section and error", point.id),
                    ));
                }
                out.push(Datum {
                    point: i,
                    kind: Kind::CrossSection { sigma_nb },
                    signal: 1.0,
                    luminosity_nbinv: 0.0,
                    live_time_h: 0.0,
                    off_region: false,
                });
            }
            Measured::Counts { n, off } => {
                if !(n >= 0.0 && n.is_finite()) {
                    return Err(Refusal::new(
                        field("counts"),
                        n,
                        "counts of 0 or more",
                        format!("point {} has no usable counts", point.id),
                    ));
                }
                let e = Exposure::of(point, &scan.detection);
                let usable = |v: f64| v > 0.0 && v.is_finite();
                if !usable(e.luminosity_nbinv) {
                    return Err(Refusal::new(
                        field("luminosity"),
                        e.luminosity_nbinv,
                        "a luminosity above 0 (after dead time)",
                        format!("point {} has counts but no luminosity", point.id),
                    ));
                }
                if !usable(e.signal_nbinv) {
                    return Err(Refusal::new(
                        field("efficiency"),
                        e.signal_nbinv / e.luminosity_nbinv,
                        "an efficiency above 0",
                        format!(
                            "with an efficiency of 0 point {} says nothing about the cross section: leave it out",
                            point.id
                        ),
                    ));
                }
                let mut datum = Datum {
                    point: i,
                    kind: Kind::Counts { n },
                    signal: e.signal_nbinv,
                    luminosity_nbinv: e.luminosity_nbinv,
                    live_time_h: e.live_time_h,
                    off_region: false,
                };
                if let Some((n_off, tau)) = off {
                    if !(n_off >= 0.0 && n_off.is_finite() && usable(tau)) {
                        return Err(Refusal::new(
                            field("off_counts"),
                            format!("{n_off} with tau {tau}"),
                            "counts of 0 or more and a ratio tau above 0",
                            format!("the off region of point {} cannot be used", point.id),
                        ));
                    }
                    if free_background {
                        common_off = true;
                        out.push(datum.clone());
                        datum.kind = Kind::Counts { n: n_off };
                        datum.signal = 0.0;
                        datum.luminosity_nbinv *= tau;
                        datum.live_time_h *= tau;
                        datum.off_region = true;
                    } else {
                        datum.kind = Kind::OnOff { n, n_off, tau };
                        datum.luminosity_nbinv = 0.0;
                        datum.live_time_h = 0.0;
                    }
                }
                out.push(datum);
            }
        }
    }
    if out.is_empty() {
        return Err(Refusal::new(
            "data.rows",
            "",
            "at least one row with counts or a cross section, in use",
            "there is nothing to fit: no row in use has counts or a cross section",
        ));
    }
    Ok((out, common_off))
}

fn covariance(scan: &Scan, data: &[Datum]) -> Answer<DMatrix<f64>> {
    let rows: Vec<usize> = data
        .iter()
        .filter(|d| matches!(d.kind, Kind::CrossSection { .. }))
        .map(|d| d.point)
        .collect();
    let n = rows.len();
    let Some(given) = &scan.covariance_nb2 else {
        return Ok(DMatrix::from_fn(n, n, |a, b| {
            match scan.points[rows[a]].measured {
                Measured::CrossSection { error_nb, .. } if a == b => error_nb * error_nb,
                _ => 0.0,
            }
        }));
    };
    let refusal = |what: &str| {
        Refusal::new(
            "data.covariance",
            format!("{} numbers", given.len()),
            "a symmetric, positive definite matrix with a row and a column for every cross section in use",
            format!("the pasted covariance {what}"),
        )
    };
    if given.len() != n * n {
        return Err(refusal("does not fit the cross sections in use"));
    }
    let matrix = DMatrix::from_row_slice(n, n, given);
    if !given.iter().all(|v| v.is_finite()) || !is_symmetric(&matrix) {
        return Err(refusal("is not symmetric"));
    }
    if matrix.clone().cholesky().is_none() {
        return Err(refusal("is not positive definite"));
    }
    Ok(matrix)
}
