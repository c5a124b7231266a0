//! The scan sheet without a browser: `widthwise-batch curve|points|fit|trials|check SHEET.json`.
//!
//! JSON on stdout, or CSV with `--csv`. Exit codes: 0 done, 1 the sheet is refused (message on
//! stderr), 2 the command line is not understood, 3 a file cannot be read, 4 the fit did not converge.
#![deny(clippy::indexing_slicing)]

mod arguments;
mod run;

use std::io::Write;
use std::process::ExitCode;

fn main() -> ExitCode {
    let parsed = arguments::parse(std::env::args_os().skip(1));
    let outcome = parsed.and_then(|job| match job {
        arguments::Job::Help => Ok(run::Output {
            text: arguments::HELP.to_string(),
            exit: 0,
            note: String::new(),
        }),
        arguments::Job::Run(options) => run::run(&options),
    });
    match outcome {
        Ok(output) => {
            if !output.note.is_empty() {
                eprintln!("widthwise-batch: {}", output.note);
            }
            let mut out = std::io::stdout().lock();
            // A reader that has seen enough (head) is no error.
            match out
                .write_all(output.text.as_bytes())
                .and_then(|()| out.flush())
            {
                Ok(()) => ExitCode::from(output.exit),
                Err(e) if e.kind() == std::io::ErrorKind::BrokenPipe => ExitCode::SUCCESS,
                Err(e) => {
                    eprintln!("widthwise-batch: the output could not be written: {e}");
                    ExitCode::from(3)
                }
            }
        }
        Err(failure) => {
            eprintln!("widthwise-batch: {}", failure.message);
            ExitCode::from(failure.exit)
        }
    }
}
