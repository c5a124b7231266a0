//! Derivatives of the curve at every point, by central differences over one batch of probes.
//!
//! The directions are the free parameters, then (where asked for) a common shift of W and the
//! logarithm of the spread: every nuisance of energy or spread acts through these two, point by point.

use super::curve::{Curve, CurveModel, Probe, Site};
use crate::error::Answer;

/// What is needed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Need {
    /// Shift of W is a direction.
    pub w: bool,
    /// ln(spread) is a direction.
    pub spread: bool,
    /// The slope's own derivatives (its square enters a covariance).
    pub slope: bool,
}

/// Curve and derivatives at every point.
#[derive(Debug, Clone, Default)]
pub struct Derivatives {
    /// sigma, nb, by point.
    pub sigma: Vec<f64>,
    /// d sigma/dW, nb/GeV, by point; empty if not needed.
    pub slope: Vec<f64>,
    /// d sigma/d direction, by direction, then point.
    pub d_sigma: Vec<Vec<f64>>,
    /// d slope/d direction; empty if not needed.
    pub d_slope: Vec<Vec<f64>>,
    /// Second derivatives of sigma, by packed pair (see [`pair`]); empty if not asked for.
    pub dd_sigma: Vec<Vec<f64>>,
    /// Second derivatives of the slope; empty if not asked for or not needed.
    pub dd_slope: Vec<Vec<f64>>,
}

/// Place of the pair (i, k) in the packed upper triangle.
#[inline]
#[must_use]
pub fn pair(i: usize, k: usize) -> usize {
    let (low, high) = if i < k { (i, k) } else { (k, i) };
    high * (high + 1) / 2 + low
}

/// A displaced place: values, shift of W, ln of the spread factor.
#[derive(Clone)]
struct Place {
    values: Vec<f64>,
    w_gev: f64,
    ln_spread: f64,
}

impl Place {
    fn moved(&self, direction: usize, by: f64) -> Self {
        let mut out = self.clone();
        let k = self.values.len();
        match out.values.get_mut(direction) {
            Some(v) => *v += by,
            None if direction == k => out.w_gev += by,
            None => out.ln_spread += by,
        }
        out
    }

    fn probe(&self) -> Probe {
        Probe {
            values: self.values.clone(),
            w_shift_gev: self.w_gev,
            spread_factor: crate::math::exp(self.ln_spread),
        }
    }
}

