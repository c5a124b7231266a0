//! Distribution functions: normal, chi-squared, Poisson, binomial, and their inverses.

use crate::math::{erfc, exp, ln, ln_gamma};
use core::f64::consts::{PI, SQRT_2};

/// Standard normal cumulative distribution. Relative accuracy 1e-14 in both tails.
#[must_use]
pub fn normal_cdf(z: f64) -> f64 {
    0.5 * erfc(-z / SQRT_2)
}

/// Standard normal density.
#[must_use]
pub fn normal_pdf(z: f64) -> f64 {
    exp(-0.5 * z * z) / (2.0 * PI).sqrt()
}

/// z with `normal_cdf(z)` = `p`; minus or plus infinity at 0 and 1, NaN outside.
///
/// Acklam's rational start, then two Halley steps on [`normal_cdf`]: 1e-14 for p > 1e-300.
#[must_use]
pub fn normal_quantile(p: f64) -> f64 {
    if !(0.0..=1.0).contains(&p) {
        return f64::NAN;
    }
    if p == 0.0 {
        return f64::NEG_INFINITY;
    }
    if p == 1.0 {
        return f64::INFINITY;
    }
    // The smaller tail keeps its digits.
    if p > 0.5 {
        return -normal_quantile(1.0 - p);
    }
    // Abramowitz & Stegun 26.2.23 (error 4.5e-4) is start enough for Halley.
    let t = (-2.0 * ln(p)).sqrt();
    let mut z = -(t
        - (2.515_517 + t * (0.802_853 + t * 0.010_328))
            / (1.0 + t * (1.432_788 + t * (0.189_269 + t * 0.001_308))));
    for _ in 0..3 {
        let density = normal_pdf(z);
        if density == 0.0 {
            break;
        }
        let u = (normal_cdf(z) - p) / density;
        z -= u / (1.0 + 0.5 * z * u);
    }
    z
}

/// One-sided significance of a p-value in standard deviations.
#[must_use]
pub fn significance(p: f64) -> f64 {
    -normal_quantile(p)
}

/// ln of the upper tail of the normal distribution above z, also where the tail itself underflows
/// (continued fraction, Abramowitz & Stegun 26.2.14, above z = 10; relative accuracy 1e-12).
#[must_use]
pub fn ln_normal_tail(z: f64) -> f64 {
    if z < 10.0 {
        return ln(normal_cdf(-z));
    }
    let mut fraction = z;
    for k in (1..=60).rev() {
        fraction = z + f64::from(k) / fraction;
    }
    -0.5 * z * z - 0.5 * ln(2.0 * core::f64::consts::PI) - ln(fraction)
}

/// z with [`ln_normal_tail`] of z = `ln_p`, for `ln_p` < 0.
#[must_use]
pub fn significance_of_ln(ln_p: f64) -> f64 {
    if ln_p > -200.0 {
        return significance(exp(ln_p).min(1.0));
    }
    // Newton's method from the leading term; the derivative is about -z.
    let mut z = (-2.0 * ln_p).sqrt();
    for _ in 0..20 {
        z += (ln_normal_tail(z) - ln_p) / z;
    }
    z
}

/// Regularised lower incomplete gamma function P(a, x), a > 0, x >= 0.
/// Series below a+1, continued fraction above (DLMF 8.7.1, 8.9.2); relative accuracy about 1e-13 for a < 1e5.
#[must_use]
pub fn gamma_p(a: f64, x: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    if x < a + 1.0 {
        series_p(a, x)
    } else {
        1.0 - fraction_q(a, x)
    }
}

/// Regularised upper incomplete gamma function Q = 1 - P without cancellation.
#[must_use]
pub fn gamma_q(a: f64, x: f64) -> f64 {
    if x <= 0.0 {
        return 1.0;
    }
    if x < a + 1.0 {
        1.0 - series_p(a, x)
    } else {
        fraction_q(a, x)
    }
}

