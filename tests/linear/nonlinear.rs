//! What the nonlinear terms say where the linear ones are silent, against normal forms by hand.
#![expect(clippy::panic, reason = "a test fails by panicking")]

use crate::common::linear::{Time, at};
use crate::common::text::ModelText;
use restpoint::analysis::linearise::{Kind, Test, Verdict};

use Test::{Cusp, FirstLyapunov, Flip, Fold, Pitchfork, Transcritical};
use Time::{Flow, Map};
use Verdict::{Attracts, Open, Repels, SemiStable};

/// Equations, an equilibrium of theirs, the verdict, the coefficient that decides and its value; proved unless open.
fn check(time: Time, rows: &[(&str, &str)], state: &[f64], verdict: Verdict, test: Test, coefficient: f64) {
    let text = ModelText { discrete: time == Map, ..ModelText::new("critical", "9", rows) };
    let linear = at(&text, state);
    let found = linear.nonlinear.unwrap_or_else(|| panic!("{rows:?}: {linear:?}"));
    assert_eq!((found.verdict, found.test), (verdict, test), "{rows:?}: {found:?}");
    assert!((found.coefficient - coefficient).abs() <= 1e-12 * coefficient.abs().max(1.0), "{rows:?}: {found:?}");
    assert_eq!(found.proven, verdict != Open, "{rows:?}: {found:?}");
    assert!(linear.stable.is_none() && linear.stable_proven, "{rows:?}");
}

#[test]
fn one_species() {
    let flow =
        |row, state, verdict, test, coefficient| check(Flow, &[("x", row)], &[state], verdict, test, coefficient);
    // Without fishing beyond what it can bear, a stock at the border; its own density does the rest.
    flow("-x^2", 0.0, Attracts, Transcritical, -1.0);
    flow("x^2", 0.0, Repels, Transcritical, 1.0);
    flow("x*(0.5*x - x^2)", 0.0, Repels, Transcritical, 0.5);
    flow("-x^3", 0.0, Attracts, Cusp, -1.0);
    flow("x^3", 0.0, Repels, Cusp, 1.0);
    flow("x^4", 0.0, Open, Cusp, 0.0);
    flow("-(x - 1)^2", 1.0, SemiStable, Fold, -1.0);
    flow("2*(x - 1)^2 - 5*(x - 1)^3", 1.0, SemiStable, Fold, 2.0);
    flow("-(x - 1)^3", 1.0, Attracts, Cusp, -1.0);
    flow("3*(x - 1)^3", 1.0, Repels, Cusp, 3.0);
    flow("-(x - 1)^5", 1.0, Open, Cusp, 0.0);
}

#[test]
fn invaders() {
    // On the centre manifold y = 1 − c u with u = x, so u′ = (c − 1) u².
    let invader = |c: &str, verdict, coefficient| {
        let resident = format!("y*(1 - y - {c}*x)");
        check(Flow, &[("x", "x*(1 - y - x)"), ("y", &resident)], &[0.0, 1.0], verdict, Transcritical, coefficient);
    };
    invader("0.5", Attracts, -0.5);
    invader("0.25", Attracts, -0.75);
    invader("2", Repels, 1.0);
    // A second absent species that cannot come in changes nothing.
    let rows = [("x", "x*(1 - y - x + 3*z)"), ("y", "y*(1 - y - 2*x)"), ("z", "z*(0.5 - y)")];
    check(Flow, &rows, &[0.0, 1.0, 0.0], Repels, Transcritical, 1.0);
    // Young and old, absent together: q = (1, 1), p = (1, 1)/2, and the young crowd each other.
    check(Flow, &[("J", "A - J - J^2"), ("A", "J - A")], &[0.0, 0.0], Attracts, Transcritical, -0.5);
    check(Flow, &[("J", "A - J + A^2"), ("A", "J - A")], &[0.0, 0.0], Repels, Transcritical, 0.5);
}

