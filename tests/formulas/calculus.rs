//! The graph's calculus against independent methods: derivatives against complex steps and Richardson differences, the
//! divided row times x against the row, lanes against scalars bit for bit, intervals around points.

use crate::common::{Source, graph, node};
use restpoint::expr::graph::divide::AtZero;
use restpoint::expr::graph::{NodeId, Variable};
use restpoint::expr::tape::Tape;
use restpoint::expr::tape::jet::Jet;
use restpoint::expr::tape::number::Number;
use restpoint::num::interval::Interval;

/// One formula for every function and operation, smooth or not, over states in (0, 3) and parameters in (0.2, 2).
const FORMULAS: &[&str] = &[
    "exp(-a*x)",
    "ln(x/b)",
    "log10(x + a*y)",
    "expm1(a*x)",
    "log1p(b*x*y)",
    "sqrt(x*y + 1)",
    "abs(x - y)",
    "min(a*x, y)",
    "max(x^2, b*y)",
    "tanh(a*x - y)",
    "clamp(x, a*y, a*y + 1)",
    "ramp(x, a*y, a*y + 2)",
    "logistic(x, a, b)",
    "holling1(x, a)*y",
    "holling2(x, a, b)*y",
    "holling3(x, a, b)*y",
    "x^p",
    "(1 + x/b)^(-p)",
    "x^3 - 2*x^-2",
    "a*x/(y + b*x)",
    "a*x*y/(1 + a*b*x + c*y)",
    "(x - y)/(x + a)",
    "x^2/(x^2 + b^2)*y - c*z*x",
    "a^x*y",
    "-x*(1 - x/b)*(x/c - 1)",
    "x*(1 - exp(-a*y))",
];

/// Independent derivative: Richardson extrapolation of central differences (Richardson 1911), error about 1e-10.
fn difference(f: &mut dyn FnMut(f64) -> f64, x: f64) -> f64 {
    let mut table = [0.0; 4];
    let mut step = 0.02;
    for (k, entry) in table.iter_mut().enumerate() {
        *entry = (f(x + step) - f(x - step)) / (2.0 * step);
        step /= 2.0;
        assert!(k < 4);
    }
    for order in 1..4usize {
        let scale = [1.0, 4.0, 16.0, 64.0][order];
        for k in (order..4).rev() {
            table[k] = (scale * table[k] - table[k - 1]) / (scale - 1.0);
        }
    }
    table[3]
}

fn point(source: &mut Source) -> ([f64; 3], [f64; 4]) {
    let state = std::array::from_fn(|_| source.between(0.3, 3.0));
    let parameters = std::array::from_fn(|_| source.between(0.3, 2.0));
    (state, parameters)
}

/// Whether a kink lies so near that a difference would straddle it.
fn near_kink(tape: &Tape, state: &[f64; 3], parameters: &[f64; 4]) -> bool {
    let wide = |v: &f64| Interval::new(v - 0.05, v + 0.05);
    let states: Vec<Interval> = state.iter().map(wide).collect();
    let parameters: Vec<Interval> = parameters.iter().map(wide).collect();
    !tape.start_gradient(&parameters).at(&states).smooth
}

