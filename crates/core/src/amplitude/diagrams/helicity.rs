//! Helicity amplitudes of the tree-level reactions and their partial waves.
//!
//! Spinors in the Dirac representation; with momenta in the x-z plane all of them are real, and
//! so is every bilinear: only the propagators are complex. Overall signs per helicity are a
//! convention (v = i gamma^2 u*; particle 2 by the rotated spinor), moduli are not.

use super::{Channel, PreparedDiagrams, Sums};
use crate::amplitude::born::Energy;
use crate::amplitude::hypothesis::Reaction;
use crate::kinematics::break_up_momentum_gev;
use crate::math;
use num_complex::Complex64;

type Spinor = [f64; 4];

/// Helicity signs (+1 or -1) of a two-particle state; 0 for a scalar.
pub type Helicities = (i8, i8);

/// u of a fermion of energy e, mass m, helicity sign `h`, moving along theta (given by its half
/// angle) or opposite to it (`back`).
fn spinor_u(e: f64, m: f64, h: i8, (cos_half, sin_half): (f64, f64), back: bool) -> Spinor {
    let chi = if (h > 0) != back {
        [cos_half, sin_half]
    } else {
        [-sin_half, cos_half]
    };
    let (large, small) = ((e + m).sqrt(), f64::from(h) * (e - m).max(0.0).sqrt());
    [
        large * chi[0],
        large * chi[1],
        small * chi[0],
        small * chi[1],
    ]
}

/// v = i gamma^2 u*.
fn spinor_v(e: f64, m: f64, h: i8, half: (f64, f64), back: bool) -> Spinor {
    let u = spinor_u(e, m, h, half, back);
    [u[3], -u[2], -u[1], u[0]]
}

/// xbar y, or xbar gamma5 y.
fn bilinear(x: &Spinor, y: &Spinor, pseudoscalar: bool) -> f64 {
    let dot = |a: usize, b: usize| x[a] * y[b] + x[a + 1] * y[b + 1];
    if pseudoscalar {
        dot(0, 2) - dot(2, 0)
    } else {
        dot(0, 0) - dot(2, 2)
    }
}

/// xbar (pslash + m) y or xbar gamma5 (pslash + m) gamma5 y = xbar (-pslash + m) y for p = (e, px, 0, pz).
fn sandwich(x: &Spinor, y: &Spinor, p: (f64, f64, f64), m: f64, pseudoscalar: bool) -> f64 {
    let (e, px, pz) = p;
    let sign = if pseudoscalar { -1.0 } else { 1.0 };
    let sigma = |a: f64, b: f64| (pz * a + px * b, px * a - pz * b);
    let (l0, l1) = sigma(y[2], y[3]);
    let (u0, u1) = sigma(y[0], y[1]);
    let slashed = [
        sign * (e * y[0] - l0) + m * y[0],
        sign * (e * y[1] - l1) + m * y[1],
        sign * (u0 - e * y[2]) + m * y[2],
        sign * (u1 - e * y[3]) + m * y[3],
    ];
    bilinear(x, &slashed, false)
}

/// Helicity states of incoming and outgoing pair, in the order used everywhere here.
pub(super) fn states(reaction: Reaction) -> (Vec<Helicities>, Vec<Helicities>) {
    let pair = || vec![(1, 1), (-1, -1), (1, -1), (-1, 1)];
    let one = || vec![(1, 0), (-1, 0)];
    match reaction {
        Reaction::Compton => (one(), one()),
        Reaction::PairToScalars => (pair(), vec![(0, 0)]),
        _ => (pair(), pair()),
    }
}

