//! Two-body kinematics: lambda, break-up momentum, Mandelstam variables (PDG, "Kinematics").

use crate::math::csqrt;
use num_complex::Complex64;

/// The triangle function a^2 + b^2 + c^2 - 2ab - 2bc - 2ca, factorised so that it keeps its
/// digits where sqrt(a) is near sqrt(b) + sqrt(c). Units: those of a squared; b, c >= 0.
#[must_use]
pub fn lambda(a: f64, b: f64, c: f64) -> f64 {
    let (root_b, root_c) = (b.sqrt(), c.sqrt());
    let (sum, difference) = (root_b + root_c, root_b - root_c);
    (a - sum * sum) * (a - difference * difference)
}

/// k^2 = lambda(s, m1^2, m2^2)/(4s) in GeV^2 of a pair whose energy lies `above_gev` over its
/// threshold; negative below it. Exact to rounding next to the threshold.
#[inline]
#[must_use]
pub fn momentum_squared_gev2(w_gev: f64, above_gev: f64, m1_gev: f64, m2_gev: f64) -> f64 {
    let sum = m1_gev + m2_gev;
    let difference = m1_gev - m2_gev;
    let upper = (w_gev - difference) * (w_gev + difference);
    above_gev * (w_gev + sum) * upper / (4.0 * w_gev * w_gev)
}

/// Break-up momentum k(W; m1, m2) in GeV; 0 at and below threshold.
/// Relative error below 1e-15 given W - m1 - m2 as representable.
#[inline]
#[must_use]
pub fn break_up_momentum_gev(w_gev: f64, m1_gev: f64, m2_gev: f64) -> f64 {
    momentum_squared_gev2(w_gev, w_gev - (m1_gev + m2_gev), m1_gev, m2_gev)
        .max(0.0)
        .sqrt()
}

/// Break-up momentum at complex s (GeV^2) on the first sheet: Im q >= 0.
/// The other sheet is its negative.
#[must_use]
pub fn break_up_momentum_complex_gev(s_gev2: Complex64, m1_gev: f64, m2_gev: f64) -> Complex64 {
    let sum = m1_gev + m2_gev;
    let difference = m1_gev - m2_gev;
    let q2 = (s_gev2 - sum * sum) * (s_gev2 - difference * difference) / (s_gev2 * 4.0);
    let q = csqrt(q2);
    if q.im < 0.0 { -q } else { q }
}

/// Masses of a reaction 1 2 -> 3 4, GeV.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FourMasses {
    /// Incoming 1.
    pub m1_gev: f64,
    /// Incoming 2.
    pub m2_gev: f64,
    /// Outgoing 3: theta is its angle to 1 in the centre of mass.
    pub m3_gev: f64,
    /// Outgoing 4.
    pub m4_gev: f64,
}

impl FourMasses {
    /// (t, u) in GeV^2 at W and cos(theta); t = (p1-p3)^2, u = (p1-p4)^2 (PDG).
    /// Above both thresholds; at cos(theta) = +-1 with equal masses t, u -> 0 exactly.
    #[must_use]
    pub fn t_u_gev2(self, w_gev: f64, cos_theta: f64) -> (f64, f64) {
        let s = w_gev * w_gev;
        let p_in = break_up_momentum_gev(w_gev, self.m1_gev, self.m2_gev);
        let p_out = break_up_momentum_gev(w_gev, self.m3_gev, self.m4_gev);
        let (a, b) = (self.m1_gev * self.m1_gev, self.m2_gev * self.m2_gev);
        let (c, d) = (self.m3_gev * self.m3_gev, self.m4_gev * self.m4_gev);
        // (E1-E3) = (m1^2-m2^2-m3^2+m4^2)/(2W): no large terms cancel.
        let e_13 = (a - b - c + d) / (2.0 * w_gev);
        let e_14 = (a - b - d + c) / (2.0 * w_gev);
        let (difference, cross) = (p_in - p_out, 2.0 * p_in * p_out);
        let t = e_13 * e_13 - difference * difference - cross * (1.0 - cos_theta);
        let u = e_14 * e_14 - difference * difference - cross * (1.0 + cos_theta);
        debug_assert!((s + t + u - a - b - c - d).abs() <= 1e-9 * (s + a + b + c + d));
        (t, u)
    }

    /// The larger of the two thresholds, GeV.
    #[must_use]
    pub fn threshold_gev(self) -> f64 {
        (self.m1_gev + self.m2_gev).max(self.m3_gev + self.m4_gev)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn pair_of_protons_by_hand() {
        // W = 2 m sqrt(2): k = sqrt(s/4 - m^2) = m.
        let m = crate::units::M_PROTON_GEV;
        let k = break_up_momentum_gev(2.0 * m * 2f64.sqrt(), m, m);
        assert!((k - m).abs() < 1e-15);
    }

    #[test]
    fn keeps_its_digits_at_threshold() {
        // k^2 = eps (1 + eps/4) with m = 1, W = 2 + eps.
        let eps = 1e-9_f64;
        let k2 = momentum_squared_gev2(2.0 + eps, eps, 1.0, 1.0);
        assert!((k2 / (eps * (1.0 + eps / 4.0)) - 1.0).abs() < 1e-15);
    }

    #[test]
    fn rho_to_two_pions_of_the_review() {
        // PDG listing of rho(770): p = 363 MeV for pi pi (775.26, 139.57 MeV), printed to 1 MeV.
        let q = break_up_momentum_gev(0.77526, 0.13957039, 0.13957039);
        assert!((q - 0.362).abs() < 1.5e-3);
    }

    proptest! {
        #[test]
        fn mandelstam_sum_and_cosine(
            m1 in 0.0..2.0f64, m2 in 0.0..2.0f64, m3 in 0.0..2.0f64, m4 in 0.0..2.0f64,
            over in 1e-3..5.0f64, cos in -1.0..1.0f64,
        ) {
            let masses = FourMasses { m1_gev: m1, m2_gev: m2, m3_gev: m3, m4_gev: m4 };
            let w = masses.threshold_gev() + over;
            let (t, u) = masses.t_u_gev2(w, cos);
            let sum = m1 * m1 + m2 * m2 + m3 * m3 + m4 * m4;
            prop_assert!((w * w + t + u - sum).abs() < 1e-12 * (w * w + sum));
            let k = break_up_momentum_gev(w, m1, m2);
            let by_lambda = (lambda(w * w, m1 * m1, m2 * m2).max(0.0)).sqrt() / (2.0 * w);
            prop_assert!((k - by_lambda).abs() < 1e-7 * w);
            let q = break_up_momentum_complex_gev(Complex64::new(w * w, 0.0), m1, m2);
            prop_assert!((q.re - k).abs() < 1e-7 * w && q.im.abs() < 1e-7);
        }
    }
}
