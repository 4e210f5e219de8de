//! What is measured, against published models and results by hand.

#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::common::cases::{Case, all, named, number};
use crate::common::measured::{equilibrium, linearisation, measured};
use crate::common::text::{ModelText, Read};
use restpoint::analysis::measures::{Amplification, Measures, measure};
use restpoint::analysis::subject::Subject;
use restpoint::model::SpeciesId;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::num::interval::Interval;
use restpoint::num::stationary::{Time, response};
use serde_json::Value;

/// Published numbers have 22 digits, but parameters and states are the nearest f64.
const DIGITS: f64 = 1e-11;

#[track_caller]
fn near(what: &str, found: Option<f64>, expected: f64) {
    close(what, found, expected, DIGITS);
}

#[track_caller]
fn close(what: &str, found: Option<f64>, expected: f64, relative: f64) {
    let found = found.unwrap_or_else(|| panic!("{what}: nothing, not {expected}"));
    assert!((found - expected).abs() <= relative * expected.abs().max(1e-3), "{what}: {found}, not {expected}");
}

/// The published equilibrium nearest to the state that a fact is about.
fn state(case: &Case, fact: &Value) -> Vec<f64> {
    let wanted: Vec<f64> = case.species.iter().map(|symbol| number(&fact["x"][symbol])).collect();
    let off = |x: &[f64]| -> f64 { x.iter().zip(&wanted).map(|(x, y)| (x - y).abs()).sum() };
    let nearest = case.equilibria.iter().min_by(|a, b| off(&a.x).total_cmp(&off(&b.x))).unwrap();
    assert!(off(&nearest.x) < 1e-9, "{}: no equilibrium at {wanted:?}", case.id);
    nearest.x.clone()
}

/// Calls `check` with every fact of that kind, the model and what is measured there; returns how many there are.
fn at_facts(kind: &str, mut check: impl FnMut(&str, &Value, &Read, &Measures)) -> usize {
    let mut count = 0;
    for case in all() {
        let read = case.text().read();
        for fact in case.facts.get(kind).and_then(Value::as_array).into_iter().flatten() {
            check(&case.id, fact, &read, &measured(&read, 0, &state(&case, fact)));
            count += 1;
        }
    }
    count
}

#[test]
fn published_transients() {
    let count = at_facts("transients", |id, fact, read, found| {
        near(id, found.resilience, number(&fact["resilience"]));
        near(id, found.return_time, number(&fact["return_time"]));
        near(id, found.reactivity, number(&fact["reactivity"]));
        let peak = found.amplification.unwrap_or_else(|| panic!("{id}: no amplification"));
        close(id, Some(peak.factor), number(&fact["max_amplification"]["value"]), 2e-10);
        close(id, Some(peak.time), number(&fact["max_amplification"]["time"]), 1e-8);
        let x: Vec<f64> = fact["x"].as_object().unwrap().values().map(number).collect();
        let invariability = match found.invariability {
            // Nobody is present at the origin, which stands for any equilibrium in the cases of linear rates.
            None if x.iter().all(|&x| x == 0.0) => {
                let a = linearisation(read, 0, &x).jacobian;
                response(&a, x.len(), Time::Runs, &|| false).map(|response| 0.5 / response)
            }
            found => found,
        };
        near(id, invariability, number(&fact["stochastic_invariability"]));
    });
    assert_eq!(count, 7);
}

#[test]
fn published_presses() {
    let count = at_facts("press", |id, fact, _, found| {
        let matrix = fact["matrix"].as_array().unwrap();
        let expected: Vec<f64> = matrix.iter().flat_map(|row| row.as_array().unwrap()).map(number).collect();
        let effects = found.net_effects.as_ref().unwrap_or_else(|| panic!("{id}: no net effects"));
        assert!(!effects.nearly_singular, "{id}: {effects:?}");
        effects.matrix.iter().zip(&expected).for_each(|(&x, &y)| close(id, Some(x), y, 1e-10));
    });
    assert_eq!(count, 4);
}

