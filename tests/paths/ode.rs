//! Integrators: the order conditions of their coefficients, closed forms, and references that `tests/data/paths.py` made.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

use crate::common::references::reference;
use restpoint::num::dense::inverse;
use restpoint::num::ode::lanes::{Batch, LaneFlow, LaneStepper, WIDTH};
use restpoint::num::ode::stepper::{Method, Stepper};
use restpoint::num::ode::{Closures, Flow, Stopped, Tolerance, dormand_prince, rosenbrock};

type Matrix = Vec<Vec<f64>>;

fn product(a: &Matrix, b: &Matrix) -> Matrix {
    a.iter().map(|row| (0..b[0].len()).map(|j| row.iter().zip(b).map(|(x, b)| x * b[j]).sum()).collect()).collect()
}

fn ones(a: &Matrix) -> Vec<f64> {
    a.iter().map(|row| row.iter().sum()).collect()
}

fn times(a: &Matrix, v: &[f64]) -> Vec<f64> {
    a.iter().map(|row| row.iter().zip(v).map(|(a, v)| a * v).sum()).collect()
}

fn each(v: &[f64], w: &[f64]) -> Vec<f64> {
    v.iter().zip(w).map(|(v, w)| v * w).collect()
}

fn dot(v: &[f64], w: &[f64]) -> f64 {
    each(v, w).iter().sum()
}

/// Values of the elementary weights of all trees up to an order, each with what it must be (Butcher 1963); `a` stands at
/// nodes with several branches, `b` at those with one (for an explicit method they are the same).
fn conditions(weights: &[f64], a: &Matrix, b: &Matrix, order: usize) -> Vec<(f64, f64)> {
    let (c, d) = (ones(a), ones(b));
    let c2 = each(&c, &c);
    let mut all = vec![(1, weights.iter().sum(), 1.0), (2, dot(weights, &d), 1.0 / 2.0)];
    all.push((3, dot(weights, &c2), 1.0 / 3.0));
    all.push((3, dot(weights, &times(b, &d)), 1.0 / 6.0));
    all.push((4, dot(weights, &each(&c2, &c)), 1.0 / 4.0));
    all.push((4, dot(weights, &each(&c, &times(a, &d))), 1.0 / 8.0));
    all.push((4, dot(weights, &times(b, &c2)), 1.0 / 12.0));
    all.push((4, dot(weights, &times(b, &times(b, &d))), 1.0 / 24.0));
    // Those of order 5 are for explicit methods alone.
    let ac = times(a, &c);
    all.push((5, dot(weights, &each(&c2, &c2)), 1.0 / 5.0));
    all.push((5, dot(weights, &each(&c2, &ac)), 1.0 / 10.0));
    all.push((5, dot(weights, &each(&c, &times(a, &c2))), 1.0 / 15.0));
    all.push((5, dot(weights, &each(&c, &times(a, &ac))), 1.0 / 30.0));
    all.push((5, dot(weights, &each(&ac, &ac)), 1.0 / 20.0));
    all.push((5, dot(weights, &times(a, &each(&c2, &c))), 1.0 / 20.0));
    all.push((5, dot(weights, &times(a, &each(&c, &ac))), 1.0 / 40.0));
    all.push((5, dot(weights, &times(a, &times(a, &c2))), 1.0 / 60.0));
    all.push((5, dot(weights, &times(a, &times(a, &ac))), 1.0 / 120.0));
    all.into_iter().filter(|(of, ..)| *of <= order).map(|(_, found, wanted)| (found, wanted)).collect()
}

fn check(name: &str, weights: &[f64], a: &Matrix, b: &Matrix, order: usize) {
    for (k, (found, wanted)) in conditions(weights, a, b, order).into_iter().enumerate() {
        assert!((found - wanted).abs() < 2e-13, "{name}, condition {k}: {found}, not {wanted}");
    }
    let next = conditions(weights, a, b, order + 1);
    if order < 5 {
        assert!(next.iter().any(|(found, wanted)| (found - wanted).abs() > 1e-6), "{name} is of higher order");
    }
}

