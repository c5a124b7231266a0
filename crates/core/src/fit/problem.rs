//! A scan made ready for fitting: data, coordinates, bounds.
//!
//! Coordinates are the free curve parameters, then free backgrounds, then nuisances.

use super::curve::CurveModel;
use super::data::data;
use super::nuisance::{Nuisance, NuisanceKind, is_symmetric, nuisances};
use super::settings::{Constraint, FitSettings};
use crate::error::{Answer, Refusal};
use crate::scan::{Measured, Point, Scan};
use nalgebra::DMatrix;
use std::rc::Rc;

/// Id of the free visible background cross section, nb.
pub const BACKGROUND_CROSS_SECTION: &str = "background.cross_section";
/// Id of the free background rate, counts per hour.
pub const BACKGROUND_RATE: &str = "background.rate";

/// The exit whose background an id is (`c2.background.rate`: 2), and which of the two.
pub(crate) fn background_of(id: &str) -> Option<Coordinate> {
    let (exit, rest) = match id.strip_prefix('c').and_then(|r| r.split_once('.')) {
        Some((number, rest)) => match number.parse::<usize>() {
            Ok(exit) => (exit, rest),
            Err(_) => (0, id),
        },
        None => (0, id),
    };
    match rest {
        BACKGROUND_CROSS_SECTION => Some(Coordinate::BackgroundCrossSection(exit)),
        BACKGROUND_RATE => Some(Coordinate::BackgroundRate(exit)),
        _ => None,
    }
}

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
    /// Index of its place on the curve; that of the point unless it has further angular bins.
    pub site: usize,
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
    /// Its angular bin in words, if it is one.
    pub bin: Option<String>,
}

/// What a coordinate is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Coordinate {
    /// Parameter of the curve with this index.
    Curve(usize),
    /// sigma_bg of an exit (0: the scan's own), nb.
    BackgroundCrossSection(usize),
    /// r_bg of an exit, per hour.
    BackgroundRate(usize),
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
    /// (point, angular bin) of each place on the curve; the first ones are the points in order.
    pub sites: Rc<Vec<(usize, Option<usize>)>>,
    /// Exit of each point.
    pub exit_of: Rc<Vec<usize>>,
    /// Variance matrix of the cross sections' own errors, nb^2, over the cross-section data in their order.
    pub covariance_nb2: Rc<DMatrix<f64>>,
    /// Coordinates.
    pub coordinates: Vec<CoordinateInfo>,
    /// Nuisances.
    pub nuisances: Rc<Vec<Nuisance>>,
    /// (coordinate, value, error).
    pub constraints: Vec<(usize, f64, f64)>,
    /// (sigma_bg in nb, r_bg per hour) of each exit where they are not free.
    pub backgrounds: Rc<Vec<(f64, f64)>>,
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
            if coordinates.iter().any(|c| c.id == *id) {
                continue;
            }
            let coordinate = background_of(id).filter(|c| match c {
                Coordinate::BackgroundCrossSection(e) | Coordinate::BackgroundRate(e) => {
                    *e <= scan.exits.len()
                }
                _ => false,
            });
            let (unit, start, what, exit) = match coordinate {
                Some(Coordinate::BackgroundCrossSection(e)) => (
                    "nb",
                    scan.detection_of(e).sigma_bg_nb,
                    "visible background cross section",
                    e,
                ),
                Some(Coordinate::BackgroundRate(e)) => (
                    "1/h",
                    scan.detection_of(e).rate_bg_per_h,
                    "background rate",
                    e,
                ),
                _ => {
                    return Err(Refusal::new(
                        "fit.free",
                        id,
                        "a parameter of this hypothesis, spread, background.cross_section or background.rate",
                        format!("there is no parameter {id} to be fitted"),
                    ));
                }
            };
            let label = match exit.checked_sub(1).and_then(|i| scan.exits.get(i)) {
                Some(exit) => format!("{what} ({})", exit.name),
                None => what.to_string(),
            };
            let Some(coordinate) = coordinate else {
                continue;
            };
            coordinates.push(CoordinateInfo {
                coordinate,
                id: id.clone(),
                label,
                unit,
                start,
                bounds: (0.0, f64::INFINITY),
                scale: f64::INFINITY,
            });
        }
        let exit_of: Vec<usize> = scan.points.iter().map(|p| scan.exit_of(p)).collect();
        let free_background: Vec<bool> = (0..=scan.exits.len())
            .map(|exit| {
                coordinates.iter().any(|c| match c.coordinate {
                    Coordinate::BackgroundCrossSection(e) | Coordinate::BackgroundRate(e) => {
                        e == exit
                    }
                    _ => false,
                })
            })
            .collect();
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
        let (data, sites, common_off_regions) = data(scan, &free_background)?;
        let covariance_nb2 = covariance(scan, &data)?;
        Ok(Self {
            model,
            points: Rc::new(scan.points.clone()),
            data,
            sites: Rc::new(sites),
            exit_of: Rc::new(exit_of),
            covariance_nb2: Rc::new(covariance_nb2),
            coordinates,
            nuisances: Rc::new(nuisances),
            constraints,
            backgrounds: Rc::new(
                (0..=scan.exits.len())
                    .map(|e| scan.detection_of(e))
                    .map(|d| (d.sigma_bg_nb, d.rate_bg_per_h))
                    .collect(),
            ),
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
