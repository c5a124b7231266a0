//! Requests of every kind.

use crate::choices::Choices;
use crate::sheets::{self, Mood};
use serde_json::{Value, json};
use widthwise_sheet::requests::{Request, energy_range};
use widthwise_sheet::{doc::Sheet, json as file};

/// Kinds of requests, as they are named in JSON; a test compares the list with the page's types.
pub const KINDS: [&str; 35] = [
    "tables",
    "open",
    "check",
    "curve",
    "cursor",
    "convert",
    "points",
    "fit",
    "plan",
    "read_table",
    "write_table",
    "intervals",
    "profile",
    "contour",
    "solutions",
    "influence",
    "trials",
    "summary",
    "window",
    "look_up",
    "compare",
    "goodness",
    "against_time",
    "limit",
    "looks",
    "comb",
    "plan_trials",
    "plan_summary",
    "design",
    "amplitude",
    "plane",
    "image",
    "slice",
    "partial_waves",
    "reword",
];

/// What a mass and a width may mean.
const CONVENTIONS: [&str; 4] = [
    "constant_width",
    "massless_channels",
    "pole_in_w",
    "pole_in_s",
];

/// A request as JSON; small enough to be answered in a moment.
pub fn request(kind: &str, mood: Mood, c: &mut Choices) -> Value {
    // What fits again and again is asked of problems that people have: extreme ones take minutes.
    let fits = matches!(
        kind,
        "intervals"
            | "compare"
            | "comb"
            | "plan_trials"
            | "plan_summary"
            | "goodness"
            | "against_time"
            | "limit"
            | "profile"
            | "contour"
            | "solutions"
            | "influence"
            | "trials"
            | "window"
            | "fit"
            | "plan"
    );
    let mut sheet = sheets::sheet(
        if fits && mood == Mood::Calm {
            Mood::Still
        } else {
            mood
        },
        c,
    );
    // Many fits of many parameters would make the golden set a matter of minutes.
    if fits && mood == Mood::Calm {
        shorten(&mut sheet, "/fit/free", if kind == "fit" { 3 } else { 2 });
        shorten(&mut sheet, "/data/rows", 6);
        sheet["model"]["accuracy"] = json!("1e-4");
    }
    let (low, high) = range(&sheet);
    let energy = |c: &mut Choices| {
        if mood == Mood::Wild && c.rarely(8) {
            c.any_double()
        } else {
            low + (high - low) * (1.4 * c.fraction() - 0.2)
        }
    };
    let free: Vec<&str> = sheet
        .pointer("/fit/free")
        .and_then(Value::as_array)
        .into_iter()
        .flatten()
        .filter_map(Value::as_str)
        .collect();
    let id = |c: &mut Choices| {
        if free.is_empty() {
            "r1.mass".to_owned()
        } else {
            (*c.one(&free)).to_owned()
        }
    };
    match kind {
        "tables" => json!({ "kind": kind }),
        "open" => json!({ "kind": kind, "text": sheet.to_string() }),
        "curve" => {
            let (a, b) = (energy(c), energy(c));
            let (from, to) = if mood == Mood::Calm {
                (a.min(b), a.max(b))
            } else {
                (a, b)
            };
            let points = c.below(40) + if mood == Mood::Calm { 2 } else { 0 };
            json!({ "kind": kind, "sheet": sheet, "from_gev": finite(from), "to_gev": finite(to), "points": points })
        }
        "cursor" => json!({ "kind": kind, "sheet": sheet, "w_gev": finite(energy(c)) }),
        "convert" => {
            let from = *c.one(&["w", "total_energy", "kinetic_energy", "momentum"]);
            let unit = *c.one(&["GeV", "MeV", "GeV/c", "eV", ""]);
            let value = format!("{:e} {unit}", energy(c));
            json!({ "kind": kind, "sheet": sheet, "from": from, "value": value })
        }
        "amplitude" => {
            let grid = grid((low, high), c);
            json!({ "kind": kind, "sheet": sheet, "of": c.below(2), "grid": grid })
        }
        "plane" => {
            let (re, im) = (grid((low, high), c), grid((low - high, high - low), c));
            json!({ "kind": kind, "sheet": sheet, "of": c.below(2), "signs": [], "re": re, "im": im })
        }
        "image" => {
            let (w, cos) = (grid((low, high), c), grid((-1.0, 1.0), c));
            json!({ "kind": kind, "sheet": sheet, "w": w, "cos": cos, "cross_section": c.rarely(2) })
        }
        "slice" => {
            let along = *c.one(&["w", "cos"]);
            let span = if along == "w" {
                (low, high)
            } else {
                (-1.0, 1.0)
            };
            let at = if along == "w" { 0.5 } else { energy(c) };
            json!({ "kind": kind, "sheet": sheet, "along": along, "at": finite(at), "grid": grid(span, c) })
        }
        "partial_waves" => {
            json!({ "kind": kind, "sheet": sheet, "w_gev": finite(energy(c)), "grid": grid((low, high), c) })
        }
        "reword" => {
            let convention = *c.one(&CONVENTIONS);
            json!({ "kind": kind, "convention": convention, "mass": "91.1876 GeV", "width": "2.4952 GeV" })
        }
        "comb" => {
            json!({ "kind": kind, "sheet": sheet, "trials": c.below(3), "seed": c.below(99) })
        }
        "plan_trials" => {
            let row = |k: usize, c: &mut Choices| json!({ "fill": k, "start_h": k, "w_gev": finite(energy(c)), "live_h": 1.0, "settle_h": 0.1, "expected_counts": 50.0, "why": "" });
            let rows: Vec<Value> = (0..=c.below(2)).map(|k| row(k, c)).collect();
            // Planning again after each point is a plan a point: left to the tests of the plan.
            let steering = *c.one(&["timetable", "uniform"]);
            json!({ "kind": kind, "sheet": sheet, "rows": rows, "steering": steering, "range": { "seed": 1, "first": c.below(9), "count": c.below(3) } })
        }
        "plan_summary" => json!({ "kind": kind, "sheet": sheet, "rows": [] }),
        "design" => json!({ "kind": kind, "design": design(c) }),
        "compare" => {
            json!({ "kind": kind, "null": sheet.clone(), "alternative": sheet, "trials": c.below(3), "seed": 1 })
        }
        "goodness" => {
            json!({ "kind": kind, "sheet": sheet, "trials": c.below(4), "seed": c.below(99) })
        }
        "limit" => {
            json!({ "kind": kind, "parameter": id(c), "sheet": sheet, "places": 4 + c.below(3) })
        }
        "looks" => {
            json!({ "kind": kind, "rate_per_look": 20.0 * c.fraction(), "looks": 1 + c.below(12), "p": 0.1 * c.fraction() })
        }
        "look_up" => json!({ "kind": kind, "what": look_up(mood, c), "sheet": sheet }),
        "plan" => json!({ "kind": kind, "sheet": sheet, "costs": c.rarely(4) }),
        "read_table" => {
            let text = table(&sheet, mood, c);
            json!({ "kind": kind, "sheet": sheet, "text": text, "answers": [["E", "w"]] })
        }
        "write_table" => {
            json!({ "kind": kind, "sheet": sheet, "table": *c.one(&["rows", "curve", "fit", "log"]) })
        }
        "profile" => {
            json!({ "kind": kind, "parameter": id(c), "sheet": sheet, "places": places(mood, c) })
        }
        "contour" => {
            let (first, second) = (id(c), id(c));
            json!({ "kind": kind, "sheet": sheet, "first": first, "second": second, "places": places(mood, c) })
        }
        "trials" => {
            let range = json!({ "seed": c.below(1 << 20), "first": c.below(1 << 20), "count": c.below(4), "profiles": c.rarely(4) });
            json!({ "kind": kind, "sheet": sheet, "range": range })
        }
        "summary" => {
            let count = free.len() + usize::from(mood == Mood::Wild && c.rarely(4));
            let rows: Vec<Value> = (0..c.below(5)).map(|k| trial(k, count, c)).collect();
            json!({ "kind": kind, "sheet": sheet, "rows": rows })
        }
        "window" => {
            let (a, b) = (energy(c), energy(c));
            let window = json!({ "from_gev": finite(a.min(b)), "to_gev": finite(a.max(b)), "masses": c.below(6) + 2, "trials": c.below(12), "seed": c.below(99) });
            json!({ "kind": kind, "sheet": sheet, "window": window })
        }
        _ => json!({ "kind": kind, "sheet": sheet }),
    }
}

