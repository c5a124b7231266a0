//! The command line.

use lexopt::prelude::*;
use std::ffi::OsString;

/// Shown by `--help`.
pub const HELP: &str = "\
widthwise-batch COMMAND SHEET.json [options]

Commands
  check    everything that is wrong with the sheet, and what is assumed
  curve    Born, radiated and observed cross section with contributions
  points   per row: expected, seen, pull, p-value, rate, time to 10 %
  fit      parameters, errors, correlation, pulls
  trials   pseudo-experiments of the sheet, a range of them
  merge    joins files that trials wrote for ranges: SHEET.json RANGE.json ...
  plan     timetable of the hours left, forecasts, guaranteed efficiency
  amplitude  propagators, poles and conventions; or --part plane, image, slice, waves
  rows     the data rows (with --csv: as a table)
  log      lines for an electronic log

Options
  --csv            CSV instead of JSON (curve, points, fit, rows, trials, plan, amplitude)
  --from 2840MeV   least W of a curve (default: the data's range)
  --to 2.89GeV     largest W of a curve
  --energies 500   number of energies of a curve
  --part line      amplitude: line (Delta against W, poles), plane (|Delta| over complex
                   energies), image (|M|^2 over W and cos theta), slice (by diagram along
                   cos theta at --at W), waves (partial waves at --at W, unitarity)
  --of 1           amplitude: which propagator
  --at 3.1GeV      amplitude: W of a slice or of partial waves (default: the middle)
  --first 0        number of the first trial
  --count 100      how many trials
  --seed 1         seed of the trials
  --profiles       trials: also the coverage of profile intervals
  --costs          plan: also what each demand and property of the machine costs

SHEET.json may be - for standard input. Exit codes: 0 done, 1 sheet refused,
2 command line not understood, 3 file not readable, 4 fit not converged.
";

/// Why nothing was done.
#[derive(Debug, PartialEq)]
pub struct Failure {
    /// Exit code.
    pub exit: u8,
    /// One sentence.
    pub message: String,
}

/// What is asked for.
#[derive(Debug, PartialEq)]
pub enum Job {
    /// The help text.
    Help,
    /// Something to do.
    Run(Box<Options>),
}

/// What is asked of a sheet.
#[derive(Debug, PartialEq, Clone)]
pub struct Options {
    /// Command.
    pub command: String,
    /// Path of the sheet.
    pub sheet: OsString,
    /// Further files (merge).
    pub files: Vec<OsString>,
    /// CSV wanted.
    pub csv: bool,
    /// Least W as typed.
    pub from: Option<String>,
    /// Largest W as typed.
    pub to: Option<String>,
    /// Energies of a curve.
    pub energies: u32,
    /// Part of the amplitude.
    pub part: String,
    /// Which propagator, counted from 1.
    pub of: u16,
    /// W of a slice as typed.
    pub at: Option<String>,
    /// First trial.
    pub first: u64,
    /// How many trials.
    pub count: u64,
    /// Seed.
    pub seed: u64,
    /// Coverage of profile intervals.
    pub profiles: bool,
    /// What each demand of a plan costs.
    pub costs: bool,
}

const COMMANDS: [&str; 10] = [
    "check",
    "curve",
    "points",
    "fit",
    "trials",
    "merge",
    "plan",
    "amplitude",
    "rows",
    "log",
];
const PARTS: [&str; 5] = ["line", "plane", "image", "slice", "waves"];

fn usage(message: impl Into<String>) -> Failure {
    Failure {
        exit: 2,
        message: message.into() + " (widthwise-batch --help tells what is possible)",
    }
}

/// Reads the command line.
///
/// # Errors
/// Anything that is not understood, with exit code 2.
pub fn parse(arguments: impl Iterator<Item = OsString>) -> Result<Job, Failure> {
    let mut parser = lexopt::Parser::from_args(arguments);
    let (mut command, mut sheet) = (None, None);
    let mut options = Options {
        command: String::new(),
        sheet: OsString::new(),
        files: Vec::new(),
        csv: false,
        from: None,
        to: None,
        energies: 500,
        part: "line".into(),
        of: 1,
        at: None,
        first: 0,
        count: 100,
        seed: 1,
        profiles: false,
        costs: false,
    };
    let wrong = |e: lexopt::Error| usage(e.to_string());
    while let Some(argument) = parser.next().map_err(wrong)? {
        match argument {
            Short('h') | Long("help") => return Ok(Job::Help),
            Long("csv") => options.csv = true,
            Long("profiles") => options.profiles = true,
            Long("costs") => options.costs = true,
            Long("from") => options.from = Some(text(&mut parser)?),
            Long("to") => options.to = Some(text(&mut parser)?),
            Long("energies") => options.energies = number(&mut parser)?,
            Long("part") => options.part = text(&mut parser)?,
            Long("of") => options.of = number(&mut parser)?,
            Long("at") => options.at = Some(text(&mut parser)?),
            Long("first") => options.first = number(&mut parser)?,
            Long("count") => options.count = number(&mut parser)?,
            Long("seed") => options.seed = number(&mut parser)?,
            Value(value) if command.is_none() => {
                command = Some(value.string().map_err(wrong)?);
            }
            Value(value) if sheet.is_none() => sheet = Some(value),
            Value(value) if command.as_deref() == Some("merge") => options.files.push(value),
            other => return Err(wrong(other.unexpected())),
        }
    }
    let Some(command) = command else {
        return Ok(Job::Help);
    };
    if !COMMANDS.contains(&command.as_str()) {
        return Err(usage(format!(
            "\"{command}\" is no command; there are {}",
            COMMANDS.join(", ")
        )));
    }
    if !PARTS.contains(&options.part.as_str()) {
        return Err(usage(format!(
            "\"{}\" is no part of an amplitude; there are {}",
            options.part,
            PARTS.join(", ")
        )));
    }
    options.command = command;
    options.sheet = sheet.ok_or_else(|| usage("a sheet is missing"))?;
    Ok(Job::Run(Box::new(options)))
}

fn text(parser: &mut lexopt::Parser) -> Result<String, Failure> {
    parser
        .value()
        .and_then(|v| v.string())
        .map_err(|e| usage(e.to_string()))
}

fn number<T: std::str::FromStr>(parser: &mut lexopt::Parser) -> Result<T, Failure>
where
    T::Err: std::error::Error + Send + Sync + 'static,
{
    parser
        .value()
        .and_then(|v| v.parse())
        .map_err(|e| usage(e.to_string()))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn parsed(line: &str) -> Result<Job, Failure> {
        parse(line.split_whitespace().map(OsString::from))
    }

    #[test]
    fn command_lines() {
        let Job::Run(options) = parsed("curve s.json --csv --from 2.87GeV --energies 50").unwrap()
        else {
            panic!("help");
        };
        assert_eq!(
            (options.command.as_str(), options.csv, options.energies),
            ("curve", true, 50)
        );
        assert_eq!(options.from.as_deref(), Some("2.87GeV"));
        let Job::Run(options) = parsed("amplitude s.json --part waves --of 2 --at 3GeV").unwrap()
        else {
            panic!("help");
        };
        assert_eq!((options.part.as_str(), options.of), ("waves", 2));
        assert_eq!(parsed("--help").unwrap(), Job::Help);
        assert_eq!(parsed("").unwrap(), Job::Help);
        for wrong in [
            "dance s.json",
            "fit",
            "fit a b",
            "curve s.json --energies many",
            "fit s.json --what",
            "amplitude s.json --part whole",
            "trials s.json other.json",
        ] {
            assert_eq!(parsed(wrong).unwrap_err().exit, 2, "{wrong}");
        }
    }
}
