//! Formulas that are short to write and large written out: the graph stays small, and its values right.

use crate::common::{graph, node};
use restpoint::expr::graph::divide::AtZero;
use restpoint::expr::graph::{Graph, NodeId};
use restpoint::expr::tape::Tape;
use restpoint::num::interval::Interval;

/// More nodes than this for one short formula, and something was written out.
const SMALL: usize = 1000;

fn enclosed(graph: &Graph, node: NodeId, x: f64) -> Interval {
    let tape = Tape::new(graph, &[node]);
    let mut run = tape.start(&[Interval::ONE; 4]);
    assert!(run.at(&[Interval::point(x), Interval::ONE, Interval::ONE]).defined);
    *run.output(0)
}

#[test]
fn a_high_power_divides_into_few_nodes_with_the_value_of_the_geometric_sum() {
    // ((1 + x)^n - 1)/x is a whole number at a whole x, and below 2^53 nothing on the way to it is rounded.
    let check = |n: i32, x: i32| {
        let mut graph = graph();
        let row = node(&mut graph, &format!("(1 + x)^{n} - 1"));
        let quotient = graph.divide(row, 0).quotient.unwrap_or(row);
        let exact = (i64::from(x + 1).pow(n.cast_unsigned()) - 1) / i64::from(x);
        assert_eq!(enclosed(&graph, quotient, f64::from(x)), Interval::point(exact as f64), "n = {n}, x = {x}");
    };
    for n in 2..=52 {
        check(n, 1);
    }
    for n in 2..=33 {
        check(n, 2);
    }
}

#[test]
fn a_power_of_powers_stays_small() {
    let mut graph = graph();
    let row = node(&mut graph, "(((((1 + x)^64)^64)^64)^64)^64 - 1");
    let division = graph.divide(row, 0);
    assert!(matches!(division.zero, AtZero::Is(start) if graph.constant_value(start) == Some(0.0)));
    assert!(division.quotient.is_some());
    assert!(graph.len() < SMALL, "{} nodes", graph.len());
}

#[test]
fn powers_are_not_merged_beyond_the_largest_exponent() {
    let mut graph = graph();
    let half = "((((x^64)^64)^64)^64)^64";
    for (text, exponent) in
        [(format!("{half}*{half}"), 2f64.powi(31)), (format!("{half}*({half}*x)"), 2f64.powi(31) + 1.0)]
    {
        let row = node(&mut graph, &text);
        let x = 1.0 - 1e-8;
        let by_logarithm = (Interval::point(x).ln(&mut true) * Interval::point(exponent)).exp();
        let found = enclosed(&graph, row, x);
        assert!(!found.intersect(by_logarithm).is_empty(), "{text}: {found:?}, not {by_logarithm:?}");
    }
}

#[test]
fn a_product_of_shared_factors_is_not_taken_apart_without_end() {
    let mut graph = graph();
    let (mut product, a) = (node(&mut graph, "x*y"), node(&mut graph, "a"));
    for _ in 0..60 {
        let inner = graph.mul(a, product);
        product = graph.mul(product, inner);
    }
    let one = graph.one();
    let den = graph.add(one, product);
    let share = graph.div(product, den);
    assert_eq!(enclosed(&graph, share, 1.0), Interval::point(0.5));
    assert!(graph.len() < SMALL, "{} nodes", graph.len());
}
