//! Published models from the text of a model file to what `table --format json` prints: states, eigenvalues, types,
//! stability and yields, in every scenario, and under `--set` as under a scenario with the same values.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use std::sync::OnceLock;

use crate::cli_support::run_on;
use crate::common::cases::{Case, Equilibrium, all};
use serde_json::Value;

/// Of the largest abundance: published states are those of decimal parameters, found ones those of the f64 beside them.
const STATE: f64 = 1e-9;

/// Of the largest eigenvalue. Equal ones part by the root of what their matrix is off.
const EIGENVALUE: f64 = 1e-6;

/// Relative, on yields, which follow their states.
const YIELD: f64 = 1e-8;

/// Beyond this many species an equilibrium may be missing from a list that does not claim to be complete.
const ALL_FOUND: usize = 6;

fn table(case: &Case, arguments: &[&str]) -> Value {
    let ran = run_on(&case.text().yaml(), &[&["table", "-", "--format", "json"], arguments].concat());
    assert_eq!(ran.code, Some(0), "{}: {}", case.id, ran.err);
    serde_json::from_str(&ran.out).unwrap()
}

/// Every case with its whole table; run once for both tests.
fn printed() -> &'static [(Case, Value)] {
    static PRINTED: OnceLock<Vec<(Case, Value)>> = OnceLock::new();
    PRINTED.get_or_init(|| {
        all()
            .into_iter()
            .map(|case| {
                let table = table(&case, &[]);
                (case, table)
            })
            .collect()
    })
}

fn list(value: &Value) -> &[Value] {
    value.as_array().unwrap_or_else(|| panic!("a list, not {value}"))
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("a number, not {value}"))
}

/// The printed equilibrium at a published state.
fn matching<'f>(case: &Case, found: &'f [Value], published: &Equilibrium) -> Option<&'f Value> {
    let scale = published.x.iter().fold(1e-12f64, |most, x| most.max(x.abs()));
    let is_there = |one: &&Value| {
        let mut pairs = case.species.iter().zip(&published.x);
        pairs.all(|(symbol, x)| (number(&one["state"][symbol]) - x).abs() <= STATE * scale)
    };
    found.iter().find(is_there)
}

fn check_eigenvalues(name: &str, case: &Case, found: &Value, published: &Equilibrium) {
    let values: Vec<(f64, f64)> =
        list(found).iter().map(|value| (number(&value["re"]), number(&value["im"]))).collect();
    assert_eq!(values.len(), published.x.len(), "{name}");
    let size = |&(re, im): &(f64, f64)| if case.discrete { re.hypot(im) } else { re };
    let largest = published.eigenvalues.iter().fold(1e-6f64, |most, (re, im)| most.max(re.hypot(*im)));
    assert!(
        values.windows(2).all(|pair| size(&pair[0]) >= size(&pair[1]) - EIGENVALUE * largest),
        "{name}: {values:?}"
    );
    let mut left = published.eigenvalues.clone();
    for (re, im) in values {
        let far = |&(a, b): &(f64, f64)| (a - re).hypot(b - im);
        let place = (0..left.len()).min_by(|&a, &b| far(&left[a]).total_cmp(&far(&left[b]))).unwrap();
        let nearest = left.swap_remove(place);
        assert!(far(&nearest) <= EIGENVALUE * largest, "{name}: {re} + {im}i for {nearest:?}");
    }
}

fn check(name: &str, case: &Case, found: &Value, published: &Equilibrium) {
    check_eigenvalues(name, case, &found["eigenvalues"], published);
    assert_eq!(found["type"], case.word(published), "{name}");
    let [stable, unstable, centre] = published.counts;
    let expected = match (unstable, centre) {
        (0, 0) => Value::Bool(true),
        (0, _) => Value::Null,
        _ => Value::Bool(false),
    };
    assert_eq!(found["stable"], expected, "{name}");
    let dimensions = ["stable", "centre", "unstable"].map(|key| found["dimensions"][key].as_u64().unwrap() as usize);
    assert_eq!(dimensions, [stable, centre, unstable], "{name}");
    if !case.is_degenerate(published) {
        assert_eq!((&found["proven"], &found["stable_proven"]), (&Value::Bool(true), &Value::Bool(true)), "{name}");
    }
    for (harvest, expected) in &published.yields {
        let found = number(&found["yield"][harvest][&case.species[0]]);
        assert!(
            (found - expected).abs() <= YIELD * expected.abs().max(1e-6),
            "{name}: {harvest}: {found} for {expected}"
        );
    }
}

#[test]
fn what_is_printed_of_published_models_is_what_was_published() {
    let (mut equilibria, mut yields) = (0, 0);
    for (case, printed) in printed() {
        let scenarios = list(&printed["scenarios"]);
        assert_eq!(scenarios.len(), case.lists().count(), "{}", case.id);
        for (scenario, published) in scenarios.iter().zip(case.lists()) {
            let found = list(&scenario["equilibria"]);
            for published in published {
                let name = format!("{}, {}, {:?}", case.id, scenario["name"], published.x);
                match matching(case, found, published) {
                    Some(found) => check(&name, case, found, published),
                    None => assert!(
                        case.is_degenerate(published) || case.species.len() > ALL_FOUND,
                        "{name} is not in the table"
                    ),
                }
                equilibria += 1;
                yields += published.yields.len();
            }
            if scenario["search"]["complete"] == true && !case.facts.contains_key("continua") {
                assert_eq!(found.len(), published.len(), "{}, {}", case.id, scenario["name"]);
            }
        }
    }
    assert!(equilibria > 700 && yields > 50, "{equilibria} equilibria, {yields} yields");
}

/// What does not hang on which scenarios stand beside it, as names of equilibria do.
fn own(scenario: &Value) -> Vec<Value> {
    let keys = ["state", "proven", "radius", "eigenvalues", "type", "stable", "return_time", "yield"];
    list(&scenario["equilibria"]).iter().flat_map(|one| keys.map(|key| one[key].clone())).collect()
}

#[test]
fn set_values_do_what_a_scenario_with_them_does() {
    let mut compared = 0;
    for (case, printed) in printed() {
        for (k, scenario) in case.scenarios.iter().enumerate() {
            let set: Vec<String> = scenario.values.iter().map(|(name, value)| format!("{name}={value}")).collect();
            let set = set.iter().flat_map(|set| ["--set", set]).collect::<Vec<_>>();
            let alone = table(case, &[&["--scenario", "base"], &set[..]].concat());
            let name = format!("{}, {}", case.id, scenario.name);
            assert_eq!(alone["scenarios"][0]["parameters"], printed["scenarios"][k + 1]["parameters"], "{name}");
            assert_eq!(own(&alone["scenarios"][0]), own(&printed["scenarios"][k + 1]), "{name}");
            compared += 1;
        }
    }
    assert!(compared > 50, "{compared}");
}
