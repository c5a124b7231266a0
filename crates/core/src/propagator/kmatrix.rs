//! Two-channel K-matrix: K_ij = sum_p g_pi g_pj/(M_p^2 - s) + c_ij, T = (1 - K R)^-1 K with
//! R_ii = CM_i(s) or i rho_i: unitary for any parameters, unlike a sum of Breit-Wigners.
//!
//! Everything is multiplied with P = prod(M_p^2 - s) before division, and det K has no double
//! poles (those of one pole cancel), so that nothing is 0/0 at a bare pole.

use super::Branch;
use super::loops::PairLoop;
use super::poles::{Continued, PoleSearch, search};
use crate::amplitude::hypothesis::KMatrix;
use crate::error::{Answer, Refusal};
use core::f64::consts::PI;
use num_complex::Complex64;

/// Most bare poles.
pub const MOST_POLES: usize = 6;

/// A prepared K-matrix.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedKMatrix {
    /// (M_p^2, g_p1, g_p2).
    poles: Vec<(f64, f64, f64)>,
    /// c_11, c_12, c_22.
    constant: [f64; 3],
    pairs: [PairLoop; 2],
    branches: [Branch; 2],
    chew_mandelstam: bool,
}

/// T and S of both channels at one energy.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct KAmplitudes {
    /// T_11, T_12, T_22 without phase-space factors.
    pub t: [Complex64; 3],
    /// rho_1, rho_2; 0 below threshold.
    pub rho: [f64; 2],
}

impl KAmplitudes {
    /// sqrt(rho_a) T_af sqrt(rho_f), the T_f of a cross section.
    #[must_use]
    pub fn physical(&self, a: usize, f: usize) -> Complex64 {
        let [rho1, rho2] = self.rho;
        let [t11, t12, t22] = self.t;
        match (a, f) {
            (0, 0) => t11 * rho1,
            (1, 1) => t22 * rho2,
            _ => t12 * (rho1 * rho2).sqrt(),
        }
    }

    /// Largest element of |S^dagger S - 1| over the open channels, S = 1 + 2i sqrt(rho) T sqrt(rho).
    #[must_use]
    pub fn unitarity_defect(&self) -> f64 {
        let i2 = Complex64::new(0.0, 2.0);
        let s11 = i2 * self.physical(0, 0) + 1.0;
        let s22 = i2 * self.physical(1, 1) + 1.0;
        let s12 = i2 * self.physical(0, 1);
        let one = (s11.norm_sqr() + s12.norm_sqr() - 1.0).abs();
        let two = (s22.norm_sqr() + s12.norm_sqr() - 1.0).abs();
        let mixed = s11.conj() * s12 + s12.conj() * s22;
        one.max(two).max(crate::math::abs(mixed))
    }
}

impl PreparedKMatrix {
    /// Checks and prepares.
    ///
    /// # Errors
    /// No pole and no constant, too many or coincident bare poles, numbers that are none, two
    /// massless particles with Chew-Mandelstam functions (zero at threshold is not possible).
    pub fn new(model: &KMatrix, path: &str) -> Answer<Self> {
        if model.poles.len() > MOST_POLES {
            return Err(Refusal::new(
                format!("{path}.poles"),
                model.poles.len(),
                format!("at most {MOST_POLES}"),
                "there are more bare poles than the K-matrix takes",
            ));
        }
        let mut poles: Vec<(f64, f64, f64)> = Vec::new();
        for (i, pole) in model.poles.iter().enumerate() {
            let path = format!("{path}.poles[{i}]");
            super::positive(
                pole.mass_gev,
                &path,
                "mass",
                "a bare pole needs a mass above 0",
            )?;
            for (field, g) in [("g1", pole.g1_gev), ("g2", pole.g2_gev)] {
                if !g.is_finite() {
                    return Err(Refusal::new(
                        format!("{path}.{field}"),
                        g,
                        "a number",
                        "a coupling has to be a number",
                    ));
                }
            }
            let mass2 = pole.mass_gev * pole.mass_gev;
            if poles
                .iter()
                .any(|other| (other.0 - mass2).abs() <= 1e-12 * mass2)
            {
                return Err(Refusal::new(
                    format!("{path}.mass"),
                    pole.mass_gev,
                    "bare poles at different masses",
                    "two bare poles coincide; write them as one, with the squared couplings added, or move one of them",
                ));
            }
            poles.push((mass2, pole.g1_gev, pole.g2_gev));
        }
        if let Some(bad) = model.constant.iter().find(|c| !c.is_finite()) {
            return Err(Refusal::new(
                format!("{path}.constant"),
                bad,
                "numbers",
                "the constant part of K has to be numbers",
            ));
        }
        let scale = model.poles.first().map_or(1.0, |pole| pole.mass_gev);
        let pair = |i: usize| {
            let channel = &model.channels[i];
            let path = format!("{path}.channels[{i}]");
            if model.chew_mandelstam && channel.m1_gev + channel.m2_gev == 0.0 {
                return Err(Refusal::new(
                    path,
                    0.0,
                    "at least one massive particle",
                    "the Chew-Mandelstam function is counted from threshold, which two massless particles do not have; take i rho instead",
                ));
            }
            PairLoop::new(channel.m1_gev, channel.m2_gev, scale, &path)
        };
        let branch = |i: usize| Branch {
            name: model.channels[i].name.clone(),
            threshold_gev: model.channels[i].m1_gev + model.channels[i].m2_gev,
        };
        Ok(Self {
            poles,
            constant: model.constant,
            pairs: [pair(0)?, pair(1)?],
            branches: [branch(0), branch(1)],
            chew_mandelstam: model.chew_mandelstam,
        })
    }

