//! Runs a job and writes its answer.

use crate::arguments::{Failure, Options};
use serde_json::{Value, json};
use std::io::Read;
use widthwise_core::error::Refusal;
use widthwise_core::trials::{Ensemble, TrialRow, TrialSettings, summarise};
use widthwise_sheet::doc::Sheet;
use widthwise_sheet::quantity::{Dimension, read};
use widthwise_sheet::requests::{
    Along, Body, Column, Grid, Reply, Request, Table, answer, csv_of, energy_range, fit_settings,
};
use widthwise_sheet::table::write;
use widthwise_sheet::{check, json as file};

/// Most trials of one call; a farm runs ranges.
const MOST_TRIALS: u64 = 1_000_000;

/// What goes out.
#[derive(Debug)]
pub struct Output {
    /// For stdout.
    pub text: String,
    /// Exit code.
    pub exit: u8,
    /// For stderr, if not empty.
    pub note: String,
}

fn refused(refusal: &Refusal) -> Failure {
    Failure {
        exit: 1,
        message: refusal.to_string(),
    }
}

/// Runs a job.
///
/// # Errors
/// A file that cannot be read (3), a sheet that is refused (1), a command line that makes no sense (2).
pub fn run(options: &Options) -> Result<Output, Failure> {
    let sheet = file::open(&load(options)?).map_err(|r| refused(&r))?;
    match options.command.as_str() {
        "check" => check_sheet(&sheet),
        "trials" => trials(&sheet, options),
        "merge" => merge(&sheet, options),
        "rows" if options.csv => text(&sheet, Table::Rows),
        "rows" => done(pretty(&json!(sheet.data.rows))),
        "log" => text(&sheet, Table::Log),
        command => {
            let request = request(command, sheet, options)?;
            let reply = answer(&request, &mut |_, _| ()).map_err(|r| refused(&r))?;
            let text = if options.csv {
                csv_of(&reply).map_err(|r| refused(&r))?
            } else {
                pretty(&reply_json(&reply))
            };
            let mut output = done(text)?;
            if let Body::Fit {
                converged: false,
                stopped,
                ..
            } = &reply.body
            {
                output.exit = 4;
                output.note.clone_from(stopped);
            }
            Ok(output)
        }
    }
}

fn done(text: String) -> Result<Output, Failure> {
    Ok(Output {
        text,
        exit: 0,
        note: String::new(),
    })
}

fn load(options: &Options) -> Result<String, Failure> {
    let unreadable = |e: std::io::Error| Failure {
        exit: 3,
        message: format!("{} cannot be read: {e}", options.sheet.display()),
    };
    if options.sheet == "-" {
        let mut text = String::new();
        std::io::stdin()
            .read_to_string(&mut text)
            .map_err(unreadable)?;
        return Ok(text);
    }
    std::fs::read_to_string(&options.sheet).map_err(unreadable)
}

fn request(command: &str, sheet: Sheet, options: &Options) -> Result<Request, Failure> {
    Ok(match command {
        "points" => Request::Points { sheet },
        "fit" => Request::Fit { sheet },
        "plan" => Request::Plan {
            sheet,
            costs: options.costs,
            keep: None,
        },
        _ => {
            let (low, high) = match (&options.from, &options.to) {
                (Some(_), Some(_)) => (0.0, 0.0),
                _ => energy_range(&sheet).map_err(|r| refused(&r))?,
            };
            let from_gev = energy("--from", options.from.as_ref(), low)?;
            let to_gev = energy("--to", options.to.as_ref(), high)?;
            if command == "amplitude" {
                return amplitude(sheet, options, (from_gev, to_gev));
            }
            Request::Curve {
                from_gev,
                to_gev,
                points: options.energies,
                sheet,
            }
        }
    })
}

/// Places of an angle or of an imaginary part.
const SIDE: u32 = 101;

fn amplitude(sheet: Sheet, options: &Options, (from, to): (f64, f64)) -> Result<Request, Failure> {
    let energies = Grid {
        from,
        to,
        places: options.energies,
    };
    let grid = |from: f64, to: f64| Grid {
        from,
        to,
        places: SIDE,
    };
    let w_gev = energy("--at", options.at.as_ref(), 0.5 * (from + to))?;
    let of = options.of.checked_sub(1).ok_or_else(|| Failure {
        exit: 2,
        message: "--of counts from 1".into(),
    })?;
    Ok(match options.part.as_str() {
        "plane" => Request::Plane {
            sheet,
            of,
            signs: Vec::new(),
            re: energies,
            im: grid(-0.5 * (to - from), 0.5 * (to - from)),
        },
        "image" => Request::Image {
            sheet,
            w: energies,
            cos: grid(-1.0, 1.0),
            cross_section: true,
        },
        "slice" => Request::Slice {
            sheet,
            along: Along::Cos,
            at: w_gev,
            grid: grid(-1.0, 1.0),
        },
        "waves" => Request::PartialWaves {
            sheet,
            w_gev,
            grid: Grid {
                places: options.energies.min(100),
                ..energies
            },
        },
        _ => Request::Amplitude {
            sheet,
            of,
            grid: energies,
        },
    })
}

fn energy(option: &str, typed: Option<&String>, default: f64) -> Result<f64, Failure> {
    let Some(text) = typed else {
        return Ok(default);
    };
    read(text, Dimension::Energy)
        .map(|r| r.value)
        .map_err(|p| Failure {
            exit: 2,
            message: format!("{option}: {}; {}", p.message, p.allowed),
        })
}

