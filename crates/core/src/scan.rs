//! The scan as plain data: everything that the chain, the fit and the plan need to know.
//! `widthwise-sheet` builds it from the scan sheet; nothing here has been typed by a person.

use crate::amplitude::Region;
use crate::amplitude::hypothesis::Hypothesis;
use crate::beam::Beams;
use crate::error::Answer;
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
    /// Events counted in bins of the angle theta of the first final particle against beam 1.
    Bins {
        /// The bins, none of which overlap.
        bins: Vec<CountedBin>,
    },
    /// Events counted with the beams apart: background rate alone.
    BeamsApart {
        /// n.
        n: f64,
    },
    /// A cross section with its Gaussian error, nb.
    CrossSection {
        /// Value, nb.
        sigma_nb: f64,
        /// Standard error, nb.
        error_nb: f64,
    },
}

/// Events counted in one angular bin. Backgrounds of the detector are shared out isotropically.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct CountedBin {
    /// Lower edge.
    pub from: f64,
    /// Upper edge.
    pub to: f64,
    /// Edges are in |cos theta|, else in cos theta.
    pub absolute: bool,
    /// n.
    pub n: f64,
    /// Efficiency in this bin if it is not the point's.
    pub efficiency: Option<f64>,
}

impl CountedBin {
    /// The part of the angular range.
    ///
    /// # Errors
    /// Edges that are not in order.
    pub fn region(&self) -> Answer<Region> {
        if self.absolute {
            Region::abs_cos(self.from, self.to)
        } else {
            Region::cos(self.from, self.to)
        }
    }
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
    /// Name of its exit channel; none: the scan's own hypothesis.
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

/// A further exit channel that is fitted together with the scan's own hypothesis: another final
/// state of the same resonances, or a known peak scanned as a thermometer of offset and spread.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Exit {
    /// As in [`Point::channel`].
    pub name: String,
    /// Its cross section.
    pub hypothesis: Hypothesis,
    /// Its resonances are the scan's: masses, widths and entrance strengths are common.
    pub same_resonances: bool,
    /// Between its cross section and its counts.
    pub detection: Detection,
    /// Least W left after radiation, GeV; used where the scan has radiation.
    pub w_min_gev: Option<f64>,
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
    /// Further exit channels.
    pub exits: Vec<Exit>,
    /// What the data are.
    pub stage: Stage,
    /// Points in use, in the sheet's order.
    pub points: Vec<Point>,
    /// Errors common to points.
    pub common: CommonErrors,
    /// Covariance of pasted cross sections, nb^2, row by row; replaces the points' own errors.
    pub covariance_nb2: Option<Vec<f64>>,
}

impl Scan {
    /// Which exit a point belongs to: 0 the scan's own hypothesis, n the further exit n - 1.
    #[must_use]
    pub fn exit_of(&self, point: &Point) -> usize {
        let name = point.channel.as_deref();
        self.exits
            .iter()
            .position(|e| name == Some(e.name.as_str()))
            .map_or(0, |i| i + 1)
    }

    /// Detection of an exit.
    #[must_use]
    pub fn detection_of(&self, exit: usize) -> &Detection {
        exit.checked_sub(1)
            .and_then(|i| self.exits.get(i))
            .map_or(&self.detection, |e| &e.detection)
    }

    /// The scan as one exit sees it: its hypothesis, radiation cut and detection in the place of
    /// the scan's own, with its points only.
    #[must_use]
    pub fn of_exit(&self, exit: usize) -> Self {
        let mut out = self.clone();
        out.points.retain(|p| self.exit_of(p) == exit);
        out.exits.clear();
        if let Some(e) = exit.checked_sub(1).and_then(|i| self.exits.get(i)) {
            out.hypothesis = e.hypothesis.clone();
            out.detection = e.detection.clone();
            if out.chain.w_min_gev.is_some() && e.w_min_gev.is_some() {
                out.chain.w_min_gev = e.w_min_gev;
            }
        }
        out
    }

    /// Which visit each point belongs to, named by the visit's first point: points of different
    /// channels at one setting of one fill, begun together, are one visit and share its errors.
    #[must_use]
    pub fn visits(&self) -> Vec<usize> {
        visits(&self.points)
    }
}

/// [`Scan::visits`] of a list of points.
#[must_use]
pub(crate) fn visits(points: &[Point]) -> Vec<usize> {
    let one_channel = points.windows(2).all(|p| match p {
        [a, b] => a.channel == b.channel,
        _ => true,
    });
    if one_channel {
        return (0..points.len()).collect();
    }
    let mut out: Vec<usize> = Vec::with_capacity(points.len());
    for (i, p) in points.iter().enumerate() {
        let first = out
            .iter()
            .zip(points)
            .enumerate()
            .find(|(k, (visit, q))| {
                **visit == *k
                    && q.w_gev == p.w_gev
                    && q.w_error_gev == p.w_error_gev
                    && q.group == p.group
                    && q.start_h == p.start_h
                    && !out
                        .iter()
                        .zip(points)
                        .any(|(v, other)| v == k && other.channel == p.channel)
            })
            .map_or(i, |(k, _)| k);
        out.push(first);
    }
    out
}
