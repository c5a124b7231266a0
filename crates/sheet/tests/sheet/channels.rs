//! Several exit channels, angular bins and background runs through the sheet.

use widthwise_core::error::Refusal;
use widthwise_sheet::check;
use widthwise_sheet::demos;
use widthwise_sheet::doc::{AngleBin, Detection, ExitChannel, Row, Sheet};
use widthwise_sheet::requests::{Body, Request, answer, find_parameter};

/// Scenario A with its counts once more in a channel of twice the efficiency and half the strength
/// (so the same resonance), without continuum.
fn with_channel() -> Sheet {
    let mut sheet = demos::open("saltmere").unwrap();
    sheet.channels.push(ExitChannel {
        name: "eta rho".into(),
        strengths: vec!["12.3 eV".into()],
        coherent: sheet.model.coherent.clone(),
        detection: Detection {
            efficiency: Some("0.84".into()),
            background_rate: Some("1.5 /h".into()),
            ..Detection::default()
        },
        ..ExitChannel::default()
    });
    let others: Vec<Row> = sheet
        .data
        .rows
        .iter()
        .map(|row| Row {
            id: format!("{}b", row.id),
            channel: Some("eta rho".into()),
            ..row.clone()
        })
        .collect();
    sheet.data.rows.extend(others);
    sheet.fit.free.push("c1.r1.strength".into());
    sheet
}

fn fit(sheet: Sheet) -> Result<Body, Refusal> {
    answer(&Request::Fit { sheet }, &mut |_, _| ()).map(|r| r.body)
}

fn problems(sheet: &Sheet) -> Vec<String> {
    let found = check::understand(sheet).problems;
    found.into_iter().map(|p| p.field).collect()
}

#[test]
fn a_second_channel_joins_the_fit_and_writes_back_to_its_own_field() {
    let Ok(Body::Fit {
        parameters,
        nuisances,
        pulls,
        ..
    }) = fit(with_channel())
    else {
        panic!("no fit");
    };
    let own = parameters
        .iter()
        .find(|p| p.id == "c1.r1.strength")
        .unwrap();
    assert_eq!(
        (own.field.as_str(), own.unit.as_str()),
        ("channels[0].strengths[0]", "eV")
    );
    assert!(own.error.unwrap() > 0.0 && own.name.contains("eta rho"));
    assert_eq!(pulls.len(), 24);
    // A visit is one energy, whatever it is counted in: no nuisance of a point of the second channel.
    assert!(
        nuisances.iter().all(|n| !n.name.ends_with('b')),
        "{nuisances:?}"
    );
    let Ok(Body::Points { points, .. }) = answer(
        &Request::Points {
            sheet: with_channel(),
        },
        &mut |_, _| (),
    )
    .map(|r| r.body) else {
        panic!("no points");
    };
    let (first, second) = (&points[6], &points[18]);
    assert!((first.expected.unwrap() - 582.0).abs() < 5.0);
    assert_eq!(second.seen, first.seen);
    // With the strength of the first channel: the same curve with twice the efficiency, and the
    // same 1.5 /h of background in 3 h.
    let mut alike = with_channel();
    alike.channels[0].strengths = vec!["24.6 eV".into()];
    let Ok(Body::Points { points, .. }) =
        answer(&Request::Points { sheet: alike }, &mut |_, _| ()).map(|r| r.body)
    else {
        panic!("no points");
    };
    let (first, second) = (points[6].expected.unwrap(), points[18].expected.unwrap());
    assert!((second - (2.0 * (first - 4.5) + 4.5)).abs() < 1e-6 * second);
    assert_eq!(
        find_parameter(&with_channel(), "c1.background.rate")
            .unwrap()
            .field,
        "channels[0].detection.background_rate"
    );
}

