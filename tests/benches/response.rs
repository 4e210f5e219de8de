//! A branch of a Rosenzweig–MacArthur model with harvest followed over an effort, with types: against the same steps
//! written by hand for this one model, in the same run; and the whole picture. Then every shipped scenario, part by part.

#![allow(clippy::print_stdout, clippy::panic, reason = "a benchmark prints its table, and fails by panicking")]
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "a benchmark fails by panicking")]

mod common;

use std::path::Path;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Instant;

use common::{Contender, best, table};
use restpoint::analysis::equilibria::{Budget, Equilibrium, OneByOne, all};
use restpoint::analysis::prepare::Prepared;
use restpoint::analysis::response::{Control, Response, advise, bands, margins, respond};
use restpoint::analysis::subject::Subject;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::{Model, ParameterId};
use restpoint::report::response::focus;
use restpoint::shell::models::{Reading, read};
use restpoint::shell::solver::{BOXES, scene};

const MODEL: &str = "
title: prey and predator
time: yr
species: {N: {upper: 1500}, P: {upper: 400}}
parameters: {r: 0.9, K: 900, a: 0.012, h: 0.02, e: 0.25, m: 0.3, q: 0.35, E: {value: 0.5, range: [0, 3]}}
change:
  N: r*N*(1 - N/K) - a*N*P/(1 + a*h*N) - q*E*N
  P: e*a*N*P/(1 + a*h*N) - m*P
";
/// The effort, among the parameters.
const EFFORT: usize = 7;
const STEPS: usize = 500;

fn main() {
    println!("Ratios are to the first line of each table; times are the best of several rounds in turn.");
    let (model, ..) = load("model.yaml", MODEL.as_bytes(), &NoFiles);
    let model = model.expect("a model");
    let prepared = Prepared::new(&model, &[]).expect("equations");
    let mut subject = prepared.subject(&model, 0).expect("a scenario");
    let budget = Budget { boxes: 20_000, stop: &|| false, workers: &OneByOne, observer: None };
    let list = found(&mut subject, &budget);
    let control = Control { parameter: ParameterId(EFFORT), from: 0.0, to: 3.0, present: 0.5 };
    let mut branches = subject.clone();
    let mut points = 0;
    let response = respond(&mut branches, &control, &list, &budget, &mut |_| ());
    for branch in &response.branches {
        points += branch.points.len();
    }
    println!("\n{} branches of {points} points, {} thresholds", response.branches.len(), response.thresholds.len());
    let mut contenders = [
        Contender::new("500 steps by hand, with types", STEPS, by_hand),
        Contender::new("branches with types and thresholds, a point", points, || {
            // Stopped when the branches are there.
            let done = AtomicBool::new(false);
            let stop = || done.load(Ordering::Relaxed);
            let budget = Budget { boxes: 20_000, stop: &stop, workers: &OneByOne, observer: None };
            let mut told = |_: &Response| done.store(true, Ordering::Relaxed);
            respond(&mut subject.clone(), &control, &list, &budget, &mut told).branches.len() as f64
        }),
        Contender::new("the whole picture, proved, a point", points, || {
            respond(&mut subject.clone(), &control, &list, &budget, &mut |_| ()).branches.len() as f64
        }),
    ];
    let times = best(&mut contenders, 20, 5);
    table("a control varied", &contenders, &times, &["", "0.8 µs", ""]);
    println!("500 points: by hand {:.3} ms, branches {:.3} ms", times[0] * 5e-4, times[1] * 5e-4);
    shipped();
}

/// What is timed of every scenario; the branches are told of before the rest is looked for.
const PARTS: [&str; 6] = ["branches", "respond", "advise", "bands", "closest", "in all"];

