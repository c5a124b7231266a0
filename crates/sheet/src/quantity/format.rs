//! Writing a quantity: exactly (reads back to the same bits) or for the eye.

use super::Dimension;
use super::unit::{Unit, read_unit};
use serde::{Deserialize, Serialize};
use widthwise_core::math;

/// A number as it is shown: with its unit and, where it has one, its error.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Shown {
    /// Value in the core's unit.
    pub value: f64,
    /// Standard error in the core's unit.
    pub error: Option<f64>,
    /// The core's unit ("GeV", "nb", "" for a number).
    pub unit: String,
    /// For the eye, in the unit people use: "2874.200(44) MeV".
    pub text: String,
}

impl Shown {
    /// A number for the eye: error to two digits, or `digits` significant digits without one;
    /// in `unit` if it fits, else in one that suits the size.
    #[must_use]
    pub fn new(
        value: f64,
        error: Option<f64>,
        dimension: Dimension,
        unit: Option<&Unit>,
        digits: usize,
    ) -> Self {
        Self {
            value,
            error,
            unit: dimension.core_unit().to_string(),
            text: for_the_eye(value, error, dimension, unit, digits),
        }
    }
}

/// The number so that it reads back to the same bits: in `unit` where that can be exact, else in the core's unit.
#[must_use]
pub fn exact(value: f64, error: Option<f64>, dimension: Dimension, unit: Option<&Unit>) -> String {
    let core = read_unit(dimension.core_unit()).unwrap_or_default();
    let unit = unit
        .filter(|u| dimension.to_decimal(1.0, u).is_some())
        .unwrap_or(&core);
    let one = |v: f64| {
        dimension
            .to_decimal(v, unit)
            .map_or_else(|| v.to_string(), |d| d.text())
    };
    let tail = if unit.text.is_empty() {
        String::new()
    } else {
        format!(" {}", unit.text)
    };
    match error {
        Some(error) => format!("{} +- {}{tail}", one(value), one(error)),
        None => format!("{}{tail}", one(value)),
    }
}

/// The number for the eye; see [`Shown::new`].
#[must_use]
pub fn for_the_eye(
    value: f64,
    error: Option<f64>,
    dimension: Dimension,
    unit: Option<&Unit>,
    digits: usize,
) -> String {
    let own;
    let unit = match unit.filter(|u| dimension.conversion(u.dims).is_some()) {
        Some(unit) => unit,
        None => {
            own = suitable_unit(value, dimension);
            &own
        }
    };
    let (Some(shown), error) = (
        dimension.in_unit(value, unit),
        error.and_then(|e| dimension.in_unit(e, unit)),
    ) else {
        return value.to_string();
    };
    let number = digits_with_error(shown, error, digits);
    match unit.text.as_str() {
        "" => number,
        "%" | "°" if error.is_none() => format!("{number} {}", unit.text),
        text => format!("{number} {text}"),
    }
}

/// A number with its error in parentheses at the error's second digit, or to `digits` significant digits.
fn digits_with_error(value: f64, error: Option<f64>, digits: usize) -> String {
    match error {
        Some(error) if error > 0.0 && error.is_finite() && value.is_finite() => {
            // Rounded first: an error of 0.996 is 1.0 and ends one place earlier.
            let rounded: f64 = format!("{error:.1e}").parse().unwrap_or(error);
            let place = math::log10(rounded).floor() as i32 - 1;
            let largest = value.abs().max(rounded);
            if !(-9..=6).contains(&place) || largest >= 1e15 {
                return format!("{value:.5e} +- {rounded:.1e}");
            }
            if place >= 0 {
                let scale = math::powi(10.0, place.unsigned_abs());
                let whole = (value / scale).round() * scale;
                return format!("{whole:.0}({rounded:.0})");
            }
            let places = place.unsigned_abs() as usize;
            let last = (rounded * math::powi(10.0, place.unsigned_abs())).round();
            if rounded >= 1.0 {
                format!("{value:.places$}({rounded:.places$})")
            } else {
                format!("{value:.places$}({last:.0})")
            }
        }
        _ => significant(value, digits),
    }
}

/// `digits` significant digits, with an exponent only where needed.
#[must_use]
pub fn significant(value: f64, digits: usize) -> String {
    if value == 0.0 || !value.is_finite() {
        return format!("{value}");
    }
    let digits = digits.clamp(1, 17);
    let scientific = format!("{value:.*e}", digits - 1);
    let exponent: i32 = scientific
        .split_once('e')
        .and_then(|(_, e)| e.parse().ok())
        .unwrap_or(0);
    if !(-4..=9).contains(&exponent) {
        return scientific;
    }
    let places = (digits as i32 - 1 - exponent).max(0) as usize;
    format!("{value:.places$}")
}

