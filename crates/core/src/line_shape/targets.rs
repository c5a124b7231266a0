//! Where an observed curve is computed: at the energies themselves if they are few, else at the
//! nodes of panels on which it is a polynomial to the accuracy asked for.

use super::skeleton::Observed;
use super::source::{BornSource, Source};
use crate::numerics::quadrature::{NODES, Rule, chebyshev_sum};

/// The energies at which rows are needed.
pub(super) struct Targets {
    /// Panels (low, size) in rising order; empty: the energies themselves.
    panels: Vec<(f64, f64)>,
    energies: Vec<f64>,
    rounds: u32,
}

/// Below this many energies panels do not pay.
const FEW: usize = 48;
/// How often panels are halved before what is left is put into the error.
const ROUNDS: u32 = 8;

impl Targets {
    pub fn new(rule: &Rule, energies: &[f64], sigma_gev: f64, source: &BornSource<'_>) -> Self {
        let mut out = Self {
            panels: Vec::new(),
            energies: energies.to_vec(),
            rounds: 0,
        };
        if energies.len() >= FEW {
            let (low, high) = (energies[0], energies[energies.len() - 1]);
            out.divide(low, high - low, sigma_gev, source, energies.len());
            out.lay(rule, energies);
        }
        out
    }

    /// Halves until the observed curve should be smooth on a panel.
    fn divide(&mut self, low: f64, size: f64, sigma: f64, source: &BornSource<'_>, most: usize) {
        let distance = |w: f64| (low - w).max(w - (low + size)).max(0.0) - 6.0 * sigma;
        let mut limit = f64::INFINITY;
        for &(peak, width) in source.peaks() {
            limit = limit.min((2.0 * distance(peak)).max(0.8 * width).max(2.5 * sigma));
        }
        for &edge in source.breaks() {
            limit = limit.min((2.0 * distance(edge)).max(2.5 * sigma));
        }
        if size <= limit || self.panels.len() * NODES > most {
            self.panels.push((low, size));
        } else {
            let half = 0.5 * size;
            self.divide(low, half, sigma, source, most);
            self.divide(low + half, half, sigma, source, most);
        }
    }

    /// Energies of the panels, or the list itself where panels do not pay.
    fn lay(&mut self, rule: &Rule, energies: &[f64]) {
        // A panel in which hardly any energy lies is not worth its nodes.
        if self.panels.len() * NODES >= energies.len() {
            self.panels.clear();
            self.energies = energies.to_vec();
            return;
        }
        self.energies.clear();
        for &(low, size) in &self.panels {
            self.energies
                .extend(rule.nodes.iter().map(|u| low + size * u));
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
        if self.panels.is_empty() {
            return Some(observed);
        }
        let count = observed.error.len();
        let total: Vec<f64> = (0..count)
            .map(|i| observed.values.iter().map(|column| column[i]).sum())
            .collect();
        let mut halved = Vec::new();
        let mut missed = Vec::new();
        let mut again = false;
        for (panel, values) in self.panels.iter().zip(total.chunks(NODES)) {
            let lowest = values.iter().fold(f64::INFINITY, |a, v| a.min(v.abs()));
            let miss = rule.decay(values).interpolation;
            missed.push(miss);
            if miss > tolerance * lowest && self.rounds < ROUNDS {
                again = true;
                let half = 0.5 * panel.1;
                halved.push((panel.0, half));
                halved.push((panel.0 + half, half));
            } else {
                halved.push(*panel);
            }
        }
        if again {
            self.rounds += 1;
            self.panels = halved;
            self.lay(rule, energies);
            return None;
        }
        let mut out = Observed {
            values: vec![Vec::with_capacity(energies.len()); observed.values.len()],
            error: Vec::with_capacity(energies.len()),
            scale: Vec::with_capacity(energies.len()),
        };
        let mut start = 0;
        for (index, &(low, size)) in self.panels.iter().enumerate() {
            let last = index + 1 == self.panels.len();
            let end = if last {
                energies.len()
            } else {
                energies.partition_point(|&w| w < low + size).max(start)
            };
            let positions: Vec<f64> = energies[start..end]
                .iter()
                .map(|w| 2.0 * (w - low) / size - 1.0)
                .collect();
            let nodes = index * NODES..(index + 1) * NODES;
            for (column, from) in out.values.iter_mut().zip(&observed.values) {
                let mut values = [0.0; NODES];
                values.copy_from_slice(&from[nodes.clone()]);
                let series = rule.chebyshev(&values);
                let begin = column.len();
                column.resize(begin + positions.len(), 0.0);
                chebyshev_sum(&series, &positions, &mut column[begin..]);
            }
            let error = observed.error[nodes.clone()]
                .iter()
                .fold(0.0f64, |a, e| a.max(*e));
            let scale = observed.scale[nodes]
                .iter()
                .fold(f64::INFINITY, |a, e| a.min(*e));
            out.error.resize(end, error + missed[index]);
            out.scale.resize(end, scale);
            start = end;
        }
        Some(out)
    }
}
