//! Every kind of threshold on models whose thresholds can be written down, badly scaled ones among them, and what looks like a
//! threshold and is none.
#![allow(clippy::panic, clippy::unwrap_used, reason = "a test fails by panicking")]

use restpoint::analysis::response::locate::{Sign, compared};
use restpoint::analysis::response::{Criticality, Threshold, ThresholdKind};

use crate::common::text::ModelText;
use crate::setting::{Bench, subject};

/// Two points around: a state of all species, and the control c.
type Around<'a> = [(&'a [f64], f64); 2];

/// The threshold of a model with a control c between two points on the face of these species.
fn located(text: &ModelText, present: &[usize], sign: &Sign, around: Around<'_>) -> Option<Threshold> {
    let mut read = text.clone().with(&[("c", "0.5")]).read();
    let subject = subject(&mut read);
    let mut bench = Bench::new(&subject, &["c"]);
    let face = bench.face(present);
    let [before, after] = around.map(|(state, c)| bench.point(&face, state, &[c]));
    let sign = match sign {
        // There is one such node in the models here.
        Sign::Kink(_) => {
            let nodes = bench.equations.graph.reachable(&face.rows);
            let found = nodes.into_iter().find(|&node| compared(&mut bench.equations, node).is_some());
            Sign::Kink(found.unwrap())
        }
        sign => sign.clone(),
    };
    bench.threshold(&face, sign, &before, &after)
}

fn model(rows: &[&str]) -> ModelText {
    let symbols = ["x", "y", "z"];
    let rows: Vec<(&str, &str)> = symbols.into_iter().zip(rows.iter().copied()).collect();
    ModelText::new("located", "9", &rows)
}

/// Everybody present; kind, value to 1e-12 of 1 or of itself, state to the same of each abundance.
fn check(text: &ModelText, sign: &Sign, around: Around<'_>, kind: ThresholdKind, at: f64, state: &[f64]) -> Threshold {
    let everybody: Vec<usize> = (0..text.species.len()).collect();
    check_on(text, &everybody, sign, around, kind, at, state)
}

fn check_on(
    text: &ModelText,
    present: &[usize],
    sign: &Sign,
    around: Around<'_>,
    kind: ThresholdKind,
    at: f64,
    state: &[f64],
) -> Threshold {
    let found = located(text, present, sign, around).unwrap_or_else(|| panic!("{:?}: {sign:?}", text.rows));
    assert_eq!(found.kind, kind, "{:?}", text.rows);
    let near = |found: f64, expected: f64| {
        let size = if expected == 0.0 { 1.0 } else { expected.abs() };
        (found - expected).abs() <= 1e-12 * size
    };
    assert!(near(found.at, at), "{:?}: {} for {at}", text.rows, found.at);
    assert!(found.state.iter().zip(state).all(|(&x, &y)| near(x, y)), "{:?}: {:?}", text.rows, found.state);
    assert!(found.error <= 1e-12 * at.abs().max(1.0), "{:?}: {:e}", text.rows, found.error);
    found
}

#[test]
fn folds() {
    // Schaefer (1954) with a constant quota: c = rK/4 at half the capacity; in units that make the stock large and small.
    let quota = |r: f64, k: f64| {
        let text = ModelText { species: vec![("x".into(), "0".into(), format!("{}", 2.0 * k))], ..model(&["0"]) };
        let text = ModelText { rows: vec![format!("{r}*x*(1 - x/{k}) - c")], ..text };
        let at = r * k / 4.0;
        let (low, high) = ([0.45 * k], [0.56 * k]);
        check(&text, &Sign::Turn, [(&low, at * 0.99), (&high, at * 0.985)], ThresholdKind::Fold, at, &[k / 2.0]);
    };
    quota(0.5, 4.0);
    quota(0.25, 4e6);
    quota(2.0, 4e-6);
    // A fold of a map: x = c + x².
    let map = ModelText { discrete: true, ..model(&["c + x^2"]) };
    check(&map, &Sign::Turn, [(&[0.4], 0.24), (&[0.62], 0.235)], ThresholdKind::Fold, 0.25, &[0.5]);
}

