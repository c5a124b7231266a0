//! Chooses the method for a list of energies and keeps what can be used again.

use super::blurred::{GaussBlocks, Law, Table, WIDEST};
use super::radiated::Radiated;
use super::radiator::Radiator;
use super::shape::{Panels, RadiatedSource, Shape};
use super::skeleton::{Kernel, Observed, Row, Skeleton};
use super::smear::{CELL_ERROR, Gaussian, REACH};
use super::source::{BornSource, Source};
use super::targets::Targets;
use crate::amplitude::born::Energy;
use crate::numerics::quadrature::Rule;
use core::cell::RefCell;
use std::collections::BTreeMap;

/// Spread of W for one list of energies.
#[derive(Debug, Clone, Copy)]
pub(super) enum Spreading<'a> {
    None,
    Gaussian(Law),
    Rows { rows: &'a [(f64, f64)], area: f64 },
}

/// Values at the energies asked for.
#[derive(Debug, Clone)]
pub(super) struct Reached {
    /// `channels[channel][energy]`, nb.
    pub channels: Vec<Vec<f64>>,
    /// Bound on the relative error of the sum of the channels.
    pub accuracy: f64,
}

impl Reached {
    pub fn total(&self) -> Vec<f64> {
        let n = self.channels.first().map_or(0, Vec::len);
        let mut out = vec![0.0; n];
        for channel in &self.channels {
            for (sum, value) in out.iter_mut().zip(channel) {
                *sum += value;
            }
        }
        out
    }
}

/// Cells and rows for one spread over one interval of energies.
#[derive(Debug, Clone)]
struct Bench {
    key: [u64; 7],
    table: Option<Table>,
    skeleton: Skeleton,
    rows: BTreeMap<u64, Row>,
}

/// Rows and cells that are kept before they are forgotten, a bound on memory.
const MOST_ROWS: usize = 4096;
const MOST_CELLS: usize = 200_000;
const MOST_BENCHES: usize = 16;

#[derive(Debug, Clone, Default)]
pub(super) struct Engine {
    rule: Rule,
    gauss: RefCell<Option<GaussBlocks>>,
    benches: RefCell<Vec<Bench>>,
}

/// Values at and below this part of what the spread could show at best are "nothing": their
/// accuracy is relative to it.
pub(super) const NOTHING: f64 = 1e-9;
/// Requests finer than cells of two sigma allow. (The table of the blurred radiator has no
/// finer version: the answer then says what was reached.)
const FINEST: f64 = 5e-8;
/// Rounding of the sums.
const ROUNDING: f64 = 1e-13;

impl Engine {
    pub fn run(
        &self,
        radiator: Option<&Radiator>,
        spreading: Spreading<'_>,
        accuracy: f64,
        source: &BornSource<'_>,
        w_gev: &[f64],
    ) -> Reached {
        let mut energies = w_gev.to_vec();
        energies.sort_by(f64::total_cmp);
        energies.dedup();
        let tolerance = 0.2 * accuracy;
        let sorted = match (spreading, radiator) {
            (Spreading::None, None) => self.born(source, &energies),
            (Spreading::None, Some(radiator)) => {
                self.radiated(radiator, source, &energies, tolerance)
            }
            (Spreading::Gaussian(law), _) => {
                let mut out = empty(source.channels());
                for block in blocks(&energies) {
                    let widest = law.at(block[0]).max(law.at(block[block.len() - 1]));
                    let part = match radiator {
                        Some(radiator) if widest > WIDEST * block[0] => {
                            let shape = |w: f64| Shape::Gaussian(law.at(w));
                            self.shaped(
                                Some(radiator),
                                source,
                                block,
                                tolerance,
                                REACH * widest,
                                &shape,
                            )
                        }
                        _ => self.gaussian(radiator, law, source, block, accuracy),
                    };
                    append(&mut out, part);
                }
                out
            }
            (Spreading::Rows { rows, area }, _) => {
                let reach = rows.iter().fold(0.0f64, |a, row| a.max(row.0.abs()));
                let shape = |_: f64| Shape::Rows { rows, area };
                self.shaped(radiator, source, &energies, tolerance, reach, &shape)
            }
        };
        spread_out(&sorted, &energies, w_gev)
    }

    fn born(&self, source: &BornSource<'_>, energies: &[f64]) -> Observed {
        let mut out = empty(source.channels());
        let mut at = vec![0.0; source.channels()];
        for &w in energies {
            source.read(Energy::at(w), &mut at);
            push(&mut out, &at, 0.0, 0.0);
        }
        out
    }

