//! What `README.md` shows is so: its model, what `check` says of it, and its lists.

#![expect(clippy::unwrap_used, reason = "without the program and its files a test can only fail")]

use std::fs;
use std::path::Path;
use std::process::Command;

use restpoint::expr::builtin::BUILTINS;
use restpoint::model::lint::lint;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::model::units::check_units;

const README: &str = include_str!("../../README.md");

/// The blocks of this language, in order.
fn blocks(language: &str) -> Vec<&'static str> {
    let parts = README.split("\n```").filter_map(|part| part.strip_prefix(language)?.strip_prefix('\n'));
    parts.collect()
}

fn model() -> String {
    format!("{}\n", blocks("yaml")[0])
}

/// The first cell of each row of the table that follows this heading row.
fn first_cells(heading: &str) -> Vec<&'static str> {
    let (_, table) = README.split_once(heading).unwrap();
    let rows = table.lines().skip(2).take_while(|line| line.starts_with('|'));
    rows.map(|row| row.split('`').nth(1).unwrap()).collect()
}

/// What `restpoint` writes of `velmo.yaml` to both streams, and how it ends.
fn run(command: &str, model: &str) -> (String, Option<i32>) {
    run_with(&[command, "velmo.yaml"], model)
}

fn run_with(arguments: &[&str], model: &str) -> (String, Option<i32>) {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("velmo.yaml"), model).unwrap();
    let mut program = Command::new(env!("CARGO_BIN_EXE_restpoint"));
    let run = program.args(arguments).current_dir(folder.path()).output().unwrap();
    (String::from_utf8([run.stdout, run.stderr].concat()).unwrap(), run.status.code())
}

#[test]
fn the_first_model_is_sound_and_raises_no_warning() {
    let (model, _, found) = load("velmo.yaml", model().as_bytes(), &NoFiles);
    assert_eq!(found, []);
    let model = model.unwrap();
    assert_eq!(check_units(&model).warnings, []);
    let mut system = System::new(&model, &[]).unwrap();
    let bounds = system.bounds(&model).unwrap();
    assert_eq!(lint(&model, &system, &bounds), []);
}

#[test]
fn what_is_shown_is_current() {
    // Screens are marked, and held to the program by the tests of screens.
    let is_screen = |block: &&str| README.contains(&format!(" -->\n```text\n{block}"));
    let printed: Vec<&str> = blocks("text").into_iter().filter(|block| !is_screen(block)).collect();
    let [shown, wrong, table, compared, response, sketch] = printed[..] else { panic!("six blocks of output") };
    assert_eq!(run("check", &model()), (format!("{shown}\n"), Some(0)));
    assert_eq!(run("check", &model().replace("a*H*P", "a*h*P")), (format!("{wrong}\n"), Some(1)));
    assert_eq!(run("table", &model()), (format!("{table}\n"), Some(0)));
    assert_eq!(run("compare", &model()), (format!("{compared}\n"), Some(0)));
    let of = ["response", "velmo.yaml", "--of", "nets", "--scenario", "ten nets"];
    assert!(README.contains("response velmo.yaml --of nets --scenario \"ten nets\"`"));
    assert_eq!(run_with(&of, &model()), (format!("{response}\n"), Some(0)));
    let half = ["sketch", "velmo.yaml", "--scenario", "half the nets", "--size", "78x22"];
    assert!(README.contains("sketch velmo.yaml --scenario \"half the nets\" --size 78x22`"));
    assert_eq!(run_with(&half, &model()), (format!("{sketch}\n"), Some(0)));
}

#[test]
fn every_function_is_listed_with_its_meaning() {
    let rows = BUILTINS.iter().map(|row| {
        let domain = if row.domain.is_empty() { String::new() } else { format!(", for {}", row.domain) };
        format!("| `{}({})` | {}{domain} |\n", row.name, row.arguments.join(", "), row.help)
    });
    let table = format!("| function | what it is |\n|---|---|\n{}\n", rows.collect::<String>());
    assert!(README.contains(&table), "expected\n{table}");
}

#[test]
fn every_column_and_every_format_is_listed() {
    let rows = |heading: &str| -> Vec<&str> {
        let (_, table) = README.split_once(heading).unwrap();
        table
            .lines()
            .skip(2)
            .take_while(|line| line.starts_with('|'))
            .map(|row| row.split('|').nth(1).unwrap())
            .collect()
    };
    let words = |rows: Vec<&'static str>| -> Vec<&str> {
        rows.iter().flat_map(|row| row.split('`').skip(1).step_by(2)).collect()
    };
    let mut listed = words(rows("| columns | what they say |"));
    let mut all: Vec<&str> = restpoint::report::table::columns().map(|column| column.id).collect();
    listed.sort_unstable();
    all.sort_unstable();
    assert_eq!(listed, all);
    assert_eq!(words(rows("| `--format` | what it is for |")), ["text", "csv", "markdown", "latex", "json"]);
}

#[test]
fn every_model_that_comes_with_it_is_listed() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let names = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name().into_string().unwrap());
    let mut names: Vec<String> = names.filter_map(|name| name.strip_suffix(".yaml").map(str::to_owned)).collect();
    names.sort();
    assert_eq!(first_cells("| file in `scenarios/` | the question |"), names);
}

#[test]
fn every_key_listed_is_a_key() {
    let keys = first_cells("| key | what it holds |");
    assert!(keys.contains(&"title") && keys.contains(&"sketch"));
    for key in keys {
        let (_, _, found) = load("m.yaml", format!("{key}: 1\n").as_bytes(), &NoFiles);
        assert!(!found.iter().any(|message| message.message.contains("has no key")), "{key}: {found:?}");
    }
}

#[test]
fn every_exit_code_is_as_listed() {
    use restpoint::cli::Exit;
    let listed = [
        (Exit::Done, "done"),
        (Exit::Fault, "the model"),
        (Exit::Usage, "the command line"),
        (Exit::Unproved, "with `--strict`"),
        (Exit::Interrupted, "interrupted"),
    ];
    for (exit, meaning) in listed {
        assert!(README.contains(&format!("\n| {} | {meaning}", exit.number())), "{exit:?}");
    }
}
