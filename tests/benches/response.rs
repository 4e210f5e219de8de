//! A branch of a Rosenzweig–MacArthur model with harvest followed over an effort, with types: against the same steps
//! written by hand for this one model, in the same run; and the whole picture.

#![allow(clippy::print_stdout, clippy::panic, reason = "a benchmark prints its table, and fails by panicking")]
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "a benchmark fails by panicking")]

mod common;

use common::{Contender, best, table};
use restpoint::analysis::equilibria::{Budget, Equilibrium, OneByOne, all};
use restpoint::analysis::prepare::Prepared;
use restpoint::analysis::response::{Control, respond};
use restpoint::analysis::subject::Subject;
use restpoint::model::ParameterId;
use restpoint::model::load::{NoFiles, load};

const MODEL: &str = "
title: prey and predator
time: yr
species: {N: {upper: 1500}, P: {upper: 400}}
parameters: {r: 0.9, K: 900, a: 0.012, h: 0.02, e: 0.25, m: 0.3, q: 0.35, E: {value: 0.5, range: [0, 2]}}
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
    let control = Control { parameter: ParameterId(EFFORT), from: 0.0, to: 2.0, present: 0.5 };
    let mut branches = subject.clone();
    let mut points = 0;
    let mut response = respond(&mut branches, &control, &list, &budget, &mut |_| ());
    for branch in &response.branches {
        points += branch.points.len();
    }
    println!("\n{} branches of {points} points, {} thresholds", response.branches.len(), response.thresholds.len());
    let mut contenders = [
        Contender::new("500 steps by hand, with types", STEPS, by_hand),
        Contender::new("branches with types and thresholds, a point", points, || {
            let stopping = std::cell::Cell::new(0.0);
            let mut told =
                |so_far: &restpoint::analysis::response::Response| stopping.set(so_far.branches.len() as f64);
            let none = Budget { boxes: 0, ..Budget { boxes: 0, stop: &|| false, workers: &OneByOne, observer: None } };
            response = respond(&mut subject.clone(), &control, &list, &none, &mut told);
            stopping.get()
        }),
        Contender::new("the whole picture, proved, a point", points, || {
            respond(&mut subject.clone(), &control, &list, &budget, &mut |_| ()).branches.len() as f64
        }),
    ];
    let times = best(&mut contenders, 20, 5);
    table("a control varied", &contenders, &times, &["", "", ""]);
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
