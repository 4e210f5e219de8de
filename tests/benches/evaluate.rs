//! Evaluation of a Rosenzweig–MacArthur model with harvest (Rosenzweig & MacArthur 1963) and of a ten-species web:
//! tapes against the same right-hand side written by hand, in the same run.

#![allow(clippy::print_stdout, clippy::panic, reason = "a benchmark prints its table, and fails by panicking")]
#![allow(clippy::format_push_string, reason = "building ten formulas is not what is timed")]
#![allow(clippy::inline_always, reason = "the limit to compare with is inlined code")]

mod common;

use common::{Contender, best, table};
use restpoint::expr::graph::{Graph, NodeId};
use restpoint::expr::parse::parse;
use restpoint::expr::tape::Tape;
use restpoint::num::interval::Interval;

const POINTS: usize = 64 * 16;
const PARAMETERS: [&str; 8] = ["r", "K", "a", "h", "e", "m", "q", "E"];
const VALUES: [f64; 8] = [0.9, 900.0, 0.012, 0.02, 0.25, 0.3, 0.35, 1.0];

fn main() {
    println!("Ratios are to the first line of each table; times are the best of several rounds in turn.");
    rosenzweig_macarthur();
    web();
}

/// The rows of formulas over the given names.
fn rows(states: &[String], parameters: &[String], formulas: &[String]) -> (Graph, Vec<NodeId>) {
    let mut graph = Graph::new(states.len(), vec![Interval::new(f64::MIN_POSITIVE, f64::MAX); parameters.len()]);
    let rows = formulas.iter().map(|text| {
        let (expr, slips) = parse(text);
        assert!(slips.is_empty(), "{text}: {slips:?}");
        graph.read(&expr, &mut |graph, name| {
            if let Some(i) = states.iter().position(|state| state == name) {
                return graph.state(i);
            }
            let i = parameters.iter().position(|parameter| parameter == name);
            graph.parameter(i.unwrap_or_else(|| panic!("unknown {name}")))
        })
    });
    let rows = rows.collect();
    (graph, rows)
}

fn owned(names: &[&str]) -> Vec<String> {
    names.iter().map(ToString::to_string).collect()
}

#[inline(never)]
fn by_hand(v: &[f64; 8], [n, p]: [f64; 2]) -> [f64; 2] {
    let [r, k, a, h, e, m, q, effort] = *v;
    let eaten = a * n * p / (1.0 + a * h * n);
    [r * n * (1.0 - n / k) - eaten - q * effort * n, e * eaten - m * p]
}

#[inline(always)]
fn by_hand_inlined(v: &[f64; 8], [n, p]: [f64; 2]) -> [f64; 2] {
    let [r, k, a, h, e, m, q, effort] = *v;
    let eaten = a * n * p / (1.0 + a * h * n);
    [r * n * (1.0 - n / k) - eaten - q * effort * n, e * eaten - m * p]
}

