//! Gauss-Legendre rules, and product rules on the same nodes for an integrand with an
//! integrable singularity u^(beta-1) or ln u at one end of the panel.

use crate::math;

/// Number of nodes of [`Rule`].
pub const NODES: usize = 16;

/// Values of one function at the nodes of a [`Rule`].
pub type AtNodes = [f64; NODES];

/// The 16-point Gauss-Legendre rule on [0, 1], and what follows from its nodes.
#[derive(Debug, Clone)]
pub struct Rule {
    /// Nodes, rising.
    pub nodes: AtNodes,
    /// Weights; they sum to 1.
    pub weights: AtNodes,
    /// `basis[k][m]` = (2k+1) w_m P*_k(u_m): turns moments against the shifted Legendre
    /// polynomials P*_k into weights at the nodes, and values into Legendre coefficients.
    basis: [AtNodes; NODES],
    /// `chebyshev[k][m]`: values at the nodes into Chebyshev coefficients in 2u-1.
    chebyshev: [AtNodes; NODES],
    /// `halves[c][j][m]`: the m-th cardinal polynomial at node j of the lower or upper half.
    halves: [[AtNodes; NODES]; 2],
    barycentric: AtNodes,
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
            chebyshev: [[0.0; NODES]; NODES],
            halves: [[[0.0; NODES]; NODES]; 2],
            barycentric: [0.0; NODES],
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
            let sign = if m % 2 == 0 { 1.0 } else { -1.0 };
            rule.barycentric[m] = sign * ((1.0 - x * x) * rule.weights[m]).sqrt();
            for (k, p) in Self::polynomials(rule.nodes[m]).iter().enumerate() {
                rule.basis[k][m] = (2.0 * k as f64 + 1.0) * rule.weights[m] * p;
            }
        }
        for j in 0..NODES {
            for (half, table) in [0.0, 0.5].iter().zip(0..2) {
                rule.halves[table][j] = rule.cardinal(half + 0.5 * rule.nodes[j]);
            }
            let angle = core::f64::consts::PI * (j as f64 + 0.5) / n;
            let cardinal = rule.cardinal(0.5 * (1.0 + math::cos(angle)));
            for k in 0..NODES {
                let factor = if k == 0 { 1.0 } else { 2.0 } * math::cos(k as f64 * angle) / n;
                for (slot, c) in rule.chebyshev[k].iter_mut().zip(&cardinal) {
                    *slot += factor * c;
                }
            }
        }
        rule
    }

    /// P*_k(u) for k = 0 to 15.
    #[inline]
    #[must_use]
    pub fn polynomials(u: f64) -> AtNodes {
        let x = 2.0 * u - 1.0;
        let mut out = [1.0; NODES];
        let (mut before, mut p) = (1.0, x);
        for (k, slot) in out.iter_mut().enumerate().skip(1) {
            *slot = p;
            let (up, down) = RECURRENCE[k];
            (before, p) = (p, up * x * p - down * before);
        }
        out
    }

    /// The cardinal polynomials of the nodes at u (barycentric form).
    #[must_use]
    pub fn cardinal(&self, u: f64) -> AtNodes {
        let mut out = [0.0; NODES];
        let mut sum = 0.0;
        for m in 0..NODES {
            let distance = u - self.nodes[m];
            if distance == 0.0 {
                out = [0.0; NODES];
                out[m] = 1.0;
                return out;
            }
            out[m] = self.barycentric[m] / distance;
            sum += out[m];
        }
        out.map(|c| c / sum)
    }

    /// Moments against P*_k into weights at the nodes that have the same moments.
    #[must_use]
    pub fn weights_from_moments(&self, moments: &AtNodes) -> AtNodes {
        let mut weights = [0.0; NODES];
        for (moment, row) in moments.iter().zip(&self.basis) {
            for (weight, b) in weights.iter_mut().zip(row) {
                *weight += moment * b;
            }
        }
        weights
    }

    /// Adds weights at the nodes of the lower (0) or upper (1) half of a panel to weights at
    /// the nodes of the panel, with the same moments up to degree 15.
    #[inline]
    pub fn raise(&self, half: usize, child: &[f64], parent: &mut [f64]) {
        for (q, row) in child.iter().zip(&self.halves[half & 1]) {
            for (slot, c) in parent.iter_mut().zip(row) {
                *slot += q * c;
            }
        }
    }

    /// Chebyshev coefficients (in 2u-1) of the polynomial through values at the nodes.
    #[must_use]
    pub fn chebyshev(&self, values: &AtNodes) -> AtNodes {
        let mut out = [0.0; NODES];
        for (slot, row) in out.iter_mut().zip(&self.chebyshev) {
            *slot = row.iter().zip(values).map(|(c, v)| c * v).sum();
        }
        out
    }

    /// How well a polynomial through these values represents the function they come from.
    #[inline]
    #[must_use]
    pub fn decay(&self, values: &[f64]) -> Decay {
        let coefficient = |k: usize| -> f64 {
            let c: f64 = self.basis[k].iter().zip(values).map(|(b, v)| b * v).sum();
            c.abs()
        };
        let tail = coefficient(15) + coefficient(14);
        let middle = coefficient(8) + coefficient(7);
        let scale = self
            .weights
            .iter()
            .zip(values)
            .map(|(w, v)| w * v.abs())
            .sum();
        // The coefficients fall by tail/middle over seven degrees; the rule is exact up to
        // degree 31, so that what it misses is about two such falls below the tail - if they
        // fall geometrically, which next to a threshold they do not: then the tail itself counts.
        let fall = if tail < 0.06 * middle {
            tail / middle
        } else {
            1.0
        };
        Decay {
            scale,
            interpolation: tail,
            quadrature: tail * fall * fall,
        }
    }

    /// Weights v_m with sum_m v_m g(u_m) = int_0^1 u^(beta-1) g(u) du, beta > 0, exact for
    /// polynomials g up to degree 15. The moments are closed:
    /// int_0^1 u^a P*_k du = a(a-1)...(a-k+1) / ((a+1)(a+2)...(a+k+1)).
    #[must_use]
    pub fn power_weights(&self, beta: f64) -> AtNodes {
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

    /// Weights v_m with sum_m v_m g(u_m) = int_0^1 u^(beta-1) ln(u) g(u) du, 0 < beta < 1, exact
    /// for polynomials g up to degree 15: the derivative of the moments above by beta.
    #[must_use]
    pub fn power_log_weights(&self, beta: f64) -> AtNodes {
        let a = beta - 1.0;
        let mut moments = [0.0; NODES];
        let mut moment = 1.0 / beta;
        let mut slope = -1.0 / beta;
        for (k, slot) in moments.iter_mut().enumerate() {
            *slot = moment * slope;
            let k = k as f64;
            moment *= (a - k) / (beta + k + 1.0);
            slope += 1.0 / (a - k) - 1.0 / (beta + k + 1.0);
        }
        self.weights_from_moments(&moments)
    }

    /// Weights with sum_m v_m g(u_m) = int_0^1 ln(u) g(u) du, exact up to degree 15:
    /// the moments are -1 and (-1)^(k+1)/(k(k+1)).
    #[must_use]
    pub fn log_weights(&self) -> AtNodes {
        let mut moments = [-1.0; NODES];
        for (k, slot) in moments.iter_mut().enumerate().skip(1) {
            let sign = if k % 2 == 0 { -1.0 } else { 1.0 };
            *slot = sign / (k as f64 * (k as f64 + 1.0));
        }
        self.weights_from_moments(&moments)
    }
}

