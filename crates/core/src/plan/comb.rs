//! A comb of points for a peak of unknown mass: is it found?
//!
//! The peak is looked for at every mass hypothesis with its strength free (q = 2 ln of the
//! likelihood ratio, 0 for a negative strength). The significance of the largest q is corrected
//! for the look elsewhere: p = p_local + N(u0) exp(-(q - u0)/2), N(u0) the mean number of
//! upcrossings of u0 without a peak (Gross & Vitells, Eur. Phys. J. C 70 (2010) 525). Both N and
//! the probability of detection come from seeded pseudo-experiments.

use super::problem::refuse;
use crate::error::Answer;
use crate::math;
use crate::numerics::probability::{normal_cdf, significance};
use crate::numerics::random::Stream;

/// A comb and what it expects.
#[derive(Debug, Clone, PartialEq)]
pub struct Comb {
    /// Expected signal counts for each mass hypothesis (in the order of mass), at each point.
    pub signal: Vec<Vec<f64>>,
    /// Prior weight of each mass hypothesis.
    pub weight: Vec<f64>,
    /// Expected background counts at each point, above 0.
    pub background: Vec<f64>,
}

/// What a comb finds.
#[derive(Debug, Clone, PartialEq)]
pub struct Detection {
    /// Probability of reaching the wanted global significance, averaged over the prior of the mass.
    pub probability: f64,
    /// Its statistical error from the number of trials.
    pub probability_error: f64,
    /// Mean upcrossings of the reference level without a peak.
    pub upcrossings: f64,
    /// Largest q that is needed.
    pub q_needed: f64,
    /// Expected local significance at the true mass, averaged over the prior.
    pub expected_local: f64,
}

/// Reference level of q for counting upcrossings.
const LEVEL: f64 = 0.5;

/// Evenly spaced points around `centre_gev`: as many as reach `reach_gev` on both sides, `spacing`
/// observed FWHM apart.
///
/// # Errors
/// A spacing, FWHM or reach that is not above 0; more than 10,000 points.
pub fn points(centre_gev: f64, fwhm_gev: f64, spacing: f64, reach_gev: f64) -> Answer<Vec<f64>> {
    let step = spacing * fwhm_gev;
    if !(step > 0.0 && reach_gev > 0.0 && step.is_finite() && reach_gev / step < 5e3) {
        return Err(refuse(
            "plan.comb",
            &format!("{spacing} FWHM"),
            "a spacing above 0 and at most 10,000 points",
            "The comb needs a spacing above 0, and no more than 10,000 points.",
        ));
    }
    let side = (reach_gev / step - 1e-9).ceil() as i32;
    Ok((-side..=side)
        .map(|k| centre_gev + step * f64::from(k))
        .collect())
}

/// Expected local significance by the Asimov data: sqrt(2 sum((s+b) ln(1+s/b) - s))
/// (Cowan, Cranmer, Gross & Vitells, Eur. Phys. J. C 71 (2011) 1554).
#[must_use]
pub fn expected_significance(signal: &[f64], background: &[f64]) -> f64 {
    let sum: f64 = signal
        .iter()
        .zip(background)
        .map(|(&s, &b)| (s + b) * math::ln_1p(s / b) - s)
        .sum();
    (2.0 * sum).max(0.0).sqrt()
}

/// Probability that the comb finds the peak at `wanted_z` global standard deviations.
///
/// # Errors
/// Arrays that do not fit together, a background that is not above 0.
pub fn detection(comb: &Comb, wanted_z: f64, trials: u32, seed: u64) -> Answer<Detection> {
    let points = comb.background.len();
    let fits = !comb.signal.is_empty()
        && comb.signal.len() == comb.weight.len()
        && comb
            .signal
            .iter()
            .all(|s| s.len() == points && s.iter().all(|x| *x >= 0.0))
        && comb.background.iter().all(|b| *b > 0.0 && b.is_finite())
        && comb.weight.iter().all(|w| *w >= 0.0)
        && comb.weight.iter().sum::<f64>() > 0.0
        && trials > 0;
    if !fits {
        return Err(refuse(
            "plan.comb",
            "",
            "a background above 0 at every point and a signal of 0 or more for every mass",
            "The comb needs an expected background above 0 at every point.",
        ));
    }
    let mut crossings = 0_u64;
    for k in 0..trials {
        let counts = draw(&comb.background, None, seed, u64::from(k));
        let mut below = true;
        for signal in &comb.signal {
            let above = excess(signal, &comb.background, &counts) > LEVEL;
            crossings += u64::from(below && above);
            below = !above;
        }
    }
    let upcrossings = crossings as f64 / f64::from(trials);
    let p_wanted = normal_cdf(-wanted_z);
    let q_needed = level_for(p_wanted, upcrossings);
    let total: f64 = comb.weight.iter().sum();
    let (mut found, mut expected_local) = (0_u32, 0.0);
    for (signal, w) in comb.signal.iter().zip(&comb.weight) {
        expected_local += w / total * expected_significance(signal, &comb.background);
    }
    for k in 0..trials {
        // Trials are shared out over the masses by their weight: stratified, in fixed order.
        let target = (f64::from(k) + 0.5) / f64::from(trials) * total;
        let mut sum = 0.0;
        let mut chosen = comb.signal.len() - 1;
        for (i, w) in comb.weight.iter().enumerate() {
            sum += w;
            if target < sum {
                chosen = i;
                break;
            }
        }
        let Some(truth) = comb.signal.get(chosen) else {
            continue;
        };
        let counts = draw(
            &comb.background,
            Some(truth),
            seed,
            u64::from(k) + (1 << 32),
        );
        let q = comb
            .signal
            .iter()
            .map(|s| excess(s, &comb.background, &counts))
            .fold(0.0, f64::max);
        found += u32::from(q >= q_needed);
    }
    let probability = f64::from(found) / f64::from(trials);
    Ok(Detection {
        probability,
        probability_error: (probability * (1.0 - probability) / f64::from(trials)).sqrt(),
        upcrossings,
        q_needed,
        expected_local,
    })
}

