//! Polynomial systems with their roots where we put them, at points that f64 or a quotient of whole numbers holds exactly.

use super::{Family, choices, combination, exactly, index, model, ratio, symbols, whole};
use crate::common::Source;
use crate::common::text::Point;

/// Multiples of 1/16 in rising order, each 1/4 to 1 above the one before.
fn rising(source: &mut Source) -> [f64; 3] {
    let mut last = 0;
    [(); 3].map(|()| {
        last += whole(source, 4, 16);
        last as f64 / 16.0
    })
}

/// Uncoupled rows `x (x − a)(b − x)`: all 3ⁿ combinations of 0, a and b.
pub fn cubics(n: usize, seed: u64) -> Family {
    let mut source = Source::new(seed);
    let roots: Vec<[f64; 3]> = (0..n).map(|_| rising(&mut source)).map(|[_, a, b]| [0.0, a, b]).collect();
    let row = |(x, [_, a, b]): (&String, &[f64; 3])| format!("{x}*({x} - {a})*({b} - {x})");
    let rows: Vec<_> = symbols(n).iter().zip(&roots).map(row).collect();
    products(&format!("cubics {n}, seed {seed}"), &rows, &roots)
}

/// Rows `(x − a)(x − b)(c − x)`, multiplied out and each added to the one before: all 3ⁿ combinations of a, b and c.
pub fn expanded_cubics(n: usize, seed: u64) -> Family {
    let mut source = Source::new(seed);
    let roots: Vec<[f64; 3]> = (0..n).map(|_| rising(&mut source)).collect();
    let expanded = |(x, [a, b, c]): (&String, &[f64; 3])| {
        let powers = [format!("{x}^3"), format!("{x}^2"), x.clone(), String::new()];
        combination(&[-1.0, a + b + c, -(a * b + b * c + c * a), a * b * c], &powers)
    };
    let own: Vec<_> = symbols(n).iter().zip(&roots).map(expanded).collect();
    let rows: Vec<_> = (0..n).map(|i| own[i.saturating_sub(1)..=i].join(" + ")).collect();
    products(&format!("expanded cubics {n}, seed {seed}"), &rows, &roots)
}

fn products(name: &str, rows: &[String], roots: &[[f64; 3]]) -> Family {
    let point = |chosen: Vec<usize>| {
        exactly(&chosen.iter().zip(roots).map(|(&choice, roots)| roots[choice]).collect::<Vec<_>>())
    };
    Family::complete(name, model(name, "8", rows), choices(3, rows.len()).map(point).collect())
}

/// A curve in the plane, with whole coefficients.
#[derive(Clone, Copy)]
enum Curve {
    /// `a x + b y = c`
    Line(i128, i128, i128),
    /// Of radius 5 about a centre.
    Circle(i128, i128),
}

/// The point (x/q, y/q).
#[derive(Clone, Copy, PartialEq)]
struct Rational {
    x: i128,
    y: i128,
    q: i128,
}

/// A point with whole coordinates.
type Whole = (i128, i128);

/// The points of a circle of radius 5 with whole coordinates, from its centre.
const ON_CIRCLE: [Whole; 12] =
    [(5, 0), (4, 3), (3, 4), (0, 5), (-3, 4), (-4, 3), (-5, 0), (-4, -3), (-3, -4), (0, -5), (3, -4), (4, -3)];

/// Each circle of radius 5 meets the one about the origin in two of [`ON_CIRCLE`], given with it.
const CROSSING: [(Whole, [Whole; 2]); 4] = [
    ((6, 0), [(3, 4), (3, -4)]),
    ((8, 0), [(4, 3), (4, -3)]),
    ((0, 6), [(4, 3), (-4, 3)]),
    ((0, 8), [(3, 4), (-3, 4)]),
];

/// Where the first circle stands, far enough from the axes for all of it.
const CENTRE: Whole = (10, 10);

impl Curve {
    /// What vanishes on it, times q or q².
    fn at(self, p: Rational) -> i128 {
        match self {
            Self::Line(a, b, c) => a * p.x + b * p.y - c * p.q,
            Self::Circle(x, y) => (p.x - x * p.q).pow(2) + (p.y - y * p.q).pow(2) - 25 * p.q * p.q,
        }
    }

