//! Quantities derived from the fitted parameters, with linear and profiled errors.

use super::covariance::Covariance;
use super::equivalent::gamma_product_gev2;
use super::fitter::Fitter;
use super::likelihood::{OfCoordinates, Target};
use super::profile::End;
use crate::amplitude::hypothesis::{Hypothesis, Resonance, Strength};
use crate::beam::Beams;
use crate::error::Answer;
use crate::kinematics::break_up_momentum_gev;
use crate::numerics::minimise::{Minimum, Tolerance, minimise};
use crate::propagator::Propagator;
use crate::units::{HBAR_GEV_S, HBARC2_GEV2_NB};
use serde::{Deserialize, Serialize};
use std::rc::Rc;

/// A derived quantity at given parameters.
#[derive(Debug, Clone, PartialEq)]
pub struct Quantity {
    /// Id, e.g. `r1.lifetime`.
    pub id: String,
    /// In words.
    pub label: String,
    /// Unit.
    pub unit: &'static str,
    /// Value.
    pub value: f64,
}

/// A derived quantity after a fit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct DerivedValue {
    /// Id.
    pub id: String,
    /// In words.
    pub label: String,
    /// Unit.
    pub unit: String,
    /// Value at the minimum.
    pub value: f64,
    /// Error by linear propagation of the covariance.
    pub error: f64,
    /// Lower end of the profile interval (2 NLL up by 1), if asked for.
    pub low: Option<End>,
    /// Upper end.
    pub high: Option<End>,
}

/// What can be derived from a hypothesis: products of strengths, lifetime, peak cross section and area of each
/// resonance alone, the Yukawa coupling of a spin 0 to the beams, the pole next to the real axis.
///
/// Peak: (2J+1)/(n_a n_b) (4 pi/k^2) B_in B_f at W = M (PDG, "Resonances"); area: pi/2 Gamma times the peak, the
/// integral of a narrow Breit-Wigner over W.
#[must_use]
pub fn quantities(hypothesis: &Hypothesis, beams: &Beams) -> Vec<Quantity> {
    let Hypothesis::PartialWave(wave) = hypothesis else {
        return Vec::new();
    };
    let spins = f64::from(beams.first.spin_states) * f64::from(beams.second.spin_states);
    let weight = (f64::from(wave.twice_j) + 1.0) / spins;
    let mut out = Vec::new();
    for (i, r) in wave.resonances.iter().enumerate() {
        let mut push = |name: &str, label: &str, unit, value: f64| {
            out.push(Quantity {
                id: format!("r{}.{name}", i + 1),
                label: format!("{label} of {}", r.name),
                unit,
                value,
            });
        };
        if r.width_gev > 0.0 {
            push("lifetime", "lifetime", "s", HBAR_GEV_S / r.width_gev);
        }
        if let Some(product) = gamma_product_gev2(&r.strength, r.width_gev) {
            let b_b = product / (r.width_gev * r.width_gev);
            push(
                "gamma_in_bf",
                "entrance width times exit fraction",
                "GeV",
                product / r.width_gev,
            );
            push("b_in_b_f", "product of branching fractions", "", b_b);
            let k = break_up_momentum_gev(r.mass_gev, beams.first.mass_gev, beams.second.mass_gev);
            let peak = weight * 4.0 * core::f64::consts::PI / (k * k) * b_b * HBARC2_GEV2_NB;
            push("peak", "peak cross section", "nb", peak);
            push(
                "area",
                "area under the peak",
                "nb GeV",
                0.5 * core::f64::consts::PI * r.width_gev * peak,
            );
        }
        if let (0, Some((gamma_gev, known))) = (wave.twice_j, entrance_width_gev(r))
            && let Some(beta) = velocity(r.mass_gev, beams)
        {
            // Tree width of a scalar into the beams, L = -g phi psibar psi: Gamma = g^2 M beta^3/(8 pi).
            let g2 = 8.0 * core::f64::consts::PI * gamma_gev / (r.mass_gev * beta * beta * beta);
            let (name, label) = if known {
                ("g", "Yukawa coupling to the beams (scalar)")
            } else {
                (
                    "g_root_bf",
                    "Yukawa coupling to the beams (scalar) times the root of B_f",
                )
            };
            push(name, label, "", g2.max(0.0).sqrt());
        }
        let pole = Propagator::new(&r.form, r.mass_gev, r.width_gev, "")
            .ok()
            .and_then(|p| p.poles().poles.into_iter().next());
        if let Some(pole) = pole {
            push("pole_mass", "pole mass (Re sqrt s_R)", "GeV", pole.mass_gev);
            push(
                "pole_width",
                "pole width (-2 Im sqrt s_R)",
                "GeV",
                pole.width_gev,
            );
        }
    }
    out
}

/// Entrance width, GeV, and whether it is known without the exit fraction.
fn entrance_width_gev(r: &Resonance) -> Option<(f64, bool)> {
    match r.strength {
        Strength::PartialWidths { gamma_in_gev, .. } => Some((gamma_in_gev, true)),
        Strength::Branchings { b_in, .. } => Some((b_in * r.width_gev, true)),
        Strength::GammaInBf { gev } => Some((gev, false)),
        Strength::BinBf { product } => Some((product * r.width_gev, false)),
        _ => None,
    }
}

