//! A spread of any shape on a function tabulated on panels: for measured spreads, and for a
//! Gaussian so wide that the table of the blurred radiator does not reach.

use super::radiated::Radiated;
use super::smear::{INV_SQRT_TAU, REACH};
use super::source::{Divider, Purpose, Source};
use crate::math;
use crate::numerics::quadrature::{NODES, Rule};

/// A density of the offset W' - W.
pub(super) enum Shape<'a> {
    /// sigma_W, GeV.
    Gaussian(f64),
    /// Rows (offset in GeV, weight), linear between, divided by the area.
    Rows { rows: &'a [(f64, f64)], area: f64 },
}

impl Shape<'_> {
    /// Offsets between which the density is smooth.
    fn joints(&self) -> Vec<f64> {
        match self {
            Shape::Gaussian(sigma) => (-6..=6)
                .map(|k| REACH / 6.0 * sigma * f64::from(k))
                .collect(),
            Shape::Rows { rows, .. } => rows.iter().map(|row| row.0).collect(),
        }
    }

    /// Density between joints `segment` and `segment + 1`, 1/GeV.
    fn density(&self, segment: usize, offset: f64) -> f64 {
        match self {
            Shape::Gaussian(sigma) => {
                let t = offset / sigma;
                INV_SQRT_TAU / sigma * math::exp(-0.5 * t * t)
            }
            Shape::Rows { rows, area } => match rows.get(segment..segment + 2) {
                Some(&[(x0, y0), (x1, y1)]) => (y0 + (y1 - y0) * (offset - x0) / (x1 - x0)) / area,
                _ => 0.0,
            },
        }
    }
}

/// The radiated cross section as a source of its own.
pub(super) struct RadiatedSource<'a> {
    pub radiated: &'a Radiated<'a>,
    pub born: &'a dyn Source,
}

impl Source for RadiatedSource<'_> {
    fn channels(&self) -> usize {
        self.born.channels()
    }
    fn peaks(&self) -> &[(f64, f64)] {
        self.born.peaks()
    }
    fn breaks(&self) -> &[f64] {
        self.born.breaks()
    }
    fn sample(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut [f64]) {
        let mut at = vec![0.0; self.channels()];
        for (m, u) in rule.nodes.iter().enumerate() {
            self.radiated.at(low_gev + size_gev * u, &mut at);
            for (channel, value) in at.iter().enumerate() {
                out[channel * NODES + m] = *value;
            }
        }
    }
}

/// A source as values on panels.
pub(super) struct Panels {
    channels: usize,
    /// (low, size, error of a value).
    panels: Vec<(f64, f64, f64)>,
    /// `values[(panel * channels + channel) * 16 + m]`, nb.
    values: Vec<f64>,
    /// Relative error of the values themselves.
    pub inherited: f64,
}

impl Panels {
    pub fn new(rule: &Rule, source: &dyn Source, low: f64, high: f64, tolerance: f64) -> Self {
        let mut out = Self {
            channels: source.channels(),
            panels: Vec::new(),
            values: Vec::new(),
            inherited: 0.0,
        };
        let mut divider = Divider::new(rule, source, tolerance, Purpose::Values);
        divider.divide(low, high, &mut |low, size, values, error| {
            out.panels.push((low, size, error / size));
            out.values.extend_from_slice(values);
        });
        out
    }

    /// Integral of the density around W times the source, per channel, nb, into `out`;
    /// returns the bound on the error of the sum.
    pub fn spread(&self, rule: &Rule, shape: &Shape<'_>, w_gev: f64, out: &mut [f64]) -> f64 {
        out.fill(0.0);
        let mut bound = 0.0;
        let joints = shape.joints();
        for (segment, pair) in joints.windows(2).enumerate() {
            let &[from, to] = pair else { continue };
            let first = self
                .panels
                .partition_point(|&(low, size, _)| low + size <= w_gev + from);
            for (index, &(low, size, error)) in self.panels.iter().enumerate().skip(first) {
                let a = from.max(low - w_gev);
                let b = to.min((low - w_gev) + size);
                if low - w_gev >= to {
                    break;
                }
                if b <= a {
                    continue;
                }
                let stride = self.channels * NODES;
                let Some(values) = self.values.get(index * stride..(index + 1) * stride) else {
                    break;
                };
                for m in 0..NODES {
                    let offset = a + (b - a) * rule.nodes[m];
                    let weight = rule.weights[m] * (b - a) * shape.density(segment, offset);
                    bound += weight * error;
                    let cardinal = rule.cardinal((offset - (low - w_gev)) / size);
                    for (slot, channel) in out.iter_mut().zip(values.chunks(NODES)) {
                        let mut value = 0.0;
                        for (c, v) in cardinal.iter().zip(channel) {
                            value += c * v;
                        }
                        *slot += weight * value;
                        bound += self.inherited * (weight * value).abs();
                    }
                }
            }
        }
        bound
    }
}
