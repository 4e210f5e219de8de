//! What people are shown so that a page is not flooded, and what they are told rather than left to conclude.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use std::fmt::Write as _;

use crate::cli_support::run_on;
use serde_json::Value;

/// Runs `table` on a model, with its words one blank apart.
fn words(model: &str, arguments: &[&str]) -> String {
    let ran = run_on(model, &[&["table", "-"], arguments].concat());
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    ran.out.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn json(model: &str) -> Value {
    let ran = run_on(model, &["table", "-", "--format", "json"]);
    assert_eq!(ran.code, Some(0), "{}", ran.err);
    serde_json::from_str(&ran.out).unwrap()
}

/// Species that arrive at 1 a year and leave at x, of which a quarter is taken: x = 4/5 and a yield of 1/5 each. The first
/// two are counted in t, the others in kt.
fn arrivals(count: usize) -> String {
    let mut model = "title: arrivals\ntime: yr\nspecies:\n".to_owned();
    let each = |model: &mut String, line: &dyn Fn(usize) -> String| {
        (0..count).for_each(|i| writeln!(model, "  {}", line(i)).unwrap());
    };
    each(&mut model, &|i| format!("x{i}: {{unit: {}, upper: 10}}", if i < 2 { "t" } else { "kt" }));
    model += "change:\n";
    each(&mut model, &|i| format!("x{i}: 1 - x{i}"));
    let takes: Vec<String> = (0..count).map(|i| format!("x{i}: x{i}/4")).collect();
    writeln!(model, "harvest:\n  net: {{takes: {{{}}}}}", takes.join(", ")).unwrap();
    model
}

#[test]
fn many_yields_are_summed_by_unit_unless_asked_for() {
    let seven = words(&arrivals(7), &[]);
    assert!(seven.contains("total total yr fold, yr t/yr kt/yr E1"), "{seven}");
    assert!(seven.contains(" 0.4000 1.000 "), "{seven}");
    assert!(seven.contains("total: of all species whose yield is in this unit"), "{seven}");
    for shown in [words(&arrivals(7), &["--columns", "yield"]), words(&arrivals(6), &[])] {
        assert!(shown.contains("yield") && shown.contains("0.2000 0.2000") && !shown.contains("total"), "{shown}");
    }
}

#[test]
fn numbers_of_pairs_are_shown_while_they_can_be_read() {
    let shown = |count: usize| words(&arrivals(count), &["--columns", "net_effects"]);
    assert!(shown(3).contains("effect x0<-x0") && shown(3).contains("0.8000"));
    assert!(shown(13).contains("E1 too many to be shown; csv and json have them"), "{}", shown(13));
}

#[test]
fn a_cycle_of_a_map_is_as_long_as_it_is() {
    // x exp(r (1 − x/k)) with r = ln 12 has a cycle of two about k, which attracts with the multiplier −0.85.
    let map =
        "title: map\ntime: {unit: yr, step: 1}\nspecies: {x: {upper: 20000}}\nnext: {x: x*exp(ln(12)*(1 - x/5000))}\n";
    let found = json(map);
    let settles = &found["scenarios"][0]["equilibria"][1]["settles"];
    assert_eq!((&settles["to"], &settles["period"]), (&Value::from("cycle"), &Value::from(2.0)));
    let side = |key: &str| settles[key]["x"].as_f64().unwrap();
    assert!((side("lowest") + side("highest") - 10_000.0).abs() < 1e-4, "{settles}");
}

/// Hares with a threshold of 200 and room for 2000, and a pest that eats them.
const HARES: &str = "\
title: hares and stoats
time: yr
species: {N: {upper: 3000}, P: {upper: 500, aim: remove}}
change: {N: \"0.2*N*(N/200 - 1)*(1 - N/2000) - 0.004*N*P\", P: 0.0002*N*P - 0.3*P}
";

#[test]
fn no_state_gives_way_to_itself() {
    let found = json(HARES);
    let equilibria = found["scenarios"][0]["equilibria"].as_array().unwrap();
    let settles = |hares: f64| {
        let near = |one: &&Value| (one["state"]["N"].as_f64().unwrap() - hares).abs() < 1e-6;
        equilibria.iter().find(near).map(|one| one["settles"]["to"].clone()).unwrap()
    };
    // Only stoats upset 2000 hares; below the threshold the hares die out.
    assert_eq!((settles(2000.0), settles(200.0)), (Value::Null, Value::from("E1")));
    let shown = words(HARES, &[]);
    let told =
        "E2 is unstable: of paths released on its two sides, the one with the poorer end reaches E1 (numerical).";
    assert!(shown.contains(told) && !shown.contains("E3 is unstable"), "{shown}");
}

#[test]
fn what_is_proved_of_stability_is_said_where_the_type_is_not_proved() {
    // The Jacobian (−1, 0.1; −10, −3) has −2 twice, as far as 0.1 is a tenth.
    let model = "title: twice\ntime: yr\nspecies: {x: {upper: 10}, y: {upper: 10}}\n\
                 change: {x: 1 - x + 0.1*y, y: 12 - 3*y - 10*x}\n";
    let shown = words(model, &[]);
    assert!(shown.contains("stable improper node, numerical; proved stable"), "{shown}");
}
