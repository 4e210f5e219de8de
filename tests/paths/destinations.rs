//! Where paths go: hand results, published cycles, identities, and references that `tests/data/paths.py` made.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

use crate::common::cases;
use crate::common::references::reference;
use crate::common::text::{ModelText, Read};
use restpoint::analysis::equilibria::{Budget, Equilibrium, OneByOne, all};
use restpoint::analysis::linearise::{Dimensions, Kind, Linearisation};
use restpoint::analysis::paths::{
    Cycle, Destination, Ended, FromNow, follow, from_now, is_unstable_coexistence, settles,
};
use restpoint::analysis::subject::Subject;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::model::{Model, SpeciesId};
use restpoint::num::eigen::spectrum;

const BUDGET: Budget<'_> = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
const NEVER: &dyn Fn() -> bool = &|| false;

fn read(yaml: &str) -> Read {
    let (model, _, found) = load("model.yaml", yaml.as_bytes(), &NoFiles);
    let model: Model = model.unwrap_or_else(|| panic!("{found:?}\n{yaml}"));
    let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{found:?}"));
    Read { model, system }
}

/// Does something with a model and its equilibria.
fn with<T>(read: &Read, scenario: usize, work: impl FnOnce(&mut Subject<'_>, &[Equilibrium]) -> T) -> T {
    let bounds = read.system.clone().bounds(&read.model).expect("bounds");
    let sides = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    let mut subject = Subject::new(&read.model, &read.system.graph, &read.system.plans[scenario], sides);
    let (graph, problem) = subject.problem();
    let found = all(graph, &problem, &BUDGET);
    work(&mut subject, &found.list)
}

/// The linear part of an equilibrium as far as paths need it.
fn linearised(subject: &Subject<'_>, equilibrium: &Equilibrium) -> Linearisation {
    let n = subject.species();
    let tape = subject.plan.tape(&subject.graph);
    let mut run = tape.start_gradient::<f64>(&subject.plan.values);
    run.at(&equilibrium.state);
    let row = |i| run.gradient(i).map_or_else(|| vec![0.0; n], <[f64]>::to_vec);
    let jacobian: Vec<f64> = (0..n).flat_map(row).collect();
    let spectrum = spectrum(&jacobian, n).expect("eigenvalues");
    Linearisation {
        stable: Some(spectrum.values.iter().all(|value| value.re < 0.0)),
        jacobian,
        enclosure: Vec::new(),
        spectrum,
        kind: Kind::Undecided,
        kind_proven: false,
        stable_proven: false,
        dimensions: Dimensions::default(),
        alternating: false,
        nonlinear: None,
    }
}

/// Where a path released beside the equilibrium with most species goes.
fn beside_the_last(read: &Read) -> (Destination, Vec<Equilibrium>) {
    with(read, 0, |subject, list| {
        let linear = vec![None; list.len()];
        (settles(subject, list, &linear, list.len() - 1, NEVER), list.to_vec())
    })
}

fn now(read: &Read) -> (FromNow, Vec<Equilibrium>) {
    with(read, 0, |subject, list| {
        let linear = vec![None; list.len()];
        (from_now(subject, list, &linear, NEVER).expect("a survey of all species"), list.to_vec())
    })
}

fn cycle(destination: Destination) -> Cycle {
    match destination {
        Destination::Cycle(cycle) => cycle,
        other => panic!("{other:?} is no cycle"),
    }
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found}, not {expected}");
}

fn prey_and_predator(k: &str) -> String {
    format!(
        "title: prey and predator\ntime: yr\n\
         species:\n  N: {{upper: 100}}\n  P: {{upper: 100}}\n\
         parameters: {{K: {k}, m: 0.3, e: 1}}\n\
         shorthand: {{eaten: N*P/(1 + N)}}\n\
         change:\n  N: N*(1 - N/K) - eaten\n  P: e*eaten - m*P\n\
         harvest:\n  prey eaten: {{counts: {{N: eaten}}}}\n  share: {{counts: {{N: N/(1 + N)}}}}\n"
    )
}

