//! What is written: tables as the command writes them, screens as they are, copies with a new scenario; and nothing over a
//! file that is there.

use std::fs;
use std::process::Command;

use crate::bench::{Bench, shipped};

const POND: &str = "\
title: a pond
time: yr
species: {S: {unit: kt, upper: 20}}
parameters: {k: {value: 5, range: [1, 9], control: true}, l: 1}
change: {S: S*(k - S) + 0*l}
scenarios: {as it is: {}, half: {values: {k: 0.5*k}}}
";

/// Answers a question with a name in the bench's folder.
fn answer(bench: &mut Bench, name: &str) -> std::path::PathBuf {
    let path = bench.folder().join(name);
    bench.paste(path.to_str().unwrap());
    bench.press("<Enter>");
    path
}

/// What the command that stands in a table prints, run where the model is found by the same name.
fn printed(arguments: &[&str]) -> String {
    let run = Command::new(env!("CARGO_BIN_EXE_restpoint")).args(arguments).output().unwrap();
    assert!(run.status.success(), "{arguments:?}: {}", String::from_utf8_lossy(&run.stderr));
    String::from_utf8(run.stdout).unwrap()
}

#[test]
fn a_table_is_what_its_command_prints() {
    let model = shipped("skarnby-bank");
    let model = model.to_str().unwrap();
    let table = |keys: &str, name: &str| {
        let mut bench = Bench::open("skarnby-bank");
        let folder = tempfile::tempdir().unwrap();
        bench.press(keys);
        bench.press("w");
        bench.paste(folder.path().join(name).to_str().unwrap());
        bench.press("<Enter>");
        bench.shows(&["written to "]);
        fs::read_to_string(folder.path().join(name)).unwrap()
    };
    let all = ["table", model];
    for (name, form) in
        [("a.txt", "text"), ("a.csv", "csv"), ("a.MD", "markdown"), ("a.json", "json"), ("a.tex", "latex")]
    {
        let mut arguments = all.to_vec();
        if form != "text" {
            arguments.extend(["--format", form]);
        }
        assert_eq!(table("", name), printed(&arguments), "{name}");
    }
    let alone = ["response", model, "--of", "E", "--scenario", "present fleet"];
    for (name, form) in
        [("c.txt", "text"), ("c.csv", "csv"), ("c.md", "markdown"), ("c.json", "json"), ("c.tex", "latex")]
    {
        let mut arguments = alone.to_vec();
        if form != "text" {
            arguments.extend(["--format", form]);
        }
        // Wherever the rule stands.
        assert_eq!(table("T<Right>", name), printed(&arguments), "{name}");
    }
    let tried = ["response", model, "--of", "E", "--scenario", "present fleet", "--set", "E=1.05"];
    assert_eq!(table("T<Right>t", "d.txt"), printed(&tried));
    // With a value tried, the scenario that is looked at, by a command that sets it.
    let tried = ["table", model, "--scenario", "half the effort", "--set", "E=0.55"];
    assert_eq!(table("fv<Right>", "b.txt"), printed(&tried));
    assert_eq!(table("fv<Right>ef", "b.txt"), printed(&["table", model, "--scenario", "present fleet"]));
}

#[test]
fn the_ending_says_the_form_and_an_unknown_one_is_asked_for_again() {
    let mut bench = Bench::of(POND);
    bench.press("w");
    bench.shows(&["write the table to: m-equilibria.txt", ".txt .csv .md .json or .tex"]);
    let path = answer(&mut bench, "table.xls");
    bench.shows(&["write the table to:", "end the name in .txt .csv .md .json or .tex"]);
    assert!(!path.exists());
    // The text was typed, not suggested: typing goes on with it.
    bench.press("<Backspace><Backspace><Backspace>csv<Enter>");
    bench.shows(&["written to "]);
    assert!(fs::read_to_string(path.with_extension("csv")).unwrap().contains("as it is"));
}

#[test]
fn a_screen_is_written_as_it_is() {
    let mut bench = Bench::of(POND).ascii();
    let shown = bench.text();
    bench.press("w<Tab>");
    bench.shows(&["write the screen to:", "this screen as text"]);
    let path = answer(&mut bench, "screen");
    assert_eq!(fs::read_to_string(path).unwrap(), shown);
}

