//! The scan as plain data: everything that the chain, the fit and the plan need to know.
//! `widthwise-sheet` builds it from the scan sheet; nothing here has been typed by a person.

use crate::amplitude::hypothesis::Hypothesis;
use crate::beam::Beams;
use serde::{Deserialize, Serialize};

/// How far the measured points are from the Born cross section: where the chain starts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Stage {
    /// As the detector saw them: radiation and spread act on the model.
    Observed,
    /// Radiation removed: only the spread acts.
    RadiationRemoved,
    /// Radiation and spread removed: the Born curve is compared.
    Born,
}

/// Initial-state radiation and accuracy of the chain.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct ChainSettings {
    /// Least W that is left after radiation, in GeV; `None`: no radiation (heavy or unradiating beams).
    pub w_min_gev: Option<f64>,
    /// Spread of W.
    pub spread: Spread,
    /// Requested relative accuracy of the observed cross section, 1e-3 to 1e-9.
    pub accuracy: f64,
}

/// Spread of W at a nominal setting.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum Spread {
    /// Monochromatic.
    None,
    /// Gaussian; `sigma_gev` at `w0_gev`, growing as (W/W0)^`power` between settings, constant inside the integral.
    Gaussian {
        /// Standard deviation of W at W0, GeV.
        sigma_gev: f64,
        /// Where it holds, GeV.
        w0_gev: f64,
        /// Growth exponent: 0, 1 or 2.
        power: f64,
    },
    /// Piecewise-linear density through (offset in GeV, weight), zero outside, divided by its area, not re-centred.
    Table {
        /// Offsets strictly rising.
        rows: Vec<(f64, f64)>,
    },
}

/// What lies between an observed cross section and counts.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Detection {
    /// Efficiency where a point brings none, 0 to 1.
    pub efficiency: f64,
    /// Product of the decay fractions of the final state's particles into what is detected (not the resonance's own).
    pub decay_fraction: f64,
    /// Visible background cross section, nb, at nominal W, no efficiency.
    pub sigma_bg_nb: f64,
    /// Background rate, counts per hour of live time.
    pub rate_bg_per_h: f64,
    /// Instantaneous luminosity, 1/nb per hour.
    pub luminosity_nbinv_per_h: f64,
}

/// What a point has measured.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub enum Measured {
    /// Nothing yet (planned or running).
    Nothing,
    /// Events counted, and off-region counts n_off ~ Poisson(tau b) with tau where there are any.
    Counts {
        /// n.
        n: f64,
        /// (n_off, tau).
        off: Option<(f64, f64)>,
    },
    /// A cross section with its Gaussian error, nb.
    CrossSection {
        /// Value, nb.
        sigma_nb: f64,
        /// Standard error, nb.
        error_nb: f64,
    },
}

/// One row of data, in units of the core.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Point {
    /// The row's id in the sheet.
    pub id: String,
    /// Fill or group; points with the same text share the group's errors.
    pub group: Option<String>,
    /// True (calibrated) W, GeV.
    pub w_gev: f64,
    /// Its own error, GeV (0: none).
    pub w_error_gev: f64,
    /// sigma_W of this point if known, GeV.
    pub sigma_w_gev: Option<f64>,
    /// Integrated luminosity, 1/nb.
    pub luminosity_nbinv: f64,
    /// Its statistical error, 1/nb (0: none).
    pub luminosity_error_nbinv: f64,
    /// Live time, h: multiplies the background rate.
    pub live_time_h: f64,
    /// Live fraction: multiplies the luminosity.
    pub live_fraction: f64,
    /// Efficiency of this point if given.
    pub efficiency: Option<f64>,
    /// Its error.
    pub efficiency_error: f64,
    /// Exit channel name, if several.
    pub channel: Option<String>,
    /// The measurement.
    pub measured: Measured,
    /// Start, hours since the first point's start (for residuals against time), if known.
    pub start_h: Option<f64>,
}

/// Errors common to points; each is a nuisance with a unit Gaussian constraint that acts on the
/// model, never on a covariance of measured values. 0 (or `None`): no such error.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub struct CommonErrors {
    /// Energy offset common to all points, GeV.
    pub energy_gev: f64,
    /// Energy slope r common to all points: W becomes W (1 + r eta).
    pub energy_slope: f64,
    /// Energy error common to a fill or group, GeV.
    pub group_energy_gev: f64,
    /// Covariance of the points' energies, GeV^2, row by row, in the points' order.
    pub energy_covariance_gev2: Option<Vec<f64>>,
    /// Relative scale error of the signal common to all points.
    pub scale: f64,
    /// Relative scale error of the signal common to a fill or group.
    pub group_scale: f64,
    /// Relative luminosity error common to all points (signal and background cross section).
    pub luminosity: f64,
    /// Relative luminosity error common to a fill or group.
    pub group_luminosity: f64,
    /// Error of d ln(efficiency)/dW, 1/GeV, about the mean W of the points.
    pub efficiency_slope_per_gev: f64,
    /// Relative error of sigma_W common to all points (do not use beside a constraint on `spread`).
    pub spread: f64,
    /// Relative error of sigma_W of each point on its own.
    pub point_spread: f64,
    /// Scale factors are 1 + delta eta (Gaussian) instead of exp(delta eta) (log-normal).
    pub gaussian_factors: bool,
}

/// The whole scan.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Scan {
    /// Beams.
    pub beams: Beams,
    /// What is believed of the cross section.
    pub hypothesis: Hypothesis,
    /// Radiation, spread, accuracy.
    pub chain: ChainSettings,
    /// Between cross section and counts.
    pub detection: Detection,
    /// What the data are.
    pub stage: Stage,
    /// Points in use, in the sheet's order.
    pub points: Vec<Point>,
    /// Errors common to points.
    pub common: CommonErrors,
    /// Covariance of pasted cross sections, nb^2, row by row; replaces the points' own errors.
    pub covariance_nb2: Option<Vec<f64>>,
}
