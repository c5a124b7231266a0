//! Telling two hypotheses apart.
//!
//! Let m1 and m2 be their rates, the second refitted by its own parameters as well as it can.
//! Between them lies m2 + lambda (m1 - m2); the plan that knows lambda best with those parameters
//! profiled tells them apart best: to first order in the parameters this is the T-optimal design
//! (Atkinson & Fedorov, Biometrika 62 (1975) 57, from memory), for counts with weights 1/m. Where no
//! energy shows a difference beyond what the parameters can absorb, the goal is undetermined and
//! refused: more beam of the same kind decides nothing.

use super::problem::{Rates, refuse};
use crate::error::Answer;

/// The task's truth for telling `first` from `second`: `second`'s parameters are the nuisances,
/// lambda is the last parameter (`second.prior` may hold what is known of it). The rate is the mean of both.
///
/// # Errors
/// Rates at different energies.
pub fn contrast(first_rate_per_h: &[f64], second: &Rates) -> Answer<Rates> {
    let n = second.rate_per_h.len();
    if first_rate_per_h.len() != n || n == 0 || !second.gradient_per_h.len().is_multiple_of(n) {
        return Err(refuse(
            "plan.rival",
            "",
            "both hypotheses at the same energies",
            "The two hypotheses are not given at the same energies.",
        ));
    }
    let p = second.gradient_per_h.len() / n;
    let mut truth = second.clone();
    truth.rate_per_h.clear();
    truth.gradient_per_h.clear();
    for (j, (m1, m2)) in first_rate_per_h.iter().zip(&second.rate_per_h).enumerate() {
        truth.rate_per_h.push(0.5 * (m1 + m2));
        truth
            .gradient_per_h
            .extend(second.gradient_per_h.iter().skip(j * p).take(p));
        truth.gradient_per_h.push(m1 - m2);
    }
    truth.prior = second.prior.clone().resize(p + 1, p + 1, 0.0);
    Ok(truth)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::math;
    use crate::plan::criterion::Criterion;
    use crate::plan::problem::{Problem, VisitErrors};
    use crate::plan::relaxed::optimise;
    use nalgebra::DMatrix;

    fn rates(rate: Vec<f64>, gradient: Vec<f64>) -> Rates {
        Rates {
            weight: 1.0,
            rate_per_h: rate,
            gradient_per_h: gradient,
            slope_per_h_gev: Vec::new(),
            rate_without_beam_per_h: 0.0,
            prior: DMatrix::zeros(1, 1),
        }
    }

    /// Straight line against constant on [-1, 1], constant rate: half the time at each end
    /// (T-optimal by symmetry), 1/variance of lambda = T a^2/m.
    #[test]
    fn constant_against_a_line() {
        let xs: Vec<f64> = (0..41).map(|i| -1.0 + 0.05 * f64::from(i)).collect();
        let second = rates(vec![100.0; 41], vec![1.0; 41]);
        let first: Vec<f64> = xs.iter().map(|x| 100.0 + 5.0 * x).collect();
        let mut truth = contrast(&first, &second).unwrap();
        let criterion = Criterion::parameter(1, 2);
        truth.rate_per_h = vec![100.0; 41];
        let names = ["level".to_string(), "lambda".to_string()];
        let problem = Problem::new(&names, &[truth], VisitErrors::default(), 8.0, 1.0).unwrap();
        let plan = optimise(&problem, &criterion, 0.9999).unwrap();
        assert!((plan.hours[0] - 4.0).abs() < 1e-3 && (plan.hours[40] - 4.0).abs() < 1e-3);
        assert!((math::exp(-plan.criterion) / (8.0 * 25.0 / 100.0) - 1.0).abs() < 1e-4);
    }

    /// Two hypotheses that differ by what a free parameter absorbs cannot be told apart.
    #[test]
    fn equal_curves_are_refused() {
        let second = rates(vec![100.0; 9], vec![1.0; 9]);
        let first = vec![103.0; 9];
        let truth = contrast(&first, &second).unwrap();
        let criterion = Criterion::parameter(1, 2);
        let names = ["level".to_string(), "lambda".to_string()];
        let problem = Problem::new(&names, &[truth], VisitErrors::default(), 8.0, 1.0).unwrap();
        let refusal = optimise(&problem, &criterion, 0.999).unwrap_err();
        assert!(refusal.message.contains("lambda"), "{}", refusal.message);
    }
}
