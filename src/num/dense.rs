//! Small dense matrices, row by row in a slice.

/// The inverse of a matrix of order `n`, by Gauss–Jordan elimination with partial pivoting; an approximation, good enough
/// to precondition with. `None` where a pivot is 0 or not finite.
///
/// # Panics
/// If there are not n² entries.
pub fn inverse(entries: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    let mut a = entries.to_vec();
    let mut b = vec![0.0; n * n];
    for i in 0..n {
        b[i * n + i] = 1.0;
    }
    for k in 0..n {
        let pivot = (k..n).max_by(|&i, &j| a[i * n + k].abs().total_cmp(&a[j * n + k].abs()))?;
        if pivot != k {
            for j in 0..n {
                a.swap(k * n + j, pivot * n + j);
                b.swap(k * n + j, pivot * n + j);
            }
        }
        let scale = 1.0 / a[k * n + k];
        if !scale.is_finite() || scale == 0.0 {
            return None;
        }
        for j in 0..n {
            a[k * n + j] *= scale;
            b[k * n + j] *= scale;
        }
        for i in (0..n).filter(|&i| i != k) {
            let factor = a[i * n + k];
            if factor != 0.0 {
                for j in 0..n {
                    a[i * n + j] -= factor * a[k * n + j];
                    b[i * n + j] -= factor * b[k * n + j];
                }
            }
        }
    }
    b.iter().all(|x| x.is_finite()).then_some(b)
}

#[cfg(test)]
mod tests {
    use super::inverse;

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
