//! Dense matrices, row by row in a slice.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::wide::{self, Loops};

/// Smaller matrices are done before wider instructions are chosen.
const WORTH_CHOOSING: usize = 16;

/// The inverse of a matrix of order `n`, by Gauss–Jordan elimination with partial pivoting; an approximation, good enough
/// to precondition with. `None` where a pivot is 0 or not finite.
///
/// # Panics
/// If there are not n² entries.
pub fn inverse(entries: &[f64], n: usize) -> Option<Vec<f64>> {
    inverse_unless(entries, n, &|| false)
}

/// As [`inverse`]; `None` also where `stop`, asked once for each of the n columns, says so.
///
/// # Panics
/// If there are not n² entries.
pub fn inverse_unless(entries: &[f64], n: usize, stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    let mut a = entries.to_vec();
    let mut row = vec![0.0; n];
    let mut exchanged = Vec::with_capacity(n);
    for k in 0..n {
        let pivot = (k..n).max_by(|&i, &j| a[i * n + k].abs().total_cmp(&a[j * n + k].abs()))?;
        let scale = 1.0 / a[pivot * n + k];
        if !scale.is_finite() || scale == 0.0 || stop() {
            return None;
        }
        swap_rows(&mut a, n, k, pivot);
        exchanged.push(pivot);
        // In place: the column that becomes a unit vector gives room for the inverse's.
        a[k * n + k] = 1.0;
        a[k * n..(k + 1) * n].iter_mut().for_each(|x| *x *= scale);
        row.copy_from_slice(&a[k * n..(k + 1) * n]);
        let elimination = Elimination { a: &mut a, row: &row, k };
        if n < WORTH_CHOOSING { elimination.run() } else { wide::execute(elimination) }
    }
    for (k, &pivot) in exchanged.iter().enumerate().rev() {
        if pivot != k {
            a.chunks_exact_mut(n).for_each(|row| row.swap(k, pivot));
        }
    }
    a.iter().all(|x| x.is_finite()).then_some(a)
}

/// Takes multiples of the k-th row from all others, such that their k-th entries become those of an inverse.
struct Elimination<'a> {
    a: &'a mut [f64],
    row: &'a [f64],
    k: usize,
}

impl Loops for Elimination<'_> {
    #[inline(always)]
    fn run(self) {
        for (i, other) in self.a.chunks_exact_mut(self.row.len()).enumerate() {
            let factor = other[self.k];
            if i != self.k && factor != 0.0 {
                other[self.k] = 0.0;
                other.iter_mut().zip(self.row).for_each(|(y, x)| *y -= factor * x);
            }
        }
    }
}

/// A B for two matrices of order `n`.
///
/// # Panics
/// If one of them does not have n² entries.
#[must_use]
pub fn product(a: &[f64], b: &[f64], n: usize) -> Vec<f64> {
    assert!(a.len() == n * n && b.len() == n * n, "entries of two matrices of order {n}");
    let mut out = vec![0.0; n * n];
    for (row, out) in a.chunks_exact(n.max(1)).zip(out.chunks_exact_mut(n.max(1))) {
        for (&factor, other) in row.iter().zip(b.chunks_exact(n)) {
            if factor != 0.0 {
                add_multiple(out, factor, other);
            }
        }
    }
    out
}

/// Aᵀ for a matrix of order `n`.
///
/// # Panics
/// If there are not n² entries.
#[must_use]
pub fn transposed(a: &[f64], n: usize) -> Vec<f64> {
    assert_eq!(a.len(), n * n, "entries of a matrix of order {n}");
    (0..n * n).map(|k| a[k % n * n + k / n]).collect()
}

/// ‖A‖₁, the largest sum of the absolute entries of a column, for a matrix of order `n`.
#[must_use]
pub fn norm_one(a: &[f64], n: usize) -> f64 {
    (0..n).map(|j| a.iter().skip(j).step_by(n).map(|x| x.abs()).sum()).fold(0.0, f64::max)
}

/// The unit matrix of order `n`.
#[must_use]
pub fn identity(n: usize) -> Vec<f64> {
    (0..n * n).map(|k| if k / n == k % n { 1.0 } else { 0.0 }).collect()
}

/// √Σx², the norm of Frobenius.
#[must_use]
pub fn frobenius(x: &[f64]) -> f64 {
    x.iter().map(|x| x * x).sum::<f64>().sqrt()
}

/// The rows and columns of a matrix of order `n` with these indices, in their order.
#[must_use]
pub fn block<T: Copy>(a: &[T], n: usize, indices: &[usize]) -> Vec<T> {
    indices.iter().flat_map(|&i| indices.iter().map(move |&j| a[i * n + j])).collect()
}

/// y + c x in place of y.
pub fn add_multiple(y: &mut [f64], c: f64, x: &[f64]) {
    for (y, x) in y.iter_mut().zip(x) {
        *y += c * x;
    }
}

/// Exchanges two rows of a matrix with `width` columns.
pub fn swap_rows(entries: &mut [f64], width: usize, i: usize, j: usize) {
    if i != j {
        let (low, high) = (i.min(j), i.max(j));
        let (before, after) = entries.split_at_mut(high * width);
        before[low * width..(low + 1) * width].swap_with_slice(&mut after[..width]);
    }
}

#[cfg(test)]
mod tests {
    use super::{block, frobenius, identity, inverse, norm_one, product, transposed};

    #[test]
    fn multiplies_turns_and_cuts() {
        let a = [1.0, 2.0, 0.0, 0.0, -3.0, 1.0, 4.0, 0.0, 5.0];
        // A², by hand.
        assert_eq!(product(&a, &a, 3), [1.0, -4.0, 2.0, 4.0, 9.0, 2.0, 24.0, 8.0, 25.0]);
        assert_eq!(transposed(&a, 3), [1.0, 0.0, 4.0, 2.0, -3.0, 0.0, 0.0, 1.0, 5.0]);
        assert_eq!(norm_one(&a, 3), 6.0);
        assert_eq!(block(&a, 3, &[2, 0]), [5.0, 4.0, 0.0, 1.0]);
        assert_eq!((identity(2), frobenius(&[3.0, 0.0, -4.0])), (vec![1.0, 0.0, 0.0, 1.0], 5.0));
        assert_eq!((product(&[], &[], 0), transposed(&[], 0), norm_one(&[], 0)), (vec![], vec![], 0.0));
    }

    #[test]
    fn inverts() {
        let check = |a: &[f64], n: usize, expected: Option<&[f64]>| match (inverse(a, n), expected) {
            (Some(found), Some(expected)) => {
                assert!(found.iter().zip(expected).all(|(x, y)| (x - y).abs() < 1e-14), "{found:?}");
            }
            (found, expected) => assert_eq!(found.is_none(), expected.is_none(), "{a:?}"),
        };
        check(&[], 0, Some(&[]));
        check(&[4.0], 1, Some(&[0.25]));
        check(&[0.0, 2.0, 1.0, 0.0], 2, Some(&[0.0, 1.0, 0.5, 0.0]));
        // By hand: det = 1.
        check(&[2.0, 1.0, 1.0, 1.0], 2, Some(&[1.0, -1.0, -1.0, 2.0]));
        check(&[1.0, 2.0, 2.0, 4.0], 2, None);
        check(&[f64::NAN, 0.0, 0.0, 1.0], 2, None);
        check(&[0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0], 3, Some(&[0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0]));
    }
}
