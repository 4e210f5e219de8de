//! Equilibria known to 50 digits: `tests/data/equilibria_references.py` says how they were made.

#![expect(clippy::expect_used, reason = "a broken table is a failed test")]

use std::collections::BTreeMap;

use crate::common::families::{Family, examples};
use crate::common::newton::Newton;
use crate::common::solve::{Method, solve};
use crate::common::text::Point;
use crate::common::{Source, cases};
use restpoint::analysis::equilibria::Equilibrium;
use restpoint::num::interval::Interval;
use serde_json::json;

/// Roots of one family that the script is to work out.
const ROOTS_A_FAMILY: usize = 2;

/// The families that the script takes, with approximate roots: all but those whose roots are plain numbers, and of each
/// the last roots of the list, which have the most species.
fn chosen() -> Vec<(Family, Vec<Vec<f64>>)> {
    let plain = ["cubics", "expanded cubics", "Allee patches", "budworm ring", "hidden pair 4"];
    let mut chosen = Vec::new();
    for family in examples() {
        let exact = plain.iter().any(|start| family.name.starts_with(start));
        let large = ["Allee patches 3", "budworm ring 3"].contains(&&*family.name);
        if (exact && !large) || family.text.rows.is_empty() {
            continue;
        }
        let middle = |point: &Point| point.iter().map(|x| x.mid()).collect();
        let mut roots: Vec<Vec<f64>> = family.simple.iter().rev().take(ROOTS_A_FAMILY).map(middle).collect();
        if !family.complete {
            roots.extend(found(&family));
            roots.truncate(ROOTS_A_FAMILY);
        }
        roots.retain(|x| x.iter().any(|x| *x != 0.0));
        if !roots.is_empty() {
            chosen.push((family, roots));
        }
    }
    chosen
}

/// Equilibria of a family of which none is known, those with the most species first.
fn found(family: &Family) -> Vec<Vec<f64>> {
    let read = family.text.read();
    let tape = read.system.plans[0].tape(&read.system.graph);
    let mut newton = Newton::new(&read, 0, &tape);
    let mut source = Source::new(1);
    let mut found: Vec<Vec<f64>> = Vec::new();
    for _ in 0..400 {
        let absent = |source: &mut Source| source.unit() < 0.2;
        let mut start = || if absent(&mut source) { 0.0 } else { 8.0 * source.unit().powi(2) };
        let start: Vec<f64> = (0..family.text.species.len()).map(|_| start()).collect();
        let Some(x) = newton.settles(start) else { continue };
        let new = |known: &Vec<f64>| known.iter().zip(&x).any(|(a, b)| (a - b).abs() > 1e-6);
        if x.iter().all(|x| *x == 0.0 || *x > 1e-3) && found.iter().all(new) {
            found.push(x);
        }
    }
    found.sort_by_key(|x| x.iter().filter(|x| **x == 0.0).count());
    found
}

/// What the script reads of the families.
fn models() -> String {
    let model = |(family, starts): &(Family, Vec<Vec<f64>>)| {
        let text = &family.text;
        let species: Vec<_> = text.species.iter().map(|(symbol, ..)| symbol).collect();
        let entry = json!({
            "name": family.name, "species": species, "parameters": text.parameters, "shorthand": text.shorthand,
            "rows": text.rows, "discrete": text.discrete, "starts": starts,
        });
        entry.to_string()
    };
    format!("[\n{}\n]\n", chosen().iter().map(model).collect::<Vec<_>>().join(",\n"))
}

#[test]
fn the_models_of_the_script_are_those_of_the_families() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/data/equilibria_models.json");
    if std::env::var_os("WRITE_MODELS").is_some() {
        std::fs::write(path, models()).expect("written");
    }
    let committed = std::fs::read_to_string(path).expect("a file");
    assert!(committed == models(), "the families have changed: see the head of equilibria_references.py");
}

/// Coordinates of every root by model, scenario and number: each within two neighbouring f64, or one.
fn references() -> BTreeMap<(String, String, usize), Point> {
    let mut table = csv::Reader::from_reader(include_str!("../data/equilibria_references.csv").as_bytes());
    let mut references: BTreeMap<_, Point> = BTreeMap::new();
    for row in table.records() {
        let row = row.expect("a row");
        let number = |i: usize| row[i].parse::<f64>().expect("a number");
        let key = (row[0].to_owned(), row[1].to_owned(), row[2].parse().expect("a number"));
        let (below, above) = (number(4), number(5));
        assert!(below == above || below.next_up() == above, "{key:?}: {below} and {above}");
        references.entry(key).or_default().push(Interval::new(below, above));
    }
    references
}

