//! Vectors that a defining system starts from: of a matrix that is nearly singular, or of a pair near the border.

use nalgebra::Complex;

use crate::analysis::passage::solve;
use crate::num::dense::transposed;
use crate::num::eigen::spectrum;

/// Rounds of inverse iteration with a border; each takes the error times the ratio of the two smallest singular values.
const ROUNDS: usize = 5;

/// Right and left vectors of the smallest singular value of a matrix of order n, row by row, each of length 1 (inverse
/// iteration by bordered systems; Govaerts 2000, ch. 3, from memory). `None` where more than one is nearly 0.
pub(in crate::analysis::response) fn kernel(matrix: &[f64], n: usize) -> Option<[Vec<f64>; 2]> {
    let mut right = unit(&(0..n).map(|i| 1.0 + 0.37 * ((i * i) as f64 + 1.0).cos()).collect::<Vec<_>>())?;
    let mut left = unit(&(0..n).map(|i| 1.0 + 0.41 * ((i * i) as f64 + 2.0).sin()).collect::<Vec<_>>())?;
    let transposed = transposed(matrix, n);
    for _ in 0..ROUNDS {
        let next = bordered(matrix, n, &left, &right)?;
        left = bordered(&transposed, n, &right, &left)?;
        right = next;
    }
    Some([right, left])
}

/// v of the system M v + g b = 0, c·v = 1, to length 1.
fn bordered(matrix: &[f64], n: usize, b: &[f64], c: &[f64]) -> Option<Vec<f64>> {
    let m = n + 1;
    let mut entries = Vec::with_capacity(m * m);
    for (row, b) in matrix.chunks_exact(n.max(1)).zip(b) {
        entries.extend_from_slice(row);
        entries.push(*b);
    }
    entries.extend_from_slice(c);
    entries.push(0.0);
    let mut vector = vec![0.0; m];
    vector[n] = 1.0;
    solve(&mut entries, &mut vector)?;
    vector.pop();
    unit(&vector)
}

fn unit(vector: &[f64]) -> Option<Vec<f64>> {
    let length = vector.iter().map(|x| x * x).sum::<f64>().sqrt();
    (length.is_finite() && length > 0.0).then(|| vector.iter().map(|x| x / length).collect())
}

/// A complex pair of eigenvalues and two real vectors across its plane.
#[derive(Clone, Debug)]
pub(in crate::analysis::response) struct Pair {
    /// The one above the real axis.
    pub(in crate::analysis::response) value: Complex<f64>,
    /// Of length 1.
    pub(in crate::analysis::response) vector: Vec<f64>,
}

/// The pairs of a matrix of order n, the nearest to the border (the imaginary axis or, for a map, the unit circle) first.
/// The vector is that part of the eigenvector which is at right angles to its other part, and longer.
pub(in crate::analysis::response) fn pairs(matrix: &[f64], n: usize, is_map: bool) -> Vec<Pair> {
    let Ok(found) = spectrum(matrix, n) else { return Vec::new() };
    let Some(vectors) = &found.vectors else { return Vec::new() };
    let upper = (0..n).filter(|&k| found.values[k].im > 0.0);
    let mut pairs: Vec<Pair> = upper
        .filter_map(|k| {
            let column: Vec<Complex<f64>> = (0..n).map(|i| vectors.right[i * n + k]).collect();
            // Turned so that Σ v² is real, real and imaginary part are at right angles.
            let square: Complex<f64> = column.iter().map(|z| z * z).sum();
            let turn = Complex::from_polar(1.0, -0.5 * square.arg());
            let vector = unit(&column.iter().map(|z| (z * turn).re).collect::<Vec<_>>())?;
            Some(Pair { value: found.values[k], vector })
        })
        .collect();
    let distance = |pair: &Pair| excess(pair.value, is_map).abs() / pair.value.norm().max(f64::MIN_POSITIVE);
    pairs.sort_by(|a, b| distance(a).total_cmp(&distance(b)));
    pairs
}

/// How far beyond the border an eigenvalue lies.
pub(in crate::analysis::response) fn excess(value: Complex<f64>, is_map: bool) -> f64 {
    if is_map { value.norm() - 1.0 } else { value.re }
}
