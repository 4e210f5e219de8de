//! Best yields, removal and open access against closed forms and published numbers.

use restpoint::analysis::response::ThresholdKind;
use serde_json::Value;

use crate::by_hand::{Piece, Study, stable, unstable};
use crate::common::cases::{self, number};

/// Relative: a maximum is known to rounding in its place, for its slope is what is solved.
const CLOSE: f64 = 1e-10;

fn is_close(found: f64, expected: f64) -> bool {
    (found - expected).abs() <= CLOSE * expected.abs()
}

/// A published case with the yields of this name counted on its first species.
fn published(id: &str, names: &[&str]) -> (Study, Vec<Value>) {
    let case = cases::named(id);
    let yields: Vec<Value> = case.facts["yields"].as_array().unwrap().clone();
    let of = |name: &&str| yields.iter().find(|entry| entry["name"] == **name).unwrap().clone();
    let wanted: Vec<Value> = names.iter().map(of).collect();
    let mut text = case.text();
    let counted = |entry: &Value| {
        let word = |key: &str| entry[key].as_str().unwrap().to_owned();
        (word("name"), word("expression"))
    };
    text.counts = wanted.iter().map(counted).collect();
    (Study::new(&text), wanted)
}

/// The best yields of published cases, attained inside the range, where the file's maximum says that they are.
fn check(id: &str, control: &str, range: [f64; 2], names: &[&str], pieces: Vec<Piece>) {
    let (study, wanted) = published(id, names);
    let response = study.response(study.control(control, range), vec![pieces]);
    let advice = study.advice(&response);
    for (place, entry) in wanted.iter().enumerate() {
        let best = advice.best.iter().find(|best| best.taking == Some(place)).unwrap();
        let at = number(&entry["override"][control]);
        assert!(best.attained && best.edge.is_none(), "{id}: {best:?}");
        assert!(is_close(best.amount, number(&entry["value"])), "{id}: {best:?} for {}", entry["value"]);
        assert!(is_close(best.at, at), "{id}: {best:?} at {at}");
        let species = cases::named(id).species;
        for (i, x) in entry["at"]
            .as_object()
            .unwrap()
            .iter()
            .map(|(name, x)| (species.iter().position(|species| species == name).unwrap(), number(x)))
        {
            assert!(is_close(best.state[i], x), "{id}: {best:?} with {x}");
        }
        // The nearest loss is the threshold at the end of the piece.
        match best.nearest {
            Some((threshold, share)) => {
                let edge = response.thresholds[threshold].at;
                assert!(is_close(share, (edge - best.at).abs() / edge.abs().max(best.at.abs())), "{id}: {best:?}");
            }
            None => assert!(response.thresholds.is_empty(), "{id}: {best:?}"),
        }
    }
}

const TRANSCRITICAL: Option<ThresholdKind> = Some(ThresholdKind::Transcritical);
const FOLD: Option<ThresholdKind> = Some(ThresholdKind::Fold);

/// From one number to another.
fn between(from: f64, to: f64, share: f64) -> f64 {
    if share == 1.0 { to } else { from + share * (to - from) }
}

#[test]
fn published_maxima_are_found() {
    // Schaefer (1954): N = K (1 − q E/r).
    let schaefer = |s: f64| {
        let e = between(0.0, 71_000.0, s);
        (e, vec![80_500_000.0 * (1.0 - e / 71_000.0)])
    };
    check("A01_schaefer_halibut", "E", [0.0, 90_000.0], &["MSY"], vec![stable(TRANSCRITICAL, schaefer)]);
    // Fox (1970): N = K exp(−q E/r), never lost.
    let fox = |s: f64| (between(0.0, 500.0, s), vec![50_000.0 * (-0.002 * 500.0 * s / 0.3).exp()]);
    check("A03_fox_gompertz", "E", [0.0, 500.0], &["MSY"], vec![stable(None, fox)]);
    // Pella & Tomlinson (1969) with m = 3/2: B = K (1 − F/(2r))².
    let pella = |s: f64| {
        let f = between(0.0, 0.8, s);
        (f, vec![900.0 * (1.0 - f / 0.8).powi(2)])
    };
    check("A04_pella_tomlinson", "F", [0.0, 1.0], &["MSY"], vec![stable(TRANSCRITICAL, pella)]);
    // Strong Allee effect (after Clark 1990): E = r (1 − N/K)(N/A − 1), by N; folds at N = (A + K)/2.
    let allee = |from: f64, to: f64| {
        move |s: f64| {
            let n = between(from, to, s);
            (0.5 * (1.0 - n / 100.0) * (n / 20.0 - 1.0), vec![n])
        }
    };
    let pieces = || vec![stable(FOLD, allee(100.0, 60.0)), unstable(None, allee(60.0, 20.0))];
    check("A08_strong_allee_effort", "E", [0.0, 0.5], &["MSY"], pieces());
    // Ricker (1954), harvest before reproduction: N = (a + ln(1 − u))/(b (1 − u)).
    let lost = 0.698_805_788_087_797_9;
    let ricker = move |s: f64| {
        let u = between(0.0, lost, s);
        (u, vec![if s == 1.0 { 0.0 } else { (1.2 + (1.0 - u).ln()) / (0.001 * (1.0 - u)) }])
    };
    check("D04_ricker_harvest_msy", "u", [0.0, 0.9], &["MSY catch"], vec![stable(TRANSCRITICAL, ricker)]);
    // Beverton & Holt (1957): N = M (R₀ (1 − u) − 1)/(1 − u).
    let holt = |s: f64| {
        let u = between(0.0, 0.75, s);
        (u, vec![500.0 * (4.0 * (1.0 - u) - 1.0) / (1.0 - u)])
    };
    check("D05_beverton_holt", "u", [0.0, 0.9], &["MSY"], vec![stable(TRANSCRITICAL, holt)]);
}

