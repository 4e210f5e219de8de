//! Branches over the range of a control: models with closed forms, and every shipped scenario against the certified search.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use restpoint::analysis::equilibria::{Budget, Equilibrium, OneByOne, Problem, all};
use restpoint::analysis::linearise::{Kind, Lineariser};
use restpoint::analysis::prepare::Prepared;
use restpoint::analysis::response::{Branch, Control, Ending, Response, Threshold, ThresholdKind, respond};
use restpoint::analysis::subject::Subject;
use restpoint::model::{Model, ParameterId};
use restpoint::num::random::Source;

use crate::common::cases;
use crate::common::text::ModelText;
use crate::setting::{control, subject};
use crate::thresholds::{kind, published};

/// Values of the control at thresholds, and states there, relative.
const NEAR: f64 = 1e-10;
/// The same of published ones.
const PUBLISHED: f64 = 1e-8;

fn budget<'b>() -> Budget<'b> {
    Budget { boxes: 5_000, stop: &|| false, workers: &OneByOne, observer: None }
}

/// The picture of the first scenario, `c` being varied.
fn picture(text: &ModelText, from: f64, to: f64) -> Response {
    let mut read = text.read();
    let mut subject = subject(&mut read);
    let control = control(&subject, "c", from, to);
    let list = found(&mut subject);
    respond(&mut subject, &control, &list, &budget(), &mut |_| ())
}

fn found(subject: &mut Subject<'_>) -> Vec<Equilibrium> {
    let (graph, problem) = subject.problem();
    all(graph, &problem, &budget()).list
}

fn one(rate: &str, upper: &str, present: &str) -> ModelText {
    ModelText::new("one species", upper, &[("x", rate)]).with(&[("c", present)])
}

/// A picture against thresholds worked out by hand: kind, control and the state of the first species; how many branches
/// there are; and whether all of it is proved.
fn check(text: &ModelText, range: [f64; 2], thresholds: &[(ThresholdKind, f64, f64)], branches: usize, complete: bool) {
    let response = picture(text, range[0], range[1]);
    let near = |a: f64, b: f64| (a - b).abs() <= NEAR * b.abs().max(1.0);
    let found: Vec<_> = response.thresholds.iter().map(|t| (t.kind, t.at, t.state[0])).collect();
    let is_like = |(a, b): (&(ThresholdKind, f64, f64), &(ThresholdKind, f64, f64))| {
        a.0 == b.0 && near(a.1, b.1) && near(a.2, b.2)
    };
    assert!(
        found.len() == thresholds.len() && found.iter().zip(thresholds).all(is_like),
        "{found:?} for {thresholds:?}\n{}",
        text.yaml()
    );
    let ends: Vec<_> = response.branches.iter().map(|branch| branch.ends).collect();
    assert_eq!(response.branches.len(), branches, "{ends:?}\n{}", text.yaml());
    assert!(!ends.iter().flatten().any(|end| matches!(end, Ending::Lost)), "{ends:?}\n{}", text.yaml());
    assert_eq!(response.is_complete(), complete, "{:?}\n{}", response.gaps, text.yaml());
    assert!(response.stations.len() >= 3, "{:?}", response.stations);
}

