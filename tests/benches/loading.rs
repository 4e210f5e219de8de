//! From the bytes of a model file to tapes of its rows and Jacobian, step by step, for every model that comes with the
//! program; and for a community of 1,000 species in two tables, for information.

#![allow(
    clippy::print_stdout,
    clippy::expect_used,
    clippy::panic,
    reason = "a benchmark prints its table, and fails by panicking"
)]

mod common;

use std::collections::HashMap;
use std::fmt::Write;
use std::fs;
use std::path::Path;

use common::{Contender, best};
use restpoint::expr::tape::Tape;
use restpoint::model::Model;
use restpoint::model::load::{Files, load};
use restpoint::model::system::System;

/// What the largest model that comes with the program may take.
const GOAL_MILLIS: f64 = 5.0;

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
    let verdict = if slowest.0 <= GOAL_MILLIS { "within" } else { "beyond" };
    println!("slowest: {}, {:.2} ms, {verdict} the {GOAL_MILLIS} ms to be reached", slowest.1, slowest.0);
    println!("\nFor information:");
    time(&community(1000));
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
