//! The chain by direct integration on panels graded around every feature.

use super::radiator::Radiator;
use crate::amplitude::born::{Born, Energy, Feature};
use crate::math;
use crate::numerics::quadrature::{NODES, Rule};

/// A Born model seen as one or several channels that are carried through the chain together.
pub(super) struct Source<'a> {
    born: &'a dyn Born,
    features: Vec<Feature>,
    /// The total alone, or each contribution.
    split: bool,
    pub channels: usize,
}

impl<'a> Source<'a> {
    pub fn new(born: &'a dyn Born, split: bool) -> Self {
        let channels = if split {
            born.contribution_names().len()
        } else {
            1
        };
        Self {
            born,
            features: born.features(),
            split,
            channels,
        }
    }

    pub fn value(&self, at: Energy, out: &mut [f64]) {
        if self.split {
            self.born.contributions_nb(at, out);
        } else if let Some(slot) = out.first_mut() {
            *slot = self.born.sigma_nb(at);
        }
    }

    /// The peak nearest to `w_gev`: energies are counted from there.
    fn reference(&self, w_gev: f64) -> f64 {
        let mut best = w_gev;
        let mut distance = f64::INFINITY;
        for feature in &self.features {
            if let Feature::Peak { w_gev: peak, .. } = *feature
                && (peak - w_gev).abs() < distance
            {
                best = peak;
                distance = (peak - w_gev).abs();
            }
        }
        best
    }

    /// Break points between `low` and `high`, both included, graded towards every feature.
    fn edges(&self, low: f64, high: f64, extra: &mut Vec<f64>) -> Vec<f64> {
        let mut edges = core::mem::take(extra);
        let span = high - low;
        let mut graded = |centre: f64, smallest: f64| {
            edges.push(centre);
            let mut step = smallest;
            while step < 2.0 * span + (centre - low).abs() {
                edges.push(centre - step);
                edges.push(centre + step);
                step *= 2.0;
            }
        };
        for feature in &self.features {
            match *feature {
                Feature::Peak { w_gev, width_gev } => graded(w_gev, 0.5 * width_gev),
                Feature::Kink { w_gev } => graded(w_gev, 1e-9 * span),
            }
        }
        graded(self.born.threshold_gev(), 1e-9 * span);
        edges.retain(|edge| *edge > low && *edge < high);
        edges.push(low);
        edges.push(high);
        edges.sort_by(f64::total_cmp);
        edges.dedup();
        edges
    }
}

/// sigma_rad(W') of every channel, added into `out` with factor `scale`.
fn radiate(
    rule: &Rule,
    radiator: &Radiator,
    source: &Source<'_>,
    w_gev: f64,
    scale: f64,
    out: &mut [f64],
) {
    let low = radiator.w_min_gev.max(source.born.threshold_gev());
    if w_gev <= low {
        return;
    }
    let emission = radiator.at(w_gev);
    let mut value = vec![0.0; source.channels];
    // Half of the first panel on which the Born curve is smooth, then doubled downwards.
    let coarse = source.edges(low, w_gev, &mut Vec::new());
    let mut step = match coarse.as_slice() {
        [.., below, _] => 0.5 * (w_gev - below),
        _ => return,
    };
    let mut extra = Vec::new();
    while step < w_gev - low {
        extra.push(w_gev - step);
        step *= 2.0;
    }
    let edges = source.edges(low, w_gev, &mut extra);
    let last = edges.len() - 2;
    for (index, pair) in edges.windows(2).enumerate() {
        let &[a, b] = pair else { continue };
        let reference = source.reference(b);
        let (height, from_top) = (b - a, w_gev - b);
        let weights = &rule.weights;
        let (power, log) = if index == last {
            (rule.power_weights(emission.beta), rule.log_weights())
        } else {
            ([0.0; NODES], [0.0; NODES])
        };
        for m in 0..NODES {
            let u = rule.nodes[m];
            let y = from_top + height * u;
            let w = w_gev - y;
            let jacobian = 2.0 * w / (w_gev * w_gev);
            let x = y * (w_gev + w) / (w_gev * w_gev);
            let ln_left = 2.0 * math::ln(w / w_gev);
            let kernel = if index == last {
                // x = y * slope: the powers and logarithms of u are integrated exactly.
                let slope = (w_gev + w) / (w_gev * w_gev) * height;
                let ln_slope = math::ln(slope);
                emission.soft * math::exp((emission.beta - 1.0) * ln_slope) * power[m]
                    - emission.log_factor(x) * (log[m] + weights[m] * ln_slope)
                    + emission.regular(x, ln_left) * weights[m]
            } else {
                weights[m] * emission.density(x, math::ln(x), ln_left)
            };
            let at = Energy {
                reference_gev: reference,
                offset_gev: (b - reference) - height * u,
            };
            source.value(at, &mut value);
            for (slot, v) in out.iter_mut().zip(&value) {
                *slot += scale * kernel * jacobian * height * v;
            }
        }
    }
}

