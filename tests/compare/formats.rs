//! The comparison in every format, read back by readers that are not ours, with any names in it.

use csv::StringRecord;
use restpoint::analysis::passage::{Fate, Passage, Reason};
use restpoint::diag::cleanse::cleanse;
use restpoint::model::{Model, SpeciesId};
use restpoint::report::compare::{Change, Comparison, csv, json, latex, markdown, text};
use restpoint::report::table::{Page, Style};
use serde_json::Value;

use crate::table_support::markdown::read_markdown;
use crate::table_support::{HOSTILE, hostile_model, model, with_table_of};
use crate::tex;

const PAGE: Page = Page { width: 80, style: Style::Unicode, color: false };

const CAUTION: &str = "These are local results about a model";

/// From the first scenario to the second, whose names are E1, E3, E2, E4.
fn passage() -> Passage {
    let arrives = |at| Fate::Arrives { at, turns: Vec::new(), kinks: Vec::new() };
    Passage {
        forward: vec![arrives(0), Fate::Arrives { at: 2, turns: vec![0.9, 0.25], kinks: vec![0.5] }],
        backward: vec![
            arrives(0),
            Fate::NotFollowed(Reason::Singular),
            arrives(1),
            Fate::Zero { at: 0.125, species: SpeciesId(1), with: Some(2) },
        ],
    }
}

fn with_comparison<T>(model: &Model, use_it: impl Fn(&Comparison<'_>) -> T) -> T {
    with_table_of(model, None, |table| use_it(&Comparison::new(table, &[None, Some(passage()), None])))
}

fn seen(name: &str) -> String {
    cleanse(name).split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn entries_say_what_became_of_each() {
    with_comparison(&model(), |comparison| {
        let ids: Vec<&str> = comparison.rows.iter().map(|row| row.id.as_str()).collect();
        assert_eq!(ids, ["E1", "E2", "E3", "E4"]);
        let changes = |row: usize| comparison.rows[row].entries.iter().map(|entry| entry.change).collect::<Vec<_>>();
        assert_eq!(changes(0), [Change::Reference, Change::Same, Change::Failed]);
        assert_eq!(changes(3), [Change::InNeither, Change::Gained, Change::Failed]);
        let swung = &comparison.rows[1].entries[1];
        assert_eq!((swung.place, swung.type_changed), (Some(2), Some(true)));
        assert_eq!(swung.values, [Some(890.0), Some(0.0), None, Some(1.0 / 3.0 + 1e-12), Some(0.0)]);
        let reference = &comparison.rows[1].entries[0];
        assert_eq!(reference.values, [Some(900.0), Some(0.0), Some(1.0 / 0.11), Some(31.75), Some(0.3)]);
        assert_eq!(comparison.rows[0].entries[1].type_changed, None, "no type in the corner");
    });
}

#[test]
fn text_has_every_change_in_words() {
    let shown = with_comparison(&model(), |comparison| text(comparison, PAGE));
    let flat = shown.split_whitespace().collect::<Vec<_>>().join(" ");
    for expected in [
        "INTERRUPTED: the search was broken off; this is a partial result.",
        "FAILED: two.yaml:15:3: the formulas are too many.",
        "NOT PROVED COMPLETE: 4 were found;",
        "E2 in half | the effort: type changed; its branch turns back on the way, in folds at 90.0 % and 25.0 % (numerical).",
        "E3 in half | the effort: gained: not followed, for the state is singular, or nearly so (numerical).",
        "E4 in half | the effort: gained: κ comes up from 0 at 12.5 % of the way from present fleet, where it parts from E2 \
         (numerical).",
        "890.0 -1.1 %",
        "undecided: probably a double root: S from 12.00 to 12.50",
        "From S 610 kt, κ 35 kt, the path reaches E2, to within 10 % after 14.00 yr",
        CAUTION,
    ] {
        assert!(flat.contains(expected), "no {expected:?} in\n{shown}");
    }
    assert!(shown.lines().all(|line| unicode_width::UnicodeWidthStr::width(line) <= 80), "{shown}");
}

#[test]
fn narrow_pages_colour_and_ascii_say_the_same() {
    for raw in HOSTILE {
        for page in [PAGE, Page { width: 0, ..PAGE }, Page { style: Style::Ascii, ..PAGE }] {
            let shown = with_comparison(&hostile_model(raw), |comparison| text(comparison, page));
            assert!(!shown.chars().any(|c| c.is_control() && c != '\n'), "{raw:?}: {shown:?}");
            assert!(page.style == Style::Unicode || shown.is_ascii(), "{raw:?}: {shown:?}");
        }
    }
    let coloured = with_comparison(&model(), |comparison| text(comparison, Page { color: true, ..PAGE }));
    let mut plain = coloured.clone();
    for code in ["\u{1b}[32m", "\u{1b}[33m", "\u{1b}[35m", "\u{1b}[0m"] {
        plain = plain.replace(code, "");
    }
    assert_ne!(plain, coloured);
    assert_eq!(plain, with_comparison(&model(), |comparison| text(comparison, PAGE)));
}

fn csv_of(model: &Model, style: Style) -> (StringRecord, Vec<StringRecord>) {
    let text = with_comparison(model, |comparison| csv(comparison, style));
    let mut reader = csv::ReaderBuilder::new().flexible(false).from_reader(text.as_bytes());
    let head = reader.headers().unwrap().clone();
    (head, reader.records().map(Result::unwrap).collect())
}

fn field<'r>(head: &StringRecord, record: &'r StringRecord, name: &str) -> &'r str {
    let place = head.iter().position(|field| field == name).unwrap_or_else(|| panic!("no {name} in {head:?}"));
    record.get(place).unwrap()
}

