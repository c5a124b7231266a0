//! Reading a quantity.

use super::decimal::{Decimal, read_exponent};
use super::unit::{Unit, read_power_of_ten, read_unit};
use super::{Dimension, decimal};
use widthwise_core::error::Refusal;

/// Longest text of one number; longer is no number but a mistake of the clipboard.
const LONGEST: usize = 200;
/// A bare luminosity from here on can only be meant in cm^-2 s^-1.
const BARE_LUMINOSITY_FROM: f64 = 1e24;

/// A number that was read.
#[derive(Debug, Clone, PartialEq)]
pub struct Reading {
    /// Value in the core's unit.
    pub value: f64,
    /// Standard error in the core's unit, where one was typed.
    pub error: Option<f64>,
    /// The unit it was typed in.
    pub unit: Unit,
}

/// Why a text is not a number of the wanted kind.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// What is allowed, as a clause.
    pub allowed: String,
    /// One plain sentence.
    pub message: String,
}

impl Problem {
    fn new(dimension: Dimension, message: impl Into<String>) -> Self {
        Self {
            allowed: format!("a number with its unit: {}", dimension.units()),
            message: message.into(),
        }
    }

    /// The refusal of a field.
    #[must_use]
    pub fn at(self, field: &str, value: &str) -> Refusal {
        Refusal::new(field, value, self.allowed, self.message)
    }
}

/// Reads `text` as a number of `dimension`.
///
/// # Errors
/// Empty text, text that is no number, NaN and infinity, a missing or wrong unit, a negative error,
/// a number too large or too small to be held.
pub fn read(text: &str, dimension: Dimension) -> Result<Reading, Problem> {
    read_with(text, dimension, None)
}

/// As [`read`]; a number without unit is taken in `unit` (a column's header says it).
///
/// # Errors
/// As [`read`].
pub fn read_with(
    text: &str,
    dimension: Dimension,
    unit: Option<&Unit>,
) -> Result<Reading, Problem> {
    let problem = |message: String| Problem::new(dimension, message);
    if text.len() > LONGEST {
        return Err(problem("this is too long to be one number".into()));
    }
    let text = normalised(text);
    let text = text.trim();
    if text.is_empty() {
        return Err(problem("a number is missing here".into()));
    }
    if dimension == Dimension::Time
        && let Some(reading) = read_duration(text)
    {
        return Ok(reading);
    }
    let parts = split(text).map_err(problem)?;
    let found = match (parts.unit.is_empty(), unit) {
        (true, Some(unit)) => unit.clone(),
        _ => read_unit(parts.unit).map_err(problem)?,
    };
    let found = implied_unit(found, &parts.value, dimension);
    if dimension.conversion(found.dims).is_none() {
        return Err(problem(wrong_unit(&found, dimension, text)));
    }
    let value = dimension.to_core(&parts.value, &found).ok_or_else(|| {
        problem(format!(
            "\"{text}\" is too large or too small to be computed with"
        ))
    })?;
    let error = match parts.error {
        ErrorPart::None => None,
        ErrorPart::Same(error) => Some(core_error(&error, &found, dimension, text)?),
        ErrorPart::Own(error, own) => {
            let own = read_unit(own).map_err(problem)?;
            let relative = Dimension::Number.conversion(own.dims).is_some();
            if relative && Dimension::Number.conversion(found.dims).is_none() {
                let ratio = core_error(&error, &own, Dimension::Number, text)?;
                Some(value.abs() * ratio)
            } else {
                Some(core_error(&error, &own, dimension, text)?)
            }
        }
    };
    Ok(Reading {
        value,
        error,
        unit: found,
    })
}

/// One spelling for signs that have several.
fn normalised(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '\u{2212}' | '\u{2013}' => '-',
            '\u{a0}' | '\u{2009}' | '\u{202f}' => ' ',
            other => other,
        })
        .collect()
}

enum ErrorPart<'a> {
    None,
    Same(Decimal),
    Own(Decimal, &'a str),
}

