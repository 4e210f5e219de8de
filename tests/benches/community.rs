//! Large Lotka–Volterra communities: from two CSV files to the assembly that no absent species invades, step by step, and
//! every face of communities of up to fourteen species.
#![allow(clippy::print_stdout, clippy::unwrap_used, clippy::panic, reason = "a benchmark prints its table or fails")]

use std::fmt::Write as _;
use std::hint::black_box;
use std::path::{Path, PathBuf};
use std::time::Instant;

use restpoint::analysis::equilibria::linear::{Affine, Assembly, assemble, find, recognise};
use restpoint::analysis::equilibria::{Budget, OneByOne, Problem, all, balance};
use restpoint::model::load::load;
use restpoint::model::system::System;
use restpoint::num::interval::Interval;
use restpoint::num::random::Source;
use restpoint::shell::files::read_model;

const BUDGET: Budget<'_> = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
const ROUNDS: usize = 5;

fn main() {
    let folder = tempfile::tempdir().unwrap();
    for n in [100, 500, 1000] {
        from_files(&written(folder.path(), n), n);
    }
    for n in [8, 11, 14] {
        every_face(n);
    }
}

/// Growth 0.1 to 1; each species limits itself by 1, and a third of the others by a normal amount (by the sum of twelve)
/// of standard deviation 0.7/√(n/3), so that about half of them persist.
fn numbers(n: usize) -> (Vec<f64>, Vec<f64>) {
    let mut source = Source::new(n as u64);
    let growth = (0..n).map(|_| source.between(0.1, 1.0)).collect();
    let spread = 0.7 / (n as f64 / 3.0).sqrt();
    let mut entry = |k: usize| {
        let normal: f64 = (0..12).map(|_| source.unit()).sum::<f64>() - 6.0;
        if k / n == k % n {
            -1.0
        } else if source.unit() < 1.0 / 3.0 {
            spread * (normal - 0.3)
        } else {
            0.0
        }
    };
    (growth, (0..n * n).map(&mut entry).collect())
}

fn written(folder: &Path, n: usize) -> PathBuf {
    let (growth, matrix) = numbers(n);
    let mut rows = "symbol,growth\n".to_owned();
    let mut square = String::from("symbol");
    for (i, growth) in growth.iter().enumerate() {
        let _ = writeln!(rows, "s{i},{growth:.6}");
        let _ = write!(square, ",s{i}");
    }
    for (i, row) in matrix.chunks(n).enumerate() {
        let _ = write!(square, "\ns{i}");
        for entry in row {
            let _ = if *entry == 0.0 { write!(square, ",0") } else { write!(square, ",{entry:.6}") };
        }
    }
    let model = format!("title: many\ntime: yr\nlotka_volterra: {{growth: r{n}.csv, matrix: a{n}.csv, upper: 1000}}\n");
    std::fs::write(folder.join(format!("r{n}.csv")), rows).unwrap();
    std::fs::write(folder.join(format!("a{n}.csv")), square + "\n").unwrap();
    let path = folder.join(format!("m{n}.yaml"));
    std::fs::write(&path, model).unwrap();
    path
}

/// Milliseconds of each step, the best of a few rounds.
fn from_files(path: &Path, n: usize) {
    let names = ["read files", "load", "assemble rows", "bounds", "recognise", "pivot and prove", "all, after bounds"];
    let mut best = vec![f64::INFINITY; names.len()];
    let mut persist = 0;
    for _ in 0..ROUNDS {
        let mut times = Vec::new();
        let mut clock = Instant::now();
        let mut lap = || times.push(std::mem::replace(&mut clock, Instant::now()).elapsed().as_secs_f64() * 1e3);
        let file = read_model(path).unwrap();
        lap();
        let (model, _, found) = load(&file.name, &file.bytes, &file.tables);
        let model = model.unwrap_or_else(|| panic!("{found:?}"));
        lap();
        let mut system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
        lap();
        let sides: Vec<[f64; 2]> = system.bounds(&model).unwrap().iter().map(|b| [b.lower, b.upper]).collect();
        lap();
        let rows = balance(&mut system.graph, &system.plans[0].rows.clone(), &model.time);
        let values = system.plans[0].values.clone();
        let problem = Problem { rows: &rows, values: &values, sides: &sides };
        let community = recognise(&mut system.graph, &problem).unwrap();
        lap();
        match assemble(&community, &vec![1.0; n], &|| false) {
            Assembly::Found { equilibrium, uninvadable: true } => {
                persist = (0..n).filter(|&i| equilibrium.has(i)).count();
            }
            other => panic!("{other:?}"),
        }
        lap();
        black_box(all(&mut system.graph, &problem, &BUDGET));
        lap();
        best.iter_mut().zip(&times).for_each(|(best, time)| *best = best.min(*time));
    }
    let whole: f64 = best[..4].iter().sum::<f64>() + best[6];
    println!("\n{n} species from CSV files, {persist} persist: {whole:.0} ms from file to list{}", goal(n));
    for (name, time) in names.iter().zip(&best) {
        println!("  {name:<20} {time:>9.2} ms");
    }
}

fn goal(n: usize) -> &'static str {
    if n == 500 { ", to reach 700" } else { "" }
}

fn every_face(n: usize) {
    let (growth, matrix) = numbers(n);
    let points = |numbers: &[f64]| numbers.iter().map(|&x| Interval::point(x)).collect();
    let community = Affine { growth: points(&growth), matrix: points(&matrix) };
    let sides = vec![[0.0, 1e6]; n];
    let problem = Problem { rows: &[], values: &[], sides: &sides };
    let begun = Instant::now();
    let found = find(&community, &problem, &BUDGET);
    let time = begun.elapsed().as_secs_f64() * 1e3;
    let complete = if found.complete { "complete" } else { "not complete" };
    println!("{n} species, {} faces: {} equilibria, {complete}, {time:.1} ms", found.faces, found.list.len());
}
