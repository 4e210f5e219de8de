//! The certified search over the shipped scenarios, the published cases and random webs, one thread: time and boxes; beside
//! it a careful multistart on the same faces, with what it misses; and what a second thread gains.

#![allow(clippy::print_stdout, clippy::panic, reason = "a benchmark prints its table, and fails by panicking")]

#[path = "../common/mod.rs"]
#[allow(unused_imports, reason = "shared with the tests")]
mod common;

use std::collections::BTreeMap;
use std::hint::black_box;
use std::path::Path;
use std::time::Instant;

use common::cases;
use common::families::{Family, webs};
use common::solve::{Method, meet, solve_within};
use common::text::Read;
use common::whole::Whole;
use common::workers::Two;
use restpoint::analysis::equilibria::{Budget, Equilibria, OneByOne, Workers};
use restpoint::model::load::{Files, load};
use restpoint::model::system::System;
use restpoint::shell::files::read_model;

const BUDGET: Budget<'_> = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };

fn main() {
    by_species();
    named_webs();
    random_webs();
    overruns();
    second_thread();
}

/// Budgets of time, in milliseconds.
const DEADLINES: [f64; 5] = [1.0, 5.0, 20.0, 80.0, 250.0];

/// How much longer than they may searches take that are told to stop: the largest overrun over all budgets.
fn overruns() {
    println!("\nlargest overrun of a budget of time, ms (to reach 50)");
    let meadow = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/ferrow-meadow.yaml");
    let file = read_model(&meadow).unwrap_or_else(|wrong| panic!("{wrong:?}"));
    let (model, _, found) = load(&file.name, &file.bytes, &file.tables);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
    let plans = system.plans.len();
    let mut meadow = Read { model, system };
    print_overrun("ferrow-meadow", (0..plans).map(|plan| overrun(&mut meadow, plan)));
    for n in [9, 12, 16, 20, 25, 30] {
        let seeds = 1..=3;
        print_overrun(&format!("webs of {n}"), seeds.map(|seed| overrun(&mut webs::web(n, seed).text.read(), 0)));
    }
    for n in [60, 120, 250, 500] {
        print_overrun(&format!("linear blocks of {n}"), [overrun(&mut block(n), 0)].into_iter());
    }
}

/// Tables by name.
struct Tables(BTreeMap<&'static str, String>);

impl Files for Tables {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        self.0.get(path).map(|table| table.clone().into_bytes()).ok_or_else(|| format!("no table {path}"))
    }
}

/// A community of competitors, read from tables.
fn block(n: usize) -> Read {
    let whole = Whole::random(&mut common::Source::new(n as u64), n, [-2, 0], 40);
    let symbols: Vec<String> = (0..n).map(|i| format!("x{i}")).collect();
    let line = |symbol: &str, numbers: &[i64]| {
        let numbers: Vec<String> = numbers.iter().map(i64::to_string).collect();
        format!("{symbol},{}\n", numbers.join(","))
    };
    let growth = symbols.iter().zip(whole.growth.chunks(1)).map(|(symbol, growth)| line(symbol, growth));
    let growth = format!("symbol,growth\n{}", growth.collect::<String>());
    let rows = symbols.iter().zip(whole.matrix.chunks(n)).map(|(symbol, row)| line(symbol, row));
    let matrix = format!("symbol,{}\n{}", symbols.join(","), rows.collect::<String>());
    let text = "title: many\ntime: yr\nlotka_volterra: {growth: r.csv, matrix: a.csv, upper: 1000000}\n";
    let tables = Tables(BTreeMap::from([("r.csv", growth), ("a.csv", matrix)]));
    let (model, _, found) = load("block.yaml", text.as_bytes(), &tables);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
    Read { model, system }
}

fn print_overrun(name: &str, overruns: impl Iterator<Item = f64>) {
    println!("  {name:<22} {:>8.1}", overruns.fold(0.0, f64::max));
}

/// The largest over all deadlines; a search that ends before its deadline has none.
fn overrun(read: &mut Read, plan: usize) -> f64 {
    let fresh = read.system.graph.clone();
    let late = |deadline: f64| {
        read.system.graph = fresh.clone();
        let start = Instant::now();
        let passed = || start.elapsed().as_secs_f64() * 1e3;
        black_box(solve_within(read, plan, Method::Chosen, &Budget { stop: &|| passed() > deadline, ..BUDGET }));
        passed() - deadline
    };
    DEADLINES.map(late).into_iter().fold(0.0, f64::max)
}

