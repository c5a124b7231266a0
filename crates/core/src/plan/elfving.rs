//! Least variance of one combination without prior: Elfving's linear programme.
//!
//! min sum |x_j| with sum x_j h_j = c (h = g/sqrt m); then t_j = T |x_j|/rho, variance rho^2/T
//! (Elfving, Ann. Math. Stat. 23 (1952) 255). The information of the optimum may be singular,
//! which the programme does not mind: its dual y, max c^T y with |h_j^T y| <= 1, certifies it.
//!
//! Revised simplex with a fresh LU of the small basis at every pivot. A general LP library
//! would bring sparse matrices for a programme of p rows whose columns come in +- pairs and
//! whose answer is checked here by its own dual in two lines.

use super::certificate::Certificate;
use super::criterion::Scaled;
use super::problem::Problem;
use super::relaxed::{Relaxed, finish};
use crate::math;
use nalgebra::{DMatrix, DVector};

/// The optimum where the programme applies: one truth, one combination, no prior, no errors of
/// visits. `None` where it does not, or does not reach `wanted`.
pub(crate) fn optimise(problem: &Problem, criterion: &Scaled, wanted: f64) -> Option<Relaxed> {
    let Scaled::Variance(c) = criterion else {
        return None;
    };
    let [draw] = problem.draws.as_slice() else {
        return None;
    };
    let bare = draw.prior.iter().all(|&x| x == 0.0)
        && draw.visit_error.iter().all(|&e| e == 0.0)
        && c.ncols() == 1;
    if !bare {
        return None;
    }
    let p = problem.parameters;
    let goal = DVector::from_column_slice(c.column(0).as_slice());
    let Solution { basis, y, pivots } = simplex(&draw.roots, p, &goal)?;
    let reach = draw
        .roots
        .chunks_exact(p)
        .map(|h| dot(h, &y).abs())
        .fold(0.0, f64::max);
    let rho: f64 = basis.iter().map(|&(_, x)| x.abs()).sum();
    let lower = goal.dot(&y) / reach;
    if !(rho > 0.0 && lower > 0.0) {
        return None;
    }
    let mut hours = vec![0.0; problem.candidates];
    for &(j, x) in &basis {
        hours[j] += problem.hours * x.abs() / rho;
    }
    let efficiency = (lower * lower / (rho * rho)).min(1.0);
    let certificate = Certificate {
        value: 2.0 * math::ln(rho) - math::ln(problem.hours),
        efficiency,
        gain_per_h: draw
            .roots
            .chunks_exact(p)
            .map(|h| {
                let s = dot(h, &y) / reach;
                s * s / problem.hours
            })
            .collect(),
    };
    (efficiency >= wanted)
        .then(|| finish(problem, criterion, hours, certificate, 0.0, pivots, wanted))
}

fn dot(h: &[f64], y: &DVector<f64>) -> f64 {
    h.iter().zip(y.iter()).map(|(a, b)| a * b).sum()
}

/// A column of the basis: a candidate with its sign, or an artificial unit vector.
#[derive(Clone, Copy, PartialEq)]
enum Column {
    Candidate(usize, f64),
    Artificial(usize, f64),
}

/// Solution of the programme.
struct Solution {
    /// (candidate, signed x).
    basis: Vec<(usize, f64)>,
    /// Dual.
    y: DVector<f64>,
    pivots: usize,
}

fn simplex(roots: &[f64], p: usize, c: &DVector<f64>) -> Option<Solution> {
    let norm = c.norm();
    // A small fixed perturbation breaks ties between bases (degenerate optima are the rule
    // here: singular designs); the answer is recomputed with the true goal at the end.
    let tilt = DVector::from_fn(p, |i, _| {
        c[i] + norm * 1e-9 * (1.0 + i as f64 / (p as f64 + 0.7))
    });
    let mut basis: Vec<Column> = (0..p)
        .map(|i| Column::Artificial(i, if tilt[i] < 0.0 { -1.0 } else { 1.0 }))
        .collect();
    let largest = roots.iter().fold(0.0_f64, |a, &b| a.max(b.abs()));
    // Any artificial mass costs more than every candidate could.
    let penalty = 1e7 / largest.max(1e-300);
    for pivot in 0..(200 + 50 * p) {
        let b = DMatrix::from_fn(p, p, |i, k| entry(basis[k], roots, p, i));
        let lu = b.clone().lu();
        let x = lu.solve(&tilt)?;
        let cost = DVector::from_fn(p, |k, _| match basis[k] {
            Column::Candidate(..) => 1.0,
            Column::Artificial(..) => penalty,
        });
        let y = b.transpose().lu().solve(&cost)?;
        let mut enter = None;
        let mut largest_gain = 1.0 + 1e-9;
        for (j, h) in roots.chunks_exact(p).enumerate() {
            let s = dot(h, &y);
            if s.abs() > largest_gain {
                largest_gain = s.abs();
                enter = Some((j, s.signum()));
            }
        }
        let Some((j, sign)) = enter else {
            let true_x = lu.solve(c)?;
            let mut solution = Vec::new();
            for (k, column) in basis.iter().enumerate() {
                match column {
                    Column::Candidate(j, s) => solution.push((*j, s * true_x[k])),
                    Column::Artificial(..) if x[k].abs() > 1e-6 * norm => return None,
                    Column::Artificial(..) => {}
                }
            }
            return Some(Solution {
                basis: solution,
                y,
                pivots: pivot,
            });
        };
        let column = DVector::from_fn(p, |i, _| sign * roots[j * p + i]);
        let d = lu.solve(&column)?;
        let floor = 1e-11 * d.amax();
        let mut leave = None;
        let mut shortest = f64::INFINITY;
        for k in 0..p {
            if d[k] > floor {
                let ratio = x[k].max(0.0) / d[k];
                if ratio < shortest {
                    shortest = ratio;
                    leave = Some(k);
                }
            }
        }
        basis[leave?] = Column::Candidate(j, sign);
    }
    None
}

fn entry(column: Column, roots: &[f64], p: usize, i: usize) -> f64 {
    match column {
        Column::Candidate(j, s) => s * roots[j * p + i],
        Column::Artificial(k, s) => {
            if k == i {
                s
            } else {
                0.0
            }
        }
    }
}
