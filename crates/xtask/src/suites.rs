//! `cargo xtask test`: every check, all suites even after a failure, one sum at the end.

use crate::build;
use crate::fetch;
use crate::on_wasm;
use crate::shell::{self, Outcome, say};
use crate::tally::Tally;
use crate::tidy;
use std::path::{Path, PathBuf};
use std::time::Instant;

/// Runs every check.
pub fn test() -> Outcome {
    let start = Instant::now();
    let mut tally = Tally::default();
    rules(&mut tally);
    dependencies(&mut tally);
    native(&mut tally);
    generated(&mut tally);
    say("the same tests of core and sheet on WebAssembly");
    on_wasm::run(&mut tally);
    web(&mut tally);
    references(&mut tally);
    println!("took {} s", start.elapsed().as_secs());
    finish(&tally)
}

/// The browser tests alone: in Chromium, or in all three engines.
pub fn page(words: &[&str]) -> Outcome {
    let engines = match words {
        [] => "chromium",
        ["--all"] => "chromium,firefox,webkit",
        [one @ ("chromium" | "firefox" | "webkit")] => one,
        _ => return Err("page knows --all, chromium, firefox and webkit".to_owned()),
    };
    let product = build::dist()?;
    let mut tally = Tally::default();
    let result = in_browsers(&product, engines, &[]);
    record(&mut tally, "page in browsers", result);
    finish(&tally)
}

fn finish(tally: &Tally) -> Outcome {
    if !tally.trouble.is_empty() {
        println!("failed: {}", tally.trouble.join(", "));
    }
    println!("{} passed, {} failed", tally.passed, tally.failed);
    if tally.failed == 0 {
        Ok(())
    } else {
        Err("some checks failed".to_owned())
    }
}

/// Adds a suite that ran, or the reason why it could not.
pub fn record(tally: &mut Tally, suite: &str, result: Outcome<(bool, String)>) {
    match result {
        Ok((ended_well, printed)) => tally.add(suite, ended_well, &printed),
        Err(message) => tally.check(suite, Err(message)),
    }
}

/// The rules of the house, format and lints.
fn rules(tally: &mut Tally) {
    say("rules of the house");
    for (name, outcome) in tidy::all() {
        tally.check(name, outcome);
    }
    say("format");
    tally.check(
        "format (cargo fmt --all)",
        shell::run(shell::cargo().args(["fmt", "--all", "--check"])),
    );
    say("lints");
    let mut clippy = shell::cargo();
    clippy.args([
        "clippy",
        "--quiet",
        "--workspace",
        "--all-targets",
        "--all-features",
        "--",
        "-D",
        "warnings",
    ]);
    tally.check("lints (cargo clippy)", shell::run(&mut clippy));
    say("documentation");
    let mut doc = shell::cargo();
    doc.args([
        "doc",
        "--quiet",
        "--workspace",
        "--no-deps",
        "--all-features",
    ])
    .env("RUSTDOCFLAGS", "-D warnings");
    tally.check("documentation (cargo doc)", shell::run(&mut doc));
}

/// Licences, duplicates and number of what others have written.
fn dependencies(tally: &mut Tally) {
    say("dependencies of the product");
    let result = fetch::npm_packages()
        .and_then(|()| shell::run_kept(shell::program("node").arg("tests/house/dependencies.mjs")));
    record(tally, "dependencies of the product", result);
}

fn native(tally: &mut Tally) {
    say("native tests");
    let mut tests = shell::cargo();
    let result = shell::run_kept(tests.args(["test", "--workspace", "--no-fail-fast"]));
    record(tally, "native tests", result);
}

/// Files made from the Rust types must be what the Rust types make now.
fn generated(tally: &mut Tally) {
    say("generated TypeScript types");
    let fresh = shell::target().join("types-check");
    let kept = shell::root().join("www/shared/generated");
    let outcome = build::types(&fresh).and_then(|()| same_files(&kept, &fresh));
    tally.check(
        "generated types are current",
        outcome.map_err(|why| format!("{why}; run: cargo xtask types")),
    );
}