/// Factors of the Legendre recurrence P_(k+1) = up x P_k - down P_(k-1).
const RECURRENCE: [(f64, f64); NODES] = {
    let mut out = [(1.0, 0.0); NODES];
    let mut k = 1;
    while k < NODES {
        let degree = k as f64;
        out[k] = (
            (2.0 * degree + 1.0) / (degree + 1.0),
            degree / (degree + 1.0),
        );
        k += 1;
    }
    out
};

/// How the Legendre coefficients of a function on a panel fall.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Decay {
    /// Mean modulus of the function.
    pub scale: f64,
    /// Error of the polynomial of degree 15, an estimate from above.
    pub interpolation: f64,
    /// Error of the rule, relative to the panel's length, an estimate from above.
    pub quadrature: f64,
}

/// Sum of c_k T_k(x) at several x in [-1, 1] (Clenshaw), four at a time.
#[inline]
pub fn chebyshev_sum(coefficients: &AtNodes, x: &[f64], out: &mut [f64]) {
    for (x, out) in x.chunks(4).zip(out.chunks_mut(4)) {
        let mut doubled = [0.0; 4];
        for (slot, x) in doubled.iter_mut().zip(x) {
            *slot = 2.0 * x;
        }
        let (mut b1, mut b2) = ([0.0; 4], [0.0; 4]);
        for c in coefficients.iter().skip(1).rev() {
            for lane in 0..4 {
                let next = c + doubled[lane] * b1[lane] - b2[lane];
                b2[lane] = b1[lane];
                b1[lane] = next;
            }
        }
        for (lane, slot) in out.iter_mut().enumerate() {
            *slot = coefficients[0] + 0.5 * doubled[lane] * b1[lane] - b2[lane];
        }
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
            // int u^(beta-1+d) ln u = -1/(beta+d)^2.
            let both = rule.power_log_weights(beta);
            for degree in 0..16 {
                let sum: f64 = (0..NODES)
                    .map(|m| both[m] * math::powi(rule.nodes[m], degree))
                    .sum();
                let below = beta + f64::from(degree);
                assert!((sum + 1.0 / (below * below)).abs() < 2e-14 / (beta * beta));
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

    #[test]
    fn changes_of_basis_agree_with_the_function() {
        let rule = Rule::new();
        let f = |u: f64| math::exp(0.7 * u) / (1.5 - u);
        let values = rule.nodes.map(f);
        let coefficients = rule.chebyshev(&values);
        let points = [0.0, 0.1, 0.37, 0.9, 1.0];
        let x = points.map(|u| 2.0 * u - 1.0);
        let mut sums = [0.0; 5];
        chebyshev_sum(&coefficients, &x, &mut sums);
        for (u, sum) in points.iter().zip(sums) {
            let cardinal = rule.cardinal(*u);
            let direct: f64 = cardinal.iter().zip(&values).map(|(c, v)| c * v).sum();
            assert!((sum / f(*u) - 1.0).abs() < 1e-7);
            assert!((direct / sum - 1.0).abs() < 1e-13);
        }
        // Weights of the two halves, raised, integrate like the whole.
        let mut raised = [0.0; NODES];
        for half in 0..2 {
            rule.raise(half, &rule.weights.map(|w| 0.5 * w), &mut raised);
        }
        for (a, b) in raised.iter().zip(&rule.weights) {
            assert!((a - b).abs() < 1e-14);
        }
    }

    #[test]
    fn decay_bounds_the_error_of_the_rule() {
        // A Lorentzian of half width g in the middle of the panel and near its end.
        let rule = Rule::new();
        for &centre in &[0.5, 0.3, -0.2] {
            for &g in &[0.2, 0.3, 0.5, 1.0] {
                let f = |u: f64| g * g / ((u - centre) * (u - centre) + g * g);
                let exact = g * (math::atan((1.0 - centre) / g) + math::atan(centre / g));
                let values = rule.nodes.map(f);
                let sum: f64 = values.iter().zip(&rule.weights).map(|(v, w)| v * w).sum();
                let decay = rule.decay(&values);
                assert!(
                    (sum - exact).abs() <= decay.quadrature + 1e-15,
                    "{centre} {g}"
                );
                for u in [0.0, 0.21, 0.5, 1.0] {
                    let p: f64 = rule
                        .cardinal(u)
                        .iter()
                        .zip(&values)
                        .map(|(c, v)| c * v)
                        .sum();
                    assert!((p - f(u)).abs() < 4.0 * decay.interpolation + 1e-14);
                }
            }
        }
    }
}
