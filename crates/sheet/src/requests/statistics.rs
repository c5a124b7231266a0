//! What the fit can say beyond its minimum: intervals, profiles, contours, other solutions,
//! points that drive it.

use super::fit::{fitted, settings};
use super::{Body, Column, FittedParameter, Reply, find_parameter, first_problem};
use crate::check;
use crate::doc::Sheet;
use crate::quantity::Dimension;
use crate::quantity::format::{for_the_eye, significant};
use serde::{Deserialize, Serialize};
use widthwise_core::amplitude::hypothesis::Hypothesis;
use widthwise_core::error::{Answer, Refusal, Warning};
use widthwise_core::fit::compare::separate;
use widthwise_core::fit::equivalent::{
    equivalent_solutions, has_exact_equivalents, what_separates,
};
use widthwise_core::fit::influence::{influences, repeats};
use widthwise_core::fit::{
    Covariance, End, FitResult, FitSettings, Fitter, PAIR_RISE_ONE, PAIR_RISE_TWO, RISE_ONE,
    RISE_TWO, ScanCurve,
};
use widthwise_core::numerics::minimise::Minimum;
use widthwise_core::scan::Scan;

/// Most places of a profile curve or contour.
pub const MOST_PLACES: u32 = 200;
/// Random starts that look for other minima where none can be constructed.
const STARTS: u32 = 24;
/// Minima that far above the best in 2 NLL (three standard deviations) still count as solutions.
const WINDOW: f64 = 9.0;

/// One end of an interval, in the unit of the parameter.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct EndReading {
    /// Distance from the fitted value; absent where the interval is open.
    pub distance: Option<f64>,
    /// For the eye: "+0.052", "at its limit 0", "open".
    pub text: String,
    /// Found where the statistic rises as wanted (not cut by a limit, not open).
    pub found: bool,
}

/// A parameter with its profile intervals.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ParameterIntervals {
    /// The parameter at the minimum, with its curvature error.
    pub parameter: FittedParameter,
    /// 68.3 %: lower and upper end.
    pub one: (EndReading, EndReading),
    /// 95.4 %: lower and upper end.
    pub two: (EndReading, EndReading),
}

/// A quantity that follows from fitted parameters.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct DerivedReading {
    /// Id.
    pub id: String,
    /// In words.
    pub name: String,
    /// Value in `unit`.
    pub value: f64,
    /// Error by propagation of the covariance.
    pub error: f64,
    /// Profiled 68.3 % interval: (lower, upper) end, where found.
    pub low: Option<f64>,
    /// Upper end.
    pub high: Option<f64>,
    /// Unit.
    pub unit: String,
    /// For the eye, with the propagated error.
    pub text: String,
}

/// One of several parameter sets that describe the data.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Solution {
    /// Parameters with errors.
    pub parameters: Vec<FittedParameter>,
    /// 2 NLL.
    pub statistic: f64,
    /// Above the best solution.
    pub above_best: f64,
}

/// Where and how long to measure until another solution is told from the best one.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Separated {
    /// Index of the solution.
    pub solution: u32,
    /// The number to dial, with unit.
    pub dial: String,
    /// W, GeV.
    pub w_gev: f64,
    /// Hours there until 2 NLL differs by 9 (3 standard deviations), nothing else being adjusted: at least.
    pub hours: f64,
    /// As many hours as the plan has.
    pub affordable: Option<bool>,
}

/// What the fit would be without one point.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct PointInfluence {
    /// Row id.
    pub id: String,
    /// Shift of each parameter, in its own errors.
    pub shifts: Vec<f64>,
    /// Drop of 2 NLL without it.
    pub statistic_drop: f64,
    /// It moves a parameter by more than its error.
    pub drives: bool,
}

/// A fit ready to go on from.
struct Fitted {
    scan: Scan,
    settings: FitSettings,
    fitter: Fitter,
    minimum: Minimum,
    covariance: Covariance,
    report: FitResult,
    warnings: Vec<Warning>,
}

impl Fitted {
    fn new(sheet: &Sheet) -> Answer<Self> {
        let understood = check::understand(sheet);
        let scan = understood.scan().map_err(first_problem)?;
        let settings = settings(sheet)?;
        let mut fitter = Fitter::new(&scan, &settings)?;
        let minimum = fitter.minimum()?;
        let covariance = fitter.covariance(&minimum)?;
        let report = fitter.report(&minimum)?;
        let mut warnings = understood.warnings;
        for warning in &report.warnings {
            if !warnings.contains(warning) {
                warnings.push(warning.clone());
            }
        }
        Ok(Self {
            scan,
            settings,
            fitter,
            minimum,
            covariance,
            report,
            warnings,
        })
    }

