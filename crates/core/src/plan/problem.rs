//! The planning problem as arrays: candidate energies, expected rates, gradients, prior.

use crate::error::{Answer, Refusal};
use nalgebra::{DMatrix, DVector};

/// Expected rates at the candidate energies for one possible truth.
#[derive(Debug, Clone)]
pub struct Rates {
    /// Probability of this truth (any positive scale).
    pub weight: f64,
    /// Expected counts per hour at each candidate, signal and background.
    pub rate_per_h: Vec<f64>,
    /// dm/dtheta per hour, candidate by candidate, `parameters` numbers each.
    pub gradient_per_h: Vec<f64>,
    /// dm/dW per hour and GeV at each candidate; empty if visits have no energy error.
    pub slope_per_h_gev: Vec<f64>,
    /// The part of the rate that does not scale with luminosity (r_bg), counts per hour.
    pub rate_without_beam_per_h: f64,
    /// Information already there (constraints, data taken), in units of the parameters.
    pub prior: DMatrix<f64>,
}

/// Errors that every visit has for itself.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct VisitErrors {
    /// Energy error s_E of a visit, GeV.
    pub energy_gev: f64,
    /// Relative luminosity error d of a visit.
    pub luminosity: f64,
}

/// One possible truth in scaled parameters: h = g/sqrt(m), e as in [`Problem::gain`].
#[derive(Debug, Clone)]
pub(crate) struct Draw {
    pub weight: f64,
    pub roots: Vec<f64>,
    /// e of [`Draw::gain`], already divided by the visits allowed per energy.
    pub visit_error: Vec<f64>,
    pub prior: DMatrix<f64>,
    /// Rate m, counts per hour.
    pub rate: Vec<f64>,
    /// m_W/sqrt(m), per GeV; empty if not given.
    pub slope_root: Vec<f64>,
    /// r_bg, counts per hour.
    pub dark_rate: f64,
}

/// A checked problem. Parameters are scaled inside to unit average information, so that a
/// mass in GeV and a cross section in nb may stand side by side.
#[derive(Debug, Clone)]
pub struct Problem {
    pub(crate) candidates: usize,
    pub(crate) parameters: usize,
    pub(crate) hours: f64,
    pub(crate) draws: Vec<Draw>,
    pub(crate) scale: DVector<f64>,
    pub(crate) names: Vec<String>,
    pub(crate) visits: f64,
}

impl Problem {
    /// Builds the problem of spreading `hours` over the candidates.
    ///
    /// `visits` (at least 1) is how often one energy may be visited: its visits' own errors are independent.
    ///
    /// # Errors
    /// No candidate, no hours, arrays of unequal length, a rate that is not above 0 where the
    /// gradient is not 0, a prior that is not positive semidefinite.
    pub fn new(
        names: &[String],
        truths: &[Rates],
        errors: VisitErrors,
        hours: f64,
        visits: f64,
    ) -> Answer<Self> {
        let parameters = names.len();
        let candidates = truths.first().map_or(0, |r| r.rate_per_h.len());
        if candidates == 0 {
            return Err(refuse(
                "plan.from",
                "",
                "a window that holds at least one allowed setting",
                "There is no allowed energy in this window. Widen the window or take a finer step.",
            ));
        }
        if parameters == 0 {
            return Err(refuse(
                "fit.free",
                "",
                "at least one free parameter",
                "Nothing is free, so there is nothing to plan for. Free the parameter whose error is to shrink.",
            ));
        }
        if !(hours.is_finite() && hours > 0.0) {
            return Err(refuse(
                "plan.hours",
                &hours.to_string(),
                "a time above 0",
                "No beam time is left to plan.",
            ));
        }
        if !(visits >= 1.0 && errors.energy_gev >= 0.0 && errors.luminosity >= 0.0) {
            return Err(refuse(
                "plan",
                "",
                "at least one visit per energy and errors of 0 or more",
                "The errors of a visit must be 0 or more.",
            ));
        }
        let total: f64 = truths.iter().map(|r| r.weight).sum();
        let mut draws = Vec::with_capacity(truths.len());
        for truth in truths {
            draws.push(draw(truth, candidates, names, errors, visits, total)?);
        }
        let mut problem = Self {
            candidates,
            parameters,
            hours,
            draws,
            scale: DVector::from_element(parameters, 1.0),
            names: names.to_vec(),
            visits,
        };
        problem.rescale();
        Ok(problem)
    }

