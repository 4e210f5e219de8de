//! Equilibria from starting points, against the certified search; and the choice between methods.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

use std::path::Path;
use std::time::{Duration, Instant};

use crate::common::Source;
use crate::common::text::ModelText;
use crate::common::workers::Two;
use restpoint::analysis::equilibria::{
    Budget, Equilibria, Equilibrium, OneByOne, Probably, Problem, all, balance, find, starts,
};
use restpoint::expr::tape::Tape;
use restpoint::model::Model;
use restpoint::model::load::load;
use restpoint::model::system::System;
use restpoint::num::interval::Interval;
use restpoint::shell::files::read_model;

const BUDGET: Budget<'_> = Budget { boxes: 5_000, stop: &|| false, workers: &OneByOne, observer: None };

/// A web of `n` species: the first ⌈n/2⌉ grow by themselves and compete, the others eat two or three species before them
/// with a shared type II response (Holling 1959).
fn web(source: &mut Source, n: usize) -> ModelText {
    let producers = n.div_ceil(2);
    let mut rates: Vec<String> = (0..n)
        .map(|i| {
            if i < producers {
                let [r, k, c] = [source.between(0.5, 1.5), source.between(50.0, 150.0), source.between(0.0, 0.9)];
                let others: Vec<String> =
                    (0..producers).filter(|&j| j != i).map(|j| format!(" + {c:.3}*x{j}")).collect();
                format!("{r:.3}*x{i}*(1 - (x{i}{})/{k:.1})", others.concat())
            } else {
                let m = source.between(0.05, 0.3);
                format!("-{m:.3}*x{i}")
            }
        })
        .collect();
    for i in producers..n {
        let prey: Vec<usize> = (0..i).filter(|_| source.unit() < 0.7).take(3).collect();
        let attack: Vec<f64> = prey.iter().map(|_| source.between(0.01, 0.05)).collect();
        let h = source.between(0.2, 2.0);
        let crowding: Vec<String> = prey.iter().zip(&attack).map(|(j, a)| format!(" + {:.5}*x{j}", a * h)).collect();
        for (&j, a) in prey.iter().zip(&attack) {
            let eaten = format!("{a:.4}*x{j}*x{i}/(1{})", crowding.concat());
            rates[j] = format!("{} - {eaten}", rates[j]);
            rates[i] = format!("{} + 0.5*{eaten}", rates[i]);
        }
    }
    let rows: Vec<(String, String)> = rates.into_iter().enumerate().map(|(i, rate)| (format!("x{i}"), rate)).collect();
    let rows: Vec<(&str, &str)> = rows.iter().map(|(symbol, rate)| (symbol.as_str(), rate.as_str())).collect();
    ModelText::new("web", "1000", &rows)
}

type Method = fn(&mut restpoint::expr::graph::Graph, &Problem<'_>, &Budget<'_>) -> Equilibria;

fn solve(text: &ModelText, method: Method, budget: &Budget<'_>) -> Equilibria {
    let mut read = text.read();
    let sides: Vec<[f64; 2]> =
        text.species.iter().map(|(_, low, high)| [low.parse().unwrap(), high.parse().unwrap()]).collect();
    let rows = balance(&mut read.system.graph, &read.system.plans[0].rows.clone(), &read.model.time);
    method(
        &mut read.system.graph,
        &Problem { rows: &rows, values: &read.system.plans[0].values, sides: &sides },
        budget,
    )
}

fn same(a: &Equilibrium, b: &Equilibrium) -> bool {
    a.enclosure.iter().zip(&b.enclosure).all(|(a, b)| !a.intersect(*b).is_empty())
}

#[test]
fn every_hit_is_an_equilibrium_and_few_are_missed() {
    let mut source = Source::new(11);
    let (mut all_of_them, mut missed) = (0, 0);
    for seed in 0..40 {
        let text = web(&mut source, 3 + seed % 3);
        let certified = solve(&text, find, &Budget { boxes: 50_000, ..BUDGET });
        let hit = solve(&text, starts::find, &BUDGET);
        assert!(!hit.complete && hit.list.iter().all(|e| e.proven), "seed {seed}");
        assert!(hit.unresolved.iter().any(|open| open.text.contains("not proved to be complete")), "seed {seed}");
        if certified.complete {
            for equilibrium in &hit.list {
                assert_eq!(certified.list.iter().filter(|other| same(equilibrium, other)).count(), 1, "seed {seed}");
            }
            all_of_them += certified.list.len();
            missed += certified.list.iter().filter(|one| !hit.list.iter().any(|other| same(one, other))).count();
        }
    }
    assert!(all_of_them > 150 && missed * 100 <= all_of_them, "missed {missed} of {all_of_them}");
}

#[test]
fn workers_do_not_change_the_list() {
    let mut source = Source::new(12);
    for n in [4, 6] {
        let text = web(&mut source, n);
        let alone = solve(&text, starts::find, &BUDGET);
        assert!(alone.list.len() > 3);
        assert_eq!(alone, solve(&text, starts::find, &Budget { workers: &Two, ..BUDGET }));
        assert_eq!(alone, solve(&text, starts::find, &BUDGET));
    }
}

