//! Singular values and vectors of small matrices, with a bound on the work.

use nalgebra::DMatrix;

/// More sweeps than any small matrix has been seen to need.
const MOST_ITERATIONS: usize = 200;

/// A = U diag(σ) Vᵀ.
#[derive(Clone, Debug, PartialEq)]
pub struct Singular {
    /// σ, falling.
    pub values: Vec<f64>,
    /// Column k is the left vector of σ_k: entry (i, k) at i n + k.
    pub left: Vec<f64>,
    /// Column k is the right vector of σ_k: entry (i, k) at i n + k.
    pub right: Vec<f64>,
}

/// The singular value decomposition of a matrix of order `n`, row by row. `None` where an entry is not finite, or the
/// iteration does not end in time.
///
/// # Panics
/// If there are not n² entries.
pub fn singular(entries: &[f64], n: usize) -> Option<Singular> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    // The library loops or panics on what is not finite.
    if n == 0 || entries.iter().any(|entry| !entry.is_finite()) {
        return None;
    }
    let svd = DMatrix::from_row_slice(n, n, entries).try_svd(true, true, f64::EPSILON, MOST_ITERATIONS)?;
    let (u, vt) = (svd.u?, svd.v_t?);
    let mut order: Vec<usize> = (0..n).collect();
    order.sort_by(|&a, &b| svd.singular_values[b].total_cmp(&svd.singular_values[a]));
    let mut found = Singular { values: Vec::new(), left: vec![0.0; n * n], right: vec![0.0; n * n] };
    for (k, &old) in order.iter().enumerate() {
        found.values.push(svd.singular_values[old]);
        for i in 0..n {
            found.left[i * n + k] = u[(i, old)];
            found.right[i * n + k] = vt[(old, i)];
        }
    }
    Some(found)
}

#[cfg(test)]
mod tests {
    use super::singular;

    #[test]
    fn recomposes_and_orders() {
        let check = |a: &[f64], n: usize, values: &[f64]| {
            let found = singular(a, n).expect("finite");
            for (sigma, expected) in found.values.iter().zip(values) {
                assert!((sigma - expected).abs() < 1e-14 * values[0], "{:?}", found.values);
            }
            for i in 0..n {
                for j in 0..n {
                    let sum: f64 =
                        (0..n).map(|k| found.left[i * n + k] * found.values[k] * found.right[j * n + k]).sum();
                    assert!((sum - a[i * n + j]).abs() < 1e-14 * values[0], "{a:?}");
                }
            }
        };
        check(&[-3.0], 1, &[3.0]);
        check(&[0.0, 2.0, 1.0, 0.0], 2, &[2.0, 1.0]);
        check(&[1.0, 1.0, 1.0, 1.0], 2, &[2.0, 0.0]);
        check(&[1.0, 0.0, 0.0, 0.0, -5.0, 0.0, 0.0, 0.0, 2.0], 3, &[5.0, 2.0, 1.0]);
        assert!(singular(&[f64::NAN], 1).is_none() && singular(&[], 0).is_none());
    }
}
