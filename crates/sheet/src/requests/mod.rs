//! What can be asked of a sheet, and the answers. Page and batch program send the same requests.

mod amplitude;
mod convert;
mod csv;
mod cursor;
mod curve;
mod fit;
mod judge;
mod look_up;
mod parameter;
mod plan;
mod points;
mod ready;
mod reply;
mod sheets;
mod statistics;
mod table;
mod tables;
mod trials;
mod window;

pub use amplitude::{Elastic, Grid, PoleReading, Words};
pub use csv::csv_of;
pub use fit::settings as fit_settings;
pub use judge::{At, SoFar};
pub use look_up::{Given, LookUp};
pub use parameter::{Parameter, find as find_parameter};
pub use plan::{Changes, CombReading, ForecastReading, KeptPlan, Steering};
pub use ready::Ready;
pub use reply::*;
pub use statistics::{
    DerivedReading, EndReading, ParameterIntervals, PointInfluence, Separated, Solution,
};
pub use table::range as energy_range;
pub use trials::TrialRange;
pub use window::MassWindow;

use crate::doc::Sheet;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::fit::looks::p_value_of_looks;
use widthwise_core::plan::design::{DesignProblem, solve};
use widthwise_core::plan::report::PlannedRow;
use widthwise_core::trials::TrialRow;

