//! Runs the searches on a model of the tests.
#![allow(clippy::expect_used, reason = "a test fails by panicking")]

use restpoint::analysis::equilibria::{Budget, Equilibria, OneByOne, Problem, all, balance, find};
use restpoint::num::interval::Interval;

use super::text::Read;

/// Which search.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// Branch and prune on every face.
    Certified,
    /// Whatever suits the model.
    Chosen,
}

/// Everything found in one scenario, one job after another.
pub fn solve(read: &mut Read, scenario: usize, method: Method) -> Equilibria {
    solve_within(read, scenario, method, &Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None })
}

/// Everything found in one scenario within a budget.
pub fn solve_within(read: &mut Read, scenario: usize, method: Method, budget: &Budget<'_>) -> Equilibria {
    let bounds = read.system.bounds(&read.model).expect("bounds");
    let sides: Vec<[f64; 2]> = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    let plan = read.system.plans[scenario].clone();
    let graph = &mut read.system.graph;
    let rows = balance(graph, &plan.rows, &read.model.time);
    let problem = Problem { rows: &rows, values: &plan.values, sides: &sides };
    match method {
        Method::Certified => find(graph, &problem, budget),
        Method::Chosen => all(graph, &problem, budget),
    }
}

/// Whether two boxes have a point in common.
pub fn meet(a: &[Interval], b: &[Interval]) -> bool {
    a.iter().zip(b).all(|(a, b)| !a.intersect(*b).is_empty())
}
