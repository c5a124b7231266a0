//! The curve between two energies.

use super::ready::Ready;
use super::{Body, Column, Reply};
use crate::doc::Sheet;
use widthwise_core::error::{Answer, Refusal};

/// Largest number of energies of one curve.
pub const MOST_POINTS: u32 = 20_000;
/// Offsets from a narrow peak, in full widths, at which the Born curve is looked at as well.
const LOOKS: [f64; 10] = [0.0, 0.15, 0.3, 0.5, 0.75, 1.0, 1.5, 2.5, 5.0, 10.0];

/// W, Born, radiated, observed and each contribution.
pub fn answer(sheet: &Sheet, from_gev: f64, to_gev: f64, points: u32) -> Answer<Reply> {
    let ready = Ready::new(sheet)?;
    let w = energies(&ready, from_gev, to_gev, points)?;
    let curve = ready.chain.curve(ready.born.as_ref(), &w)?;
    let nb = |name: &str, values: Vec<f64>| Column {
        name: name.to_string(),
        unit: "nb".to_string(),
        values,
    };
    let mut columns = vec![
        Column {
            name: "W".to_string(),
            unit: "GeV".to_string(),
            values: curve.w_gev,
        },
        nb("Born", curve.born_nb),
        nb("radiated", curve.radiated_nb),
        nb("observed", curve.observed_nb),
    ];
    for (name, values) in curve.contributions {
        columns.push(nb(&name, values));
    }
    let mut warnings = ready.warnings;
    for warning in curve.warnings {
        if !warnings.contains(&warning) {
            warnings.push(warning);
        }
    }
    Ok(Reply {
        body: Body::Curve {
            accuracy: curve.accuracy,
            warnings,
        },
        columns,
    })
}

/// Evenly spaced energies, and some more across every peak that is narrower than their distance.
fn energies(ready: &Ready, from_gev: f64, to_gev: f64, points: u32) -> Answer<Vec<f64>> {
    if !(from_gev > 0.0 && from_gev < to_gev && to_gev <= 1e5) {
        return Err(Refusal::new(
            "from_gev",
            format!("{from_gev} to {to_gev} GeV"),
            "from below to, both above 0 and up to 100 TeV",
            "this is no range of energies",
        ));
    }
    if !(2..=MOST_POINTS).contains(&points) {
        return Err(Refusal::new(
            "points",
            points,
            format!("2 to {MOST_POINTS}"),
            format!("a curve of {points} energies is not computed"),
        ));
    }
    let step = (to_gev - from_gev) / f64::from(points - 1);
    let mut w: Vec<f64> = (0..points)
        .map(|i| {
            if i == points - 1 {
                to_gev
            } else {
                from_gev + f64::from(i) * step
            }
        })
        .collect();
    for (at, width) in ready.peaks() {
        if width < 8.0 * step {
            let looks = LOOKS.iter().flat_map(|x| [at - x * width, at + x * width]);
            w.extend(looks.filter(|w| *w > from_gev && *w < to_gev));
        }
    }
    w.sort_by(f64::total_cmp);
    w.dedup();
    Ok(w)
}
