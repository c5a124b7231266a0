//! Answers as CSV, for the batch program.

use super::{Body, Column, Reply};
use crate::table::{guarded, write};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::plan::report::PlannedRow;

/// The columns of a reply as CSV, or its table where it has one.
///
/// # Errors
/// A reply that is no table.
pub fn csv_of(reply: &Reply) -> Answer<String> {
    match &reply.body {
        Body::Fit { .. } => Ok(super::table::fit_table(&reply.body)),
        Body::Points { points, .. } => {
            let column = |name: &str, unit: &str, values: Vec<f64>| Column {
                name: name.into(),
                unit: unit.into(),
                values,
            };
            let or_gap = |v: Option<f64>| v.unwrap_or(f64::NAN);
            let of = |f: &dyn Fn(&super::PointReading) -> Option<f64>| {
                points.iter().map(|p| or_gap(f(p))).collect::<Vec<f64>>()
            };
            let text = write::columns(&[
                column("W", "GeV", of(&|p| p.w_gev)),
                column("W error", "GeV", of(&|p| Some(p.w_error_gev))),
                column("luminosity", "nb^-1", of(&|p| p.luminosity_nbinv)),
                column("live time", "h", of(&|p| p.live_time_h)),
                column("cross section", "nb", of(&|p| p.sigma_nb)),
                column(
                    "cross section error",
                    "nb",
                    of(&|p| p.sigma_nb.map(|_| p.sigma_error_nb)),
                ),
                column("seen", "", of(&|p| p.seen)),
                column("expected", "", of(&|p| p.expected)),
                column("pull", "", of(&|p| p.pull)),
                column("p-value", "", of(&|p| p.p_value)),
                column("rate", "1/h", of(&|p| p.rate_per_h)),
                column("time to 10 %", "h", of(&|p| p.hours_to_tenth)),
            ]);
            Ok(text)
        }
        Body::Plan { plan, dial, .. } => Ok(timetable(&plan.rows, dial)),
        Body::Image { .. } => Ok(write::columns(&long(&reply.columns))),
        _ if !reply.columns.is_empty() => Ok(write::columns(&reply.columns)),
        _ => Err(Refusal::new("", "", "", "this answer is no table")),
    }
}

/// An image as a long table: each place of the grid with its value.
fn long(columns: &[Column]) -> Vec<Column> {
    let [values, x, y] = columns else {
        return columns.to_vec();
    };
    let column = |of: &Column, values: Vec<f64>| Column {
        values,
        ..of.clone()
    };
    let n = x.values.len();
    let across = x.values.iter().copied().cycle();
    let down = y.values.iter().flat_map(|y| core::iter::repeat_n(*y, n));
    vec![
        column(x, across.take(values.values.len()).collect()),
        column(y, down.collect()),
        values.clone(),
    ]
}

/// The timetable of a plan, with the number to dial as text beside each row.
fn timetable(rows: &[PlannedRow], dial: &[String]) -> String {
    let header = [
        "fill",
        "start [h]",
        "W [GeV]",
        "to dial",
        "live time [h]",
        "settling before [h]",
        "expected counts",
        "why",
    ];
    let mut records = vec![header.map(String::from).to_vec()];
    for (row, dial) in rows.iter().zip(dial) {
        records.push(vec![
            row.fill.to_string(),
            write::number(row.start_h),
            write::number(row.w_gev),
            guarded(dial),
            write::number(row.live_h),
            write::number(row.settle_h),
            write::number(row.expected_counts),
            guarded(&row.why),
        ]);
    }
    write::csv(&records)
}
