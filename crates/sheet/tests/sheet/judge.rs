//! Judging a fit through the sheet: hypotheses, goodness, time, limits with errors, looks, warnings.

use widthwise_sheet::check;
use widthwise_sheet::demos;
use widthwise_sheet::doc::{LuminosityMonitor, Sheet};
use widthwise_sheet::requests::{Body, Reply, Request, answer};

fn saltmere() -> Sheet {
    demos::open("saltmere").unwrap()
}

fn ask(request: &Request) -> Reply {
    answer(request, &mut |_, _| ()).unwrap()
}

#[test]
fn interference_of_scenario_a_is_significant() {
    let alternative = saltmere();
    let mut null = saltmere();
    // No interference: the continuum beside the modulus.
    null.model.coherent = None;
    null.model.incoherent = Some(widthwise_sheet::doc::Incoherent::Power {
        c0: "1.90 nb".into(),
        w0: "2874.20 MeV".into(),
        n: "2".into(),
    });
    null.fit.free.retain(|id| !id.starts_with("coherent"));
    null.fit.free.push("incoherent.0".into());
    let request = Request::Compare {
        null: Box::new(null.clone()),
        alternative: Box::new(alternative),
        trials: 0,
        seed: 1,
    };
    let Body::Comparison { comparison } = ask(&request).body else {
        panic!("no comparison");
    };
    assert!(comparison.ratio > 9.0, "{comparison:?}");
    assert!(
        comparison.wilks_p.is_none(),
        "other terms: Wilks does not hold"
    );
    null.data.rows.pop();
    let request = Request::Compare {
        null: Box::new(null),
        alternative: Box::new(saltmere()),
        trials: 0,
        seed: 1,
    };
    assert_eq!(
        answer(&request, &mut |_, _| ()).unwrap_err().field,
        "data.rows"
    );
    let mut spin = saltmere();
    spin.model.j = "2".into();
    let request = Request::Compare {
        null: Box::new(saltmere()),
        alternative: Box::new(spin),
        trials: 0,
        seed: 1,
    };
    let refused = answer(&request, &mut |_, _| ()).unwrap_err();
    assert!(
        refused.message.contains("angular bins"),
        "{}",
        refused.message
    );
}

#[test]
fn the_fit_against_time_ends_at_the_fit() {
    let Body::AgainstTime {
        parameters, fits, ..
    } = ask(&Request::AgainstTime { sheet: saltmere() }).body
    else {
        panic!("no history");
    };
    let last = fits.last().unwrap();
    assert_eq!(last.points, 12);
    assert_eq!(last.parameters.len(), parameters.len());
    assert!((last.parameters[0].value / parameters[0].value - 1.0).abs() < 1e-7);
}

#[test]
fn impacts_come_in_errors_of_the_parameter() {
    let Body::Fit { nuisances, .. } = ask(&Request::Fit { sheet: saltmere() }).body else {
        panic!("no fit");
    };
    // Errors of the mass: 63 keV in all, 46 without the four fills: each fill is a part of what is missing.
    let mass: f64 = nuisances
        .iter()
        .filter(|n| n.name.contains("energy"))
        .map(|n| n.impacts[0] * n.impacts[0])
        .sum();
    let largest = nuisances
        .iter()
        .map(|n| n.impacts[0].abs())
        .fold(0.0, f64::max);
    assert!(largest > 0.1 && largest < 1.0, "{largest}");
    assert!(mass > 0.3 && mass < 0.7, "{mass}");
}

#[test]
fn limit_of_scenario_c_is_larger_with_errors() {
    let sheet = demos::open("ostrel").unwrap();
    let limit = |sheet: &Sheet| {
        let reply = ask(&Request::Limit {
            sheet: sheet.clone(),
            parameter: "r1.b_in".into(),
            places: 4,
        });
        assert_eq!(reply.body, Body::Limit { interferes: false });
        reply.columns[1].values[0]
    };
    let plain = limit(&sheet);
    let mut with = sheet.clone();
    with.data.common_luminosity_error = Some("30 %".into());
    assert!(limit(&with) > 1.02 * plain && plain > 0.0);
}

#[test]
fn looks_and_goodness() {
    let request = Request::Looks {
        rate_per_look: 0.57,
        looks: 24,
        p: 0.0228,
    };
    let Body::Looks { p } = ask(&request).body else {
        panic!("no looks");
    };
    assert!((p - 0.079).abs() < 0.001);
    let request = Request::Goodness {
        sheet: demos::open("ostrel").unwrap(),
        trials: 40,
        seed: 1,
    };
    let Body::Goodness { found } = ask(&request).body else {
        panic!("no goodness");
    };
    assert!(found.trials > 30 && found.p_value > 0.02 && found.p_value <= 1.0);
}

#[test]
fn traps_are_named() {
    let codes = |sheet: &Sheet| -> Vec<String> {
        let found = check::understand(sheet).warnings;
        found.into_iter().map(|w| w.code).collect()
    };
    let mut sheet = saltmere();
    sheet.data.luminosity_monitor = Some(LuminosityMonitor::SmallAngle);
    sheet.detection.photon_cut = Some("2.65 GeV".into());
    assert!(
        !codes(&sheet)
            .iter()
            .any(|c| c.contains("fed") || c.contains("cut"))
    );
    sheet.data.luminosity_monitor = Some(LuminosityMonitor::MuonPairs);
    sheet.detection.photon_cut = Some("2.8 GeV".into());
    let found = codes(&sheet);
    assert!(found.contains(&"luminosity-fed-by-resonance".to_string()));
    assert!(found.contains(&"efficiency-of-another-cut".to_string()));
}

#[test]
fn looks_outside_their_range_are_refused_with_the_field() {
    for (rate_per_look, looks, p, field) in [
        (0.0, 24, 0.02, "rate_per_look"),
        (f64::NAN, 24, 0.02, "rate_per_look"),
        (1e6, 24, 0.02, "rate_per_look"),
        (0.5, 0, 0.02, "looks"),
        (0.5, 1001, 0.02, "looks"),
        (0.5, 24, -1.0, "p"),
        (0.5, 24, f64::NAN, "p"),
    ] {
        let request = Request::Looks {
            rate_per_look,
            looks,
            p,
        };
        let refusal = answer(&request, &mut |_, _| ()).unwrap_err();
        assert_eq!(refusal.field, field);
        assert!(!refusal.allowed.is_empty() && !refusal.message.is_empty());
    }
}
