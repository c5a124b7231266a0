//! Tree-level Yukawa reactions: |M|^2 by diagram and by interference.
//!
//! A diagram is a channel (s, t or u) with one mediator: its amplitude is c times a spinor
//! structure, c = g g'/(1/Delta). Spin-averaged sums of products of two structures are the
//! closed polynomials of `structures`; everything else is sums of c. Fermion-number signs and
//! the products between scalar and pseudoscalar mediators in different channels are in them.

#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
mod helicity;
mod prepare;
mod structures;
pub mod total;
pub mod waves;

pub use helicity::Helicities;

use super::background::Incoherent;
use super::born::Energy;
use super::hypothesis::{Diagrams, Reaction};
use crate::beam::Beams;
use crate::error::{Answer, Refusal, Warning};
use crate::kinematics::{FourMasses, break_up_momentum_gev};
use crate::propagator::Propagator;
use crate::units::HBARC2_GEV2_NB;
use core::f64::consts::PI;
use num_complex::Complex64;

/// Most mediators at once.
pub const MOST_MEDIATORS: usize = 4;

/// Channel of a diagram.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Channel {
    /// (p1 + p2)^2.
    S,
    /// (p1 - p3)^2.
    T,
    /// (p1 - p4)^2.
    U,
}

impl Channel {
    fn name(self) -> &'static str {
        match self {
            Self::S => "s",
            Self::T => "t",
            Self::U => "u",
        }
    }
}

impl Reaction {
    /// The channels in which it goes, in the order of the contributions.
    #[must_use]
    pub fn channels(self) -> &'static [Channel] {
        match self {
            Self::PairToOtherPair => &[Channel::S],
            Self::OtherElastic => &[Channel::T],
            Self::PairElastic => &[Channel::S, Channel::T],
            Self::SameElastic | Self::PairToScalars => &[Channel::T, Channel::U],
            Self::Compton => &[Channel::S, Channel::U],
        }
    }

    /// 1/2 for two identical particles in the final state, else 1: belongs to totals only.
    #[must_use]
    pub fn identical_factor(self) -> f64 {
        match self {
            Self::SameElastic | Self::PairToScalars => 0.5,
            _ => 1.0,
        }
    }

    /// True if the mediator is the external scalar and the fermion is exchanged.
    #[must_use]
    pub fn exchanges_fermion(self) -> bool {
        matches!(self, Self::Compton | Self::PairToScalars)
    }

    /// True if a second fermion F takes part.
    #[must_use]
    pub fn has_other_fermion(self) -> bool {
        matches!(self, Self::PairToOtherPair | Self::OtherElastic)
    }
}

#[derive(Debug, Clone, PartialEq)]
struct PreparedMediator {
    pseudoscalar: bool,
    /// Product of the two couplings of a diagram.
    couplings: f64,
    propagator: Propagator,
}

/// Mandelstam variables of one point, GeV^2.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stu {
    /// s.
    pub s: f64,
    /// t.
    pub t: f64,
    /// u.
    pub u: f64,
}

/// Sums of c over the mediators of one parity, per channel of the reaction.
pub(crate) type Sums = [[Complex64; 2]; 2];

/// A prepared reaction.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedDiagrams {
    pub(crate) reaction: Reaction,
    /// f.
    pub(crate) m_gev: f64,
    /// F.
    pub(crate) other_gev: f64,
    /// External masses.
    pub(crate) masses: FourMasses,
    mediators: Vec<PreparedMediator>,
    diagrams: Vec<(Channel, usize)>,
    names: Vec<String>,
    pub(crate) incoherent: Incoherent,
    warnings: Vec<Warning>,
}

