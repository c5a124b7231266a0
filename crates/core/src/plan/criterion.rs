//! What is to be small: D-, D_s- and weighted c-criteria in one form.
//!
//! Every criterion is the mean over the truths of a convex phi(I) normalised so that
//! -d phi = tr(M dI) with tr(M I) = 1. Then exp(-phi) scales like the information, and one
//! certificate serves all (see [`super::certificate`]).
//!
//! | criterion | phi | M |
//! | --- | --- | --- |
//! | D | -ln det I / p | I^-1/p |
//! | D_s | -ln det S / s, S the Schur complement of the interests | B K S K^T B / s, B = I^-1 |
//! | variance | ln tr(C^T I^-1 C) | B C C^T B / tr(C^T B C) |
//!
//! Robust forms (mean of ln det, of ln variance): Chaloner & Verdinelli, Stat. Sci. 10 (1995) 273.

use super::problem::{Problem, refuse};
use crate::error::Answer;
use crate::math;
use nalgebra::{DMatrix, DVector};

/// The criterion of a plan.
#[derive(Debug, Clone, PartialEq)]
pub enum Criterion {
    /// All parameters together: largest det I (D-optimal).
    Determinant,
    /// These parameters together, the others profiled (D_s-optimal); indices into the names.
    Subset(Vec<usize>),
    /// Least sum of the variances of the columns' combinations, others profiled. Weights and
    /// wanted precisions are multiplied into the columns: one column is the c-criterion.
    Variance(DMatrix<f64>),
}

impl Criterion {
    /// Least variance of one parameter out of `parameters`.
    #[must_use]
    pub fn parameter(index: usize, parameters: usize) -> Self {
        let mut c = DMatrix::zeros(parameters, 1);
        if index < parameters {
            c[(index, 0)] = 1.0;
        }
        Self::Variance(c)
    }
}

/// A criterion in the scaled parameters of one problem.
#[derive(Debug, Clone)]
pub(crate) enum Scaled {
    Determinant,
    Subset(DMatrix<f64>),
    Variance(DMatrix<f64>),
}

/// Value and derivatives of phi at one information matrix.
pub(crate) struct Assessment {
    /// phi.
    pub value: f64,
    /// I^-1.
    pub inverse: DMatrix<f64>,
    /// V with M = V V^T.
    pub factor: DMatrix<f64>,
}

impl Scaled {
    pub(crate) fn new(criterion: &Criterion, problem: &Problem) -> Answer<Self> {
        let p = problem.parameters;
        match criterion {
            Criterion::Determinant => Ok(Self::Determinant),
            Criterion::Subset(list) => {
                let mut sorted = list.clone();
                sorted.sort_unstable();
                sorted.dedup();
                if sorted.is_empty() || sorted.len() != list.len() || sorted.iter().any(|&i| i >= p)
                {
                    return Err(refuse(
                        "plan.goal",
                        &format!("{list:?}"),
                        "distinct free parameters",
                        "The goal names no parameter, one twice, or one that is not free.",
                    ));
                }
                let mut k = DMatrix::zeros(p, list.len());
                for (column, &i) in list.iter().enumerate() {
                    k[(i, column)] = 1.0;
                }
                Ok(Self::Subset(k))
            }
            Criterion::Variance(c) => {
                if c.nrows() != p
                    || c.ncols() == 0
                    || c.iter().any(|x| !x.is_finite())
                    || c.iter().all(|&x| x == 0.0)
                {
                    return Err(refuse(
                        "plan.goal",
                        "",
                        "a combination of free parameters, not all weights 0",
                        "The goal does not depend on any free parameter, so no beam time changes it.",
                    ));
                }
                let mut scaled = c.clone();
                for mut column in scaled.column_iter_mut() {
                    for i in 0..p {
                        column[i] /= problem.scale[i];
                    }
                }
                Ok(Self::Variance(scaled))
            }
        }
    }

    /// phi and its derivatives; `None` if the matrix is not positive definite.
    pub(crate) fn assess(&self, info: &DMatrix<f64>) -> Option<Assessment> {
        let cholesky = info.clone().cholesky()?;
        let p = info.nrows();
        let lower = cholesky.l_dirty();
        let mut ln_det = 0.0;
        for i in 0..p {
            let d = lower[(i, i)];
            // What is left of parameter i once the earlier ones are known; below this a Cholesky
            // factor survives by rounding alone.
            if !(d * d > NO_INFORMATION * info[(i, i)] && d.is_finite()) {
                return None;
            }
            ln_det += 2.0 * math::ln(d);
        }
        let inverse = cholesky.inverse();
        let (value, factor) = match self {
            Self::Determinant => {
                let value = -ln_det / p as f64;
                let root = inverse.clone().cholesky()?.unpack();
                (value, root / (p as f64).sqrt())
            }
            Self::Subset(k) => {
                let s = k.ncols() as f64;
                let covariance = k.transpose() * &inverse * k;
                let chol = covariance.cholesky()?;
                let l = chol.l_dirty();
                let mut value = 0.0;
                for i in 0..k.ncols() {
                    value += 2.0 * math::ln(l[(i, i)]) / s;
                }
                // S = (L L^T)^-1, so V = B K L^-T / sqrt(s).
                let l_inverse = chol.l().try_inverse()?;
                (value, &inverse * k * l_inverse.transpose() / s.sqrt())
            }
            Self::Variance(c) => {
                let y = &inverse * c;
                let sum = c.dot(&y);
                if !(sum > 0.0 && sum.is_finite()) {
                    return None;
                }
                (math::ln(sum), y / sum.sqrt())
            }
        };
        value.is_finite().then_some(Assessment {
            value,
            inverse,
            factor,
        })
    }

