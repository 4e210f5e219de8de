//! Runs the certified search on a model of the tests.

use restpoint::analysis::equilibria::{Budget, Equilibria, OneByOne, Problem, balance, find};

use super::text::Read;

/// Everything found in one scenario, within `boxes` boxes a face.
pub fn solve(read: &mut Read, scenario: usize, boxes: usize) -> Equilibria {
    let bounds = read.system.bounds(&read.model).expect("bounds");
    let sides: Vec<[f64; 2]> = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    let plan = read.system.plans[scenario].clone();
    let graph = &mut read.system.graph;
    let rows = balance(graph, &plan.rows, &read.model.time);
    let problem = Problem { rows: &rows, values: &plan.values, sides: &sides };
    find(graph, &problem, &Budget { boxes, stop: &|| false, workers: &OneByOne, observer: None })
}