/// Rosenzweig & MacArthur (1963); deep troughs: at K = 30 prey falls to 1e-42. Over a cycle ln P returns, so the mean of
/// N/(1 + N) is m/e.
#[test]
fn cycles_of_prey_and_predator() {
    for k in ["2", "4", "10", "30"] {
        let model = read(&prey_and_predator(k));
        let found = cycle(beside_the_last(&model).0);
        let known = |quantity: &str| reference(&format!("prey and predator {k}"), quantity);
        close(found.period, known("period"), 1e-6);
        for (i, name) in ["N", "P"].into_iter().enumerate() {
            close(found.lowest[i], known(&format!("lowest {name}")), 3e-6);
            close(found.highest[i], known(&format!("highest {name}")), 3e-6);
        }
        let [(species, share)] = found.mean_yield[1][..] else { panic!("{:?}", found.mean_yield) };
        assert_eq!(species, SpeciesId(0));
        close(share, 0.3, 1e-6);
    }
}

/// May & Leonard (1975): the ring passes its three corners ever more slowly; that is no cycle.
#[test]
fn a_heteroclinic_cycle_is_not_settled() {
    let row = |a: &str, b: &str, c: &str| format!("{a}*(1 - {a} - 0.8*{b} - 1.3*{c})");
    let rows = [row("A", "B", "C"), row("B", "C", "A"), row("C", "A", "B")];
    let text = ModelText::new("ring", "2", &[("A", &rows[0]), ("B", &rows[1]), ("C", &rows[2])]);
    assert_eq!(beside_the_last(&text.read()).0, Destination::NotSettled);
}

/// A conservative system: a path of Volterra's (1926) equations from anywhere returns to where it was.
#[test]
fn a_closed_orbit_is_told_by_its_constant() {
    let yaml = "title: a\ntime: yr\nspecies:\n  N: {upper: 10}\n  P: {upper: 10}\n\
                change:\n  N: N*(1 - P)\n  P: P*(N - 1)\nnow: {N: 2, P: 1}\n";
    let (found, _) = now(&read(yaml));
    let orbit = cycle(found.reaches);
    // N − ln N + P − ln P is constant: 3 − ln 2; the lowest N solves N − ln N = 2 − ln 2.
    let constant = |n: f64| n - n.ln();
    for (i, value) in [(0, orbit.lowest[0]), (0, orbit.highest[0]), (1, orbit.lowest[1]), (1, orbit.highest[1])] {
        assert!((constant(value) - constant(2.0)).abs() < 1e-6, "{i}: {value}");
    }
    assert!(orbit.lowest[0] < 0.5 && (orbit.highest[0] - 2.0).abs() < 1e-6);
    // Small orbits take 2π, larger ones longer.
    assert!(orbit.period > std::f64::consts::TAU && orbit.period < 7.0, "{}", orbit.period);
}

#[test]
fn published_cycles_of_maps() {
    let mut seen = 0;
    for case in cases::all() {
        let Some(published) = case.facts.get("cycles").and_then(|cycles| cycles.as_array()) else { continue };
        let found = cycle(beside_the_last(&case.text().read()).0);
        for one in published {
            let points: Vec<f64> =
                one["points"].as_array().unwrap().iter().map(|x| x.as_str().unwrap().parse().unwrap()).collect();
            close(found.period, one["period"].as_f64().unwrap(), 1e-15);
            close(found.lowest[0], points.iter().copied().fold(f64::INFINITY, f64::min), 1e-9);
            close(found.highest[0], points.iter().copied().fold(0.0, f64::max), 1e-9);
            seen += 1;
        }
    }
    assert_eq!(seen, 2);
}

/// May (1976): the logistic map has cycles of 4 at 3.5 and of 3 at 3.83, and chaos at 3.9. A delayed logistic map
/// (Maynard Smith 1968) past its Neimark–Sacker point, a = 2, fills a closed curve: near it, a turn takes six steps.
#[test]
fn maps_repeat_or_turn_or_neither() {
    let logistic = |r: &str| {
        let mut text = ModelText::new("map", "1", &[("x", &format!("{r}*x*(1 - x)"))]);
        text.discrete = true;
        beside_the_last(&text.read()).0
    };
    close(cycle(logistic("3.5")).period, 4.0, 0.0);
    close(cycle(logistic("3.83")).period, 3.0, 0.0);
    assert_eq!(logistic("3.9"), Destination::NotSettled);
    let mut text = ModelText::new("delayed", "2", &[("x", "2.02*x*(1 - y)"), ("y", "x")]);
    text.discrete = true;
    let turning = cycle(beside_the_last(&text.read()).0);
    close(turning.period, 6.0, 0.03);
    assert!(turning.lowest[0] < 0.5 - 0.02 && turning.highest[0] > 0.52, "{turning:?}");
}

