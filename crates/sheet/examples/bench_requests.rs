//! Times requests natively, the very ones that the page's worker is timed with, and how the time grows
//! with the size of the problem.
//! Usage: bench_requests REQUESTS.json; prints "name TAB milliseconds", and for the growth "growth TAB what TAB exponent".

use serde_json::{Value, json};
use std::time::{Duration, Instant};
use widthwise_core::math;
use widthwise_sheet::requests::{Request, answer};

type Outcome<T> = Result<T, Box<dyn std::error::Error>>;

fn main() -> Outcome<()> {
    let path = std::env::args()
        .nth(1)
        .ok_or("usage: bench_requests REQUESTS.json")?;
    let file: Value = serde_json::from_str(&std::fs::read_to_string(path)?)?;
    for one in file["requests"].as_array().into_iter().flatten() {
        let name = one["name"].as_str().ok_or("a request without a name")?;
        let problems = one["times"].as_f64().unwrap_or(1.0);
        println!(
            "{name}\t{}",
            milliseconds(&filled(&file, one)?, 3.0)? / problems
        );
    }
    let request = |patch: Value, request: Value| -> Outcome<Value> {
        filled(&file, &json!({ "patch": patch, "request": request }))
    };
    let curve = |points: u32| {
        let asked =
            json!({ "kind": "curve", "from_gev": 3.678, "to_gev": 3.698, "points": points });
        request(json!({}), asked)
    };
    grows("curve with energies", &[250, 500, 1000, 2000, 4000], curve)?;
    let rows = |count: u32| {
        let row = |i: u32| {
            let w = 3680.0 + 14.0 * f64::from(i) / f64::from(count);
            json!({ "id": format!("P{i}"), "w": format!("{w} MeV"), "luminosity": "6 nb^-1", "counts": "1000" })
        };
        let rows: Vec<Value> = (0..count).map(row).collect();
        request(
            json!({ "data": { "rows": rows } }),
            json!({ "kind": "points" }),
        )
    };
    grows("points with rows", &[12, 24, 48, 96, 192], rows)?;
    let fit = |count: u32| {
        let free = [
            "r1.mass",
            "r1.width",
            "r1.strength",
            "background.cross_section",
            "spread",
        ];
        let free = free.get(..count as usize).unwrap_or(&free);
        request(
            json!({ "fit": { "free": free }, "beam": { "spread": { "known_to": "3 %" } } }),
            json!({ "kind": "fit" }),
        )
    };
    grows("fit with parameters", &[1, 2, 3, 4, 5], fit)?;
    let plan = |count: u32| {
        let step = format!("{} MeV", 12.0 / f64::from(count));
        let plan = json!({ "from": "3.680 GeV", "to": "3.692 GeV", "step": step, "hours": "40 h", "goal": "r1.width" });
        request(
            json!({ "plan": plan }),
            json!({ "kind": "plan", "costs": false }),
        )
    };
    grows("plan with energies", &[50, 100, 200, 400], plan)
}

/// A request with the file's sheet in it, changed by its patch (RFC 7396).
fn filled(file: &Value, one: &Value) -> Outcome<Value> {
    let mut sheet = file["sheet"].clone();
    merge(&mut sheet, &one["patch"]);
    let mut request = one["request"].clone();
    let fields = request.as_object_mut().ok_or("a request is an object")?;
    fields.insert("sheet".into(), sheet);
    Ok(request)
}

fn merge(into: &mut Value, patch: &Value) {
    match (into, patch) {
        (Value::Object(fields), Value::Object(patch)) => {
            for (key, inner) in patch {
                merge(fields.entry(key.clone()).or_insert(Value::Null), inner);
            }
        }
        (_, Value::Null) => {}
        (into, patch) => *into = patch.clone(),
    }
}

/// Median time: at least 7 times, then for some seconds, at most 200, as in the page's timing.
fn milliseconds(request: &Value, seconds: f64) -> Outcome<f64> {
    let request = Request::read(request.clone()).map_err(|refusal| refusal.to_string())?;
    let mut times = Vec::new();
    let begin = Instant::now();
    let most = Duration::from_secs_f64(seconds);
    while times.len() < 7 || (begin.elapsed() < most && times.len() < 200) {
        let start = Instant::now();
        let reply = answer(&request, &mut |_, _| {}).map_err(|refusal| refusal.to_string())?;
        std::hint::black_box(reply);
        times.push(start.elapsed().as_secs_f64() * 1e3);
    }
    times.sort_by(f64::total_cmp);
    Ok(times.get(times.len() / 2).copied().unwrap_or(f64::NAN))
}

/// The exponent of a power law through times of growing problems (least squares in the logarithms).
fn grows(what: &str, sizes: &[u32], request: impl Fn(u32) -> Outcome<Value>) -> Outcome<()> {
    let mut logs = Vec::new();
    for &size in sizes {
        let time = milliseconds(&request(size)?, 0.7)?;
        logs.push((math::ln(f64::from(size)), math::ln(time)));
    }
    let n = logs.len() as f64;
    let mean = |of: fn(&(f64, f64)) -> f64| logs.iter().map(of).sum::<f64>() / n;
    let (x, y) = (mean(|p| p.0), mean(|p| p.1));
    let above: f64 = logs.iter().map(|p| (p.0 - x) * (p.1 - y)).sum();
    let below: f64 = logs.iter().map(|p| (p.0 - x) * (p.0 - x)).sum();
    println!("growth\t{what}\t{}", above / below);
    Ok(())
}
