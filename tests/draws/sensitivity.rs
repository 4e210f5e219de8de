//! Sobol' indices of functions whose indices are known in closed form.

use std::f64::consts::PI;

use restpoint::analysis::uncertain::draw::Sampling;
use restpoint::analysis::uncertain::indices::{Design, Indices, NoIndices, Row, Tally};
use restpoint::model::Model;

use crate::support::{model, model_with};

fn tally(design: &Design, model: &Model, f: &dyn Fn(&[f64]) -> f64, numbers: impl Iterator<Item = u64>) -> Tally {
    let factors = design.factors().len();
    let mut tally = Tally::new(factors);
    let at = |index: u64, row: Row| {
        let mut values = model.base_values();
        design.row(index, row, &mut values, &mut [0.0; 2]);
        f(&values)
    };
    for i in numbers {
        let mixed: Vec<f64> = (0..factors).map(|factor| at(i, Row::Mixed(factor))).collect();
        tally.push(i, at(i, Row::A), at(i, Row::B), &mixed);
    }
    tally
}

/// Every index lies within its error of the exact one, or twice it (of some hundred, a few are beyond 95 % intervals), and
/// the error is small.
fn check(parameters: &str, f: &dyn Fn(&[f64]) -> f64, first: &[f64], total: &[f64]) {
    let model = model(parameters);
    for (sampling, largest) in [(Sampling::Random, 0.1), (Sampling::Latin, 0.1), (Sampling::Sobol, 0.03)] {
        let design = Design::new(&model, sampling, 2, Some(1 << 13)).expect("a design");
        let found = tally(&design, &model, f, 0..1 << 13).indices().expect("spread");
        for (k, Indices { first: one, total: all }) in found.iter().enumerate() {
            for (estimate, exact) in [(one, first[k]), (all, total[k])] {
                let close = (estimate.value - exact).abs() <= 2.0 * estimate.error.max(1e-12);
                assert!(close && estimate.error < largest, "{sampling:?} {k}: {estimate:?}, not {exact}");
            }
        }
    }
}

/// sin x₁ + 7 sin² x₂ + 0.1 x₃⁴ sin x₁ over ±π (Ishigami & Homma 1990).
#[test]
fn of_the_ishigami_function() {
    let (a, b) = (7.0, 0.1);
    let variance = a * a / 8.0 + b * PI.powi(4) / 5.0 + b * b * PI.powi(8) / 18.0 + 0.5;
    let one = 0.5 * (1.0 + b * PI.powi(4) / 5.0).powi(2) / variance;
    let two = a * a / 8.0 / variance;
    let both = b * b * PI.powi(8) * 8.0 / 225.0 / variance;
    let parameter = |name: &str| format!("{name}: {{value: 0, range: [{}, {}]}}", -PI, PI);
    check(
        &["x", "y", "z"].map(parameter).join(", "),
        &|v| v[0].sin() + a * v[1].sin().powi(2) + b * v[2].powi(4) * v[0].sin(),
        &[one, two, 0.0],
        &[one + both, two, both],
    );
}

/// Π (|4x − 2| + c)/(1 + c): the variance of each factor is 1/(3 (1 + c)²), that of the product Π(1 + v) − 1 (Saltelli &
/// Sobol' 1995). One parameter has no influence.
#[test]
fn of_a_product() {
    let c = [0.0, 1.0, 4.5];
    let v = c.map(|c: f64| 1.0 / (3.0 * (1.0 + c).powi(2)));
    let product: f64 = v.iter().map(|v| 1.0 + v).product();
    let first = v.map(|v| v / (product - 1.0));
    let total = v.map(|v| v / (1.0 + v) * product / (product - 1.0));
    check(
        "x: {value: 0, range: [0, 1]}, y: {value: 0, range: [0, 1]}, z: {value: 0, range: [0, 1]}, n: {value: 0, range: [0, 1]}",
        &|x| (0..3).map(|k| ((4.0 * x[k] - 2.0).abs() + c[k]) / (1.0 + c[k])).product(),
        &[first[0], first[1], first[2], 0.0],
        &[total[0], total[1], total[2], 0.0],
    );
}

#[test]
fn parts_give_what_the_whole_gives() {
    let model = model("x: {value: 0, range: [0, 1]}, y: {value: 0, draw: {normal: {sd: 1}}}");
    let design = Design::new(&model, Sampling::Sobol, 2, Some(1000)).expect("a design");
    let f = |v: &[f64]| v[0] * v[1] + 1e8;
    let whole = tally(&design, &model, &f, 0..1000);
    let mut parts = tally(&design, &model, &f, 300..1000);
    parts.and(&tally(&design, &model, &f, 0..300));
    assert_eq!(parts, whole);
    assert_eq!(parts.indices(), whole.indices());
    assert_eq!(tally(&design, &model, &|_| 3.0, 0..1000).indices(), None, "nothing varies");
    assert_eq!(tally(&design, &model, &f, 0..15).indices(), None, "a group is empty");
}

#[test]
fn of_what_hangs_together_there_are_none() {
    let parameters = "x: {value: 1, range: [0, 2]}, y: {value: 1, range: [0, 2]}";
    let correlated = model_with(parameters, "correlations: [{between: [x, y], rank: 0.5}]", "");
    let table = model_with("x: 1", "draws: d.csv", "x\n1\n2\n");
    for model in [correlated, table] {
        assert_eq!(Design::new(&model, Sampling::Sobol, 1, None).err(), Some(NoIndices::Joint));
    }
}