/// A stable spiral: when the path comes within 10 % of it for good, and how low it went.
#[test]
fn the_time_to_an_equilibrium() {
    let yaml = prey_and_predator("1.5") + "now: {N: 1.2, P: 0.3}\n";
    let (found, list) = now(&read(&yaml));
    assert_eq!(found.reaches, Destination::Equilibrium(list.len() - 1));
    let known = |quantity: &str| reference("prey and predator 1.5", quantity);
    close(found.time.unwrap(), known("entry"), 1e-5);
    close(found.lowest[0], known("lowest N"), 1e-5);
    close(found.lowest[1], known("lowest P"), 1e-9);
    assert!(found.shares.is_empty() && found.starts == 0);
}

/// A one-species Allee effect: below A everything dies out. The share of the cloud below A is known: with s the spread of
/// the logarithm and z = ln(A/value)/s, it is Φ(z) less the tail that the 95 % region cuts off.
#[test]
fn shares_of_a_cloud_on_both_sides_of_a_threshold() {
    let check = |value: f64, expected: f64| {
        let yaml = format!(
            "title: Allee\ntime: yr\nspecies:\n  N: {{upper: 200}}\nparameters: {{A: 20, K: 100}}\n\
             change: {{N: 'N*(N/A - 1)*(1 - N/K)'}}\nnow: {{N: {{value: {value}, cv: 0.5}}}}\n"
        );
        let (found, list) = now(&read(&yaml));
        assert_eq!(list.len(), 3);
        let share = |index| {
            found.shares.iter().find(|(to, _)| *to == Destination::Equilibrium(index)).map_or(0.0, |(_, share)| *share)
        };
        assert!(found.starts >= 200 && (share(0) + share(2) - 1.0).abs() < 1e-12, "{:?}", found.shares);
        assert!((share(0) - expected).abs() <= 1.0 / 250.0, "{value}: {} die out, not {expected}", share(0));
        assert_eq!(found.reaches, Destination::Equilibrium(if value > 20.0 { 2 } else { 0 }));
    };
    // s = √ln 1.25 = 0.472381. z = ln(20/25)/s = −0.472381 (by ln(5/4) = s²): Φ = 0.318325, so (0.318325 − 0.025)/0.95.
    check(25.0, 0.308_763);
    // z = ln(20/15)/s = 0.609004: Φ = 0.728740, so (0.728740 − 0.025)/0.95.
    check(15.0, 0.740_779);
    // ln(20/60)/s = −2.33: beyond the region.
    check(60.0, 0.0);
}

/// Nothing grows, a quota of 2 a year is taken of 10 whatever there is: after 5 years nothing is left. With decay at rate
/// 0.1 as well, N = 30 e^(−t/10) − 20: after 10 ln 1.5 years.
#[test]
fn a_quota_ends_in_finite_time() {
    let check = |row: &str, time: f64| {
        let yaml = format!(
            "title: quota\ntime: yr\nspecies:\n  N: {{upper: 100}}\n  P: {{upper: 100}}\nparameters: {{Q: 2}}\n\
             change: {{N: {row}, P: 'P*(1 - P/50)'}}\nharvest: {{quota: {{takes: {{N: Q}}}}}}\n\
             now: {{N: {{value: 10, cv: 0.1}}, P: 10}}\n"
        );
        let model = read(&yaml);
        let (found, _) = now(&model);
        assert_eq!(found.reaches, Destination::Loss(vec![SpeciesId(0)]));
        close(found.time.unwrap(), time, 1e-6);
        assert_eq!(found.lowest[0], 0.0);
        assert_eq!(found.shares, [(Destination::Loss(vec![SpeciesId(0)]), 1.0)]);
        // The other grows on: P = 50/(1 + 4 e^(−t)).
        with(&model, 0, |subject, _| {
            let path = follow(subject, &[10.0, 10.0], 20.0, NEVER);
            let [(species, when)] = path.lost[..] else { panic!("{:?}", path.lost) };
            assert_eq!((species, path.ended), (SpeciesId(0), Ended::InTime));
            close(when, time, 1e-6);
            let (t, state) = (path.times.last().unwrap(), path.states.last().unwrap());
            close(*t, 20.0, 1e-15);
            assert_eq!(state[0], 0.0);
            close(state[1], 50.0 / (1.0 + 4.0 * (-20f64).exp()), 1e-6);
        });
    };
    check("0", 5.0);
    check("-0.1*N", 10.0 * 1.5f64.ln());
}