/// One request, on the wire `{ "kind": NAME, ...fields }`; [`Request::read`] reads it. The sheet
/// travels as the document itself.
#[derive(Debug, Clone, PartialEq, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS), ts(tag = "kind"))]
#[serde(rename_all = "snake_case")]
pub enum Request {
    /// Which particles are known, what every parameter may be, which units are understood.
    Tables {},
    /// Reads a file's text as a sheet; answers with the sheet or with what is wrong.
    Open {
        /// Text of the file.
        text: String,
    },
    /// Everything that is wrong with the sheet, and what was understood.
    Check {
        /// The sheet.
        sheet: Sheet,
    },
    /// The curve between two energies.
    Curve {
        /// The sheet.
        sheet: Sheet,
        /// From, GeV.
        from_gev: f64,
        /// To, GeV.
        to_gev: f64,
        /// Number of energies, 2 to 20,000.
        points: u32,
    },
    /// Everything about one W: contributions, dial, rate, derivative.
    Cursor {
        /// The sheet.
        sheet: Sheet,
        /// W, GeV.
        w_gev: f64,
    },
    /// Converts one setting into all others.
    Convert {
        /// The sheet (its beams).
        sheet: Sheet,
        /// Kind of the value.
        from: crate::doc::Dial,
        /// The value as typed.
        value: String,
    },
    /// A small sum of a shift: threshold, coupling, peak height, time to n events.
    LookUp {
        /// The sheet (its beams).
        sheet: Sheet,
        /// What.
        what: LookUp,
    },
    /// Per row: W, dial, expected, seen, pull, p-value, times.
    Points {
        /// The sheet.
        sheet: Sheet,
    },
    /// The fit.
    Fit {
        /// The sheet.
        sheet: Sheet,
    },
    /// The plan of the hours left.
    Plan {
        /// The sheet.
        sheet: Sheet,
        /// Also what each property of the machine and each demand costs: the plan is made again without it.
        costs: bool,
        /// An older plan: what changed, and what is lost by keeping it.
        #[serde(default)]
        keep: Option<KeptPlan>,
    },
    /// The comb of the sheet, and its chance by pseudo-experiments.
    Comb {
        /// The sheet.
        sheet: Sheet,
        /// Pseudo-experiments.
        trials: u32,
        /// Their seed.
        #[cfg_attr(feature = "typescript", ts(type = "number"))]
        seed: u64,
    },
    /// Trials of the hours left: a timetable, the uniform scan, or a shift planned again after each point.
    PlanTrials {
        /// The sheet.
        sheet: Sheet,
        /// The timetable.
        rows: Vec<PlannedRow>,
        /// How the hours are spent.
        steering: Steering,
        /// Which trials.
        range: TrialRange,
    },
    /// The relaxed problem alone, from arrays.
    Design {
        /// The problem.
        design: DesignProblem,
    },
    /// What trials of the hours left found.
    PlanSummary {
        /// The sheet.
        sheet: Sheet,
        /// Rows of all ranges.
        rows: Vec<TrialRow>,
    },
    /// Reads a table (CSV or pasted cells): how each column was understood, and the rows.
    ReadTable {
        /// The sheet the rows will join.
        sheet: Sheet,
        /// Text of the table.
        text: String,
        /// Answers to questions asked before: (column header, meaning).
        answers: Vec<(String, String)>,
    },
    /// A table as CSV text (RFC 4180, units in headers).
    WriteTable {
        /// The sheet.
        sheet: Sheet,
        /// Which table.
        table: Table,
    },
    /// Profile intervals of every free parameter, and derived quantities.
    Intervals {
        /// The sheet.
        sheet: Sheet,
    },
    /// 2 NLL above its minimum along one parameter.
    Profile {
        /// The sheet.
        sheet: Sheet,
        /// Id of the parameter.
        parameter: String,
        /// Places, 8 to 200.
        places: u32,
    },
    /// Regions of 68.3 and 95.4 % for a pair of parameters.
    Contour {
        /// The sheet.
        sheet: Sheet,
        /// Id of the first parameter.
        first: String,
        /// Id of the second parameter.
        second: String,
        /// Places on each, 8 to 200.
        places: u32,
    },
    /// Other parameter sets that describe the data as well.
    Solutions {
        /// The sheet.
        sheet: Sheet,
    },
    /// What each point does to the fit, and whether repeated points agree.
    Influence {
        /// The sheet.
        sheet: Sheet,
    },
    /// Likelihood ratio of two sheets that differ in their hypothesis, with significance.
    Compare {
        /// The narrower hypothesis.
        null: Box<Sheet>,
        /// The wider one.
        alternative: Box<Sheet>,
        /// Pseudo-experiments of the narrower one; 0: none.
        trials: u32,
        /// Their seed.
        #[cfg_attr(feature = "typescript", ts(type = "number"))]
        seed: u64,
    },
    /// p-value of the fit by pseudo-experiments.
    Goodness {
        /// The sheet.
        sheet: Sheet,
        /// How many.
        trials: u32,
        /// Their seed.
        #[cfg_attr(feature = "typescript", ts(type = "number"))]
        seed: u64,
    },
    /// The fit after each point as it came in, and the residuals against time.
    AgainstTime {
        /// The sheet.
        sheet: Sheet,
    },
    /// Upper limit on a strength with all else profiled, against the phase of the background.
    Limit {
        /// The sheet.
        sheet: Sheet,
        /// Id of the strength.
        parameter: String,
        /// Phases, 4 to 72.
        places: u32,
    },
    /// Chance that background alone looks significant at one of several looks.
    Looks {
        /// Background counts expected between two looks.
        rate_per_look: f64,
        /// Looks.
        looks: u32,
        /// One-sided p-value that is looked for.
        p: f64,
    },
    /// A range of pseudo-experiments; the sheet's present values are the truth.
    Trials {
        /// The sheet.
        sheet: Sheet,
        /// Which.
        range: TrialRange,
    },
    /// Bias, pulls and coverage of trials from any number of ranges.
    Summary {
        /// The sheet.
        sheet: Sheet,
        /// Rows of all ranges.
        rows: Vec<TrialRow>,
    },
    /// One propagator (or the K-matrix) over energies: Delta, Argand path, poles, conventions.
    Amplitude {
        /// The sheet.
        sheet: Sheet,
        /// Which propagator, counted from 0.
        of: u16,
        /// Energies, GeV.
        grid: Grid,
    },
    /// |Delta| over the complex plane of sqrt(s), GeV.
    Plane {
        /// The sheet.
        sheet: Sheet,
        /// Which propagator, counted from 0.
        of: u16,
        /// Signs of Im q per threshold (true: +); empty: the sheet next to the real axis at M.
        signs: Vec<bool>,
        /// Real part.
        re: Grid,
        /// Imaginary part.
        im: Grid,
    },
    /// |M|^2 or dsigma/dcos over the (W, cos theta) plane.
    Image {
        /// The sheet.
        sheet: Sheet,
        /// Energies, GeV.
        w: Grid,
        /// cos theta.
        cos: Grid,
        /// dsigma/dcos in nb instead of |M|^2.
        cross_section: bool,
    },
    /// |M|^2 by diagram and interference along one line of that plane.
    Slice {
        /// The sheet.
        sheet: Sheet,
        /// Along which axis.
        along: Along,
        /// Where on the other one.
        at: f64,
        /// Places.
        grid: Grid,
    },
    /// Partial waves of the diagrams at one energy, and where they break unitarity.
    PartialWaves {
        /// The sheet.
        sheet: Sheet,
        /// W, GeV.
        w_gev: f64,
        /// Range of energies of the report, GeV.
        grid: Grid,
    },
    /// A mass and a width in every convention.
    Reword {
        /// What they mean.
        convention: MassConvention,
        /// Mass as typed.
        mass: String,
        /// Width as typed.
        width: String,
    },
    /// Limits and significances over a window of masses.
    Window {
        /// The sheet.
        sheet: Sheet,
        /// The window.
        window: MassWindow,
    },
}

