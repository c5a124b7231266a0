//! The relaxed problem alone, from arrays: for whoever has rates of their own, and for comparisons.

use super::criterion::Criterion;
use super::problem::{Problem, Rates, VisitErrors};
use super::relaxed::optimise;
use crate::error::{Answer, Refusal};
use nalgebra::DMatrix;
use serde::{Deserialize, Serialize};

/// Hours to be spread over energies; every list of numbers per energy has one entry per parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(deny_unknown_fields)]
pub struct DesignProblem {
    /// Expected counts per hour at each energy.
    pub rate_per_h: Vec<f64>,
    /// Their derivatives by the parameters, at each energy.
    pub gradient_per_h: Vec<Vec<f64>>,
    /// Prior information, row by row; empty: none.
    #[serde(default)]
    pub prior: Vec<Vec<f64>>,
    /// Hours.
    pub hours: f64,
    /// Coefficients of the combination whose variance is to be least; absent: largest determinant.
    #[serde(default)]
    pub combination: Option<Vec<f64>>,
    /// The curve moved along the energies by so many of their steps, each as likely as the others:
    /// a position that is not known. Empty: where it is.
    #[serde(default)]
    pub moved_by: Vec<f64>,
    /// Guaranteed efficiency wanted.
    pub wanted: f64,
}

/// The optimum of a [`DesignProblem`].
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Design {
    /// ln of the variance of the combination, or ln det of the information.
    pub log_criterion: f64,
    /// Guaranteed efficiency.
    pub certificate: f64,
    /// Hours at each energy.
    pub hours: Vec<f64>,
}

/// Solves it.
///
/// # Errors
/// Arrays that do not fit together, an undetermined combination.
pub fn solve(design: &DesignProblem) -> Answer<Design> {
    let p = design.gradient_per_h.first().map_or(0, Vec::len);
    let refuse = |field: &str, allowed: &str| {
        Err(Refusal::new(
            format!("design.{field}"),
            "",
            allowed,
            "The arrays of the design do not fit together.",
        ))
    };
    if p == 0 || design.gradient_per_h.iter().any(|g| g.len() != p) {
        return refuse(
            "gradient_per_h",
            "as many derivatives at every energy, at least one",
        );
    }
    let square = design.prior.len() == p && design.prior.iter().all(|row| row.len() == p);
    if !(square || design.prior.is_empty()) {
        return refuse("prior", "a square matrix of the parameters, or none");
    }
    if !(0.5..1.0).contains(&design.wanted) {
        return refuse("wanted", "an efficiency from 0.5 to below 1");
    }
    let criterion = match &design.combination {
        Some(c) if c.len() == p => Criterion::Variance(DMatrix::from_column_slice(p, 1, c)),
        Some(_) => return refuse("combination", "one coefficient per parameter"),
        None => Criterion::Determinant,
    };
    let prior = if square {
        DMatrix::from_row_slice(p, p, &design.prior.concat())
    } else {
        DMatrix::zeros(p, p)
    };
    let flat = design.gradient_per_h.concat();
    let here = [0.0];
    let shifts = if design.moved_by.is_empty() {
        &here[..]
    } else {
        &design.moved_by
    };
    if shifts.iter().any(|s| !s.is_finite()) {
        return refuse("moved_by", "finite numbers of steps");
    }
    let truths: Vec<Rates> = shifts
        .iter()
        .map(|&shift| Rates {
            weight: 1.0,
            rate_per_h: moved(&design.rate_per_h, 1, shift),
            gradient_per_h: moved(&flat, p, shift),
            slope_per_h_gev: Vec::new(),
            rate_without_beam_per_h: 0.0,
            prior: prior.clone(),
        })
        .collect();
    let names: Vec<String> = (1..=p).map(|i| format!("parameter {i}")).collect();
    let problem = Problem::new(&names, &truths, VisitErrors::default(), design.hours, 1.0)?;
    let best = optimise(&problem, &criterion, design.wanted)?;
    Ok(Design {
        log_criterion: best.criterion,
        certificate: best.efficiency,
        hours: best.hours,
    })
}

