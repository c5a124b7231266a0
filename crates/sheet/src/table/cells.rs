//! Cutting a text into cells: which sign separates them, where the header is, whether numbers
//! are written with a decimal comma.

use super::guard::unguarded;
use widthwise_core::error::{Answer, Refusal};

/// Longest text of a table, bytes.
pub const LONGEST: usize = 64_000_000;
/// Most rows of a table.
pub const MOST_ROWS: usize = 200_000;
/// Most columns of a table.
pub const MOST_COLUMNS: usize = 200;

/// A table as texts.
#[derive(Debug, Clone, PartialEq)]
pub struct Cells {
    /// Headers, made distinct; "column 1", ... if the text has none.
    pub headers: Vec<String>,
    /// Whether the headers are the text's own.
    pub has_header: bool,
    /// Line of the text (from 1) and cells.
    pub rows: Vec<(u64, Vec<String>)>,
}

/// Cuts a text into cells.
///
/// # Errors
/// Nothing in it, too much in it, a quotation that does not end.
pub fn cut(text: &str) -> Answer<Cells> {
    let refuse = |value: String, allowed: &str, message: String| {
        Err(Refusal::new("table", value, allowed, message))
    };
    if text.len() > LONGEST {
        return refuse(
            format!("{} bytes", text.len()),
            "at most 64 MB",
            "The table is too long.".into(),
        );
    }
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let (body, comment, skipped) = without_comments(text);
    let Some(first) = body.lines().find(|line| !line.trim().is_empty()) else {
        return refuse(
            String::new(),
            "a header line and at least one row",
            "There is no table in this text.".into(),
        );
    };
    let separator = separator(first, &body);
    let mut lines = records(&body, separator)?;
    for (line, _) in &mut lines {
        *line = skipped.get(*line as usize).copied().unwrap_or(*line);
    }
    let width = lines
        .iter()
        .map(|(_, cells)| cells.len())
        .max()
        .unwrap_or(0);
    if width > MOST_COLUMNS || lines.len() > MOST_ROWS {
        return refuse(
            format!("{} rows of {width} columns", lines.len()),
            "at most 200,000 rows of 200 columns",
            "The table is too large.".into(),
        );
    }
    if decimal_comma(separator, &lines) {
        for (_, cells) in lines.iter_mut() {
            for cell in cells {
                if is_comma_number(cell) {
                    *cell = cell.replace('.', "").replace(',', ".");
                }
            }
        }
    }
    let own = lines
        .first()
        .is_some_and(|(_, cells)| !cells.iter().any(|cell| begins_a_number(cell)));
    let mut headers = if own {
        lines.remove(0).1
    } else {
        // "# W L n": the last comment before the numbers can be their header.
        comment
            .and_then(|comment| records(&comment, separator).ok()?.pop())
            .map(|(_, cells)| cells)
            .filter(|cells| cells.len() == width)
            .unwrap_or_default()
    };
    let has_header = !headers.is_empty();
    for header in &mut headers {
        *header = unguarded(header).to_string();
    }
    headers.resize(width, String::new());
    distinct(&mut headers);
    Ok(Cells {
        headers,
        has_header,
        rows: lines,
    })
}

/// The text without lines that begin with '#', the last of them before the table, and for each line left (from 1) its line in the text.
fn without_comments(text: &str) -> (String, Option<String>, Vec<u64>) {
    let mut body = String::with_capacity(text.len());
    let mut comment = None;
    let mut numbers = vec![0];
    // Inside a quoted cell that goes over several lines nothing is a comment.
    let mut quoted = false;
    for (i, line) in text.lines().enumerate() {
        match line.trim_start().strip_prefix('#').filter(|_| !quoted) {
            // A line of the table that begins with "#" as the header of its first column.
            Some(rest) if rest.starts_with([',', ';', '\t']) && body.trim().is_empty() => {
                body.push_str(line.trim_start());
                body.push('\n');
                numbers.push(i as u64 + 1);
            }
            Some(rest) => {
                if body.trim().is_empty() {
                    comment = Some(rest.trim().to_string());
                }
            }
            None => {
                quoted ^= line.matches('"').count() % 2 == 1;
                body.push_str(line);
                body.push('\n');
                numbers.push(i as u64 + 1);
            }
        }
    }
    (body, comment, numbers)
}

/// The sign that separates cells; a blank only where there is no other.
fn separator(first: &str, body: &str) -> u8 {
    for sign in [b'\t', b';'] {
        if first.contains(char::from(sign)) {
            return sign;
        }
    }
    if first.contains(',') {
        // "1,5 2,5": a decimal comma between blanks, if no comma of the text ends a cell.
        let commas = body.lines().take(20).filter(|line| !line.trim().is_empty());
        let all_decimal = commas.clone().all(|line| {
            let words: Vec<_> = line.split_whitespace().collect();
            words.len() > 1
                && words.iter().any(|word| word.contains(','))
                && words
                    .iter()
                    .all(|word| !word.contains(',') || is_comma_number(word))
        });
        return if all_decimal { b' ' } else { b',' };
    }
    b' '
}