/// Global significance of a largest q.
#[must_use]
pub fn global_significance(q: f64, upcrossings: f64) -> f64 {
    significance(global_p(q, upcrossings).min(1.0))
}

fn global_p(q: f64, upcrossings: f64) -> f64 {
    normal_cdf(-q.max(0.0).sqrt()) + upcrossings * math::exp(-0.5 * (q - LEVEL))
}

/// q at which the global p-value falls to `p`: bisection, it falls monotonically.
fn level_for(p: f64, upcrossings: f64) -> f64 {
    let (mut low, mut high) = (0.0, 2000.0);
    for _ in 0..100 {
        let middle = 0.5 * (low + high);
        if global_p(middle, upcrossings) > p {
            low = middle;
        } else {
            high = middle;
        }
    }
    high
}

fn draw(background: &[f64], signal: Option<&Vec<f64>>, seed: u64, stream: u64) -> Vec<f64> {
    let mut stream = Stream::new(seed, stream);
    background
        .iter()
        .enumerate()
        .map(|(j, b)| {
            let s = signal.and_then(|s| s.get(j)).copied().unwrap_or(0.0);
            stream.poisson(b + s)
        })
        .collect()
}

/// q of one mass hypothesis with its strength free and not negative.
fn excess(signal: &[f64], background: &[f64], counts: &[f64]) -> f64 {
    let slope = |mu: f64| -> f64 {
        signal
            .iter()
            .zip(background)
            .zip(counts)
            .map(|((s, b), n)| n * s / (b + mu * s) - s)
            .sum()
    };
    if slope(0.0) <= 0.0 {
        return 0.0;
    }
    // The slope falls monotonically; bracket, then bisect.
    let (mut low, mut high) = (0.0, 1.0);
    while slope(high) > 0.0 && high < 1e9 {
        low = high;
        high *= 2.0;
    }
    for _ in 0..50 {
        let middle = 0.5 * (low + high);
        if slope(middle) > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    let mu = 0.5 * (low + high);
    2.0 * signal
        .iter()
        .zip(background)
        .zip(counts)
        .map(|((s, b), n)| n * math::ln_1p(mu * s / b) - mu * s)
        .sum::<f64>()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Signal and background of the invented scenario "Ostrel" for 3 h a point (9 points, 3 MeV
    /// apart): expected totals 1.8 ... 9.4 8.8 ... over 0.57/h of background.
    const TOTAL: [f64; 9] = [1.8, 1.9, 2.0, 2.4, 3.7, 9.4, 8.8, 3.9, 2.7];

    fn ostrel(hours: f64) -> (Vec<f64>, Vec<f64>) {
        let background = vec![0.57 * hours; 9];
        let signal = TOTAL.iter().map(|t| (t - 1.71) * hours / 3.0).collect();
        (signal, background)
    }

    /// Expected local significance 4.9 with 2 h a point, 6.9 with 4 h (the scenario's own numbers).
    #[test]
    fn expected_significance_of_the_scenario() {
        for (hours, wanted) in [(2.0, 4.9), (4.0, 6.9)] {
            let (s, b) = ostrel(hours);
            assert!((expected_significance(&s, &b) - wanted).abs() < 0.06);
        }
    }

    /// Asimov formula at s = b = 10: 2.7795 (arXiv:1007.1727 by hand).
    #[test]
    fn asimov_number() {
        assert!((expected_significance(&[10.0], &[10.0]) - 2.7795).abs() < 1e-4);
    }

    fn comb(hours: f64, strength: f64) -> Comb {
        let (_, background) = ostrel(hours);
        // A Gaussian of 5 MeV FWHM moved over the comb in steps of 0.5 MeV.
        let signal: Vec<Vec<f64>> = (0..49)
            .map(|k| {
                let mass = -12.0 + 0.5 * f64::from(k);
                (0..9)
                    .map(|j| {
                        let x = (-12.0 + 3.0 * f64::from(j) - mass) / 2.12;
                        strength * hours * math::exp(-0.5 * x * x)
                    })
                    .collect()
            })
            .collect();
        Comb {
            weight: vec![1.0; signal.len()],
            signal,
            background,
        }
    }

    #[test]
    fn more_hours_find_more_and_nothing_is_found_in_nothing() {
        let short = detection(&comb(1.0, 3.1), 3.0, 300, 1).unwrap();
        let long = detection(&comb(4.0, 3.1), 3.0, 300, 1).unwrap();
        assert!(long.probability > short.probability);
        assert!(long.probability > 0.9, "{long:?}");
        // The same mass hypotheses, but a peak too weak to make a count: as good as none.
        // 2 sigma global happens in 2.3 % of such trials, to the accuracy of the formula.
        let mut none = comb(4.0, 3.1);
        for s in none.signal.iter_mut().flatten() {
            *s *= 1e-9;
        }
        let false_rate = detection(&none, 2.0, 600, 2).unwrap().probability;
        assert!(false_rate < 0.06, "{false_rate}");
        assert!(long.q_needed > 9.0);
        assert!((global_significance(long.q_needed, long.upcrossings) - 3.0).abs() < 1e-6);
    }

    #[test]
    fn spacing_in_units_of_the_width() {
        let w = points(47.3, 5e-3, 0.6, 12e-3).unwrap();
        assert_eq!(w.len(), 9);
        assert!((w[1] - w[0] - 3e-3).abs() < 1e-12);
        assert!(points(47.3, 5e-3, 0.0, 12e-3).is_err());
    }
}