#[test]
fn crossings() {
    let soft = model(&["(c - 2)*(x - 1) - (x - 1)^3"]);
    let around: Around<'_> = [(&[1.02], 1.9), (&[0.97], 2.15)];
    let found = check(&soft, &Sign::Crossing, around, ThresholdKind::Pitchfork, 2.0, &[1.0]);
    assert_eq!(found.criticality, Some(Criticality::Soft));
    let hard = model(&["(c - 2)*(x - 1) + (x - 1)^3"]);
    let found = check(&hard, &Sign::Crossing, around, ThresholdKind::Pitchfork, 2.0, &[1.0]);
    assert_eq!(found.criticality, Some(Criticality::Hard));
    let exchange = model(&["(c - 2)*(x - 1) - 3*(x - 1)^2"]);
    check(&exchange, &Sign::Crossing, around, ThresholdKind::Transcritical, 2.0, &[1.0]);
    // Of the branch that turns where it crosses another, the turn is the pitchfork and no fold.
    check(&soft, &Sign::Turn, [(&[1.2], 2.04), (&[0.85], 2.0225)], ThresholdKind::Pitchfork, 2.0, &[1.0]);
    // Branches that only come near each other have folds or nothing there.
    let imperfect = model(&["(c - 2)*(x - 1) - (x - 1)^3 + 0.00001"]);
    assert_eq!(located(&imperfect, &[0], &Sign::Crossing, around), None);
}

#[test]
fn pairs() {
    // x = 1 + X, y = 1 + Y: X′ = (c − 3) X − 2 Y + k X³, Y′ = 2 X + (c − 3) Y.
    let rows =
        |k: &str| model(&[&format!("(c - 3)*(x - 1) - 2*(y - 1) + {k}*(x - 1)^3"), "2*(x - 1) + (c - 3)*(y - 1)"]);
    let around: Around<'_> = [(&[1.01, 0.98], 2.8), (&[0.99, 1.03], 3.1)];
    for (k, criticality) in [("(-1)", Criticality::Soft), ("1", Criticality::Hard)] {
        let found = check(&rows(k), &Sign::Pair(None), around, ThresholdKind::Hopf, 3.0, &[1.0, 1.0]);
        assert_eq!(found.criticality, Some(criticality));
        assert!(found.eigenvalues.iter().all(|z| z.re == 0.0 && (z.im.abs() - 2.0).abs() < 1e-12), "{found:?}");
    }
    // Beside a direction that repels nothing that is born is stable.
    let mut unstable = rows("(-1)");
    unstable.rows.push("z - 1".into());
    unstable.species.push(("z".into(), "0".into(), "9".into()));
    let around: Around<'_> = [(&[1.01, 0.98, 1.0], 2.8), (&[0.99, 1.03, 1.0], 3.1)];
    let found = check(&unstable, &Sign::Pair(None), around, ThresholdKind::Hopf, 3.0, &[1.0, 1.0, 1.0]);
    assert_eq!(found.criticality, None);
    // c − 3 ± √(0.5 c − 1.49): a pair below c = 2.98, and two real eigenvalues of sum 0 at c = 3.
    let neutral = model(&["(c - 3)*(x - 1) + (y - 1)", "(0.5*c - 1.49)*(x - 1) + (c - 3)*(y - 1)"]);
    assert_eq!(located(&neutral, &[0, 1], &Sign::Pair(None), [(&[1.0, 1.0], 2.9), (&[1.0, 1.0], 3.1)]), None);
    // Rosenzweig & MacArthur's cycles at K = 3, the prey in millions, the predator in millionths.
    let mut scaled = model(&["x*(1 - x/(1000000*c)) - 1000000*x*y/(1 + x/1000000)", "y*(x/(1000000 + x) - 0.5)"]);
    scaled.species[0].2 = "1e7".into();
    scaled.species[1].2 = "1e-4".into();
    let around: Around<'_> = [(&[1.01e6, 1.3e-6], 2.8), (&[0.99e6, 1.35e-6], 3.1)];
    let found = check(&scaled, &Sign::Pair(None), around, ThresholdKind::Hopf, 3.0, &[1e6, 4e-6 / 3.0]);
    assert_eq!(found.criticality, Some(Criticality::Soft));
    // A pair of an absent population: J′ = (c − 3) J − A, A′ = J + (c − 3) A near 0.
    let stages = model(&["(c - 3)*x - y - x^3", "x + (c - 3)*y", "z*(1 - z)"]);
    let around: Around<'_> = [(&[0.0, 0.0, 1.0], 2.7), (&[0.0, 0.0, 1.0], 3.2)];
    let sign = Sign::Pair(Some(vec![0, 1]));
    check_on(&stages, &[2], &sign, around, ThresholdKind::Hopf, 3.0, &[0.0, 0.0, 1.0]);
}

