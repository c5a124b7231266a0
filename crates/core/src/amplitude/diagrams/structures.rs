//! Spin-averaged products of spinor structures: the closed forms of the tree-level reactions.
//! (PDG conventions; each is rebuilt from explicit spinors in the tests.)

use super::Stu;
use crate::amplitude::hypothesis::Reaction;
use crate::kinematics::FourMasses;

/// Spin-averaged product of two spinor structures (index of the channel, pseudoscalar?), with
/// the factor 2 of an interference included when they differ. Units GeV^4 (GeV^2 for exchanged
/// fermions: there the numerators carry one power less).
#[inline]
pub(super) fn structure(
    reaction: Reaction,
    a: (usize, bool),
    b: (usize, bool),
    x: &Stu,
    m: f64,
    other: f64,
    masses: FourMasses,
) -> f64 {
    let Stu { s, t, u } = *x;
    let four_m2 = 4.0 * m * m;
    match reaction {
        Reaction::PairToOtherPair => {
            if a.1 {
                s * s
            } else {
                (s - four_m2) * (s - 4.0 * other * other)
            }
        }
        Reaction::OtherElastic => {
            if a.1 {
                t * t
            } else {
                (four_m2 - t) * (4.0 * other * other - t)
            }
        }
        Reaction::PairElastic => elastic(a, b, s, t, u, four_m2),
        Reaction::SameElastic => elastic(a, b, t, u, s, four_m2),
        Reaction::Compton => {
            let phi2 = masses.m2_gev * masses.m2_gev;
            let sum = m * m + phi2;
            let f = sum * sum - m * m * t - s * u;
            fermion_exchange(a, b, f, four_m2 * (s - u), four_m2 * (four_m2 - t))
        }
        Reaction::PairToScalars => {
            let phi2 = masses.m3_gev * masses.m3_gev;
            let sum = m * m + phi2;
            let f = t * u + m * m * s - sum * sum;
            0.5 * fermion_exchange(a, b, f, -four_m2 * (t - u), four_m2 * (s - four_m2))
        }
    }
}

/// f fbar -> f fbar in the variables of its two channels x and y (third: z); f f -> f f by crossing.
#[inline]
fn elastic(a: (usize, bool), b: (usize, bool), x: f64, y: f64, z: f64, four_m2: f64) -> f64 {
    let own = |variable: f64, pseudoscalar: bool| {
        let base = if pseudoscalar {
            variable
        } else {
            variable - four_m2
        };
        base * base
    };
    match (a, b) {
        ((0, p), (0, _)) => own(x, p),
        ((1, p), (1, _)) => own(y, p),
        ((_, false), (_, false)) => x * y - four_m2 * z,
        ((_, true), (_, true)) => x * y,
        ((_, false), (_, true)) => -(x - four_m2) * y,
        ((_, true), (_, false)) => -x * (y - four_m2),
    }
}

/// A^2 f + A B g + B^2 h with A, B = c_0 -+ c_1 (g = h = 0 for a pseudoscalar), by pair.
#[inline]
fn fermion_exchange(a: (usize, bool), b: (usize, bool), f: f64, g: f64, h: f64) -> f64 {
    let (g, h) = if a.1 { (0.0, 0.0) } else { (g, h) };
    match (a.0, b.0) {
        (0, 0) => f + g + h,
        (1, 1) => f - g + h,
        _ => 2.0 * (h - f),
    }
}
