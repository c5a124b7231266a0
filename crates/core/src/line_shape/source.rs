//! What is carried through the chain: one or several channels of a function of W, and its
//! division into panels on which a 16-point rule is exact enough.

use crate::amplitude::born::{Born, Energy, Feature};
use crate::numerics::quadrature::{NODES, Rule};

/// One or several functions of W that share peaks and breaks.
pub(super) trait Source {
    /// Number of channels; their sum decides where panels are divided.
    fn channels(&self) -> usize;
    /// Positions and full widths of peaks, GeV.
    fn peaks(&self) -> &[(f64, f64)];
    /// Where the function is not smooth, rising, GeV; it vanishes at and below the first.
    fn breaks(&self) -> &[f64];
    /// Values at `low_gev + size_gev * nodes[m]` into `out[channel * 16 + m]`.
    fn sample(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut [f64]);
}

/// A Born model: its total, or each of its contributions.
pub(super) struct BornSource<'a> {
    born: &'a dyn Born,
    contributions: usize,
    split: bool,
    peaks: Vec<(f64, f64)>,
    breaks: Vec<f64>,
}

impl<'a> BornSource<'a> {
    /// `floor_gev`: nothing below counts (W_min of the radiation), besides the threshold.
    pub fn new(born: &'a dyn Born, split: bool, floor_gev: f64) -> Self {
        let floor = born.threshold_gev().max(floor_gev).max(0.0);
        let (mut peaks, mut breaks) = (Vec::new(), vec![floor]);
        for feature in born.features() {
            match feature {
                Feature::Peak { w_gev, width_gev } => peaks.push((w_gev, width_gev.abs())),
                Feature::Kink { w_gev } if w_gev > floor => breaks.push(w_gev),
                Feature::Kink { .. } => {}
            }
        }
        breaks.sort_by(f64::total_cmp);
        breaks.dedup();
        Self {
            born,
            contributions: if split {
                born.contribution_names().len()
            } else {
                1
            },
            split,
            peaks,
            breaks,
        }
    }

    /// Every channel at one energy, nb.
    pub fn read(&self, at: Energy, out: &mut [f64]) {
        if self.split {
            self.born.contributions_nb(at, out);
        } else if let Some(slot) = out.first_mut() {
            *slot = self.born.sigma_nb(at);
        }
    }

    /// The peak nearest to `w_gev`: energies are counted from there, so that W - M is exact.
    fn reference(&self, w_gev: f64) -> f64 {
        let mut best = w_gev;
        let mut distance = f64::INFINITY;
        for &(peak, _) in &self.peaks {
            if (peak - w_gev).abs() < distance {
                best = peak;
                distance = (peak - w_gev).abs();
            }
        }
        best
    }
}

impl Source for BornSource<'_> {
    fn channels(&self) -> usize {
        self.contributions
    }
    fn peaks(&self) -> &[(f64, f64)] {
        &self.peaks
    }
    fn breaks(&self) -> &[f64] {
        &self.breaks
    }
    fn sample(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut [f64]) {
        let reference_gev = self.reference(low_gev + 0.5 * size_gev);
        let from = low_gev - reference_gev;
        let (mut few, mut many) = ([0.0; 32], Vec::new());
        let parts = match few.get_mut(..self.contributions) {
            Some(parts) => parts,
            None => {
                many.resize(self.contributions, 0.0);
                many.as_mut_slice()
            }
        };
        for (m, u) in rule.nodes.iter().enumerate() {
            let at = Energy {
                reference_gev,
                offset_gev: from + size_gev * u,
            };
            self.read(at, parts);
            for (channel, part) in parts.iter().enumerate() {
                out[channel * NODES + m] = *part;
            }
        }
    }
}

/// What a panel has to be good for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Purpose {
    /// Its integral against smooth functions.
    Integral,
    /// Its values between the nodes.
    Values,
}

/// Divides ranges into panels.
pub(super) struct Divider<'a> {
    pub rule: &'a Rule,
    pub source: &'a dyn Source,
    /// Relative error allowed on a panel.
    pub tolerance: f64,
    pub purpose: Purpose,
    values: Vec<f64>,
    total: [f64; NODES],
    panels: usize,
}

/// How often a range is halved at most, and how many panels there may be: below the noise of
/// the source halving never ends. What is then left is in the error that is reported.
const DEEPEST: u32 = 48;
const MOST_PANELS: usize = 1000;

/// Takes a panel: low end, size, `values[channel * 16 + m]`, and the absolute error of its
/// integral (for values: of a value times the size), nb GeV.
pub(super) type Sink<'a> = dyn FnMut(f64, f64, &[f64], f64) + 'a;

impl<'a> Divider<'a> {
    pub fn new(rule: &'a Rule, source: &'a dyn Source, tolerance: f64, purpose: Purpose) -> Self {
        Self {
            rule,
            source,
            tolerance,
            purpose,
            values: vec![0.0; source.channels() * NODES],
            total: [0.0; NODES],
            panels: 0,
        }
    }

    /// Gives `sink` panels that cover the part of [low, high] above the source's floor, in
    /// rising order.
    pub fn divide(&mut self, low_gev: f64, high_gev: f64, sink: &mut Sink<'_>) {
        let source = self.source;
        let mut from = low_gev;
        if let Some(&floor) = source.breaks().first() {
            from = from.max(floor);
        }
        for &edge in source.breaks() {
            if edge > from && edge < high_gev {
                self.panel(from, edge - from, 0.0, 0, sink);
                from = edge;
            }
        }
        if from < high_gev {
            self.panel(from, high_gev - from, 0.0, 0, sink);
        }
    }

    fn panel(&mut self, low: f64, size: f64, whole: f64, depth: u32, sink: &mut Sink<'_>) {
        let mut whole = whole;
        if !self.hides_a_peak(low, size) || depth >= DEEPEST || self.panels >= MOST_PANELS {
            self.source.sample(low, size, self.rule, &mut self.values);
            self.total = [0.0; NODES];
            for channel in self.values.chunks(NODES) {
                for (sum, value) in self.total.iter_mut().zip(channel) {
                    *sum += value;
                }
            }
            let decay = self.rule.decay(&self.total);
            let error = match self.purpose {
                Purpose::Integral => decay.quadrature,
                Purpose::Values => decay.interpolation,
            };
            whole = whole.max(decay.scale * size);
            let allowed = match self.purpose {
                Purpose::Integral => self.tolerance * (decay.scale * size).max(1e-2 * whole),
                Purpose::Values => self.tolerance * (decay.scale * size).max(1e-6 * whole),
            };
            let stop = depth >= DEEPEST || self.panels >= MOST_PANELS;
            if error * size <= allowed || stop {
                self.panels += 1;
                sink(low, size, &self.values, error * size);
                return;
            }
        }
        let half = 0.5 * size;
        let middle = low + half;
        self.panel(low, middle - low, whole, depth + 1, sink);
        self.panel(middle, (low + size) - middle, whole, depth + 1, sink);
    }

    /// A peak so narrow that the nodes could miss it.
    fn hides_a_peak(&self, low: f64, size: f64) -> bool {
        self.source.peaks().iter().any(|&(peak, width)| {
            let distance = (low - peak).max(peak - (low + size)).max(0.0);
            size > 8.0 * distance + 2.0 * width
        })
    }
}
