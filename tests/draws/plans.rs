//! Plans: which draw is which, what is correlated, and what comes from a file.

use restpoint::analysis::uncertain::draw::{Plan, Sampling, Unplanned, Way};
use restpoint::num::ranks::Ranks;

use crate::support::{columns, model, model_with};

const ALL: [Sampling; 3] = [Sampling::Random, Sampling::Latin, Sampling::Sobol];

#[test]
fn a_draw_depends_on_seed_and_number_alone() {
    let model = model_with(
        "r: {value: 1, draw: {lognormal: {cv: 0.2}}}, K: {value: 5, range: [1, 9]}, c: 2",
        "now: {N: {value: 3, cv: 0.3}, P: 4}",
        "",
    );
    for sampling in ALL {
        let draw = |seed: u64, index: u64, attempt: u64| {
            let plan = Plan::new(&model, sampling, seed, Some(1000)).expect("a plan");
            let (mut values, mut now) = (model.base_values(), [7.0, 8.0]);
            plan.draw(index, attempt, &mut values, &mut now);
            assert_eq!((values[2], now[1]), (2.0, 8.0), "what is certain stays");
            [values[0], values[1], now[0]]
        };
        let plan = Plan::new(&model, sampling, 1, Some(1000)).expect("a plan");
        let (mut values, mut now) = (model.base_values(), [7.0, 8.0]);
        for index in (0..1000).rev().step_by(77) {
            plan.draw(index, 0, &mut values, &mut now);
            assert_eq!(draw(1, index, 0), [values[0], values[1], now[0]], "{sampling:?} {index}");
        }
        let first = draw(1, 5, 0);
        for other in [draw(2, 5, 0), draw(1, 6, 0), draw(1, 5, 1), draw(1, 5, 2)] {
            assert!(first.iter().zip(other).all(|(a, b)| *a != b), "{sampling:?}");
        }
    }
}

#[test]
fn stocks_are_lognormal_around_the_survey() {
    let model = model_with("c: 2", "now: {N: {value: 3, cv: 0.3}}", "");
    let plan = Plan::new(&model, Sampling::Latin, 1, Some(16_000)).expect("a plan");
    let stock = |i| {
        let mut now = [0.0; 2];
        plan.draw(i, 0, &mut model.base_values(), &mut now);
        now[0]
    };
    let mut stocks: Vec<f64> = (0..16_000).map(stock).collect();
    stocks.sort_by(f64::total_cmp);
    let mean = stocks.iter().sum::<f64>() / 16_000.0;
    // The mean of a lognormal distribution of that median: × √(1 + cv²).
    assert!((stocks[8_000] - 3.0).abs() < 1e-3 && (mean - 3.0 * 1.09f64.sqrt()).abs() < 1e-3, "{mean}");
}

/// Sample rank correlations of 20,000 draws are within 0.02 of those asked for, and distributions stay what they are.
#[test]
fn rank_correlations_are_those_asked_for() {
    let model = model_with(
        "a: {value: 1, draw: {lognormal: {cv: 0.8}}}, b: {value: 5, range: [1, 9]}, free: {value: 1, range: [0, 2]}, \
         c: {value: 0.2, range: [0, 1], draw: {beta: {a: 0.5, b: 3}}}, d: {value: 0, min: -1, draw: {normal: {sd: 1}}}",
        "correlations: [{between: [b, a], rank: -0.4}, {between: [b, c], rank: 0.7}, {between: [d, a], rank: 1}, \
         {between: [b, d], rank: -0.4}]",
        "",
    );
    let asked = |i: usize, j: usize| match (i, j) {
        // d, the fifth, goes with a.
        (0, 1) | (1, 4) => -0.4,
        (1, 3) => 0.7,
        (0, 4) => 1.0,
        _ => 0.0,
    };
    for sampling in ALL {
        let plan = Plan::new(&model, sampling, 1, Some(20_000)).expect("a plan");
        let columns = columns(&model, &plan);
        for i in 0..5 {
            for j in i + 1..5 {
                let mut ranks = Ranks::new(20_000, || [Vec::new(), Vec::new()]);
                columns[i].iter().zip(&columns[j]).for_each(|(x, y)| ranks.push(*x, *y));
                let found = ranks.correlation().expect("spread");
                assert!((found - asked(i, j)).abs() < 0.02, "{sampling:?} {i} {j}: {found}");
            }
        }
        let mean = columns[1].iter().sum::<f64>() / 20_000.0;
        assert!((mean - 5.0).abs() < 5.0 * 8.0 / 12f64.sqrt() / 20_000f64.sqrt(), "{sampling:?}: {mean}");
    }
}

