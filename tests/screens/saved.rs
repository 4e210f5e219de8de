//! What is saved of a knock and of interactions, in every form, read back by readers that are not ours, with names that could
//! break each.

use csv::{ReaderBuilder, StringRecord};
use serde_json::{Value, json};
use sha2::{Digest, Sha256};

use crate::bench::Bench;
use crate::texts::written;
use crate::{markdown, tex};

const NAMES: [&str; 8] = [
    "a,b;c",
    "\"quoted\" 'x'",
    "=1+1",
    "a|b | c",
    "<b>x</b> &amp;",
    "_x_ 50 % *y*",
    "$x$ #1 ^ ~",
    "`code` \\end{tabular}",
];

/// C goes to 3 by itself, S_1 then to 4.7; from half of it along 4.7/(1 + exp(−4.7t)).
fn model(name: &str) -> String {
    let name = json!(name);
    format!(
        "title: {name}\ntime: yr\nspecies: {{{name}: {{symbol: S_1, unit: kt, upper: 20}}, C: {{unit: kt, upper: 20}}}}\n\
         parameters: {{k: {{value: 5, range: [1, 9]}}}}\nchange: {{S_1: S_1*(k - S_1 - 0.1*C), C: C*(3 - C)}}\n\
         scenarios: {{{name}: {{}}}}\n"
    )
}

fn sha256(text: &str) -> String {
    format!("{:x}", Sha256::digest(text))
}

/// The screen after a knock to S_1 alone, for a name.
fn knocked(name: &str) -> Bench {
    let mut bench = Bench::of(&model(name));
    bench.press("a<End><Tab>");
    bench
}

fn interacting(name: &str) -> Bench {
    let mut bench = Bench::of(&model(name));
    bench.press("i<End>");
    bench
}

/// The line of names and the records, all of one length.
fn csv_of(text: &str) -> (StringRecord, Vec<StringRecord>) {
    let mut reader = ReaderBuilder::new().flexible(false).from_reader(text.as_bytes());
    let head = reader.headers().unwrap().clone();
    let names: std::collections::BTreeSet<&str> = head.iter().collect();
    assert_eq!(names.len(), head.len(), "{head:?}");
    (head, reader.records().map(Result::unwrap).collect())
}

#[track_caller]
fn field<'r>(head: &StringRecord, record: &'r StringRecord, name: &str) -> &'r str {
    let place = head.iter().position(|field| field == name).unwrap_or_else(|| panic!("no {name} in {head:?}"));
    &record[place]
}

#[track_caller]
fn near(x: &Value, expected: f64) {
    let x = x.as_f64().unwrap_or_else(|| panic!("no number: {x}"));
    assert!((x - expected).abs() <= 1e-5 * expected.abs(), "{x}, not {expected}");
}

fn number(text: &str) -> Value {
    serde_json::from_str(text).unwrap_or_else(|reason| panic!("{text:?}: {reason}"))
}

/// What holds for the whole, on each row.
fn has_its_source(head: &StringRecord, record: &StringRecord, name: &str) {
    // No spreadsheet takes it for a formula.
    let harmless = if name.starts_with('=') { format!("'{name}") } else { name.to_owned() };
    assert_eq!(field(head, record, "model"), harmless);
    assert_eq!(field(head, record, "scenario"), harmless);
    assert_eq!(field(head, record, "sha256"), sha256(&model(name)));
    assert_eq!(field(head, record, "program"), concat!("restpoint ", env!("CARGO_PKG_VERSION")));
    assert!(field(head, record, "file").ends_with("m.yaml"));
    assert_eq!(field(head, record, "equilibrium"), "E4");
    assert_eq!(field(head, record, "equilibrium_in_words"), "E4, stable node, proved");
    assert_eq!(field(head, record, "time"), "continuous, in yr");
    near(&number(field(head, record, "state S_1")), 4.7);
    near(&number(field(head, record, "state C")), 3.0);
    assert!(field(head, record, "caution").starts_with("These are local results"));
}

#[test]
fn a_knock_as_csv_has_every_time_and_its_source() {
    for name in NAMES {
        let (head, records) = csv_of(&written(&mut knocked(name), "a.csv"));
        assert_eq!(records.len(), 401);
        for record in &records {
            has_its_source(&head, record, name);
            assert_eq!(field(&head, record, "knock"), format!("half of {name} taken (-50 %)"));
            assert_eq!(field(&head, record, "set"), "");
            assert!(field(&head, record, "numbers").starts_with("numerical: "));
            let of = |name: &str| number(field(&head, record, name));
            let fades = (-4.7 * of("time [yr]").as_f64().unwrap()).exp();
            near(&of("after S_1"), 2.35);
            near(&of("S_1 [kt]"), 4.7 / (1.0 + fades));
            near(&of("C [kt]"), 3.0);
            near(&of("S_1 predicted [kt]"), 4.7 - 2.35 * fades);
        }
    }
}

