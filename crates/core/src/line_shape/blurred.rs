//! Kernel of radiation followed by a Gaussian spread:
//! K(W, w) = int G(W'-W) F(1 - w^2/W'^2, W'^2) 2w/W'^2 dW', what a Born cross section at w
//! contributes at the setting W.
//!
//! In units of sigma_W it is one curve of t = (W-w)/sigma_W that changes slowly with W. It is
//! tabulated as Chebyshev series on panels in t near W, in (W-w)/W further down, in w/W at the
//! lower end, at three or four energies W_s, and interpolated in W between them.

use super::radiator::Radiator;
use super::skeleton::{Kernel, Verdict};
use super::smear::{INV_SQRT_TAU, REACH};
use crate::math;
use crate::numerics::quadrature::{AtNodes, NODES, Rule, chebyshev_sum};

/// Panels in t are two wide, from -12 to 24.
const NEAR_PANELS: usize = 18;
const NEAR_END: f64 = 24.0;
/// Largest sigma_W/W the table is made for.
pub(super) const WIDEST: f64 = 5e-3;

/// sigma_W as a function of the setting.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Law {
    pub sigma_gev: f64,
    pub w0_gev: f64,
    pub power: f64,
}

impl Law {
    pub fn constant(sigma_gev: f64) -> Self {
        Self {
            sigma_gev,
            w0_gev: 1.0,
            power: 0.0,
        }
    }
    pub fn at(&self, w_gev: f64) -> f64 {
        if self.power == 0.0 {
            self.sigma_gev
        } else {
            self.sigma_gev * math::pow(w_gev / self.w0_gev, self.power)
        }
    }
}

/// exp(-t^2/2)/sqrt(2 pi) between the nodes of panels of width 2 whose distance is 2(D-6).
#[derive(Debug, Clone)]
pub(super) struct GaussBlocks {
    blocks: Vec<[AtNodes; NODES]>,
}

impl GaussBlocks {
    pub fn new(rule: &Rule) -> Self {
        let mut blocks = vec![[[0.0; NODES]; NODES]; 13];
        for (block, distance) in blocks.iter_mut().zip(-6i8..) {
            for (row, a) in block.iter_mut().zip(&rule.nodes) {
                for (slot, b) in row.iter_mut().zip(&rule.nodes) {
                    let t = 2.0 * (f64::from(distance) + a - b);
                    *slot = INV_SQRT_TAU * math::exp(-0.5 * t * t);
                }
            }
        }
        Self { blocks }
    }
}

/// The kernel over an interval of settings.
#[derive(Debug, Clone)]
pub(super) struct Table {
    law: Law,
    w_min_gev: f64,
    /// ln W_s.
    settings: Vec<f64>,
    /// Panels in (W-w)/W: [2^-(k+1), 2^-k] for k = 1..=middle.
    middle: usize,
    /// Panels in w/W: [2^-(k+1), 2^-k] for k = 1..=lower.
    lower: usize,
    /// `coefficients[s]`: near, middle and lower panels; near: of sigma K, others: of W K.
    coefficients: Vec<Vec<AtNodes>>,
}

/// ln W of a few energies: the kernel is nearly a power of W.
fn chebyshev_points(low_gev: f64, high_gev: f64, n: usize) -> Vec<f64> {
    let (low, high) = (math::ln(low_gev), math::ln(high_gev));
    (0..n)
        .map(|k| {
            let angle = core::f64::consts::PI * (k as f64 + 0.5) / n as f64;
            0.5 * (low + high) - 0.5 * (high - low) * math::cos(angle)
        })
        .collect()
}

/// Lagrange's cardinal polynomials of a few points.
fn lagrange(points: &[f64], at: f64, out: &mut [f64]) {
    for (i, slot) in out.iter_mut().enumerate() {
        let mut product = 1.0;
        for (j, point) in points.iter().enumerate() {
            if i != j {
                product *= (at - point) / (points[i] - point);
            }
        }
        *slot = product;
    }
}

