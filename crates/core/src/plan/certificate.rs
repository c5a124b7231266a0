//! How far an allocation can be from the best: a guarantee, not an estimate.
//!
//! Let M_k be the normalised derivative of the criterion for truth k ([`super::criterion`]),
//! tr(M_k I_k) = 1. For every other allocation t*,
//! efficiency = exp(phi(t*) - phi(t)) >= 1/sum_k p_k tr(M_k I*_k)
//! (Gauss-Markov and Cauchy-Schwarz for variances, the inequality of means for determinants,
//! Jensen over the truths). The gains are concave, so I* lies below their tangents at t, and
//! with psi_j = sum_k p_k f'_jk(t_j) h_jk^T M_k h_jk
//! efficiency >= 1/(B + T max_j psi_j), B = sum_k p_k (tr(M_k I0_k) + sum_j (f_jk - t_j f'_jk) h^T M_k h).
//! Without errors of visits these are phi/(y^T I0 y + T max (g^T y)^2/m) and
//! p/(tr(I^-1 I0) + T max d); without prior, phi/max psi and p/max d (Kiefer & Wolfowitz 1960).

use super::criterion::{Assessment, Scaled};
use super::problem::Problem;

/// What is known about one allocation.
#[derive(Debug, Clone, PartialEq)]
pub struct Certificate {
    /// phi: mean over the truths of the normalised logarithmic criterion (scaled parameters).
    pub(crate) value: f64,
    /// Guaranteed efficiency against every allocation of the same hours.
    pub efficiency: f64,
    /// psi at each candidate, 1/h: relative gain of the criterion's information per further hour there.
    pub gain_per_h: Vec<f64>,
}

/// Certifies an allocation; `None` if its information is singular.
pub(crate) fn certify(problem: &Problem, criterion: &Scaled, hours: &[f64]) -> Option<Certificate> {
    let mut assessments = Vec::with_capacity(problem.draws.len());
    for draw in &problem.draws {
        assessments.push(criterion.assess(&problem.scaled_information(draw, hours))?);
    }
    Some(from_assessments(
        problem,
        &assessments,
        hours,
        problem.hours,
    ))
}

/// The certificate when the assessments are at hand.
pub(crate) fn from_assessments(
    problem: &Problem,
    assessments: &[Assessment],
    hours: &[f64],
    total_h: f64,
) -> Certificate {
    let p = problem.parameters;
    let mut gain = vec![0.0; problem.candidates];
    let mut fixed = 0.0;
    let mut value = 0.0;
    for (draw, a) in problem.draws.iter().zip(assessments) {
        value += draw.weight * a.value;
        fixed += draw.weight * draw.prior.dot(&(&a.factor * a.factor.transpose()));
        let plain = draw.visit_error.is_empty();
        let factor = a.factor.as_slice();
        for (j, g) in gain.iter_mut().enumerate() {
            let h = draw.root(j, p);
            let mut quadratic = 0.0;
            for column in factor.chunks_exact(p) {
                let mut z = 0.0;
                for (x, y) in h.iter().zip(column) {
                    z += x * y;
                }
                quadratic += z * z;
            }
            quadratic *= draw.weight;
            if plain {
                *g += quadratic;
            } else {
                let t = hours[j];
                let (f, slope, _) = draw.gain(j, t);
                *g += quadratic * slope;
                fixed += quadratic * (f - t * slope);
            }
        }
    }
    let best = gain.iter().copied().fold(0.0, f64::max);
    Certificate {
        value,
        efficiency: (1.0 / (fixed + total_h * best)).min(1.0),
        gain_per_h: gain,
    }
}