/// A = (−4.7, −0.47; 0, −3), so −A⁻¹ = (1/4.7, −1/30; 0, 1/3).
const EFFECTS: [(&str, &str, &str, f64, &str, &str); 8] = [
    ("direct", "S_1", "S_1", -4.7, "minus", "-4.700"),
    ("direct", "S_1", "C", -0.47, "minus", "-0.4700"),
    ("direct", "C", "S_1", 0.0, "zero", "0"),
    ("direct", "C", "C", -3.0, "minus", "-3.000"),
    ("net", "S_1", "S_1", 1.0 / 4.7, "plus", "0.2128"),
    ("net", "S_1", "C", -1.0 / 30.0, "minus", "-0.03333"),
    ("net", "C", "S_1", 0.0, "zero", "0"),
    ("net", "C", "C", 1.0 / 3.0, "plus", "0.3333"),
];

#[test]
fn interactions_as_csv_have_every_effect_and_their_source() {
    for name in NAMES {
        let (head, records) = csv_of(&written(&mut interacting(name), "a.csv"));
        assert_eq!(records.len(), EFFECTS.len());
        for (record, (effects, row, column, size, sign, _)) in records.iter().zip(EFFECTS) {
            has_its_source(&head, record, name);
            let fields = ["effects", "answer of", "press on", "sign"].map(|name| field(&head, record, name));
            assert_eq!(fields, [effects, row, column, sign]);
            near(&number(field(&head, record, "number")), size);
        }
    }
}

/// What JSON has beside the rows.
fn json_of(text: &str, name: &str, what: &str) -> Value {
    let all: Value = serde_json::from_str(text).unwrap();
    assert_eq!(all["tool"], json!({"name": "restpoint", "version": env!("CARGO_PKG_VERSION")}));
    assert_eq!(all["model"], json!({"title": name, "sha256": sha256(&model(name)), "time": "continuous"}));
    assert_eq!((&all["what"], &all["scenario"]), (&json!(what), &json!(name)));
    assert_eq!((&all["equilibrium"], &all["set"]), (&json!("E4"), &json!({})));
    near(&all["state"]["S_1"], 4.7);
    assert!(all["said"].as_array().is_some_and(|said| !said.is_empty()));
    assert!(all["caution"].as_str().is_some_and(|text| text.starts_with("These are local results")));
    all
}

#[test]
fn json_has_every_row_by_its_headings() {
    for name in NAMES {
        let all = json_of(&written(&mut knocked(name), "a.json"), name, "After a knock");
        assert_eq!(all["knock"], json!(format!("half of {name} taken (-50 %)")));
        let rows = all["rows"].as_array().unwrap();
        assert_eq!((rows.len(), &rows[0]["time [yr]"]), (401, &json!(0.0)));
        near(&rows[0]["C [kt]"], 3.0);
        near(&rows[0]["S_1 [kt]"], 2.35);
        let all = json_of(&written(&mut interacting(name), "a.json"), name, "Interactions");
        let rows = all["rows"].as_array().unwrap();
        assert_eq!(rows.len(), EFFECTS.len());
        for (found, (effects, row, column, size, sign, _)) in rows.iter().zip(EFFECTS) {
            let keys = ["effects", "answer of", "press on", "sign"].map(|key| &found[key]);
            assert_eq!(keys, [effects, row, column, sign]);
            near(&found["number"], size);
        }
    }
}

/// A report has the facts, rounded numbers and, of a knock, not more times than can be looked through.
fn check_report(facts: &[Vec<String>], rows: &[Vec<String>], name: &str, is_knock: bool) {
    let has = |label: &str, text: &str| {
        assert!(
            facts.iter().any(|row| row[..] == [label.to_owned(), text.to_owned()]),
            "no {label} {text} in {facts:?}"
        );
    };
    has("scenario", name);
    has("SHA-256", &sha256(&model(name)));
    has("equilibrium", "E4, stable node, proved");
    has("state", "S_1 = 4.700 kt, C = 3.000 kt");
    if is_knock {
        has("knock", &format!("half of {name} taken (-50 %)"));
        assert_eq!(rows.len(), 41);
        assert_eq!(rows[0], ["time [yr]", "S_1 [kt]", "C [kt]", "S_1 predicted [kt]", "C predicted [kt]"]);
        assert_eq!(rows[1], ["0", "2.350", "3.000", "2.350", "3.000"]);
        assert!(rows[40][1].starts_with("4.6") || rows[40][1].starts_with("4.7"), "{rows:?}");
    } else {
        assert_eq!(rows.len(), EFFECTS.len() + 1);
        for (found, (effects, row, column, _, sign, shown)) in rows[1..].iter().zip(EFFECTS) {
            assert_eq!(found[..5], [effects, row, column, shown, sign]);
        }
    }
}

