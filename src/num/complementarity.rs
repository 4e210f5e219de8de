//! The linear complementarity problem by pivoting: z ≥ 0, w = q + M z ≥ 0, and of each pair w_i, z_i one is 0.
//!
//! Lemke's method (Lemke & Howson 1964; Lemke 1965; Cottle, Pang & Stone 1992, ch. 4; from memory): an artificial
//! variable z₀ with a cover d > 0 makes w = q + d z₀ + M z feasible, and complementary pivots drive it out. Ties are broken
//! lexicographically, so no basis returns; pivots are bounded all the same, since rounding knows no lexicon. The answer is
//! approximate: who uses it proves it. [`pivot`] is the way in.

use super::dense::{add_multiple, swap_rows};

/// Ratios closer than this are taken for equal, with the problem scaled to entries near 1.
const TIE: f64 = 1e-12;
/// A pivot must be at least this large, with the problem scaled likewise.
const SMALLEST_PIVOT: f64 = 1e-11;

/// How the pivoting ended.
#[derive(Clone, Debug, PartialEq)]
pub enum Pivoted {
    /// A complementary solution: z, and w where z is 0.
    Solution {
        /// z, at least 0.
        z: Vec<f64>,
        /// Pivots that it took.
        pivots: usize,
    },
    /// A ray: z₀ cannot be driven out. For many kinds of M this says that there is no solution; in general it says nothing.
    Ray,
    /// The bound on pivots was reached.
    TooManyPivots,
    /// It was told to stop.
    Stopped,
}

/// How long to go on.
pub struct Limits<'l> {
    /// Most pivots.
    pub pivots: usize,
    /// Asked before each pivot, of which each costs n² multiplications.
    pub stop: &'l dyn Fn() -> bool,
}

/// Looks for a solution of the problem with vector `q` and matrix `m` (row by row), each scaled so that its largest entries
/// are near 1, from the cover `d` > 0.
///
/// # Panics
/// If the shapes do not agree.
pub fn pivot(q: &[f64], m: &[f64], d: &[f64], limits: &Limits<'_>) -> Pivoted {
    let n = q.len();
    assert!(m.len() == n * n && d.len() == n, "a matrix of order {n} and a cover");
    if q.iter().all(|&q| q >= 0.0) {
        return Pivoted::Solution { z: vec![0.0; n], pivots: 0 };
    }
    let mut dictionary = Dictionary::new(q, m, d);
    let mut entering = dictionary.n;
    let mut row = dictionary.first_to_leave(d);
    for pivots in 1..=limits.pivots {
        if (limits.stop)() {
            return Pivoted::Stopped;
        }
        let left = dictionary.exchange(row, entering);
        if left == dictionary.artificial() {
            return Pivoted::Solution { z: dictionary.solution(), pivots };
        }
        entering = dictionary.columns[dictionary.partner(left)].unwrap_or(n);
        match dictionary.leaving(entering) {
            Some(next) => row = next,
            None => return Pivoted::Ray,
        }
    }
    Pivoted::TooManyPivots
}

/// The basic variables as affine functions of the others. Variables: w_i is i, z_i is n + i, z₀ is 2 n.
struct Dictionary {
    n: usize,
    width: usize,
    /// Row by row n + 1 coefficients, then the value.
    entries: Vec<f64>,
    /// The variable of each row, and of each column.
    basic: Vec<usize>,
    free: Vec<usize>,
    /// The column of each variable, where it is not basic.
    columns: Vec<Option<usize>>,
}

impl Dictionary {
    fn new(q: &[f64], m: &[f64], d: &[f64]) -> Self {
        let n = q.len();
        let mut entries = Vec::with_capacity(n * (n + 2));
        for i in 0..n {
            entries.extend_from_slice(&m[i * n..(i + 1) * n]);
            entries.extend([d[i], q[i]]);
        }
        let columns = (0..=2 * n).map(|variable| variable.checked_sub(n)).collect();
        Self { n, width: n + 2, entries, basic: (0..n).collect(), free: (n..=2 * n).collect(), columns }
    }

    fn artificial(&self) -> usize {
        2 * self.n
    }

    fn partner(&self, variable: usize) -> usize {
        if variable < self.n { variable + self.n } else { variable - self.n }
    }

    fn value(&self, row: usize) -> f64 {
        self.entries[row * self.width + self.n + 1]
    }

    fn coefficient(&self, row: usize, column: usize) -> f64 {
        self.entries[row * self.width + column]
    }

    /// The row that z₀ must bring to 0 for all others to be feasible; of several, what the lexicon says is the last.
    fn first_to_leave(&self, d: &[f64]) -> usize {
        (0..self.n)
            .min_by(|&i, &j| (self.value(i) / d[i]).total_cmp(&(self.value(j) / d[j])).then(j.cmp(&i)))
            .unwrap_or(0)
    }

    /// The basic variable that reaches 0 first as a column's variable grows; `None` where none does.
    fn leaving(&self, column: usize) -> Option<usize> {
        let falling: Vec<usize> = (0..self.n).filter(|&i| self.coefficient(i, column) < -SMALLEST_PIVOT).collect();
        let ratio = |i: usize| self.value(i).max(0.0) / -self.coefficient(i, column);
        let mut tied = smallest(&falling, ratio);
        if let Some(&artificial) = tied.iter().find(|&&i| self.basic[i] == self.artificial()) {
            return Some(artificial);
        }
        for j in 0..self.n {
            if tied.len() < 2 {
                break;
            }
            tied = smallest(&tied, |i| self.inverse_basis(i, j) / -self.coefficient(i, column));
        }
        tied.first().copied()
    }

