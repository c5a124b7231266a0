//! Commands for people rather than for every run: benchmarks, screenshots, the validation table.

use crate::build;
use crate::fetch;
use crate::shell::{self, Outcome, say};
use crate::suites;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// Numbers by name: times in ms, exponents, ratios.
type Numbers = BTreeMap<String, f64>;

/// A ratio may get worse by this factor before it needs a word.
const WORSE: f64 = 1.2;

/// Where the ratios of the last accepted run stand.
const RECORDED: &str = "tests/bench/recorded.tsv";

/// An independent program for the same problem: names in the table with the words before and
/// after the number it prints, script, arguments.
struct Peer {
    names: &'static [(&'static str, &'static str, &'static str)],
    script: &'static str,
    arguments: &'static [&'static str],
}

/// The peers of tests/bench/peers, not weakened.
const PEERS: [Peer; 4] = [
    Peer {
        names: &[("curve", "n=12: ", " ms a curve")],
        script: "curve_numpy.py",
        arguments: &["12"],
    },
    Peer {
        // A trial is a draw and a fit.
        names: &[("fit", "", " ms a fit"), ("trials", "", " ms a fit")],
        script: "fit_iminuit.py",
        arguments: &[],
    },
    Peer {
        names: &[("profile", "", " ms a profile")],
        script: "profile_iminuit.py",
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

/// One table: native, WebAssembly in Chromium (worker and messages included), peer, ratios; then how
/// costs grow. Compares with the recorded ratios; `--record` accepts the new ones.
pub fn bench(words: &[&str]) -> Outcome {
    let (record, details) = match words {
        [] => (false, false),
        ["--record"] => (true, false),
        ["--details"] => (false, true),
        _ => return Err("bench knows --record and --details".to_owned()),
    };
    let product = build::dist()?;
    let python = fetch::python()?;
    let requests = shell::root().join("tests/bench/requests.json");
    say("timing requests natively");
    let mut timing = example("widthwise-sheet", "bench_requests");
    let printed = shell::run_quietly(timing.arg("--").arg(&requests))?;
    let native = tabbed(&printed);
    let growth = growths(&printed);
    let mut wasm = in_page(&product, &requests)?;
    say("timing the independent programs");
    let mut peers = Numbers::new();
    for peer in PEERS {
        peers.append(&mut time_peer(&peer, &python)?);
    }
    // What an empty page takes to its first mark is the peer of start-up.
    if let Some(empty) = wasm.remove("empty page") {
        peers.insert("start-up".to_owned(), empty);
    }
    let mut ratios = print_table(&native, &wasm, &peers);
    println!("\nexponent of growth (time ~ size^x)");
    for (what, exponent) in growth {
        println!("{what:24} {exponent:>12.2}");
        ratios.insert(format!("growth: {what}"), exponent);
    }
    if details {
        for (package, name) in native_examples() {
            say(format!("{name} (native)"));
            shell::run(&mut example(&package, &name))?;
        }
    }
    let file = shell::root().join(RECORDED);
    if record {
        let lines: String = ratios
            .iter()
            .map(|(name, ratio)| format!("{name}\t{ratio:.3}\n"))
            .collect();
        say(format!("recorded in {RECORDED}"));
        return shell::write(&file, &lines);
    }
    if !file.exists() {
        println!("nothing is recorded yet: cargo xtask bench --record on a quiet machine");
        return Ok(());
    }
    compare(&tabbed(&shell::read(&file)?), &ratios)
}

fn example(package: &str, name: &str) -> std::process::Command {
    let mut command = shell::cargo();
    command.args([
        "run",
        "--quiet",
        "--release",
        "--package",
        package,
        "--example",
        name,
    ]);
    command
}

/// All ratios are costs over something: larger is worse.
fn compare(recorded: &Numbers, now: &Numbers) -> Outcome {
    let worse: Vec<String> = now
        .iter()
        .filter_map(|(name, ratio)| {
            let before = recorded.get(name)?;
            // An exponent near 0 has no use for a factor.
            let exponent = name.starts_with("growth");
            let worse = if exponent {
                ratio - before > WORSE - 1.0
            } else {
                *ratio > before * WORSE
            };
            worse.then(|| format!("{name}: {before:.3} -> {ratio:.3}"))
        })
        .collect();
    if worse.is_empty() {
        println!("no ratio is worse than recorded by more than 20 %");
        Ok(())
    } else {
        Err(format!(
            "worse than recorded by more than 20 %: {}; mend it, or say why in the commit and run: cargo xtask bench --record",
            worse.join(", ")
        ))
    }
}

/// Lines "name TAB number".
fn tabbed(text: &str) -> Numbers {
    let pair = |line: &str| {
        let (name, number) = line.split_once('\t')?;
        Some((name.to_owned(), number.trim().parse().ok()?))
    };
    text.lines().filter_map(pair).collect()
}

/// Lines "growth TAB what TAB exponent".
fn growths(text: &str) -> Numbers {
    let lines = text
        .lines()
        .filter_map(|line| line.strip_prefix("growth\t"));
    tabbed(&lines.map(|line| format!("{line}\n")).collect::<String>())
}

fn in_page(product: &Path, requests: &Path) -> Outcome<Numbers> {
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

fn time_peer(peer: &Peer, python: &Path) -> Outcome<Numbers> {
    let folder = shell::root().join("tests/bench/peers");
    let printed = shell::run_quietly(
        shell::program(python)
            .current_dir(folder)
            .arg(peer.script)
            .args(peer.arguments),
    )?;
    let mut times = Numbers::new();
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

/// Prints the table; the answer is its ratios.
fn print_table(native: &Numbers, wasm: &Numbers, peers: &Numbers) -> Numbers {
    let cell = |number: Option<f64>| {
        number.map_or_else(|| "-".to_owned(), |number| format!("{number:.3}"))
    };
    println!(
        "\n{:24} {:>12} {:>12} {:>12} {:>12} {:>12}",
        "", "native ms", "wasm ms", "wasm/native", "peer ms", "ours/peer"
    );
    let mut ratios = Numbers::new();
    let names: std::collections::BTreeSet<&String> = native.keys().chain(wasm.keys()).collect();
    for name in names {
        let (fast, slow, peer) = (native.get(name), wasm.get(name), peers.get(name));
        let ratio = |above: Option<&f64>, below: Option<&f64>| Some(above? / below?);
        let (on_wasm, on_peer) = (ratio(slow, fast), ratio(slow.or(fast), peer));
        println!(
            "{name:24} {:>12} {:>12} {:>12} {:>12} {:>12}",
            cell(fast.copied()),
            cell(slow.copied()),
            cell(on_wasm),
            cell(peer.copied()),
            cell(on_peer),
        );
        ratios.extend(on_wasm.map(|ratio| (format!("{name}: wasm/native"), ratio)));
        ratios.extend(on_peer.map(|ratio| (format!("{name}: ours/peer"), ratio)));
    }
    ratios
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_ratio_that_got_worse_is_told() {
        let recorded = tabbed("fit: ours/peer\t0.01\ngrowth: fit\t1.0\n");
        assert_eq!(
            compare(&recorded, &tabbed("fit: ours/peer\t0.0119\nnew\t9\n")),
            Ok(())
        );
        let told = compare(
            &recorded,
            &tabbed("fit: ours/peer\t0.0121\ngrowth: fit\t1.3\n"),
        );
        assert!(
            told.is_err_and(|text| text.contains("fit: ours/peer") && text.contains("growth: fit"))
        );
    }

    #[test]
    fn growth_is_told_apart_from_times() {
        let printed = "fit\t1.5\ngrowth\tcurve with energies\t0.9\n";
        assert_eq!(tabbed(printed).len(), 1);
        assert_eq!(growths(printed).get("curve with energies"), Some(&0.9));
    }
}
