//! The statistic 2 NLL of a problem with gradient, expected and observed curvature.
//!
//! Poisson terms in the form of Baker & Cousins (NIM 221 (1984) 437); cross sections as
//! r^T V^-1 r, with V = own covariance + (d sigma/dW e_W)^2 at the current parameters and no
//! ln det term; nuisances and constraints as unit Gaussians.

mod action;

use super::curve::Site;
use super::derivatives::{Derivatives, Need, differentiate};
use super::nuisance::NuisanceKind;
use super::problem::{Coordinate, Kind, Problem};
use super::terms::{Term, counts, on_off};
use crate::error::{Answer, Refusal};
use crate::math::exp;
use crate::numerics::minimise::{Expansion, Objective};
use action::{Action, actions, along, along_pairs, factor_change};
use nalgebra::{DMatrix, DVector};
use std::rc::Rc;

/// The model's prediction for every datum at one place.
#[derive(Debug, Clone)]
pub struct Prediction {
    /// Prediction of each datum, counts or nb.
    pub mu: Vec<f64>,
    /// Observed cross section at each point, nb, without factors.
    pub sigma_nb: Vec<f64>,
    /// W of each point with its shifts, GeV.
    pub w_gev: Vec<f64>,
    /// Own error of each cross-section datum with its energy error, nb (0 for counts).
    pub error_nb: Vec<f64>,
}

/// A quantity as a function of the coordinates.
pub type OfCoordinates = Rc<dyn Fn(&[f64]) -> f64>;

/// A narrow Gaussian pull of a derived quantity towards a value: how its profile is walked.
pub struct Target {
    /// The quantity.
    pub of: OfCoordinates,
    /// Where to.
    pub goal: f64,
    /// Width of the pull.
    pub error: f64,
    /// Steps of its derivative by coordinate; 0: it does not depend on it.
    pub gradient_steps: Vec<f64>,
}

/// Statistic of a problem; counts evaluations of the curve.
pub struct Likelihood {
    problem: Problem,
    /// By coordinate, then point.
    actions: Rc<Vec<Vec<Action>>>,
    need: Need,
    bounds: Vec<(f64, f64)>,
    largest: Vec<f64>,
    first_steps: Vec<f64>,
    second_steps: Vec<f64>,
    last: Option<(Vec<f64>, Rc<Derivatives>)>,
    /// Kept until the steps change: the common start of pseudo-experiments.
    pinned: Option<(Vec<f64>, Rc<Derivatives>)>,
    target: Option<Target>,
    /// Batches of curve evaluations so far.
    pub batches: u32,
}

impl Likelihood {
    /// Of a problem.
    #[must_use]
    pub fn new(problem: Problem) -> Self {
        let actions = actions(&problem);
        let slope = problem.data.iter().any(|d| {
            matches!(d.kind, Kind::CrossSection { .. })
                && problem
                    .points
                    .get(d.point)
                    .is_some_and(|p| p.w_error_gev > 0.0)
        });
        let need = Need {
            w: problem.has(NuisanceKind::Energy),
            spread: problem.has(NuisanceKind::Spread),
            slope,
        };
        let scales: Vec<f64> = problem
            .model
            .parameters()
            .iter()
            .map(|p| p.scale)
            .chain([problem.w_scale_gev, 0.2])
            .collect();
        let bounds = problem.coordinates.iter().map(|c| c.bounds).collect();
        let largest = problem
            .coordinates
            .iter()
            .map(|c| match c.coordinate {
                Coordinate::Curve(_) => 20.0 * c.scale,
                Coordinate::Nuisance(_) => 3.0,
                _ => f64::INFINITY,
            })
            .collect();
        Self {
            problem,
            actions: Rc::new(actions),
            need,
            bounds,
            largest,
            first_steps: scales.iter().map(|s| 0.05 * s).collect(),
            second_steps: scales.iter().map(|s| 0.5 * s).collect(),
            last: None,
            pinned: None,
            target: None,
            batches: 0,
        }
    }

    /// The problem.
    #[must_use]
    pub fn problem(&self) -> &Problem {
        &self.problem
    }