    fn parameters(&self, sheet: &Sheet) -> Vec<FittedParameter> {
        let values = self.report.parameters.iter();
        values.map(|p| fitted(sheet, p)).collect()
    }
}

/// Profile intervals of every free parameter, and derived quantities.
pub fn intervals(sheet: &Sheet, progress: &mut dyn FnMut(u32, u32)) -> Answer<Reply> {
    let mut fit = Fitted::new(sheet)?;
    let shown = fit.parameters(sheet);
    let total = u32::try_from(shown.len())
        .unwrap_or(u32::MAX)
        .saturating_add(1);
    let mut parameters = Vec::with_capacity(shown.len());
    for (i, parameter) in shown.into_iter().enumerate() {
        progress(u32::try_from(i).unwrap_or(0), total);
        let mut ends = |rise| -> Answer<(EndReading, EndReading)> {
            let found = fit
                .fitter
                .interval(&parameter.id, rise, &fit.minimum, &fit.covariance)?;
            if found.better_minimum {
                let warning = Warning::new(
                    "better-minimum",
                    format!(
                        "On the way along {} a lower minimum was met: the fit is not at the best place. Start it from there.",
                        parameter.name
                    ),
                );
                if !fit.warnings.contains(&warning) {
                    fit.warnings.push(warning);
                }
            }
            let reading = |end| end_reading(sheet, &parameter, end);
            Ok((reading(found.low), reading(found.high)))
        };
        let (one, two) = (ends(RISE_ONE)?, ends(RISE_TWO)?);
        parameters.push(ParameterIntervals {
            parameter,
            one,
            two,
        });
    }
    progress(total - 1, total);
    let derived = fit.fitter.derived(&fit.minimum, &fit.covariance, true)?;
    let derived = derived
        .iter()
        .map(|d| {
            let found = |end: Option<End>| match end {
                Some(End::Found { value }) => Some(value),
                _ => None,
            };
            let text = match d.unit.as_str() {
                "GeV" => for_the_eye(d.value, Some(d.error), Dimension::Energy, None, 6),
                "nb" => for_the_eye(d.value, Some(d.error), Dimension::CrossSection, None, 6),
                unit => format!(
                    "{} +- {} {unit}",
                    significant(d.value, 5),
                    significant(d.error, 2)
                ),
            };
            DerivedReading {
                id: d.id.clone(),
                name: d.label.clone(),
                value: d.value,
                error: d.error,
                low: found(d.low),
                high: found(d.high),
                unit: d.unit.clone(),
                text: text.trim().to_string(),
            }
        })
        .collect();
    Ok(Body::Intervals {
        parameters,
        derived,
        warnings: fit.warnings,
    }
    .into())
}

/// Core value of a parameter in the unit of the sheet's text.
fn in_sheet_unit(sheet: &Sheet, id: &str, core: f64) -> f64 {
    find_parameter(sheet, id).map_or(core, |known| {
        let value = core / known.core_per_sheet;
        known.dimension.in_unit(value, &known.unit).unwrap_or(value)
    })
}

fn end_reading(sheet: &Sheet, parameter: &FittedParameter, end: End) -> EndReading {
    let at = |value: f64| in_sheet_unit(sheet, &parameter.id, value);
    match end {
        End::Found { value } => {
            let distance = at(value) - parameter.value;
            let sign = if distance < 0.0 { '-' } else { '+' };
            EndReading {
                distance: Some(distance),
                text: format!("{sign}{}", significant(distance.abs(), 2)),
                found: true,
            }
        }
        End::AtLimit { value, .. } => EndReading {
            distance: Some(at(value) - parameter.value),
            text: format!("to its limit {}", significant(at(value), 4)),
            found: false,
        },
        End::Open { .. } => EndReading {
            distance: None,
            text: "open: the data do not end it".into(),
            found: false,
        },
    }
}

fn places(asked: u32) -> Answer<u32> {
    if (8..=MOST_PLACES).contains(&asked) {
        return Ok(asked);
    }
    Err(Refusal::new(
        "places",
        asked,
        format!("8 to {MOST_PLACES}"),
        "so many places are not computed in one request",
    ))
}

