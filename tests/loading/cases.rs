//! The published models of `tests/cases`: every one loads, and its equations, slopes, spectra and yields at its published
//! equilibria are the published ones.

use crate::common::Source;
use crate::common::cases::{Case, Equilibrium, all, named, type_word};
use crate::common::newton::Newton;
use crate::common::text::{Evaluation, Read};
use restpoint::expr::tape::Tape;
use restpoint::model::system::bounds::Bound;
use restpoint::num::interval::Interval;

/// How far around the published coordinates, relative to each: the decimals have 22 digits, but the parameters are the
/// nearest f64, which moves an equilibrium.
const AROUND: f64 = 1e-12;

/// Published equilibria at which a row or a slope is not defined as written, though it has a limit: (B/K)^0.5 has no
/// slope at B = 0.
const NO_SLOPE: [(&str, &[f64]); 1] = [("A04_pella_tomlinson", &[0.0])];

/// Calls `check` on every published equilibrium, with what the equations are in a small box around it.
fn at_all_equilibria(mut check: impl FnMut(&str, &Case, &Equilibrium, &Evaluation)) {
    for case in all() {
        let read = case.text().read();
        for (scenario, equilibria) in case.lists().enumerate() {
            for equilibrium in equilibria {
                let name = format!("{}, {}, {:?}", case.id, read.model.scenarios[scenario].name, equilibrium.x);
                check(&name, &case, equilibrium, &read.at(scenario, &equilibrium.around(AROUND)));
            }
        }
    }
}

#[test]
fn every_case_and_scenario_loads_and_says_what_the_catalogue_says() {
    let cases = all();
    let count = |of: fn(&Case) -> usize| cases.iter().map(of).sum::<usize>();
    let total = [cases.len(), count(|case| case.equilibria.len()), count(|case| case.scenarios.len())];
    assert_eq!(total, [74, 793, 75]);
    for case in &cases {
        let Read { model, mut system } = case.text().read();
        assert_eq!(model.species.iter().map(|s| s.symbol.as_str()).collect::<Vec<_>>(), case.species, "{}", case.id);
        let parameters = case.facts["parameters"].as_object().expect("a map");
        let expected = |name: &str| crate::common::cases::number(&parameters[name]);
        for parameter in &model.parameters {
            assert_eq!(parameter.value, expected(&parameter.name), "{} {}", case.id, parameter.name);
        }
        assert_eq!(model.parameters.len(), parameters.len(), "{}", case.id);
        let values = model.names.iter().filter_map(|(name, meaning)| match meaning {
            restpoint::model::Name::Parameter(id) => Some((name.as_str(), id.0)),
            _ => None,
        });
        for (name, id) in values {
            for (scenario, plan) in case.scenarios.iter().zip(&system.plans[1.min(case.scenarios.len())..]) {
                let set = scenario.values.iter().find(|(set, _)| set == name);
                let value = set.map_or_else(|| expected(name), |(_, value)| value.parse().expect("a number"));
                assert_eq!((plan.name.as_str(), plan.values[id]), (scenario.name.as_str(), value), "{}", case.id);
            }
        }
        let bounds = system.bounds(&model).expect("bounds");
        let inside = |e: &Equilibrium| e.x.iter().zip(&bounds).all(|(&x, b)| b.lower <= x && x <= b.upper);
        assert!(!bounds.iter().any(|bound| bound.chosen) && case.lists().flatten().all(inside), "{}", case.id);
    }
}

#[test]
fn rows_vanish_at_every_published_equilibrium() {
    at_all_equilibria(|name, _, _, found| {
        assert!(found.rows.iter().all(|row| row.contains_zero()), "{name}: {:?}", found.rows);
    });
}

#[test]
fn slopes_are_the_published_ones() {
    let mut undefined = Vec::new();
    let mut compared = 0;
    at_all_equilibria(|name, case, equilibrium, found| {
        if !found.domain.defined {
            undefined.push((case.id.clone(), equilibrium.x.clone()));
        } else if let Some(published) = &equilibrium.jacobian {
            compared += 1;
            let largest = published.iter().flatten().fold(0.0, |largest: f64, entry| largest.max(entry.abs()));
            // Where all slopes are 0, curvature alone gives the box ten times its own width.
            let allowed = if largest > 0.0 { 1e-7 * largest } else { 10.0 * AROUND };
            for (row, published) in found.jacobian.iter().zip(published) {
                for (slope, &published) in row.iter().zip(published) {
                    let far = (slope.hi() - published).max(published - slope.lo());
                    assert!(far <= allowed, "{name}: {slope:?}, published {published}");
                }
            }
        }
    });
    let undefined: Vec<_> = undefined.iter().map(|(id, x)| (id.as_str(), x.as_slice())).collect();
    assert_eq!(undefined, NO_SLOPE);
    assert_eq!(compared, 239);
}

