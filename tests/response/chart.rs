//! The chart of two controls: curves against closed forms, points on them against published values, regions against what is
//! known of the models.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use restpoint::analysis::equilibria::{Budget, OneByOne};
use restpoint::analysis::linearise::Kind;
use restpoint::analysis::response::chart::{self, Seed, chart_from};
use restpoint::analysis::response::locate::Sign;
use restpoint::analysis::response::{Chart, ChartPoint, Region, ThresholdKind};

use crate::common::cases::{self, number};
use crate::common::solve::{Method, solve};
use crate::common::text::ModelText;
use crate::setting::{control, subject};

/// Relative, of controls.
const NEAR: f64 = 1e-8;

type Ranged<'r> = (&'r str, f64, f64);

/// The chart of a model from thresholds at nearly these states and controls.
fn chart(text: &ModelText, controls: [Ranged<'_>; 2], seeds: &[(Sign, &[f64], [f64; 2])]) -> Chart {
    let mut read = text.read();
    let subject = subject(&mut read);
    let controls = controls.map(|(name, from, to)| control(&subject, name, from, to));
    let seeds: Vec<Seed> = seeds
        .iter()
        .map(|(sign, state, at)| Seed {
            present: state.iter().map(|x| *x != 0.0).collect(),
            sign: sign.clone(),
            state: state.to_vec(),
            at: *at,
        })
        .collect();
    let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
    chart_from(&subject, controls, &seeds, &budget)
}

fn points(chart: &Chart, kind: ThresholdKind) -> Vec<&ChartPoint> {
    chart.points.iter().filter(|point| point.kind == kind).collect()
}

/// Exactly one such point, there.
fn has_point(chart: &Chart, kind: ThresholdKind, at: [f64; 2]) {
    let near = |point: &&&ChartPoint| (0..2).all(|k| (point.at[k] - at[k]).abs() <= NEAR * at[k].abs());
    let found = points(chart, kind);
    assert_eq!(found.iter().filter(near).count(), 1, "{kind:?} at {at:?} among {found:?}");
    for point in found {
        assert!(point.error <= 1e-9, "{point:?}");
    }
}

/// Every point of the curves of a kind, at least a hundred, on a curve: a number that is 0 on it, relative.
fn on_curve(chart: &Chart, kind: ThresholdKind, off: impl Fn(&[f64], [f64; 2]) -> [f64; 2]) {
    let mut count = 0;
    for curve in chart.curves.iter().filter(|curve| curve.kind == kind) {
        for (state, at) in curve.states.iter().zip(&curve.points) {
            let expected = off(state, *at);
            for k in 0..2 {
                assert!((at[k] - expected[k]).abs() <= NEAR * expected[k].abs(), "{kind:?}: {at:?} for {expected:?}");
            }
            count += 1;
        }
    }
    assert!(count >= 100, "{kind:?}: {count} points");
}

/// Ludwig, Jones & Holling (1978), scaled: folds at r = 2x³/(1 + x²)², q = 2x³/(x² − 1), which meet where x = √3.
#[test]
fn budworm_folds_meet_in_a_cusp() {
    let text =
        ModelText::new("budworm", "40", &[("x", "r*x*(1 - x/q) - x^2/(1 + x^2)")]).with(&[("r", "0.5"), ("q", "10")]);
    let seeds = [(Sign::Turn, &[1.14][..], [0.56, 10.0]), (Sign::Turn, &[4.8][..], [0.384, 10.0])];
    let found = chart(&text, [("r", 0.2, 0.8), ("q", 2.0, 30.0)], &seeds);
    assert_eq!(found.curves.len(), 1, "two seeds on one curve");
    on_curve(&found, ThresholdKind::Fold, |state, _| {
        let x = state[0];
        [2.0 * x.powi(3) / (1.0 + x * x).powi(2), 2.0 * x.powi(3) / (x * x - 1.0)]
    });
    let root = 3f64.sqrt();
    has_point(&found, ThresholdKind::Cusp, [3.0 * root / 8.0, 3.0 * root]);
    assert_eq!(found.points.len(), 1, "{:?}", found.points);
    // One stable state outside the wedge, two and one between them inside.
    let mut counts: Vec<usize> = found.regions.iter().map(|region| region.equilibria.len()).collect();
    counts.sort_unstable();
    assert_eq!(counts, [2, 4], "{:?}", found.regions);
    assert!(found.regions.iter().all(|region| region.complete));
}

/// Rosenzweig & MacArthur (1963): the predator comes at K = m/(a(e − mh)), cycles at K = (e + mh)/(ah(e − mh)).
#[test]
fn rosenzweig_macarthur_has_three_regions() {
    let rows = [("x", "r*x*(1 - x/K) - a*x*y/(1 + a*h*x)"), ("y", "y*(e*a*x/(1 + a*h*x) - m)")];
    let text = ModelText::new("Rosenzweig-MacArthur", "20", &rows).with(&[
        ("r", "1"),
        ("K", "2"),
        ("a", "1"),
        ("h", "1"),
        ("e", "1"),
        ("m", "0.5"),
    ]);
    let seeds = [(Sign::Growth(1), &[1.0, 0.0][..], [1.0, 0.5]), (Sign::Pair(None), &[1.0, 1.33][..], [3.0, 0.5])];
    let found = chart(&text, [("K", 0.5, 5.0), ("m", 0.2, 0.7)], &seeds);
    on_curve(&found, ThresholdKind::Transcritical, |_, [_, m]| [m / (1.0 - m), m]);
    on_curve(&found, ThresholdKind::Hopf, |_, [_, m]| [(1.0 + m) / (1.0 - m), m]);
    assert!(found.points.is_empty(), "{:?}", found.points);
    let mut kinds: Vec<Vec<bool>> = Vec::new();
    for region in &found.regions {
        let stable = |kind: Option<Kind>| matches!(kind, Some(Kind::StableNode | Kind::StableSpiral));
        kinds.push(region.equilibria.iter().map(|state| stable(state.kind)).collect());
    }
    kinds.sort();
    assert_eq!(kinds, [vec![false, false, false], vec![false, false, true], vec![false, true]], "{:?}", found.regions);
    assert!(found.cells.iter().all(Option::is_some));
}

/// With a share u taken, N′ = (1 − u) N e^{r(1 − N/K)} doubles its period at r = 2 − ln(1 − u).
#[test]
fn ricker_flips_along_a_curve() {
    let rows = [("N", "(1 - u)*N*exp(r*(1 - N/K))")];
    let text = ModelText { discrete: true, ..ModelText::new("Ricker", "300", &rows) };
    let text = text.with(&[("r", "1.5"), ("K", "100"), ("u", "0.2")]);
    let start = 2.0 - 0.8f64.ln();
    let seeds = [(Sign::Flip(None), &[90.0][..], [start, 0.2])];
    let found = chart(&text, [("r", 1.0, 3.0), ("u", 0.0, 0.6)], &seeds);
    on_curve(&found, ThresholdKind::PeriodDoubling, |_, [_, u]| [2.0 - (1.0 - u).ln(), u]);
}

/// The chart of a model from nothing but itself, thresholds being met along lines.
fn whole_of(text: &ModelText, controls: [Ranged<'_>; 2]) -> Chart {
    let mut read = text.read();
    let list = solve(&mut read, 0, Method::Chosen).list;
    let subject = subject(&mut read);
    let controls = controls.map(|(name, from, to)| control(&subject, name, from, to));
    let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
    chart::chart(&subject, controls, &list, &budget)
}

/// Grazed grass (Noy-Meir 1975, with a sigmoid intake) with scrub that shades it: the fold of both ends where scrub is lost,
/// and there two eigenvalues are 0 on two faces, not one double one inside.
#[test]
fn a_fold_that_ends_where_a_species_is_lost_has_no_double_eigenvalue() {
    let rows = [("G", "1.2*G*(1 - (G + 1.2*B)/300) - 3*H*G^2/(400 + G^2)"), ("B", "0.1*B*(1 - (B + 0.5*G)/90) - c*B")];
    let text = ModelText::new("grass", "400", &rows).with(&[("H", "17"), ("c", "0.02")]);
    let found = whole_of(&text, [("H", 0.0, 35.0), ("c", 0.0, 0.3)]);
    assert!(points(&found, ThresholdKind::BogdanovTakens).is_empty(), "{:?}", found.points);
    // Without scrub the folds are where r (1 − G/K) (400 + G²)/(3 G) turns, whatever is cut.
    let alone = |state: &[f64]| {
        if state[1] == 0.0 {
            Some(0.4 * (1.0 - state[0] / 300.0) * (400.0 + state[0].powi(2)) / state[0])
        } else {
            None
        }
    };
    for curve in found.curves.iter().filter(|curve| curve.kind == ThresholdKind::Fold) {
        for (state, at) in curve.states.iter().zip(&curve.points) {
            let expected = alone(state).unwrap_or(at[0]);
            assert!((at[0] - expected).abs() <= NEAR * expected, "{at:?} for {expected}");
        }
    }
    assert_eq!(found.curves.iter().filter(|curve| curve.kind == ThresholdKind::Fold).count(), 3);
}

#[test]
fn curves_are_met_by_lines() {
    let whole = |id: &str, controls: [Ranged<'_>; 2]| whole_of(&cases::named(id).text(), controls);
    let found = whole("B19_bazykin_three_interior", [("al", 0.2, 1.0), ("de", 0.0001, 0.4)]);
    let count = |kind| points(&found, kind).len();
    let counts = [ThresholdKind::Cusp, ThresholdKind::BogdanovTakens, ThresholdKind::GeneralisedHopf].map(count);
    assert_eq!(counts, [1, 2, 1], "{:?}", found.points);
    let found = whole("B24_xiao_ruan_bt", [("h", 0.02, 0.1), ("r", 0.2, 0.6)]);
    has_point(&found, ThresholdKind::BogdanovTakens, [0.0625, 0.375]);
    // Clark (1990): two stocks that one fleet fishes; each is lost at E = r/q, whatever the other's r is.
    let found = whole("B27_clark_two_independent", [("E", 100.0, 1000.0), ("r1", 0.02, 0.09)]);
    on_curve(&found, ThresholdKind::Transcritical, |_, [effort, r1]| {
        if (effort - 800.0).abs() < 1e-6 { [800.0, r1] } else { [1e4 * r1, r1] }
    });
    assert_eq!(found.regions.len(), 4, "{:?}", found.regions);
}

/// A stock without a fishery has x = K (1 − q E/r), lost at r = q E; with these figures that line runs through the middles of
/// cells, and on it nothing is decided by the linear part. It is a border and no region.
#[test]
fn a_curve_through_the_middles_of_cells_is_no_region() {
    let rows = [("H", "r*H*(1 - H/120) - 0.03*H*P - 0.02*E*H"), ("P", "P*(0.006*H - 0.4)")];
    let text = ModelText::new("char", "200", &rows).with(&[("r", "0.8"), ("E", "10")]);
    let found = whole_of(&text, [("E", 0.0, 40.0), ("r", 0.6, 1.0)]);
    let mut counts: Vec<usize> = found.regions.iter().map(|region| region.equilibria.len()).collect();
    counts.sort_unstable();
    assert_eq!(counts, [1, 2, 3], "{:?}", found.regions);
    let is_decided = |region: &Region| region.equilibria.iter().all(|state| state.kind != Some(Kind::Undecided));
    assert!(found.regions.iter().all(is_decided), "{:?}", found.regions);
}

/// Published points of two parameters, from a fold near each: cusp and double eigenvalues 0.
#[test]
fn published_points_are_met() {
    // Xiao & Ruan (1999), as case B24 has it: h = 1/16, r = 3/8.
    let case = cases::named("B24_xiao_ruan_bt");
    let seeds = [(Sign::Turn, &[2.0, 0.36][..], [0.06, 0.36])];
    let found = chart(&case.text(), [("h", 0.02, 0.1), ("r", 0.2, 0.6)], &seeds);
    has_point(&found, ThresholdKind::BogdanovTakens, [0.0625, 0.375]);
    assert!(found.curves.iter().any(|curve| curve.kind == ThresholdKind::Hopf), "a Hopf curve begins there");
    // Bazykin (1985), as case B19 has it.
    let case = cases::named("B19_bazykin_three_interior");
    let published = case.facts["thresholds"].as_array().unwrap();
    let at = |k: usize| ["al", "de"].map(|name| number(&published[k]["values"][name]));
    let state = |k: usize| ["x", "y"].map(|name| number(&published[k]["at"][name]));
    // From the middle of the fold curve, and from one end of what was looked for.
    for (state, start) in [([42.0, 21.0], [0.86, 0.006]), (state(1), at(1))] {
        let found = chart(&case.text(), [("al", 0.2, 1.0), ("de", 0.0001, 0.4)], &[(Sign::Turn, &state, start)]);
        has_point(&found, ThresholdKind::Cusp, at(0));
        has_point(&found, ThresholdKind::BogdanovTakens, at(1));
        has_point(&found, ThresholdKind::BogdanovTakens, at(2));
        // Trace 0, and the coefficient of the plane (Guckenheimer & Holmes 1983, eq. 3.4.11) 0, solved with 30 digits.
        has_point(&found, ThresholdKind::GeneralisedHopf, [0.956_623_198_035_282_8, 0.000_950_448_247_753_25]);
        assert_eq!(found.points.len(), 4, "{:?}", found.points);
        assert_eq!(found.curves.len(), 3, "a fold curve and a Hopf curve from each double eigenvalue");
    }
}
