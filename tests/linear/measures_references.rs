//! What is measured, against numpy, scipy and mpmath: `tests/data/measures.json`, made by `measures.py` beside it.

#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use std::fmt::Write as _;

use crate::common::families::symbols;
use crate::common::measured::measured;
use crate::common::text::ModelText;
use restpoint::analysis::measures::Measures;
use serde_json::Value;

/// Relative, to the larger of the two sizes given.
const DIGITS: f64 = 1e-8;

fn references() -> Value {
    serde_json::from_str(include_str!("../data/measures.json")).unwrap()
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(number).collect()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

/// Rates A(x − 1), or the map 1 + A(x − 1): an equilibrium with all present and this Jacobian.
fn linear(a: &[f64], n: usize, discrete: bool) -> Measures {
    let names = symbols(n);
    let row = |row: &[f64]| {
        let mut formula = String::from(if discrete { "1" } else { "0" });
        row.iter().zip(&names).for_each(|(a, x)| write!(formula, " + ({a:?})*({x} - 1)").unwrap());
        formula
    };
    let rows: Vec<String> = a.chunks(n).map(row).collect();
    let rows: Vec<(&str, &str)> = names.iter().map(String::as_str).zip(rows.iter().map(String::as_str)).collect();
    let text = ModelText { discrete, ..ModelText::new("linear", "10", &rows) };
    measured(&text.read(), 0, &vec![1.0; n])
}

fn near(what: &str, found: Option<f64>, expected: f64, size: f64) {
    let found = found.unwrap_or_else(|| panic!("{what}: nothing, not {expected}"));
    assert!((found - expected).abs() <= DIGITS * size.abs(), "{what}: {found}, not {expected}");
}

fn all_near(what: &str, found: &[f64], expected: &[f64]) {
    let size = expected.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
    assert_eq!(found.len(), expected.len(), "{what}");
    found.iter().zip(expected).for_each(|(&found, &expected)| near(what, Some(found), expected, size));
}

#[test]
fn random_matrices() {
    let references = references();
    let matrices = references["matrices"].as_array().unwrap();
    assert_eq!(matrices.len(), 44);
    for case in matrices {
        let n = usize::try_from(case["n"].as_u64().unwrap()).unwrap();
        let name = format!("{} of order {n}", case["kind"]);
        let found = linear(&numbers(&case["a"]), n, case["kind"] == "maps");
        let value = |key: &str| number(&case[key]);
        near(&name, found.reactivity, value("reactivity"), value("reactivity"));
        near(&name, found.invariability, value("invariability"), value("invariability"));
        let peak = found.amplification.unwrap_or_else(|| panic!("{name}: no amplification"));
        near(&name, Some(peak.factor), value("factor"), value("factor"));
        // The reference compares values, so it knows when to half its digits.
        assert!((peak.time - value("time")).abs() <= 3e-5 * value("time"), "{name}: {peak:?}, not {case}");
        all_near(&name, &found.covariance.unwrap(), &numbers(&case["covariance"]));
        all_near(&name, &found.net_effects.unwrap().matrix, &numbers(&case["effects"]));
    }
}

#[test]
fn rates_that_span_many_orders() {
    let references = references();
    for case in references["stiff"].as_array().unwrap() {
        let n = usize::try_from(case["n"].as_u64().unwrap()).unwrap();
        let peak = linear(&numbers(&case["a"]), n, false).amplification.unwrap();
        let (factor, time) = (number(&case["factor"]), number(&case["time"]));
        assert!((peak.factor - factor).abs() <= 1e-10 * factor, "{peak:?}, not {factor} at {time}");
        assert!((peak.time - time).abs() <= 1e-7 * time, "{peak:?}, not {factor} at {time}");
    }
}

/// The rows that `MODELS` in `measures.py` has.
fn model(name: &str) -> ModelText {
    match name {
        "predator and prey" => ModelText::new(
            name,
            "100",
            &[("N", "r*N*(1 - N/K) - a*N*P/(1 + a*h*N) - q*N"), ("P", "e*a*N*P/(1 + a*h*N) - m*P^z")],
        )
        .with(&[
            ("r", "0.9"),
            ("K", "9"),
            ("a", "1.25"),
            ("h", "0.4"),
            ("e", "0.5"),
            ("m", "0.3"),
            ("q", "0.1"),
            ("z", "1.25"),
        ]),
        "map with two hosts" => ModelText {
            discrete: true,
            ..ModelText::new(name, "100", &[("N", "N*(exp(r*(1 - N - c*M)) - u)"), ("M", "M*exp(s*(1 - d*N - M))")])
        }
        .with(&[("r", "1.2"), ("c", "0.5"), ("u", "0.15"), ("s", "0.8"), ("d", "0.6")]),
        _ => panic!("no model {name}"),
    }
}

#[test]
fn elasticities_of_state_and_leading_eigenvalue() {
    let references = references();
    let models = references["models"].as_object().unwrap();
    assert_eq!(models.len(), 2);
    for (name, case) in models {
        let read = model(name).read();
        let found = measured(&read, 0, &numbers(&case["state"]));
        let expected = case["elasticities"].as_object().unwrap();
        assert_eq!(found.elasticities.len(), expected.len(), "{name}");
        for elasticity in &found.elasticities {
            let parameter = &read.model.parameters[elasticity.parameter.0].name;
            let (what, expected) = (format!("{name}, {parameter}"), &expected[parameter]);
            for (found, expected) in elasticity.state.iter().zip(numbers(&expected["state"])) {
                near(&what, *found, expected, 1.0);
            }
            near(&what, elasticity.leading, number(&expected["leading"]), number(&expected["leading"]).max(1.0));
        }
    }
}