    /// phi with the information allowed to be singular: infinite if the goal is undetermined.
    pub(crate) fn value(&self, info: &DMatrix<f64>) -> f64 {
        if let Some(a) = self.assess(info) {
            return a.value;
        }
        let Self::Variance(c) = self else {
            return f64::INFINITY;
        };
        match covariance_of(info, c) {
            Some(v) => math::ln(v.trace()),
            None => f64::INFINITY,
        }
    }

    /// Second derivative of phi for two directions a, b from a^T B b, a^T M b, a^T M a, b^T M b.
    #[inline]
    pub(crate) fn curvature(
        &self,
        inverse_ab: f64,
        m_ab: f64,
        m_aa: f64,
        m_bb: f64,
        p: f64,
    ) -> f64 {
        match self {
            Self::Determinant => p * m_ab * m_ab,
            Self::Subset(k) => 2.0 * inverse_ab * m_ab - k.ncols() as f64 * m_ab * m_ab,
            Self::Variance(_) => 2.0 * inverse_ab * m_ab - m_aa * m_bb,
        }
    }
}

/// Relative size below which an eigenvalue of information (unit diagonal) counts as none.
const NO_INFORMATION: f64 = 1e-12;

fn unit_diagonal(info: &DMatrix<f64>) -> (DMatrix<f64>, DVector<f64>) {
    let p = info.nrows();
    let d = DVector::from_fn(p, |i, _| {
        let s = info[(i, i)].max(0.0).sqrt();
        if s > 0.0 { s } else { 1.0 }
    });
    let unit = DMatrix::from_fn(p, p, |i, j| info[(i, j)] / (d[i] * d[j]));
    (unit, d)
}

/// C^T I^- C where the columns of C are determined by I; `None` where they are not.
/// Relative accuracy about 1e-5 for the barely determined.
#[must_use]
pub fn covariance_of(info: &DMatrix<f64>, c: &DMatrix<f64>) -> Option<DMatrix<f64>> {
    let p = info.nrows();
    if info.iter().any(|x| !x.is_finite()) || c.nrows() != p {
        return None;
    }
    let (unit, d) = unit_diagonal(info);
    let mut goal = c.clone();
    for mut column in goal.column_iter_mut() {
        for i in 0..p {
            column[i] /= d[i];
        }
    }
    let eigen = unit.symmetric_eigen();
    let mut covariance = DMatrix::zeros(c.ncols(), c.ncols());
    let mut lost = DVector::<f64>::zeros(c.ncols());
    for (i, &value) in eigen.eigenvalues.iter().enumerate() {
        let part = goal.tr_mul(&eigen.eigenvectors.column(i));
        if value > NO_INFORMATION {
            covariance += &part * part.transpose() / value;
        } else {
            lost += part.map(|x| x * x);
        }
    }
    let determined = (0..c.ncols()).all(|q| {
        let norm2 = goal.column(q).norm_squared();
        lost[q] <= 1e-10 * norm2
    });
    determined.then_some(covariance)
}

/// Which parameters take part in what `info` leaves undetermined, largest share first.
#[must_use]
pub fn undetermined(info: &DMatrix<f64>, names: &[String]) -> Vec<String> {
    let (unit, _) = unit_diagonal(info);
    let eigen = unit.symmetric_eigen();
    let mut share = vec![0.0; names.len()];
    for (i, &value) in eigen.eigenvalues.iter().enumerate() {
        if value <= NO_INFORMATION {
            for (s, x) in share.iter_mut().zip(eigen.eigenvectors.column(i).iter()) {
                *s += x * x;
            }
        }
    }
    let mut order: Vec<usize> = (0..names.len()).filter(|&i| share[i] > 1e-3).collect();
    order.sort_by(|&a, &b| share[b].total_cmp(&share[a]).then(a.cmp(&b)));
    order.into_iter().map(|i| names[i].clone()).collect()
}

/// Refuses a goal that all the allowed energies together cannot determine.
pub(crate) fn check_determined(problem: &Problem, criterion: &Scaled) -> Answer<()> {
    let uniform = problem.uniform();
    for draw in &problem.draws {
        let info = problem.scaled_information(draw, &uniform);
        if criterion.value(&info).is_finite() {
            continue;
        }
        let names = undetermined(&info, &problem.names);
        let (value, message) = if names.is_empty() {
            (
                String::new(),
                "The allowed energies do not determine the goal. Widen the window.".to_string(),
            )
        } else {
            let list = names.join(", ");
            (
                list.clone(),
                format!(
                    "The allowed energies cannot tell apart {list}, and the goal depends on it. What would help: a wider window, a constraint on one of them, or leaving one of them fixed."
                ),
            )
        };
        return Err(refuse(
            "plan.goal",
            &value,
            "a goal that the allowed energies determine",
            &message,
        ));
    }
    Ok(())
}
