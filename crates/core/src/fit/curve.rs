//! The curve as a fit sees it: cross sections at the points' places for displaced parameters.

use crate::error::Answer;

/// One parameter of the curve that may be free.
#[derive(Debug, Clone, PartialEq)]
pub struct CurveParameter {
    /// Id as in the sheet: `r1.mass`, ..., `spread`.
    pub id: String,
    /// In words.
    pub label: String,
    /// Unit of the value: "GeV", "nb", "rad" or "".
    pub unit: &'static str,
    /// Present value.
    pub value: f64,
    /// Least allowed value (minus infinity: none).
    pub lower: f64,
    /// Largest allowed value (infinity: none).
    pub upper: f64,
    /// A change that visibly changes the curve.
    pub scale: f64,
}

/// Where a point looks at the curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Site {
    /// Which point (for its own sigma_W and channel).
    pub point: usize,
    /// Which of its angular bins, if it has any.
    pub bin: Option<usize>,
    /// W, GeV.
    pub w_gev: f64,
    /// Multiplies the point's sigma_W.
    pub spread_factor: f64,
}

/// One displaced evaluation.
#[derive(Debug, Clone, PartialEq)]
pub struct Probe {
    /// Values of the free parameters, in the model's order.
    pub values: Vec<f64>,
    /// Added to every W, GeV.
    pub w_shift_gev: f64,
    /// Multiplies every sigma_W.
    pub spread_factor: f64,
}

/// Values of the curve at the sites.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Curve {
    /// sigma, nb.
    pub sigma_nb: Vec<f64>,
    /// d sigma/dW, nb per GeV; empty if not asked for.
    pub slope_nb_per_gev: Vec<f64>,
}

/// A curve with free parameters.
pub trait CurveModel {
    /// The free parameters, in the order of the values.
    fn parameters(&self) -> &[CurveParameter];

    /// Quantities derived from the parameters, if the model has any.
    fn quantities(&self, _values: &[f64]) -> Option<Vec<super::derived::Quantity>> {
        None
    }

    /// The curve at every site for every probe. Probes of one call share as much work as the
    /// model can share, so that their differences carry no noise of different quadratures.
    ///
    /// # Errors
    /// Parameters outside the model's domain.
    fn evaluate(&self, sites: &[Site], probes: &[Probe], with_slope: bool) -> Answer<Vec<Curve>>;
}