    fn formula(self) -> String {
        match self {
            Self::Line(a, b, c) => {
                let names = ["x1".to_owned(), "x2".to_owned(), String::new()];
                format!("({})", combination(&[a as f64, b as f64, -c as f64], &names))
            }
            Self::Circle(x, y) => format!("((x1 - {x})^2 + (x2 - {y})^2 - 25)"),
        }
    }

    /// The line through two points.
    fn through(p: Whole, q: Whole) -> Self {
        let (a, b) = (q.1 - p.1, p.0 - q.0);
        Self::Line(a, b, a * p.0 + b * p.1)
    }
}

/// A circle times chords of another, and the other times chords of the first, then mixed: circle meets circle, circle
/// meets chord and chord meets chord at known points, and nothing else is a root.
///
/// Draws in which a root is not simple, or lies on an axis or above the box, are drawn again.
pub fn lines_and_circles(seed: u64) -> Family {
    let mut source = Source::new(seed);
    let name = format!("lines and circles, seed {seed}");
    let drawn = (0..1000).find_map(|_| draw(&mut source));
    let (curves, points) = drawn.unwrap_or_else(|| panic!("no simple roots for seed {seed}"));
    let [f, g] = curves.map(|curves| curves.iter().map(|curve| curve.formula()).collect::<Vec<_>>().join("*"));
    let rows = [format!("{f} - 2*{g}"), format!("3*{f} + {g}")];
    let point = |p: &Rational| vec![ratio(p.x, p.q), ratio(p.y, p.q)];
    Family::complete(&name, model(&name, "32", &rows), points.iter().map(point).collect::<Vec<Point>>())
}

type Curves = [Vec<Curve>; 2];

fn draw(source: &mut Source) -> Option<(Curves, Vec<Rational>)> {
    let mut pick = |n: usize| index(source, n);
    let (shift, crossings) = CROSSING[pick(4)];
    let second = (CENTRE.0 + shift.0, CENTRE.1 + shift.1);
    let mut meetings: Vec<Whole> = crossings.map(|p| (CENTRE.0 + p.0, CENTRE.1 + p.1)).to_vec();
    let mut chords = |centre: Whole| -> Vec<Curve> {
        let chord = |_| {
            let first = pick(12);
            let ends =
                [first, (first + 1 + pick(11)) % 12].map(|k| (centre.0 + ON_CIRCLE[k].0, centre.1 + ON_CIRCLE[k].1));
            meetings.extend(ends);
            Curve::through(ends[0], ends[1])
        };
        (0..2).map(chord).collect()
    };
    let (of_first, of_second) = (chords(CENTRE), chords(second));
    let mut points: Vec<Rational> = meetings.iter().map(|&(x, y)| Rational { x, y, q: 1 }).collect();
    points.extend(of_first.iter().flat_map(|&l| of_second.iter().filter_map(move |&m| meeting(l, m))));
    let first = [vec![Curve::Circle(CENTRE.0, CENTRE.1)], of_second].concat();
    let second = [vec![Curve::Circle(second.0, second.1)], of_first].concat();
    let once = |curves: &[Curve], p: Rational| curves.iter().filter(|curve| curve.at(p) == 0).count() == 1;
    let simple = points.iter().all(|&p| once(&first, p) && once(&second, p));
    let on_axis = points.iter().any(|p| p.x == 0 || p.y == 0);
    points.retain(|p| p.x > 0 && p.y > 0);
    let outside = points.iter().any(|p| p.x.max(p.y) >= 32 * p.q);
    (simple && !on_axis && !outside).then_some(([first, second], points))
}

/// Where two lines meet; nowhere where they are parallel.
fn meeting(l: Curve, m: Curve) -> Option<Rational> {
    let (Curve::Line(a, b, c), Curve::Line(d, e, f)) = (l, m) else { return None };
    let q = a * e - b * d;
    let sign = q.signum();
    (q != 0).then(|| Rational { x: sign * (c * e - b * f), y: sign * (a * f - c * d), q: q.abs() })
}