struct Parts<'a> {
    value: Decimal,
    error: ErrorPart<'a>,
    unit: &'a str,
}

/// value, error and unit of "v unit", "v(e) unit", "v +- e unit", "(v +- e) unit", "v unit +- e unit".
fn split(text: &str) -> Result<Parts<'_>, String> {
    let not_a_number = || no_number(text);
    if let Some(inner) = text.strip_prefix('(') {
        let (inner, unit) = inner.split_once(')').ok_or_else(not_a_number)?;
        let (value, rest) = read_number(inner.trim_start()).ok_or_else(not_a_number)?;
        let error = strip_plus_minus(rest).ok_or_else(not_a_number)?;
        let (error, rest) = read_number(error).ok_or_else(not_a_number)?;
        if !rest.trim().is_empty() {
            return Err(not_a_number());
        }
        let (value, error, unit) = scaled(value, Some(error), unit);
        return Ok(Parts {
            value,
            error: error.map_or(ErrorPart::None, ErrorPart::Same),
            unit,
        });
    }
    let (value, rest) = Decimal::read_mantissa(text).ok_or_else(not_a_number)?;
    if let Some((error, rest)) = read_parenthesis(&value, rest)? {
        let (exponent, rest) = read_exponent(rest).unwrap_or((0, rest));
        let (value, error, unit) =
            scaled(value.shifted(exponent), Some(error.shifted(exponent)), rest);
        return Ok(Parts {
            value,
            error: error.map_or(ErrorPart::None, ErrorPart::Same),
            unit,
        });
    }
    let (value, rest) = read_number(text).ok_or_else(not_a_number)?;
    // The error may follow the number or the unit.
    let Some((unit, after)) = split_plus_minus(rest) else {
        reject_leftovers(rest, text)?;
        return Ok(Parts {
            value,
            error: ErrorPart::None,
            unit: rest.trim(),
        });
    };
    let (error, own) = read_number(after).ok_or_else(not_a_number)?;
    let own = own.trim();
    reject_leftovers(own, text)?;
    Ok(match (unit.trim(), own) {
        (unit, "") => Parts {
            value,
            error: ErrorPart::Same(error),
            unit,
        },
        ("", own) => Parts {
            value,
            error: ErrorPart::Same(error),
            unit: own,
        },
        (unit, own) => Parts {
            value,
            error: ErrorPart::Own(error, own),
            unit,
        },
    })
}

/// A number with an exponent in any spelling: "9.0e30", "9.0 x 10^30", "9.0×10³⁰".
fn read_number(text: &str) -> Option<(Decimal, &str)> {
    let (number, rest) = Decimal::read(text.trim_start())?;
    let after = rest.trim_start();
    if let Some(power) = after.strip_prefix(['x', '×', '*', '·'])
        && let Some((exponent, rest)) = read_power_of_ten(power.trim_start())
    {
        return Some((number.shifted(exponent), rest));
    }
    Some((number, rest))
}

/// A power of ten before the unit of "(v +- e) x 10^30 unit" belongs to both numbers.
fn scaled(value: Decimal, error: Option<Decimal>, rest: &str) -> (Decimal, Option<Decimal>, &str) {
    let after = rest.trim_start();
    if let Some(power) = after.strip_prefix(['x', '×', '*', '·'])
        && let Some((exponent, rest)) = read_power_of_ten(power.trim_start())
    {
        return (
            value.shifted(exponent),
            error.map(|e| e.shifted(exponent)),
            rest.trim(),
        );
    }
    (value, error, rest.trim())
}

