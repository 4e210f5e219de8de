//! Eigenvalues: closed forms and our own iteration against the library's, and what vectors and proofs cost.
//!
//! The general Schur call is what one would make without a closed form: bounded, on a matrix of any order. The library's own
//! eigenvalues have no bound, but a closed form of their own for order two.
#![allow(clippy::disallowed_methods, reason = "the calls that may run for ever are what is compared with")]
#![allow(clippy::print_stdout, clippy::unwrap_used, reason = "a benchmark prints its table or fails")]

mod common;

use std::hint::black_box;

use common::{Contender, best, table};
use nalgebra::{Complex, DMatrix, Schur};
use restpoint::num::eigen::{eigenvalues, spectrum, three, two};
use restpoint::num::interval::Interval;
use restpoint::num::random::Source;
use restpoint::num::verified::half_plane;

fn main() {
    for n in [2, 3, 5, 20, 100, 500] {
        of_order(n);
    }
}

fn random(n: usize, count: usize) -> Vec<Vec<f64>> {
    let mut source = Source::new(n as u64);
    (0..count).map(|_| (0..n * n).map(|_| source.between(-1.0, 1.0)).collect()).collect()
}

fn sum(values: &[Complex<f64>]) -> f64 {
    values.iter().map(|z| z.re).sum()
}

fn schur(entries: &[f64], n: usize) -> f64 {
    let matrix = DMatrix::from_row_slice(n, n, entries);
    sum(Schur::try_new(matrix, f64::EPSILON, 30 * n).unwrap().complex_eigenvalues().as_slice())
}

fn in_place(entries: &[f64]) -> f64 {
    match *entries {
        [a, b, c, d] => sum(&two(&[a, b, c, d]).unwrap()),
        [a, b, c, d, e, f, g, h, i] => sum(&three(&[a, b, c, d, e, f, g, h, i]).unwrap()),
        _ => f64::NAN,
    }
}

/// Nanoseconds a matrix.
fn of_order(n: usize) {
    let matrices = random(n, if n <= 20 { 64 } else { 1 });
    let points: Vec<Vec<Interval>> = matrices.iter().map(|m| m.iter().map(|&x| Interval::point(x)).collect()).collect();
    let each = |call: &dyn Fn(&[f64]) -> f64| matrices.iter().map(|m| call(m)).sum::<f64>();
    let count = matrices.len();
    let mut contenders = vec![
        Contender::new("a general Schur call", count, || each(&|m| schur(m, n))),
        Contender::new("the library's eigenvalues", count, || {
            each(&|m| sum(DMatrix::from_row_slice(n, n, m).complex_eigenvalues().as_slice()))
        }),
        Contender::new("eigenvalues", count, || each(&|m| sum(&eigenvalues(m, n).unwrap()))),
    ];
    if let 2 | 3 = n {
        contenders.push(Contender::new("the same, no list made", count, || each(&|m| in_place(m))));
    }
    if n <= 100 {
        contenders.push(Contender::new("with vectors", count, || each(&|m| sum(&spectrum(m, n).unwrap().values))));
        contenders.push(Contender::new("proof", count, || {
            points.iter().map(|m| black_box(half_plane(m, n)).map_or(0, |counts| counts.below) as f64).sum()
        }));
    }
    let rounds = if n < 500 { 5 } else { 2 };
    let times = best(&mut contenders, rounds, 20);
    let goals = if n <= 3 { ["", "", "", "0.1", "", ""] } else { ["", "", "1", "", "", ""] };
    table(&format!("order {n}"), &contenders, &times, &goals);
}
