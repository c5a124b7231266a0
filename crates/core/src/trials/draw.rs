//! Drawing and fitting pseudo-experiments of one scan.

use super::{TrialRow, TrialSettings};
use crate::error::Answer;
use crate::fit::{
    Coordinate, Covariance, CurveModel, FitSettings, Fitter, Kind, profiled_background,
};
use crate::numerics::minimise::{Minimum, Tolerance, minimise};
use crate::numerics::random::Stream;
use crate::scan::Scan;
use std::rc::Rc;

/// Everything that trials share: the truth, the predictions there, and the prepared fit.
pub struct Ensemble {
    fitter: Fitter,
    settings: TrialSettings,
    truth: Vec<f64>,
    /// Data as in the scan: which kind each is.
    kinds: Vec<Kind>,
    /// Predictions at the truth without nuisances.
    mu: Vec<f64>,
    /// True background of on/off pairs.
    backgrounds: Vec<f64>,
    constraints: Vec<(f64, f64)>,
}

impl Ensemble {
    /// The scan's present parameter values are the truth.
    ///
    /// # Errors
    /// As a fit of the scan.
    pub fn new(scan: &Scan, fit: &FitSettings, settings: TrialSettings) -> Answer<Self> {
        Self::from_fitter(Fitter::new(scan, fit)?, None, settings)
    }

    /// With other true values of the parameters, in the order of the fit.
    ///
    /// # Errors
    /// As a fit of the scan.
    pub fn at(
        scan: &Scan,
        fit: &FitSettings,
        truth: &[f64],
        settings: TrialSettings,
    ) -> Answer<Self> {
        Self::from_fitter(Fitter::new(scan, fit)?, Some(truth), settings)
    }

    /// With another curve.
    ///
    /// # Errors
    /// As a fit of the scan.
    pub fn with_model(
        scan: &Scan,
        fit: &FitSettings,
        model: Rc<dyn CurveModel>,
        settings: TrialSettings,
    ) -> Answer<Self> {
        Self::from_fitter(Fitter::with_model(scan, fit, model)?, None, settings)
    }

    fn from_fitter(
        mut fitter: Fitter,
        values: Option<&[f64]>,
        settings: TrialSettings,
    ) -> Answer<Self> {
        let mut truth = fitter.problem().start();
        for (slot, v) in truth.iter_mut().zip(values.unwrap_or_default()) {
            *slot = *v;
        }
        let likelihood = fitter.likelihood();
        let prediction = likelihood.predict(&truth)?;
        let kinds: Vec<Kind> = likelihood.problem().data.iter().map(|d| d.kind).collect();
        let problem = likelihood.problem();
        let backgrounds: Vec<f64> = problem
            .data
            .iter()
            .zip(&prediction.mu)
            .map(|(d, &mu)| match d.kind {
                Kind::OnOff { n, n_off, tau } => profiled_background(n, n_off, tau, mu),
                _ => 0.0,
            })
            .collect();
        let constraints = problem
            .constraints
            .iter()
            .map(|&(i, _, error)| (truth[i], error))
            .collect();
        // The expected data decide the difference steps, the same for every trial.
        let expected: Vec<Kind> = kinds
            .iter()
            .zip(prediction.mu.iter().zip(&backgrounds))
            .map(|(k, (&mu, &b))| match *k {
                Kind::Counts { .. } => Kind::Counts { n: mu },
                Kind::OnOff { tau, .. } => Kind::OnOff {
                    n: mu + b,
                    n_off: tau * b,
                    tau,
                },
                Kind::CrossSection { .. } => Kind::CrossSection { sigma_nb: mu },
            })
            .collect();
        likelihood.replace_measured(&expected);
        let first = likelihood.full(&truth, false)?;
        likelihood.adapt_steps(&first);
        likelihood.pin(&truth)?;
        Ok(Self {
            fitter,
            settings,
            truth,
            kinds,
            mu: prediction.mu,
            backgrounds,
            constraints,
        })
    }

    /// True values of the parameters.
    #[must_use]
    pub fn truth(&self) -> &[f64] {
        &self.truth[..self.fitter.problem().parameter_count()]
    }

    /// Ids of the parameters.
    #[must_use]
    pub fn ids(&self) -> Vec<String> {
        let problem = self.fitter.problem();
        problem
            .coordinates
            .iter()
            .take(problem.parameter_count())
            .map(|c| c.id.clone())
            .collect()
    }

