//! The plan of an invented scenario through the batch program: what holds for every timetable.
#![allow(clippy::unwrap_used)]

use serde_json::Value;
use std::process::{Command, Output};

fn batch(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_widthwise-batch"))
        .args(arguments)
        .output()
        .unwrap()
}

/// "Saltmere" (invented) with a coarse grid and its best guess alone, so that the test is quick.
fn sheet() -> String {
    let demo = include_str!("../../sheet/demos/saltmere.json");
    let mut sheet: Value = serde_json::from_str(demo).unwrap();
    sheet["plan"]["from"] = "2868 MeV".into();
    sheet["plan"]["to"] = "2880 MeV".into();
    sheet["plan"]["step"] = "0.5 MeV".into();
    sheet["plan"]["truths"] = "1".into();
    let path = format!("{}/plan.json", env!("CARGO_TARGET_TMPDIR"));
    std::fs::write(&path, sheet.to_string()).unwrap();
    path
}

#[test]
fn a_timetable_keeps_to_the_hours_and_shrinks_every_error() {
    let path = sheet();
    let output = batch(&["plan", &path]);
    let message = String::from_utf8_lossy(&output.stderr).into_owned();
    assert!(output.status.success(), "{message}");
    let reply: Value = serde_json::from_slice(&output.stdout).unwrap();
    let plan = &reply["plan"];
    let rows = plan["rows"].as_array().unwrap();
    let mut clock = 0.0;
    for row in rows {
        let live = row["live_h"].as_f64().unwrap();
        let start = row["start_h"].as_f64().unwrap();
        assert!(live >= 1.0 - 1e-9, "least dwell: {row}");
        assert!((live / 0.5 - (live / 0.5).round()).abs() < 1e-9, "{row}");
        assert!(start >= clock - 1e-9, "{row} starts before {clock} h");
        clock = start + live;
    }
    assert!(
        !rows.is_empty() && clock <= 24.0 + 1e-9,
        "{clock} h of 24 h"
    );
    assert_eq!(reply["dial"].as_array().unwrap().len(), rows.len());
    let (certificate, efficiency) = (
        plan["certificate"].as_f64().unwrap(),
        plan["efficiency"].as_f64().unwrap(),
    );
    assert!(certificate >= 0.999, "{certificate}");
    assert!(efficiency > 0.5 && efficiency <= 1.0, "{efficiency}");
    for forecast in plan["parameters"].as_array().unwrap() {
        let planned = forecast["planned"].as_f64().unwrap();
        assert!(planned < forecast["now"].as_f64().unwrap(), "{forecast}");
    }

    let table = batch(&["plan", &path, "--csv"]);
    let text = String::from_utf8(table.stdout).unwrap();
    assert!(
        text.starts_with("fill,start [h],W [GeV],to dial,"),
        "{text}"
    );
    assert_eq!(text.lines().count(), rows.len() + 1, "{text}");
}
