//! Collects what is wrong and what was assumed while a sheet is read.

use crate::limits;
use crate::quantity::{Dimension, Reading};
use widthwise_core::error::{Refusal, Warning};

/// Refusals and warnings so far.
#[derive(Debug, Default)]
pub struct Log {
    /// Refusals.
    pub problems: Vec<Refusal>,
    /// Warnings.
    pub warnings: Vec<Warning>,
}

impl Log {
    /// Reads a field; `None` and a refusal if it is not understood.
    pub fn read(&mut self, path: &str, text: &str, dimension: Dimension) -> Option<Reading> {
        match limits::number(path, text, dimension) {
            Ok(reading) => Some(reading),
            Err(refusal) => {
                self.problems.push(refusal);
                None
            }
        }
    }

    /// The value of a field; NaN (and a refusal) if it is not understood. Nothing is computed
    /// from a log with refusals.
    pub fn value(&mut self, path: &str, text: &str, dimension: Dimension) -> f64 {
        self.read(path, text, dimension)
            .map_or(f64::NAN, |reading| reading.value)
    }

    /// The value of a field that may be absent.
    pub fn optional(
        &mut self,
        path: &str,
        text: Option<&String>,
        dimension: Dimension,
    ) -> Option<f64> {
        text.map(|text| self.value(path, text, dimension))
    }

    /// A value and its error, typed together ("0.42(1)") or in two fields, not in both.
    pub fn with_error(
        &mut self,
        (path, text): (&str, Option<&String>),
        (error_path, error_text): (&str, Option<&String>),
        dimension: Dimension,
    ) -> Option<(f64, Option<f64>)> {
        let own = self.optional(error_path, error_text, dimension);
        let reading = self.read(path, text?, dimension)?;
        if let (Some(_), Some(_), Some(text)) = (own, reading.error, error_text) {
            self.refuse(
                error_path,
                text,
                "one error",
                "the error is given twice: beside the value and in its own field",
            );
        }
        Some((reading.value, reading.error.or(own)))
    }

    /// Adds a refusal.
    pub fn refuse(&mut self, path: &str, value: &str, allowed: &str, message: impl Into<String>) {
        self.problems
            .push(Refusal::new(path, value, allowed, message));
    }

    /// Adds a warning, once per code.
    pub fn warn(&mut self, code: &str, message: impl Into<String>) {
        if self.warnings.iter().all(|w| w.code != code) {
            self.warnings.push(Warning::new(code, message));
        }
    }
}