/// x^a e^-x / Gamma(a+1), the Poisson probability of a at mean x, without the cancellation of
/// three large logarithms (Loader's saddle-point form).
fn poisson_weight(a: f64, x: f64) -> f64 {
    if a == 0.0 {
        return exp(-x);
    }
    if a < 16.0 {
        return exp(a * ln(x) - x - ln_gamma(a + 1.0));
    }
    // Stirling's remainder of ln Gamma(a+1), DLMF 5.11.1: 1e-17 from a = 16 on.
    let r = 1.0 / (a * a);
    let stirling =
        (1.0 / 12.0 - r * (1.0 / 360.0 - r * (1.0 / 1260.0 - r * (1.0 / 1680.0 - r / 1188.0)))) / a;
    exp(-0.5 * poisson_deviance(a, x) - stirling) / (2.0 * PI * a).sqrt()
}

/// 2 (mu - n + n ln(n/mu)): the Baker-Cousins contribution of one count (NIM 221 (1984) 437),
/// >= 0, without cancellation near n = mu. Infinite for mu <= 0 with n > 0.
#[inline]
#[must_use]
pub fn poisson_deviance(n: f64, mu: f64) -> f64 {
    if n <= 0.0 {
        return 2.0 * mu;
    }
    if mu <= 0.0 {
        return f64::INFINITY;
    }
    let d = (n - mu) / (n + mu);
    if d.abs() < 0.1 {
        // n ln(n/mu) = 2 n atanh(d); the sum starts at second order in d.
        let d2 = d * d;
        let mut term = 2.0 * n * d * d2;
        let mut sum = (n - mu) * d;
        let mut k = 3.0;
        while term.abs() > 1e-17 * sum.abs() && k < 60.0 {
            sum += term / k;
            term *= d2;
            k += 2.0;
        }
        // (n - mu)(d) + 2n(d^3/3 + ...) : from 2 n d = (n - mu) + (n - mu) d.
        2.0 * sum
    } else {
        2.0 * (mu - n + n * ln(n / mu))
    }
}

fn series_p(a: f64, x: f64) -> f64 {
    let mut term = 1.0;
    let mut sum = 1.0;
    let mut k = a;
    for _ in 0..100_000 {
        k += 1.0;
        term *= x / k;
        sum += term;
        if term < 1e-17 * sum {
            break;
        }
    }
    poisson_weight(a, x) * sum
}

fn fraction_q(a: f64, x: f64) -> f64 {
    // Modified Lentz.
    const TINY: f64 = 1e-300;
    let mut b = x + 1.0 - a;
    let mut c = 1.0 / TINY;
    let mut d = 1.0 / if b == 0.0 { TINY } else { b };
    let mut h = d;
    let mut i = 0.0;
    for _ in 0..100_000 {
        i += 1.0;
        let an = -i * (i - a);
        b += 2.0;
        d = an * d + b;
        if d.abs() < TINY {
            d = TINY;
        }
        c = b + an / c;
        if c.abs() < TINY {
            c = TINY;
        }
        d = 1.0 / d;
        let step = d * c;
        h *= step;
        if (step - 1.0).abs() < 1e-16 {
            break;
        }
    }
    // x^a e^-x / Gamma(a) = a * weight.
    a * poisson_weight(a, x) * h
}

/// x with P(a, x) = p. Wilson-Hilferty start, then safeguarded Newton: 1e-12.
#[must_use]
pub fn gamma_p_inverse(a: f64, p: f64) -> f64 {
    if p <= 0.0 {
        return 0.0;
    }
    if p >= 1.0 {
        return f64::INFINITY;
    }
    let z = normal_quantile(p);
    let t = 1.0 - 1.0 / (9.0 * a) + z / (3.0 * a.sqrt());
    let small = exp((ln(p) + ln_gamma(a + 1.0)) / a);
    let mut x = if t > 0.2 { a * t * t * t } else { small };
    let (mut low, mut high) = (0.0, f64::INFINITY);
    for _ in 0..200 {
        // Work on the smaller tail.
        let f = if p < 0.5 {
            gamma_p(a, x) - p
        } else {
            (1.0 - p) - gamma_q(a, x)
        };
        if f > 0.0 {
            high = x;
        } else {
            low = x;
        }
        let density = a * poisson_weight(a, x) / x;
        let mut next = x - f / density;
        if !(next > low && next < high) {
            next = if high.is_finite() {
                0.5 * (low + high)
            } else {
                2.0 * x + 1.0
            };
        }
        if (next - x).abs() <= 1e-15 * x {
            return next;
        }
        x = next;
    }
    x
}

