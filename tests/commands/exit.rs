//! Every option and every way in which a run can end.
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::cli_support::{FOLD, Ran, file, run, run_on, word};
use serde_json::Value;

const MOOR: &str = "scenarios/harrowmere-moor.yaml";

/// The exit status, and what must be on standard output and standard error; where nothing must be, the stream is empty.
fn check(arguments: &[&str], code: i32, out: &str, err: &str) {
    judge(&run(arguments), &format!("{arguments:?}"), code, out, err);
}

fn check_on(input: &str, arguments: &[&str], code: i32, out: &str, err: &str) {
    judge(&run_on(input, arguments), &format!("{arguments:?}"), code, out, err);
}

fn judge(ran: &Ran, what: &str, code: i32, out: &str, err: &str) {
    assert_eq!(ran.code, Some(code), "{what}: {}", ran.err);
    for (stream, part) in [(&ran.out, out), (&ran.err, err)] {
        assert!(stream.contains(part), "{what}: \"{part}\" is not in \"{stream}\"");
        assert!(stream.is_empty() == part.is_empty(), "{what}: {stream}");
    }
}

#[test]
fn what_is_not_understood_ends_with_2_and_says_what_was_meant() {
    let table = |rest: &[&str], err: &str| check(&[&["table", MOOR], rest].concat(), 2, "", err);
    table(&["--scenario", "more hether"], "did you mean \"more heather\"?");
    table(&["--scenario", "zzz"], "there are \"present shooting\", ");
    table(&["--set", "e=1", "--set", "k=1"], "did you mean \"K\"?");
    table(&["--set", "G=1"], "no parameter is called \"G\"");
    table(&["--set", "a=0.5"], "a is at least 1");
    table(&["--set", "E"], "for example E=1.5");
    table(&["--set", "E=many"], "\"many\" is not a finite number");
    table(&["--set", "E=inf"], "\"inf\" is not a finite number");
    table(&["--budget", "0"], "a positive number of seconds");
    table(&["--budget", "NaN"], "a positive number of seconds");
    table(&["--threads", "0"], "0 is not in 1..=1024");
    table(&["--format", "yaml"], "[possible values: text, csv, markdown, json, latex]");
    table(&["--color", "blue"], "[possible values: auto, always, never]");
    table(&["another"], "unexpected argument 'another'");
    table(&["--colour", "never"], "'--color'");
    table(&["--columns", "sate"], "did you mean \"state\"?");
    check(&["table"], 2, "", "<MODEL>");
    check(&["tabel", MOOR], 2, "", "there is no command \"tabel\"; did you mean \"table\"?");
    check(&["plot", MOOR], 2, "", "there is no command \"plot\"; there are check, table, compare, response, sketch");
    check(&[MOOR, "another"], 2, "", "unexpected argument 'another'");
    check(&["--columns", "state", "table", MOOR], 2, "", "--columns belongs after the command");
    check(&["--strict", "table", MOOR], 2, "", "--strict belongs after the command");
    check(&[MOOR, "check", MOOR], 2, "", "belongs after the command");
    check(&["check", MOOR, "--strict"], 2, "", "unexpected argument '--strict'");
    let hostile = run(&["table", MOOR, "--scenario", "a\u{1b}[31m"]);
    assert!(hostile.code == Some(2) && !hostile.err.contains('\u{1b}'), "{}", hostile.err);
}

#[test]
fn a_model_at_fault_ends_with_1() {
    check(&["table", "no-such.yaml"], 1, "", "no-such.yaml cannot be read: there is no such file");
    check(&["table", "scenarios"], 1, "", "scenarios is a folder");
    check(&["tabel"], 1, "", "tabel cannot be read");
    check_on("title: [", &["table", "-"], 1, "", "standard input:1:");
    check_on("", &["-"], 1, "", "standard input");
    check_on("title: [", &["table", "-", "--format", "json"], 1, "\"errors\"", "standard input:1:");
    let endless = "title: x\ntime: yr\nspecies: {x: {}}\nchange: {x: x}\n";
    check_on(endless, &["table", "-"], 1, "", "needs an upper side of the search box");
}

#[test]
fn a_failed_scenario_ends_with_1_and_the_others_are_shown() {
    let term = |k: usize| format!("x^{k}.5");
    let process = |i: usize| {
        let rate: Vec<String> = (1..41).map(|j| term(40 * i + j)).collect();
        format!("      p{i}: {{rate: \"{}\", effect: {{x: -1}}}}\n", rate.join(" + "))
    };
    let large: String = (0..300).map(process).collect();
    let head = "title: x\ntime: yr\nspecies: {x: {upper: 10}}\nchange: {x: x*(1 - x)}\nscenarios:\n  small: {}\n";
    let model = format!("{head}  large:\n    processes:\n{large}  last: {{}}\n");
    check_on(&model, &["table", "-"], 1, "FAILED: standard input:", "more than 10000 different parts");
    let ran = run_on(&model, &["table", "-", "--format", "json"]);
    assert_eq!(ran.code, Some(1));
    let json: Value = serde_json::from_str(&ran.out).unwrap();
    let scenarios = json["scenarios"].as_array().unwrap();
    assert_eq!(scenarios.len(), 3);
    let keys: Vec<&String> = scenarios[1].as_object().unwrap().keys().collect();
    assert_eq!(keys, ["name", "error"]);
    let keys: Vec<&String> = scenarios[1]["error"].as_object().unwrap().keys().collect();
    assert_eq!(keys, ["file", "line", "column", "message"]);
    for sound in [&scenarios[0], &scenarios[2]] {
        assert_eq!(sound["equilibria"].as_array().unwrap().len(), 2, "{sound}");
    }
    check_on(&model, &["table", "-", "--scenario", "last"], 0, "Scenario: last", "");
}

