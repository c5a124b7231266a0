//! Answers.

use super::amplitude::{Elastic, PoleReading, Words};
use super::judge::SoFar;
use super::plan::{Changes, CombReading, ForecastReading};
use super::statistics::{DerivedReading, ParameterIntervals, PointInfluence, Separated, Solution};
use crate::doc::{Row, Sheet};
use crate::quantity::unit::Unit;
use crate::quantity::{Dimension, format};
use crate::table::RowChange;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Refusal, Warning};
use widthwise_core::fit::compare::Comparison;
use widthwise_core::fit::goodness::TrialsPValue;
use widthwise_core::fit::limits::GlobalSignificance;
use widthwise_core::trials::{Summary, TrialRow};

/// A column of numbers that leaves as one transferred array.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    /// Name, e.g. "observed", "resonance V", "interference".
    pub name: String,
    /// Unit.
    pub unit: String,
    /// Values.
    pub values: Vec<f64>,
}

/// An answer: the body as plain data, long columns beside it.
#[derive(Debug, Clone, PartialEq)]
pub struct Reply {
    /// Plain data.
    pub body: Body,
    /// Columns, e.g. of a curve (the first is W in GeV).
    pub columns: Vec<Column>,
}

/// Plain data of an answer.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Body {
    /// A sheet and what is wrong with it.
    Sheet {
        /// The sheet.
        sheet: Box<Sheet>,
        /// Problems; empty if it can be computed with.
        problems: Vec<Refusal>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// A curve (numbers in the columns).
    Curve {
        /// Relative accuracy reached.
        accuracy: f64,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Rows read from a table.
    Rows {
        /// How each column of the table was understood.
        columns: Vec<ColumnReading>,
        /// Rows.
        rows: Vec<Row>,
        /// What they do to the rows that are there; rows without an entry change nothing.
        changes: Vec<RowChange>,
        /// What is wrong with single cells; `field` is `rows[3].counts`.
        problems: Vec<Refusal>,
    },
    /// Known particles, limits and units.
    Tables {
        /// Particles that a beam can be made of.
        particles: Vec<KnownParticle>,
        /// What every parameter may be.
        limits: Vec<KnownLimit>,
        /// Units understood, as written.
        units: Vec<String>,
    },
    /// Everything at one W.
    Cursor {
        /// True W, GeV.
        w_gev: f64,
        /// The number to dial, with unit.
        dial: String,
        /// Named values there: observed, radiated, born, contributions, rate, ...
        values: Vec<Named>,
    },
    /// One setting in every kind.
    Convert {
        /// (kind, value with unit).
        settings: Vec<(crate::doc::Dial, String)>,
        /// Named values that belong to it: sigma_W, break-up momentum, dW/dsetting, ...
        values: Vec<Named>,
    },
    /// What was looked up.
    LookedUp {
        /// Named values.
        values: Vec<Named>,
    },
    /// Every row of data, in the sheet's order.
    Points {
        /// Points.
        points: Vec<PointReading>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// A fit.
    Fit {
        /// Fitted parameters, in the order of `fit.free`.
        parameters: Vec<FittedParameter>,
        /// Their correlation, row by row.
        correlation: Vec<Vec<f64>>,
        /// 2 NLL (BC form for counts, chi2 for cross sections) at the minimum, without constraints' part hidden.
        statistic: f64,
        /// Points and constraints minus free parameters.
        degrees_of_freedom: i32,
        /// Probability of a larger value, where it can be told.
        p_value: Option<f64>,
        /// The chi-squared distribution may be used for it: every expected count is at least 20.
        p_value_asymptotic: bool,
        /// Pull of each point in use: (row id, pull).
        pulls: Vec<(String, f64)>,
        /// Nuisances: name, pull and its error.
        nuisances: Vec<Nuisance>,
        /// Why it stopped, one sentence.
        stopped: String,
        /// Whether it converged.
        converged: bool,
        /// Iterations used.
        iterations: u32,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Profile intervals and derived quantities.
    Intervals {
        /// By free parameter.
        parameters: Vec<ParameterIntervals>,
        /// What follows from them.
        derived: Vec<DerivedReading>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// A profile curve (numbers in the columns: value, rise).
    Profile {
        /// Id of the parameter.
        id: String,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Contours (numbers in the columns: first and second at 68.3 %, first and second at 95.4 %).
    Contour {
        /// Id of the first parameter.
        first: String,
        /// Id of the second parameter.
        second: String,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Parameter sets that describe the data.
    Solutions {
        /// Constructed, hence all there are; else found by random starts.
        exact: bool,
        /// What separates them, or why they are not exact.
        note: String,
        /// The sets.
        solutions: Vec<Solution>,
        /// What would tell the others from the best one; empty where nothing at these energies would.
        separated: Vec<Separated>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// What each point does to the fit.
    Influence {
        /// Parameters, in the order of the shifts.
        parameters: Vec<FittedParameter>,
        /// By point.
        points: Vec<PointInfluence>,
        /// Points taken at one energy (ids) and the probability that their counts follow one rate.
        repeats: Vec<(String, f64)>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Two hypotheses on the same data.
    Comparison {
        /// Ratio and significance.
        comparison: Comparison,
    },
    /// Goodness by pseudo-experiments.
    Goodness {
        /// p-value.
        found: TrialsPValue,
    },
    /// The fit against time; the columns are start and pull of each point that has a time.
    AgainstTime {
        /// Parameters of the whole fit.
        parameters: Vec<FittedParameter>,
        /// After each point.
        fits: Vec<SoFar>,
        /// Significance of a drift of the pulls, standard deviations.
        drift: Option<f64>,
    },
    /// Limits on a strength (numbers in the columns).
    Limit {
        /// Against the phase of a coherent background; else one number.
        interferes: bool,
    },
    /// Chance of a significant look at background alone.
    Looks {
        /// Probability.
        p: f64,
    },
    /// Pseudo-experiments.
    Trials {
        /// One row each.
        rows: Vec<TrialRow>,
    },
    /// Bias, pulls and coverage.
    Summary {
        /// Summary.
        summary: Summary,
    },
    /// A searched window (numbers in the columns).
    Window {
        /// The strongest excess, corrected for having looked everywhere.
        strongest: Option<GlobalSignificance>,
    },
    /// A plan; its curves over the allowed energies are in the columns.
    Plan {
        /// The plan.
        plan: Box<widthwise_core::plan::report::ScanPlan>,
        /// Its forecasts in the sheet's units: parameters, then goals that are none.
        forecasts: Vec<ForecastReading>,
        /// The number to dial for each row of the timetable, with unit.
        dial: Vec<String>,
        /// Staying at the present setting against moving on, if the sheet says where the machine stands.
        stay: Option<StayOrMove>,
        /// Where the values planned from come from.
        basis: String,
        /// The plan's hour 0, h after the hours began.
        begins_h: f64,
        /// What became of an older plan, if one was given.
        changes: Option<Changes>,
    },
    /// The optimum of a design.
    Design {
        /// It.
        design: widthwise_core::plan::design::Design,
    },
    /// A comb for a peak of unknown mass.
    Comb {
        /// The comb and its chance.
        reading: Box<CombReading>,
    },
    /// One propagator; its lines over W are in the columns.
    Amplitude {
        /// Names of all propagators of the hypothesis.
        names: Vec<String>,
        /// M of this one, GeV.
        mass_gev: f64,
        /// Gamma(M), GeV; 0 where nothing is open, and for a K-matrix.
        width_gev: f64,
        /// hbar/Gamma, s.
        lifetime_s: Option<f64>,
        /// Below every threshold.
        stable: bool,
        /// Thresholds that separate sheets: (channel, W in GeV).
        thresholds: Vec<(String, f64)>,
        /// Signs of Im q of the sheet next to the real axis at M (true: +).
        sheet: Vec<bool>,
        /// Mass and width in every convention.
        words: Vec<Words>,
        /// Poles.
        poles: Vec<PoleReading>,
        /// What the search found, one sentence.
        pole_note: String,
        /// Unitarity of the sum beside the K-matrix, where it can be told.
        elastic: Option<Elastic>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// An image; values row by row and both axes are in the columns.
    Image {
        /// Values in a row.
        columns: u32,
        /// Rows.
        rows: u32,
        /// Least value.
        least: f64,
        /// Largest value.
        most: f64,
        /// Sheet of a complex plane (signs of Im q).
        sheet: Vec<bool>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Along one line of the (W, cos theta) plane; numbers in the columns.
    Slice {
        /// 1/2 for identical particles in the final state: belongs to totals only.
        identical_factor: f64,
        /// Diagrams, in the order of the columns.
        diagrams: Vec<DiagramReading>,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// Partial waves of the diagrams.
    PartialWaves {
        /// Waves at the energy asked for.
        waves: Vec<WaveReading>,
        /// Waves that leave |Re a| <= 1/2, each at its first place.
        breaches: Vec<WaveReading>,
        /// One plain sentence.
        note: String,
        /// Warnings.
        warnings: Vec<Warning>,
    },
    /// The same state in other words.
    Words {
        /// Mass and width in every convention.
        words: Vec<Words>,
        /// Coupling, width, lifetime.
        values: Vec<Named>,
    },
    /// Text of a file.
    Text {
        /// Text.
        text: String,
    },
}

/// One diagram.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct DiagramReading {
    /// s, t or u.
    pub channel: String,
    /// Mediator, or the external scalar.
    pub mediator: String,
    /// The line in the middle is the fermion.
    pub fermion_exchanged: bool,
}

/// One partial wave between states of definite J and parity.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct WaveReading {
    /// J.
    pub j: String,
    /// Incoming state.
    pub initial: String,
    /// Outgoing state.
    pub outgoing: String,
    /// Re a.
    pub re: f64,
    /// Im a.
    pub im: f64,
    /// Where it first leaves |Re a| <= 1/2, GeV.
    pub w_gev: Option<f64>,
}

/// A number with its name and unit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Named {
    /// Name as shown.
    pub name: String,
    /// Value.
    pub value: f64,
    /// Standard error in the same unit, where it has one.
    pub error: Option<f64>,
    /// Unit of the value.
    pub unit: String,
    /// For the eye: "14.76 nb".
    pub text: String,
}

impl Named {
    /// A number of the core with its text for the eye.
    #[must_use]
    pub fn new(
        name: impl Into<String>,
        value: f64,
        dimension: Dimension,
        unit: Option<&Unit>,
        digits: usize,
    ) -> Self {
        Self {
            name: name.into(),
            value,
            error: None,
            unit: dimension.core_unit().to_string(),
            text: format::for_the_eye(value, None, dimension, unit, digits),
        }
    }
}

/// A particle of the table.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct KnownParticle {
    /// Name, as a sheet uses it.
    pub name: String,
    /// Mass, GeV.
    pub mass_gev: f64,
    /// Spin ("0", "1/2", "1").
    pub spin: String,
    /// Width, GeV, where it is not negligible.
    pub width_gev: Option<f64>,
}

/// What a parameter may be.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct KnownLimit {
    /// Path in the sheet, indices as `[]`: `model.resonances[].width`.
    pub field: String,
    /// Name of the parameter.
    pub name: String,
    /// Unit of the two limits.
    pub unit: String,
    /// Least value.
    pub least: f64,
    /// Whether the least value itself is allowed.
    pub least_allowed: bool,
    /// Largest value, allowed.
    pub largest: f64,
    /// Whole numbers only.
    pub whole: bool,
    /// What is allowed and why, one sentence.
    pub why: String,
}

/// How a column of a table was understood.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ColumnReading {
    /// Header as in the file.
    pub header: String,
    /// Field of a row it goes to ("counts", "luminosity", ...); empty: kept, means nothing to us.
    pub meaning: String,
    /// Unit that its bare numbers take.
    pub unit: String,
    /// Not empty: it must be answered before the rows count ("beam energy or W?").
    pub question: String,
    /// Answers that can be given to the question.
    pub choices: Vec<String>,
}

/// One row of data as the chain understands it.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct PointReading {
    /// The row's id.
    pub id: String,
    /// True W, GeV; absent if the row cannot be understood.
    pub w_gev: Option<f64>,
    /// Its own error, GeV.
    pub w_error_gev: f64,
    /// The number to dial, with unit.
    pub dial: String,
    /// Measured cross section on the scale of the observed curve, nb (counts: (n - background)/(L eps B)).
    pub sigma_nb: Option<f64>,
    /// Its error, nb.
    pub sigma_error_nb: f64,
    /// Luminosity that counts, 1/nb, dead time taken off.
    pub luminosity_nbinv: Option<f64>,
    /// Live time, h.
    pub live_time_h: Option<f64>,
    /// Counts (or cross section in nb) expected so far.
    pub expected: Option<f64>,
    /// Seen.
    pub seen: Option<f64>,
    /// Pull of seen against expected.
    pub pull: Option<f64>,
    /// Two-sided p-value of seen.
    pub p_value: Option<f64>,
    /// Expected rate, counts per hour.
    pub rate_per_h: Option<f64>,
    /// Hours to a relative error of 10 % on the signal; absent: never, or unknown.
    pub hours_to_tenth: Option<f64>,
    /// No beam time gets there.
    pub never: bool,
    /// Relative error of the signal that remains after any beam time.
    pub floor: Option<f64>,
    /// Left out of the fit.
    pub left_out: bool,
    /// Running now.
    pub running: bool,
}

/// One fitted parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct FittedParameter {
    /// Id, e.g. `r1.mass`.
    pub id: String,
    /// Name as shown.
    pub name: String,
    /// Value in `unit`.
    pub value: f64,
    /// Curvature error in `unit`; absent if it could not be determined.
    pub error: Option<f64>,
    /// Unit (that of the sheet's text).
    pub unit: String,
    /// The text that the sheet would hold with this value.
    pub text: String,
    /// Path of that text in the sheet.
    pub field: String,
    /// Stands at the edge of what is allowed.
    pub at_limit: bool,
}

/// Staying against moving on.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct StayOrMove {
    /// Hours stayed.
    pub hours: f64,
    /// Share of the information lost by staying so long, with the best use of the rest.
    pub loss_by_staying: f64,
    /// Share lost by moving on at once (its settling included).
    pub loss_by_moving: f64,
}

/// A nuisance of the fit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Nuisance {
    /// Name.
    pub name: String,
    /// Pull, in its own errors.
    pub pull: f64,
    /// Error of the pull.
    pub error: f64,
    /// What one such error does to each fitted parameter, in the parameter's own errors.
    pub impacts: Vec<f64>,
}
