//! The rules of the house, as code.

use crate::shell::{self, Outcome};
use std::path::{Path, PathBuf};

/// No file that people read is longer.
const MOST_LINES: usize = 600;

/// What may lie in the top folder, besides dot-files.
const TOP: [&str; 11] = [
    "Cargo.toml",
    "Cargo.lock",
    "README.md",
    "DEVELOPERS.md",
    "LICENSE-MIT",
    "LICENSE-APACHE",
    "clippy.toml",
    "deny.toml",
    "rustfmt.toml",
    "crates",
    "tests",
];

/// All rules with their outcomes.
pub fn all() -> Vec<(&'static str, Outcome)> {
    let files = match tracked() {
        Ok(files) => files,
        Err(message) => return vec![("list of files", Err(message))],
    };
    vec![
        ("top folder", top(&files)),
        ("length of files", lengths(&files)),
        ("no addresses in package-lock.json", no_addresses(&files)),
        ("no skipped tests, no stubs", no_skips(&files)),
        ("no folders of one machine", no_machine_paths(&files)),
        ("lints of the workspace in every crate", lints(&files)),
    ]
}

/// Prints the broken rules.
pub fn report() -> Outcome {
    let broken: Vec<String> = all()
        .into_iter()
        .filter_map(|(name, outcome)| outcome.err().map(|why| format!("{name}: {why}")))
        .collect();
    if broken.is_empty() {
        Ok(())
    } else {
        Err(broken.join("\n"))
    }
}

/// Files that git knows, or would add.
fn tracked() -> Outcome<Vec<PathBuf>> {
    let list = shell::run_quietly(shell::program("git").args([
        "ls-files",
        "--cached",
        "--others",
        "--exclude-standard",
    ]))?;
    Ok(list
        .lines()
        .map(PathBuf::from)
        .filter(|file| shell::root().join(file).is_file())
        .collect())
}

fn gather(wrong: Vec<String>) -> Outcome {
    if wrong.is_empty() {
        Ok(())
    } else {
        Err(wrong.join("; "))
    }
}

fn top(files: &[PathBuf]) -> Outcome {
    let mut strangers: Vec<String> = files
        .iter()
        .filter_map(|file| file.components().next())
        .map(|part| part.as_os_str().to_string_lossy().into_owned())
        .filter(|name| !name.starts_with('.') && name != "www" && !TOP.contains(&name.as_str()))
        .collect();
    strangers.dedup();
    gather(strangers)
}

fn ends_in(file: &Path, endings: &[&str]) -> bool {
    file.extension()
        .is_some_and(|ending| endings.iter().any(|wanted| ending == *wanted))
}

fn is_generated(file: &Path) -> bool {
    file.components()
        .any(|part| part.as_os_str() == "generated")
}

fn is_code(file: &Path) -> bool {
    ends_in(file, &["rs", "ts", "tsx", "mjs", "css", "py"]) && !is_generated(file)
}

/// Contents of those files that `wanted` picks, with their names.
fn contents(files: &[PathBuf], wanted: impl Fn(&Path) -> bool) -> Vec<(String, String)> {
    let picked = files.iter().filter(|file| wanted(file));
    picked
        .filter_map(|file| {
            Some((
                file.display().to_string(),
                std::fs::read_to_string(shell::root().join(file)).ok()?,
            ))
        })
        .collect()
}

fn lengths(files: &[PathBuf]) -> Outcome {
    let read = contents(files, is_code);
    let long = read
        .iter()
        .map(|(name, text)| (name, text.lines().count()))
        .filter(|(_, lines)| *lines > MOST_LINES);
    gather(
        long.map(|(name, lines)| format!("{name} has {lines} lines, {MOST_LINES} allowed"))
            .collect(),
    )
}

fn no_addresses(files: &[PathBuf]) -> Outcome {
    let locks = contents(files, |file| {
        file.file_name()
            .is_some_and(|name| name == "package-lock.json")
    });
    gather(
        locks
            .into_iter()
            .filter(|(_, text)| text.contains("\"resolved\""))
            .map(|(name, _)| name)
            .collect(),
    )
}

/// Lines that hold one of the words, as "file:line: word". The words are written in two halves
/// where they are forbidden, so that this file does not break its own rule.
fn lines_with(files: Vec<(String, String)>, words: &[&str]) -> Outcome {
    let mut wrong = Vec::new();
    for (name, text) in files {
        for (number, line) in text.lines().enumerate() {
            for word in words.iter().filter(|word| line.contains(**word)) {
                wrong.push(format!("{name}:{}: {word}", number + 1));
            }
        }
    }
    gather(wrong)
}

fn no_skips(files: &[PathBuf]) -> Outcome {
    let words = [
        concat!("#[ig", "nore"),
        concat!("to", "do!("),
        concat!("unimple", "mented!("),
        concat!("it.sk", "ip("),
        concat!("it.on", "ly("),
        concat!("test.sk", "ip("),
        concat!("test.on", "ly("),
        concat!("describe.sk", "ip("),
        concat!("describe.on", "ly("),
        concat!("it.to", "do("),
        concat!("pytest.mark.sk", "ip"),
    ];
    lines_with(contents(files, is_code), &words)
}

fn no_machine_paths(files: &[PathBuf]) -> Outcome {
    let text =
        |file: &Path| is_code(file) || ends_in(file, &["md", "json", "toml", "html", "csv", "txt"]);
    lines_with(
        contents(files, text),
        &[
            concat!("/ro", "ot/"),
            concat!("/wo", "rk/"),
            concat!("/ho", "me/"),
        ],
    )
}

fn lints(files: &[PathBuf]) -> Outcome {
    let manifests = contents(files, |file| {
        file.starts_with("crates") && file.ends_with("Cargo.toml")
    });
    let lax = manifests
        .into_iter()
        .filter(|(_, text)| !text.contains("[lints]\nworkspace = true"));
    gather(lax.map(|(name, _)| name).collect())
}