#[test]
fn the_explicit_pair_has_its_orders() {
    let mut a: Matrix = vec![vec![0.0; 7]; 7];
    for (row, weights) in a[1..].iter_mut().zip(dormand_prince::A) {
        row[..weights.len()].copy_from_slice(weights);
    }
    let fifth = a[6].clone();
    let fourth: Vec<f64> = fifth.iter().zip(dormand_prince::E).map(|(b, e)| b - e).collect();
    check("order 5", &fifth, &a, &a, 5);
    check("order 4", &fourth, &a, &a, 4);
    // The continuous output at θ: weights are polynomials of θ, and the conditions of a tree of order ρ get θ^ρ.
    for theta in [0.2f64, 0.5, 0.9] {
        let rest = 1.0 - theta;
        let one = |i: usize| f64::from(u8::from(i == 0));
        let last = |i: usize| f64::from(u8::from(i == 6));
        let weight = |i: usize| {
            let bend = one(i) - fifth[i];
            let end = fifth[i] - last(i) - bend;
            theta * (fifth[i] + rest * (bend + theta * (end + rest * dormand_prince::D[i])))
        };
        let weights: Vec<f64> = (0..7).map(weight).collect();
        let orders = [1, 2, 3, 3, 4, 4, 4, 4];
        for ((found, wanted), order) in conditions(&weights, &a, &a, 4).into_iter().zip(orders) {
            assert!((found - wanted * theta.powi(order)).abs() < 1e-13, "output at {theta}, order {order}");
        }
    }
}

/// The stages u = Γ k turn the coefficients into the usual α, Γ and b (Hairer & Wanner 1996, IV.7).
#[test]
fn the_implicit_pair_has_its_orders() {
    let n = rosenbrock::STAGES;
    let mut a: Matrix = vec![vec![0.0; n]; n];
    for (row, weights) in a[1..].iter_mut().zip(rosenbrock::A) {
        row[..weights.len()].copy_from_slice(weights);
    }
    let last = a[4].clone();
    a[5] = last;
    a[5][4] = 1.0;
    let mut upside: Vec<f64> = vec![0.0; n * n];
    for i in 0..n {
        upside[i * n + i] = 1.0 / rosenbrock::GAMMA;
        if i > 0 {
            rosenbrock::C[i - 1].iter().enumerate().for_each(|(j, c)| upside[i * n + j] = -c);
        }
    }
    let gamma: Matrix = inverse(&upside, n).unwrap().chunks(n).map(<[f64]>::to_vec).collect();
    let alpha = product(&a, &gamma);
    let beta: Matrix = alpha.iter().zip(&gamma).map(|(a, g)| a.iter().zip(g).map(|(a, g)| a + g).collect()).collect();
    let mut weights = a[5].clone();
    weights[5] = 1.0;
    let fourth = product(&vec![weights], &gamma).remove(0);
    let third = product(&vec![a[5].clone()], &gamma).remove(0);
    check("order 4", &fourth, &alpha, &beta, 4);
    check("order 3", &third, &alpha, &beta, 3);
    // Stiffly accurate: the solution is the last stage's argument, so decay at any rate is damped at once.
    assert!(fourth.iter().zip(&beta[5]).all(|(b, last)| (b - last).abs() < 1e-14));
    for theta in [0.2f64, 0.5, 0.9] {
        let rest = 1.0 - theta;
        let d = |k: usize, i: usize| rosenbrock::D[k].get(i).copied().unwrap_or(0.0);
        let mut end = a[5].clone();
        end[5] = 1.0;
        let weights = (0..n).map(|i| theta * (end[i] + rest * (d(0, i) + theta * d(1, i)))).collect();
        let weights = product(&vec![weights], &gamma).remove(0);
        for ((found, wanted), order) in conditions(&weights, &alpha, &beta, 3).into_iter().zip([1, 2, 3, 3]) {
            assert!((found - wanted * theta.powi(order)).abs() < 1e-13, "output at {theta}, order {order}: {found}");
        }
    }
}

