//! Building the WebAssembly, the TypeScript types and the single file.

use crate::fetch;
use crate::shell::{self, Outcome, say};
use crate::stamp::{self, Ingredients};
use crate::wasm::Compiler;
use std::path::{Path, PathBuf};

/// A worker that wants more than 1 GiB is stopped before it stops a tablet.
const MOST_MEMORY: u32 = 1 << 30;

/// The single file.
pub fn product() -> PathBuf {
    shell::target().join("dist/widthwise.html")
}

/// Builds everything that goes into the single file, and the file.
pub fn dist() -> Outcome<PathBuf> {
    fetch::npm_packages()?;
    engine()?;
    say("building the page");
    let out = assemble(&product())?;
    say(format!("wrote {}", out.display()));
    Ok(out)
}

/// Bundles the page and puts it together with the engine that was built last.
pub fn assemble(out: &Path) -> Outcome<PathBuf> {
    let mut build = shell::program("node");
    build
        .current_dir(shell::root().join("www"))
        .args(["build/build.mjs", "--engine"])
        .arg(shell::target().join("wasm-pkg"));
    build.arg("--out").arg(out).args(["--version", &version()]);
    shell::run(&mut build)?;
    Ok(out.to_path_buf())
}

/// Builds the product of the present commit a second time, from a clone elsewhere with nothing built, and
/// compares the bytes.
pub fn reproduce() -> Outcome {
    let clone = shell::target().join("reproduce");
    if clone.exists() {
        std::fs::remove_dir_all(&clone).map_err(|error| error.to_string())?;
    }
    let mut git = shell::program("git");
    shell::run(git.args(["clone", "--quiet", "."]).arg(&clone))?;
    let changed = shell::run_quietly(shell::program("git").args(["status", "--porcelain"]))?;
    if !changed.is_empty() {
        return Err("commit first: a commit is what is reproduced".to_owned());
    }
    let first = dist()?;
    say("the same commit once more, from a clone");
    let mut again = shell::cargo();
    again.current_dir(&clone).args(["xtask", "dist"]);
    again.env("CARGO_TARGET_DIR", clone.join("target"));
    shell::run(&mut again)?;
    let read = |path: PathBuf| std::fs::read(path).map_err(|error| error.to_string());
    if read(first)? == read(clone.join("target/dist/widthwise.html"))? {
        say("the same bytes");
        Ok(())
    } else {
        Err("the two files differ".to_owned())
    }
}

/// The WebAssembly with its JavaScript side; the answer is its folder.
pub fn engine() -> Outcome<PathBuf> {
    let root = shell::root();
    let compiler = Compiler::find()?;
    let mut tools = fetch::wasm_tools()?;
    tools.push(root.join("www/node_modules/.bin"));
    let out = shell::target().join("wasm-pkg");
    let mut ingredients = Ingredients::default()
        .text(&compiler.version()?)
        .files(&root.join("Cargo.lock"))?;
    for part in [
        "Cargo.toml",
        "crates/core/Cargo.toml",
        "crates/core/src",
        "crates/sheet/Cargo.toml",
        "crates/sheet/src",
        "crates/web/Cargo.toml",
        "crates/web/src",
    ] {
        ingredients = ingredients.files(&root.join(part))?;
    }
    ingredients = ingredients
        .files(&root.join("www/package-lock.json"))?
        .files(&root.join("crates/xtask/src/build.rs"))?;
    stamp::unless_made(out.join(".stamp"), &ingredients, || {
        say("building the WebAssembly");
        // A program is looked up on the PATH of this process, not on the child's.
        let folder = tools.first().ok_or("no wasm-pack")?;
        let mut pack = shell::program(folder.join("wasm-pack"));
        compiler.prepare(&mut pack, &tools)?;
        pack.env(
            "RUSTFLAGS",
            format!("{} -Clink-arg=--max-memory={MOST_MEMORY}", same_anywhere()),
        );
        pack.args([
            "--quiet",
            "build",
            "--release",
            "--mode",
            "no-install",
            "--no-pack",
            "--target",
            "web",
            "--out-name",
            "engine",
            "--out-dir",
        ]);
        pack.arg(&out).arg(root.join("crates/web"));
        shell::run(&mut pack)
    })?;
    Ok(out)
}

/// Folders of this machine must not show in the product, nor change its hash.
fn same_anywhere() -> String {
    let home = std::env::var("HOME").unwrap_or_default();
    let cargo_home = std::env::var("CARGO_HOME").unwrap_or_else(|_| format!("{home}/.cargo"));
    format!(
        "--remap-path-prefix={cargo_home}=cargo --remap-path-prefix={}=widthwise",
        shell::root().display()
    )
}

/// Version of the package and commit, as shown in the page.
fn version() -> String {
    let package = env!("CARGO_PKG_VERSION");
    let git = |words: &[&str]| {
        shell::program("git")
            .args(words)
            .output()
            .ok()
            .filter(|output| output.status.success())
    };
    let Some(commit) = git(&["rev-parse", "--short=10", "HEAD"]) else {
        return package.to_owned();
    };
    let changed = git(&["status", "--porcelain"]).is_some_and(|output| !output.stdout.is_empty());
    let commit = String::from_utf8_lossy(&commit.stdout).trim().to_owned();
    format!(
        "{package} ({commit}{})",
        if changed { ", changed" } else { "" }
    )
}

/// Rewrites what is generated from the Rust types and kept in the repository: TypeScript types and
/// the scan sheet's JSON Schema (that one is compared by a test of the sheet).
pub fn generated() -> Outcome {
    types(&shell::root().join("www/shared/generated"))?;
    let mut schema = shell::cargo();
    schema.args([
        "test",
        "--quiet",
        "--package",
        "widthwise-sheet",
        "--lib",
        "schema",
    ]);
    shell::run_quietly(schema.env("UPDATE_SCHEMA", "1")).map(|_| ())
}

/// Writes the TypeScript types of requests and answers into a folder.
pub fn types(folder: &Path) -> Outcome {
    shell::clear(folder)?;
    let mut command = shell::cargo();
    command.args([
        "run",
        "--quiet",
        "--package",
        "widthwise-web",
        "--features",
        "typescript",
        "--example",
        "bindings",
        "--",
    ]);
    shell::run_quietly(command.arg(folder)).map(|_| ())
}
