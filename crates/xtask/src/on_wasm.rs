//! The tests of core and sheet a second time, on WebAssembly: the very same functions, built with the
//! ordinary harness and run by Node.js (tests/wasm/run.mjs).

use crate::shell::{self, Outcome};
use crate::suites::record;
use crate::tally::Tally;
use crate::wasm::Compiler;
use std::path::{Path, PathBuf};
use std::process::Command;

/// A test program: the source it was made from, and the file.
type Harness = (PathBuf, PathBuf);

/// Only test programs, none of the examples, told in a form that can be read.
const BUILD: [&str; 5] = [
    "test",
    "--tests",
    "--no-run",
    "--quiet",
    "--message-format=json",
];

/// Builds and runs them; each test program is a suite of its own.
pub fn run(tally: &mut Tally) {
    let (native, wasm) = match build() {
        Ok(both) => both,
        Err(message) => return tally.check("tests on WebAssembly", Err(message)),
    };
    let sources = |harnesses: &[Harness]| -> Vec<PathBuf> {
        harnesses.iter().map(|(source, _)| source.clone()).collect()
    };
    if sources(&native) != sources(&wasm) {
        let message =
            format!("other test programs natively {native:?} than for WebAssembly {wasm:?}");
        return tally.check("tests on WebAssembly", Err(message));
    }
    for ((source, program), (_, module)) in native.iter().zip(&wasm) {
        let name = source
            .strip_prefix(shell::root())
            .unwrap_or(source)
            .display()
            .to_string();
        match names(program) {
            // A library without a test of its own is no suite.
            Ok(list) if list.is_empty() => {}
            Ok(list) => record(
                tally,
                &format!("{name} on WebAssembly"),
                run_one(&name, &list, module),
            ),
            Err(message) => tally.check(&name, Err(message)),
        }
    }
}

fn build() -> Outcome<(Vec<Harness>, Vec<Harness>)> {
    // The whole workspace, as the native suite builds it: one choice of features, nothing built twice.
    let native = harnesses(shell::cargo().args(BUILD).arg("--workspace"))?;
    let mut command = Compiler::find()?.cargo()?;
    // The property tests take their seeds from the runner.
    command.env(
        "RUSTFLAGS",
        "--cfg getrandom_backend=\"custom\" -Clink-arg=--allow-undefined",
    );
    command.args(BUILD).args([
        "--target",
        "wasm32-unknown-unknown",
        "--package",
        "widthwise-core",
        "--package",
        "widthwise-sheet",
    ]);
    Ok((native, harnesses(&mut command)?))
}

/// The test programs of core and sheet among what cargo built, sorted by source.
fn harnesses(build: &mut Command) -> Outcome<Vec<Harness>> {
    let printed = shell::run_quietly(build)?;
    let rooms = [
        shell::root().join("crates/core"),
        shell::root().join("crates/sheet"),
    ];
    let mut found: Vec<Harness> = printed.lines().filter_map(harness).collect();
    found.retain(|(source, _)| rooms.iter().any(|room| source.starts_with(room)));
    found.sort();
    if found.is_empty() {
        Err("no test programs were built".to_owned())
    } else {
        Ok(found)
    }
}

/// The test program in one of cargo's messages, if it is about one.
fn harness(message: &str) -> Option<Harness> {
    let field = |key: &str| {
        let (_, rest) = message.split_once(&format!("\"{key}\":\""))?;
        rest.split_once('"').map(|(value, _)| PathBuf::from(value))
    };
    let is_test = message.contains("\"reason\":\"compiler-artifact\"")
        && message.contains("\"test\":true},\"features\"");
    if is_test {
        Some((field("src_path")?, field("executable")?))
    } else {
        None
    }
}

/// Names of the tests in a native test program.
fn names(program: &Path) -> Outcome<String> {
    let list = shell::run_quietly(shell::program(program).arg("--list"))?;
    Ok(list
        .lines()
        .filter(|line| line.ends_with(": test"))
        .map(|line| format!("{line}\n"))
        .collect())
}

fn run_one(name: &str, list: &str, module: &Path) -> Outcome<(bool, String)> {
    let file = shell::target()
        .join("wasm-tests")
        .join(name.replace('/', "-"))
        .with_extension("list");
    shell::write(&file, list)?;
    println!("{name}");
    shell::run_kept(
        shell::program("node")
            .arg("tests/wasm/run.mjs")
            .arg(module)
            .arg(file),
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn test_programs_are_found_in_cargos_messages() {
        let message = |test: bool, executable: &str| {
            format!(
                r#"{{"reason":"compiler-artifact","target":{{"name":"a","src_path":"/x/crates/core/tests/a.rs","test":true}},"profile":{{"opt_level":"2","test":{test}}},"features":[],"executable":{executable},"fresh":true}}"#
            )
        };
        let found = harness(&message(true, r#""/t/a-1""#));
        assert_eq!(
            found,
            Some((
                PathBuf::from("/x/crates/core/tests/a.rs"),
                PathBuf::from("/t/a-1")
            ))
        );
        assert_eq!(harness(&message(false, r#""/t/a-1""#)), None);
        assert_eq!(harness(&message(true, "null")), None);
        assert_eq!(
            harness(r#"{"reason":"build-finished","success":true}"#),
            None
        );
    }
}
