//! Commands for people rather than for every run: benchmarks, screenshots, the validation table.

use crate::build;
use crate::fetch;
use crate::shell::{self, Outcome, say};
use crate::suites;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// Times in ms by name.
type Times = BTreeMap<String, f64>;

/// An independent program for the same problem: names in the table with the words before and
/// after the number it prints, script, arguments.
struct Peer {
    names: &'static [(&'static str, &'static str, &'static str)],
    script: &'static str,
    arguments: &'static [&'static str],
}

/// The peers of tests/bench/peers, not weakened.
const PEERS: [Peer; 3] = [
    Peer {
        names: &[("curve", "n=12: ", " ms a curve")],
        script: "curve_numpy.py",
        arguments: &["12"],
    },
    Peer {
        names: &[("fit", "", " ms a fit")],
        script: "fit_iminuit.py",
        arguments: &[],
    },
    Peer {
        names: &[
            (
                "plan c-optimal",
                "c-optimal for Gamma: criterion ",
                " ms (solver",
            ),
            ("plan D-optimal", "D-optimal: criterion ", " ms (solver"),
        ],
        script: "plan_cvxpy.py",
        arguments: &[],
    },
];

/// Reruns the independent scripts and rewrites the table of what was checked against what.
pub fn validate(words: &[&str]) -> Outcome {
    let python = fetch::python()?;
    let batch = suites::batch()?;
    say("validating against independent scripts");
    shell::run(
        shell::program(python)
            .arg("tests/reference/validate.py")
            .arg(batch)
            .args(words),
    )
}

/// One table: native, WebAssembly in Chromium (worker and messages included), peer; then what the
/// examples `bench_*` of the crates print.
pub fn bench(words: &[&str]) -> Outcome {
    if !words.is_empty() {
        return Err("bench takes no arguments".to_owned());
    }
    let product = build::dist()?;
    let python = fetch::python()?;
    let requests = shell::root().join("tests/bench/requests.json");
    say("timing requests natively");
    let mut example = shell::cargo();
    example.args([
        "run",
        "--quiet",
        "--release",
        "--package",
        "widthwise-sheet",
        "--example",
        "bench_requests",
        "--",
    ]);
    let native = tabbed(&shell::run_quietly(example.arg(&requests))?);
    let wasm = in_page(&product, &requests)?;
    say("timing the independent programs");
    let mut peers = Times::new();
    for peer in PEERS {
        peers.append(&mut time_peer(&peer, &python)?);
    }
    print_table(&native, &wasm, &peers);
    for (package, name) in native_examples() {
        say(format!("{name} (native)"));
        shell::run(shell::cargo().args([
            "run",
            "--quiet",
            "--release",
            "--package",
            &package,
            "--example",
            &name,
        ]))?;
    }
    Ok(())
}

fn tabbed(text: &str) -> Times {
    let pair = |line: &str| {
        let (name, number) = line.split_once('\t')?;
        Some((name.to_owned(), number.trim().parse().ok()?))
    };
    text.lines().filter_map(pair).collect()
}

fn in_page(product: &Path, requests: &Path) -> Outcome<Times> {
    let out = shell::target().join("timing.tsv");
    say("timing requests through the page's worker in Chromium");
    tool("timing", product, &out, requests)?;
    Ok(tabbed(&shell::read(&out)?))
}

/// Runs a tool of tests/browser/tools.
fn tool(name: &str, product: &Path, out: &Path, requests: &Path) -> Outcome {
    fetch::chromium()?;
    let mut vitest = shell::program(shell::root().join("www/node_modules/.bin/vitest"));
    vitest
        .current_dir(shell::root().join("tests/browser"))
        .args(["run", "--silent=false"])
        .env("NO_COLOR", "1");
    vitest
        .env("WIDTHWISE_TOOL", name)
        .env("WIDTHWISE_PAGE", product)
        .env("WIDTHWISE_OUT", out)
        .env("WIDTHWISE_REQUESTS", requests);
    shell::run_quietly(&mut vitest).map(|_| ())
}

fn time_peer(peer: &Peer, python: &Path) -> Outcome<Times> {
    let folder = shell::root().join("tests/bench/peers");
    let printed = shell::run_quietly(
        shell::program(python)
            .current_dir(folder)
            .arg(peer.script)
            .args(peer.arguments),
    )?;
    let mut times = Times::new();
    for (name, before, after) in peer.names {
        let line = printed
            .lines()
            .find(|line| line.starts_with(before))
            .unwrap_or_default();
        // The number stands right before `after`, whatever stands between it and `before`.
        let number = line
            .split_once(after)
            .and_then(|(head, _)| head.rsplit(' ').next())
            .and_then(|word| word.parse().ok());
        times.insert(
            (*name).to_owned(),
            number.ok_or_else(|| format!("{} printed no time for {name}", peer.script))?,
        );
    }
    Ok(times)
}

fn print_table(native: &Times, wasm: &Times, peers: &Times) {
    let cell = |times: &Times, name: &str| {
        times
            .get(name)
            .map_or_else(|| "-".to_owned(), |time| format!("{time:.3}"))
    };
    let ratio = |above: Option<&f64>, below: Option<&f64>| match (above, below) {
        (Some(above), Some(below)) => format!("{:.2}", above / below),
        _ => "-".to_owned(),
    };
    println!(
        "{:24} {:>12} {:>12} {:>12} {:>12} {:>12}",
        "", "native ms", "wasm ms", "wasm/native", "peer ms", "peer/wasm"
    );
    let names: std::collections::BTreeSet<&String> = native.keys().chain(wasm.keys()).collect();
    for name in names {
        println!(
            "{name:24} {:>12} {:>12} {:>12} {:>12} {:>12}",
            cell(native, name),
            cell(wasm, name),
            ratio(wasm.get(name), native.get(name)),
            cell(peers, name),
            ratio(peers.get(name), wasm.get(name)),
        );
    }
}

/// `bench_*` examples of the crates: (package, example).
fn native_examples() -> Vec<(String, String)> {
    let mut found = Vec::new();
    for file in shell::files_below(&shell::root().join("crates")) {
        let name = file
            .file_stem()
            .unwrap_or_default()
            .to_string_lossy()
            .into_owned();
        let Some(folder) = file
            .parent()
            .filter(|folder| folder.ends_with("examples") && name.starts_with("bench_"))
        else {
            continue;
        };
        let package = folder
            .parent()
            .and_then(Path::file_name)
            .unwrap_or_default();
        if name != "bench_requests" {
            found.push((format!("widthwise-{}", package.to_string_lossy()), name));
        }
    }
    found
}

/// Screenshots of every room, width and theme.
pub fn shots(words: &[&str]) -> Outcome {
    if !words.is_empty() {
        return Err("shots takes no arguments".to_owned());
    }
    let product = build::dist()?;
    let out: PathBuf = shell::target().join("shots");
    shell::clear(&out)?;
    say(format!("screenshots into {}", out.display()));
    tool("shots", &product, &out, Path::new(""))
}