/// The inlined right-hand side over whole columns, for the widest vector instructions at hand.
#[allow(unsafe_code, reason = "calls a function compiled for a processor feature, after detecting it")]
fn limit(n: &[f64], p: &[f64], first: &mut [f64], second: &mut [f64]) {
    #[cfg(target_arch = "x86_64")]
    if is_x86_feature_detected!("avx2") {
        // SAFETY: avx2 was detected just now.
        return unsafe { limit_avx2(n, p, first, second) };
    }
    columns(n, p, first, second);
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx2")]
fn limit_avx2(n: &[f64], p: &[f64], first: &mut [f64], second: &mut [f64]) {
    columns(n, p, first, second);
}

#[inline(always)]
fn columns(n: &[f64], p: &[f64], first: &mut [f64], second: &mut [f64]) {
    for (((n, p), first), second) in n.iter().zip(p).zip(first).zip(second) {
        [*first, *second] = by_hand_inlined(&VALUES, [*n, *p]);
    }
}

#[inline(never)]
fn by_hand_with_jacobian(v: &[f64; 8], [n, p]: [f64; 2]) -> [f64; 6] {
    let [r, k, a, h, e, m, q, effort] = *v;
    let den = 1.0 + a * h * n;
    let intake = a * n / den;
    let slope = a * p / (den * den);
    [
        r * n * (1.0 - n / k) - intake * p - q * effort * n,
        e * intake * p - m * p,
        r * (1.0 - 2.0 * n / k) - slope - q * effort,
        -intake,
        e * slope,
        e * intake - m,
    ]
}

fn points(count: usize, which: usize) -> Vec<f64> {
    (0..count).map(|i| 5.0 + ((i * (7 + 4 * which)) % count) as f64 * 0.7).collect()
}

fn rosenzweig_macarthur() {
    let formulas = owned(&["r*N*(1 - N/K) - a*N*P/(1 + a*h*N) - q*E*N", "e*a*N*P/(1 + a*h*N) - m*P"]);
    let (mut graph, rows) = rows(&owned(&["N", "P"]), &owned(&PARAMETERS), &formulas);
    let tape = Tape::new(&graph, &rows);
    let jacobian = graph.jacobian(&rows);
    let with_jacobian = Tape::new(&graph, &[rows.clone(), jacobian].concat());
    println!("\noperations: {} for the rows, {} with their Jacobian", tape.operations(), with_jacobian.operations());
    let (n, p) = (points(POINTS, 0), points(POINTS, 1));
    let mut hand_out = vec![[0.0; 2]; POINTS];
    let mut inlined_out = [vec![0.0; POINTS], vec![0.0; POINTS]];
    let mut lane_out = [vec![0.0; POINTS], vec![0.0; POINTS]];
    let mut lanes = tape.lanes_of_points(&VALUES);
    let mut scalar = tape.start(&VALUES);
    let mut contenders = [
        Contender::new("by hand, called once per point", POINTS, || {
            for i in 0..POINTS {
                hand_out[i] = by_hand(&VALUES, [n[i], p[i]]);
            }
            hand_out[17][0]
        }),
        Contender::new("by hand, inlined and vectorised (the limit)", POINTS, || {
            let [first, second] = &mut inlined_out;
            limit(&n, &p, first, second);
            first[17]
        }),
        Contender::new("tape, 64 lanes", POINTS, || {
            let [first, second] = &mut lane_out;
            lanes.run(&[&n, &p], &mut [first, second]);
            first[17]
        }),
        Contender::new("tape, scalar", POINTS, || {
            let mut sum = 0.0;
            for i in 0..POINTS {
                scalar.at(&[n[i], p[i]]);
                sum += scalar.output(0);
            }
            sum
        }),
    ];
    let times = best(&mut contenders, 120, 2);
    table("Rosenzweig–MacArthur with harvest, rows", &contenders, &times, &["", "", "1x", "15x"]);
    drop(contenders);
    with_derivatives(&with_jacobian, &tape, &n, &p);
}

fn with_derivatives(with_jacobian: &Tape, rows: &Tape, n: &[f64], p: &[f64]) {
    let mut hand_out = vec![[0.0; 6]; POINTS];
    let mut lane_out = vec![vec![0.0; POINTS]; 6];
    let mut lanes = with_jacobian.lanes_of_points(&VALUES);
    let mut gradient = rows.start_gradient(&VALUES);
    let mut interval = rows.start_gradient(&VALUES.map(Interval::point));
    let boxes: Vec<[Interval; 2]> =
        (0..POINTS).map(|i| [n[i], p[i]].map(|x| Interval::new(x * 0.99, x * 1.01))).collect();
    let mut contenders = [
        Contender::new("rows and Jacobian by hand, once per point", POINTS, || {
            for i in 0..POINTS {
                hand_out[i] = by_hand_with_jacobian(&VALUES, [n[i], p[i]]);
            }
            hand_out[17][0]
        }),
        Contender::new("tape of rows and Jacobian, 64 lanes", POINTS, || {
            let mut columns: Vec<&mut [f64]> = lane_out.iter_mut().map(Vec::as_mut_slice).collect();
            lanes.run(&[n, p], &mut columns);
            columns[0][17]
        }),
        Contender::new("forward gradient, scalar", POINTS, || {
            let mut sum = 0.0;
            for i in 0..POINTS {
                gradient.at(&[n[i], p[i]]);
                sum += gradient.output(0);
            }
            sum
        }),
        Contender::new("forward gradient, intervals", POINTS, || {
            let mut sum = 0.0;
            for state in &boxes {
                interval.at(state);
                sum += interval.output(0).lo();
            }
            sum
        }),
    ];
    let times = best(&mut contenders, 120, 2);
    table("with the exact Jacobian", &contenders, &times, &["", "2.2x", "", "1000 ns"]);
}

/// A ten-species web: two resources with logistic growth, and eight consumers that each eat the two species before
/// them with a shared type II response.
fn web() {
    const N: usize = 10;
    let states: Vec<String> = (0..N).map(|i| format!("x{i}")).collect();
    let mut rates: Vec<String> =
        (0..N).map(|i| if i < 2 { format!("r*x{i}*(1 - x{i}/K)") } else { format!("-m*x{i}") }).collect();
    for i in 2..N {
        let (b, c) = (i - 2, i - 1);
        let shared = format!("(1 + a*h*x{b} + a*h*x{c})");
        rates[b] += &format!(" - a*x{b}*x{i}/{shared}");
        rates[c] += &format!(" - a*x{c}*x{i}/{shared}");
        rates[i] += &format!(" + e*(a*x{b}*x{i}/{shared} + a*x{c}*x{i}/{shared})");
    }
    let names = owned(&["r", "K", "a", "h", "e", "m"]);
    let values = [0.9, 900.0, 0.012, 0.02, 0.25, 0.3];
    let (graph, rows) = rows(&states, &names, &rates);
    let tape = Tape::new(&graph, &rows);
    println!("\noperations of the ten-species web: {}", tape.operations());
    let columns: Vec<Vec<f64>> = (0..N).map(|i| points(POINTS, i)).collect();
    let inputs: Vec<&[f64]> = columns.iter().map(Vec::as_slice).collect();
    let mut hand_out = vec![[0.0; N]; POINTS];
    let mut lane_out = vec![vec![0.0; POINTS]; N];
    let mut lanes = tape.lanes_of_points(&values);
    let mut contenders = [
        Contender::new("by hand, called once per point", POINTS, || {
            for i in 0..POINTS {
                hand_out[i] = web_by_hand(&values, std::array::from_fn(|k| columns[k][i]));
            }
            hand_out[17][0]
        }),
        Contender::new("tape, 64 lanes", POINTS, || {
            let mut out: Vec<&mut [f64]> = lane_out.iter_mut().map(Vec::as_mut_slice).collect();
            lanes.run(&inputs, &mut out);
            out[0][17]
        }),
    ];
    let times = best(&mut contenders, 120, 2);
    table("ten-species web, type II", &contenders, &times, &["", "1.1x"]);
}

#[inline(never)]
fn web_by_hand(v: &[f64; 6], x: [f64; 10]) -> [f64; 10] {
    let [r, k, a, h, e, m] = *v;
    let mut out: [f64; 10] = std::array::from_fn(|i| if i < 2 { r * x[i] * (1.0 - x[i] / k) } else { -m * x[i] });
    for i in 2..10 {
        let (b, c) = (i - 2, i - 1);
        let rate = a * x[i] / (1.0 + a * h * x[b] + a * h * x[c]);
        out[b] -= rate * x[b];
        out[c] -= rate * x[c];
        out[i] += e * rate * (x[b] + x[c]);
    }
    out
}
