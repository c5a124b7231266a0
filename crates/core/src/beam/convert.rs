//! One setting into every other: total energy, kinetic energy, momentum, W.
//!
//! s = m1^2 + m2^2 + 2 (E1 E2 + p1 p2 cos chi). Momenta are kept rather than energies, and
//! E - m, E1 E2 - m1 m2 are formed without cancellation, so that the way there and back is
//! exact to rounding at threshold and at ultra-relativistic energies.

use super::{Arrangement, Beams, SettingKind};
use crate::error::{Answer, Refusal};

/// The beams at one setting.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BeamsAt {
    /// Momentum of beam 1, GeV.
    pub p1_gev: f64,
    /// Momentum of beam 2, GeV (0: at rest).
    pub p2_gev: f64,
    /// Total energy of beam 1, GeV.
    pub e1_gev: f64,
    /// Total energy of beam 2, GeV.
    pub e2_gev: f64,
    /// W, GeV.
    pub w_gev: f64,
    /// dW/dp1 at fixed chi and fixed beam 2 (dimensionless).
    pub dw_dp1: f64,
    /// dW/dp2 at fixed chi and fixed beam 1.
    pub dw_dp2: f64,
}

/// One setting in all four kinds, GeV; the energies are beam 1's.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Settings {
    /// W.
    pub w_gev: f64,
    /// Total energy.
    pub total_gev: f64,
    /// Kinetic energy.
    pub kinetic_gev: f64,
    /// Momentum.
    pub momentum_gev: f64,
}

impl Settings {
    /// The number of one kind.
    #[must_use]
    pub fn of(&self, kind: SettingKind) -> f64 {
        match kind {
            SettingKind::W => self.w_gev,
            SettingKind::TotalEnergy => self.total_gev,
            SettingKind::KineticEnergy => self.kinetic_gev,
            SettingKind::Momentum => self.momentum_gev,
        }
    }
}

fn kinetic(p: f64, m: f64) -> f64 {
    if p == 0.0 {
        return 0.0;
    }
    p * p / (crate::math::hypot(p, m) + m)
}

fn momentum_of_kinetic(t: f64, m: f64) -> f64 {
    (t * (t + 2.0 * m)).sqrt()
}

impl Beams {
    /// Least W of this arrangement, GeV: the beams' threshold, or with a moving second beam
    /// what it gives with the first at rest.
    #[must_use]
    pub fn least_w_gev(&self) -> f64 {
        let p1 = self.least_momentum();
        self.with_momenta(p1, self.second_momentum(p1)).w_gev
    }

    /// W in GeV of a setting.
    ///
    /// # Errors
    /// A value that no beam can have (below the mass, negative, not a number), or W below what
    /// the arrangement gives.
    pub fn w_gev(&self, kind: SettingKind, value_gev: f64) -> Answer<f64> {
        Ok(self.at(kind, value_gev)?.w_gev)
    }

    /// The setting of a kind that gives W.
    ///
    /// # Errors
    /// W below the least that the arrangement gives.
    pub fn setting_gev(&self, kind: SettingKind, w_gev: f64) -> Answer<f64> {
        Ok(self.settings(SettingKind::W, w_gev)?.of(kind))
    }

    /// One setting in every kind; the kind that was given comes back bit by bit.
    ///
    /// # Errors
    /// As [`Beams::at`].
    pub fn settings(&self, kind: SettingKind, value_gev: f64) -> Answer<Settings> {
        let at = self.at(kind, value_gev)?;
        let mut all = Settings {
            w_gev: at.w_gev,
            total_gev: at.e1_gev,
            kinetic_gev: kinetic(at.p1_gev, self.first.mass_gev),
            momentum_gev: at.p1_gev,
        };
        *match kind {
            SettingKind::W => &mut all.w_gev,
            SettingKind::TotalEnergy => &mut all.total_gev,
            SettingKind::KineticEnergy => &mut all.kinetic_gev,
            SettingKind::Momentum => &mut all.momentum_gev,
        } = value_gev;
        Ok(all)
    }

