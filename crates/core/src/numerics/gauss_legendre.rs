//! Gauss-Legendre quadrature of any order.

use core::f64::consts::PI;

/// Nodes and weights of Gauss-Legendre quadrature on [-1, 1] by Newton's method on P_n
/// (Abramowitz & Stegun 25.4.29); exact to rounding.
#[must_use]
pub fn gauss_legendre(n: usize) -> Vec<(f64, f64)> {
    let count = n as f64;
    (0..n)
        .map(|i| {
            let mut x = crate::math::cos(PI * (i as f64 + 0.75) / (count + 0.5));
            let mut slope = 1.0;
            for _ in 0..60 {
                let (mut p, mut before) = (1.0, 0.0);
                for k in 1..=n {
                    let k = k as f64;
                    let next = ((2.0 * k - 1.0) * x * p - (k - 1.0) * before) / k;
                    before = p;
                    p = next;
                }
                slope = count * (x * p - before) / (x * x - 1.0);
                let step = p / slope;
                x -= step;
                if step.abs() < 1e-16 {
                    break;
                }
            }
            (x, 2.0 / ((1.0 - x * x) * slope * slope))
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn exact_for_polynomials() {
        for n in [1, 2, 7, 16, 40, 101] {
            let rule = gauss_legendre(n);
            for power in 0..(2 * n).min(30) as u32 {
                let sum: f64 = rule
                    .iter()
                    .map(|(x, w)| w * crate::math::powi(*x, power))
                    .sum();
                let exact = if power % 2 == 0 {
                    2.0 / f64::from(power + 1)
                } else {
                    0.0
                };
                assert!((sum - exact).abs() < 4e-15, "{n} {power}: {sum}");
            }
        }
    }
}