    /// Draws the data of trial `k`: true nuisances first, then constraints, then the data in their order.
    ///
    /// # Errors
    /// The model's refusal at the drawn nuisances.
    pub fn draw(&mut self, k: u64) -> Answer<(Vec<Kind>, Vec<f64>)> {
        let mut stream = Stream::new(self.settings.seed, k);
        let mut x = self.truth.clone();
        let mut shifted = false;
        for (v, c) in x.iter_mut().zip(&self.fitter.problem().coordinates) {
            if matches!(c.coordinate, Coordinate::Nuisance(_)) {
                *v = stream.normal();
                shifted = true;
            }
        }
        let centres = self
            .constraints
            .iter()
            .map(|&(value, error)| value + error * stream.normal())
            .collect();
        let (mu, errors) = if shifted
            || self
                .kinds
                .iter()
                .any(|k| matches!(k, Kind::CrossSection { .. }))
        {
            let p = self.fitter.likelihood().predict(&x)?;
            (p.mu, p.error_nb)
        } else {
            (self.mu.clone(), Vec::new())
        };
        let mut correlated = self.correlated_errors(&errors, &mut stream).into_iter();
        let kinds = self
            .kinds
            .iter()
            .zip(mu.iter().zip(&self.backgrounds))
            .map(|(kind, (&mu, &b))| match *kind {
                Kind::Counts { .. } => Kind::Counts {
                    n: stream.poisson(mu),
                },
                Kind::OnOff { tau, .. } => Kind::OnOff {
                    n: stream.poisson(mu + b),
                    n_off: stream.poisson(tau * b),
                    tau,
                },
                Kind::CrossSection { .. } => Kind::CrossSection {
                    sigma_nb: mu + correlated.next().unwrap_or(0.0),
                },
            })
            .collect();
        Ok((kinds, centres))
    }

    /// Errors of the cross sections, drawn from their covariance with the energy errors on its diagonal.
    fn correlated_errors(&self, errors: &[f64], stream: &mut Stream) -> Vec<f64> {
        let own = self.fitter.problem().covariance_nb2.as_ref();
        let mut matrix = own.clone();
        let diagonal = errors
            .iter()
            .zip(&self.kinds)
            .filter(|(_, k)| matches!(k, Kind::CrossSection { .. }));
        for (i, (e, _)) in diagonal.enumerate() {
            matrix[(i, i)] = e * e;
        }
        let n = matrix.nrows();
        if n == 0 {
            return Vec::new();
        }
        let z = nalgebra::DVector::from_fn(n, |_, _| stream.normal());
        matrix
            .cholesky()
            .map(|c| (c.l() * z).iter().copied().collect())
            .unwrap_or_default()
    }

    /// Draws and fits trial `k`.
    #[must_use]
    pub fn trial(&mut self, k: u64) -> TrialRow {
        self.fit_trial(k).unwrap_or_else(|_| TrialRow {
            k,
            converged: false,
            values: Vec::new(),
            errors: Vec::new(),
            statistic: f64::MAX,
            rise_at_truth: Vec::new(),
        })
    }

    fn fit_trial(&mut self, k: u64) -> Answer<TrialRow> {
        let minimum = self.minimum(k)?;
        let covariance = self.covariance(&minimum)?;
        let count = self.fitter.problem().parameter_count();
        let errors: Vec<Option<f64>> = (0..count).map(|i| covariance.error(i)).collect();
        let converged = minimum.stop.is_minimum()
            && errors
                .iter()
                .zip(&minimum.at_bound)
                .all(|(e, at)| e.is_some() || *at);
        let mut rise_at_truth = Vec::new();
        if self.settings.profiles {
            for i in 0..count {
                let start = self.truth.clone();
                let value = self.truth[i];
                let held = self.fitter.held(i, value, &start)?;
                rise_at_truth.push((held.expansion.value - minimum.expansion.value).max(0.0));
            }
        }
        Ok(TrialRow {
            k,
            converged,
            values: minimum.x[..count].to_vec(),
            errors,
            statistic: minimum.expansion.value,
            rise_at_truth,
        })
    }

    /// Minimum of trial `k` from the truth.
    ///
    /// # Errors
    /// The model's refusal at the truth.
    pub fn minimum(&mut self, k: u64) -> Answer<Minimum> {
        let start = self.truth.clone();
        self.minimum_from(k, &start)
    }

    /// Minimum of trial `k` from another start (coordinates as in the fit).
    ///
    /// # Errors
    /// The model's refusal there.
    pub fn minimum_from(&mut self, k: u64, start: &[f64]) -> Answer<Minimum> {
        let (kinds, centres) = self.draw(k)?;
        let likelihood = self.fitter.likelihood();
        likelihood.replace_measured(&kinds);
        for (i, centre) in centres.into_iter().enumerate() {
            likelihood.replace_constraint(i, centre);
        }
        minimise(likelihood, start, Tolerance::trials())
    }

    fn covariance(&mut self, minimum: &Minimum) -> Answer<Covariance> {
        let observed = self.fitter.likelihood().full(&minimum.x, true)?;
        Ok(Covariance::new(
            &observed.curvature,
            &minimum.expansion.curvature,
            &minimum.at_bound,
        ))
    }
}
