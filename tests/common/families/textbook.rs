//! Small models of ecology, with parameters for which their equilibria are simple numbers; forms recalled from memory.

use super::{Family, exactly, model, ratio};
use crate::common::text::Point;
use restpoint::num::interval::Interval;

/// Every one of them.
pub fn all() -> Vec<Family> {
    [stocks(), pairs(), corners(), chains(), stages(), edges()].concat()
}

fn rows(rows: &[&str]) -> Vec<String> {
    rows.iter().map(|row| (*row).to_owned()).collect()
}

/// A model all of whose equilibria are these, each simple.
fn known(name: &str, upper: &str, formulas: &[&str], simple: Vec<Point>) -> Family {
    Family::complete(name, model(name, upper, &rows(formulas)), simple)
}

fn points(points: &[&[f64]]) -> Vec<Point> {
    points.iter().map(|x| exactly(x)).collect()
}

/// `centre + sign √s`
fn surd(centre: f64, sign: f64, s: f64) -> Interval {
    Interval::point(centre) + Interval::point(sign) * Interval::point(s).sqrt(&mut true)
}

/// One species.
fn stocks() -> Vec<Family> {
    let outbreak = vec![vec![surd(4.0, -1.0, 11.0)], vec![surd(4.0, 1.0, 11.0)]];
    vec![
        known("logistic", "10", &["x1*(1 - x1/4)"], points(&[&[0.0], &[4.0]])),
        // (x - 2)(x² - 8x + 5) = 0
        known(
            "budworm",
            "20",
            &["0.5*x1*(1 - x1/10) - x1^2/(1 + x1^2)"],
            [points(&[&[0.0], &[2.0]]), outbreak].concat(),
        ),
        known("quota", "10", &["x1*(1 - x1/4) - 0.75"], points(&[&[1.0], &[3.0]])),
        known("ramp harvest", "10", &["x1*(1 - x1/4) - 0.25*x1*ramp(x1, 1, 2)"], points(&[&[0.0], &[3.0]])),
    ]
}

/// Two species.
fn pairs() -> Vec<Family> {
    vec![
        known(
            "Rosenzweig-MacArthur",
            "20",
            &["x1*(1 - x1/4) - x1*x2/(1 + x1)", "x2*(x1/(1 + x1) - 0.5)"],
            points(&[&[0.0, 0.0], &[4.0, 0.0], &[1.0, 1.5]]),
        ),
        // Both present: (x - 2)(x² - 10x + 104) = 0
        known(
            "Bazykin",
            "40",
            &["x1 - x1*x2/(1 + 0.5*x1) - x1^2/16", "x1*x2/(1 + 0.5*x1) - 0.5625*x2 - 0.25*x2^2"],
            points(&[&[0.0, 0.0], &[16.0, 0.0], &[2.0, 1.75]]),
        ),
        known(
            "type III with Allee prey",
            "10",
            &["x1*(x1 - 1)*(1 - x1/4) - x2*x1^2/(1 + x1^2)", "x2*(1.25*x1^2/(1 + x1^2) - 1)"],
            points(&[&[0.0, 0.0], &[1.0, 0.0], &[4.0, 0.0], &[2.0, 1.25]]),
        ),
        known("Lotka-Volterra centre", "10", &["x1*(1 - x2)", "x2*(x1 - 1)"], points(&[&[0.0, 0.0], &[1.0, 1.0]])),
        known(
            "quota on prey",
            "10",
            &["x1*(1 - x1/4) - x1*x2/(1 + x1) - 0.4375", "x2*(x1/(1 + x1) - 0.5)"],
            points(&[&[0.5, 0.0], &[3.5, 0.0], &[1.0, 0.625]]),
        ),
        // Without the predator and above the ramp: x² - 5x + 5 = 0
        known(
            "ramp, Allee, predator",
            "10",
            &["x1*((x1 - 1)*(4 - x1)/4 - 0.25*ramp(x1, 2, 3) - x2)", "x2*(x1 - 2.5)"],
            [points(&[&[0.0, 0.0], &[1.0, 0.0], &[2.5, 0.4375]]), vec![vec![surd(2.5, 0.5, 5.0), Interval::ZERO]]]
                .concat(),
        ),
    ]
}

