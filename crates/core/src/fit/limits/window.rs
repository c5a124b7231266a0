//! A mass window searched for an incoherent signal: limits, significances, look-elsewhere effect.

use super::template::{Limit, Template};
use crate::amplitude::hypothesis::{Hypothesis, Strength};
use crate::counts::Exposure;
use crate::error::{Answer, Refusal};
use crate::fit::equivalent::gamma_product_gev2;
use crate::line_shape::Chain;
use crate::math::{exp, ln};
use crate::numerics::probability::{ln_normal_tail, significance_of_ln};
use crate::numerics::random::Stream;
use crate::scan::{Measured, Scan};
use serde::{Deserialize, Serialize};

/// What is asked of a window.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct WindowSettings {
    /// Masses, GeV, rising.
    pub masses_gev: Vec<f64>,
    /// Confidence of the limits.
    pub level: f64,
    /// Background-only pseudo-experiments for the look-elsewhere effect.
    pub trials: u64,
    /// Their seed.
    pub seed: u64,
}

/// One mass of the window. Strengths are Gamma_in B_f in GeV where the sheet gives that, else B_in B_f.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct WindowPlace {
    /// Mass, GeV.
    pub mass_gev: f64,
    /// CLs limit (asymptotic) and its expected band; `None` where no point sees a signal.
    pub limit: Option<Limit>,
    /// Best strength.
    pub best: f64,
    /// Local significance.
    pub local_significance: f64,
}

/// The strongest excess of the window, corrected for having looked everywhere.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct GlobalSignificance {
    /// Mass of the strongest excess, GeV.
    pub mass_gev: f64,
    /// Local p-value.
    pub local_p: f64,
    /// Its natural logarithm, where the number itself is too small to be one.
    pub ln_local_p: f64,
    /// Local significance.
    pub local_significance: f64,
    /// Mean number of upcrossings of the reference level in background-only pseudo-experiments.
    pub upcrossings: f64,
    /// Reference level of q0.
    pub reference: f64,
    /// Global p-value: local + upcrossings e^{-(q - reference)/2} (arXiv:1005.1891, eq. 6), at most 1; one degree of freedom.
    pub global_p: f64,
    /// Its natural logarithm.
    pub ln_global_p: f64,
    /// Global significance.
    pub global_significance: f64,
}

/// Level of q0 at which upcrossings are counted: low, so that few trials count many.
const REFERENCE: f64 = 0.5;

/// Searches the window for the scan's first resonance as an incoherent signal of unknown strength
/// over everything else that the scan expects.
///
/// # Errors
/// No resonance, points without counts, what chain and hypothesis refuse.
pub fn mass_window(
    scan: &Scan,
    settings: &WindowSettings,
) -> Answer<(Vec<WindowPlace>, Option<GlobalSignificance>)> {
    let Templates {
        counts, templates, ..
    } = templates(scan, &settings.masses_gev)?;
    let places: Vec<WindowPlace> = settings
        .masses_gev
        .iter()
        .zip(&templates)
        .map(|(&mass_gev, template)| match template {
            None => WindowPlace {
                mass_gev,
                limit: None,
                best: 0.0,
                local_significance: 0.0,
            },
            Some(t) => WindowPlace {
                mass_gev,
                limit: Some(t.limit(&counts, settings.level)),
                best: t.best(&counts),
                local_significance: t.discovery_statistic(&counts).sqrt(),
            },
        })
        .collect();
    let known: Vec<&Template> = templates.iter().flatten().collect();
    let strongest = places
        .iter()
        .max_by(|a, b| a.local_significance.total_cmp(&b.local_significance));
    let global = match (strongest, known.first()) {
        (Some(place), Some(first)) if settings.trials > 0 => {
            let q = place.local_significance * place.local_significance;
            let upcrossings = upcrossings(&known, &first.background, settings);
            // Logarithms: at great significance the p-values are below the smallest number.
            let ln_local_p = ln_normal_tail(place.local_significance);
            let ln_trials = ln(upcrossings.max(f64::MIN_POSITIVE)) - 0.5 * (q - REFERENCE);
            let larger = ln_local_p.max(ln_trials);
            let sum = exp(ln_local_p - larger) + exp(ln_trials - larger);
            let ln_global_p = (larger + ln(sum)).min(0.0);
            Some(GlobalSignificance {
                mass_gev: place.mass_gev,
                local_p: exp(ln_local_p),
                ln_local_p,
                local_significance: place.local_significance,
                upcrossings,
                reference: REFERENCE,
                global_p: exp(ln_global_p),
                ln_global_p,
                global_significance: significance_of_ln(ln_global_p).max(0.0),
            })
        }
        _ => None,
    };
    Ok((places, global))
}

