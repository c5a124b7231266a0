//! The two-point function of a pair: J(s) = B0(s; m1, m2) - B0(0; m1, m2) and the
//! Chew-Mandelstam function CM(s), on both sheets.
//!
//! With A = m1^2 + m2^2 - s and B = 2 W q = sqrt((s - s_th)(s - s_pth)):
//! pi CM(s) = (B/s) ln[(A + B)/(2 m1 m2)] - (m1^2 - m2^2)(1/s - 1/s_th) ln(m1/m2), and
//! J = pi (CM(s) - CM(0)); Im J = pi 2q/W above threshold. The product (B/s) ln(A + B) does not
//! depend on the sign of B; the sign without cancellation in A + B is taken. Near s = 0 the
//! terms cancel, and the once-subtracted dispersion integral is summed instead.
//! Relative accuracy 1e-13 (checked against mpmath, tests/reference/two_point.py).

use crate::error::{Answer, Refusal};
use crate::math;
use crate::numerics::gauss_legendre::gauss_legendre;
use core::f64::consts::PI;
use num_complex::Complex64;

/// Nodes of the dispersion sum. It is used for |s| < s_th/5 only, where the integrand is
/// analytic far around the path.
const NODES: usize = 40;

/// A pair of particles in a loop, prepared.
#[derive(Debug, Clone, PartialEq)]
pub struct PairLoop {
    threshold2: f64,
    pseudo2: f64,
    sum2: f64,
    /// m1^2 - m2^2 >= 0.
    difference2: f64,
    two_m1_m2: f64,
    /// ln(m1/m2), 0 for equal masses.
    log_ratio: f64,
    /// pi CM(0).
    at_zero: f64,
    kind: Kind,
    /// Weights and v^2 of the dispersion sum.
    sum: Vec<(f64, f64)>,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum Kind {
    Massive,
    /// One massless particle.
    OneMassless,
    /// Both massless: J is counted from s = -scale^2 instead of 0.
    Massless {
        scale2: f64,
    },
}

impl PairLoop {
    /// Prepares the pair. Two massless particles have no value at s = 0: their J is counted
    /// from s = -`scale_gev`^2, which changes the self-energy by a polynomial only.
    ///
    /// # Errors
    /// A mass that is negative or not a number.
    pub fn new(m1_gev: f64, m2_gev: f64, scale_gev: f64, path: &str) -> Answer<Self> {
        for mass in [m1_gev, m2_gev] {
            if !(mass.is_finite() && mass >= 0.0) {
                return Err(Refusal::new(
                    path,
                    mass,
                    "a mass of 0 or more",
                    "the mass of a particle in a loop is a number, 0 or more",
                ));
            }
        }
        let (large, small) = (m1_gev.max(m2_gev), m1_gev.min(m2_gev));
        let sum2 = large * large + small * small;
        let difference2 = (large - small) * (large + small);
        let threshold2 = (large + small) * (large + small);
        let pseudo2 = (large - small) * (large - small);
        let kind = if large == 0.0 {
            Kind::Massless {
                scale2: scale_gev * scale_gev,
            }
        } else if small == 0.0 {
            Kind::OneMassless
        } else {
            Kind::Massive
        };
        // Each formula where it keeps its digits: near equality, and far from it.
        let log_ratio = match kind {
            Kind::Massive if large > 2.0 * small => math::ln(large / small),
            Kind::Massive => math::atanh(difference2 / sum2),
            _ => 0.0,
        };
        let over = if difference2 == 0.0 {
            1.0
        } else {
            sum2 / difference2 * log_ratio
        };
        let at_zero = if kind == Kind::Massive {
            -1.0 - over + difference2 / threshold2 * log_ratio
        } else {
            0.0
        };
        Ok(Self {
            threshold2,
            pseudo2,
            sum2,
            difference2,
            two_m1_m2: 2.0 * large * small,
            log_ratio,
            at_zero,
            kind,
            sum: if kind == Kind::Massive {
                dispersion_nodes(pseudo2 / threshold2)
            } else {
                Vec::new()
            },
        })
    }

    /// Threshold in s, GeV^2.
    #[must_use]
    pub fn threshold2_gev2(&self) -> f64 {
        self.threshold2
    }

    /// J(s) on the first sheet; a real s counts as s + i eps.
    #[must_use]
    pub fn j(&self, s: Complex64) -> Complex64 {
        match self.kind {
            Kind::Massless { scale2 } => -log_minus(s / scale2),
            Kind::OneMassless => {
                let a = s / self.sum2;
                if math::abs(a) < 0.2 {
                    return one_massless_series(a);
                }
                // 1 + (1-a)/a ln(1-a), with 1 - a = -(a - 1).
                let top = Complex64::new(1.0, 0.0) - a;
                if top.re == 0.0 && top.im == 0.0 {
                    return Complex64::new(1.0, 0.0);
                }
                top / a * log_minus(-top) + 1.0
            }
            Kind::Massive => {
                if math::abs(s) < 0.2 * self.threshold2 {
                    return self.j_by_dispersion(s);
                }
                self.log_term(s)
                    - (self.difference2 * self.log_ratio) * (s.inv() - 1.0 / self.threshold2)
                    - self.at_zero
            }
        }
    }

