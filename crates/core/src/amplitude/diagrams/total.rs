//! Totals of the tree-level reactions inside an angular region, as a Born cross section.
//!
//! s channel alone: isotropic, closed. Otherwise Gauss-Legendre panels in the logarithm of the
//! distance from the nearest denominator beyond cos theta = +-1, in which forward and backward
//! peaks of any sharpness are smooth. Relative accuracy 1e-11 of the sum of absolute parts.

use super::{PreparedDiagrams, Stu};
use crate::amplitude::born::{Born, Energy, Feature};
use crate::amplitude::waves::Region;
use crate::error::{Answer, Refusal, Warning};
use crate::numerics::gauss_legendre::gauss_legendre;

/// Nodes of a panel and its longest extent in the logarithm: the nearest singularity lies pi
/// beside the path, which makes the error of 12 nodes about 1e-13.
const NODES: usize = 12;
const PANEL: f64 = 3.0;

/// A reaction with its angular quadrature.
#[derive(Debug, Clone, PartialEq)]
pub struct DiagramTotal {
    diagrams: PreparedDiagrams,
    region: Region,
    rule: Vec<(f64, f64)>,
}

impl DiagramTotal {
    /// Adds the angular quadrature over a region (an incoherent background counts as isotropic).
    #[must_use]
    pub fn new(diagrams: PreparedDiagrams, region: Region) -> Self {
        Self {
            diagrams,
            region,
            rule: gauss_legendre(NODES),
        }
    }

    /// The reaction.
    #[must_use]
    pub fn diagrams(&self) -> &PreparedDiagrams {
        &self.diagrams
    }

    /// Calls `at_node(cos, weight)` for a rule on the intervals that suits the poles of the
    /// reaction at W.
    pub(crate) fn each_node(
        &self,
        w_gev: f64,
        intervals: &[(f64, f64)],
        mut at_node: impl FnMut(f64, f64),
    ) {
        let (right, left) = self.diagrams.angular_poles(w_gev);
        for &(from, to) in intervals {
            if to > 0.0 {
                self.half(right, from.max(0.0), to, &mut at_node);
            }
            if from < 0.0 {
                self.half(-left, (-to).max(0.0), -from, |cos, weight| {
                    at_node(-cos, weight)
                });
            }
        }
    }

    /// The interval [a, b], 0 <= a < b <= 1, with a pole at `pole` >= 1 (possibly infinite).
    fn half(&self, pole: f64, a: f64, b: f64, mut at_node: impl FnMut(f64, f64)) {
        // Far poles need no stretching.
        if pole > 4.0 {
            for (x, weight) in &self.rule {
                at_node(a + 0.5 * (b - a) * (x + 1.0), 0.5 * (b - a) * weight);
            }
            return;
        }
        // A pole at 1 itself (massless exchange at the edge) is cut at rounding.
        let near = (pole - b).max(1e-15);
        let length = crate::math::ln((pole - a) / near);
        let panels = (length / PANEL).ceil().max(1.0);
        let step = length / panels;
        let mut start = crate::math::ln(near);
        for _ in 0..panels as u32 {
            for (x, weight) in &self.rule {
                let distance = crate::math::exp(start + 0.5 * step * (x + 1.0));
                at_node(pole - distance, 0.5 * step * weight * distance);
            }
            start += step;
        }
    }

    fn integrate(&self, at: Energy) -> f64 {
        let w = at.w_gev();
        let s_part = self.diagrams.s_sums(at);
        let (middle, forward) = (self.diagrams.stu(w, 0.0), self.diagrams.stu(w, 1.0));
        if !self.diagrams.has_exchange() {
            let sums = self.diagrams.sums(at, &middle, s_part);
            return 2.0 * self.region.fraction() * self.diagrams.m2_of(&sums, &middle);
        }
        let mut total = 0.0;
        self.each_node(w, self.region.intervals(), |cos, weight| {
            let x = between(&middle, &forward, cos);
            total += weight * self.diagrams.m2_of(&self.diagrams.sums(at, &x, s_part), &x);
        });
        total
    }
}

fn between(middle: &Stu, forward: &Stu, cos: f64) -> Stu {
    Stu {
        s: middle.s,
        t: middle.t + cos * (forward.t - middle.t),
        u: middle.u + cos * (forward.u - middle.u),
    }
}

impl Born for DiagramTotal {
    fn threshold_gev(&self) -> f64 {
        self.diagrams.masses.threshold_gev()
    }

    fn upper_limit_gev(&self) -> f64 {
        if !self.diagrams.has_s_mediator() {
            return f64::INFINITY;
        }
        self.diagrams
            .mediator_propagators()
            .map(crate::propagator::Propagator::upper_limit_gev)
            .fold(f64::INFINITY, f64::min)
    }

    fn features(&self) -> Vec<Feature> {
        let mut features = vec![Feature::Kink {
            w_gev: self.threshold_gev(),
        }];
        if self.diagrams.has_s_mediator() {
            for propagator in self.diagrams.mediator_propagators() {
                features.extend(propagator.features());
            }
        }
        features
    }

    fn contribution_names(&self) -> Vec<String> {
        self.diagrams.names().to_vec()
    }

    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        out.fill(0.0);
        if at.above_gev(self.threshold_gev()) <= 0.0 {
            return;
        }
        let w = at.w_gev();
        let scale = self.diagrams.prefactor_nb(w) * self.diagrams.reaction.identical_factor();
        let (middle, forward) = (self.diagrams.stu(w, 0.0), self.diagrams.stu(w, 1.0));
        self.each_node(w, self.region.intervals(), |cos, weight| {
            self.diagrams
                .add_parts(at, &between(&middle, &forward, cos), scale * weight, out);
        });
        let incoherent = self.region.fraction() * self.diagrams.incoherent.sigma_nb(at);
        if self.diagrams.incoherent != crate::amplitude::background::Incoherent::None
            && let Some(last) = out.last_mut()
        {
            *last = incoherent;
        }
    }

    fn sigma_nb(&self, at: Energy) -> f64 {
        if at.above_gev(self.threshold_gev()) <= 0.0 {
            return 0.0;
        }
        let scale =
            self.diagrams.prefactor_nb(at.w_gev()) * self.diagrams.reaction.identical_factor();
        scale * self.integrate(at) + self.region.fraction() * self.diagrams.incoherent.sigma_nb(at)
    }

    fn warnings(&self) -> Vec<Warning> {
        self.diagrams.warnings()
    }

    fn radiation(&self) -> Answer<Vec<Warning>> {
        if !self.diagrams.has_exchange() {
            return Ok(Vec::new());
        }
        if self.region == Region::all() {
            return Err(Refusal::new(
                "model.cos_cut",
                "none",
                "a cut on |cos theta|",
                "the radiator is the s-channel one; with t- or u-channel diagrams it holds at wide angles at best, so a cut on |cos theta| is needed before radiation is applied",
            ));
        }
        Ok(vec![Warning::new(
            "s-channel-radiator",
            "the radiator is the s-channel one: with t- or u-channel diagrams it is an approximation, the better the tighter the cut on |cos theta|",
        )])
    }
}
