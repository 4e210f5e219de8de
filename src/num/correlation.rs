//! Matrices of correlations: whether one is possible, the nearest one that is, and the factor that draws by it.
//!
//! A matrix of order n is n² numbers, row by row, symmetric with ones on its diagonal.

use std::f64::consts::PI;

use super::eigen::symmetric_spectrum;

/// A pivot, or an eigenvalue below 0, of this size is rounding: entries are at most 1.
const ROUNDING: f64 = 1e-12;
/// Alternating projections of Higham converge linearly; most matrices take some dozens.
const MOST_PROJECTIONS: usize = 500;
/// Products of n³ numbers that all projections together may cost.
const WORK: usize = 200_000_000;
const CONVERGED: f64 = 1e-10;

/// Pearson's correlation of two normal variables whose rank correlation is `rank` (Pearson 1907): 2 sin(π rank/6).
#[must_use]
pub fn of_normals(rank: f64) -> f64 {
    2.0 * (PI * rank / 6.0).sin()
}

/// The rank correlation of two normal variables correlated by `rho`: (6/π) arcsin(ρ/2).
#[must_use]
pub fn rank_of_normals(rho: f64) -> f64 {
    6.0 / PI * (rho / 2.0).asin()
}

/// The lower triangular L with L Lᵀ = the matrix, or `None` if it has a negative eigenvalue or an entry that is not finite.
///
/// Cholesky's method; where a pivot is 0, as of variables that follow from each other, so is its column.
///
/// # Panics
/// If there are not n² entries.
#[must_use]
pub fn factor(entries: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(entries.len(), n * n, "correlations of {n} variables");
    let mut l = vec![0.0; n * n];
    for j in 0..n {
        let dot = |l: &[f64], i: usize| (0..j).map(|k| l[i * n + k] * l[j * n + k]).sum::<f64>();
        let pivot = entries[j * n + j] - dot(&l, j);
        let root = if pivot > ROUNDING { pivot.sqrt() } else { 0.0 };
        for i in j + 1..n {
            let rest = entries[i * n + j] - dot(&l, i);
            // A variable that has nothing of its own can share nothing of its own.
            if root == 0.0 && (rest.is_nan() || rest.abs() > ROUNDING.sqrt()) {
                return None;
            }
            l[i * n + j] = if root > 0.0 { rest / root } else { 0.0 };
        }
        if pivot.is_nan() || pivot < -ROUNDING {
            return None;
        }
        l[j * n + j] = root;
    }
    Some(l)
}

/// The possible matrix nearest to this one, in the sum of squares of the entries (Higham 2002), among those that are 0
/// wherever this one is. `None` where that takes too long, or an entry is not finite.
///
/// Alternating projections onto the matrices without negative eigenvalues, with the correction of Dykstra (1983), and onto
/// those with the given zeros and ones. As these converge from outside, the result is then drawn to the identity until it
/// is possible, by a few 1e-10.
///
/// # Panics
/// If there are not n² entries.
#[must_use]
pub fn nearest(entries: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(entries.len(), n * n, "correlations of {n} variables");
    let projections = MOST_PROJECTIONS.min(WORK / (n * n * n).max(1));
    let mut y = entries.to_vec();
    let mut correction = vec![0.0; n * n];
    for _ in 0..projections {
        let r: Vec<f64> = y.iter().zip(&correction).map(|(y, s)| y - s).collect();
        let x = without_negative(&r, n)?;
        correction = x.iter().zip(&r).map(|(x, r)| x - r).collect();
        let last = std::mem::replace(&mut y, x);
        for (place, (y, given)) in y.iter_mut().zip(entries).enumerate() {
            if place % (n + 1) == 0 {
                *y = 1.0;
            } else if *given == 0.0 {
                *y = 0.0;
            }
        }
        if y.iter().zip(&last).all(|(new, old)| (new - old).abs() <= CONVERGED) {
            return drawn_in(y, n);
        }
    }
    None
}

