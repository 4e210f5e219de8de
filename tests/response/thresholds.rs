//! Thresholds from brackets around them, against published values and closed forms.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use restpoint::analysis::linearise::{Forced, Lineariser};
use restpoint::analysis::response::equations::Face;
use restpoint::analysis::response::locate::Sign;
use restpoint::analysis::response::{Criticality, Threshold, ThresholdKind};
use serde_json::Value;

use crate::common::cases::{self, Case, number};
use crate::setting::{Bench, parameter, subject};

/// Relative, of values of a control and of states.
const NEAR: f64 = 1e-10;

/// A published threshold of one parameter.
pub(crate) struct Published<'c> {
    case: &'c Case,
    entry: &'c Value,
    pub(crate) kind: &'c str,
    pub(crate) parameter: &'c str,
    pub(crate) at: f64,
    pub(crate) state: Vec<f64>,
}

/// Those that are thresholds of one control: cusps and Bogdanov–Takens points are of two, a change from node to spiral is
/// none, and at C13's the equilibria are a continuum.
pub(crate) fn published(case: &Case) -> Vec<Published<'_>> {
    let Some(list) = case.facts.get("thresholds") else { return Vec::new() };
    let of_one = |entry: &&Value| {
        let kind = entry["kind"].as_str().unwrap();
        !["cusp", "bogdanov-takens", "node-focus", "other", "transcritical-multiple"].contains(&kind)
    };
    let threshold = |entry: &'_ Value| {
        let parameter = entry["parameter"].as_str().unwrap();
        (parameter.to_owned(), number(&entry["values"][parameter]))
    };
    let mut found = Vec::new();
    for entry in list.as_array().unwrap().iter().filter(of_one) {
        found.push(Published {
            case,
            entry,
            kind: entry["kind"].as_str().unwrap(),
            parameter: entry["parameter"].as_str().unwrap(),
            at: threshold(entry).1,
            state: case.species.iter().map(|s| number(&entry["at"][s.as_str()])).collect(),
        });
    }
    found
}

fn near(found: f64, expected: f64, size: f64) -> bool {
    (found - expected).abs() <= NEAR * size.max(expected.abs())
}

/// The face and the sign by which it may be met, from either branch where two cross.
fn ways(published: &Published<'_>, bench: &mut Bench<'_>) -> Vec<(Face, Sign)> {
    let present: Vec<usize> = (0..published.state.len()).filter(|&i| published.state[i] != 0.0).collect();
    let absent: Vec<usize> = (0..published.state.len()).filter(|&i| published.state[i] == 0.0).collect();
    let face = bench.face(&present);
    match published.kind {
        "fold" | "fold-vertical" => vec![(face, Sign::Turn)],
        "hopf" | "neimark-sacker" => vec![(face, Sign::Pair(None))],
        "flip" => vec![(face, Sign::Flip(None))],
        "pitchfork" => vec![(face, Sign::Crossing)],
        "transcritical" if absent.iter().all(|&i| bench.equations.divided[i].is_none()) => {
            let all: Vec<usize> = (0..published.state.len()).collect();
            let whole = bench.face(&all);
            vec![(face, Sign::Block(absent.clone())), (whole, Sign::Abundance(absent[0]))]
        }
        "transcritical" => {
            let comes = |&i: &usize| (face.clone(), Sign::Growth(i));
            absent.iter().map(comes).collect()
        }
        other => panic!("{other}"),
    }
}

/// Two points around, neither of them nor the middle the threshold.
fn around(published: &Published<'_>, bench: &Bench<'_>, face: &Face, sign: &Sign) -> [Vec<f64>; 2] {
    let at = |state: &dyn Fn(usize) -> f64, control: f64| {
        let state: Vec<f64> = (0..published.state.len()).map(state).collect();
        bench.point(face, &state, &[published.at * control])
    };
    let x = &published.state;
    match sign {
        Sign::Turn => [at(&|i| x[i] * 0.93, 0.99), at(&|i| x[i] * 1.05, 0.995)],
        Sign::Abundance(_) => [at(&|i| x[i] + 0.5 + 0.1 * i as f64, 1.02), at(&|i| x[i] - 0.3 - 0.1 * i as f64, 0.97)],
        _ => [at(&|i| x[i] * 1.01, 0.97), at(&|i| x[i] * (0.985 - 0.01 * i as f64), 1.02)],
    }
}