/// A list that lacked an equilibrium would be found out here, if it is one that Newton's method reaches.
#[test]
fn no_search_from_many_starts_finds_an_equilibrium_that_is_not_published() {
    let mut source = Source::new(1);
    let mut reached = 0;
    for case in all().iter().filter(|case| !case.facts.contains_key("continua")) {
        let mut read = case.text().read();
        let bounds = read.system.bounds(&read.model).expect("bounds");
        for (scenario, equilibria) in case.lists().enumerate() {
            let tape = read.system.plans[scenario].tape(&read.system.graph);
            let mut newton = Newton::new(&read, scenario, &tape);
            for _ in 0..100 {
                let start = |bound: &Bound| bound.lower + (bound.upper - bound.lower) * source.unit().powi(2);
                let Some(x) = newton.settles(bounds.iter().map(start).collect()) else { continue };
                let inside = |(x, bound): (&f64, &Bound)| bound.lower - 1e-9 * bound.upper <= *x && *x <= bound.upper;
                if !x.iter().zip(&bounds).all(inside) {
                    continue;
                }
                let near = |e: &&Equilibrium| {
                    // Newton's method comes no nearer to a degenerate root than a root of the rounding errors.
                    let within = if e.counts[2] > 0 { 1e-4 } else { 1e-9 };
                    e.x.iter().zip(&x).zip(&bounds).all(|((e, x), bound)| (e - x).abs() <= within * bound.upper)
                };
                assert!(
                    equilibria.iter().any(|e| near(&e)),
                    "{} {}: {x:?}",
                    case.id,
                    read.model.scenarios[scenario].name
                );
                reached += 1;
            }
        }
    }
    assert!(reached > 5000, "{reached}");
}

/// Σ λᵏ = tr Aᵏ for k = 1 … n, which determines the eigenvalues, without an eigenvalue routine. Differences are measured
/// by tr |A|ᵏ, which no choice of units changes, and (1e-6)ᵏ where that is 0.
#[test]
fn spectra_are_the_published_ones() {
    at_all_equilibria(|name, _, equilibrium, found| {
        if !found.domain.defined {
            return;
        }
        let slopes = |of: fn(f64) -> f64| -> Vec<Vec<f64>> {
            found.jacobian.iter().map(|row| row.iter().map(|slope| of(slope.mid())).collect()).collect()
        };
        let (a, sizes) = (slopes(|slope| slope), slopes(f64::abs));
        let (mut power, mut power_of_sizes) = (a.clone(), sizes.clone());
        let mut floor = 1.0;
        for k in 1..=a.len() {
            floor *= 1e-6;
            let sum: f64 = equilibrium.eigenvalues.iter().map(|&(re, im)| re_of_power(re, im, k)).sum();
            let scale = trace(&power_of_sizes) + floor;
            let far = (trace(&power) - sum).abs();
            assert!(far <= 1e-9 * scale, "{name}: tr A^{k} = {}, published {sum}", trace(&power));
            (power, power_of_sizes) = (product(&power, &a), product(&power_of_sizes, &sizes));
        }
    });
}

fn trace(a: &[Vec<f64>]) -> f64 {
    (0..a.len()).map(|i| a[i][i]).sum()
}

/// Re (re + i im)ᵏ
fn re_of_power(re: f64, im: f64, k: usize) -> f64 {
    (1..k).fold((re, im), |(x, y), _| (x * re - y * im, x * im + y * re)).0
}

fn product(a: &[Vec<f64>], b: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let entry = |row: &Vec<f64>, j: usize| row.iter().zip(b).map(|(x, row)| x * row[j]).sum();
    a.iter().map(|row| (0..b.len()).map(|j| entry(row, j)).collect()).collect()
}

#[test]
fn types_follow_from_the_counts() {
    let words = ["stable", "unstable"].map(|s| ["node", "spiral", "star", "improper node"].map(|w| format!("{s} {w}")));
    let mut words = words.concat();
    words.extend(["saddle", "centre", "undecided"].map(String::from));
    at_all_equilibria(|name, _, equilibrium, _| {
        let word = type_word(&equilibrium.linear_type);
        assert!(words.iter().any(|known| known == word), "{name}: {word}");
        let [stable, unstable, critical] = equilibrium.counts;
        let expected = match (stable > 0, unstable > 0, critical > 0) {
            (true, true, _) => word == "saddle",
            (_, true, _) => word.starts_with("unstable"),
            (_, false, true) => ["centre", "undecided"].contains(&word),
            (_, false, false) => word.starts_with("stable"),
        };
        assert!(expected, "{name}: {word} with {:?}", equilibrium.counts);
    });
}

#[test]
fn yields_are_the_published_ones() {
    let mut compared = 0;
    for case in all() {
        let read = case.text().read();
        for (plan, scenario) in read.system.plans.iter().skip(1).zip(&case.scenarios) {
            for equilibrium in &scenario.equilibria {
                for (name, published) in &equilibrium.yields {
                    let harvest = plan.harvests.iter().find(|harvest| harvest.name == *name).expect("counted");
                    let tape = Tape::new(&read.system.graph, &[harvest.amounts[0].1]);
                    let mut run = tape.start(&plan.values);
                    run.at(&equilibrium.x);
                    let far = (run.output(0) - published).abs();
                    assert!(
                        far <= 1e-9 * published.abs().max(1e-6),
                        "{} {} {name}: {}",
                        case.id,
                        plan.name,
                        run.output(0)
                    );
                    compared += 1;
                }
            }
        }
    }
    assert_eq!(compared, 111);
}

/// Exactly two of the 553 states of this gut community are stable (catalogue, C12).
#[test]
fn two_states_of_the_eleven_groups_are_stable() {
    let stable = |e: &&Equilibrium| e.counts == [11, 0, 0];
    assert_eq!(named("C12_gut_community_11").equilibria.iter().filter(stable).count(), 2);
}

/// A published parameter set with a zero invasion rate, 1 - 0.001*1000. The f64 called 0.001 is larger by 2e-20, so that
/// in f64 the state is only nearly degenerate.
#[test]
fn gilpins_degenerate_border_state_is_nearly_degenerate_in_f64() {
    let read = named("C04_gilpin_spiral").text().read();
    let found = read.at(0, &[0.0, 1000.0, 0.0].map(Interval::point));
    let rate = found.jacobian[0][0];
    assert!(rate.contains(-2.081_668_171_172_168_6e-17) && rate.mag() <= f64::EPSILON, "{rate:?}");
}
