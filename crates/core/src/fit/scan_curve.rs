//! The chain of a scan as a curve with free parameters.

use super::curve::{Curve, CurveModel, CurveParameter, Probe, Site};
use super::problem::{BACKGROUND_CROSS_SECTION, BACKGROUND_RATE};
use crate::amplitude::hypothesis::Hypothesis;
use crate::amplitude::parameters::ParameterId;
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::line_shape::Chain;
use crate::math::hypot;
use crate::scan::{Scan, Spread, Stage};

/// Id of the free beam spread: sigma_W at its reference energy; points with a sigma_W of
/// their own scale with it.
pub const SPREAD: &str = "spread";

/// One free parameter: where its value goes.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Target {
    Hypothesis(ParameterId),
    Spread,
}

/// Hypothesis, beams and chain of a scan with some parameters free.
pub struct ScanCurve {
    hypothesis: Hypothesis,
    beams: Beams,
    chain: Chain,
    stage: Stage,
    /// sigma_W of each point, if it has one of its own.
    own_sigma_gev: Vec<Option<f64>>,
    spread_start_gev: f64,
    targets: Vec<Target>,
    parameters: Vec<CurveParameter>,
    slope_step_gev: f64,
}

impl ScanCurve {
    /// With the parameters `ids` free (background ids are skipped: they are no part of the curve).
    ///
    /// # Errors
    /// Ids that are unknown; settings that the chain or the hypothesis refuses.
    pub fn new(scan: &Scan, ids: &[String]) -> Answer<Self> {
        let chain = Chain::new(&scan.chain, &scan.beams)?;
        let known = scan.hypothesis.parameters();
        let spread_start_gev = match scan.chain.spread {
            Spread::Gaussian { sigma_gev, .. } if scan.stage != Stage::Born => sigma_gev,
            _ => 0.0,
        };
        // Widths below the spread are not resolved: the curve then changes over the spread.
        let narrowest = known
            .iter()
            .filter(|p| p.id.to_string().ends_with(".mass") && p.scale > 0.0)
            .map(|p| 5.0 * p.scale)
            .fold(f64::INFINITY, f64::min);
        let feature = if narrowest.is_finite() {
            hypot(narrowest, spread_start_gev)
        } else if spread_start_gev > 0.0 {
            spread_start_gev
        } else {
            1e-3
        };
        let mut targets = Vec::new();
        let mut parameters = Vec::new();
        for id in ids {
            if id == BACKGROUND_CROSS_SECTION || id == BACKGROUND_RATE {
                continue;
            }
            if id == SPREAD {
                if spread_start_gev <= 0.0 {
                    return Err(Refusal::new(
                        "fit.free",
                        id,
                        "a Gaussian spread, and data in which it has not been removed",
                        "the spread cannot be fitted: there is no Gaussian spread in this chain",
                    ));
                }
                targets.push(Target::Spread);
                parameters.push(CurveParameter {
                    id: SPREAD.into(),
                    label: "beam spread sigma_W".into(),
                    unit: "GeV",
                    value: spread_start_gev,
                    lower: 1e-3 * spread_start_gev,
                    upper: f64::INFINITY,
                    scale: 0.1 * spread_start_gev,
                });
                continue;
            }
            let Some(spec) = known.iter().find(|p| p.id.to_string() == *id) else {
                return Err(Refusal::new(
                    "fit.free",
                    id,
                    "a parameter of this hypothesis, spread, background.cross_section or background.rate",
                    format!("there is no parameter {id} to be fitted"),
                ));
            };
            let mut scale = spec.scale;
            let mut lower = spec.lower.unwrap_or(f64::NEG_INFINITY);
            if id.ends_with(".mass") {
                scale = hypot(scale, 0.2 * spread_start_gev);
            } else if id.ends_with(".width") {
                // A width of 0 is no width: the fit stops short of it and says so.
                lower = lower.max(1e-3 * spec.value);
            }
            targets.push(Target::Hypothesis(spec.id));
            parameters.push(CurveParameter {
                id: id.clone(),
                label: spec.label.clone(),
                unit: spec.unit,
                value: spec.value,
                lower,
                upper: spec.upper.unwrap_or(f64::INFINITY),
                scale,
            });
        }
        // What is asked first must already work, so that the refusal names the sheet's field.
        scan.hypothesis.prepare(&scan.beams)?;
        Ok(Self {
            hypothesis: scan.hypothesis.clone(),
            beams: scan.beams.clone(),
            chain,
            stage: scan.stage,
            own_sigma_gev: scan.points.iter().map(|p| p.sigma_w_gev).collect(),
            spread_start_gev,
            targets,
            parameters,
            slope_step_gev: 0.01 * feature,
        })
    }

    /// The hypothesis with the values put in.
    ///
    /// # Errors
    /// A value that is not a number.
    pub fn hypothesis(&self, values: &[f64]) -> Answer<Hypothesis> {
        let mut hypothesis = self.hypothesis.clone();
        for (target, value) in self.targets.iter().zip(values) {
            if let Target::Hypothesis(id) = target {
                hypothesis.set_value(*id, *value)?;
            }
        }
        Ok(hypothesis)
    }

    fn spread_ratio(&self, values: &[f64]) -> f64 {
        self.targets
            .iter()
            .zip(values)
            .find(|(t, _)| **t == Target::Spread)
            .map_or(1.0, |(_, v)| v / self.spread_start_gev)
    }

    /// sigma_W at a site, where it differs from the chain's own.
    fn sigma_gev(&self, site: &Site, w_gev: f64, factor: f64) -> Option<f64> {
        let own = self.own_sigma_gev.get(site.point).copied().flatten();
        if factor == 1.0 {
            return own;
        }
        own.or_else(|| self.chain.sigma_w_gev(w_gev))
            .map(|s| s * factor)
    }
}

impl CurveModel for ScanCurve {
    fn parameters(&self) -> &[CurveParameter] {
        &self.parameters
    }

    fn quantities(&self, values: &[f64]) -> Option<Vec<super::derived::Quantity>> {
        let hypothesis = self.hypothesis(values).ok()?;
        Some(super::derived::quantities(&hypothesis, &self.beams))
    }

    fn evaluate(&self, sites: &[Site], probes: &[Probe], with_slope: bool) -> Answer<Vec<Curve>> {
        let h = self.slope_step_gev;
        let n = sites.len();
        probes
            .iter()
            .map(|probe| {
                let born = self.hypothesis(&probe.values)?.prepare(&self.beams)?;
                let ratio = self.spread_ratio(&probe.values) * probe.spread_factor;
                let offsets: &[f64] = if with_slope { &[0.0, -h, h] } else { &[0.0] };
                let mut w = Vec::with_capacity(n * offsets.len());
                let mut sigma = Vec::with_capacity(n * offsets.len());
                for offset in offsets {
                    for site in sites {
                        let at = site.w_gev + probe.w_shift_gev;
                        w.push(at + offset);
                        sigma.push(self.sigma_gev(site, at, ratio * site.spread_factor));
                    }
                }
                let found =
                    self.chain
                        .cross_sections(born.as_ref(), &w, Some(&sigma), self.stage)?;
                let mut sigma_nb = found.values_nb;
                let slope_nb_per_gev = if with_slope {
                    (0..n)
                        .map(|j| (sigma_nb[2 * n + j] - sigma_nb[n + j]) / (2.0 * h))
                        .collect()
                } else {
                    Vec::new()
                };
                sigma_nb.truncate(n);
                Ok(Curve {
                    sigma_nb,
                    slope_nb_per_gev,
                })
            })
            .collect()
    }
}