/// Upper tail of chi-squared with `dof` degrees of freedom.
#[must_use]
pub fn chi2_sf(chi2: f64, dof: f64) -> f64 {
    gamma_q(0.5 * dof, 0.5 * chi2)
}

/// Value of chi-squared with cumulative probability `p`.
#[must_use]
pub fn chi2_quantile(p: f64, dof: f64) -> f64 {
    2.0 * gamma_p_inverse(0.5 * dof, p)
}

/// P(N <= n) for Poisson mean `mu`; 0 for n < 0.
#[must_use]
pub fn poisson_cdf(n: f64, mu: f64) -> f64 {
    if n < 0.0 {
        return 0.0;
    }
    gamma_q(n.floor() + 1.0, mu)
}

/// P(N >= n) for Poisson mean `mu`.
#[must_use]
pub fn poisson_sf(n: f64, mu: f64) -> f64 {
    if n <= 0.0 {
        return 1.0;
    }
    gamma_p(n.ceil(), mu)
}

/// Probability of exactly n at Poisson mean mu.
#[must_use]
pub fn poisson_pmf(n: f64, mu: f64) -> f64 {
    if mu <= 0.0 {
        return if n == 0.0 { 1.0 } else { 0.0 };
    }
    poisson_weight(n, mu)
}

/// Exact two-sided p-value of `n` at Poisson mean `mu`: twice the smaller tail, at most 1.
#[must_use]
pub fn poisson_p_value(n: f64, mu: f64) -> f64 {
    (2.0 * poisson_cdf(n, mu).min(poisson_sf(n, mu))).min(1.0)
}

/// Central (Garwood) interval for a Poisson mean at confidence `level`.
#[must_use]
pub fn poisson_central_interval(n: f64, level: f64) -> (f64, f64) {
    let tail = 0.5 * (1.0 - level);
    let low = if n > 0.0 {
        gamma_p_inverse(n, tail)
    } else {
        0.0
    };
    (low, gamma_p_inverse(n + 1.0, 1.0 - tail))
}