#[test]
fn derivatives_of_every_function_match_differences() {
    let mut source = Source::new(1);
    let mut checked = 0;
    for text in FORMULAS {
        let mut graph = graph();
        let f = node(&mut graph, text);
        let variables = [
            Variable::State(0),
            Variable::State(1),
            Variable::Parameter(0),
            Variable::Parameter(1),
            Variable::Parameter(3),
        ];
        let mut outputs = vec![f];
        for variable in variables {
            let first = graph.derivative(f, variable);
            outputs.extend([first, graph.derivative(first, Variable::State(0))]);
        }
        let tape = Tape::new(&graph, &outputs);
        for _ in 0..40 {
            let (state, parameters) = point(&mut source);
            if near_kink(&tape, &state, &parameters) {
                continue;
            }
            let mut run = tape.start(&parameters);
            assert!(run.at(&state).defined, "{text}");
            let exact: Vec<f64> = run.outputs().copied().collect();
            for (k, variable) in variables.into_iter().enumerate() {
                let value = |output: usize, variable: Variable, v: f64| {
                    let (mut s, mut p) = (state, parameters);
                    match variable {
                        Variable::State(i) => s[i] = v,
                        Variable::Parameter(i) => p[i] = v,
                    }
                    let mut run = tape.start(&p);
                    run.at(&s);
                    *run.output(output)
                };
                let at = match variable {
                    Variable::State(i) => state[i],
                    Variable::Parameter(i) => parameters[i],
                };
                let first = difference(&mut |v| value(0, variable, v), at);
                let second = difference(&mut |v| value(1 + 2 * k, Variable::State(0), v), state[0]);
                let check = |found: f64, expected: f64, order: &str| {
                    let scale = 1.0 + expected.abs() + exact[0].abs();
                    assert!(
                        (found - expected).abs() < 2e-7 * scale,
                        "{order} of {text} by {variable:?} at {state:?} {parameters:?}: {found} and {expected}"
                    );
                };
                check(exact[1 + 2 * k], first, "derivative");
                check(exact[2 + 2 * k], second, "second derivative");
                checked += 2;
            }
        }
    }
    assert!(checked > 5_000, "{checked} comparisons");
}

#[test]
fn gradients_and_jets_agree_with_the_graph() {
    let mut source = Source::new(2);
    for text in FORMULAS {
        let mut graph = graph();
        let f = node(&mut graph, text);
        let mut outputs = vec![f];
        outputs.extend((0..3).map(|i| graph.derivative(f, Variable::State(i))));
        let along_x = outputs[1];
        let second = graph.derivative(along_x, Variable::State(0));
        outputs.extend([second, graph.derivative(second, Variable::State(0))]);
        let tape = Tape::new(&graph, &outputs);
        for _ in 0..50 {
            let (state, parameters) = point(&mut source);
            let mut run = tape.start(&parameters);
            run.at(&state);
            let mut gradient = tape.start_gradient(&parameters);
            gradient.at(&state);
            let jets: Vec<Jet<f64>> = parameters.iter().map(|p| Jet::constant(*p)).collect();
            let mut jet = tape.start(&jets);
            let line = |i: usize| Jet::line(state[i], f64::from(u8::from(i == 0)));
            jet.at(&[line(0), line(1), line(2)]);
            let close = |found: f64, expected: f64, what: &str| {
                assert!(
                    (found - expected).abs() <= 1e-11 * (1.0 + expected.abs()),
                    "{what} of {text} at {state:?}: {found} and {expected}"
                );
            };
            for i in 0..3 {
                let slope = gradient.gradient(0).map_or(0.0, |row| row[i]);
                close(slope, *run.output(1 + i), "gradient");
            }
            let Jet([value, first, half_second, sixth_third]) = jet.output(0).clone();
            close(value, *run.output(0), "value");
            close(first, *run.output(1), "first");
            close(2.0 * half_second, *run.output(4), "second");
            close(6.0 * sixth_third, *run.output(5), "third");
        }
    }
}

#[test]
fn enclosures_hold_values_and_gradients() {
    let mut source = Source::new(3);
    for text in FORMULAS {
        let mut graph = graph();
        let f = node(&mut graph, text);
        let mut outputs = vec![f];
        outputs.extend((0..3).map(|i| graph.derivative(f, Variable::State(i))));
        let tape = Tape::new(&graph, &outputs);
        for _ in 0..60 {
            let (low, parameters) = point(&mut source);
            let width = source.unit().powi(4);
            let high: Vec<f64> = low.iter().map(|v| v * (1.0 + width)).collect();
            let boxed: Vec<Interval> = low.iter().zip(&high).map(|(l, h)| Interval::new(*l, *h)).collect();
            let exact: Vec<Interval> = parameters.iter().map(|p| Interval::point(*p)).collect();
            let mut sweep = tape.start_gradient(&exact);
            sweep.at(&boxed);
            let mut run = tape.start(&parameters);
            for _ in 0..10 {
                let state: Vec<f64> =
                    low.iter().zip(&high).map(|(l, h)| source.between(*l, *h).clamp(*l, *h)).collect();
                run.at(&state);
                for k in 0..4 {
                    // One rounding a step is what a value may be off the true one, which is what an enclosure holds.
                    let slack = 1e-13 * (1.0 + run.output(k).abs());
                    let found = Interval::new(run.output(k) - slack, run.output(k) + slack);
                    assert!(!sweep.output(k).intersect(found).is_empty(), "{text} output {k} at {state:?}");
                    if k > 0 {
                        let slope = sweep.gradient(0).map_or(Interval::ZERO, |row| row[k - 1]);
                        assert!(
                            !slope.intersect(found).is_empty(),
                            "gradient {k} of {text} at {state:?}: {slope:?} {found:?}"
                        );
                    }
                }
            }
        }
    }
}