#[test]
fn rows_vanish_between_the_bounds() {
    let references = references();
    assert!(references.len() > 150, "{}", references.len());
    let families = examples().into_iter().map(|family| (family.name, family.text));
    let texts: BTreeMap<_, _> =
        families.chain(cases::all().iter().map(|case| (case.id.clone(), case.text()))).collect();
    for ((name, scenario, number), point) in &references {
        let read = texts[name].read();
        let scenario = if scenario.is_empty() { 0 } else { read.model.scenario(scenario).expect("a scenario") };
        let found = read.at(scenario, point);
        assert!(found.rows.iter().all(|row| row.contains_zero()), "{name} {number}: {:?}", found.rows);
    }
}

/// Enclosures have f64 ends, so what holds the root holds the f64 on both sides of it.
#[test]
fn the_enclosures_of_the_families_hold_the_roots() {
    let references = references();
    let mut held = 0;
    for family in examples().iter().filter(|family| family.complete) {
        for ((name, _, number), point) in &references {
            let holds = |enclosure: &Point| point.iter().zip(enclosure).all(|(x, hull)| x.subset_of(*hull));
            if *name == family.name {
                assert!(family.simple.iter().any(holds), "{name} {number}: {point:?}");
                held += 1;
            }
        }
    }
    assert!(held > 100, "{held}");
}

#[test]
fn published_coordinates_are_those_of_the_f64_models() {
    let references = references();
    for case in cases::all() {
        for (scenario, equilibria) in case.lists().enumerate() {
            let scenario = if scenario == 0 { "" } else { &case.scenarios[scenario - 1].name };
            let Some(point) = references.get(&(case.id.clone(), scenario.to_owned(), 1)) else { continue };
            let near = |x: &f64, bounds: &Interval| (x - bounds.mid()).abs() <= 1e-12 * x.abs();
            let listed = equilibria.iter().any(|e| e.x.iter().zip(point).all(|(x, bounds)| near(x, bounds)));
            assert!(listed, "{} {scenario}: {point:?}", case.id);
        }
    }
}

/// An enclosure with f64 ends holds the root just where it holds the f64 on both sides of it.
#[test]
fn the_search_encloses_every_reference_exactly_once_to_the_last_digits() {
    let families = examples().into_iter().map(|family| (family.name, family.text));
    let texts: BTreeMap<_, _> =
        families.chain(cases::all().iter().map(|case| (case.id.clone(), case.text()))).collect();
    let mut points: BTreeMap<(String, String), Vec<Point>> = BTreeMap::new();
    for ((name, scenario, _), point) in references() {
        points.entry((name, scenario)).or_default().push(point);
    }
    let mut checked = 0;
    for ((name, scenario), points) in points {
        let mut read = texts[&name].read();
        let number = if scenario.is_empty() { 0 } else { read.model.scenario(&scenario).expect("a scenario") };
        let found = solve(&mut read, number, Method::Chosen);
        for point in points {
            let holds = |e: &&Equilibrium| point.iter().zip(&e.enclosure).all(|(x, side)| x.subset_of(*side));
            let mut holding = found.list.iter().filter(holds);
            let (Some(one), None) = (holding.next(), holding.next()) else {
                panic!("{name} {scenario}: {point:?} is not in exactly one of {:?}", found.list);
            };
            for ((x, side), state) in point.iter().zip(&one.enclosure).zip(&one.state) {
                assert!(side.contains(*state), "{name} {scenario}: {state} {side:?}");
                // Two steps on either side of the f64 around the root.
                let narrow = steps(side.lo(), x.lo()).max(steps(x.hi(), side.hi())) <= 2;
                assert!(narrow, "{name} {scenario}: {x:?} {side:?}");
            }
            checked += 1;
        }
    }
    assert!(checked > 150, "{checked}");
}

/// How many f64 lie from one number up to another of its sign.
fn steps(from: f64, to: f64) -> u64 {
    from.to_bits().abs_diff(to.to_bits())
}
