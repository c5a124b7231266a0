//! Several J at once, with angles: dsigma/dcos = 2 pi/(n_a n_b k^2) sum over helicities of
//! |sum_J (2J+1) T^J H_in H_out d^J_{lambda mu}|^2.
//!
//! Helicity amplitudes do not depend on W, so everything angular becomes one matrix of overlaps
//! per region: int d^J d^J' dcos weighted with the amplitudes. An evaluation costs the T^J.

use super::background::Incoherent;
use super::born::{Born, Energy, Feature};
use super::hypothesis::Waves;
use super::partial_wave::PreparedPartialWave;
use super::selection::{HelicityAmplitude, helicity_amplitudes};
use super::wigner::{MOST_TWICE_J, small_d};
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::kinematics::momentum_squared_gev2;
use crate::math;
use crate::numerics::gauss_legendre::gauss_legendre;
use crate::units::HBARC2_GEV2_NB;
use core::f64::consts::PI;
use num_complex::Complex64;

/// Most waves at once.
pub const MOST_WAVES: usize = 6;

/// Part of the angular range: intervals in cos theta.
#[derive(Debug, Clone, PartialEq)]
pub struct Region {
    intervals: Vec<(f64, f64)>,
}

impl Region {
    /// All angles.
    #[must_use]
    pub fn all() -> Self {
        Self {
            intervals: vec![(-1.0, 1.0)],
        }
    }

    /// `from` < cos theta < `to`.
    ///
    /// # Errors
    /// Edges that are not in order between -1 and 1.
    pub fn cos(from: f64, to: f64) -> Answer<Self> {
        if !(-1.0 <= from && from < to && to <= 1.0) {
            return Err(Refusal::new(
                "angle_bins",
                format!("{from}, {to}"),
                "rising edges between -1 and 1",
                "the edges of an angular bin have to rise between -1 and 1",
            ));
        }
        Ok(Self {
            intervals: vec![(from, to)],
        })
    }

    /// `from` < |cos theta| < `to`.
    ///
    /// # Errors
    /// Edges that are not in order between 0 and 1.
    pub fn abs_cos(from: f64, to: f64) -> Answer<Self> {
        if !(0.0 <= from && from < to && to <= 1.0) {
            return Err(Refusal::new(
                "angle_bins",
                format!("{from}, {to}"),
                "rising edges between 0 and 1",
                "the edges of a bin in |cos theta| have to rise between 0 and 1",
            ));
        }
        if from == 0.0 {
            return Self::cos(-to, to);
        }
        Ok(Self {
            intervals: vec![(-to, -from), (from, to)],
        })
    }

    /// The intervals in cos theta.
    #[must_use]
    pub fn intervals(&self) -> &[(f64, f64)] {
        &self.intervals
    }

    /// Share of 4 pi.
    #[must_use]
    pub fn fraction(&self) -> f64 {
        self.intervals.iter().map(|(a, b)| 0.5 * (b - a)).sum()
    }
}

/// Prepared waves in one region.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedWaves {
    waves: Vec<OneWave>,
    /// Overlap of waves i and j with (2J+1)(2J'+1), row by row.
    overlaps: Vec<Complex64>,
    incoherent: Incoherent,
    fraction: f64,
    names: Vec<String>,
    m1_gev: f64,
    m2_gev: f64,
    threshold_gev: f64,
    /// 2 pi (hbar c)^2/(n_a n_b), nb GeV^2.
    flux_nb_gev2: f64,
}

#[derive(Debug, Clone, PartialEq)]
struct OneWave {
    t: PreparedPartialWave,
    phase: Complex64,
    twice_j: u8,
    entrance: Vec<HelicityAmplitude>,
    exit: Vec<HelicityAmplitude>,
}

