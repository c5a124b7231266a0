//! Radiation alone: sigma_rad(W') = int F(1 - w^2/W'^2, W'^2) sigma(w) 2w/W'^2 dw.
//!
//! The Born curve is divided once into panels joined into a tree with moments at every level.
//! Far from W' whole branches act through their moments; the panel that W' lies in is
//! integrated with the x^(beta-1) end exact.

use super::radiator::{Emission, Radiator};
use super::source::{Divider, Purpose, Source};
use crate::math;
use crate::numerics::quadrature::{NODES, Rule};

#[derive(Debug, Clone)]
struct Branch {
    low: f64,
    size: f64,
    /// Lower and upper part, if divided.
    parts: Option<(usize, usize)>,
    /// Error of the branch's integral, nb GeV.
    error: f64,
}

/// A source prepared for radiation up to some energy.
pub(super) struct Radiated<'a> {
    rule: &'a Rule,
    radiator: &'a Radiator,
    source: &'a dyn Source,
    channels: usize,
    branches: Vec<Branch>,
    /// `weights[(branch * channels + channel) * 16 + m]`, nb GeV.
    weights: Vec<f64>,
    roots: Vec<usize>,
    tolerance: f64,
    log: [f64; NODES],
}

impl<'a> Radiated<'a> {
    pub fn new(
        rule: &'a Rule,
        radiator: &'a Radiator,
        source: &'a dyn Source,
        high_gev: f64,
        tolerance: f64,
    ) -> Self {
        let channels = source.channels();
        let mut out = Self {
            rule,
            radiator,
            source,
            channels,
            branches: Vec::new(),
            weights: Vec::new(),
            roots: Vec::new(),
            tolerance,
            log: rule.log_weights(),
        };
        let mut leaves: Vec<usize> = Vec::new();
        let mut divider = Divider::new(rule, source, tolerance, Purpose::Integral);
        // Towards w = 0 the radiator is smooth on the scale of w only.
        let floor = source.breaks().first().copied().unwrap_or(0.0);
        let mut from = floor;
        while from < high_gev {
            let to = (3.0 * from).min(high_gev);
            divider.divide(from, to, &mut |low, size, values, error| {
                leaves.push(out.branches.len());
                out.branches.push(Branch {
                    low,
                    size,
                    parts: None,
                    error,
                });
                for channel in values.chunks(NODES) {
                    for (value, weight) in channel.iter().zip(&rule.weights) {
                        out.weights.push(value * weight * size);
                    }
                }
            });
            if to <= from {
                break;
            }
            from = to;
        }
        out.join(leaves);
        out
    }

    /// Joins neighbours of equal size, again and again: the panels come from halving.
    fn join(&mut self, leaves: Vec<usize>) {
        for leaf in leaves {
            self.roots.push(leaf);
            while let [.., a, b] = *self.roots.as_slice() {
                let (lower, upper) = (&self.branches[a], &self.branches[b]);
                let (sum, same) = (lower.size + upper.size, (lower.size - upper.size).abs());
                if same > 1e-9 * sum || sum > lower.low {
                    break;
                }
                let branch = Branch {
                    low: lower.low,
                    size: sum,
                    parts: Some((a, b)),
                    error: lower.error + upper.error,
                };
                let index = self.branches.len();
                let stride = self.channels * NODES;
                self.branches.push(branch);
                self.weights.resize((index + 1) * stride, 0.0);
                let (head, parent) = self.weights.split_at_mut(index * stride);
                for (half, child) in [a, b].into_iter().enumerate() {
                    let child = &head[child * stride..(child + 1) * stride];
                    for (to, from) in parent.chunks_mut(NODES).zip(child.chunks(NODES)) {
                        self.rule.raise(half, from, to);
                    }
                }
                self.roots.truncate(self.roots.len() - 2);
                self.roots.push(index);
            }
        }
    }

    /// sigma_rad(W') of every channel, nb, into `out`; returns the bound on the error of the sum.
    pub fn at(&self, w_gev: f64, out: &mut [f64]) -> f64 {
        out.fill(0.0);
        if w_gev <= self.radiator.w_min_gev {
            return 0.0;
        }
        let emission = self.radiator.at(w_gev);
        let mut target = Target {
            all: self,
            w_gev,
            emission,
            values: vec![0.0; self.channels * NODES],
            out,
            error: 0.0,
        };
        for &root in &self.roots {
            target.visit(root);
        }
        target.error
    }
}