    /// Thresholds of the two channels.
    #[must_use]
    pub fn channels(&self) -> &[Branch; 2] {
        &self.branches
    }

    /// R_ii on a sheet.
    fn r(&self, i: usize, s: Complex64, first: bool) -> Complex64 {
        let pair = &self.pairs[i];
        if self.chew_mandelstam {
            let cm = pair.j_from_threshold(s) / PI;
            return if first {
                cm
            } else {
                cm + Complex64::new(0.0, 2.0) * pair.rho(s)
            };
        }
        // rho with Re > 0 belongs to Im q > 0 on and above the real axis, to Im q < 0 below it.
        let rho = pair.rho(s);
        let rho = if (s.im < 0.0) == first { -rho } else { rho };
        Complex64::new(-rho.im, rho.re)
    }

    /// P K_11, P K_12, P K_22, P det K, P.
    fn polynomials(&self, s: Complex64) -> ([Complex64; 3], Complex64, Complex64) {
        let zero = Complex64::new(0.0, 0.0);
        let [c11, c12, c22] = self.constant;
        let without = |skip: [usize; 2]| {
            let mut product = Complex64::new(1.0, 0.0);
            for (p, pole) in self.poles.iter().enumerate() {
                if !skip.contains(&p) {
                    product *= Complex64::new(pole.0, 0.0) - s;
                }
            }
            product
        };
        let all = without([usize::MAX; 2]);
        let mut k = [all * c11, all * c12, all * c22];
        let mut det = all * (c11 * c22 - c12 * c12);
        for (p, &(_, g1, g2)) in self.poles.iter().enumerate() {
            let rest = without([p, usize::MAX]);
            k[0] += rest * (g1 * g1);
            k[1] += rest * (g1 * g2);
            k[2] += rest * (g2 * g2);
            det += rest * (c22 * g1 * g1 + c11 * g2 * g2 - 2.0 * c12 * g1 * g2);
            let mut pairs = zero;
            for (q, &(_, h1, h2)) in self.poles.iter().enumerate().skip(p + 1) {
                let cross = g1 * h2 - g2 * h1;
                pairs += without([p, q]) * (cross * cross);
            }
            det += pairs;
        }
        (k, det, all)
    }

    /// P det(1 - K R) on a sheet.
    fn denominator(&self, s: Complex64, first: [bool; 2]) -> Complex64 {
        let (k, det, all) = self.polynomials(s);
        let (r1, r2) = (self.r(0, s, first[0]), self.r(1, s, first[1]));
        all - k[0] * r1 - k[2] * r2 + det * r1 * r2
    }

    /// T and rho on the real axis at W (GeV). Unitary to rounding.
    #[must_use]
    pub fn at(&self, w_gev: f64) -> KAmplitudes {
        let s = Complex64::new(w_gev * w_gev, 0.0);
        let (k, det, all) = self.polynomials(s);
        let (r1, r2) = (self.r(0, s, true), self.r(1, s, true));
        let bottom = (all - k[0] * r1 - k[2] * r2 + det * r1 * r2).inv();
        let rho = |i: usize| {
            if w_gev <= self.branches[i].threshold_gev {
                0.0
            } else {
                self.pairs[i].rho(s).re
            }
        };
        KAmplitudes {
            t: [
                (k[0] - r2 * det) * bottom,
                k[1] * bottom,
                (k[2] - r1 * det) * bottom,
            ],
            rho: [rho(0), rho(1)],
        }
    }

    /// Poles of T near each bare pole, nearest sheet first.
    #[must_use]
    pub fn poles(&self) -> Vec<PoleSearch> {
        self.poles
            .iter()
            .map(|&(mass2, g1, g2)| {
                let s = Complex64::new(mass2, 0.0);
                let mass = mass2.sqrt();
                let width = [g1, g2]
                    .iter()
                    .enumerate()
                    .map(|(i, g)| {
                        let open = mass > self.branches[i].threshold_gev;
                        if open {
                            g * g * self.pairs[i].rho(s).re / mass
                        } else {
                            0.0
                        }
                    })
                    .sum();
                search(self, mass, width)
            })
            .collect()
    }
}

impl Continued for PreparedKMatrix {
    fn branches(&self) -> Vec<Branch> {
        self.branches.to_vec()
    }
    fn on_sheet(&self, s: Complex64, first: &[bool]) -> Option<Complex64> {
        let sign = |i: usize| first.get(i).copied().unwrap_or(true);
        Some(self.denominator(s, [sign(0), sign(1)]))
    }
}
