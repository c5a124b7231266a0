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

fn cases() -> Vec<Value> {
    let file: Value = serde_json::from_str(CASES).unwrap();
    file["cases"].as_array().unwrap().clone()
}

#[test]
fn every_nested_integral_within_the_claimed_accuracy() {
    let mut worst = 0.0f64;
    let mut problems = Vec::new();
    for case in cases() {
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

/// Many energies share panels: each value is still what the energy alone gives.
#[test]
fn five_hundred_energies_within_the_claimed_accuracy() {
    for case in cases() {
        let (name, scan) = (case["name"].as_str().unwrap(), &case["scan"]);
        let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
        let hypothesis: Hypothesis = serde_json::from_value(scan["hypothesis"].clone()).unwrap();
        let mut settings: ChainSettings = serde_json::from_value(scan["chain"].clone()).unwrap();
        settings.accuracy = 1e-6;
        let chain = Chain::new(&settings, &beams).unwrap();
        let born = hypothesis.prepare(&beams).unwrap();
        let (mut low, mut high) = (f64::INFINITY, 0.0f64);
        for point in case["points"].as_array().unwrap() {
            let w = point["w_gev"].as_f64().unwrap();
            (low, high) = (low.min(w), high.max(w));
        }
        let w: Vec<f64> = (0..500)
            .map(|i| low + (high - low) * f64::from(i) / 499.0)
            .collect();
        let together = chain.curve(born.as_ref(), &w).unwrap();
        assert!(together.accuracy < 1e-6, "{name}: {:e}", together.accuracy);
        for i in (0..w.len()).step_by(7) {
            let alone = chain.curve(born.as_ref(), &w[i..=i]).unwrap();
            let both = together.accuracy + alone.accuracy + 1e-12;
            for (column, a, b) in [
                ("radiated", together.radiated_nb[i], alone.radiated_nb[0]),
                ("observed", together.observed_nb[i], alone.observed_nb[0]),
            ] {
                assert!(
                    (a - b).abs() <= both * b.abs(),
                    "{name} at {}: {column} {a:e} {b:e}",
                    w[i]
                );
            }
        }
    }
}

/// What a chain remembers of earlier energies and models never shows in its answers.
#[test]
fn remembered_and_fresh_answers_agree_to_the_bit() {
    let all = cases();
    for case in &all {
        let (name, scan) = (case["name"].as_str().unwrap(), &case["scan"]);
        let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
        let model = &scan["hypothesis"];
        let mut moved = model.clone();
        if let Some(mass) = moved["resonances"][0]["mass_gev"].as_f64() {
            moved["resonances"][0]["mass_gev"] = (mass * (1.0 + 1e-6)).into();
        }
        let [model, moved] = [model, &moved].map(|value| {
            serde_json::from_value::<Hypothesis>(value.clone())
                .unwrap()
                .prepare(&beams)
                .unwrap()
        });
        let mut settings: ChainSettings = serde_json::from_value(scan["chain"].clone()).unwrap();
        settings.accuracy = 1e-6;
        let w: Vec<f64> = case["points"]
            .as_array()
            .unwrap()
            .iter()
            .map(|point| point["w_gev"].as_f64().unwrap())
            .collect();
        let fresh = || Chain::new(&settings, &beams).unwrap();
        let used = fresh();
        let backwards: Vec<f64> = w.iter().rev().copied().collect();
        let shifted: Vec<f64> = w.iter().map(|w| w * (1.0 + 1e-7)).collect();
        let sigma: Vec<Option<f64>> = w.iter().map(|_| Some(4e-4)).collect();
        for energies in [&w, &shifted, &backwards] {
            used.curve(moved.as_ref(), energies).unwrap();
        }
        let total = |chain: &Chain, own| {
            chain
                .cross_sections(model.as_ref(), &w, own, Stage::Observed)
                .unwrap()
        };
        total(&used, Some(sigma.as_slice()));
        assert_eq!(total(&used, None), total(&fresh(), None), "{name}");
        let own = Some(sigma.as_slice());
        assert_eq!(total(&used, own), total(&fresh(), own), "{name}");
        assert_eq!(
            used.curve(model.as_ref(), &w).unwrap(),
            fresh().curve(model.as_ref(), &w).unwrap(),
            "{name}"
        );
    }
}

/// A tabulated width is not extrapolated: energies beyond its end are refused with the reason.
#[test]
fn beyond_the_end_of_a_tabulated_width_is_refused() {
    let case = cases()
        .into_iter()
        .find(|case| case["scan"]["hypothesis"]["resonances"][0]["mass_gev"] == 1.0194556)
        .unwrap();
    let scan = &case["scan"];
    let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
    let mut model = scan["hypothesis"].clone();
    model["resonances"][0]["form"]["channels"][2]["shape"] = serde_json::json!({
        "kind": "tabulated",
        "rows": [[0.9, 0.0], [1.0194556, 1.0], [1.05, 1.3]],
    });
    let hypothesis: Hypothesis = serde_json::from_value(model).unwrap();
    let born = hypothesis.prepare(&beams).unwrap();
    let settings: ChainSettings = serde_json::from_value(scan["chain"].clone()).unwrap();
    let chain = Chain::new(&settings, &beams).unwrap();
    for stage in [Stage::Observed, Stage::RadiationRemoved, Stage::Born] {
        let ask = |w| chain.cross_sections(born.as_ref(), &[1.02, w], None, stage);
        assert!(ask(1.05).is_ok());
        let refusal = ask(1.0501).unwrap_err();
        assert_eq!(refusal.field, "points.w");
        assert!(refusal.message.contains("tabulated width"), "{refusal:?}");
    }
    assert_eq!(
        chain.curve(born.as_ref(), &[1.0501]).unwrap_err().field,
        "points.w"
    );
}
