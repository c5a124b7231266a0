//! Units as people write them: "MeV/c^2", "nb-1", "/nb", "cm-2s-1", "nb^-1/h", "1e31 cm^-2 s^-1".

use super::decimal::{read_exponent, read_integer};

/// Powers of the base dimensions; base units GeV, cm, s, rad. `c` is kept apart so that a
/// momentum (GeV/c) can be told from an energy.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Dims {
    /// Power of energy.
    pub energy: i32,
    /// Power of length.
    pub length: i32,
    /// Power of time.
    pub time: i32,
    /// Power of angle.
    pub angle: i32,
    /// Power of the speed of light as written.
    pub c: i32,
}

impl Default for Unit {
    /// The unit 1.
    fn default() -> Self {
        Self {
            dims: NONE,
            pow10: 0,
            numerator: 1,
            denominator: 1,
            factor: 1.0,
            text: String::new(),
        }
    }
}

/// A unit: base units times 10^`pow10` times `numerator`/`denominator` times `factor`.
#[derive(Debug, Clone, PartialEq)]
pub struct Unit {
    /// What it measures.
    pub dims: Dims,
    /// Power of ten.
    pub pow10: i64,
    /// Whole factor (3600 for the hour).
    pub numerator: u64,
    /// Whole divisor.
    pub denominator: u64,
    /// Factor that is no ratio of whole numbers (degrees); 1 else.
    pub factor: f64,
    /// As written.
    pub text: String,
}

/// Symbols: name, powers, power of ten, whole factor, other factor.
struct Symbol {
    dims: Dims,
    pow10: i64,
    whole: u64,
    factor: f64,
}

const ENERGY: Dims = dims(1, 0, 0, 0, 0);
const LENGTH: Dims = dims(0, 1, 0, 0, 0);
const AREA: Dims = dims(0, 2, 0, 0, 0);
const TIME: Dims = dims(0, 0, 1, 0, 0);
const PER_TIME: Dims = dims(0, 0, -1, 0, 0);
const ANGLE: Dims = dims(0, 0, 0, 1, 0);
const LIGHT: Dims = dims(0, 0, 0, 0, 1);
/// No dimension.
pub const NONE: Dims = dims(0, 0, 0, 0, 0);

/// Powers of energy, length, time, angle, c.
pub const fn dims(energy: i32, length: i32, time: i32, angle: i32, c: i32) -> Dims {
    Dims {
        energy,
        length,
        time,
        angle,
        c,
    }
}

fn symbol(name: &str) -> Option<Symbol> {
    let plain = |dims, pow10| {
        Some(Symbol {
            dims,
            pow10,
            whole: 1,
            factor: 1.0,
        })
    };
    let whole = |dims, whole| {
        Some(Symbol {
            dims,
            pow10: 0,
            whole,
            factor: 1.0,
        })
    };
    match name {
        "eV" => plain(ENERGY, -9),
        "keV" | "kev" | "KeV" | "KEV" => plain(ENERGY, -6),
        "MeV" | "MEV" | "Mev" => plain(ENERGY, -3),
        "GeV" | "gev" | "GEV" | "Gev" => plain(ENERGY, 0),
        "TeV" | "tev" | "TEV" | "Tev" => plain(ENERGY, 3),
        "b" | "barn" => plain(AREA, -24),
        "mb" => plain(AREA, -27),
        "ub" | "µb" | "μb" | "mub" => plain(AREA, -30),
        "nb" => plain(AREA, -33),
        "pb" => plain(AREA, -36),
        "fb" => plain(AREA, -39),
        "ab" => plain(AREA, -42),
        "cm" => plain(LENGTH, 0),
        "m" => plain(LENGTH, 2),
        "fm" => plain(LENGTH, -13),
        "s" | "sec" | "second" | "seconds" => plain(TIME, 0),
        "ms" => plain(TIME, -3),
        "min" | "minute" | "minutes" => whole(TIME, 60),
        "h" | "hr" | "hrs" | "hour" | "hours" => whole(TIME, 3600),
        "d" | "day" | "days" => whole(TIME, 86_400),
        "Hz" => plain(PER_TIME, 0),
        "mHz" => plain(PER_TIME, -3),
        "kHz" => plain(PER_TIME, 3),
        "rad" => plain(ANGLE, 0),
        "mrad" => plain(ANGLE, -3),
        "urad" | "µrad" | "μrad" => plain(ANGLE, -6),
        "deg" | "°" | "degree" | "degrees" => Some(Symbol {
            dims: ANGLE,
            pow10: 0,
            whole: 1,
            factor: core::f64::consts::PI / 180.0,
        }),
        "c" => plain(LIGHT, 0),
        "%" | "percent" => plain(NONE, -2),
        "‰" => plain(NONE, -3),
        "ppm" => plain(NONE, -6),
        "event" | "events" | "evts" | "count" | "counts" => plain(NONE, 0),
        _ => None,
    }
}

