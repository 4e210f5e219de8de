//! From the bytes of a model file to tapes of its rows and Jacobian, step by step, for every model that comes with the
//! program; for a community of 1,000 species in two tables, for information; and from hostile files to the text of
//! their messages.
//!
//! To be reached: 5 ms for the whole way of the largest model that comes with the program, and 100 ms for the refusal of
//! every hostile file.

#![allow(
    clippy::print_stdout,
    clippy::expect_used,
    clippy::panic,
    reason = "a benchmark prints its table, and fails by panicking"
)]

mod common;
#[path = "../load_support/mod.rs"]
mod load_support;

use std::collections::HashMap;
use std::fmt::Write;
use std::fs;
use std::path::Path;

use common::{Contender, best};
use load_support::{Hostile, faulty_files, hostile_files, huge_file};
use restpoint::diag::render::render;
use restpoint::expr::tape::Tape;
use restpoint::model::Model;
use restpoint::model::load::{Files, NoFiles, load};
use restpoint::model::system::System;

/// What the largest model that comes with the program may take.
const GOAL_MILLIS: f64 = 5.0;

/// What the refusal of a hostile file may take, its messages made into text.
const REFUSAL_MILLIS: f64 = 100.0;

/// A model and its tables, in memory, so that no disk is timed.
struct Text {
    name: String,
    model: Vec<u8>,
    tables: HashMap<String, Vec<u8>>,
}

impl Files for Text {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        self.tables.get(path).cloned().ok_or_else(|| "there is no such file".to_owned())
    }
}

fn main() {
    println!(
        "Milliseconds, the best of several rounds: read and check, assemble, tapes of rows and Jacobian of all plans."
    );
    println!("{:<24} {:>7} {:>8} {:>8} {:>8} {:>8} {:>8}", "", "species", "read", "system", "tapes", "all", "nodes");
    let mut slowest = (0.0, String::new());
    for text in shipped() {
        let all = time(&text);
        if all > slowest.0 {
            slowest = (all, text.name);
        }
    }
    judge(&slowest, GOAL_MILLIS);
    println!("\nFor information:");
    time(&community(1000));
    refusals();
}

/// How long each hostile file is dealt with, beside what is to be reached.
fn refusals() {
    println!("\nMilliseconds to refuse a hostile file and write its messages, of {REFUSAL_MILLIS} that it may take.");
    let mut slowest = (0.0, String::new());
    for hostile in hostile_files().iter().chain(&faulty_files()).chain([&huge_file()]) {
        let mut contender = [Contender::new(hostile.name, 1, || refuse(hostile))];
        let millis = best(&mut contender, 3, 30)[0] / 1e6;
        println!("{:<32} {millis:>8.2}", hostile.name);
        if millis > slowest.0 {
            slowest = (millis, hostile.name.to_owned());
        }
    }
    judge(&slowest, REFUSAL_MILLIS);
}

/// Characters of all messages about a file.
fn refuse(hostile: &Hostile) -> f64 {
    let (_, sources, found) = load("m.yaml", &hostile.text, &NoFiles);
    found.iter().map(|diagnostic| render(diagnostic, &sources, false).len()).sum::<usize>() as f64
}

fn judge((millis, name): &(f64, String), goal: f64) {
    let verdict = if *millis <= goal { "within" } else { "beyond" };
    println!("slowest: {name}, {millis:.2} ms, {verdict} the {goal} ms to be reached");
}

/// Every model in `scenarios`, in order.
fn shipped() -> Vec<Text> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let files = fs::read_dir(&folder).expect("the folder").map(|entry| entry.expect("a file").path());
    let read = |path: &Path| fs::read(path).expect("a readable file");
    let name = |path: &Path| path.file_name().expect("a name").to_string_lossy().into_owned();
    let (mut models, tables): (Vec<_>, Vec<_>) = files.partition(|path| path.extension() == Some("yaml".as_ref()));
    models.sort();
    let tables: HashMap<String, Vec<u8>> = tables.iter().map(|path| (name(path), read(path))).collect();
    models.iter().map(|path| Text { name: name(path), model: read(path), tables: tables.clone() }).collect()
}

/// A community in which each species meets every other.
fn community(species: usize) -> Text {
    let mut growth = String::from("symbol,growth\n");
    let mut matrix = String::from("symbol");
    for i in 0..species {
        let _ = write!(matrix, ",s{i}");
        let _ = writeln!(growth, "s{i},{}", 0.3 + (i % 7) as f64 / 10.0);
    }
    for i in 0..species {
        let _ = write!(matrix, "\ns{i}");
        for j in 0..species {
            let entry = if i == j { -0.01 } else { ((i * 31 + j * 17) % 97) as f64 / -1e6 };
            let _ = write!(matrix, ",{entry}");
        }
    }
    matrix.push('\n');
    let model = "title: A large community\ntime: yr\n\
        lotka_volterra: {growth: growth.csv, matrix: matrix.csv, upper: 500}\n";
    let tables = [("growth.csv", growth), ("matrix.csv", matrix)];
    Text {
        name: format!("{species} species"),
        model: model.into(),
        tables: tables.into_iter().map(|(name, text)| (name.to_owned(), text.into_bytes())).collect(),
    }
}

/// Prints a line of times, and returns that of the whole.
fn time(text: &Text) -> f64 {
    let model = read(text);
    let system = assemble(&model);
    let mut contenders = [
        Contender::new("read", 1, || read(text).species.len() as f64),
        Contender::new("system", 1, || assemble(&model).graph.len() as f64),
        Contender::new("nothing but a copy", 1, || system.clone().graph.len() as f64),
        Contender::new("copy and tapes", 1, || compile(&mut system.clone())),
        Contender::new("all", 1, || compile(&mut assemble(&read(text)))),
    ];
    let times: Vec<f64> = best(&mut contenders, 5, 30).iter().map(|nanos| nanos / 1e6).collect();
    let [reading, assembling, copy, compiling, all] = times[..] else { return f64::NAN };
    let mut compiled = system.clone();
    compile(&mut compiled);
    println!(
        "{:<24} {:>7} {reading:>8.3} {assembling:>8.3} {:>8.3} {all:>8.3} {:>8}",
        text.name,
        model.species.len(),
        compiling - copy,
        compiled.graph.len(),
    );
    all
}

fn read(text: &Text) -> Model {
    let (model, _, found) = load(&text.name, &text.model, text);
    model.unwrap_or_else(|| panic!("{}: {found:?}", text.name))
}

fn assemble(model: &Model) -> System {
    System::new(model, &[]).expect("a sound model")
}

/// A tape of the rows and one of the Jacobian, for every scenario.
fn compile(system: &mut System) -> f64 {
    let mut operations = 0;
    for plan in &system.plans {
        let jacobian = system.graph.jacobian(&plan.rows);
        operations += plan.tape(&system.graph).operations() + Tape::new(&system.graph, &jacobian).operations();
    }
    operations as f64
}
