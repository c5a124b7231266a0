//! The relaxed optimum: hours spread freely over the candidates, to a certified efficiency.
//!
//! Vertex exchange on the outside (the candidates where the sensitivity peaks join the
//! support), Newton steps with an active set on the support inside: Yang, Biedermann & Tang,
//! J. Am. Stat. Assoc. 108 (2013) 1411 (from memory). Quadratic inside, and one pass over the
//! candidates per round, so the time grows linearly with their number. A single variance
//! without prior goes to the linear programme of [`super::elfving`] instead.
//!
//! A least-variance plan may leave other parameters undetermined, so that the information at
//! the optimum is singular and has no certificate. A tiny share of time spread evenly keeps
//! it regular; it is removed at the end where the certificate survives that.

use super::certificate::{Certificate, certify};
use super::criterion::{Assessment, Criterion, Scaled, check_determined};
use super::elfving;
use super::problem::{Problem, add_outer, mirror};
use crate::error::Answer;
use crate::math;
use nalgebra::{DMatrix, DVector};

/// Why the search ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Stop {
    /// The wanted efficiency is guaranteed.
    Certified,
    /// Rounds were used up; the certificate says what is guaranteed all the same.
    RoundsUsedUp,
}

/// An allocation with its guarantee.
#[derive(Debug, Clone, PartialEq)]
pub struct Relaxed {
    /// Hours at each candidate.
    pub hours: Vec<f64>,
    /// Criterion in units of the parameters: ln det I, ln det S or ln of the (weighted) variance,
    /// averaged over the truths.
    pub criterion: f64,
    /// Guaranteed efficiency: no allocation of these hours has an information larger by more than 1/efficiency.
    pub efficiency: f64,
    /// Relative gain of information per further hour at each candidate, 1/h.
    pub gain_per_h: Vec<f64>,
    /// Share of the hours that is spread evenly only to keep every parameter determined.
    pub spread_share: f64,
    /// Rounds of exchange.
    pub rounds: usize,
    /// Why it ended.
    pub stopped: Stop,
}

const MAX_ROUNDS: usize = 60;
const MAX_NEWTON: usize = 80;

/// Finds an allocation whose guaranteed efficiency is at least `wanted` (0.5 to 1 - 1e-8).
///
/// # Errors
/// The goal is undetermined by the candidates, or names no free parameter.
pub fn optimise(problem: &Problem, criterion: &Criterion, wanted: f64) -> Answer<Relaxed> {
    let scaled = Scaled::new(criterion, problem)?;
    check_determined(problem, &scaled)?;
    let wanted = wanted.clamp(0.5, 1.0 - 1e-8);
    if let Some(found) = elfving::optimise(problem, &scaled, wanted) {
        return Ok(found);
    }
    let spread = ((1.0 - wanted) / 4.0).min(1e-3);
    let mut search = Search::new(problem, &scaled, spread);
    let (regular, mut rounds) = search.run(wanted);
    let mut hours = search.hours();
    let mut certificate = regular;
    let mut spread_share = spread;
    if let Some((bare, more)) = search.without_spread(wanted) {
        rounds += more;
        if bare.efficiency >= certificate.efficiency.min(wanted) {
            certificate = bare;
            hours = search.hours();
            spread_share = 0.0;
        }
    }
    Ok(finish(
        problem,
        &scaled,
        hours,
        certificate,
        spread_share,
        rounds,
        wanted,
    ))
}

/// Criterion and guarantee of any allocation; `None` if its information is singular or the
/// criterion does not fit the problem.
#[must_use]
pub fn evaluate(problem: &Problem, criterion: &Criterion, hours: &[f64]) -> Option<Relaxed> {
    if hours.len() != problem.candidates || hours.iter().any(|t| t.is_nan() || *t < 0.0) {
        return None;
    }
    let scaled = Scaled::new(criterion, problem).ok()?;
    let certificate = certify(problem, &scaled, hours)?;
    Some(finish(
        problem,
        &scaled,
        hours.to_vec(),
        certificate,
        0.0,
        0,
        0.0,
    ))
}