fn check_sheet(sheet: &Sheet) -> Result<Output, Failure> {
    let understood = check::understand(sheet);
    let wrong = understood.problems.len();
    let text = pretty(&json!({
        "problems": understood.problems,
        "warnings": understood.warnings,
    }));
    Ok(Output {
        text,
        exit: u8::from(wrong > 0),
        note: if wrong > 0 {
            format!("{wrong} problems")
        } else {
            String::new()
        },
    })
}

fn text(sheet: &Sheet, table: Table) -> Result<Output, Failure> {
    let request = Request::WriteTable {
        sheet: sheet.clone(),
        table,
    };
    let reply = answer(&request, &mut |_, _| ()).map_err(|r| refused(&r))?;
    match reply.body {
        Body::Text { text } => done(text),
        _ => done(String::new()),
    }
}

fn trials(sheet: &Sheet, options: &Options) -> Result<Output, Failure> {
    if options.count > MOST_TRIALS {
        return Err(Failure {
            exit: 2,
            message: format!(
                "{} trials in one call; {MOST_TRIALS} is the most, a farm runs ranges",
                options.count
            ),
        });
    }
    let mut ensemble = ensemble(sheet, options.seed, options.profiles)?;
    let last = options.first.saturating_add(options.count);
    let rows: Vec<_> = (options.first..last).map(|k| ensemble.trial(k)).collect();
    let ids = ensemble.ids();
    if options.csv {
        let column = |name: String, values: Vec<f64>| Column {
            name,
            unit: String::new(),
            values,
        };
        let mut columns = vec![
            column("trial".into(), rows.iter().map(|r| r.k as f64).collect()),
            column(
                "converged".into(),
                rows.iter()
                    .map(|r| f64::from(u8::from(r.converged)))
                    .collect(),
            ),
            column("2 NLL".into(), rows.iter().map(|r| r.statistic).collect()),
        ];
        for (i, id) in ids.iter().enumerate() {
            let value = |r: &TrialRow| r.values.get(i).copied().unwrap_or(f64::NAN);
            let error = |r: &TrialRow| r.errors.get(i).copied().flatten().unwrap_or(f64::NAN);
            columns.push(column(id.clone(), rows.iter().map(value).collect()));
            columns.push(column(
                format!("error of {id}"),
                rows.iter().map(error).collect(),
            ));
        }
        return done(write::columns(&columns));
    }
    told(options.seed, &ensemble, &rows)
}

/// Trials as JSON: the same text whether they were made in one run or in ranges.
fn told(seed: u64, ensemble: &Ensemble, rows: &[TrialRow]) -> Result<Output, Failure> {
    let ids = ensemble.ids();
    let summary = summarise(rows, &ids, ensemble.truth());
    done(pretty(&json!({
        "seed": seed,
        "parameters": ids,
        "truth": ensemble.truth(),
        "rows": rows,
        "summary": summary,
    })))
}

fn ensemble(sheet: &Sheet, seed: u64, profiles: bool) -> Result<Ensemble, Failure> {
    let problems = |list: Vec<Refusal>| {
        let first = list.into_iter().next();
        first.map_or_else(
            || Failure {
                exit: 1,
                message: "the sheet cannot be computed with".into(),
            },
            |r| refused(&r),
        )
    };
    let scan = check::understand(sheet).scan().map_err(problems)?;
    let settings = fit_settings(sheet).map_err(|r| refused(&r))?;
    let trial = TrialSettings { seed, profiles };
    Ensemble::new(&scan, &settings, trial).map_err(|r| refused(&r))
}

/// Joins ranges of one seed, in whatever order they are given.
fn merge(sheet: &Sheet, options: &Options) -> Result<Output, Failure> {
    let unusable = |path: &std::ffi::OsString, why: String| Failure {
        exit: 3,
        message: format!("{}: {why}", path.display()),
    };
    let mut rows: Vec<TrialRow> = Vec::new();
    let mut seed = None;
    for path in &options.files {
        let text = std::fs::read_to_string(path).map_err(|e| unusable(path, e.to_string()))?;
        let mut range: Value =
            serde_json::from_str(&text).map_err(|e| unusable(path, e.to_string()))?;
        let Some(own) = range.get("seed").and_then(Value::as_u64) else {
            return Err(unusable(path, "trials did not write this file".into()));
        };
        if *seed.get_or_insert(own) != own {
            return Err(unusable(
                path,
                "another seed than the files before it".into(),
            ));
        }
        let more: Vec<TrialRow> =
            serde_json::from_value(range.get_mut("rows").map_or(Value::Null, Value::take))
                .map_err(|e| unusable(path, e.to_string()))?;
        rows.extend(more);
    }
    let Some(seed) = seed else {
        return Err(Failure {
            exit: 2,
            message: "merge needs the files that trials wrote".into(),
        });
    };
    rows.sort_by_key(|row| row.k);
    if let Some(k) = rows.windows(2).find_map(|pair| match pair {
        [a, b] if a.k == b.k => Some(a.k),
        _ => None,
    }) {
        return Err(Failure {
            exit: 1,
            message: format!("trial {k} is in two of the files: ranges may not overlap"),
        });
    }
    told(seed, &ensemble(sheet, seed, false)?, &rows)
}

fn reply_json(reply: &Reply) -> Value {
    let columns: Vec<Value> = reply
        .columns
        .iter()
        .map(|c| json!({ "name": c.name, "unit": c.unit, "values": c.values }))
        .collect();
    let mut out = json!(reply.body);
    if !columns.is_empty()
        && let Some(object) = out.as_object_mut()
    {
        object.insert("columns".into(), Value::Array(columns));
    }
    out
}

fn pretty(value: &Value) -> String {
    serde_json::to_string_pretty(value).map_or_else(|_| String::new(), |text| text + "\n")
}
