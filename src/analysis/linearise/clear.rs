//! How much the eigenvalues of a large community may be off, where all are clear of the border: without most of the vectors.
//!
//! Nearly all attract by more than any could be off. Of a real one that is nearer the vectors come from an inverse iteration
//! (Wielandt 1944; Golub & Van Loan 2013, §7.6), which costs a fraction of a Schur form. Where that does not do, all vectors
//! are needed, and `critical` knows how much each eigenvalue is off.

use nalgebra::Complex;

use super::critical::{Rounding, balanced, excess};
use super::place::Border;
use crate::num::dense;

/// More eigenvalues near the border than this, and all vectors come cheaper.
const MOST_NEAR: usize = 3;

/// Steps of the inverse iteration: with a shift as near as rounding allows, one is nearly always enough.
const STEPS: usize = 2;

/// What each eigenvalue may be off by, in their order; `None` unless it is less for each than what it attracts by.
///
/// Of entries of which rounding is all that is known, in the sense of [`super::critical::errors`].
pub(super) fn errors(numbers: &[f64], values: &[Complex<f64>], border: Border) -> Option<Vec<f64>> {
    let scale = balanced(numbers, values.len());
    let rounding = Rounding::new(numbers, &scale);
    let most = rounding.most(0.0);
    let near: Vec<usize> = (0..values.len()).filter(|&k| excess(values[k], border) >= -most).collect();
    if near.len() > MOST_NEAR {
        return None;
    }
    let mut errors = vec![most; values.len()];
    for k in near {
        let value = values[k];
        // Of eigenvalues that are close together an inverse iteration mixes the vectors.
        let alone = values.iter().enumerate().all(|(j, other)| j == k || (other - value).norm() > most);
        if value.im != 0.0 || !alone {
            return None;
        }
        errors[k] = of_one(numbers, &scale, value.re, &rounding).filter(|&error| excess(value, border) < -error)?;
    }
    Some(errors)
}

/// Of a real eigenvalue: rounding times |w|₁ |v|₁ / |wᵀ v|, in balanced units. `None` where the vectors are not found.
fn of_one(numbers: &[f64], scale: &[f64], value: f64, rounding: &Rounding) -> Option<f64> {
    let n = scale.len();
    // Off by as much as rounding, because without it a row of an absent species would be 0.
    let shift = value + f64::EPSILON * rounding.largest;
    let entry = |k: usize| numbers[k] * scale[k % n] / scale[k / n] - if k / n == k % n { shift } else { 0.0 };
    let shifted: Vec<f64> = (0..n * n).map(entry).collect();
    let allowed = rounding.share * rounding.largest;
    let inverse = dense::inverse(&shifted, n)?;
    let right = vector(&shifted, &inverse, allowed)?;
    let left = vector(&dense::transposed(&shifted, n), &dense::transposed(&inverse, n), allowed)?;
    let overlap: f64 = left.iter().zip(&right).map(|(w, v)| w * v).sum();
    let error = allowed * sum(&left) * sum(&right) / overlap.abs();
    (!error.is_nan()).then_some(error)
}

/// The vector that a nearly singular matrix takes to nearly 0, of largest entry ±1; `None` where that is not within what is
/// `allowed` for each unit of the sum of its entries.
fn vector(matrix: &[f64], inverse: &[f64], allowed: f64) -> Option<Vec<f64>> {
    let n = matrix.len().isqrt();
    let times = |matrix: &[f64], x: &[f64]| -> Vec<f64> {
        matrix.chunks_exact(n).map(|row| row.iter().zip(x).map(|(a, x)| a * x).sum()).collect()
    };
    // Not all alike, lest it be orthogonal to the vector of some regular community.
    let mut x: Vec<f64> = (0..n).map(|i| 1.0 + i as f64 / n as f64).collect();
    for _ in 0..STEPS {
        x = times(inverse, &x);
        let largest = x.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
        if !(largest > 0.0 && largest.is_finite()) {
            return None;
        }
        for x in &mut x {
            *x /= largest;
        }
    }
    let left = times(matrix, &x).iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
    (left <= allowed * sum(&x)).then_some(x)
}

fn sum(x: &[f64]) -> f64 {
    x.iter().map(|x| x.abs()).sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::linearise::critical;
    use crate::num::eigen::{eigenvalues, spectrum};
    use crate::num::random::Source;

    /// A community of `n` in units that differ, whose last species has the growth `last` and acts on all others.
    fn community(n: usize, last: f64) -> Vec<f64> {
        let mut source = Source::new(7);
        let unit = |i: usize| [1.0, 1000.0, 0.01][i % 3];
        let mut entry = |i: usize, j: usize| match (i, j) {
            _ if i + 1 == n => f64::from(u8::from(i == j)) * last,
            _ if i == j => -1.0 - source.unit(),
            _ => source.between(-0.5, 0.5) / (n as f64).sqrt() * unit(i) / unit(j),
        };
        (0..n * n).map(|k| entry(k / n, k % n)).collect()
    }

    #[test]
    fn as_with_all_vectors() {
        let check = |last: f64, clear: bool| {
            let n = 110;
            let numbers = community(n, last);
            let values = eigenvalues(&numbers, n).expect("finite");
            let found = errors(&numbers, &values, Border::Axis);
            assert_eq!(found.is_some(), clear, "{last}");
            let full = spectrum(&numbers, n).expect("finite");
            let expected = critical::errors(&numbers, &[], &full);
            let attracts = |k: usize| full.values[k].re < -expected[k];
            assert_eq!((0..n).all(attracts), clear, "{last}");
            if let Some(found) = found {
                // The leading one is that of the last species; the others are bounded by what no error exceeds.
                assert!((0..n).all(|k| found[k] >= 0.5 * expected[k]), "{last}");
                assert!(last < -0.1 || found[0] <= 2.0 * expected[0], "{last}: {} for {}", found[0], expected[0]);
            }
        };
        check(-0.5, true);
        check(-1e-9, true);
        check(-1e-16, false);
        check(0.0, false);
        check(1e-9, false);
    }

    #[test]
    fn what_an_inverse_iteration_would_mix_needs_all_vectors() {
        let n = 110;
        let mut numbers = community(n, -1e-9);
        // One more that nearly meets it.
        (0..n).for_each(|j| numbers[(n - 2) * n + j] = 0.0);
        numbers[(n - 2) * n + n - 2] = -2e-9;
        numbers[(n - 2) * n + n - 1] = 1.0;
        let values = eigenvalues(&numbers, n).expect("finite");
        assert_eq!(errors(&numbers, &values, Border::Axis), None);
    }
}
