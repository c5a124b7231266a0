//! Complex polynomials by their coefficients, constant first.

use crate::math::{abs, polar};
use num_complex::Complex64;

/// Value at `z` (Horner).
#[must_use]
pub fn evaluate(coefficients: &[Complex64], z: Complex64) -> Complex64 {
    coefficients
        .iter()
        .rev()
        .fold(Complex64::new(0.0, 0.0), |sum, c| sum * z + c)
}

/// Coefficients of lead * prod(z - root).
#[must_use]
pub fn from_roots(lead: Complex64, roots: &[Complex64]) -> Vec<Complex64> {
    let mut out = vec![lead];
    for root in roots {
        out.push(Complex64::new(0.0, 0.0));
        for i in (0..out.len()).rev() {
            let below = if i > 0 {
                out[i - 1]
            } else {
                Complex64::new(0.0, 0.0)
            };
            out[i] = below - out[i] * root;
        }
    }
    out
}

/// All roots, by simultaneous Newton steps with mutual repulsion (Aberth, Math. Comp. 27 (1973) 339).
/// Simple roots to about 1e-14 of the largest; leading zeros of the polynomial are dropped first.
#[must_use]
pub fn roots(coefficients: &[Complex64]) -> Vec<Complex64> {
    let largest = coefficients.iter().map(|c| abs(*c)).fold(0.0, f64::max);
    let degree = coefficients
        .iter()
        .rposition(|c| abs(*c) > 1e-300 && abs(*c) > 1e-16 * largest)
        .unwrap_or(0);
    if degree == 0 {
        return Vec::new();
    }
    let polynomial = &coefficients[..=degree];
    let derivative: Vec<Complex64> = polynomial
        .iter()
        .enumerate()
        .skip(1)
        .map(|(i, c)| c * i as f64)
        .collect();
    let lead = abs(polynomial[degree]);
    // Fujiwara's bound contains all roots; a tilted circle breaks the symmetry.
    let radius = polynomial
        .iter()
        .take(degree)
        .enumerate()
        .map(|(i, c)| crate::math::pow(abs(*c) / lead, 1.0 / (degree - i) as f64))
        .fold(0.0, f64::max)
        .max(1e-300);
    let mut z: Vec<Complex64> = (0..degree)
        .map(|k| {
            polar(
                radius,
                0.4 + 2.0 * core::f64::consts::PI * k as f64 / degree as f64,
            )
        })
        .collect();
    for _ in 0..500 {
        let mut moved: f64 = 0.0;
        for k in 0..degree {
            let value = evaluate(polynomial, z[k]);
            let slope = evaluate(&derivative, z[k]);
            if abs(value) == 0.0 {
                continue;
            }
            let newton = slope / value;
            let repulsion: Complex64 = (0..degree)
                .filter(|&j| j != k && z[j] != z[k])
                .map(|j| (z[k] - z[j]).inv())
                .sum();
            let denominator = newton - repulsion;
            if abs(denominator) == 0.0 {
                continue;
            }
            let step = denominator.inv();
            z[k] -= step;
            moved = moved.max(abs(step) / abs(z[k]).max(1e-16 * radius));
        }
        if moved < 1e-15 {
            break;
        }
    }
    z
}

#[cfg(test)]
mod tests {
    use super::*;

    proptest::proptest! {
        /// Roots put in come out again.
        #[test]
        fn finds_what_was_put_in(parts in proptest::collection::vec((-1.0f64..1.0, -1.0f64..1.0), 1..6)) {
            let given: Vec<Complex64> = parts.iter().map(|p| Complex64::new(p.0, p.1)).collect();
            let close = given.iter().enumerate().any(|(i, a)| given[..i].iter().any(|b| abs(a - b) < 0.05));
            proptest::prop_assume!(!close);
            let found = roots(&from_roots(Complex64::new(0.7, -2.0), &given));
            proptest::prop_assert_eq!(found.len(), given.len());
            for g in &given {
                proptest::prop_assert!(found.iter().any(|f| abs(f - g) < 1e-9));
            }
        }
    }
}
