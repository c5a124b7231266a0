//! The same state in other words: mass and width in each convention, coupling, width, lifetime.

use crate::error::{Answer, Refusal};
use crate::kinematics::break_up_momentum_gev;
use crate::units::HBAR_GEV_S;
use core::f64::consts::PI;
use serde::{Deserialize, Serialize};

/// What a mass and a width mean.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Convention {
    /// 1/(s - M^2 + i M Gamma).
    ConstantWidth,
    /// 1/(s - M^2 + i s Gamma/M).
    MasslessChannels,
    /// sqrt(s_R) = M - i Gamma/2.
    PoleInW,
    /// s_R = M^2 - i M Gamma.
    PoleInS,
}

/// A mass and a width with their meaning.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct MassAndWidth {
    /// Meaning.
    pub convention: Convention,
    /// M, GeV.
    pub mass_gev: f64,
    /// Gamma, GeV.
    pub width_gev: f64,
}

impl MassAndWidth {
    /// The same pole in another convention. Exact: all four have one pole.
    ///
    /// # Errors
    /// A mass that is not above 0 or a width below 0; a pole that the other convention cannot
    /// write (Re s_R <= 0).
    pub fn to(self, convention: Convention) -> Answer<Self> {
        let (m, g) = (self.mass_gev, self.width_gev);
        if !(m.is_finite() && m > 0.0 && g.is_finite() && g >= 0.0) {
            return Err(Refusal::new(
                "",
                format!("M = {m}, Gamma = {g}"),
                "a mass above 0 and a width of 0 or more",
                "a mass has to be above 0 and a width 0 or more",
            ));
        }
        if convention == self.convention {
            return Ok(self);
        }
        // Everything through s_R = mass^2 - i mass width.
        let (mass, width) = match self.convention {
            Convention::ConstantWidth | Convention::PoleInS => (m, g),
            Convention::MasslessChannels => {
                let shrink = crate::math::hypot(1.0, g / m);
                (m / shrink, g / shrink)
            }
            Convention::PoleInW => {
                let s = (m - 0.5 * g) * (m + 0.5 * g);
                if s <= 0.0 {
                    return Err(Refusal::new(
                        "",
                        g,
                        "a width below twice the mass",
                        "a pole this wide has Re s <= 0 and no mass in the other conventions",
                    ));
                }
                let mass = s.sqrt();
                (mass, m * g / mass)
            }
        };
        let (mass_gev, width_gev) = match convention {
            Convention::ConstantWidth | Convention::PoleInS => (mass, width),
            Convention::MasslessChannels => {
                let grow = crate::math::hypot(1.0, width / mass);
                (mass * grow, width * grow)
            }
            Convention::PoleInW => {
                // sqrt(s_R): Re^2 = (|s| + Re s)/2, Re Im = -mass width/2.
                let modulus = mass * crate::math::hypot(mass, width);
                let re = (0.5 * (modulus + mass * mass)).sqrt();
                (re, mass * width / re)
            }
        };
        Ok(Self {
            convention,
            mass_gev,
            width_gev,
        })
    }

    /// What the conversion means for the curve: whether `other` is the same curve.
    #[must_use]
    pub fn same_curve(self, other: Convention) -> &'static str {
        use Convention as C;
        match (self.convention, other) {
            (a, b) if a == b => "the same words",
            (C::ConstantWidth, C::PoleInS) | (C::PoleInS, C::ConstantWidth) => {
                "the same curve: a constant width writes its pole s_R = M^2 - i M Gamma directly"
            }
            (C::ConstantWidth | C::PoleInS, C::MasslessChannels)
            | (C::MasslessChannels, C::ConstantWidth | C::PoleInS) => {
                "the same |Delta| as a function of s up to one constant factor: only mass and width are named differently; with vertices kept at the same partial widths the whole curve is the same if they run alike"
            }
            _ => "the same pole, written as sqrt(s_R) = M - i Gamma/2",
        }
    }

    /// Lifetime hbar/Gamma in s; `None` for a stable state.
    #[must_use]
    pub fn lifetime_s(self) -> Option<f64> {
        lifetime_s(self.width_gev)
    }
}

/// hbar/Gamma in s; `None` for Gamma = 0 (stable).
#[must_use]
pub fn lifetime_s(width_gev: f64) -> Option<f64> {
    (width_gev > 0.0).then(|| HBAR_GEV_S / width_gev)
}

