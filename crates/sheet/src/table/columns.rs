//! What each column of a table means, by its header and its unit; what is not sure is asked.

use super::cells::Cells;
use super::fields::{self, Field};
use crate::doc::Dial;
use crate::quantity::Dimension;
use crate::quantity::unit::{Unit, read_unit};
use crate::requests::ColumnReading;

/// One column as understood.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    /// Header as in the text.
    pub header: String,
    /// What it means; `None`: kept beside.
    pub field: Option<Field>,
    /// Unit that its bare numbers take.
    pub unit: Option<Unit>,
    /// Not empty: must be answered before the rows count.
    pub question: String,
    /// Answers to it.
    pub choices: Vec<String>,
}

/// The answer that keeps a column beside the rows.
const BESIDE: &str = "keep beside";

impl Column {
    /// As the page shows it.
    #[must_use]
    pub fn reading(&self) -> ColumnReading {
        ColumnReading {
            header: self.header.clone(),
            meaning: self.field.map_or("", Field::name).to_string(),
            unit: self.unit.as_ref().map_or("", |unit| &unit.text).to_string(),
            question: self.question.clone(),
            choices: self.choices.clone(),
        }
    }
}

/// Words a header may consist of, lower case, for each meaning that can be told from words alone.
/// Common practice in scan tables, no source.
const WORDS: [(Field, &[&str]); 23] = [
    (
        Field::Id,
        &["id", "point", "nr", "no", "run", "name", "label"],
    ),
    (
        Field::Start,
        &["start", "begin", "from", "start time", "t start"],
    ),
    (
        Field::Stop,
        &["stop", "end", "until", "stop time", "end time", "t stop"],
    ),
    (
        Field::Group,
        &["group", "fill", "fill no", "fill number", "store"],
    ),
    (
        Field::Setting,
        &[
            "setting",
            "set",
            "dial",
            "dialled",
            "setpoint",
            "set point",
            "nominal",
        ],
    ),
    (
        Field::W,
        &[
            "w",
            "ecm",
            "e cm",
            "ecms",
            "w true",
            "cm energy",
            "sqrt s",
            "sqrts",
            "roots",
            "root s",
            "√s",
        ],
    ),
    (
        Field::SigmaW,
        &[
            "sigma w",
            "sigmaw",
            "spread",
            "energy spread",
            "beam spread",
            "σ w",
            "σw",
        ],
    ),
    (
        Field::Luminosity,
        &[
            "l",
            "lum",
            "lumi",
            "luminosity",
            "int l",
            "l int",
            "integrated luminosity",
            "int lumi",
        ],
    ),
    (
        Field::LuminositySource,
        &["luminosity source", "source", "lumi source"],
    ),
    (
        Field::OtherLuminosity,
        &["other luminosity", "online luminosity", "l online"],
    ),
    (
        Field::LiveFraction,
        &["live fraction", "live frac", "livefraction"],
    ),
    (
        Field::LiveTime,
        &[
            "live time",
            "livetime",
            "t live",
            "hours",
            "time",
            "duration",
        ],
    ),
    (
        Field::Counts,
        &[
            "n", "counts", "count", "events", "n events", "nevents", "n obs", "nobs", "observed",
            "counted",
        ],
    ),
    (
        Field::OffCounts,
        &[
            "off counts",
            "n off",
            "noff",
            "off",
            "off region",
            "off events",
        ],
    ),
    (Field::Tau, &["tau", "τ"]),
    (
        Field::Efficiency,
        &["eff", "eps", "efficiency", "ε", "epsilon", "acceptance"],
    ),
    (Field::Channel, &["channel", "mode", "final state"]),
    (
        Field::CrossSection,
        &[
            "sigma",
            "xs",
            "xsec",
            "cross section",
            "crosssection",
            "σ",
            "sigma born",
            "sigma obs",
            "sigma observed",
            "sigma measured",
            "sigma vis",
            "sigma visible",
            "sigma0",
            "sigma0 had",
        ],
    ),
    (
        Field::LeftOut,
        &["left out", "leave out", "leftout", "skip", "excluded"],
    ),
    (Field::Running, &["running"]),
    (
        Field::Comment,
        &["comment", "comments", "note", "notes", "remark", "remarks"],
    ),
    (Field::WError, &["w error"]),
    (Field::LuminosityError, &["luminosity error"]),
];
/// Headers of a beam's setting: a question, unless the dial shows just that.
const BEAM: [(Dial, &[&str]); 3] = [
    (
        Dial::TotalEnergy,
        &["e beam", "ebeam", "beam energy", "total energy"],
    ),
    (
        Dial::KineticEnergy,
        &[
            "t beam",
            "tbeam",
            "kinetic energy",
            "t kin",
            "ekin",
            "e kin",
        ],
    ),
    (
        Dial::Momentum,
        &["p", "p beam", "pbeam", "momentum", "beam momentum"],
    ),
];
const ERROR: [&str; 8] = [
    "err",
    "error",
    "unc",
    "uncertainty",
    "stat",
    "+-",
    "±",
    "std",
];

