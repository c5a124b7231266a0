//! From a scan to the arrays of a planning task: rates at the allowed energies, what is known
//! already, nuisances common to all points, and the truths that the prior allows.

use super::hypotheses::contrast;
use super::problem::{Rates, refuse};
use crate::counts::{Exposure, rate_and_gradient};
use crate::error::Answer;
use crate::fit::{BACKGROUND_CROSS_SECTION, BACKGROUND_RATE, FitSettings, SPREAD};
use crate::numerics::probability::normal_quantile;
use crate::scan::{Measured, Point, Scan};
use nalgebra::{DMatrix, DVector};

/// Parameters of a task: the free ones first, then nuisances with a unit constraint.
#[derive(Debug, Clone, PartialEq)]
pub struct Parameters {
    /// Ids of the free parameters.
    pub free: Vec<String>,
    /// Names of the nuisances after them.
    pub nuisances: Vec<String>,
    with_spread: bool,
    /// One more at the end: the share of another hypothesis ([`super::hypotheses`]).
    with_difference: bool,
}

/// Name of the share of the other hypothesis.
pub const DIFFERENCE: &str = "difference of the hypotheses";

/// What rates are computed for.
#[derive(Clone, Copy)]
pub struct Sources<'a> {
    /// What the fit leaves free, with its constraints.
    pub fit: &'a FitSettings,
    /// Parameters.
    pub parameters: &'a Parameters,
    /// Allowed energies, GeV.
    pub w_gev: &'a [f64],
    /// Luminosity over that of the scan's detection, (W in GeV, ratio) with W rising, on straight
    /// lines between and constant outside; empty: 1 everywhere.
    pub luminosity: &'a [(f64, f64)],
    /// The hypothesis that holds, where the scan's own is the rival to be told from it.
    pub first: Option<&'a Scan>,
}

impl Sources<'_> {
    /// Luminosity at W over that of the scan's detection.
    #[must_use]
    pub fn brightness(&self, w_gev: f64) -> f64 {
        brightness(self.luminosity, w_gev)
    }
}

/// Piecewise-linear ratio of luminosities; 1 for an empty table.
#[must_use]
pub fn brightness(table: &[(f64, f64)], w_gev: f64) -> f64 {
    let k = table.partition_point(|r| r.0 <= w_gev);
    match (k.checked_sub(1).and_then(|i| table.get(i)), table.get(k)) {
        (Some(a), Some(b)) => a.1 + (b.1 - a.1) * (w_gev - a.0) / (b.0 - a.0),
        (Some(end), None) | (None, Some(end)) => end.1,
        (None, None) => 1.0,
    }
}

impl Parameters {
    /// Of a scan and what its fit leaves free.
    ///
    /// # Errors
    /// A parameter listed or constrained twice.
    pub fn new(scan: &Scan, fit: &FitSettings) -> Answer<Self> {
        let free = fit.varying()?;
        let common = &scan.common;
        let mut nuisances = Vec::new();
        let with_spread = common.spread > 0.0 && !free.iter().any(|f| f == SPREAD);
        for (name, error) in [
            ("common energy", common.energy_gev),
            ("common scale", common.scale),
            ("common luminosity", common.luminosity),
        ] {
            if error > 0.0 {
                nuisances.push(name.to_string());
            }
        }
        if with_spread {
            nuisances.push("common spread".to_string());
        }
        Ok(Self {
            free,
            nuisances,
            with_spread,
            with_difference: false,
        })
    }

    /// With the share of another hypothesis as the last one.
    #[must_use]
    pub fn with_difference(self) -> Self {
        Self {
            with_difference: true,
            ..self
        }
    }

    /// All names.
    #[must_use]
    pub fn names(&self) -> Vec<String> {
        let last = self.with_difference.then(|| DIFFERENCE.to_string());
        let known = self.free.iter().chain(&self.nuisances).cloned();
        known.chain(last).collect()
    }
}

/// Values of the free parameters in a scan.
///
/// # Errors
/// An unknown id.
pub fn value_of(scan: &Scan, id: &str) -> Answer<f64> {
    match id {
        BACKGROUND_CROSS_SECTION => Ok(scan.detection.sigma_bg_nb),
        BACKGROUND_RATE => Ok(scan.detection.rate_bg_per_h),
        SPREAD => match scan.chain.spread {
            crate::scan::Spread::Gaussian { sigma_gev, .. } => Ok(sigma_gev),
            _ => Err(refuse(
                "fit.free",
                id,
                "a Gaussian spread",
                "There is no Gaussian spread to be free.",
            )),
        },
        other => scan.hypothesis.get(other),
    }
}

/// The scan with a parameter at another value.
///
/// # Errors
/// An unknown id, a value the hypothesis refuses.
pub fn set_value(scan: &mut Scan, id: &str, value: f64) -> Answer<()> {
    match id {
        BACKGROUND_CROSS_SECTION => scan.detection.sigma_bg_nb = value,
        BACKGROUND_RATE => scan.detection.rate_bg_per_h = value,
        SPREAD => {
            if let crate::scan::Spread::Gaussian { sigma_gev, .. } = &mut scan.chain.spread {
                *sigma_gev = value;
            }
        }
        other => return scan.hypothesis.set(other, value),
    }
    Ok(())
}

