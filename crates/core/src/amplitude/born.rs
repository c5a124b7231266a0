//! What every model of the cross section gives the chain.

use crate::error::{Answer, Warning};

/// A centre-of-mass energy W = `reference_gev` + `offset_gev`, kept in two parts so that
/// W - M keeps its digits next to a narrow pole: there `reference_gev` is the pole's mass.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Energy {
    /// Where it is counted from, GeV.
    pub reference_gev: f64,
    /// Distance from there, GeV.
    pub offset_gev: f64,
}

impl Energy {
    /// An energy given as one number.
    #[inline]
    #[must_use]
    pub fn at(w_gev: f64) -> Self {
        Self {
            reference_gev: w_gev,
            offset_gev: 0.0,
        }
    }
    /// W, GeV.
    #[inline]
    #[must_use]
    pub fn w_gev(self) -> f64 {
        self.reference_gev + self.offset_gev
    }
    /// W - `mass_gev` without loss of digits if the reference is (near) that mass.
    #[inline]
    #[must_use]
    pub fn above_gev(self, mass_gev: f64) -> f64 {
        self.offset_gev + (self.reference_gev - mass_gev)
    }
}

/// Where an integrand has to be looked at closely.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Feature {
    /// A peak or dip: position and full width, GeV.
    Peak {
        /// Position, GeV.
        w_gev: f64,
        /// Full width, GeV (> 0).
        width_gev: f64,
    },
    /// A threshold or other point where the curve is not smooth, GeV.
    Kink {
        /// Position, GeV.
        w_gev: f64,
    },
}

/// A Born cross section as a function of W: pure, cheap, callable at any W > 0.
/// Zero at and below its threshold.
pub trait Born {
    /// The larger of the beams' and the final state's threshold, GeV.
    fn threshold_gev(&self) -> f64;
    /// Last W at which the model is known (a tabulated width ends), GeV: the chain refuses
    /// energies above it; values there are held, not extrapolated.
    fn upper_limit_gev(&self) -> f64 {
        f64::INFINITY
    }
    /// Peaks and kinks that quadrature must know.
    fn features(&self) -> Vec<Feature>;
    /// Names of the contributions, fixed for this model; their sum is the total.
    fn contribution_names(&self) -> Vec<String>;
    /// Each contribution at `at`, nb, into `out` (as long as the names).
    fn contributions_nb(&self, at: Energy, out: &mut [f64]);
    /// The total, nb.
    fn sigma_nb(&self, at: Energy) -> f64;
    /// What the user should know of this model (a stable mediator, a ghost within reach).
    fn warnings(&self) -> Vec<Warning> {
        Vec::new()
    }
    /// Whether initial-state radiation may be applied, and with which warnings.
    ///
    /// # Errors
    /// What is missing before it may.
    fn radiation(&self) -> Answer<Vec<Warning>> {
        Ok(Vec::new())
    }
}

/// Anything that has to be checked before it may be computed with.
pub trait Checked {
    /// The first thing that is wrong, if any; field paths begin with `path`.
    ///
    /// # Errors
    /// The refusal names the field, the value and what is allowed.
    fn check(&self, path: &str) -> Answer<()>;
}
