//! Hypotheses against each other, goodness by pseudo-experiments, limits against the phase, repeated
//! points, and the fit against time.

use super::*;
use widthwise_core::fit::compare::compare;
use widthwise_core::fit::fit;
use widthwise_core::fit::goodness::p_value_by_trials;
use widthwise_core::fit::history::{drift, history};
use widthwise_core::fit::influence::repeats;
use widthwise_core::fit::limits::{limit_against_phase, limit_with_errors};
use widthwise_core::numerics::probability::{chi2_sf, ln_normal_tail, significance_of_ln};
use widthwise_core::numerics::random::Stream;

/// A resonance over a one-photon continuum, no chain: fast.
fn interfering(gamma_bf_gev: f64, c_nb: f64, phase_rad: f64) -> Scan {
    let mut wave = wave(2.9, 1.2e-3, gamma_bf_gev, 2);
    wave.coherent = Some(CoherentBackground::OnePhoton {
        c_nb,
        w0_gev: 2.9,
        phase_rad,
    });
    let mut all = scan(Hypothesis::PartialWave(wave), 2.9);
    all.chain.spread = Spread::None;
    all
}

fn drawn(scan: &mut Scan, seed: u64) {
    as_expected(scan);
    let mut stream = Stream::new(seed, 0);
    for p in &mut scan.points {
        if let Measured::Counts { n, .. } = &mut p.measured {
            *n = stream.poisson(*n);
        }
    }
}

/// A phase that is free or not: Wilks' theorem holds, and pseudo-experiments agree with it.
#[test]
fn interference_is_tested_by_wilks_and_by_trials() {
    let mut all = interfering(10e-9, 4.0, -0.6);
    drawn(&mut all, 3);
    let fixed = settings(&["r1.strength", "coherent.0"]);
    let free = settings(&["r1.strength", "coherent.0", "coherent.phase"]);
    let found = compare((&all, &fixed), (&all, &free), (300, 5), &mut |_| ()).unwrap();
    let wilks = found.wilks_p.unwrap();
    assert!((wilks - chi2_sf(found.ratio, 1.0)).abs() < 1e-12);
    let trials = found.trials_p.unwrap();
    let error = (wilks * (1.0 - wilks) / 300.0).sqrt();
    assert!(
        (trials - wilks).abs() < 4.0 * error + 1.0 / 300.0,
        "{trials} against {wilks}"
    );
    // Another truth: the fixed phase is far off.
    let mut wrong = all.clone();
    wrong.hypothesis.set("coherent.phase", 1.5).unwrap();
    let far = compare((&wrong, &fixed), (&wrong, &free), (0, 5), &mut |_| ()).unwrap();
    assert!(far.ratio > 25.0 && far.significance.unwrap() > 4.5);
}

/// A second resonance: under the null its mass and phase mean nothing, so only pseudo-experiments count.
#[test]
fn a_second_resonance_is_tested_by_trials() {
    let mut two = interfering(10e-9, 4.0, -0.6);
    if let Hypothesis::PartialWave(wave) = &mut two.hypothesis {
        let mut second = wave.resonances[0].clone();
        second.mass_gev = 2.9016;
        second.strength = Strength::GammaInBf { gev: 8e-9 };
        second.phase_rad = 1.0;
        wave.resonances.push(second);
    }
    drawn(&mut two, 11);
    let mut one = two.clone();
    if let Hypothesis::PartialWave(wave) = &mut one.hypothesis {
        wave.resonances.truncate(1);
    }
    let few = settings(&["r1.strength", "coherent.0"]);
    let more = settings(&["r1.strength", "coherent.0", "r2.strength", "r2.phase"]);
    let found = compare((&one, &few), (&two, &more), (99, 5), &mut |_| ()).unwrap();
    assert!(found.wilks_p.is_none() && found.extra_parameters == 2);
    assert!(found.ratio > 30.0);
    assert!((found.trials_p.unwrap() - 0.01).abs() < 1e-12);
    assert!((found.significance.unwrap() - 2.326_347_874).abs() < 1e-6);
}

/// Many counts: the chi-squared distribution and pseudo-experiments agree. Few: 2 NLL is smaller than
/// chi-squared on average (0.474 a bin at mu = 0.1), so the chi-squared p-value would be too good.
#[test]
fn goodness_by_trials() {
    let free = settings(&["r1.strength"]);
    let mut many = interfering(10e-9, 4.0, -0.6);
    drawn(&mut many, 21);
    let result = fit(&many, &free).unwrap();
    assert!(result.p_value_asymptotic);
    let found = p_value_by_trials(&many, &free, &result, (400, 2), &mut |_| ()).unwrap();
    let p = result.p_value.unwrap();
    assert_eq!(found.trials, 400);
    assert!((found.p_value - p).abs() < 4.0 * (p * (1.0 - p) / 400.0).sqrt() + 0.01);
    let mut few = interfering(1e-12, 0.001, -0.6);
    few.detection.rate_bg_per_h = 0.03;
    as_expected(&mut few);
    for (i, p) in few.points.iter_mut().enumerate() {
        p.measured = Measured::Counts {
            n: f64::from(u8::from(i == 2) * 2),
            off: None,
        };
    }
    let result = fit(&few, &free).unwrap();
    assert!(!result.p_value_asymptotic);
    let found = p_value_by_trials(&few, &free, &result, (400, 2), &mut |_| ()).unwrap();
    assert!(
        found.p_value < 0.6 * result.p_value.unwrap(),
        "{found:?} {:?}",
        result.p_value
    );
}