/// Rates at `w_gev` for the truth that `scan` holds, with the information of its constraints,
/// its common errors and its points (expected information at this truth: Gaussian).
///
/// # Errors
/// What chain, hypothesis and detection refuse.
pub fn rates(scan: &Scan, sources: Sources<'_>, weight: f64) -> Answer<Rates> {
    let Sources {
        fit,
        parameters,
        w_gev,
        ..
    } = sources;
    let measured: Vec<&Point> = scan
        .points
        .iter()
        // Other channels and angular bins say more than is used here: the plan is on the safe side.
        .filter(|p| {
            scan.exit_of(p) == 0
                && matches!(
                    p.measured,
                    Measured::Counts { .. } | Measured::CrossSection { .. }
                )
        })
        .collect();
    let mut ids = parameters.free.clone();
    if parameters.with_spread {
        ids.push(SPREAD.to_string());
    }
    let mut all = w_gev.to_vec();
    all.extend(measured.iter().map(|p| p.w_gev));
    let r = rate_and_gradient(scan, &ids, &all)?;
    let first = match sources.first {
        Some(first) => Some(rate_and_gradient(first, &[], &all)?),
        None => None,
    };
    let free = parameters.free.len();
    let p = free + parameters.nuisances.len();
    // Row of derivatives at energy j of the list: signal scaled by `s`, background exposures `l` (1/nb) and `t` (h).
    let row = |j: usize, s: f64, l: f64, t: f64| {
        let mut g = Vec::with_capacity(p);
        for (id, column) in parameters.free.iter().zip(&r.gradient_per_h) {
            g.push(match id.as_str() {
                BACKGROUND_CROSS_SECTION => l,
                BACKGROUND_RATE => t,
                _ => s * column.get(j).copied().unwrap_or(0.0),
            });
        }
        let signal = s * r.signal_per_h.get(j).copied().unwrap_or(0.0);
        for name in &parameters.nuisances {
            g.push(match name.as_str() {
                "common energy" => {
                    s * r.slope_per_h_gev.get(j).copied().unwrap_or(0.0) * scan.common.energy_gev
                }
                "common scale" => signal * scan.common.scale,
                "common luminosity" => {
                    (signal + l * scan.detection.sigma_bg_nb) * scan.common.luminosity
                }
                _ => {
                    let by_sigma = r
                        .gradient_per_h
                        .get(free)
                        .and_then(|c| c.get(j))
                        .copied()
                        .unwrap_or(0.0);
                    s * by_sigma * scan.common.spread * value_of(scan, SPREAD).unwrap_or(0.0)
                }
            });
        }
        g
    };
    let hour = Exposure::per_hour(&scan.detection);
    let n = w_gev.len();
    let dark = scan.detection.rate_bg_per_h;
    let bright: Vec<f64> = w_gev.iter().map(|&w| sources.brightness(w)).collect();
    let mut gradient_per_h = Vec::with_capacity(n * p);
    for (j, b) in bright.iter().enumerate() {
        gradient_per_h.extend(row(j, *b, hour.luminosity_nbinv * b, 1.0));
    }
    let lit = |rates: &[f64]| -> Vec<f64> {
        let pairs = rates.iter().zip(&bright);
        pairs.map(|(m, b)| (m - dark) * b + dark).collect()
    };
    let size = p + usize::from(first.is_some());
    let mut prior = DMatrix::zeros(size, size);
    for c in &fit.constraints {
        if let Some(i) = parameters.free.iter().position(|f| *f == c.parameter) {
            prior[(i, i)] += 1.0 / (c.error * c.error);
        }
    }
    for i in free..p {
        prior[(i, i)] += 1.0;
    }
    let places: Vec<Place> = measured
        .iter()
        .enumerate()
        .map(|(i, point)| {
            let e = Exposure::of(point, &scan.detection);
            let s = e.signal_nbinv / hour.signal_nbinv;
            let j = n + i;
            let signal = s * r.signal_per_h.get(j).copied().unwrap_or(0.0);
            let slope = s * r.slope_per_h_gev.get(j).copied().unwrap_or(0.0);
            let b = e.background(&scan.detection);
            let background = match point.measured {
                Measured::Counts {
                    off: Some((n_off, tau)),
                    ..
                } => b.max(n_off / tau),
                _ => b,
            };
            let mut gradient = row(j, s, e.luminosity_nbinv, e.live_time_h);
            if let Some(first) = &first {
                gradient.push(s * first.signal_per_h.get(j).copied().unwrap_or(0.0) - signal);
            }
            let luminosity = e.luminosity_nbinv;
            place(point, signal, background, slope, gradient, luminosity)
        })
        .collect();
    add_points(&mut prior, &measured, &places, scan.common.group_energy_gev);
    let own = Rates {
        weight,
        rate_per_h: lit(&r.rate_per_h),
        gradient_per_h,
        slope_per_h_gev: r
            .slope_per_h_gev
            .iter()
            .zip(&bright)
            .map(|(s, b)| s * b)
            .collect(),
        rate_without_beam_per_h: dark,
        prior,
    };
    match first {
        Some(first) => contrast(&lit(&first.rate_per_h), &own),
        None => Ok(own),
    }
}

