//! The amplitude behind the curve, asked through the requests of page and batch program.

use serde_json::{Value, json};
use widthwise_core::error::Answer;
use widthwise_sheet::json as file;
use widthwise_sheet::requests::{Body, Reply, Request, answer};

fn sheet(beam: &str, model: &Value) -> Value {
    json!({
        "format": "widthwise scan sheet", "version": 1, "invented": true,
        "beam": {
            "arrangement": "equal_beams", "first": { "name": format!("{beam}-") }, "second": { "name": format!("{beam}+") },
            "dial": "w", "spread": { "kind": "none" }, "calibration": {}
        },
        "model": model, "detection": {}, "data": {}
    })
}

fn ask(mut request: Value, sheet: &Value) -> Answer<Reply> {
    file::open(&sheet.to_string()).unwrap();
    request["sheet"] = sheet.clone();
    let reply = answer(&Request::read(request).unwrap(), &mut |_, _| ())?;
    for column in &reply.columns {
        let bad = column.values.iter().any(|v| !v.is_finite());
        assert!(!bad, "{} is not a number somewhere", column.name);
    }
    Ok(reply)
}

fn column<'a>(reply: &'a Reply, name: &str) -> &'a [f64] {
    let found = reply.columns.iter().find(|c| c.name == name);
    &found.unwrap_or_else(|| panic!("no column {name}")).values
}

fn one(form: &str, more: &Value) -> Value {
    let mut r = json!({ "name": "R", "mass": "1 GeV", "width": "", "form": form, "strength": { "kind": "bin_bf", "value": "0.01" } });
    for (key, value) in more.as_object().unwrap() {
        r[key] = value.clone();
    }
    json!({ "j": "0", "resonances": [r], "radiation": { "on": false } })
}

fn line(from: f64, to: f64) -> Value {
    json!({ "kind": "amplitude", "of": 0, "grid": { "from": from, "to": to, "places": 200 } })
}

fn f0() -> Value {
    one(
        "flatte",
        &json!({
            "mass": "0.965 GeV",
            "flatte": [
                { "name": "pi pi", "g_squared": "0.165 GeV^2", "m1": "0.13957039 GeV", "m2": "0.13957039 GeV" },
                { "name": "K K", "g_squared": "0.69465 GeV^2", "m1": "0.493677 GeV", "m2": "0.493677 GeV" }
            ],
            "entrance": { "kind": "own", "channel": 1 }, "exit": { "kind": "own", "channel": 1 },
            "strength": { "kind": "from_form" }
        }),
    )
}

#[test]
fn z_in_other_words() {
    // PDG text, section "Resonances": 34 MeV and 0.93 MeV; hep-ph/0001206: 26 and 1.2 MeV.
    let z = json!({ "mass": "91.1876 GeV", "width": "2.4952 GeV" });
    let reply = ask(line(85.0, 97.0), &sheet("e", &one("massless_channels", &z))).unwrap();
    let Body::Amplitude {
        words,
        poles,
        lifetime_s,
        ..
    } = &reply.body
    else {
        panic!("{:?}", reply.body)
    };
    let mass = |i: usize| -> f64 { words[i].mass.split(' ').next().unwrap().parse().unwrap() };
    assert_eq!(words.len(), 4);
    assert!(((91.1876 - mass(0)) * 1e3 - 34.1).abs() < 0.05);
    assert!(((91.1876 - mass(2)) * 1e3 - 26.0).abs() < 0.5);
    assert!(words[0].note.contains("same |Delta|") && words[1].note == "the same words");
    assert_eq!(poles.len(), 1);
    assert!((poles[0].mass_bar_gev.unwrap() - mass(0)).abs() < 1e-5);
    assert!((lifetime_s.unwrap() - 6.582_119_569_509e-25 / 2.4952).abs() < 1e-30);
    // The Argand path of the state alone lies on the unitarity circle, the phase is 90 degrees at M.
    for (re, im) in column(&reply, "Re a").iter().zip(column(&reply, "Im a")) {
        assert!((re * re + (im - 0.5) * (im - 0.5) - 0.25).abs() < 1e-12);
    }
    let w = column(&reply, "W");
    for (w, phase) in w.iter().zip(column(&reply, "phase")) {
        assert_eq!(*w < 91.1876, *phase < 90.0, "{w} {phase}");
    }
}

