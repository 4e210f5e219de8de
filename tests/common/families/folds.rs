//! Pairs of equilibria about to merge, and merged ones.

use super::{Family, combination, exactly, model, symbols, whole};
use crate::common::Source;
use crate::common::text::{ModelText, Point};
use restpoint::num::interval::Interval;

/// How far apart the pairs are that [`super::examples`] has.
pub const GAPS: [f64; 6] = [1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7];

/// `centre ± direction √s`
fn pair(centre: &[f64], direction: &[f64], s: Interval) -> Vec<Point> {
    let root = s.sqrt(&mut true);
    let point = |sign: f64| {
        let coordinate = |(&c, &d): (&f64, &f64)| Interval::point(c) + Interval::point(sign * d) * root;
        centre.iter().zip(direction).map(coordinate).collect()
    };
    vec![point(-1.0), point(1.0)]
}

/// A logistic stock (r = 1, K = 4) under a constant catch, alone or by a fleet that settles at 1: the fold is at a catch
/// of 1, and `x = 2 ± 2 √(1 − catch)`, `gap` apart.
pub fn quota_pair(n: usize, gap: f64) -> Family {
    let catch = 1.0 - (gap / 4.0).powi(2);
    let text = quota(n, &catch.to_string(), &format!("quota {n}, gap {gap:e}"));
    // 1 - catch is exact: the two are within a factor of 2.
    let simple = pair(&[2.0, 1.0][..n], &[2.0, 0.0][..n], Interval::point(1.0 - catch));
    Family::complete(text.title.clone(), text, simple)
}

/// The same at the fold.
pub fn quota_fold(n: usize) -> Family {
    let text = quota(n, "1", &format!("quota {n} at the fold"));
    Family { degenerate: vec![exactly(&[2.0, 1.0][..n])], ..Family::complete(text.title.clone(), text, Vec::new()) }
}

fn quota(n: usize, catch: &str, title: &str) -> ModelText {
    let rows = ["x1*(1 - x1/4) - catch", "x1*(1 - x1/4) - catch*x2"];
    let rows = if n == 1 { vec![rows[0].to_owned()] } else { vec![rows[1].to_owned(), "0.5 - 0.5*x2".to_owned()] };
    model(title, "8", &rows).with(&[("catch", catch)])
}

/// A pair `gap` apart hidden in n dense rows without a factor x: `u = B x`, `f₁ = s − (u₁ − c₁)²` with `s = (gap/2)²`,
/// `f_i = (u_i − c_i)(1 + u_i²/4) + k_i f₁`, rows `M f`; the pair is `B⁻¹ (c ± √s e₁)`. B and M are products of triangular
/// matrices with ones on the diagonal and small fractions of powers of 2 beside it, so that f64 holds B⁻¹ exactly, too.
pub fn hidden_pair(n: usize, gap: f64, seed: u64) -> Family {
    let s = (gap / 2.0).powi(2);
    let first = Form { constant: s, power: 2 };
    let (text, centre, direction) = hidden(n, &first, seed, &format!("hidden pair {n}, gap {gap:e}, seed {seed}"));
    Family::complete(text.title.clone(), text, pair(&centre, &direction, Interval::point(s)))
}

/// The same with the pair merged.
pub fn hidden_fold(n: usize, seed: u64) -> Family {
    merged(n, 2, seed, &format!("hidden fold {n}, seed {seed}"))
}

/// The same with `f₁ = −(u₁ − c₁)³`: three that have merged.
pub fn hidden_cusp(n: usize, seed: u64) -> Family {
    merged(n, 3, seed, &format!("hidden cusp {n}, seed {seed}"))
}

fn merged(n: usize, power: u8, seed: u64, title: &str) -> Family {
    let (text, centre, _) = hidden(n, &Form { constant: 0.0, power }, seed, title);
    Family { degenerate: vec![exactly(&centre)], ..Family::complete(text.title.clone(), text, Vec::new()) }
}

/// `f₁ = constant − (u₁ − c₁)^power`
struct Form {
    constant: f64,
    power: u8,
}