/// dx/dt = x (1 − x) with its derivative.
fn logistic() -> impl Flow {
    Closures {
        rates: |y: &[f64], out: &mut [f64]| {
            out[0] = y[0] * (1.0 - y[0]);
            true
        },
        slopes: |y: &[f64], out: &mut [f64]| {
            out[0] = 1.0 - 2.0 * y[0];
            true
        },
    }
}

/// dx/dt = A x.
fn linear(a: Matrix) -> impl Flow {
    let b = a.clone();
    Closures {
        rates: move |y: &[f64], out: &mut [f64]| {
            out.copy_from_slice(&times(&a, y));
            true
        },
        slopes: move |_: &[f64], out: &mut [f64]| {
            out.copy_from_slice(&b.concat());
            true
        },
    }
}

fn van_der_pol(mu: f64) -> impl Flow {
    Closures {
        rates: move |y: &[f64], out: &mut [f64]| {
            out[0] = y[1];
            out[1] = mu * (1.0 - y[0] * y[0]) * y[1] - y[0];
            true
        },
        slopes: move |y: &[f64], out: &mut [f64]| {
            out.copy_from_slice(&[0.0, 1.0, -2.0 * mu * y[0] * y[1] - 1.0, mu * (1.0 - y[0] * y[0])]);
            true
        },
    }
}

fn evenly(n: usize, tolerance: f64) -> Vec<Tolerance> {
    vec![Tolerance { absolute: tolerance, relative: tolerance }; n]
}

/// The state after a time, the worst error of the continuous output on the way, and the number of steps.
fn run(
    flow: &mut dyn Flow,
    start: &[f64],
    until: f64,
    tolerance: f64,
    method: Method,
    exact: &dyn Fn(f64) -> Vec<f64>,
) -> (f64, f64, usize) {
    let mut stepper = Stepper::new(flow, start, &evenly(start.len(), tolerance), until).unwrap();
    stepper.set_method(method);
    let off = |y: &[f64], t: f64| y.iter().zip(exact(t)).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max);
    let (mut between, mut steps) = (0.0f64, 0);
    while (until - stepper.time()) * until.signum() > 0.0 {
        stepper.limit(until - stepper.time());
        stepper.step(flow).unwrap();
        steps += 1;
        assert!(steps < 100_000, "at {}", stepper.time());
        let mut y = start.to_vec();
        for share in [0.25, 0.5, 0.75] {
            stepper.dense().at(share, &mut y);
            between = between.max(off(&y, stepper.before() + share * (stepper.time() - stepper.before())));
        }
    }
    (off(stepper.state(), stepper.time()), between, steps)
}

#[test]
fn closed_forms_forwards_and_backwards() {
    let grown = |t: f64| vec![1.0 / (1.0 + 9.0 * (-t).exp())];
    let rotated = |t: f64| vec![(-0.1 * t).exp() * (2.0 * t).cos(), -(-0.1 * t).exp() * (2.0 * t).sin()];
    let spiral = || linear(vec![vec![-0.1, 2.0], vec![-2.0, -0.1]]);
    for method in [Method::Explicit, Method::Implicit] {
        for tolerance in [1e-5, 1e-8, 1e-10] {
            let check = |flow: &mut dyn Flow, start: &[f64], until, exact: &dyn Fn(f64) -> Vec<f64>| {
                let (end, between, steps) = run(flow, start, until, tolerance, method, exact);
                assert!(end < 100.0 * tolerance, "{method:?} at {tolerance}: {end} after {steps} steps");
                assert!(between < 100.0 * tolerance, "{method:?} at {tolerance}: {between} between");
            };
            check(&mut logistic(), &[0.1], 10.0, &grown);
            check(&mut logistic(), &[0.1], -10.0, &grown);
            check(&mut spiral(), &[1.0, 0.0], 20.0, &rotated);
            check(&mut spiral(), &[1.0, 0.0], -5.0, &rotated);
        }
    }
}

