//! A Born model for tests of the line shape alone: constant-width Breit-Wigner with constant
//! vertices, flat coherent background and power-law continuum (physics of "Partial-wave
//! resonances"), written apart from the amplitude room.
#![allow(missing_docs, dead_code)]

use widthwise_core::amplitude::born::{Born, Energy, Feature};
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};

pub const HC2: f64 = 389_379.372_171_859_5;
pub const M_E: f64 = 0.510_998_950_69e-3;

/// sigma = 4 pi (hbar c)^2 g / k^2 |T|^2 + c0 (M/W)^n with k = W/2,
/// T = M sqrt(strength) Gamma / (D) e^{i phase} + background, D = M^2 - s - i M Gamma.
#[derive(Clone, Debug)]
pub struct Line {
    pub mass: f64,
    pub width: f64,
    /// B_in B_f.
    pub product: f64,
    /// (2J+1)/(n_a n_b).
    pub spin: f64,
    /// Coherent background amplitude, real, and its phase.
    pub background: f64,
    pub phase: f64,
    /// nb at W = M, and the power.
    pub continuum: f64,
    pub power: i32,
    pub threshold: f64,
}

impl Line {
    pub fn psi2s() -> Self {
        // Wang, Yuan & Mo 2002: M = 3.68596 GeV, Gamma = 300 keV, Gamma_ee = 2.19 keV, Gamma_f = Gamma.
        Self {
            mass: 3.68596,
            width: 300e-6,
            product: 2.19e-6 / 300e-6,
            spin: 0.75,
            background: 0.0,
            phase: 0.0,
            continuum: 0.0,
            power: 0,
            threshold: 0.0,
        }
    }
}

impl Born for Line {
    fn threshold_gev(&self) -> f64 {
        self.threshold
    }
    fn features(&self) -> Vec<Feature> {
        if self.product == 0.0 {
            return Vec::new();
        }
        vec![Feature::Peak {
            w_gev: self.mass,
            width_gev: self.width,
        }]
    }
    fn contribution_names(&self) -> Vec<String> {
        ["resonance", "background", "interference", "continuum"]
            .map(String::from)
            .to_vec()
    }
    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        let w = at.w_gev();
        if w <= self.threshold {
            out.fill(0.0);
            return;
        }
        let flux = self.spin * 16.0 * std::f64::consts::PI * HC2 / (w * w);
        let above = at.above_gev(self.mass);
        let (re, im) = (-above * (w + self.mass), -self.mass * self.width);
        let strength = self.mass * self.width * self.product.sqrt();
        let norm = re * re + im * im;
        let (tr, ti) = (strength * re / norm, -strength * im / norm);
        let (br, bi) = (
            self.background * libm::cos(self.phase),
            self.background * libm::sin(self.phase),
        );
        out[0] = flux * (tr * tr + ti * ti);
        out[1] = flux * self.background * self.background;
        out[2] = flux * 2.0 * (tr * br + ti * bi);
        let mut continuum = self.continuum;
        for _ in 0..self.power {
            continuum *= self.mass / w;
        }
        out[3] = continuum;
    }
    fn sigma_nb(&self, at: Energy) -> f64 {
        let mut parts = [0.0; 4];
        self.contributions_nb(at, &mut parts);
        parts.iter().sum()
    }
}

pub fn beams(name: &str, mass_gev: f64) -> Beams {
    let particle = |name: String| BeamParticle {
        name,
        mass_gev,
        spin_states: 2,
    };
    Beams {
        first: particle(format!("{name}-")),
        second: particle(format!("{name}+")),
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    }
}

pub fn electrons() -> Beams {
    beams("e", M_E)
}
