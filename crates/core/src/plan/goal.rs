//! What the beam time is for: a parameter, a ratio, a splitting.

use super::problem::refuse;
use super::scan_rates::{Parameters, value_of};
use crate::error::Answer;
use crate::scan::Scan;
use serde::{Deserialize, Serialize};

/// A quantity whose error is to be small.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Goal {
    /// As shown.
    pub name: String,
    /// Parameters with their powers (product) or coefficients (sum); one parameter with 1: itself.
    pub terms: Vec<(String, f64)>,
    /// True: sum of coefficient times parameter (a splitting); false: product of powers (a ratio).
    pub sum: bool,
    /// Wanted error, in the quantity's unit; `None`: as small as can be.
    pub wanted_error: Option<f64>,
    /// Weight beside other goals, above 0.
    pub weight: f64,
}

impl Goal {
    /// One parameter.
    #[must_use]
    pub fn parameter(id: &str) -> Self {
        Self {
            name: id.to_string(),
            terms: vec![(id.to_string(), 1.0)],
            sum: false,
            wanted_error: None,
            weight: 1.0,
        }
    }

    /// Its value at the scan's present parameters.
    ///
    /// # Errors
    /// An unknown id.
    pub fn value(&self, scan: &Scan) -> Answer<f64> {
        let mut value = if self.sum { 0.0 } else { 1.0 };
        for (id, factor) in &self.terms {
            let v = value_of(scan, id)?;
            if self.sum {
                value += factor * v;
            } else {
                value *= crate::math::pow(v, *factor);
            }
        }
        Ok(value)
    }

    /// Value and gradient over the free parameters.
    pub(crate) fn gradient(
        &self,
        scan: &Scan,
        parameters: &Parameters,
        width: usize,
    ) -> Answer<(f64, Vec<f64>)> {
        let value = self.value(scan)?;
        let mut gradient = vec![0.0; width];
        for (id, factor) in &self.terms {
            let Some(i) = parameters.free.iter().position(|f| f == id) else {
                return Err(refuse(
                    "plan.goal",
                    id,
                    "a free parameter",
                    &format!(
                        "{id} is not free in the fit, so beam time does not change its error. Free it, or choose another goal."
                    ),
                ));
            };
            gradient[i] += if self.sum || (*factor == 1.0 && self.terms.len() == 1) {
                *factor
            } else {
                value * factor / value_of(scan, id)?
            };
        }
        if !(value.is_finite() && gradient.iter().all(|g| g.is_finite())) {
            return Err(refuse(
                "plan.goal",
                &self.name,
                "a quantity that has a value here",
                &format!("{} has no value at the present parameters.", self.name),
            ));
        }
        Ok((value, gradient))
    }
}