/// Understands the columns of a table. `answers` (header, answer) go before everything else.
#[must_use]
pub fn understand(cells: &Cells, dial: Dial, answers: &[(String, String)]) -> Vec<Column> {
    let mut columns: Vec<Column> = cells
        .headers
        .iter()
        .enumerate()
        .map(|(i, header)| {
            let given = answers.iter().rev().find(|(to, _)| to == header);
            let mut column = match given {
                Some((_, answer)) => answered(header, answer, dial),
                None if cells.has_header => recognised(header, dial),
                None => unknown(header, dial),
            };
            ask_for_unit(&mut column, cells, i, dial);
            column
        })
        .collect();
    ask_about_doubles(&mut columns);
    ask_counts_or_cross_section(&mut columns);
    columns
}

/// The header's words and the unit it names: "W [MeV]", "L (nb^-1)", "W / MeV", "Ecm_MeV".
fn parts(header: &str) -> (String, Option<Unit>) {
    let text = header.trim();
    for (open, close) in [('[', ']'), ('(', ')')] {
        if let Some((name, unit)) = text.strip_suffix(close).and_then(|t| t.rsplit_once(open))
            && let Some(unit) = unit_of(unit)
        {
            return (words(name), Some(unit));
        }
    }
    for separator in [" / ", ", ", " in ", "_", " "] {
        if let Some((name, unit)) = text.rsplit_once(separator)
            && !name.is_empty()
            && let Some(unit) =
                unit_of(unit).filter(|unit| separator.trim() == "/" || unit.text.len() > 1)
        {
            return (words(name), Some(unit));
        }
    }
    (words(text), None)
}

/// A unit as headers write it; "nbinv" and "1e30" too.
fn unit_of(text: &str) -> Option<Unit> {
    let text = text.trim();
    let written = text
        .strip_suffix("inv")
        .map_or_else(|| text.to_string(), |base| format!("{base}^-1"));
    let mut unit = read_unit(&written).ok()?;
    unit.text.clone_from(&written);
    (!written.is_empty() && (unit.text == "%" || Dimension::of(&unit) != Some(Dimension::Number)))
        .then_some(unit)
}

/// Lower-case words between blanks: "N_events" -> "n events".
fn words(name: &str) -> String {
    let mut out = String::new();
    for c in name.chars() {
        if c.is_alphanumeric() || c == '±' || c == '√' {
            out.extend(c.to_lowercase());
        } else if c == '+' && name.contains("+-") {
            out.push_str(" +-");
        } else if !out.ends_with(' ') {
            out.push(' ');
        }
    }
    out.trim().to_string()
}

fn column(header: &str, field: Option<Field>, unit: Option<Unit>) -> Column {
    Column {
        header: header.to_string(),
        field,
        unit,
        question: String::new(),
        choices: Vec::new(),
    }
}

fn recognised(header: &str, dial: Dial) -> Column {
    // A header that we wrote.
    let (name, unit) = parts(header);
    if let Some(field) = Field::named(&name.replace(' ', "_")) {
        return column(header, Some(field), unit);
    }
    if matches!(name.as_str(), "e" | "energy") {
        return Column {
            question: "Is this W or the number dialled?".into(),
            choices: with_unit(&["w", "setting"], unit.as_ref()),
            ..column(header, None, unit)
        };
    }
    if let Some((kind, _)) = BEAM
        .iter()
        .find(|(_, words)| words.contains(&name.as_str()))
    {
        if *kind == dial {
            return column(header, Some(Field::Setting), unit);
        }
        return Column {
            question: "This is not what the dial of this sheet shows. Is it the number dialled all the same, or W?".into(),
            choices: with_unit(&["setting", "w"], unit.as_ref()).into_iter().chain([BESIDE.to_string()]).collect(),
            ..column(header, None, unit)
        };
    }
    if let Some(field) = by_words(&name) {
        return column(header, Some(field), unit);
    }
    if let Some(field) = error_of(&name) {
        return column(header, Some(field), unit);
    }
    column(header, None, unit)
}

