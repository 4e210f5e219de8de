//! Nothing is proved that hangs on how the decimals of a model file were rounded to f64.

use crate::common::linear::{Time, at};
use crate::common::text::ModelText;
use restpoint::analysis::linearise::Kind;

use Kind::{Centre, Saddle, StableNode, StableSpiral, Undecided, UnstableNode};
use Time::{Flow, Map};

/// Decimals that no f64 equals, and one of them twice.
const DECIMALS: &[(&str, &str)] =
    &[("a", "0.1"), ("b", "0.2"), ("c", "0.3"), ("d", "0.3"), ("e", "0.6"), ("f", "0.7"), ("g", "0.07")];

/// Equations, an equilibrium of theirs, its type, and whether that is proved, as is stability.
fn check(time: Time, rows: &[(&str, &str)], state: &[f64], kind: Kind, proven: bool) {
    let text = ModelText { discrete: time == Map, ..ModelText::new("decimals", "9", rows).with(DECIMALS) };
    let found = at(&text, state);
    assert_eq!((found.kind, found.kind_proven, found.stable_proven), (kind, proven, proven), "{rows:?}: {found:?}");
}

/// With the decimals as written growth at 0 is exactly 0; with the f64 it is ±3e-17 or so.
#[test]
fn a_threshold_that_rounding_misses_is_not_proved_to_be_missed() {
    let at_zero = |growth: &str, kind, proven| {
        check(Flow, &[("x", &format!("({growth})*x - 0.7*x^2"))], &[0.0], kind, proven);
        check(Map, &[("x", &format!("({growth} + 1)*x - 0.7*x^2"))], &[0.0], kind, proven);
    };
    for growth in ["c - a - b", "a + b - c", "f - e - a", "3*a - c", "a*f - g"] {
        at_zero(growth, Undecided, false);
    }
    at_zero("c - a - b - 1e-12", StableNode, true);
    at_zero("c - a - b + 1e-12", UnstableNode, true);
    // No such decimals, or twice the same: exactly critical, however it is read.
    at_zero("0.75 - 0.25 - 0.5", Undecided, true);
    at_zero("c - d", Undecided, true);
}

#[test]
fn a_pair_that_rounding_takes_off_the_border_is_not_proved_to_be_off_it() {
    let around = |damping: &str, kind, proven| {
        let rows = [("x", format!("({damping})*(x - 1) - (y - 1)")), ("y", "(x - 1)".to_owned())];
        check(Flow, &[(rows[0].0, &rows[0].1), (rows[1].0, &rows[1].1)], &[1.0, 1.0], kind, proven);
    };
    around("c - a - b", Centre, false);
    around("c - a - b - 1e-12", StableSpiral, true);
    around("c - d", Centre, true);
    // Node or spiral: the discriminant is 0 as written.
    let rows = [("x", "-c*(x - 1) + (y - 1)"), ("y", "(c - a - b)*(x - 1) - c*(y - 1)")];
    let found = at(&ModelText::new("decimals", "9", &rows).with(DECIMALS), &[1.0, 1.0]);
    assert!(found.stable_proven && !found.kind_proven, "{found:?}");
}

#[test]
fn several_species_are_judged_by_the_decimals() {
    let of_three = |last: &str, kind, proven| {
        let rows = [("x", "-x + 0.1*y".to_owned()), ("y", "0.1*x - y + z".to_owned())];
        let last = format!("({last})*z + 0.5*y - z^2");
        let rows = [(rows[0].0, &rows[0].1[..]), (rows[1].0, &rows[1].1[..]), ("z", &last[..])];
        check(Flow, &rows, &[0.0; 3], kind, proven);
    };
    // The determinant is 0 where the last entry is -0.5/(1 - 0.01): no decimal; beside it on either side.
    of_three("-0.50505050505", Saddle, true);
    of_three("-0.50505050506", StableNode, true);
}

/// (x − 1)² has the coefficient 0 as written, so that the cubic term decides; in f64 the square does.
#[test]
fn a_coefficient_that_rounding_makes_is_not_proved_to_be_there() {
    let of = |square: &str| {
        let row = format!("({square})*(x - 1)^2 - (x - 1)^3");
        at(&ModelText::new("decimals", "9", &[("x", &row)]).with(DECIMALS), &[1.0]).nonlinear.unwrap()
    };
    assert!(!of("c - a - b").proven, "{:?}", of("c - a - b"));
    assert!(of("c - d").proven && of("c - a").proven);
}
