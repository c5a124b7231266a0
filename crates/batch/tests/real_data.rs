//! Published data through the sheet and the batch program, against the results that an
//! independent refit gives: values to 1 % of the error, errors to 2 %.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use serde_json::Value;
use std::process::{Command, Output};

const TOP: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/../..");

fn batch(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_widthwise-batch"))
        .args(arguments)
        .current_dir(TOP)
        .output()
        .unwrap()
}

fn fit(sheet: &str) -> Value {
    let output = batch(&["fit", sheet]);
    assert!(
        output.status.success(),
        "{}",
        String::from_utf8_lossy(&output.stderr)
    );
    serde_json::from_slice(&output.stdout).unwrap()
}

fn parameter(fit: &Value, id: &str) -> (f64, f64, String) {
    let found = fit["parameters"]
        .as_array()
        .unwrap()
        .iter()
        .find(|p| p["id"] == id)
        .unwrap();
    (
        found["value"].as_f64().unwrap(),
        found["error"].as_f64().unwrap(),
        found["unit"].as_str().unwrap().to_string(),
    )
}

/// `digit`: half a unit of the last digit quoted comes on top.
fn agrees(
    (value, error, _): (f64, f64, String),
    want: f64,
    want_error: f64,
    digit: f64,
    what: &str,
) {
    assert!(
        (value - want).abs() <= 0.01 * want_error + 0.5 * digit,
        "{what}: {value} against {want}"
    );
    assert!(
        (error / want_error - 1.0).abs() <= 0.02 + 0.5 * digit / want_error,
        "{what}: error {error} against {want_error}"
    );
}

/// Refit of the CMD-3 table (PLB 760 (2016) 314) with the model of the sheet, iminuit and NumPy:
/// M 1019.4556(84), Gamma 4.2432(141) MeV, Gamma_ee B 4.2863(107)e-4 MeV, C 0.941(130), chi2 12.42/21.
#[test]
fn cmd3_phi() {
    let fit = fit("tests/reference/sheets/cmd3_phi.json");
    let mass = parameter(&fit, "r1.mass");
    assert_eq!(mass.2, "MeV");
    agrees(mass, 1019.4556, 0.0084, 1e-4, "M");
    agrees(parameter(&fit, "r1.width"), 4.2432, 0.0141, 1e-4, "Gamma");
    agrees(
        parameter(&fit, "r1.strength"),
        4.2863e-4,
        0.0107e-4,
        1e-8,
        "Gamma_ee B",
    );
    agrees(parameter(&fit, "coherent.0"), 0.941, 0.130, 1e-3, "C");
    assert!(
        (fit["statistic"].as_f64().unwrap() - 12.42).abs() < 0.02,
        "{}",
        fit["statistic"]
    );
    assert_eq!(fit["degrees_of_freedom"], 21);
}

/// Running-width fit of the seven LEP points: 91.1905(22), 2.5000(21) GeV, 41.466(33) nb, chi2 2.515/4.
#[test]
fn lep_seven_points() {
    let fit = fit("tests/reference/sheets/lep_hadrons.json");
    let (mass, _, _) = parameter(&fit, "r1.mass");
    agrees(parameter(&fit, "r1.mass"), 91.1905, 0.0022, 1e-4, "M");
    agrees(parameter(&fit, "r1.width"), 2.5000, 0.0021, 1e-4, "Gamma");
    // Peak cross section from B_ee B_had: (3/4) 4 pi (hbar c)^2 B B/k^2 with k = M/2.
    let (product, error, unit) = parameter(&fit, "r1.strength");
    assert_eq!(unit, "%");
    let peak = 12.0 * std::f64::consts::PI * 389_379.372_171_859_5 / (mass * mass) * 1e-2;
    agrees(
        (product * peak, error * peak, unit),
        41.466,
        0.033,
        1e-3,
        "peak",
    );
    assert!(
        (fit["statistic"].as_f64().unwrap() - 2.515).abs() < 0.01,
        "{}",
        fit["statistic"]
    );
    assert_eq!(fit["degrees_of_freedom"], 4);
}

#[test]
fn commands_exit_codes_and_messages() {
    let demo = "crates/sheet/demos/saltmere.json";
    let curve = batch(&[
        "curve",
        demo,
        "--csv",
        "--from",
        "2870 MeV",
        "--to",
        "2878 MeV",
        "--energies",
        "5",
    ]);
    let text = String::from_utf8(curve.stdout).unwrap();
    assert!(
        curve.status.success() && text.starts_with("W [GeV],Born [nb]"),
        "{text}"
    );
    let check = batch(&["check", demo]);
    let value: Value = serde_json::from_slice(&check.stdout).unwrap();
    assert_eq!(value["problems"].as_array().unwrap().len(), 0);
    let points: Value = serde_json::from_slice(&batch(&["points", demo]).stdout).unwrap();
    assert_eq!(points["points"].as_array().unwrap().len(), 12);
    let rows = String::from_utf8(batch(&["rows", demo, "--csv"]).stdout).unwrap();
    assert_eq!(rows.lines().count(), 13, "{rows}");
    for (arguments, code, says) in [
        (&["fit", "no-such-file.json"][..], 3, "cannot be read"),
        (&["fit", "Cargo.toml"], 1, "not a scan sheet"),
        (&["dance", demo], 2, "no command"),
        (
            &["curve", demo, "--from", "2870 nb", "--to", "2 GeV"],
            2,
            "cross section",
        ),
    ] {
        let output = batch(arguments);
        assert_eq!(output.status.code(), Some(code), "{arguments:?}");
        let message = String::from_utf8_lossy(&output.stderr).into_owned();
        assert!(
            message.contains(says) && output.stdout.is_empty(),
            "{message}"
        );
    }
}

/// Ranges of trials run anywhere and are the same trials.
#[test]
fn trials_run_in_ranges() {
    let demo = "crates/sheet/demos/ostrel.json";
    let rows = |first: &str, count: &str| -> Vec<Value> {
        let output = batch(&[
            "trials", demo, "--first", first, "--count", count, "--seed", "7",
        ]);
        assert!(
            output.status.success(),
            "{}",
            String::from_utf8_lossy(&output.stderr)
        );
        let value: Value = serde_json::from_slice(&output.stdout).unwrap();
        value["rows"].as_array().unwrap().clone()
    };
    let whole = rows("0", "4");
    let mut parts = rows("0", "1");
    parts.extend(rows("1", "3"));
    assert_eq!(whole, parts);
    assert_ne!(whole[0]["values"], whole[1]["values"]);
}
