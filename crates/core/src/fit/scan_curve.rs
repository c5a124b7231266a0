//! The chain of a scan as a curve with free parameters.

use super::curve::{Curve, CurveModel, CurveParameter, Probe, Site};
use super::problem::background_of;
use crate::amplitude::Region;
use crate::amplitude::born::{Born, Energy, Feature};
use crate::amplitude::hypothesis::Hypothesis;
use crate::amplitude::parameters::{ParameterId, ParameterSpec};
use crate::beam::Beams;
use crate::error::{Answer, Refusal, Warning};
use crate::line_shape::Chain;
use crate::math::hypot;
use crate::scan::{CountedBin, Measured, Scan, Spread, Stage};

/// Id of the free beam spread: sigma_W at its reference energy; points with a sigma_W of
/// their own scale with it.
pub const SPREAD: &str = "spread";

/// One free parameter: where its value goes.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Target {
    /// Of the exit with this number; the scan's own is 0.
    Hypothesis(usize, ParameterId),
    Spread,
}

/// One exit channel: what makes its curve.
struct ExitCurve {
    hypothesis: Hypothesis,
    same_resonances: bool,
    chain: Chain,
}

/// What of a point decides its curve.
struct PointCurve {
    /// sigma_W, if it has one of its own.
    own_sigma_gev: Option<f64>,
    exit: usize,
    regions: Vec<Region>,
}

/// Hypothesis, beams and chain of a scan with some parameters free.
pub struct ScanCurve {
    /// The scan's own exit first.
    exits: Vec<ExitCurve>,
    beams: Beams,
    stage: Stage,
    points: Vec<PointCurve>,
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
        let mut exits = Vec::with_capacity(1 + scan.exits.len());
        for exit in 0..=scan.exits.len() {
            let seen = scan.of_exit(exit);
            exits.push(ExitCurve {
                chain: Chain::new(&seen.chain, &scan.beams)?,
                same_resonances: exit > 0 && scan.exits[exit - 1].same_resonances,
                hypothesis: seen.hypothesis,
            });
        }
        let known = known_parameters(scan);
        let spread_start_gev = match scan.chain.spread {
            Spread::Gaussian { sigma_gev, .. } if scan.stage != Stage::Born => sigma_gev,
            _ => 0.0,
        };
        // Widths below the spread are not resolved: the curve then changes over the spread.
        let narrowest = known
            .iter()
            .filter(|p| p.id.ends_with(".mass") && p.spec.scale > 0.0)
            .map(|p| 5.0 * p.spec.scale)
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
            if background_of(id).is_some() {
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
            let Some(KnownParameter {
                exit, spec, label, ..
            }) = known.iter().find(|p| p.id == *id)
            else {
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
            targets.push(Target::Hypothesis(*exit, spec.id));
            parameters.push(CurveParameter {
                id: id.clone(),
                label: label.clone(),
                unit: spec.unit,
                value: spec.value,
                lower,
                upper: spec.upper.unwrap_or(f64::INFINITY),
                scale,
            });
        }
        // What is asked first must already work, so that the refusal names the sheet's field.
        for exit in &exits {
            exit.hypothesis.prepare(&scan.beams)?;
        }
        let points = scan
            .points
            .iter()
            .map(|p| {
                let exit = scan.exit_of(p);
                let regions = match &p.measured {
                    Measured::Bins { bins } => {
                        bins.iter().map(CountedBin::region).collect::<Answer<_>>()?
                    }
                    _ => Vec::new(),
                };
                for region in &regions {
                    prepare(&exits[exit].hypothesis, &scan.beams, Some(region))?;
                }
                Ok(PointCurve {
                    own_sigma_gev: p.sigma_w_gev,
                    exit,
                    regions,
                })
            })
            .collect::<Answer<_>>()?;
        Ok(Self {
            exits,
            beams: scan.beams.clone(),
            stage: scan.stage,
            points,
            spread_start_gev,
            targets,
            parameters,
            slope_step_gev: 0.01 * feature,
        })
    }

    /// The scan's own hypothesis with the values put in.
    ///
    /// # Errors
    /// A value that is not a number.
    pub fn hypothesis(&self, values: &[f64]) -> Answer<Hypothesis> {
        self.hypothesis_of(0, values)
    }