/// F dx/dw, 1/GeV, at W' = `prime` for what remains at `w`; y = W' - w.
#[inline]
fn radiated_density(radiator: &Radiator, prime: f64, w: f64, y: f64) -> f64 {
    let emission = radiator.at(prime);
    let scale = 1.0 / (prime * prime);
    let x = y * (prime + w) * scale;
    emission.density(x, math::ln(x), 2.0 * math::ln(w / prime)) * 2.0 * w * scale
}

/// Gauss-Hermite rule of 7 points (Abramowitz & Stegun table 25.10): (x, weight/sqrt(pi)).
const HERMITE: [(f64, f64); 4] = [
    (0.0, 0.810_264_617_556_807_3),
    (0.816_287_882_858_964_7, 0.425_607_252_610_127_8),
    (1.673_551_628_767_471, 0.054_515_582_819_127_03),
    (2.651_961_356_835_233, 9.717_812_450_995_192e-4),
];

impl Table {
    pub fn new(
        rule: &Rule,
        gauss: &GaussBlocks,
        radiator: &Radiator,
        law: Law,
        low_gev: f64,
        high_gev: f64,
    ) -> Self {
        let settings = chebyshev_points(
            low_gev,
            high_gev,
            if high_gev < 1.017 * low_gev { 3 } else { 4 },
        );
        let narrowest = law.at(low_gev).min(law.at(high_gev));
        let mut middle = 1;
        let mut edge = 0.25;
        while edge * low_gev > NEAR_END * narrowest {
            middle += 1;
            edge *= 0.5;
        }
        let mut lower = 1;
        let mut edge = 0.25;
        while edge * high_gev > radiator.w_min_gev {
            lower += 1;
            edge *= 0.5;
        }
        let mut table = Self {
            law,
            w_min_gev: radiator.w_min_gev,
            settings,
            middle,
            lower,
            coefficients: Vec::new(),
        };
        let widest = law.at(low_gev).max(law.at(high_gev));
        let common = (law.power == 0.0).then(|| {
            NearCurves::new(
                rule,
                gauss,
                radiator,
                widest,
                low_gev - NEAR_END * widest,
                high_gev + REACH * widest,
            )
        });
        for &ln_w in &table.settings {
            let w = math::exp(ln_w);
            let sigma = law.at(w);
            let mut panels = match &common {
                Some(curves) => curves.panels(rule, w),
                None => NearCurves::new(
                    rule,
                    gauss,
                    radiator,
                    sigma,
                    w - NEAR_END * sigma,
                    w + REACH * sigma,
                )
                .panels(rule, w),
            };
            let mut far = |from_low_end: bool, k: usize| {
                let mut high = 1.0;
                for _ in 0..k {
                    high *= 0.5;
                }
                let values = rule.nodes.map(|u| {
                    let fraction = 0.5 * high * (1.0 + u);
                    let (y, left) = if from_low_end {
                        (w * (1.0 - fraction), w * fraction)
                    } else {
                        (w * fraction, w * (1.0 - fraction))
                    };
                    let mut sum = 0.0;
                    for (index, &(x, weight)) in HERMITE.iter().enumerate() {
                        let step = sigma * core::f64::consts::SQRT_2 * x;
                        sum += weight * radiated_density(radiator, w + step, left, y + step);
                        if index > 0 {
                            sum += weight * radiated_density(radiator, w - step, left, y - step);
                        }
                    }
                    w * sum / core::f64::consts::PI.sqrt()
                });
                panels.push(rule.chebyshev(&values));
            };
            for k in 1..=table.middle {
                far(false, k);
            }
            for k in 1..=table.lower {
                far(true, k);
            }
            table.coefficients.push(panels);
        }
        table
    }

    /// The kernel at one setting inside the interval.
    pub fn at(&self, w_gev: f64) -> Blurred {
        let mut weights = [0.0; 4];
        let n = self.settings.len();
        if let Some(weights) = weights.get_mut(..n) {
            lagrange(&self.settings, math::ln(w_gev), weights);
        }
        let panels = NEAR_PANELS + self.middle + self.lower;
        let mut coefficients = vec![[0.0; NODES]; panels];
        for (weight, from) in weights.iter().zip(&self.coefficients) {
            for (to, from) in coefficients.iter_mut().zip(from) {
                for (slot, c) in to.iter_mut().zip(from) {
                    *slot += weight * c;
                }
            }
        }
        Blurred {
            w_gev,
            sigma_gev: self.law.at(w_gev),
            w_min_gev: self.w_min_gev,
            middle: self.middle,
            lower: self.lower,
            coefficients,
        }
    }
}