/// May, Beddington, Clark, Holt & Laws (1979): X₂ = X₁ (1 − F₂), X₁ = (1 − F₁)/(1 + ν (1 − F₂)).
#[test]
fn two_species_yields_are_found() {
    let whales = |f1: f64, f2: f64| {
        let x1 = (1.0 - f1) / (2.0 - f2);
        vec![x1, x1 * (1.0 - f2)]
    };
    let krill = move |s: f64| (between(0.0, 0.99, s), whales(between(0.0, 0.99, s), 0.0));
    check("B25_krill_whale", "F1", [0.0, 0.99], &["max krill yield, whales unharvested"], vec![stable(None, krill)]);
    // The published case has F1 = 0.5; the maximum of the whales' yield is without a take of krill.
    let mut text = cases::named("B25_krill_whale").text();
    text.parameters.iter_mut().find(|(name, _)| name == "F1").unwrap().1 = "0".to_owned();
    text.counts = vec![("whales".to_owned(), "r2*F2*X2".to_owned())];
    let study = Study::new(&text);
    let curve = move |s: f64| (between(0.0, 1.0, s), whales(0.0, between(0.0, 1.0, s)));
    let response = study.response(study.control("F2", [0.0, 1.2]), vec![vec![stable(TRANSCRITICAL, curve)]]);
    let best = &study.advice(&response).best[0];
    assert!(best.attained && is_close(best.amount, 0.4 * (3.0 - 2.0 * 2f64.sqrt())), "{best:?}");
    assert!(is_close(best.at, 2.0 - 2f64.sqrt()), "{best:?}");
    assert_eq!(best.nearest.map(|(threshold, _)| threshold), Some(0));
}

/// Clark (1990), two independent stocks under one effort: total and single yields, and the slower stock lost first.
#[test]
fn total_catch_counts_while_both_stocks_are_kept() {
    let stocks = |e: f64| vec![150_000.0 * (1.0 - e / 500.0), 400_000.0 * (1.0 - e / 800.0)];
    let both = move |s: f64| (between(0.0, 500.0, s), stocks(between(0.0, 500.0, s)));
    let names = ["max total catch", "single-stock MSY blue", "single-stock MSY fin"];
    check("B27_clark_two_independent", "E", [0.0, 1000.0], &names, vec![stable(TRANSCRITICAL, both)]);
    // As a sum of amounts the total is the same: all are counted on one species, so in one unit.
    let (study, _) = published("B27_clark_two_independent", &names[1..]);
    let response = study.response(study.control("E", [0.0, 1000.0]), vec![vec![stable(TRANSCRITICAL, both)]]);
    let total = study.advice(&response).best.into_iter().find(|best| best.taking.is_none()).unwrap();
    assert!(is_close(total.amount, 9453.125) && is_close(total.at, 343.75), "{total:?}");
}