#[test]
fn strict_ends_with_3_where_something_is_not_proved() {
    check_on(FOLD, &["table", "-", "--strict"], 3, "NOT PROVED COMPLETE", "");
    check_on(FOLD, &["table", "-"], 0, "NOT PROVED COMPLETE", "");
    check_on(FOLD, &["table", "-", "--strict", "--scenario", "plain"], 0, "proved:", "");
    check_on(
        FOLD,
        &["table", "-", "--strict", "--scenario", "twice", "--format", "json"],
        3,
        "\"complete\": false",
        "",
    );
    check(&["table", MOOR, "--strict"], 0, "proved:", "");
    let hurried = ["table", MOOR, "--strict", "--budget", "1e-9", "--scenario", "more heather"];
    check(&hurried, 3, "the budget ended here", "");
}

#[test]
fn options_do_what_they_say() {
    let scenarios = |arguments: &[&str]| -> Vec<String> {
        let ran = run(arguments);
        ran.out.lines().filter_map(|line| line.strip_prefix("Scenario: ")).map(str::to_owned).collect()
    };
    assert_eq!(scenarios(&["table", MOOR]).len(), 5);
    let two =
        ["table", MOOR, "--scenario", "more heather", "--scenario", "present shooting", "--scenario", "more heather"];
    assert_eq!(scenarios(&two), ["present shooting", "more heather"]);
    check_on(FOLD, &["-", "--set", "a=3", "--set", "a=2.5", "--scenario", "plain"], 0, "  E2  2.500  proved, ", "");
    // Without shooting and hawks, grouse reach what the heather carries.
    check(
        &["table", MOOR, "--set", "E=0", "--scenario", "present shooting"],
        0,
        "  E2   160.0    0       proved, ",
        "",
    );
    check(&["table", MOOR, "--budget", "7.5"], 0, "7.5 s for each scenario", "");
    let plain = run(&["table", MOOR]).out;
    assert!(!plain.contains('\u{1b}'));
    let coloured = run(&["table", MOOR, "--color", "always"]).out;
    assert!(coloured.contains("\u{1b}[32mproved\u{1b}[0m"), "{coloured}");
    assert_eq!(coloured.replace("\u{1b}[32m", "").replace("\u{1b}[0m", ""), plain);
    assert_eq!(run(&["table", MOOR, "--color", "never"]).out, plain);
    assert_eq!(run(&[MOOR]).out, plain);
}

#[test]
fn without_a_model_the_one_compiled_in_is_shown() {
    let (own, same) = (run(&[]), run(&["scenarios/skarnby-bank.yaml"]));
    assert_eq!((own.code, same.code), (Some(0), Some(0)));
    assert!(own.out.contains("\n  command   restpoint\n"), "{}", own.out);
    assert_eq!(own.out.replace("restpoint\n", "restpoint table scenarios/skarnby-bank.yaml\n"), same.out);
}

#[test]
fn help_and_version_are_whole() {
    for arguments in [&["--help"][..], &["-h"], &["help"], &["table", "--help"], &["help", "table"], &["check", "-h"]] {
        let ran = run(arguments);
        assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{arguments:?}");
        assert!(ran.out.lines().all(|line| line.chars().count() <= 80), "{}", ran.out);
        assert!(ran.out.contains("Usage: restpoint") && ran.out.contains("--output <FILE>"), "{}", ran.out);
    }
    let help = run(&["table", "--help"]).out;
    for option in [
        "--scenario",
        "--set",
        "--strict",
        "--budget",
        "--threads",
        "--columns",
        "--format",
        "--force",
        "--ascii",
        "--color",
    ] {
        assert!(help.contains(option), "{option}");
    }
    assert_eq!(run(&["--version"]).out, concat!("restpoint ", env!("CARGO_PKG_VERSION"), "\n"));
}

#[test]
fn the_command_in_the_heading_can_be_repeated() {
    let folder = tempfile::tempdir().unwrap();
    let model = file(folder.path(), "it's a model.yaml", FOLD);
    let arguments =
        ["table", word(&model), "--set", "a=0.5", "--scenario", "plain", "--threads", "2", "--format", "json"];
    let json: Value = serde_json::from_str(&run(&arguments).out).unwrap();
    let command = json["run"]["command"].as_str().unwrap();
    let quoted = word(&model).replace('\'', "'\\''");
    let expected = format!("restpoint table '{quoted}' --scenario plain --set a=0.5 --format json");
    assert_eq!(command, expected);
}
