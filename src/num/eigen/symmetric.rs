//! Symmetric matrices, and the largest singular value of any: the library's iterations with a bound on them.

use nalgebra::{DMatrix, SymmetricEigen, SymmetricTridiagonal};

use super::Unsolved;
use super::scale::{Scaled, times_power};

/// Steps allowed for each eigenvalue; two are usual.
const STEPS_AN_EIGENVALUE: usize = 60;

/// Halvings from the widest disc to neighbouring numbers; where the largest is near 0, to 2^-64 of the entries.
const BISECTIONS: usize = 64;

/// Eigenvalues of a symmetric matrix and an orthonormal basis of eigenvectors.
#[derive(Clone, Debug, PartialEq)]
pub struct SymmetricSpectrum {
    /// Falling.
    pub values: Vec<f64>,
    /// Entry i of the k-th at i n + k.
    pub vectors: Vec<f64>,
}

/// Eigenvalues of the symmetric part (A + Aᵀ)/2 of a matrix of order `n`, row by row: falling, with vectors.
///
/// In the matrix's unit; each within a few n ulp of the largest. No entries at all have no eigenvalues.
///
/// # Panics
/// If there are not n² entries.
pub fn symmetric_spectrum(entries: &[f64], n: usize) -> Result<SymmetricSpectrum, Unsolved> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    if entries.iter().any(|x| !x.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    if n == 0 {
        return Ok(SymmetricSpectrum { values: Vec::new(), vectors: Vec::new() });
    }
    let scaled = Scaled::new(entries);
    let matrix = DMatrix::from_fn(n, n, |i, j| f64::midpoint(scaled.entries[i * n + j], scaled.entries[j * n + i]));
    let found =
        SymmetricEigen::try_new(matrix, f64::EPSILON, STEPS_AN_EIGENVALUE * n).ok_or(Unsolved::NoConvergence)?;
    let mut order: Vec<usize> = (0..n).collect();
    order.sort_by(|&a, &b| found.eigenvalues[b].total_cmp(&found.eigenvalues[a]));
    let values: Vec<f64> = order.iter().map(|&k| times_power(found.eigenvalues[k], scaled.exponent)).collect();
    if values.iter().any(|x| !x.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    let vectors = (0..n * n).map(|place| found.eigenvectors[(place / n, order[place % n])]).collect();
    Ok(SymmetricSpectrum { values, vectors })
}

/// As [`symmetric_spectrum`], the values alone.
///
/// # Panics
/// If there are not n² entries.
pub fn symmetric(entries: &[f64], n: usize) -> Result<Vec<f64>, Unsolved> {
    Ok(symmetric_spectrum(entries, n)?.values)
}

/// The largest eigenvalue of the symmetric part (A + Aᵀ)/2 of a matrix of order `n`, row by row; −∞ for no entries.
///
/// In the matrix's unit, within a few n ulp of the largest modulus. In closed form for two, else by bisection on the signs of
/// the pivots of T − xI, T the tridiagonal form (Givens 1954; Golub & Van Loan 2013, §8.4).
///
/// # Panics
/// If there are not n² entries.
pub fn largest_symmetric(entries: &[f64], n: usize) -> Result<f64, Unsolved> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    if entries.iter().any(|x| !x.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    let largest = match *entries {
        [] => return Ok(f64::NEG_INFINITY),
        [a] => a,
        [a, b, c, d] => {
            let half = (0.5 * a - 0.5 * d).hypot(f64::midpoint(b, c));
            f64::midpoint(a, d) + half
        }
        _ => {
            let scaled = Scaled::new(entries);
            let part = |i: usize, j: usize| f64::midpoint(scaled.entries[i * n + j], scaled.entries[j * n + i]);
            let (diagonal, beside) = SymmetricTridiagonal::new(DMatrix::from_fn(n, n, part)).unpack_tridiagonal();
            times_power(largest_of(diagonal.as_slice(), beside.as_slice()), scaled.exponent)
        }
    };
    if largest.is_finite() { Ok(largest) } else { Err(Unsolved::NotFinite) }
}

/// Of a tridiagonal matrix with entries near 1.
fn largest_of(diagonal: &[f64], beside: &[f64]) -> f64 {
    let squares: Vec<f64> = beside.iter().map(|b| b * b).collect();
    let reach = |i: usize| beside.get(i).map_or(0.0, |b| b.abs());
    let row = |i: usize| diagonal[i] + reach(i) + if i > 0 { reach(i - 1) } else { 0.0 };
    // No diagonal entry is larger than the largest eigenvalue, no disc reaches further than the furthest (Gershgorin 1931).
    let mut low = diagonal.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let mut high = (0..diagonal.len()).map(row).fold(low, f64::max);
    for _ in 0..BISECTIONS {
        let middle = f64::midpoint(low, high);
        if middle <= low || middle >= high {
            break;
        }
        if is_above(diagonal, &squares, middle) {
            high = middle;
        } else {
            low = middle;
        }
    }
    f64::midpoint(low, high)
}

/// Whether no eigenvalue reaches x: all pivots of T − xI are negative.
fn is_above(diagonal: &[f64], squares: &[f64], x: f64) -> bool {
    let Some((first, rest)) = diagonal.split_first() else { return true };
    let mut pivot = first - x;
    for (entry, square) in rest.iter().zip(squares) {
        if pivot >= 0.0 {
            return false;
        }
        pivot = entry - x - square / pivot;
    }
    pivot < 0.0
}

/// ‖A‖₂, the largest singular value of a matrix of order `n`, row by row: √ of the largest eigenvalue of AᵀA.
///
/// In the matrix's unit, within a few n ulp: squaring harms only the small ones. 0 for no entries.
///
/// # Panics
/// If there are not n² entries.
pub fn largest_singular(entries: &[f64], n: usize) -> Result<f64, Unsolved> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    if entries.iter().any(|x| !x.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    if n == 0 {
        return Ok(0.0);
    }
    let scaled = Scaled::new(entries);
    let matrix = DMatrix::from_row_slice(n, n, &scaled.entries);
    let square = matrix.tr_mul(&matrix);
    let largest = largest_symmetric(square.as_slice(), n)?.max(0.0).sqrt();
    let size = times_power(largest, scaled.exponent);
    if size.is_finite() { Ok(size) } else { Err(Unsolved::NotFinite) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn by_hand() {
        let check = |entries: &[f64], n: usize, values: &[f64], largest: f64| {
            let found = symmetric(entries, n).expect("finite");
            let close = |x: f64, y: f64| (x - y).abs() <= 1e-15 * largest;
            assert!(found.len() == n && found.iter().zip(values).all(|(&x, &y)| close(x, y)), "{found:?}");
            if let Some(&first) = values.first() {
                let top = largest_symmetric(entries, n).expect("finite");
                assert!(close(top, first), "{top} for {entries:?}");
            }
            let norm = largest_singular(entries, n).expect("finite");
            assert!(close(norm, largest), "{norm} for {entries:?}");
        };
        check(&[], 0, &[], 0.0);
        check(&[-3.0], 1, &[-3.0], 3.0);
        check(&[2.0, 1.0, 1.0, 2.0], 2, &[3.0, 1.0], 3.0);
        check(&[0.0; 9], 3, &[0.0; 3], 0.0);
        // The symmetric part of a nilpotent matrix; its norm is that of the entry.
        check(&[0.0, 4.0, 0.0, 0.0], 2, &[2.0, -2.0], 4.0);
        for unit in [1e-300, 1e300] {
            check(
                &[2.0, 1.0, 0.0, 1.0, 2.0, 1.0, 0.0, 1.0, 2.0].map(|x| x * unit),
                3,
                &[2.0 + 2f64.sqrt(), 2.0, 2.0 - 2f64.sqrt()].map(|x| x * unit),
                (2.0 + 2f64.sqrt()) * unit,
            );
        }
        assert_eq!(symmetric(&[f64::NAN], 1), Err(Unsolved::NotFinite));
        assert_eq!(largest_singular(&[f64::MAX; 4], 2), Err(Unsolved::NotFinite));
    }

    #[test]
    fn vectors_diagonalise() {
        let mut source = crate::num::random::Source::new(5);
        for n in 1..12 {
            let mut a = vec![0.0; n * n];
            for i in 0..n {
                for j in 0..=i {
                    a[i * n + j] = source.between(-1.0, 1.0);
                    a[j * n + i] = a[i * n + j];
                }
            }
            let found = symmetric_spectrum(&a, n).expect("finite");
            let top = largest_symmetric(&a, n).expect("finite");
            assert!((top - found.values[0]).abs() < 1e-14, "order {n}: {top}");
            for i in 0..n {
                for j in 0..n {
                    let sum: f64 =
                        (0..n).map(|k| found.vectors[i * n + k] * found.values[k] * found.vectors[j * n + k]).sum();
                    assert!((sum - a[i * n + j]).abs() < 1e-13, "order {n}");
                }
            }
        }
    }
}
