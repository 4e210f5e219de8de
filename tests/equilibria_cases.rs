//! The certified search against the published models of `tests/cases`: it misses no equilibrium and reports none that is
//! false.

mod common;

use common::cases::{Case, Equilibrium, all};
use restpoint::analysis::equilibria::{Budget, Equilibria, OneByOne, Problem, balance, find};
use restpoint::num::interval::Interval;

/// How near a found state must be to a published one, relative to each coordinate's size: the parameters are rounded to
/// f64, which moves a root by its condition; a double root by the square root of that, a triple one by the cube root.
fn tolerance(equilibrium: &Equilibrium) -> f64 {
    match equilibrium.multiplicity {
        0 | 1 => 1e-9,
        2 => 1e-7,
        _ => 2e-5,
    }
}

fn search(case: &Case) -> Vec<Equilibria> {
    let mut read = case.text().read();
    let bounds = read.system.bounds(&read.model).expect("bounds");
    let sides: Vec<[f64; 2]> = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    let plans = read.system.plans.clone();
    let solve = |plan: &restpoint::model::system::Plan| {
        let graph = &mut read.system.graph;
        let rows = balance(graph, &plan.rows, &read.model.time);
        let problem = Problem { rows: &rows, values: &plan.values, sides: &sides };
        find(graph, &problem, &Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None })
    };
    plans.iter().map(solve).collect()
}

fn near(found: &[f64], published: &Equilibrium) -> bool {
    let off = tolerance(published);
    let scale = published.x.iter().fold(0.0f64, |m, x| m.max(x.abs()));
    found.iter().zip(&published.x).all(|(a, b)| (a - b).abs() <= off * b.abs().max(1e-3 * scale).max(1e-12))
}

#[test]
fn report() {
    for case in all() {
        if case.id.starts_with("C12") {
            continue;
        }
        let start = std::time::Instant::now();
        let found = search(&case);
        let ms = start.elapsed().as_secs_f64() * 1e3;
        for (scenario, (equilibria, published)) in found.iter().zip(case.lists()).enumerate() {
            let missed: Vec<_> = published
                .iter()
                .filter(|p| !equilibria.list.iter().any(|e| near(&e.state, p)))
                .map(|p| {
                    (
                        &p.x,
                        p.multiplicity,
                        p.linear_type.as_str(),
                        equilibria.unresolved.iter().any(|u| {
                            u.region.iter().zip(&p.x).all(|(s, x)| {
                                let w = 1e-6 * x.abs().max(1e-6);
                                s.intersect(Interval::new(x - w, x + w)) != Interval::EMPTY
                            })
                        }),
                    )
                })
                .collect();
            let extra: Vec<_> = equilibria
                .list
                .iter()
                .filter(|e| !published.iter().any(|p| near(&e.state, p)))
                .map(|e| &e.state)
                .collect();
            println!(
                "{} [{scenario}] {} of {} complete {} above {} boxes {} ms {ms:.2}",
                case.id,
                equilibria.list.len(),
                published.len(),
                equilibria.complete,
                equilibria.none_above,
                equilibria.boxes
            );
            if !missed.is_empty() {
                println!("    missed {missed:?}");
            }
            if !extra.is_empty() {
                println!("    extra {extra:?}");
            }
            for u in equilibria.unresolved.iter().take(4) {
                println!("    ?? {:?} {:?}", u.probably, u.region.iter().map(|s| (s.lo(), s.hi())).collect::<Vec<_>>());
            }
            if equilibria.unresolved.len() > 4 {
                println!("    ... {}", equilibria.unresolved.len());
            }
        }
    }
}