    /// The same with other measured values (pseudo-experiments): what is known of the curve at the last place is kept.
    pub fn replace_measured(&mut self, kinds: &[Kind]) {
        for (datum, kind) in self.problem.data.iter_mut().zip(kinds) {
            datum.kind = *kind;
        }
    }

    /// Replaces the centre of a constraint (pseudo-experiments draw it).
    pub fn replace_constraint(&mut self, index: usize, value: f64) {
        if let Some(c) = self.problem.constraints.get_mut(index) {
            c.1 = value;
        }
    }

    /// Narrows the bounds of one coordinate to a single value (profiles).
    pub fn hold(&mut self, coordinate: usize, value: f64) {
        if let Some(b) = self.bounds.get_mut(coordinate) {
            *b = (value, value);
        }
    }

    /// Gives a held coordinate its bounds back.
    pub fn release(&mut self, coordinate: usize) {
        if let (Some(b), Some(c)) = (
            self.bounds.get_mut(coordinate),
            self.problem.coordinates.get(coordinate),
        ) {
            *b = c.bounds;
        }
    }

    /// Chooses the difference steps by the curvature: a twentieth of a conditional error, within the model's own scale.
    pub fn adapt_steps(&mut self, expansion: &Expansion) {
        for (i, p) in self.problem.model.parameters().iter().enumerate() {
            let c = expansion.curvature[(i, i)];
            if c > 0.0 && c.is_finite() {
                let error = (2.0 / c).sqrt();
                self.first_steps[i] = (0.05 * error).clamp(0.02 * p.scale, p.scale);
                self.second_steps[i] = (0.5 * error).clamp(0.2 * p.scale, 3.0 * p.scale);
            }
        }
        self.last = None;
        self.pinned = None;
    }

    /// Adds or removes the pull of a derived quantity.
    pub fn pull_to(&mut self, target: Option<Target>) {
        self.target = target;
    }

    /// Keeps what is known of the curve at `x` for fits that start there.
    ///
    /// # Errors
    /// The model's refusal there.
    pub fn pin(&mut self, x: &[f64]) -> Answer<()> {
        self.pinned = Some((x.to_vec(), self.derivatives(x, false)?));
        Ok(())
    }

    fn factor(&self, sum: f64) -> f64 {
        if self.problem.gaussian_factors {
            1.0 + sum
        } else {
            exp(sum)
        }
    }

    /// Signal and luminosity factor of each point.
    fn factors(&self, x: &[f64]) -> Vec<(f64, f64)> {
        (0..self.problem.points.len())
            .map(|p| {
                let (mut s, mut l) = (0.0, 0.0);
                for (row, v) in self.actions.iter().zip(x) {
                    s += row[p].signal * v;
                    l += row[p].luminosity * v;
                }
                (self.factor(s), self.factor(l))
            })
            .collect()
    }

    fn sites(&self, x: &[f64]) -> Vec<Site> {
        let k = self.problem.model.parameters().len();
        self.problem
            .sites
            .iter()
            .map(|&(point, bin)| {
                let p = &self.problem.points[point];
                let (mut shift, mut ln_spread) = (0.0, 0.0);
                for (row, v) in self.actions.iter().zip(x).skip(k) {
                    for (direction, size) in &row[point].directions {
                        if *direction == k {
                            shift += size * v;
                        } else {
                            ln_spread += size * v;
                        }
                    }
                }
                Site {
                    point,
                    bin,
                    w_gev: p.w_gev + shift,
                    spread_factor: exp(ln_spread),
                }
            })
            .collect()
    }

    fn derivatives(&mut self, x: &[f64], second: bool) -> Answer<Rc<Derivatives>> {
        if !second {
            for (at, known) in [&self.last, &self.pinned].into_iter().flatten() {
                if at == x {
                    return Ok(Rc::clone(known));
                }
            }
        }
        self.batches += 1;
        let k = self.problem.model.parameters().len();
        let sites = self.sites(x);
        let steps = if second {
            &self.second_steps
        } else {
            &self.first_steps
        };
        let found = Rc::new(differentiate(
            self.problem.model.as_ref(),
            &sites,
            x.get(..k).unwrap_or_default(),
            steps,
            self.need,
            second,
        )?);
        if !second {
            self.last = Some((x.to_vec(), Rc::clone(&found)));
        }
        Ok(found)
    }