/// Every yield published for an equilibrium of a scenario.
#[test]
fn published_yields() {
    let mut count = 0;
    for case in all() {
        let read = case.text().read();
        for (scenario, equilibria) in case.lists().enumerate() {
            for published in equilibria.iter().filter(|published| !published.yields.is_empty()) {
                let found = measured(&read, scenario, &published.x);
                for (name, expected) in &published.yields {
                    let harvest = found.yields.iter().find(|harvest| harvest.name == *name).unwrap();
                    assert_eq!(harvest.value, None, "{}: no price was given", case.id);
                    near(&case.id, Some(harvest.amounts[0].1), *expected);
                    count += 1;
                }
            }
        }
    }
    assert!(count >= 10, "{count}");
}

/// The loggerhead matrix at extinction: its dominant eigenvalue, and reactivity ln σ_max as it is published.
#[test]
fn published_demography() {
    let case = named("D15_loggerhead");
    let demography = &case.facts["demography"];
    let read = case.text().read();
    let found = measured(&read, 0, &vec![0.0; case.species.len()]);
    near("resilience", found.resilience, -number(&demography["log_rate"]));
    let growth = number(&demography["reactivity"]);
    let reactivity = found.reactivity.unwrap();
    let is_published = (reactivity - growth).abs() < 1e-9 || (reactivity.exp() - growth).abs() < 1e-9;
    assert!(is_published, "{reactivity}, not {growth}");
}

fn read(yaml: &str) -> Read {
    let (model, _, found) = load("model.yaml", yaml.as_bytes(), &NoFiles);
    let model = model.unwrap_or_else(|| panic!("{found:?}"));
    let system = System::new(&model, &[]).unwrap();
    Read { model, system }
}

/// r N (1 − N/K) − q E N, price 0.5 and cost 3 E: N = K (1 − qE/r), λ = −(r − qE). All by hand.
#[test]
fn harvested_logistic() {
    let read = read(
        "title: stock\ntime: yr\nspecies:\n  N: {upper: 200}\n\
         parameters: {r: 0.5, K: 100, q: 0.25, E: 0.5, Z: 0}\n\
         processes:\n  growth: {rate: r*N*(1 - N/K) + Z*N, effect: {N: 1}}\n\
         harvest:\n  fleet: {takes: {N: q*E*N}, price: {N: 0.5}, cost: 3*E}\n  gift: {takes: {N: 0*N}}\n",
    );
    let found = measured(&read, 0, &[75.0]);
    near("resilience", found.resilience, 0.375);
    near("return time", found.return_time, 1.0 / 0.375);
    assert_eq!((found.period, found.damping_ratio), (None, Some(1.0)));
    assert_eq!(found.amplification, Some(Amplification { factor: 1.0, time: 0.0 }));
    near("reactivity", found.reactivity, -0.375);
    near("in proportion", found.reactivity_proportional, -0.375);
    assert_eq!((found.reactivity_present, found.amplification_present), (None, None));
    near("press", found.net_effects.as_ref().map(|effects| effects.matrix[0]), 1.0 / 0.375);
    near("condition", found.net_effects.as_ref().map(|effects| effects.condition), 1.0);
    near("variance", found.covariance.as_ref().map(|c| c[0]), 1.0 / 0.75);
    near("invariability", found.invariability, 0.375);
    // x = K (1 − qE/r): r gives qE/(r − qE) = 1/3, K gives 1, q and E give −1/3. λ = qE − r: r/(r − qE) = 4/3, −1/3.
    let third = 1.0 / 3.0;
    let expected = [("r", third, 4.0 * third), ("K", 1.0, 0.0), ("q", -third, -third), ("E", -third, -third)];
    for (name, state, leading) in expected {
        let of = |e: &&restpoint::analysis::measures::Elasticity| read.model.parameters[e.parameter.0].name == name;
        let elasticity = found.elasticities.iter().find(of).unwrap();
        near(name, elasticity.state[0], state);
        close(name, elasticity.leading, leading, 1e-9);
    }
    let zero = found.elasticities.last().unwrap();
    assert_eq!((zero.parameter.0, &zero.state[..], zero.leading), (4, &[None][..], None));
    assert_eq!(found.yields[0].amounts, [(SpeciesId(0), 9.375)]);
    assert_eq!((found.yields[0].value, found.yields[1].value), (Some(0.5 * 9.375 - 1.5), None));
    // Extinct: it comes back at r − qE, and nothing else can be said of those present.
    let extinct = measured(&read, 0, &[0.0]);
    assert_eq!(extinct.invasion, [(SpeciesId(0), Some(0.375))]);
    assert_eq!((extinct.resilience, extinct.return_time), (Some(-0.375), None));
    assert_eq!((extinct.reactivity_proportional, extinct.covariance, extinct.invariability), (None, None, None));
    assert!(extinct.elasticities.iter().all(|e| e.state == [None]));
    near("r", extinct.elasticities[0].leading, 4.0 * third);
}

