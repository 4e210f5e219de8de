//! The table as CSV, Markdown, LaTeX and JSON, read back by readers that are not ours, with any names in it.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::table_support::{HOSTILE, SHA256, hostile_model, model, with_table_of};
use csv::StringRecord;
use restpoint::diag::cleanse::cleanse;
use restpoint::model::Model;
use restpoint::report::table::{Page, Style, csv, json, latex, markdown};
use serde_json::Value;

const PAGE: Page = Page { width: 80, style: Style::Unicode, color: false };

/// What every table ends with begins so.
const CAUTION: &str = "These are local results about a model";

/// A name as people see it: harmless, on one line.
fn seen(name: &str) -> String {
    cleanse(name).split_whitespace().collect::<Vec<_>>().join(" ")
}

fn csv_of(model: &Model, columns: Option<&str>) -> (StringRecord, Vec<StringRecord>) {
    let text = with_table_of(model, columns, |table| csv(table, Style::Unicode));
    assert!(text.ends_with("\r\n") && text.replace("\r\n", "").chars().all(|c| c != '\n' && c != '\r'), "{text}");
    // Neither reader is flexible: a record of another length is an error.
    let mut reader = csv::ReaderBuilder::new().flexible(false).from_reader(text.as_bytes());
    let head = reader.headers().unwrap().clone();
    (head, reader.records().map(Result::unwrap).collect())
}

/// The field of that name.
fn field<'r>(head: &StringRecord, record: &'r StringRecord, name: &str) -> &'r str {
    let place = head.iter().position(|field| field == name).unwrap_or_else(|| panic!("no {name} in {head:?}"));
    record.get(place).unwrap()
}

#[test]
fn csv_is_a_rectangle_with_everything_in_it() {
    let (head, records) = csv_of(&model(), None);
    let names: Vec<&str> = head.iter().collect();
    assert!(names.iter().enumerate().all(|(k, name)| !names[..k].contains(name)), "{names:?}");
    assert_eq!(records.len(), 2 + 4 + 1);
    for record in &records {
        assert_eq!(field(&head, record, "sha256"), SHA256);
        assert_eq!(field(&head, record, "command"), "restpoint table two.yaml --set E=0.5");
        assert_eq!(field(&head, record, "searched"), "S 0 to 1500 kt; κ 0 to 400.25 kt (chosen)");
        assert!(field(&head, record, "caution").starts_with(CAUTION));
        assert_eq!(field(&head, record, "interrupted"), "true");
        assert!(record.iter().all(|field| !field.contains("NaN") && !field.contains("null")), "{record:?}");
    }
    let check = |row: usize, fields: &[(&str, &str)]| {
        for (name, expected) in fields {
            assert_eq!(field(&head, &records[row], name), *expected, "{name}");
        }
    };
    check(1, &[("scenario", "present fleet"), ("id", "E2"), ("state S", "900.0"), ("proven", "true")]);
    check(1, &[("type", "stable spiral"), ("type_proven", "false"), ("stable", "true"), ("stable_proven", "true")]);
    check(1, &[("eigenvalues 2 re", "-0.11"), ("eigenvalues 2 im", "-0.42"), ("yield trawl S", "31.25")]);
    check(1, &[("period", "14.95996501709425"), ("invasion S", ""), ("invasion κ", "-0.02"), ("present", "S")]);
    check(1, &[("from_now", "E2"), ("from_now_time", "14.0"), ("complete", "true"), ("undecided", "0"), ("error", "")]);
    check(3, &[("id", "E3"), ("stable", ""), ("nonlinear verdict", "semi-stable"), ("nonlinear proven", "false")]);
    check(4, &[("settles to", "cycle"), ("settles lowest κ", "11.0"), ("settles mean_yield trawl S", "30.5")]);
    check(
        4,
        &[("yield trawl S", "0.3333333333333333"), ("complete", "false"), ("undecided", "2"), ("changes", "E = 0.5")],
    );
    check(5, &[("type", ""), ("why", "rates have a kink here"), ("return_time", "")]);
    check(
        6,
        &[("scenario", "broken"), ("id", ""), ("complete", ""), ("error", "two.yaml:15:3: the formulas are too many.")],
    );
}

#[test]
fn csv_has_a_field_for_each_number_of_a_matrix() {
    let (head, records) = csv_of(&model(), Some("net_effects,covariance,elasticities"));
    let names: Vec<&str> = head.iter().collect();
    let expected = [
        "scenario",
        "id",
        "net_effects S<-S",
        "net_effects S<-κ",
        "net_effects κ<-S",
        "net_effects κ<-κ",
        "covariance S:S",
        "covariance S:κ",
        "covariance κ:S",
        "covariance κ:κ",
        "elasticities r state S",
        "elasticities r state κ",
        "elasticities r leading",
        "elasticities E state S",
        "elasticities E state κ",
        "elasticities E leading",
        "proven",
        "changes",
    ];
    assert_eq!(names[..expected.len()], expected);
    let values: Vec<&str> = records[1].iter().skip(2).take(14).collect();
    assert_eq!(values, ["1.5", "-0.25", "0.5", "1e-9", "2.0", "0.5", "0.5", "", "0.5", "", "-1.25", "", "", ""]);
}

