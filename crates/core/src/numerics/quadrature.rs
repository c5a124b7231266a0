//! Gauss-Legendre rules, and product rules on the same nodes for an integrand with an
//! integrable singularity u^(beta-1) or ln u at one end of the panel.

use crate::math;

/// Number of nodes of [`Rule`].
pub const NODES: usize = 16;

/// The 16-point Gauss-Legendre rule on [0, 1].
#[derive(Debug, Clone)]
pub struct Rule {
    /// Nodes, rising.
    pub nodes: [f64; NODES],
    /// Weights; they sum to 1.
    pub weights: [f64; NODES],
    /// `basis[k][m]` = (2k+1) w_m P*_k(u_m): turns moments against the shifted Legendre
    /// polynomials P*_k into weights at the nodes.
    basis: [[f64; NODES]; NODES],
}

impl Default for Rule {
    fn default() -> Self {
        Self::new()
    }
}

/// P_n(x), P_n'(x) by the three-term recurrence (DLMF 18.9).
fn legendre(n: usize, x: f64) -> (f64, f64) {
    let (mut before, mut p) = (1.0, x);
    for k in 2..=n {
        let k = k as f64;
        (before, p) = (p, ((2.0 * k - 1.0) * x * p - (k - 1.0) * before) / k);
    }
    let n = n as f64;
    (p, n * (x * p - before) / (x * x - 1.0))
}

impl Rule {
    /// Computes the rule: Newton's iteration from the asymptotic roots; full double accuracy.
    #[must_use]
    pub fn new() -> Self {
        let mut rule = Self {
            nodes: [0.0; NODES],
            weights: [0.0; NODES],
            basis: [[0.0; NODES]; NODES],
        };
        let n = NODES as f64;
        for m in 0..NODES {
            let mut x = -math::cos(core::f64::consts::PI * (m as f64 + 0.75) / (n + 0.5));
            for _ in 0..5 {
                let (p, slope) = legendre(NODES, x);
                x -= p / slope;
            }
            let (_, slope) = legendre(NODES, x);
            rule.nodes[m] = 0.5 * (1.0 + x);
            rule.weights[m] = 1.0 / ((1.0 - x * x) * slope * slope);
            let (mut before, mut p) = (0.0, 1.0);
            for k in 0..NODES {
                let degree = k as f64;
                rule.basis[k][m] = (2.0 * degree + 1.0) * rule.weights[m] * p;
                (before, p) = (
                    p,
                    ((2.0 * degree + 1.0) * x * p - degree * before) / (degree + 1.0),
                );
            }
        }
        rule
    }

    fn weights_from_moments(&self, moments: &[f64; NODES]) -> [f64; NODES] {
        let mut weights = [0.0; NODES];
        for (moment, row) in moments.iter().zip(&self.basis) {
            for (weight, b) in weights.iter_mut().zip(row) {
                *weight += moment * b;
            }
        }
        weights
    }

    /// Weights v_m with sum_m v_m g(u_m) = int_0^1 u^(beta-1) g(u) du, beta > 0, exact for
    /// polynomials g up to degree 15. The moments are closed:
    /// int_0^1 u^a P*_k du = a(a-1)...(a-k+1) / ((a+1)(a+2)...(a+k+1)).
    #[must_use]
    pub fn power_weights(&self, beta: f64) -> [f64; NODES] {
        let a = beta - 1.0;
        let mut moments = [0.0; NODES];
        let mut moment = 1.0 / beta;
        for (k, slot) in moments.iter_mut().enumerate() {
            *slot = moment;
            let k = k as f64;
            moment *= (a - k) / (beta + k + 1.0);
        }
        self.weights_from_moments(&moments)
    }

    /// Weights with sum_m v_m g(u_m) = int_0^1 ln(u) g(u) du, exact up to degree 15:
    /// the moments are -1 and (-1)^(k+1)/(k(k+1)).
    #[must_use]
    pub fn log_weights(&self) -> [f64; NODES] {
        let mut moments = [-1.0; NODES];
        for (k, slot) in moments.iter_mut().enumerate().skip(1) {
            let sign = if k % 2 == 0 { -1.0 } else { 1.0 };
            *slot = sign / (k as f64 * (k as f64 + 1.0));
        }
        self.weights_from_moments(&moments)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn polynomials_up_to_degree_31_are_exact() {
        let rule = Rule::new();
        for degree in 0..32 {
            let sum: f64 = (0..NODES)
                .map(|m| rule.weights[m] * math::powi(rule.nodes[m], degree))
                .sum();
            assert!((sum * (f64::from(degree) + 1.0) - 1.0).abs() < 1e-14);
        }
    }

    #[test]
    fn singular_ends_match_closed_integrals() {
        // int u^(beta-1+d) = 1/(beta+d); int u^d ln u = -1/(d+1)^2.
        let rule = Rule::new();
        for &beta in &[1e-3, 0.03, 0.0786, 0.13, 0.9] {
            let power = rule.power_weights(beta);
            for degree in 0..16 {
                let sum: f64 = (0..NODES)
                    .map(|m| power[m] * math::powi(rule.nodes[m], degree))
                    .sum();
                assert!((sum - 1.0 / (beta + f64::from(degree))).abs() < 2e-14 / beta);
            }
        }
        let log = rule.log_weights();
        for degree in 0..16 {
            let sum: f64 = (0..NODES)
                .map(|m| log[m] * math::powi(rule.nodes[m], degree))
                .sum();
            let exact = -1.0 / ((f64::from(degree) + 1.0) * (f64::from(degree) + 1.0));
            assert!((sum / exact - 1.0).abs() < 1e-12, "{degree}: {sum}");
        }
    }
}