#[test]
fn poles_thresholds_and_plane_of_the_flatte_form() {
    // Own values of the f0(980) with the couplings of hep-ex/0411001, see the core's tests.
    let model = sheet("mu", &f0());
    let reply = ask(line(0.3, 1.2), &model).unwrap();
    let Body::Amplitude {
        poles,
        thresholds,
        sheet: near,
        ..
    } = &reply.body
    else {
        panic!("{:?}", reply.body)
    };
    assert!((poles[0].mass_gev - 0.998_443).abs() < 1e-6);
    assert!((0.5 * poles[0].width_gev - 0.017_225).abs() < 1e-6);
    assert_eq!(
        (thresholds.len(), near.as_slice()),
        (2, [false, true].as_slice())
    );
    assert!(poles[0].residue.is_some());
    let plane = json!({ "kind": "plane", "of": 0, "signs": [],
        "re": { "from": 0.9, "to": 1.1, "places": 101 }, "im": { "from": -0.05, "to": 0.05, "places": 101 } });
    let reply = ask(plane.clone(), &model).unwrap();
    let values = column(&reply, "ln |Delta|");
    let at = (0..values.len())
        .max_by(|a, b| values[*a].total_cmp(&values[*b]))
        .unwrap();
    let re = column(&reply, "Re sqrt(s)")[at % 101];
    let im = column(&reply, "Im sqrt(s)")[at / 101];
    assert!(
        (re - 0.998_443).abs() <= 0.0011 && (im.abs() - 0.017_225).abs() <= 0.0006,
        "{re} {im}"
    );
    let mut wrong = plane;
    wrong["signs"] = json!([true]);
    assert_eq!(ask(wrong, &model).unwrap_err().field, "sheet");
}

#[test]
fn what_has_no_value_is_left_out_with_a_word() {
    let phi = json!([{ "name": "phi", "mass": "0.15 GeV", "g": "0.3", "g_other": "0.3", "form": "free" }]);
    let model = json!({ "hypothesis": "diagrams", "radiation": { "on": false },
        "diagrams": { "reaction": "pair_to_other_pair", "other_mass": "0.2 GeV", "mediators": phi } });
    let model = sheet("mu", &model);
    let request =
        json!({ "kind": "amplitude", "of": 0, "grid": { "from": 0.1, "to": 0.2, "places": 11 } });
    let reply = ask(request, &model).unwrap();
    let Body::Amplitude {
        stable,
        warnings,
        pole_note,
        lifetime_s,
        ..
    } = &reply.body
    else {
        panic!("{:?}", reply.body)
    };
    assert!(
        *stable && lifetime_s.is_none() && pole_note.contains("Stable"),
        "{pole_note}"
    );
    assert!(warnings.iter().any(|w| w.code == "stable-mediator"));
    // 0.15 is a place of this grid.
    assert!(column(&reply, "W").len() < 11 && warnings.iter().any(|w| w.code == "on-shell"));
    let table = one(
        "running_width",
        &json!({ "width": "0.1 GeV",
        "channels": [{ "name": "3 pi", "fraction": "1", "shape": { "kind": "tabulated", "rows": [["0.8 GeV", "1"], ["1.1 GeV", "2"]] } }],
        "entrance": { "kind": "constant" }, "exit": { "kind": "constant" } }),
    );
    let reply = ask(line(0.9, 1.3), &sheet("e", &table)).unwrap();
    let Body::Amplitude {
        poles,
        pole_note,
        warnings,
        ..
    } = &reply.body
    else {
        panic!("{:?}", reply.body)
    };
    assert!(poles.is_empty() && pole_note.contains("real axis only"));
    assert!(warnings.iter().any(|w| w.code == "table-ends"));
    let plane = json!({ "kind": "plane", "of": 0, "signs": [],
        "re": { "from": 0.9, "to": 1.1, "places": 5 }, "im": { "from": -0.05, "to": 0.05, "places": 5 } });
    assert!(
        ask(plane, &sheet("e", &table))
            .unwrap_err()
            .message
            .contains("continuation")
    );
    let below =
        json!({ "kind": "amplitude", "of": 3, "grid": { "from": 0.9, "to": 1.0, "places": 11 } });
    assert_eq!(ask(below, &sheet("e", &table)).unwrap_err().field, "of");
}

#[test]
fn overlapping_resonances_beside_their_k_matrix() {
    let r = |name: &str, mass: &str| json!({ "name": name, "mass": mass, "width": "0.1 GeV", "form": "constant_width", "strength": { "kind": "branchings", "b_in": "0.9", "b_f": "0.9" } });
    let model = json!({ "j": "1", "resonances": [r("A", "3 GeV"), r("B", "3.02 GeV")], "radiation": { "on": false } });
    let reply = ask(line(2.7, 3.3), &sheet("e", &model)).unwrap();
    let Body::Amplitude { elastic, names, .. } = &reply.body else {
        panic!("{:?}", reply.body)
    };
    let elastic = elastic.as_ref().unwrap();
    assert!(elastic.sum > 2.0 && elastic.k_matrix <= 1.0 + 1e-12);
    assert!(
        elastic.note.contains("breaks unitarity"),
        "{}",
        elastic.note
    );
    assert_eq!(names, &["A", "B"]);
    assert!(
        column(&reply, "elastic, K-matrix")
            .iter()
            .all(|t2| *t2 <= 1.0 + 1e-12)
    );
}

fn bhabha(g: &str) -> Value {
    let mediators = json!([
        { "name": "phi", "mass": "0.9 GeV", "g": g, "form": "dressed" },
        { "name": "a", "pseudoscalar": true, "mass": "1.2 GeV", "g": "0.4", "form": "constant_width", "width": "0.1 GeV" }
    ]);
    let model = json!({ "hypothesis": "diagrams", "radiation": { "on": false },
        "diagrams": { "reaction": "pair_elastic", "mediators": mediators } });
    sheet("mu", &model)
}