/// The best of some runs in milliseconds, and what was found.
fn timed(read: &mut Read, scenario: usize, budget: &Budget<'_>, runs: usize) -> (f64, Equilibria) {
    let fresh = read.system.graph.clone();
    let mut best = f64::INFINITY;
    let mut found = None;
    for _ in 0..runs {
        read.system.graph = fresh.clone();
        let start = Instant::now();
        found = Some(black_box(solve_within(read, scenario, Method::Certified, budget)));
        best = best.min(start.elapsed().as_secs_f64() * 1e3);
    }
    (best, found.unwrap_or_else(|| panic!("at least one run")))
}

fn median(values: &mut [f64]) -> f64 {
    values.sort_by(f64::total_cmp);
    values.get(values.len() / 2).copied().unwrap_or(f64::NAN)
}

/// Medians over all published cases with their scenarios, and the shipped models, by number of species.
fn by_species() {
    let mut times: BTreeMap<usize, Vec<f64>> = BTreeMap::new();
    for case in cases::all().iter().filter(|case| case.species.len() <= 6) {
        let mut read = case.text().read();
        for scenario in 0..read.system.plans.len() {
            let (time, _) = timed(&mut read, scenario, &BUDGET, 5);
            times.entry(case.species.len()).or_default().push(time);
        }
    }
    println!("\npublished cases and their scenarios: certified search, one thread, ms");
    println!("  species  searches    median   largest   to reach (median)");
    for (n, times) in &mut times {
        let largest = times.iter().copied().fold(0.0, f64::max);
        let goal = match n {
            1 | 2 => "0.12",
            3 => "0.3",
            4 => "1.2",
            _ => "",
        };
        println!("  {n:>7}  {:>8}  {:>8.3}  {largest:>8.3}   {goal}", times.len(), median(times));
    }
}

fn named_webs() {
    println!("\nnamed webs: certified search, one thread, and a multistart on the same faces");
    println!("  {:<24} {:>6} {:>6} {:>9} {:>9}   to reach", "", "roots", "boxes", "ms", "complete");
    let bazykin = common::families::examples().into_iter().find(|family| family.name == "Bazykin");
    let webs = [
        (webs::four_species(), "35 boxes, 1.2 ms"),
        (webs::six_species(), "381 boxes, 12 ms"),
        (webs::dense_six_species(), "2465 boxes"),
    ];
    for (family, goal) in bazykin.into_iter().map(|family| (family, "7 boxes, 0.12 ms")).chain(webs) {
        let mut read = family.text.read();
        let (time, found) = timed(&mut read, 0, &BUDGET, 5);
        println!(
            "  {:<24} {:>6} {:>6} {time:>9.3} {:>9}   {goal}",
            family.name,
            found.list.len(),
            found.boxes,
            found.complete
        );
        for starts in [50, 1000] {
            let (time, missed) = multistart(&mut family.text.read(), &found, starts);
            println!("    {starts:>5} starts a face: {time:>9.3} ms, {missed} of {} missed", found.list.len());
        }
    }
}

/// Newton's method from uniform and log-uniform starts on the full rows divided by what is present: every face's own
/// equations, as a careful script would have them.
fn multistart(read: &mut Read, known: &Equilibria, starts: usize) -> (f64, usize) {
    let begun = Instant::now();
    let n = read.model.species.len();
    let mut hits: Vec<Vec<f64>> = Vec::new();
    let mut source = common::Source::new(1);
    let graph = &mut read.system.graph;
    let plan = read.system.plans[0].clone();
    for face in 0..1usize << n {
        let present: Vec<usize> = (0..n).filter(|i| face >> i & 1 == 1).collect();
        let rows: Vec<_> =
            present.iter().map(|&i| graph.divide(plan.rows[i], i).quotient.unwrap_or(plan.rows[i])).collect();
        let tape = restpoint::expr::tape::Tape::new(graph, &rows);
        let mut run = tape.start_gradient(&plan.values);
        for start in 0..starts {
            let mut x = vec![0.0; n];
            for &i in &present {
                let upper = read.model.species[i].upper.unwrap_or(1.0);
                let share = source.unit();
                x[i] = if start % 2 == 0 { upper * share } else { upper * 10f64.powf(-4.0 * share) };
            }
            if newton(&mut run, &mut x, &present) && x.iter().all(|v| *v >= 0.0) {
                hits.push(x);
            }
        }
    }
    let hit = |e: &restpoint::analysis::equilibria::Equilibrium| {
        hits.iter().any(|x| x.iter().zip(&e.state).all(|(a, b)| (a - b).abs() <= 1e-7 * b.abs().max(1e-9)))
    };
    (begun.elapsed().as_secs_f64() * 1e3, known.list.iter().filter(|e| !hit(e)).count())
}

