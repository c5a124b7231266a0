//! From a scan to a fit's result.

use super::covariance::Covariance;
use super::curve::CurveModel;
use super::likelihood::Likelihood;
use super::problem::{Coordinate, Kind, Problem};
use super::result::{FitResult, FittedNuisance, FittedPoint, FittedValue};
use super::scan_curve::ScanCurve;
use super::settings::FitSettings;
use super::terms::{counts, on_off};
use super::warnings;
use crate::error::Answer;
use crate::math::{cos, exp, ln};
use crate::numerics::minimise::{Minimum, minimise};
use crate::numerics::probability::chi2_sf;
use crate::numerics::random::Stream;
use crate::scan::Scan;
use nalgebra::DMatrix;
use std::rc::Rc;

/// Fits `scan`.
///
/// # Errors
/// Data, settings or a hypothesis that cannot be fitted, each with its field; a fit that does
/// not converge is no error but a result that says so.
pub fn fit(scan: &Scan, settings: &FitSettings) -> Answer<FitResult> {
    Fitter::new(scan, settings)?.run()
}

/// A fit worse than this chi-squared probability is tried again from other starts.
const SUSPECT_P: f64 = 0.05;
/// How many.
const RESCUES: u32 = 12;

/// A fit in steps.
pub struct Fitter {
    likelihood: Likelihood,
    settings: FitSettings,
    /// Warnings that do not depend on the minimum.
    given: Vec<crate::error::Warning>,
}

impl Fitter {
    /// Prepares the fit of a scan through its chain.
    ///
    /// # Errors
    /// As [`fit`].
    pub fn new(scan: &Scan, settings: &FitSettings) -> Answer<Self> {
        let model = ScanCurve::new(scan, &settings.varying()?)?;
        Self::with_model(scan, settings, Rc::new(model))
    }

    /// Prepares the fit of a scan's points with another curve.
    ///
    /// # Errors
    /// As [`fit`].
    pub fn with_model(
        scan: &Scan,
        settings: &FitSettings,
        model: Rc<dyn CurveModel>,
    ) -> Answer<Self> {
        let problem = Problem::new(scan, settings, model)?;
        let given = warnings::before(scan, settings, &problem);
        Ok(Self {
            likelihood: Likelihood::new(problem),
            settings: settings.clone(),
            given,
        })
    }

    /// The likelihood, for evaluations beside the minimum.
    pub fn likelihood(&mut self) -> &mut Likelihood {
        &mut self.likelihood
    }

    /// The problem.
    #[must_use]
    pub fn problem(&self) -> &Problem {
        self.likelihood.problem()
    }

    /// Minimum from the given start and the extra ones.
    ///
    /// # Errors
    /// The model's refusal at the start.
    pub fn minimum(&mut self) -> Answer<Minimum> {
        let start = self.problem().start();
        self.minimum_from(&start)
    }

    /// Minimum from `start` and the extra starts of the settings around it.
    ///
    /// # Errors
    /// The model's refusal at the start.
    pub fn minimum_from(&mut self, start: &[f64]) -> Answer<Minimum> {
        let first = self.likelihood.full(start, false)?;
        self.likelihood.adapt_steps(&first);
        let mut best = minimise(&mut self.likelihood, start, self.settings.tolerance())?;
        // A fit that ends on a limit, nowhere, or far from the data may have lost the peak on its way.
        let suspect = |m: &Minimum, problem: &Problem| {
            let dof = problem.data.len() as f64 - problem.parameter_count() as f64;
            !m.stop.is_minimum()
                || m.at_bound.iter().any(|at| *at)
                || (dof > 0.0 && chi2_sf(m.expansion.value, dof) < SUSPECT_P)
        };
        let rescues = if suspect(&best, self.problem()) {
            RESCUES
        } else {
            0
        };
        for k in 0..self.settings.extra_starts.max(rescues) {
            let other = self.random_start(start, u64::from(k));
            if let Ok(found) = minimise(&mut self.likelihood, &other, self.settings.tolerance())
                && found.expansion.value < best.expansion.value - 1e-9
            {
                best = found;
            }
        }
        Ok(best)
    }