/// Wilson score interval for `k` successes in `n` trials at `z` standard deviations
/// (Wilson, J. Am. Stat. Assoc. 22 (1927) 209). Never degenerate at 0 or n.
#[must_use]
pub fn binomial_interval(k: f64, n: f64, z: f64) -> (f64, f64) {
    if n <= 0.0 {
        return (0.0, 1.0);
    }
    let p = k / n;
    let z2 = z * z / n;
    let centre = (p + 0.5 * z2) / (1.0 + z2);
    let half = z / (1.0 + z2) * (p * (1.0 - p) / n + 0.25 * z2 / n).sqrt();
    ((centre - half).max(0.0), (centre + half).min(1.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn close(a: f64, b: f64, rel: f64) {
        assert!((a - b).abs() <= rel * b.abs(), "{a} against {b}");
    }

    /// scipy 1.17: stats.norm.ppf, norm.sf.
    #[test]
    fn normal_against_scipy() {
        close(normal_quantile(0.975), 1.959_963_984_540_054, 1e-14);
        close(normal_quantile(1e-10), -6.361_340_902_404_056, 1e-13);
        close(normal_quantile(0.3), -0.524_400_512_708_040_9, 1e-13);
        close(significance(2.866_515_718_791_933e-7), 5.0, 1e-13);
    }

    #[test]
    fn quantile_inverts() {
        for i in 1..200 {
            let z = -8.0 + 0.04 * f64::from(i);
            close(
                normal_cdf(normal_quantile(normal_cdf(z))),
                normal_cdf(z),
                1e-12,
            );
        }
    }

    /// Central Poisson intervals from scipy.stats.chi2.ppf (scipy 1.17).
    #[test]
    fn poisson_intervals_against_scipy_chi2() {
        for (n, level, low, high) in [
            (0.0, 0.683, 0.0, 1.842_000_685_664_802),
            (1.0, 0.683, 0.172_569_265_351_276_3, 3.300_802_263_980_446_4),
            (5.0, 0.9, 1.970_149_568_059_53, 10.513_034_908_741_535),
            (40.0, 0.683, 33.698_379_288_211_534, 47.381_786_875_607_81),
            (1000.0, 0.954, 937.899_203_944_218, 1_065.119_923_673_318_2),
            (
                100_000.0,
                0.683,
                99_683.570_225_276_29,
                100_317.432_213_070_09,
            ),
        ] {
            let (a, b) = poisson_central_interval(n, level);
            if n == 0.0 {
                assert_eq!(a, 0.0);
            } else {
                close(a, low, 1e-11);
            }
            close(b, high, 1e-11);
        }
    }

    /// scipy.stats.chi2.sf (scipy 1.17).
    #[test]
    fn chi_squared_tails_against_scipy() {
        for (x, dof, p) in [
            (12.42, 21.0, 0.927_579_333_186_078_7),
            (2.515, 4.0, 0.641_951_839_994_423_1),
            (100.0, 30.0, 1.856_802_336_510_231_4e-9),
            (0.1, 1.0, 0.751_829_634_045_849_2),
            (5000.0, 4800.0, 0.021_673_989_200_306_08),
        ] {
            close(chi2_sf(x, dof), p, 1e-11);
        }
    }

    /// scipy.stats.poisson cdf, sf(n-1), pmf (scipy 1.17).
    #[test]
    fn poisson_against_scipy() {
        for (n, mu, cdf, sf, pmf) in [
            (
                5.0,
                10.0,
                0.067_085_962_879_031_89,
                0.970_747_311_923_038_9,
                0.037_833_274_802_070_79,
            ),
            (
                10.0,
                7.0,
                0.901_479_205_889_087_3,
                0.169_504_062_761_326_73,
                0.070_983_268_650_413_56,
            ),
            (
                0.0,
                3.0,
                0.049_787_068_367_863_95,
                1.0,
                0.049_787_068_367_863_944,
            ),
            (
                600.0,
                582.0,
                0.779_265_137_133_595_5,
                0.233_097_620_522_373_12,
                0.012_362_757_655_974_75,
            ),
            (
                20.0,
                3.2,
                0.999_999_999_962_173_4,
                2.502_158_940_661_464_5e-10,
                2.123_892_872_221_670_2e-10,
            ),
        ] {
            close(poisson_cdf(n, mu), cdf, 1e-12);
            close(poisson_sf(n, mu), sf, 1e-12);
            close(poisson_pmf(n, mu), pmf, 1e-12);
        }
    }

    /// Baker & Cousins, NIM 221 (1984) 437, evaluated by hand: (mu, n) = (1, 0): 2; (10, 7): 1.0065507849.
    #[test]
    fn baker_cousins_terms() {
        close(poisson_deviance(0.0, 1.0), 2.0, 1e-15);
        close(poisson_deviance(7.0, 10.0), 1.006_550_784_9, 1e-10);
        assert_eq!(poisson_deviance(3.0, 0.0), f64::INFINITY);
    }

    proptest::proptest! {
        /// The cancellation-free branch meets the plain formula where that one still has digits.
        #[test]
        fn deviance_branches_agree(mu in 1.0f64..1e4, d in -0.19f64..0.19) {
            let n = mu * (1.0 + d);
            let plain = 2.0 * (mu - n + n * ln(n / mu));
            proptest::prop_assert!((poisson_deviance(n, mu) - plain).abs() < 1e-11 * mu);
        }

        #[test]
        fn gamma_inverse_inverts(a in 0.3f64..5e3, p in 1e-6f64..0.999999) {
            let x = gamma_p_inverse(a, p);
            proptest::prop_assert!((gamma_p(a, x) - p).abs() < 1e-11 * p.max(1e-3));
        }
    }
}
