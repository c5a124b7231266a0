//! A signal of known shape over a known background in several counts.

use super::asymptotic::asymptotic_cls;
use crate::error::{Answer, Refusal};
use crate::math::exp;
use crate::numerics::probability::{normal_cdf, poisson_deviance};
use crate::numerics::random::Stream;
use serde::{Deserialize, Serialize};

/// Expected counts mu_j = b_j + strength s_j.
#[derive(Debug, Clone, PartialEq)]
pub struct Template {
    /// s_j at strength 1, >= 0, not all 0.
    pub signal: Vec<f64>,
    /// b_j > 0.
    pub background: Vec<f64>,
}

/// An upper limit on the strength with the band expected without a signal.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Limit {
    /// Observed.
    pub observed: f64,
    /// Expected at -2, -1, 0, 1, 2 standard deviations of the background.
    pub expected: [f64; 5],
}

impl Template {
    /// Checks and makes a template.
    ///
    /// # Errors
    /// No signal anywhere, a background that is not above 0 where a signal is.
    pub fn new(signal: Vec<f64>, background: Vec<f64>) -> Answer<Self> {
        let fine = signal.len() == background.len()
            && signal.iter().all(|s| *s >= 0.0 && s.is_finite())
            && background.iter().all(|b| *b > 0.0 && b.is_finite());
        if !fine || signal.iter().sum::<f64>() <= 0.0 {
            return Err(Refusal::new(
                "limit",
                format!("signal {signal:?}, background {background:?}"),
                "a signal somewhere and a background above 0 everywhere",
                "no limit can be set: the points see no signal, or expect no background",
            ));
        }
        Ok(Self { signal, background })
    }

    fn mu(&self, strength: f64) -> impl Iterator<Item = f64> + '_ {
        self.signal
            .iter()
            .zip(&self.background)
            .map(move |(s, b)| b + strength * s)
    }

    /// 2 NLL (Baker-Cousins) at a strength.
    #[must_use]
    pub fn statistic(&self, n: &[f64], strength: f64) -> f64 {
        self.mu(strength)
            .zip(n)
            .map(|(mu, n)| poisson_deviance(*n, mu))
            .sum()
    }

    /// Best strength >= 0: the derivative is monotonic, so bracketing Newton cannot miss it.
    #[must_use]
    pub fn best(&self, n: &[f64]) -> f64 {
        let slope = |x: f64| -> (f64, f64) {
            let (mut first, mut second) = (0.0, 0.0);
            for ((mu, n), s) in self.mu(x).zip(n).zip(&self.signal) {
                first += s * (1.0 - n / mu);
                second += n * s * s / (mu * mu);
            }
            (first, second)
        };
        if slope(0.0).0 >= 0.0 {
            return 0.0;
        }
        let total: f64 = self.signal.iter().sum();
        let (mut low, mut high) = (0.0, n.iter().sum::<f64>() / total);
        let mut x = 0.0;
        for _ in 0..100 {
            let (f, d) = slope(x);
            if f > 0.0 {
                high = x;
            } else {
                low = x;
            }
            let mut next = x - f / d;
            if !(next > low && next < high) {
                next = 0.5 * (low + high);
            }
            if (next - x).abs() <= 1e-12 * next.abs() {
                return next;
            }
            x = next;
        }
        x
    }

    /// q0 of discovery: 2 NLL at strength 0 over its minimum; 0 if the best strength is 0.
    #[must_use]
    pub fn discovery_statistic(&self, n: &[f64]) -> f64 {
        (self.statistic(n, 0.0) - self.statistic(n, self.best(n))).max(0.0)
    }

    /// Statistic of an upper limit: 0 for a tested strength below the best one.
    #[must_use]
    pub fn limit_statistic(&self, n: &[f64], strength: f64) -> f64 {
        let best = self.best(n);
        if strength <= best {
            return 0.0;
        }
        (self.statistic(n, strength) - self.statistic(n, best)).max(0.0)
    }

    fn root(&self, mut value: impl FnMut(f64) -> f64, wanted: f64) -> f64 {
        let total: f64 = self.signal.iter().sum();
        let mut high = 3.0 / total;
        for _ in 0..200 {
            if value(high) <= wanted {
                break;
            }
            high *= 2.0;
        }
        let mut low = 0.0;
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if value(middle) > wanted {
                low = middle;
            } else {
                high = middle;
            }
        }
        high
    }

    /// CLs limit with asymptotic distributions (arXiv:1007.1727). Good where the sensitive points expect
    /// several counts; see [`Template::limit_by_trials`].
    #[must_use]
    pub fn limit(&self, n: &[f64], level: f64) -> Limit {
        let wanted = 1.0 - level;
        let asimov = &self.background;
        let observed = self.root(
            |x| asymptotic_cls(self.limit_statistic(n, x), self.limit_statistic(asimov, x)),
            wanted,
        );
        let expected = [-2.0, -1.0, 0.0, 1.0, 2.0].map(|z: f64| {
            // Quantile of the background's distribution: CLs at sqrt(q) = sqrt(q_A) - z.
            self.root(
                |x| {
                    let a = self.limit_statistic(asimov, x).sqrt();
                    normal_cdf(-(a - z)) / normal_cdf(z)
                },
                wanted,
            )
        });
        Limit { observed, expected }
    }

    /// CLs limit with the likelihood ratio L(s+b)/L(b) as statistic and its distributions from
    /// `trials` pseudo-experiments of `seed`; exact up to their number (about 2 % for 20,000).
    #[must_use]
    pub fn limit_by_trials(&self, n: &[f64], level: f64, trials: u64, seed: u64) -> f64 {
        let wanted = 1.0 - level;
        let start = self.limit(n, level).observed;
        // The same uniform draws for every tested strength make CLs monotonic in it.
        let backgrounds: Vec<Vec<f64>> = (0..trials)
            .map(|k| {
                let mut stream = Stream::new(seed, k);
                self.background.iter().map(|b| stream.poisson(*b)).collect()
            })
            .collect();
        let cls = |x: f64| {
            let weights: Vec<f64> = self
                .signal
                .iter()
                .zip(&self.background)
                .map(|(s, b)| crate::math::ln_1p(x * s / b))
                .collect();
            let value = |n: &[f64]| -> f64 { n.iter().zip(&weights).map(|(n, w)| n * w).sum() };
            let seen = value(n) * (1.0 + 1e-12);
            // Importance weights turn background trials into signal ones: L(s+b)/L(b) = e^{value - x sum s}.
            let total: f64 = x * self.signal.iter().sum::<f64>();
            let (mut with, mut without) = (0.0, 0.0);
            for b in &backgrounds {
                let v = value(b);
                if v <= seen {
                    without += 1.0;
                    with += exp(v - total);
                }
            }
            if without > 0.0 { with / without } else { 0.0 }
        };
        let (mut low, mut high) = (0.2 * start, 3.0 * start);
        for _ in 0..40 {
            let middle = 0.5 * (low + high);
            if cls(middle) > wanted {
                low = middle;
            } else {
                high = middle;
            }
        }
        high
    }

    /// Upper limit with a flat prior in strength >= 0: the posterior integrated on a fine grid, 1e-4.
    #[must_use]
    pub fn bayesian_limit(&self, n: &[f64], level: f64) -> f64 {
        let best = self.best(n);
        let least = self.statistic(n, best);
        let total: f64 = self.signal.iter().sum();
        let mut reach = best + 3.0 / total;
        while self.statistic(n, reach) - least < 60.0 && reach < 1e12 / total {
            reach = best + 1.5 * (reach - best);
        }
        let steps = 8000;
        let width = reach / f64::from(steps);
        let density: Vec<f64> = (0..=steps)
            .map(|i| exp(-0.5 * (self.statistic(n, width * f64::from(i)) - least)))
            .collect();
        let area: f64 = density.windows(2).map(|p| 0.5 * (p[0] + p[1])).sum();
        let mut sum = 0.0;
        for (i, p) in density.windows(2).enumerate() {
            let next = sum + 0.5 * (p[0] + p[1]);
            if next >= level * area {
                let part = (level * area - sum) / (next - sum);
                return width * (i as f64 + part);
            }
            sum = next;
        }
        reach
    }

    /// Median significance of discovery at a strength (Asimov data, arXiv:1007.1727).
    #[must_use]
    pub fn expected_significance(&self, strength: f64) -> f64 {
        let asimov: Vec<f64> = self.mu(strength).collect();
        self.discovery_statistic(&asimov).sqrt()
    }

    /// Local p-value of discovery, asymptotic.
    #[must_use]
    pub fn local_p_value(&self, n: &[f64]) -> f64 {
        normal_cdf(-self.discovery_statistic(n).sqrt())
    }
}

