//! Quadratic functions that decrease along a stable linear system.
//!
//! P with V(z) = zᵀ P z falling: for a map z → A z the solution of P − AᵀPA = I, by doubling (Smith 1968); for dz/dt = A z
//! the same of its Cayley transform, whose V falls along the flow as well.

use super::dense::inverse;

/// Doublings: the sum then has 2^60 terms, beyond which nothing that converges in f64 has any left.
const DOUBLINGS: usize = 60;
/// Entries beyond this mean that the system is not stable, or so nearly that it makes no difference.
const DIVERGES: f64 = 1e12;

/// P for the flow dz/dt = A z, row by row; `None` where it is not stable by a clear margin.
///
/// # Panics
/// If there are not n² entries.
pub fn of_flow(a: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(a.len(), n * n, "entries of a matrix of order {n}");
    let norm = a.iter().map(|a| a * a).sum::<f64>().sqrt();
    if n == 0 || !(norm.is_finite() && norm > 0.0) {
        return (n == 0).then(Vec::new);
    }
    let shifted = |sign: f64| -> Vec<f64> {
        (0..n * n).map(|k| f64::from(u8::from(k / n == k % n)) + sign * a[k] / norm).collect()
    };
    of_map(&product(&inverse(&shifted(-1.0), n)?, &shifted(1.0), n), n)
}

/// P for the map z → A z, row by row; `None` where it is not stable by a clear margin.
///
/// # Panics
/// If there are not n² entries.
pub fn of_map(a: &[f64], n: usize) -> Option<Vec<f64>> {
    assert_eq!(a.len(), n * n, "entries of a matrix of order {n}");
    let mut power = a.to_vec();
    let mut sum: Vec<f64> = (0..n * n).map(|k| f64::from(u8::from(k / n == k % n))).collect();
    for _ in 0..DOUBLINGS {
        let added = product(&transposed(&power, n), &product(&sum, &power, n), n);
        sum.iter_mut().zip(&added).for_each(|(sum, added)| *sum += added);
        let largest =
            |m: &[f64]| m.iter().fold(0.0f64, |most, x| if x.is_nan() { f64::INFINITY } else { most.max(x.abs()) });
        if largest(&sum) > DIVERGES {
            return None;
        }
        if largest(&added) <= f64::EPSILON * largest(&sum) {
            return Some(sum);
        }
        power = product(&power, &power, n);
    }
    None
}

/// zᵀ P z.
pub fn value(p: &[f64], z: &[f64]) -> f64 {
    p.chunks_exact(z.len().max(1)).zip(z).map(|(row, z_i)| z_i * dot(row, z)).sum()
}

/// The lower triangular L with P = L Lᵀ, row by row (Cholesky); `None` where P is not positive definite.
pub fn root(p: &[f64], n: usize) -> Option<Vec<f64>> {
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

fn transposed(a: &[f64], n: usize) -> Vec<f64> {
    (0..n * n).map(|k| a[k % n * n + k / n]).collect()
}

fn product(a: &[f64], b: &[f64], n: usize) -> Vec<f64> {
    let mut out = vec![0.0; n * n];
    for (row, out) in a.chunks_exact(n).zip(out.chunks_exact_mut(n)) {
        for (a, b) in row.iter().zip(b.chunks_exact(n)) {
            super::dense::add_multiple(out, *a, b);
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::{of_flow, of_map, product, root, transposed};
    use crate::num::random::Source;

    /// By definition: P − AᵀPA = I; along the flow AᵀP + PA negative definite, which the root of its negative shows.
    #[test]
    fn falls_along_the_system() {
        let mut source = Source::new(5);
        for n in 1..7 {
            let mut a: Vec<f64> = (0..n * n).map(|_| source.between(-1.0, 1.0)).collect();
            for a in &mut a {
                *a /= n as f64;
            }
            let p = of_map(&a, n).unwrap_or_default();
            let image = product(&transposed(&a, n), &product(&p, &a, n), n);
            for k in 0..n * n {
                let one = f64::from(u8::from(k / n == k % n));
                assert!((p[k] - image[k] - one).abs() < 1e-13 * (1.0 + p[k].abs()), "order {n}, entry {k}");
            }
            (0..n).for_each(|i| a[i * n + i] -= 1.01);
            let p = of_flow(&a, n).unwrap_or_default();
            let (left, right) = (product(&transposed(&a, n), &p, n), product(&p, &a, n));
            let falls: Vec<f64> = left.iter().zip(&right).map(|(l, r)| -l - r).collect();
            assert!(root(&p, n).is_some() && root(&falls, n).is_some(), "order {n}");
        }
    }

    #[test]
    fn nothing_for_what_is_not_stable() {
        let check = |a: &[f64], n, flow: bool, map: bool| {
            assert_eq!((of_flow(a, n).is_some(), of_map(a, n).is_some()), (flow, map), "{a:?}");
        };
        check(&[-0.5], 1, true, true);
        check(&[0.5], 1, false, true);
        check(&[-2.0], 1, true, false);
        check(&[0.0], 1, false, true);
        check(&[1.0], 1, false, false);
        check(&[0.0, 1.0, -1.0, 0.0], 2, false, false);
        check(&[f64::NAN], 1, false, false);
        check(&[-1.0, 1e6, 0.0, -1.0], 2, true, false);
    }
}