/// Velocity of two equal spin-1/2 beams at W = `mass_gev`, above their threshold.
fn velocity(mass_gev: f64, beams: &Beams) -> Option<f64> {
    let (a, b) = (&beams.first, &beams.second);
    let fermions = a.spin_states == 2 && b.spin_states == 2 && a.mass_gev == b.mass_gev;
    let x = 2.0 * a.mass_gev / mass_gev;
    (fermions && x < 1.0).then(|| (1.0 - x * x).sqrt())
}

const TOLERANCE: Tolerance = Tolerance {
    distance: 1e-5,
    iterations: 100,
};

impl Fitter {
    /// Derived quantities at a minimum; `profiled`: also where 2 NLL, minimised at a fixed value of the
    /// quantity, has risen by 1. Quantities that are parameters of the fit themselves, or do not depend on
    /// what is free, are left out.
    ///
    /// # Errors
    /// The model's refusal beside the minimum.
    pub fn derived(
        &mut self,
        minimum: &Minimum,
        covariance: &Covariance,
        profiled: bool,
    ) -> Answer<Vec<DerivedValue>> {
        let model = Rc::clone(&self.problem().model);
        let k = model.parameters().len();
        let Some(at_minimum) = model.quantities(&minimum.x[..k]) else {
            return Ok(Vec::new());
        };
        let mut out = Vec::new();
        for (q, quantity) in at_minimum.into_iter().enumerate() {
            let of = {
                let model = Rc::clone(&model);
                move |x: &[f64]| -> f64 {
                    model
                        .quantities(&x[..k])
                        .and_then(|all| all.get(q).map(|v| v.value))
                        .unwrap_or(f64::NAN)
                }
            };
            let gradient: Vec<f64> = (0..minimum.x.len())
                .map(|i| {
                    if i >= k {
                        return 0.0;
                    }
                    let h = 1e-4 * self.problem().coordinates[i].scale;
                    let (mut up, mut down) = (minimum.x.clone(), minimum.x.clone());
                    up[i] += h;
                    down[i] -= h;
                    let slope = (of(&up) - of(&down)) / (2.0 * h);
                    // Rounding of a quantity that does not depend on this parameter is no slope.
                    if (slope * h).abs() < 1e-12 * quantity.value.abs() {
                        0.0
                    } else {
                        slope
                    }
                })
                .collect();
            let mut variance = 0.0;
            for (i, a) in gradient.iter().enumerate() {
                for (j, b) in gradient.iter().enumerate() {
                    variance += a * b * covariance.matrix[(i, j)];
                }
            }
            let moving = gradient.iter().filter(|g| **g != 0.0).count();
            let own = gradient
                .iter()
                .any(|g| moving == 1 && (g - 1.0).abs() < 1e-6);
            let error = variance.max(0.0).sqrt();
            if moving == 0 || own || !error.is_finite() || error == 0.0 {
                continue;
            }
            let (mut low, mut high) = (None, None);
            if profiled {
                let shared: OfCoordinates = Rc::new(of);
                let mut end = |sign: f64| {
                    self.derived_end(&shared, &gradient, minimum, quantity.value, sign * error)
                };
                low = Some(end(-1.0)?);
                high = Some(end(1.0)?);
            }
            out.push(DerivedValue {
                id: quantity.id,
                label: quantity.label,
                unit: quantity.unit.into(),
                value: quantity.value,
                error,
                low,
                high,
            });
        }
        Ok(out)
    }

    /// Where the profile of a quantity has risen by 1, on the side of `step` (one linear error).
    ///
    /// A narrow pull on the quantity moves the minimum along its profile: wherever that ends, it is
    /// the least 2 NLL at the value that the quantity has there.
    fn derived_end(
        &mut self,
        of: &OfCoordinates,
        gradient: &[f64],
        minimum: &Minimum,
        value: f64,
        step: f64,
    ) -> Answer<End> {
        let best = minimum.expansion.value;
        let mut goal = step;
        let mut x = minimum.x.clone();
        let mut reached = (0.0, 0.0);
        for _ in 0..12 {
            self.likelihood().pull_to(Some(Target {
                of: Rc::clone(of),
                goal: value + goal,
                error: 0.05 * step.abs(),
                gradient_steps: gradient
                    .iter()
                    .zip(&minimum.x)
                    .map(|(g, v)| {
                        if *g == 0.0 {
                            0.0
                        } else {
                            (1e-3 * step / g).abs().max(1e-12 * v.abs())
                        }
                    })
                    .collect(),
            }));
            let found = minimise(self.likelihood(), &x, TOLERANCE);
            self.likelihood().pull_to(None);
            let found = found?;
            let moved = of(&found.x) - value;
            let z = (moved - goal) / (0.05 * step);
            let rise = found.expansion.value - z * z - best;
            x = found.x;
            let t = rise.max(0.0).sqrt();
            if t <= 0.0 || moved * step <= 0.0 {
                goal *= 2.0;
                continue;
            }
            reached = (moved, rise);
            if (rise - 1.0).abs() < 2e-3 {
                return Ok(End::Found {
                    value: value + moved / t,
                });
            }
            goal = (moved / t).abs().min(4.0 * moved.abs()) * step.signum() + (goal - moved);
        }
        Ok(End::Open {
            value: value + reached.0,
            rise: reached.1,
        })
    }
}