/// Two species, with (0, 0) an equilibrium by continuity alone.
fn corners() -> Vec<Family> {
    // 1 - exp(-x) = 1/2; y = 2 x ln(4/x)
    let half = Interval::point(2.0).ln(&mut true);
    let ivlev = Interval::point(2.0) * half * Interval::point(4.0).div(half, &mut true).ln(&mut true);
    // y = 2 (1 - (1/4)^0.3)
    let theta = Interval::point(0.25).pow(Interval::point(0.3), &mut true);
    let theta = Interval::point(2.0) * (Interval::ONE - theta);
    let all = vec![
        known(
            "theta-logistic",
            "20",
            &["x1*(1 - (x1/4)^0.3) - x1*x2/(1 + x1)", "x2*(x1/(1 + x1) - 0.5)"],
            [points(&[&[4.0, 0.0]]), vec![vec![Interval::ONE, theta]]].concat(),
        ),
        known(
            "Gompertz-Ivlev",
            "20",
            &["x1*ln(4/x1) - x2*(1 - exp(-x1))", "x2*(1 - exp(-x1) - 0.5)"],
            [points(&[&[4.0, 0.0]]), vec![vec![half, ivlev]]].concat(),
        ),
        known(
            "ratio-dependent",
            "20",
            &["x1*(1 - x1/4) - 0.5*x1*x2/(x1 + x2)", "x2*(x1/(x1 + x2) - 0.5)"],
            points(&[&[4.0, 0.0], &[3.0, 3.0]]),
        ),
    ];
    let with_corner = |family| Family { corners: points(&[&[0.0, 0.0]]), ..family };
    all.into_iter().map(with_corner).collect()
}

/// Three species.
fn chains() -> Vec<Family> {
    let cycle = |a: f64, b: f64| {
        let others = [("x1", "x2", "x3"), ("x2", "x3", "x1"), ("x3", "x1", "x2")];
        others.map(|(x, y, z)| format!("{x}*(1 - {x} - {a}*{y} - {b}*{z})"))
    };
    let may_leonard = |name: &str, [a, b]: [f64; 2], together: Interval| {
        let alone = points(&[&[0.0; 3], &[1.0, 0.0, 0.0], &[0.0, 1.0, 0.0], &[0.0, 0.0, 1.0]]);
        Family::complete(name, model(name, "4", &cycle(a, b)), [alone, vec![vec![together; 3]]].concat())
    };
    let web = [
        "x1*(1 - x1/8) - 0.5*x1*x2/(1 + 0.125*x1) - 0.25*x1*x3/(1 + 0.125*x1)",
        "x2*(0.25*x1/(1 + 0.125*x1) - 0.125 - 0.1875*x3/(1 + 0.125*x2))",
        "x3*(0.0625*x1/(1 + 0.125*x1) + 0.125*x2/(1 + 0.125*x2) - 0.1875)",
    ];
    vec![
        may_leonard("May-Leonard", [0.75, 1.5], ratio(4, 13)),
        may_leonard("May-Leonard at the Hopf point", [0.5, 1.5], ratio(1, 3)),
        hastings_powell(),
        Family::unknown("intraguild predation", model("intraguild predation", "20", &rows(&web))),
    ]
}

/// The chain of Hastings & Powell 1991, with other numbers: y = 1/8 under the top predator, 3x² − 2x − 3/8 = 0.
fn hastings_powell() -> Family {
    let formulas = [
        "x1*(1 - x1) - 5*x1*x2/(1 + 3*x1)",
        "5*x1*x2/(1 + 3*x1) - 0.375*x2 - 0.15625*x2*x3/(1 + 2*x2)",
        "0.15625*x2*x3/(1 + 2*x2) - 0.015625*x3",
    ];
    let [one, three, five] = [1.0, 3.0, 5.0].map(Interval::point);
    let capacity = |x: Interval| ((one - x) * (one + three * x)).div(five, &mut true);
    // 5x = 0.375 (1 + 3x)
    let alone = ratio(3, 31);
    let x = surd(2.0, 1.0, 8.5).div(Interval::point(6.0), &mut true);
    let intake = (five * x).div(one + three * x, &mut true);
    let z = ((intake - Interval::point(0.375)) * Interval::point(1.25)).div(Interval::point(0.15625), &mut true);
    let simple = [points(&[&[0.0; 3], &[1.0, 0.0, 0.0]]), vec![vec![alone, capacity(alone), Interval::ZERO]]];
    known("Hastings-Powell", "40", &formulas, [simple.concat(), vec![vec![x, Interval::point(0.125), z]]].concat())
}

