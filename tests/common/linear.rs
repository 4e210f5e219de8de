//! Linear parts of models of the tests.
#![allow(clippy::expect_used, reason = "a test fails by panicking")]

use restpoint::analysis::equilibria::{Derivative, Equilibrium};
use restpoint::analysis::linearise::{Linearisation, Lineariser, Unavailable};
use restpoint::analysis::subject::Subject;
use restpoint::num::interval::Interval;

use super::solve::{Method, solve};
use super::text::{ModelText, Read};

/// An equilibrium with its linear part.
pub type Linear = (Equilibrium, Result<Linearisation, Unavailable>);

/// Every equilibrium of one scenario.
pub fn linear(read: &mut Read, scenario: usize) -> Vec<Linear> {
    let found = solve(read, scenario, Method::Chosen).list;
    let lineariser = lineariser(read, scenario);
    found.into_iter().map(|equilibrium| (equilibrium.clone(), lineariser.at(&equilibrium))).collect()
}

/// The linear part at a state of which it is known that the equations are exactly 0 there.
pub fn at(text: &ModelText, state: &[f64]) -> Linearisation {
    supposed(text, state, true)
}

/// The same, whether or not it is known.
pub fn supposed(text: &ModelText, state: &[f64], proven: bool) -> Linearisation {
    let mut read = text.read();
    let enclosure: Vec<Interval> = state.iter().map(|&x| Interval::point(x)).collect();
    let rates = read.at(0, &enclosure).rows;
    assert!(rates.iter().all(|rate| rate.contains_zero()), "{}: {state:?} is no equilibrium", text.yaml());
    let equilibrium = Equilibrium { state: state.to_vec(), enclosure, proven, derivative: Derivative::Exists };
    let linear = lineariser(&mut read, 0).at(&equilibrium);
    linear.unwrap_or_else(|why| panic!("{}: {why:?}", text.yaml()))
}

fn lineariser(read: &mut Read, scenario: usize) -> Lineariser {
    let bounds = read.system.bounds(&read.model).expect("bounds");
    let sides = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    Lineariser::new(&mut Subject::new(&read.model, &read.system.graph, &read.system.plans[scenario], sides))
}

/// The symbols of models that are made here.
fn symbol(i: usize) -> String {
    format!("x{i}")
}

/// Whether time runs or steps.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Time {
    Flow,
    Map,
}

/// The linear equations with this matrix, around the state where every abundance is 1.
pub fn around_one(matrix: &[f64], n: usize, time: Time) -> ModelText {
    let row = |i: usize| {
        let terms: Vec<String> = (0..n).map(|j| format!("({})*({} - 1)", matrix[i * n + j], symbol(j))).collect();
        let sum = terms.join(" + ");
        if time == Time::Map { format!("1 + {sum}") } else { sum }
    };
    let rows: Vec<(String, String)> = (0..n).map(|i| (symbol(i), row(i))).collect();
    let rows: Vec<(&str, &str)> = rows.iter().map(|(symbol, row)| (symbol.as_str(), row.as_str())).collect();
    ModelText { discrete: time == Time::Map, ..ModelText::new("linear", "3", &rows) }
}

/// P A P⁻¹ with whole P and P⁻¹ that leave no entry of P A P⁻¹ 0 by design; exact for entries of few bits.
pub fn mixed(matrix: &[f64], n: usize) -> Vec<f64> {
    let mut a = matrix.to_vec();
    // Adding c times row i to row j, and taking c times column j from column i, is such a change of basis.
    let mut shear = |i: usize, j: usize, c: f64| {
        (0..n).for_each(|k| a[j * n + k] += c * a[i * n + k]);
        (0..n).for_each(|k| a[k * n + i] -= c * a[k * n + j]);
    };
    for i in 1..n {
        shear(i - 1, i, 1.0);
        shear(i, i - 1, 2.0);
        shear(0, i, -1.0);
    }
    a
}