pub(crate) fn kind(published: &Published<'_>) -> ThresholdKind {
    match published.kind {
        "fold" | "fold-vertical" => ThresholdKind::Fold,
        "hopf" => ThresholdKind::Hopf,
        "neimark-sacker" => ThresholdKind::NeimarkSacker,
        "flip" => ThresholdKind::PeriodDoubling,
        "pitchfork" => ThresholdKind::Pitchfork,
        _ => ThresholdKind::Transcritical,
    }
}

/// Value, state, eigenvalues and criticality are those published; whether it was found.
fn agrees(published: &Published<'_>, found: &Threshold) -> bool {
    let name = &published.case.id;
    if !near(found.at, published.at, 0.0) {
        return false;
    }
    let most = published.state.iter().fold(0.0f64, |most, x| most.max(x.abs()));
    let states = found.state.iter().zip(&published.state).all(|(a, b)| near(*a, *b, most));
    assert!(states, "{name}: {:?} for {:?}", found.state, published.state);
    assert_eq!(found.kind, kind(published), "{name}");
    let expected: Vec<(f64, f64)> = published.entry["eigenvalues"]
        .as_array()
        .unwrap()
        .iter()
        .map(|value| (number(&value["re"]), number(&value["im"])))
        .collect();
    let largest = expected.iter().fold(0.0f64, |most, (re, im)| most.max(re.hypot(*im)));
    // A double eigenvalue is known to half the digits alone.
    let is_double = expected.iter().filter(|value| **value == (0.0, 0.0)).count() > 1;
    for (re, im) in expected {
        let off = found.eigenvalues.iter().map(|z| (z.re - re).hypot(z.im - im)).fold(f64::INFINITY, f64::min);
        assert!(off <= if is_double { 1e-6 } else { 1e-8 * largest }, "{name}: {re} {im} in {:?}", found.eigenvalues);
    }
    true
}

/// What the published coefficient says.
fn criticality(published: &Published<'_>) -> Option<Criticality> {
    let entry = published.entry;
    let soft = |is_soft: bool| Some(if is_soft { Criticality::Soft } else { Criticality::Hard });
    match entry["criticality"].as_str() {
        Some("supercritical") => return soft(true),
        Some("subcritical") => return soft(false),
        _ => {}
    }
    if let Some(c) = entry["normal_form"].get("c") {
        return soft(number(c) > 0.0);
    }
    let d = entry["normal_form"].get("d").map(number)?;
    if d == 0.0 { None } else { soft(d < 0.0) }
}

#[test]
fn published_thresholds_are_met_from_every_branch_that_they_lie_on() {
    let mut count = 0;
    for case in cases::all() {
        for published in published(&case) {
            let mut read = case.text().read();
            let subject = subject(&mut read);
            let mut bench = Bench::new(&subject, &[published.parameter]);
            let mut is_found = false;
            for (face, sign) in ways(&published, &mut bench) {
                let [before, after] = around(&published, &bench, &face, &sign);
                let Some(found) = bench.threshold(&face, sign.clone(), &before, &after) else { continue };
                if agrees(&published, &found) {
                    is_found = true;
                    assert!(found.error <= 1e-12 * published.at.abs(), "{}: {:e}", case.id, found.error);
                    if kind(&published) != ThresholdKind::Pitchfork {
                        assert_eq!(found.criticality, criticality(&published), "{}", case.id);
                    }
                }
            }
            assert!(is_found, "{}: {}", case.id, published.entry);
            count += 1;
        }
    }
    assert!(count >= 45, "{count} thresholds");
}

#[test]
fn first_lyapunov_coefficients_are_those_published() {
    let mut count = 0;
    for case in cases::all() {
        for published in published(&case) {
            let Some(value) = published.entry.get("first_lyapunov") else { continue };
            let mut read = case.text().read();
            let subject = subject(&mut read);
            let control = parameter(subject.model, published.parameter);
            let mut lineariser = Lineariser::open(&subject, &[control]);
            lineariser.set(control, published.at);
            let found = lineariser.forced(&published.state, Forced::Pair).unwrap();
            let expected = number(&value["value"]);
            assert!((found.value - expected).abs() <= 1e-8 * found.terms, "{}: {} {expected}", case.id, found.value);
            count += 1;
        }
    }
    assert!(count >= 7, "{count} coefficients");
}
