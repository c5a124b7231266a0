//! The Faddeeva function w(z) = exp(-z^2) erfc(-iz) and the Voigt profile.

use crate::math;
use core::f64::consts::PI;
use num_complex::Complex64;

/// Number of terms; the step is h = sqrt(pi/(TERMS+1)).
const TERMS: u32 = 11;

/// w(z) in the whole plane, relative accuracy 1e-13 (in the lower half plane away from zeros).
///
/// Trapezium and midpoint rules for w(z) = (iz/pi) int e^{-t^2}/(z^2-t^2) dt with the residue of
/// the pole at t = z added; of the two rules the one whose nodes stay away from Re z is taken:
/// Al Azah & Chandler-Wilde, SIAM J. Numer. Anal. 59 (2021) 2346.
#[must_use]
pub fn w(z: Complex64) -> Complex64 {
    if z.im < 0.0 {
        // DLMF 7.4.3: w(-z) = 2 exp(-z^2) - w(z).
        return gauss(z) * 2.0 - w(-z);
    }
    if z.re < 0.0 {
        return w(Complex64::new(-z.re, z.im)).conj();
    }
    let h = (PI / (f64::from(TERMS) + 1.0)).sqrt();
    let (x, y) = (z.re, z.im);
    let phase = x / h - (x / h).floor();
    let trapezium = y < x && (0.25..=0.75).contains(&phase);
    let square = z * z;
    let mut sum = Complex64::new(0.0, 0.0);
    let mut k = if trapezium { 1.0 } else { 0.5 };
    for _ in 0..=TERMS {
        let t = k * h;
        sum += math::exp(-t * t) / (square - t * t);
        k += 1.0;
    }
    let mut out = Complex64::i() * z * sum * (2.0 * h / PI);
    if trapezium {
        out += Complex64::i() * (h / PI) / z;
    }
    if y < x.max(PI / h) {
        let turn = math::polar(math::exp(-2.0 * PI * y / h), 2.0 * PI * phase);
        let denominator = if trapezium { turn - 1.0 } else { turn + 1.0 };
        out += gauss(z) * turn * 2.0 / denominator;
    }
    out
}

/// exp(-z^2).
fn gauss(z: Complex64) -> Complex64 {
    math::polar(math::exp((z.im - z.re) * (z.im + z.re)), -2.0 * z.re * z.im)
}

/// Gaussian of standard deviation `sigma` folded with a Lorentzian of half width `half_width`,
/// at distance `x` from the centre, area 1 (DLMF 7.19.1 in these variables). Any one unit.
#[must_use]
pub fn voigt(x: f64, sigma: f64, half_width: f64) -> f64 {
    let scale = 1.0 / (sigma * core::f64::consts::SQRT_2);
    w(Complex64::new(x, half_width) * scale).re * scale / PI.sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn reference() -> serde_json::Value {
        serde_json::from_str(include_str!(
            "../../../../tests/reference/special_functions.json"
        ))
        .unwrap()
    }

    #[test]
    fn abramowitz_and_stegun_table_7_9() {
        assert!((w(Complex64::new(0.0, 1.0)).re - 0.427_584).abs() < 5e-7);
        let value = w(Complex64::new(1.0, 1.0));
        assert!((value.re - 0.304_744).abs() < 5e-7 && (value.im - 0.208_219).abs() < 5e-7);
    }

    /// Against mpmath (tests/reference/special_functions.py); each part relative to itself.
    #[test]
    fn both_parts_to_thirteen_digits() {
        let mut worst = 0.0f64;
        let mut where_ = (0.0, 0.0);
        for row in reference()["w"].as_array().unwrap() {
            let n = |i: usize| row[i].as_f64().unwrap();
            let ours = w(Complex64::new(n(0), n(1)));
            for (a, b) in [(ours.re, n(2)), (ours.im, n(3))] {
                let off = if b == 0.0 {
                    a.abs()
                } else {
                    (a / b - 1.0).abs()
                };
                if off > worst {
                    worst = off;
                    where_ = (n(0), n(1));
                }
            }
        }
        assert!(worst < 1e-13, "{worst:e} at {where_:?}");
    }

    #[test]
    fn symmetries() {
        for &(x, y) in &[(0.3, 0.2), (5.5, 1e-13), (2.0, 3.0), (0.0, 0.7)] {
            let z = Complex64::new(x, y);
            assert_eq!(w(-z.conj()), w(z).conj());
            let sum = w(-z) + w(z);
            assert!(math::abs(sum - gauss(z) * 2.0) < 1e-13 * (1.0 + math::abs(sum)));
        }
    }
}