    /// Number of candidate energies.
    #[must_use]
    pub fn candidates(&self) -> usize {
        self.candidates
    }

    /// Hours to be spread.
    #[must_use]
    pub fn hours(&self) -> f64 {
        self.hours
    }

    /// The same problem with other hours.
    ///
    /// # Errors
    /// Hours not above 0.
    pub fn with_hours(&self, hours: f64) -> Answer<Self> {
        if !(hours.is_finite() && hours > 0.0) {
            return Err(refuse(
                "plan.hours",
                &hours.to_string(),
                "a time above 0",
                "No beam time is left to plan.",
            ));
        }
        let mut other = self.clone();
        other.hours = hours;
        Ok(other)
    }

    /// Information of an allocation for truth `draw`, in units of the parameters.
    #[must_use]
    pub fn information(&self, draw: usize, hours: &[f64]) -> DMatrix<f64> {
        let mut info = match self.draws.get(draw) {
            Some(d) => self.scaled_information(d, hours),
            None => DMatrix::zeros(self.parameters, self.parameters),
        };
        for i in 0..self.parameters {
            for j in 0..self.parameters {
                info[(i, j)] *= self.scale[i] * self.scale[j];
            }
        }
        info
    }

    /// Equal time at every candidate: the scan everyone compares with.
    #[must_use]
    pub fn uniform(&self) -> Vec<f64> {
        vec![self.hours / self.candidates as f64; self.candidates]
    }

    pub(crate) fn scaled_information(&self, draw: &Draw, hours: &[f64]) -> DMatrix<f64> {
        let mut info = draw.prior.clone();
        for (j, &t) in hours.iter().enumerate() {
            if t > 0.0 {
                add_outer(&mut info, draw.root(j, self.parameters), draw.gain(j, t).0);
            }
        }
        mirror(&mut info);
        info
    }

    fn rescale(&mut self) {
        let uniform = self.uniform();
        let p = self.parameters;
        let mut diagonal = DVector::<f64>::zeros(p);
        for d in &self.draws {
            let info = self.scaled_information(d, &uniform);
            for i in 0..p {
                diagonal[i] += d.weight * info[(i, i)];
            }
        }
        for i in 0..p {
            let s = diagonal[i].sqrt();
            self.scale[i] = if s > 0.0 && s.is_finite() { s } else { 1.0 };
        }
        for d in &mut self.draws {
            for row in d.roots.chunks_exact_mut(p) {
                for (x, s) in row.iter_mut().zip(self.scale.iter()) {
                    *x /= s;
                }
            }
            for i in 0..p {
                for j in 0..p {
                    d.prior[(i, j)] /= self.scale[i] * self.scale[j];
                }
            }
        }
    }
}

impl Draw {
    /// sqrt-information vector h of candidate `j`.
    #[inline]
    pub(crate) fn root(&self, j: usize, parameters: usize) -> &[f64] {
        &self.roots[j * parameters..(j + 1) * parameters]
    }

    /// Gain f(t), f'(t), f''(t) of `t` hours at candidate `j`: the information is f h h^T with
    /// f = t/(1 + t e), e = (m_W^2 s_E^2 + (m - r_bg)^2 d^2)/(m visits). Concave in t.
    #[inline]
    pub(crate) fn gain(&self, j: usize, t: f64) -> (f64, f64, f64) {
        let e = self.visit_error.get(j).copied().unwrap_or(0.0);
        let q = 1.0 / (1.0 + t * e);
        (t * q, q * q, -2.0 * e * q * q * q)
    }
}