/// 2 NLL above its minimum along one parameter, everything else free: columns (value, rise).
pub fn profile(sheet: &Sheet, parameter: &str, asked: u32) -> Answer<Reply> {
    let count = places(asked)?;
    let mut fit = Fitted::new(sheet)?;
    let wide = fit
        .fitter
        .interval(parameter, RISE_TWO, &fit.minimum, &fit.covariance)?;
    let half = |end: End, side: f64| {
        let value = end.value(side);
        if value.is_finite() {
            value - wide.value
        } else {
            f64::NAN
        }
    };
    let (mut down, mut up) = (half(wide.low, -1.0), half(wide.high, 1.0));
    // An open side is shown as far as the other one, or as it was followed.
    if down.is_nan() {
        down = if up.is_nan() {
            followed(wide.low) - wide.value
        } else {
            -up
        };
    }
    if up.is_nan() {
        up = -down;
    }
    let values: Vec<f64> = (0..count)
        .map(|i| {
            let t = f64::from(i) / f64::from(count - 1);
            wide.value + 1.2 * (down + t * (up - down))
        })
        .collect();
    let found = fit
        .fitter
        .profile(parameter, &values, &fit.minimum, &fit.covariance)?;
    let shown = fit
        .parameters(sheet)
        .into_iter()
        .find(|p| p.id == parameter);
    let (name, unit) = shown.map_or((parameter.to_string(), String::new()), |p| (p.name, p.unit));
    let column = |name: String, unit: &str, values| Column {
        name,
        unit: unit.into(),
        values,
    };
    Ok(Reply {
        columns: vec![
            column(
                name,
                &unit,
                found
                    .iter()
                    .map(|p| in_sheet_unit(sheet, parameter, p.value))
                    .collect(),
            ),
            column(
                "rise of 2 NLL".into(),
                "",
                found.iter().map(|p| p.rise).collect(),
            ),
        ],
        body: Body::Profile {
            id: parameter.to_string(),
            warnings: fit.warnings,
        },
    })
}

fn followed(end: End) -> f64 {
    match end {
        End::Found { value } | End::AtLimit { value, .. } | End::Open { value, .. } => value,
    }
}

/// Regions of 68.3 and 95.4 % for a pair: columns (first, second) of each.
pub fn contour(sheet: &Sheet, first: &str, second: &str, asked: u32) -> Answer<Reply> {
    let count = places(asked)?;
    let mut fit = Fitted::new(sheet)?;
    let shown = fit.parameters(sheet);
    let mut columns = Vec::with_capacity(4);
    for (rise, level) in [(PAIR_RISE_ONE, "68.3 %"), (PAIR_RISE_TWO, "95.4 %")] {
        let found =
            fit.fitter
                .contour(first, second, rise, count, &fit.minimum, &fit.covariance)?;
        if found.cut_by_limit {
            fit.warnings.push(Warning::new(
                "contour-cut",
                format!("The {level} region is cut by a parameter's limit."),
            ));
        }
        let mut push = |id: &str, values: Vec<f64>| {
            let known = shown.iter().find(|p| p.id == id);
            columns.push(Column {
                name: format!("{} ({level})", known.map_or(id, |p| &p.name)),
                unit: known.map_or(String::new(), |p| p.unit.clone()),
                values: values
                    .iter()
                    .map(|v| in_sheet_unit(sheet, id, *v))
                    .collect(),
            });
        };
        push(first, found.places.iter().map(|p| p.0).collect());
        push(second, found.places.iter().map(|p| p.1).collect());
    }
    Ok(Reply {
        columns,
        body: Body::Contour {
            first: first.to_string(),
            second: second.to_string(),
            warnings: fit.warnings,
        },
    })
}

