//! Bands of parameters against closed forms: where a state is lost, and how.

use restpoint::analysis::equilibria::{Budget, OneByOne};
use restpoint::analysis::response::{Edge, Margins, ThresholdKind, margins};

use crate::by_hand::Study;
use crate::common::solve::{Method, solve};
use crate::support::read;

/// Relative.
const CLOSE: f64 = 1e-10;

/// What a model's margins are at the equilibrium with the most species present, or the largest abundances of those.
pub(crate) fn of(text: &str) -> (Study, Margins) {
    let mut study = Study::of(read(text));
    let list = solve(&mut study.read, 0, Method::Certified).list;
    let which = list.len() - 1;
    let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
    let found = margins(&mut study.subject(), &list, which, &budget);
    (study, found)
}

/// An end of a band: its value, and what happens there; `None` at the end of the range.
type End = (f64, Option<ThresholdKind>);

fn check(text: &str, parameter: &str, expected: [End; 2]) {
    let (study, found) = of(text);
    let id = study.parameter(parameter);
    let band = found.bands.iter().find(|band| band.parameter == id).unwrap_or_else(|| panic!("{text}: {found:?}"));
    for (side, (at, kind)) in expected.into_iter().enumerate() {
        assert!((band.ends[side] - at).abs() <= CLOSE * at.abs(), "{parameter}: {band:?}, not {at}\n{text}");
        let met = band.thresholds[side].as_ref().map(|threshold| threshold.kind);
        assert_eq!(met, kind, "{parameter} at {at}: {band:?}\n{text}");
        let edge = if kind.is_some() { Edge::Threshold(side) } else { Edge::Range };
        assert_eq!(band.edges[side], edge);
    }
}

use ThresholdKind::{BorderCollision, Exit, Fold, Hopf, NeimarkSacker, PeriodDoubling, Transcritical};

#[test]
fn a_quota_has_its_fold_and_an_effort_its_end() {
    // N' = r N (1 − N/K) − Q: folds at Q = r K/4 (Clark 1990).
    let quota = "title: t\ntime: yr\nspecies: {N: {upper: 3000}}\nparameters:\n  \
        r: {value: 0.5, range: [0.1, 0.9]}\n  K: {value: 1000, range: [100, 2000]}\n  Q: {value: 60, range: [0, 200]}\n\
        change: {N: r*N*(1 - N/K) - Q}\n";
    check(quota, "Q", [(0.0, None), (125.0, Some(Fold))]);
    check(quota, "r", [(0.24, Some(Fold)), (0.9, None)]);
    check(quota, "K", [(480.0, Some(Fold)), (2000.0, None)]);
    // The nearest loss in widths of the ranges first: 520/1900 of K, 65/200 of Q, 0.26/0.8 of r.
    let (study, found) = of(quota);
    let order: Vec<_> = found.bands.iter().map(|band| band.parameter).collect();
    assert_eq!(order[0], study.parameter("K"));
    // N' = r N (1 − N/K) − q E N: lost at E = r/q (Schaefer 1954); above the box at K = 1500/(1 − qE/r).
    let effort = "title: t\ntime: yr\nspecies: {N: {upper: 1200}}\nparameters:\n  r: 0.5\n  q: 0.01\n  \
        K: {value: 1000, range: [500, 2000]}\n  E: {value: 10, range: [0, 100], control: true}\n\
        change: {N: r*N*(1 - N/K) - q*E*N}\n";
    check(effort, "E", [(0.0, None), (50.0, Some(Transcritical))]);
    check(effort, "K", [(500.0, None), (1500.0, Some(Exit))]);
}

/// Rosenzweig & MacArthur (1963): with x* = m/(a (e − m h)) both persist from K = x* on, and cycles set in at
/// K = 2 x* + 1/(a h).
#[test]
fn cycles_set_in_where_the_closed_form_says() {
    let text = "title: t\ntime: yr\nspecies: {P: {upper: 50}, C: {upper: 50}}\nparameters:\n  \
        r: 1\n  a: 0.8\n  h: 0.5\n  e: 0.6\n  m: {value: 0.4, range: [0.01, 0.9]}\n  K: {value: 4, range: [0.5, 9]}\n\
        shorthand: {eaten: a*P/(1 + a*h*P)}\nchange: {P: r*P*(1 - P/K) - eaten*C, C: e*eaten*C - m*C}\n";
    let x = 0.4 / (0.8 * (0.6 - 0.2));
    check(text, "K", [(x, Some(Transcritical)), (2.0 * x + 2.5, Some(Hopf))]);
    // In m: x* = (K − 1/(a h))/2 = 0.75, so m = e a x/(1 + a h x) = 0.36/1.3; the predator goes at x* = K.
    check(text, "m", [(0.36 / 1.3, Some(Hopf)), (0.6 * 3.2 / 2.6, Some(Transcritical))]);
}