/// Stages and patches, which are absent together.
fn stages() -> Vec<Family> {
    let patches = |n: usize| {
        // Prey in the odd places, predators in the even ones.
        let mean = |first: usize| {
            let others: Vec<_> = (0..n).map(|k| format!("x{}", 2 * k + first)).collect();
            format!("({})/{n}", others.join(" + "))
        };
        let row = |k: usize| {
            let (x, y) = (format!("x{}", 2 * k + 1), format!("x{}", 2 * k + 2));
            let prey = format!("{x}*(1 - {x}/4) - {x}*{y}/(1 + {x}) + 0.25*({} - {x})", mean(1));
            [prey, format!("{y}*({x}/(1 + {x}) - 0.5) + 0.25*({} - {y})", mean(2))]
        };
        let name = format!("predator-prey in {n} patches");
        let alike = [[0.0, 0.0], [4.0, 0.0], [1.0, 1.5]].map(|[x, y]| exactly(&[x, y].repeat(n)));
        let text = model(&name, "20", &(0..n).flat_map(row).collect::<Vec<_>>());
        Family { simple: alike.to_vec(), ..Family::unknown(name, text) }
    };
    vec![
        // x = 2y, 2y - y - y² = 0
        known("stages", "20", &["4*x2 - 2*x1", "x1 - x2 - x2^2"], points(&[&[0.0, 0.0], &[2.0, 1.0]])),
        // x = 2y, 5y²/(1 + y²) = 2y
        known(
            "stages with Allee effect",
            "20",
            &["5*x2^2/(1 + x2^2) - x1", "x1 - 2*x2"],
            points(&[&[0.0, 0.0], &[1.0, 0.5], &[4.0, 2.0]]),
        ),
        patches(2),
        patches(3),
    ]
}

/// What linearisation or proof has trouble with.
fn edges() -> Vec<Family> {
    let above = Interval::point(1.000_000_001) - Interval::ONE;
    let both = vec![Interval::ONE - above, Interval::point(2.0) * above];
    let competitors = |a: &str| rows(&["x1*(1 - x1 - x2/2)", &format!("x2*({a} - x1 - x2)")]);
    let other =
        |name: &str, a: &str, simple: Vec<Point>| Family::complete(name, model(name, "4", &competitors(a)), simple);
    vec![
        Family {
            degenerate: points(&[&[1.0, 0.0]]),
            ..other("transcritical", "1", points(&[&[0.0, 0.0], &[0.0, 1.0]]))
        },
        other(
            "transcritical, just passed",
            "1.000000001",
            [points(&[&[0.0, 0.0], &[1.0, 0.0], &[0.0, 1.000_000_001]]), vec![both]].concat(),
        ),
        other(
            "transcritical, just not reached",
            "0.999999999",
            points(&[&[0.0, 0.0], &[1.0, 0.0], &[0.0, 0.999_999_999]]),
        ),
        known(
            "Jordan chain",
            "8",
            &["x2 - x1 - 1", "x3 - x2 - 1", "x4 - x3 - 1", "4 - x4"],
            points(&[&[1.0, 2.0, 3.0, 4.0]]),
        ),
        known("kink at the root", "4", &["x1*(1 - x1 - max(0, x1 - 1))"], points(&[&[0.0], &[1.0]])),
        Family {
            degenerate: points(&[&[1.0]]),
            ..known("peak at the root", "4", &["x1*(min(x1, 2 - x1) - 1)"], points(&[&[0.0]]))
        },
    ]
}
