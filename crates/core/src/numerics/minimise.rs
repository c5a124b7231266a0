//! Minimiser for sums of squares and Poisson deviances: Levenberg-Marquardt on the expected
//! (Fisher) curvature with exact gradients, inside bounds.
//!
//! Levenberg, Q. Appl. Math. 2 (1944) 164; Marquardt, SIAM J. Appl. Math. 11 (1963) 431; bounds by an
//! active set as in projected Newton methods (Bertsekas, SIAM J. Control Optim. 20 (1982) 221).
//! Deterministic; degenerate directions are damped, never divided by zero.

use crate::error::Answer;
use nalgebra::{DMatrix, DVector};
use serde::{Deserialize, Serialize};

/// Value, gradient and a positive semidefinite curvature of the objective at one place.
#[derive(Debug, Clone)]
pub struct Expansion {
    /// Objective.
    pub value: f64,
    /// First derivatives.
    pub gradient: DVector<f64>,
    /// Second derivatives or their expectation.
    pub curvature: DMatrix<f64>,
}

/// What is minimised.
pub trait Objective {
    /// Lower and upper bound of each coordinate (infinite: none).
    fn bounds(&self) -> &[(f64, f64)];
    /// Largest step per iteration of each coordinate (infinite: none).
    fn largest_steps(&self) -> &[f64];
    /// Value; `None` where the model cannot be evaluated.
    fn value(&mut self, x: &[f64]) -> Option<f64>;
    /// Value with derivatives.
    ///
    /// # Errors
    /// The model's refusal.
    fn expand(&mut self, x: &[f64]) -> Answer<Expansion>;
}

/// Why the minimiser stopped.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum StopReason {
    /// The estimated distance to the minimum is below the tolerance.
    Converged,
    /// No step improves further although the tolerance is not reached: rounding or a kink of the model.
    NoFurtherStep,
    /// The allowed iterations are used up.
    IterationLimit,
    /// Nothing is free.
    NothingFree,
}

/// Why and where it stopped.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Stop {
    /// Why.
    pub reason: StopReason,
    /// Accepted steps.
    pub iterations: u32,
    /// Evaluations of the value, derivatives not counted.
    pub evaluations: u32,
    /// Estimated vertical distance to the minimum, in the objective's unit.
    pub distance: f64,
    /// Norm of the gradient in units of one curvature error of each coordinate.
    pub gradient_norm: f64,
}

impl Stop {
    /// Whether the end point can be called a minimum: the estimated distance is below 1e-3.
    #[must_use]
    pub fn is_minimum(&self) -> bool {
        match self.reason {
            StopReason::Converged | StopReason::NothingFree => true,
            StopReason::NoFurtherStep => self.distance < 1e-3,
            StopReason::IterationLimit => false,
        }
    }
}

/// The minimum found.
#[derive(Debug, Clone)]
pub struct Minimum {
    /// Where.
    pub x: Vec<f64>,
    /// Expansion there.
    pub expansion: Expansion,
    /// Which coordinates sit on a bound that the gradient pushes against.
    pub at_bound: Vec<bool>,
    /// Why it stopped.
    pub stop: Stop,
}

/// When to stop.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tolerance {
    /// Estimated vertical distance to the minimum.
    pub distance: f64,
    /// Accepted steps at most.
    pub iterations: u32,
}

impl Default for Tolerance {
    /// 1e-8 in 2 NLL: 1e-4 of an error in every direction.
    fn default() -> Self {
        Self {
            distance: 1e-8,
            iterations: 200,
        }
    }
}

impl Tolerance {
    /// 1e-6 in 2 NLL, 1e-3 of an error: far below what trials can resolve.
    #[must_use]
    pub fn trials() -> Self {
        Self {
            distance: 1e-6,
            iterations: 200,
        }
    }
}