#[test]
fn lanes_equal_scalars_bit_for_bit() {
    let mut source = Source::new(4);
    for text in FORMULAS {
        let mut graph = graph();
        let f = node(&mut graph, text);
        let mut outputs = vec![f];
        outputs.extend((0..3).map(|i| graph.derivative(f, Variable::State(i))));
        let tape = Tape::new(&graph, &outputs);
        let points: Vec<_> = (0..150).map(|_| point(&mut source)).collect();
        let states: Vec<Vec<f64>> = (0..3).map(|i| points.iter().map(|p| p.0[i]).collect()).collect();
        let parameters: Vec<Vec<f64>> = (0..4).map(|i| points.iter().map(|p| p.1[i]).collect()).collect();
        let all: Vec<&[f64]> = states.iter().chain(&parameters).map(Vec::as_slice).collect();
        let mut draws = vec![vec![0.0; points.len()]; 4];
        let mut columns: Vec<&mut [f64]> = draws.iter_mut().map(Vec::as_mut_slice).collect();
        tape.lanes_of_draws().run(&all, &mut columns);
        let mut fixed = vec![vec![0.0; points.len()]; 4];
        let mut columns: Vec<&mut [f64]> = fixed.iter_mut().map(Vec::as_mut_slice).collect();
        tape.lanes_of_points(&points[0].1).run(&all[..3], &mut columns);
        for (at, (state, parameters)) in points.iter().enumerate() {
            for (lanes, parameters) in [(&draws, parameters), (&fixed, &points[0].1)] {
                let mut run = tape.start(parameters);
                run.at(state);
                for (k, lane) in lanes.iter().enumerate() {
                    assert_eq!(lane[at].to_bits(), run.output(k).to_bits(), "{text} output {k} at {state:?}");
                }
            }
        }
    }
}

/// Rows that vanish at x = 0, among them every quotient that needs a primitive of its own.
const DIVISIBLE: &[&str] = &[
    "a*x*(1 - x/b) - c*x*y/(1 + c*x)",
    "x*ln(b/x) - a*x",
    "(1 - exp(-a*x))*y",
    "(1 - (1 + x*a/b)^(-b))*y",
    "((1 + a*x)^p - 1)*y",
    "ln(1 + a*x)*y - b*x",
    "tanh(a*x)*y",
    "tanh(x + y) - tanh(y)",
    "(sqrt(1 + a*x) - 1)*y",
    "sqrt(b + x*y) - sqrt(b)",
    "exp(x*y + a) - exp(a)",
    "ln(b + x) - ln(b)",
    "log10(b + x) - log10(b)",
    "log1p(y + x) - log1p(y)",
    "min(a*x, b*x*y) - max(x, x^2)",
    "abs(a*x - x*y)",
    "x^2*y/(b + x^2)",
    "x^p*y",
    "sqrt(x)*x",
    "a*x/(y + b*x)*x",
    "y/(b + y) - y/(b + y + x)",
    "(b + x)^3 - b^3",
    "b^-2 - (b + x)^-2",
    "(b + x)^p - b^p",
    "x*y*ramp(y, a, a + 1)",
    "b/(b + x) - 1",
    "x*(y - a)*(b - x)^2",
];