pub(crate) fn finish(
    problem: &Problem,
    scaled: &Scaled,
    hours: Vec<f64>,
    certificate: Certificate,
    spread_share: f64,
    rounds: usize,
    wanted: f64,
) -> Relaxed {
    Relaxed {
        hours,
        criterion: in_units(problem, scaled, certificate.value),
        stopped: if certificate.efficiency >= wanted {
            Stop::Certified
        } else {
            Stop::RoundsUsedUp
        },
        efficiency: certificate.efficiency,
        gain_per_h: certificate.gain_per_h,
        spread_share,
        rounds,
    }
}

/// phi -> ln det I, ln det S or ln variance in units of the parameters.
pub(crate) fn in_units(problem: &Problem, scaled: &Scaled, phi: f64) -> f64 {
    match scaled {
        Scaled::Determinant => {
            let shift: f64 = problem.scale.iter().map(|&s| 2.0 * math::ln(s)).sum();
            shift - phi * problem.parameters as f64
        }
        Scaled::Subset(k) => {
            let mut shift = 0.0;
            for column in k.column_iter() {
                for (i, &x) in column.iter().enumerate() {
                    if x != 0.0 {
                        shift += 2.0 * math::ln(problem.scale[i]);
                    }
                }
            }
            shift - phi * k.ncols() as f64
        }
        Scaled::Variance(_) => phi,
    }
}

struct Search<'a> {
    problem: &'a Problem,
    criterion: &'a Scaled,
    /// Share of the time that is spread evenly.
    spread: f64,
    /// Prior plus spread information for each truth.
    base: Vec<DMatrix<f64>>,
    active: Vec<usize>,
    /// Shares of the time on the active candidates; they sum to 1 - spread.
    share: Vec<f64>,
}

impl<'a> Search<'a> {
    fn new(problem: &'a Problem, criterion: &'a Scaled, spread: f64) -> Self {
        let mut search = Self {
            problem,
            criterion,
            spread,
            base: Vec::new(),
            active: Vec::new(),
            share: Vec::new(),
        };
        search.set_spread(spread);
        let n = problem.candidates;
        let wanted = (2 * problem.parameters + 1).min(n);
        for i in 0..wanted {
            let j = if wanted > 1 {
                i * (n - 1) / (wanted - 1)
            } else {
                0
            };
            if !search.active.contains(&j) {
                search.active.push(j);
            }
        }
        if let Some(c) = certify(problem, criterion, &problem.uniform()) {
            search.join_peaks(&c.gain_per_h);
        }
        search.share = vec![(1.0 - spread) / search.active.len() as f64; search.active.len()];
        search
    }

    fn set_spread(&mut self, spread: f64) {
        self.spread = spread;
        let p = self.problem;
        let even = vec![spread * p.hours / p.candidates as f64; p.candidates];
        self.base = p
            .draws
            .iter()
            .map(|d| {
                if spread > 0.0 {
                    p.scaled_information(d, &even)
                } else {
                    d.prior.clone()
                }
            })
            .collect();
    }

    fn hours(&self) -> Vec<f64> {
        let even = self.spread * self.problem.hours / self.problem.candidates as f64;
        let mut hours = vec![even; self.problem.candidates];
        for (&j, &s) in self.active.iter().zip(&self.share) {
            hours[j] += s * self.problem.hours;
        }
        hours
    }

    /// Candidates at the local maxima of the sensitivity join; how many were new.
    fn join_peaks(&mut self, gain: &[f64]) -> usize {
        let level = self
            .active
            .iter()
            .zip(&self.share)
            .filter(|&(_, &s)| s > 0.0)
            .map(|(&j, _)| gain[j])
            .fold(f64::INFINITY, f64::min);
        let level = if level.is_finite() { level } else { 0.0 };
        let n = gain.len();
        let mut peaks: Vec<usize> = (0..n)
            .filter(|&j| {
                gain[j] > level
                    && (j == 0 || gain[j] >= gain[j - 1])
                    && (j + 1 == n || gain[j] >= gain[j + 1])
                    && !self.active.contains(&j)
            })
            .collect();
        peaks.sort_by(|&a, &b| gain[b].total_cmp(&gain[a]).then(a.cmp(&b)));
        peaks.truncate(2 * self.problem.parameters);
        self.active.extend_from_slice(&peaks);
        self.share.resize(self.active.len(), 0.0);
        peaks.len()
    }

