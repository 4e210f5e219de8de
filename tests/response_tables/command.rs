//! The command: what it prints, and how it ends.

use std::fs;
use std::process::{Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};

use serde_json::Value;

use crate::cli_support::{Ran, file, restpoint, run_on, word};

/// A logistic stock under a quota Q, lost in a fold at r K/4 = 1/4 (Clark 1990), and a plan without it.
const QUOTA: &str = "\
title: quota
time: yr
species: {x: {upper: 2}}
parameters:
  r: {value: 1, range: [0.5, 1.5]}
  Q: {value: 0.1, range: [0, 0.5], control: true}
  z: 1
  low: {value: 1, min: 0.5, max: 3}
change: {x: r*x*(1 - x)}
harvest: {boats: {takes: {x: Q}}}
scenarios:
  plan: {}
  none: {without: [boats]}
";

fn run(arguments: &[&str]) -> Ran {
    run_on(QUOTA, &[&["response", "-"], arguments].concat())
}

fn flat(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn every_form_is_printed_and_names_the_command() {
    for form in ["text", "csv", "markdown", "json", "latex"] {
        let ran = run(&["--of", "Q", "--to", "0.3", "--from", "0", "--format", form, "--ascii", "--threads", "1"]);
        assert_eq!((ran.err.as_str(), ran.code), ("", Some(0)), "{form}");
        let letters = ran.out.replace("\\allowbreak{}", "").replace("-{}", "-");
        assert!(ran.out.is_ascii() && letters.contains("restpoint response - --of Q --from 0 --to 0.3"), "{}", ran.out);
    }
}

#[test]
fn the_fold_under_a_quota_is_found_and_told() {
    let shown = run(&["--of", "Q"]);
    let text = flat(&shown.out);
    for expected in [
        "as the file has it; Q from 0 to 0.5, now 0.1.",
        "x cannot persist at rest above Q = 0.2500: the state with x meets an unstable node and is gone (fold).",
        "The largest yield of boats x, 0.2500, is only approached: at Q = 0.2500 the state is lost (fold), so don't steer \
         to it.",
        "without boats; Q from 0 to 0.5, now 0.1.",
        "No state depends on Q here.",
    ] {
        assert!(text.contains(expected), "no {expected:?} in\n{}", shown.out);
    }
    let json: Value = serde_json::from_str(&run(&["--of", "Q", "--format", "json"]).out).unwrap();
    let fold = &json["scenarios"][0]["thresholds"][0];
    assert_eq!(fold["kind"], "fold");
    for (number, exact) in [(&fold["at"], 0.25), (&fold["state"]["x"], 0.5)] {
        assert!((number.as_f64().unwrap() - exact).abs() < 1e-10, "{fold}");
    }
}

#[test]
fn the_bytes_are_the_same_whatever_the_threads() {
    for form in ["text", "json", "csv"] {
        let [one, two] = ["1", "2"].map(|threads| run(&["--of", "Q", "--format", form, "--threads", threads]).out);
        assert_eq!(one, two);
    }
}

#[test]
fn two_parameters_make_a_chart() {
    // The fold is at Q = r/4 all along.
    let ran = run(&["--of", "Q", "--of", "r", "--scenario", "plan", "--format", "json"]);
    assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""));
    let json: Value = serde_json::from_str(&ran.out).unwrap();
    let curves = json["scenarios"][0]["curves"].as_array().unwrap();
    let folds: Vec<&Value> = curves.iter().filter(|curve| curve["kind"] == "fold").collect();
    let points: Vec<&Value> = folds.iter().flat_map(|fold| fold["points"].as_array().unwrap()).collect();
    assert!(points.len() > 2, "{curves:?}");
    for point in points {
        let [quota, growth] = [&point[0], &point[1]].map(|number| number.as_f64().unwrap());
        assert!((quota - growth / 4.0).abs() < 1e-8, "{point}");
    }
    let shown = run(&["--of", "Q", "--of", "r", "--scenario", "plan"]).out;
    assert!(shown.contains("Q from 0 to 0.5, now 0.1; r from 0.5 to 1.5, now 1."), "{shown}");
    let why = "they are of two harvests that take a species to be kept, and here there is 1";
    assert!(flat(&shown).contains(&format!("No best yield pairs: {why}.")), "{shown}");
    assert_eq!(json["scenarios"][0]["front"]["why"], why);
}