/// One of the look-ups with what people type into it.
fn look_up(mood: Mood, c: &mut Choices) -> Value {
    let typed = |texts: &[&str], c: &mut Choices| {
        if mood == Mood::Wild && c.rarely(3) {
            crate::numbers::strange(c)
        } else {
            (*c.one(texts)).to_owned()
        }
    };
    let masses = ["e-", "p", "mu-", "139.57 MeV", "0", "3.1 GeV"];
    let heavy = ["3.686 GeV", "91.19 GeV", "125 GeV"];
    let sizes = ["0.26 MeV", "1", "0.02"];
    match c.below(4) {
        0 => {
            json!({ "of": "pair", "first": typed(&masses, c), "second": typed(&masses, c), "w": typed(&heavy, c) })
        }
        1 => json!({
            "of": "coupling",
            "pseudoscalar": c.rarely(2),
            "mass": typed(&heavy, c),
            "fermion": typed(&masses, c),
            "colours": 1 + c.below(3),
            "given": *c.one(&["coupling", "width", "lifetime"]),
            "value": typed(&sizes, c),
        }),
        2 => {
            json!({ "of": "peak", "mass": typed(&heavy, c), "spin": *c.one(&["0", "1/2", "1"]), "product": typed(&sizes, c) })
        }
        _ => json!({
            "of": "rate",
            "cross_section": typed(&["12 nb", "3 pb"], c),
            "luminosity": typed(&["1e31 cm^-2 s^-1", "2 nb^-1/h"], c),
            "efficiency": typed(&["", "0.3", "42 %"], c),
            "background": typed(&["", "2 /h"], c),
            "events": typed(&["100", "1e4"], c),
        }),
    }
}