#[test]
fn inner_zero_eigenvalues() {
    // By the slaved y = −X², X = x − 1: X′ = X y = −X³.
    let slaved = [("x", "(x - 1)*(y - 1)"), ("y", "1 - y - (x - 1)^2")];
    check(Flow, &slaved, &[1.0, 1.0], Attracts, Cusp, -1.0);
    let other = [("x", "(x - 1)*(y - 1)"), ("y", "1 - y + 2*(x - 1)^2")];
    check(Flow, &other, &[1.0, 1.0], Repels, Cusp, 2.0);
    // Along (1, −1)/√2: x − y = √2 u, so u′ = −2(√2 u)³/√2 = −4u³; exchanging x and y changes nothing.
    let twins = [("x", "2 - x - y - (x - y)^3"), ("y", "2 - x - y + (x - y)^3")];
    check(Flow, &twins, &[1.0, 1.0], Attracts, Pitchfork, -4.0);
    let siblings = [("x", "2 - x - y - (x - y)^3"), ("y", "2 - x - y")];
    check(Flow, &siblings, &[1.0, 1.0], Attracts, Cusp, -2.0);
    // q = (2, −1)/√5, p = (1, −1) √5/3, so u′ = √5/3 X² = 4u²/(3√5).
    let folded = [("x", "3 - x - 2*y + (x - 1)^2"), ("y", "3 - x - 2*y")];
    check(Flow, &folded, &[1.0, 1.0], SemiStable, Fold, 4.0 / (3.0 * 5f64.sqrt()));
    // Of a double zero no single coefficient decides.
    check(Flow, &[("x", "y - 1"), ("y", "(x - 1)^2")], &[1.0, 1.0], Open, Fold, 1.0);
    check(Flow, &[("x", "-x^2"), ("y", "-y^2")], &[0.0, 0.0], Open, Transcritical, 0.0);
}

/// x = 1 + X, y = 1 + Y: X′ = −ω Y + f, Y′ = ω X + g.
fn hopf(omega: f64, f: &str, g: &str, verdict: Verdict, coefficient: f64) {
    let rows = [format!("-({omega})*(y - 1) + {f}"), format!("({omega})*(x - 1) + {g}")];
    check(Flow, &[("x", &rows[0]), ("y", &rows[1])], &[1.0, 1.0], verdict, FirstLyapunov, coefficient);
}

#[test]
fn pairs_of_flows() {
    // r′ = σ r³ has l₁ = 2σ/ω in this normalisation: X = 2 Re(z q) with |q| = 1, so r = √2 |z|.
    let [x, y, rr] = ["(x - 1)", "(y - 1)", "((x - 1)^2 + (y - 1)^2)"];
    hopf(2.0, &format!("-{x}*{rr}"), &format!("-{y}*{rr}"), Attracts, -1.0);
    hopf(2.0, &format!("0.5*{x}*{rr}"), &format!("0.5*{y}*{rr}"), Repels, 0.5);
    hopf(-4.0, &format!("-{x}*{rr}"), &format!("-{y}*{rr}"), Attracts, -0.5);
    // Twisting alone changes no distance.
    hopf(2.0, &format!("-{y}*{rr}"), &format!("{x}*{rr}"), Open, 0.0);
    // z′ = −z + r² follows r², so r′ = k r³ for X′ = … + k X z.
    let slaved = |k: f64, verdict, coefficient| {
        let rows =
            [format!("1 - y + ({k})*{x}*(z - 1)"), format!("x - 1 + ({k})*{y}*(z - 1)"), format!("1 - z + {rr}")];
        let rows = [("x", rows[0].as_str()), ("y", &rows[1]), ("z", &rows[2])];
        check(Flow, &rows, &[1.0; 3], verdict, FirstLyapunov, coefficient);
    };
    slaved(-1.0, Attracts, -2.0);
    slaved(0.5, Repels, 1.0);
    // Predator and prey of Lotka and Volterra circle for ever.
    check(Flow, &[("x", "x*(1 - y)"), ("y", "y*(x - 1)")], &[1.0, 1.0], Open, FirstLyapunov, 0.0);
}

/// Second and third derivatives of f and g in two variables: xx, xy, yy; xxx, xxy, xyy, yyy.
type Derivatives = [f64; 7];

fn formula([xx, xy, yy, xxx, xxy, xyy, yyy]: Derivatives) -> String {
    let [x, y] = ["(x - 1)", "(y - 1)"];
    format!(
        "({})*{x}^2 + ({xy})*{x}*{y} + ({})*{y}^2 + ({})*{x}^3 + ({})*{x}^2*{y} + ({})*{x}*{y}^2 + ({})*{y}^3",
        xx / 2.0,
        yy / 2.0,
        xxx / 6.0,
        xxy / 2.0,
        xyy / 2.0,
        yyy / 6.0
    )
}

