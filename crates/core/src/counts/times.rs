//! How long to a wanted relative error of the signal, and the floor that no beam time beats.

use serde::{Deserialize, Serialize};

/// Rates at one setting and what is known about them.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SignalRates {
    /// Signal counts per hour.
    pub signal_per_h: f64,
    /// Background counts per hour in the signal region.
    pub background_per_h: f64,
    /// Relative error of the background's expectation, common to all hours (0: known).
    pub background_relative_error: f64,
    /// Ratio tau of an off region counted at the same time; `None`: the background is known from elsewhere.
    pub tau: Option<f64>,
    /// Relative error of the scale (luminosity, efficiency), common to all hours.
    pub scale_relative_error: f64,
    /// Relative change of the signal by one energy error: |dsigma/dW| e_W/sigma.
    pub energy_relative_error: f64,
}

/// Relative error that remains after infinite beam time, and where it comes from.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Floor {
    /// Total, relative.
    pub total: f64,
    /// From the background's error.
    pub background: f64,
    /// From the scale's error.
    pub scale: f64,
    /// From the energy's error.
    pub energy: f64,
}

/// Time to a wanted error.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum HoursTo {
    /// After this many hours of live beam.
    Hours {
        /// h.
        hours: f64,
        /// The floor below it.
        floor: Floor,
    },
    /// No beam time gets there: the floor is above the wish.
    Never {
        /// The floor.
        floor: Floor,
    },
    /// There is no signal at this setting.
    NoSignal,
}

/// Hours until the signal is known to `relative` by counting alone, after subtraction.
///
/// Variance of the signal after t hours: (s + b) t + b t/tau (off region) + (delta_b b t)^2,
/// relative to (s t)^2, plus the squares of scale and energy error. With an off region the
/// background's own error does not enter.
#[must_use]
pub fn hours_to_relative_error(rates: &SignalRates, relative: f64) -> HoursTo {
    let s = rates.signal_per_h;
    if s.is_nan() || s <= 0.0 {
        return HoursTo::NoSignal;
    }
    let b = rates.background_per_h;
    let background = match rates.tau {
        Some(_) => 0.0,
        None => rates.background_relative_error * b / s,
    };
    let floor = Floor {
        total: (background * background
            + rates.scale_relative_error * rates.scale_relative_error
            + rates.energy_relative_error * rates.energy_relative_error)
            .sqrt(),
        background,
        scale: rates.scale_relative_error,
        energy: rates.energy_relative_error,
    };
    let left = relative * relative - floor.total * floor.total;
    if left.is_nan() || left <= 0.0 {
        return HoursTo::Never { floor };
    }
    let off = rates.tau.map_or(0.0, |tau| b / tau);
    HoursTo::Hours {
        hours: (s + b + off) / (s * s * left),
        floor,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rates() -> SignalRates {
        SignalRates {
            signal_per_h: 100.0,
            background_per_h: 0.0,
            background_relative_error: 0.0,
            tau: None,
            scale_relative_error: 0.0,
            energy_relative_error: 0.0,
        }
    }

    /// Pure counting: 1/sqrt(N) = 1 % needs 10,000 events.
    #[test]
    fn pure_counting() {
        let HoursTo::Hours { hours, floor } = hours_to_relative_error(&rates(), 0.01) else {
            panic!("an answer");
        };
        assert!((hours - 100.0).abs() < 1e-10 && floor.total == 0.0);
    }

    /// s = b = 100/h, tau = 2: variance (s + b + b/2) t = 250 t against (100 t)^2: 10 % after 2.5 h.
    #[test]
    fn on_and_off_region() {
        let r = SignalRates {
            background_per_h: 100.0,
            tau: Some(2.0),
            ..rates()
        };
        let HoursTo::Hours { hours, .. } = hours_to_relative_error(&r, 0.1) else {
            panic!("an answer");
        };
        assert!((hours - 2.5).abs() < 1e-12);
    }

    #[test]
    fn never_is_an_answer() {
        let r = SignalRates {
            background_per_h: 200.0,
            background_relative_error: 0.03,
            scale_relative_error: 0.02,
            ..rates()
        };
        let HoursTo::Never { floor } = hours_to_relative_error(&r, 0.05) else {
            panic!("never");
        };
        // 200/100 x 3 % = 6 % from background, 2 % from the scale.
        assert!((floor.total - (0.06f64 * 0.06 + 0.02 * 0.02).sqrt()).abs() < 1e-15);
        let none = SignalRates {
            signal_per_h: 0.0,
            ..rates()
        };
        assert_eq!(hours_to_relative_error(&none, 0.1), HoursTo::NoSignal);
    }
}