    /// Every different minimum that `starts` random starts find within `window` of the best in 2 NLL, best first;
    /// what n starts found is not all there is.
    ///
    /// # Errors
    /// The model's refusal at the given start.
    pub fn solutions(&mut self, starts: u32, window: f64) -> Answer<Vec<Minimum>> {
        let start = self.problem().start();
        let mut found = vec![self.minimum()?];
        for k in 0..starts {
            let other = self.random_start(&start, u64::from(k));
            if let Ok(m) = minimise(&mut self.likelihood, &other, self.settings.tolerance())
                && m.stop.is_minimum()
            {
                found.push(m);
            }
        }
        found.sort_by(|a, b| a.expansion.value.total_cmp(&b.expansion.value));
        let best = found.first().map_or(0.0, |m| m.expansion.value);
        let mut out: Vec<Minimum> = Vec::new();
        for m in found {
            if m.expansion.value > best + window {
                continue;
            }
            // The same place: within a tenth of a conditional error in every parameter, phases by their turn.
            let same = out.iter().any(|o| {
                self.problem().coordinates.iter().enumerate().all(|(i, c)| {
                    let curvature = m.expansion.curvature[(i, i)];
                    let error = if curvature > 0.0 {
                        (2.0 / curvature).sqrt()
                    } else {
                        c.scale
                    };
                    let mut apart = m.x[i] - o.x[i];
                    if c.unit == "rad" {
                        apart = reported("rad", apart);
                    }
                    apart.abs() < 0.1 * error + 1e-3 * c.scale.min(1e300)
                })
            });
            if !same {
                out.push(m);
            }
        }
        Ok(out)
    }

    /// A start within 3 widths: masses uniformly, positive quantities by a factor up to 3, phases anywhere.
    fn random_start(&self, start: &[f64], k: u64) -> Vec<f64> {
        let mut stream = Stream::new(self.settings.seed, k);
        self.problem()
            .coordinates
            .iter()
            .zip(start)
            .map(|(c, &v)| {
                let u = 2.0 * stream.uniform() - 1.0;
                match c.coordinate {
                    Coordinate::Nuisance(_) => v,
                    _ if c.id.ends_with(".mass") => v + 15.0 * c.scale * u,
                    _ if c.unit == "rad" => v + core::f64::consts::PI * u,
                    _ if v > 0.0 => v * exp(ln(3.0) * u),
                    Coordinate::Curve(_) => v + 10.0 * c.scale * u,
                    _ => v,
                }
            })
            .collect()
    }

    /// Fits and reports.
    ///
    /// # Errors
    /// The model's refusal at the start.
    pub fn run(&mut self) -> Answer<FitResult> {
        let minimum = self.minimum()?;
        self.report(&minimum)
    }

    /// Curvature errors at a minimum.
    ///
    /// # Errors
    /// The model's refusal beside the minimum.
    pub fn covariance(&mut self, minimum: &Minimum) -> Answer<Covariance> {
        // Second differences around the minimum take steps of half a conditional error.
        self.likelihood.adapt_steps(&minimum.expansion);
        let observed = self.likelihood.full(&minimum.x, true)?;
        Ok(Covariance::new(
            &observed.curvature,
            &minimum.expansion.curvature,
            &minimum.at_bound,
        ))
    }