impl PreparedDiagrams {
    /// Checks the reaction against the beams.
    ///
    /// # Errors
    /// Beams that are not those of the reaction; no or too many mediators; a mediator that the
    /// s channel reaches on shell without a width; an unstable external scalar.
    pub fn new(model: &Diagrams, beams: &Beams) -> Answer<Self> {
        use super::born::Checked;
        beams.check("beam")?;
        let path = "model";
        let reaction = model.reaction;
        let most = if reaction.exchanges_fermion() {
            1
        } else {
            MOST_MEDIATORS
        };
        if model.mediators.is_empty() || model.mediators.len() > most {
            return Err(Refusal::new(
                format!("{path}.diagrams.mediators"),
                model.mediators.len(),
                format!("1 to {most}"),
                if most == 1 {
                    "this reaction has exactly one scalar, the external one"
                } else {
                    "a reaction needs a mediator, and at most four at once"
                },
            ));
        }
        let m = beams.first.mass_gev;
        let phi = model
            .mediators
            .first()
            .map_or(0.0, |mediator| mediator.mass_gev);
        let masses = prepare::check_beams(model, beams, phi)?;
        if reaction == Reaction::Compton && phi >= 2.0 * m {
            return Err(Refusal::new(
                format!("{path}.diagrams.mediators[0].mass"),
                phi,
                format!("below 2 m = {} GeV", 2.0 * m),
                "a scalar that can decay into its own fermion pair is no asymptotic state and cannot be a beam",
            ));
        }
        let mediators = model
            .mediators
            .iter()
            .enumerate()
            .map(|(i, mediator)| {
                prepare::mediator(
                    model,
                    mediator,
                    m,
                    masses,
                    &format!("{path}.diagrams.mediators[{i}]"),
                )
            })
            .collect::<Answer<Vec<_>>>()?;
        let mut diagrams = Vec::new();
        for channel in reaction.channels() {
            for i in 0..mediators.len() {
                diagrams.push((*channel, i));
            }
        }
        let mut warnings: Vec<Warning> = Vec::new();
        if !reaction.exchanges_fermion() {
            for mediator in &mediators {
                warnings.extend(mediator.propagator.warnings());
            }
        }
        Ok(Self {
            reaction,
            m_gev: m,
            other_gev: if reaction.has_other_fermion() {
                model.other_mass_gev
            } else {
                m
            },
            masses,
            names: prepare::names(model, &diagrams),
            mediators,
            diagrams,
            incoherent: Incoherent::new(model.incoherent.as_ref(), path)?,
            warnings,
        })
    }

    /// Names of the diagrams, then of each pair's interference.
    #[must_use]
    pub fn names(&self) -> &[String] {
        &self.names
    }

    pub(crate) fn warnings(&self) -> Vec<Warning> {
        self.warnings.clone()
    }

    /// True if a t or u channel is involved.
    #[must_use]
    pub fn has_exchange(&self) -> bool {
        self.reaction.channels() != [Channel::S]
    }

    /// Propagators of the mediators, in their order.
    pub fn mediator_propagators(&self) -> impl Iterator<Item = &Propagator> {
        self.mediators.iter().map(|mediator| &mediator.propagator)
    }

    /// True if a mediator appears in the s channel.
    pub(crate) fn has_s_mediator(&self) -> bool {
        !self.reaction.exchanges_fermion() && self.reaction.channels().contains(&Channel::S)
    }

    /// s, t, u at an energy above threshold.
    #[must_use]
    pub fn stu(&self, w_gev: f64, cos_theta: f64) -> Stu {
        let (t, u) = self.masses.t_u_gev2(w_gev, cos_theta);
        Stu {
            s: w_gev * w_gev,
            t,
            u,
        }
    }

    /// The pre-factor of dsigma/dcos = pre-factor |M|^2: (hbar c)^2 p_f/(32 pi s p_i) in nb per
    /// unit |M|^2 - phase space and flux, without any propagator; 0 below threshold.
    #[must_use]
    pub fn prefactor_nb(&self, w_gev: f64) -> f64 {
        if w_gev <= self.masses.threshold_gev() {
            return 0.0;
        }
        let p_i = break_up_momentum_gev(w_gev, self.masses.m1_gev, self.masses.m2_gev);
        let p_f = break_up_momentum_gev(w_gev, self.masses.m3_gev, self.masses.m4_gev);
        HBARC2_GEV2_NB * p_f / (32.0 * PI * w_gev * w_gev * p_i)
    }

    /// c of one diagram.
    #[inline]
    fn c(&self, diagram: (Channel, usize), at: Energy, x: &Stu) -> Complex64 {
        let Some(mediator) = self.mediators.get(diagram.1) else {
            return Complex64::new(0.0, 0.0);
        };
        if self.reaction.exchanges_fermion() {
            let p2 = match diagram.0 {
                Channel::S => x.s,
                Channel::T => x.t,
                Channel::U => x.u,
            };
            return Complex64::new(mediator.couplings / (p2 - self.m_gev * self.m_gev), 0.0);
        }
        match diagram.0 {
            Channel::S => mediator.propagator.inverse_gev2(at).inv() * mediator.couplings,
            Channel::T => self.space_like(mediator, x.t),
            Channel::U => self.space_like(mediator, x.u),
        }
    }

