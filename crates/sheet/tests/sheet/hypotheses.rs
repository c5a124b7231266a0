//! Every propagator and every kind of hypothesis as the model of the chain: curve, counts, fit.
//!
//! Each sheet forecasts its own counts, which are then fitted from displaced values: a closure
//! test of the road from the text of a parameter to the core and back. That the amplitudes
//! themselves are right is checked in the core against explicit spinors and mpmath.

use serde_json::{Value, json};
use widthwise_core::error::Refusal;
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::requests::{Body, FittedParameter, PointReading, Request, answer};
use widthwise_sheet::{check, json as file};

fn sheet(first: &str, second: &str, model: &Value, w: &[f64]) -> Sheet {
    let rows: Vec<Value> = w
        .iter()
        .enumerate()
        .map(|(i, w)| json!({ "id": format!("P{i}"), "w": format!("{w} GeV"), "luminosity": "1 nb^-1" }))
        .collect();
    let sheet = json!({
        "format": "widthwise scan sheet",
        "version": 1,
        "title": "invented closure test",
        "invented": true,
        "beam": {
            "arrangement": "equal_beams",
            "first": { "name": first },
            "second": { "name": second },
            "dial": "w",
            "spread": { "kind": "relative", "first": "3e-4", "known_to": "1e-6" },
            "calibration": {}
        },
        "model": model,
        "detection": {},
        "data": { "rows": rows }
    });
    let opened = file::open(&sheet.to_string()).unwrap();
    // What is written is what was read.
    assert_eq!(file::open(&file::write(&opened)).unwrap(), opened);
    opened
}

fn points(sheet: &Sheet) -> Vec<PointReading> {
    let request = Request::Points {
        sheet: sheet.clone(),
    };
    match answer(&request, &mut |_, _| ()).unwrap().body {
        Body::Points { points, .. } => points,
        other => panic!("{other:?}"),
    }
}

/// About this many counts at the highest point.
const COUNTS: f64 = 4000.0;

/// Replaces the luminosities so that the highest point has [`COUNTS`], and takes the forecast
/// as what was counted.
fn with_own_counts(mut sheet: Sheet) -> Sheet {
    let largest = points(&sheet)
        .iter()
        .filter_map(|p| p.expected)
        .fold(0.0, f64::max);
    assert!(largest > 0.0);
    for row in &mut sheet.data.rows {
        row.luminosity = Some(format!("{:.6e} nb^-1", COUNTS / largest));
    }
    for (row, point) in sheet.data.rows.clone().iter().zip(points(&sheet)) {
        let n = point.expected.unwrap().round();
        let here = sheet.data.rows.iter_mut().find(|r| r.id == row.id).unwrap();
        here.counts = Some(format!("{n}"));
    }
    sheet
}

fn fit(sheet: &Sheet) -> (Vec<FittedParameter>, f64) {
    let request = Request::Fit {
        sheet: sheet.clone(),
    };
    match answer(&request, &mut |_, _| ()).unwrap().body {
        Body::Fit {
            parameters,
            statistic,
            converged,
            stopped,
            ..
        } => {
            assert!(converged, "{stopped}");
            (parameters, statistic)
        }
        other => panic!("{other:?}"),
    }
}