/// r′ = a r³ by the planar formula of Guckenheimer & Holmes (1983, eq. 3.4.11), another route to the same number.
fn planar(omega: f64, f: Derivatives, g: Derivatives) -> f64 {
    let cubic = f[3] + f[5] + g[4] + g[6];
    let square = f[1] * (f[0] + f[2]) - g[1] * (g[0] + g[2]) - f[0] * g[0] + f[2] * g[2];
    (cubic + square / omega) / 16.0
}

#[test]
fn pairs_of_flows_with_every_term() {
    let mut source = crate::common::Source::new(5);
    for _ in 0..40 {
        // Whole multiples of 6, so that every coefficient in the formula is whole.
        let mut derivatives = || std::array::from_fn(|_| 6.0 * source.between(-3.0, 3.0).round());
        let (f, g): (Derivatives, Derivatives) = (derivatives(), derivatives());
        let omega = 2.0;
        let l1 = 2.0 * planar(omega, f, g) / omega;
        let verdict = if l1 < 0.0 { Attracts } else { Repels };
        if l1 != 0.0 {
            hopf(omega, &formula(f), &formula(g), verdict, l1);
        }
    }
}

#[test]
fn single_multipliers() {
    let map = |row, state, verdict, test, coefficient| check(Map, &[("x", row)], &[state], verdict, test, coefficient);
    map("x - x^2", 0.0, Attracts, Transcritical, -1.0);
    map("x*(1 + 0.5*x)", 0.0, Repels, Transcritical, 0.5);
    map("x - (x - 1)^2", 1.0, SemiStable, Fold, -1.0);
    map("x - (x - 1)^3", 1.0, Attracts, Cusp, -1.0);
    // X → −X + a X² + b X³: c = a² + b, by composing the map with itself.
    map("2 - x + (x - 1)^2", 1.0, Attracts, Flip, 1.0);
    map("2 - x - (x - 1)^3", 1.0, Repels, Flip, -1.0);
    map("2 - x + 2*(x - 1)^2 - (x - 1)^3", 1.0, Attracts, Flip, 3.0);
    map("2 - x + (x - 1)^2 - (x - 1)^3", 1.0, Open, Flip, 0.0);
    // y follows X² by y → X², so X → −X + k X y, and k X³ counts once more.
    let slaved = [("x", "2 - x + 2*(x - 1)*(y - 1)"), ("y", "1 + (x - 1)^2")];
    check(Map, &slaved, &[1.0, 1.0], Attracts, Flip, 2.0);
}

#[test]
fn pairs_of_maps() {
    // A = [0 −1; 1 1] turns by 60° in the norm N = X² + X Y + Y², so X → A X (1 + σN) scales N by (1 + σN)²; with
    // q = (1, −λ)/√2, N = 2|z|² · 3/4 and a = 3σ/2.
    let turned = |sigma: f64, verdict, coefficient| {
        let [x, y] = ["(x - 1)", "(y - 1)"];
        let growth = format!("(1 + ({sigma})*({x}^2 + {x}*{y} + {y}^2))");
        let rows = [format!("1 - {y}*{growth}"), format!("1 + ({x} + {y})*{growth}")];
        check(Map, &[("x", &rows[0]), ("y", &rows[1])], &[1.0, 1.0], verdict, FirstLyapunov, coefficient);
    };
    turned(-1.0, Attracts, -1.5);
    turned(2.0, Repels, 3.0);
    // A quarter turn is strongly resonant.
    let rows = [("x", "2 - y - (y - 1)^3"), ("y", "x + (x - 1)^3")];
    check(Map, &rows, &[1.0, 1.0], Open, FirstLyapunov, 0.0);
}

#[test]
fn nothing_is_said_where_the_linear_part_decides() {
    let linear = |rows: &[(&str, &str)], state: &[f64]| at(&ModelText::new("decided", "9", rows), state);
    assert_eq!(linear(&[("x", "x - x^2")], &[1.0]).nonlinear, None);
    // A critical direction beside one that repels.
    let repelling = linear(&[("x", "-x^2"), ("y", "y - y^2")], &[0.0, 0.0]);
    assert_eq!((repelling.nonlinear, repelling.kind), (None, Kind::UnstableNode));
}

#[test]
fn where_derivatives_end_the_verdict_is_open() {
    // x^2.5 has a second derivative at 0, but no third; the quadratic coefficient is 0.
    let linear = at(&ModelText::new("rough", "9", &[("x", "-x^2.5")]), &[0.0]);
    assert_eq!(linear.nonlinear.map(|found| found.verdict), Some(Open));
}