/// sigma K(w + t sigma, w) at the nodes of the near panels, for a few fixed w.
struct NearCurves {
    sigma: f64,
    points: Vec<f64>,
    curves: Vec<Vec<AtNodes>>,
}

impl NearCurves {
    fn new(
        rule: &Rule,
        gauss: &GaussBlocks,
        radiator: &Radiator,
        sigma: f64,
        low: f64,
        high: f64,
    ) -> Self {
        let points = chebyshev_points(low, high, if high < 1.025 * low { 3 } else { 5 });
        let curves = points
            .iter()
            .map(|&ln_w| Self::curve(rule, gauss, radiator, sigma, math::exp(ln_w)))
            .collect();
        Self {
            sigma,
            points,
            curves,
        }
    }

    /// With w fixed, K is the convolution of f(y) = F dx/dw at W' = w + y with the Gaussian.
    fn curve(
        rule: &Rule,
        gauss: &GaussBlocks,
        radiator: &Radiator,
        sigma: f64,
        w: f64,
    ) -> Vec<AtNodes> {
        let mut weighted = [[0.0; NODES]; NEAR_PANELS];
        let first = radiator.at(w);
        let power = rule.power_weights(first.beta);
        let power_log = rule.power_log_weights(first.beta);
        let log = rule.log_weights();
        for (panel, out) in weighted.iter_mut().enumerate() {
            for m in 0..NODES {
                let u = rule.nodes[m];
                let y = sigma * 2.0 * (panel as f64 + u);
                let prime = w + y;
                if panel > 0 {
                    out[m] = 2.0 * rule.weights[m] * radiated_density(radiator, prime, w, y);
                    continue;
                }
                // u^(beta-1) and ln u are integrated exactly; x/u is smooth. beta itself grows
                // with W': to first order that adds a term in u^(beta-1) ln u.
                let emission = radiator.at(prime);
                let scale = 1.0 / (prime * prime);
                let x = y * (prime + w) * scale;
                let ln_ratio = math::ln((prime + w) * scale * 2.0 * sigma);
                let soft = emission.soft * math::exp((emission.beta - 1.0) * ln_ratio);
                let growth = emission.beta - first.beta;
                out[m] = 2.0
                    * (soft * (power[m] + growth * power_log[m])
                        - emission.log_factor(x) * (log[m] + rule.weights[m] * ln_ratio)
                        + rule.weights[m] * emission.regular(x, 2.0 * math::ln(w / prime)))
                    * 2.0
                    * w
                    * scale;
            }
        }
        (0..NEAR_PANELS)
            .map(|panel| {
                let mut sums = [0.0; NODES];
                for (other, weighted) in weighted.iter().enumerate() {
                    // Panel P begins at t = 2P - 12, panel Q of y/sigma at 2Q.
                    let Some(block) = panel.checked_sub(other).and_then(|d| gauss.blocks.get(d))
                    else {
                        continue;
                    };
                    for (sum, row) in sums.iter_mut().zip(block) {
                        let mut part = 0.0;
                        for (g, v) in row.iter().zip(weighted) {
                            part += g * v;
                        }
                        *sum += part;
                    }
                }
                sums.map(|s| s * sigma)
            })
            .collect()
    }