impl Request {
    /// Reads a request as it is sent.
    ///
    /// # Errors
    /// No object, no or an unknown `kind`, a field that is missing or of another type (with its path).
    pub fn read(value: serde_json::Value) -> Answer<Request> {
        let serde_json::Value::Object(mut fields) = value else {
            return Err(unreadable("", "it is not an object"));
        };
        let Some(serde_json::Value::String(kind)) = fields.remove("kind") else {
            return Err(unreadable("kind", "it does not say what it asks for"));
        };
        // An enum tagged from outside reads its fields in place; a tag among the fields would make
        // the compiler write every reader a second time, for a buffered copy.
        let tagged = serde_json::Map::from_iter([(kind, fields.into())]);
        crate::plain::typed(tagged.into()).map_err(|(path, reason)| unreadable(&path, &reason))
    }
}

fn looks_of(rate_per_look: f64, looks: u32, p: f64) -> Answer<Reply> {
    let refused = |field: &str, value: String, allowed: &str| {
        let reason = format!("{field} is {value}; allowed: {allowed}");
        Err(Refusal::new(field, value, allowed, reason))
    };
    if !(rate_per_look > 0.0 && rate_per_look <= 1e3) {
        let allowed = "more than 0, at most 1000 counts between two looks";
        return refused("rate_per_look", rate_per_look.to_string(), allowed);
    }
    if !(1..=1000).contains(&looks) {
        return refused("looks", looks.to_string(), "1 to 1000");
    }
    if !(1e-15..=0.5).contains(&p) {
        return refused("p", p.to_string(), "1e-15 to 0.5");
    }
    let p = p_value_of_looks(rate_per_look, looks, p);
    Ok(Body::Looks { p }.into())
}

fn unreadable(field: &str, reason: &str) -> Refusal {
    Refusal::new(
        field,
        "",
        "a request of this version",
        format!("the request could not be read: {reason}"),
    )
}

/// Axis of a slice.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Along {
    /// W in GeV, at fixed cos theta.
    W,
    /// cos theta, at fixed W.
    Cos,
}

/// What a mass and a width mean.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum MassConvention {
    /// 1/(s - M^2 + i M Gamma).
    ConstantWidth,
    /// 1/(s - M^2 + i s Gamma/M).
    MasslessChannels,
    /// sqrt(s_R) = M - i Gamma/2.
    PoleInW,
    /// s_R = M^2 - i M Gamma.
    PoleInS,
}

/// Tables that can be taken away.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Table {
    /// The data rows.
    Rows,
    /// The curve over the data's range.
    Curve,
    /// The fit's result.
    Fit,
    /// Lines for an electronic log.
    Log,
}

