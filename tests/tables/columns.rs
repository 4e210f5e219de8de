//! The list of columns: complete, in the contract's order, explained, and obeyed by `--columns`.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::cli_support::{run, run_on};
use crate::table_support::{SCENARIO_KEYS, keys_without_reason, model, model_text, scenes, with_table, with_table_of};
use restpoint::analysis::linearise::Kind;
use restpoint::report::kinds::KINDS;
use restpoint::report::table::{Page, Style, columns, json, text};
use serde_json::{Value, json};

fn keys(value: &Value) -> Vec<&str> {
    value.as_object().unwrap().keys().map(String::as_str).collect()
}

#[test]
fn columns_are_told_apart_and_explained() {
    let all: Vec<_> = columns().collect();
    assert_eq!(all[0].id, "id");
    for (place, column) in all.iter().enumerate() {
        assert!(column.id.chars().all(|c| c.is_ascii_lowercase() || c == '_'), "{}", column.id);
        assert!(all[..place].iter().all(|other| other.id != column.id), "{}", column.id);
        assert!(column.help.len() > 20 && !column.help.ends_with('.'), "{}", column.help);
        assert!(!column.help.contains("  ") && column.help.is_ascii(), "{}", column.help);
        assert!(!column.unit.meaning().is_empty(), "{}", column.id);
    }
}

#[test]
fn keys_are_the_contracts_in_its_order() {
    let json = with_table(json);
    let equilibria = |scenario: usize| json["scenarios"][scenario]["equilibria"].as_array().unwrap();
    let whole = keys(&equilibria(0)[1]);
    assert_eq!(whole, keys_without_reason());
    for equilibrium in equilibria(0).iter().chain(equilibria(1)) {
        let without: Vec<&str> = keys(equilibrium).into_iter().filter(|key| *key != "why").collect();
        assert_eq!(without, keys_without_reason());
    }
    assert_eq!(keys(&json["scenarios"][0]), SCENARIO_KEYS);
}

#[test]
fn values_have_the_contracts_shape() {
    let json = with_table(json);
    let check = |pointer: &str, expected: Value| {
        assert_eq!(json.pointer(&format!("/scenarios/{pointer}")), Some(&expected), "{pointer}");
    };
    check("0/equilibria/1/eigenvalues", json!([{"re": -0.11, "im": 0.42}, {"re": -0.11, "im": -0.42}]));
    check("0/equilibria/1/type", json!("stable spiral"));
    check("0/equilibria/1/type_proven", json!(false));
    check("0/equilibria/1/stable_proven", json!(true));
    check("0/equilibria/1/dimensions", json!({"stable": 2, "centre": 0, "unstable": 0}));
    check("0/equilibria/1/nonlinear", Value::Null);
    check("0/equilibria/1/peak_amplification", json!({"factor": 1.6, "time": 2.2}));
    check("0/equilibria/1/invasion", json!({"κ": -0.02}));
    check("0/equilibria/1/yield", json!({"trawl": {"S": 31.25, "κ": 0.5}}));
    check("0/equilibria/1/value", json!({"trawl": 0.3}));
    check("0/equilibria/1/net_effects", json!([[1.5, -0.25], [0.5, 1e-9]]));
    check("0/equilibria/1/net_effects_condition", json!({"number": 1e9, "nearly_singular": true}));
    check("0/equilibria/1/elasticities", json!({"r": {"state": {"S": 0.5, "κ": null}, "leading": -1.25}}));
    check("0/equilibria/1/covariance", json!([[2.0, 0.5], [0.5, null]]));
    check("0/equilibria/1/populations", json!({"κοδ": {"total": 41.25, "invasion": 0.125}}));
    check("0/from_now/reaches", json!("E2"));
    check("0/from_now/time", json!(14.0));
    check("0/from_now/lowest", json!({"S": 590.0, "κ": 0.0}));
    check("0/from_now/shares", json!({"E2": 0.93, "cycle": 0.065, "loss of κ": 0.005}));
    let nonlinear = json!({"verdict": "semi-stable", "test": "fold", "coefficient": -0.5, "proven": false});
    check("1/equilibria/1/nonlinear", nonlinear);
    check("1/equilibria/1/stable", Value::Null);
    let cycle = json!({
        "to": "cycle", "period": 15.2, "lowest": {"S": 210.5, "κ": 11.0}, "highest": {"S": 480.25, "κ": 77.0},
        "mean_yield": {"trawl": {"S": 30.5, "κ": 0.75}}
    });
    check("1/equilibria/2/settles", cycle);
    check("1/from_now", Value::Null);
    // Not computed is null, and no reason is made up for it.
    for key in ["eigenvalues", "type", "stable", "dimensions", "resilience", "yield", "net_effects", "populations"] {
        check(&format!("1/equilibria/3/{key}"), Value::Null);
    }
}