/// A measured point: gradient, slope and variance of its expected counts.
struct Place {
    gradient: DVector<f64>,
    slope: f64,
    variance: f64,
}

fn place(
    point: &Point,
    signal: f64,
    background: f64,
    slope: f64,
    gradient: Vec<f64>,
    luminosity: f64,
) -> Place {
    let counts = match point.measured {
        // A background of its own, known from the off region only.
        Measured::Counts {
            off: Some((_, tau)),
            ..
        } => signal + background * (1.0 + 1.0 / tau),
        Measured::CrossSection { sigma_nb, error_nb } if sigma_nb != 0.0 => {
            let relative = error_nb / sigma_nb;
            signal * signal * relative * relative
        }
        _ => signal + background,
    };
    let energy = slope * point.w_error_gev;
    let lumi = if luminosity > 0.0 {
        signal * point.luminosity_error_nbinv / luminosity
    } else {
        0.0
    };
    Place {
        gradient: DVector::from_vec(gradient),
        slope,
        variance: counts + energy * energy + lumi * lumi,
    }
}

fn add_points(
    prior: &mut DMatrix<f64>,
    points: &[&Point],
    places: &[Place],
    group_energy_gev: f64,
) {
    let p = prior.nrows();
    let mut done = vec![false; points.len()];
    for i in 0..points.len() {
        if done[i] {
            continue;
        }
        let group = points[i].group.as_ref().filter(|_| group_energy_gev > 0.0);
        let mut shared = DVector::<f64>::zeros(p);
        let mut q = 1.0 / (group_energy_gev * group_energy_gev);
        for k in i..points.len() {
            let same = k == i || (group.is_some() && points[k].group.as_ref() == group);
            if !same || done[k] || places[k].variance <= 0.0 {
                continue;
            }
            done[k] = true;
            let place = &places[k];
            *prior += &place.gradient * place.gradient.transpose() / place.variance;
            shared += &place.gradient * (place.slope / place.variance);
            q += place.slope * place.slope / place.variance;
        }
        if group.is_some() {
            *prior -= &shared * shared.transpose() / q;
        }
    }
}

/// Covariance of the free parameters from what is known (constraints and points), where all of
/// it is determined; else from the constraints alone (others known exactly, as far as planning goes).
#[must_use]
pub fn known_covariance(
    prior: &DMatrix<f64>,
    fit: &FitSettings,
    parameters: &Parameters,
) -> DMatrix<f64> {
    let free = parameters.free.len();
    let all = DMatrix::identity(prior.nrows(), free);
    // With the nuisances' unit constraints the whole matrix is regular if the free part is.
    if let Some(covariance) = super::criterion::covariance_of(prior, &all) {
        return covariance;
    }
    let mut covariance = DMatrix::zeros(free, free);
    for c in &fit.constraints {
        if let Some(i) = parameters.free.iter().position(|f| *f == c.parameter) {
            covariance[(i, i)] = c.error * c.error;
        }
    }
    covariance
}

/// The scan moved to truth `k` of a quasi-random sequence (Halton) through a Gaussian of this
/// covariance; `None` where a parameter would leave its range.
#[must_use]
pub fn moved(
    scan: &Scan,
    parameters: &Parameters,
    covariance: &DMatrix<f64>,
    k: u32,
) -> Option<Scan> {
    const PRIMES: [u32; 16] = [2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53];
    let free = parameters.free.len();
    let eigen = covariance.clone().symmetric_eigen();
    // The widest direction gets the best-spread coordinate of the sequence.
    let mut order: Vec<usize> = (0..free).collect();
    let relative = |i: usize| eigen.eigenvalues[i];
    order.sort_by(|&a, &b| relative(b).total_cmp(&relative(a)).then(a.cmp(&b)));
    let mut shift = DVector::<f64>::zeros(free);
    for (place, &i) in order.iter().enumerate() {
        let prime = *PRIMES.get(place)?;
        let z = normal_quantile(halton(k, prime));
        shift += eigen.eigenvectors.column(i) * (z * eigen.eigenvalues[i].max(0.0).sqrt());
    }
    let mut other = scan.clone();
    for (id, s) in parameters.free.iter().zip(shift.iter()) {
        let value = value_of(scan, id).ok()? + s;
        let positive = id.ends_with(".width")
            || id.ends_with(".mass")
            || id.ends_with("strength")
            || id == SPREAD
            || id.starts_with("background");
        if !value.is_finite() || (positive && value <= 0.0 && *s != 0.0) {
            return None;
        }
        set_value(&mut other, id, value).ok()?;
    }
    Some(other)
}

fn halton(k: u32, base: u32) -> f64 {
    let (mut left, mut digit, mut out) = (k, 1.0 / f64::from(base), 0.0);
    while left > 0 {
        out += f64::from(left % base) * digit;
        left /= base;
        digit /= f64::from(base);
    }
    out
}