/// Stages and a map, worked out by hand; what is found, rounded to whole numbers.
#[test]
fn roots_at_joint_absence_and_of_maps_are_found() {
    let check = |text: &ModelText, expected: &[[f64; 2]]| {
        let found = solve(text, starts::find, &BUDGET);
        let states: Vec<Vec<f64>> = found.list.iter().map(|e| e.state.iter().map(|x| x.round()).collect()).collect();
        assert_eq!(states, expected, "{}", text.title);
    };
    // Stages vanish only together. J = 3 A and 9 A = J (1 + A/10): A = 20, or nobody.
    let stages = |births: u8| format!("{births}*A - J*(1 + A/10)");
    check(&ModelText::new("stages", "1000", &[("J", &stages(9)), ("A", "J - 3*A")]), &[[0.0, 0.0], [60.0, 20.0]]);
    // With a third of the births A/10 = 0: a double root, of which no proof can say that it is one.
    check(&ModelText::new("double", "1000", &[("J", &stages(3)), ("A", "J - 3*A")]), &[]);
    // N = 100 keeps itself; P eats 1/50 of it: N e^(1 − N/100 − P/50) = N and 2 P N/(50 + N) = P, so N = 50, P = 25.
    let mut map = ModelText::new("map", "1000", &[("N", "N*exp(1 - N/100 - P/50)"), ("P", "2*P*N/(50 + N)")]);
    map.discrete = true;
    check(&map, &[[0.0, 0.0], [100.0, 0.0], [50.0, 25.0]]);
}

/// No box a face is not enough for the certified search; what it lacks comes from starting points.
#[test]
fn a_search_that_runs_out_is_helped() {
    let text = web(&mut Source::new(15), 5);
    let certified = solve(&text, find, &Budget { boxes: 50_000, ..BUDGET });
    let short = Budget { boxes: 0, ..BUDGET };
    let (alone, helped) = (solve(&text, find, &short), solve(&text, all, &short));
    assert!(certified.complete && !alone.complete && !helped.complete);
    assert!(alone.list.len() < certified.list.len() && alone.list.len() < helped.list.len());
    for equilibrium in &helped.list {
        assert_eq!(certified.list.iter().filter(|other| same(equilibrium, other)).count(), 1);
    }
    assert!(helped.unresolved.iter().any(|open| open.text.contains("starting points")));
}

#[test]
fn a_large_web_gets_a_list_that_is_not_complete() {
    let mut source = Source::new(13);
    for n in [9, 14] {
        let text = web(&mut source, n);
        let found = solve(&text, all, &Budget { boxes: 800, ..BUDGET });
        assert!(!found.complete && !found.none_above && found.list.len() > 3, "{n}: {}", found.list.len());
        assert!(
            found.unresolved.iter().any(|open| open.probably == Probably::Budget && open.text.contains("starting"))
        );
        let read = text.read();
        let tape = Tape::new(&read.system.graph, &read.system.plans[0].rows);
        let mut run = tape.start::<Interval>(&[]);
        for equilibrium in &found.list {
            run.at(&equilibrium.enclosure);
            assert!(run.outputs().all(|rate| rate.contains_zero()), "{n}: {equilibrium:?}");
        }
    }
}

#[test]
fn stop_is_heard() {
    let mut source = Source::new(14);
    let text = web(&mut source, 11);
    let begun = Instant::now();
    let found = solve(
        &text,
        all,
        &Budget {
            boxes: usize::MAX,
            stop: &|| begun.elapsed() > Duration::from_millis(300),
            workers: &Two,
            observer: None,
        },
    );
    assert!(begun.elapsed() < Duration::from_millis(1500), "{:?}", begun.elapsed());
    assert!(!found.complete);
}

fn meadow() -> (Model, System) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/ferrow-meadow.yaml");
    let file = read_model(&path).expect("a file");
    let (model, _, found) = load(&file.name, &file.bytes, &file.tables);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
    (model, system)
}

/// Thirty plants; four plans are communities, the fifth has immigration into three rows. In each some state with many
/// plants, which no absent one can invade, and which is checked against the rates.
#[test]
fn the_meadow_is_answered_under_every_plan() {
    let (model, mut system) = meadow();
    let sides: Vec<[f64; 2]> = system.bounds(&model).expect("bounds").iter().map(|b| [b.lower, b.upper]).collect();
    let mut kept = Vec::new();
    for plan in system.plans.clone() {
        let problem = Problem { rows: &plan.rows, values: &plan.values, sides: &sides };
        let begun = Instant::now();
        let found = all(&mut system.graph, &problem, &BUDGET);
        println!("{}: {} in {:?}; {}", plan.name, found.list.len(), begun.elapsed(), found.unresolved[0].text);
        let tape = plan.tape(&system.graph);
        let mut run = tape.start_gradient(&plan.values);
        let mut largest = 0;
        for equilibrium in &found.list {
            assert!(equilibrium.proven);
            run.at(&equilibrium.state);
            let size = |i: usize| equilibrium.state[i].max(1e-3);
            assert!((0..30).all(|i| run.output(i).abs() < 1e-10 * size(i)), "{}: {:?}", plan.name, equilibrium.state);
            let absent = |i: &usize| equilibrium.state[*i] == 0.0;
            let rate = |i: usize| run.gradient(i).expect("depends on its species")[i];
            if (0..30).filter(absent).all(|i| rate(i) < 0.0) {
                largest = largest.max((0..30).filter(|i| !absent(i)).count());
            }
        }
        kept.push(largest);
        assert!(!found.complete);
    }
    println!("{kept:?}");
    assert!(kept.iter().all(|&kept| kept > 10), "{kept:?}");
    assert!(kept[0] > kept[1] && kept[0] > kept[3], "neither extreme keeps the most: {kept:?}");
}
