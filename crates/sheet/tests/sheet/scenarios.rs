//! The demos' forecast against the numbers of the invented scenarios, which come from an
//! independent calculation (radiation, Gaussian spread): within rounding or 0.5 %.

use widthwise_sheet::demos;
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::requests::{Body, PointReading, Request, answer};

fn points(sheet: Sheet) -> Vec<PointReading> {
    let reply = answer(&Request::Points { sheet }, &mut |_, _| ()).unwrap();
    match reply.body {
        Body::Points { points, .. } => points,
        other => panic!("{other:?}"),
    }
}

fn cursor(sheet: &Sheet, w_gev: f64) -> (String, Vec<(String, f64)>) {
    let request = Request::Cursor {
        sheet: sheet.clone(),
        w_gev,
    };
    match answer(&request, &mut |_, _| ()).unwrap().body {
        Body::Cursor { dial, values, .. } => (
            dial,
            values.into_iter().map(|v| (v.name, v.value)).collect(),
        ),
        other => panic!("{other:?}"),
    }
}

fn named(values: &[(String, f64)], name: &str) -> f64 {
    values
        .iter()
        .find(|(n, _)| n == name)
        .unwrap_or_else(|| panic!("{name} in {values:?}"))
        .1
}

/// The printed number stands for anything within half a unit of its last digit; ours within 0.5 % of that.
fn agrees(ours: f64, printed: f64, digit: f64, what: &str) {
    let allowed = 0.5 * digit + 0.005 * printed.abs();
    assert!(
        (ours - printed).abs() <= allowed,
        "{what}: {ours} against {printed}"
    );
}

/// Largest Born and radiated cross section of a range, nb.
fn peaks(sheet: &Sheet, from_gev: f64, to_gev: f64) -> (f64, f64) {
    let request = Request::Curve {
        sheet: sheet.clone(),
        from_gev,
        to_gev,
        points: 61,
    };
    let columns = answer(&request, &mut |_, _| ()).unwrap().columns;
    let largest = |name: &str| {
        let column = columns.iter().find(|c| c.name == name).unwrap();
        column.values.iter().copied().fold(0.0, f64::max)
    };
    (largest("Born"), largest("radiated"))
}

#[test]
fn saltmere() {
    let sheet = demos::open("saltmere").unwrap();
    let expected = [
        96.0, 52.0, 56.0, 112.0, 313.0, 386.0, 582.0, 572.0, 625.0, 334.0, 204.0, 172.0,
    ];
    for (p, want) in points(sheet.clone()).iter().zip(expected) {
        agrees(p.expected.unwrap(), want, 1.0, &p.id);
        assert!(p.p_value.unwrap() > 0.0 && p.pull.unwrap().abs() < 4.0);
    }
    let (dial, values) = cursor(&sheet, 2.8742);
    assert_eq!(dial, "1436.9500 MeV");
    assert!(named(&values, "Born") > named(&values, "observed"));
    let (born, radiated) = peaks(&sheet, 2.8732, 2.8756);
    agrees(born, 55.7, 0.1, "Born peak");
    agrees(radiated, 31.5, 0.1, "radiated peak");
    let (_, values) = cursor(&sheet, 2.87445);
    agrees(named(&values, "observed"), 14.76, 0.01, "observed peak");
    let (_, values) = cursor(&sheet, 2.8713);
    agrees(named(&values, "observed"), 1.09, 0.01, "dip");
}

#[test]
fn greyfell() {
    let sheet = demos::open("greyfell").unwrap();
    let signal = [
        0.04, 0.22, 0.98, 4.66, 13.30, 9.30, 6.85, 8.25, 7.27, 2.47, 0.56, 0.09,
    ];
    for (p, want) in points(sheet.clone()).iter().zip(signal) {
        let (dial, values) = cursor(&sheet, p.w_gev.unwrap());
        agrees(named(&values, "observed"), want, 0.01, &p.id);
        assert!(dial.ends_with("GeV/c"), "{dial}");
        let momentum: f64 = dial.trim_end_matches(" GeV/c").parse().unwrap();
        assert!((4.45..4.52).contains(&momentum));
    }
    let (_, values) = cursor(&sheet, 3.218);
    agrees(named(&values, "sigma_W"), 192e-6, 1e-6, "sigma_W");
}

#[test]
fn ostrel() {
    let mut sheet = demos::open("ostrel").unwrap();
    // The table was made with the true mass, which the sheet (a hint of it) does not know.
    sheet.model.resonances[0].mass = "47.3042 GeV".into();
    let expected = [1.8, 1.9, 2.0, 2.4, 3.7, 9.4, 8.8, 3.9, 2.7];
    for (p, want) in points(sheet.clone()).iter().zip(expected) {
        agrees(p.expected.unwrap(), want, 0.1, &p.id);
    }
    let (_, values) = cursor(&sheet, 47.3042);
    agrees(named(&values, "Born"), 169.9e-3, 0.1e-3, "Born");
    let (_, radiated) = peaks(&sheet, 47.30, 47.31);
    agrees(radiated, 107.6e-3, 0.1e-3, "radiated peak");
    let (_, values) = cursor(&sheet, 47.304_45);
    agrees(named(&values, "observed"), 77.2e-3, 0.1e-3, "observed peak");
    agrees(named(&values, "signal rate"), 3.1, 0.1, "signal per hour");
    agrees(
        named(&values, "background rate"),
        0.57,
        0.01,
        "background per hour",
    );
}

#[test]
fn the_first_scenario_can_be_fitted() {
    let sheet = demos::open("saltmere").unwrap();
    let reply = answer(&Request::Fit { sheet }, &mut |_, _| ()).unwrap();
    let Body::Fit {
        parameters,
        converged,
        ..
    } = reply.body
    else {
        panic!()
    };
    assert!(converged);
    let mass = parameters.iter().find(|p| p.id == "r1.mass").unwrap();
    assert_eq!(
        (mass.unit.as_str(), mass.field.as_str()),
        ("MeV", "model.resonances[0].mass")
    );
    // Scenario: 63 keV with fills; the counts are one draw of the stated truth.
    let error = mass.error.unwrap();
    assert!((error - 0.063).abs() < 0.01, "{error}");
    assert!((mass.value - 2874.20).abs() < 3.0 * error, "{}", mass.value);
    assert!(
        mass.text.ends_with("MeV") && mass.text.contains('('),
        "{}",
        mass.text
    );
}