/// Whether a spreadsheet would take it for a formula.
fn is_formula(field: &str) -> bool {
    field.trim_start().starts_with(['=', '+', '-', '@', '\t', '\r']) && field.parse::<f64>().is_err()
}

#[test]
fn csv_keeps_any_name_as_text() {
    for name in HOSTILE {
        let (head, records) = csv_of(&hostile_model(name), None);
        assert_eq!(records.len(), 7, "{name:?}");
        for record in head.iter().chain(records.iter().flatten()) {
            assert!(!is_formula(record), "{name:?}: {record:?}");
            assert!(!record.chars().any(char::is_control), "{name:?}: {record:?}");
        }
        let clean = cleanse(name);
        let is_formula = clean.trim_start().starts_with(['=', '+', '-', '@']);
        let expected = if is_formula { format!("'{clean}") } else { clean.to_string() };
        for record in &records {
            assert_eq!(field(&head, record, "scenario"), expected);
            assert_eq!(field(&head, record, "model"), expected);
        }
        assert_eq!(field(&head, &records[1], &format!("yield {} S_1", cleanse(name))), "31.25");
    }
}

#[test]
fn markdown_shows_any_name_as_it_is() {
    for raw in HOSTILE {
        let text = with_table_of(&hostile_model(raw), None, |table| markdown(table, PAGE));
        let seen_there = crate::markdown::read(&text);
        let name = seen(raw);
        let scenario = format!("Scenario: {name}");
        assert_eq!(seen_there.headings, [name.as_str(), &scenario, &scenario, &scenario]);
        assert_eq!(seen_there.paragraphs[0], format!("Note: {name}"));
        assert!(seen_there.paragraphs.last().unwrap().starts_with(CAUTION));
        let [facts, first, second] = &seen_there.tables[..] else { panic!("{text}") };
        assert!(facts.iter().any(|row| row == &["SHA-256", SHA256]), "{facts:?}");
        let unit = seen(&format!("({raw})"));
        assert_eq!(first[0][..3], [String::new(), format!("S_1 {unit}"), format!("κ {unit}")]);
        assert!(first[0].iter().any(|head| head.starts_with(&format!("yield {name} S_1 ("))), "{first:?}");
        // The last cell of each row is where it belongs, so that no name made or closed a cell.
        assert_eq!(first[0].last(), Some(&format!("{name}, total {unit}")));
        assert_eq!(first[2].last().map(String::as_str), Some("41.25"));
        assert_eq!((first.len(), second.len()), (3, 5));
        assert!(text.lines().filter(|line| line.starts_with("| E")).all(|line| line.ends_with(" |")));
    }
}

#[test]
fn markdown_reads_as_expected() {
    let shown = with_table_of(&model(), None, |table| markdown(table, PAGE));
    assert_eq!(shown, include_str!("../files/table/everything.md"));
}

#[test]
fn latex_reads_as_expected() {
    let shown = with_table_of(&model(), None, |table| latex(table, PAGE));
    assert_eq!(shown, include_str!("../files/table/everything.tex"));
}

#[test]
fn latex_prints_any_name_as_it_is() {
    for name in HOSTILE {
        let text = with_table_of(&hostile_model(name), None, |table| latex(table, PAGE));
        let printed = crate::tex::read(&text).unwrap_or_else(|reason| panic!("{name:?}: {reason}\n{text}"));
        let name = seen(name);
        assert_eq!(printed.headings[0], name);
        assert_eq!(printed.headings[1..], vec![format!("Scenario: {name}"); 3]);
        assert!(printed.text.contains(CAUTION));
        let cells: Vec<&String> = printed.tables.iter().flatten().flatten().collect();
        for expected in [SHA256.to_owned(), name.clone(), format!("yield {name} S_1"), "31.25".to_owned()] {
            assert!(cells.iter().any(|cell| **cell == expected), "no {expected:?} in {cells:?}");
        }
    }
}

#[test]
fn json_keeps_any_name() {
    for name in HOSTILE {
        let value = with_table_of(&hostile_model(name), None, json);
        let read: Value = serde_json::from_str(&value.to_string()).unwrap();
        assert_eq!(read, value);
        assert_eq!(read["model"]["title"], *name);
        assert_eq!(read["scenarios"][0]["equilibria"][1]["yield"][name]["S_1"], 31.25);
    }
}

#[test]
fn the_same_table_gives_the_same_bytes() {
    let all = |columns| {
        with_table_of(&model(), columns, |table| {
            [csv(table, Style::Ascii), markdown(table, PAGE), latex(table, PAGE), json(table).to_string()]
        })
    };
    for columns in [None, Some("all")] {
        assert_eq!(all(columns), all(columns));
    }
}

#[test]
fn ascii_is_ascii_in_every_format() {
    let page = Page { style: Style::Ascii, ..PAGE };
    let ascii = |columns| {
        with_table_of(&model(), columns, |table| [csv(table, Style::Ascii), markdown(table, page), latex(table, page)])
    };
    assert!(ascii(None).iter().chain(&ascii(Some("all"))).all(|text| text.is_ascii()));
}
