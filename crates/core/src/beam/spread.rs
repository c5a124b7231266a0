//! Spread of the beams turned into sigma_W.

use super::{Arrangement, Beams, BeamsAt, SettingKind};
use crate::error::{Answer, Refusal};

/// Gaussian spread of each beam, independent of each other, at fixed crossing angle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BeamSpread {
    /// What `first` and `second` are spreads of. `W` counts as total energy when relative.
    pub kind: SettingKind,
    /// True: relative to the beam's own value of that kind; false: in GeV.
    pub relative: bool,
    /// Spread of beam 1.
    pub first: f64,
    /// Spread of beam 2 (no meaning for a target at rest).
    pub second: f64,
}

impl Beams {
    /// sigma_W in GeV at nominal W: sigma_W^2 = sum_i (dW/dE_i)^2 sigma_Ei^2. A spread of
    /// momentum or kinetic energy is turned into one of total energy, to first order.
    /// An absolute spread of kind `W` is sigma_W itself.
    ///
    /// # Errors
    /// A spread that is negative or not a number; W out of reach; an energy spread of a beam
    /// at rest, which has no first-order effect to convert.
    pub fn sigma_w_gev(&self, w_gev: f64, spread: &BeamSpread) -> Answer<f64> {
        for (name, value) in [("first", spread.first), ("second", spread.second)] {
            if !(value.is_finite() && value >= 0.0) {
                return Err(Refusal::new(
                    format!("beam.spread.{name}"),
                    value,
                    "0 or more",
                    "a spread is a number, 0 or more",
                ));
            }
        }
        if spread.kind == SettingKind::W && !spread.relative {
            return Ok(spread.first);
        }
        let at = self.at(SettingKind::W, w_gev)?;
        let first = at.dw_dp1 * sigma_p(spread, spread.first, at.p1_gev, self.first.mass_gev);
        let second = if self.arrangement == Arrangement::FixedTarget {
            0.0
        } else {
            at.dw_dp2 * sigma_p(spread, spread.second, at.p2_gev, self.second.mass_gev)
        };
        let sigma = crate::math::hypot(first, second);
        if !sigma.is_finite() {
            return Err(Refusal::new(
                "beam.spread",
                spread.first,
                "a spread of momentum, or a beam that moves",
                "a beam at rest has no first-order spread of energy: give the spread of its momentum, or of W",
            ));
        }
        Ok(sigma)
    }
}

impl BeamsAt {
    /// dW/dE1 at fixed chi and beam 2; infinite for a first beam at rest against a moving one.
    #[must_use]
    pub fn dw_de1(&self) -> f64 {
        self.dw_dp1 * self.e1_gev / self.p1_gev
    }
    /// dW/dE2 at fixed chi and beam 1.
    #[must_use]
    pub fn dw_de2(&self) -> f64 {
        self.dw_dp2 * self.e2_gev / self.p2_gev
    }
}

/// Spread of momentum of one beam: dp = dE E/p.
fn sigma_p(spread: &BeamSpread, value: f64, p: f64, m: f64) -> f64 {
    if value == 0.0 {
        return 0.0;
    }
    let e = crate::math::hypot(p, m);
    let kinetic = p * p / (e + m);
    match (spread.kind, spread.relative) {
        (SettingKind::Momentum, false) => value,
        (SettingKind::Momentum, true) => value * p,
        (SettingKind::KineticEnergy, true) => value * kinetic * e / p,
        (SettingKind::W | SettingKind::TotalEnergy, true) => value * e * e / p,
        (_, false) => value * e / p,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::beam::BeamParticle;
    use crate::units::{M_ELECTRON_GEV, M_PROTON_GEV};

    fn particle(name: &str, mass_gev: f64) -> BeamParticle {
        BeamParticle {
            name: name.into(),
            mass_gev,
            spin_states: 2,
        }
    }

    #[test]
    fn equal_beams_share_the_spread() {
        // Equal head-on beams of relative spread R each: sigma_W = R W/sqrt(2).
        let beams = Beams {
            first: particle("e-", M_ELECTRON_GEV),
            second: particle("e+", M_ELECTRON_GEV),
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::TotalEnergy,
        };
        for kind in [SettingKind::TotalEnergy, SettingKind::KineticEnergy] {
            let spread = BeamSpread {
                kind,
                relative: true,
                first: 3.49e-4,
                second: 3.49e-4,
            };
            let sigma = beams.sigma_w_gev(2.8742, &spread).unwrap();
            // Kinetic: m/E = 3.6e-4 less.
            assert!((sigma / (3.49e-4 * 2.8742 / 2f64.sqrt()) - 1.0).abs() < 4e-4);
        }
        let absolute = BeamSpread {
            kind: SettingKind::W,
            relative: false,
            first: 0.71e-3,
            second: 0.0,
        };
        assert_eq!(beams.sigma_w_gev(2.8742, &absolute), Ok(0.71e-3));
    }

    #[test]
    fn antiprotons_on_a_jet() {
        // dW/dp = m p/(E W) by hand; an invented scenario quotes 0.2854 and 192 keV for 1.5e-4.
        let beams = Beams {
            first: particle("pbar", M_PROTON_GEV),
            second: particle("p", M_PROTON_GEV),
            arrangement: Arrangement::FixedTarget,
            dial: SettingKind::Momentum,
        };
        let spread = BeamSpread {
            kind: SettingKind::Momentum,
            relative: true,
            first: 1.5e-4,
            second: f64::MAX,
        };
        let at = beams.at(SettingKind::W, 3.2180).unwrap();
        let by_hand = M_PROTON_GEV * at.p1_gev / (at.e1_gev * at.w_gev);
        assert!((at.dw_dp1 - by_hand).abs() < 1e-15);
        assert!((at.dw_dp1 - 0.2854).abs() < 5e-5);
        let sigma = beams.sigma_w_gev(3.2180, &spread).unwrap();
        assert!((sigma - 192e-6).abs() < 0.5e-6);
        // The same spread said as one of total or kinetic energy.
        let energy = BeamSpread {
            kind: SettingKind::TotalEnergy,
            relative: false,
            first: 1.5e-4 * at.p1_gev * at.p1_gev / at.e1_gev,
            second: 0.0,
        };
        let kinetic = BeamSpread {
            kind: SettingKind::KineticEnergy,
            relative: true,
            first: energy.first / (at.e1_gev - M_PROTON_GEV),
            second: 0.0,
        };
        for same in [energy, kinetic] {
            assert!((beams.sigma_w_gev(3.2180, &same).unwrap() / sigma - 1.0).abs() < 1e-12);
        }
        let negative = BeamSpread {
            first: -1.0,
            ..spread
        };
        assert!(beams.sigma_w_gev(3.2180, &negative).is_err());
    }
}