    /// (sigma_bg, r_bg) of each exit.
    fn backgrounds(&self, x: &[f64]) -> Vec<(f64, f64)> {
        let mut out = self.problem.backgrounds.as_ref().clone();
        for (c, v) in self.problem.coordinates.iter().zip(x) {
            match c.coordinate {
                Coordinate::BackgroundCrossSection(exit) => out[exit].0 = *v,
                Coordinate::BackgroundRate(exit) => out[exit].1 = *v,
                _ => {}
            }
        }
        out
    }

    /// Predictions at `x`.
    ///
    /// # Errors
    /// The model's refusal.
    pub fn predict(&mut self, x: &[f64]) -> Answer<Prediction> {
        let d = self.derivatives(x, false)?;
        let factors = self.factors(x);
        let backgrounds = self.backgrounds(x);
        let mu = self
            .problem
            .data
            .iter()
            .map(|datum| {
                let (s, l) = factors[datum.point];
                let (bg, rate) = backgrounds[self.problem.exit_of[datum.point]];
                datum.signal * s * l * d.sigma[datum.site]
                    + datum.luminosity_nbinv * l * bg
                    + datum.live_time_h * rate
            })
            .collect();
        let mut error_nb = Vec::with_capacity(self.problem.data.len());
        let mut row = 0;
        for datum in &self.problem.data {
            error_nb.push(if matches!(datum.kind, Kind::CrossSection { .. }) {
                let (s, l) = factors[datum.point];
                let e = self.problem.points[datum.point].w_error_gev
                    * s
                    * l
                    * d.slope.get(datum.point).copied().unwrap_or(0.0);
                let own = self.problem.covariance_nb2[(row, row)];
                row += 1;
                (own + e * e).sqrt()
            } else {
                0.0
            });
        }
        Ok(Prediction {
            mu,
            sigma_nb: d.sigma.clone(),
            w_gev: self.sites(x).iter().map(|s| s.w_gev).collect(),
            error_nb,
        })
    }

