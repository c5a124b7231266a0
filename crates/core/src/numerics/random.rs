//! Random numbers that are the same everywhere: a counter-based integer generator
//! (ChaCha, 12 rounds) with one stream per trial, and own samplers on it.
//!
//! Trial k of seed s is stream k of key s: it can be drawn alone, in any order, on any machine.

use crate::math::{exp, ln, ln_gamma};
use crate::numerics::probability::normal_quantile;
use rand_chacha::ChaCha12Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

/// One independent stream.
pub struct Stream {
    generator: ChaCha12Rng,
}

impl Stream {
    /// Stream `stream` of `seed`.
    #[must_use]
    pub fn new(seed: u64, stream: u64) -> Self {
        let mut generator = ChaCha12Rng::seed_from_u64(seed);
        generator.set_stream(stream);
        Self { generator }
    }

    /// Uniform in (0, 1), 53 bits, never 0 or 1.
    pub fn uniform(&mut self) -> f64 {
        const STEP: f64 = 1.0 / 9_007_199_254_740_992.0;
        ((self.generator.next_u64() >> 11) as f64 + 0.5) * STEP
    }

    /// Standard normal, by inversion: one uniform each, so that counters stay aligned.
    pub fn normal(&mut self) -> f64 {
        normal_quantile(self.uniform())
    }

    /// Poisson of mean `mu`; 0 for mu <= 0.
    ///
    /// Below 10 by inversion, above by transformed rejection (Hormann, Insurance: Mathematics and Economics 12 (1993) 39, PTRS).
    pub fn poisson(&mut self, mu: f64) -> f64 {
        if mu.is_nan() || mu <= 0.0 {
            return 0.0;
        }
        if mu < 10.0 {
            let mut u = self.uniform();
            let mut p = exp(-mu);
            let mut k = 0.0;
            while u > p && k < 1000.0 {
                u -= p;
                k += 1.0;
                p *= mu / k;
            }
            return k;
        }
        let b = 0.931 + 2.53 * mu.sqrt();
        let a = -0.059 + 0.024_83 * b;
        let inverse_alpha = 1.123_9 + 1.132_8 / (b - 3.4);
        let v_r = 0.927_7 - 3.622_4 / (b - 2.0);
        let ln_mu = ln(mu);
        loop {
            let u = self.uniform() - 0.5;
            let v = self.uniform();
            let us = 0.5 - u.abs();
            let k = ((2.0 * a / us + b) * u + mu + 0.43).floor();
            if us >= 0.07 && v <= v_r {
                return k;
            }
            if k < 0.0 || (us < 0.013 && v > us) {
                continue;
            }
            if ln(v * inverse_alpha / (a / (us * us) + b)) <= k * ln_mu - mu - ln_gamma(k + 1.0) {
                return k;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::probability::{chi2_sf, poisson_pmf};

    /// Pearson chi-squared of drawn against exact Poisson probabilities, small, middle and large means.
    #[test]
    fn poisson_follows_its_distribution() {
        for (i, &mu) in [0.3, 4.0, 9.99, 10.01, 37.0, 580.0].iter().enumerate() {
            let mut stream = Stream::new(7, i as u64);
            let low = (mu - 4.0 * f64::sqrt(mu)).max(0.0).floor();
            let bins = 40;
            let width = (8.0 * f64::sqrt(mu) / f64::from(bins)).max(1.0).ceil();
            let total = 40_000;
            let mut seen = vec![0.0; bins as usize];
            for _ in 0..total {
                let k = stream.poisson(mu);
                let bin = ((k - low) / width).floor();
                if bin >= 0.0 && bin < f64::from(bins) {
                    seen[bin as usize] += 1.0;
                }
            }
            let (mut chi2, mut dof) = (0.0, 0.0);
            for (bin, n) in seen.iter().enumerate() {
                let mut p = 0.0;
                for step in 0..(width as u32) {
                    p += poisson_pmf(low + bin as f64 * width + f64::from(step), mu);
                }
                let expected = p * f64::from(total);
                if expected > 10.0 {
                    chi2 += (n - expected) * (n - expected) / expected;
                    dof += 1.0;
                }
            }
            let p = chi2_sf(chi2, dof);
            assert!(p > 1e-3, "mu {mu}: chi2 {chi2} for {dof}, p {p}");
        }
    }

    #[test]
    fn streams_do_not_depend_on_order() {
        let first: Vec<f64> = (0..5).map(|k| Stream::new(3, k).uniform()).collect();
        let backwards: Vec<f64> = (0..5).rev().map(|k| Stream::new(3, k).uniform()).collect();
        let turned: Vec<f64> = backwards.into_iter().rev().collect();
        assert_eq!(first, turned);
        assert!(first.windows(2).all(|w| w[0] != w[1]));
    }

    #[test]
    fn normals_have_unit_variance() {
        let mut stream = Stream::new(1, 1);
        let draws: Vec<f64> = (0..20_000).map(|_| stream.normal()).collect();
        let mean = draws.iter().sum::<f64>() / 20_000.0;
        let square = draws.iter().map(|z| z * z).sum::<f64>() / 20_000.0;
        assert!(mean.abs() < 4.0 / 141.0);
        assert!((square - 1.0).abs() < 4.0 * 0.01);
    }
}