impl PreparedDiagrams {
    /// M for every pair of helicity states at one angle, initial states by rows.
    pub(super) fn helicity_amplitudes(
        &self,
        at: Energy,
        cos_theta: f64,
        sums: &Sums,
    ) -> Vec<Complex64> {
        let w = at.w_gev();
        let (m, other) = (self.m_gev, self.masses.m4_gev);
        let p_i = break_up_momentum_gev(w, self.masses.m1_gev, self.masses.m2_gev);
        let p_f = break_up_momentum_gev(w, self.masses.m3_gev, self.masses.m4_gev);
        let energy = |p: f64, mass: f64| math::hypot(p, mass);
        let e = [
            energy(p_i, self.masses.m1_gev),
            energy(p_i, self.masses.m2_gev),
            energy(p_f, self.masses.m3_gev),
            energy(p_f, self.masses.m4_gev),
        ];
        let (c2, s2) = (0.5 * (1.0 + cos_theta), 0.5 * (1.0 - cos_theta));
        let turned = (c2.max(0.0).sqrt(), s2.max(0.0).sqrt());
        let sin_theta = 2.0 * turned.0 * turned.1;
        let ahead = (1.0, 0.0);
        let (rows, columns) = states(self.reaction);
        let mut all = Vec::with_capacity(rows.len() * columns.len());
        for &(h1, h2) in &rows {
            for &(h3, h4) in &columns {
                let u1 = spinor_u(e[0], m, h1, ahead, false);
                // (channel, pseudoscalar) -> spinor structure with its Fermi sign.
                let structure = |channel: Channel, ps: bool| match (self.reaction, channel) {
                    (Reaction::PairToOtherPair | Reaction::PairElastic, Channel::S) => {
                        let v2 = spinor_v(e[1], m, h2, ahead, true);
                        let u3 = spinor_u(e[2], self.masses.m3_gev, h3, turned, false);
                        let v4 = spinor_v(e[3], other, h4, turned, true);
                        bilinear(&u3, &v4, ps) * bilinear(&v2, &u1, ps)
                    }
                    (Reaction::PairElastic, _) => {
                        let v2 = spinor_v(e[1], m, h2, ahead, true);
                        let u3 = spinor_u(e[2], m, h3, turned, false);
                        let v4 = spinor_v(e[3], m, h4, turned, true);
                        -bilinear(&u3, &u1, ps) * bilinear(&v2, &v4, ps)
                    }
                    (Reaction::OtherElastic | Reaction::SameElastic, channel) => {
                        let u2 = spinor_u(e[1], self.masses.m2_gev, h2, ahead, true);
                        let u3 = spinor_u(e[2], self.masses.m3_gev, h3, turned, false);
                        let u4 = spinor_u(e[3], other, h4, turned, true);
                        if channel == Channel::T {
                            bilinear(&u3, &u1, ps) * bilinear(&u4, &u2, ps)
                        } else {
                            -bilinear(&u4, &u1, ps) * bilinear(&u3, &u2, ps)
                        }
                    }
                    (Reaction::Compton, channel) => {
                        let u3 = spinor_u(e[2], m, h3, turned, false);
                        let p = if channel == Channel::S {
                            (w, 0.0, 0.0)
                        } else {
                            (e[0] - e[3], p_f * sin_theta, p_i + p_f * cos_theta)
                        };
                        sandwich(&u3, &u1, p, m, ps)
                    }
                    (_, channel) => {
                        let v2 = spinor_v(e[1], m, h2, ahead, true);
                        let sign = if channel == Channel::T { 1.0 } else { -1.0 };
                        let p = (
                            e[0] - e[2],
                            -sign * p_f * sin_theta,
                            p_i - sign * p_f * cos_theta,
                        );
                        sandwich(&v2, &u1, p, m, ps)
                    }
                };
                let mut total = Complex64::new(0.0, 0.0);
                for (row, channel) in sums.iter().zip(self.reaction.channels()) {
                    // Two vertices -i g give -1, two g gamma5 give +1.
                    for (ps, sign, c) in [(false, -1.0, row[0]), (true, 1.0, row[1])] {
                        if c.re != 0.0 || c.im != 0.0 {
                            total += c * (sign * structure(*channel, ps));
                        }
                    }
                }
                all.push(total);
            }
        }
        all
    }
}