/// The same year by year: N(1 + r(1 − N/K)), step 2; λ = 1 − r.
#[test]
fn logistic_map() {
    let model = |r: &str| {
        read(&format!(
            "title: stock\ntime: {{unit: yr, step: 2}}\nspecies: {{N: {{upper: 200}}}}\n\
             parameters: {{r: {r}, K: 100}}\nnext: {{N: N*(1 + r*(1 - N/K))}}\n"
        ))
    };
    let found = measured(&model("0.5"), 0, &[100.0]);
    near("resilience", found.resilience, std::f64::consts::LN_2 / 2.0);
    near("reactivity", found.reactivity, -std::f64::consts::LN_2 / 2.0);
    assert_eq!((found.period, found.damping_ratio), (None, Some(1.0)));
    near("variance", found.covariance.as_ref().map(|c| c[0]), 4.0 / 3.0);
    near("invariability", found.invariability, 0.75 / 4.0);
    near("press", found.net_effects.as_ref().map(|effects| effects.matrix[0]), 2.0);
    // |λ| = 1 − r: (r/|λ|) d|λ|/dr = −1.
    near("r", found.elasticities[0].leading, -1.0);
    // λ = −1/2 swings from step to step.
    let swinging = measured(&model("1.5"), 0, &[100.0]);
    near("period", swinging.period, 4.0);
    let damping = std::f64::consts::LN_2 / std::f64::consts::LN_2.hypot(std::f64::consts::PI);
    near("damping", swinging.damping_ratio, damping);
    // λ = 0: there at once.
    let still = measured(&model("1"), 0, &[100.0]);
    assert_eq!((still.resilience, still.return_time, still.reactivity), (None, Some(0.0), None));
    assert_eq!(still.amplification, Some(Amplification { factor: 1.0, time: 0.0 }));
    // Extinct: multiplier 1.5.
    let extinct = measured(&model("0.5"), 0, &[0.0]);
    near("invasion", extinct.invasion[0].1, 1.5f64.ln() / 2.0);
}