/// Reads a unit. Empty text is the unit 1.
///
/// # Errors
/// One sentence that names the part that was not understood.
pub fn read_unit(text: &str) -> Result<Unit, String> {
    let text = text.trim();
    let mut unit = Unit {
        text: text.to_string(),
        ..Unit::default()
    };
    let mut rest = text;
    if let Some((power, after)) = read_power_of_ten(rest) {
        unit.pow10 = power;
        rest = after;
    }
    let mut inverse = false;
    let mut slash = false;
    loop {
        rest = rest.trim_start();
        let Some(first) = rest.chars().next() else {
            break;
        };
        if matches!(first, '*' | '·' | '.' | '×') {
            rest = rest.get(first.len_utf8()..).unwrap_or("");
            continue;
        }
        if first == '/' {
            if slash {
                return Err(format!("\"{text}\" has two strokes in a row"));
            }
            (inverse, slash) = (true, true);
            rest = rest.get(1..).unwrap_or("");
            continue;
        }
        if first == '1' {
            rest = rest.get(1..).unwrap_or("");
            if !rest.trim_start().starts_with('/') {
                return Err(format!("\"{text}\" is not a unit"));
            }
            continue;
        }
        let end = rest
            .find(|c: char| !(c.is_alphabetic() || matches!(c, '%' | '‰' | '°')))
            .unwrap_or(rest.len());
        let (name, after) = rest.split_at(end);
        if name == "per" {
            (inverse, slash) = (true, true);
            rest = after;
            continue;
        }
        let found =
            symbol(name).ok_or_else(|| unknown(if name.is_empty() { text } else { name }))?;
        let (power, after) = read_power(after);
        if !(1..=6).contains(&power.abs()) {
            return Err(format!("the power {power} in \"{text}\" makes no unit"));
        }
        apply(&mut unit, &found, if inverse { -power } else { power })
            .ok_or_else(|| format!("\"{text}\" is too large a unit"))?;
        (inverse, slash) = (false, false);
        rest = after;
    }
    if slash {
        return Err(format!("\"{text}\" ends with a stroke"));
    }
    let common = gcd(unit.numerator, unit.denominator);
    unit.numerator /= common;
    unit.denominator /= common;
    Ok(unit)
}

fn apply(unit: &mut Unit, symbol: &Symbol, power: i64) -> Option<()> {
    let p = power as i32;
    unit.dims = dims(
        unit.dims.energy + p * symbol.dims.energy,
        unit.dims.length + p * symbol.dims.length,
        unit.dims.time + p * symbol.dims.time,
        unit.dims.angle + p * symbol.dims.angle,
        unit.dims.c + p * symbol.dims.c,
    );
    unit.pow10 += power * symbol.pow10;
    for _ in 0..power.unsigned_abs() {
        if power > 0 {
            unit.numerator = unit.numerator.checked_mul(symbol.whole)?;
            unit.factor *= symbol.factor;
        } else {
            unit.denominator = unit.denominator.checked_mul(symbol.whole)?;
            unit.factor /= symbol.factor;
        }
    }
    Some(())
}