/// Curve, counts and fit: `free` are (id, path in the model as a JSON pointer, displaced text).
fn closes(what: &str, beams: (&str, &str), model: &Value, w: &[f64], free: &[(&str, &str, &str)]) {
    let truth = with_own_counts(sheet(beams.0, beams.1, model, w));
    assert_eq!(check::understand(&truth).problems, Vec::new(), "{what}");
    let curve = Request::Curve {
        sheet: truth.clone(),
        from_gev: w[0],
        to_gev: w[w.len() - 1],
        points: 50,
    };
    let reply = answer(&curve, &mut |_, _| ()).unwrap();
    for column in &reply.columns {
        assert!(
            column.values.iter().all(|v| v.is_finite()),
            "{what}: {}",
            column.name
        );
    }
    // Contributions are those of the observed curve, to the chain's accuracy of 1e-6.
    let column = |name: &str| {
        &reply
            .columns
            .iter()
            .find(|c| c.name == name)
            .unwrap()
            .values
    };
    for (i, total) in column("observed").iter().enumerate() {
        let sum: f64 = reply.columns[4..].iter().map(|c| c.values[i]).sum();
        assert!(
            (sum - total).abs() <= 1e-5 * total.abs(),
            "{what}: contributions {sum} of {total}"
        );
    }
    let mut moved = model.clone();
    for (_, path, text) in free {
        *moved.pointer_mut(path).unwrap() = json!(text);
    }
    let mut start = sheet(beams.0, beams.1, &moved, w);
    start.data = truth.data.clone();
    start.fit.free = free.iter().map(|(id, ..)| (*id).to_string()).collect();
    let (parameters, statistic) = fit(&start);
    assert!(statistic < 0.05, "{what}: 2 NLL {statistic}");
    for ((id, path, _), fitted) in free.iter().zip(&parameters) {
        assert_eq!(&fitted.id, id, "{what}");
        let pointer = format!("model{}", path.replace('/', "."));
        let plain: String = fitted.field.replace('[', ".").replace(']', "");
        assert_eq!(plain, pointer, "{what}");
        // The text of the truth, in the unit of the fitted value.
        let text = model.pointer(path).and_then(Value::as_str).unwrap();
        let number: f64 = text.split_whitespace().next().unwrap().parse().unwrap();
        let error = fitted.error.unwrap();
        assert!(
            (fitted.value.abs() - number.abs()).abs() < 0.2 * error && error > 0.0,
            "{what}: {id} {} +- {error}, truth {number}",
            fitted.value
        );
    }
}

fn resonance(form: &str, more: &Value) -> Value {
    let mut r = json!({
        "name": "R", "mass": "0.9 GeV", "width": "0.05 GeV", "form": form,
        "strength": { "kind": "gamma_in_bf", "value": "1 keV" }
    });
    for (key, value) in more.as_object().unwrap() {
        r[key] = value.clone();
    }
    r
}

fn wave(j: &str, resonance: &Value) -> Value {
    json!({ "j": j, "resonances": [resonance], "radiation": { "on": false } })
}

fn around(mass: f64, width: f64) -> Vec<f64> {
    [-2.0, -1.2, -0.7, -0.35, -0.1, 0.1, 0.35, 0.7, 1.2, 2.0]
        .iter()
        .map(|x| mass + x * width)
        .collect()
}

const LEPTONS: (&str, &str) = ("e-", "e+");

#[test]
fn flatte() {
    let model = wave(
        "0",
        &resonance(
            "flatte",
            &json!({
                "mass": "0.97 GeV", "width": "",
                "flatte": [
                    { "name": "pi pi", "g_squared": "0.165 GeV^2", "m1": "139.57 MeV", "m2": "139.57 MeV" },
                    { "name": "K K", "g_squared": "0.69 GeV^2", "m1": "493.677 MeV", "m2": "493.677 MeV" }
                ],
                "entrance": { "kind": "one_photon" },
                "exit": { "kind": "own", "channel": 1 },
                "strength": { "kind": "one_width", "value": "2 keV" }
            }),
        ),
    );
    let w: Vec<f64> = (0..16).map(|i| 0.8 + 0.02 * f64::from(i)).collect();
    closes(
        "Flatte",
        LEPTONS,
        &model,
        &w,
        &[
            ("r1.mass", "/resonances/0/mass", "0.965 GeV"),
            ("r1.g1", "/resonances/0/flatte/0/g_squared", "0.18 GeV^2"),
            ("r1.g2", "/resonances/0/flatte/1/g_squared", "0.60 GeV^2"),
            ("r1.strength", "/resonances/0/strength/value", "2.2 keV"),
        ],
    );
}