    /// Chebyshev series of sigma K(W, W - t sigma) at one W.
    fn panels(&self, rule: &Rule, w_gev: f64) -> Vec<AtNodes> {
        let mut weights = vec![0.0; self.points.len()];
        (0..NEAR_PANELS)
            .map(|panel| {
                let mut values = [0.0; NODES];
                for (m, value) in values.iter_mut().enumerate() {
                    let t = 2.0 * (panel as f64 + rule.nodes[m]) - REACH;
                    let ln_w = math::ln(w_gev - t * self.sigma);
                    lagrange(&self.points, ln_w, &mut weights);
                    for (weight, curve) in weights.iter().zip(&self.curves) {
                        if let Some(panel) = curve.get(panel) {
                            *value += weight * panel[m];
                        }
                    }
                }
                rule.chebyshev(&values)
            })
            .collect()
    }
}

/// The kernel at one setting.
pub(super) struct Blurred {
    w_gev: f64,
    sigma_gev: f64,
    w_min_gev: f64,
    middle: usize,
    lower: usize,
    coefficients: Vec<AtNodes>,
}

/// k and position in [-1, 1] of a fraction on the panels [2^-(k+1), 2^-k], k >= 1.
#[inline]
fn binary_panel(fraction: f64, last: usize) -> (usize, f64) {
    let exponent = (fraction.to_bits() >> 52) as i64 - 1023;
    let k = ((-1 - exponent).max(1) as usize).min(last);
    // 2^(k+1) exactly.
    let scale = f64::from_bits(((1023 + k as u64 + 1) & 0x7ff) << 52);
    (k, 2.0 * (fraction * scale - 1.0) - 1.0)
}

impl Blurred {
    /// Panel, position on it and factor of the series there for what remains W - y.
    #[inline]
    fn locate(&self, y: f64) -> Option<(usize, f64, f64)> {
        let t = y / self.sigma_gev;
        if t < -REACH {
            return None;
        }
        if t < NEAR_END {
            let scaled = 0.5 * (t + REACH);
            let panel = (scaled as usize).min(NEAR_PANELS - 1);
            let x = 2.0 * (scaled - panel as f64) - 1.0;
            return Some((panel, x, 1.0 / self.sigma_gev));
        }
        let lost = y / self.w_gev;
        if lost < 0.5 {
            let (k, x) = binary_panel(lost, self.middle);
            Some((NEAR_PANELS + k - 1, x, 1.0 / self.w_gev))
        } else {
            let (k, x) = binary_panel((1.0 - lost).max(f64::MIN_POSITIVE), self.lower);
            Some((NEAR_PANELS + self.middle + k - 1, x, 1.0 / self.w_gev))
        }
    }
}

impl Kernel for Blurred {
    fn verdict(&self, low_gev: f64, size_gev: f64) -> Verdict {
        let (sigma, high) = (self.sigma_gev, low_gev + size_gev);
        if high <= self.w_min_gev || low_gev > self.w_gev + REACH * sigma {
            return Verdict::Nothing;
        }
        if size_gev <= 2.0 * sigma && size_gev <= 2.0 * low_gev {
            return Verdict::Smooth;
        }
        // Beyond the reach of the Gaussian K is smooth on the scale of its distance from W.
        let distance = (self.w_gev - high) - 4.0 * sigma;
        if size_gev <= 2.0 * distance && size_gev <= 2.0 * low_gev {
            Verdict::Smooth
        } else {
            Verdict::Halve
        }
    }

    fn values(&self, low_gev: f64, size_gev: f64, rule: &Rule, out: &mut AtNodes) {
        let from = self.w_gev - low_gev;
        let mut positions = [0.0; NODES];
        let mut panels = [usize::MAX; NODES];
        let mut factors = [0.0; NODES];
        for m in 0..NODES {
            if let Some((panel, x, factor)) = self.locate(from - size_gev * rule.nodes[m]) {
                panels[m] = panel;
                positions[m] = x;
                factors[m] = factor;
            }
        }
        // Runs of nodes on one panel are summed together.
        let mut start = 0;
        while start < NODES {
            let panel = panels[start];
            let mut end = start + 1;
            while end < NODES && panels[end] == panel {
                end += 1;
            }
            if let Some(series) = self.coefficients.get(panel) {
                chebyshev_sum(series, &positions[start..end], &mut out[start..end]);
            }
            start = end;
        }
        for (slot, factor) in out.iter_mut().zip(&factors) {
            *slot *= factor;
        }
    }
}