#[test]
fn one_species_in_closed_form() {
    use ThresholdKind::{BorderCollision, Exit, Fold, Pitchfork, Transcritical};
    // Logistic growth, a constant quota: a fold at r K/4 (Schaefer 1954; Clark 1990).
    check(&one("x*(1 - x/10) - c", "20", "1"), [0.5, 4.0], &[(Fold, 2.5, 5.0)], 1, true);
    check(&one("x*(1 - x/10) - c", "20", "0"), [-1.0, 4.0], &[(Exit, 0.0, 0.0), (Fold, 2.5, 5.0)], 1, true);
    // The same under effort: lost at E = r (Schaefer 1954).
    check(&one("x*(1 - x/10) - c*x", "20", "0.2"), [0.0, 2.0], &[(Transcritical, 1.0, 0.0)], 2, true);
    // A strong Allee effect under effort: (x/2 − 1)(1 − x/10) is largest at x = 6, where it is 0.8.
    check(&one("x*((x/2 - 1)*(1 - x/10) - c)", "20", "0.2"), [0.0, 2.0], &[(Fold, 0.8, 6.0)], 2, true);
    // x³ − e x has its folds 4/3 e √(e/3) apart: 1.02e-4 for e = 0.0026.
    let e = 0.0026f64;
    let (root, height) = ((e / 3.0).sqrt(), 2.0 / 3.0 * e * (e / 3.0).sqrt());
    check(
        &one("c - 1 + 0.0026*(x - 2) - (x - 2)^3", "4", "0.5"),
        [0.0, 2.0],
        &[(Fold, 1.0 - height, 2.0 + root), (Fold, 1.0 + height, 2.0 - root)],
        1,
        true,
    );
    // A circle of states that no branch through the present states meets.
    for present in ["0.1", "1"] {
        check(
            &one("x*((x - 2)^2 + (c - 1)^2 - 0.25)", "4", present),
            [0.0, 2.0],
            &[(Fold, 0.5, 2.0), (Fold, 1.5, 2.0)],
            2,
            true,
        );
    }
    // Branches cross: that the picture is whole cannot be proved there.
    check(&one("(c - 1)*(x - 2) - (x - 2)^3", "4", "0.5"), [0.0, 2.0], &[(Pitchfork, 1.0, 2.0)], 2, false);
    check(&one("(c - 1)*(x - 2) - (x - 2)^2", "4", "0.5"), [0.0, 2.0], &[(Transcritical, 1.0, 2.0)], 2, false);
    // They all but cross: y³ = a y + d has a double root −(d/2)^(1/3) where a = 3 (d/2)^(2/3).
    let third = (1e-7f64 / 2.0).cbrt();
    check(
        &one("(c - 1)*(x - 2) - (x - 2)^3 + 1e-7", "4", "0.5"),
        [0.0, 2.0],
        &[(Fold, 1.0 + 3.0 * third * third, 2.0 - third)],
        2,
        true,
    );
    // A branch that leaves through 0 and comes back.
    check(
        &one("x*((c - 1)^2 - 0.25 - x)", "4", "0.1"),
        [0.0, 2.0],
        &[(Transcritical, 0.5, 0.0), (Transcritical, 1.5, 0.0)],
        2,
        true,
    );
    // 2 ramp(x, 2, 3) − x + c is 0 on three straight lines that meet at the kinks: states meet there, and are gone.
    check(
        &one("c - x + 2*ramp(x, 2, 3)", "6", "0.5"),
        [0.1, 3.0],
        &[(BorderCollision, 1.0, 3.0), (BorderCollision, 2.0, 2.0)],
        1,
        true,
    );
    // Takes of c x, but 0.2 at most: x (1 − x) = 0.2 at the kinks, where c = 1 − x. From the upper c on there are two states
    // more, born at a kink, that no branch through the present states meets.
    let root = 0.05f64.sqrt();
    check(
        &one("x*(1 - x) - min(c*x, 0.2)", "2", "0.3"),
        [0.1, 0.9],
        &[(BorderCollision, 0.5 - root, 0.5 + root), (BorderCollision, 0.5 + root, 0.5 - root)],
        3,
        false,
    );
}

/// Every published threshold of one parameter is on the picture around it, as a threshold of its kind, whatever branch it
/// lies on, but for one whose state the box does not hold.
#[test]
fn published_thresholds_are_on_the_picture() {
    let mut missed = Vec::new();
    let mut count = 0;
    for case in cases::all() {
        for published in published(&case) {
            let mut read = case.text().read();
            let mut subject = subject(&mut read);
            let reach = 0.4 * published.at.abs();
            let control = control(&subject, published.parameter, published.at - reach, published.at + reach);
            if published.state.iter().zip(&subject.sides).any(|(x, side)| !(side[0]..=side[1]).contains(x)) {
                continue;
            }
            let list = found(&mut subject);
            let response = respond(&mut subject, &control, &list, &budget(), &mut |_| ());
            let is_it = |found: &Threshold| {
                let most = published.state.iter().fold(1e-9f64, |most, x| most.max(x.abs()));
                let at = (found.at - published.at).abs() <= PUBLISHED * published.at.abs();
                let near = |(a, b): (&f64, &f64)| (a - b).abs() <= PUBLISHED * most;
                at && found.state.iter().zip(&published.state).all(near) && found.kind == kind(&published)
            };
            count += 1;
            if !response.thresholds.iter().any(is_it) {
                let all: Vec<_> = response.thresholds.iter().map(|t| (t.kind, t.at, t.state.clone())).collect();
                missed.push(format!(
                    "{} {} {} = {} at {:?}: {all:?}",
                    case.id, published.kind, published.parameter, published.at, published.state
                ));
            }
        }
    }
    assert!(missed.is_empty() && count >= 45, "{} of {count} missed:\n{}", missed.len(), missed.join("\n"));
}

/// Prey and predator of Lotka (1925) and Volterra (1926): a centre all along, and nowhere a Hopf threshold.
#[test]
fn a_centre_is_one_all_along() {
    let rows = [("x", "x*(1 - y)"), ("y", "y*(x - c)")];
    let text = ModelText::new("centre", "9", &rows).with(&[("c", "1")]);
    let response = picture(&text, 0.5, 2.0);
    assert_eq!(response.thresholds, []);
    let both = response.branches.iter().find(|branch| branch.present == [true, true]).unwrap();
    assert!(both.points.iter().all(|point| point.kind == Some(Kind::Centre) && point.stable.is_none()));
    let least = both.points.iter().fold(f64::INFINITY, |least, point| least.min(point.at));
    assert_eq!(least, 0.5);
}

/// Where the model has no value the rest is still there.
#[test]
fn parts_without_a_value_are_said() {
    let response = picture(&one("x*(1 - x/10) - x*ln(c)", "20", "1.5"), -1.0, 2.0);
    let [(from, to, text)] = &response.undefined[..] else { panic!("{:?}", response.undefined) };
    assert!(*from == -1.0 && to.abs() < 1e-12 && text.contains('x'), "{from} {to} {text}");
    let positive = response.branches.iter().find(|branch| branch.present == [true]).unwrap();
    let least = positive.points.iter().fold(f64::INFINITY, |least, point| least.min(point.at));
    assert!(least < 0.3, "{least}");
}