#[test]
fn gounaris_sakurai_and_table() {
    let model = wave(
        "1",
        &resonance(
            "gounaris_sakurai",
            &json!({ "mass": "0.7753 GeV", "width": "0.1491 GeV", "daughter": "139.57 MeV" }),
        ),
    );
    let free = [
        ("r1.mass", "/resonances/0/mass", "0.77 GeV"),
        ("r1.width", "/resonances/0/width", "0.16 GeV"),
        ("r1.strength", "/resonances/0/strength/value", "1.1 keV"),
    ];
    closes(
        "Gounaris-Sakurai",
        LEPTONS,
        &model,
        &around(0.7753, 0.1491),
        &free,
    );
    let rows: Vec<Value> = (0..8)
        .map(|i| {
            json!([
                format!("{:.2} GeV", 0.4 + 0.1 * f64::from(i)),
                format!("{}", i * i + 1)
            ])
        })
        .collect();
    let table = wave(
        "1",
        &resonance(
            "running_width",
            &json!({
                "mass": "0.7753 GeV", "width": "0.1491 GeV",
                "channels": [{ "name": "3 pi", "fraction": "1", "shape": { "kind": "tabulated", "rows": rows } }],
                "entrance": { "kind": "one_photon" }, "exit": { "kind": "constant" }
            }),
        ),
    );
    closes(
        "tabulated width",
        LEPTONS,
        &table,
        &around(0.7753, 0.1),
        &free,
    );
}

#[test]
fn dressed_by_fermions_and_scalars() {
    for pseudoscalar in [false, true] {
        let model = wave(
            "0",
            &resonance(
                "dressed",
                &json!({
                    "mass": "0.9 GeV", "width": "", "pseudoscalar": pseudoscalar,
                    "loops": [
                        { "kind": "fermion", "name": "mu", "g": "0.9", "mass": "105.658 MeV" },
                        { "kind": "scalar", "name": "pi pi", "h": "1.1 GeV", "m1": "139.57 MeV", "m2": "139.57 MeV", "identical": true }
                    ],
                    "entrance": { "kind": "own", "channel": 1 },
                    "exit": { "kind": "own", "channel": 2 },
                    "strength": { "kind": "from_form" }
                }),
            ),
        );
        closes(
            "dressed",
            ("mu-", "mu+"),
            &model,
            &around(0.9, 0.05),
            &[
                ("r1.mass", "/resonances/0/mass", "0.905 GeV"),
                ("r1.g1", "/resonances/0/loops/0/g", "0.85"),
                ("r1.g2", "/resonances/0/loops/1/h", "1.2 GeV"),
            ],
        );
    }
}

#[test]
fn k_matrix() {
    let model = json!({
        "hypothesis": "k_matrix", "j": "0", "radiation": { "on": false },
        "k_matrix": {
            "poles": [{ "mass": "1.0 GeV", "g1": "0.25 GeV", "g2": "0.3 GeV" }, { "mass": "1.3 GeV", "g1": "0.3 GeV", "g2": "0.1 GeV" }],
            "channels": [
                { "name": "mu mu", "m1": "105.658 MeV", "m2": "105.658 MeV" },
                { "name": "K K", "m1": "493.677 MeV", "m2": "493.677 MeV" }
            ],
            "c11": "0.2", "chew_mandelstam": true, "entrance": 1, "exit": 1
        }
    });
    let w: Vec<f64> = (0..24).map(|i| 0.8 + 0.03 * f64::from(i)).collect();
    closes(
        "K-matrix",
        ("mu-", "mu+"),
        &model,
        &w,
        &[
            ("k1.mass", "/k_matrix/poles/0/mass", "1.005 GeV"),
            ("k1.g1", "/k_matrix/poles/0/g1", "0.26 GeV"),
            ("k2.g1", "/k_matrix/poles/1/g1", "0.29 GeV"),
            ("k.c11", "/k_matrix/c11", "0.15"),
        ],
    );
}