#[test]
fn what_has_no_derivative_has_null_for_what_follows_from_one() {
    let json = with_table(json);
    let equilibria = json["scenarios"][1]["equilibria"].as_array().unwrap();
    let why: Vec<Option<&str>> = equilibria.iter().map(|e| e.get("why").and_then(|why| why.as_str())).collect();
    assert_eq!(why, [Some("rates have no derivative here"), None, None, Some("rates have a kink here")]);
    assert!(equilibria[0].get("type").is_some_and(Value::is_null));
    let proven: Vec<bool> = equilibria.iter().map(|e| e["proven"].as_bool().unwrap()).collect();
    assert_eq!(proven, [true, true, false, false]);
    let unresolved = json["scenarios"][1]["search"]["unresolved"].as_array().unwrap();
    let probably: Vec<&str> = unresolved.iter().map(|one| one["probably"].as_str().unwrap()).collect();
    assert_eq!(probably, ["double root", "budget"]);
    let error = &json["scenarios"][2]["error"];
    assert_eq!((error["line"].as_u64(), error["column"].as_u64()), (Some(15), Some(3)));
}

#[test]
fn every_kind_is_shown_by_its_own_word_and_glyph() {
    let model = model();
    for look in KINDS {
        let mut scenes = scenes(&model);
        let linear = scenes[0].outcome.as_mut().unwrap().assessment.equilibria[1].linear.as_mut().unwrap();
        (linear.kind, linear.kind_proven) = (look.kind, true);
        let shown = |style| {
            with_table(|table| {
                let table = restpoint::report::table::Table { scenes: &scenes, ..*table };
                (json(&table), text(&table, Page { width: 120, style, color: false }))
            })
        };
        let (json, unicode) = shown(Style::Unicode);
        assert_eq!(json["scenarios"][0]["equilibria"][1]["type"], look.word);
        let winds = if look.spirals { '~' } else { ' ' };
        let proof = if look.kind == Kind::Undecided { ", proved critical" } else { ", proved" };
        assert!(unicode.contains(&format!("{}{winds} {}{proof}", look.glyph, look.word)), "{unicode}");
        let (_, ascii) = shown(Style::Ascii);
        assert!(ascii.contains(&format!("{}{winds} {}{proof}", look.ascii, look.word)), "{ascii}");
    }
}

#[test]
fn proofs_are_asked_of_types_as_of_states() {
    let model = model();
    let mut scene = scenes(&model).swap_remove(0);
    let solved = scene.outcome.as_mut().unwrap();
    assert!(!solved.is_proved(), "one type is numerical");
    solved.assessment.equilibria[1].linear.as_mut().unwrap().kind_proven = true;
    assert!(solved.is_proved());
    solved.assessment.equilibria[0].linear.as_mut().unwrap().stable_proven = false;
    assert!(!solved.is_proved());
}

#[test]
fn asked_columns_are_shown_in_the_order_asked_for() {
    let asked = with_table_of(&model(), Some("period,type,state"), json);
    let expected = ["id", "period", "type", "type_proven", "state", "proven"];
    assert_eq!(keys(&asked["scenarios"][0]["equilibria"][1]), expected);
    let shown = with_table_of(&model(), Some("damping_ratio,state"), |table| {
        text(table, Page { width: 80, style: Style::Unicode, color: false })
    });
    let heads = "      damping\n        ratio      S   κ  state\n                  kt  kt  error\n";
    assert!(shown.contains(heads), "{shown}");
    assert!(shown.contains("  E2   0.2530  900.0   0  proved, "), "{shown}");
}

#[test]
fn the_program_explains_and_chooses_columns() {
    let help = run(&["table", "--columns", "help"]);
    assert_eq!((help.code, help.err.as_str()), (Some(0), ""));
    for column in columns() {
        assert!(help.out.contains(&format!("  {} [{}", column.id, &column.unit.meaning()[..4])), "{}", column.id);
    }
    assert!(help.out.lines().all(|line| line.chars().count() <= 80 && line.trim_end() == line), "{}", help.out);
    assert_eq!(run(&["--columns", "help"]).out, help.out);
    assert_eq!(run(&["table", "m.yaml", "--columns", "help", "--format", "csv"]).code, Some(2));
    let wrong = run(&["table", "m.yaml", "--columns", "state,peroid"]);
    assert_eq!((wrong.code, wrong.out.as_str()), (Some(2), ""));
    assert!(wrong.err.contains("no column is called \"peroid\"; did you mean \"period\"?"), "{}", wrong.err);
    let chosen = run_on(model_text(), &["table", "-", "--columns", "present,state", "--format", "csv"]);
    assert_eq!(chosen.code, Some(0), "{}", chosen.err);
    assert!(chosen.out.starts_with("scenario,id,present,state S,state κ,proven,changes,"), "{}", chosen.out);
    assert!(chosen.out.contains("restpoint table - --columns present,state --format csv"), "{}", chosen.out);
}

#[test]
fn every_format_is_written_by_the_program() {
    for (format, part) in [("csv", "scenario,id,"), ("markdown", "# Two stocks"), ("latex", "\\begin{tabular}")] {
        let ran = run_on(model_text(), &["table", "-", "--format", format]);
        assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{format}");
        assert!(ran.out.contains(part), "{}", ran.out);
    }
    let ran = run(&["check", "scenarios/ostrel-coast.yaml", "--format", "csv"]);
    assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""));
    assert!(ran.err.contains("check writes text or json"), "{}", ran.err);
}