    /// Statistic and derivatives; `observed`: the full second derivatives, else their positive expectation.
    ///
    /// # Errors
    /// The model's refusal, or a prediction that no count can follow.
    pub fn full(&mut self, x: &[f64], observed: bool) -> Answer<Expansion> {
        let d = self.derivatives(x, observed)?;
        let n = x.len();
        let factors = self.factors(x);
        let backgrounds = self.backgrounds(x);
        let gaussian = self.problem.gaussian_factors;
        let mut out = Expansion {
            value: 0.0,
            gradient: DVector::zeros(n),
            curvature: DMatrix::zeros(n, n),
        };
        let cross = self.problem.covariance_nb2.nrows();
        let mut residual = DVector::zeros(cross);
        let mut variance = self.problem.covariance_nb2.as_ref().clone();
        let mut columns = DMatrix::zeros(cross, n);
        let mut variance_columns = DMatrix::zeros(cross, n);
        let mut cross_data: Vec<(usize, f64)> = Vec::with_capacity(cross);
        let mut row_of = vec![0.0; n];
        for datum in &self.problem.data {
            let (p, at) = (datum.point, datum.site);
            let (fs, fl) = factors[p];
            let (bg, rate) = backgrounds[self.problem.exit_of[p]];
            let sigma = d.sigma[at];
            let g = fs * fl;
            let mu = datum.signal * g * sigma
                + datum.luminosity_nbinv * fl * bg
                + datum.live_time_h * rate;
            for (slot, row) in row_of.iter_mut().zip(self.actions.iter()) {
                let a = &row[p];
                *slot = if a.is_none() {
                    0.0
                } else {
                    let ds = along(&a.directions, &d.d_sigma, at);
                    let (dfs, dfl) = factor_change(a, fs, fl, gaussian);
                    datum.signal * (g * ds + (dfs * fl + fs * dfl) * sigma)
                        + datum.luminosity_nbinv * (dfl * bg + fl * a.background)
                        + datum.live_time_h * a.rate
                };
            }
            if let Kind::CrossSection { sigma_nb } = datum.kind {
                let r = cross_data.len();
                residual[r] = sigma_nb - mu;
                let e = self.problem.points[p].w_error_gev;
                for (i, v) in row_of.iter().enumerate() {
                    columns[(r, i)] = *v;
                }
                if self.need.slope && e > 0.0 {
                    let s = g * d.slope[p];
                    variance[(r, r)] += s * s * e * e;
                    for (i, row) in self.actions.iter().enumerate() {
                        let a = &row[p];
                        let (dfs, dfl) = factor_change(a, fs, fl, gaussian);
                        let ds = g * along(&a.directions, &d.d_slope, p)
                            + (dfs * fl + fs * dfl) * d.slope[p];
                        variance_columns[(r, i)] = 2.0 * e * e * s * ds;
                    }
                }
                cross_data.push((p, e));
                continue;
            }
            let Some(term) = self.term(datum.kind, mu) else {
                return Err(impossible(&self.problem.points[p].id, mu));
            };
            out.value += term.value;
            let weight = if observed { term.second } else { term.expected };
            for (i, &vi) in row_of.iter().enumerate() {
                if vi == 0.0 {
                    continue;
                }
                out.gradient[i] += term.first * vi;
                for (k, &vk) in row_of.iter().enumerate().take(i + 1) {
                    out.curvature[(i, k)] += weight * vi * vk;
                }
            }
            if observed {
                let sigma = (d.sigma[at], d.d_sigma.as_slice(), d.dd_sigma.as_slice());
                self.add_second(&mut out.curvature, sigma, (p, at), (fs, fl), bg, |s, b| {
                    term.first * (datum.signal * s[3] + datum.luminosity_nbinv * b)
                });
            }
        }
        if cross > 0 {
            let factor = variance.cholesky().ok_or_else(|| {
                Refusal::new(
                    "data.covariance",
                    "",
                    "a positive definite matrix",
                    "the covariance of the cross sections is not positive definite",
                )
            })?;
            let a = factor.solve(&residual);
            out.value += residual.dot(&a);
            let mut effective = columns.clone();
            for i in 0..n {
                for r in 0..cross {
                    effective[(r, i)] += variance_columns[(r, i)] * a[r];
                    out.gradient[i] -=
                        2.0 * a[r] * columns[(r, i)] + a[r] * a[r] * variance_columns[(r, i)];
                }
            }
            let solved = factor.solve(&effective);
            let gram = effective.transpose() * solved;
            for i in 0..n {
                for k in 0..=i {
                    out.curvature[(i, k)] += 2.0 * gram[(i, k)];
                }
            }
            if observed {
                for (r, &(p, e)) in cross_data.iter().enumerate() {
                    let f = factors[p];
                    let bg = backgrounds[self.problem.exit_of[p]].0;
                    let sigma = (d.sigma[p], d.d_sigma.as_slice(), d.dd_sigma.as_slice());
                    self.add_second(&mut out.curvature, sigma, (p, p), f, bg, |s, _| {
                        -2.0 * a[r] * s[3]
                    });
                    if self.need.slope && e > 0.0 {
                        let slope = (d.slope[p], d.d_slope.as_slice(), d.dd_slope.as_slice());
                        let w = -2.0 * a[r] * a[r] * e * e;
                        // Half the second derivative of the slope's square.
                        self.add_second(&mut out.curvature, slope, (p, p), f, bg, |s, _| {
                            w * (s[1] * s[2] + s[0] * s[3])
                        });
                    }
                }
            }
        }
        for (i, c) in self.problem.coordinates.iter().enumerate() {
            if matches!(c.coordinate, Coordinate::Nuisance(_)) {
                out.value += x[i] * x[i];
                out.gradient[i] += 2.0 * x[i];
                out.curvature[(i, i)] += 2.0;
            }
        }
        for &(i, value, error) in &self.problem.constraints {
            let z = (x[i] - value) / error;
            out.value += z * z;
            out.gradient[i] += 2.0 * z / error;
            out.curvature[(i, i)] += 2.0 / (error * error);
        }
        if let Some(target) = &self.target {
            let z = ((target.of)(x) - target.goal) / target.error;
            let slopes: Vec<f64> = (0..n)
                .map(|i| {
                    let h = target.gradient_steps.get(i).copied().unwrap_or(0.0);
                    if h == 0.0 {
                        return 0.0;
                    }
                    let (mut up, mut down) = (x.to_vec(), x.to_vec());
                    up[i] += h;
                    down[i] -= h;
                    ((target.of)(&up) - (target.of)(&down)) / (2.0 * h * target.error)
                })
                .collect();
            out.value += z * z;
            for i in 0..n {
                out.gradient[i] += 2.0 * z * slopes[i];
                for k in 0..=i {
                    out.curvature[(i, k)] += 2.0 * slopes[i] * slopes[k];
                }
            }
        }
        for i in 0..n {
            for k in 0..i {
                out.curvature[(k, i)] = out.curvature[(i, k)];
            }
        }
        if out.value.is_finite() {
            Ok(out)
        } else {
            Err(impossible("", out.value))
        }
    }