    /// Rounds of exchange until the certificate is good enough.
    fn run(&mut self, wanted: f64) -> (Certificate, usize) {
        let mut best: Option<(Certificate, Vec<usize>, Vec<f64>)> = None;
        let mut idle = 0;
        let mut rounds = 0;
        while rounds < MAX_ROUNDS {
            rounds += 1;
            self.newton((1.0 - wanted) * 0.1);
            let Some(c) = certify(self.problem, self.criterion, &self.hours()) else {
                break;
            };
            let gain = c.gain_per_h.clone();
            let better = best.as_ref().is_none_or(|b| c.efficiency > b.0.efficiency);
            idle = if better { 0 } else { idle + 1 };
            if better {
                best = Some((c, self.active.clone(), self.share.clone()));
            }
            let reached = best.as_ref().map_or(0.0, |b| b.0.efficiency);
            if reached >= wanted || (self.join_peaks(&gain) == 0 && idle > 2) {
                break;
            }
        }
        let Some((certificate, active, share)) = best else {
            return (
                Certificate {
                    value: f64::INFINITY,
                    efficiency: 0.0,
                    gain_per_h: vec![0.0; self.problem.candidates],
                },
                rounds,
            );
        };
        self.active = active;
        self.share = share;
        (certificate, rounds)
    }

    /// The same without the evenly spread share, if that stays well determined.
    fn without_spread(&mut self, wanted: f64) -> Option<(Certificate, usize)> {
        let keep = 1.0 / (1.0 - self.spread);
        for s in &mut self.share {
            *s *= keep;
        }
        self.set_spread(0.0);
        for k in 0..self.problem.draws.len() {
            let info = self.information(k, &self.share);
            if !self.criterion.value(&info).is_finite() || self.criterion.assess(&info).is_none() {
                return None;
            }
        }
        let direct = certify(self.problem, self.criterion, &self.hours())?;
        if direct.efficiency >= wanted {
            return Some((direct, 0));
        }
        Some(self.run(wanted))
    }

    fn information(&self, k: usize, share: &[f64]) -> DMatrix<f64> {
        let draw = &self.problem.draws[k];
        let mut info = self.base[k].clone();
        for (&j, &s) in self.active.iter().zip(share) {
            if s > 0.0 {
                let f = draw.gain(j, s * self.problem.hours).0;
                add_outer(&mut info, draw.root(j, self.problem.parameters), f);
            }
        }
        mirror(&mut info);
        info
    }

    fn assess(&self, share: &[f64]) -> Option<(f64, Vec<Assessment>)> {
        let mut value = 0.0;
        let mut list = Vec::with_capacity(self.problem.draws.len());
        for (k, draw) in self.problem.draws.iter().enumerate() {
            let a = self.criterion.assess(&self.information(k, share))?;
            value += draw.weight * a.value;
            list.push(a);
        }
        Some((value, list))
    }

    /// Minimises over the shares of the active candidates until none of them is worth more than
    /// the mean by `tolerance`, relative: the part of the certificate that the support decides.
    fn newton(&mut self, tolerance: f64) {
        let Some((mut value, mut assessments)) = self.assess(&self.share) else {
            return;
        };
        for _ in 0..MAX_NEWTON {
            let (gradient, hessian) = self.derivatives(&assessments);
            let used: f64 = self.share.iter().sum();
            let mean = -gradient.dot(&DVector::from_column_slice(&self.share)) / used;
            if -gradient.min() - mean < tolerance {
                break;
            }
            let Some((step, decrement)) = self.direction(&gradient, &hessian) else {
                break;
            };
            let mut longest = f64::INFINITY;
            for (s, d) in self.share.iter().zip(step.iter()) {
                if *d < 0.0 {
                    longest = longest.min(s / -d);
                }
            }
            let mut length = longest.min(1.0);
            let mut accepted = None;
            for _ in 0..40 {
                let trial: Vec<f64> = self
                    .share
                    .iter()
                    .zip(step.iter())
                    .map(|(s, d)| {
                        let t = s + length * d;
                        // What meets the bound, meets it exactly.
                        if *d < 0.0 && t <= 1e-14 { 0.0 } else { t }
                    })
                    .collect();
                if let Some((v, a)) = self.assess(&trial) {
                    // Near the optimum the gain drowns in rounding before the gradient does.
                    if v <= value - 1e-4 * length * decrement + 4e-16 * (1.0 + value.abs()) {
                        accepted = Some((trial, v, a));
                        break;
                    }
                }
                length *= 0.5;
            }
            let Some((trial, v, a)) = accepted else {
                break;
            };
            self.share = trial;
            value = v;
            assessments = a;
            let keep: Vec<bool> = self.share.iter().map(|&s| s > 0.0).collect();
            if keep.iter().any(|k| !k) {
                let mut it = keep.iter();
                self.active.retain(|_| it.next().copied().unwrap_or(true));
                self.share.retain(|&s| s > 0.0);
            }
        }
    }

