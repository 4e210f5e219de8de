//! The command: what it prints, and how it ends.

use std::process::{Command, Output};

const MODEL: &str = "\
title: t
time: yr
species: {x: {upper: 2}}
parameters: {Q: 0, z: 1}
change: {x: x*(1 - x) - Q}
scenarios:
  none: {}
  some: {values: {Q: 0.1}}
  too much: {values: {Q: 0.5}}
";

fn run(model: &str, arguments: &[&str]) -> (String, String, Option<i32>) {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("m.yaml"), model).unwrap();
    let mut program = Command::new(env!("CARGO_BIN_EXE_restpoint"));
    let Output { status, stdout, stderr } =
        program.args(["compare", "m.yaml"]).args(arguments).current_dir(folder.path()).output().unwrap();
    (String::from_utf8(stdout).unwrap(), String::from_utf8(stderr).unwrap(), status.code())
}

#[test]
fn every_format_is_printed_and_names_the_command() {
    for format in ["text", "csv", "markdown", "json", "latex"] {
        let (shown, remarks, exit) = run(MODEL, &["--format", format, "--strict", "--ascii", "--threads", "1"]);
        assert_eq!((remarks.as_str(), exit), ("", Some(0)), "{format}");
        assert!(shown.is_ascii() && shown.contains("restpoint compare m.yaml"), "{format}: {shown}");
    }
    let (shown, ..) = run(MODEL, &[]);
    // x (1 − x) = Q has its fold at Q = 1/4, halfway from 0 to 0.5.
    let flat = shown.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(
        flat.contains("E1 in too much: lost: meets E2 in a fold at 50.0 % of the way from none (numerical)."),
        "{shown}"
    );
    assert_eq!(shown, run(MODEL, &[]).0, "the same bytes");
}

#[test]
fn scenarios_are_chosen_and_two_are_needed() {
    let (shown, _, exit) = run(MODEL, &["--scenario", "too much", "--scenario", "some", "--format", "csv"]);
    assert_eq!((exit, shown.lines().count()), (Some(0), 1 + 2 * 2));
    for arguments in [&["--scenario", "some"][..], &["--scenario", "nobody"], &["--set", "y=1"], &["--columns", "id"]] {
        let (shown, remarks, exit) = run(MODEL, arguments);
        assert_eq!((shown.as_str(), exit), ("", Some(2)), "{arguments:?}: {remarks}");
    }
    assert_eq!(run("title: t\n", &[]).2, Some(1));
}