/// Minimises from `start` (moved into the bounds first).
///
/// # Errors
/// The model's refusal at the start; later refusals shorten the step instead.
pub fn minimise(
    objective: &mut dyn Objective,
    start: &[f64],
    tolerance: Tolerance,
) -> Answer<Minimum> {
    let bounds: Vec<(f64, f64)> = objective.bounds().to_vec();
    let largest: Vec<f64> = objective.largest_steps().to_vec();
    let mut x: Vec<f64> = start
        .iter()
        .zip(&bounds)
        .map(|(&v, b)| v.max(b.0).min(b.1))
        .collect();
    let mut here = objective.expand(&x)?;
    let mut stop = Stop {
        reason: StopReason::IterationLimit,
        iterations: 0,
        evaluations: 1,
        distance: 0.0,
        gradient_norm: 0.0,
    };
    if x.is_empty() {
        stop.reason = StopReason::NothingFree;
        return Ok(Minimum {
            x,
            expansion: here,
            at_bound: Vec::new(),
            stop,
        });
    }
    let mut damping = 0.0;
    loop {
        let active = active_bounds(&x, &bounds, &here.gradient);
        let scale = scales(&here.curvature);
        // Undamped step: its predicted gain is the distance to the minimum.
        let newton = bounded_step(&here, &x, &bounds, &active, &scale, 0.0);
        stop.distance = predicted_gain(&here, &newton);
        stop.gradient_norm = x
            .iter()
            .enumerate()
            .filter(|(i, _)| !active[*i])
            .map(|(i, _)| here.gradient[i] * scale[i] * here.gradient[i] * scale[i])
            .sum::<f64>()
            .sqrt();
        if stop.distance < tolerance.distance {
            stop.reason = StopReason::Converged;
            break;
        }
        if stop.iterations >= tolerance.iterations {
            break;
        }
        let mut accepted = None;
        for attempt in 0..30 {
            let mut step = if attempt == 0 && damping == 0.0 {
                newton.clone()
            } else {
                bounded_step(&here, &x, &bounds, &active, &scale, damping)
            };
            shorten(&mut step, &largest);
            let trial: Vec<f64> = x
                .iter()
                .zip(step.iter())
                .zip(&bounds)
                .map(|((&v, &s), b)| (v + s).max(b.0).min(b.1))
                .collect();
            if trial == x {
                break;
            }
            stop.evaluations += 1;
            let gain = predicted_gain(&here, &step);
            if let Some(value) = objective.value(&trial) {
                let found = here.value - value;
                if found > 0.0 && value.is_finite() {
                    let ratio = found / gain;
                    damping = if ratio > 0.75 {
                        if damping < 1e-4 { 0.0 } else { damping * 0.1 }
                    } else if ratio < 0.25 {
                        (damping * 4.0).max(1e-3)
                    } else {
                        damping
                    };
                    accepted = Some(trial);
                    break;
                }
            }
            damping = (damping * 8.0).max(1e-3);
        }
        let Some(next) = accepted else {
            stop.reason = StopReason::NoFurtherStep;
            break;
        };
        x = next;
        here = objective.expand(&x)?;
        stop.iterations += 1;
    }
    let at_bound = active_bounds(&x, &bounds, &here.gradient);
    Ok(Minimum {
        x,
        expansion: here,
        at_bound,
        stop,
    })
}

/// Coordinates on a bound that the downhill direction would leave.
fn active_bounds(x: &[f64], bounds: &[(f64, f64)], gradient: &DVector<f64>) -> Vec<bool> {
    x.iter()
        .zip(bounds)
        .zip(gradient.iter())
        .map(|((&v, b), &g)| (v <= b.0 && g > 0.0) || (v >= b.1 && g < 0.0))
        .collect()
}

/// One curvature error of each coordinate; 1 where the objective does not depend on it.
fn scales(curvature: &DMatrix<f64>) -> Vec<f64> {
    (0..curvature.nrows())
        .map(|i| {
            let c = curvature[(i, i)];
            if c > 0.0 { 1.0 / c.sqrt() } else { 1.0 }
        })
        .collect()
}

fn predicted_gain(here: &Expansion, step: &DVector<f64>) -> f64 {
    (-(here.gradient.dot(step) + 0.5 * step.dot(&(&here.curvature * step)))).max(0.0)
}

/// Keeps the direction, limits the length.
fn shorten(step: &mut DVector<f64>, largest: &[f64]) {
    let mut factor: f64 = 1.0;
    for (s, l) in step.iter().zip(largest) {
        if s.abs() > *l {
            factor = factor.min(l / s.abs());
        }
    }
    if factor < 1.0 {
        *step *= factor;
    }
}