/// A predator that eats too little dies out while its prey and another predator cycle: lost, though never at 0.
#[test]
fn one_that_dies_out_beside_a_cycle_is_lost() {
    let yaml = "title: a\ntime: yr\nspecies:\n  N: {upper: 100}\n  P: {upper: 100}\n  R: {upper: 100}\n\
                change:\n  N: 'N*(1 - N/4) - N*P/(1 + N) - 0.5*N*R/(1 + N)'\n  P: 'P*(N/(1 + N) - 0.3)'\n\
                \x20 R: 'R*(0.5*N/(1 + N) - 0.25)'\nnow: {N: 1, P: 1, R: {value: 0.5, cv: 0.3}}\n";
    let (found, _) = now(&read(yaml));
    assert_eq!(found.reaches, Destination::Loss(vec![SpeciesId(2)]));
    // Its mean rate of growth is 0.5 · 0.3 − 0.25 = −0.1.
    assert!(found.time.is_some_and(|time| time > 0.0 && time < 60.0), "{:?}", found.time);
}

/// Forwards against references; backwards to where it came from.
#[test]
fn paths_forwards_and_backwards() {
    let text = ModelText::new(
        "chain",
        "20",
        &[
            ("X", "X*(1 - X) - 5*X*Y/(1 + 2*X)"),
            ("Y", "5*X*Y/(1 + 2*X) - 0.1*Y*Z/(1 + 2*Y) - 0.4*Y"),
            ("Z", "0.1*Y*Z/(1 + 2*Y) - 0.01*Z"),
        ],
    );
    with(&text.read(), 0, |subject, _| {
        let path = follow(subject, &[0.8, 0.2, 8.0], 100.0, NEVER);
        assert_eq!(path.ended, Ended::InTime);
        for (i, name) in ["X", "Y", "Z"].into_iter().enumerate() {
            close(path.states.last().unwrap()[i], reference("chain", &format!("{name} at 100.0")), 1e-4);
        }
    });
    let logistic = ModelText::new("logistic", "100", &[("N", "N*(1 - N/50)")]);
    with(&logistic.read(), 0, |subject, _| {
        let forwards = follow(subject, &[10.0], 3.0, NEVER);
        let end = forwards.states.last().unwrap().clone();
        close(end[0], 50.0 / (1.0 + 4.0 * (-3f64).exp()), 1e-6);
        let backwards = follow(subject, &end, -3.0, NEVER);
        close(backwards.states.last().unwrap()[0], 10.0, 1e-5);
        assert!(backwards.times.windows(2).all(|pair| pair[1] < pair[0]));
        assert_eq!(follow(subject, &[10.0], 1e6, &|| true).ended, Ended::Asked);
    });
}

/// Shares in two species: each start followed alone says the same.
#[test]
fn batches_agree_with_single_paths() {
    let yaml = "title: a\ntime: yr\nspecies:\n  N: {upper: 300}\n  P: {upper: 300}\n\
                change:\n  N: N*(1 - (N + 1.4*P)/100)\n  P: P*(1 - (P + 1.4*N)/100)\n\
                now: {N: {value: 40, cv: 0.4}, P: {value: 45, cv: 0.4}}\n";
    let model = read(yaml);
    let (found, list) = now(&model);
    // By symmetry the separatrix is N = P: P is ahead where its logarithm is, whose difference is normal with √2 s.
    let ahead = found.shares.iter().find(|(to, _)| matches!(to, Destination::Equilibrium(e) if list[*e].has(1)));
    let ahead = ahead.map_or(0.0, |(_, share)| *share);
    // s² = ln 1.16; ln(45/40)/(√2 s) = 0.2162, Φ = 0.586; the cut takes both sides nearly alike.
    assert!((ahead - 0.586).abs() < 0.06, "{:?}", found.shares);
    assert_eq!(found.shares.len(), 2);
}

