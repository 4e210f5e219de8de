//! Constraint propagation never loses a root: rows are made to vanish at a random point of the box, and the point must
//! survive every sweep.

use crate::common::{Source, graph, node};
use restpoint::expr::tape::Tape;
use restpoint::expr::tape::propagate::Sweep;
use restpoint::num::interval::Interval;

/// Every operation that can be inverted, alone and shared.
const ROWS: &[&str] = &[
    "x + y*z",
    "x - y - z*x",
    "x*y - z",
    "x/(y + 0.1) - z",
    "(x - 1)^2 + y",
    "(x - 1)^3 - y*z",
    "x^-2 + y",
    "(x + 0.1)^p - y",
    "exp(x - y) + z",
    "ln(x + 0.1) - y",
    "log10(x + 0.1)*z",
    "expm1(x - 1)*y",
    "log1p(x)*y - z",
    "sqrt(x)*y",
    "abs(x - y) - z",
    "tanh(x - y) + z",
    "min(x, y) - z",
    "max(x, y)*z",
    "a*x*y/(1 + b*x + c*z)",
    "x^2/(x^2 + b^2) - y",
    "ramp(x, a, a + 1)*y",
    "clamp(x, y, y + z)",
    "x*(1 - x/b) - a*x*y/(1 + c*x)",
    "(1 - exp(-a*x))*y - z",
];

#[test]
fn a_root_survives_every_sweep() {
    let mut source = Source::new(11);
    let mut cut = 0;
    for (first, text) in ROWS.iter().enumerate() {
        let other = ROWS[(first * 7 + 3) % ROWS.len()];
        let mut graph = graph();
        let rows = [node(&mut graph, text), node(&mut graph, other)];
        // The levels that the rows take at the point are parameters of the test, as enclosures.
        let values = Tape::new(&graph, &rows);
        for _ in 0..400 {
            let parameters: Vec<Interval> = (0..4).map(|_| Interval::point(source.between(0.3, 2.0))).collect();
            let point: Vec<f64> = (0..3).map(|_| source.between(0.0, 2.0)).collect();
            let exact: Vec<Interval> = point.iter().map(|&x| Interval::point(x)).collect();
            let mut run = values.start(&parameters);
            if !run.at(&exact).defined {
                continue;
            }
            let levels = [*run.output(0), *run.output(1)];
            cut += usize::from(survives(&mut source, [text, other], &parameters, &point, levels));
        }
    }
    assert!(cut > 4_000, "boxes were cut {cut} times");
}

/// Whether sweeps shrank a random box around the point; they must leave the point in it.
fn survives(
    source: &mut Source,
    texts: [&str; 2],
    parameters: &[Interval],
    point: &[f64],
    levels: [Interval; 2],
) -> bool {
    let mut all = parameters.to_vec();
    all.extend(levels);
    let mut graph = restpoint::expr::graph::Graph::new(3, all.clone());
    let mut rows = Vec::new();
    for (k, text) in texts.into_iter().enumerate() {
        let row = node(&mut graph, text);
        let level = graph.parameter(4 + k);
        rows.push(graph.sub(row, level));
    }
    let tape = Tape::new(&graph, &rows);
    let side = |&x: &f64, source: &mut Source| {
        let (below, above) = (source.unit().powi(2) * 3.0, source.unit().powi(2) * 3.0);
        Interval::new((x - below).max(0.0), x + above)
    };
    let mut region: Vec<Interval> = point.iter().map(|x| side(x, source)).collect();
    let whole = region.clone();
    let mut propagation = tape.start_propagation(&all);
    for _ in 0..4 {
        let swept = propagation.sweep(&mut region);
        assert_ne!(swept, Sweep::Empty, "{texts:?} at {point:?} in {whole:?}");
        let inside = region.iter().zip(point).all(|(side, &x)| side.contains(x));
        assert!(inside, "{texts:?}: {point:?} was cut off: {region:?} from {whole:?}");
    }
    region != whole
}
