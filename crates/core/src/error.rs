//! Errors are values: they name the field, the value and what is allowed.

use serde::{Deserialize, Serialize};

/// Why a request cannot be answered. Shown to the user as it stands.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Refusal {
    /// Path of the field in the scan sheet, e.g. `model.resonances[0].width`; empty if none.
    pub field: String,
    /// The value as given (text, so that NaN and typed nonsense survive).
    pub value: String,
    /// What is allowed, as a clause: "a width above 0".
    pub allowed: String,
    /// One plain sentence: what is wrong, and what would help.
    pub message: String,
}

impl Refusal {
    /// A refusal about one field.
    #[must_use]
    pub fn new(
        field: impl Into<String>,
        value: impl ToString,
        allowed: impl Into<String>,
        message: impl Into<String>,
    ) -> Self {
        Self {
            field: field.into(),
            value: value.to_string(),
            allowed: allowed.into(),
            message: message.into(),
        }
    }
}

impl core::fmt::Display for Refusal {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        if self.field.is_empty() {
            return write!(f, "{}", self.message);
        }
        write!(
            f,
            "{}: {} (given: {}; allowed: {})",
            self.field, self.message, self.value, self.allowed
        )
    }
}

impl core::error::Error for Refusal {}

/// Something the user should know although there is an answer.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Warning {
    /// Short stable code, e.g. `parameter-at-limit`.
    pub code: String,
    /// One plain sentence.
    pub message: String,
}

impl Warning {
    /// A warning.
    #[must_use]
    pub fn new(code: impl Into<String>, message: impl Into<String>) -> Self {
        Self {
            code: code.into(),
            message: message.into(),
        }
    }
}

/// Result of everything in this crate that can be refused.
pub type Answer<T> = Result<T, Refusal>;