    /// Term of one count.
    fn term(&self, kind: Kind, mu: f64) -> Option<Term> {
        match kind {
            Kind::Counts { n } => counts(n, mu),
            Kind::OnOff { n, n_off, tau } => on_off(n, n_off, tau, mu),
            Kind::CrossSection { .. } => None,
        }
    }

    /// Adds `weight` (of F_s F_l f with its first derivatives along i and k and its second; of the second
    /// derivative of F_l sigma_bg) over all pairs of coordinates, for f = sigma or the slope.
    fn add_second(
        &self,
        curvature: &mut DMatrix<f64>,
        (value, first, second): (f64, &[Vec<f64>], &[Vec<f64>]),
        (p, at): (usize, usize),
        (fs, fl): (f64, f64),
        bg: f64,
        weight: impl Fn([f64; 4], f64) -> f64,
    ) {
        let gaussian = self.problem.gaussian_factors;
        let g = fs * fl;
        for (i, row) in self.actions.iter().enumerate() {
            let a = &row[p];
            if a.is_none() {
                continue;
            }
            let (as_, al) = factor_change(a, fs, fl, gaussian);
            let ga = as_ * fl + fs * al;
            let va = along(&a.directions, first, at);
            for (k, other) in self.actions.iter().enumerate().take(i + 1) {
                let b = &other[p];
                if b.is_none() {
                    continue;
                }
                let (bs, bl) = factor_change(b, fs, fl, gaussian);
                let gb = bs * fl + fs * bl;
                let vb = along(&b.directions, first, at);
                let (ss, ll) = if gaussian {
                    (0.0, 0.0)
                } else {
                    (a.signal * b.signal * fs, a.luminosity * b.luminosity * fl)
                };
                let gab = ss * fl + as_ * bl + bs * al + fs * ll;
                let vab = along_pairs(&a.directions, &b.directions, second, at);
                let product = [
                    g * value,
                    ga * value + g * va,
                    gb * value + g * vb,
                    gab * value + ga * vb + gb * va + g * vab,
                ];
                let background = ll * bg + al * b.background + bl * a.background;
                curvature[(i, k)] += weight(product, background);
            }
        }
    }
}

impl Objective for Likelihood {
    fn bounds(&self) -> &[(f64, f64)] {
        &self.bounds
    }
    fn largest_steps(&self) -> &[f64] {
        &self.largest
    }
    fn value(&mut self, x: &[f64]) -> Option<f64> {
        // With derivatives at once: steps are mostly accepted, and value and derivatives then
        // come from the same quadrature.
        self.full(x, false).ok().map(|e| e.value)
    }
    fn expand(&mut self, x: &[f64]) -> Answer<Expansion> {
        self.full(x, false)
    }
}

fn impossible(point: &str, mu: f64) -> Refusal {
    Refusal::new(
        format!("points[{point}]"),
        mu,
        "an expectation above 0",
        format!("the model expects {mu} at point {point}: no count can be compared with that"),
    )
}

#[cfg(test)]
mod tests;