/// Rows of `p` numbers read `shift` rows earlier, on straight lines between and constant outside.
fn moved(flat: &[f64], p: usize, shift: f64) -> Vec<f64> {
    let last = (flat.len() / p).saturating_sub(1);
    let at = |j: usize, k: usize| flat.get(j * p + k).copied().unwrap_or(0.0);
    let mut out = Vec::with_capacity(flat.len());
    for j in 0..=last {
        let x = (j as f64 - shift).clamp(0.0, last as f64);
        let i = (x as usize).min(last.saturating_sub(1));
        let f = x - i as f64;
        out.extend((0..p).map(|k| at(i, k) * (1.0 - f) + at((i + 1).min(last), k) * f));
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    fn quadratic(combination: Option<Vec<f64>>) -> DesignProblem {
        let xs = (0..=20).map(|i| -1.0 + 0.1 * f64::from(i));
        DesignProblem {
            rate_per_h: vec![1.0; 21],
            gradient_per_h: xs.map(|x| vec![1.0, x, x * x]).collect(),
            prior: Vec::new(),
            hours: 1.0,
            combination,
            moved_by: Vec::new(),
            wanted: 0.9999,
        }
    }

    /// Textbook designs of a quadratic on [-1, 1]: D-optimal -1, 0, 1 with a third each; extrapolation
    /// to x = 2 with 1/7, 3/7, 3/7 and variance 49 (Hoel & Levine, Ann. Math. Stat. 35 (1964) 1553).
    #[test]
    fn textbook_designs_from_arrays() {
        let solve = |problem| {
            let found = solve(&problem).unwrap();
            (found.log_criterion, found.certificate, found.hours)
        };
        let (_, certificate, hours) = solve(quadratic(None));
        assert!(certificate >= 0.9999);
        for i in [0, 10, 20] {
            assert!((hours[i] - 1.0 / 3.0).abs() < 1e-2, "{hours:?}");
        }
        let (log_variance, _, hours) = solve(quadratic(Some(vec![1.0, 2.0, 4.0])));
        assert!(
            (crate::math::exp(log_variance) - 49.0).abs() < 0.05,
            "{log_variance}"
        );
        assert!((hours[0] - 1.0 / 7.0).abs() < 5e-3 && (hours[20] - 3.0 / 7.0).abs() < 5e-3);
    }

    /// One truth moved by whole steps is the design moved by them; more truths spread it.
    #[test]
    fn a_position_that_is_not_known() {
        let peak = |moved_by: Vec<f64>| {
            let x = |j: i32| 0.1 * f64::from(j - 30);
            let height = |j: i32| 1.0 / (1.0 + x(j) * x(j));
            let gradient = |j: i32| vec![2.0 * x(j) * height(j) * height(j)];
            DesignProblem {
                rate_per_h: (0..61).map(height).collect(),
                gradient_per_h: (0..61).map(gradient).collect(),
                moved_by,
                ..quadratic(None)
            }
        };
        let (still, moved) = (peak(Vec::new()), peak(vec![5.0]));
        let (still, moved) = (solve(&still).unwrap(), solve(&moved).unwrap());
        // Information g^2/m is largest 1/sqrt(2) off the peak: candidate 37 or 23 of equal worth.
        let on = |hours: &[f64], js: [usize; 2]| -> f64 { js.iter().map(|&j| hours[j]).sum() };
        assert!(on(&still.hours, [23, 37]) > 0.95, "{:?}", still.hours);
        assert!(on(&moved.hours, [28, 42]) > 0.95, "{:?}", moved.hours);
        let spread = solve(&peak((-10..=10).map(f64::from).collect())).unwrap();
        assert!(spread.certificate >= 0.9999 && spread.log_criterion < still.log_criterion);
    }

    #[test]
    fn arrays_that_do_not_fit_are_refused() {
        let mut short = quadratic(Some(vec![1.0]));
        assert_eq!(solve(&short).unwrap_err().field, "design.combination");
        short = quadratic(None);
        short.gradient_per_h[3].pop();
        assert_eq!(solve(&short).unwrap_err().field, "design.gradient_per_h");
        short = quadratic(None);
        short.rate_per_h.pop();
        assert!(solve(&short).is_err());
        short = quadratic(None);
        short.prior = vec![vec![1.0]];
        assert_eq!(solve(&short).unwrap_err().field, "design.prior");
    }
}