/// The error falls with the tolerance as it must when each step's error is kept just below: in proportion.
#[test]
fn work_grows_with_the_order() {
    let grown = |t: f64| vec![1.0 / (1.0 + 9.0 * (-t).exp())];
    for (method, order) in [(Method::Explicit, 5.0), (Method::Implicit, 4.0)] {
        let steps = |tolerance| run(&mut logistic(), &[0.1], 10.0, tolerance, method, &grown).2 as f64;
        let growth = (steps(1e-12) / steps(1e-8)).ln() / 1e4f64.ln();
        assert!((growth - 1.0 / order).abs() < 0.06, "{method:?}: steps grow as tolerance^-{growth}");
    }
}

/// Trials of fixed length: halving it divides the error of one step by 2^(order + 1).
#[test]
fn one_step_has_the_order() {
    let exact = |h: f64| 1.0 / (1.0 + 9.0 * (-h).exp());
    let tolerance = evenly(1, 1.0);
    let explicit = |h: f64| {
        let mut stages = dormand_prince::Stages::new(1);
        stages.k[0][0] = 0.09;
        dormand_prince::attempt(&mut logistic(), &[0.1], h, &tolerance, &mut stages).unwrap();
        (stages.end[0] - exact(h)).abs()
    };
    let implicit = |h: f64| {
        let mut stages = rosenbrock::Stages::new(1);
        rosenbrock::attempt(&mut logistic(), &[0.1], h, &tolerance, &mut stages).unwrap();
        (stages.end[0] - exact(h)).abs()
    };
    let measured = |error: &dyn Fn(f64) -> f64, h: f64| (error(h) / error(h / 2.0)).log2();
    let (five, four) = (measured(&explicit, 0.2), measured(&implicit, 0.05));
    assert!((five - 6.0).abs() < 0.3, "one explicit step: h^{five}");
    assert!((four - 5.0).abs() < 0.4, "one implicit step: h^{four}");
}

#[test]
fn an_oscillator_keeps_its_energy() {
    let mut flow = linear(vec![vec![0.0, 1.0], vec![-1.0, 0.0]]);
    let mut stepper = Stepper::new(&mut flow, &[1.0, 0.0], &evenly(2, 1e-10), 1.0).unwrap();
    let mut steps = 0;
    while stepper.time() < 200.0 * std::f64::consts::PI {
        stepper.step(&mut flow).unwrap();
        steps += 1;
        let energy = stepper.state().iter().map(|y| y * y).sum::<f64>();
        assert!((energy - 1.0).abs() < 2e-7, "{energy} at {}", stepper.time());
    }
    assert!(steps < 20_000 && stepper.method() == Method::Explicit, "{steps} steps");
}

/// Times at which x falls through 0, from the continuous output.
fn crossings(mu: f64, tolerance: f64, count: usize) -> (Vec<f64>, usize, Method) {
    let mut flow = van_der_pol(mu);
    let mut stepper = Stepper::new(&mut flow, &[2.0, 0.0], &evenly(2, tolerance), 1.0).unwrap();
    let (mut found, mut steps) = (Vec::new(), 0);
    while found.len() < count {
        let before = stepper.state()[0];
        stepper.step(&mut flow).unwrap();
        steps += 1;
        assert!(steps < 100_000, "at {}", stepper.time());
        if before > 0.0 && stepper.state()[0] <= 0.0 {
            let (mut low, mut high) = (0.0, 1.0);
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                if stepper.dense().coordinate(0, middle) > 0.0 { low = middle } else { high = middle }
            }
            found.push(stepper.before() + high * (stepper.time() - stepper.before()));
        }
    }
    (found, steps, stepper.method())
}

