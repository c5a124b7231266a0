//! Kernel of the Gaussian spread alone.

use super::skeleton::{Kernel, Verdict};
use crate::math;
use crate::numerics::quadrature::{AtNodes, Rule};

/// Where the Gaussian ends, in sigma: exp(-72) = 5e-32.
pub(super) const REACH: f64 = 12.0;
/// 1/sqrt(2 pi).
pub(super) const INV_SQRT_TAU: f64 = 0.398_942_280_401_432_7;

/// G(w - W).
pub(super) struct Gaussian {
    pub w_gev: f64,
    pub sigma_gev: f64,
    /// Largest cell on which it counts as smooth, in sigma.
    pub cell: f64,
}

/// How far a Gaussian, or a radiator blurred by one, is from its polynomial of degree 15 on a
/// cell of two sigma (or of one), in units of its largest value there: the Chebyshev remainder
/// 2 (1/2)^16 / sqrt(16!) (or (1/4)^16) times the growth within the cell, up to 500 in the far
/// tails; checked by the accuracy map.
pub(super) const CELL_ERROR: [f64; 2] = [1e-8, 1e-12];

impl Kernel for Gaussian {
    fn verdict(&self, low_gev: f64, size_gev: f64) -> Verdict {
        let high = low_gev + size_gev;
        let reach = REACH * self.sigma_gev;
        if high < self.w_gev - reach || low_gev > self.w_gev + reach {
            Verdict::Nothing
        } else if size_gev <= self.cell * self.sigma_gev {
            Verdict::Smooth
        } else {
            Verdict::Halve
        }
    }

    fn values(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut AtNodes) {
        let from = (low_gev - self.w_gev) / self.sigma_gev;
        let step = size_gev / self.sigma_gev;
        let height = INV_SQRT_TAU / self.sigma_gev;
        for (slot, u) in out.iter_mut().zip(&rule.nodes) {
            let t = from + step * u;
            *slot = height * math::exp(-0.5 * t * t);
        }
    }
}