#[test]
fn a_file_that_is_there_is_replaced_only_when_that_is_said_again() {
    let mut bench = Bench::of(POND);
    let path = bench.folder().join("there.txt");
    fs::write(&path, "old").unwrap();
    bench.press("w");
    answer(&mut bench, "there.txt");
    bench.shows(&["is there already; Enter again", "replaces it"]);
    assert_eq!(fs::read_to_string(&path).unwrap(), "old");
    // Another name is another question.
    fs::write(bench.folder().join("there.md"), "old").unwrap();
    bench.press("<Backspace><Backspace><Backspace>md<Enter>");
    bench.shows(&["there.md is there already"]);
    bench.press("<Backspace><Backspace>txt<Enter>");
    bench.shows(&["there.txt is there already"]);
    assert_eq!(fs::read_to_string(&path).unwrap(), "old");
    bench.press("<Enter>");
    bench.shows(&["written to "]);
    assert!(fs::read_to_string(&path).unwrap().contains("a pond"));
}

#[test]
fn what_cannot_be_written_comes_back_with_the_reason() {
    let mut bench = Bench::of(POND);
    bench.press("w");
    answer(&mut bench, "nowhere/a.txt");
    bench.shows(&["write the table to:", "cannot be written: there is no such folder"]);
    bench.press("<Esc>w");
    let model = fs::read_to_string(bench.folder().join("m.yaml")).unwrap();
    bench.press("<Tab>");
    answer(&mut bench, "m.yaml");
    bench.shows(&["is the model itself; choose another name"]);
    bench.press("<Enter>");
    assert_eq!(fs::read_to_string(bench.folder().join("m.yaml")).unwrap(), model);
}

#[test]
fn tried_values_become_a_scenario_of_a_copy() {
    let mut bench = Bench::of(POND);
    bench.press("fvt3<Enter>N");
    bench.shows(&["name of the new scenario: half, k = 3"]);
    bench.press("half<Enter>");
    bench.shows(&["there is a scenario of that name already"]);
    bench.press(" and more<Enter>");
    bench.shows(&["write the copy to:", "m-tried.yaml"]);
    let copy = answer(&mut bench, "copy.yaml");
    bench.shows(&["O opens the copy: \"half and more\" is in "]);
    let text = fs::read_to_string(&copy).unwrap();
    assert!(text.contains("half and more") && text.contains("k: 3"), "{text}");
    assert_eq!(fs::read_to_string(bench.folder().join("m.yaml")).unwrap(), POND);
    bench.press("O");
    bench.shows(&["half and more (3 of 3)", "3.000"]);
}

#[test]
fn what_was_set_for_the_session_is_part_of_what_is_recorded() {
    let mut bench = Bench::empty();
    bench.app.set = vec![("l".to_owned(), 2.0)];
    let mut bench = bench.reading(POND);
    bench.press("vt3<Enter>N<Enter>");
    let copy = answer(&mut bench, "copy.yaml");
    let text = fs::read_to_string(copy).unwrap();
    assert!(text.contains("k: 3") && text.contains("l: 2"), "{text}");
}

#[test]
fn a_name_that_cannot_be_one_is_refused_with_the_reason() {
    let mut bench = Bench::of(POND);
    bench.press("v.N");
    bench.press(&"x".repeat(130));
    bench.press("<Enter>");
    let copy = answer(&mut bench, "copy.yaml");
    bench.shows(&["the scenario needs another name: it is longer"]);
    assert!(!copy.exists());
}

#[test]
fn nothing_is_written_while_the_search_goes_on() {
    let mut bench = Bench::of(POND);
    bench.hold();
    bench.press("vt3<Enter>");
    // The tried scenario is there, and not searched yet.
    while bench.app.study.as_ref().unwrap().slots.len() < 3 {
        bench.work_once();
    }
    bench.press("w");
    let path = answer(&mut bench, "a.txt");
    bench.shows(&["write the table to:", "\"as it is\" is being searched; write it when that is done"]);
    assert!(!path.exists());
    bench.work();
    bench.press("<Enter>");
    let text = fs::read_to_string(path).unwrap();
    assert!(text.contains("k=3"), "{text}");
}