/// The error in "19.6(4)" (last digits) or "19.6(1.2)" (as it stands).
fn read_parenthesis<'a>(
    value: &Decimal,
    rest: &'a str,
) -> Result<Option<(Decimal, &'a str)>, String> {
    let Some(inner) = rest.strip_prefix('(') else {
        return Ok(None);
    };
    let (digits, rest) = inner
        .split_once(')')
        .ok_or_else(|| "a closing parenthesis is missing".to_string())?;
    let (error, left) = Decimal::read_mantissa(digits.trim())
        .ok_or_else(|| format!("\"({digits})\" is not an error in the last digits"))?;
    if !left.is_empty() || digits.trim_start().starts_with(['+', '-']) {
        return Err(format!("\"({digits})\" is not an error in the last digits"));
    }
    let error = if digits.contains('.') {
        error
    } else {
        error.shifted(value.last_place())
    };
    Ok(Some((error, rest)))
}

const PLUS_MINUS: [&str; 4] = ["+-", "+/-", "±", "\\pm"];

fn split_plus_minus(text: &str) -> Option<(&str, &str)> {
    PLUS_MINUS.iter().find_map(|sign| text.split_once(sign))
}

fn strip_plus_minus(text: &str) -> Option<&str> {
    let text = text.trim_start();
    PLUS_MINUS.iter().find_map(|sign| text.strip_prefix(sign))
}

fn reject_leftovers(unit: &str, text: &str) -> Result<(), String> {
    let unit = unit.trim_start();
    if unit.starts_with(',') {
        return Err(format!(
            "\"{text}\" has a comma: the decimal sign is a point here"
        ));
    }
    if let Some(first) = unit.chars().next()
        && (first == '(' || first == ')')
    {
        return Err(format!(
            "\"{text}\" has a parenthesis where a unit should be"
        ));
    }
    Ok(())
}

fn no_number(text: &str) -> String {
    let lower = text.to_ascii_lowercase();
    let bare = lower.trim_start_matches(['+', '-']);
    if bare.starts_with("nan") || bare.starts_with("inf") || text.contains('∞') {
        return format!("\"{text}\" cannot be computed with");
    }
    format!("\"{text}\" is not a number")
}

/// Zero needs no unit, and a luminosity of 1e31 can only be per cm^2 and second.
fn implied_unit(found: Unit, value: &Decimal, dimension: Dimension) -> Unit {
    let bare = found.dims == super::unit::NONE && found.text.is_empty();
    let luminosity = dimension == Dimension::LuminosityRate
        && value.to_f64().is_some_and(|v| v >= BARE_LUMINOSITY_FROM);
    if !bare {
        return found;
    }
    let implied = if luminosity {
        "cm^-2 s^-1"
    } else if value.is_zero() {
        dimension.core_unit()
    } else {
        return found;
    };
    read_unit(implied).unwrap_or(found)
}

fn wrong_unit(unit: &Unit, dimension: Dimension, text: &str) -> String {
    if unit.text.is_empty() {
        return format!("\"{text}\" has no unit; {} needs one", dimension.noun());
    }
    match Dimension::of(unit) {
        Some(other) => format!(
            "{} is the unit of {}, not of {}",
            unit.text,
            other.noun(),
            dimension.noun()
        ),
        None => format!("{} is no unit of {}", unit.text, dimension.noun()),
    }
}

fn core_error(
    error: &Decimal,
    unit: &Unit,
    dimension: Dimension,
    text: &str,
) -> Result<f64, Problem> {
    if error.is_negative() {
        return Err(Problem::new(
            dimension,
            format!("the error in \"{text}\" is negative"),
        ));
    }
    if dimension.conversion(unit.dims).is_none() {
        return Err(Problem::new(dimension, wrong_unit(unit, dimension, text)));
    }
    dimension.to_core(error, unit).ok_or_else(|| {
        Problem::new(
            dimension,
            format!("the error in \"{text}\" is too large or too small to be computed with"),
        )
    })
}

