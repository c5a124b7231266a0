//! Tables in and out.

use super::{Body, Column, FittedParameter, PointReading, Reply, Request, Table, answer};
use crate::doc::Sheet;
use crate::quantity::Dimension;
use crate::quantity::format::{for_the_eye, significant};
use crate::table::{join, read, write};
use widthwise_core::error::{Answer, Refusal};

/// Energies of a curve that is taken away.
const CURVE_POINTS: u32 = 501;

/// A table of text, understood.
pub fn read_table(sheet: &Sheet, text: &str, answers: &[(String, String)]) -> Answer<Reply> {
    let table = read(text, sheet, answers)?;
    let columns = table.columns.iter().map(crate::table::Column::reading);
    let columns = columns.collect();
    let (rows, changes) = join(&sheet.data.rows, table.rows);
    Ok(Body::Rows {
        columns,
        rows,
        changes,
        problems: table.problems,
    }
    .into())
}

/// A table as text.
pub fn write_table(sheet: &Sheet, table: Table) -> Answer<Reply> {
    let text = match table {
        Table::Rows => write::rows(&sheet.data.rows, sheet.beam.dial),
        Table::Curve => {
            let (from_gev, to_gev) = range(sheet)?;
            let request = Request::Curve {
                sheet: sheet.clone(),
                from_gev,
                to_gev,
                points: CURVE_POINTS,
            };
            write::columns(&answer(&request, &mut |_, _| {})?.columns)
        }
        Table::Fit => fit_table(&fitted(sheet)?),
        Table::Log => log(sheet)?,
    };
    Ok(Body::Text { text }.into())
}

fn points(sheet: &Sheet) -> Answer<Vec<PointReading>> {
    let request = Request::Points {
        sheet: sheet.clone(),
    };
    match answer(&request, &mut |_, _| {})?.body {
        Body::Points { points, .. } => Ok(points),
        _ => Ok(Vec::new()),
    }
}

fn fitted(sheet: &Sheet) -> Answer<Body> {
    let request = Request::Fit {
        sheet: sheet.clone(),
    };
    Ok(answer(&request, &mut |_, _| {})?.body)
}

/// From a fifth of the data's span below the lowest to a fifth above the highest point.
///
/// # Errors
/// No two energies to span a range.
pub fn range(sheet: &Sheet) -> Answer<(f64, f64)> {
    let understood = crate::check::understand(sheet);
    let w: Vec<f64> = understood
        .rows
        .iter()
        .filter_map(|row| row.point.as_ref().map(|p| p.w_gev))
        .collect();
    let (low, high) = w
        .iter()
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), w| {
            (low.min(*w), high.max(*w))
        });
    if low < high {
        let margin = 0.2 * (high - low);
        return Ok(((low - margin).max(0.5 * low), high + margin));
    }
    Err(Refusal::new(
        "data.rows",
        format!("{} energies", w.len()),
        "at least two different energies",
        "The curve is taken over the energies of the data, and there are none to span a range.",
    ))
}

/// A fit as CSV text.
pub fn fit_table(body: &Body) -> String {
    let mut records = vec![
        ["parameter", "id", "value", "error", "unit"]
            .map(String::from)
            .to_vec(),
    ];
    let Body::Fit {
        parameters,
        correlation,
        statistic,
        degrees_of_freedom,
        p_value,
        nuisances,
        stopped,
        ..
    } = body
    else {
        return String::new();
    };
    for p in parameters {
        let error = p.error.map_or(String::new(), write::number);
        records.push(vec![
            p.name.clone(),
            p.id.clone(),
            write::number(p.value),
            error,
            p.unit.clone(),
        ]);
    }
    let mut line = |name: &str, value: String| {
        records.push(vec![name.into(), String::new(), value]);
    };
    line("2 NLL (Baker-Cousins) or chi2", write::number(*statistic));
    line("degrees of freedom", degrees_of_freedom.to_string());
    if let Some(p) = p_value {
        line("p-value", write::number(*p));
    }
    line("why it stopped", stopped.clone());
    for n in nuisances {
        records.push(vec![
            format!("pull of {}", n.name),
            String::new(),
            write::number(n.pull),
            write::number(n.error),
        ]);
    }
    records.push(Vec::from([String::from("correlation")]));
    for (p, row) in parameters.iter().zip(correlation) {
        let numbers = row.iter().map(|v| write::number(*v));
        records.push(
            [p.id.clone(), String::new()]
                .into_iter()
                .chain(numbers)
                .collect(),
        );
    }
    write::csv(&records)
}

/// Lines for an electronic log: one for each point, one for each result.
fn log(sheet: &Sheet) -> Answer<String> {
    let mut lines = Vec::new();
    if sheet.invented {
        lines.push("INVENTED DATA".to_string());
    }
    if !sheet.title.is_empty() {
        lines.push(sheet.title.clone());
    }
    for (p, row) in points(sheet)?.iter().zip(&sheet.data.rows) {
        lines.push(point_line(p, row.left_out, &row.comment));
    }
    match fitted(sheet) {
        Ok(Body::Fit {
            parameters,
            statistic,
            degrees_of_freedom,
            stopped,
            ..
        }) => {
            lines.extend(parameters.iter().map(result_line));
            lines.push(format!(
                "fit: chi2 {} / {degrees_of_freedom}; {stopped}",
                significant(statistic, 4)
            ));
        }
        Ok(_) => {}
        Err(refusal) => lines.push(format!("no fit: {}", refusal.message)),
    }
    Ok(lines.join("\n") + "\n")
}

fn point_line(p: &PointReading, left_out: bool, comment: &str) -> String {
    let mut parts = vec![format!("point {}", p.id)];
    if let Some(w) = p.w_gev {
        let error = (p.w_error_gev > 0.0).then_some(p.w_error_gev);
        parts.push(format!(
            "W {}",
            for_the_eye(w, error, Dimension::Energy, None, 8)
        ));
    }
    if !p.dial.is_empty() {
        parts.push(format!("dial {}", p.dial));
    }
    if let Some(l) = p.luminosity_nbinv {
        parts.push(format!(
            "L {}",
            for_the_eye(l, None, Dimension::Luminosity, None, 4)
        ));
    }
    if let Some(seen) = p.seen {
        parts.push(format!("seen {}", significant(seen, 6)));
    }
    if let Some(expected) = p.expected {
        parts.push(format!("expected {}", significant(expected, 4)));
    }
    if let Some(pull) = p.pull {
        parts.push(format!("pull {pull:+.1}"));
    }
    if left_out {
        parts.push("LEFT OUT".into());
    }
    // One line each: what a comment's own lines would break is kept together.
    let comment = comment.split_whitespace().collect::<Vec<_>>().join(" ");
    if !comment.is_empty() {
        parts.push(comment);
    }
    parts.join("; ")
}

fn result_line(p: &FittedParameter) -> String {
    let limit = if p.at_limit { " (at its limit)" } else { "" };
    match p.error {
        Some(_) => format!("{} = {}{limit}", p.name, p.text),
        None => format!("{} = {} (no error){limit}", p.name, p.text),
    }
}

impl From<Body> for Reply {
    fn from(body: Body) -> Self {
        Self {
            body,
            columns: Vec::<Column>::new(),
        }
    }
}