    /// Everything about a minimum.
    ///
    /// # Errors
    /// The model's refusal beside the minimum.
    pub fn report(&mut self, minimum: &Minimum) -> Answer<FitResult> {
        let covariance = self.covariance(minimum)?;
        let x = &minimum.x;
        let prediction = self.likelihood.predict(x)?;
        let problem = self.likelihood.problem();
        let count = problem.parameter_count();
        let parameters: Vec<FittedValue> = problem
            .coordinates
            .iter()
            .take(count)
            .enumerate()
            .map(|(i, c)| FittedValue {
                id: c.id.clone(),
                label: c.label.clone(),
                unit: c.unit.into(),
                value: reported(c.unit, x[i]),
                error: covariance.error(i),
                at_limit: minimum.at_bound[i],
            })
            .collect();
        let rows = |entry: &dyn Fn(usize, usize) -> f64| -> Vec<Vec<f64>> {
            (0..count)
                .map(|i| (0..count).map(|k| entry(i, k)).collect())
                .collect()
        };
        let correlation = rows(&|i, k| {
            if i == k {
                1.0
            } else {
                covariance.correlation(i, k)
            }
        });
        let covariance_rows = rows(&|i, k| covariance.matrix[(i, k)]);
        let nuisances: Vec<FittedNuisance> = problem
            .coordinates
            .iter()
            .enumerate()
            .skip(count)
            .map(|(i, c)| {
                let error = covariance.error(i).unwrap_or(0.0);
                FittedNuisance {
                    name: c.id.clone(),
                    pull: x[i],
                    error,
                    impacts: (0..count)
                        .map(|k| {
                            if error > 0.0 {
                                covariance.matrix[(i, k)] / error
                            } else {
                                0.0
                            }
                        })
                        .collect(),
                }
            })
            .collect();
        let mut points = Vec::with_capacity(problem.data.len());
        let mut lowest = f64::INFINITY;
        for (j, datum) in problem.data.iter().enumerate() {
            let mu = prediction.mu[j];
            let (measured, expected, pull) = match datum.kind {
                Kind::Counts { n } => {
                    lowest = lowest.min(mu);
                    let q = counts(n, mu).map_or(0.0, |t| t.value);
                    (n, mu, q.max(0.0).sqrt() * sign(n - mu))
                }
                Kind::OnOff { n, n_off, tau } => {
                    let b = super::terms::profiled_background(n, n_off, tau, mu);
                    lowest = lowest.min(mu + b).min(tau * b);
                    let q = on_off(n, n_off, tau, mu).map_or(0.0, |t| t.value);
                    (n, mu + b, q.max(0.0).sqrt() * sign(n - mu - b))
                }
                Kind::CrossSection { sigma_nb } => {
                    (sigma_nb, mu, (sigma_nb - mu) / prediction.error_nb[j])
                }
            };
            points.push(FittedPoint {
                id: problem.points[datum.point].id.clone(),
                off_region: datum.off_region,
                bin: datum.bin.clone(),
                w_gev: prediction.w_gev[datum.point],
                measured,
                expected,
                pull,
            });
        }
        let mut outside: f64 = x.iter().skip(count).map(|v| v * v).sum();
        for &(i, value, error) in &problem.constraints {
            let z = (x[i] - value) / error;
            outside += z * z;
        }
        let statistic = minimum.expansion.value;
        // An on/off pair is two counts for one background of its own: one degree of freedom.
        let degrees_of_freedom =
            (problem.data.len() + problem.constraints.len()) as i64 - count as i64;
        let p_value =
            (degrees_of_freedom > 0).then(|| chi2_sf(statistic, degrees_of_freedom as f64));
        let mut result = FitResult {
            parameters,
            covariance: covariance_rows,
            correlation,
            nuisances,
            points,
            statistic,
            data_statistic: statistic - outside,
            degrees_of_freedom,
            p_value,
            p_value_asymptotic: lowest >= 20.0,
            stop: minimum.stop.clone(),
            condition: covariance.condition,
            batches: self.likelihood.batches,
            warnings: Vec::new(),
            coordinates: x.clone(),
        };
        let mut all = self.given.clone();
        all.extend(warnings::after(
            self.likelihood.problem(),
            &covariance,
            &result,
            lowest,
        ));
        result.warnings = all;
        Ok(result)
    }

    /// Expected curvature of the reported parameters at `x` as a matrix (information = half of it).
    ///
    /// # Errors
    /// The model's refusal.
    pub fn expected_curvature(&mut self, x: &[f64]) -> Answer<DMatrix<f64>> {
        Ok(self.likelihood.full(x, false)?.curvature)
    }
}

/// Phases are reported in (-pi, pi].
fn reported(unit: &str, value: f64) -> f64 {
    if unit == "rad" {
        crate::math::atan2(crate::math::sin(value), cos(value))
    } else {
        value
    }
}

fn sign(v: f64) -> f64 {
    if v < 0.0 { -1.0 } else { 1.0 }
}
