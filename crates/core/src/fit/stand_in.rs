//! A small curve for tests of the fit alone: Breit-Wigner over flat background, in closed form.

use super::curve::{Curve, CurveModel, CurveParameter, Probe, Site};
use crate::error::{Answer, Refusal};

/// sigma = h/(1 + ((W - M)/(Gamma/2))^2) + c.
pub struct BreitWigner {
    parameters: Vec<CurveParameter>,
    fixed: [f64; 4],
    which: Vec<usize>,
}

impl BreitWigner {
    /// Starting values M, Gamma (GeV), height, flat part (nb); `free` of "r1.mass", "r1.width", "r1.strength", "incoherent.0".
    pub fn new(start: [f64; 4], free: &[&str]) -> Self {
        let names = ["r1.mass", "r1.width", "r1.strength", "incoherent.0"];
        let which: Vec<usize> = free
            .iter()
            .map(|f| names.iter().position(|n| n == f).unwrap())
            .collect();
        let parameters = which
            .iter()
            .map(|&i| CurveParameter {
                id: names[i].into(),
                label: names[i].into(),
                unit: if i < 2 { "GeV" } else { "nb" },
                value: start[i],
                lower: if i == 0 {
                    f64::NEG_INFINITY
                } else if i == 1 {
                    1e-3 * start[1]
                } else {
                    0.0
                },
                upper: f64::INFINITY,
                scale: if i == 0 {
                    0.2 * start[1]
                } else {
                    0.1 * start[i].abs().max(0.01)
                },
            })
            .collect();
        Self {
            parameters,
            fixed: start,
            which,
        }
    }

    /// The curve at W.
    pub fn at(p: &[f64; 4], w: f64) -> f64 {
        let z = 2.0 * (w - p[0]) / p[1];
        p[2] / (1.0 + z * z) + p[3]
    }
}

impl CurveModel for BreitWigner {
    fn parameters(&self) -> &[CurveParameter] {
        &self.parameters
    }
    fn evaluate(&self, sites: &[Site], probes: &[Probe], with_slope: bool) -> Answer<Vec<Curve>> {
        probes
            .iter()
            .map(|probe| {
                let mut p = self.fixed;
                for (&i, &v) in self.which.iter().zip(&probe.values) {
                    p[i] = v;
                }
                if p[1] <= 0.0 {
                    return Err(Refusal::new("width", p[1], "above 0", "no width"));
                }
                let mut curve = Curve::default();
                for site in sites {
                    let w = site.w_gev + probe.w_shift_gev;
                    let z = 2.0 * (w - p[0]) / p[1];
                    curve.sigma_nb.push(Self::at(&p, w));
                    if with_slope {
                        let d = 1.0 + z * z;
                        curve
                            .slope_nb_per_gev
                            .push(-p[2] * 2.0 * z / (d * d) * 2.0 / p[1]);
                    }
                }
                Ok(curve)
            })
            .collect()
    }
}

/// A scan of counts at `w_gev`, unit exposure factor `exposure` (1/nb), to be fitted with a stand-in curve.
pub fn counting_scan(w_gev: &[f64], counts: &[f64], exposure: f64) -> crate::scan::Scan {
    use crate::amplitude::hypothesis::{Hypothesis, PartialWave};
    use crate::beam::{Arrangement, BeamParticle, Beams, SettingKind};
    use crate::scan::{
        ChainSettings, CommonErrors, Detection, Measured, Point, Scan, Spread, Stage,
    };
    let lepton = BeamParticle {
        name: "e-".into(),
        mass_gev: crate::units::M_ELECTRON_GEV,
        spin_states: 2,
    };
    Scan {
        beams: Beams {
            first: lepton.clone(),
            second: lepton,
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::W,
        },
        hypothesis: Hypothesis::PartialWave(PartialWave {
            twice_j: 2,
            resonances: Vec::new(),
            coherent: None,
            incoherent: None,
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        }),
        chain: ChainSettings {
            w_min_gev: None,
            spread: Spread::None,
            accuracy: 1e-6,
        },
        detection: Detection {
            efficiency: 1.0,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 0.0,
            luminosity_nbinv_per_h: 1.0,
        },
        stage: Stage::Observed,
        points: w_gev
            .iter()
            .zip(counts)
            .enumerate()
            .map(|(i, (&w, &n))| Point {
                id: format!("{}", i + 1),
                group: None,
                w_gev: w,
                w_error_gev: 0.0,
                sigma_w_gev: None,
                luminosity_nbinv: exposure,
                luminosity_error_nbinv: 0.0,
                live_time_h: 1.0,
                live_fraction: 1.0,
                efficiency: None,
                efficiency_error: 0.0,
                channel: None,
                measured: Measured::Counts { n, off: None },
                start_h: None,
            })
            .collect(),
        common: CommonErrors::default(),
        covariance_nb2: None,
        exits: Vec::new(),
    }
}
