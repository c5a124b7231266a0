//! Every command of the repository: `cargo xtask COMMAND`. README.md names the two that matter.

mod bench;
mod build;
mod fetch;
mod on_wasm;
mod serve;
mod shell;
mod stamp;
mod suites;
mod tally;
mod tidy;
mod wasm;

use shell::Outcome;

const HELP: &str = "\
cargo xtask serve [--port N] [--no-open]   build everything, write target/dist/widthwise.html, serve it on localhost
cargo xtask test                           every check: format, lints, rules, native, WebAssembly, page, browser, references
cargo xtask dist                           build target/dist/widthwise.html and print its size and hash
cargo xtask fetch                          only what the others need from outside, e.g. before a machine goes offline
cargo xtask page                           the browser tests in Chromium (--all: Firefox and WebKit too)
cargo xtask types                          rewrite the TypeScript types of requests and answers, and the JSON Schema
cargo xtask tidy                           the rules of the house
cargo xtask validate                       rerun the independent reference scripts and compare
cargo xtask bench                          one table: native, WebAssembly, independent peer, recorded ratios (--record, --details)
cargo xtask reproduce                      build this commit twice, the second time from a clone, and compare
cargo xtask shots                          screenshots of every width and theme into target/shots
";

fn main() -> std::process::ExitCode {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let words: Vec<&str> = arguments.iter().map(String::as_str).collect();
    let outcome: Outcome = match words.split_first() {
        Some((&"serve", rest)) => serve::serve(rest),
        Some((&"test", [])) => suites::test(),
        Some((&"dist", [])) => build::dist().map(|_| ()),
        Some((&"page", rest)) => suites::page(rest),
        Some((&"fetch", [])) => fetch::everything(),
        Some((&"reproduce", [])) => build::reproduce(),
        Some((&"types", [])) => build::generated(),
        Some((&"tidy", [])) => tidy::report(),
        Some((&"validate", rest)) => bench::validate(rest),
        Some((&"bench", rest)) => bench::bench(rest),
        Some((&"shots", rest)) => bench::shots(rest),
        _ => {
            print!("{HELP}");
            return if words.is_empty() { 0.into() } else { 2.into() };
        }
    };
    match outcome {
        Ok(()) => 0.into(),
        Err(message) => {
            eprintln!("xtask: {message}");
            1.into()
        }
    }
}