/// A row of trials, as a page may have kept it.
fn trial(k: usize, parameters: usize, c: &mut Choices) -> Value {
    let values: Vec<f64> = (0..parameters).map(|_| 4.0 * c.fraction()).collect();
    let errors: Vec<Option<f64>> = (0..parameters)
        .map(|_| (!c.rarely(5)).then(|| c.fraction()))
        .collect();
    json!({ "k": k, "converged": !c.rarely(5), "statistic": 20.0 * c.fraction(), "values": values, "errors": errors, "rise_at_truth": [] })
}

/// A few places over a span.
fn grid((from, to): (f64, f64), c: &mut Choices) -> Value {
    json!({ "from": finite(from), "to": finite(to), "places": 2 + c.below(8) })
}

/// A convex problem: energies, parameters, what is known before.
fn design(c: &mut Choices) -> Value {
    let (energies, parameters) = (2 + c.below(6), 1 + c.below(3));
    let mut list = |count: usize| -> Vec<f64> { (0..count).map(|_| 0.1 + c.fraction()).collect() };
    let gradients: Vec<Vec<f64>> = (0..energies).map(|_| list(parameters)).collect();
    let prior: Vec<Vec<f64>> = (0..parameters)
        .map(|i| {
            (0..parameters)
                .map(|j| f64::from(u8::from(i == j)))
                .collect()
        })
        .collect();
    json!({
        "rate_per_h": list(energies),
        "gradient_per_h": gradients,
        "prior": prior,
        "hours": 10.0,
        "combination": list(parameters),
        "moved_by": [],
        "wanted": 0.99,
    })
}

fn shorten(sheet: &mut Value, list: &str, most: usize) {
    if let Some(list) = sheet.pointer_mut(list).and_then(Value::as_array_mut) {
        list.truncate(most);
    }
}

/// JSON has no infinity: a number that is none becomes one that no limit allows.
fn finite(value: f64) -> f64 {
    if value.is_finite() { value } else { -1e300 }
}

fn places(mood: Mood, c: &mut Choices) -> usize {
    if mood == Mood::Calm {
        8 + c.below(5)
    } else {
        c.below(16)
    }
}

/// The range of W of a sheet that can be computed with.
fn range(sheet: &Value) -> (f64, f64) {
    let open = |sheet: &Value| -> Option<(f64, f64)> {
        let sheet: Sheet = file::open(&sheet.to_string()).ok()?;
        energy_range(&sheet).ok()
    };
    open(sheet).unwrap_or((2.8, 3.3))
}

/// Separators, heads and cells of a pasted table.
const SEPARATORS: [&str; 4] = [",", ";", "\t", "  "];
const HEADS: [&str; 16] = [
    "id",
    "W [GeV]",
    "E (MeV)",
    "E",
    "setting",
    "n",
    "counts",
    "L [nb-1]",
    "luminosity (pb^-1)",
    "eff [%]",
    "sigma [nb]",
    "err [nb]",
    "live time [h]",
    "start",
    "comment",
    "fill",
];

/// A table: the sheet's rows as we write them, perhaps damaged, or made of heads and cells.
pub fn table(sheet: &Value, mood: Mood, c: &mut Choices) -> String {
    if c.rarely(2) {
        let request = json!({ "kind": "write_table", "sheet": sheet, "table": "rows" });
        let text = Request::read(request)
            .ok()
            .and_then(|request| widthwise_sheet::requests::answer(&request, &mut |_, _| ()).ok())
            .and_then(|reply| match reply.body {
                widthwise_sheet::requests::Body::Text { text } => Some(text),
                _ => None,
            })
            .unwrap_or_default();
        if mood == Mood::Calm || !c.rarely(2) {
            return text;
        }
        // Cut at a character.
        let cut = c.below(text.len() + 1);
        return text.chars().take(cut).collect();
    }
    let separator = *c.one(&SEPARATORS);
    let columns = c.below(6) + 1;
    let line = |cells: Vec<String>| cells.join(separator) + "\n";
    let mut text = line((0..columns).map(|_| (*c.one(&HEADS)).to_owned()).collect());
    for _ in 0..c.below(8) {
        let cells = (0..columns).map(|_| cell(mood, c)).collect();
        text.push_str(&line(cells));
    }
    text
}

fn cell(mood: Mood, c: &mut Choices) -> String {
    match c.below(5) {
        0 => c.below(1000).to_string(),
        1 => format!("{:.4}", 2.8 + 0.1 * c.fraction()),
        2 => format!("{:.3} MeV", 2800.0 + 100.0 * c.fraction()),
        3 if mood == Mood::Wild => crate::numbers::strange(c),
        3 => "19.6(4)".to_owned(),
        _ => format!("\"{}\"", c.text(6).replace('"', "\"\"")),
    }
}