    /// Momenta, energies, W and its derivatives at a setting of beam 1 (or W). Equal beams of
    /// unequal particles share the value of the dialled kind (total energy if the dial is W).
    /// Relative accuracy 1e-14.
    ///
    /// # Errors
    /// As [`Beams::w_gev`] and [`Beams::setting_gev`].
    pub fn at(&self, kind: SettingKind, value_gev: f64) -> Answer<BeamsAt> {
        use crate::amplitude::born::Checked;
        self.check("beam")?;
        let m1 = self.first.mass_gev;
        let (least, what) = match kind {
            SettingKind::W => (self.least_w_gev(), "W of at least"),
            SettingKind::TotalEnergy => (m1, "a total energy of at least the particle's mass,"),
            SettingKind::KineticEnergy => (0.0, "a kinetic energy of at least"),
            SettingKind::Momentum => (0.0, "a momentum of at least"),
        };
        if !(value_gev.is_finite() && value_gev >= least) {
            return Err(Refusal::new(
                "",
                value_gev,
                format!("{what} {least} GeV"),
                format!(
                    "these beams cannot have this setting: {value_gev} GeV is not {what} {least} GeV"
                ),
            ));
        }
        let p1 = match kind {
            SettingKind::W => self.first_momentum(value_gev),
            SettingKind::TotalEnergy => ((value_gev - m1) * (value_gev + m1)).sqrt(),
            SettingKind::KineticEnergy => momentum_of_kinetic(value_gev, m1),
            SettingKind::Momentum => value_gev,
        };
        let p1_least = self.least_momentum();
        if p1 < p1_least * (1.0 - 1e-15) {
            return Err(Refusal::new(
                "",
                value_gev,
                format!("a total energy of at least {} GeV", self.second.mass_gev),
                "both beams have the same total energy, which here lies below the mass of beam 2's particle",
            ));
        }
        let mut at = self.with_momenta(p1, self.second_momentum(p1));
        if !(at.w_gev.is_finite() && at.dw_dp1.is_finite()) || at.w_gev <= 0.0 {
            return Err(Refusal::new(
                "",
                value_gev,
                "a setting with a centre-of-mass energy above 0",
                "this setting has no centre-of-mass energy",
            ));
        }
        if kind == SettingKind::W {
            at.w_gev = value_gev;
        }
        Ok(at)
    }

    /// cos(chi); 1 for a fixed target.
    fn cos_crossing(&self) -> f64 {
        match self.arrangement {
            Arrangement::EqualBeams { crossing_rad }
            | Arrangement::UnequalBeams { crossing_rad, .. } => crate::math::cos(crossing_rad),
            Arrangement::FixedTarget => 1.0,
        }
    }

    /// sin^2(chi).
    fn sin2_crossing(&self) -> f64 {
        match self.arrangement {
            Arrangement::EqualBeams { crossing_rad }
            | Arrangement::UnequalBeams { crossing_rad, .. } => {
                let sin = crate::math::sin(crossing_rad);
                sin * sin
            }
            Arrangement::FixedTarget => 0.0,
        }
    }

    /// Momentum of beam 2 when beam 1 has `p1`.
    fn second_momentum(&self, p1: f64) -> f64 {
        let (m1, m2) = (self.first.mass_gev, self.second.mass_gev);
        match self.arrangement {
            Arrangement::FixedTarget => 0.0,
            Arrangement::UnequalBeams {
                second_total_energy_gev: e2,
                ..
            } => ((e2 - m2) * (e2 + m2)).max(0.0).sqrt(),
            Arrangement::EqualBeams { .. } if m1 == m2 => p1,
            Arrangement::EqualBeams { .. } => match self.dial {
                SettingKind::Momentum => p1,
                SettingKind::KineticEnergy => momentum_of_kinetic(kinetic(p1, m1), m2),
                SettingKind::W | SettingKind::TotalEnergy => {
                    (p1 * p1 + (m1 - m2) * (m1 + m2)).max(0.0).sqrt()
                }
            },
        }
    }

