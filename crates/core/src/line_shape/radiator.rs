//! Initial-state radiation of a lepton pair: the radiator F(x, s) of Kuraev & Fadin,
//! Sov. J. Nucl. Phys. 41 (1985) 466: second order, exponentiated, without pair production.

use crate::math;
use crate::units::ALPHA;
use core::f64::consts::PI;

/// Radiation of two beams of leptons of one mass.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Radiator {
    /// Mass of the beam lepton, GeV.
    pub beam_mass_gev: f64,
    /// Least W that is left after radiation, GeV.
    pub w_min_gev: f64,
}

/// F at one W' before radiation: beta and the factor of the soft term.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Emission {
    /// beta = (2 alpha/pi)(ln(s/m^2) - 1).
    pub beta: f64,
    /// beta [1 + 3 beta/4 + (alpha/pi)(pi^2/3 - 1/2) + beta^2 (9/32 - pi^2/12)].
    pub soft: f64,
}

impl Radiator {
    /// Emission at W' (before radiation), GeV.
    #[inline]
    #[must_use]
    pub fn at(&self, w_gev: f64) -> Emission {
        let beta = 2.0 * ALPHA / PI * (2.0 * math::ln(w_gev / self.beam_mass_gev) - 1.0);
        let soft = beta
            * (1.0
                + 0.75 * beta
                + ALPHA / PI * (PI * PI / 3.0 - 0.5)
                + beta * beta * (9.0 / 32.0 - PI * PI / 12.0));
        Emission { beta, soft }
    }
}

impl Emission {
    /// Factor of ln(1/x) in F.
    #[inline]
    #[must_use]
    pub fn log_factor(&self, x: f64) -> f64 {
        0.5 * self.beta * self.beta * (2.0 - x)
    }

    /// What remains of F besides soft x^(beta-1) and the ln(1/x) term; regular at x = 0.
    /// `ln_left` = ln(1-x).
    #[inline]
    #[must_use]
    pub fn regular(&self, x: f64, ln_left: f64) -> f64 {
        let left = 1.0 - x;
        let ratio = if x > 0.0 { ln_left / x } else { -1.0 };
        -self.beta * (1.0 - 0.5 * x)
            + 0.125 * self.beta * self.beta * (x - 6.0 - (1.0 + 3.0 * left * left) * ratio)
    }

    /// F(x) for 0 < x < 1; `ln_x` = ln(x), `ln_left` = ln(1-x).
    #[inline]
    #[must_use]
    pub fn density(&self, x: f64, ln_x: f64, ln_left: f64) -> f64 {
        self.soft * math::exp((self.beta - 1.0) * ln_x) - self.log_factor(x) * ln_x
            + self.regular(x, ln_left)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn density_is_the_published_formula() {
        let emission = Radiator {
            beam_mass_gev: 0.510_998_950_69e-3,
            w_min_gev: 0.5,
        }
        .at(3.686);
        let (b, a) = (emission.beta, ALPHA / PI);
        for &x in &[1e-9, 1e-3, 0.2, 0.9] {
            let published = b
                * math::pow(x, b - 1.0)
                * (1.0
                    + 0.75 * b
                    + a * (PI * PI / 3.0 - 0.5)
                    + b * b * (9.0 / 32.0 - PI * PI / 12.0))
                - b * (1.0 - x / 2.0)
                + b * b / 8.0
                    * (4.0 * (2.0 - x) * math::ln(1.0 / x)
                        - (1.0 + 3.0 * (1.0 - x) * (1.0 - x)) / x * math::ln_1p(-x)
                        - 6.0
                        + x);
            let ours = emission.density(x, math::ln(x), math::ln_1p(-x));
            assert!((ours / published - 1.0).abs() < 1e-13);
        }
    }
}
