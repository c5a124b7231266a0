//! A linear functional of the Born curve at many energies: sigma_obs(W_i) = int K_i(w) sigma(w) dw.
//!
//! The axis is divided into cells, halved from [0, R] until K_i is smooth on each. On such a
//! cell only the first 16 moments of sigma matter, however narrow its peaks: they are kept as
//! weights at the cell's 16 nodes. The cells and the values K_i(nodes) depend on the chain and on
//! the energies alone, so they outlive a change of the model; a new model costs its moments
//! and one product of each row with them.

use super::source::{Divider, Purpose, Source};
use crate::numerics::quadrature::{AtNodes, NODES, Rule};

/// What a kernel says of a cell.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Verdict {
    /// It vanishes there.
    Nothing,
    /// It is smooth there.
    Smooth,
    /// Halve the cell.
    Halve,
}

/// K_i(w) for one target energy.
pub(super) trait Kernel {
    fn verdict(&self, low_gev: f64, size_gev: f64) -> Verdict;
    /// K_i at the cell's nodes, 1/GeV.
    fn values(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut AtNodes);
}

#[derive(Debug, Clone)]
struct Cell {
    low: f64,
    size: f64,
    /// Index of the lower half; the upper one follows. 0: none.
    halves: usize,
}

/// One target's cells with the kernel at their nodes.
#[derive(Debug, Clone)]
pub(super) struct Row {
    cells: Vec<(usize, f64)>,
    values: Vec<AtNodes>,
}

/// Cells that serve all targets.
#[derive(Debug, Clone)]
pub(super) struct Skeleton {
    cells: Vec<Cell>,
}

/// Values at the targets and the bound on their error.
#[derive(Debug, Clone)]
pub(super) struct Observed {
    /// `values[channel][target]`, nb.
    pub values: Vec<Vec<f64>>,
    /// Absolute error of the sum of the channels, nb.
    pub error: Vec<f64>,
    /// Largest that the sum could be if the spread were centred best, nb: the scale of "nothing".
    pub scale: Vec<f64>,
}

impl Skeleton {
    /// Cells from [0, unit * 2^k] that covers `reach_gev`.
    pub fn new(unit_gev: f64, reach_gev: f64) -> Self {
        let mut size = unit_gev;
        while size < reach_gev {
            size *= 2.0;
        }
        Self {
            cells: vec![Cell {
                low: 0.0,
                size,
                halves: 0,
            }],
        }
    }

    pub fn cells(&self) -> usize {
        self.cells.len()
    }

    pub fn row(&mut self, rule: &Rule, kernel: &dyn Kernel) -> Row {
        let mut row = Row {
            cells: Vec::with_capacity(48),
            values: Vec::with_capacity(48),
        };
        self.descend(0, rule, kernel, &mut row);
        row
    }

    fn descend(&mut self, index: usize, rule: &Rule, kernel: &dyn Kernel, row: &mut Row) {
        let Some(&Cell { low, size, halves }) = self.cells.get(index) else {
            return;
        };
        match kernel.verdict(low, size) {
            Verdict::Nothing => {}
            Verdict::Smooth => {
                let mut values = [0.0; NODES];
                kernel.values(low, size, rule, &mut values);
                let largest = values.iter().fold(0.0f64, |a, v| a.max(v.abs()));
                row.cells.push((index, largest));
                row.values.push(values);
            }
            Verdict::Halve => {
                let halves = if halves == 0 {
                    let next = self.cells.len();
                    let half = 0.5 * size;
                    for low in [low, low + half] {
                        self.cells.push(Cell {
                            low,
                            size: half,
                            halves: 0,
                        });
                    }
                    if let Some(cell) = self.cells.get_mut(index) {
                        cell.halves = next;
                    }
                    next
                } else {
                    halves
                };
                self.descend(halves, rule, kernel, row);
                self.descend(halves + 1, rule, kernel, row);
            }
        }
    }

