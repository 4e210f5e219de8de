//! A face whose matrix is singular, or not proved to be regular: none, or a line or surface of equilibria.
//!
//! The rows are combined by complete pivoting so that each combination has one unknown to itself and the last ones have
//! none. All rows and combinations, in intervals, then cut the box (constraint propagation: Davis 1987, from memory): where
//! nothing is left, no abundances in it solve the system, and that is proved, however near to singular the matrix is.

use crate::num::interval::Interval;
use crate::num::solve::equilibrate;

/// A pivot below this share of the first is taken for 0.
const NOTHING: f64 = 1e-11;
/// Rounds of cutting.
const ROUNDS: usize = 24;
/// A round that leaves every side at more than this share ends the cutting.
const WORTHWHILE: f64 = 0.99;

/// What such a face holds.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Held {
    /// No equilibrium, in the box or above it.
    Nothing,
    /// No equilibrium in the box; nothing is known above it.
    NothingInTheBox,
    /// Equilibria, if any, are in this region of those present; `dimension` is that of the surface they form.
    Perhaps { region: Vec<Interval>, dimension: usize },
}

/// Solutions x of A x = b for some A in `matrix` and b in `right`, with positive components in the box; `None` where `stop`,
/// asked once a row, says so.
pub(super) fn look_at(
    matrix: &[Interval],
    right: &[Interval],
    sides: &[[f64; 2]],
    stop: &dyn Fn() -> bool,
) -> Option<Held> {
    let n = right.len();
    let (combinations, rank) = eliminate(matrix, n, stop)?;
    let mut rows = Rows { n, matrix: matrix.to_vec(), right: right.to_vec() };
    for combination in combinations.chunks_exact(n) {
        if stop() {
            return None;
        }
        rows.combine(combination);
    }
    let mut inside: Vec<Interval> = sides.iter().map(|side| Interval::new(side[0].max(0.0), side[1])).collect();
    let mut anywhere: Vec<Interval> = sides.iter().map(|side| Interval::new(side[0].max(0.0), f64::INFINITY)).collect();
    Some(match (rows.cut(&mut anywhere, stop)?, rows.cut(&mut inside, stop)?) {
        (Left::Nothing, _) => Held::Nothing,
        (_, Left::Nothing) => Held::NothingInTheBox,
        _ => Held::Perhaps { region: inside, dimension: n - rank },
    })
}

/// Combinations of rows by Gauss–Jordan elimination with complete pivoting, as a matrix to multiply with from the left, and
/// the rank as far as it can be told; `None` where it was stopped.
fn eliminate(matrix: &[Interval], n: usize, stop: &dyn Fn() -> bool) -> Option<(Vec<f64>, usize)> {
    let [row_units, column_units] = equilibrate(matrix, n);
    let scaled = |(k, entry): (usize, &Interval)| entry.mid() * row_units[k / n] * column_units[k % n];
    let mut a: Vec<f64> = matrix.iter().enumerate().map(scaled).collect();
    let mut combination = vec![0.0; n * n];
    for i in 0..n {
        combination[i * n + i] = row_units[i];
    }
    let mut rows: Vec<usize> = (0..n).collect();
    let mut columns: Vec<usize> = (0..n).collect();
    let mut largest = 0.0f64;
    for rank in 0..n {
        if stop() {
            return None;
        }
        let place = rows.iter().flat_map(|&i| columns.iter().map(move |&j| (i, j)));
        let best = place.max_by(|&(i, j), &(k, l)| a[i * n + j].abs().total_cmp(&a[k * n + l].abs()));
        let Some((i, j)) = best else { return Some((combination, rank)) };
        let pivot = a[i * n + j];
        largest = largest.max(pivot.abs());
        if pivot.abs() <= NOTHING * largest {
            return Some((combination, rank));
        }
        for k in (0..n).filter(|&k| k != i) {
            let factor = a[k * n + j] / pivot;
            for l in 0..n {
                a[k * n + l] -= factor * a[i * n + l];
                combination[k * n + l] -= factor * combination[i * n + l];
            }
        }
        rows.retain(|&row| row != i);
        columns.retain(|&column| column != j);
    }
    Some((combination, n))
}

/// Equations Σ a_j x_j = b in intervals.
struct Rows {
    n: usize,
    matrix: Vec<Interval>,
    right: Vec<Interval>,
}

/// Whether anything is left of a box.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Left {
    Something,
    Nothing,
}

impl Rows {
    /// Adds a combination of the first n rows.
    fn combine(&mut self, factors: &[f64]) {
        let n = self.n;
        let sum = |entry: &dyn Fn(usize) -> Interval| {
            factors.iter().enumerate().fold(Interval::ZERO, |sum, (k, &f)| sum + Interval::point(f) * entry(k))
        };
        let row: Vec<Interval> = (0..n).map(|j| sum(&|k| self.matrix[k * n + j])).collect();
        let right = sum(&|k| self.right[k]);
        self.matrix.extend(row);
        self.right.push(right);
    }

    /// `None` where it was stopped.
    fn cut(&self, region: &mut [Interval], stop: &dyn Fn() -> bool) -> Option<Left> {
        for _ in 0..ROUNDS {
            let before = region.to_vec();
            for (row, &right) in self.matrix.chunks_exact(self.n).zip(&self.right) {
                if stop() {
                    return None;
                }
                if cut_by(row, right, region) == Left::Nothing {
                    return Some(Left::Nothing);
                }
            }
            let shrank = |(before, after): (&Interval, &Interval)| {
                after.width() < WORTHWHILE * before.width() || after.is_bounded() != before.is_bounded()
            };
            if !before.iter().zip(region.iter()).any(shrank) {
                break;
            }
        }
        Some(Left::Something)
    }
}

/// Solves one equation for each unknown in turn.
fn cut_by(row: &[Interval], right: Interval, region: &mut [Interval]) -> Left {
    for j in 0..row.len() {
        let others = (0..row.len()).filter(|&k| k != j).fold(right, |rest, k| rest - row[k] * region[k]);
        let (first, second) = others.div_pieces(row[j]);
        let old = region[j];
        let new = old.intersect(first).hull(second.map_or(Interval::EMPTY, |second| old.intersect(second)));
        // A species of this face is there, so 0 alone is nothing.
        if new.is_empty() || new.hi() <= 0.0 {
            return Left::Nothing;
        }
        region[j] = new;
    }
    Left::Something
}