/// Differentiates at `values`. `steps` belong to the parameters, then W (GeV), then ln(spread).
/// A direction is the index of its step; W and spread keep their index even where not needed.
///
/// Steps that would leave the bounds are halved on that side (one-sided differences at a bound).
///
/// # Errors
/// The model's refusal at `values` or beside it.
pub fn differentiate(
    model: &dyn CurveModel,
    sites: &[Site],
    values: &[f64],
    steps: &[f64],
    need: Need,
    second: bool,
) -> Answer<Derivatives> {
    let k = values.len();
    let here = Place {
        values: values.to_vec(),
        w_gev: 0.0,
        ln_spread: 0.0,
    };
    let mut directions: Vec<usize> = (0..k).collect();
    // The first derivative in W is the slope itself.
    if need.w && (second || need.slope) {
        directions.push(k);
    }
    if need.spread {
        directions.push(k + 1);
    }
    // Displacements (down, up) inside the bounds.
    let sides: Vec<(f64, f64)> = directions
        .iter()
        .map(|&d| {
            let h = steps.get(d).copied().unwrap_or(1.0);
            match model.parameters().get(d).filter(|_| d < k) {
                None => (-h, h),
                Some(p) => {
                    let v = values[d];
                    let room_down = v - p.lower;
                    let room_up = p.upper - v;
                    if room_down < h {
                        if room_down > 0.3 * h {
                            (-room_down, h)
                        } else {
                            (h, 2.0 * h)
                        }
                    } else if room_up < h {
                        if room_up > 0.3 * h {
                            (-h, room_up)
                        } else {
                            (-2.0 * h, -h)
                        }
                    } else {
                        (-h, h)
                    }
                }
            }
        })
        .collect();
    let mut probes = vec![here.probe()];
    for (&d, &(a, b)) in directions.iter().zip(&sides) {
        probes.push(here.moved(d, a).probe());
        probes.push(here.moved(d, b).probe());
    }
    if second {
        for (i, (&d, &(a, b))) in directions.iter().zip(&sides).enumerate() {
            for (&e, &(a2, b2)) in directions.iter().zip(&sides).take(i) {
                probes.push(here.moved(d, a).moved(e, a2).probe());
                probes.push(here.moved(d, b).moved(e, b2).probe());
            }
        }
    }
    let with_slope = need.w || need.slope;
    let curves = model.evaluate(sites, &probes, with_slope)?;
    let Some(centre) = curves.first() else {
        return Ok(Derivatives::default());
    };
    let total = k + 2;
    let n = sites.len();
    let mut out = Derivatives {
        sigma: centre.sigma_nb.clone(),
        slope: centre.slope_nb_per_gev.clone(),
        d_sigma: vec![vec![0.0; n]; total],
        ..Derivatives::default()
    };
    if need.w {
        out.d_sigma[k].clone_from(&out.slope);
    }
    if need.slope {
        out.d_slope = vec![vec![0.0; n]; total];
    }
    if second {
        out.dd_sigma = vec![vec![0.0; n]; total * (total + 1) / 2];
        if need.slope {
            out.dd_slope = out.dd_sigma.clone();
        }
    }
    // First derivatives and pure second ones from three places 0, a, b.
    for (i, (&d, &(a, b))) in directions.iter().zip(&sides).enumerate() {
        let (Some(low), Some(high)) = (curves.get(2 * i + 1), curves.get(2 * i + 2)) else {
            continue;
        };
        let first =
            |f0: f64, fa: f64, fb: f64| ((fa - f0) * (b / a) - (fb - f0) * (a / b)) / (b - a);
        let pure = |f0: f64, fa: f64, fb: f64| 2.0 * ((fb - f0) / b - (fa - f0) / a) / (b - a);
        if !(d == k && need.w) {
            fill(&mut out.d_sigma[d], centre, low, high, Curve::sigma, first);
        }
        if need.slope {
            fill(&mut out.d_slope[d], centre, low, high, Curve::slope, first);
        }
        if second {
            fill(
                &mut out.dd_sigma[pair(d, d)],
                centre,
                low,
                high,
                Curve::sigma,
                pure,
            );
            if need.slope {
                fill(
                    &mut out.dd_slope[pair(d, d)],
                    centre,
                    low,
                    high,
                    Curve::slope,
                    pure,
                );
            }
        }
    }
    if second {
        let mut next = 1 + 2 * directions.len();
        for (i, (&d, &(a, b))) in directions.iter().zip(&sides).enumerate() {
            for (j, (&e, &(a2, b2))) in directions.iter().zip(&sides).enumerate().take(i) {
                let (Some(low), Some(high)) = (curves.get(next), curves.get(next + 1)) else {
                    continue;
                };
                next += 2;
                let singles = [2 * i + 1, 2 * i + 2, 2 * j + 1, 2 * j + 2].map(|at| &curves[at]);
                let mixed = |target: &mut Vec<f64>, get: fn(&Curve) -> &[f64]| {
                    let f0 = get(centre);
                    for (p, slot) in target.iter_mut().enumerate() {
                        // Each corner gives f_ab - f_a - f_b + f_0 = a b f'' (1 + O(h)); the mean of the
                        // two opposite corners removes the odd order where the steps are symmetric.
                        let one = (get(low)[p] - get(singles[0])[p] - get(singles[2])[p] + f0[p])
                            / (a * a2);
                        let two = (get(high)[p] - get(singles[1])[p] - get(singles[3])[p] + f0[p])
                            / (b * b2);
                        *slot = 0.5 * (one + two);
                    }
                };
                mixed(&mut out.dd_sigma[pair(d, e)], Curve::sigma);
                if need.slope {
                    mixed(&mut out.dd_slope[pair(d, e)], Curve::slope);
                }
            }
        }
    }
    Ok(out)
}

impl Curve {
    fn sigma(&self) -> &[f64] {
        &self.sigma_nb
    }
    fn slope(&self) -> &[f64] {
        &self.slope_nb_per_gev
    }
}

fn fill(
    target: &mut [f64],
    centre: &Curve,
    low: &Curve,
    high: &Curve,
    get: fn(&Curve) -> &[f64],
    rule: impl Fn(f64, f64, f64) -> f64,
) {
    for (((slot, &f0), &fa), &fb) in target
        .iter_mut()
        .zip(get(centre))
        .zip(get(low))
        .zip(get(high))
    {
        *slot = rule(f0, fa, fb);
    }
}