/// A two-body coupling of a scalar or pseudoscalar mediator.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Decay {
    /// Scalar to a Dirac pair: Gamma = g^2 N M beta^3/(8 pi).
    ScalarToFermions {
        /// Fermion mass, GeV.
        m_gev: f64,
        /// Colour factor.
        colours: u8,
    },
    /// Pseudoscalar to a Dirac pair: Gamma = g^2 N M beta/(8 pi).
    PseudoscalarToFermions {
        /// Fermion mass, GeV.
        m_gev: f64,
        /// Colour factor.
        colours: u8,
    },
    /// To two scalars: M Gamma = h^2 2q/(16 pi M), halved for identical ones; h in GeV.
    ToScalars {
        /// Mass 1, GeV.
        m1_gev: f64,
        /// Mass 2, GeV.
        m2_gev: f64,
        /// Identical particles.
        identical: bool,
    },
}

impl Decay {
    /// Gamma for unit coupling: Gamma = coupling^2 times this; 0 at and below threshold (the
    /// mediator is stable against this channel).
    #[must_use]
    pub fn width_per_coupling2(self, mass_gev: f64) -> f64 {
        match self {
            Self::ScalarToFermions { m_gev, colours }
            | Self::PseudoscalarToFermions { m_gev, colours } => {
                let beta = 2.0 * break_up_momentum_gev(mass_gev, m_gev, m_gev) / mass_gev;
                let power = if matches!(self, Self::ScalarToFermions { .. }) {
                    beta * beta * beta
                } else {
                    beta
                };
                f64::from(colours) * mass_gev * power / (8.0 * PI)
            }
            Self::ToScalars {
                m1_gev,
                m2_gev,
                identical,
            } => {
                let rho = 2.0 * break_up_momentum_gev(mass_gev, m1_gev, m2_gev) / mass_gev;
                let half = if identical { 0.5 } else { 1.0 };
                half * rho / (16.0 * PI * mass_gev)
            }
        }
    }

    /// Gamma in GeV of a coupling.
    #[must_use]
    pub fn width_gev(self, mass_gev: f64, coupling: f64) -> f64 {
        coupling * coupling * self.width_per_coupling2(mass_gev)
    }

    /// The coupling (>= 0) that gives Gamma.
    ///
    /// # Errors
    /// Gamma above 0 in a channel that is closed at M, or Gamma below 0.
    pub fn coupling(self, mass_gev: f64, width_gev: f64) -> Answer<f64> {
        let per = self.width_per_coupling2(mass_gev);
        if !(width_gev.is_finite() && width_gev >= 0.0) {
            return Err(Refusal::new(
                "",
                width_gev,
                "0 or more",
                "a width is a number, 0 or more",
            ));
        }
        if per <= 0.0 {
            return Err(Refusal::new(
                "",
                width_gev,
                "a mass above the channel's threshold",
                "the mediator lies at or below this channel's threshold and cannot decay into it: it is stable here, and no coupling gives it a width",
            ));
        }
        Ok((width_gev / per).sqrt())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn z_in_other_words() {
        // PDG text: 34 MeV and 0.93 MeV (s_R), hep-ph/0001206: 26 and 1.2 MeV (sqrt s_R).
        let z = MassAndWidth {
            convention: Convention::MasslessChannels,
            mass_gev: 91.1876,
            width_gev: 2.4952,
        };
        let bar = z.to(Convention::PoleInS).unwrap();
        assert!(((z.mass_gev - bar.mass_gev) * 1e3 - 34.1).abs() < 0.05);
        assert!(((z.width_gev - bar.width_gev) * 1e3 - 0.93).abs() < 0.005);
        let pole = z.to(Convention::PoleInW).unwrap();
        assert!(((z.mass_gev - pole.mass_gev) * 1e3 - 26.0).abs() < 0.5);
        assert!(((z.width_gev - pole.width_gev) * 1e3 - 1.2).abs() < 0.05);
        for convention in [
            Convention::ConstantWidth,
            Convention::MasslessChannels,
            Convention::PoleInW,
            Convention::PoleInS,
        ] {
            let back = z
                .to(convention)
                .unwrap()
                .to(Convention::MasslessChannels)
                .unwrap();
            assert!((back.mass_gev - z.mass_gev).abs() < 1e-13);
            assert!((back.width_gev - z.width_gev).abs() < 1e-14);
        }
    }

    #[test]
    fn muon_coupling_and_lifetime() {
        // Invented scenario: g = 4.0e-4 to the muon at 47.3042 GeV gives 0.301 keV.
        let decay = Decay::ScalarToFermions {
            m_gev: crate::units::M_MUON_GEV,
            colours: 1,
        };
        let width = decay.width_gev(47.3042, 4.0e-4);
        assert!((width * 1e6 - 0.301).abs() < 5e-4);
        assert!((decay.coupling(47.3042, width).unwrap() - 4.0e-4).abs() < 1e-18);
        assert!(decay.coupling(0.2, 1e-9).is_err());
        // PDG: tau = 8.43e-17 s for the neutral pion, 7.81 eV.
        let tau = lifetime_s(7.81e-9).unwrap();
        assert!((tau - 8.43e-17).abs() < 1e-19);
        assert_eq!(lifetime_s(0.0), None);
    }
}
