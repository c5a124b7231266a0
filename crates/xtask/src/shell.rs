//! Running other programs, saying so in one line each.

use std::ffi::OsStr;
use std::io::{BufRead, BufReader, Write};
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// Success, or one sentence about what is wrong.
pub type Outcome<T = ()> = Result<T, String>;

/// The repository's top folder.
pub fn root() -> PathBuf {
    let here = Path::new(env!("CARGO_MANIFEST_DIR"));
    here.ancestors().nth(2).unwrap_or(here).to_path_buf()
}

/// `target/`, wherever the reader of this sets it.
pub fn target() -> PathBuf {
    std::env::var_os("CARGO_TARGET_DIR").map_or_else(|| root().join("target"), PathBuf::from)
}

/// What is fetched and built once per version, shared by all clones of one user.
pub fn cache() -> PathBuf {
    let base = std::env::var_os("XDG_CACHE_HOME").map(PathBuf::from);
    let home = std::env::var_os("HOME").map(|home| PathBuf::from(home).join(".cache"));
    base.or(home).unwrap_or_else(target).join("widthwise")
}

/// One line about what happens now.
pub fn say(text: impl std::fmt::Display) {
    println!("== {text}");
    // A lost line of talk must not stop the work.
    let _ = std::io::stdout().flush();
}

/// A program to be run in the repository's top folder.
pub fn program(name: impl AsRef<OsStr>) -> Command {
    let mut command = Command::new(name);
    command.current_dir(root());
    command
}

/// The cargo that runs us.
pub fn cargo() -> Command {
    program(std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into()))
}

fn text(command: &Command) -> String {
    let mut words = vec![command.get_program().to_string_lossy().into_owned()];
    words.extend(
        command
            .get_args()
            .map(|word| word.to_string_lossy().into_owned()),
    );
    words.join(" ")
}

/// Runs to the end with our input and output.
pub fn run(command: &mut Command) -> Outcome {
    let status = command
        .status()
        .map_err(|error| format!("cannot run {}: {error}", text(command)))?;
    if status.success() {
        Ok(())
    } else {
        Err(format!("failed ({status}): {}", text(command)))
    }
}

/// Runs quietly; what it said is shown only on failure.
pub fn run_quietly(command: &mut Command) -> Outcome<String> {
    let output = command
        .stdin(Stdio::null())
        .output()
        .map_err(|error| format!("cannot run {}: {error}", text(command)))?;
    let said = String::from_utf8_lossy(&output.stdout).into_owned();
    if output.status.success() {
        return Ok(said);
    }
    print!("{said}{}", String::from_utf8_lossy(&output.stderr));
    Err(format!("failed ({}): {}", output.status, text(command)))
}

/// Runs, showing standard output as it comes and keeping it; the flag says whether it succeeded.
pub fn run_kept(command: &mut Command) -> Outcome<(bool, String)> {
    let mut child = command
        .stdout(Stdio::piped())
        .spawn()
        .map_err(|error| format!("cannot run {}: {error}", text(command)))?;
    let mut kept = String::new();
    if let Some(stdout) = child.stdout.take() {
        for line in BufReader::new(stdout).lines() {
            let line =
                line.map_err(|error| format!("unreadable output of {}: {error}", text(command)))?;
            println!("{line}");
            kept.push_str(&line);
            kept.push('\n');
        }
    }
    let status = child.wait().map_err(|error| error.to_string())?;
    Ok((status.success(), kept))
}

/// Where a program is on PATH.
pub fn on_path(name: &str) -> Option<PathBuf> {
    let paths = std::env::var_os("PATH")?;
    std::env::split_paths(&paths)
        .map(|folder| folder.join(name))
        .find(|path| path.is_file())
}

/// PATH with folders put before it.
pub fn path_with(first: &[PathBuf]) -> Outcome<std::ffi::OsString> {
    let paths = std::env::var_os("PATH").unwrap_or_default();
    std::env::join_paths(first.iter().cloned().chain(std::env::split_paths(&paths)))
        .map_err(|error| error.to_string())
}

/// Reads a text file of the repository.
pub fn read(path: &Path) -> Outcome<String> {
    std::fs::read_to_string(path)
        .map_err(|error| format!("cannot read {}: {error}", path.display()))
}

/// Writes a file, making its folder.
pub fn write(path: &Path, text: &str) -> Outcome {
    if let Some(folder) = path.parent() {
        make_folder(folder)?;
    }
    std::fs::write(path, text).map_err(|error| format!("cannot write {}: {error}", path.display()))
}

/// Makes a folder and those above it.
pub fn make_folder(path: &Path) -> Outcome {
    std::fs::create_dir_all(path)
        .map_err(|error| format!("cannot make {}: {error}", path.display()))
}

/// Empties a folder of ours.
pub fn clear(path: &Path) -> Outcome {
    if path.exists() {
        std::fs::remove_dir_all(path)
            .map_err(|error| format!("cannot clear {}: {error}", path.display()))?;
    }
    make_folder(path)
}

/// All files below a folder, sorted, so that everything made from them is reproducible.
pub fn files_below(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    let mut open = vec![folder.to_path_buf()];
    while let Some(next) = open.pop() {
        for entry in std::fs::read_dir(&next).into_iter().flatten().flatten() {
            let path = entry.path();
            match entry.file_type() {
                Ok(kind) if kind.is_dir() => open.push(path),
                Ok(kind) if kind.is_file() => found.push(path),
                _ => {}
            }
        }
    }
    found.sort();
    found
}
