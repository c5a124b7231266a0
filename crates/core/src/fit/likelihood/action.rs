//! How each coordinate of a fit acts on each point.

use super::super::derivatives::pair;
use super::super::nuisance::NuisanceKind;
use super::super::problem::{Coordinate, Problem};

/// How one coordinate acts on one point.
#[derive(Debug, Clone, Default)]
pub(super) struct Action {
    /// (direction of the curve's derivatives, coefficient).
    pub(super) directions: Vec<(usize, f64)>,
    /// Change of ln of the signal factor (log-normal) or of the factor itself (Gaussian).
    pub(super) signal: f64,
    /// The same for the luminosity factor.
    pub(super) luminosity: f64,
    /// 1 for sigma_bg.
    pub(super) background: f64,
    /// 1 for r_bg.
    pub(super) rate: f64,
}

impl Action {
    /// Whether the coordinate does nothing to the point.
    pub(super) fn is_none(&self) -> bool {
        self.directions.is_empty()
            && self.signal == 0.0
            && self.luminosity == 0.0
            && self.background == 0.0
            && self.rate == 0.0
    }
}

/// How each coordinate acts on each point.
pub(super) fn actions(problem: &Problem) -> Vec<Vec<Action>> {
    let n_points = problem.points.len();
    // Directions behind the curve's parameters: the energy, then ln of the spread.
    let k = problem.model.parameters().len();
    problem
        .coordinates
        .iter()
        .map(|c| {
            let mut row = vec![Action::default(); n_points];
            match c.coordinate {
                Coordinate::Curve(i) => {
                    for a in &mut row {
                        a.directions.push((i, 1.0));
                    }
                }
                Coordinate::BackgroundCrossSection(exit) => {
                    for (a, of) in row.iter_mut().zip(problem.exit_of.iter()) {
                        a.background = if *of == exit { 1.0 } else { 0.0 };
                    }
                }
                Coordinate::BackgroundRate(exit) => {
                    for (a, of) in row.iter_mut().zip(problem.exit_of.iter()) {
                        a.rate = if *of == exit { 1.0 } else { 0.0 };
                    }
                }
                Coordinate::Nuisance(i) => {
                    if let Some(n) = problem.nuisances.get(i) {
                        for e in &n.effects {
                            if let Some(a) = row.get_mut(e.point) {
                                match n.kind {
                                    NuisanceKind::Energy => a.directions.push((k, e.size)),
                                    NuisanceKind::Spread => a.directions.push((k + 1, e.size)),
                                    NuisanceKind::SignalScale => a.signal = e.size,
                                    NuisanceKind::Luminosity => a.luminosity = e.size,
                                }
                            }
                        }
                    }
                }
            }
            row
        })
        .collect()
}

/// Sum of the table's columns along directions, at one point.
#[inline]
pub(super) fn along(directions: &[(usize, f64)], table: &[Vec<f64>], p: usize) -> f64 {
    directions.iter().map(|(d, size)| size * table[*d][p]).sum()
}

/// The same for second derivatives.
#[inline]
pub(super) fn along_pairs(
    a: &[(usize, f64)],
    b: &[(usize, f64)],
    table: &[Vec<f64>],
    p: usize,
) -> f64 {
    let mut sum = 0.0;
    for (i, u) in a {
        for (k, v) in b {
            sum += u * v * table[pair(*i, *k)][p];
        }
    }
    sum
}

/// First derivatives of signal and luminosity factor along a coordinate.
#[inline]
pub(super) fn factor_change(a: &Action, fs: f64, fl: f64, gaussian: bool) -> (f64, f64) {
    if gaussian {
        (a.signal, a.luminosity)
    } else {
        (a.signal * fs, a.luminosity * fl)
    }
}