fn diagrams(reaction: &str, mediators: &Value, more: &Value) -> Value {
    let mut model = json!({
        "hypothesis": "diagrams", "radiation": { "on": false },
        "diagrams": { "reaction": reaction, "mediators": mediators }
    });
    for (key, value) in more.as_object().unwrap() {
        if key == "cos_cut" {
            model[key] = value.clone();
        } else {
            model["diagrams"][key] = value.clone();
        }
    }
    model
}

#[test]
fn six_reactions() {
    let constant = json!([{ "name": "phi", "mass": "0.9 GeV", "g": "0.3", "g_other": "0.4", "form": "constant_width", "width": "0.05 GeV" }]);
    let dressed = json!([
        { "name": "phi", "mass": "0.9 GeV", "g": "0.9", "g_other": "0.7", "form": "dressed" },
        { "name": "a", "pseudoscalar": true, "mass": "1.2 GeV", "g": "0.5", "g_other": "0.6", "form": "constant_width", "width": "0.08 GeV" }
    ]);
    let scalar = json!([{ "name": "phi", "mass": "0.15 GeV", "g": "0.8", "form": "dressed" }]);
    let mass = ("d1.mass", "/diagrams/mediators/0/mass", "0.904 GeV");
    let g = |text| ("d1.g", "/diagrams/mediators/0/g", text);
    let width = ("d1.width", "/diagrams/mediators/0/width", "0.055 GeV");
    let mu = ("mu-", "mu+");
    closes(
        "f fbar -> F Fbar",
        mu,
        &diagrams(
            "pair_to_other_pair",
            &constant,
            &json!({ "other_mass": "0.2 GeV" }),
        ),
        &around(0.9, 0.05),
        &[
            mass,
            width,
            ("d1.g_other", "/diagrams/mediators/0/g_other", "0.45"),
        ],
    );
    closes(
        "f fbar -> F Fbar, two mediators, the first dressed by its own couplings",
        mu,
        &diagrams(
            "pair_to_other_pair",
            &dressed,
            &json!({ "other_mass": "0.2 GeV" }),
        ),
        &(0..20)
            .map(|i| 0.7 + 0.035 * f64::from(i))
            .collect::<Vec<_>>(),
        &[
            mass,
            g("0.8"),
            ("d1.g_other", "/diagrams/mediators/0/g_other", "0.75"),
        ],
    );
    closes(
        "f fbar -> f fbar inside a cut",
        mu,
        &diagrams("pair_elastic", &constant, &json!({ "cos_cut": "0.8" })),
        &around(0.9, 0.05),
        &[mass, width, g("0.33")],
    );
    let wide: Vec<f64> = (0..10).map(|i| 0.5 + 0.1 * f64::from(i)).collect();
    closes(
        "f F -> f F",
        ("mu-", "tau-"),
        &diagrams(
            "other_elastic",
            &constant,
            &json!({ "other_mass": "1776.93 MeV", "cos_cut": "0.9" }),
        ),
        &wide.iter().map(|w| w + 3.2).collect::<Vec<_>>(),
        &[g("0.35")],
    );
    closes(
        "f f -> f f",
        ("mu-", "mu-"),
        &diagrams("same_elastic", &constant, &json!({ "cos_cut": "0.9" })),
        &wide,
        &[g("0.35")],
    );
    closes(
        "f fbar -> phi phi",
        mu,
        &diagrams("pair_to_scalars", &scalar, &json!({})),
        &wide,
        &[
            g("0.7"),
            ("d1.mass", "/diagrams/mediators/0/mass", "0.148 GeV"),
        ],
    );
    let mut compton = sheet(
        "mu-",
        "phi",
        &diagrams("compton", &scalar, &json!({})),
        &wide,
    );
    compton.beam.second.mass = Some("0.15 GeV".into());
    compton.beam.second.spin = Some("0".into());
    let compton = with_own_counts(compton);
    let mut start = compton.clone();
    start.model.diagrams.as_mut().unwrap().mediators[0].g = "0.7".into();
    start.fit.free = vec!["d1.g".into()];
    let (parameters, statistic) = fit(&start);
    assert!(
        statistic < 0.05 && (parameters[0].value - 0.8).abs() < 0.2 * parameters[0].error.unwrap()
    );
}