/// |p| is p for a p that is nowhere below 0, but the range that is asked for goes there: x = 1 + |p|.
#[test]
fn a_range_beyond_the_declared_one_has_its_own_states() {
    let model = "title: t\ntime: yr\nspecies: {x: {upper: 10}}\nparameters: {p: {value: 0.5, range: [0, 1]}, q: {value: 1, \
                 range: [0.5, 2]}}\nchange: {x: x*(q + abs(p) - x)}\n";
    let shown = run_on(model, &["response", "-", "--of", "p", "--from", "-1", "--format", "json"]).out;
    let json: Value = serde_json::from_str(&shown).unwrap();
    let branches = json["scenarios"][0]["branches"].as_array().unwrap();
    let with_x: Vec<&Value> = branches.iter().filter(|branch| branch["present"][0] == "x").collect();
    let points = || with_x.iter().flat_map(|branch| branch["points"].as_array().unwrap());
    assert!(points().any(|point| point["at"].as_f64() == Some(-1.0)), "{branches:?}");
    for point in points() {
        let [p, x] = [&point["at"], &point["state"]["x"]].map(|number| number.as_f64().unwrap());
        assert!((x - 1.0 - p.abs()).abs() < 1e-9, "{point}");
    }
}

/// Two stocks that have nothing to do with each other, each with its fleet: r K/4 of both at once (Schaefer 1954).
#[test]
fn the_best_pair_of_two_fleets_is_in_every_form() {
    let model = "title: t\ntime: yr\nspecies: {x: {upper: 300, unit: t}, y: {upper: 300, unit: t}}\nparameters:\n  \
                 E: {value: 0.1, range: [0, 0.9], control: true}\n  F: {value: 0.1, range: [0, 0.4], control: true}\n\
                 change: {x: x*(1 - x/100), y: 0.5*y*(1 - y/160)}\n\
                 harvest: {a: {takes: {x: E*x}}, b: {takes: {y: F*y}}}\n";
    let ran = |form: &str| run_on(model, &["response", "-", "--of", "E", "--of", "F", "--format", form]).out;
    let json: Value = serde_json::from_str(&ran("json")).unwrap();
    let front = &json["scenarios"][0]["front"];
    assert_eq!((&front["of"][1]["harvest"], &front["of"][1]["species"]), (&"b".into(), &"y".into()), "{front}");
    let total = &front["total"];
    let numbers = [
        (&total["sum"], 45.0),
        (&total["yields"][1], 20.0),
        (&total["at"][0], 0.5),
        (&total["at"][1], 0.25),
        (&total["state"]["y"], 80.0),
    ];
    for (number, exact) in numbers {
        assert!((number.as_f64().unwrap() - exact).abs() < 1e-6, "{total}");
    }
    for form in ["text", "markdown", "latex"] {
        let said = "The largest yield of both together, 45.00 t/yr";
        assert!(flat(&ran(form)).contains(said), "{form}: {}", ran(form));
    }
    let table = ran("csv");
    assert!(table.contains("\nbest yield pair,") && table.contains("\nlargest total,"), "{table}");
}

#[test]
fn what_is_not_understood_ends_with_2_and_says_what_is_wrong() {
    let check = |arguments: &[&str], said: &str| {
        let ran = run(arguments);
        assert_eq!((ran.code, ran.out.as_str()), (Some(2), ""), "{arguments:?}");
        assert!(ran.err.contains(said), "{arguments:?}: no {said:?} in {}", ran.err);
    };
    check(&[], "--of NAME is needed: the parameter that is to be varied; the model's controls are \"Q\"");
    check(&["--of", "q"], "no parameter is called \"q\"; did you mean \"Q\"?");
    check(&["--of", "x"], "no parameter is called \"x\"");
    check(&["--of", "z"], "z has no range in the model; give --from and --to");
    check(&["--of", "z", "--from", "1"], "z has no range in the model; give --from and --to");
    check(&["--of", "Q", "--from", "0.5"], "the range of Q is empty: it begins and ends at 0.5");
    check(&["--of", "Q", "--from", "1", "--to", "-1"], "the range of Q is reversed: it begins at 1 and ends at -1");
    check(&["--of", "Q", "--from", "many"], "a finite number is needed");
    check(&["--of", "Q", "--from", "inf"], "a finite number is needed");
    check(&["--of", "low", "--from", "0", "--to", "1"], "low is at least 0.5");
    check(&["--of", "Q", "--of", "Q"], "--of Q is given twice");
    check(&["--of", "Q", "--of", "r", "--of", "z"], "--of is given more than twice");
    check(&["--of", "Q", "--of", "r", "--from", "0"], "--from is given 1 times for 2 parameters");
    check(&["--of", "Q", "--columns", "at"], "--columns chooses among the fields of --format csv");
    check(&["--of", "Q", "--columns", "stat", "--format", "csv"], "did you mean \"state\"?");
    check(&["--of", "Q", "--scenario", "plon"], "did you mean \"plan\"?");
    let hostile = run(&["--of", "a\u{1b}[31m"]);
    assert!(hostile.code == Some(2) && !hostile.err.contains('\u{1b}'), "{}", hostile.err);
    let none = crate::cli_support::run(&["response", "--of", "E"]);
    assert_eq!((none.code, none.out.as_str()), (Some(2), ""));
    assert!(none.err.contains("error: a model is needed"), "{}", none.err);
}

