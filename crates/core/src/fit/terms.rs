//! Terms of the statistic 2 NLL as functions of one prediction.

use crate::numerics::probability::poisson_deviance;

/// Value and derivatives of one term with respect to its prediction.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Term {
    /// Value.
    pub value: f64,
    /// First derivative.
    pub first: f64,
    /// Second derivative as observed.
    pub second: f64,
    /// Expected second derivative (> 0).
    pub expected: f64,
}

/// Baker-Cousins Poisson term of n at mean mu; `None` for mu <= 0 (unless n = mu = 0).
#[must_use]
pub fn counts(n: f64, mu: f64) -> Option<Term> {
    if !(mu > 0.0 && mu.is_finite()) {
        return None;
    }
    Some(Term {
        value: poisson_deviance(n, mu),
        first: 2.0 * (1.0 - n / mu),
        second: 2.0 * n / (mu * mu),
        expected: 2.0 / mu,
    })
}

/// Background that is most likely with signal `s`, for n on and n_off off counts.
#[must_use]
pub fn profiled_background(n: f64, n_off: f64, tau: f64, s: f64) -> f64 {
    // Root of (1 + tau) b^2 - (n + n_off - (1 + tau) s) b - s n_off = 0 that is >= 0.
    let c = n + n_off - (1.0 + tau) * s;
    let root = (c * c + 4.0 * (1.0 + tau) * s * n_off).sqrt();
    if c >= 0.0 {
        (c + root) / (2.0 * (1.0 + tau))
    } else if root > c {
        2.0 * s * n_off / (root - c)
    } else {
        0.0
    }
}

/// n ~ Poisson(s + b), n_off ~ Poisson(tau b), profiled over b >= 0; `None` for s < 0.
#[must_use]
pub fn on_off(n: f64, n_off: f64, tau: f64, s: f64) -> Option<Term> {
    if !(s >= 0.0 && s.is_finite()) {
        return None;
    }
    let b = profiled_background(n, n_off, tau, s);
    let mu = s + b;
    if mu <= 0.0 && n > 0.0 {
        return None;
    }
    let ratio = if n > 0.0 { n / mu } else { 0.0 };
    let on = if n > 0.0 { ratio / mu } else { 0.0 };
    let second = if b > 0.0 {
        let off = n_off / (b * b);
        if on + off > 0.0 {
            2.0 * on * off / (on + off)
        } else {
            0.0
        }
    } else {
        2.0 * on
    };
    // Variance of n - n_off/tau under the profiled means, at least one event's.
    let variance = (mu + b / tau).max(0.5);
    Some(Term {
        value: poisson_deviance(n, mu) + poisson_deviance(n_off, tau * b),
        first: 2.0 * (1.0 - ratio),
        second,
        expected: 2.0 / variance,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The profile against a golden-section minimum over b.
    #[test]
    fn profile_is_the_minimum_over_the_background() {
        for &(n, n_off, tau, s) in &[
            (12.0, 30.0, 3.0, 4.0),
            (0.0, 5.0, 2.0, 1.0),
            (7.0, 0.0, 1.5, 2.0),
            (3.0, 40.0, 2.0, 9.0),
        ] {
            let at = |b: f64| poisson_deviance(n, s + b) + poisson_deviance(n_off, tau * b);
            let (mut low, mut high) = (1e-12, 100.0);
            for _ in 0..200 {
                let (a, b) = (low + 0.382 * (high - low), low + 0.618 * (high - low));
                if at(a) < at(b) { high = b } else { low = a }
            }
            let term = on_off(n, n_off, tau, s).unwrap();
            assert!((term.value - at(low).min(at(0.0))).abs() < 1e-9);
            let h = 1e-4;
            let up = on_off(n, n_off, tau, s + h).unwrap();
            let down = on_off(n, n_off, tau, s - h).unwrap();
            assert!((term.first - (up.value - down.value) / (2.0 * h)).abs() < 1e-6);
            assert!((term.second - (up.first - down.first) / (2.0 * h)).abs() < 1e-6);
        }
    }

    /// Closed form at s = 0: the statistic is Li & Ma's squared significance
    /// (Astrophys. J. 272 (1983) 317, eq. 17, alpha = 1/tau).
    #[test]
    fn likelihood_ratio_is_li_and_ma() {
        let (n, n_off, tau) = (20.0f64, 30.0f64, 3.0f64);
        let alpha = 1.0 / tau;
        let li_ma = 2.0
            * (n * crate::math::ln((1.0 + alpha) / alpha * n / (n + n_off))
                + n_off * crate::math::ln((1.0 + alpha) * n_off / (n + n_off)));
        let q0 = on_off(n, n_off, tau, 0.0).unwrap().value;
        let best = on_off(n, n_off, tau, n - n_off / tau).unwrap().value;
        assert!(best.abs() < 1e-12);
        assert!((q0 - li_ma).abs() < 1e-12 * li_ma);
    }
}
