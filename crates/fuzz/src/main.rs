//! `widthwise-fuzz run TARGET [--seconds N] [--seed N]`: fuzzes a target with a mutator that needs nothing but
//! stable Rust. `widthwise-fuzz replay`: the kept corpus.
//! `widthwise-fuzz golden FILE`: the golden set with the native fingerprints.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::{Path, PathBuf};
use std::process::ExitCode;
use std::time::{Duration, Instant};
use widthwise_fuzz::choices::{Choices, bytes};
use widthwise_fuzz::targets::{TARGETS, Target, find};
use widthwise_fuzz::{corpus, golden};

/// An input that takes longer is a hang.
const MOST_SECONDS: f64 = 10.0;

fn main() -> ExitCode {
    let words: Vec<String> = std::env::args().skip(1).collect();
    let words: Vec<&str> = words.iter().map(String::as_str).collect();
    let outcome = match words.as_slice() {
        ["golden", file] => golden_to(Path::new(file)),
        ["replay"] => replay(),
        ["run", name, options @ ..] => match find(name) {
            Some(target) => run(
                target,
                option(options, "--seconds", 600),
                option(options, "--seed", 1),
            ),
            None => Err(format!("no target {name}")),
        },
        _ => {
            let names: Vec<&str> = TARGETS.iter().map(|(name, _)| *name).collect();
            Err(format!(
                "usage: widthwise-fuzz run TARGET [--seconds N] [--seed N] | replay | golden FILE; targets: {}",
                names.join(", ")
            ))
        }
    };
    match outcome {
        Ok(()) => ExitCode::SUCCESS,
        Err(message) => {
            eprintln!("{message}");
            ExitCode::FAILURE
        }
    }
}

fn option(options: &[&str], name: &str, default: u64) -> u64 {
    let place = options.iter().position(|word| *word == name);
    let value = place.and_then(|i| options.get(i + 1));
    value.and_then(|text| text.parse().ok()).unwrap_or(default)
}

fn golden_to(file: &Path) -> Result<(), String> {
    let answered = golden::answered();
    let told = answered
        .iter()
        .filter(|one| one["answered"] == true)
        .count();
    let text = serde_json::to_string(&answered).map_err(|error| error.to_string())?;
    std::fs::write(file, text).map_err(|error| format!("{}: {error}", file.display()))?;
    println!(
        "{} requests, {told} answered, the others refused",
        answered.len()
    );
    Ok(())
}

fn replay() -> Result<(), String> {
    for (name, target) in TARGETS {
        let files = corpus::files(name);
        for file in &files {
            let data =
                std::fs::read(file).map_err(|error| format!("{}: {error}", file.display()))?;
            tried(target, &data).map_err(|what| format!("{}: {what}", file.display()))?;
        }
        println!("{name}: {} inputs", files.len());
    }
    Ok(())
}

/// Seconds this thread has computed (Linux), so that a busy machine makes no hang; elsewhere those passed.
fn computed(since: Instant) -> f64 {
    let text = std::fs::read_to_string("/proc/thread-self/schedstat").unwrap_or_default();
    let nanoseconds = text
        .split(' ')
        .next()
        .and_then(|word| word.parse::<f64>().ok());
    nanoseconds.map_or_else(|| since.elapsed().as_secs_f64(), |ns| ns * 1e-9)
}

/// Time taken, or what went wrong.
fn tried(target: fn(&[u8]), data: &[u8]) -> Result<f64, String> {
    let clock = Instant::now();
    let start = computed(clock);
    let outcome = catch_unwind(AssertUnwindSafe(|| target(data)));
    let seconds = computed(clock) - start;
    match outcome {
        Err(panic) => Err(panic
            .downcast_ref::<String>()
            .cloned()
            .or_else(|| panic.downcast_ref::<&str>().map(|text| (*text).to_owned()))
            .unwrap_or_else(|| "panic".to_owned())),
        Ok(()) if seconds > MOST_SECONDS => Err(format!("took {seconds:.1} s")),
        Ok(()) => Ok(seconds),
    }
}

fn run((name, target): Target, seconds: u64, seed: u64) -> Result<(), String> {
    let kept: Vec<Vec<u8>> = corpus::files(name)
        .iter()
        .filter_map(|file| std::fs::read(file).ok())
        .collect();
    let found = PathBuf::from("target/fuzz").join(name);
    std::fs::create_dir_all(&found).map_err(|error| error.to_string())?;
    let end = Instant::now() + Duration::from_secs(seconds);
    let (mut count, mut bad, mut slowest) = (0_u64, 0_u32, (0.0, Vec::new()));
    while Instant::now() < end {
        let data = input(&kept, seed.wrapping_mul(1 << 40).wrapping_add(count));
        count += 1;
        // A hang that has to be ended from outside leaves its input behind.
        std::fs::write(found.join("last"), &data).map_err(|error| error.to_string())?;
        match tried(target, &data) {
            Ok(seconds) if seconds > slowest.0 => slowest = (seconds, data),
            Ok(_) => {}
            Err(what) => {
                bad += 1;
                let file = found.join(format!("found-{seed}-{count}"));
                std::fs::write(&file, &data).map_err(|error| error.to_string())?;
                println!("{}: {what}", file.display());
            }
        }
    }
    std::fs::write(found.join("slowest"), &slowest.1).map_err(|error| error.to_string())?;
    println!(
        "{name}: {count} inputs in {seconds} s from seed {seed}, {bad} bad, slowest {:.2} s, most memory {}",
        slowest.0,
        memory()
    );
    if bad == 0 {
        Ok(())
    } else {
        Err(format!("{name}: {bad} bad inputs"))
    }
}

/// Fresh bytes, or a kept input changed in a few places.
fn input(kept: &[Vec<u8>], seed: u64) -> Vec<u8> {
    let fresh = bytes(seed, 2048);
    let mut c = Choices::new(&fresh);
    if kept.is_empty() || c.rarely(2) {
        let length = c.below(1500) + 16;
        return bytes(seed ^ 0x5555_5555, length);
    }
    let mut data = c.one(kept).clone();
    for _ in 0..=c.below(6) {
        let at = c.below(data.len() + 1);
        match c.below(4) {
            0 if at < data.len() => data[at] ^= 1 << c.below(8),
            1 => {
                let end = (at + c.below(12)).min(data.len());
                data.drain(at..end);
            }
            2 => {
                let other = c.one(kept);
                let from = c.below(other.len() + 1);
                let piece: Vec<u8> = other.iter().skip(from).take(c.below(64)).copied().collect();
                data.splice(at..at, piece);
            }
            _ => {
                let text = c.text(6).into_bytes();
                data.splice(at..at, text);
            }
        }
    }
    data
}

/// Most memory this process has used (Linux).
fn memory() -> String {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find_map(|line| line.strip_prefix("VmHWM:"));
    line.unwrap_or("unknown").trim().to_owned()
}