    fn radiated(
        &self,
        radiator: &Radiator,
        source: &BornSource<'_>,
        energies: &[f64],
        tolerance: f64,
    ) -> Observed {
        let rule = &self.rule;
        let Some(&highest) = energies.last() else {
            return empty(source.channels());
        };
        let radiated = Radiated::new(rule, radiator, source, highest, tolerance);
        let mut targets = Targets::new(rule, energies, 0.0, source);
        let mut known: BTreeMap<u64, (Vec<f64>, f64)> = BTreeMap::new();
        loop {
            let mut out = empty(source.channels());
            for &w in targets.energies() {
                let (values, error) = known.entry(w.to_bits()).or_insert_with(|| {
                    let mut at = vec![0.0; source.channels()];
                    let error = radiated.at(w, &mut at);
                    (at, error)
                });
                push(&mut out, values, *error, 0.0);
            }
            if let Some(done) = targets.finish(rule, energies, out, tolerance) {
                return done;
            }
        }
    }

    fn shaped<'s>(
        &self,
        radiator: Option<&Radiator>,
        source: &dyn Source,
        energies: &[f64],
        tolerance: f64,
        reach: f64,
        shape: &dyn Fn(f64) -> Shape<'s>,
    ) -> Observed {
        let mut out = empty(source.channels());
        let (Some(&lowest), Some(&highest)) = (energies.first(), energies.last()) else {
            return out;
        };
        let (low, high) = ((lowest - reach).max(0.0), highest + reach);
        let rule = &self.rule;
        let panels = match radiator {
            None => Panels::new(rule, source, low, high, tolerance),
            Some(radiator) => {
                let radiated = Radiated::new(rule, radiator, source, high, tolerance);
                let smooth = RadiatedSource {
                    radiated: &radiated,
                    born: source,
                };
                let mut panels = Panels::new(rule, &smooth, low, high, tolerance);
                panels.inherited = 3.0 * tolerance;
                panels
            }
        };
        let mut at = vec![0.0; source.channels()];
        for &w in energies {
            let error = panels.spread(rule, &shape(w), w, &mut at);
            push(&mut out, &at, error, 0.0);
        }
        out
    }

    fn gaussian(
        &self,
        radiator: Option<&Radiator>,
        law: Law,
        source: &BornSource<'_>,
        energies: &[f64],
        accuracy: f64,
    ) -> Observed {
        let (lowest, highest) = (energies[0], energies[energies.len() - 1]);
        let (low, high) = interval(lowest, highest);
        let mut benches = self.benches.borrow_mut();
        let (cell, kernel_error): (f64, f64) = if accuracy < FINEST && radiator.is_none() {
            (1.0, CELL_ERROR[1])
        } else {
            (2.0, CELL_ERROR[0])
        };
        let key = [
            law.sigma_gev.to_bits(),
            law.w0_gev.to_bits(),
            law.power.to_bits(),
            low.to_bits(),
            high.to_bits(),
            radiator.map_or(0, |r| r.w_min_gev.to_bits()),
            cell.to_bits(),
        ];
        let found = benches.iter().position(|bench| bench.key == key);
        let mut bench = match found {
            Some(index) => benches.swap_remove(index),
            None => self.bench(radiator, law, cell, (low, high), key),
        };
        if bench.rows.len() > MOST_ROWS || bench.skeleton.cells() > MOST_CELLS {
            bench.rows.clear();
            bench.skeleton = Skeleton::new(unit(&law, cell, low, high), reach(&law, low, high));
        }
        let rule = &self.rule;
        let tolerance = 0.2 * accuracy;
        let smallest = law.at(lowest).min(law.at(highest));
        let mut targets = Targets::new(rule, energies, smallest, source);
        let out = loop {
            let wanted = targets.energies();
            for &w in wanted {
                if !bench.rows.contains_key(&w.to_bits()) {
                    let row = match &bench.table {
                        Some(table) => bench.skeleton.row(rule, &table.at(w)),
                        None => {
                            let kernel = Gaussian {
                                w_gev: w,
                                sigma_gev: law.at(w),
                                cell,
                            };
                            bench.skeleton.row(rule, &kernel as &dyn Kernel)
                        }
                    };
                    bench.rows.insert(w.to_bits(), row);
                }
            }
            let rows: Vec<&Row> = wanted
                .iter()
                .filter_map(|w| bench.rows.get(&w.to_bits()))
                .collect();
            let observed = bench
                .skeleton
                .observe(rule, source, tolerance, kernel_error, &rows);
            if let Some(done) = targets.finish(rule, energies, observed, tolerance) {
                break done;
            }
        };
        if benches.len() >= MOST_BENCHES {
            benches.remove(0);
        }
        benches.push(bench);
        out
    }

    fn bench(
        &self,
        radiator: Option<&Radiator>,
        law: Law,
        cell: f64,
        (low, high): (f64, f64),
        key: [u64; 7],
    ) -> Bench {
        let table = radiator.map(|radiator| {
            let mut gauss = self.gauss.borrow_mut();
            let gauss = gauss.get_or_insert_with(|| GaussBlocks::new(&self.rule));
            Table::new(&self.rule, gauss, radiator, law, low, high)
        });
        Bench {
            key,
            table,
            skeleton: Skeleton::new(unit(&law, cell, low, high), reach(&law, low, high)),
            rows: BTreeMap::new(),
        }
    }
}

