//! Lyapunov's and Stein's equations: quadratic forms that fall along linear paths, and stationary covariances.
//!
//! Solved column by column in a complex Schur form (Bartels & Stewart 1972; Kitagawa 1977), with some n³ operations and no
//! iteration beyond that of the eigenvalues. Approximate: residuals are about n ulp of ‖A‖ ‖P‖, and who needs a proof takes
//! bounds on them, as [`verified`](super::verified) does.

use nalgebra::{Complex, DMatrix, DVector};

use super::eigen::complex_schur;

type Matrix = DMatrix<Complex<f64>>;
type Column = DVector<Complex<f64>>;

/// P with Aᵀ P + P A = −C, for matrices of order `n` row by row and C symmetric; P symmetric, in C's unit over A's.
///
/// Meant for entries of A near 1. Where two eigenvalues of A add up to 0 there is no solution, or more than one: what
/// comes out then is large and solves nothing. `None` where A has no Schur form or the result is not finite.
///
/// # Panics
/// If there are not n² entries each.
pub fn lyapunov(a: &[f64], c: &[f64], n: usize) -> Option<Vec<f64>> {
    // (Tᴴ + t_jj) y_j = −c_j − Σ_{l<j} y_l t_lj.
    solve(a, c, n, |t, known, column, j| forward(t, ONE, t[(j, j)], -(column + known)))
}

/// P with P − Aᵀ P A = C, for matrices of order `n` row by row and C symmetric; P symmetric, in C's unit.
///
/// As [`lyapunov`], with products of two eigenvalues that are 1 in place of sums that are 0.
///
/// # Panics
/// If there are not n² entries each.
pub fn stein(a: &[f64], c: &[f64], n: usize) -> Option<Vec<f64>> {
    // (1 − t_jj Tᴴ) y_j = c_j + Tᴴ Σ_{l<j} y_l t_lj.
    solve(a, c, n, |t, known, column, j| forward(t, -t[(j, j)], ONE, column + t.ad_mul(known)))
}

const ONE: Complex<f64> = Complex::new(1.0, 0.0);

/// In the coordinates of the Schur form, column by column; `of_column` is given T, what the earlier columns contribute, the
/// right side's column and its number.
fn solve(
    a: &[f64],
    c: &[f64],
    n: usize,
    of_column: impl Fn(&Matrix, &Column, &Column, usize) -> Column,
) -> Option<Vec<f64>> {
    assert!(a.len() == n * n && c.len() == n * n, "two matrices of order {n}");
    if n == 0 {
        return Some(Vec::new());
    }
    if !a.iter().chain(c).all(|x| x.is_finite()) {
        return None;
    }
    let (q, t) = complex_schur(a, n).ok()?;
    let right = q.ad_mul(&(DMatrix::from_row_slice(n, n, c).map(Complex::from) * &q));
    let mut y = Matrix::zeros(n, n);
    for j in 0..n {
        let known: Column = y.columns(0, j) * t.view((0, j), (j, 1)).column(0);
        let column = of_column(&t, &known, &right.column(j).into_owned(), j);
        y.set_column(j, &column);
    }
    let p = &q * y * q.adjoint();
    let symmetric: Vec<f64> = (0..n * n).map(|k| f64::midpoint(p[(k / n, k % n)].re, p[(k % n, k / n)].re)).collect();
    symmetric.iter().all(|x| x.is_finite()).then_some(symmetric)
}

/// x with (α Tᴴ + β) x = right, by forward substitution; a pivot that is 0 is taken for one ulp.
fn forward(t: &Matrix, alpha: Complex<f64>, beta: Complex<f64>, right: Column) -> Column {
    let mut x = right;
    for i in 0..x.len() {
        let pivot = alpha * t[(i, i)].conj() + beta;
        let known: Complex<f64> = (0..i).map(|k| t[(k, i)].conj() * x[k]).sum();
        let pivot = if pivot.norm() < f64::EPSILON { Complex::from(f64::EPSILON) } else { pivot };
        x[i] = (x[i] - alpha * known) / pivot;
    }
    x
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::num::random::Source;

    #[test]
    fn by_hand() {
        let close = |x: Option<Vec<f64>>, y: &[f64]| {
            let x = x.expect("solvable");
            assert!(x.len() == y.len() && x.iter().zip(y).all(|(x, y)| (x - y).abs() < 1e-14), "{x:?} for {y:?}");
        };
        close(lyapunov(&[], &[], 0), &[]);
        close(lyapunov(&[-2.0], &[1.0], 1), &[0.25]);
        close(stein(&[0.5], &[3.0], 1), &[4.0]);
        // A = [−1 1; 0 −1]: p11 = 1/2, p12 = 1/4, p22 = 3/4.
        close(lyapunov(&[-1.0, 1.0, 0.0, -1.0], &[1.0, 0.0, 0.0, 1.0], 2), &[0.5, 0.25, 0.25, 0.75]);
        // Rotation by a right angle, halved: P = 4/3 I.
        close(stein(&[0.0, 0.5, -0.5, 0.0], &[1.0, 0.0, 0.0, 1.0], 2), &[4.0 / 3.0, 0.0, 0.0, 4.0 / 3.0]);
        assert!(lyapunov(&[f64::NAN], &[1.0], 1).is_none());
    }

    #[test]
    fn residuals_vanish() {
        let mut source = Source::new(2);
        for n in 1..12 {
            let matrix = |source: &mut Source| DMatrix::from_fn(n, n, |_, _| source.between(-1.0, 1.0));
            let a = matrix(&mut source) - DMatrix::identity(n, n) * 0.3;
            let c = matrix(&mut source);
            let c = &c + c.transpose();
            // Symmetric matrices are the same row by row and column by column; A is given transposed.
            let [rows, right] = [a.transpose().as_slice().to_vec(), c.as_slice().to_vec()];
            let bound = |p: &DMatrix<f64>| 1e-13 * n as f64 * (1.0 + p.amax()) * (1.0 + a.amax()).powi(2);
            let p = DMatrix::from_vec(n, n, lyapunov(&rows, &right, n).expect("finite"));
            assert!((a.transpose() * &p + &p * &a + &c).amax() < bound(&p), "order {n}");
            let p = DMatrix::from_vec(n, n, stein(&rows, &right, n).expect("finite"));
            assert!((&p - a.transpose() * &p * &a - &c).amax() < bound(&p), "order {n}");
        }
    }
}