#[test]
fn several_waves_with_a_cut() {
    let lepton_pair = json!({ "kind": "helicity", "amplitudes": [
        { "l1": "1/2", "l2": "-1/2", "magnitude": "1" }, { "l1": "-1/2", "l2": "1/2", "magnitude": "1" }] });
    let scalars =
        json!({ "kind": "helicity", "amplitudes": [{ "l1": "0", "l2": "0", "magnitude": "1" }] });
    let ls = json!({ "kind": "ls", "s1": "1/2", "s2": "1/2", "terms": [{ "l": 0, "s": "1", "magnitude": "1" }, { "l": 2, "s": "1", "magnitude": "0.2", "phase": "30 deg" }] });
    let r = |name: &str, mass: &str, wave: u8| {
        resonance(
            "constant_width",
            &json!({ "name": name, "mass": mass, "width": "0.06 GeV", "wave": wave }),
        )
    };
    let model = json!({
        "hypothesis": "waves", "radiation": { "on": false }, "cos_cut": "0.7",
        "waves": [
            { "j": "1", "pc": "--", "entrance": ls, "exit": scalars },
            { "j": "2", "phase": "40 deg", "entrance": lepton_pair, "exit": scalars }
        ],
        "resonances": [r("V", "1.0 GeV", 1), r("V'", "1.25 GeV", 1), r("T", "1.1 GeV", 2)]
    });
    let mut model = model;
    model["resonances"][1]["phase"] = json!("20 deg");
    let w: Vec<f64> = (0..24).map(|i| 0.85 + 0.025 * f64::from(i)).collect();
    closes(
        "waves",
        LEPTONS,
        &model,
        &w,
        &[
            ("r1.mass", "/resonances/0/mass", "1.003 GeV"),
            ("r3.mass", "/resonances/2/mass", "1.104 GeV"),
            ("r3.strength", "/resonances/2/strength/value", "1.1 keV"),
        ],
    );
}

fn refused(first: &str, second: &str, model: &Value) -> Vec<Refusal> {
    check::understand(&sheet(first, second, model, &[1.0])).problems
}