/// The nearest matrix without negative eigenvalues: they are set to 0.
fn without_negative(entries: &[f64], n: usize) -> Option<Vec<f64>> {
    let spectrum = symmetric_spectrum(entries, n).ok()?;
    let mut out = vec![0.0; n * n];
    for (k, value) in spectrum.values.iter().enumerate().filter(|(_, value)| **value > 0.0) {
        for i in 0..n {
            for j in 0..n {
                out[i * n + j] += value * spectrum.vectors[i * n + k] * spectrum.vectors[j * n + k];
            }
        }
    }
    Some(out)
}

/// All correlations made smaller in one proportion, as little as makes the matrix possible.
///
/// With the lowest eigenvalue −e it is 1/(1 + e), and the rest of rounding. `None` where there are no eigenvalues.
#[must_use]
pub fn drawn_in(mut entries: Vec<f64>, n: usize) -> Option<Vec<f64>> {
    let lowest = symmetric_spectrum(&entries, n).ok()?.values.last().copied().unwrap_or(0.0);
    let share = (1.0 - ROUNDING) / (1.0 - lowest.min(0.0));
    for (place, entry) in entries.iter_mut().enumerate() {
        if place % (n + 1) != 0 {
            *entry *= share;
        }
    }
    Some(entries)
}

#[cfg(test)]
mod tests {
    use super::{factor, nearest, of_normals, rank_of_normals};

    const HALF: f64 = std::f64::consts::FRAC_1_SQRT_2;

    #[test]
    fn factors_recompose() {
        let check = |a: &[f64], n: usize| {
            let l = factor(a, n).expect("possible");
            for (place, entry) in a.iter().enumerate() {
                let (i, j) = (place / n, place % n);
                let sum: f64 = (0..n).map(|k| l[i * n + k] * l[j * n + k]).sum();
                assert!((sum - entry).abs() < 1e-7, "{a:?}: {l:?}");
            }
        };
        check(&[], 0);
        check(&[1.0, -0.4, -0.4, 1.0], 2);
        check(&[1.0, -1.0, -1.0, 1.0], 2);
        check(&[1.0, 1.0, 0.3, 1.0, 1.0, 0.3, 0.3, 0.3, 1.0], 3);
        check(&[1.0, HALF, 0.0, HALF, 1.0, HALF, 0.0, HALF, 1.0], 3);
        for wrong in [[1.0, 0.8, 0.0, 0.8, 1.0, 0.8, 0.0, 0.8, 1.0], [1.0, 1.0, 0.3, 1.0, 1.0, 0.4, 0.3, 0.4, 1.0]] {
            assert_eq!(factor(&wrong, 3), None);
        }
        assert_eq!(factor(&[1.0, f64::NAN, f64::NAN, 1.0], 2), None);
    }

    /// A chain of three with equal correlations and none between its ends is possible up to 1/√2, a circle of three with
    /// equal negative ones down to −1/2.
    #[test]
    fn the_nearest_is_on_the_border() {
        let check = |a: &[f64], expected: &[f64]| {
            let found = nearest(a, 3).expect("in time");
            assert!(found.iter().zip(expected).all(|(x, y)| (x - y).abs() < 1e-8), "{found:?}");
            assert!(factor(&found, 3).is_some());
        };
        check(&[1.0, 0.9, 0.0, 0.9, 1.0, 0.9, 0.0, 0.9, 1.0], &[1.0, HALF, 0.0, HALF, 1.0, HALF, 0.0, HALF, 1.0]);
        check(
            &[1.0, -0.8, -0.8, -0.8, 1.0, -0.8, -0.8, -0.8, 1.0],
            &[1.0, -0.5, -0.5, -0.5, 1.0, -0.5, -0.5, -0.5, 1.0],
        );
        assert_eq!(nearest(&[1.0, f64::NAN, f64::NAN, 1.0], 2), None);
    }

    #[test]
    fn ranks_and_normals_translate() {
        for (rank, rho) in [(0.0, 0.0), (1.0, 1.0), (-1.0, -1.0)] {
            assert!((of_normals(rank) - rho).abs() < 1e-15 && (rank_of_normals(rho) - rank).abs() < 1e-15);
        }
        assert!((rank_of_normals(of_normals(0.37)) - 0.37).abs() < 1e-15);
    }
}