#[test]
fn van_der_pol_has_its_period() {
    for (mu, tolerance, method) in [(1.0, 1e-11, Method::Explicit), (1000.0, 1e-9, Method::Implicit)] {
        let (times, steps, used) = crossings(mu, tolerance, 4);
        let (period, known) = (times[3] - times[2], reference(&format!("van der Pol {mu}"), "period"));
        assert!((period / known - 1.0).abs() < 1e-6, "mu {mu}: {period}, not {known}, {steps} steps");
        assert_eq!(used, method, "mu {mu}");
    }
}

#[test]
fn stops_are_said() {
    let mut undefined = Closures {
        rates: |y: &[f64], out: &mut [f64]| {
            out[0] = -1.0 / y[0];
            y[0] > 0.0
        },
        slopes: |_: &[f64], _: &mut [f64]| false,
    };
    let mut last = Ok(());
    // x² = 1 − 2t: nothing beyond t = 1/2.
    let mut stepper = Stepper::new(&mut undefined, &[1.0], &evenly(1, 1e-6), 1.0).unwrap();
    for _ in 0..10_000 {
        last = stepper.step(&mut undefined);
        if last.is_err() {
            break;
        }
    }
    assert!(matches!(last, Err(Stopped::Undefined | Stopped::TooShort)), "{last:?}");
    assert!((stepper.time() - 0.5).abs() < 1e-6);
    let start = |x: f64| Stepper::new(&mut logistic(), &[x], &evenly(1, 1e-6), 1.0).map(|_| ());
    assert_eq!(start(f64::NAN), Err(Stopped::NotFinite));
    let mut nowhere = Closures { rates: |_: &[f64], _: &mut [f64]| false, slopes: |_: &[f64], _: &mut [f64]| false };
    assert_eq!(Stepper::new(&mut nowhere, &[1.0], &evenly(1, 1e-6), 1.0).map(|_| ()), Err(Stopped::Undefined));
    // x' = x²: infinite at t = 1.
    let mut grows = Closures {
        rates: |y: &[f64], out: &mut [f64]| {
            out[0] = y[0] * y[0];
            out[0].is_finite()
        },
        slopes: |_: &[f64], _: &mut [f64]| false,
    };
    let mut stepper = Stepper::new(&mut grows, &[1.0], &evenly(1, 1e-6), 1.0).unwrap();
    let stopped = (0..10_000).find_map(|_| stepper.step(&mut grows).err());
    assert!(stopped.is_some() && stepper.time() < 1.0 + 1e-4, "{stopped:?} at {}", stepper.time());
}

struct Logistics;

impl LaneFlow for Logistics {
    fn rates(&mut self, y: &[Batch], out: &mut [Batch]) {
        for l in 0..WIDTH {
            out[0][l] = y[0][l] * (1.0 - y[0][l]);
            // The second coordinate is undefined beyond 2 in one lane.
            out[1][l] = if l == 7 && y[1][l] > 2.0 { f64::NAN } else { 1.0 };
        }
    }
}

#[test]
fn each_lane_is_a_path_of_its_own() {
    let mut stepper = LaneStepper::new(&evenly(2, 1e-8));
    for lane in 0..WIDTH {
        stepper.set(lane, &[0.01 * (1.0 + lane as f64), 0.0], 0.01);
    }
    let mut moved = [false; WIDTH];
    for _ in 0..400 {
        stepper.step(&mut Logistics);
        for (lane, moved) in moved.iter_mut().enumerate() {
            let (x, t) = (0.01 * (1.0 + lane as f64), stepper.times()[lane]);
            let exact = 1.0 / (1.0 + (1.0 / x - 1.0) * (-t).exp());
            assert!((stepper.states()[0][lane] - exact).abs() < 1e-6, "lane {lane} at {t}");
            assert!((stepper.states()[1][lane] - t).abs() < 1e-9 * (1.0 + t), "lane {lane} at {t}");
            *moved |= t > 2.5;
        }
    }
    assert!(stepper.failed()[7] && !moved[7] && stepper.times()[7] <= 2.0 + 1e-9, "{}", stepper.times()[7]);
    assert!((0..WIDTH).filter(|lane| *lane != 7).all(|lane| moved[lane] && !stepper.failed()[lane]));
}