/// A logistic stock with r = 0.08, K = 400 000 under a constant quota (Clark 1990): its largest yield, r K/4 at N = K/2, is only approached.
#[test]
fn a_yield_at_the_fold_is_a_supremum() {
    let (study, _) = published("A05_constant_quota", &["largest sustainable quota"]);
    let by_stock = |from: f64, to: f64| {
        move |s: f64| {
            let n = between(from, to, s);
            (0.08 * n * (1.0 - n / 400_000.0), vec![n])
        }
    };
    let check = |control: [f64; 2], pieces: Vec<Piece>, amount: f64, attained: bool| {
        let response = study.response(study.control("H", control), vec![pieces]);
        let best = &study.advice(&response).best[0];
        assert!(is_close(best.amount, amount) && is_close(best.at, amount), "{best:?}");
        assert_eq!((best.attained, best.edge), (attained, (!attained).then_some(0)), "{best:?}");
        assert_eq!(best.nearest, (!attained).then_some((0, 0.0)));
    };
    let fold = || vec![stable(FOLD, by_stock(400_000.0, 200_000.0)), unstable(None, by_stock(200_000.0, 0.0))];
    check([0.0, 10_000.0], fold(), 8000.0, false);
    // A range that ends before the fold: its end is attained.
    check([0.0, 6000.0], vec![stable(None, by_stock(400_000.0, 300_000.0))], 6000.0, true);
}

/// Gordon (1954), Schaefer (1957): effort settles where p q N = c, at E = (r/q)(1 − c/(p q K)).
#[test]
fn open_access_settles_where_the_value_is_nothing() {
    let check = |cost: f64, expected: Option<f64>| {
        let text = format!(
            "title: t\ntime: yr\nspecies: {{N: {{upper: 1500}}}}\n\
             parameters: {{r: 0.3, K: 1000, q: 0.001, c: {cost}, E: 100}}\n\
             change: {{N: r*N*(1 - N/K)}}\n\
             harvest: {{boats: {{takes: {{N: q*E*N}}, price: {{N: 10}}, cost: c*E}}}}\n"
        );
        let study = Study::of(crate::support::read(&text));
        let curve = |s: f64| (between(0.0, 300.0, s), vec![between(1000.0, 0.0, s)]);
        let response = study.response(study.control("E", [0.0, 400.0]), vec![vec![stable(TRANSCRITICAL, curve)]]);
        let found = study.advice(&response).open_access;
        assert_eq!(found.len(), usize::from(expected.is_some()), "{found:?}");
        for (found, expected) in found.iter().zip(expected) {
            assert!(is_close(found.at, expected) && is_close(found.state[0], cost / 0.01), "{found:?}");
            assert_eq!((found.harvest.as_str(), found.branch), ("boats", 0));
        }
    };
    // Published in case B28: c = 2 gives 240; no fishery above c = 10.
    check(2.0, Some(240.0));
    check(7.5, Some(75.0));
    check(10.0, None);
    check(0.0, None);
}

/// A pest with an Allee effect and immigration-free growth, r = 1, A = 1, K = 4: removed from the fold of its culling on.
#[test]
fn the_least_cull_that_removes_a_pest() {
    let study = Study::of(crate::support::read(
        "title: t\ntime: yr\nspecies: {P: {upper: 9, aim: remove}}\nparameters: {c: 0.2}\n\
         change: {P: P*((1 - P/4)*(P - 1) - c)}\n",
    ));
    let by_pest = |from: f64, to: f64| {
        move |s: f64| {
            let p = between(from, to, s);
            ((1.0 - p / 4.0) * (p - 1.0), vec![p])
        }
    };
    let absent = |s: f64| (between(0.0, 1.0, s), vec![0.0]);
    let with = |range: [f64; 2], with: Vec<Piece>, without: Vec<Piece>| {
        study.advice(&study.response(study.control("c", range), vec![with, without])).removals[0].clone()
    };
    let fold = || vec![stable(FOLD, by_pest(4.0, 2.5)), unstable(None, by_pest(2.5, 1.0))];
    // The fold is at P = 5/2, c = 9/16.
    let found = with([0.0, 1.0], fold(), vec![stable(None, absent)]);
    assert_eq!((found.at, found.threshold, found.settles_without), (Some(0.5625), Some(0), true));
    // Where the state without it is not stable it may live on in cycles.
    assert!(!with([0.0, 1.0], fold(), vec![unstable(None, absent)]).settles_without);
    // A range that ends before.
    let found = with([0.0, 0.4375], vec![stable(None, by_pest(4.0, 3.5))], vec![stable(None, absent)]);
    assert_eq!((found.at, found.threshold, found.settles_without), (None, None, false));
    assert!(study.advice(&study.response(study.control("c", [0.0, 1.0]), Vec::new())).removals.is_empty());
}
