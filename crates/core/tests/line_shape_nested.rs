//! The chain against nested double integrals computed apart from it
//! (`tests/reference/lineshape_nested.py`, NumPy; spot checks by literal mpmath quadrature).
#![allow(missing_docs, clippy::unwrap_used)]

use serde_json::Value;
use widthwise_core::amplitude::hypothesis::Hypothesis;
use widthwise_core::beam::Beams;
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::{ChainSettings, Stage};

/// At build time: WebAssembly has no files.
const CASES: &str = include_str!("../../../tests/reference/lineshape_nested.json");

#[test]
fn every_nested_integral_within_the_claimed_accuracy() {
    let file: Value = serde_json::from_str(CASES).unwrap();
    let mut worst = 0.0f64;
    let mut problems = Vec::new();
    for case in file["cases"].as_array().unwrap() {
        let name = case["name"].as_str().unwrap();
        let scan = &case["scan"];
        let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
        let hypothesis: Hypothesis = serde_json::from_value(scan["hypothesis"].clone()).unwrap();
        let mut settings: ChainSettings = serde_json::from_value(scan["chain"].clone()).unwrap();
        settings.accuracy = 1e-6;
        let chain = Chain::new(&settings, &beams).unwrap();
        let born = hypothesis.prepare(&beams).unwrap();
        for point in case["points"].as_array().unwrap() {
            let number = |key: &str| point[key].as_f64().unwrap();
            let w = number("w_gev");
            let curve = chain.curve(born.as_ref(), &[w]).unwrap();
            let single = chain
                .cross_sections(born.as_ref(), &[w], None, Stage::Observed)
                .unwrap();
            let fine_settings = ChainSettings {
                accuracy: 1e-9,
                ..settings.clone()
            };
            let fine = Chain::new(&fine_settings, &beams)
                .unwrap()
                .cross_sections(born.as_ref(), &[w], None, Stage::Observed)
                .unwrap();
            for (what, ours, claimed, theirs) in [
                (
                    "radiated",
                    curve.radiated_nb[0],
                    curve.accuracy,
                    number("radiated_nb"),
                ),
                (
                    "observed",
                    curve.observed_nb[0],
                    curve.accuracy,
                    number("observed_nb"),
                ),
                (
                    "at 1e-9",
                    fine.values_nb[0],
                    fine.accuracy,
                    number("observed_nb"),
                ),
                (
                    "single",
                    single.values_nb[0],
                    single.accuracy,
                    number("observed_nb"),
                ),
            ] {
                let off = (ours / theirs - 1.0).abs();
                if theirs != 0.0 {
                    worst = worst.max(off);
                }
                let allowed = claimed + 1e-12 + 3.0 * number("error_rel");
                if !(ours == theirs || off <= allowed) || claimed > 1e-6 {
                    problems.push(format!(
                        "{name} at {w}: {what} {ours:.10e}, reference {theirs:.10e}, off {off:.1e}, claimed {claimed:.1e}, reference error {:.1e}",
                        number("error_rel")
                    ));
                }
            }
        }
    }
    println!("largest relative deviation {worst:.1e}");
    assert!(
        problems.is_empty(),
        "{}\n{}",
        problems.len(),
        problems.join("\n")
    );
}
