//! Tables out: RFC 4180 (comma, CRLF, quotes where needed), units in headers, safe to open in a
//! spreadsheet.

use super::fields::{ALL, Field};
use super::guard::guarded;
use crate::doc::{Dial, Row};
use crate::quantity;
use crate::requests::Column;

/// Records as CSV text.
#[must_use]
pub fn csv(records: &[Vec<String>]) -> String {
    let mut writer = csv::WriterBuilder::new()
        .terminator(csv::Terminator::CRLF)
        .flexible(true)
        .from_writer(Vec::new());
    for record in records {
        // Into memory: cannot fail.
        let _ = writer.write_record(record);
    }
    writer
        .into_inner()
        .ok()
        .and_then(|bytes| String::from_utf8(bytes).ok())
        .unwrap_or_default()
}

/// The data rows. Read back, they are the same rows (angular bins are in the sheet only).
#[must_use]
pub fn rows(rows: &[Row], dial: Dial) -> String {
    let used: Vec<Field> = ALL
        .into_iter()
        .filter(|field| rows.iter().any(|row| field.get(row).is_some()))
        .collect();
    let mut others: Vec<&String> = Vec::new();
    for (header, _) in rows.iter().flat_map(|row| &row.other) {
        if !others.contains(&header) {
            others.push(header);
        }
    }
    let units: Vec<String> = used
        .iter()
        .map(|field| common_unit(*field, rows, dial))
        .collect();
    let mut header: Vec<String> = used
        .iter()
        .zip(&units)
        .map(|(field, unit)| {
            if unit.is_empty() {
                field.name().into()
            } else {
                format!("{} [{unit}]", field.name())
            }
        })
        .collect();
    header.extend(others.iter().map(|name| guarded(name)));
    let mut records = vec![header];
    for row in rows {
        let mut record: Vec<String> = used
            .iter()
            .zip(&units)
            .map(|(field, unit)| {
                let text = field.get(row).unwrap_or_default();
                match field.dimension(dial) {
                    Some(dimension) if quantity::read(&text, dimension).is_ok() => {
                        bare(&text, unit).unwrap_or(&text).to_string()
                    }
                    _ => guarded(&text),
                }
            })
            .collect();
        record.extend(others.iter().map(|name| {
            let found = row.other.iter().find(|(header, _)| header == *name);
            found.map_or(String::new(), |(_, text)| guarded(text))
        }));
        records.push(record);
    }
    csv(&records)
}

/// The unit that all texts of a field end with after one blank; "" if they differ.
fn common_unit(field: Field, rows: &[Row], dial: Dial) -> String {
    let Some(dimension) = field.dimension(dial) else {
        return String::new();
    };
    let mut texts = rows.iter().filter_map(|row| field.get(row));
    let Some(unit) = texts
        .next()
        .and_then(|text| Some(quantity::read(&text, dimension).ok()?.unit.text))
    else {
        return String::new();
    };
    if !unit.is_empty()
        && rows
            .iter()
            .filter_map(|row| field.get(row))
            .all(|text| bare(&text, &unit).is_some())
    {
        unit
    } else {
        String::new()
    }
}

/// The text without its unit, if it gets just that back when it is read under a header with the unit.
fn bare<'a>(text: &'a str, unit: &str) -> Option<&'a str> {
    let number = text.strip_suffix(unit)?.strip_suffix(' ')?;
    let plain = number.ends_with(|c: char| c.is_ascii_digit() || c == ')');
    (plain && !number.contains(char::is_alphabetic) && number.trim() == number).then_some(number)
}

/// Columns of numbers, units in the headers.
#[must_use]
pub fn columns(columns: &[Column]) -> String {
    let header = columns
        .iter()
        .map(|column| {
            if column.unit.is_empty() {
                guarded(&column.name)
            } else {
                guarded(&format!("{} [{}]", column.name, column.unit))
            }
        })
        .collect();
    let length = columns
        .iter()
        .map(|column| column.values.len())
        .max()
        .unwrap_or(0);
    let mut records = vec![header];
    for i in 0..length {
        records.push(
            columns
                .iter()
                .map(|column| column.values.get(i).map_or(String::new(), |v| number(*v)))
                .collect(),
        );
    }
    csv(&records)
}

/// Shortest digits that read back to the same bits.
#[must_use]
pub fn number(value: f64) -> String {
    let size = value.abs();
    if value == 0.0 || (1e-5..1e15).contains(&size) {
        format!("{value}")
    } else {
        format!("{value:e}")
    }
}

#[cfg(test)]
mod tests {
    use super::super::{join, read};
    use super::*;
    use crate::demos;
    use crate::doc::{LuminositySource, Sheet};

    fn sheet() -> Sheet {
        demos::open(demos::DEMOS[0].0).unwrap()
    }

    #[test]
    fn rows_come_back_as_they_were() {
        let mut sheet = sheet();
        if let Some(row) = sheet.data.rows.first_mut() {
            row.comment = "=HYPERLINK(\"x\"), \"quoted\"\nsecond line".into();
            row.luminosity_source = Some(LuminositySource::Online);
            row.other = vec![("column of theirs".into(), "-kept".into())];
            row.left_out = true;
            row.w = Some("2874.20(5)  MeV".into());
        }
        if let Some(row) = sheet.data.rows.get_mut(1) {
            row.w_error = Some("2e-5 GeV".into());
            row.counts = Some("seven".into());
        }
        let text = rows(&sheet.data.rows, sheet.beam.dial);
        assert!(!text.contains(",=") && !text.contains(",\"="));
        let table = read(&text, &sheet, &[]).unwrap();
        assert!(table.is_sure(), "{:?}", table.columns);
        let (back, changes) = join(&[], table.rows);
        assert_eq!(changes.len(), back.len());
        assert_eq!(back, sheet.data.rows);
    }

    #[test]
    fn the_standard_is_kept() {
        // RFC 4180: CRLF at line ends, quotes doubled inside quotes.
        assert_eq!(
            csv(&[
                vec!["a".into(), "b\"c".into()],
                vec!["1,2".into(), String::new()]
            ]),
            "a,\"b\"\"c\"\r\n\"1,2\",\r\n"
        );
    }

    #[test]
    fn numbers_read_back_to_the_same_bits() {
        for value in [0.1, 1.0 / 3.0, 1e-300, -2.5e17, 5e-324, 0.0, 1e15] {
            assert_eq!(number(value).parse::<f64>().unwrap(), value);
        }
    }
}