/// An empty range has an empty picture, and a present value outside the range none of the list's states.
#[test]
fn ranges() {
    let text = one("x*(1 - x/10) - c*x", "20", "0.2");
    assert_eq!(picture(&text, 1.0, 1.0).branches, []);
    let beyond = picture(&text, 0.5, 2.0);
    assert_eq!(beyond.branches.len(), 2);
    assert!(beyond.branches.iter().all(|branch| branch.equilibria.is_empty()));
}

/// A point of a branch beside a state at a value of the control: how far off the stretch is, and the types at its ends.
fn beside(branch: &Branch, scale: &[f64], state: &[f64], at: f64, width: f64) -> (f64, [Option<Kind>; 2]) {
    let mut best = (f64::INFINITY, [None, None]);
    for pair in branch.points.windows(2) {
        let coordinates = |k: usize| -> Vec<f64> {
            let point = &pair[k];
            point.state.iter().zip(scale).map(|(x, s)| x / s).chain([point.at / width]).collect()
        };
        let wanted: Vec<f64> = state.iter().zip(scale).map(|(x, s)| x / s).chain([at / width]).collect();
        let (a, b) = (coordinates(0), coordinates(1));
        let along: Vec<f64> = b.iter().zip(&a).map(|(b, a)| b - a).collect();
        let length: f64 = along.iter().map(|x| x * x).sum();
        let share: f64 = wanted.iter().zip(&a).zip(&along).map(|((w, a), d)| (w - a) * d).sum::<f64>() / length;
        let share = if length > 0.0 { share.clamp(0.0, 1.0) } else { 0.0 };
        let off = wanted.iter().zip(&a).zip(&along).map(|((w, a), d)| (w - a - share * d).powi(2)).sum::<f64>().sqrt();
        if off < best.0 {
            best = (off, [pair[0].kind, pair[1].kind]);
        }
    }
    best
}

/// Every certified equilibrium at values of the control drawn at random lies on a branch, and has its type.
fn check_scenario(
    name: &str,
    model: &Model,
    prepared: &Prepared,
    scenario: usize,
    parameter: usize,
    source: &mut Source,
) {
    let Ok(mut subject) = prepared.subject(model, scenario) else { return };
    let range = model.parameters[parameter].range.as_ref().unwrap().value;
    let present = subject.plan.values[parameter];
    let control = Control { parameter: ParameterId(parameter), from: range[0], to: range[1], present };
    let list = found(&mut subject);
    let response = respond(&mut subject, &control, &list, &budget(), &mut |_| ());
    for (which, _) in list.iter().enumerate() {
        let holders = response.branches.iter().filter(|branch| branch.equilibria.contains(&which)).count();
        let is_inside = (range[0]..=range[1]).contains(&present);
        assert_eq!(holders, usize::from(is_inside), "{name}: state {which} of {:?}", model.parameters[parameter].name);
    }
    let width = range[1] - range[0];
    for _ in 0..2 {
        let at = source.between(range[0], range[1]);
        let mut plan = subject.plan.clone();
        plan.values[parameter] = at;
        let mut there = Subject { plan: &plan, ..subject.clone() };
        let problem = Problem { rows: &there.balance, values: &plan.values, sides: &there.sides };
        let found = all(&mut there.graph, &problem, &budget()).list;
        let lineariser = Lineariser::new(&mut there);
        for equilibrium in &found {
            let on = |branch: &&Branch| (0..branch.present.len()).all(|i| branch.present[i] || !equilibrium.has(i));
            let near = response.branches.iter().filter(on).map(|branch| {
                let peak =
                    |i: usize| branch.points.iter().fold(1e-9, |most: f64, point| most.max(point.state[i].abs()));
                let scale: Vec<f64> = (0..branch.present.len()).map(peak).collect();
                beside(branch, &scale, &equilibrium.state, at, width)
            });
            let nearest = near.min_by(|a, b| a.0.total_cmp(&b.0)).unwrap();
            let said =
                format!("{name}, scenario {scenario}, {} = {at}: {equilibrium:?}", model.parameters[parameter].name);
            assert!(nearest.0 < 2e-3, "{said}: {nearest:?} off");
            if let (Ok(linear), [Some(a), Some(b)]) = (lineariser.at(equilibrium), nearest.1)
                && a == b
            {
                assert_eq!(linear.kind, a, "{said}");
            }
        }
    }
}

#[test]
fn every_equilibrium_of_shipped_models_is_on_the_picture() {
    let mut source = Source::new(29);
    for (name, model) in crate::setting::shipped() {
        if model.species.len() > 4 {
            continue;
        }
        let prepared = Prepared::new(&model, &[]).unwrap();
        for scenario in 0..model.scenarios.len() {
            for (parameter, found) in model.parameters.iter().enumerate() {
                if found.control && found.range.is_some() {
                    check_scenario(&name, &model, &prepared, scenario, parameter, &mut source);
                }
            }
        }
    }
}
