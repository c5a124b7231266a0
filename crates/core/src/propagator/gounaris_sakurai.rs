//! Gounaris-Sakurai: Delta = -1/D with D = M^2 - s + f(s) - i M Gamma(s),
//! Gamma(s) = Gamma (k/k0)^3 M/W (Phys. Rev. Lett. 21 (1968) 244).
//!
//! f and the width are one analytic function: with G(k, W) = (2/pi)(k/W)[ln((W+2k)/(2m)) - i pi/2],
//! f - i M Gamma(s) = Gamma M^2/k0^3 [k^2 (G - h0) + (M^2 - s) k0^2 h0'], h0 = h(M^2) its real part
//! at M. k -> -k is the other sheet.

use crate::error::{Answer, Refusal};
use crate::kinematics::break_up_momentum_gev;
use crate::math;
use core::f64::consts::{FRAC_PI_2, PI};
use num_complex::Complex64;

/// The form, prepared.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GounarisSakurai {
    mass2: f64,
    m_gev: f64,
    /// Gamma M^2/k0^3.
    scale: f64,
    h0: f64,
    /// k0^2 h'(M^2).
    slope: f64,
    /// d of F(s) = (M^2 + d M Gamma)/D.
    d: f64,
    m_gamma: f64,
}

impl GounarisSakurai {
    /// Prepares for M, Gamma and the mass of the two equal daughters.
    ///
    /// # Errors
    /// A daughter without mass, or M at or below the threshold.
    pub fn new(mass_gev: f64, width_gev: f64, m_gev: f64, path: &str) -> Answer<Self> {
        if !(m_gev.is_finite() && m_gev > 0.0 && mass_gev > 2.0 * m_gev) {
            return Err(Refusal::new(
                format!("{path}.daughter"),
                m_gev,
                format!("above 0 and below M/2 = {} GeV", 0.5 * mass_gev),
                "this form needs two equal massive daughters with their threshold below the resonance's mass",
            ));
        }
        let k0 = break_up_momentum_gev(mass_gev, m_gev, m_gev);
        let mass2 = mass_gev * mass_gev;
        let log = math::ln((mass_gev + 2.0 * k0) / (2.0 * m_gev));
        let h0 = 2.0 / PI * k0 / mass_gev * log;
        let slope = h0 * (0.125 - 0.5 * k0 * k0 / mass2) + 0.5 * k0 * k0 / (PI * mass2);
        let d = 3.0 / PI * (m_gev / k0) * (m_gev / k0) * log + mass_gev / (2.0 * PI * k0)
            - m_gev * m_gev * mass_gev / (PI * k0 * k0 * k0);
        Ok(Self {
            mass2,
            m_gev,
            scale: width_gev * mass2 / (k0 * k0 * k0),
            h0,
            slope,
            d,
            m_gamma: mass_gev * width_gev,
        })
    }

    /// 1/Delta = -D at complex s; `first`: Im k > 0.
    #[must_use]
    pub fn inverse(&self, s: Complex64, first: bool) -> Complex64 {
        let k2 = s * 0.25 - self.m_gev * self.m_gev;
        let mut k = math::csqrt(k2);
        if (k.im < 0.0) == first && k.im != 0.0 {
            k = -k;
        }
        let w = math::csqrt(s);
        let g = k / w
            * (math::cln((w + k * 2.0) / (2.0 * self.m_gev)) - Complex64::new(0.0, FRAC_PI_2))
            * (2.0 / PI);
        let running =
            (k2 * (g - self.h0) + (Complex64::new(self.mass2, 0.0) - s) * self.slope) * self.scale;
        s - self.mass2 - running
    }

    /// Form factor F(s) = (M^2 + d M Gamma)/D on the real axis; F(0) = 1.
    #[must_use]
    pub fn form_factor(&self, s_gev2: f64) -> Complex64 {
        let s = Complex64::new(s_gev2, 0.0);
        let first = s_gev2 < 4.0 * self.m_gev * self.m_gev;
        -self.inverse(s, first).inv() * (self.mass2 + self.d * self.m_gamma)
    }

    /// Threshold, GeV.
    #[must_use]
    pub fn threshold_gev(&self) -> f64 {
        2.0 * self.m_gev
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn form_factor_is_one_at_zero() {
        let rho = GounarisSakurai::new(0.77526, 0.1491, 0.13957039, "").unwrap();
        let at_zero = rho.form_factor(1e-9);
        assert!(
            (at_zero.re - 1.0).abs() < 1e-8 && at_zero.im.abs() < 1e-8,
            "{at_zero}"
        );
        // -Im of the denominator at M is M Gamma, and the real part vanishes with slope 1.
        let d = |s: f64| rho.inverse(Complex64::new(s, 0.0), false);
        let m2 = 0.77526 * 0.77526;
        assert!(d(m2).re.abs() < 1e-15 && (d(m2).im - 0.77526 * 0.1491).abs() < 1e-15);
        assert!(((d(m2 + 1e-5).re - d(m2 - 1e-5).re) / 2e-5 - 1.0).abs() < 1e-8);
    }
}