/// The model, the point where every `u_i = c_i`, and B⁻¹ e₁.
fn hidden(n: usize, first: &Form, seed: u64, title: &str) -> (ModelText, Vec<f64>, Vec<f64>) {
    let mut source = Source::new(seed);
    let (b, inverse) = unimodular(n, &mut source);
    let (mixing, _) = unimodular(n, &mut source);
    let centre: Vec<f64> = (0..n).map(|_| whole(&mut source, 2, 4) as f64).collect();
    let (u, f) = ["u", "f"].map(|letter| (1..=n).map(|i| format!("{letter}{i}")).collect::<Vec<_>>()).into();
    let mut shorthand: Vec<_> = u.iter().zip(&b).map(|(u, row)| (u.clone(), combination(row, &symbols(n)))).collect();
    for i in 0..n {
        let c = b[i].iter().zip(&centre).map(|(b, x)| b * x).sum::<f64>();
        let off = combination(&[1.0, -c], &[u[i].clone(), String::new()]);
        let formula = match i {
            0 => format!("{} - ({off})^{}", first.constant, first.power),
            _ => format!("({off})*(1 + {}^2/4) + {}*f1", u[i], whole(&mut source, 1, 3)),
        };
        shorthand.push((f[i].clone(), formula));
    }
    let rows: Vec<_> = mixing.iter().map(|row| combination(row, &f)).collect();
    let direction = inverse.iter().map(|row| row[0]).collect();
    (ModelText { shorthand, ..model(title, "8", &rows) }, centre, direction)
}

type Matrix = Vec<Vec<f64>>;

/// What lies beside the diagonals is −1, 0 or 1 over this. At 1 a pair in 4 rows takes a branch and prune search a
/// thousand times as many boxes.
const PARTS: f64 = 8.0;

/// A lower times an upper triangular matrix with ones on the diagonal, and the inverse.
fn unimodular(n: usize, source: &mut Source) -> (Matrix, Matrix) {
    let mut triangle = || -> Matrix {
        let entry = |i: usize, j: usize, s: &mut Source| {
            if i == j { 1.0 } else { f64::from(j < i) * whole(s, -1, 1) as f64 / PARTS }
        };
        (0..n).map(|i| (0..n).map(|j| entry(i, j, source)).collect()).collect()
    };
    let (lower, upper) = (triangle(), transposed(&triangle()));
    let inverse_of_upper = transposed(&inverse_of_lower(&transposed(&upper)));
    (times(&lower, &upper), times(&inverse_of_upper, &inverse_of_lower(&lower)))
}

fn transposed(a: &Matrix) -> Matrix {
    (0..a.len()).map(|j| a.iter().map(|row| row[j]).collect()).collect()
}

fn times(a: &Matrix, b: &Matrix) -> Matrix {
    let b = transposed(b);
    let dot = |row: &[f64], column: &[f64]| row.iter().zip(column).map(|(x, y)| x * y).sum();
    a.iter().map(|row| b.iter().map(|column| dot(row, column)).collect()).collect()
}

/// By forward substitution; the diagonal is all ones.
fn inverse_of_lower(a: &Matrix) -> Matrix {
    let n = a.len();
    let mut inverse: Matrix = (0..n).map(|i| (0..n).map(|j| f64::from(i == j)).collect()).collect();
    for i in 0..n {
        for k in 0..i {
            let above = inverse[k].clone();
            inverse[i].iter_mut().zip(&above).for_each(|(entry, above)| *entry -= a[i][k] * above);
        }
    }
    inverse
}

/// `x (1 − x)²`: a root that the row does not cross.
pub fn semistable() -> Family {
    let text = model("semi-stable", "4", &["x1*(1 - x1)^2".to_owned()]);
    Family { degenerate: vec![exactly(&[1.0])], ..Family::complete("semi-stable", text, vec![exactly(&[0.0])]) }
}

/// `x (1 − x)³`, multiplied out.
pub fn triple_root() -> Family {
    let text = model("triple root", "4", &["x1 - 3*x1^2 + 3*x1^3 - x1^4".to_owned()]);
    Family { degenerate: vec![exactly(&[1.0])], ..Family::complete("triple root", text, vec![exactly(&[0.0])]) }
}
