//! The fit.

use super::{Body, FittedParameter, Nuisance, Reply, first_problem, parameter};
use crate::check;
use crate::doc::Sheet;
use crate::quantity::format;
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::fit::{Constraint, FitResult, FitSettings, FittedValue, fit};
use widthwise_core::numerics::minimise::{Stop, StopReason};

/// Most rows that are fitted in one request.
pub const MOST_ROWS: usize = 20_000;

/// Fits the rows in use.
pub fn answer(sheet: &Sheet) -> Answer<Reply> {
    let understood = check::understand(sheet);
    let scan = understood.scan().map_err(first_problem)?;
    if scan.points.len() > MOST_ROWS {
        return Err(Refusal::new(
            "data.rows",
            scan.points.len(),
            format!("up to {MOST_ROWS} rows in use"),
            "so many rows are not fitted in one go; leave rows out or join them",
        ));
    }
    let result = fit(&scan, &settings(sheet)?)?;
    let mut warnings = understood.warnings;
    for warning in &result.warnings {
        if !warnings.contains(warning) {
            warnings.push(warning.clone());
        }
    }
    Ok(Reply {
        body: Body::Fit {
            parameters: result.parameters.iter().map(|p| fitted(sheet, p)).collect(),
            correlation: result.correlation.clone(),
            statistic: result.statistic,
            degrees_of_freedom: i32::try_from(result.degrees_of_freedom).unwrap_or(i32::MIN),
            p_value: result.p_value,
            p_value_asymptotic: result.p_value_asymptotic,
            pulls: pulls(&result),
            nuisances: result
                .nuisances
                .iter()
                .map(|n| Nuisance {
                    name: n.name.clone(),
                    pull: n.pull,
                    error: n.error,
                    impacts: n
                        .impacts
                        .iter()
                        .zip(&result.parameters)
                        .map(|(impact, p)| p.error.map_or(0.0, |e| impact / e))
                        .collect(),
                })
                .collect(),
            stopped: stopped(&result.stop),
            converged: result.stop.is_minimum(),
            iterations: result.stop.iterations,
            warnings,
        },
        columns: Vec::new(),
    })
}

/// What the sheet leaves free, in the core's units.
///
/// # Errors
/// An id that the sheet has no parameter for, a constraint without error or in a wrong unit.
pub fn settings(sheet: &Sheet) -> Answer<FitSettings> {
    for (i, id) in sheet.fit.free.iter().enumerate() {
        parameter::find(sheet, id).map_err(|r| at(r, format!("fit.free[{i}]")))?;
    }
    let constraints = sheet
        .fit
        .constraints
        .iter()
        .enumerate()
        .map(|(i, c)| constraint(sheet, c, &format!("fit.constraints[{i}]")))
        .collect::<Answer<Vec<_>>>()?;
    Ok(FitSettings {
        free: sheet.fit.free.clone(),
        constraints,
        ..FitSettings::default()
    })
}

fn at(refusal: Refusal, field: String) -> Refusal {
    Refusal { field, ..refusal }
}

fn constraint(sheet: &Sheet, c: &crate::doc::Constraint, path: &str) -> Answer<Constraint> {
    let known =
        parameter::find(sheet, &c.parameter).map_err(|r| at(r, format!("{path}.parameter")))?;
    let field = format!("{path}.value");
    let reading =
        crate::quantity::read(&c.value, known.dimension).map_err(|p| p.at(&field, &c.value))?;
    let error = reading.error.filter(|e| *e > 0.0).ok_or_else(|| {
        Refusal::new(
            &field,
            &c.value,
            "a value with an error above 0, such as 0.71(2) MeV",
            "a constraint without error would be a fixed parameter",
        )
    })?;
    Ok(Constraint {
        parameter: c.parameter.clone(),
        value: reading.value * known.core_per_sheet,
        error: error * known.core_per_sheet,
    })
}

pub(super) fn fitted(sheet: &Sheet, p: &FittedValue) -> FittedParameter {
    let known = parameter::find(sheet, &p.id).ok();
    let scale = known.as_ref().map_or(1.0, |k| k.core_per_sheet);
    let (value, error) = (p.value / scale, p.error.map(|e| e / scale));
    let Some(known) = known else {
        return FittedParameter {
            id: p.id.clone(),
            name: p.label.clone(),
            value,
            error,
            unit: p.unit.clone(),
            text: format::significant(value, 6),
            field: String::new(),
            at_limit: p.at_limit,
        };
    };
    let in_unit = |v: f64| known.dimension.in_unit(v, &known.unit).unwrap_or(v);
    FittedParameter {
        id: p.id.clone(),
        name: p.label.clone(),
        value: in_unit(value),
        error: error.map(in_unit),
        unit: known.unit.text.clone(),
        text: format::for_the_eye(value, error, known.dimension, Some(&known.unit), 7),
        field: known.field,
        at_limit: p.at_limit,
    }
}

fn pulls(result: &FitResult) -> Vec<(String, f64)> {
    result
        .points
        .iter()
        .map(|p| {
            let name = match &p.bin {
                _ if p.off_region => format!("{} (off region)", p.id),
                Some(bin) => format!("{} ({bin})", p.id),
                None => p.id.clone(),
            };
            (name, p.pull)
        })
        .collect()
}

fn stopped(stop: &Stop) -> String {
    let why = match stop.reason {
        StopReason::Converged => "The fit reached its minimum",
        StopReason::NothingFree => "Nothing was free: the statistic of the given values",
        StopReason::NoFurtherStep => "The fit could not step further down",
        StopReason::IterationLimit => "The fit ran out of steps before it reached a minimum",
    };
    format!(
        "{why} after {} steps (estimated distance {:.1e} in 2 NLL).",
        stop.iterations, stop.distance
    )
}