const THINNED: &str = "Of 401 rows 40 are shown, evenly chosen";

#[test]
fn markdown_shows_any_name_as_it_is() {
    for (name, is_knock) in NAMES.iter().flat_map(|name| [(*name, true), (*name, false)]) {
        let (mut bench, what) =
            if is_knock { (knocked(name), "After a knock") } else { (interacting(name), "Interactions") };
        let seen = markdown::read(&written(&mut bench, "a.md"));
        assert_eq!(seen.headings, [name, what]);
        let [facts, rows] = &seen.tables[..] else { panic!("{:?}", seen.tables) };
        check_report(facts, rows, name, is_knock);
        assert_eq!(seen.paragraphs.iter().any(|text| text.starts_with(THINNED)), is_knock);
        assert!(seen.paragraphs.last().unwrap().starts_with("These are local results"));
    }
}

#[test]
fn latex_prints_any_name_as_it_is() {
    for (name, is_knock) in NAMES.iter().flat_map(|name| [(*name, true), (*name, false)]) {
        let (mut bench, what) =
            if is_knock { (knocked(name), "After a knock") } else { (interacting(name), "Interactions") };
        let text = written(&mut bench, "a.tex");
        let printed = tex::read(&text).unwrap_or_else(|reason| panic!("{reason}\n{text}"));
        assert_eq!(printed.headings, [name, what]);
        let [facts, rows] = &printed.tables[..] else { panic!("{text}") };
        check_report(facts, rows, name, is_knock);
        assert_eq!(printed.text.contains(THINNED), is_knock);
        assert!(printed.text.contains("These are local results"));
    }
}

#[test]
fn text_has_the_same_facts() {
    for (name, is_knock) in NAMES.iter().flat_map(|name| [(*name, true), (*name, false)]) {
        let mut bench = if is_knock { knocked(name) } else { interacting(name) };
        let text = written(&mut bench, "a.txt");
        let scenario = format!("scenario: {name}");
        let sha256 = format!("SHA-256: {}", sha256(&model(name)));
        for line in [name, &scenario, &sha256, "equilibrium: E4, stable node, proved"] {
            assert!(text.lines().any(|other| other == line), "no {line} in\n{text}");
        }
        assert_eq!(text.contains(&format!("knock: half of {name} taken (-50 %)\n")), is_knock);
        assert!(text.contains("These are local results"));
    }
}

#[test]
fn where_nobody_is_there_the_reason_is_saved() {
    let mut bench = Bench::of(&model("x"));
    bench.press("i<Home>");
    let (head, records) = csv_of(&written(&mut bench, "a.csv"));
    assert_eq!((records.len(), field(&head, &records[0], "number")), (1, ""));
    assert!(field(&head, &records[0], "said").starts_with("Nobody is there"));
    let all: Value = serde_json::from_str(&written(&mut bench, "a.json")).unwrap();
    assert_eq!(all["rows"], json!([]));
    assert_eq!(markdown::read(&written(&mut bench, "a.md")).tables.len(), 1);
    assert_eq!(tex::read(&written(&mut bench, "a.tex")).unwrap().tables.len(), 1);
}

#[test]
fn tried_values_are_said_over_the_scenario_they_are_tried_in() {
    let mut bench = Bench::of(&model("base"));
    bench.press("vt4<Enter>i<End>");
    let (head, records) = csv_of(&written(&mut bench, "a.csv"));
    assert_eq!(field(&head, &records[0], "set"), "k = 4");
    assert_eq!(field(&head, &records[0], "scenario"), "base");
    near(&number(field(&head, &records[0], "state S_1")), 3.7);
    let all: Value = serde_json::from_str(&written(&mut bench, "a.json")).unwrap();
    assert_eq!(all["set"], json!({"k": 4.0}));
}

#[test]
fn nothing_is_saved_of_a_model_that_is_being_searched_again() {
    let mut bench = knocked("x");
    bench.hold();
    std::fs::write(bench.folder().join("m.yaml"), model("x").replace("value: 5", "value: 6")).unwrap();
    bench.press("R");
    // It is read, and what was found before is still shown.
    bench.do_one(0);
    bench.shows(&["E4, stable node, proved"]);
    let path = bench.folder().join("a.csv");
    bench.press("w");
    bench.paste(path.to_str().unwrap());
    bench.press("<Enter>");
    bench.shows(&["it is still being worked out"]);
    assert!(!path.exists());
    bench.work();
    bench.press("<Enter>");
    bench.shows(&["written to "]);
    let (head, records) = csv_of(&std::fs::read_to_string(path).unwrap());
    near(&number(field(&head, &records[0], "state S_1")), 5.7);
}
