//! Rows of data out of a table's cells.

use super::cells::cut;
use super::columns::{Column, understand};
use super::fields::Field;
use super::guard::unguarded;
use crate::doc::{Row, Sheet};
use crate::limits;
use widthwise_core::error::{Answer, Refusal};

/// A table as understood.
#[derive(Debug, Clone, PartialEq)]
pub struct Table {
    /// Columns.
    pub columns: Vec<Column>,
    /// Rows; those without an id of their own have an empty one.
    pub rows: Vec<Row>,
    /// What is wrong with single cells; the field is `rows[i].name`, the message names the line.
    pub problems: Vec<Refusal>,
}

impl Table {
    /// Whether every question is answered.
    #[must_use]
    pub fn is_sure(&self) -> bool {
        self.columns.iter().all(|column| column.question.is_empty())
    }
}

/// Reads a table of text for a sheet. Cells that are wrong stay as typed and are reported; nothing is repaired.
///
/// # Errors
/// A text in which there is no table, or too much.
pub fn read(text: &str, sheet: &Sheet, answers: &[(String, String)]) -> Answer<Table> {
    let cells = cut(text)?;
    let dial = sheet.beam.dial;
    let columns = understand(&cells, dial, answers);
    let mut rows = Vec::with_capacity(cells.rows.len());
    let mut problems = Vec::new();
    for (i, (line, texts)) in cells.rows.iter().enumerate() {
        let mut row = Row::default();
        for (column, cell) in columns.iter().zip(texts) {
            let cell = unguarded(cell);
            if cell.is_empty() {
                continue;
            }
            let Some(field) = column.field else {
                row.other.push((column.header.clone(), cell.to_string()));
                continue;
            };
            let path = format!("rows[{i}].{}", field.name());
            let place =
                |message: String| format!("line {line}, column \"{}\": {message}", column.header);
            let text = with_unit(cell, column);
            if let Some(dimension) = field.dimension(dial)
                && let Err(mut refusal) = limits::number(&format!("data.{path}"), &text, dimension)
            {
                refusal.field.clone_from(&path);
                refusal.message = place(refusal.message);
                problems.push(refusal);
            }
            if let Err(allowed) = field.put(&mut row, text) {
                problems.push(Refusal::new(
                    path,
                    cell,
                    allowed,
                    place(format!("\"{cell}\" is not {allowed}")),
                ));
            }
        }
        if texts.len() > columns.len() {
            problems.push(Refusal::new(
                format!("rows[{i}]"),
                texts.len(),
                format!("{} cells", columns.len()),
                format!("line {line} has more cells than the header"),
            ));
        }
        rows.push(row);
    }
    Ok(Table {
        columns,
        rows,
        problems,
    })
}

/// A bare number takes the column's unit; a number with its own unit keeps it.
fn with_unit(cell: &str, column: &Column) -> String {
    let Some(unit) = column.unit.as_ref().filter(|unit| !unit.text.is_empty()) else {
        return cell.to_string();
    };
    let takes = column.field != Some(Field::LiveTime) || !cell.contains([':', 'h']);
    let bare = cell.ends_with(|c: char| c.is_ascii_digit() || c == ')' || c == '.');
    // "19.6 +- 0.4" is bare, "19.6 nb-1" is not.
    if takes
        && bare
        && !cell.contains(|c: char| c.is_alphabetic() && c != 'e' && c != 'E' && c != 'x')
    {
        format!("{cell} {}", unit.text)
    } else {
        cell.to_string()
    }
}
