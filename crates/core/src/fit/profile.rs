//! Profile likelihood: intervals where 2 NLL, minimised over everything else, has risen by a given amount.

use super::covariance::Covariance;
use super::fitter::Fitter;
use crate::error::{Answer, Refusal};
use crate::numerics::minimise::{Minimum, Tolerance, minimise};
use serde::{Deserialize, Serialize};

/// Rise of 2 NLL of a 68.3 % interval for one parameter.
pub const RISE_ONE: f64 = 1.0;
/// Rise of a 95.4 % interval for one parameter.
pub const RISE_TWO: f64 = 4.0;

/// One end of an interval.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum End {
    /// The statistic has risen by the wanted amount here.
    Found {
        /// Value of the parameter.
        value: f64,
    },
    /// The parameter's limit comes first.
    AtLimit {
        /// The limit.
        value: f64,
        /// Rise there, less than wanted.
        rise: f64,
    },
    /// The statistic does not rise that far: the interval is open on this side.
    Open {
        /// How far it was followed.
        value: f64,
        /// Rise there.
        rise: f64,
    },
}

impl End {
    /// The value where the interval ends: infinite where it is open (towards `side`).
    #[must_use]
    pub fn value(self, side: f64) -> f64 {
        match self {
            End::Found { value } | End::AtLimit { value, .. } => value,
            End::Open { .. } => side * f64::INFINITY,
        }
    }
}

/// A profile likelihood interval.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Interval {
    /// Parameter.
    pub id: String,
    /// Value at the minimum.
    pub value: f64,
    /// Rise of 2 NLL.
    pub rise: f64,
    /// Lower end.
    pub low: End,
    /// Upper end.
    pub high: End,
    /// A lower minimum was met on the way: the fit was not at the best place.
    pub better_minimum: bool,
}

/// One place of a profile curve.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ProfilePlace {
    /// Value of the parameter.
    pub value: f64,
    /// 2 NLL above the minimum.
    pub rise: f64,
}

/// Good to 1e-4 in 2 NLL: 5e-5 of an error at a rise of 1.
const PROFILE_TOLERANCE: Tolerance = Tolerance {
    distance: 1e-5,
    iterations: 100,
};
/// Relative accuracy of the rise at an interval's end.
const RISE_ACCURACY: f64 = 1e-3;

impl Fitter {
    /// 2 NLL minimised with coordinate `i` held at `value`, from `start`.
    ///
    /// # Errors
    /// The model's refusal there.
    pub fn held(&mut self, i: usize, value: f64, start: &[f64]) -> Answer<Minimum> {
        let likelihood = self.likelihood();
        likelihood.hold(i, value);
        let found = minimise(likelihood, start, PROFILE_TOLERANCE);
        likelihood.release(i);
        found
    }

    /// Profile interval of the parameter `id` at a rise of 2 NLL.
    ///
    /// # Errors
    /// An unknown parameter; the model's refusal.
    pub fn interval(
        &mut self,
        id: &str,
        rise: f64,
        minimum: &Minimum,
        covariance: &Covariance,
    ) -> Answer<Interval> {
        let i = self.find(id)?;
        let mut better_minimum = false;
        let mut side = |sign: f64| -> Answer<End> {
            self.end(i, sign, rise, minimum, covariance, &mut better_minimum)
        };
        let low = side(-1.0)?;
        let high = side(1.0)?;
        Ok(Interval {
            id: id.into(),
            value: minimum.x[i],
            rise,
            low,
            high,
            better_minimum,
        })
    }

    pub(super) fn find(&self, id: &str) -> Answer<usize> {
        self.problem().find(id).ok_or_else(|| {
            Refusal::new(
                "fit.free",
                id,
                "a free parameter of this fit",
                format!("{id} is not free in this fit: it has no interval"),
            )
        })
    }