    /// pi CM(s): J counted from threshold. For two massless particles from -scale^2.
    #[must_use]
    pub fn j_from_threshold(&self, s: Complex64) -> Complex64 {
        match self.kind {
            Kind::Massless { .. } => self.j(s),
            Kind::OneMassless => self.j(s) - 1.0,
            Kind::Massive => self.j(s) + self.at_zero,
        }
    }

    /// 2q/W with Re > 0 next to the real axis above threshold (the phase-space factor rho).
    #[must_use]
    pub fn rho(&self, s: Complex64) -> Complex64 {
        let rho = math::csqrt((s - self.threshold2) * (s - self.pseudo2)) / s;
        if rho.re < 0.0 { -rho } else { rho }
    }

    /// J on the second sheet, reached from s + i eps above threshold by going down: J + 2 pi i rho.
    #[must_use]
    pub fn j_second(&self, s: Complex64) -> Complex64 {
        self.j(s) + Complex64::new(0.0, 2.0 * PI) * self.rho(s)
    }

    /// dJ/ds on the first sheet, GeV^-2; s not at threshold.
    #[must_use]
    pub fn derivative(&self, s: Complex64) -> Complex64 {
        match self.kind {
            Kind::Massless { .. } => -s.inv(),
            Kind::OneMassless => {
                let a = s / self.sum2;
                if math::abs(a) < 0.2 {
                    return one_massless_slope(a) / self.sum2;
                }
                let top = Complex64::new(1.0, 0.0) - a;
                -(log_minus(-top) / (a * a) + a.inv()) / self.sum2
            }
            Kind::Massive => {
                if math::abs(s) < 0.2 * self.threshold2 {
                    let mut total = Complex64::new(0.0, 0.0);
                    for (weight, v2) in &self.sum {
                        let bottom = Complex64::new(self.threshold2, 0.0) - s * (1.0 - v2);
                        total += (bottom * bottom).inv() * (weight * self.threshold2);
                    }
                    return total;
                }
                // ln/B = (B/s) ln * s/B^2.
                let b2 = (s - self.threshold2) * (s - self.pseudo2);
                let ratio = self.log_term(s) * s / b2;
                let top = ratio * (s * self.sum2 - self.difference2 * self.difference2) - s
                    + self.difference2 * self.log_ratio;
                top / (s * s)
            }
        }
    }

    /// (B/s) ln[(A + B)/(2 m1 m2)].
    fn log_term(&self, s: Complex64) -> Complex64 {
        let a = Complex64::new(self.sum2, 0.0) - s;
        if s.im == 0.0 && s.re > self.threshold2 {
            let b = ((s.re - self.threshold2) * (s.re - self.pseudo2)).sqrt();
            let log = math::ln((b - a.re) / self.two_m1_m2);
            return Complex64::new(-log, PI) * (b / s.re);
        }
        let mut b = math::csqrt((s - self.threshold2) * (s - self.pseudo2));
        if a.re * b.re + a.im * b.im < 0.0 {
            b = -b;
        }
        b / s * math::cln((a + b) / self.two_m1_m2)
    }

    /// J = s int_0^1 dv 2 v^2 sqrt(1 - r (1 - v^2))/(s_th - s (1 - v^2)), r = s_pth/s_th: the
    /// subtracted dispersion integral with s' = s_th/(1 - v^2).
    fn j_by_dispersion(&self, s: Complex64) -> Complex64 {
        let mut total = Complex64::new(0.0, 0.0);
        for (weight, v2) in &self.sum {
            total += (Complex64::new(self.threshold2, 0.0) - s * (1.0 - v2)).inv() * *weight;
        }
        total * s
    }
}

/// ln(-z) with z on the real axis meaning z + i eps.
fn log_minus(z: Complex64) -> Complex64 {
    if z.im == 0.0 && z.re > 0.0 {
        return Complex64::new(math::ln(z.re), -PI);
    }
    math::cln(-z)
}

/// 1 + (1-a)/a ln(1-a) = sum a^n/(n (n+1)).
fn one_massless_series(a: Complex64) -> Complex64 {
    let mut total = Complex64::new(0.0, 0.0);
    for n in (1..=26u32).rev() {
        let n = f64::from(n);
        total = (total + 1.0 / (n * (n + 1.0))) * a;
    }
    total
}

fn one_massless_slope(a: Complex64) -> Complex64 {
    let mut total = Complex64::new(0.0, 0.0);
    for n in (1..=28u32).rev() {
        total = total * a + 1.0 / (f64::from(n) + 1.0);
    }
    total
}

/// Gauss-Legendre nodes in u with v = c sinh(u), which takes the branch points v = +-i c,
/// c^2 = (1-r)/r, off the path; weights hold 2 v^2 sqrt(1 - r (1 - v^2)) dv.
fn dispersion_nodes(r: f64) -> Vec<(f64, f64)> {
    let nodes = gauss_legendre(NODES);
    let one_minus_r = 1.0 - r;
    nodes
        .into_iter()
        .map(|(x, weight)| {
            let half = 0.5 * (x + 1.0);
            if r < 0.5 {
                let v2 = half * half;
                return (weight * v2 * (one_minus_r + r * v2).sqrt(), v2);
            }
            let c = (one_minus_r / r).sqrt();
            let end = math::asinh(1.0 / c);
            let u = half * end;
            let (sinh, cosh) = (math::sinh(u), math::cosh(u));
            let v2 = c * c * sinh * sinh;
            (weight * end * v2 * one_minus_r.sqrt() * cosh * c * cosh, v2)
        })
        .collect()
}