fn by_words(name: &str) -> Option<Field> {
    WORDS
        .iter()
        .find(|(_, words)| words.contains(&name))
        .map(|(field, _)| *field)
}

/// "ecm err" -> the error of W.
fn error_of(name: &str) -> Option<Field> {
    let mut words: Vec<&str> = name.split(' ').collect();
    let before = words.len();
    words.retain(|word| !ERROR.contains(word));
    let base = if words.len() < before {
        by_words(&words.join(" "))
    } else {
        // "dW", "delta L".
        let rest = name
            .strip_prefix("delta ")
            .or_else(|| name.strip_prefix('d'))?;
        by_words(rest.trim())
    };
    Some(match base? {
        Field::W => Field::WError,
        Field::Luminosity => Field::LuminosityError,
        Field::Efficiency => Field::EfficiencyError,
        Field::CrossSection => Field::CrossSectionError,
        _ => return None,
    })
}

fn with_unit(meanings: &[&str], unit: Option<&Unit>) -> Vec<String> {
    match unit {
        Some(unit) => meanings
            .iter()
            .map(|meaning| format!("{meaning} {}", unit.text))
            .collect(),
        None => meanings
            .iter()
            .map(|meaning| (*meaning).to_string())
            .collect(),
    }
}

/// The answer "w MeV", "counts" or "keep beside".
fn answered(header: &str, answer: &str, dial: Dial) -> Column {
    let (meaning, unit) = answer.split_once(' ').unwrap_or((answer, ""));
    let field = Field::named(meaning);
    let unit = unit_of(unit).or_else(|| parts(header).1);
    let fits = |unit: &Unit, field: Field| {
        field
            .dimension(dial)
            .is_some_and(|d| d.conversion(unit.dims).is_some())
    };
    let unit = unit.filter(|unit| field.is_some_and(|field| fits(unit, field)));
    column(header, field, unit)
}

fn unknown(header: &str, dial: Dial) -> Column {
    let _ = dial;
    Column {
        question: "What is in this column?".into(),
        choices: fields::ALL
            .iter()
            .map(|field| field.name().to_string())
            .chain([BESIDE.to_string()])
            .collect(),
        ..column(header, None, None)
    }
}

/// Numbers that need a unit and bring none are not guessed.
fn ask_for_unit(column: &mut Column, cells: &Cells, index: usize, dial: Dial) {
    let Some(field) = column.field else {
        return;
    };
    let Some(dimension) = field.dimension(dial) else {
        column.unit = None;
        return;
    };
    if let Some(unit) = &column.unit
        && dimension.conversion(unit.dims).is_none()
    {
        column.question = format!(
            "\"{}\" is no unit of {}: in which unit are its numbers?",
            unit.text,
            dimension.noun()
        );
        column.choices = unit_choices(field, dimension);
        column.unit = None;
        return;
    }
    let plain = dimension == Dimension::Number;
    let bare = |cell: &String| {
        !cell.is_empty()
            && crate::quantity::read(cell, dimension).is_err()
            && crate::quantity::read(cell, Dimension::Number).is_ok()
    };
    let any_bare = cells
        .rows
        .iter()
        .filter_map(|(_, row)| row.get(index))
        .any(bare);
    if column.unit.is_none() && !plain && any_bare {
        column.question = "In which unit are its bare numbers?".into();
        column.choices = unit_choices(field, dimension);
    }
}

fn unit_choices(field: Field, dimension: Dimension) -> Vec<String> {
    let units: &[&str] = match dimension {
        Dimension::Energy => &["MeV", "GeV", "keV"],
        Dimension::Momentum => &["MeV/c", "GeV/c"],
        Dimension::Luminosity => &["nb^-1", "pb^-1", "ub^-1", "fb^-1"],
        Dimension::CrossSection => &["nb", "pb", "ub", "fb"],
        Dimension::Time => &["h", "min", "s"],
        _ => &[],
    };
    units
        .iter()
        .map(|unit| format!("{} {unit}", field.name()))
        .chain([BESIDE.to_string()])
        .collect()
}

