//! Responses and charts in every form, read back by readers that are not ours, with any names in them.

use csv::StringRecord;
use restpoint::diag::cleanse::cleanse;
use restpoint::model::Model;
use restpoint::report::response::chart;
use restpoint::report::response::written;
use restpoint::report::table::{Form, Page, Style};
use serde_json::{Value, json};
use unicode_width::UnicodeWidthStr;

use crate::support::{with_charts_of, with_responses_of};
use crate::table_support::markdown::read_markdown;
use crate::table_support::{HOSTILE, SHA256, hostile_model, model};
use crate::tex;

const PAGE: Page = Page { width: 80, style: Style::Unicode, color: false };
const CAUTION: &str = "These are local results about a model";

fn one(model: &Model, form: Form, page: Page) -> String {
    with_responses_of(model, |responses| written(responses, form, page))
}

fn two(model: &Model, form: Form, page: Page) -> String {
    with_charts_of(model, |charts| chart::written(charts, form, page))
}

fn flat(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn text_says_it_all_in_words() {
    let shown = one(&model(), Form::Text, PAGE);
    let flat = flat(&shown);
    for expected in [
        "INTERRUPTED: the search was broken off; this is a partial result.",
        "as the file has it; E from 0 to 3, now 1.",
        "E2 (sprat and κοδ) persists and is stable from E = 0.2500 to 1.500.",
        "Nearest loss, 50 % above the present 1: κοδ cannot persist at rest above E = 1.500: the state with sprat and κοδ \
         meets a saddle and is gone (fold).",
        "The largest yield of trawl S, 14.50 kt/yr, is at E = 1.450, 3.4 % below the nearest loss (fold at 1.500): don't \
         steer to it.",
        "Open access to trawl settles at E = 1.125, where its value is 0. (numerical)",
        "proved: no equilibrium is missing, except perhaps close to where branches meet: 1.438 to 1.562 (branches meet \
         there, or nearly so); searched at 2 values of E.",
        "1 Hopf: cycles set in softly below E = 0.2500.",
        "a move of 0.1250, each parameter in widths of its range (numerical; 3 starts led there, and there may be a nearer \
         one).",
        "No stable state was found at the present E = 1. (numerical)",
        "proved: no equilibrium in the search box is missing anywhere in the range; searched at 2 values of E.",
        "No threshold was found in the range (numerical).",
        "FAILED: two.yaml:15:3: the formulas are too many.",
        CAUTION,
    ] {
        assert!(flat.contains(expected), "no {expected:?} in\n{shown}");
    }
    for row in
        ["  1 Hopf     0.2500  60.00  30.00  0 +- 0.3750i  soft", "  2 fold     1.500   40.00  12.50  0; -0.2500"]
    {
        assert!(shown.lines().any(|line| line == row), "no {row:?} in\n{shown}");
    }
}

#[test]
fn text_of_a_chart_says_it_all_in_words() {
    let shown = two(&model(), Form::Text, PAGE);
    let flat = flat(&shown);
    for expected in [
        "as the file has it; E from 0 to 2, now 1; r from 0 to 4, now 0.5.",
        "NOT PROVED COMPLETE: states may be missing in 1 of 2 regions; of 1 of 4 cells the region is not known.",
        "a: 2 states, proved at E = 0.2500, r = 2.000: ● stable node (sprat and κοδ); ◐ saddle (sprat).",
        "b: 4 states, undecided at E = 1.250, r = 1.000: 2 ● stable node (sprat and κοδ); 2 ◐ saddle (sprat).",
        "1 cusp 1.500 3.000 41.00 13.50 1 cusp: two folds meet and end: around it a jump can be avoided.",
        "fold 0.5000 1.500 0 3.000 yes fold 1.500 2.000 0 3.000 in part",
        "Best yield pairs: neither can be raised without lowering the other (numerical)",
        "0.5000 0.7500 10.00 4.000 40.00 12.50 1.000 0.7500 12.00 1.500 40.00 12.50",
        "The largest yield of both together, 14.00 kt/yr, is at E = 0.5000 and r = 0.7500: trawl S 10.00, gill nets κ \
         4.000 (numerical).",
    ] {
        assert!(flat.contains(expected), "no {expected:?} in\n{shown}");
    }
    // The lower half is region a, then b; of the upper right quarter nothing is known.
    let rows: Vec<&str> = shown.lines().filter(|line| line.contains(['│', '┤'])).collect();
    assert_eq!(rows.len(), 24, "{shown}");
    for (row, expected) in [(0, "a?"), (23, "ab")] {
        let cells: String = rows[row].chars().skip(8).collect();
        let mut signs: Vec<char> = cells.chars().collect();
        signs.dedup();
        assert_eq!(signs.into_iter().collect::<String>(), expected, "{shown}");
    }
    let marked = |sign| rows.iter().filter(|row| row.chars().skip(8).any(|cell| cell == sign)).count();
    assert_eq!((marked('+'), marked('1')), (1, 1), "{shown}");
}

#[test]
fn any_page_and_any_name_stay_harmless_and_in_their_width() {
    for raw in HOSTILE {
        for make in [one, two] {
            for page in [PAGE, Page { width: 0, ..PAGE }, Page { style: Style::Ascii, ..PAGE }] {
                let shown = make(&hostile_model(raw), Form::Text, page);
                assert!(!shown.chars().any(|c| c.is_control() && c != '\n'), "{raw:?}: {shown:?}");
                assert!(page.style == Style::Unicode || shown.is_ascii(), "{raw:?}: {shown:?}");
            }
        }
    }
    for width in [60, 80, 100, 133, 200] {
        for make in [one, two] {
            let shown = make(&model(), Form::Text, Page { width, ..PAGE });
            let mut lines = shown.lines().filter(|line| !line.contains(SHA256));
            assert!(lines.all(|line| line.width() <= width), "{width}: {shown}");
        }
    }
}

#[test]
fn colour_repeats_what_words_say() {
    for make in [one, two] {
        let coloured = make(&model(), Form::Text, Page { color: true, ..PAGE });
        let plain: String = coloured
            .split('\u{1b}')
            .enumerate()
            .map(|(place, part)| if place == 0 { part } else { part.split_once('m').unwrap().1 })
            .collect();
        assert_ne!(plain, coloured);
        assert_eq!(plain, make(&model(), Form::Text, PAGE));
    }
}

fn csv_of(text: &str) -> (StringRecord, Vec<StringRecord>) {
    let mut reader = csv::ReaderBuilder::new().flexible(false).from_reader(text.as_bytes());
    let head = reader.headers().unwrap().clone();
    (head, reader.records().map(Result::unwrap).collect())
}

fn check_fields(head: &StringRecord, record: &StringRecord, fields: &[(&str, &str)]) {
    for (name, expected) in fields {
        let place = head.iter().position(|field| field == *name).unwrap_or_else(|| panic!("no {name} in {head:?}"));
        assert_eq!(&record[place], *expected, "{name} of {record:?}");
    }
}

#[test]
fn csv_has_a_row_for_all_that_there_is() {
    let (head, records) = csv_of(&one(&model(), Form::Csv, PAGE));
    let count = |record: &str| records.iter().filter(|row| &row[0] == record).count();
    let counts = ["scenario", "threshold", "best yield", "band", "point"].map(count);
    assert_eq!(counts, [3, 2, 1, 2, 9]);
    let check = |row: usize, fields: &[(&str, &str)]| check_fields(&head, &records[row], fields);
    check(0, &[("record", "scenario"), ("at", "1.0"), ("complete", "false"), ("interrupted", "true"), ("of", "E")]);
    check(1, &[("kind", "Hopf"), ("at", "0.25"), ("criticality", "soft"), ("leading_im", "0.375"), ("caution", "")]);
    check(1, &[("meaning", "cycles set in softly below E = 0.2500"), ("state S (kt)", "60.0")]);
    check(3, &[("record", "best yield"), ("what", "trawl S"), ("amount", "14.5"), ("attained", "true")]);
    check(4, &[("record", "band"), ("of", "E"), ("from", "0.25"), ("to", "1.5"), ("kind", "fold"), ("amount", "0.5")]);
    check(5, &[("record", "band"), ("of", "r"), ("amount", ""), ("kind", ""), ("equilibrium", "E2")]);
    check(8, &[("branch", "B2"), ("place", "1"), ("present", "S κ"), ("type", "unstable spiral"), ("stable", "false")]);
    check(12, &[("at", "1.5"), ("yield trawl S (kt/yr)", "15.0"), ("value trawl", ""), ("feasible", "true")]);
    check(14, &[("at", "1.0"), ("state κ (kt)", "-5.0"), ("feasible", "false")]);
    check(16, &[("record", "scenario"), ("scenario", "broken"), ("complete", "")]);
    check(16, &[("failure", "two.yaml:15:3: the formulas are too many.")]);
}

#[test]
fn csv_of_a_chart_has_regions_points_and_curves() {
    let (head, records) = csv_of(&two(&model(), Form::Csv, PAGE));
    assert_eq!(records.len(), 3 + 2 + 1 + 4 + 2 + 1);
    let check = |row: usize, fields: &[(&str, &str)]| check_fields(&head, &records[row], fields);
    check(0, &[("record", "scenario"), ("at E", "1.0"), ("at r", "0.5"), ("complete", "false")]);
    check(1, &[("record", "region"), ("region", "a"), ("at E", "0.25"), ("equilibria", "2"), ("complete", "true")]);
    check(2, &[("which", "2 stable node (sprat and κοδ); 2 saddle (sprat)")]);
    check(3, &[("record", "point"), ("kind", "cusp"), ("at r", "3.0"), ("state S (kt)", "41.0")]);
    check(8, &[("record", "best yield pair"), ("at E", "0.5"), ("yield gill nets κ (kt/yr)", "4.0"), ("kind", "")]);
    check(10, &[("record", "largest total"), ("yield trawl S (kt/yr)", "10.0"), ("state S (kt)", "40.0")]);
    check(6, &[("record", "curve"), ("curve", "2"), ("place", "1"), ("at E", "2.0"), ("bounds_stable", "false")]);
}

#[test]
fn no_name_becomes_a_formula_in_csv() {
    for raw in HOSTILE {
        for make in [one, two] {
            let (head, records) = csv_of(&make(&hostile_model(raw), Form::Csv, PAGE));
            for field in head.iter().chain(records.iter().flatten()) {
                let is_formula = field.trim_start().starts_with(['=', '+', '-', '@']) && field.parse::<f64>().is_err();
                assert!(!is_formula && !field.chars().any(char::is_control), "{raw:?}: {field:?}");
            }
        }
    }
}

#[test]
fn markdown_and_latex_show_any_name_as_it_is() {
    for raw in HOSTILE {
        let name = cleanse(raw).split_whitespace().collect::<Vec<_>>().join(" ");
        let scenario = format!("Scenario: {name}");
        for (make, tables_of) in [(one as fn(&Model, Form, Page) -> String, 4), (two, 3)] {
            let (headings, tables) = read_markdown(&make(&hostile_model(raw), Form::Markdown, PAGE));
            let titles: Vec<&String> = headings.iter().filter(|title| **title == scenario).collect();
            assert_eq!((headings[0].as_str(), titles.len()), (name.as_str(), 3), "{headings:?}");
            let check = |tables: &[Vec<Vec<String>>], expected: usize| {
                assert!(tables.len() > expected, "{raw:?}: {}", tables.len());
                assert!(tables.iter().all(|table| table.iter().all(|row| row.len() == table[0].len())), "{raw:?}");
            };
            check(&tables, tables_of);
            let shown = make(&hostile_model(raw), Form::Latex, PAGE);
            let printed = tex::read(&shown).unwrap_or_else(|reason| panic!("{raw:?}: {reason}\n{shown}"));
            assert_eq!(printed.headings.iter().filter(|title| **title == scenario).count(), 3);
            assert!(printed.text.contains(CAUTION));
            check(&printed.tables, tables_of);
        }
    }
    let ascii = Page { style: Style::Ascii, ..PAGE };
    for form in [Form::Markdown, Form::Latex, Form::Csv, Form::Json] {
        assert!(one(&model(), form, ascii).is_ascii() && two(&model(), form, ascii).is_ascii(), "{form:?}");
    }
}

/// The first keys of an object, as many as there are in the contract.
fn check_keys(value: &Value, contract: &[&str]) {
    let keys: Vec<&str> = value.as_object().unwrap().keys().map(String::as_str).collect();
    assert_eq!(&keys[..contract.len()], contract);
}

#[test]
fn json_has_the_keys_of_the_contract_first() {
    let read: Value = serde_json::from_str(&one(&model(), Form::Json, PAGE)).unwrap();
    check_keys(&read, &["tool", "model", "of", "range", "scenarios", "run", "caution"]);
    let scenario = &read["scenarios"][0];
    check_keys(scenario, &["name", "of", "range", "complete", "thresholds", "branches", "best_yield"]);
    assert_eq!((&scenario["of"], &scenario["complete"]), (&json!("E"), &json!(false)));
    let threshold = &scenario["thresholds"][1];
    check_keys(threshold, &["kind", "at", "state", "eigenvalues", "criticality", "meaning"]);
    assert_eq!((&threshold["at"], &threshold["criticality"]), (&json!(1.5), &Value::Null));
    assert_eq!(threshold["state"], json!({"S": 40.0, "κ": 12.5}));
    assert_eq!(threshold["arms"][1]["type"], "saddle");
    let branch = &scenario["branches"][1];
    check_keys(branch, &["id", "equilibrium", "points"]);
    assert_eq!((&branch["equilibrium"], &branch["ends"][1]["kind"]), (&json!("E2"), &json!("Hopf")));
    let point = &branch["points"][3];
    check_keys(point, &["at", "state", "type", "yield"]);
    assert_eq!((&point["yield"], &point["value"]), (&json!({"trawl": {"S": 10.0}}), &json!({"trawl": null})));
    let best = &scenario["best_yield"][0];
    check_keys(best, &["harvest", "species", "yield", "at", "state", "attained", "edge"]);
    assert_eq!((&best["edge"], &best["nearest"]["kind"]), (&Value::Null, &json!("fold")));
    let edges = &scenario["bands"][0]["edges"];
    assert_eq!(edges, &json!([{"what": "threshold", "kind": "Hopf"}, {"what": "threshold", "kind": "fold"}]));
    assert_eq!(scenario["bands"][0]["margin"], json!({"amount": 0.5, "share": 0.5, "side": "above"}));
    assert_eq!(scenario["closest_edge"]["values"], json!({"r": 0.875, "E": 1.25}));
    assert_eq!(scenario["gaps"][0]["from"], json!(1.4375));
    let keys: Vec<&String> = read["scenarios"][2].as_object().unwrap().keys().collect();
    assert_eq!(keys, ["name", "error"]);
    for name in HOSTILE {
        let read: Value = serde_json::from_str(&one(&hostile_model(name), Form::Json, PAGE)).unwrap();
        assert_eq!(read["scenarios"][1]["name"], *name);
    }
}

#[test]
fn json_of_a_chart_has_the_keys_of_the_contract() {
    let read: Value = serde_json::from_str(&two(&model(), Form::Json, PAGE)).unwrap();
    let scenario = &read["scenarios"][0];
    check_keys(scenario, &["name", "of", "curves", "points", "regions"]);
    assert_eq!((&read["of"], &scenario["of"]), (&json!(["E", "r"]), &json!(["E", "r"])));
    check_keys(&scenario["curves"][0], &["kind", "points"]);
    assert_eq!(scenario["curves"][0]["points"], json!([[0.5, 0.0], [1.5, 3.0]]));
    check_keys(&scenario["points"][0], &["kind", "at", "state"]);
    assert_eq!(scenario["points"][0]["kind"], "cusp");
    check_keys(&scenario["regions"][1], &["inside", "equilibria"]);
    assert_eq!(scenario["regions"][1]["equilibria"][0], json!({"present": ["S"], "type": "saddle"}));
    assert_eq!(scenario["cells"], json!([0, 1, 0, null]));
}