#[test]
fn who_comes_and_goes() {
    let text = model(&["x*(1 - x)", "y*(x*c - 2 - y)"]);
    let at = |y: [f64; 2]| [[1.0, y[0]], [1.0, y[1]]];
    let [before, after] = at([0.0, 0.0]);
    let around: Around<'_> = [(&before, 1.5), (&after, 2.4)];
    let comes = check_on(&text, &[0], &Sign::Growth(1), around, ThresholdKind::Transcritical, 2.0, &[1.0, 0.0]);
    assert_eq!(comes.species.map(|species| species.0), Some(1));
    let [before, after] = at([0.4, -0.5]);
    let goes: Around<'_> = [(&before, 2.4), (&after, 1.5)];
    check(&text, &Sign::Abundance(1), goes, ThresholdKind::Transcritical, 2.0, &[1.0, 0.0]);
    // Young and old are lost together: the block's determinant (1 − c/2) is 0.
    let stages = model(&["c*y - 2*x - x*y", "x - y"]);
    let around: Around<'_> = [(&[0.3, 0.3], 2.3), (&[-0.2, -0.2], 1.8)];
    check(&stages, &Sign::Abundance(1), around, ThresholdKind::Transcritical, 2.0, &[0.0, 0.0]);
    // What is fed goes below 0, and what grows leaves the box.
    let fed = model(&["c - x"]);
    check(&fed, &Sign::Abundance(0), [(&[0.2], 0.2), (&[-0.3], -0.3)], ThresholdKind::Exit, 0.0, &[0.0]);
    check(&fed, &Sign::Side(0, 1), [(&[8.5], 8.5), (&[9.4], 9.4)], ThresholdKind::Exit, 9.0, &[9.0]);
}

#[test]
fn kinks() {
    let node = || {
        let mut read = model(&["c - x"]).with(&[("c", "1")]).read();
        let bench = Bench::new(&subject(&mut read), &["c"]);
        Sign::Kink(bench.equations.rows[0])
    };
    // Above 1 every further unit is caught twice over.
    let catch = model(&["c - x - 2*max(x - 1, 0)"]);
    let around: Around<'_> = [(&[0.9], 0.9), (&[1.05], 1.15)];
    let found = check(&catch, &node(), around, ThresholdKind::BorderCollision, 1.0, &[1.0]);
    assert_eq!(found.eigenvalues[0].re, -1.0);
    assert_eq!(found.other_side.as_ref().unwrap()[0].re, -3.0);
    assert_eq!(found.kink.map(|kink| kink.contains(&"x - 1".to_owned())), Some(true));
    // The same from above.
    let found = check(&catch, &node(), [around[1], around[0]], ThresholdKind::BorderCollision, 1.0, &[1.0]);
    assert_eq!(found.eigenvalues[0].re, -1.0);
    // Two states are born at once, one of them stable.
    let pair = model(&["(c - 2) - abs(x - 1)"]);
    let around: Around<'_> = [(&[0.9], 2.1), (&[1.2], 2.2)];
    let found = check(&pair, &node(), around, ThresholdKind::BorderCollision, 2.0, &[1.0]);
    let both = [found.eigenvalues[0].re, found.other_side.as_ref().unwrap()[0].re];
    assert_eq!(both, [1.0, -1.0]);
}
