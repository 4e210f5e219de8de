//! Quadratic forms zᵀ P z of small symmetric matrices, row by row in a slice.

/// zᵀ P z.
pub fn value(p: &[f64], z: &[f64]) -> f64 {
    p.chunks_exact(z.len().max(1)).zip(z).map(|(row, z_i)| z_i * dot(row, z)).sum()
}

/// The lower triangular L with P = L Lᵀ, row by row (Cholesky); `None` where P, of order `n`, is not positive definite.
///
/// # Panics
/// If there are not n² entries.
pub fn root(p: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(p.len(), n * n, "entries of a matrix of order {n}");
    let mut l = vec![0.0; n * n];
    for i in 0..n {
        for j in 0..=i {
            let rest = p[i * n + j] - dot(&l[i * n..i * n + j], &l[j * n..j * n + j]);
            l[i * n + j] = if i > j { rest / l[j * n + j] } else { rest.sqrt() };
        }
        // Not a number where the square was negative.
        if l[i * n + i].is_nan() || l[i * n + i] == 0.0 {
            return None;
        }
    }
    Some(l)
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

#[cfg(test)]
mod tests {
    use super::{root, value};

    /// By hand.
    #[test]
    fn roots_and_values() {
        let check =
            |p: &[f64], n: usize, expected: Option<&[f64]>| assert_eq!(root(p, n).as_deref(), expected, "{p:?}");
        check(&[], 0, Some(&[]));
        check(&[4.0], 1, Some(&[2.0]));
        check(&[4.0, 2.0, 2.0, 10.0], 2, Some(&[2.0, 0.0, 1.0, 3.0]));
        check(&[1.0, 2.0, 2.0, 1.0], 2, None);
        check(&[0.0], 1, None);
        check(&[f64::NAN], 1, None);
        assert_eq!(value(&[4.0, 2.0, 2.0, 10.0], &[1.0, -1.0]), 10.0);
        assert_eq!(value(&[], &[]), 0.0);
    }
}