fn ask_about_doubles(columns: &mut [Column]) {
    let meanings: Vec<Option<Field>> = columns.iter().map(|column| column.field).collect();
    for (i, column) in columns.iter_mut().enumerate() {
        let Some(field) = column.field.filter(|_| column.question.is_empty()) else {
            continue;
        };
        let double = meanings
            .iter()
            .enumerate()
            .any(|(k, other)| k != i && *other == Some(field));
        if double {
            column.question = format!(
                "Several columns look like {}: is it this one?",
                field.name().replace('_', " ")
            );
            column.choices = with_unit(&[field.name()], column.unit.as_ref())
                .into_iter()
                .chain([BESIDE.to_string()])
                .collect();
        }
    }
}

/// A table of results often has both; only one of them is the measurement of a row.
fn ask_counts_or_cross_section(columns: &mut [Column]) {
    let has = |columns: &[Column], field| columns.iter().any(|column| column.field == Some(field));
    if !(has(columns, Field::Counts) && has(columns, Field::CrossSection)) {
        return;
    }
    for column in columns.iter_mut() {
        if let Some(field @ (Field::Counts | Field::CrossSection)) = column.field
            && column.question.is_empty()
        {
            column.question = "The table has counts and cross sections: which is the measurement? Keep the other one beside.".into();
            column.choices = with_unit(&[field.name()], column.unit.as_ref())
                .into_iter()
                .chain([BESIDE.to_string()])
                .collect();
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::cells::cut;
    use super::*;

    fn meanings(header: &str, answers: &[(&str, &str)]) -> Vec<(String, String, bool)> {
        let width = header.split(',').count();
        let text = format!("{header}\n{}\n", vec!["1"; width].join(","));
        let answers: Vec<_> = answers
            .iter()
            .map(|(a, b)| ((*a).to_string(), (*b).to_string()))
            .collect();
        understand(&cut(&text).unwrap(), Dial::TotalEnergy, &answers)
            .iter()
            .map(Column::reading)
            .map(|c| (c.meaning, c.unit, !c.question.is_empty()))
            .collect()
    }
    fn sure(meaning: &str, unit: &str) -> (String, String, bool) {
        (meaning.into(), unit.into(), false)
    }

    #[test]
    fn headers_are_recognised_by_word_and_unit() {
        let header = "point,W [MeV],dW (keV),L (nb^-1),L_err_nbinv,N_events,eff,fill,comment,xyz";
        let wanted = [
            sure("id", ""),
            sure("w", "MeV"),
            sure("w_error", "keV"),
            sure("luminosity", "nb^-1"),
            sure("luminosity_error", "nb^-1"),
            sure("counts", ""),
            sure("efficiency", ""),
            sure("group", ""),
            sure("comment", ""),
            sure("", ""),
        ];
        assert_eq!(meanings(header, &[]), wanted);
        assert_eq!(
            meanings("sqrt(s) / GeV,sigma [pb],sigma err [pb],Ebeam [MeV]", &[])[..],
            [
                sure("w", "GeV"),
                sure("cross_section", "pb"),
                sure("cross_section_error", "pb"),
                sure("setting", "MeV")
            ]
        );
    }

    #[test]
    fn what_is_not_sure_is_asked() {
        for header in ["E [MeV]", "energy", "p [MeV/c]", "W"] {
            assert!(meanings(header, &[])[0].2, "{header}");
        }
        assert_eq!(
            meanings("E [MeV]", &[("E [MeV]", "w MeV")]),
            [sure("w", "MeV")]
        );
        assert_eq!(meanings("W", &[("W", "w GeV")]), [sure("w", "GeV")]);
        assert!(meanings("W [nb]", &[])[0].2, "a wrong unit is asked about");
    }

    #[test]
    fn doubles_and_rival_measurements_are_asked_about() {
        let header = "W [MeV],n,sigma [nb]";
        assert!(meanings(header, &[])[1..].iter().all(|m| m.2));
        assert_eq!(
            meanings(header, &[("n", BESIDE), ("sigma [nb]", "cross_section nb")])[1..],
            [sure("", ""), sure("cross_section", "nb")]
        );
        let double = meanings("W [MeV],Ecm [MeV]", &[]);
        assert!(double.iter().all(|m| m.2));
    }
}
