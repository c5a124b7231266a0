//! The height of one resonance by itself.

use super::partial_wave::flux_nb_gev2;
use crate::beam::Beams;
use crate::kinematics::break_up_momentum_gev;

/// Born cross section at W = M of one resonance alone, nb: (2J+1)/(n_a n_b) 4 pi (hbar c)^2/k^2 times
/// `product` = `B_in` `B_f`; with `product` = 1 the largest that unitarity allows. 0 where the beams cannot make it.
///
/// Source: Particle Data Group, Review of Particle Physics, Resonances. Exact but for rounding.
#[must_use]
pub fn peak_cross_section_nb(beams: &Beams, twice_j: u8, mass_gev: f64, product: f64) -> f64 {
    let k = break_up_momentum_gev(mass_gev, beams.first.mass_gev, beams.second.mass_gev);
    if k > 0.0 {
        flux_nb_gev2(twice_j, beams) / (k * k) * product
    } else {
        0.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::beam::{Arrangement, BeamParticle, SettingKind};
    use crate::units::M_ELECTRON_GEV;

    /// Hadronic pole cross section of the Z: 41.481(33) nb (LEP electroweak working group,
    /// Phys. Rep. 427 (2006) 257, with its M, Gamma and branching fractions).
    #[test]
    fn z_to_hadrons() {
        let electron = BeamParticle {
            name: "e-".into(),
            mass_gev: M_ELECTRON_GEV,
            spin_states: 2,
        };
        let beams = Beams {
            first: electron.clone(),
            second: electron,
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::W,
        };
        let found = peak_cross_section_nb(&beams, 2, 91.1876, 0.033_632 * 0.699_11);
        assert!((found - 41.48).abs() < 0.04, "{found} nb");
    }
}