#[test]
fn rows_of_a_file_come_once_and_in_order() {
    let table = (0..10).map(|k| format!("{k},{}\n", 10 * k)).collect::<Vec<_>>().concat();
    let model = model_with(
        "a: 1, b: {value: 2, range: [0, 90]}, c: {value: 1, range: [0, 1]}",
        "draws: d.csv",
        &format!("b,a\n{table}"),
    );
    let check = |draws: Option<u64>, expected: &[f64]| {
        let plan = Plan::new(&model, Sampling::Sobol, 1, draws).expect("a plan");
        let columns = columns(&model, &plan);
        assert_eq!(columns[1], expected);
        assert!(columns[0].iter().zip(expected).all(|(a, b)| *a == 10.0 * b));
        assert!(columns[2].windows(2).all(|pair| pair[0] != pair[1]), "c is drawn by its range");
        assert!(matches!(plan.way(), Way::InOrder { .. }) && plan.is_joint());
        assert_eq!(plan.parameters().len(), 3);
    };
    let all: Vec<f64> = (0..10).map(f64::from).collect();
    check(None, &all);
    check(Some(10), &all);
    check(Some(1_000), &all);
    check(Some(5), &[0.0, 2.0, 4.0, 6.0, 8.0]);
    check(Some(4), &[0.0, 2.0, 5.0, 7.0]);
    check(Some(1), &[0.0]);
}

/// Of n rows of a chain with the memory φ as many are effective as n (1 − φ)/(1 + φ); found a little fewer of, since
/// correlations that are not there are taken for positive ones.
#[test]
fn effective_draws_of_a_file() {
    let found = |seed: u64| {
        let (mut x, mut source) = (0.0, restpoint::num::random::Source::new(seed));
        let mut rows = String::new();
        for _ in 0..4_000 {
            let z: f64 = (0..12).map(|_| source.unit()).sum::<f64>() - 6.0;
            x = 0.8 * x + z;
            rows.extend([x.to_string(), format!(",{}\n", source.unit())]);
        }
        let model = model_with("a: 0, b: 0.5", "draws: d.csv", &format!("a,b\n{rows}"));
        let plan = Plan::new(&model, Sampling::Random, 1, None).expect("a plan");
        let Way::InOrder { effective } = plan.way() else { panic!("a file") };
        effective
    };
    let mean = (0..12).map(found).sum::<f64>() / 12.0 / (4_000.0 / 9.0);
    assert!((0.75..1.1).contains(&mean), "{mean}");
}

#[test]
fn edges_part_a_parameter_evenly() {
    let check = |model: &restpoint::model::Model, expected: Option<&[f64]>| {
        let plan = Plan::new(model, Sampling::Random, 1, Some(100)).expect("a plan");
        let found = plan.edges(restpoint::model::ParameterId(0), 4);
        match expected {
            None => assert_eq!(found, None),
            Some(expected) => {
                let found = found.expect("drawn");
                assert!(
                    found.len() == 3 && found.iter().zip(expected).all(|(x, y)| (x - y).abs() < 1e-12),
                    "{found:?}"
                );
            }
        }
    };
    check(&model("a: {value: 1, range: [0, 8]}"), Some(&[2.0, 4.0, 6.0]));
    check(&model("a: 1, b: {value: 1, range: [0, 8]}"), None);
    check(&model_with("a: 1", "draws: d.csv", "a\n4\n0\n8\n6\n2\n"), Some(&[2.0, 4.0, 6.0]));
}

#[test]
fn nothing_uncertain_is_said() {
    let plan = Plan::new(&model("a: 1, E: {value: 1, range: [0, 2], control: true}"), Sampling::Random, 1, None);
    assert_eq!(plan.err(), Some(Unplanned::NothingUncertain));
    let usual = Plan::new(&model("a: {value: 1, range: [0, 2]}"), Sampling::Random, 1, None).expect("a plan");
    assert_eq!((usual.draws(), usual.groups(), usual.way()), (10_000, 1, Way::Independent));
}