#[test]
fn csv_has_a_row_for_each_equilibrium_and_scenario() {
    let (head, records) = csv_of(&model(), Style::Unicode);
    assert_eq!(records.len(), 4 * 3);
    let check = |row: usize, fields: &[(&str, &str)]| {
        for (name, expected) in fields {
            assert_eq!(field(&head, &records[row], name), *expected, "{name} of row {row}");
        }
    };
    check(3, &[("id", "E2"), ("change", "reference"), ("S (kt)", "900.0"), ("change of S (kt)", ""), ("place", "2")]);
    check(
        4,
        &[("scenario", "half | the effort"), ("change", "same"), ("S (kt)", "890.0"), ("change of S (kt)", "-10.0")],
    );
    check(4, &[("type", "unstable spiral"), ("type_changed", "true"), ("place", "3"), ("reference", "present fleet")]);
    check(5, &[("change", "failed"), ("S (kt)", ""), ("error", "two.yaml:15:3: the formulas are too many.")]);
    check(
        9,
        &[("id", "E4"), ("change", "in neither"), ("complete", "true"), ("from_now", "E2"), ("interrupted", "true")],
    );
    check(
        10,
        &[("change", "gained"), ("proven", "false"), ("type", ""), ("complete", "false"), ("return time (yr)", "")],
    );
    for name in HOSTILE {
        for style in [Style::Unicode, Style::Ascii] {
            let (head, records) = csv_of(&hostile_model(name), style);
            assert_eq!(records.len(), 12, "{name:?}");
            for record in head.iter().chain(records.iter().flatten()) {
                let is_formula =
                    record.trim_start().starts_with(['=', '+', '-', '@']) && record.parse::<f64>().is_err();
                assert!(!is_formula && !record.chars().any(char::is_control), "{name:?}: {record:?}");
                assert!(style == Style::Unicode || record.is_ascii(), "{record:?}");
            }
        }
    }
}

#[test]
fn markdown_and_latex_show_any_name_as_it_is() {
    for raw in HOSTILE {
        let name = seen(raw);
        let scenario = format!("Scenario: {name}");
        let headings = [&[name.as_str()][..], &[scenario.as_str(); 3], &["E1", "E2", "E3", "E4"]].concat();
        let cells = |tables: &[Vec<Vec<String>>]| {
            let second: Vec<&Vec<Vec<String>>> = tables.iter().filter(|table| table[0][0] == "E2").collect();
            let rows: Vec<String> = second.iter().flat_map(|table| table.iter().map(|row| row[0].clone())).collect();
            for label in ["change", "type", "state", "return time"] {
                assert!(rows.iter().any(|row| row.starts_with(label)), "{raw:?}: {rows:?}");
            }
            assert!(second.iter().all(|table| table.iter().all(|row| row.len() == table[0].len())), "{raw:?}");
            assert!(second.iter().any(|table| table[0].contains(&name)), "{raw:?}: {second:?}");
        };
        let shown = with_comparison(&hostile_model(raw), |comparison| markdown(comparison, PAGE));
        let (found, tables) = read_markdown(&shown);
        assert_eq!(found, headings);
        cells(&tables);
        let shown = with_comparison(&hostile_model(raw), |comparison| latex(comparison, PAGE));
        let printed = tex::read(&shown).unwrap_or_else(|reason| panic!("{raw:?}: {reason}\n{shown}"));
        assert_eq!(printed.headings, headings);
        assert!(printed.text.contains(CAUTION));
        cells(&printed.tables);
    }
    let ascii = Page { style: Style::Ascii, ..PAGE };
    assert!(with_comparison(&model(), |comparison| markdown(comparison, ascii)).is_ascii());
    assert!(with_comparison(&model(), |comparison| latex(comparison, ascii)).is_ascii());
}

#[test]
fn json_has_the_table_and_what_is_matched() {
    let value = with_comparison(&model(), json);
    let read: Value = serde_json::from_str(&value.to_string()).unwrap();
    assert_eq!(read, value);
    let keys: Vec<&str> = value.as_object().unwrap().keys().map(String::as_str).collect();
    assert_eq!(keys, ["tool", "model", "scenarios", "reference", "matches", "run", "caution"]);
    assert_eq!(value["scenarios"], with_table_of(&model(), None, restpoint::report::table::json)["scenarios"]);
    assert_eq!(value["reference"], "present fleet");
    for (row, matched) in value["matches"].as_array().unwrap().iter().enumerate() {
        for (scene, entry) in matched["scenarios"].as_array().unwrap().iter().enumerate() {
            let Some(place) = entry["place"].as_u64() else { continue };
            let place = usize::try_from(place).unwrap();
            assert_eq!(value["scenarios"][scene]["equilibria"][place]["id"], matched["id"], "row {row}");
        }
    }
    let entry = |row: usize| &value["matches"][row]["scenarios"][1];
    let swung = &entry(1)["change"];
    assert_eq!((&swung["what"], &swung["through"], &swung["with"]), (&"same".into(), &"arrives".into(), &"E2".into()));
    assert_eq!((&swung["turns"], &swung["type_changed"]), (&serde_json::json!([0.9, 0.25]), &true.into()));
    assert_eq!(entry(1)["differences"]["S"], serde_json::json!({"from": 900.0, "to": 890.0}));
    let gained = &entry(3)["change"];
    assert_eq!((&gained["at"], &gained["with"], &gained["species"]), (&0.125.into(), &"E2".into(), &"κ".into()));
    assert_eq!(gained["proven"], false);
    for name in HOSTILE {
        let value = with_comparison(&hostile_model(name), json);
        assert_eq!(value["matches"][0]["scenarios"][1]["name"], *name);
    }
}