/// Damped Newton step that stays inside the bounds: coordinates that would leave are put on
/// their bound and the rest is solved again.
fn bounded_step(
    here: &Expansion,
    x: &[f64],
    bounds: &[(f64, f64)],
    active: &[bool],
    scale: &[f64],
    damping: f64,
) -> DVector<f64> {
    let n = x.len();
    let mut fixed: Vec<Option<f64>> = active.iter().map(|&a| a.then_some(0.0)).collect();
    let mut step = DVector::zeros(n);
    for _ in 0..=n {
        let open: Vec<usize> = (0..n).filter(|&i| fixed[i].is_none()).collect();
        for (i, f) in fixed.iter().enumerate() {
            if let Some(f) = f {
                step[i] = *f;
            }
        }
        if open.is_empty() {
            break;
        }
        let right = DVector::from_iterator(
            open.len(),
            open.iter().map(|&i| {
                let pull: f64 = (0..n)
                    .filter_map(|j| fixed[j].map(|f| here.curvature[(i, j)] * f))
                    .sum();
                -(here.gradient[i] + pull) * scale[i]
            }),
        );
        let matrix = DMatrix::from_fn(open.len(), open.len(), |a, b| {
            let (i, j) = (open[a], open[b]);
            here.curvature[(i, j)] * scale[i] * scale[j]
        });
        let solved = solve_damped(&matrix, &right, damping);
        for (a, &i) in open.iter().enumerate() {
            step[i] = solved[a] * scale[i];
        }
        let mut changed = false;
        for &i in &open {
            let (low, high) = (bounds[i].0 - x[i], bounds[i].1 - x[i]);
            if step[i] < low || step[i] > high {
                fixed[i] = Some(step[i].max(low).min(high));
                changed = true;
            }
        }
        if !changed {
            break;
        }
    }
    step
}

/// Solves (A + damping) y = b for a matrix with unit (or zero) diagonal; the damping grows until
/// the matrix is safely positive definite.
fn solve_damped(matrix: &DMatrix<f64>, right: &DVector<f64>, damping: f64) -> DVector<f64> {
    // 1e-13 of the unit diagonal: below that a direction is undetermined to rounding.
    let mut ridge = damping.max(1e-13);
    loop {
        let mut damped = matrix.clone();
        for i in 0..damped.nrows() {
            damped[(i, i)] += ridge;
        }
        if let Some(factor) = damped.cholesky() {
            let y = factor.solve(right);
            if y.iter().all(|v| v.is_finite()) {
                return y;
            }
        }
        ridge *= 100.0;
        if ridge > 1e12 {
            return DVector::zeros(right.len());
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Sum of squares of the Rosenbrock residuals (Comput. J. 3 (1960) 175), minimum 0 at (1, 1).
    struct Rosenbrock {
        bounds: Vec<(f64, f64)>,
        steps: Vec<f64>,
    }

    impl Objective for Rosenbrock {
        fn bounds(&self) -> &[(f64, f64)] {
            &self.bounds
        }
        fn largest_steps(&self) -> &[f64] {
            &self.steps
        }
        fn value(&mut self, x: &[f64]) -> Option<f64> {
            let (a, b) = (10.0 * (x[1] - x[0] * x[0]), 1.0 - x[0]);
            Some(a * a + b * b)
        }
        fn expand(&mut self, x: &[f64]) -> Answer<Expansion> {
            let r = DVector::from_vec(vec![10.0 * (x[1] - x[0] * x[0]), 1.0 - x[0]]);
            let j = DMatrix::from_row_slice(2, 2, &[-20.0 * x[0], 10.0, -1.0, 0.0]);
            Ok(Expansion {
                value: r.dot(&r),
                gradient: 2.0 * j.transpose() * &r,
                curvature: 2.0 * j.transpose() * j,
            })
        }
    }

    fn rosenbrock(bounds: (f64, f64)) -> Rosenbrock {
        Rosenbrock {
            bounds: vec![bounds, (f64::NEG_INFINITY, f64::INFINITY)],
            steps: vec![f64::INFINITY; 2],
        }
    }

    #[test]
    fn finds_the_curved_valley() {
        let mut objective = rosenbrock((f64::NEG_INFINITY, f64::INFINITY));
        let found = minimise(&mut objective, &[-1.2, 1.0], Tolerance::default()).unwrap();
        assert_eq!(found.stop.reason, StopReason::Converged);
        assert!((found.x[0] - 1.0).abs() < 1e-4 && (found.x[1] - 1.0).abs() < 2e-4);
    }

    /// With x <= 0.5 the minimum is on the bound: y = x^2 there, value 0.25.
    #[test]
    fn stops_on_a_bound() {
        let mut objective = rosenbrock((f64::NEG_INFINITY, 0.5));
        let found = minimise(&mut objective, &[-1.2, 1.0], Tolerance::default()).unwrap();
        assert_eq!(found.at_bound, [true, false]);
        assert!((found.expansion.value - 0.25).abs() < 1e-8);
        assert!((found.x[1] - 0.25).abs() < 1e-4);
    }
}