/// The path may lead to a cycle from part of the cloud only; all that cycle count as one.
#[test]
fn a_cloud_around_a_cycle() {
    let yaml = prey_and_predator("4") + "now: {N: {value: 1, cv: 0.3}, P: {value: 1, cv: 0.3}}\n";
    let (found, _) = now(&read(&yaml));
    let period = cycle(found.reaches).period;
    close(period, reference("prey and predator 4", "period"), 1e-6);
    let [(Destination::Cycle(counted), share)] = &found.shares[..] else { panic!("{:?}", found.shares) };
    assert!(counted.period == period && *share == 1.0);
}

#[test]
fn no_survey_no_answer() {
    let model = read(&prey_and_predator("4"));
    assert!(with(&model, 0, |subject, list| from_now(subject, list, &vec![None; list.len()], NEVER)).is_none());
    let part = read(&(prey_and_predator("4") + "now: {N: 1}\n"));
    assert!(with(&part, 0, |subject, list| from_now(subject, list, &vec![None; list.len()], NEVER)).is_none());
}

/// Two competitors that exclude each other (Gause): from beside the saddle one of them is lost, on either side. A spiral
/// that repels: both sides wind to the same cycle, whatever vector they start along.
#[test]
fn released_along_the_leading_vector() {
    let settled = |model: &Read| {
        with(model, 0, |subject, list| {
            let linear: Vec<Linearisation> = list.iter().map(|e| linearised(subject, e)).collect();
            let last = list.len() - 1;
            let asked: Vec<bool> =
                list.iter().zip(&linear).map(|(e, l)| is_unstable_coexistence(subject, e, l)).collect();
            assert!(asked[last] && asked[..last].iter().all(|asked| !asked), "{asked:?}");
            let linear: Vec<Option<&Linearisation>> = linear.iter().map(Some).collect();
            (settles(subject, list, &linear, last, NEVER), list.to_vec())
        })
    };
    let rivals = [("N", "N*(1 - (N + 1.4*P)/100)"), ("P", "P*(1 - (P + 1.4*N)/100)")];
    let (to, list) = settled(&ModelText::new("rivals", "300", &rivals).read());
    let Destination::Equilibrium(index) = to else { panic!("{to:?}") };
    assert_eq!(list[index].state.iter().filter(|x| **x > 0.0).count(), 1, "{:?}", list[index]);
    let (to, _) = settled(&read(&prey_and_predator("4")));
    close(cycle(to).period, reference("prey and predator 4", "period"), 1e-6);
}

/// An Allee effect, one species: above the threshold it grows, below it is gone. The side that loses more is told.
#[test]
fn of_two_sides_the_one_that_loses_more() {
    let text = ModelText::new("Allee", "200", &[("N", "N*(N/20 - 1)*(1 - N/100)")]);
    with(&text.read(), 0, |subject, list| {
        let linear = vec![None; list.len()];
        assert_eq!(settles(subject, list, &linear, 1, NEVER), Destination::Equilibrium(0));
    });
}

/// Whatever the equations, an answer comes, and none is made up.
#[test]
fn odd_equations_end() {
    let check = |rows: [&str; 2], expected: Destination| {
        let [n, p] = rows;
        let yaml = format!(
            "title: odd\ntime: yr\nspecies:\n  N: {{upper: 100}}\n  P: {{upper: 100}}\n\
             change: {{N: '{n}', P: '{p}'}}\nnow: {{N: {{value: 5, cv: 0.2}}, P: {{value: 5, cv: 0.2}}}}\n"
        );
        let (found, _) = now(&read(&yaml));
        assert_eq!(found.reaches, expected, "{rows:?}");
        let total: f64 = found.shares.iter().map(|(_, share)| share).sum();
        close(total, 1.0, 1e-12);
        assert!(found.lowest.iter().all(|low| low.is_finite() && *low >= 0.0), "{:?}", found.lowest);
        assert!(found.time.is_none_or(f64::is_finite));
    };
    // Without bound, in finite time, or for ever.
    check(["N*N", "P*(1 - P)"], Destination::NotSettled);
    check(["N", "P*(1 - P)"], Destination::NotSettled);
    // Undefined once N has fallen below 4.
    check(["-N*sqrt(N - 4)", "P*(1 - P) + ln(N - 4)*0"], Destination::NotSettled);
    // √N is gone after 2 √5 years.
    check(["-sqrt(N)", "P*(1 - P)"], Destination::Loss(vec![SpeciesId(0)]));
    // Both feed each other as stages do; they fade away together.
    check(["P - 2*N", "N - 2*P"], Destination::Equilibrium(0));
    // A million times faster than its prey.
    check(["N*(1 - N/10) - 0.1*N*P", "1000000*(N - P)"], Destination::Equilibrium(1));
}