/// Before the spread: radiated if there is a radiator, else Born.
pub(super) fn before_spread(
    rule: &Rule,
    radiator: Option<&Radiator>,
    source: &Source<'_>,
    w_gev: f64,
) -> Vec<f64> {
    let mut out = vec![0.0; source.channels];
    match radiator {
        Some(radiator) => radiate(rule, radiator, source, w_gev, 1.0, &mut out),
        None => source.value(Energy::at(w_gev), &mut out),
    }
    out
}

/// A density of the offset W' - W: its support and its breaks.
pub(super) enum Shape<'a> {
    Gaussian { sigma_gev: f64 },
    Table { rows: &'a [(f64, f64)], area: f64 },
}

impl Shape<'_> {
    fn reach(&self) -> (f64, f64) {
        match self {
            Shape::Gaussian { sigma_gev } => (-12.0 * sigma_gev, 12.0 * sigma_gev),
            Shape::Table { rows, .. } => match (rows.first(), rows.last()) {
                (Some(first), Some(last)) => (first.0, last.0),
                _ => (0.0, 0.0),
            },
        }
    }

    fn density(&self, offset: f64) -> f64 {
        match self {
            Shape::Gaussian { sigma_gev } => {
                let t = offset / sigma_gev;
                math::exp(-0.5 * t * t) / (sigma_gev * (2.0 * core::f64::consts::PI).sqrt())
            }
            Shape::Table { rows, area } => {
                for pair in rows.windows(2) {
                    if let &[(x0, y0), (x1, y1)] = pair
                        && offset >= x0
                        && offset <= x1
                    {
                        return (y0 + (y1 - y0) * (offset - x0) / (x1 - x0)) / area;
                    }
                }
                0.0
            }
        }
    }
}

/// After the spread at one W.
pub(super) fn after_spread(
    rule: &Rule,
    radiator: Option<&Radiator>,
    source: &Source<'_>,
    w_gev: f64,
    shape: &Shape<'_>,
) -> Vec<f64> {
    let (down, up) = shape.reach();
    let (low, high) = ((w_gev + down).max(0.0), w_gev + up);
    let mut extra = Vec::new();
    match shape {
        Shape::Gaussian { sigma_gev } => {
            extra.extend((-6..=6).map(|k| w_gev + 2.0 * sigma_gev * f64::from(k)));
        }
        Shape::Table { rows, .. } => extra.extend(rows.iter().map(|row| w_gev + row.0)),
    }
    if let Some(radiator) = radiator {
        let span = high - low;
        let mut step = 1e-9 * span;
        extra.push(radiator.w_min_gev);
        while step < span {
            extra.push(radiator.w_min_gev + step);
            step *= 2.0;
        }
    }
    let mut out = vec![0.0; source.channels];
    let mut value = vec![0.0; source.channels];
    for pair in source.edges(low, high, &mut extra).windows(2) {
        let &[a, b] = pair else { continue };
        let reference = source.reference(0.5 * (a + b));
        for m in 0..NODES {
            let offset = (a - reference) + (b - a) * rule.nodes[m];
            let prime = reference + offset;
            let weight = rule.weights[m] * (b - a) * shape.density((reference - w_gev) + offset);
            match radiator {
                Some(radiator) => radiate(rule, radiator, source, prime, weight, &mut out),
                None => {
                    let at = Energy {
                        reference_gev: reference,
                        offset_gev: offset,
                    };
                    source.value(at, &mut value);
                    for (slot, v) in out.iter_mut().zip(&value) {
                        *slot += weight * v;
                    }
                }
            }
        }
    }
    out
}