/// A unit in which the number is neither tiny nor huge.
fn suitable_unit(value: f64, dimension: Dimension) -> Unit {
    let magnitude = value.abs();
    let ladder: &[(f64, &str)] = match dimension {
        Dimension::Energy => &[
            (1e3, "TeV"),
            (1.0, "GeV"),
            (1e-4, "MeV"),
            (1e-7, "keV"),
            (0.0, "eV"),
        ],
        Dimension::Momentum => &[
            (1e3, "TeV/c"),
            (1.0, "GeV/c"),
            (1e-4, "MeV/c"),
            (0.0, "keV/c"),
        ],
        Dimension::CrossSection => &[
            (1e6, "mb"),
            (1e4, "ub"),
            (0.5, "nb"),
            (1e-4, "pb"),
            (0.0, "fb"),
        ],
        Dimension::Luminosity => &[(1e6, "fb^-1"), (1e3, "pb^-1"), (0.0, "nb^-1")],
        Dimension::Time => &[(0.0, "h")],
        Dimension::Angle => &[(0.0, "deg")],
        _ => &[],
    };
    let text = ladder
        .iter()
        .find(|(from, _)| magnitude >= *from && magnitude > 0.0)
        .map_or(dimension.core_unit(), |(_, unit)| *unit);
    read_unit(text).unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::super::read;
    use super::*;
    use proptest::prelude::*;

    fn shown(value: f64, error: f64, unit: &str) -> String {
        let unit = read_unit(unit).unwrap();
        for_the_eye(value, Some(error), Dimension::Energy, Some(&unit), 5)
    }

    #[test]
    fn errors_set_the_digits() {
        assert_eq!(shown(2.8742, 44e-6, "MeV"), "2874.200(44) MeV");
        assert_eq!(shown(1.019_455_6, 8.4e-6, "MeV"), "1019.4556(84) MeV");
        assert_eq!(shown(91.1905, 0.0022, "GeV"), "91.1905(22) GeV");
        assert_eq!(shown(3.0, 1.2, "GeV"), "3.0(1.2) GeV");
        assert_eq!(shown(5823.0, 338.0, "GeV"), "5820(340) GeV");
        assert_eq!(shown(0.62e-3, 0.0996e-3, "MeV"), "0.62(10) MeV");
        assert_eq!(shown(1.0, 0.0996, "GeV"), "1.00(10) GeV");
    }

    #[test]
    fn without_error_digits_are_counted() {
        assert_eq!(
            for_the_eye(2.8742, None, Dimension::Energy, None, 6),
            "2.87420 GeV"
        );
        assert_eq!(
            for_the_eye(0.62e-3, None, Dimension::Energy, None, 3),
            "0.620 MeV"
        );
        assert_eq!(
            for_the_eye(0.0769, None, Dimension::CrossSection, None, 3),
            "76.9 pb"
        );
        assert_eq!(for_the_eye(0.0, None, Dimension::Energy, None, 3), "0 GeV");
    }

    proptest! {
        #[test]
        fn exact_text_reads_back_to_the_bit(bits in any::<u64>(), error in 0.0..1e3, unit in 0..4_usize) {
            let value = f64::from_bits(bits);
            prop_assume!(value.is_finite() && (value == 0.0 || (1e-290..1e290).contains(&value.abs())));
            for (dimension, unit) in [
                (Dimension::Energy, ["MeV", "keV", "GeV", "TeV"][unit]),
                (Dimension::CrossSection, ["pb", "nb", "mb", "fb"][unit]),
                (Dimension::Time, ["h", "min", "s", "d"][unit]),
                (Dimension::Angle, ["deg", "rad", "mrad", "deg"][unit]),
                (Dimension::Number, ["", "%", "", "ppm"][unit]),
                (Dimension::LuminosityRate, ["cm^-2 s^-1", "nb^-1/h", "pb^-1/h", "nb^-1/s"][unit]),
            ] {
                let text = exact(value, Some(error), dimension, read_unit(unit).ok().as_ref());
                let back = read(&text, dimension).map_err(|p| TestCaseError::fail(format!("{text}: {}", p.message)))?;
                prop_assert_eq!(back.value.to_bits(), value.to_bits(), "{}", text);
                prop_assert_eq!(back.error.map(f64::to_bits), Some(error.to_bits()), "{}", text);
            }
        }
    }
}
