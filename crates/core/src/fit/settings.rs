//! What is asked of a fit.

use crate::error::{Answer, Refusal};
use crate::numerics::minimise::Tolerance;
use serde::{Deserialize, Serialize};

/// What is asked of a fit.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub struct FitSettings {
    /// Ids of the free parameters: those of the hypothesis, `spread`, `background.cross_section`, `background.rate`.
    pub free: Vec<String>,
    /// Constraints; a constrained parameter is free whether listed or not.
    pub constraints: Vec<Constraint>,
    /// Random starts beside the given one, drawn within 3 widths; the best end point counts.
    pub extra_starts: u32,
    /// Seed of those starts.
    pub seed: u64,
}

/// A Gaussian constraint on a parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Constraint {
    /// Id of the parameter.
    pub parameter: String,
    /// Value, in the parameter's unit of the core.
    pub value: f64,
    /// Standard error, > 0.
    pub error: f64,
}

impl FitSettings {
    /// Ids that vary: the free ones, then constrained ones that are not listed.
    ///
    /// # Errors
    /// A parameter listed or constrained twice, a constraint without a positive error.
    pub fn varying(&self) -> Answer<Vec<String>> {
        let mut ids: Vec<String> = Vec::new();
        for id in &self.free {
            if ids.contains(id) {
                return Err(Refusal::new(
                    "fit.free",
                    id,
                    "each parameter once",
                    format!("{id} is listed as free twice"),
                ));
            }
            ids.push(id.clone());
        }
        for (i, c) in self.constraints.iter().enumerate() {
            let field = format!("fit.constraints[{i}]");
            if !(c.error > 0.0 && c.error.is_finite() && c.value.is_finite()) {
                return Err(Refusal::new(
                    field,
                    format!("{} +- {}", c.value, c.error),
                    "a value with an error above 0",
                    format!(
                        "the constraint on {} needs a value and an error above 0",
                        c.parameter
                    ),
                ));
            }
            if !ids.contains(&c.parameter) {
                ids.push(c.parameter.clone());
            }
        }
        Ok(ids)
    }

    /// Stopping rule of the minimiser.
    #[must_use]
    pub fn tolerance(&self) -> Tolerance {
        Tolerance::default()
    }
}