    /// Applies `rows` to a source. `kernel_error`: how far a kernel on a cell is from its
    /// polynomial of degree 15, in units of its largest value there.
    pub fn observe(
        &self,
        rule: &Rule,
        source: &dyn Source,
        tolerance: f64,
        kernel_error: f64,
        rows: &[&Row],
    ) -> Observed {
        let channels = source.channels();
        let mut moments = Moments {
            skeleton: self,
            rule,
            channels,
            used: vec![false; self.cells.len()],
            wanted: vec![false; self.cells.len()],
            weights: vec![0.0; self.cells.len() * channels * NODES],
            error: vec![0.0; self.cells.len()],
            size: vec![0.0; self.cells.len()],
        };
        for row in rows {
            for &(cell, _) in &row.cells {
                if let Some(used) = moments.used.get_mut(cell) {
                    *used = true;
                }
            }
        }
        moments.mark();
        let mut divider = Divider::new(rule, source, tolerance, Purpose::Integral);
        moments.fill(0, false, &mut divider);
        let mut out = Observed {
            values: vec![Vec::with_capacity(rows.len()); channels],
            error: Vec::with_capacity(rows.len()),
            scale: Vec::with_capacity(rows.len()),
        };
        let stride = channels * NODES;
        for row in rows {
            let (mut error, mut largest, mut nearby) = (0.0, 0.0f64, 0.0);
            for &(cell, peak) in &row.cells {
                error += peak * (moments.error[cell] + kernel_error * moments.size[cell]);
                if peak > 0.0 {
                    largest = largest.max(peak);
                    nearby += moments.size[cell];
                }
            }
            out.error.push(error);
            out.scale.push(largest * nearby);
            for (channel, column) in out.values.iter_mut().enumerate() {
                let mut sum = 0.0;
                for (&(cell, _), values) in row.cells.iter().zip(&row.values) {
                    let from = cell * stride + channel * NODES;
                    if let Some(weights) = moments.weights.get(from..from + NODES) {
                        let mut part = 0.0;
                        for (a, b) in weights.iter().zip(values) {
                            part += a * b;
                        }
                        sum += part;
                    }
                }
                column.push(sum);
            }
        }
        out
    }
}

/// The moments of one source on the cells that rows use.
struct Moments<'a> {
    skeleton: &'a Skeleton,
    rule: &'a Rule,
    channels: usize,
    used: Vec<bool>,
    /// Used itself or something below it is.
    wanted: Vec<bool>,
    /// `weights[(cell * channels + channel) * 16 + m]`, nb GeV.
    weights: Vec<f64>,
    /// Error of the cell's integral, nb GeV.
    error: Vec<f64>,
    /// Integral of the modulus over the cell, nb GeV.
    size: Vec<f64>,
}

impl Moments<'_> {
    fn mark(&mut self) {
        // Halves come after their cell.
        for (index, cell) in self.skeleton.cells.iter().enumerate().rev() {
            let below =
                cell.halves != 0 && (self.wanted[cell.halves] || self.wanted[cell.halves + 1]);
            self.wanted[index] = self.used[index] || below;
        }
    }

    fn fill(&mut self, index: usize, needed: bool, divider: &mut Divider<'_>) {
        let Cell { low, size, halves } = self.skeleton.cells[index].clone();
        let needed = needed || self.used[index];
        let stride = self.channels * NODES;
        let below = halves != 0 && (self.wanted[halves] || self.wanted[halves + 1]);
        if below {
            self.fill(halves, needed, divider);
            self.fill(halves + 1, needed, divider);
            if needed {
                for half in 0..2 {
                    let child = halves + half;
                    self.error[index] += self.error[child];
                    self.size[index] += self.size[child];
                    let (head, tail) = self.weights.split_at_mut(child * stride);
                    let parent = &mut head[index * stride..(index + 1) * stride];
                    for (to, from) in parent.chunks_mut(NODES).zip(tail.chunks(NODES)) {
                        self.rule.raise(half, from, to);
                    }
                }
            }
        } else if needed {
            let rule = self.rule;
            let out = &mut self.weights[index * stride..(index + 1) * stride];
            let (error_sum, size_sum) = (&mut self.error[index], &mut self.size[index]);
            let mut moments = vec![0.0; stride];
            let mut deposited = false;
            divider.divide(low, low + size, &mut |from, length, values, error| {
                *error_sum += error;
                for m in 0..NODES {
                    let sum: f64 = values.iter().skip(m).step_by(NODES).sum();
                    *size_sum += rule.weights[m] * length * sum.abs();
                }
                if from == low && length == size {
                    for (to, from) in out.chunks_mut(NODES).zip(values.chunks(NODES)) {
                        for m in 0..NODES {
                            to[m] = from[m] * rule.weights[m] * length;
                        }
                    }
                    return;
                }
                deposited = true;
                for m in 0..NODES {
                    let u = ((from - low) + length * rule.nodes[m]) / size;
                    let polynomials = Rule::polynomials(u);
                    let weight = rule.weights[m] * length;
                    for (to, from) in moments.chunks_mut(NODES).zip(values.chunks(NODES)) {
                        for k in 0..NODES {
                            to[k] += weight * from[m] * polynomials[k];
                        }
                    }
                }
            });
            if deposited {
                for (to, from) in out.chunks_mut(NODES).zip(moments.chunks(NODES)) {
                    let mut own = [0.0; NODES];
                    own.copy_from_slice(from);
                    to.copy_from_slice(&rule.weights_from_moments(&own));
                }
            }
        }
    }
}
