//! That intervals hold the true value as often as they say: 400 repeats, between 92 and 98 in 100.

use restpoint::analysis::uncertain::draw::{Plan, Sampling, Way};
use restpoint::analysis::uncertain::interval::{Basis, Counted, Interval95, Moments, of_mean, of_quantile, of_share};
use restpoint::num::normal;
use restpoint::num::quantiles::Quantiles;
use restpoint::num::random::Source;

use crate::support::model;

const REPEATS: u64 = 400;

/// How often intervals of a share, a mean and a quantile hold the truth.
#[derive(Debug, Default)]
struct Held {
    share: u64,
    mean: u64,
    quantile: u64,
}

/// The level of the quantile that is asked for.
const LEVEL: f64 = 0.8;

/// What is known of a quantity: the share above a threshold, the mean, the quantile.
struct Truth {
    threshold: f64,
    share: f64,
    mean: f64,
    quantile: f64,
}

fn holds(interval: Option<Interval95>, truth: f64) -> u64 {
    u64::from(interval.is_some_and(|interval| (interval.low..=interval.high).contains(&truth)))
}

impl Held {
    /// One repeat: numbers with their groups.
    fn count(&mut self, way: Way, groups: usize, numbers: impl Iterator<Item = (usize, f64)>, truth: &Truth) {
        let mut counted = vec![Counted::default(); groups];
        let mut moments = vec![Moments::default(); groups];
        let mut quantiles = vec![Quantiles::new(10_000); groups];
        for (group, x) in numbers {
            counted[group].push(x > truth.threshold);
            moments[group].push(x);
            quantiles[group].push(x);
        }
        self.share += holds(of_share(way, &counted), truth.share);
        self.mean += holds(of_mean(way, &moments), truth.mean);
        self.quantile += holds(of_quantile(way, &quantiles, LEVEL).map(|(_, interval)| interval), truth.quantile);
    }

    fn check(&self, what: &str) {
        for held in [self.share, self.mean, self.quantile] {
            assert!((92 * REPEATS..=98 * REPEATS).contains(&(100 * held)), "{what}: {self:?} of {REPEATS}");
        }
    }
}

/// The sum of two uniform numbers: the share above s ≥ 1 is (2 − s)²/2.
fn planned(sampling: Sampling, draws: u64, share: f64) {
    let model = model("a: {value: 0.5, range: [0, 1]}, b: {value: 0.5, range: [0, 1]}");
    let quantile = 2.0 - (2.0 * (1.0 - LEVEL)).sqrt();
    let truth = Truth { threshold: 2.0 - (2.0 * share).sqrt(), share, mean: 1.0, quantile };
    let mut held = Held::default();
    for seed in 0..REPEATS {
        let plan = Plan::new(&model, sampling, seed, Some(draws)).expect("a plan");
        let number = |i: u64| {
            let mut values = [0.0; 2];
            plan.draw(i, 0, &mut values, &mut [0.0; 2]);
            (plan.group(i), values[0] + values[1])
        };
        held.count(plan.way(), plan.groups(), (0..draws).map(number), &truth);
    }
    held.check(&format!("{sampling:?} {draws} {share}"));
}

#[test]
fn of_independent_draws() {
    planned(Sampling::Random, 400, 0.3);
    planned(Sampling::Random, 1000, 0.02);
}

#[test]
fn of_latin_hypercubes() {
    planned(Sampling::Latin, 400, 0.3);
    planned(Sampling::Latin, 1000, 0.02);
}

#[test]
fn of_sobol_sequences() {
    planned(Sampling::Sobol, 400, 0.3);
    planned(Sampling::Sobol, 1000, 0.02);
}

/// A chain x' = φx + √(1 − φ²) z, normal in the long run; groups are batches, as of a file.
fn chain(phi: f64, draws: usize, share: f64) -> [u64; 2] {
    let truth = Truth { threshold: -normal::quantile(share), share, mean: 0.0, quantile: normal::quantile(LEVEL) };
    let groups = draws.min(256);
    let (mut held, mut as_if_independent) = (Held::default(), 0);
    for seed in 0..REPEATS {
        let mut source = Source::new(1000 + seed);
        let mut x = normal::quantile(source.unit().max(1e-18));
        let mut numbers = Vec::new();
        for _ in 0..draws {
            x = phi * x + (1.0 - phi * phi).sqrt() * normal::quantile(source.unit().max(1e-18));
            numbers.push(x);
        }
        let each = numbers.iter().enumerate().map(|(i, x)| (i * groups / draws, *x));
        held.count(Way::InOrder { effective: draws as f64 }, groups, each, &truth);
        let mut counted = Counted::default();
        for x in &numbers {
            counted.push(*x > truth.threshold);
        }
        as_if_independent += holds(of_share(Way::Independent, &[counted]), truth.share);
    }
    held.check(&format!("chain {phi} {draws} {share}"));
    [held.share, as_if_independent]
}