/// Answers a request, telling `progress(done, total)` as long work moves on.
///
/// # Errors
/// The request's first problem; a sheet that cannot be computed with is refused with its first one
/// (ask [`Request::Check`] for all).
pub fn answer(request: &Request, progress: &mut dyn FnMut(u32, u32)) -> Answer<Reply> {
    match request {
        Request::Tables {} => Ok(tables::answer()),
        Request::Open { text } => sheets::open(text),
        Request::Check { sheet } => Ok(sheets::check(sheet)),
        Request::Convert { sheet, from, value } => convert::answer(sheet, *from, value),
        Request::LookUp { sheet, what } => look_up::answer(sheet, what),
        Request::ReadTable {
            sheet,
            text,
            answers,
        } => table::read_table(sheet, text, answers),
        Request::WriteTable { sheet, table } => table::write_table(sheet, *table),
        Request::Intervals { sheet } => statistics::intervals(sheet, progress),
        Request::Profile {
            sheet,
            parameter,
            places,
        } => statistics::profile(sheet, parameter, *places),
        Request::Contour {
            sheet,
            first,
            second,
            places,
        } => statistics::contour(sheet, first, second, *places),
        Request::Solutions { sheet } => statistics::solutions(sheet, progress),
        Request::Influence { sheet } => statistics::influence(sheet),
        Request::Compare {
            null,
            alternative,
            trials,
            seed,
        } => judge::compared(null, alternative, (*trials, *seed), progress),
        Request::Goodness {
            sheet,
            trials,
            seed,
        } => judge::goodness(sheet, (*trials, *seed), progress),
        Request::AgainstTime { sheet } => judge::against_time(sheet),
        Request::Limit {
            sheet,
            parameter,
            places,
        } => judge::limit(sheet, parameter, *places),
        Request::Looks {
            rate_per_look,
            looks,
            p,
        } => looks_of(*rate_per_look, *looks, *p),
        Request::Trials { sheet, range } => trials::run(sheet, range, progress),
        Request::Summary { sheet, rows } => trials::merge(sheet, rows),
        Request::Window { sheet, window } => window::answer(sheet, window),
        Request::Amplitude { sheet, of, grid } => amplitude::line(sheet, *of, grid),
        Request::Plane {
            sheet,
            of,
            signs,
            re,
            im,
        } => amplitude::plane(sheet, *of, signs, re, im),
        Request::Image {
            sheet,
            w,
            cos,
            cross_section,
        } => amplitude::image(sheet, w, cos, *cross_section),
        Request::Slice {
            sheet,
            along,
            at,
            grid,
        } => amplitude::slice(sheet, *along, *at, grid),
        Request::PartialWaves { sheet, w_gev, grid } => {
            amplitude::partial_waves(sheet, *w_gev, grid)
        }
        Request::Reword {
            convention,
            mass,
            width,
        } => amplitude::reword(*convention, mass, width),
        Request::Curve {
            sheet,
            from_gev,
            to_gev,
            points,
        } => curve::answer(sheet, *from_gev, *to_gev, *points),
        Request::Cursor { sheet, w_gev } => cursor::answer(sheet, *w_gev),
        Request::Points { sheet } => points::answer(sheet),
        Request::Fit { sheet } => fit::answer(sheet),
        Request::Comb {
            sheet,
            trials,
            seed,
        } => plan::comb(sheet, *trials, *seed, progress),
        Request::PlanTrials {
            sheet,
            rows,
            steering,
            range,
        } => plan::run(sheet, rows, *steering, range, progress),
        Request::Design { design } => Ok(Body::Design {
            design: solve(design)?,
        }
        .into()),
        Request::PlanSummary { sheet, rows } => plan::merge(sheet, rows),
        Request::Plan { sheet, costs, keep } => {
            plan::answer(sheet, *costs, keep.as_ref(), progress)
        }
    }
}

/// The first of several problems, for requests that need a sound sheet.
fn first_problem(problems: Vec<Refusal>) -> Refusal {
    problems
        .into_iter()
        .next()
        .unwrap_or_else(|| Refusal::new("", "", "", "The sheet cannot be computed with."))
}
