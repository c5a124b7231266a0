//! Every kind of bad input is refused, naming the field, the value and what is allowed; the rest
//! of the sheet stays usable.

use widthwise_core::error::Refusal;
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::requests::{Body, Request, answer};
use widthwise_sheet::{check, demos, json};

fn demo() -> Sheet {
    demos::open("saltmere").unwrap()
}

fn problems(change: impl FnOnce(&mut Sheet)) -> Vec<Refusal> {
    let mut sheet = demo();
    change(&mut sheet);
    check::understand(&sheet).problems
}

/// The one problem that a change makes.
fn only(change: impl FnOnce(&mut Sheet)) -> Refusal {
    let mut found = problems(change);
    assert_eq!(found.len(), 1, "{found:?}");
    found.remove(0)
}

#[test]
fn numbers_that_are_none() {
    for text in [
        "",
        "NaN MeV",
        "inf MeV",
        "-inf",
        "wide",
        "0.62",
        "0.62 nb",
        "0.62 h",
        "1e999 MeV",
    ] {
        let refused = only(|s| s.model.resonances[0].width = text.into());
        assert_eq!(refused.field, "model.resonances[0].width", "{text}");
        assert_eq!(refused.value, text);
        assert!(refused.allowed.contains("MeV") && !refused.message.is_empty());
    }
}

#[test]
fn values_out_of_range() {
    type Change = fn(&mut Sheet);
    let cases: [(Change, &str); 12] = [
        (
            |s| s.model.resonances[0].width = "-0.62 MeV".into(),
            "model.resonances[0].width",
        ),
        (
            |s| s.model.resonances[0].width = "0 MeV".into(),
            "model.resonances[0].width",
        ),
        (
            |s| s.beam.luminosity = Some("0 cm^-2 s^-1".into()),
            "beam.luminosity",
        ),
        (
            |s| s.data.rows[3].luminosity = Some("0 nb^-1".into()),
            "data.rows[3].luminosity",
        ),
        (
            |s| s.data.rows[3].counts = Some("-1".into()),
            "data.rows[3].counts",
        ),
        (
            |s| s.data.rows[3].counts = Some("10.5".into()),
            "data.rows[3].counts",
        ),
        (
            |s| s.data.rows[3].w_error = Some("-20 keV".into()),
            "data.rows[3].w_error",
        ),
        (
            |s| s.data.rows[3].efficiency = Some("0".into()),
            "data.rows[3].efficiency",
        ),
        (
            |s| s.detection.efficiency = Some("142 %".into()),
            "detection.efficiency",
        ),
        (|s| s.model.j = "half".into(), "model.j"),
        (
            |s| s.model.accuracy = Some("1e-12".into()),
            "model.accuracy",
        ),
        (|s| s.plan.hours = Some("-3 h".into()), "plan.hours"),
    ];
    for (change, field) in cases {
        let refused = only(change);
        assert_eq!(refused.field, field);
        assert!(
            !refused.message.is_empty() && !refused.allowed.is_empty(),
            "{refused:?}"
        );
    }
}

#[test]
fn what_does_not_fit_together() {
    // M below the beams' and below the final state's threshold.
    let low = problems(|s| {
        s.model.resonances[0].mass = "0.9 MeV".into();
        s.model.radiation.on = false;
    });
    assert!(
        low.iter().any(
            |p| p.field == "model.resonances[0].mass" && p.message.contains("beams' threshold")
        ),
        "{low:?}"
    );
    let low = problems(|s| s.model.final_threshold = Some("2.9 GeV".into()));
    assert!(
        low.iter()
            .any(|p| p.field == "model.resonances[0].mass" && p.message.contains("final state's")),
        "{low:?}"
    );
    assert_eq!(
        only(|s| s.model.radiation.w_min = None).field,
        "model.radiation.w_min"
    );
    assert_eq!(
        only(|s| s.model.radiation.w_min = Some("2.9 GeV".into())).field,
        "model.radiation.w_min"
    );
    assert_eq!(
        only(|s| s.model.resonances.clear()).field,
        "model.resonances"
    );
    assert_eq!(
        only(|s| s.data.rows[1].id = "A1".into()).field,
        "data.rows[1].id"
    );
    assert_eq!(
        only(|s| s.data.rows[1].stop = Some("2026-11-24T01:00:00+01:00".into())).field,
        "data.rows[1].stop"
    );
    assert_eq!(
        only(|s| s.data.rows[1].start = Some("2026-11-24T10:15:00".into())).field,
        "data.rows[1].start"
    );
    assert_eq!(
        only(|s| s.data.rows[1].cross_section = Some("3(1) nb".into())).field,
        "data.rows[1].cross_section"
    );
    assert_eq!(
        only(|s| s.data.stage = widthwise_sheet::doc::Stage::Born).field,
        "data.stage"
    );
    assert_eq!(
        only(|s| s.data.rows[2].off_counts = Some("5".into())).field,
        "data.rows[2].tau"
    );
    let refused = only(|s| {
        s.data.rows[1].w = None;
        s.data.rows[1].setting = None;
    });
    assert_eq!(refused.field, "data.rows[1].w");
    // Radiation of heavy beams, an unknown particle.
    let heavy = problems(|s| {
        s.beam.first.name = "p".into();
        s.beam.second.name = "pbar".into();
    });
    assert!(
        heavy.iter().any(|p| p.field == "model.radiation.on"),
        "{heavy:?}"
    );
    assert_eq!(
        problems(|s| s.beam.first.name = "quux".into())[0].field,
        "beam.first.mass"
    );
    let momentum = only(|s| s.data.rows[1].setting = Some("1436 MeV/c".into()));
    assert!(momentum.message.contains("momentum"), "{momentum:?}");
}