    /// The hypothesis of an exit (0: the scan's own) with the values put in.
    ///
    /// # Errors
    /// A value that is not a number.
    pub fn hypothesis_of(&self, exit: usize, values: &[f64]) -> Answer<Hypothesis> {
        let curve = &self.exits[exit];
        let mut hypothesis = curve.hypothesis.clone();
        for (target, value) in self.targets.iter().zip(values) {
            match target {
                Target::Hypothesis(of, id) if *of == exit => hypothesis.set_value(*id, *value)?,
                // What the channels have in common is named by the scan's own.
                Target::Hypothesis(0, id) if curve.same_resonances && is_common(*id) => {
                    hypothesis.set_value(*id, *value)?;
                }
                _ => {}
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
        let own = self.points.get(site.point).and_then(|p| p.own_sigma_gev);
        if factor == 1.0 {
            return own;
        }
        own.or_else(|| self.exits[0].chain.sigma_w_gev(w_gev))
            .map(|s| s * factor)
    }

    /// Exit and angular region of a site.
    fn place(&self, site: &Site) -> (usize, Option<&Region>) {
        self.points.get(site.point).map_or((0, None), |p| {
            (p.exit, site.bin.and_then(|bin| p.regions.get(bin)))
        })
    }

    /// sigma at all sites whose place is that of the first one of `members`.
    fn evaluate_place(
        &self,
        members: &[Site],
        probe: &Probe,
        with_slope: bool,
    ) -> Answer<(Vec<f64>, Vec<f64>)> {
        let Some((exit, region)) = members.first().map(|s| self.place(s)) else {
            return Ok((Vec::new(), Vec::new()));
        };
        let hypothesis = self.hypothesis_of(exit, &probe.values)?;
        let born = prepare(&hypothesis, &self.beams, region)?;
        let ratio = self.spread_ratio(&probe.values) * probe.spread_factor;
        let (h, n) = (self.slope_step_gev, members.len());
        let offsets: &[f64] = if with_slope { &[0.0, -h, h] } else { &[0.0] };
        let mut w = Vec::with_capacity(n * offsets.len());
        let mut sigma = Vec::with_capacity(n * offsets.len());
        for offset in offsets {
            for site in members {
                let at = site.w_gev + probe.w_shift_gev;
                w.push(at + offset);
                sigma.push(self.sigma_gev(site, at, ratio * site.spread_factor));
            }
        }
        let chain = &self.exits[exit].chain;
        let mut values = chain
            .cross_sections(born.as_ref(), &w, Some(&sigma), self.stage)?
            .values_nb;
        let mut slopes = Vec::new();
        if with_slope {
            slopes.extend((0..n).map(|j| (values[2 * n + j] - values[n + j]) / (2.0 * h)));
        }
        values.truncate(n);
        Ok((values, slopes))
    }
}

/// Parameters that exits of the same resonances share: all that is not the exit's strength, its
/// phases and backgrounds.
fn is_common(id: ParameterId) -> bool {
    use crate::amplitude::parameters::ResonanceParameter as P;
    match id {
        ParameterId::Resonance(_, parameter) => {
            !matches!(parameter, P::Strength | P::BF | P::GammaF | P::Phase)
        }
        ParameterId::CoherentPhase | ParameterId::Coherent(_) | ParameterId::Incoherent(_) => false,
        _ => true,
    }
}

/// One parameter of a scan's hypotheses.
struct KnownParameter {
    exit: usize,
    /// Of further exits with `c1.` before it.
    id: String,
    label: String,
    spec: ParameterSpec,
}

/// Every parameter of the scan's own hypothesis and of the exits that is not common.
fn known_parameters(scan: &Scan) -> Vec<KnownParameter> {
    let mut out = Vec::new();
    let mut add = |exit: usize, spec: ParameterSpec, name: Option<&str>| {
        out.push(KnownParameter {
            exit,
            id: name.map_or_else(|| spec.id.to_string(), |_| format!("c{exit}.{}", spec.id)),
            label: name.map_or_else(|| spec.label.clone(), |n| format!("{} ({n})", spec.label)),
            spec,
        });
    };
    for spec in scan.hypothesis.parameters() {
        add(0, spec, None);
    }
    for (i, exit) in scan.exits.iter().enumerate() {
        for spec in exit.hypothesis.parameters() {
            if !(exit.same_resonances && is_common(spec.id)) {
                add(i + 1, spec, Some(&exit.name));
            }
        }
    }
    out
}

/// A hypothesis made ready, over all angles or in a region. One spin 0 is the same at all angles.
fn prepare(
    hypothesis: &Hypothesis,
    beams: &Beams,
    region: Option<&Region>,
) -> Answer<Box<dyn Born + Send + Sync>> {
    match region {
        None => hypothesis.prepare(beams),
        Some(region) if is_isotropic(hypothesis) => Ok(Box::new(Isotropic {
            all: hypothesis.prepare(beams)?,
            fraction: region.fraction(),
        })),
        Some(region) => hypothesis.prepare_in(beams, region),
    }
}

/// One wave of spin 0: the same at all angles.
fn is_isotropic(hypothesis: &Hypothesis) -> bool {
    match hypothesis {
        Hypothesis::PartialWave(wave) => wave.twice_j == 0,
        Hypothesis::KMatrix(model) => model.twice_j == 0,
        _ => false,
    }
}

/// Whether a hypothesis can be compared with counts in angular bins.
#[must_use]
pub fn has_angles(hypothesis: &Hypothesis) -> bool {
    is_isotropic(hypothesis) || matches!(hypothesis, Hypothesis::Waves(_) | Hypothesis::Diagrams(_))
}

/// A cross section that is the same at all angles, in a part of them.
struct Isotropic {
    all: Box<dyn Born + Send + Sync>,
    fraction: f64,
}

impl Born for Isotropic {
    fn threshold_gev(&self) -> f64 {
        self.all.threshold_gev()
    }
    fn upper_limit_gev(&self) -> f64 {
        self.all.upper_limit_gev()
    }
    fn features(&self) -> Vec<Feature> {
        self.all.features()
    }
    fn contribution_names(&self) -> Vec<String> {
        self.all.contribution_names()
    }
    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        self.all.contributions_nb(at, out);
        for v in out {
            *v *= self.fraction;
        }
    }
    fn sigma_nb(&self, at: Energy) -> f64 {
        self.fraction * self.all.sigma_nb(at)
    }
    fn warnings(&self) -> Vec<Warning> {
        self.all.warnings()
    }
    fn radiation(&self) -> Answer<Vec<Warning>> {
        self.all.radiation()
    }
}

impl CurveModel for ScanCurve {
    fn parameters(&self) -> &[CurveParameter] {
        &self.parameters
    }