struct Target<'a, 'b> {
    all: &'b Radiated<'a>,
    w_gev: f64,
    emission: Emission,
    values: Vec<f64>,
    out: &'b mut [f64],
    error: f64,
}

impl Target<'_, '_> {
    fn visit(&mut self, index: usize) {
        let all = self.all;
        let Some(branch) = all.branches.get(index) else {
            return;
        };
        let (low, size) = (branch.low, branch.size);
        if low >= self.w_gev {
            return;
        }
        let distance = self.w_gev - (low + size);
        if distance > 0.0 && size <= 2.0 * distance {
            let stride = all.channels * NODES;
            let Some(weights) = all.weights.get(index * stride..(index + 1) * stride) else {
                return;
            };
            let mut largest = 0.0f64;
            for m in 0..NODES {
                let y = distance + size * (1.0 - all.rule.nodes[m]);
                let kernel = self.kernel(y);
                largest = largest.max(kernel.abs());
                for (slot, channel) in self.out.iter_mut().zip(weights.chunks(NODES)) {
                    *slot += kernel * channel[m];
                }
            }
            self.error += largest * branch.error;
        } else if let Some((lower, upper)) = branch.parts {
            self.visit(lower);
            self.visit(upper);
        } else {
            self.near(low, size);
        }
    }

    /// F dx/dw at w = W' - y.
    #[inline]
    fn kernel(&self, y: f64) -> f64 {
        let w = self.w_gev - y;
        let scale = 1.0 / (self.w_gev * self.w_gev);
        let x = y * (self.w_gev + w) * scale;
        let ln_left = 2.0 * math::ln(w / self.w_gev);
        self.emission.density(x, math::ln(x), ln_left) * 2.0 * w * scale
    }

    /// A panel that W' lies in or close above: graded towards W', the Born curve read anew.
    fn near(&mut self, low: f64, size: f64) {
        let far = self.w_gev - low;
        let mut from = (self.w_gev - (low + size)).max(0.0);
        if from == 0.0 {
            from = 0.25 * far;
            self.end(from);
        }
        while from < far {
            let to = if 5.0 * from >= far { far } else { 4.0 * from };
            self.piece(from, to);
            from = to;
        }
    }

    /// y from `from` to `to`, away from the singular end.
    fn piece(&mut self, from: f64, to: f64) {
        let all = self.all;
        let size = to - from;
        all.source
            .sample(self.w_gev - to, size, all.rule, &mut self.values);
        for m in 0..NODES {
            let y = from + size * (1.0 - all.rule.nodes[m]);
            let weight = all.rule.weights[m] * size * self.kernel(y);
            for (slot, channel) in self.out.iter_mut().zip(self.values.chunks(NODES)) {
                *slot += weight * channel[m];
                self.error += all.tolerance * (weight * channel[m]).abs();
            }
        }
    }

    /// y from 0 to `end`: u^(beta-1) and ln u are integrated exactly.
    fn end(&mut self, end: f64) {
        let all = self.all;
        let w_gev = self.w_gev;
        all.source
            .sample(w_gev - end, end, all.rule, &mut self.values);
        let power = all.rule.power_weights(self.emission.beta);
        let scale = 1.0 / (w_gev * w_gev);
        for (m, power) in power.iter().enumerate() {
            // Nodes are symmetric: the node at u = y/end is the one at 1 - u in w.
            let mirrored = NODES - 1 - m;
            let y = end * all.rule.nodes[m];
            let w = w_gev - y;
            let slope = (w_gev + w) * scale * end;
            let ln_slope = math::ln(slope);
            let x = slope * all.rule.nodes[m];
            let weight =
                (self.emission.soft * math::exp((self.emission.beta - 1.0) * ln_slope) * power
                    - self.emission.log_factor(x) * (all.log[m] + all.rule.weights[m] * ln_slope)
                    + all.rule.weights[m] * self.emission.regular(x, 2.0 * math::ln(w / w_gev)))
                    * 2.0
                    * w
                    * scale
                    * end;
            for (slot, channel) in self.out.iter_mut().zip(self.values.chunks(NODES)) {
                *slot += weight * channel[mirrored];
                self.error += all.tolerance * (weight * channel[mirrored]).abs();
            }
        }
    }
}