/// Without a continuum the phase decides nothing, and every limit is the one without interference; with
/// one it decides much. An error of the luminosity makes a limit worse.
#[test]
fn limit_against_the_phase() {
    let phases = [-2.0, 0.0, 1.0, 2.5];
    let none = FitSettings::default();
    let mut dark = interfering(1e-9, 1e-9, 0.0);
    for p in &mut dark.points {
        p.measured = Measured::Counts { n: 6.0, off: None };
    }
    let alone = limit_with_errors(&dark, "r1.strength", &none, 0.95)
        .unwrap()
        .unwrap();
    let all = limit_against_phase(&dark, "r1.strength", &none, &phases, 0.95).unwrap();
    for l in &all {
        assert!((l.unwrap() / alone - 1.0).abs() < 5e-3, "{all:?} {alone}");
    }
    let mut bright = interfering(1e-9, 8.0, 0.0);
    if let Hypothesis::PartialWave(wave) = &mut bright.hypothesis {
        wave.resonances[0].strength = Strength::GammaInBf { gev: 1e-15 };
    }
    as_expected(&mut bright);
    bright.hypothesis.set("r1.strength", 1e-9).unwrap();
    let hang: Vec<f64> = limit_against_phase(&bright, "r1.strength", &none, &phases, 0.95)
        .unwrap()
        .into_iter()
        .map(Option::unwrap)
        .collect();
    let largest = hang.iter().copied().fold(0.0, f64::max);
    let least = hang.iter().copied().fold(f64::INFINITY, f64::min);
    assert!(largest > 1.5 * least, "{hang:?}");
    dark.common.scale = 0.3;
    let worse = limit_with_errors(&dark, "r1.strength", &none, 0.95)
        .unwrap()
        .unwrap();
    assert!(
        worse > 1.02 * alone && worse < 2.0 * alone,
        "{worse} {alone}"
    );
}

/// Two counts of one exposure against their mean, by hand: 2 sum n ln(n/mean).
#[test]
fn repeated_points_are_compared() {
    let mut all = interfering(10e-9, 4.0, -0.6);
    as_expected(&mut all);
    let mut again = all.points[3].clone();
    again.id = "again".into();
    all.points.push(again);
    for (i, n) in [(3, 100.0), (7, 160.0)] {
        all.points[i].measured = Measured::Counts { n, off: None };
    }
    let result = fit(&all, &settings(&["r1.strength"])).unwrap();
    let found = repeats(&all, &result);
    assert_eq!(found.len(), 1);
    assert_eq!(found[0].ids, ["4", "again"]);
    let wanted = 2.0
        * (100.0 * widthwise_core::math::ln(100.0 / 130.0)
            + 160.0 * widthwise_core::math::ln(160.0 / 130.0));
    assert!((found[0].statistic - wanted).abs() < 1e-9);
    assert!((found[0].p_value - chi2_sf(wanted, 1.0)).abs() < 1e-12);
    // Of different channels they are no repetition.
    all.points[7].channel = Some("other".into());
    assert!(repeats(&all, &result).is_empty());
}

/// The last fit of the history is the whole fit, errors fall on the way; counts that sink with time
/// are a drift, and the same counts in another order are none.
#[test]
fn the_fit_against_time() {
    let mut all = interfering(10e-9, 4.0, -0.6);
    all.points.extend(all.points.clone());
    for (i, p) in all.points.iter_mut().enumerate() {
        p.id = format!("{i}");
        p.start_h = Some(3.0 * i as f64);
    }
    as_expected(&mut all);
    let free = settings(&["r1.strength", "coherent.0"]);
    let whole = fit(&all, &free).unwrap();
    let steps = history(&all, &free, &whole).unwrap();
    assert_eq!(steps.len(), 13);
    let last = steps.last().unwrap();
    assert_eq!((last.points, last.start_h), (14, Some(39.0)));
    assert!((last.values[0] / whole.parameters[0].value - 1.0).abs() < 1e-6);
    let errors: Vec<f64> = steps.iter().filter_map(|s| s.errors[0]).collect();
    assert!(errors.windows(2).all(|e| e[1] < 1.001 * e[0]));
    assert!(drift(&all, &whole).unwrap().1.abs() < 1e-3);
    for (i, p) in all.points.iter_mut().enumerate() {
        if let Measured::Counts { n, .. } = &mut p.measured {
            *n = (*n + (6.5 - i as f64) * 0.4 * n.sqrt()).max(0.0).round();
        }
    }
    let drifting = fit(&all, &free).unwrap();
    assert!(drift(&all, &drifting).unwrap().1 < -3.0);
}

/// ln of the tail of the normal distribution against mpmath 1.3 (erfc at 50 digits):
/// ln(erfc(z/sqrt 2)/2) at z = 5, 20, 50.
#[test]
fn great_significances_do_not_underflow() {
    for (z, wanted) in [
        (5.0, -15.064_998_393_988_726),
        (20.0, -203.917_155_371_097_26),
        (50.0, -1_254.831_361_139_419_9),
    ] {
        assert!(
            (ln_normal_tail(z) / wanted - 1.0).abs() < 1e-12,
            "{}",
            ln_normal_tail(z)
        );
        assert!((significance_of_ln(wanted) / z - 1.0).abs() < 1e-10);
    }
}