fn records(body: &str, separator: u8) -> Answer<Vec<(u64, Vec<String>)>> {
    if separator == b' ' {
        let lines = body.lines().enumerate();
        return Ok(lines
            .filter(|(_, line)| !line.trim().is_empty())
            .map(|(i, line)| (i as u64 + 1, between_blanks(line)))
            .collect());
    }
    let texts: Vec<&str> = body.lines().collect();
    let mut reader = csv::ReaderBuilder::new()
        .delimiter(separator)
        .has_headers(false)
        .flexible(true)
        .trim(csv::Trim::All)
        .from_reader(body.as_bytes());
    let mut out = Vec::new();
    for record in reader.records() {
        let record = record.map_err(|error| {
            Refusal::new(
                "table",
                "",
                "cells of a CSV file (RFC 4180)",
                format!("The table cannot be cut into cells: {error}."),
            )
        })?;
        let mut line = record.position().map_or(0, csv::Position::line);
        // The reader counts empty lines before a record as its own.
        while texts
            .get(line.saturating_sub(1) as usize)
            .is_some_and(|text| text.trim().is_empty())
        {
            line += 1;
        }
        let mut cells: Vec<String> = record.iter().map(str::to_string).collect();
        while cells.last().is_some_and(String::is_empty) {
            cells.pop();
        }
        if !cells.is_empty() {
            out.push((line, cells));
        }
    }
    Ok(out)
}

/// Words between blanks; a unit in brackets belongs to the word before it: "W [MeV] n".
fn between_blanks(line: &str) -> Vec<String> {
    let mut out: Vec<String> = Vec::new();
    for word in line.split_whitespace() {
        match out.last_mut() {
            Some(before) if word.starts_with(['[', '(']) && !begins_a_number(before) => {
                before.push(' ');
                before.push_str(word);
            }
            _ => out.push(word.to_string()),
        }
    }
    out
}

/// A number whose only comma is decimal, points between thousands allowed: "1,5", "-0,25", "1.234,5".
fn is_comma_number(cell: &str) -> bool {
    let digits = cell.trim_start_matches(['-', '+']);
    let Some((whole, rest)) = digits.split_once(',') else {
        return false;
    };
    let after: String = rest.chars().take_while(char::is_ascii_digit).collect();
    !whole.is_empty()
        && !after.is_empty()
        && !rest.contains(',')
        && whole.chars().all(|c| c.is_ascii_digit() || c == '.')
}

/// Decimal commas, where commas do not separate cells and no number has a decimal point.
fn decimal_comma(separator: u8, lines: &[(u64, Vec<String>)]) -> bool {
    if separator == b',' {
        return false;
    }
    let mut cells = lines.iter().skip(1).take(1000).flat_map(|(_, cells)| cells);
    let point = |cell: &String| begins_a_number(cell) && cell.contains('.') && !cell.contains(',');
    cells.clone().any(|cell| is_comma_number(cell)) && !cells.any(point)
}

fn begins_a_number(cell: &str) -> bool {
    let rest = cell.trim_start_matches(['-', '+', '\u{2212}', '.']);
    rest.starts_with(|c: char| c.is_ascii_digit())
}

fn distinct(headers: &mut [String]) {
    for i in 0..headers.len() {
        let (before, rest) = headers.split_at_mut(i);
        let Some(header) = rest.first_mut() else {
            return;
        };
        if header.is_empty() {
            *header = format!("column {}", i + 1);
        }
        let plain = header.clone();
        let mut number = 2;
        while before.contains(header) {
            *header = format!("{plain} ({number})");
            number += 1;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(text: &str) -> (Vec<String>, Vec<Vec<String>>) {
        let cells = cut(text).unwrap();
        (
            cells.headers,
            cells.rows.into_iter().map(|(_, row)| row).collect(),
        )
    }

    #[test]
    fn separators_are_found() {
        for text in [
            "W,n\n1.5,2\n",
            "W;n\n1.5;2",
            "W\tn\r\n1.5\t2\r\n",
            "W   n\n1.5  2\n",
            "\u{feff}W;n\n1,5;2\n",
            "W n\n1,5 2\n",
        ] {
            let (headers, rows) = texts(text);
            assert_eq!(headers, ["W", "n"], "{text:?}");
            assert_eq!(rows, [["1.5", "2"]], "{text:?}");
        }
    }

    #[test]
    fn decimal_commas_only_where_nothing_else_fits() {
        assert_eq!(texts("a;b\n1.234,5;2,25").1, [["1234.5", "2.25"]]);
        // A point and a comma in different numbers: the comma is no decimal one.
        assert_eq!(texts("a;b\n1.5;2,25").1, [["1.5", "2,25"]]);
        assert_eq!(texts("a,b\n1,5").1, [["1", "5"]]);
    }

    #[test]
    fn quoted_cells_comments_and_lines_are_kept_apart() {
        let cells =
            cut("# made by hand\nW,comment\n# in between\n1,\"a, \"\"b\"\"\nc\"\n\n2,d\n").unwrap();
        assert_eq!(
            cells.rows,
            [
                (4, vec!["1".to_string(), "a, \"b\"\nc".into()]),
                (7, vec!["2".into(), "d".into()])
            ]
        );
    }

    #[test]
    fn numbers_without_header_take_the_comment_or_get_names() {
        assert_eq!(texts("# W n\n1 2\n").0, ["W", "n"]);
        assert_eq!(texts("1,2\n3,4\n").0, ["column 1", "column 2"]);
        assert_eq!(texts("n,n\n3,4\n").0, ["n", "n (2)"]);
    }

    #[test]
    fn nothing_is_refused_with_words() {
        for text in ["", "\n \n", "# only a comment\n"] {
            assert!(cut(text).unwrap_err().message.contains("no table"));
        }
    }
}