    /// E1 E2 - m1 m2 + p1 p2 cos chi = (s - (m1 + m2)^2)/2, without cancellation.
    fn excess(&self, p1: f64, p2: f64) -> f64 {
        let (m1, m2) = (self.first.mass_gev, self.second.mass_gev);
        let over = crate::math::hypot(p1, m1) * crate::math::hypot(p2, m2) + m1 * m2;
        let energies = if over > 0.0 {
            (p1 * p1 * (p2 * p2 + m2 * m2) + m1 * m1 * p2 * p2) / over
        } else {
            0.0
        };
        energies + p1 * p2 * self.cos_crossing()
    }

    /// Least momentum of beam 1: equal total energies of unequal particles need at least the
    /// heavier mass.
    fn least_momentum(&self) -> f64 {
        let (m1, m2) = (self.first.mass_gev, self.second.mass_gev);
        let shares_energy = matches!(self.arrangement, Arrangement::EqualBeams { .. })
            && matches!(self.dial, SettingKind::W | SettingKind::TotalEnergy);
        if shares_energy && m2 > m1 {
            ((m2 - m1) * (m2 + m1)).sqrt()
        } else {
            0.0
        }
    }

    fn with_momenta(&self, p1: f64, p2: f64) -> BeamsAt {
        let (m1, m2, cos) = (
            self.first.mass_gev,
            self.second.mass_gev,
            self.cos_crossing(),
        );
        let (e1, e2) = (crate::math::hypot(p1, m1), crate::math::hypot(p2, m2));
        let sum = m1 + m2;
        let w = (sum * sum + 2.0 * self.excess(p1, p2)).sqrt();
        let slope = |p_own: f64, e_own: f64, p_other: f64, e_other: f64| {
            let velocity = if e_own > 0.0 { p_own / e_own } else { 1.0 };
            (e_other * velocity + p_other * cos) / w
        };
        BeamsAt {
            p1_gev: p1,
            p2_gev: p2,
            e1_gev: e1,
            e2_gev: e2,
            w_gev: w,
            dw_dp1: slope(p1, e1, p2, e2),
            dw_dp2: slope(p2, e2, p1, e1),
        }
    }

    /// Momentum of beam 1 that gives W (not below the least W): the quadratics of each
    /// arrangement in the form without cancellation, then Newton steps for what is left.
    fn first_momentum(&self, w: f64) -> f64 {
        let (m1, m2, cos) = (
            self.first.mass_gev,
            self.second.mass_gev,
            self.cos_crossing(),
        );
        let sin2 = self.sin2_crossing();
        let sum = m1 + m2;
        // a = E1 E2 + p1 p2 cos; d = a - m1 m2.
        let d = 0.5 * (w - sum) * (w + sum);
        let a = d + m1 * m2;
        let guess = match self.arrangement {
            Arrangement::FixedTarget => momentum_of_kinetic((d / m2).max(0.0), m1),
            Arrangement::UnequalBeams { .. } => {
                let p2 = self.second_momentum(0.0);
                let e2 = crate::math::hypot(p2, m2);
                let b = cos * p2;
                // E1 E2 + b p1 = a solved for p1 directly.
                let bottom = m2 * m2 + p2 * p2 * sin2;
                let e1_least = m1 * e2;
                let top = ((a - e1_least) * (a + e1_least)).max(0.0);
                let root = (a * a - m1 * m1 * bottom).max(0.0).sqrt();
                top / (a * b + e2 * root)
            }
            Arrangement::EqualBeams { .. } => {
                let product = d * (a + m1 * m2);
                if self.dial == SettingKind::Momentum || m1 == m2 {
                    let b = m1 * m1 + m2 * m2 + 2.0 * a * cos;
                    let root = (b * b + 4.0 * sin2 * product).sqrt();
                    (2.0 * product / (b + root)).max(0.0).sqrt()
                } else {
                    let b = 2.0 * a - cos * cos * (m1 * m1 + m2 * m2);
                    let c = product + m1 * m1 * m2 * m2 * sin2;
                    let e2 = 2.0 * c / (b + (b * b - 4.0 * sin2 * c).max(0.0).sqrt());
                    (e2 - m1 * m1).max(0.0).sqrt()
                }
            }
        };
        let solved = self.dial != SettingKind::KineticEnergy
            || m1 == m2
            || !matches!(self.arrangement, Arrangement::EqualBeams { .. });
        if solved { guess } else { self.newton(d, guess) }
    }

