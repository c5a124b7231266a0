//! Counting statistics against values computed by direct enumeration (tests/reference/intervals.py).
#![allow(
    clippy::unwrap_used,
    reason = "test helpers stop where a value is missing"
)]

use serde_json::Value;
use widthwise_core::fit::limits::{
    bayesian_upper_limit, cls_upper_limit, expected_significance, feldman_cousins,
};
use widthwise_core::fit::on_off;
use widthwise_core::numerics::probability::{
    chi2_quantile, poisson_central_interval, poisson_deviance, poisson_pmf, significance,
};

fn rows(name: &str) -> Vec<Value> {
    let all: Value =
        serde_json::from_str(include_str!("../../../tests/reference/intervals.json")).unwrap();
    let rows = all[name].as_array().unwrap().clone();
    assert!(!rows.is_empty(), "{name}");
    rows
}

fn number(row: &Value, key: &str) -> f64 {
    row[key].as_f64().unwrap()
}

fn close(a: f64, b: f64, relative: f64, what: &Value) {
    assert!(
        (a - b).abs() <= relative * b.abs().max(1e-9),
        "{a} against {b} in {what}"
    );
}

#[test]
fn central_poisson_intervals() {
    for r in rows("poisson_central") {
        let (low, high) = poisson_central_interval(number(&r, "n"), number(&r, "cl"));
        close(low, number(&r, "low"), 1e-9, &r);
        close(high, number(&r, "high"), 1e-9, &r);
    }
}

#[test]
fn feldman_cousins_intervals() {
    for r in rows("feldman_cousins_90") {
        let (low, high) = feldman_cousins(number(&r, "n") as u32, number(&r, "b"), 0.9).unwrap();
        assert!((low - number(&r, "low")).abs() < 2e-3, "{low} in {r}");
        assert!((high - number(&r, "high")).abs() < 2e-3, "{high} in {r}");
    }
}

#[test]
fn cls_and_bayesian_limits() {
    for r in rows("cls_95") {
        let (n, b) = (number(&r, "n"), number(&r, "b"));
        close(cls_upper_limit(n, b, 0.95), number(&r, "s"), 1e-9, &r);
        close(
            bayesian_upper_limit(n, b, 0.95),
            number(&r, "s_bayes_flat"),
            1e-9,
            &r,
        );
    }
}

#[test]
fn significances() {
    for r in rows("median_significance") {
        close(
            expected_significance(number(&r, "s"), number(&r, "b")),
            number(&r, "z"),
            1e-9,
            &r,
        );
    }
    for r in rows("local_p") {
        close(significance(number(&r, "p")), number(&r, "z"), 1e-9, &r);
    }
}

#[test]
fn baker_cousins_terms_and_their_mean() {
    // That script's plain formula loses digits at large counts: 1e5 x 1e-16 x 2 of 0.9.
    for r in rows("baker_cousins") {
        close(
            poisson_deviance(number(&r, "n"), number(&r, "mu")),
            number(&r, "value"),
            1e-10,
            &r,
        );
    }
    // The mean per bin is not 1: why low counts need pseudo-experiments.
    for r in rows("baker_cousins_mean") {
        let mu = number(&r, "mu");
        let mean: f64 = (0..200)
            .map(|n| poisson_pmf(f64::from(n), mu) * poisson_deviance(f64::from(n), mu))
            .sum();
        close(mean, number(&r, "mean"), 1e-9, &r);
    }
}

#[test]
fn on_off_likelihood() {
    for r in rows("on_off") {
        let (n, off, tau) = (number(&r, "n_on"), number(&r, "n_off"), number(&r, "tau"));
        // That script minimises over b numerically, to about 1e-7.
        let at = |s: f64| on_off(n, off, tau, s).unwrap().value;
        close(at(0.0), number(&r, "two_nll_at_0"), 1e-6, &r);
        for place in r["scan"].as_array().unwrap() {
            close(
                at(number(place, "s")),
                number(place, "two_nll"),
                1e-6,
                place,
            );
        }
    }
}

#[test]
fn rises_of_pairs() {
    use widthwise_core::fit::{PAIR_RISE_ONE, PAIR_RISE_TWO};
    for (rise, p) in [
        (PAIR_RISE_ONE, 0.682_689_492_137_085_9),
        (PAIR_RISE_TWO, 0.954_499_736_103_641_6),
    ] {
        assert!((chi2_quantile(p, 2.0) - rise).abs() < 1e-9);
    }
}
