//! Tables in and out.

use widthwise_sheet::demos;
use widthwise_sheet::doc::{Row, Sheet};
use widthwise_sheet::requests::{Body, ColumnReading, Request, Table, answer};
use widthwise_sheet::table::{RowChange, write};

struct Read {
    columns: Vec<ColumnReading>,
    rows: Vec<Row>,
    changes: Vec<RowChange>,
    problems: Vec<String>,
}

fn empty() -> Sheet {
    let mut sheet = demos::open("saltmere").unwrap();
    sheet.data.rows.clear();
    sheet
}

fn read(sheet: &Sheet, text: &str, answers: &[(&str, &str)]) -> Read {
    let request = Request::ReadTable {
        sheet: sheet.clone(),
        text: text.into(),
        answers: answers
            .iter()
            .map(|(h, m)| ((*h).into(), (*m).into()))
            .collect(),
    };
    match answer(&request, &mut |_, _| ()).unwrap().body {
        Body::Rows {
            columns,
            rows,
            changes,
            problems,
        } => Read {
            columns,
            rows,
            changes,
            problems: problems
                .iter()
                .map(|p| format!("{}: {}", p.field, p.message))
                .collect(),
        },
        other => panic!("{other:?}"),
    }
}

fn question<'a>(read: &'a Read, header: &str) -> &'a str {
    &read
        .columns
        .iter()
        .find(|c| c.header == header)
        .unwrap()
        .question
}

#[test]
fn the_published_phi_scan() {
    let text = include_str!("../../../../tests/reference/data/cmd3_2016_kskl_phi_scan.csv");
    let asked = read(&empty(), text, &[]);
    assert!(question(&asked, "N_events").contains("which is the measurement"));
    let got = read(&empty(), text, &[("N_events", "other")]);
    assert!(
        got.columns.iter().all(|c| c.question.is_empty()),
        "{:?}",
        got.columns
    );
    assert_eq!(got.problems, Vec::<String>::new());
    assert_eq!(got.rows.len(), 25);
    let first = &got.rows[0];
    assert_eq!(first.w.as_deref(), Some("1004.066 MeV"));
    assert_eq!(first.w_error.as_deref(), Some("0.008 MeV"));
    assert_eq!(first.luminosity.as_deref(), Some("195.35 nb^-1"));
    assert_eq!(first.cross_section.as_deref(), Some("6.87 nb"));
    assert_eq!(first.cross_section_error.as_deref(), Some("0.42 nb"));
    assert_eq!(first.efficiency.as_deref(), Some("0.321"));
    assert!(
        first
            .other
            .contains(&("one_plus_delta_rad".into(), "0.72".into()))
    );
}

#[test]
fn the_lep_points() {
    let text = include_str!("../../../../tests/reference/data/lep_avg_hadron_7points.csv");
    let got = read(&empty(), text, &[("sigma_measured_nb", "other")]);
    assert_eq!(got.rows.len(), 7);
    assert_eq!(got.rows[3].w.as_deref(), Some("91.238 GeV"));
    assert_eq!(got.rows[3].cross_section.as_deref(), Some("41.364 nb"));
    let asked = read(&empty(), text, &[]);
    assert!(!question(&asked, "sigma0_had_nb").is_empty());
}

#[test]
fn a_bare_e_is_asked_about() {
    let text = "E [MeV];n;L [nb-1]\n1437,1;98;129,6\n1437,4;60;97,2\n";
    let asked = read(&empty(), text, &[]);
    assert!(question(&asked, "E [MeV]").contains("number dialled"));
    let got = read(&empty(), text, &[("E [MeV]", "setting")]);
    assert_eq!(got.problems, Vec::<String>::new());
    assert_eq!(got.rows[0].setting.as_deref(), Some("1437.1 MeV"));
    assert_eq!(got.rows[0].luminosity.as_deref(), Some("129.6 nb-1"));
    assert_eq!(got.rows[1].counts.as_deref(), Some("60"));
    // No unit anywhere: asked for; the answer carries it.
    let asked = read(&empty(), "W,n\n2874.2,5\n", &[]);
    assert!(question(&asked, "W").contains("which unit"));
    assert!(asked.columns[0].choices.contains(&"w MeV".to_string()));
    let got = read(&empty(), "W,n\n2874.2,5\n", &[("W", "w MeV")]);
    assert_eq!(got.rows[0].w.as_deref(), Some("2874.2 MeV"));
}

#[test]
fn wrong_cells_are_named_by_line_and_column() {
    let text = "# made by hand\nW [MeV]\tcounts\tL (1/nb)\tfill\n2874.2\t12x\t97.2\t1\n2874.2 nb\t5\t0\t2\n2870\t4\t1\t1\tspare\n";
    let got = read(&empty(), text, &[]);
    let all = got.problems.join("\n");
    assert!(
        all.contains("rows[0].counts: line 3, column \"counts\""),
        "{all}"
    );
    assert!(all.contains("rows[1].w: line 4"), "{all}");
    assert!(all.contains("rows[1].luminosity: line 4"), "{all}");
    assert!(got.rows[2].other.iter().any(|(_, text)| text == "spare"));
    // What was typed is kept for repair.
    assert_eq!(got.rows[0].counts.as_deref(), Some("12x"));
    assert_eq!(got.rows[1].group.as_deref(), Some("2"));
}