/// Mean upcrossings of the reference level along the window.
fn upcrossings(templates: &[&Template], background: &[f64], settings: &WindowSettings) -> f64 {
    let mut count = 0.0;
    for k in 0..settings.trials {
        let mut stream = Stream::new(settings.seed, k);
        let n: Vec<f64> = background.iter().map(|b| stream.poisson(*b)).collect();
        // The window's start counts as an entry from below.
        let mut above = false;
        for t in templates {
            let now = t.discovery_statistic(&n) > REFERENCE;
            if now && !above {
                count += 1.0;
            }
            above = now;
        }
    }
    count / settings.trials as f64
}

/// Counts of the points, and what each mass would bring them.
pub(crate) struct Templates {
    pub counts: Vec<f64>,
    /// Present strength, in the units of the templates' strength.
    pub strength: f64,
    /// `None` where no point sees a signal.
    pub templates: Vec<Option<Template>>,
}

/// Counts, and the template of each mass.
pub(crate) fn templates(scan: &Scan, masses_gev: &[f64]) -> Answer<Templates> {
    let Hypothesis::PartialWave(wave) = &scan.hypothesis else {
        return Err(Refusal::new(
            "model",
            "",
            "a resonance over a background",
            "limits over a mass window are worked out for a resonance as incoherent signal",
        ));
    };
    if wave.resonances.is_empty() {
        return Err(Refusal::new(
            "model.resonances",
            "none",
            "a resonance to look for",
            "a limit needs a resonance whose width and form are looked for",
        ));
    }
    let mut signal_wave = wave.clone();
    signal_wave.resonances.truncate(1);
    signal_wave.coherent = None;
    signal_wave.incoherent = None;
    let mut unit = 1.0;
    if let Some(r) = signal_wave.resonances.first_mut() {
        // Strengths are reported in the parameter's unit; the template is made at the present one.
        let width = r.width_gev;
        unit = match r.strength {
            Strength::GammaInBf { gev } => gev,
            _ => gamma_product_gev2(&r.strength, width).unwrap_or(0.0) / (width * width),
        };
    }
    if unit.is_nan() || unit <= 0.0 {
        return Err(Refusal::new(
            "model.resonances[0].strength",
            unit,
            "a strength above 0",
            "the limit is worked out in units of the present strength, which must be above 0",
        ));
    }
    let mut background_wave = wave.clone();
    background_wave.resonances.clear();
    let chain = Chain::new(&scan.chain, &scan.beams)?;
    let w: Vec<f64> = scan.points.iter().map(|p| p.w_gev).collect();
    let own: Vec<Option<f64>> = scan.points.iter().map(|p| p.sigma_w_gev).collect();
    let sigma = |wave| -> Answer<Vec<f64>> {
        let born = Hypothesis::PartialWave(wave).prepare(&scan.beams)?;
        Ok(chain
            .cross_sections(born.as_ref(), &w, Some(&own), scan.stage)?
            .values_nb)
    };
    let empty = background_wave.coherent.is_none() && background_wave.incoherent.is_none();
    let continuum = if empty {
        vec![0.0; w.len()]
    } else {
        sigma(background_wave)?
    };
    let mut counts = Vec::new();
    let mut background = Vec::new();
    let mut exposures = Vec::new();
    for (point, sigma) in scan.points.iter().zip(&continuum) {
        let (0, Measured::Counts { n, off }) = (scan.exit_of(point), &point.measured) else {
            return Err(Refusal::new(
                format!("points[{}]", point.id),
                "",
                "counts of the scan's own exit channel",
                "limits over a mass window are worked out for counts of one channel: leave the other rows out",
            ));
        };
        let exposure = Exposure::of(point, &scan.detection);
        counts.push(*n);
        background.push(match *off {
            Some((n_off, tau)) => exposure.signal(*sigma) + n_off / tau,
            None => exposure.expected(*sigma, &scan.detection),
        });
        exposures.push(exposure);
    }
    let mut out = Vec::with_capacity(masses_gev.len());
    for &mass in masses_gev {
        let mut wave = signal_wave.clone();
        if let Some(r) = wave.resonances.first_mut() {
            r.mass_gev = mass;
        }
        let signal: Vec<f64> = sigma(wave)?
            .iter()
            .zip(&exposures)
            .map(|(s, e)| e.signal(*s) / unit)
            .collect();
        out.push(Template::new(signal, background.clone()).ok());
    }
    Ok(Templates {
        counts,
        strength: unit,
        templates: out,
    })
}