    #[inline]
    fn space_like(&self, mediator: &PreparedMediator, t: f64) -> Complex64 {
        Complex64::new(
            mediator.couplings / mediator.propagator.inverse_space_like_gev2(t),
            0.0,
        )
    }

    /// Sums of c by channel and parity ([channel][scalar, pseudoscalar]); `s_part` from
    /// [`PreparedDiagrams::s_sums`] saves the s channel at fixed W.
    #[inline]
    pub(crate) fn sums(&self, at: Energy, x: &Stu, s_part: Option<[Complex64; 2]>) -> Sums {
        let mut sums = [[Complex64::new(0.0, 0.0); 2]; 2];
        for (slot, channel) in sums.iter_mut().zip(self.reaction.channels()) {
            if let (Channel::S, Some(known)) = (channel, s_part) {
                *slot = known;
                continue;
            }
            for (i, mediator) in self.mediators.iter().enumerate() {
                let c = self.c((*channel, i), at, x);
                if mediator.pseudoscalar {
                    slot[1] += c;
                } else {
                    slot[0] += c;
                }
            }
        }
        sums
    }

    /// The s-channel part of [`PreparedDiagrams::sums`], which does not depend on the angle.
    #[inline]
    pub(crate) fn s_sums(&self, at: Energy) -> Option<[Complex64; 2]> {
        if !self.reaction.channels().contains(&Channel::S) {
            return None;
        }
        let w = at.w_gev();
        let x = Stu {
            s: w * w,
            t: 0.0,
            u: 0.0,
        };
        self.sums(at, &x, None).first().copied()
    }

    #[inline]
    fn structure(&self, a: (usize, bool), b: (usize, bool), x: &Stu) -> f64 {
        structures::structure(
            self.reaction,
            a,
            b,
            x,
            self.m_gev,
            self.other_gev,
            self.masses,
        )
    }

    /// |M|^2 from sums.
    #[inline]
    pub(crate) fn m2_of(&self, sums: &Sums, x: &Stu) -> f64 {
        let channels = self.reaction.channels().len();
        let mut total = 0.0;
        for (i, row) in sums.iter().enumerate().take(channels) {
            for (parity, c) in [(false, row[0]), (true, row[1])] {
                let norm = c.norm_sqr();
                if norm != 0.0 {
                    total += norm * self.structure((i, parity), (i, parity), x);
                }
            }
        }
        if channels == 2 {
            for (p, a) in [(false, sums[0][0]), (true, sums[0][1])] {
                for (q, b) in [(false, sums[1][0]), (true, sums[1][1])] {
                    let product = a.re * b.re + a.im * b.im;
                    if product != 0.0 {
                        total += product * self.structure((0, p), (1, q), x);
                    }
                }
            }
        }
        total
    }

    /// Spin-averaged |M|^2 (dimensionless) at an energy and angle; 0 below threshold.
    #[must_use]
    pub fn m2(&self, at: Energy, cos_theta: f64) -> f64 {
        if at.above_gev(self.masses.threshold_gev()) <= 0.0 {
            return 0.0;
        }
        let x = self.stu(at.w_gev(), cos_theta);
        self.m2_of(&self.sums(at, &x, None), &x)
    }

    /// |M|^2 by diagram and by interference, in the order of [`PreparedDiagrams::names`].
    pub fn m2_parts(&self, at: Energy, cos_theta: f64, out: &mut [f64]) {
        out.fill(0.0);
        if at.above_gev(self.masses.threshold_gev()) <= 0.0 {
            return;
        }
        let x = self.stu(at.w_gev(), cos_theta);
        let mut slots = out.iter_mut();
        for pair in self.pairs() {
            if let Some(slot) = slots.next() {
                *slot = self.part(pair, at, &x);
            }
        }
    }