fn same_files(kept: &Path, fresh: &Path) -> Outcome {
    let names = |folder: &Path| -> Vec<PathBuf> {
        let files = shell::files_below(folder);
        files
            .iter()
            .filter_map(|file| file.strip_prefix(folder).ok().map(Path::to_path_buf))
            .collect()
    };
    if names(kept) != names(fresh) {
        return Err("the list of files has changed".to_owned());
    }
    let differ = |name: &&PathBuf| {
        std::fs::read(kept.join(name)).ok() != std::fs::read(fresh.join(name)).ok()
    };
    let changed: Vec<String> = names(kept)
        .iter()
        .filter(differ)
        .map(|name| name.display().to_string())
        .collect();
    if changed.is_empty() {
        Ok(())
    } else {
        Err(format!("changed: {}", changed.join(", ")))
    }
}

/// Types of the page, its unit tests, and the built file in a real browser.
fn web(tally: &mut Tally) {
    let product = match build::dist() {
        Ok(product) => product,
        Err(message) => return tally.check("the single file", Err(message)),
    };
    tally.check(
        "the same commit gives the same file",
        assembled_again(&product),
    );
    say("types of page and worker");
    let www = shell::root().join("www");
    let bin = www.join("node_modules/.bin");
    tally.check(
        "types of page and worker (tsc)",
        shell::run(
            shell::program(bin.join("tsc"))
                .args(["-b", "--singleThreaded"])
                .current_dir(&www),
        ),
    );
    say("unit tests of page and worker");
    let result = shell::run_kept(
        shell::program(bin.join("vitest"))
            .arg("run")
            .current_dir(&www)
            .env("NO_COLOR", "1"),
    );
    record(tally, "unit tests of page and worker", result);
    record(
        tally,
        "page in Chromium",
        in_browsers(&product, "chromium", &[]),
    );
}

/// Assembles the file a second time; what is compiled once is compared by `cargo xtask reproduce`.
fn assembled_again(product: &Path) -> Outcome {
    let read = |path: &Path| std::fs::read(path).map_err(|error| error.to_string());
    let before = read(product)?;
    let again = build::assemble(&shell::target().join("again/widthwise.html"))?;
    if read(&again)? == before {
        Ok(())
    } else {
        Err("two assemblies of the same parts differ".to_owned())
    }
}

/// Runs files of tests/browser against the built file; `only` narrows the choice.
pub fn in_browsers(product: &Path, engines: &str, only: &[&str]) -> Outcome<(bool, String)> {
    let mut path = Vec::new();
    for engine in engines.split(',') {
        match engine {
            "firefox" => path.push(fetch::firefox()?),
            "webkit" => fetch::webkit()?,
            _ => fetch::chromium()?,
        }
    }
    say(format!("the built file in {engines}"));
    let mut vitest = shell::program(shell::root().join("www/node_modules/.bin/vitest"));
    vitest
        .current_dir(shell::root().join("tests/browser"))
        .arg("run")
        .args(only)
        .env("NO_COLOR", "1");
    vitest
        .env("WIDTHWISE_PAGE", product)
        .env("WIDTHWISE_BROWSERS", engines)
        .env("WIDTHWISE_GOLDEN", golden()?)
        .env("PATH", shell::path_with(&path)?);
    shell::run_kept(&mut vitest)
}

/// The golden set with its native answers; the test that makes it is one of the native suite.
fn golden() -> Outcome<PathBuf> {
    say("the golden set, natively");
    // The whole workspace, as the native suite builds it: nothing is built twice.
    shell::run_quietly(shell::cargo().args([
        "test",
        "--quiet",
        "--workspace",
        "--test",
        "promises",
        "golden",
    ]))?;
    Ok(shell::target().join("tmp/golden.json"))
}

/// Independent scripts against the batch program.
fn references(tally: &mut Tally) {
    let result = fetch::python().and_then(|python| {
        let batch = batch()?;
        say("independent references");
        shell::run_kept(
            shell::program(python)
                .arg("tests/reference/validate.py")
                .arg(batch)
                .arg("--check"),
        )
    });
    record(tally, "independent references", result);
}

/// The batch program as users run it.
pub fn batch() -> Outcome<PathBuf> {
    say("building the batch program");
    shell::run(shell::cargo().args([
        "build",
        "--quiet",
        "--release",
        "--package",
        "widthwise-batch",
    ]))?;
    Ok(shell::target().join("release/widthwise-batch"))
}
