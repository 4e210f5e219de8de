//! A few points of a line or surface of equilibria: numerical, to be shown.
//!
//! Those present solve A x = b with A singular, within bounds. Projecting in turn onto the solutions and into the box leads
//! to a point of both where there is one (von Neumann 1950; Bregman 1965, from memory); from it the directions that A leaves
//! free lead to others.

use crate::num::interval::Interval;
use crate::num::singular::singular;

/// So many points are shown.
const SHOWN: usize = 3;
/// Rounds of projecting.
const ROUNDS: usize = 500;
/// The box that is projected into is smaller by this share of each side, so that points end up within it.
const MARGIN: f64 = 1e-3;
/// Equations hold to this share of their terms.
const HOLDS: f64 = 1e-12;

/// Points with A x = b and every x in its side and positive; none where none is found.
///
/// `matrix` and `right` are A and b among those present, in the model's units; `dimension` is that of the solutions.
pub(super) fn points(
    matrix: &[Interval],
    right: &[Interval],
    sides: &[Interval],
    dimension: usize,
    stop: &dyn Fn() -> bool,
) -> Vec<Vec<f64>> {
    Surface::new(matrix, right, sides, dimension).and_then(|surface| surface.points(stop)).unwrap_or_default()
}

/// In units in which every side ends at 1 and every row's largest entry is 1.
struct Surface {
    n: usize,
    matrix: Vec<f64>,
    right: Vec<f64>,
    /// Upper ends of the sides.
    scale: Vec<f64>,
    /// Lower ends in these units.
    low: Vec<f64>,
    /// A⁺, n by n.
    inverse: Vec<f64>,
    /// Directions of no slope.
    free: Vec<Vec<f64>>,
}

impl Surface {
    fn new(matrix: &[Interval], right: &[Interval], sides: &[Interval], dimension: usize) -> Option<Self> {
        let n = sides.len();
        let scale: Vec<f64> = sides.iter().map(|side| side.hi()).collect();
        let entry = |k: usize| matrix[k].mid() * scale[k % n];
        let size = |i: usize| (0..n).map(|j| entry(i * n + j).abs()).fold(0.0, f64::max);
        let rows: Vec<f64> = (0..n).map(size).map(|size| if size > 0.0 { size } else { 1.0 }).collect();
        let matrix: Vec<f64> = (0..n * n).map(|k| entry(k) / rows[k / n]).collect();
        let right = right.iter().zip(&rows).map(|(b, row)| b.mid() / row).collect();
        let low = sides.iter().map(|side| side.lo() / side.hi()).collect();
        let parts = singular(&matrix, n)?;
        let rank = n.checked_sub(dimension)?;
        let pseudo = |i: usize, j: usize| {
            (0..rank).map(|k| parts.right[i * n + k] * parts.left[j * n + k] / parts.values[k]).sum::<f64>()
        };
        let inverse = (0..n * n).map(|k| pseudo(k / n, k % n)).collect();
        let free = (rank..n).map(|k| (0..n).map(|i| parts.right[i * n + k]).collect()).collect();
        Some(Self { n, matrix, right, scale, low, inverse, free })
    }

    fn points(&self, stop: &dyn Fn() -> bool) -> Option<Vec<Vec<f64>>> {
        let first = self.first(stop)?;
        let along =
            self.free.iter().flat_map(|direction| [1.0, -1.0].map(|sign| self.half_way(&first, direction, sign)));
        let others: Vec<Vec<f64>> = along.filter(|point| self.holds(point)).take(SHOWN - 1).collect();
        let in_units = |y: Vec<f64>| y.iter().zip(&self.scale).map(|(y, scale)| y * scale).collect();
        Some([first].into_iter().chain(others).map(in_units).collect())
    }

    fn first(&self, stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
        let mut y: Vec<f64> = self.low.iter().map(|low| f64::midpoint(*low, 1.0)).collect();
        for _ in 0..ROUNDS {
            if stop() {
                return None;
            }
            y = self.solved(&y);
            if self.holds(&y) {
                return Some(y);
            }
            for (y, low) in y.iter_mut().zip(&self.low) {
                let margin = MARGIN * (1.0 - low);
                *y = y.clamp(low + margin, 1.0 - margin);
            }
        }
        None
    }

    /// The nearest solution of the equations: y − A⁺ (A y − b).
    fn solved(&self, y: &[f64]) -> Vec<f64> {
        let off: Vec<f64> = (0..self.n).map(|i| self.row(i, y) - self.right[i]).collect();
        let step = |i: usize| (0..self.n).map(|j| self.inverse[i * self.n + j] * off[j]).sum::<f64>();
        y.iter().enumerate().map(|(i, y)| y - step(i)).collect()
    }

    fn row(&self, i: usize, y: &[f64]) -> f64 {
        self.matrix[i * self.n..(i + 1) * self.n].iter().zip(y).map(|(a, y)| a * y).sum()
    }

    fn holds(&self, y: &[f64]) -> bool {
        let inside = y.iter().zip(&self.low).all(|(&y, &low)| y > 0.0 && y >= low && y <= 1.0);
        inside && (0..self.n).all(|i| (self.row(i, y) - self.right[i]).abs() <= HOLDS * self.n as f64)
    }

    /// Half the way from a point to where a direction leaves the box.
    fn half_way(&self, from: &[f64], direction: &[f64], sign: f64) -> Vec<f64> {
        let room = |((&y, &low), &v): ((&f64, &f64), &f64)| match sign * v {
            v if v > 0.0 => (1.0 - y) / v,
            v if v < 0.0 => (low - y) / v,
            _ => f64::INFINITY,
        };
        let most = from.iter().zip(&self.low).zip(direction).map(room).fold(f64::INFINITY, f64::min);
        from.iter().zip(direction).map(|(y, v)| y + sign * most / 2.0 * v).collect()
    }
}