#[test]
fn reading_again_matches_by_id_and_keeps_comments() {
    let mut sheet = demos::open("saltmere").unwrap();
    sheet.data.rows[0].comment = "beam lost at the end".into();
    sheet.data.rows[1].left_out = true;
    let got = read(&sheet, "id,n\nA1,99\nA2,60\nX,5\n", &[]);
    let changed: Vec<_> = got.changes.iter().filter(|c| !c.new).collect();
    assert_eq!(changed.len(), 1, "{changed:?}");
    assert_eq!(changed[0].id, "A1");
    assert_eq!(
        changed[0].fields,
        [("counts".to_string(), "98".to_string(), "99".to_string())]
    );
    assert_eq!(got.rows[0].comment, "beam lost at the end");
    assert!(got.rows[1].left_out && got.rows[1].w.is_some());
    assert_eq!(got.rows[2].id, "X");
}

#[test]
fn rows_go_out_and_come_back_without_loss() {
    for (name, _) in demos::DEMOS {
        let mut sheet = demos::open(name).unwrap();
        sheet.data.rows[0].comment = "=HYPERLINK(\"x\"), \"quoted\"\nsecond line".into();
        sheet.data.rows[1].comment = "'quoted' - and -1".into();
        sheet.data.rows[2].group = Some("+fill".into());
        sheet.data.rows[2].other = vec![("@strange, column".into(), "-3 apples".into())];
        sheet.data.rows[3].w_error = Some("0.02(1) MeV".into());
        sheet.data.rows[3].left_out = true;
        let text = write::rows(&sheet.data.rows, sheet.beam.dial);
        assert!(text.contains("\r\n"));
        for line in text.split("\r\n") {
            for cell in line.split(',') {
                let cell = cell.trim_start_matches('"');
                let formula = cell.starts_with(['=', '+', '@'])
                    || (cell.starts_with('-') && cell.parse::<f64>().is_err());
                assert!(!formula, "{cell} in {line}");
            }
        }
        let mut bare = sheet.clone();
        bare.data.rows.clear();
        let got = read(&bare, &text, &[]);
        assert!(
            got.columns.iter().all(|c| c.question.is_empty()),
            "{name}: {:?}",
            got.columns
        );
        for (back, row) in got.rows.iter().zip(&sheet.data.rows) {
            let mut back = back.clone();
            back.comment = back.comment.replace("\r\n", "\n");
            back.other.retain(|(_, text)| !text.is_empty());
            assert_eq!(&back, row, "{name}");
        }
    }
}

#[test]
fn curve_fit_and_log_go_out() {
    // Born data: quick to fit.
    let text = include_str!("../../../../tests/reference/sheets/lep_hadrons.json");
    let mut sheet = widthwise_sheet::json::open(text).unwrap();
    sheet.invented = true;
    sheet.data.rows[0].comment = "two\nlines".into();
    let written = |table| {
        let request = Request::WriteTable {
            sheet: sheet.clone(),
            table,
        };
        match answer(&request, &mut |_, _| ()).unwrap().body {
            Body::Text { text } => text,
            other => panic!("{other:?}"),
        }
    };
    let fit = written(Table::Fit);
    assert!(
        fit.starts_with("parameter,id,value,error,unit\r\n"),
        "{fit}"
    );
    let log = written(Table::Log);
    assert_eq!(
        log.lines().filter(|l| l.starts_with("point E")).count(),
        7,
        "{log}"
    );
    assert!(log.contains("INVENTED"), "{log}");
    let curve = written(Table::Curve);
    assert!(
        curve.starts_with("W [GeV],Born [nb],radiated [nb],observed [nb],"),
        "{}",
        &curve[..80]
    );
}

#[test]
fn a_hundred_thousand_lines() {
    let mut text = String::from("id,W [MeV],n,L [nb^-1]\n");
    for i in 0..100_000 {
        text.push_str(&format!(
            "r{i},{:.3},{},12.5\n",
            2870.0 + f64::from(i) * 1e-4,
            i % 50
        ));
    }
    let got = read(&empty(), &text, &[]);
    assert_eq!(got.rows.len(), 100_000);
    assert!(got.problems.is_empty());
    let mut sheet = empty();
    sheet.data.rows = got.rows;
    assert!(
        widthwise_sheet::check::understand(&sheet)
            .problems
            .is_empty()
    );
    let again = read(&sheet, &text, &[]);
    assert!(again.changes.is_empty());
}
