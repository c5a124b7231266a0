//! What the commands need from outside: the ordinary road first, then what Debian packages.

use crate::shell::{self, Outcome, say};
use crate::stamp::{self, Ingredients};
use crate::wasm::Compiler;
use std::path::{Path, PathBuf};

/// Version of wasm-pack, built once into the cache.
const WASM_PACK: &str = "0.15.1";
/// Version of the WebDriver for Firefox.
const GECKODRIVER: &str = "0.37.1";

/// All that `serve` and `test` need.
pub fn everything() -> Outcome {
    let compiler = Compiler::find()?;
    say(format!(
        "compiler for WebAssembly: {}",
        compiler.version()?.lines().next().unwrap_or_default()
    ));
    wasm_tools()?;
    npm_packages()?;
    python()?;
    chromium()?;
    say("fetching the crates");
    shell::run(shell::cargo().args(["fetch", "--quiet", "--locked"]))
}

/// Debian packages, installed if a file they bring is missing.
pub fn debian(packages: &[&str], why: &str, brings: &[&str]) -> Outcome {
    if brings.iter().all(|file| Path::new(file).exists()) {
        return Ok(());
    }
    let by_hand = format!(
        "apt-get install --no-install-recommends {}",
        packages.join(" ")
    );
    if shell::on_path("apt-get").is_none() {
        return Err(format!("{why} is missing; on Debian: {by_hand}"));
    }
    let root = shell::run_quietly(shell::program("id").arg("-u"))?.trim() == "0";
    if !root {
        return Err(format!(
            "{why} is missing and needs an administrator: sudo {by_hand}"
        ));
    }
    say(format!("installing {why} ({})", packages.join(" ")));
    let install = || {
        shell::run_quietly(
            shell::program("apt-get")
                .env("DEBIAN_FRONTEND", "noninteractive")
                .args(["install", "--yes", "--quiet", "--no-install-recommends"])
                .args(packages),
        )
    };
    // A fresh machine has no package lists; an old one has stale ones.
    shell::run_quietly(shell::program("apt-get").args(["update", "--quiet"]))?;
    install().map(|_| ())
}

/// A program built by `cargo install`, kept by version; the answer is its folder.
pub fn cargo_tool(name: &str, version: &str) -> Outcome<PathBuf> {
    let place = shell::cache()
        .join("tools")
        .join(format!("{name}-{version}"));
    let bin = place.join("bin");
    if bin.is_dir() && !shell::files_below(&bin).is_empty() {
        return Ok(bin);
    }
    say(format!("building {name} {version} (once)"));
    shell::make_folder(&place)?;
    let install = |locked: &[&str]| {
        let mut command = shell::cargo();
        // Away from the repository's settings, and from what the running cargo passes on.
        command
            .current_dir(&place)
            .env_remove("CARGO_TARGET_DIR")
            .env_remove("RUSTFLAGS");
        command
            .args([
                "install",
                "--quiet",
                name,
                "--version",
                &format!("={version}"),
                "--root",
            ])
            .arg(&place)
            .args(locked);
        shell::run(&mut command)
    };
    // A registry mirror may lag behind the newest of the locked versions.
    install(&["--locked"]).or_else(|_| {
        say(format!(
            "building {name} {version} again, without its lock file"
        ));
        install(&[])
    })?;
    Ok(bin)
}

/// wasm-pack and the wasm-bindgen of the very version in Cargo.lock.
pub fn wasm_tools() -> Outcome<Vec<PathBuf>> {
    let version = locked_version("wasm-bindgen")?;
    Ok(vec![
        cargo_tool("wasm-pack", WASM_PACK)?,
        cargo_tool("wasm-bindgen-cli", &version)?,
    ])
}

fn locked_version(package: &str) -> Outcome<String> {
    let lock = shell::read(&shell::root().join("Cargo.lock"))?;
    let entry = format!("name = \"{package}\"\nversion = \"");
    let after = lock.split_once(&entry).map(|(_, rest)| rest);
    let version = after.and_then(|rest| rest.split('"').next());
    version
        .map(str::to_owned)
        .ok_or_else(|| format!("Cargo.lock has no {package}"))
}

/// The npm packages of `www`, also seen from `tests/browser`.
pub fn npm_packages() -> Outcome {
    let www = shell::root().join("www");
    let node = shell::run_quietly(shell::program("node").arg("--version"))
        .map_err(|_| "Node.js 20.19 or later is needed (https://nodejs.org)".to_owned())?;
    let ingredients = Ingredients::default()
        .text(&node)
        .files(&www.join("package-lock.json"))?;
    stamp::unless_made(www.join("node_modules/.stamp"), &ingredients, || {
        say("fetching the npm packages of www");
        shell::run_quietly(shell::program("npm").arg("ci").current_dir(&www)).map(|_| ())
    })?;
    let link = shell::root().join("tests/browser/node_modules");
    if link.exists() {
        return Ok(());
    }
    std::os::unix::fs::symlink("../../www/node_modules", &link)
        .map_err(|error| format!("cannot link {}: {error}", link.display()))
}

/// A Python with the pinned packages of the independent checks.
pub fn python() -> Outcome<PathBuf> {
    let pins = shell::root().join("tests/reference/requirements.txt");
    let version = shell::run_quietly(shell::program("python3").arg("--version"))
        .map_err(|_| "Python 3 is needed for the independent checks".to_owned())?;
    let ingredients = Ingredients::default().text(&version).files(&pins)?;
    let place = shell::cache().join(format!("python-{}", ingredients.print()));
    stamp::unless_made(place.join("stamp"), &ingredients, || {
        let venv = || {
            shell::run_quietly(
                shell::program("python3")
                    .args(["-m", "venv", "--clear"])
                    .arg(&place),
            )
        };
        let has_venv = shell::program("python3")
            .args(["-c", "import ensurepip"])
            .output();
        if !has_venv.is_ok_and(|output| output.status.success()) {
            debian(
                &["python3-venv"],
                "Python's venv module",
                &["/usr/share/doc/python3-venv"],
            )?;
        }
        say("fetching the Python packages of the independent checks");
        venv()?;
        shell::run_quietly(
            shell::program(place.join("bin/python"))
                .args(["-m", "pip", "install", "--quiet", "--requirement"])
                .arg(&pins),
        )
        .map(|_| ())
    })?;
    Ok(place.join("bin/python"))
}

/// Chromium and its WebDriver.
pub fn chromium() -> Outcome {
    let known = ["chromium", "chromium-browser", "google-chrome"];
    if known.iter().any(|name| shell::on_path(name).is_some())
        && shell::on_path("chromedriver").is_some()
    {
        return Ok(());
    }
    debian(
        &["chromium", "chromium-driver"],
        "Chromium with its WebDriver",
        &["/usr/bin/chromium", "/usr/bin/chromedriver"],
    )
}

/// Firefox and its WebDriver; the answer is the driver's folder.
pub fn firefox() -> Outcome<PathBuf> {
    if shell::on_path("firefox").is_none() {
        debian(&["firefox-esr"], "Firefox", &["/usr/bin/firefox-esr"])?;
    }
    cargo_tool("geckodriver", GECKODRIVER)
}

/// WebKit, its WebDriver, and a screen for it.
pub fn webkit() -> Outcome {
    debian(
        &["webkit2gtk-driver", "xvfb"],
        "WebKit with its WebDriver",
        &["/usr/bin/WebKitWebDriver", "/usr/bin/Xvfb"],
    )
}