#[test]
fn of_chains() {
    chain(0.0, 1000, 0.3);
    chain(0.5, 1000, 0.3);
    let [held, as_if_independent] = chain(0.9, 4000, 0.2);
    // Were correlation overlooked, intervals would hold the truth half as often.
    assert!(100 * as_if_independent < 60 * REPEATS && held > as_if_independent, "{as_if_independent}");
}

/// Wilson's intervals by hand; what is said where groups cannot differ.
#[test]
fn intervals_by_hand() {
    let check = |way: Way, groups: &[(u64, u64)], expected: Option<(f64, f64, Basis)>| {
        let groups: Vec<Counted> = groups.iter().map(|&(hits, of)| Counted { of, hits }).collect();
        let found = of_share(way, &groups);
        match (found, expected) {
            (Some(found), Some((low, high, basis))) => {
                assert!((found.low - low).abs() < 1e-6 && (found.high - high).abs() < 1e-6, "{groups:?}: {found:?}");
                assert_eq!(found.basis, basis);
            }
            (found, expected) => assert!(found.is_none() && expected.is_none(), "{groups:?}: {found:?}"),
        }
    };
    // (p + t/2 ± z √(p(1 − p)/n + t/4n))/(1 + t), t = z²/n = 3.841459/n.
    let wilson = |hits: f64, n: f64| {
        let (p, t) = (hits / n, 3.841_458_820_694_124 / n);
        let half = (t * p * (1.0 - p) + t * t / 4.0).sqrt();
        ((p + t / 2.0 - half) / (1.0 + t), (p + t / 2.0 + half) / (1.0 + t))
    };
    let of = |hits: f64, n: f64, basis: Basis| Some((wilson(hits, n).0, wilson(hits, n).1, basis));
    check(Way::Independent, &[(0, 0)], None);
    check(Way::Independent, &[], None);
    check(Way::Independent, &[(3, 10)], of(3.0, 10.0, Basis::Independent));
    check(Way::Independent, &[(0, 1000)], Some((0.0, 3.841_458_8 / 1_003.841_458_8, Basis::Independent)));
    check(Way::Randomised, &[(0, 100); 16], Some((0.0, 3.841_458_8 / 1_603.841_458_8, Basis::NoSpread)));
    check(Way::Randomised, &[(50, 100); 16], of(800.0, 1600.0, Basis::NoSpread));
    check(Way::Randomised, &[(1, 1)], of(1.0, 1.0, Basis::NoSpread));
    let file = Way::InOrder { effective: 40.0 };
    check(file, &[(5, 5); 100], of(40.0, 40.0, Basis::NoSpread));
    // Two shares of 0.4 and 0.6: a variance of 0.01, as of 25 draws, and Student's 12.7062 of one degree of freedom.
    let t = 12.706_204_736_174_7f64.powi(2) / 25.0;
    let half = (t / 4.0 + t * t / 4.0).sqrt() / (1.0 + t);
    check(Way::Randomised, &[(40, 100), (60, 100)], Some((0.5 - half, 0.5 + half, Basis::Randomisations)));
}

#[test]
fn means_by_hand() {
    let group = |numbers: &[f64]| {
        let mut moments = Moments::default();
        for x in numbers {
            moments.push(*x);
        }
        moments
    };
    // 1, 2, 3: standard error 1/√3, Student's 4.302653 of two degrees.
    let found = of_mean(Way::Independent, &[group(&[1.0, 2.0, 3.0])]).expect("three");
    let half = 4.302_652_729_911_275 / 3f64.sqrt();
    assert!((found.low - 2.0 + half).abs() < 1e-9 && (found.high - 2.0 - half).abs() < 1e-9, "{found:?}");
    let equal = of_mean(Way::Randomised, &[group(&[2.0, 2.0]), group(&[2.0])]).expect("three");
    assert_eq!((equal.low, equal.high, equal.basis), (2.0, 2.0, Basis::NoSpread));
    assert_eq!(of_mean(Way::Independent, &[group(&[2.0])]), None);
    assert_eq!(of_quantile(Way::Independent, &[Quantiles::new(1)], 0.5), None);
}