#[test]
fn a_divided_row_times_x_is_the_row() {
    let mut source = Source::new(5);
    for text in DIVISIBLE {
        let mut graph = graph();
        let row = node(&mut graph, text);
        let division = graph.divide(row, 0);
        assert_eq!(division.zero, AtZero::Is(graph.zero()), "{text} at x = 0");
        let quotient = division.quotient.unwrap_or_else(|| panic!("{text} has a quotient"));
        let tape = Tape::new(&graph, &[row, quotient]);
        for k in 0..200 {
            let (mut state, parameters) = point(&mut source);
            state[0] = if k % 2 == 0 { state[0] } else { 10f64.powf(source.between(-6.0, 0.3)) };
            let mut run = tape.start(&parameters);
            assert!(run.at(&state).defined, "{text} at {state:?}");
            let (whole, per_capita) = (*run.output(0), *run.output(1));
            // The row itself may have lost digits to cancellation: what it lost is absolute.
            let scale = 4e-15 * (1.0 + state[1].abs()) * 40.0;
            assert!(
                (per_capita * state[0] - whole).abs() <= scale + 1e-12 * whole.abs(),
                "{text} at {state:?} {parameters:?}: {per_capita} x and {whole}"
            );
        }
    }
}

#[test]
fn a_divided_row_is_exact_and_smooth_at_zero() {
    // (1 − exp(−a x)) y / x → a y, tanh likewise, ((1 + a x)^p − 1) y / x → a p y, ln(1 + a x) y/x → a y, by hand.
    let check = |text: &str, expected: fn([f64; 3], [f64; 4]) -> f64| {
        let mut graph = graph();
        let row = node(&mut graph, text);
        let quotient = graph.divide(row, 0).quotient.unwrap_or_else(|| panic!("{text}"));
        let tape = Tape::new(&graph, &[quotient]);
        let (state, parameters) = ([0.0, 1.7, 1.0], [0.6, 1.3, 0.8, 2.5]);
        let mut run = tape.start(&parameters);
        assert!(run.at(&state).defined, "{text}");
        let expected = expected(state, parameters);
        assert!(
            (run.output(0) - expected).abs() <= 1e-15 * expected.abs() * 4.0,
            "{text}: {} and {expected}",
            run.output(0)
        );
        let around = [Interval::new(-1e-9, 1e-9), Interval::point(state[1]), Interval::point(state[2])];
        let mut enclosure = tape.start_gradient(&parameters.map(Interval::point));
        assert!(enclosure.at(&around).defined, "{text}");
        assert!(enclosure.output(0).contains(expected) && enclosure.output(0).width() < 1e-7, "{text}");
        assert!(enclosure.gradient(0).is_none_or(|row| row.iter().all(|slope| slope.mag() < 100.0)), "{text}");
    };
    check("(1 - exp(-a*x))*y", |[_, y, _], [a, ..]| a * y);
    check("tanh(a*x)*y", |[_, y, _], [a, ..]| a * y);
    check("((1 + a*x)^p - 1)*y", |[_, y, _], [a, _, _, p]| a * p * y);
    check("(1 - (1 + a*x)^(-p))*y", |[_, y, _], [a, _, _, p]| a * p * y);
    check("ln(1 + a*x)*y", |[_, y, _], [a, ..]| a * y);
    check("(sqrt(1 + a*x) - 1)*y", |[_, y, _], [a, ..]| a * y / 2.0);
    check("x*(1 - x/b)", |_, _| 1.0);
}

#[test]
fn what_a_row_is_at_zero() {
    let check = |text: &str, expected: Option<&str>| {
        let mut graph = graph();
        let row = node(&mut graph, text);
        let expected = expected.map(|text| node(&mut graph, text));
        let found = match graph.at_zero(row, 0) {
            AtZero::Is(node) => Some(node),
            _ => None,
        };
        assert_eq!(found, expected, "{text}");
    };
    check("x*ln(b/x)", Some("0"));
    check("x*ln(x)*ln(x)", Some("0"));
    check("x*(1/x)", None);
    check("x/x", None);
    check("a*x*y/(y + b*x)", Some("0"));
    check("a*y - b", Some("a*y - b"));
    check("max(0, x - b)", Some("max(0, -b)"));
    check("ln(x)", None);
    check("x*y/(x + x^2)", None);
    check("y*b/(b + x)", Some("y*b/b"));
    check("x^p", Some("0"));
    check("x^(p - 1)", None);
    check("exp(-x)*y", Some("y"));
    check("(x + y)/(a*x + y)", Some("1"));
    check("x/(y - b)", Some("0/(y - b)"));
    check("x*ln(x)/(1 + x*y)", Some("0"));
}