fn newton(run: &mut restpoint::expr::tape::gradient::GradientRun<'_, f64>, x: &mut [f64], present: &[usize]) -> bool {
    let k = present.len();
    for _ in 0..60 {
        run.at(x);
        let mut slopes = vec![0.0; k * k];
        for i in 0..k {
            if let Some(row) = run.gradient(i) {
                present.iter().enumerate().for_each(|(j, &p)| slopes[i * k + j] = row[p]);
            }
        }
        let Some(inverse) = restpoint::num::dense::inverse(&slopes, k) else { return false };
        let mut largest = 0.0f64;
        for (i, &p) in present.iter().enumerate() {
            let step: f64 = (0..k).map(|j| inverse[i * k + j] * run.output(j)).sum();
            x[p] -= step;
            largest = largest.max(step.abs() / x[p].abs().max(1e-10));
        }
        if !x.iter().all(|v| v.is_finite()) {
            return false;
        }
        if largest < 1e-13 {
            return true;
        }
    }
    false
}

fn random_webs() {
    let mut times = Vec::new();
    let mut boxes = Vec::new();
    let mut incomplete = 0;
    for seed in 1..=200 {
        let (time, found) = timed(&mut webs::web(6, seed).text.read(), 0, &BUDGET, 1);
        times.push(time);
        boxes.push(found.boxes as f64);
        incomplete += usize::from(!found.complete);
    }
    let largest = times.iter().copied().fold(0.0, f64::max);
    println!(
        "\nrandom six-species webs, 200 seeds: median {:.2} ms (to reach 14), largest {largest:.1} ms (200),",
        median(&mut times)
    );
    println!("  median {} boxes, {incomplete} not complete", median(&mut boxes));
}

/// Rounds of the comparison of two threads with one.
const ROUNDS: usize = 15;

/// Two threads against one, as a share of what a loop of plain arithmetic gains: all four in turn in every round, and the
/// best round of each counts, so that a drifting machine slows all alike.
fn second_thread() {
    let families: Vec<Family> = (1..=6).map(|seed| webs::web(6, seed)).chain([webs::dense_six_species()]).collect();
    let two = Budget { workers: &Two, ..BUDGET };
    let seconds = |work: &mut dyn FnMut()| {
        let start = Instant::now();
        work();
        start.elapsed().as_secs_f64()
    };
    let mut best = [f64::INFINITY; 2];
    let mut searches = vec![[f64::INFINITY; 2]; families.len()];
    for _ in 0..ROUNDS {
        for (k, workers) in [&OneByOne as &dyn Workers, &Two].into_iter().enumerate() {
            best[k] = best[k].min(seconds(&mut || arithmetic(workers)));
        }
        for (family, times) in families.iter().zip(&mut searches) {
            let (one, found) = timed(&mut family.text.read(), 0, &BUDGET, 1);
            let (both, same) = timed(&mut family.text.read(), 0, &two, 1);
            assert!(found.list.iter().zip(&same.list).all(|(a, b)| meet(&a.enclosure, &b.enclosure)));
            *times = [times[0].min(one), times[1].min(both)];
        }
    }
    let sum = |k: usize| searches.iter().map(|times| times[k]).sum::<f64>();
    let (gain, plain) = (sum(0) / sum(1), best[0] / best[1]);
    println!(
        "\ntwo threads gain {gain:.2}x on the search, {plain:.2}x on plain arithmetic: {:.2} of it (to reach 0.85)",
        gain / plain
    );
    let each: Vec<String> = searches.iter().map(|times| format!("{:.2}", times[0] / times[1])).collect();
    println!("  each web: {}", each.join(" "));
}

/// Some ten milliseconds of arithmetic in 32 jobs.
fn arithmetic(workers: &dyn Workers) {
    workers.run(32, &|job| {
        let mut x = job as f64 + 1.5;
        for _ in 0..100_000 {
            x = x * 0.999_999 + 1.0 / (1.0 + x * x);
        }
        black_box(x);
    });
}