/// A cell of at most `cell` times the smallest sigma whose multiples are exact: a few bits long.
fn unit(law: &Law, cell: f64, low: f64, high: f64) -> f64 {
    let most = cell * law.at(low).min(law.at(high));
    let mut unit = 1.0;
    while unit > most {
        unit *= 0.5;
    }
    while 2.0 * unit <= most {
        unit *= 2.0;
    }
    let quarters = (4.0 * (most / unit - 1.0)).floor().clamp(0.0, 3.0);
    unit * (1.0 + 0.25 * quarters)
}

fn reach(law: &Law, low: f64, high: f64) -> f64 {
    high + REACH * law.at(low).max(law.at(high))
}

/// A sixty-fourth of the power of two below W.
fn step(w_gev: f64) -> f64 {
    let mut step = 1.0;
    while step > w_gev {
        step *= 0.5;
    }
    while 2.0 * step <= w_gev {
        step *= 2.0;
    }
    step / 64.0
}

/// The energies' range, rounded outwards, so that small shifts use the same table.
fn interval(lowest: f64, highest: f64) -> (f64, f64) {
    let step = step(lowest);
    let low = (lowest / step).floor() * step;
    let high = (highest / step).ceil() * step;
    (low, high.max(low + step))
}

/// Lists of energies that span at most an eighth of their power of two.
fn blocks(energies: &[f64]) -> Vec<&[f64]> {
    let (Some(&lowest), Some(&highest)) = (energies.first(), energies.last()) else {
        return Vec::new();
    };
    if highest - lowest <= 8.0 * step(lowest) {
        return vec![energies];
    }
    energies
        .chunk_by(|a, b| {
            let eighth = 8.0 * step(*a);
            (a / eighth).floor() == (b / eighth).floor() && step(*a) == step(*b)
        })
        .collect()
}

fn empty(channels: usize) -> Observed {
    Observed {
        values: vec![Vec::new(); channels],
        error: Vec::new(),
        scale: Vec::new(),
    }
}

fn push(out: &mut Observed, values: &[f64], error: f64, scale: f64) {
    for (column, value) in out.values.iter_mut().zip(values) {
        column.push(*value);
    }
    out.error.push(error);
    out.scale.push(scale);
}

fn append(out: &mut Observed, part: Observed) {
    for (column, more) in out.values.iter_mut().zip(part.values) {
        column.extend(more);
    }
    out.error.extend(part.error);
    out.scale.extend(part.scale);
}

/// From the sorted list back to the order of the request.
fn spread_out(sorted: &Observed, energies: &[f64], w_gev: &[f64]) -> Reached {
    let mut accuracy = 0.0f64;
    for (index, error) in sorted.error.iter().enumerate() {
        let sum: f64 = sorted.values.iter().map(|column| column[index]).sum();
        let floor = NOTHING * sorted.scale[index];
        if *error > 0.0 {
            accuracy = accuracy.max(error / sum.abs().max(floor));
        }
    }
    if !energies.is_empty() && sorted.error.iter().any(|e| *e > 0.0) {
        accuracy += ROUNDING;
    }
    let places: Vec<usize> = w_gev
        .iter()
        .map(|w| energies.partition_point(|e| e < w))
        .collect();
    Reached {
        channels: sorted
            .values
            .iter()
            .map(|column| {
                places
                    .iter()
                    .map(|&place| column.get(place).copied().unwrap_or(0.0))
                    .collect()
            })
            .collect(),
        accuracy,
    }
}
