//! Intervals, solutions, trials and windows asked through the sheet, on the invented scenarios.
//! Expected numbers: an independent calculation of the scenarios.

use widthwise_sheet::demos;
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::requests::{Body, MassWindow, Reply, Request, TrialRange, answer};

fn ask(request: &Request) -> Reply {
    answer(request, &mut |_, _| ()).unwrap()
}

/// Scenario A with its free parameters at the true values, without errors of the energies.
fn saltmere() -> Sheet {
    demos::open("saltmere").unwrap()
}

#[test]
fn the_second_solution_of_scenario_a_is_found_and_fits_as_well() {
    let Body::Solutions {
        exact, solutions, ..
    } = ask(&Request::Solutions { sheet: saltmere() }).body
    else {
        panic!("no solutions");
    };
    assert!(exact);
    assert_eq!(solutions.len(), 2);
    for s in &solutions {
        assert!(s.above_best < 1e-3, "{}", s.above_best);
    }
    // True values: 24.6 eV at -130 degrees and 14.9 eV at +145.7 degrees, within three errors each.
    let wanted = [(24.6, -130.0), (14.9, 145.7)];
    for (strength, phase) in wanted {
        let near = solutions.iter().any(|s| {
            let of = |id: &str| s.parameters.iter().find(|p| p.id == id).unwrap();
            let (b, p) = (of("r1.strength"), of("coherent.phase"));
            let turn = ((p.value - phase + 540.0).rem_euclid(360.0) - 180.0).abs();
            assert_eq!((b.unit.as_str(), p.unit.as_str()), ("eV", "deg"));
            (b.value - strength).abs() < 3.0 * b.error.unwrap() && turn < 3.0 * p.error.unwrap()
        });
        assert!(near, "{strength} eV at {phase} degrees: {solutions:?}");
    }
}

#[test]
fn intervals_hold_the_curvature_errors_of_a_well_measured_mass() {
    let Body::Intervals {
        parameters,
        derived,
        ..
    } = ask(&Request::Intervals { sheet: saltmere() }).body
    else {
        panic!("no intervals");
    };
    let mass = parameters
        .iter()
        .find(|p| p.parameter.id == "r1.mass")
        .unwrap();
    // Forecast with point and fill errors: 63 keV; a profile of a nearly parabolic likelihood is as wide.
    let error = mass.parameter.error.unwrap();
    assert!((error - 0.063).abs() < 0.006, "{error} MeV");
    for (end, wanted) in [(&mass.one, error), (&mass.two, 2.0 * error)] {
        for e in [&end.0, &end.1] {
            assert!(
                e.found && (e.distance.unwrap().abs() / wanted - 1.0).abs() < 0.1,
                "{e:?}"
            );
        }
    }
    // Lifetime = hbar/Gamma (hbar: CODATA 2022), with Gamma's relative error.
    let width = &parameters
        .iter()
        .find(|p| p.parameter.id == "r1.width")
        .unwrap()
        .parameter;
    let lifetime = derived.iter().find(|d| d.id == "r1.lifetime").unwrap();
    let hbar_mev_s = 6.582_119_569_509e-22;
    assert!((lifetime.value * width.value / hbar_mev_s - 1.0).abs() < 1e-9);
    assert!(
        (lifetime.error / lifetime.value / (width.error.unwrap() / width.value) - 1.0).abs() < 1e-3
    );
}

#[test]
fn profile_and_contour_rise_as_they_claim() {
    let sheet = saltmere();
    let reply = ask(&Request::Profile {
        sheet: sheet.clone(),
        parameter: "r1.width".into(),
        places: 13,
    });
    let (values, rises) = (&reply.columns[0].values, &reply.columns[1].values);
    assert_eq!((values.len(), reply.columns[0].unit.as_str()), (13, "MeV"));
    let least = rises.iter().copied().fold(f64::INFINITY, f64::min);
    assert!(
        (0.0..0.2).contains(&least) && rises[0] > 4.0 && rises[12] > 4.0,
        "{rises:?}"
    );
    let reply = ask(&Request::Contour {
        sheet,
        first: "r1.mass".into(),
        second: "r1.width".into(),
        places: 16,
    });
    let half = |c: usize| {
        let v = &reply.columns[c].values;
        let (low, high) = v
            .iter()
            .fold((f64::MAX, f64::MIN), |(a, b), x| (a.min(*x), b.max(*x)));
        0.5 * (high - low)
    };
    // For a pair, the 68.3 % region reaches sqrt(2.2957) errors, the 95.4 % one sqrt(6.18).
    assert!((half(2) / half(0) / (6.180_074_f64 / 2.295_749).sqrt() - 1.0).abs() < 0.15);
}

#[test]
fn ranges_of_trials_merge_to_the_same_bits() {
    let sheet = saltmere();
    let rows = |first, count| {
        let range = TrialRange {
            seed: 7,
            first,
            count,
            profiles: false,
        };
        match ask(&Request::Trials {
            sheet: sheet.clone(),
            range,
        })
        .body
        {
            Body::Trials { rows } => rows,
            other => panic!("{other:?}"),
        }
    };
    let whole = rows(0, 12);
    let mut parts = rows(8, 4);
    parts.extend(rows(0, 8));
    let summary = |rows| match ask(&Request::Summary {
        sheet: sheet.clone(),
        rows,
    })
    .body
    {
        Body::Summary { summary } => summary,
        other => panic!("{other:?}"),
    };
    let one = summary(whole);
    assert_eq!(one, summary(parts));
    assert_eq!(one.trials, 12);
    let too_many = Request::Trials {
        sheet: saltmere(),
        range: TrialRange {
            seed: 1,
            first: 0,
            count: 1_000_000,
            profiles: false,
        },
    };
    assert_eq!(
        answer(&too_many, &mut |_, _| ()).unwrap_err().field,
        "range.count"
    );
}

#[test]
fn a_window_is_searched_and_bad_windows_are_refused() {
    let window = |from_gev, to_gev, masses| Request::Window {
        sheet: demos::open("ostrel").unwrap(),
        window: MassWindow {
            from_gev,
            to_gev,
            masses,
            trials: 50,
            seed: 3,
        },
    };
    let reply = ask(&window(47.285, 47.315, 31));
    let Body::Window { strongest } = &reply.body else {
        panic!("no window");
    };
    let strongest = strongest.as_ref().unwrap();
    // The state is at 47.3042 GeV; the comb is 3 MeV apart.
    assert!((strongest.mass_gev - 47.3042).abs() < 3e-3, "{strongest:?}");
    assert!(strongest.global_significance < strongest.local_significance);
    let limits = &reply.columns[1].values;
    assert!(limits.iter().all(|l| *l > 0.0));
    for (from, to, masses) in [
        (47.3, 47.2, 5),
        (f64::NAN, 47.0, 5),
        (47.2, 47.3, 1),
        (47.2, 47.3, 99_999),
    ] {
        assert!(
            answer(&window(from, to, masses), &mut |_, _| ())
                .unwrap_err()
                .field
                .starts_with("window.")
        );
    }
}

#[test]
fn each_point_is_left_out_in_turn() {
    let Body::Influence {
        points, parameters, ..
    } = ask(&Request::Influence { sheet: saltmere() }).body
    else {
        panic!("no influence");
    };
    assert!(!points.is_empty());
    for p in &points {
        assert_eq!(p.shifts.len(), parameters.len());
        assert!(p.statistic_drop > -1e-6, "{p:?}");
    }
}