#[cfg(test)]
mod tests {
    use super::super::counting::{cls_upper_limit, expected_significance};
    use super::*;

    /// One point: the pseudo-experiments' CLs is the exact counting one, the Asimov significance the closed form.
    #[test]
    fn one_point_is_the_counting_experiment() {
        let t = Template::new(vec![1.0], vec![2.27]).unwrap();
        let exact = cls_upper_limit(2.0, 2.27, 0.95);
        let found = t.limit_by_trials(&[2.0], 0.95, 40_000, 3);
        assert!(
            (found / exact - 1.0).abs() < 0.02,
            "{found} against {exact}"
        );
        assert!((t.bayesian_limit(&[2.0], 0.95) / exact - 1.0).abs() < 1e-3);
        assert!((t.expected_significance(5.0) - expected_significance(5.0, 2.27)).abs() < 1e-9);
    }

    /// Many counts: the asymptotic limit nears the exact one, and the expected band's middle is Asimov's.
    #[test]
    fn asymptotic_limit_of_many_counts() {
        let t = Template::new(vec![1.0], vec![400.0]).unwrap();
        let limit = t.limit(&[400.0], 0.95);
        let exact = cls_upper_limit(400.0, 400.0, 0.95);
        assert!((limit.observed / exact - 1.0).abs() < 0.03);
        assert!((limit.observed / limit.expected[2] - 1.0).abs() < 1e-6);
        assert!(limit.expected.windows(2).all(|p| p[0] < p[1]));
    }

    /// Two points with one strength: the best strength by bisection of the derivative.
    #[test]
    fn best_strength_is_the_minimum() {
        let t = Template::new(vec![3.0, 1.0, 0.0], vec![2.0, 2.5, 4.0]).unwrap();
        let n = [7.0, 3.0, 2.0];
        let best = t.best(&n);
        let here = t.statistic(&n, best);
        assert!(t.statistic(&n, best + 1e-3) > here && t.statistic(&n, best - 1e-3) > here);
        assert_eq!(t.best(&[0.0, 1.0, 2.0]), 0.0);
    }
}
