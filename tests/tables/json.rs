//! The JSON of the table against the contract, for every shipped model.
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]

use std::collections::BTreeSet;
use std::sync::OnceLock;

use crate::cli_support::{fast, run, run_on};
use crate::table_support::{EQUILIBRIUM_KEYS, SCENARIO_KEYS, keys_without_reason};
use serde_json::{Map, Value};

/// The contract's keys, in its order; then ours.
const TOP: [&str; 5] = ["tool", "model", "scenarios", "run", "caution"];
const MODEL: [&str; 4] = ["title", "sha256", "time", "tables"];
const SEARCH: [&str; 4] = ["box", "complete", "beyond", "unresolved"];
const UNRESOLVED: [&str; 3] = ["box", "probably", "text"];
const CONTINUUM: [&str; 5] = ["box", "probably", "text", "dimension", "witnesses"];
const PROBABLY: [&str; 5] = ["double root", "continuum", "no derivative", "kink", "budget"];

/// Every fast shipped model, with what the program prints of it; run once for all tests here.
fn printed() -> &'static [(String, String)] {
    static PRINTED: OnceLock<Vec<(String, String)>> = OnceLock::new();
    PRINTED.get_or_init(|| {
        let print = |name: String| {
            let ran = run(&["table", &name, "--format", "json"]);
            assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{name}");
            (name, ran.out)
        };
        fast().into_iter().map(print).collect()
    })
}

/// The keys of an object, which must all be known and in order, and hold those that may not be missing.
fn keys<'v>(value: &'v Value, known: &[&str], needed: &[&str]) -> &'v Map<String, Value> {
    let object = value.as_object().unwrap();
    let places: Vec<Option<usize>> = object.keys().map(|key| known.iter().position(|k| k == key)).collect();
    assert!(places.iter().all(Option::is_some) && places.is_sorted(), "{:?}", object.keys().collect::<Vec<_>>());
    for key in needed {
        assert!(object.contains_key(*key), "no {key} in {value}");
    }
    object
}

fn symbols(value: &Value) -> Vec<&str> {
    value.as_object().unwrap().keys().map(String::as_str).collect()
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_object().unwrap().values().map(|number| number.as_f64().unwrap()).collect()
}

fn list(value: &Value) -> &[Value] {
    value.as_array().unwrap()
}

fn check_model(json: &Value) {
    keys(json, &TOP, &TOP);
    assert_eq!(json["tool"]["name"], "restpoint");
    assert_eq!(json["tool"]["version"], env!("CARGO_PKG_VERSION"));
    keys(&json["model"], &MODEL, &MODEL[..3]);
    assert!(["continuous", "discrete"].contains(&json["model"]["time"].as_str().unwrap()));
    let sha256 = json["model"]["sha256"].as_str().unwrap();
    assert!(sha256.len() == 64 && sha256.chars().all(|c| c.is_ascii_hexdigit()), "{sha256}");
    // Who is present may change on the way from one plan to another; a name is only ever of one state of a scenario.
    let mut known: BTreeSet<&str> = BTreeSet::new();
    for scenario in list(&json["scenarios"]) {
        check_scenario(scenario);
        let mut here: BTreeSet<&str> = BTreeSet::new();
        for equilibrium in list(&scenario["equilibria"]) {
            let id = equilibrium["id"].as_str().unwrap();
            assert!(here.insert(id), "{id} twice");
        }
        known.extend(here);
    }
    let named: Vec<String> = (1..=known.len()).map(|number| format!("E{number}")).collect();
    assert_eq!(known, named.iter().map(String::as_str).collect());
}

fn check_scenario(scenario: &Value) {
    keys(scenario, &SCENARIO_KEYS, &SCENARIO_KEYS);
    assert!(numbers(&scenario["parameters"]).iter().all(|value| value.is_finite()));
    let search = &scenario["search"];
    keys(search, &SEARCH, &SEARCH);
    assert!(["none", "not claimed"].contains(&search["beyond"].as_str().unwrap()));
    let species = symbols(&search["box"]);
    for one in list(&search["unresolved"]) {
        let is_continuum = one["probably"] == "continuum";
        keys(one, &CONTINUUM, if is_continuum { &CONTINUUM } else { &UNRESOLVED });
        assert!(is_continuum || one.get("witnesses").is_none());
        assert_eq!(symbols(&one["box"]), species);
        assert!(PROBABLY.contains(&one["probably"].as_str().unwrap()));
    }
    let complete = search["complete"].as_bool().unwrap();
    assert!(!complete || list(&search["unresolved"]).is_empty(), "complete, and something unresolved");
    let equilibria = list(&scenario["equilibria"]);
    for equilibrium in equilibria {
        check_equilibrium(equilibrium, &search["box"]);
    }
    assert!(equilibria.iter().map(rank).is_sorted(), "{scenario}");
    let ids: BTreeSet<&str> = equilibria.iter().map(|equilibrium| equilibrium["id"].as_str().unwrap()).collect();
    assert_eq!(ids.len(), equilibria.len());
}

/// By number present, then species in order, then state; states are not negative, so that their bits are in order.
fn rank(equilibrium: &Value) -> (usize, Vec<bool>, Vec<u64>) {
    let state = numbers(&equilibrium["state"]);
    let present = list(&equilibrium["present"]);
    let is_absent = |symbol: &&str| !present.iter().any(|other| other == symbol);
    let absent: Vec<bool> = symbols(&equilibrium["state"]).iter().map(is_absent).collect();
    (present.len(), absent, state.into_iter().map(f64::to_bits).collect())
}