#[test]
fn saturation_is_recognised_and_tight() {
    use restpoint::expr::graph::Operation;
    let holds = |text: &str| {
        let mut graph = graph();
        let row = node(&mut graph, text);
        let nodes: Vec<NodeId> = graph.reachable(&[row]);
        nodes.iter().any(|node| matches!(graph.operation(*node), Operation::Saturation(_)))
    };
    for text in [
        "a*x/(1 + a*b*x)",
        "x/(x + b)",
        "x^2/(b^2 + x^2)",
        "a*x*y/(1 + b*x + c*y)",
        "a*x*y/(y + a*b*x)",
        "x/(1 + x/b)",
        "z*a*x/(1 + x*b + c*y - a)",
    ] {
        assert!(holds(text), "{text}");
    }
    for text in ["x/(b + y)", "(x - y)/(b + x)", "1/(1 + x)", "x/(b - x)"] {
        assert!(!holds(text), "{text}");
    }
    // 1/(1 + 1/x) over [1, 3] is [1/2, 3/4]; the plain quotient would give [1/4, 3/2].
    let mut graph = graph();
    let row = node(&mut graph, "x/(1 + x)");
    let tape = Tape::new(&graph, &[row]);
    let mut run = tape.start(&[Interval::ONE; 4]);
    run.at(&[Interval::new(1.0, 3.0), Interval::ONE, Interval::ONE]);
    assert!(run.output(0).lo() >= 0.499_999 && run.output(0).hi() <= 0.750_001, "{:?}", run.output(0));
}

#[test]
fn simplification_keeps_the_domain() {
    let same = |text: &str, expected: &str| {
        let mut graph = graph();
        assert_eq!(node(&mut graph, text), node(&mut graph, expected), "{text} = {expected}");
    };
    let differ = |text: &str, other: &str| {
        let mut graph = graph();
        assert_ne!(node(&mut graph, text), node(&mut graph, other), "{text} is not {other}");
    };
    same("x + 0", "x");
    same("x - x", "0");
    same("0*exp(x)", "0");
    same("a/a", "1");
    same("x*x*x", "x^3");
    same("(x^2)^3", "x^6");
    same("exp(x) - 1", "expm1(x)");
    same("1 - exp(-x)", "-expm1(-x)");
    same("ln(1 + x)", "log1p(x)");
    same("x^0.5", "sqrt(x)");
    same("2*3 + 0.5", "6.5");
    same("-(-x)", "x");
    same("x + (-y)", "x - y");
    same("x*y", "y*x");
    same("abs(x)", "x");
    differ("0*(1/x)", "0");
    differ("x/x", "1");
    differ("ln(x) - ln(x)", "0");
    differ("1/x - 1/x", "0");
    differ("0.1 + 0.2", "0.3");
    differ("1/3*3", "1");
    differ("x*x^-1", "1");
    differ("exp(ln(x))", "x");
}

/// Where both arguments of min merely touch, one branch has all values; the slope is still that of one side only.
#[test]
fn a_kink_touched_from_one_side_is_not_smooth() {
    let mut graph = graph();
    for (text, touching) in [("min(x, 2 - x)", 1.0), ("max(0, x - 1)", 1.0), ("abs(x - 1)", 1.0)] {
        let f = node(&mut graph, text);
        let tape = Tape::new(&graph, &[f]);
        let parameters = [Interval::ONE; 4];
        let mut run = tape.start_gradient(&parameters);
        for (x, smooth) in [
            (Interval::point(touching), false),
            (Interval::new(touching - 0.5, touching), false),
            (Interval::new(touching, touching + 0.5), false),
            (Interval::new(touching - 0.5, touching - 0.25), true),
            (Interval::new(touching + 0.25, touching + 0.5), true),
        ] {
            let domain = run.at(&[x, Interval::ONE, Interval::ONE]);
            assert!(domain.defined && domain.smooth == smooth, "{text} on {x:?}: {domain:?}");
        }
    }
}