/// The first control of every shipped model, scenario by scenario: milliseconds, the best of three.
fn shipped() {
    println!("\nshipped scenarios, the first control; ms, the best of three");
    println!(
        "  {:<44} {:>9} {:>9} {:>9} {:>9} {:>9} {:>9}",
        "", PARTS[0], PARTS[1], PARTS[2], PARTS[3], PARTS[4], PARTS[5]
    );
    let mut files: Vec<_> = std::fs::read_dir(Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios"))
        .expect("scenarios")
        .map(|entry| entry.expect("an entry").path())
        .filter(|path| path.extension().is_some_and(|end| end == "yaml"))
        .collect();
    files.sort();
    let mut rows: Vec<[f64; 6]> = Vec::new();
    for file in files {
        let Reading::Model(original) = read(Some(&file)) else { panic!("{} is no model", file.display()) };
        let prepared = Prepared::new(&original.model, &[]).expect("equations");
        for scenario in 0..original.model.scenarios.len() {
            let Some((row, gaps)) = parts(&original.model, &prepared, scenario) else { continue };
            let name = format!("{}: {}", file.file_stem().unwrap().display(), original.model.scenarios[scenario].name);
            let cells = row.iter().map(|time| format!(" {time:>9.2}")).collect::<Vec<_>>().concat();
            println!("  {name:<44}{cells}  {gaps} gaps");
            rows.push(row);
        }
    }
    for (name, place) in [("median", rows.len() / 2), ("worst", rows.len() - 1)] {
        let of_part = |part| format!(" {:>9.2}", sorted(&rows, part)[place]);
        let cells = (0..PARTS.len()).map(of_part).collect::<Vec<_>>().concat();
        println!("  {name:<44}{cells}");
    }
}

fn sorted(rows: &[[f64; 6]], part: usize) -> Vec<f64> {
    let mut times: Vec<f64> = rows.iter().map(|row| row[part]).collect();
    times.sort_by(f64::total_cmp);
    times
}

/// The parts' times, and how many gaps are left; `None` where nothing can be varied.
fn parts(model: &Model, prepared: &Prepared, scenario: usize) -> Option<([f64; 6], usize)> {
    let budget = Budget { boxes: BOXES, stop: &|| false, workers: &OneByOne, observer: None };
    let scene = scene(model, prepared, scenario, &budget);
    let solved = scene.outcome.as_ref().ok()?;
    let parameter = model.parameters.iter().position(|one| one.control && one.range.is_some())?;
    let [from, to] = model.parameters[parameter].range.as_ref()?.value;
    let control = Control { parameter: ParameterId(parameter), from, to, present: solved.values[parameter] };
    let list = &solved.equilibria.list;
    let mut best = [f64::INFINITY; 6];
    let mut gaps = 0;
    for _ in 0..3 {
        let mut subject = prepared.subject(model, scenario).ok()?;
        let mut marks = vec![];
        let start = Instant::now();
        let now = || start.elapsed().as_secs_f64() * 1e3;
        let mut told = Vec::new();
        let response = respond(&mut subject, &control, list, &budget, &mut |_| told.push(now()));
        marks.push(now());
        advise(&mut subject, &response, &|| false);
        marks.push(now());
        if let Some(place) = focus(model, solved) {
            bands(&mut subject, list, place, &budget);
            marks.push(now());
            margins(&mut subject, list, place, &budget);
        } else {
            marks.push(now());
        }
        marks.push(now());
        gaps = response.gaps.len();
        // Margins have bands of their own.
        let closest = (marks[3] - marks[2]) - (marks[2] - marks[1]);
        let row = [
            *told.last()?,
            marks[0],
            marks[1] - marks[0],
            marks[2] - marks[1],
            closest,
            marks[3] - marks[2] + marks[1],
        ];
        best.iter_mut().zip(row).for_each(|(best, time)| *best = best.min(time));
    }
    Some((best, gaps))
}

fn found(subject: &mut Subject<'_>, budget: &Budget<'_>) -> Vec<Equilibrium> {
    let (graph, problem) = subject.problem();
    all(graph, &problem, budget).list
}

/// The state of coexistence followed over the effort in even steps: predictor, two corrections, eigenvalues.
fn by_hand() -> f64 {
    let (r, k, a, h, e, m, q) = (0.9, 900.0, 0.012, 0.02, 0.25, 0.3, 0.35);
    let (mut n, mut p) = (103.0f64, 60.0f64);
    let mut sum = 0.0;
    for step in 0..STEPS {
        let effort = step as f64 / STEPS as f64 * 1.5;
        for _ in 0..2 {
            let den = 1.0 + a * h * n;
            let f = r * (1.0 - n / k) - a * p / den - q * effort;
            let g = e * a * n / den - m;
            let [fn_, fp, gn] = [-r / k + a * a * h * p / (den * den), -a / den, e * a / (den * den)];
            // [fn fp; gn 0]
            let dn = -g / gn;
            n += dn;
            p += (-f - fn_ * dn) / fp;
        }
        let den = 1.0 + a * h * n;
        let [aa, bb, cc] = [n * (-r / k + a * a * h * p / (den * den)), -n * a / den, p * e * a / (den * den)];
        let half = aa / 2.0;
        let discriminant = half * half + bb * cc;
        sum += half + if discriminant > 0.0 { discriminant.sqrt() } else { 0.0 };
    }
    sum
}