/// With nobody there, nobody comes; with quotas of all, all are lost; a quota taken of a map's next state as well.
#[test]
fn nobody_is_left() {
    let check = |text: &str, expected: Destination, time: f64| {
        let (found, _) = now(&read(text));
        assert_eq!(found.reaches, expected, "{text}");
        close(found.time.unwrap(), time, 1e-6);
        for (to, share) in &found.shares {
            assert!(*to == expected && (*share - 1.0).abs() < 1e-12, "{:?}", found.shares);
        }
    };
    let head = "title: a\ntime: yr\nspecies:\n  N: {upper: 100}\n  P: {upper: 100}\n";
    let grow = "change: {N: N*(1 - N/50), P: P*(1 - P/50)}\n";
    check(&format!("{head}{grow}now: {{N: 0, P: 0}}\n"), Destination::Equilibrium(0), 0.0);
    let both = Destination::Loss(vec![SpeciesId(0), SpeciesId(1)]);
    let cloud = "now: {N: {value: 6, cv: 0.1}, P: {value: 12, cv: 0.1}}\n";
    let quotas = "change: {N: 0, P: 0}\nharvest: {quota: {takes: {N: 2, P: 3}}}\n";
    check(&format!("{head}{quotas}{cloud}"), both.clone(), 4.0);
    let head = head.replace("time: yr", "time: {unit: yr, step: 1}");
    // 6, 3.5, 1, −1.5: lost in the third year; 12, 7.5, 3, −1.5 likewise.
    let quotas = "next: {N: N, P: P}\nharvest: {quota: {takes: {N: 2.5, P: 4.5}}}\n";
    check(&format!("{head}{quotas}now: {{N: 6, P: 12}}\n"), both, 3.0);
    let fade = "next: {N: 0.5*N, P: 0.5*P}\n";
    check(&format!("{head}{fade}{}", "now: {N: 16, P: 16}\n"), Destination::Equilibrium(0), 4.0);
}

/// Voles that mink from elsewhere eat up, in a box a thousand times what the bank holds. There is no equilibrium with
/// voles, so no cycle around one (Poincaré & Bendixson): every start ends without them.
#[test]
fn a_box_far_larger_than_what_matters() {
    let yaml = "title: bank\ntime: yr\nspecies:\n  V: {upper: 30000}\n  M: {upper: 4}\nchange:\n\
                \x20 V: 1.5*V*(1 - V/30) - 4*V*M/(1 + 0.1*V)\n\
                \x20 M: 0.004*V*M/(1 + 0.1*V) + 0.3*M*(1 - M/0.8) + 0.05 - 0.15*M\n\
                now: {V: {value: 9, cv: 0.35}, M: {value: 0.45, cv: 0.3}}\n";
    let (found, list) = now(&read(yaml));
    assert!(list.len() == 1 && !list[0].has(0), "{list:?}");
    assert_eq!(found.reaches, Destination::Equilibrium(0));
    assert_eq!(found.shares, [(Destination::Equilibrium(0), 1.0)]);
}

/// Regions around equilibria of two hundred species take half a minute, in which nothing was asked.
#[test]
fn what_is_told_to_stop_looks_for_no_regions() {
    let text = ModelText::new("at rest", "9", &[("x", "x*(1 - x)"), ("y", "y*(1 - y)")]);
    let model = read(&format!("{}now: {{x: {{value: 1, cv: 0.1}}, y: 1}}\n", text.yaml()));
    let reaches = |stop: &dyn Fn() -> bool| {
        with(&model, 0, |subject, list| from_now(subject, list, &vec![None; list.len()], stop).unwrap().reaches)
    };
    assert_eq!(reaches(NEVER), Destination::Equilibrium(3));
    assert_eq!(reaches(&|| true), Destination::NotSettled);
}
