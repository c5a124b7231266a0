//! Where a curve is computed: at the energies themselves where they are few, else at the nodes
//! of panels on which it is a polynomial to the accuracy asked for.

use super::engine::NOTHING;
use super::skeleton::Observed;
use super::source::{BornSource, Source};
use crate::numerics::quadrature::{NODES, Rule, chebyshev_sum};
use core::ops::Range;

/// Neighbouring energies, computed one by one or through a panel.
#[derive(Debug, Clone)]
struct Piece {
    low: f64,
    size: f64,
    /// Which of the energies asked for.
    members: Range<usize>,
    /// One by one: there are so few that a panel does not pay.
    direct: bool,
}

impl Piece {
    fn new(low: f64, size: f64, members: Range<usize>) -> Self {
        let direct = members.len() <= NODES;
        Self {
            low,
            size,
            members,
            direct,
        }
    }

    fn halves(&self, energies: &[f64]) -> [Self; 2] {
        let half = 0.5 * self.size;
        let middle = self.low + half;
        let Range { start, end } = self.members;
        let split = energies.partition_point(|&w| w < middle).clamp(start, end);
        [
            Self::new(self.low, half, start..split),
            Self::new(middle, half, split..end),
        ]
    }

    /// How many energies it is computed at.
    fn count(&self) -> usize {
        if self.direct {
            self.members.len()
        } else {
            NODES
        }
    }
}

/// The energies at which a curve is needed.
pub(super) struct Targets {
    /// In rising order.
    pieces: Vec<Piece>,
    energies: Vec<f64>,
    rounds: u32,
}

/// Below this many energies panels do not pay.
const FEW: usize = 48;
/// How often panels are halved before their energies are computed one by one.
const ROUNDS: u32 = 8;

impl Targets {
    /// `sigma_gev`: the smallest spread of the curve, 0 if it is not spread.
    pub fn new(rule: &Rule, energies: &[f64], sigma_gev: f64, source: &BornSource<'_>) -> Self {
        let mut out = Self {
            pieces: Vec::new(),
            energies: Vec::new(),
            rounds: 0,
        };
        if let (Some(&low), Some(&high)) = (energies.first(), energies.last()) {
            let mut all = Piece::new(low, high - low, 0..energies.len());
            all.direct = energies.len() < FEW;
            out.divide(all, energies, sigma_gev, source);
        }
        out.lay(rule, energies);
        out
    }

    /// Halves until the curve should be smooth on a panel.
    fn divide(&mut self, piece: Piece, energies: &[f64], sigma: f64, source: &BornSource<'_>) {
        let (low, size) = (piece.low, piece.size);
        let distance = |w: f64| (low - w).max(w - (low + size)).max(0.0) - 6.0 * sigma;
        let mut limit = f64::INFINITY;
        for &(peak, width) in source.peaks() {
            limit = limit.min((2.0 * distance(peak)).max(0.8 * width).max(2.5 * sigma));
        }
        for &edge in source.breaks() {
            limit = limit.min((2.0 * distance(edge)).max(2.5 * sigma));
        }
        if piece.direct || size <= limit {
            self.pieces.push(piece);
        } else {
            for half in piece.halves(energies) {
                self.divide(half, energies, sigma, source);
            }
        }
    }

    fn lay(&mut self, rule: &Rule, energies: &[f64]) {
        self.energies.clear();
        for piece in &self.pieces {
            if piece.direct {
                let own = energies.get(piece.members.clone()).unwrap_or_default();
                self.energies.extend(own);
            } else {
                let nodes = rule.nodes.iter().map(|u| piece.low + piece.size * u);
                self.energies.extend(nodes);
            }
        }
    }

    pub fn energies(&self) -> &[f64] {
        &self.energies
    }

    /// Interpolates to the energies; `None`: panels were halved, compute again.
    pub fn finish(
        &mut self,
        rule: &Rule,
        energies: &[f64],
        observed: Observed,
        tolerance: f64,
    ) -> Option<Observed> {
        if self.pieces.iter().all(|piece| piece.direct) {
            return Some(observed);
        }
        let mut next = Vec::new();
        let mut missed = Vec::new();
        let (mut start, mut again) = (0, false);
        for piece in &self.pieces {
            let nodes = start..start + piece.count();
            start = nodes.end;
            if piece.direct {
                missed.push(0.0);
                next.push(piece.clone());
                continue;
            }
            let (mut lowest, mut values) = (f64::INFINITY, [0.0; NODES]);
            for (value, i) in values.iter_mut().zip(nodes) {
                *value = observed.values.iter().map(|column| column[i]).sum();
                lowest = lowest.min(f64::abs(*value).max(NOTHING * observed.scale[i]));
            }
            let miss = rule.decay(&values).interpolation;
            missed.push(miss);
            if miss <= tolerance * lowest {
                next.push(piece.clone());
                continue;
            }
            again = true;
            if self.rounds < ROUNDS {
                next.extend(piece.halves(energies));
            } else {
                next.push(Piece {
                    direct: true,
                    ..piece.clone()
                });
            }
        }
        if again {
            self.rounds += 1;
            self.pieces = next;
            self.lay(rule, energies);
            return None;
        }
        Some(self.interpolate(rule, energies, &observed, &missed))
    }

    fn interpolate(
        &self,
        rule: &Rule,
        energies: &[f64],
        observed: &Observed,
        missed: &[f64],
    ) -> Observed {
        let mut out = Observed {
            values: vec![Vec::with_capacity(energies.len()); observed.values.len()],
            error: Vec::with_capacity(energies.len()),
            scale: Vec::with_capacity(energies.len()),
        };
        let mut start = 0;
        for (piece, miss) in self.pieces.iter().zip(missed) {
            let nodes = start..start + piece.count();
            start = nodes.end;
            if piece.direct {
                for (column, from) in out.values.iter_mut().zip(&observed.values) {
                    column.extend_from_slice(&from[nodes.clone()]);
                }
                out.error.extend_from_slice(&observed.error[nodes.clone()]);
                out.scale.extend_from_slice(&observed.scale[nodes]);
                continue;
            }
            let positions: Vec<f64> = energies[piece.members.clone()]
                .iter()
                .map(|w| 2.0 * (w - piece.low) / piece.size - 1.0)
                .collect();
            for (column, from) in out.values.iter_mut().zip(&observed.values) {
                let mut values = [0.0; NODES];
                values.copy_from_slice(&from[nodes.clone()]);
                let series = rule.chebyshev(&values);
                let begin = column.len();
                column.resize(begin + positions.len(), 0.0);
                chebyshev_sum(&series, &positions, &mut column[begin..]);
            }
            let least = |list: &[f64]| list.iter().fold(f64::INFINITY, |a, e| a.min(*e));
            let scale = least(&observed.scale[nodes.clone()]);
            let size = |values: &[Vec<f64>], i: usize| -> f64 {
                let sum: f64 = values.iter().map(|column| column[i]).sum();
                sum.abs().max(NOTHING * scale)
            };
            // Over a panel the error goes with the value, far from constant beside a peak.
            let (mut ratio, mut most) = (0.0f64, 0.0f64);
            for i in nodes {
                let error = observed.error[i];
                most = most.max(error);
                if error > 0.0 {
                    ratio = ratio.max(error / size(&observed.values, i));
                }
            }
            for i in piece.members.clone() {
                let error = most.min(ratio * size(&out.values, i));
                out.error.push(error + miss);
            }
            out.scale.resize(piece.members.end, scale);
        }
        out
    }
}
