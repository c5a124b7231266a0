//! Limits and significances of one counting point with known background.

use crate::error::{Answer, Refusal};
use crate::math::{exp, ln};
use crate::numerics::probability::{gamma_p_inverse, gamma_q, poisson_cdf, poisson_pmf};

/// Upper limit on the signal s of n ~ Poisson(s + b) by CLs at confidence `level`:
/// P(N <= n; s + b)/P(N <= n; b) = 1 - level. Exact; 2.996 for n = 0 and any b at 95 %.
#[must_use]
pub fn cls_upper_limit(n: f64, b: f64, level: f64) -> f64 {
    // P(N <= n; mu) = Q(n + 1, mu), so the limit inverts Q.
    let wanted = (1.0 - level) * poisson_cdf(n, b);
    let total = if wanted > 1e-12 {
        gamma_p_inverse(n + 1.0, 1.0 - wanted)
    } else {
        // Deep in the tail: bisection keeps the digits of Q.
        let (mut low, mut high) = (b, b + 100.0 + 10.0 * n);
        while gamma_q(n + 1.0, high) > wanted {
            high *= 2.0;
        }
        for _ in 0..200 {
            let middle = 0.5 * (low + high);
            if gamma_q(n + 1.0, middle) > wanted {
                low = middle;
            } else {
                high = middle;
            }
        }
        low
    };
    (total - b).max(0.0)
}

/// Upper limit of a Bayesian with a flat prior in s >= 0. For one counting point with known
/// background it is the CLs limit: int_s^inf p = Q(n+1, s+b)/Q(n+1, b).
#[must_use]
pub fn bayesian_upper_limit(n: f64, b: f64, level: f64) -> f64 {
    cls_upper_limit(n, b, level)
}

/// Median significance of the discovery of s over a known b (arXiv:1007.1727, eq. 97):
/// sqrt(2((s + b) ln(1 + s/b) - s)).
#[must_use]
pub fn expected_significance(s: f64, b: f64) -> f64 {
    if s <= 0.0 || b <= 0.0 {
        return if s > 0.0 { f64::INFINITY } else { 0.0 };
    }
    (2.0 * ((s + b) * crate::math::ln_1p(s / b) - s))
        .max(0.0)
        .sqrt()
}

/// Feldman-Cousins interval for the signal s >= 0 of n ~ Poisson(s + b) at confidence `level`
/// (PRD 57 (1998) 3873), ends to 1e-4 (the published tables give two decimals).
///
/// The belt is not monotonic in s where Poisson steps cross: the ends are the outermost accepted s. The paper's
/// tables also keep the limit from falling as b grows at fixed n; that is not done here (n = 0 on b = 3: 0.95).
///
/// # Errors
/// n above 500, or numbers below 0.
pub fn feldman_cousins(n: u32, b: f64, level: f64) -> Answer<(f64, f64)> {
    if n > 500 || !(b >= 0.0 && b.is_finite()) || !(level > 0.0 && level < 1.0) {
        return Err(Refusal::new(
            "limit",
            format!("n = {n}, b = {b}, level {level}"),
            "n up to 500, b of 0 or more, a level between 0 and 1",
            "the Feldman-Cousins belt is not computed there",
        ));
    }
    let reach = f64::from(n) + 10.0 + 8.0 * f64::from(n).sqrt();
    let step = 0.01_f64.max(reach / 4000.0);
    let mut first = None;
    let mut last = 0.0;
    let mut s = 0.0;
    while s <= reach {
        if accepted(n, s, b, level) {
            if first.is_none() {
                first = Some(s);
            }
            last = s;
        }
        s += step;
    }
    // n far below b can be accepted nowhere on the grid but at s = 0.
    let Some(first) = first else {
        return Ok((0.0, 0.0));
    };
    let refine = |inside: f64, outside: f64| {
        let (mut a, mut c) = (inside, outside);
        for _ in 0..30 {
            let middle = 0.5 * (a + c);
            if accepted(n, middle, b, level) {
                a = middle;
            } else {
                c = middle;
            }
        }
        a
    };
    let low = if first > 0.0 {
        refine(first, first - step)
    } else {
        0.0
    };
    Ok((low, refine(last, last + step)))
}

/// Whether n is in the acceptance region of s: values join in the order of the likelihood ratio
/// against the best s >= 0 until they hold `level`.
fn accepted(n: u32, s: f64, b: f64, level: f64) -> bool {
    let mu = s + b;
    if mu <= 0.0 {
        return n == 0;
    }
    let ratio = |k: u32| {
        let k = f64::from(k);
        let best = (k - b).max(0.0) + b;
        if k == 0.0 {
            return exp(best - mu);
        }
        exp(k * ln(mu / best) - mu + best)
    };
    let own = ratio(n);
    // Probability of everything that joins before n.
    let top = (mu + 12.0 * mu.sqrt() + 20.0) as u32 + n;
    let mut before = 0.0;
    for k in 0..=top {
        let r = ratio(k);
        if r > own * (1.0 + 1e-12) {
            before += poisson_pmf(f64::from(k), mu);
        }
    }
    before < level
}

#[cfg(test)]
mod tests {
    use super::*;

    /// CLs at 95 % for n = 0: -ln 0.05 = 2.996 for any background; scenario C: n = 2 on b = 2.27: s < 4.70.
    #[test]
    fn cls_values() {
        for b in [0.0, 1.0, 7.5] {
            assert!((cls_upper_limit(0.0, b, 0.95) + crate::math::ln(0.05)).abs() < 1e-10);
        }
        assert!((cls_upper_limit(2.0, 2.27, 0.95) - 4.70).abs() < 5e-3);
    }

    /// PRD 57 (1998) 3873, table IV, 90 %, b = 0: n = 0: 2.44; 1: 0.11-4.36; 5: 1.84-9.99.
    #[test]
    fn feldman_cousins_published() {
        for (n, b, low, high) in [
            (0, 0.0, 0.0, 2.44),
            (1, 0.0, 0.11, 4.36),
            (5, 0.0, 1.84, 9.99),
        ] {
            let (l, h) = feldman_cousins(n, b, 0.9).unwrap();
            assert!(
                (l - low).abs() < 0.0051 && (h - high).abs() < 0.0151,
                "n {n}, b {b}: {l} {h}"
            );
        }
    }

    /// arXiv:1007.1727: s = b = 10: 2.7795.
    #[test]
    fn asimov_significance() {
        assert!((expected_significance(10.0, 10.0) - 2.7795).abs() < 5e-5);
        // s much below b: s/sqrt(b).
        assert!((expected_significance(1.0, 1e6) / 1e-3 - 1.0).abs() < 1e-6);
    }

    /// The flat-prior posterior integrated numerically.
    #[test]
    fn bayesian_limit_holds_its_content() {
        let (n, b) = (3.0, 1.7);
        let limit = bayesian_upper_limit(n, b, 0.95);
        let integral = |to: f64| {
            let steps = 20_000;
            (0..steps)
                .map(|i| {
                    let s = to * (f64::from(i) + 0.5) / f64::from(steps);
                    poisson_pmf(n, s + b) * to / f64::from(steps)
                })
                .sum::<f64>()
        };
        assert!((integral(limit) / integral(60.0) - 0.95).abs() < 1e-6);
    }
}