    fn end(
        &mut self,
        i: usize,
        sign: f64,
        rise: f64,
        minimum: &Minimum,
        covariance: &Covariance,
        better: &mut bool,
    ) -> Answer<End> {
        let best = minimum.expansion.value;
        let centre = minimum.x[i];
        let info = &self.problem().coordinates[i];
        let limit = if sign < 0.0 {
            info.bounds.0
        } else {
            info.bounds.1
        };
        let fallback = if info.scale.is_finite() {
            info.scale
        } else {
            centre.abs().max(1e-3)
        };
        let error = covariance.error(i).unwrap_or(fallback);
        // In t = sqrt(rise) a profile is nearly a straight line through the centre.
        let target = rise.sqrt();
        let (mut inner, mut inner_t) = (centre, 0.0);
        let mut x = minimum.x.clone();
        let mut outer: Option<(f64, f64)> = None;
        let mut next = centre + sign * error * target;
        for _ in 0..60 {
            let beyond = (next - limit) * sign >= 0.0;
            if beyond {
                next = limit;
            }
            let start = self.along(&x, i, next, covariance);
            let Ok(found) = self.held(i, next, &start) else {
                // The model ends here: come back half way.
                outer = Some((next, f64::INFINITY));
                next = 0.5 * (inner + next);
                if (next - inner).abs() < 1e-6 * error {
                    return Ok(End::AtLimit {
                        value: inner,
                        rise: inner_t * inner_t,
                    });
                }
                continue;
            };
            let above = found.expansion.value - best;
            if above < -1e-3 {
                *better = true;
            }
            let t = above.max(0.0).sqrt();
            if (above - rise).abs() < RISE_ACCURACY * rise {
                return Ok(End::Found { value: next });
            }
            if t > target {
                outer = Some((next, t));
            } else {
                if beyond {
                    return Ok(End::AtLimit {
                        value: limit,
                        rise: above,
                    });
                }
                inner = next;
                inner_t = t;
                x = found.x;
            }
            next = match outer {
                Some((far, far_t)) => {
                    let width = far - inner;
                    let fraction = if far_t.is_finite() {
                        ((target - inner_t) / (far_t - inner_t)).clamp(0.02, 0.98)
                    } else {
                        0.5
                    };
                    if width.abs() < 1e-9 * error {
                        return Ok(End::Found { value: inner });
                    }
                    inner + fraction * width
                }
                None => {
                    // Linear in t, at most doubled at a time.
                    let gone = inner - centre;
                    if gone.abs() > 1e3 * error {
                        return Ok(End::Open {
                            value: inner,
                            rise: inner_t * inner_t,
                        });
                    }
                    let factor = if inner_t > 0.0 {
                        (1.02 * target / inner_t).clamp(1.05, 2.5)
                    } else {
                        2.5
                    };
                    centre + gone * factor
                }
            };
        }
        Ok(End::Open {
            value: inner,
            rise: inner_t * inner_t,
        })
    }

    /// Start for a held value: the others follow by their covariance with it.
    fn along(&self, x: &[f64], i: usize, value: f64, covariance: &Covariance) -> Vec<f64> {
        let variance = covariance.matrix[(i, i)];
        let step = value - x[i];
        let mut start: Vec<f64> = x.to_vec();
        if variance > 0.0 {
            for (k, (v, c)) in start
                .iter_mut()
                .zip(&self.problem().coordinates)
                .enumerate()
            {
                let moved = *v + covariance.matrix[(k, i)] / variance * step;
                *v = moved.max(c.bounds.0).min(c.bounds.1);
            }
        }
        start[i] = value;
        start
    }

