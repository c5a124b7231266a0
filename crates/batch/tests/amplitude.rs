//! The amplitude of an invented scenario through the batch program, as JSON and as a table.
#![allow(clippy::unwrap_used)]

use serde_json::Value;
use std::process::Command;

fn batch(arguments: &[&str]) -> (String, i32) {
    let output = Command::new(env!("CARGO_BIN_EXE_widthwise-batch"))
        .args(arguments)
        .output()
        .unwrap();
    let text = String::from_utf8(output.stdout).unwrap();
    (text, output.status.code().unwrap())
}

#[test]
fn every_part_of_the_amplitude() {
    let demo = include_str!("../../sheet/demos/saltmere.json");
    let path = format!("{}/amplitude.json", env!("CARGO_TARGET_TMPDIR"));
    std::fs::write(&path, demo).unwrap();
    let (text, code) = batch(&["amplitude", &path]);
    let reply: Value = serde_json::from_str(&text).unwrap();
    assert_eq!(code, 0);
    // A constant width: the pole in W lies at M (1 + Gamma^2/(8 M^2)), the width by as much narrower.
    let pole = &reply["poles"][0];
    assert!((pole["mass_gev"].as_f64().unwrap() - 2.874_2).abs() < 1e-6);
    assert!((pole["width_gev"].as_f64().unwrap() - 0.62e-3).abs() < 1e-9);
    let (table, code) = batch(&[
        "amplitude",
        &path,
        "--part",
        "plane",
        "--energies",
        "20",
        "--csv",
    ]);
    assert_eq!((code, table.lines().count()), (0, 1 + 20 * 101));
    // No angles: refused with a sentence, exit code 1.
    assert_eq!(batch(&["amplitude", &path, "--part", "image"]).1, 1);
    assert_eq!(batch(&["amplitude", &path, "--of", "7"]).1, 1);

    let mut sheet: Value = serde_json::from_str(demo).unwrap();
    sheet["model"] = serde_json::json!({
        "hypothesis": "diagrams", "radiation": { "on": false },
        "diagrams": { "reaction": "pair_elastic", "mediators": [
            { "name": "phi", "mass": "2.8742 GeV", "g": "0.02", "form": "constant_width", "width": "5 MeV" }] }
    });
    sheet["fit"] = serde_json::json!({});
    std::fs::write(&path, sheet.to_string()).unwrap();
    let (text, code) = batch(&["amplitude", &path, "--part", "slice", "--at", "2.8742GeV"]);
    let reply: Value = serde_json::from_str(&text).unwrap();
    assert_eq!((code, reply["diagrams"].as_array().unwrap().len()), (0, 2));
    let (text, _) = batch(&["amplitude", &path, "--part", "waves", "--energies", "5"]);
    let reply: Value = serde_json::from_str(&text).unwrap();
    assert!(reply["note"].as_str().unwrap().contains("keeps"), "{text}");
}
