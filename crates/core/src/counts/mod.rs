//! Counts: expected numbers, rates, times, p-values.
//!
//! mu = L eps B sigma_obs(W) + L sigma_bg + r_bg t, with L the luminosity after dead time.
//! B are decay fractions of the final state's particles, sigma_bg and r_bg detector
//! background that is never radiated.

mod rates;
mod times;

pub use rates::{Rates, rate_and_gradient};
pub use times::{Floor, HoursTo, SignalRates, hours_to_relative_error};

use crate::numerics::probability::poisson_p_value;
use crate::scan::{Detection, Measured, Point};
use serde::{Deserialize, Serialize};

/// What one point's luminosity and time turn a cross section into.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Exposure {
    /// L eps B, 1/nb: multiplies sigma_obs.
    pub signal_nbinv: f64,
    /// L after dead time, 1/nb: multiplies sigma_bg.
    pub luminosity_nbinv: f64,
    /// Live time, h: multiplies r_bg.
    pub live_time_h: f64,
}

impl Exposure {
    /// Of a measured or planned point.
    #[must_use]
    pub fn of(point: &Point, detection: &Detection) -> Self {
        let luminosity_nbinv = point.luminosity_nbinv * point.live_fraction;
        let efficiency = point.efficiency.unwrap_or(detection.efficiency);
        Self {
            signal_nbinv: luminosity_nbinv * efficiency * detection.decay_fraction,
            luminosity_nbinv,
            live_time_h: point.live_time_h,
        }
    }

    /// Of one hour of live beam at the instantaneous luminosity of `detection`.
    #[must_use]
    pub fn per_hour(detection: &Detection) -> Self {
        Self {
            signal_nbinv: detection.luminosity_nbinv_per_h
                * detection.efficiency
                * detection.decay_fraction,
            luminosity_nbinv: detection.luminosity_nbinv_per_h,
            live_time_h: 1.0,
        }
    }

    /// Expected signal counts at an observed cross section, nb.
    #[must_use]
    pub fn signal(&self, sigma_obs_nb: f64) -> f64 {
        self.signal_nbinv * sigma_obs_nb
    }

    /// Expected background counts.
    #[must_use]
    pub fn background(&self, detection: &Detection) -> f64 {
        self.luminosity_nbinv * detection.sigma_bg_nb + self.live_time_h * detection.rate_bg_per_h
    }

    /// Expected counts.
    #[must_use]
    pub fn expected(&self, sigma_obs_nb: f64, detection: &Detection) -> f64 {
        self.signal(sigma_obs_nb) + self.background(detection)
    }
}

/// Seen against expected at one point.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct SeenAgainstExpected {
    /// Counts expected so far, or the cross section in nb.
    pub expected: f64,
    /// Seen, in the same unit.
    pub seen: f64,
    /// (seen - expected)/error; counts: error = sqrt(expected).
    pub pull: f64,
    /// Two-sided p-value: exact Poisson for counts (twice the smaller tail), Gaussian else.
    pub p_value: f64,
}

/// Expected counts of a point (cross section: nb) at the observed cross sections of its angular
/// bins, or its one; `None` if nothing is measured.
#[must_use]
pub fn expected(point: &Point, detection: &Detection, sigma_obs_nb: &[f64]) -> Option<f64> {
    let first = sigma_obs_nb.first().copied();
    match &point.measured {
        Measured::Nothing => None,
        Measured::CrossSection { .. } => first,
        Measured::Counts { .. } => {
            first.map(|s| Exposure::of(point, detection).expected(s, detection))
        }
        Measured::BeamsApart { .. } => Some(point.live_time_h * detection.rate_bg_per_h),
        Measured::Bins { bins } => {
            let all = Exposure::of(point, detection);
            let usual = point.efficiency.unwrap_or(detection.efficiency);
            let mut sum = 0.0;
            for (bin, sigma) in bins.iter().zip(sigma_obs_nb) {
                let efficiency = bin.efficiency.unwrap_or(usual);
                sum += all.signal(*sigma) * efficiency / usual;
                sum += all.background(detection) * bin.region().map_or(0.0, |r| r.fraction());
            }
            Some(sum)
        }
    }
}

/// Compares what a point has seen with what its cross sections let expect; `None` if nothing is
/// measured or expected. Angular bins are compared in their sum.
#[must_use]
pub fn compare(
    point: &Point,
    detection: &Detection,
    sigma_obs_nb: &[f64],
) -> Option<SeenAgainstExpected> {
    let expected = expected(point, detection, sigma_obs_nb)?;
    let n = match &point.measured {
        Measured::Nothing => return None,
        Measured::Counts { n, .. } | Measured::BeamsApart { n } => *n,
        Measured::Bins { bins } => bins.iter().map(|b| b.n).sum(),
        Measured::CrossSection { sigma_nb, error_nb } => {
            return (*error_nb > 0.0).then(|| {
                let pull = (sigma_nb - expected) / error_nb;
                SeenAgainstExpected {
                    expected,
                    seen: *sigma_nb,
                    pull,
                    p_value: crate::math::erfc(pull.abs() / core::f64::consts::SQRT_2),
                }
            });
        }
    };
    (expected > 0.0).then(|| SeenAgainstExpected {
        expected,
        seen: n,
        pull: (n - expected) / expected.sqrt(),
        p_value: poisson_p_value(n, expected),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn detection() -> Detection {
        Detection {
            efficiency: 0.42,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 1.5,
            luminosity_nbinv_per_h: 32.4,
        }
    }

    fn point(n: f64, hours: f64) -> Point {
        Point {
            id: "1".into(),
            group: None,
            w_gev: 2.8742,
            w_error_gev: 0.0,
            sigma_w_gev: None,
            luminosity_nbinv: 32.4 * hours,
            luminosity_error_nbinv: 0.0,
            live_time_h: hours,
            live_fraction: 1.0,
            efficiency: None,
            efficiency_error: 0.0,
            channel: None,
            measured: Measured::Counts { n, off: None },
            start_h: None,
        }
    }

    /// Scenario "Saltmere" by hand: 3 h at the observed 14.76 nb of the peak with 32.4/nb an
    /// hour, efficiency 0.42 and 1.5 beam-gas events an hour: 602.6 + 4.5.
    #[test]
    fn expected_counts_by_hand() {
        let exposure = Exposure::of(&point(587.0, 3.0), &detection());
        assert!(
            (exposure.expected(14.76, &detection()) - (14.76 * 3.0 * 32.4 * 0.42 + 4.5)).abs()
                < 1e-10
        );
        let per_hour = Exposure::per_hour(&detection()).expected(14.76, &detection());
        assert!((3.0 * per_hour - exposure.expected(14.76, &detection())).abs() < 1e-10);
    }

    /// Two-sided exact p-value against scipy.stats.poisson (1.17): n = 5 at mu = 10: 2 x 0.0670859628790.
    #[test]
    fn p_value_of_the_running_point() {
        let mut d = detection();
        d.rate_bg_per_h = 10.0;
        let seen = compare(&point(5.0, 1.0), &d, &[0.0]).unwrap();
        assert!((seen.p_value - 2.0 * 0.067_085_962_879_031_89).abs() < 1e-13);
        assert!((seen.pull + 5.0 / 10.0_f64.sqrt()).abs() < 1e-15);
    }
}
