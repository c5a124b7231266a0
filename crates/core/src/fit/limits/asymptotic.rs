//! Asymptotic CLs (arXiv:1007.1727, section 3), and the limit where the signal interferes.

use crate::error::Answer;
use crate::fit::{FitSettings, Fitter, Kind};
use crate::numerics::minimise::{Tolerance, minimise};
use crate::numerics::probability::normal_cdf;
use crate::scan::Scan;

/// CLs of a tested strength from its statistic q (tilde) in the data and in the background-only Asimov data.
#[must_use]
pub fn asymptotic_cls(q: f64, q_asimov: f64) -> f64 {
    if q_asimov <= 0.0 {
        return 1.0;
    }
    let (r, a) = (q.max(0.0).sqrt(), q_asimov.sqrt());
    if q <= q_asimov {
        normal_cdf(-r) / normal_cdf(a - r)
    } else {
        normal_cdf(-(q + q_asimov) / (2.0 * a)) / normal_cdf(-(q - q_asimov) / (2.0 * a))
    }
}

/// Upper limit on the first resonance's strength parameter `id` at each phase of the coherent
/// background, by asymptotic CLs at confidence `level`, in the parameter's unit. `None` where no limit was
/// found below 1e6 times the present strength.
///
/// With interference the rate is no longer proportional to the strength: a small signal shows
/// as its interference, and the limit hangs on the phase.
///
/// # Errors
/// What the fit refuses; a hypothesis without a phase of the background.
pub fn limit_against_phase(
    scan: &Scan,
    id: &str,
    others: &FitSettings,
    phases_rad: &[f64],
    level: f64,
) -> Answer<Vec<Option<f64>>> {
    let settings = alone_first(id, others);
    phases_rad
        .iter()
        .map(|&phase| {
            let mut here = scan.clone();
            here.hypothesis.set("coherent.phase", phase)?;
            one_limit(&here, &settings, level)
        })
        .collect()
}

/// The same without interference: one limit, at the present mass and width.
///
/// # Errors
/// As [`limit_against_phase`].
pub fn limit_with_errors(
    scan: &Scan,
    id: &str,
    others: &FitSettings,
    level: f64,
) -> Answer<Option<f64>> {
    one_limit(scan, &alone_first(id, others), level)
}

/// The strength as the first free parameter, then the others.
fn alone_first(id: &str, others: &FitSettings) -> FitSettings {
    let mut free = vec![id.to_string()];
    free.extend(others.free.iter().filter(|o| *o != id).cloned());
    FitSettings {
        free,
        ..others.clone()
    }
}

fn one_limit(scan: &Scan, settings: &FitSettings, level: f64) -> Answer<Option<f64>> {
    let mut data = Fitter::new(scan, settings)?;
    let reference = data.problem().start()[0];
    // Background only: strength 0 may be outside the model; a 1e-12 part of it is not visible.
    let zero = 1e-12 * reference;
    let nothing = pad(&data, zero);
    let none = data.likelihood().predict(&nothing)?;
    let mut asimov = Fitter::new(scan, settings)?;
    let kinds: Vec<Kind> = asimov
        .problem()
        .data
        .iter()
        .zip(&none.mu)
        .map(|(d, &mu)| match d.kind {
            Kind::CrossSection { .. } => Kind::CrossSection { sigma_nb: mu },
            Kind::OnOff { n_off, tau, .. } => Kind::OnOff {
                n: mu + n_off / tau,
                n_off,
                tau,
            },
            Kind::Counts { .. } => Kind::Counts { n: mu },
        })
        .collect();
    asimov.likelihood().replace_measured(&kinds);
    let best = |fitter: &mut Fitter| -> Answer<(f64, f64)> {
        let mut found: Option<(f64, f64)> = None;
        // Interference can give two minima in the strength.
        for start in [1e-3, 0.3, 3.0] {
            let x = pad(fitter, start * reference);
            let m = minimise(fitter.likelihood(), &x, Tolerance::default())?;
            if found.is_none_or(|f| m.expansion.value < f.1) {
                found = Some((m.x[0], m.expansion.value));
            }
        }
        Ok(found.unwrap_or((0.0, 0.0)))
    };
    let (data_best, asimov_best) = (best(&mut data)?, best(&mut asimov)?);
    // Each fit starts where the one before it ended: what is profiled hardly moves between strengths.
    let mut places = (pad(&data, reference), pad(&asimov, reference));
    let mut cls = |v: f64| -> Answer<f64> {
        let q = |fitter: &mut Fitter, best: (f64, f64), place: &mut Vec<f64>| -> Answer<f64> {
            if v <= best.0 {
                return Ok(0.0);
            }
            place[0] = v;
            let found = fitter.held(0, v, place)?;
            *place = found.x;
            Ok((found.expansion.value - best.1).max(0.0))
        };
        Ok(asymptotic_cls(
            q(&mut data, data_best, &mut places.0)?,
            q(&mut asimov, asimov_best, &mut places.1)?,
        ))
    };
    let wanted = 1.0 - level;
    let mut high = reference.max(1.5 * data_best.0);
    let mut low = data_best.0;
    while cls(high)? > wanted {
        low = high;
        high *= 2.0;
        if high > 1e6 * reference {
            return Ok(None);
        }
    }
    while (high - low) > 1e-3 * high {
        let middle = 0.5 * (low + high);
        if cls(middle)? > wanted {
            low = middle;
        } else {
            high = middle;
        }
    }
    Ok(Some(high))
}

/// Coordinates with the strength at `v` and every nuisance at 0.
fn pad(fitter: &Fitter, v: f64) -> Vec<f64> {
    let mut x = fitter.problem().start();
    x[0] = v;
    x
}
