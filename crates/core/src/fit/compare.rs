//! Two hypotheses on the same data: likelihood ratio, its significance, and where to measure next.

use super::fitter::Fitter;
use super::settings::FitSettings;
use crate::amplitude::hypothesis::Hypothesis;
use crate::counts::rate_and_gradient;
use crate::error::{Answer, Refusal};
use crate::math::ln;
use crate::numerics::minimise::{Tolerance, minimise};
use crate::numerics::probability::{binomial_interval, chi2_sf, significance};
use crate::scan::{Measured, Scan};
use crate::trials::{Ensemble, TrialSettings};
use serde::{Deserialize, Serialize};

/// Comparison of a null hypothesis with a wider one.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Comparison {
    /// 2 NLL of the null minus that of the alternative, at their minima.
    pub ratio: f64,
    /// Free parameters that the alternative has more.
    pub extra_parameters: i64,
    /// p-value by Wilks' theorem; `None` where it does not hold (no further parameter, or one that stands at a
    /// limit or means nothing under the null, like the mass and phase of an absent resonance).
    pub wilks_p: Option<f64>,
    /// p-value by pseudo-experiments of the null: (trials at least as extreme + 1)/(trials + 1).
    pub trials_p: Option<f64>,
    /// Binomial interval of it (one standard deviation).
    pub trials_interval: Option<(f64, f64)>,
    /// Pseudo-experiments used.
    pub trials: u64,
    /// Significance of the p-value that counts (pseudo-experiments where there are any).
    pub significance: Option<f64>,
}

/// Compares `null` with `alternative` on the data that both scans hold.
///
/// # Errors
/// Hypotheses that differ in J alone, which total rates cannot tell apart; what the fits refuse.
pub fn compare(
    null: (&Scan, &FitSettings),
    alternative: (&Scan, &FitSettings),
    (trials, seed): (u64, u64),
    progress: &mut dyn FnMut(u64),
) -> Answer<Comparison> {
    let (a, b) = (spins(&null.0.hypothesis), spins(&alternative.0.hypothesis));
    let bins = |scan: &Scan| {
        let mut measured = scan.points.iter().map(|p| &p.measured);
        measured.any(|m| matches!(m, Measured::Bins { .. }))
    };
    if a != b && !(bins(null.0) && bins(alternative.0)) {
        let words = |twice: &[u8]| {
            let all: Vec<String> = twice.iter().map(|j| format!("{j}/2")).collect();
            all.join(" + ")
        };
        return Err(Refusal::new(
            "model.j",
            format!("J = {} and {}", words(&a), words(&b)),
            "one J, or data in angular bins",
            "a total rate measures (2J+1) B_in B_f: it cannot tell one J from another, only angular bins can",
        ));
    }
    let mut first = Fitter::new(null.0, null.1)?;
    let mut second = Fitter::new(alternative.0, alternative.1)?;
    let m0 = first.minimum()?;
    let m1 = second.minimum()?;
    let ratio = m0.expansion.value - m1.expansion.value;
    let extra_parameters =
        second.problem().parameter_count() as i64 - first.problem().parameter_count() as i64;
    // A resonance that the null lacks has mass, width and phase without meaning there.
    let regular = extra_parameters > 0
        && same_terms(&null.0.hypothesis, &alternative.0.hypothesis)
        && !m1.at_bound.iter().any(|at| *at);
    let wilks_p = regular.then(|| chi2_sf(ratio.max(0.0), extra_parameters as f64));
    let mut out = Comparison {
        ratio,
        extra_parameters,
        wilks_p,
        trials_p: None,
        trials_interval: None,
        trials,
        significance: wilks_p.map(significance),
    };
    if trials == 0 {
        return Ok(out);
    }
    let count = first.problem().parameter_count();
    let mut ensemble = Ensemble::at(
        null.0,
        null.1,
        &m0.x[..count],
        TrialSettings {
            seed,
            profiles: false,
        },
    )?;
    let plain = second.problem().start();
    let mut extreme = 0.0;
    for k in 0..trials {
        progress(k);
        let q0 = ensemble.minimum(k)?.expansion.value;
        let (kinds, _) = ensemble.draw(k)?;
        second.likelihood().replace_measured(&kinds);
        let mut q1 = f64::INFINITY;
        for start in [&m1.x, &plain] {
            if let Ok(m) = minimise(second.likelihood(), start, Tolerance::trials()) {
                q1 = q1.min(m.expansion.value);
            }
        }
        if q0 - q1 >= ratio {
            extreme += 1.0;
        }
    }
    let total = trials as f64;
    let p = (extreme + 1.0) / (total + 1.0);
    out.trials_p = Some(p);
    out.trials_interval = Some(binomial_interval(extreme, total, 1.0));
    out.significance = Some(significance(p));
    Ok(out)
}

/// 2J of the waves of a hypothesis, each once and rising; none where it has no waves.
fn spins(hypothesis: &Hypothesis) -> Vec<u8> {
    let mut all = match hypothesis {
        Hypothesis::PartialWave(wave) => vec![wave.twice_j],
        Hypothesis::KMatrix(model) => vec![model.twice_j],
        Hypothesis::Waves(model) => model.waves.iter().map(|w| w.wave.twice_j).collect(),
        Hypothesis::Diagrams(_) => Vec::new(),
    };
    all.sort_unstable();
    all.dedup();
    all
}

/// Whether both have the same terms, so that every parameter of the one means something in the other.
fn same_terms(a: &Hypothesis, b: &Hypothesis) -> bool {
    match (a, b) {
        (Hypothesis::PartialWave(a), Hypothesis::PartialWave(b)) => {
            a.resonances.len() == b.resonances.len() && a.coherent.is_some() == b.coherent.is_some()
        }
        (Hypothesis::KMatrix(a), Hypothesis::KMatrix(b)) => a.poles.len() == b.poles.len(),
        (Hypothesis::Diagrams(a), Hypothesis::Diagrams(b)) => {
            a.mediators.len() == b.mediators.len()
        }
        _ => false,
    }
}

/// What it takes to tell two hypotheses apart at one energy.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Separation {
    /// W, GeV.
    pub w_gev: f64,
    /// Hours of beam until 2 NLL is expected to differ by 9 (3 standard deviations), if nothing else is
    /// adjusted meanwhile: a lower bound. Infinite where the rates are equal.
    pub hours: f64,
}

/// At each energy, hours to 3 standard deviations between two hypotheses as they stand, the second
/// being true. Exactly equivalent hypotheses give infinite hours everywhere (above 1e9 within accuracy).
///
/// # Errors
/// What the chain refuses; no luminosity.
pub fn separate(
    scan: &Scan,
    first: &Hypothesis,
    second: &Hypothesis,
    w_gev: &[f64],
) -> Answer<Vec<Separation>> {
    let rates = |hypothesis: &Hypothesis| {
        let mut here = scan.clone();
        here.hypothesis = hypothesis.clone();
        rate_and_gradient(&here, &[], w_gev).map(|r| r.rate_per_h)
    };
    let (a, b) = (rates(first)?, rates(second)?);
    // Differences below the chain's accuracy are none.
    let accuracy = 10.0 * scan.chain.accuracy;
    Ok(w_gev
        .iter()
        .zip(a.iter().zip(&b))
        .map(|(&w_gev, (&a, &b))| {
            let per_hour = if (a - b).abs() <= accuracy * b {
                0.0
            } else {
                2.0 * (a - b + b * ln(b / a))
            };
            Separation {
                w_gev,
                hours: if per_hour > 0.0 {
                    9.0 / per_hour
                } else {
                    f64::INFINITY
                },
            }
        })
        .collect())
}