/// "1h20", "1h20m", "1 h 20 min", "1:20" (hours and minutes), "2d 3h": sums of whole units.
fn read_duration(text: &str) -> Option<Reading> {
    if let Some((h, min)) = text.split_once(':') {
        let h = whole_number(h)?;
        let min = whole_number(min).filter(|v| *v < 60 && min.len() == 2)?;
        return minutes(h.checked_mul(60)?.checked_add(min)?);
    }
    let (h, rest) = Decimal::read_mantissa(text)?;
    let rest = rest.trim_start();
    let after_days = rest.strip_prefix('d').filter(|r| starts_with_number(r));
    if let Some(after) = after_days {
        let days = h.times(24).to_f64().filter(|d| *d >= 0.0)?;
        let after = after.trim();
        let tail = read_duration(after).or_else(|| read(after, Dimension::Time).ok())?;
        return Some(Reading {
            value: days + tail.value,
            ..tail
        });
    }
    let after = rest.strip_prefix('h').filter(|r| starts_with_number(r))?;
    let whole_hours: i64 = h.text().parse().ok().filter(|v| *v >= 0)?;
    let (min, tail) = decimal::read_integer(after.trim_start())?;
    let tail = tail.trim();
    let complete = matches!(tail, "" | "m" | "min") && (0..60).contains(&min);
    complete
        .then(|| minutes(whole_hours.checked_mul(60)?.checked_add(min)?))
        .flatten()
}

fn whole_number(text: &str) -> Option<i64> {
    decimal::read_integer(text)
        .filter(|(value, rest)| *value >= 0 && rest.is_empty())
        .map(|(value, _)| value)
}

fn starts_with_number(text: &str) -> bool {
    text.trim_start().starts_with(|c: char| c.is_ascii_digit())
}