impl PreparedWaves {
    /// Checks the waves and integrates the angles over the region.
    ///
    /// # Errors
    /// What the partial waves and couplings refuse; no or too many waves; a background outside
    /// the first wave; a first wave with a phase; J above 10.
    pub fn new(model: &Waves, beams: &Beams, region: &Region) -> Answer<Self> {
        if model.waves.is_empty() || model.waves.len() > MOST_WAVES {
            return Err(Refusal::new(
                "model.waves",
                model.waves.len(),
                format!("1 to {MOST_WAVES}"),
                "there has to be at least one partial wave, and not more than six",
            ));
        }
        let mut waves = Vec::new();
        let mut first = 0;
        for (i, wave) in model.waves.iter().enumerate() {
            let path = format!("model.waves[{i}]");
            if wave.wave.twice_j > MOST_TWICE_J {
                return Err(Refusal::new(
                    format!("{path}.j"),
                    f64::from(wave.wave.twice_j) / 2.0,
                    "J up to 10",
                    "d-functions are computed up to J = 10",
                ));
            }
            if wave.wave.incoherent.is_some() {
                return Err(Refusal::new(
                    format!("{path}.incoherent"),
                    "given",
                    "an incoherent background beside the waves",
                    "the incoherent background belongs to all waves together and is given once",
                ));
            }
            if !wave.phase_rad.is_finite() || (i == 0 && wave.phase_rad != 0.0) {
                return Err(Refusal::new(
                    format!("{path}.phase"),
                    wave.phase_rad,
                    "a number, 0 for the first wave",
                    "phases between waves are counted from the first",
                ));
            }
            waves.push(OneWave {
                t: PreparedPartialWave::numbered(&wave.wave, beams, first, &format!("{path}.j"))?,
                phase: math::polar(1.0, wave.phase_rad),
                twice_j: wave.wave.twice_j,
                entrance: helicity_amplitudes(
                    &wave.entrance,
                    wave.wave.twice_j,
                    &format!("{path}.entrance"),
                )?,
                exit: helicity_amplitudes(&wave.exit, wave.wave.twice_j, &format!("{path}.exit"))?,
            });
            first += wave.wave.resonances.len();
        }
        let mut overlaps = Vec::new();
        for a in &waves {
            for b in &waves {
                overlaps.push(overlap(a, b, region));
            }
        }
        let threshold_gev = waves
            .iter()
            .map(|wave| wave.t.threshold_gev())
            .fold(0.0, f64::max);
        let states = f64::from(beams.first.spin_states) * f64::from(beams.second.spin_states);
        Ok(Self {
            names: names(model),
            waves,
            overlaps,
            incoherent: Incoherent::new(model.incoherent.as_ref(), "model")?,
            fraction: region.fraction(),
            m1_gev: beams.first.mass_gev,
            m2_gev: beams.second.mass_gev,
            threshold_gev,
            flux_nb_gev2: 2.0 * PI * HBARC2_GEV2_NB / states,
        })
    }

    /// Acceptance of the region for wave i alone: its share of the wave's cross section.
    #[must_use]
    pub fn acceptance(&self, i: usize) -> Option<f64> {
        let wave = self.waves.get(i)?;
        let overlap = self.overlaps.get(i * self.waves.len() + i)?;
        Some(overlap.re / (2.0 * (f64::from(wave.twice_j) + 1.0)))
    }

    /// dsigma/dcos in nb at one angle, incoherent background taken as isotropic.
    #[must_use]
    pub fn dsigma_dcos_nb(&self, at: Energy, cos_theta: f64) -> f64 {
        let Some((scale, t)) = self.amplitudes(at) else {
            return 0.0;
        };
        let mut total = 0.0;
        for (i, a) in self.waves.iter().enumerate() {
            for (j, b) in self.waves.iter().enumerate() {
                let (Some(ta), Some(tb)) = (t.get(i), t.get(j)) else {
                    continue;
                };
                total += (ta * tb.conj() * at_angle(a, b, cos_theta)).re;
            }
        }
        scale * total + 0.5 * self.incoherent.sigma_nb(at)
    }

    /// [`PreparedWaves::dsigma_dcos_nb`] over a grid, row by row in W (GeV): the angles do not
    /// depend on W, so their d-functions are worked out once.
    #[must_use]
    pub fn dsigma_dcos_grid_nb(&self, w_gev: &[f64], cos_theta: &[f64]) -> Vec<f64> {
        let n = self.waves.len();
        let mut angles = Vec::with_capacity(cos_theta.len() * n * n);
        for cos in cos_theta {
            for a in &self.waves {
                for b in &self.waves {
                    angles.push(at_angle(a, b, *cos));
                }
            }
        }
        let mut out = Vec::with_capacity(w_gev.len() * cos_theta.len());
        for w in w_gev {
            let at = Energy::at(*w);
            let Some((scale, t)) = self.amplitudes(at) else {
                out.extend(cos_theta.iter().map(|_| 0.0));
                continue;
            };
            let mut products = Vec::with_capacity(n * n);
            for a in t.iter().take(n) {
                for b in t.iter().take(n) {
                    products.push(a * b.conj() * scale);
                }
            }
            let isotropic = 0.5 * self.incoherent.sigma_nb(at);
            for matrix in angles.chunks(n * n) {
                let sum: f64 = products
                    .iter()
                    .zip(matrix)
                    .map(|(t, d)| t.re * d.re - t.im * d.im)
                    .sum();
                out.push(sum + isotropic);
            }
        }
        out
    }

    /// (flux/k^2, T^J e^{i phase}); `None` below threshold.
    fn amplitudes(&self, at: Energy) -> Option<(f64, [Complex64; MOST_WAVES])> {
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return None;
        }
        let above = at.above_gev(self.m1_gev + self.m2_gev);
        let k2 = momentum_squared_gev2(at.w_gev(), above, self.m1_gev, self.m2_gev);
        let mut t = [Complex64::new(0.0, 0.0); MOST_WAVES];
        for (slot, wave) in t.iter_mut().zip(&self.waves) {
            *slot = wave.t.amplitude(at) * wave.phase;
        }
        Some((self.flux_nb_gev2 / k2, t))
    }
}

