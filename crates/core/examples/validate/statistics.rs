//! Counting statistics against enumeration and quantiles.

use crate::{Row, number, table};
use widthwise_core::fit::on_off;
use widthwise_core::numerics::probability::{poisson_central_interval, poisson_deviance};

const SOURCE: &str = "tests/reference/intervals.py (scipy.stats, numerical profile)";

pub fn rows() -> Vec<Row> {
    let file = table!("intervals.json");
    let mut central = Row::new(
        "central Poisson interval",
        "numerics::probability::poisson_central_interval",
        "Garwood 1936 by scipy.stats.chi2",
        "relative",
        1e-10,
        "accuracy of the inverse incomplete gamma function",
    );
    for row in file["poisson_central"].as_array().unwrap() {
        let (n, cl) = (number(&row["n"]), number(&row["cl"]));
        let (low, high) = poisson_central_interval(n, cl);
        central.relative(low, number(&row["low"]), format!("n = {n}, low"));
        central.relative(high, number(&row["high"]), format!("n = {n}, high"));
    }
    let mut deviance = Row::new(
        "Baker-Cousins term",
        "numerics::probability::poisson_deviance",
        "Baker & Cousins, NIM 221 (1984) 437",
        "relative",
        1e-9,
        "the reference cancels where n is next to mu",
    );
    for row in file["baker_cousins"].as_array().unwrap() {
        let (mu, n) = (number(&row["mu"]), number(&row["n"]));
        deviance.relative(
            poisson_deviance(n, mu),
            number(&row["value"]),
            format!("mu = {mu}, n = {n}"),
        );
    }
    let mut profile = Row::new(
        "on/off likelihood profiled over the background",
        "fit::on_off",
        SOURCE,
        "2 NLL",
        1e-8,
        "the reference minimises numerically; quadratic at the minimum",
    );
    for row in file["on_off"].as_array().unwrap() {
        let (n, off, tau) = (
            number(&row["n_on"]),
            number(&row["n_off"]),
            number(&row["tau"]),
        );
        for entry in row["scan"].as_array().unwrap() {
            let s = number(&entry["s"]);
            let ours = on_off(n, off, tau, s).unwrap().value;
            profile.take(
                ours - number(&entry["two_nll"]),
                format!("{n} on, {off} off, tau = {tau}, s = {s}"),
            );
        }
    }
    vec![central, deviance, profile]
}