fn check_equilibrium(equilibrium: &Value, search_box: &Value) {
    let object = keys(equilibrium, &EQUILIBRIUM_KEYS, &keys_without_reason());
    let species = symbols(search_box);
    assert_eq!(symbols(&equilibrium["state"]), species);
    assert_eq!(symbols(&equilibrium["radius"]), species);
    assert!(equilibrium["proven"].is_boolean());
    for (symbol, x) in species.iter().zip(numbers(&equilibrium["state"])) {
        let side = &search_box[symbol];
        let is_present = list(&equilibrium["present"]).iter().any(|other| other == symbol);
        assert_eq!(is_present, x != 0.0, "{symbol} in {equilibrium}");
        assert!(side[0].as_f64().unwrap() <= x && x <= side[1].as_f64().unwrap(), "{symbol} in {equilibrium}");
    }
    assert!(numbers(&equilibrium["radius"]).iter().all(|&radius| (0.0..1e-6).contains(&radius)), "{equilibrium}");
    if object.contains_key("why") {
        assert!(["eigenvalues", "type", "stable"].iter().all(|key| object.get(*key) == Some(&Value::Null)));
    }
}

#[test]
fn every_shipped_model_gives_what_the_contract_says() {
    for (name, text) in printed() {
        let json: Value = serde_json::from_str(text).unwrap();
        check_model(&json);
        // Numbers and order come back as they were.
        assert_eq!(&format!("{json:#}\n"), text, "{name}");
        assert!(!list(&json["scenarios"]).is_empty(), "{name}");
    }
}

/// Both rates vanish where a + b = 1.
const LINE: &str = "
title: a line of equilibria
time: yr
species: {a: {upper: 3}, b: {upper: 3}}
change: {a: a*(1 - a - b)/(1 + a), b: b*(1 - a - b)}
";

#[test]
fn a_continuum_has_its_dimension_and_points_on_it() {
    let json: Value = serde_json::from_str(&run_on(LINE, &["table", "-", "--format", "json"]).out).unwrap();
    check_model(&json);
    let unresolved = list(&json["scenarios"][0]["search"]["unresolved"]);
    let line = unresolved.iter().find(|one| one["probably"] == "continuum").unwrap();
    assert_eq!(line["dimension"], 1);
    let points: Vec<Vec<f64>> = list(&line["witnesses"]).iter().map(numbers).collect();
    assert!(points.len() > 1 && points.iter().all(|x| (x[0] + x[1] - 1.0).abs() < 1e-8), "{points:?}");
    let text = run_on(LINE, &["table", "-"]).out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(text.contains("points on it: a = "), "{text}");
}

#[test]
fn the_model_file_is_known_by_its_sha_256() {
    // The hash of the text "abc" is an example of FIPS 180-4.
    let expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
    assert_eq!(restpoint::shell::files::sha256(b"abc"), expected);
    let ran = run(&["table", "scenarios/ferrow-meadow.yaml", "--format", "json", "--budget", "1e-3"]);
    let json: Value = serde_json::from_str(&ran.out).unwrap();
    let tables: Vec<&str> =
        list(&json["model"]["tables"]).iter().map(|table| table["file"].as_str().unwrap()).collect();
    assert_eq!(tables, ["ferrow-meadow-growth.csv", "ferrow-meadow-matrix.csv"]);
    for table in list(&json["model"]["tables"]) {
        let path = format!("scenarios/{}", table["file"].as_str().unwrap());
        assert_eq!(table["sha256"], restpoint::shell::files::sha256(&std::fs::read(path).unwrap()));
    }
}

/// JSON holds all that is worked out, to the last digit. The other formats are written from the same values by code that
/// knows of no threads, as `tests/architecture.rs` sees to: each is looked at on some of the models, in turn.
#[test]
fn the_same_model_gives_the_same_bytes_on_any_number_of_threads() {
    for ((name, printed), other) in printed().iter().zip(["text", "csv", "markdown", "latex"].iter().cycle()) {
        let with = |format, threads| run(&["table", name, "--format", format, "--threads", threads]).out;
        for threads in ["1", "2", "5"] {
            assert_eq!(printed, &with("json", threads), "{name}");
        }
        let one = with(other, "1");
        assert_eq!(one, with(other, "5"), "{name}");
        assert!(one.len() > 1000, "{name}");
    }
}

#[test]
fn a_scenario_alone_has_the_states_that_it_has_among_others() {
    for (name, text) in printed() {
        let all: Value = serde_json::from_str(text).unwrap();
        for scenario in list(&all["scenarios"]) {
            let scenario_name = scenario["name"].as_str().unwrap();
            let ran = run(&["table", name, "--format", "json", "--scenario", scenario_name]);
            let alone: Value = serde_json::from_str(&ran.out).unwrap();
            let states = |scenario: &Value| -> Vec<Value> {
                list(&scenario["equilibria"]).iter().map(|e| e["state"].clone()).collect()
            };
            assert_eq!(list(&alone["scenarios"]).len(), 1, "{name}");
            assert_eq!(states(&alone["scenarios"][0]), states(scenario), "{name}, {scenario_name}");
            assert_eq!(alone["scenarios"][0]["search"], scenario["search"], "{name}, {scenario_name}");
        }
    }
}
