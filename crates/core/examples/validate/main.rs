//! Compares the core, through its public interface, with the tables of `tests/reference` that
//! independent scripts have made. Prints one JSON row per quantity (source, tolerance with unit
//! and reason, largest deviation found); the exit code says whether all lie within tolerance.
#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    clippy::print_stdout,
    reason = "a check stops where a reference file is not as expected"
)]

mod chain;
mod diagrams;
mod propagators;
mod statistics;

use serde::Serialize;
use serde_json::Value;

/// One line of the validation table.
#[derive(Debug, Serialize)]
pub struct Row {
    /// What is compared.
    pub quantity: String,
    /// Public items that are exercised.
    pub items: String,
    /// Where the other value comes from.
    pub source: String,
    /// What the deviation is measured in.
    pub unit: String,
    /// Largest deviation allowed, in that unit.
    pub tolerance: f64,
    /// Why that much.
    pub reason: String,
    /// Number of values.
    pub values: usize,
    /// Largest deviation found.
    pub largest: f64,
    /// Where.
    pub at: String,
    /// All deviations, for the quantiles.
    #[serde(skip)]
    deviations: Vec<f64>,
    /// Three quarters lie below this.
    pub p75: f64,
    /// 99 of 100 lie below this.
    pub p99: f64,
}

impl Row {
    /// An empty row.
    pub fn new(
        quantity: &str,
        items: &str,
        source: &str,
        unit: &str,
        tolerance: f64,
        reason: &str,
    ) -> Self {
        Self {
            quantity: quantity.into(),
            items: items.into(),
            source: source.into(),
            unit: unit.into(),
            tolerance,
            reason: reason.into(),
            values: 0,
            largest: 0.0,
            at: String::new(),
            deviations: Vec::new(),
            p75: 0.0,
            p99: 0.0,
        }
    }

    /// Takes one deviation; not a number counts as infinite.
    pub fn take(&mut self, deviation: f64, at: impl Into<String>) {
        let size = if deviation.is_nan() {
            f64::INFINITY
        } else {
            deviation.abs()
        };
        self.values += 1;
        self.deviations.push(size);
        if size > self.largest || self.values == 1 {
            self.largest = size;
            self.at = at.into();
        }
    }

    /// Takes ours/theirs - 1.
    pub fn relative(&mut self, ours: f64, theirs: f64, at: impl Into<String>) {
        let deviation = if ours == theirs {
            0.0
        } else {
            ours / theirs - 1.0
        };
        self.take(deviation, at);
    }

    /// The quantiles of what was taken.
    fn summed_up(mut self) -> Self {
        self.deviations.sort_by(f64::total_cmp);
        let share = |share: usize| {
            let place = self.deviations.len() * share / 100;
            self.deviations.get(place).copied().unwrap_or(self.largest)
        };
        (self.p75, self.p99) = (share(75), share(99));
        self
    }

    fn holds(&self) -> bool {
        self.values > 0 && self.largest <= self.tolerance
    }
}

/// A table of `tests/reference`, read when this is built: WebAssembly has no files.
#[macro_export]
macro_rules! table {
    ($name:literal) => {
        serde_json::from_str::<serde_json::Value>(include_str!(concat!(
            "../../../../tests/reference/",
            $name
        )))
        .unwrap()
    };
}

/// A number of a table.
pub fn number(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

/// The elements of a list.
pub fn list(value: &Value) -> &Vec<Value> {
    value.as_array().unwrap()
}

/// A text.
pub fn text(value: &Value) -> &str {
    value.as_str().unwrap()
}

/// `stride`: every how many points of the large map are compared.
fn rows(stride: usize) -> Vec<Row> {
    let mut rows = chain::rows();
    rows.push(chain::map(stride));
    rows.extend(propagators::rows());
    rows.extend(diagrams::rows());
    rows.extend(statistics::rows());
    rows.into_iter().map(Row::summed_up).collect()
}

fn main() -> std::process::ExitCode {
    let rows = rows(1);
    for row in &rows {
        println!("{}", serde_json::to_string(row).unwrap());
    }
    if rows.iter().all(Row::holds) {
        std::process::ExitCode::SUCCESS
    } else {
        std::process::ExitCode::FAILURE
    }
}

#[cfg(test)]
mod tests {
    #[test]
    fn every_quantity_lies_within_its_tolerance() {
        let outside: Vec<_> = super::rows(20)
            .into_iter()
            .filter(|row| !row.holds())
            .collect();
        assert!(outside.is_empty(), "{outside:#?}");
    }
}
