//! Rows read again beside the rows that are there: matched by id, what changed is told, and
//! comments and flags that the table does not bring are kept.

use super::fields::{ALL, Field};
use crate::doc::Row;
use serde::{Deserialize, Serialize};
use std::collections::{BTreeMap, BTreeSet};

/// What a row read does to the rows that are there.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct RowChange {
    /// Id of the row.
    pub id: String,
    /// It is not there yet.
    pub new: bool,
    /// Fields that change: (field, before, after).
    pub fields: Vec<(String, String, String)>,
}

/// Gives every row read an id, keeps what the table does not bring, and tells what changes.
///
/// A row without an id is the one there with the same energy text and start, if there is just one
/// such; otherwise it is new.
#[must_use]
pub fn join(there: &[Row], mut read: Vec<Row>) -> (Vec<Row>, Vec<RowChange>) {
    let by_id: BTreeMap<&str, &Row> = there.iter().map(|row| (row.id.as_str(), row)).collect();
    let mut by_place: BTreeMap<_, Vec<&Row>> = BTreeMap::new();
    for row in there {
        by_place.entry(place(row)).or_default().push(row);
    }
    let mut taken: BTreeSet<String> = there
        .iter()
        .chain(&read)
        .map(|row| row.id.clone())
        .collect();
    let mut given = BTreeSet::new();
    let mut next = 1_u32;
    let mut changes = Vec::new();
    for row in &mut read {
        if row.id.is_empty() {
            let same = by_place.get(&place(row)).map_or(&[][..], Vec::as_slice);
            row.id = match same {
                [one] if given.insert(one.id.clone()) => one.id.clone(),
                _ => free(&mut next, &mut taken),
            };
        }
        let Some(old) = by_id.get(row.id.as_str()) else {
            changes.push(RowChange {
                id: row.id.clone(),
                new: true,
                fields: Vec::new(),
            });
            continue;
        };
        let fields = keep(old, row);
        if !fields.is_empty() {
            changes.push(RowChange {
                id: row.id.clone(),
                new: false,
                fields,
            });
        }
    }
    (read, changes)
}

fn place(row: &Row) -> (Option<String>, Option<String>, Option<String>) {
    (row.w.clone(), row.setting.clone(), row.start.clone())
}

fn free(next: &mut u32, taken: &mut BTreeSet<String>) -> String {
    loop {
        let id = next.to_string();
        *next += 1;
        if taken.insert(id.clone()) {
            return id;
        }
    }
}

/// Fields that the row does not bring come from the old one; the others are compared.
fn keep(old: &Row, row: &mut Row) -> Vec<(String, String, String)> {
    let read = core::mem::replace(row, old.clone());
    let mut changed = Vec::new();
    for field in ALL.into_iter().filter(|field| *field != Field::Id) {
        let Some(after) = field.get(&read) else {
            continue;
        };
        let before = field.get(old).unwrap_or_default();
        if before != after {
            // Its own texts go back in: what a field gives it also takes.
            let _ = field.put(row, after.clone());
            changed.push((field.name().to_string(), before, after));
        }
    }
    for (header, text) in read.other {
        match row.other.iter_mut().find(|(name, _)| *name == header) {
            Some((_, there)) if *there == text => {}
            Some((_, there)) => {
                let before = core::mem::replace(there, text.clone());
                changed.push((header, before, text));
            }
            None => {
                changed.push((header.clone(), String::new(), text.clone()));
                row.other.push((header, text));
            }
        }
    }
    changed
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(id: &str, w: &str, n: &str) -> Row {
        Row {
            id: id.into(),
            w: Some(w.into()),
            counts: Some(n.into()),
            ..Row::default()
        }
    }

    #[test]
    fn a_file_read_again_changes_only_what_it_brings() {
        let mut old = row("a", "1 GeV", "10");
        old.comment = "spike in the monitor".into();
        old.left_out = true;
        let (rows, changes) = join(
            &[old.clone(), row("b", "2 GeV", "7")],
            vec![
                row("a", "1 GeV", "12"),
                row("b", "2 GeV", "7"),
                row("c", "3 GeV", "1"),
            ],
        );
        assert_eq!(
            rows[0],
            Row {
                counts: Some("12".into()),
                ..old
            }
        );
        assert_eq!(changes.len(), 2);
        assert_eq!(
            changes[0].fields,
            [("counts".to_string(), "10".to_string(), "12".to_string())]
        );
        assert!(changes[1].new && changes[1].id == "c");
    }

    #[test]
    fn rows_without_ids_find_their_place_or_get_a_free_id() {
        let there = [row("1", "1 GeV", "10"), row("x", "2 GeV", "7")];
        let (rows, changes) = join(
            &there,
            vec![
                row("", "2 GeV", "8"),
                row("", "5 GeV", "1"),
                row("", "2 GeV", "9"),
            ],
        );
        let ids: Vec<_> = rows.iter().map(|row| row.id.as_str()).collect();
        assert_eq!(ids, ["x", "2", "3"]);
        assert_eq!(changes.iter().filter(|change| change.new).count(), 2);
    }
}