#[test]
fn what_is_wrong_with_a_channel_is_told_at_its_own_field() {
    let mut sheet = with_channel();
    sheet.channels[0].strengths = vec!["12.3 nb".into()];
    assert!(problems(&sheet).contains(&"channels[0].strengths[0]".to_string()));
    let mut sheet = with_channel();
    sheet.channels[0].strengths.clear();
    assert!(problems(&sheet).contains(&"channels[0].strengths".to_string()));
    let mut sheet = with_channel();
    sheet.channels[0].detection.efficiency = Some("0".into());
    assert!(problems(&sheet).contains(&"channels[0].detection.efficiency".to_string()));
    let mut sheet = with_channel();
    sheet.data.rows[3].channel = Some("nobody".into());
    assert_eq!(problems(&sheet), ["data.rows[3].channel"]);
    let mut sheet = with_channel();
    let twin = sheet.channels[0].clone();
    sheet.channels.push(twin);
    assert!(problems(&sheet).contains(&"channels[1].name".to_string()));
}

fn bin(from: &str, to: &str, counts: &str) -> AngleBin {
    AngleBin {
        from: from.into(),
        to: to.into(),
        counts: counts.into(),
        efficiency: None,
    }
}

#[test]
fn angular_bins_are_fitted_where_the_hypothesis_has_angles_and_refused_where_not() {
    // Ostrel looks for a scalar: the same at all angles, so bins carry what the total carries.
    let mut sheet = demos::open("ostrel").unwrap();
    sheet.fit.free = vec!["r1.b_in".into()];
    let Ok(Body::Fit {
        parameters: whole, ..
    }) = fit(sheet.clone())
    else {
        panic!("no fit");
    };
    for row in &mut sheet.data.rows {
        let n: u32 = row.counts.take().unwrap().parse().unwrap();
        let part = n / 3;
        row.angle_bins = vec![
            bin("0", "0.5", &part.to_string()),
            bin("0.5", "1", &(n - part).to_string()),
        ];
    }
    let Ok(Body::Fit {
        parameters, pulls, ..
    }) = fit(sheet.clone())
    else {
        panic!("no fit");
    };
    assert!((parameters[0].value / whole[0].value - 1.0).abs() < 1e-5);
    assert!(pulls[1].0.contains("|cos| 0.5 to 1"), "{}", pulls[1].0);
    sheet.data.rows[0].counts = Some("17".into());
    sheet.data.rows[1].angle_bins[1].from = "0.4".into();
    sheet.data.rows[2].angle_bins[1].to = "0.5".into();
    assert_eq!(
        problems(&sheet),
        [
            "data.rows[0].counts",
            "data.rows[1].angle_bins[1].to",
            "data.rows[2].angle_bins[1].to"
        ]
    );
    let mut vector = demos::open("saltmere").unwrap();
    vector.data.rows[0].counts = None;
    vector.data.rows[0].angle_bins = vec![bin("-1", "0", "40"), bin("0", "1", "58")];
    let found = check::understand(&vector).problems;
    assert!(
        found[0].message.contains("nothing about angles"),
        "{found:?}"
    );
}

#[test]
fn a_run_with_the_beams_apart_measures_the_background_rate() {
    let mut sheet = demos::open("saltmere").unwrap();
    sheet.fit.free.push("background.rate".into());
    let rate = |sheet: &Sheet| {
        let Ok(Body::Fit { parameters, .. }) = fit(sheet.clone()) else {
            panic!("no fit");
        };
        let found = parameters.into_iter().find(|p| p.id == "background.rate");
        found.unwrap()
    };
    let before = rate(&sheet).error.unwrap();
    let mut run = sheet.data.rows[0].clone();
    run.id = "apart".into();
    run.luminosity = None;
    run.beams_apart = true;
    run.live_time = Some("40 h".into());
    run.counts = Some("60".into());
    sheet.data.rows.push(run);
    let with = rate(&sheet);
    // sqrt(60)/40 h by itself.
    assert!(with.error.unwrap() < 0.2 && before > 2.0 * with.error.unwrap());
    assert!((with.value - 1.5).abs() < 0.3, "{}", with.value);
    sheet.data.rows[12].off_counts = Some("3".into());
    sheet.data.rows[12].tau = Some("2".into());
    assert_eq!(problems(&sheet), ["data.rows[12].counts"]);
}