    /// Entry of the inverse of the basis: what the start value of w_j adds to a basic variable.
    fn inverse_basis(&self, row: usize, j: usize) -> f64 {
        match self.columns[j] {
            Some(column) => -self.coefficient(row, column),
            None => f64::from(u8::from(self.basic[row] == j)),
        }
    }

    /// Exchanges a basic variable with a free one, and returns the one that left the basis.
    fn exchange(&mut self, row: usize, column: usize) -> usize {
        let width = self.width;
        // The pivot row goes to the front, so that the others are one piece.
        swap_rows(&mut self.entries, width, 0, row);
        self.basic.swap(0, row);
        let (pivot_row, others) = self.entries.split_at_mut(width);
        let scale = 1.0 / pivot_row[column];
        pivot_row[column] = -1.0;
        for entry in &mut *pivot_row {
            *entry *= -scale;
        }
        for other in others.chunks_exact_mut(width) {
            let factor = other[column];
            if factor != 0.0 {
                other[column] = 0.0;
                add_multiple(other, factor, pivot_row);
            }
        }
        let left = std::mem::replace(&mut self.basic[0], self.free[column]);
        self.columns[self.free[column]] = None;
        self.columns[left] = Some(column);
        self.free[column] = left;
        left
    }

    fn solution(&self) -> Vec<f64> {
        let mut z = vec![0.0; self.n];
        for (row, &variable) in self.basic.iter().enumerate() {
            if let Some(i) = variable.checked_sub(self.n).filter(|&i| i < self.n) {
                z[i] = self.value(row).max(0.0);
            }
        }
        z
    }
}

/// Those with the smallest measure, to within [`TIE`].
fn smallest(rows: &[usize], measure: impl Fn(usize) -> f64) -> Vec<usize> {
    let least = rows.iter().map(|&i| measure(i)).fold(f64::INFINITY, f64::min);
    let margin = TIE * least.abs().max(1.0);
    rows.iter().copied().filter(|&i| measure(i) <= least + margin).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(q: &[f64], m: &[f64], expected: Option<&[f64]>) {
        let limits = Limits { pivots: 100, stop: &|| false };
        match (pivot(q, m, &vec![1.0; q.len()], &limits), expected) {
            (Pivoted::Solution { z, .. }, Some(expected)) => {
                assert!(z.iter().zip(expected).all(|(z, e)| (z - e).abs() < 1e-14), "{z:?} for {q:?}");
            }
            (found, expected) => assert!(found == Pivoted::Ray && expected.is_none(), "{q:?}: {found:?}"),
        }
    }

    #[test]
    fn problems_solved_by_hand() {
        check(&[], &[], Some(&[]));
        check(&[1.0], &[1.0], Some(&[0.0]));
        check(&[-1.0], &[2.0], Some(&[0.5]));
        // w = −1 − z: no z is large enough.
        check(&[-1.0], &[-1.0], None);
        // Both needed: 2 z₁ + z₂ = 5, z₁ + 2 z₂ = 4.
        check(&[-5.0, -4.0], &[2.0, 1.0, 1.0, 2.0], Some(&[2.0, 1.0]));
        // The first keeps the second out: z₁ = 4, w₂ = −1 + 4.
        check(&[-4.0, -1.0], &[1.0, 0.0, 1.0, 1.0], Some(&[4.0, 0.0]));
        // All tied, solution by symmetry: 3 z = 1.
        let tied: Vec<f64> = (0..9).map(|k| if k % 4 == 0 { 2.0 } else { 0.5 }).collect();
        check(&[-1.0; 3], &tied, Some(&[1.0 / 3.0; 3]));
        // Predator (second) lives on prey: z₁ + z₂ = 3, z₁ = 1.
        check(&[-3.0, 1.0], &[1.0, 1.0, -1.0, 0.0], Some(&[1.0, 2.0]));
    }

    /// Degenerate at every step: q has zeros and ties, M is positive definite, so there is exactly one solution.
    #[test]
    fn ties_do_not_make_it_go_round() {
        let n = 12;
        let m: Vec<f64> = (0..n * n).map(|k| if k / n == k % n { 2.0 } else { 1.0 }).collect();
        let q: Vec<f64> = (0..n).map(|i| if i % 2 == 0 { -1.0 } else { 0.0 }).collect();
        // By symmetry k = 6 equal ones: 2 z + 5 z = 1; w of the others is 6/7 > 0.
        let expected: Vec<f64> = (0..n).map(|i| if i % 2 == 0 { 1.0 / 7.0 } else { 0.0 }).collect();
        check(&q, &m, Some(&expected));
    }

    #[test]
    fn bounds_are_kept() {
        let (q, m) = ([-5.0, -4.0], [2.0, 1.0, 1.0, 2.0]);
        let run = |pivots: usize, stop: bool| pivot(&q, &m, &[1.0, 1.0], &Limits { pivots, stop: &|| stop });
        assert_eq!(run(1, false), Pivoted::TooManyPivots);
        assert_eq!(run(100, true), Pivoted::Stopped);
    }
}