#[test]
fn a_bad_row_does_not_keep_the_curve_from_being_drawn() {
    let mut sheet = demo();
    sheet.data.rows[4].counts = Some("31x".into());
    let curve = Request::Curve {
        sheet: sheet.clone(),
        from_gev: 2.86,
        to_gev: 2.88,
        points: 5,
    };
    assert!(answer(&curve, &mut |_, _| ()).is_ok());
    let points = answer(
        &Request::Points {
            sheet: sheet.clone(),
        },
        &mut |_, _| (),
    )
    .unwrap();
    let Body::Points { points, .. } = points.body else {
        panic!()
    };
    assert_eq!(points.len(), 12);
    assert!(points[4].w_gev.is_none() && points[5].expected.is_some());
    let refused = answer(
        &Request::Fit {
            sheet: sheet.clone(),
        },
        &mut |_, _| (),
    )
    .unwrap_err();
    assert_eq!(refused.field, "data.rows[4].counts");
    // Left out, it no longer matters; nothing that was typed is lost.
    sheet.data.rows[4].left_out = true;
    let understood = check::understand(&sheet);
    assert_eq!(understood.scan().unwrap().points.len(), 11);
    assert_eq!(json::open(&json::write(&sheet)).unwrap(), sheet);
}

#[test]
fn files_that_are_no_sheets() {
    let good = json::write(&demo());
    let newer = good.replace("\"version\": 1", "\"version\": 7");
    let refused = json::open(&newer).unwrap_err();
    assert!(
        refused.field == "version" && refused.message.contains("newer"),
        "{refused:?}"
    );
    for cut in [1, good.len() / 3, good.len() - 3] {
        let refused = json::open(&good[..cut]).unwrap_err();
        assert!(refused.message.contains("ends early"), "{cut}: {refused:?}");
    }
    for (text, says) in [
        ("", "empty"),
        ("hello", "not a scan sheet"),
        ("{}", "does not say"),
        (
            "{\"format\": \"something else\", \"version\": 1}",
            "does not say",
        ),
        ("[1, 2]", "scan sheet"),
    ] {
        let refused = json::open(text).unwrap_err();
        assert!(refused.message.contains(says), "{text}: {refused:?}");
    }
    let unknown = good.replace("\"known_to\"", "\"known_two\"");
    let refused = json::open(&unknown).unwrap_err();
    assert!(
        refused.field.starts_with("beam.spread") && refused.message.contains("known_two"),
        "{refused:?}"
    );
    // A newer sheet with fields that are unknown here is told as newer, not as wrong.
    let newer = unknown.replace("\"version\": 1", "\"version\": 2");
    assert_eq!(json::open(&newer).unwrap_err().field, "version");
}

#[test]
fn requests_over_budget_are_refused_with_the_number() {
    let request = Request::Curve {
        sheet: demo(),
        from_gev: 2.8,
        to_gev: 2.9,
        points: 1_000_000,
    };
    let refused = answer(&request, &mut |_, _| ()).unwrap_err();
    assert!(
        refused.value == "1000000" && refused.allowed.contains("20000"),
        "{refused:?}"
    );
    for (from_gev, to_gev) in [
        (2.9, 2.8),
        (f64::NAN, 2.9),
        (-1.0, 2.9),
        (2.8, f64::INFINITY),
    ] {
        let request = Request::Curve {
            sheet: demo(),
            from_gev,
            to_gev,
            points: 10,
        };
        assert!(answer(&request, &mut |_, _| ()).is_err());
    }
    let mut sheet = demo();
    sheet.fit.free.push("r9.mass".into());
    assert_eq!(
        answer(&Request::Fit { sheet }, &mut |_, _| ())
            .unwrap_err()
            .field,
        "fit.free[5]"
    );
}