impl Born for PreparedWaves {
    fn threshold_gev(&self) -> f64 {
        self.threshold_gev
    }
    fn upper_limit_gev(&self) -> f64 {
        self.waves
            .iter()
            .map(|wave| wave.t.upper_limit_gev())
            .fold(f64::INFINITY, f64::min)
    }
    fn features(&self) -> Vec<Feature> {
        self.waves
            .iter()
            .flat_map(|wave| wave.t.features())
            .collect()
    }
    fn contribution_names(&self) -> Vec<String> {
        self.names.clone()
    }
    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        out.fill(0.0);
        let Some((scale, t)) = self.amplitudes(at) else {
            return;
        };
        let n = self.waves.len();
        let part = |i: usize, j: usize| match (t.get(i), t.get(j), self.overlaps.get(i * n + j)) {
            (Some(a), Some(b), Some(overlap)) => scale * (a * b.conj() * overlap).re,
            _ => 0.0,
        };
        let mut slots = out.iter_mut();
        for i in 0..n {
            if let Some(slot) = slots.next() {
                *slot = part(i, i);
            }
        }
        for i in 0..n {
            for j in i + 1..n {
                if let Some(slot) = slots.next() {
                    *slot = part(i, j) + part(j, i);
                }
            }
        }
        if let Some(slot) = slots.next() {
            *slot = self.fraction * self.incoherent.sigma_nb(at);
        }
    }
    fn sigma_nb(&self, at: Energy) -> f64 {
        let Some((scale, t)) = self.amplitudes(at) else {
            return 0.0;
        };
        let n = self.waves.len();
        let mut total = 0.0;
        for (k, overlap) in self.overlaps.iter().enumerate() {
            if let (Some(a), Some(b)) = (t.get(k / n), t.get(k % n)) {
                total += (a * b.conj() * overlap).re;
            }
        }
        scale * total + self.fraction * self.incoherent.sigma_nb(at)
    }
    fn warnings(&self) -> Vec<crate::error::Warning> {
        self.waves
            .iter()
            .flat_map(|wave| wave.t.warnings())
            .collect()
    }
}

/// (2J+1)(2J'+1) sum over common helicities of H_in H_out (H_in' H_out')* d^J d^J' at one angle.
fn at_angle(a: &OneWave, b: &OneWave, cos: f64) -> Complex64 {
    let mut sum = Complex64::new(0.0, 0.0);
    let same = |x: &HelicityAmplitude, y: &HelicityAmplitude| {
        x.twice_l1 == y.twice_l1 && x.twice_l2 == y.twice_l2
    };
    for a_in in &a.entrance {
        let Some(b_in) = b.entrance.iter().find(|other| same(a_in, other)) else {
            continue;
        };
        for a_out in &a.exit {
            let Some(b_out) = b.exit.iter().find(|other| same(a_out, other)) else {
                continue;
            };
            let (lambda, mu) = (
                a_in.twice_l1 - a_in.twice_l2,
                a_out.twice_l1 - a_out.twice_l2,
            );
            let d = small_d(a.twice_j, lambda, mu, cos) * small_d(b.twice_j, lambda, mu, cos);
            sum += a_in.value * a_out.value * (b_in.value * b_out.value).conj() * d;
        }
    }
    sum * ((f64::from(a.twice_j) + 1.0) * (f64::from(b.twice_j) + 1.0))
}

/// [`at_angle`] integrated over a region: polynomials of degree 2J + 2J' at most, exact.
fn overlap(a: &OneWave, b: &OneWave, region: &Region) -> Complex64 {
    let order = (usize::from(a.twice_j) + usize::from(b.twice_j)) / 2 + 2;
    let rule = gauss_legendre(order);
    let mut sum = Complex64::new(0.0, 0.0);
    for (from, to) in region.intervals() {
        let (middle, half) = (0.5 * (from + to), 0.5 * (to - from));
        for (x, weight) in &rule {
            sum += at_angle(a, b, middle + half * x) * (half * weight);
        }
    }
    sum
}

fn names(model: &Waves) -> Vec<String> {
    let alone: Vec<String> = model
        .waves
        .iter()
        .map(|wave| {
            let j = wave.wave.twice_j;
            let of = wave
                .wave
                .resonances
                .first()
                .map_or("", |resonance| resonance.name.as_str());
            if j % 2 == 0 {
                format!("J = {} {of}", j / 2)
            } else {
                format!("J = {j}/2 {of}")
            }
        })
        .collect();
    let mut all = alone.clone();
    for (i, a) in alone.iter().enumerate() {
        for b in alone.iter().skip(i + 1) {
            all.push(format!("interference {a} \u{d7} {b}"));
        }
    }
    if model.incoherent.is_some() {
        all.push("incoherent background".into());
    }
    all
}