/// Other parameter sets that describe the data as well, each fitted from its own place.
pub fn solutions(sheet: &Sheet, progress: &mut dyn FnMut(u32, u32)) -> Answer<Reply> {
    let mut fit = Fitted::new(sheet)?;
    let values = &fit.report.parameters;
    let count = values.len();
    let curve = ScanCurve::new(&fit.scan, &fit.settings.varying()?)?;
    let at_minimum = fit.minimum.x.get(..count).unwrap_or_default().to_vec();
    let hypothesis = curve.hypothesis(&at_minimum)?;
    let exact = match &hypothesis {
        Hypothesis::PartialWave(wave) => has_exact_equivalents(wave).map_err(|r| r.message),
        _ => Err("equivalent solutions are constructed for sums of resonances only".to_string()),
    };
    let mut found: Vec<(Vec<FittedParameter>, f64)> = Vec::new();
    let mut forms: Vec<Hypothesis> = Vec::new();
    let (exact, note) = match exact {
        Ok(()) => {
            let others = equivalent_solutions(&hypothesis, &fit.scan.beams)?;
            let total = u32::try_from(others.len()).unwrap_or(u32::MAX);
            for (i, other) in others.into_iter().enumerate() {
                progress(u32::try_from(i).unwrap_or(0), total);
                let mut scan = fit.scan.clone();
                scan.hypothesis = other.hypothesis;
                let report = widthwise_core::fit::fit(&scan, &fit.settings)?;
                let parameters = report.parameters.iter().map(|p| fitted(sheet, p));
                found.push((parameters.collect(), report.statistic));
            }
            (true, what_separates().to_string())
        }
        Err(why) => {
            progress(0, 1);
            for minimum in fit.fitter.solutions(STARTS, WINDOW)? {
                let report = fit.fitter.report(&minimum)?;
                forms.push(curve.hypothesis(minimum.x.get(..count).unwrap_or_default())?);
                let parameters = report.parameters.iter().map(|p| fitted(sheet, p));
                found.push((parameters.collect(), report.statistic));
            }
            let note = format!(
                "{STARTS} random starts found these; that is not a proof that there are no others ({why})."
            );
            (false, note)
        }
    };
    let best = found.iter().map(|(_, s)| *s).fold(f64::INFINITY, f64::min);
    let separated = separations(sheet, &fit.scan, &forms)?;
    Ok(Body::Solutions {
        separated,
        exact,
        note,
        solutions: found
            .into_iter()
            .map(|(parameters, statistic)| Solution {
                parameters,
                statistic,
                above_best: statistic - best,
            })
            .collect(),
        warnings: fit.warnings,
    }
    .into())
}

/// Energies that are tried for a separation.
const PLACES: u32 = 81;

/// For each hypothesis behind the first: the energy of the scan's range (and a quarter beyond) that
/// tells it from the first soonest, and the hours it takes there.
fn separations(sheet: &Sheet, scan: &Scan, forms: &[Hypothesis]) -> Answer<Vec<Separated>> {
    let w = scan.points.iter().map(|p| p.w_gev);
    let (low, high) = w.fold((f64::INFINITY, 0.0_f64), |(a, b), w| (a.min(w), b.max(w)));
    let Some(best) = forms.first() else {
        return Ok(Vec::new());
    };
    if high <= low || scan.detection.luminosity_nbinv_per_h <= 0.0 {
        return Ok(Vec::new());
    }
    let reach = 0.25 * (high - low);
    let energies: Vec<f64> = (0..PLACES)
        .map(|i| low - reach + (high - low + 2.0 * reach) * f64::from(i) / f64::from(PLACES - 1))
        .collect();
    let ready = super::ready::Ready::new(sheet)?;
    let hours = sheet
        .plan
        .hours
        .as_ref()
        .and_then(|text| crate::quantity::read(text, Dimension::Time).ok())
        .map(|r| r.value);
    let mut out = Vec::new();
    for (i, other) in forms.iter().enumerate().skip(1) {
        let found = separate(scan, best, other, &energies)?;
        let soonest = found.iter().min_by(|a, b| a.hours.total_cmp(&b.hours));
        if let Some(soonest) = soonest.filter(|s| s.hours.is_finite()) {
            out.push(Separated {
                solution: u32::try_from(i).unwrap_or(u32::MAX),
                dial: super::cursor::dial(sheet, &ready, soonest.w_gev).unwrap_or_default(),
                w_gev: soonest.w_gev,
                hours: soonest.hours,
                affordable: hours.map(|h| soonest.hours <= h),
            });
        }
    }
    Ok(out)
}

/// What each point does to the fit, and whether repeated points agree.
pub fn influence(sheet: &Sheet) -> Answer<Reply> {
    let fit = Fitted::new(sheet)?;
    let points = influences(&fit.scan, &fit.settings, &fit.report)?;
    let repeats = repeats(&fit.scan, &fit.report);
    Ok(Body::Influence {
        parameters: fit.parameters(sheet),
        points: points
            .into_iter()
            .map(|p| PointInfluence {
                id: p.id,
                shifts: p.shifts,
                statistic_drop: p.statistic_drop,
                drives: p.drives,
            })
            .collect(),
        repeats: repeats
            .into_iter()
            .map(|r| (r.ids.join(", "), r.p_value))
            .collect(),
        warnings: fit.warnings,
    }
    .into())
}