fn draw(
    truth: &Rates,
    candidates: usize,
    names: &[String],
    errors: VisitErrors,
    visits: f64,
    total_weight: f64,
) -> Answer<Draw> {
    let p = names.len();
    let lengths_fit = truth.rate_per_h.len() == candidates
        && truth.gradient_per_h.len() == candidates * p
        && (truth.slope_per_h_gev.len() == candidates
            || (truth.slope_per_h_gev.is_empty() && errors.energy_gev == 0.0))
        && truth.prior.nrows() == p
        && truth.prior.ncols() == p;
    if !(lengths_fit && truth.weight > 0.0 && total_weight.is_finite()) {
        return Err(refuse(
            "plan",
            "",
            "one rate, gradient and slope per energy, a weight above 0",
            "The arrays of the planning problem do not fit together.",
        ));
    }
    let mut roots = truth.gradient_per_h.clone();
    let mut visit_error = Vec::new();
    let needs_errors = errors.energy_gev > 0.0 || errors.luminosity > 0.0;
    for (j, row) in roots.chunks_exact_mut(p).enumerate() {
        let m = truth.rate_per_h[j];
        let idle = row.iter().all(|&g| g == 0.0);
        if !(m.is_finite() && row.iter().all(|g| g.is_finite()) && (m > 0.0 || (m == 0.0 && idle)))
        {
            return Err(refuse(
                "plan",
                &m.to_string(),
                "an expected rate above 0 wherever the curve depends on a free parameter",
                "The expected rate is 0 or not a number at an allowed energy. Give the background a value above 0, or narrow the window.",
            ));
        }
        let scale = if m > 0.0 { 1.0 / m.sqrt() } else { 0.0 };
        for g in row {
            *g *= scale;
        }
        if needs_errors {
            let slope = truth.slope_per_h_gev.get(j).copied().unwrap_or(0.0) * errors.energy_gev;
            let lumi = (m - truth.rate_without_beam_per_h) * errors.luminosity;
            visit_error.push((slope * slope + lumi * lumi) * scale * scale / visits);
        }
    }
    check_prior(&truth.prior, names)?;
    Ok(Draw {
        weight: truth.weight / total_weight,
        roots,
        visit_error,
        prior: truth.prior.clone(),
        slope_root: truth
            .slope_per_h_gev
            .iter()
            .zip(&truth.rate_per_h)
            .map(|(s, m)| if *m > 0.0 { s / m.sqrt() } else { 0.0 })
            .collect(),
        rate: truth.rate_per_h.clone(),
        dark_rate: truth.rate_without_beam_per_h,
    })
}

fn check_prior(prior: &DMatrix<f64>, names: &[String]) -> Answer<()> {
    let p = names.len();
    // Scaled to a unit diagonal first: the parameters have unlike units.
    let d: Vec<f64> = (0..p).map(|i| prior[(i, i)].max(0.0).sqrt()).collect();
    let mut unit = DMatrix::zeros(p, p);
    for i in 0..p {
        for j in 0..p {
            let s = d[i] * d[j];
            unit[(i, j)] = if s > 0.0 {
                prior[(i, j)] / s
            } else {
                prior[(i, j)]
            };
        }
    }
    let symmetric = (0..p).all(|i| (0..p).all(|j| (unit[(i, j)] - unit[(j, i)]).abs() <= 1e-9));
    if prior.iter().all(|x| x.is_finite()) && symmetric {
        let least = unit.symmetric_eigenvalues().min();
        if least > -1e-9 * p as f64 {
            return Ok(());
        }
    }
    Err(refuse(
        "fit.constraints",
        "",
        "prior information that is symmetric and not negative",
        "The prior information (constraints and data taken) is not a possible one: some combination of parameters would have a negative variance.",
    ))
}

/// Adds `factor` h h^T to the lower triangle.
#[inline]
pub(crate) fn add_outer(info: &mut DMatrix<f64>, h: &[f64], factor: f64) {
    for (i, &hi) in h.iter().enumerate() {
        let f = factor * hi;
        for (j, &hj) in h.iter().enumerate().take(i + 1) {
            info[(i, j)] += f * hj;
        }
    }
}

/// Copies the lower triangle to the upper.
#[inline]
pub(crate) fn mirror(info: &mut DMatrix<f64>) {
    for i in 0..info.nrows() {
        for j in 0..i {
            info[(j, i)] = info[(i, j)];
        }
    }
}

pub(crate) fn refuse(field: &str, value: &str, allowed: &str, message: &str) -> Refusal {
    Refusal::new(field, value, allowed, message)
}
