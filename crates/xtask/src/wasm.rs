//! A compiler for wasm32-unknown-unknown.

use crate::fetch;
use crate::shell::{self, Outcome, say};
use std::path::{Path, PathBuf};
use std::process::Command;

const TARGET: &str = "wasm32-unknown-unknown";

/// Where the compiler for WebAssembly comes from.
pub enum Compiler {
    /// rustup brought the target.
    Rustup,
    /// Debian's compiler for browsers, with a standard library built here; the folder with its `rustc` and `cargo`.
    Debian(PathBuf),
}

impl Compiler {
    /// Finds or makes one.
    pub fn find() -> Outcome<Self> {
        if has_target("rustc") {
            return Ok(Self::Rustup);
        }
        if shell::on_path("rustup").is_some() {
            say("fetching the WebAssembly target (rustup target add)");
            let added = shell::program("timeout")
                .args(["300", "rustup", "target", "add", TARGET])
                .output();
            if added.is_ok_and(|output| output.status.success()) && has_target("rustc") {
                return Ok(Self::Rustup);
            }
            say("that road is closed here: taking Debian's compiler");
        }
        debian_compiler().map(Self::Debian)
    }

    /// A cargo that can build for WebAssembly, with its own target folder.
    pub fn cargo(&self) -> Outcome<Command> {
        let mut command = match self {
            Self::Rustup => shell::cargo(),
            Self::Debian(bin) => shell::program(bin.join("cargo")),
        };
        self.prepare(&mut command, &[])?;
        Ok(command)
    }

    /// Sets a child process up so that the `cargo` and `rustc` it finds can build for WebAssembly.
    pub fn prepare(&self, command: &mut Command, tools: &[PathBuf]) -> Outcome {
        let mut first = tools.to_vec();
        if let Self::Debian(bin) = self {
            first.insert(0, bin.clone());
            command.env("RUSTC", bin.join("rustc"));
            command.env("CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_LINKER", "wasm-ld-22");
            for passed_on in ["CARGO", "RUSTUP_TOOLCHAIN", "RUSTUP_HOME", "RUSTDOC"] {
                command.env_remove(passed_on);
            }
        }
        command.env("PATH", shell::path_with(&first)?);
        command.env("CARGO_TARGET_DIR", self.target());
        Ok(())
    }

    /// The two compilers must not share one: each would rebuild what the other built.
    pub fn target(&self) -> PathBuf {
        shell::target().join(match self {
            Self::Rustup => "wasm",
            Self::Debian(_) => "wasm-debian",
        })
    }

    /// Name and version, as a part of fingerprints.
    pub fn version(&self) -> Outcome<String> {
        let mut rustc = match self {
            Self::Rustup => shell::program("rustc"),
            Self::Debian(bin) => shell::program(bin.join("rustc")),
        };
        shell::run_quietly(rustc.arg("-vV"))
    }
}

fn has_target(rustc: &str) -> bool {
    let output = shell::program(rustc)
        .args(["--print", "target-libdir", "--target", TARGET])
        .output();
    output.is_ok_and(|output| {
        let folder = String::from_utf8_lossy(&output.stdout).trim().to_owned();
        output.status.success()
            && shell::files_below(Path::new(&folder))
                .iter()
                .any(|file| file.to_string_lossy().contains("libcore-"))
    })
}

/// Debian carries a current compiler for its browsers, but no library for WebAssembly: it is built
/// once from Debian's own source, into a system root of ours, so that nothing of the system changes.
fn debian_compiler() -> Outcome<PathBuf> {
    fetch::debian(
        &["rustc-web", "cargo-web", "rust-web-src", "lld-22"],
        "Debian's compiler for WebAssembly",
        &[
            "/usr/bin/rustc",
            "/usr/bin/cargo",
            "/usr/bin/wasm-ld-22",
            "/usr/lib/rustlib/src/rust/library/std",
        ],
    )?;
    let version = shell::run_quietly(shell::program("/usr/bin/rustc").arg("--version"))?;
    let version = version
        .split_whitespace()
        .nth(1)
        .unwrap_or("unknown")
        .to_owned();
    let place = shell::cache().join(format!("rust-{version}"));
    let (bin, rustlib) = (place.join("bin"), place.join("sysroot/lib/rustlib"));
    let library = rustlib.join(TARGET).join("lib");
    if library.is_dir() {
        return Ok(bin);
    }
    say("building the standard library for WebAssembly (once)");
    let crate_place = place.join("build");
    shell::clear(&crate_place)?;
    shell::write(
        &crate_place.join("Cargo.toml"),
        "[package]\nname = \"empty\"\nedition = \"2021\"\n[lib]\npath = \"lib.rs\"\n[workspace]\n",
    )?;
    shell::write(&crate_place.join("lib.rs"), "")?;
    let mut build = shell::program("/usr/bin/cargo");
    build
        .current_dir(&crate_place)
        .env("RUSTC", "/usr/bin/rustc")
        .env("RUSTC_BOOTSTRAP", "1");
    build
        .env("CARGO_TARGET_DIR", crate_place.join("target"))
        .env("CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_LINKER", "wasm-ld-22");
    for passed_on in ["CARGO", "RUSTUP_TOOLCHAIN", "RUSTFLAGS"] {
        build.env_remove(passed_on);
    }
    build.args([
        "build",
        "--release",
        "--quiet",
        "--target",
        TARGET,
        "-Zbuild-std=std,panic_abort,proc_macro,test",
    ]);
    shell::run_quietly(&mut build)?;

    shell::clear(&bin)?;
    shell::clear(&rustlib)?;
    link("/usr/bin/cargo", &bin.join("cargo"))?;
    link(
        "/usr/lib/rustlib/x86_64-unknown-linux-gnu",
        &rustlib.join("x86_64-unknown-linux-gnu"),
    )?;
    let wrapper = bin.join("rustc");
    shell::write(
        &wrapper,
        &format!(
            "#!/bin/sh\nexec /usr/bin/rustc --sysroot '{}' \"$@\"\n",
            place.join("sysroot").display()
        ),
    )?;
    shell::run(shell::program("chmod").arg("755").arg(&wrapper))?;
    let half_done = library.with_extension("half");
    shell::clear(&half_done)?;
    for file in shell::files_below(&crate_place.join("target").join(TARGET).join("release/deps")) {
        let name = file
            .file_name()
            .unwrap_or_default()
            .to_string_lossy()
            .into_owned();
        if name.ends_with(".rlib") && !name.starts_with("libempty") {
            std::fs::copy(&file, half_done.join(&name))
                .map_err(|error| format!("cannot copy {name}: {error}"))?;
        }
    }
    std::fs::rename(&half_done, &library).map_err(|error| error.to_string())?;
    Ok(bin)
}

fn link(to: &str, from: &Path) -> Outcome {
    std::os::unix::fs::symlink(to, from)
        .map_err(|error| format!("cannot link {}: {error}", from.display()))
}