/// Prey alone, until a predator can invade: e a K/(1 + a h K) = m.
#[test]
fn an_invader_ends_the_band() {
    let text = "title: t\ntime: yr\nspecies: {P: {upper: 50}, C: {upper: 50}}\nparameters:\n  \
        m: {value: 0.9, range: [0.1, 2]}\n  K: {value: 4, range: [1, 9]}\n\
        shorthand: {eaten: 0.8*P/(1 + 0.4*P)}\nchange: {P: P*(1 - P/K) - eaten*C, C: 0.6*eaten*C - m*C}\n";
    check(text, "m", [(0.6 * 3.2 / 2.6, Some(Transcritical)), (2.0, None)]);
    let (study, found) = of(text);
    let band = found.bands.iter().find(|band| band.parameter == study.parameter("m")).unwrap();
    assert_eq!(band.thresholds[0].as_ref().unwrap().species.map(|species| species.0), Some(1));
}

/// Young and adults are lost together where b g = d (m + g): two rows that cannot be divided.
#[test]
fn a_population_of_stages_is_lost_as_one() {
    let text = "title: t\ntime: yr\nspecies:\n  Y: {upper: 90, population: deer}\n  A: {upper: 900, population: deer}\n\
        parameters:\n  b: 1.5\n  g: 0.4\n  m: 0.3\n  d: {value: 0.3, range: [0.1, 2]}\n\
        change: {Y: b*A - (m + g)*Y - 0.1*Y^2, A: g*Y - d*A}\n";
    check(text, "d", [(0.1, None), (0.6 / 0.7, Some(Transcritical))]);
}

#[test]
fn maps_lose_stability_at_their_own_thresholds() {
    // Ricker (1954): a cycle of two is born at r = 2 (May 1976).
    let ricker = "title: t\ntime: {unit: yr, step: 1}\nspecies: {N: {upper: 50}}\n\
        parameters: {K: 10, r: {value: 1.2, range: [0.5, 3]}}\nnext: {N: N*exp(r*(1 - N/K))}\n";
    check(ricker, "r", [(0.5, None), (2.0, Some(PeriodDoubling))]);
    // The delayed logistic map (Maynard Smith 1968): a closed curve is born at r = 2, the state appears at r = 1.
    let delayed = "title: t\ntime: {unit: yr, step: 1}\n\
        species: {N: {upper: 9, population: a}, L: {upper: 9, population: a}}\n\
        parameters: {r: {value: 1.5, range: [0.5, 2.5]}}\nnext: {N: r*N*(1 - L), L: N}\n";
    check(delayed, "r", [(1.0, Some(Transcritical)), (2.0, Some(NeimarkSacker))]);
}

/// x' = x (p − |x − 2|) has states at x = 2 ± p, which meet in the kink at p = 0.
#[test]
fn states_that_meet_at_a_kink_are_lost_there() {
    let text = "title: t\ntime: yr\nspecies: {x: {upper: 9}}\nparameters: {p: {value: 1, range: [-1, 1.5]}}\n\
        change: {x: x*(p - abs(x - 2))}\n";
    check(text, "p", [(0.0, Some(BorderCollision)), (1.5, None)]);
}

/// A state followed over a kink at which nothing is lost: N = K up to 4, (K + 4)/2 beyond.
#[test]
fn a_kink_that_takes_nothing_away_is_passed() {
    let text = "title: t\ntime: yr\nspecies: {N: {upper: 30}}\nparameters: {K: {value: 8, range: [1, 12]}}\n\
        change: {N: \"N*(K - N - max(N - 4, 0))\"}\n";
    check(text, "K", [(1.0, None), (12.0, None)]);
}

#[test]
fn a_state_that_is_not_stable_has_no_margins() {
    let text = "title: t\ntime: yr\nspecies: {x: {upper: 9}}\nparameters: {p: {value: 1, range: [0.5, 1.5]}}\n\
        change: {x: x*(x - p)}\n";
    let (_, found) = of(text);
    assert_eq!(found, Margins::default());
}