#[test]
fn diagrams_over_energy_and_angle() {
    let model = bhabha("0.5");
    let image = json!({ "kind": "image", "cross_section": true,
        "w": { "from": 0.1, "to": 1.5, "places": 30 }, "cos": { "from": -1.0, "to": 1.0, "places": 41 } });
    let reply = ask(image, &model).unwrap();
    let (w, values) = (column(&reply, "W"), column(&reply, "dsigma/dcos"));
    assert!(
        values[..41].iter().all(|v| *v == 0.0),
        "below threshold there is nothing"
    );
    let slice = json!({ "kind": "slice", "along": "cos", "at": w[20], "grid": { "from": -1.0, "to": 1.0, "places": 41 } });
    let along = ask(slice, &model).unwrap();
    let Body::Slice {
        diagrams,
        identical_factor,
        ..
    } = &along.body
    else {
        panic!("{:?}", along.body)
    };
    let channels: Vec<&str> = diagrams.iter().map(|d| d.channel.as_str()).collect();
    assert_eq!(
        (channels.join(""), *identical_factor),
        ("sstt".to_string(), 1.0)
    );
    assert_eq!(along.columns.len(), 3 + 10);
    for i in 0..41 {
        let m2 = column(&along, "|M|^2")[i];
        let parts: f64 = along.columns[3..].iter().map(|c| c.values[i]).sum();
        assert!((parts - m2).abs() <= 1e-12 * m2, "{parts} {m2}");
        let here = m2 * column(&along, "pre-factor")[i];
        assert!((here / values[20 * 41 + i] - 1.0).abs() < 1e-12);
    }
    let slice = json!({ "kind": "slice", "along": "w", "at": 0.3, "grid": { "from": 0.1, "to": 1.5, "places": 30 } });
    let across = ask(slice, &model).unwrap();
    assert_eq!(column(&across, "|M|^2")[0], 0.0);
    assert!(column(&across, "pre-factor")[29] > 0.0);
    // No angles, no image.
    let slice = json!({ "kind": "slice", "along": "w", "at": 0.3, "grid": { "from": 0.1, "to": 1.5, "places": 30 } });
    let refused = ask(slice, &sheet("mu", &f0())).unwrap_err();
    assert!(refused.message.contains("angles"), "{}", refused.message);
    let outside = json!({ "kind": "slice", "along": "w", "at": 1.3, "grid": { "from": 0.1, "to": 1.5, "places": 30 } });
    assert_eq!(ask(outside, &model).unwrap_err().field, "cos");
}

#[test]
fn unitarity_report_of_the_diagrams() {
    let report = |g: &str| {
        let request = json!({ "kind": "partial_waves", "w_gev": 1.1, "grid": { "from": 0.3, "to": 2.0, "places": 20 } });
        match ask(request, &bhabha(g)).unwrap().body {
            Body::PartialWaves {
                waves,
                breaches,
                note,
                ..
            } => (waves, breaches, note),
            other => panic!("{other:?}"),
        }
    };
    let (waves, breaches, note) = report("0.3");
    assert!(breaches.is_empty() && note.contains("keeps"), "{note}");
    let spins: Vec<&str> = waves.iter().map(|w| w.j.as_str()).collect();
    assert!(spins.contains(&"0") && spins.contains(&"4"));
    let (_, breaches, note) = report("9");
    assert!(
        !breaches.is_empty() && note.contains("breaks unitarity"),
        "{note}"
    );
    assert!(
        breaches
            .iter()
            .all(|b| b.w_gev.unwrap() >= 0.3 && b.re.abs() > 0.5)
    );
}

#[test]
fn what_no_convention_can_write_is_refused() {
    let reword = |convention: &str, width: &str| {
        let request =
            json!({ "kind": "reword", "convention": convention, "mass": "1 GeV", "width": width });
        answer(&Request::read(request).unwrap(), &mut |_, _| ())
    };
    let refused = reword("pole_in_w", "3 GeV").unwrap_err();
    assert!(refused.message.contains("wide"), "{}", refused.message);
    match reword("pole_in_s", "0.1 GeV").unwrap().body {
        Body::Words { words, values } => {
            assert_eq!(words.len(), 4);
            assert!((values[0].value - 6.582_119_569_509e-24).abs() < 1e-29);
        }
        other => panic!("{other:?}"),
    }
}

#[test]
fn a_coupling_makes_no_width_below_threshold() {
    let sheet = sheet("mu", &f0());
    let what = json!({ "of": "coupling", "pseudoscalar": false, "mass": "0.2 GeV", "fermion": "mu-", "colours": 1, "given": "coupling", "value": "0.3" });
    let refused = ask(json!({ "kind": "look_up", "what": what }), &sheet).unwrap_err();
    assert!(refused.message.contains("stable"), "{}", refused.message);
}