#[test]
fn fields_are_listed_and_chosen() {
    let guide = run(&["--columns", "help"]);
    assert_eq!(guide.code, Some(0));
    assert!(guide.out.contains("\n  record ") && guide.out.contains("\n  region "), "{}", guide.out);
    let ran = run(&["--of", "Q", "--columns", "record,state,at", "--format", "csv"]);
    assert!(ran.out.starts_with("record,state x,at,summary,"), "{}", ran.out);
    assert!(ran.out.contains("--columns record,state,at --format csv"), "{}", ran.out);
}

#[test]
fn a_model_at_fault_ends_with_1_and_what_can_be_shown_is() {
    let gone = run_on("title: [", &["response", "-", "--of", "E"]);
    assert_eq!((gone.code, gone.out.as_str()), (Some(1), ""));
    // ln E has no value below 0.
    let model = "title: t\ntime: yr\nspecies: {x: {upper: 50}}\nparameters: {E: {value: 1, range: [-1, 2]}}\n\
                 change: {x: x*(2 + ln(E) - x)}\n";
    let ran = run_on(model, &["response", "-", "--of", "E"]);
    assert_eq!(ran.code, Some(1), "{}", ran.out);
    assert!(ran.err.contains("error: base: the model has no value from E = -1.000 to "), "{}", ran.err);
    assert!(ran.out.contains("undecided: the model has no value from -1.000 to ") && ran.out.contains("B1 "));
    let json = run_on(model, &["response", "-", "--of", "E", "--format", "json"]).out;
    let json: Value = serde_json::from_str(&json).unwrap();
    assert_eq!(json["scenarios"][0]["complete"], false);
    assert!(!json["scenarios"][0]["undefined"].as_array().unwrap().is_empty());
}

#[test]
fn strict_asks_for_proofs_that_nothing_is_missing() {
    let hurried = ["--of", "Q", "--strict", "--budget", "1e-9", "--scenario", "plan"];
    let ran = run(&hurried);
    assert_eq!(ran.code, Some(3), "{}", ran.out);
    assert!(ran.out.contains("NOT PROVED COMPLETE"), "{}", ran.out);
    assert_eq!(run(&["--of", "Q", "--to", "0.2", "--strict", "--scenario", "plan"]).code, Some(0));
}

/// Communities of so many species that no search through them ends.
fn endless() -> String {
    let species: Vec<String> = (0..8).map(|i| format!("x{i}: {{upper: 10}}")).collect();
    let sum: Vec<String> = (0..8).map(|j| format!("sin{j}*x{j}")).collect();
    let parameters: Vec<String> = (0..8).map(|i| format!("sin{i}: {{value: 0.{}, range: [0, 1]}}", i + 1)).collect();
    let rows: Vec<String> = (0..8)
        .map(|i| format!("x{i}: \"x{i}*(1 - x{i}*exp(-x{i}) - ({})*exp(-0.3*x{i}))\"", sum.join(" + ")))
        .collect();
    format!(
        "title: endless\ntime: yr\nspecies: {{{}}}\nparameters: {{{}}}\nchange:\n  {}\n",
        species.join(", "),
        parameters.join(", "),
        rows.join("\n  ")
    )
}

#[test]
fn an_interruption_leaves_a_partial_result_that_says_so() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(folder.path(), "endless.yaml", &endless());
    let mut command = restpoint();
    command.args(["response", word(&path), "--of", "sin0", "--budget", "3600"]);
    let child = command.stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    let start = Instant::now();
    let status = format!("/proc/{}/status", child.id());
    // The set of signals that are caught, SIGINT being number 2.
    let listens = |status: &str| {
        let caught = status.lines().find_map(|line| line.strip_prefix("SigCgt:")).unwrap_or("0");
        u64::from_str_radix(caught.trim(), 16).unwrap_or(0) & 2 != 0
    };
    while !listens(&fs::read_to_string(&status).unwrap()) {
        assert!(start.elapsed() < Duration::from_secs(60), "never listens");
        sleep(Duration::from_millis(5));
    }
    sleep(Duration::from_millis(200));
    assert!(Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap().success());
    let ran: Ran = child.wait_with_output().unwrap().into();
    assert_eq!((ran.code, ran.err.as_str()), (Some(130), ""), "{}", ran.out);
    assert!(ran.out.contains("INTERRUPTED: the search was broken off; this is a partial result."), "{}", ran.out);
    assert!(ran.out.contains("NOT PROVED COMPLETE"), "{}", ran.out);
}