    /// Pairs of diagrams in the order of the names: each with itself first.
    fn pairs(&self) -> impl Iterator<Item = (usize, usize)> + '_ {
        let n = self.diagrams.len();
        (0..n)
            .map(|i| (i, i))
            .chain((0..n).flat_map(move |i| (i + 1..n).map(move |j| (i, j))))
    }

    fn part(&self, (i, j): (usize, usize), at: Energy, x: &Stu) -> f64 {
        let (Some(&a), Some(&b)) = (self.diagrams.get(i), self.diagrams.get(j)) else {
            return 0.0;
        };
        let parity = |n: usize| self.mediators.get(n).is_some_and(|m| m.pseudoscalar);
        let index = |channel: Channel| {
            self.reaction
                .channels()
                .iter()
                .position(|c| *c == channel)
                .unwrap_or(0)
        };
        let (ia, ib) = ((index(a.0), parity(a.1)), (index(b.0), parity(b.1)));
        let (ca, cb) = (self.c(a, at, x), self.c(b, at, x));
        let product = ca.re * cb.re + ca.im * cb.im;
        // Two mediators of one channel interfere with twice the square of its structure.
        let twice = if i != j && ia.0 == ib.0 { 2.0 } else { 1.0 };
        let same_channel_other_parity = ia.0 == ib.0 && ia.1 != ib.1;
        if same_channel_other_parity {
            0.0
        } else {
            twice * product * self.structure(ia, ib, x)
        }
    }

    /// dsigma/dcos in nb, without the identical-particle factor.
    #[must_use]
    pub fn dsigma_dcos_nb(&self, at: Energy, cos_theta: f64) -> f64 {
        self.prefactor_nb(at.w_gev()) * self.m2(at, cos_theta)
    }

    /// |M|^2 over a grid, row by row in W (GeV): the image over the (W, cos theta) plane.
    #[must_use]
    pub fn m2_grid(&self, w_gev: &[f64], cos_theta: &[f64]) -> Vec<f64> {
        let mut out = Vec::with_capacity(w_gev.len() * cos_theta.len());
        for &w in w_gev {
            let at = Energy::at(w);
            if w <= self.masses.threshold_gev() {
                out.extend(cos_theta.iter().map(|_| 0.0));
                continue;
            }
            let s_part = self.s_sums(at);
            // t and u are linear in cos theta at fixed W.
            let (middle, forward) = (self.stu(w, 0.0), self.stu(w, 1.0));
            for &cos in cos_theta {
                let x = Stu {
                    s: middle.s,
                    t: middle.t + cos * (forward.t - middle.t),
                    u: middle.u + cos * (forward.u - middle.u),
                };
                out.push(self.m2_of(&self.sums(at, &x, s_part), &x));
            }
        }
        out
    }

    /// Contributions at fixed W and angle weight: adds weight |M|^2 parts into `out`.
    pub(crate) fn add_parts(&self, at: Energy, x: &Stu, weight: f64, out: &mut [f64]) {
        for (slot, pair) in out.iter_mut().zip(self.pairs()) {
            *slot += weight * self.part(pair, at, x);
        }
    }

    /// Nearest cos theta beyond +1 and below -1 where a denominator in t or u vanishes.
    pub(crate) fn angular_poles(&self, w_gev: f64) -> (f64, f64) {
        let (middle, forward) = (self.stu(w_gev, 0.0), self.stu(w_gev, 1.0));
        let (mut right, mut left) = (f64::INFINITY, f64::NEG_INFINITY);
        let mut include = |mass2: f64, at_zero: f64, slope: f64| {
            // at_zero + cos slope = mass2.
            let cos = (mass2 - at_zero) / slope;
            if cos >= 1.0 {
                right = right.min(cos);
            } else if cos <= -1.0 {
                left = left.max(cos);
            }
        };
        for channel in self.reaction.channels() {
            let (zero, slope) = match channel {
                Channel::S => continue,
                Channel::T => (middle.t, forward.t - middle.t),
                Channel::U => (middle.u, forward.u - middle.u),
            };
            if slope == 0.0 {
                continue;
            }
            if self.reaction.exchanges_fermion() {
                include(self.m_gev * self.m_gev, zero, slope);
            } else {
                for mediator in &self.mediators {
                    let mass = mediator.propagator.mass_gev();
                    include(mass * mass, zero, slope);
                }
            }
        }
        (right, left)
    }
}
