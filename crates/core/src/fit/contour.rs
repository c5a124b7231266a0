//! Contours of the profile likelihood for a pair of parameters.

use super::covariance::Covariance;
use super::fitter::Fitter;
use crate::error::{Answer, Refusal};
use crate::math::{cos, sin};
use crate::numerics::minimise::{Minimum, Tolerance, minimise};
use serde::{Deserialize, Serialize};

/// Rise of 2 NLL of a 68.3 % region for a pair (chi-squared of 2 degrees of freedom).
pub const PAIR_RISE_ONE: f64 = 2.295_748_928_898_636;
/// Rise of a 95.4 % region for a pair.
pub const PAIR_RISE_TWO: f64 = 6.180_074_306_244_168;

/// A closed contour.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Contour {
    /// First parameter.
    pub first: String,
    /// Second parameter.
    pub second: String,
    /// Rise of 2 NLL.
    pub rise: f64,
    /// Places (first, second) in order around it.
    pub places: Vec<(f64, f64)>,
    /// Some places lie on a parameter's limit, where the rise is less.
    pub cut_by_limit: bool,
}

const TOLERANCE: Tolerance = Tolerance {
    distance: 1e-4,
    iterations: 60,
};

impl Fitter {
    /// Contour of two parameters where the profiled 2 NLL has risen by `rise`, at `places` angles.
    ///
    /// Along each direction of the curvature ellipse the radius is found to 1 % of the rise.
    ///
    /// # Errors
    /// Parameters that are not free, the same, or without a curvature error.
    pub fn contour(
        &mut self,
        first: &str,
        second: &str,
        rise: f64,
        places: u32,
        minimum: &Minimum,
        covariance: &Covariance,
    ) -> Answer<Contour> {
        let (i, k) = (self.find(first)?, self.find(second)?);
        let refusal = |message: String| {
            Refusal::new(
                "contour",
                format!("{first}, {second}"),
                "two different parameters with errors",
                message,
            )
        };
        if i == k {
            return Err(refusal("a contour needs two different parameters".into()));
        }
        let (Some(a), Some(b)) = (covariance.error(i), covariance.error(k)) else {
            return Err(refusal(
                "one of the two has no curvature error here: look at its profile instead".into(),
            ));
        };
        let rho = covariance.correlation(i, k).clamp(-0.9999, 0.9999);
        let best = minimum.expansion.value;
        let mut out = Contour {
            first: first.into(),
            second: second.into(),
            rise,
            places: Vec::with_capacity(places as usize),
            cut_by_limit: false,
        };
        let bounds = [
            self.problem().coordinates[i].bounds,
            self.problem().coordinates[k].bounds,
        ];
        let mut scale = 1.0;
        for m in 0..places {
            let angle = 2.0 * core::f64::consts::PI * f64::from(m) / f64::from(places.max(1));
            // Cholesky factor of the pair's covariance turns the circle into the ellipse.
            let u = a * cos(angle);
            let v = b * (rho * cos(angle) + (1.0 - rho * rho).sqrt() * sin(angle));
            let largest = radius_to_bounds(minimum.x[i], u, bounds[0]).min(radius_to_bounds(
                minimum.x[k],
                v,
                bounds[1],
            ));
            let target = rise.sqrt();
            let (mut inner, mut inner_t) = (0.0, 0.0);
            let mut outer: Option<(f64, f64)> = None;
            let mut radius = (target * scale).min(largest);
            let mut x = minimum.x.clone();
            for _ in 0..30 {
                let here = (minimum.x[i] + radius * u, minimum.x[k] + radius * v);
                let start = self.along_pair(&x, (i, k), here, covariance);
                let likelihood = self.likelihood();
                likelihood.hold(i, here.0);
                likelihood.hold(k, here.1);
                let found = minimise(likelihood, &start, TOLERANCE);
                likelihood.release(i);
                likelihood.release(k);
                let t = match &found {
                    Ok(m) => (m.expansion.value - best).max(0.0).sqrt(),
                    Err(_) => f64::INFINITY,
                };
                if (t * t - rise).abs() < 0.01 * rise {
                    break;
                }
                if t > target {
                    outer = Some((radius, t));
                } else {
                    if radius >= largest {
                        out.cut_by_limit = true;
                        break;
                    }
                    inner = radius;
                    inner_t = t;
                    if let Ok(m) = found {
                        x = m.x;
                    }
                }
                radius = match outer {
                    Some((far, far_t)) if far_t.is_finite() => {
                        let f = ((target - inner_t) / (far_t - inner_t)).clamp(0.02, 0.98);
                        inner + f * (far - inner)
                    }
                    Some((far, _)) => 0.5 * (inner + far),
                    None if inner_t > 0.0 => inner * (target / inner_t).clamp(1.02, 2.0),
                    None => 2.0 * radius,
                }
                .min(largest);
                if radius > 1e3 * target {
                    break;
                }
            }
            scale = (radius / target).clamp(0.2, 5.0);
            out.places
                .push((minimum.x[i] + radius * u, minimum.x[k] + radius * v));
        }
        Ok(out)
    }

    /// Start with two coordinates held: the others follow by regression on both.
    fn along_pair(
        &self,
        x: &[f64],
        (i, k): (usize, usize),
        here: (f64, f64),
        covariance: &Covariance,
    ) -> Vec<f64> {
        let c = &covariance.matrix;
        let determinant = c[(i, i)] * c[(k, k)] - c[(i, k)] * c[(i, k)];
        let (u, v) = (here.0 - x[i], here.1 - x[k]);
        let mut start = x.to_vec();
        if determinant > 0.0 {
            let p = (c[(k, k)] * u - c[(i, k)] * v) / determinant;
            let q = (c[(i, i)] * v - c[(i, k)] * u) / determinant;
            for (m, (value, info)) in start
                .iter_mut()
                .zip(&self.problem().coordinates)
                .enumerate()
            {
                *value = (*value + c[(m, i)] * p + c[(m, k)] * q)
                    .max(info.bounds.0)
                    .min(info.bounds.1);
            }
        }
        start[i] = here.0;
        start[k] = here.1;
        start
    }
}

fn radius_to_bounds(centre: f64, direction: f64, bounds: (f64, f64)) -> f64 {
    if direction > 0.0 {
        (bounds.1 - centre) / direction
    } else if direction < 0.0 {
        (bounds.0 - centre) / direction
    } else {
        f64::INFINITY
    }
}