    /// Equal kinetic energies of unequal particles have no quadratic: Newton steps on
    /// E1 E2 - m1 m2 + p1 p2 cos = d, kept inside a bracket.
    fn newton(&self, d: f64, guess: f64) -> f64 {
        let miss = |p: f64| self.excess(p, self.second_momentum(p)) - d;
        let (mut low, mut high) = (0.0, guess.max(1e-300));
        while miss(high) < 0.0 && high < f64::MAX / 4.0 {
            high *= 2.0;
        }
        let mut p = guess;
        for _ in 0..200 {
            let here = miss(p);
            if here > 0.0 {
                high = p;
            } else {
                low = p;
            }
            let h = 1e-6 * p;
            let step = p - here * 2.0 * h / (miss(p + h) - miss(p - h));
            let next = if step > low && step < high {
                step
            } else {
                0.5 * (low + high)
            };
            if (next - p).abs() <= 2.0 * f64::EPSILON * p {
                break;
            }
            p = next;
        }
        p
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::beam::BeamParticle;
    use crate::units::{M_ELECTRON_GEV, M_PROTON_GEV};
    use proptest::prelude::*;

    fn beams(m1: f64, m2: f64, arrangement: Arrangement, dial: SettingKind) -> Beams {
        let particle = |mass_gev| BeamParticle {
            name: "x".into(),
            mass_gev,
            spin_states: 2,
        };
        Beams {
            first: particle(m1),
            second: particle(m2),
            arrangement,
            dial,
        }
    }

    #[test]
    fn equal_collider_by_hand() {
        // Head-on, same particle: W = 2 E exactly; with half-angle: s = 4E^2 - 2p^2 (1 - cos chi).
        let m = M_ELECTRON_GEV;
        let head_on = beams(
            m,
            m,
            Arrangement::EqualBeams { crossing_rad: 0.0 },
            SettingKind::TotalEnergy,
        );
        let w = head_on.w_gev(SettingKind::TotalEnergy, 1.4371).unwrap();
        assert!((w - 2.8742).abs() < 1e-15);
        let crossed = beams(
            m,
            m,
            Arrangement::EqualBeams {
                crossing_rad: 0.022,
            },
            SettingKind::TotalEnergy,
        );
        let w = crossed.w_gev(SettingKind::TotalEnergy, 1.4371).unwrap();
        let p2 = 1.4371 * 1.4371 - m * m;
        let s = 4.0 * 1.4371 * 1.4371 - 2.0 * p2 * (1.0 - crate::math::cos(0.022));
        assert!((w - s.sqrt()).abs() < 1e-15);
    }

    #[test]
    fn fixed_target_antiproton_by_hand() {
        // s = 2 m^2 + 2 m E: E = 3.2185^2/(2 m) - m = 4.58190..., p = sqrt(E^2 - m^2).
        let m = M_PROTON_GEV;
        let jet = beams(m, m, Arrangement::FixedTarget, SettingKind::Momentum);
        let e = 3.2185 * 3.2185 / (2.0 * m) - m;
        let p = jet.setting_gev(SettingKind::Momentum, 3.2185).unwrap();
        assert!((p - (e * e - m * m).sqrt()).abs() < 1e-14);
        // The ends of an invented scan: 4.455 and 4.511 GeV/c for 3.2100 and 3.2260 GeV.
        for (w, p) in [(3.2100, 4.455), (3.2260, 4.511)] {
            let found = jet.setting_gev(SettingKind::Momentum, w).unwrap();
            assert!((found - p).abs() < 6e-4, "{found}");
        }
        let t = jet.setting_gev(SettingKind::KineticEnergy, 3.2185).unwrap();
        assert!((t - (e - m)).abs() < 1e-14);
    }

    #[test]
    fn unequal_beams_with_crossing_angle_by_hand() {
        // 8 GeV e- on 3.5 GeV e+ at 22 mrad: s = 2 m^2 + 2(E1 E2 + p1 p2 cos 0.022)
        // = 4 E1 E2 cos^2(0.011) up to m^2: 10.5824 GeV.
        let m = M_ELECTRON_GEV;
        let ring = beams(
            m,
            m,
            Arrangement::UnequalBeams {
                crossing_rad: 0.022,
                second_total_energy_gev: 3.5,
            },
            SettingKind::TotalEnergy,
        );
        let at = ring.at(SettingKind::TotalEnergy, 8.0).unwrap();
        let by_hand = (4.0_f64 * 8.0 * 3.5).sqrt() * crate::math::cos(0.011);
        assert!((at.w_gev - by_hand).abs() < 1e-6);
        assert!((at.w_gev - 10.58237).abs() < 1e-5);
        // dW/dE1 = W/(2 E1) in the massless limit.
        assert!((at.dw_de1() - at.w_gev / 16.0).abs() < 1e-6);
        assert!((at.dw_de2() - at.w_gev / 7.0).abs() < 1e-6);
    }

    #[test]
    fn impossible_settings_are_refused() {
        let m = M_PROTON_GEV;
        let jet = beams(m, m, Arrangement::FixedTarget, SettingKind::Momentum);
        for (kind, value) in [
            (SettingKind::W, 1.8),
            (SettingKind::W, f64::NAN),
            (SettingKind::W, f64::INFINITY),
            (SettingKind::TotalEnergy, 0.9),
            (SettingKind::KineticEnergy, -0.1),
            (SettingKind::Momentum, -1.0),
        ] {
            let refusal = jet.settings(kind, value).unwrap_err();
            assert!(!refusal.message.is_empty() && !refusal.allowed.is_empty());
        }
        let mut crossed = jet.clone();
        crossed.arrangement = Arrangement::EqualBeams { crossing_rad: 1.6 };
        assert_eq!(
            crossed.settings(SettingKind::W, 3.0).unwrap_err().field,
            "beam.crossing_angle"
        );
        // Beam 2 of 5 GeV: W cannot be less than with beam 1 at rest.
        let ring = beams(
            m,
            m,
            Arrangement::UnequalBeams {
                crossing_rad: 0.0,
                second_total_energy_gev: 5.0,
            },
            SettingKind::Momentum,
        );
        let least = (2.0 * m * m + 2.0 * m * 5.0).sqrt();
        assert!((ring.least_w_gev() - least).abs() < 1e-14);
        assert!(ring.settings(SettingKind::W, least * 0.999).is_err());
    }

    proptest! {
        #[test]
        fn there_and_back(
            m1 in 1e-4..2.0f64, m2 in 1e-4..2.0f64, same in any::<bool>(),
            which in 0..3usize, dial in 0..4usize, over in 1e-4..50.0f64,
            crossing_rad in 0.0..1.5f64, second in 0.0..10.0f64,
        ) {
            let m2 = if same { m1 } else { m2 };
            let kinds = [SettingKind::W, SettingKind::TotalEnergy, SettingKind::KineticEnergy, SettingKind::Momentum];
            let arrangement = [
                Arrangement::EqualBeams { crossing_rad },
                Arrangement::UnequalBeams { crossing_rad, second_total_energy_gev: m2 + second },
                Arrangement::FixedTarget,
            ][which].clone();
            let beams = beams(m1, m2, arrangement, kinds[dial]);
            let w = beams.least_w_gev() * 1.0001 + over;
            let all = beams.settings(SettingKind::W, w).unwrap();
            for kind in kinds {
                let back = beams.settings(kind, all.of(kind)).unwrap();
                prop_assert!((back.w_gev - w).abs() < 2e-14 * w, "{kind:?} {} {w}", back.w_gev);
            }
            // Derivatives against differences of the exact conversion.
            let at = beams.at(SettingKind::W, w).unwrap();
            if which > 0 {
                let h = 1e-5 * at.p1_gev;
                let up = beams.w_gev(SettingKind::Momentum, at.p1_gev + h).unwrap();
                let down = beams.w_gev(SettingKind::Momentum, at.p1_gev - h).unwrap();
                let slope = (up - down) / (2.0 * h);
                prop_assert!((slope - at.dw_dp1).abs() < 1e-6 * (1.0 + slope));
            }
        }
    }
}