fn minutes(count: i64) -> Option<Reading> {
    let unit = read_unit("min").ok()?;
    let (number, _) = Decimal::read(&count.to_string())?;
    let value = Dimension::Time.to_core(&number, &unit)?;
    Some(Reading {
        value,
        error: None,
        unit,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use Dimension::*;

    fn both(text: &str, dimension: Dimension) -> (f64, Option<f64>) {
        let r = read(text, dimension).unwrap_or_else(|p| panic!("{text}: {}", p.message));
        (r.value, r.error)
    }

    #[test]
    fn numbers_as_people_write_them() {
        assert_eq!(both("2874.20(5) MeV", Energy), (2.8742, Some(5e-5)));
        assert_eq!(both("2.87420(5) GeV/c^2", Energy), (2.8742, Some(5e-5)));
        assert_eq!(both("19.6(4) nb", CrossSection), (19.6, Some(0.4)));
        assert_eq!(both("19.6(1.2)nb", CrossSection), (19.6, Some(1.2)));
        assert_eq!(both("0.71 +- 0.02 MeV", Energy), (0.71e-3, Some(0.02e-3)));
        assert_eq!(both("(0.71 ± 0.02) MeV", Energy), (0.71e-3, Some(0.02e-3)));
        assert_eq!(both("2874.2 MeV ± 50 keV", Energy), (2.8742, Some(5e-5)));
        assert_eq!(both("200 nb ± 3 %", CrossSection), (200.0, Some(6.0)));
        assert_eq!(both("3.0(5) %", Number), (0.03, Some(0.005)));
        assert_eq!(both("1.5(2)e-3 nb", CrossSection), (1.5e-3, Some(2e-4)));
        assert_eq!(both("9.0e30 cm^-2 s^-1", LuminosityRate).0, 32.4);
        assert_eq!(both("9.0 x 10^30 cm-2s-1", LuminosityRate).0, 32.4);
        assert_eq!(both("9.0×10³⁰ cm⁻²s⁻¹", LuminosityRate).0, 32.4);
        assert_eq!(both("0.9 1e31 cm-2s-1", LuminosityRate).0, 32.4);
        assert_eq!(both("9.0e30", LuminosityRate).0, 32.4);
        assert_eq!(both("32.4 nb^-1/h", LuminosityRate).0, 32.4);
        assert_eq!(both("0.09 pb^-1/h", LuminosityRate).0, 90.0);
        assert_eq!(both("12.5 /nb", Luminosity).0, 12.5);
        assert_eq!(both("0.0125 pb-1", Luminosity).0, 12.5);
        assert_eq!(both("1.5 events/h", Rate).0, 1.5);
        assert_eq!(both("1 Hz", Rate).0, 3600.0);
        assert_eq!(both("4.455 GeV/c", Momentum).0, 4.455);
        assert_eq!(both("1 fm", Radius).0, 5.067_730_7);
        assert_eq!(both("180 deg", Angle).0, core::f64::consts::PI);
        assert_eq!(
            both("−130°", Angle).0,
            -130.0 * (core::f64::consts::PI / 180.0)
        );
        assert_eq!(both("0", Energy).0, 0.0);
        assert_eq!(both("1.9 nb/MeV", CrossSectionPerEnergy(1)).0, 1900.0);
        assert_eq!(both("98", Number).0, 98.0);
        assert_eq!(both("2.5 ub", CrossSection).0, 2500.0);
    }

    #[test]
    fn times_as_people_write_them() {
        for text in ["1h20", "1h20m", "1 h 20 min", "1:20", "80 min", "4800 s"] {
            assert_eq!(both(text, Time).0, 80.0 / 60.0, "{text}");
        }
        assert_eq!(both("1d 2h", Time).0, 26.0);
        assert_eq!(both("1d 2h30", Time).0, 26.5);
        assert_eq!(both("2.5 h", Time).0, 2.5);
        for text in ["1h70", "1:5", "1:75", "h", "-1:20", "1h20s", "3"] {
            assert!(read(text, Time).is_err(), "{text}");
        }
    }

    #[test]
    fn the_same_number_in_other_units_is_the_same_bits() {
        for (a, b) in [
            ("2874.2 MeV", "2.8742 GeV"),
            ("0.62 MeV", "620 keV"),
            ("24.6 eV", "2.46e-8 GeV"),
        ] {
            assert_eq!(both(a, Energy).0.to_bits(), both(b, Energy).0.to_bits());
        }
    }

    #[test]
    fn everything_else_is_refused_with_a_sentence() {
        for (text, says) in [
            ("", "missing"),
            ("   ", "missing"),
            ("NaN", "cannot be computed with"),
            ("-inf MeV", "cannot be computed with"),
            ("hello", "is not a number"),
            ("2874", "no unit"),
            ("2874 nb", "is the unit of a cross section"),
            ("2874 MeV/c", "is the unit of a momentum"),
            ("2874 furlong", "not a unit known"),
            ("2874 mev", "capital M"),
            ("2874,2 MeV", "comma"),
            ("2874.2(5 MeV", "parenthesis"),
            ("1e400 MeV", "too large"),
            ("1e-400 MeV", "too small"),
            ("5 +- -3 MeV", "negative"),
            ("1 2 MeV", "not a unit"),
            ("5 ± MeV", "is not a number"),
            ("0x10 MeV", "not a unit"),
        ] {
            let problem = read(text, Energy).expect_err(text);
            assert!(
                problem.message.contains(says),
                "{text}: {}",
                problem.message
            );
            assert!(problem.allowed.contains("MeV"));
        }
        assert!(read(&"9".repeat(300), Number).is_err());
    }

    proptest::proptest! {
        #[test]
        fn any_text_is_read_or_refused(text in ".{0,40}") {
            for dimension in [Energy, Time, Number, LuminosityRate, Angle] {
                if let Ok(r) = read(&text, dimension) {
                    proptest::prop_assert!(r.value.is_finite() && r.error.is_none_or(|e| e >= 0.0));
                }
            }
        }

        #[test]
        fn nearly_numbers_are_read_or_refused(text in "[-+]?[0-9.]{0,6}[(]?[0-9.]{0,2}[)]?[eE]?[-0-9]{0,3} ?[a-zA-Zµ/^%0-9 ±+-]{0,8}") {
            for dimension in [Energy, Time, Number, LuminosityRate, Angle] {
                if let Ok(r) = read(&text, dimension) {
                    proptest::prop_assert!(r.value.is_finite() && r.error.is_none_or(|e| e >= 0.0));
                }
            }
        }
    }
}