    fn quantities(&self, values: &[f64]) -> Option<Vec<super::derived::Quantity>> {
        let mut out = Vec::new();
        for exit in 0..self.exits.len() {
            let hypothesis = self.hypothesis_of(exit, values).ok()?;
            for mut q in super::derived::quantities(&hypothesis, &self.beams) {
                if exit > 0 {
                    q.id = format!("c{exit}.{}", q.id);
                }
                out.push(q);
            }
        }
        Some(out)
    }

    fn evaluate(&self, sites: &[Site], probes: &[Probe], with_slope: bool) -> Answer<Vec<Curve>> {
        // Sites of one exit and region go through the chain together.
        let mut groups: Vec<Vec<usize>> = Vec::new();
        for (i, site) in sites.iter().enumerate() {
            let place = self.place(site);
            let same =
                |g: &&mut Vec<usize>| g.first().is_some_and(|k| self.place(&sites[*k]) == place);
            match groups.iter_mut().find(same) {
                Some(group) => group.push(i),
                None => groups.push(vec![i]),
            }
        }
        let members: Vec<Vec<Site>> = groups
            .iter()
            .map(|g| g.iter().map(|i| sites[*i]).collect())
            .collect();
        probes
            .iter()
            .map(|probe| {
                let mut curve = Curve {
                    sigma_nb: vec![0.0; sites.len()],
                    slope_nb_per_gev: vec![0.0; if with_slope { sites.len() } else { 0 }],
                };
                for (group, members) in groups.iter().zip(&members) {
                    let (values, slopes) = self.evaluate_place(members, probe, with_slope)?;
                    for (i, v) in group.iter().zip(values) {
                        curve.sigma_nb[*i] = v;
                    }
                    for (i, v) in group.iter().zip(slopes) {
                        curve.slope_nb_per_gev[*i] = v;
                    }
                }
                Ok(curve)
            })
            .collect()
    }
}