#[test]
fn what_cannot_be_says_so_in_a_sentence() {
    let only = |model: &Value| {
        let mut all = refused("mu-", "mu+", model);
        assert_eq!(all.len(), 1, "{all:?}");
        let one = all.remove(0);
        assert!(one.message.len() > 20, "{one:?}");
        (one.field, one.message)
    };
    // A kind that is not declared.
    for kind in ["k_matrix", "diagrams", "waves"] {
        let (field, _) = only(
            &json!({ "hypothesis": kind, "j": "0", "resonances": [resonance("constant_width", &json!({}))], "radiation": { "on": false } }),
        );
        assert_eq!(field, format!("model.{kind}"));
    }
    // A free propagator that the scan meets on shell; dressing makes it finite.
    let (field, message) = only(&wave(
        "0",
        &resonance(
            "free",
            &json!({ "width": "", "strength": { "kind": "from_form" }, "entrance": { "kind": "constant" }, "exit": { "kind": "constant" } }),
        ),
    ));
    assert!(
        field.ends_with("form") && message.contains("dressed"),
        "{field}: {message}"
    );
    let phi = |more: &Value| {
        let mut m = json!({ "name": "phi", "mass": "0.9 GeV", "g": "0.5", "g_other": "0.5", "form": "dressed" });
        for (key, value) in more.as_object().unwrap() {
            m[key] = value.clone();
        }
        diagrams(
            "pair_to_other_pair",
            &json!([m]),
            &json!({ "other_mass": "0.2 GeV" }),
        )
    };
    let (field, message) = only(&phi(&json!({ "form": "free" })));
    assert!(field.ends_with("propagator") && message.contains("on shell"));
    // M exactly at an s-wave threshold.
    let (_, message) = only(&phi(&json!({ "pseudoscalar": true, "mass": "0.4 GeV" })));
    assert!(message.contains("exactly at the threshold"), "{message}");
    // Forbidden J^PC.
    let of = |pc: &str, l: u8, s: &str| {
        json!({ "hypothesis": "waves", "radiation": { "on": false },
            "waves": [{ "j": "1", "pc": pc,
                "entrance": { "kind": "ls", "s1": "1/2", "s2": "1/2", "terms": [{ "l": l, "s": s, "magnitude": "1" }] },
                "exit": { "kind": "helicity", "amplitudes": [{ "l1": "0", "l2": "0", "magnitude": "1" }] } }],
            "resonances": [resonance("constant_width", &json!({}))] })
    };
    let (field, message) = only(&of("-+", 1, "1"));
    assert_eq!(field, "model.waves[0].pc");
    assert!(
        message.contains("cannot form 1") && message.contains("S = 1"),
        "{message}"
    );
    let (field, _) = only(&of("--", 1, "0"));
    assert_eq!(field, "model.waves[0].entrance.terms[0]");
    // Coincident bare poles.
    let (field, message) = only(
        &json!({ "hypothesis": "k_matrix", "j": "0", "radiation": { "on": false }, "k_matrix": {
        "poles": [{ "mass": "1 GeV", "g1": "0.2 GeV", "g2": "0.1 GeV" }, { "mass": "1 GeV", "g1": "0.1 GeV", "g2": "0.1 GeV" }],
        "channels": [{ "name": "a", "m1": "0.1 GeV", "m2": "0.1 GeV" }, { "name": "b", "m1": "0.3 GeV", "m2": "0.3 GeV" }],
        "chew_mandelstam": false, "entrance": 1, "exit": 2 } }),
    );
    assert_eq!(field, "model.k_matrix.poles[1].mass");
    assert!(message.contains("coincide"));
    // Radiation with exchange diagrams and no cut.
    let mut exchange = diagrams(
        "pair_elastic",
        &json!([{ "name": "phi", "mass": "0.9 GeV", "g": "0.5", "form": "dressed" }]),
        &json!({}),
    );
    exchange["radiation"] = json!({ "on": true, "w_min": "0.3 GeV" });
    let (field, message) = only(&exchange);
    assert_eq!(field, "model.cos_cut");
    assert!(message.contains("s-channel"));
    exchange["cos_cut"] = json!("0.8");
    assert_eq!(refused("mu-", "mu+", &exchange), Vec::new());
    // Beams that are not those of the reaction.
    let (field, _) = only(&diagrams(
        "other_elastic",
        &json!([{ "name": "phi", "mass": "0.9 GeV", "g": "0.5", "g_other": "0.5", "form": "dressed" }]),
        &json!({ "other_mass": "1 GeV" }),
    ));
    assert_eq!(field, "beam");
    // Resonances out of the order of their waves.
    let mut order = of("--", 0, "1");
    order["waves"] = json!([order["waves"][0], order["waves"][0]]);
    order["resonances"] = json!([
        resonance("constant_width", &json!({ "wave": 2 })),
        resonance("constant_width", &json!({ "wave": 1 }))
    ]);
    let (field, _) = only(&order);
    assert_eq!(field, "model.resonances[1].wave");
}

#[test]
fn stable_mediators_and_ghosts_are_told() {
    let told = |mass: &str, g: &str| {
        let model = diagrams(
            "pair_elastic",
            &json!([{ "name": "phi", "mass": mass, "g": g, "form": "dressed" }]),
            &json!({}),
        );
        let understood = check::understand(&sheet("mu-", "mu+", &model, &[1.0]));
        assert_eq!(understood.problems, Vec::new());
        let codes: Vec<String> = understood.warnings.iter().map(|w| w.code.clone()).collect();
        codes
    };
    assert!(told("0.15 GeV", "0.3").contains(&"stable-mediator".to_string()));
    assert!(told("0.9 GeV", "8").contains(&"space-like-ghost".to_string()));
    assert!(
        !told("0.9 GeV", "0.3")
            .iter()
            .any(|c| c.contains("ghost") || c.contains("stable"))
    );
}