/// A stable prey without its predator: those present alone, who can invade, and a population in two stages.
#[test]
fn borders_and_stages() {
    let read = read(
        "title: web\ntime: yr\nspecies:\n  N: {upper: 20}\n  P: {upper: 20}\n  J: {upper: 20, population: bird}\n  \
         A: {upper: 20, population: bird}\n\
         change: {N: N*(1 - N/10) - N*P, P: P*(0.1*N - 1.5), J: 2*A - 3*J - J*N, A: J - A}\n",
    );
    let found = measured(&read, 0, &[10.0, 0.0, 0.0, 0.0]);
    assert_eq!(found.invasion, [(SpeciesId(1), Some(-0.5))]);
    let bird = &found.groups[0];
    assert_eq!((bird.name.as_str(), bird.total), ("bird", 0.0));
    // [[−13, 2], [1, −1]]: −7 + √(36 + 2).
    near("bird", bird.invasion, 38f64.sqrt() - 7.0);
    near("those present", found.reactivity_present, -1.0);
    assert_eq!(found.amplification_present, Some(Amplification { factor: 1.0, time: 0.0 }));
    // The predator coming in eats: a knock in P lowers N tenfold and more.
    assert!(found.amplification.unwrap().factor > 5.0);
    near("noise on N alone", found.covariance.as_ref().map(|c| c[0]), 0.5);
    assert!(found.covariance.unwrap()[1..].iter().all(|&c| c == 0.0));
    // Bringing in one predator a year leaves 1/0.5 of them, each of whom costs 10 prey.
    let effects = found.net_effects.unwrap();
    near("of P on P", Some(effects.matrix[5]), 2.0);
    near("of P on N", Some(effects.matrix[1]), -20.0);
    // Present: no invasion number, but a total.
    let settled = measured(&read, 0, &[0.0, 0.0, 3.0, 4.0]);
    assert_eq!((settled.groups[0].total, settled.groups[0].invasion), (7.0, None));
}

/// A centre returns at no rate, and nothing of it dies out.
#[test]
fn centres() {
    let text = ModelText::new("cycle", "10", &[("N", "N - N*P"), ("P", "N*P - P")]);
    let found = measured(&text.read(), 0, &[1.0, 1.0]);
    assert_eq!((found.resilience, found.return_time), (Some(0.0), None));
    near("period", found.period, std::f64::consts::TAU);
    assert_eq!((found.amplification, found.covariance, found.invariability), (None, None, None));
    assert_eq!(found.damping_ratio, Some(0.0));
}

/// What needs no linear part is there without one.
#[test]
fn without_a_linear_part() {
    let text = ModelText {
        counts: vec![("catch".to_owned(), "2*N".to_owned()), ("ratio".to_owned(), "N/(N - 3)".to_owned())],
        ..ModelText::new("kink", "10", &[("N", "max(N, 3) - 3")])
    };
    let read = text.read();
    let mut subject = Subject::new(&read.model, &read.system.graph, &read.system.plans[0], vec![[0.0, 10.0]]);
    let found = measure(&mut subject, &equilibrium(&[3.0]), None, &|| false);
    assert_eq!(found.yields[0].amounts, [(SpeciesId(0), 6.0)]);
    assert_eq!(found.yields[1].amounts, []);
    assert_eq!(Measures { yields: Vec::new(), ..found }, Measures::default());
}

/// Nothing is NaN or infinite, at any published equilibrium; an enriched or dying state has what there is to be had.
#[test]
fn nothing_is_shown_that_is_not_a_number() {
    let mut amplified = 0;
    for case in all() {
        let read = case.text().read();
        for (scenario, equilibria) in case.lists().enumerate() {
            for published in equilibria.iter().take(40) {
                let point: Vec<Interval> = published.x.iter().map(|&x| Interval::point(x)).collect();
                if !read.at(scenario, &point).domain.defined {
                    continue;
                }
                let stable = linearisation(&read, scenario, &published.x).stable == Some(true);
                let found = measured(&read, scenario, &published.x);
                let shown = format!("{found:?}");
                assert!(!shown.contains("NaN") && !shown.contains("inf"), "{} {:?}: {shown}", case.id, published.x);
                // The helper takes a double 0 for stable where rounding tears it apart to that side.
                let is_expected = stable && found.return_time.is_none_or(|time| time < 1e8);
                assert!(found.amplification.is_some() >= is_expected, "{} {:?}: {shown}", case.id, published.x);
                assert!(stable >= found.amplification.is_some(), "{} {:?}: {shown}", case.id, published.x);
                amplified += usize::from(found.amplification.is_some());
            }
        }
    }
    assert!(amplified > 100, "{amplified}");
}