fn unknown(name: &str) -> String {
    match name {
        "meV" | "mev" => format!("\"{name}\" is not understood: MeV has a capital M"),
        _ => format!("\"{name}\" is not a unit known here"),
    }
}

/// A power after a symbol: "^-2", "-2", "2", "^(-1)", "⁻¹"; 1 if there is none.
fn read_power(text: &str) -> (i64, &str) {
    let after = text
        .strip_prefix('^')
        .or_else(|| text.strip_prefix("**"))
        .unwrap_or(text);
    if let Some(inner) = after.strip_prefix('(')
        && let Some((power, rest)) = read_integer(inner)
        && let Some(rest) = rest.strip_prefix(')')
    {
        return (power, rest);
    }
    if let Some(found) = read_integer(after) {
        return found;
    }
    read_superscript(after).unwrap_or((1, text))
}

/// A number in superscript digits.
pub fn read_superscript(text: &str) -> Option<(i64, &str)> {
    let end = text
        .find(|c: char| plain_of_superscript(c).is_none())
        .unwrap_or(text.len());
    let (head, rest) = text.split_at(end);
    let plain: String = head.chars().filter_map(plain_of_superscript).collect();
    match read_integer(&plain) {
        Some((value, "")) => Some((value, rest)),
        _ => None,
    }
}

fn plain_of_superscript(c: char) -> Option<char> {
    Some(match c {
        '⁻' => '-',
        '⁺' => '+',
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴' => '4',
        '⁵' => '5',
        '⁶' => '6',
        '⁷' => '7',
        '⁸' => '8',
        '⁹' => '9',
        _ => return None,
    })
}

/// "1e31", "10^31", "10³¹" at the start of a unit or after a multiplication sign.
pub fn read_power_of_ten(text: &str) -> Option<(i64, &str)> {
    if let Some(after) = text.strip_prefix('1')
        && let Some(found) = read_exponent(after)
    {
        return Some(found);
    }
    let after = text.strip_prefix("10")?;
    match after.strip_prefix('^').or_else(|| after.strip_prefix("**")) {
        Some(digits) => read_integer(digits),
        None => read_superscript(after),
    }
}

fn gcd(a: u64, b: u64) -> u64 {
    if b == 0 { a.max(1) } else { gcd(b, a % b) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_as_people_write_them() {
        let inverse_area = dims(0, -2, 0, 0, 0);
        for text in ["nb-1", "nb^-1", "/nb", "1/nb", "nb⁻¹", "nb^(-1)"] {
            let unit = read_unit(text).unwrap();
            assert_eq!((unit.dims, unit.pow10), (inverse_area, 33), "{text}");
        }
        let rate = dims(0, -2, -1, 0, 0);
        for text in [
            "cm-2s-1",
            "cm^-2 s^-1",
            "cm⁻²s⁻¹",
            "cm^-2/s",
            "1/cm^2/s",
            "Hz/cm2",
        ] {
            let unit = read_unit(text).unwrap();
            assert_eq!((unit.dims, unit.pow10), (rate, 0), "{text}");
        }
        assert_eq!(read_unit("1e31 cm-2s-1").unwrap().pow10, 31);
        assert_eq!(read_unit("10^31 cm-2s-1").unwrap().pow10, 31);
        assert_eq!(read_unit("10³¹ cm⁻² s⁻¹").unwrap().pow10, 31);
        assert_eq!(read_unit("MeV/c^2").unwrap().dims, dims(1, 0, 0, 0, -2));
        assert_eq!(
            read_unit("µb").unwrap(),
            Unit {
                text: "µb".into(),
                ..read_unit("ub").unwrap()
            }
        );
    }

    #[test]
    fn what_is_no_unit_is_refused() {
        for text in [
            "furlong", "meV", "nb/", "nb//h", "nb^99", "12", "nb?", "^2", "µ",
        ] {
            assert!(read_unit(text).is_err(), "{text}");
        }
    }
}
