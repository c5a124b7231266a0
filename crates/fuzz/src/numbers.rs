//! What is typed into a field: by the table of limits, near what stands there, at the edges, or nonsense.

use crate::choices::Choices;
use widthwise_core::math;
use widthwise_sheet::limits::{Limit, TABLE, pattern};
use widthwise_sheet::quantity::{Dimension, format, read};

/// Texts that are no number, or a strange one.
const STRANGE: [&str; 24] = [
    "",
    " ",
    "nan",
    "NaN MeV",
    "inf",
    "-inf GeV",
    "1e999 MeV",
    "-1e999",
    "1e-400 GeV",
    "-0",
    "0",
    "0 MeV",
    "5e-324 GeV",
    "1.7976931348623157e308 GeV",
    "3.6 GHz",
    "3,6 GeV",
    "1/3",
    "19.6(4) MeV",
    "12 +- 3 keV",
    "=1+1",
    "<b>9</b>",
    "٣ MeV",
    "1 MeV 2 MeV",
    "1h20",
];

/// Words of fields that are no numbers.
const WORDS: [&str; 44] = [
    "e-",
    "e+",
    "mu-",
    "mu+",
    "p",
    "pbar",
    "gamma",
    "custom",
    "0",
    "1/2",
    "1",
    "3/2",
    "2",
    "3",
    "4",
    "r1.mass",
    "r1.width",
    "r1.strength",
    "r1.phase",
    "r2.mass",
    "r2.width",
    "r2.strength",
    "r2.phase",
    "coherent.phase",
    "coherent.0",
    "incoherent.0",
    "background.cross_section",
    "background.rate",
    "spread",
    "efficiency",
    "k1.mass",
    "d1.mass",
    "d1.g1",
    "r1.strength / r1.width",
    "r2.mass - r1.mass",
    "up",
    "down",
    "2026-11-20T09:00:00+01:00",
    "2026-02-30T25:00:00Z",
    "fill 1",
    "f",
    "<script>alert(1)</script>",
    "=cmd|' /C calc'!A0",
    "Γ_{ee}·B\u{202e}",
];

/// Ratios to a neighbour that make two numbers nearly, or just, equal.
const NEARLY: [f64; 9] = [
    1.0,
    1.0 + f64::EPSILON,
    1.0 - f64::EPSILON,
    1.0 + 1e-12,
    1.0 - 1e-12,
    1.0 + 1e-7,
    1.0 - 1e-7,
    1.0 + 1e-3,
    1.0 - 1e-3,
];

/// Limits of a path (a field may be of several dimensions).
#[must_use]
pub fn limits(path: &str) -> Vec<&'static Limit> {
    let pattern = pattern(path);
    TABLE.iter().filter(|l| l.field == pattern).collect()
}

/// A text for the field at this path; `now` is what stands there.
pub fn text_at(path: &str, now: Option<&str>, c: &mut Choices) -> String {
    let limits = limits(path);
    if limits.is_empty() {
        return (*c.one(&WORDS)).to_owned();
    }
    let limit = *c.one(&limits);
    let value = match now.map(|text| read(text, limit.dimension)) {
        Some(Ok(now)) => near(now.value, limit, c),
        _ => spread_out(limit, c),
    };
    written(value, limit.dimension)
}

/// A strange text.
pub fn strange(c: &mut Choices) -> String {
    if c.rarely(4) {
        c.text(40)
    } else if c.rarely(3) {
        (*c.one(&WORDS)).to_owned()
    } else {
        (*c.one(&STRANGE)).to_owned()
    }
}

/// A neighbour's number, or one that differs from it by very little.
pub fn nearly(text: &str, c: &mut Choices) -> Option<String> {
    let reading = read(text, Dimension::Energy).ok()?;
    Some(written(reading.value * c.one(&NEARLY), Dimension::Energy))
}

/// Just outside, or far outside, a limit.
pub fn outside(path: &str, c: &mut Choices) -> Option<String> {
    let limits = limits(path);
    let limit = limits.get(c.below(limits.len()))?;
    let factor = if c.rarely(2) { 1.0 + 1e-9 } else { 1e6 };
    let value = match c.below(3) {
        0 => limit.largest * factor,
        1 if limit.least < 0.0 => limit.least * factor,
        1 => -limit.largest,
        _ => limit.least - f64::MIN_POSITIVE,
    };
    Some(written(value, limit.dimension))
}

fn written(value: f64, dimension: Dimension) -> String {
    format::exact(value, None, dimension, None)
}

/// Not far from what stands there.
fn near(now: f64, limit: &Limit, c: &mut Choices) -> f64 {
    let value = match c.below(6) {
        0 => limit.largest,
        1 if limit.least_allowed => limit.least,
        2 => now * math::pow(10.0, 6.0 * c.fraction() - 3.0),
        _ => now * (0.8 + 0.4 * c.fraction()),
    };
    allowed(value, limit)
}

/// Within a few per cent of what stands there; `None` where no number stands.
pub fn close(path: &str, now: &str, c: &mut Choices) -> Option<String> {
    let limit = limits(path)
        .into_iter()
        .find(|limit| read(now, limit.dimension).is_ok())?;
    let value = read(now, limit.dimension).ok()?.value;
    let part = if limit.largest > 1e3 && value > 0.5 && limit.dimension == Dimension::Energy {
        // Energies of a scan lie close together: a hundredth of a per cent leaves the scan a scan.
        1e-4
    } else {
        0.1
    };
    let moved = value * (1.0 + part * (2.0 * c.fraction() - 1.0));
    Some(written(allowed(moved, limit), limit.dimension))
}

/// Anywhere within a limit, all orders of magnitude alike.
fn spread_out(limit: &Limit, c: &mut Choices) -> f64 {
    let size = math::pow(10.0, 15.0 * c.fraction() - 11.0);
    let sign = if limit.least < 0.0 && c.rarely(2) {
        -1.0
    } else {
        1.0
    };
    allowed(sign * size, limit)
}

fn allowed(value: f64, limit: &Limit) -> f64 {
    let value = value.clamp(limit.least, limit.largest);
    let value = if limit.whole { value.floor() } else { value };
    if limit.allows(value) {
        value
    } else {
        limit.largest.min(limit.least + 1.0)
    }
}
