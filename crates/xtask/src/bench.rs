//! Commands for people rather than for every run: benchmarks, screenshots, the validation table.

use crate::build;
use crate::fetch;
use crate::shell::{self, Outcome, say};
use crate::suites;
use std::path::PathBuf;

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

/// Native benchmarks, the same requests through the page's worker, and the peers.
pub fn bench(words: &[&str]) -> Outcome {
    let product = build::dist()?;
    let python = fetch::python()?;
    fetch::chromium()?;
    say("benchmarks (times in ms, medians)");
    for example in native_examples()? {
        let (package, name) = example;
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
    let mut table = shell::program("node");
    table
        .arg("tests/bench/table.mjs")
        .arg(product)
        .arg(python)
        .args(words);
    shell::run(&mut table)
}

/// `bench_*` examples of the crates: (package, example).
fn native_examples() -> Outcome<Vec<(String, String)>> {
    let crates = shell::root().join("crates");
    let mut found = Vec::new();
    for file in shell::files_below(&crates) {
        let name = file
            .file_stem()
            .unwrap_or_default()
            .to_string_lossy()
            .into_owned();
        let parent: Option<PathBuf> = file.parent().map(PathBuf::from);
        let Some(folder) =
            parent.filter(|folder| folder.ends_with("examples") && name.starts_with("bench_"))
        else {
            continue;
        };
        let package = folder
            .parent()
            .and_then(|package| package.file_name())
            .unwrap_or_default();
        found.push((format!("widthwise-{}", package.to_string_lossy()), name));
    }
    Ok(found)
}

/// Screenshots of every width and theme.
pub fn shots(words: &[&str]) -> Outcome {
    if !words.is_empty() {
        return Err("shots takes no arguments".to_owned());
    }
    let product = build::dist()?;
    fetch::chromium()?;
    let out = shell::target().join("shots");
    shell::clear(&out)?;
    say(format!("screenshots into {}", out.display()));
    shell::run(
        shell::program("node")
            .arg("tests/browser/shots.mjs")
            .arg(product)
            .arg(&out),
    )
}