    fn derivatives(&self, assessments: &[Assessment]) -> (DVector<f64>, DMatrix<f64>) {
        let p = self.problem.parameters;
        let m = self.active.len();
        let t = self.problem.hours;
        let mut gradient = DVector::zeros(m);
        let mut hessian = DMatrix::zeros(m, m);
        let mut h = DMatrix::zeros(p, m);
        let mut gains = vec![(0.0, 0.0, 0.0); m];
        for (draw, a) in self.problem.draws.iter().zip(assessments) {
            for (i, &j) in self.active.iter().enumerate() {
                h.column_mut(i).copy_from_slice(draw.root(j, p));
                gains[i] = draw.gain(j, self.share[i] * t);
            }
            let inverse = h.tr_mul(&(&a.inverse * &h));
            let z = a.factor.tr_mul(&h);
            let sens = z.tr_mul(&z);
            for i in 0..m {
                gradient[i] -= draw.weight * gains[i].1 * sens[(i, i)] * t;
                for k in 0..=i {
                    let c = self.criterion.curvature(
                        inverse[(i, k)],
                        sens[(i, k)],
                        sens[(i, i)],
                        sens[(k, k)],
                        p as f64,
                    );
                    hessian[(i, k)] += draw.weight * gains[i].1 * gains[k].1 * c * t * t;
                }
                hessian[(i, i)] -= draw.weight * gains[i].2 * sens[(i, i)] * t * t;
            }
        }
        mirror(&mut hessian);
        (gradient, hessian)
    }

    /// Newton direction with sum 0 that does not leave the bounds at once, and its decrement.
    fn direction(
        &self,
        gradient: &DVector<f64>,
        hessian: &DMatrix<f64>,
    ) -> Option<(DVector<f64>, f64)> {
        let m = self.active.len();
        let mut free: Vec<usize> = (0..m).collect();
        let ridge = 1e-9 * (0..m).map(|i| hessian[(i, i)]).fold(0.0, f64::max);
        loop {
            let k = free.len();
            if k < 2 {
                return None;
            }
            let mut sub = DMatrix::from_fn(k, k, |a, b| hessian[(free[a], free[b])]);
            let mut extra = ridge;
            let cholesky = loop {
                for i in 0..k {
                    sub[(i, i)] += extra;
                }
                if let Some(c) = sub.clone().cholesky() {
                    break c;
                }
                extra = extra.max(1e-300) * 10.0;
                if !extra.is_finite() {
                    return None;
                }
            };
            let g = DVector::from_fn(k, |a, _| gradient[free[a]]);
            let one = DVector::from_element(k, 1.0);
            let hg = cholesky.solve(&g);
            let h1 = cholesky.solve(&one);
            let nu = hg.sum() / h1.sum();
            let mut step = DVector::zeros(m);
            let mut blocked = Vec::new();
            for (a, &i) in free.iter().enumerate() {
                step[i] = nu * h1[a] - hg[a];
                if self.share[i] <= 0.0 && step[i] < 0.0 {
                    blocked.push(i);
                }
            }
            if blocked.is_empty() {
                let decrement = -gradient.dot(&step);
                return (decrement > 0.0 && decrement.is_finite()).then_some((step, decrement));
            }
            free.retain(|i| !blocked.contains(i));
        }
    }
}