    /// Rise of 2 NLL at each of `values` of a parameter, everything else minimised.
    /// Places that the model refuses are left out.
    ///
    /// # Errors
    /// An unknown parameter.
    pub fn profile(
        &mut self,
        id: &str,
        values: &[f64],
        minimum: &Minimum,
        covariance: &Covariance,
    ) -> Answer<Vec<ProfilePlace>> {
        let i = self.find(id)?;
        // Outwards from the minimum, each place starting from its inner neighbour.
        let mut order: Vec<usize> = (0..values.len()).collect();
        order.sort_by(|&a, &b| values[a].total_cmp(&values[b]));
        let split = order.partition_point(|&k| values[k] < minimum.x[i]);
        let mut out: Vec<Option<ProfilePlace>> = vec![None; values.len()];
        let (down, up) = order.split_at(split);
        let down: Vec<usize> = down.iter().rev().copied().collect();
        for path in [down.as_slice(), up] {
            let mut x = minimum.x.clone();
            for &k in path {
                let start = self.along(&x, i, values[k], covariance);
                if let Ok(found) = self.held(i, values[k], &start) {
                    out[k] = Some(ProfilePlace {
                        value: values[k],
                        rise: found.expansion.value - minimum.expansion.value,
                    });
                    x = found.x;
                }
            }
        }
        Ok(out.into_iter().flatten().collect())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fit::stand_in::{BreitWigner, counting_scan};
    use crate::fit::{FitSettings, Likelihood};
    use crate::numerics::minimise::Objective;
    use crate::numerics::random::Stream;
    use std::rc::Rc;

    /// A height with known background, one point: 2 NLL = 2(mu - n + n ln(n/mu)), mu = 5 h + 10, n = 40;
    /// ends where that has risen by 1, by bisection.
    #[test]
    fn one_count_against_bisection() {
        let scan = counting_scan(&[3.0], &[40.0], 5.0);
        let settings = FitSettings {
            free: vec!["r1.strength".into()],
            ..FitSettings::default()
        };
        let model = BreitWigner::new([3.0, 1e-3, 4.0, 2.0], &["r1.strength"]);
        let mut fitter = Fitter::with_model(&scan, &settings, Rc::new(model)).unwrap();
        let minimum = fitter.minimum().unwrap();
        let covariance = fitter.covariance(&minimum).unwrap();
        assert!((minimum.x[0] - 6.0).abs() < 1e-4);
        for rise in [RISE_ONE, RISE_TWO] {
            let found = fitter
                .interval("r1.strength", rise, &minimum, &covariance)
                .unwrap();
            for (end, (mut inside, mut outside)) in
                [(found.low, (6.0, -1.9)), (found.high, (6.0, 60.0))]
            {
                let End::Found { value } = end else {
                    panic!("an end: {end:?}")
                };
                for _ in 0..200 {
                    let h: f64 = 0.5 * (inside + outside);
                    let q = crate::numerics::probability::poisson_deviance(40.0, 5.0 * h + 10.0);
                    if q < rise { inside = h } else { outside = h }
                }
                assert!((value - inside).abs() < 1e-3 * (6.0 - inside).abs());
            }
        }
    }

    /// With n below the background the strength stands at 0 and the lower end is the limit.
    #[test]
    fn limit_comes_first() {
        let scan = counting_scan(&[3.0], &[7.0], 5.0);
        let settings = FitSettings {
            free: vec!["r1.strength".into()],
            ..FitSettings::default()
        };
        let model = BreitWigner::new([3.0, 1e-3, 4.0, 2.0], &["r1.strength"]);
        let mut fitter = Fitter::with_model(&scan, &settings, Rc::new(model)).unwrap();
        let minimum = fitter.minimum().unwrap();
        assert_eq!(minimum.at_bound, [true]);
        let covariance = fitter.covariance(&minimum).unwrap();
        let found = fitter
            .interval("r1.strength", 1.0, &minimum, &covariance)
            .unwrap();
        assert!(matches!(found.low, End::AtLimit { value, .. } if value == 0.0));
        assert!(matches!(found.high, End::Found { .. }));
    }

    /// Random scans: the interval of the mass against a brute-force grid over mass, width and height
    /// (background known). The grid's own resolution is 1 % of an error.
    #[test]
    fn intervals_against_a_grid() {
        for seed in 0..20 {
            let mut stream = Stream::new(seed, 0);
            let truth = [
                3.0,
                1e-3 * (0.6 + stream.uniform()),
                30.0 + 60.0 * stream.uniform(),
                4.0,
            ];
            let w: Vec<f64> = (0..9).map(|i| 2.998 + 0.5e-3 * f64::from(i)).collect();
            let counts: Vec<f64> = w
                .iter()
                .map(|w| stream.poisson(3.0 * BreitWigner::at(&truth, *w)))
                .collect();
            let scan = counting_scan(&w, &counts, 3.0);
            let free = ["r1.mass", "r1.width", "r1.strength"];
            let settings = FitSettings {
                free: free.map(String::from).to_vec(),
                ..FitSettings::default()
            };
            let model = BreitWigner::new(truth, &free);
            let mut fitter = Fitter::with_model(&scan, &settings, Rc::new(model)).unwrap();
            let minimum = fitter.minimum().unwrap();
            let covariance = fitter.covariance(&minimum).unwrap();
            let found = fitter
                .interval("r1.mass", 1.0, &minimum, &covariance)
                .unwrap();
            assert!(!found.better_minimum);
            let error = covariance.error(0).unwrap();
            for end in [found.low, found.high] {
                let End::Found { value } = end else {
                    panic!("an end")
                };
                // Brute force at that mass: least statistic over a fine grid of width and height.
                let least = |m: f64| {
                    let mut best = f64::INFINITY;
                    for a in 0..81 {
                        let width = minimum.x[1]
                            + covariance.error(1).unwrap() * (f64::from(a) - 40.0) / 16.0;
                        for b in 0..81 {
                            let height = minimum.x[2]
                                + covariance.error(2).unwrap() * (f64::from(b) - 40.0) / 16.0;
                            let p = [m, width, height, 4.0];
                            let q: f64 = w
                                .iter()
                                .zip(&counts)
                                .map(|(w, n)| {
                                    crate::numerics::probability::poisson_deviance(
                                        *n,
                                        3.0 * BreitWigner::at(&p, *w),
                                    )
                                })
                                .sum();
                            best = best.min(q);
                        }
                    }
                    best
                };
                let rise = least(value) - minimum.expansion.value;
                // A grid of 1/16 error misses the minimum by up to 2 (1/32)^2 per direction, more when correlated.
                assert!(
                    (rise - 1.0).abs() < 0.015,
                    "seed {seed}: rise {rise} at {} errors",
                    (value - minimum.x[0]) / error
                );
            }
        }
    }

    #[test]
    fn held_coordinates_are_released() {
        let scan = counting_scan(&[3.0, 3.001], &[40.0, 20.0], 5.0);
        let settings = FitSettings {
            free: vec!["r1.strength".into()],
            ..FitSettings::default()
        };
        let model = BreitWigner::new([3.0, 1e-3, 4.0, 2.0], &["r1.strength"]);
        let mut fitter = Fitter::with_model(&scan, &settings, Rc::new(model)).unwrap();
        let before = Likelihood::new(fitter.problem().clone()).bounds().to_vec();
        fitter.held(0, 3.0, &[3.0]).unwrap();
        assert_eq!(fitter.likelihood().bounds(), before);
    }
}
