//! Counts by the inertia of a quadratic form: what works for defective matrices, where eigenvectors do not.
//!
//! If Aᵀ P + P A is negative definite for a symmetric P, then A has as many eigenvalues left of the axis as P has positive
//! ones, and the others right of it (Taussky 1961; Ostrowski & Schneider 1962). If P − Aᵀ P A is positive definite, the same
//! holds for inside and outside the unit circle (Taussky 1964; Wimmer 1973). P is an approximate solution of Lyapunov's or
//! Stein's equation for the identity, of which one only needs to prove that the form is within 1 of it, in the norm of row
//! sums; the inertia of P comes from Sylvester's law, by a congruence that makes it nearly a diagonal of ±1.

use super::product::{Ball, gamma, inflate, moduli_times, underflow};
use super::{Block, Border, Counts};
use crate::num::dense::{identity, product, transposed};
use crate::num::eigen::{balanced, symmetric_spectrum};
use crate::num::lyapunov::{lyapunov, stein};

/// All eigenvalues of the block, decided; or `None`.
pub(super) fn counts(block: &Block, border: Border) -> Option<Counts> {
    let n = block.n;
    let (entries, unit) = balanced(&block.entries, n);
    if !entries.iter().all(|entry| entry.is_bounded()) {
        return None;
    }
    let mut ball = Ball::new(&entries);
    let identity = identity(n);
    let p = match border {
        // The size of the matrix does not matter here.
        Border::Axis => lyapunov(&ball.middle, &identity, n)?,
        Border::Circle => {
            ball = ball.times_power_of_two(unit)?;
            stein(&ball.middle, &identity, n)?
        }
    };
    let proved = match border {
        Border::Axis => falls(&p, &ball, n),
        Border::Circle => shrinks(&p, &ball, n),
    };
    proved.then(|| inertia(&p, n)).flatten()
}

/// Whether Aᵀ P + P A is proved to be within 1 of −I for every A.
fn falls(p: &[f64], a: &Ball, n: usize) -> bool {
    let product = product(p, &a.middle, n);
    let ones = vec![1.0; n];
    let mut off = vec![0.0; n];
    // Row sums of |P||A| and of its transpose, with what rounding and the radius may add.
    let [a_sums, r_sums] = [&a.middle, &a.radius].map(|matrix| moduli_times(matrix, &ones));
    let p_sums = moduli_times(p, &ones);
    let rows = [moduli_times(p, &a_sums), moduli_times(&transposed(&a.middle, n), &p_sums)];
    let radii = [moduli_times(p, &r_sums), moduli_times(&transposed(&a.radius, n), &p_sums)];
    for i in 0..n {
        let computed: f64 =
            (0..n).map(|j| (product[i * n + j] + product[j * n + i] + if i == j { 1.0 } else { 0.0 }).abs()).sum();
        let rounding = gamma(n + 2) * (2.0 * (rows[0][i] + rows[1][i]) + 1.0);
        off[i] = (computed + rounding + radii[0][i] + radii[1][i] + underflow(n * n)) * inflate(n);
    }
    off.iter().all(|&off| off < 1.0)
}

/// Whether P − Aᵀ P A is proved to be within 1 of I for every A.
fn shrinks(p: &[f64], a: &Ball, n: usize) -> bool {
    let (form, off) = congruence(p, a, n);
    let p_sums = moduli_times(p, &vec![1.0; n]);
    (0..n).all(|i| {
        let row = i * n..(i + 1) * n;
        let entry = |(j, k): (usize, usize)| (p[k] - form[k] - if i == j { 1.0 } else { 0.0 }).abs();
        let computed: f64 = row.clone().enumerate().map(entry).sum();
        let size = p_sums[i] + form[row].iter().map(|x| x.abs()).sum::<f64>() + 1.0;
        (computed + gamma(4) * size + off[i]) * inflate(n) < 1.0
    })
}

/// How many eigenvalues of a symmetric matrix are positive and how many negative, proved of all or not at all.
fn inertia(p: &[f64], n: usize) -> Option<Counts> {
    let found = symmetric_spectrum(p, n).ok()?;
    let scale = |k: usize| 1.0 / found.values[k].abs().sqrt();
    let basis: Vec<f64> = (0..n * n).map(|place| found.vectors[place] * scale(place % n)).collect();
    if !basis.iter().all(|x| x.is_finite()) {
        return None;
    }
    let (form, off) = congruence(p, &Ball { radius: vec![0.0; n * n], middle: basis }, n);
    let near = |i: usize| {
        let sign = found.values[i].signum();
        let entry = |j: usize| (form[i * n + j] - if i == j { sign } else { 0.0 }).abs();
        let computed: f64 = (0..n).map(entry).sum();
        (computed * (1.0 + gamma(4)) + gamma(4) + off[i]) * inflate(n) < 1.0
    };
    let below = found.values.iter().filter(|&&value| value > 0.0).count();
    (0..n).all(near).then_some(Counts { below, above: n - below })
}

/// Xᵀ P X at the middle of X, as rounding leaves it, and bounds on the row sums of what it may be off for any X.
fn congruence(p: &[f64], x: &Ball, n: usize) -> (Vec<f64>, Vec<f64>) {
    let ones = vec![1.0; n];
    let right = product(p, &x.middle, n);
    let [x_t, r_t] = [&x.middle, &x.radius].map(|matrix| transposed(matrix, n));
    let form = product(&x_t, &right, n);
    let [x_sums, r_sums] = [&x.middle, &x.radius].map(|matrix| moduli_times(matrix, &ones));
    let [inner, spread] = [&x_sums, &r_sums].map(|sums| moduli_times(p, sums));
    let right_sums = moduli_times(&right, &ones);
    let rounding: Vec<f64> =
        inner.iter().zip(&right_sums).map(|(a, b)| gamma(n) * (a + b) * inflate(4) + underflow(n * n)).collect();
    let middle = moduli_times(&x_t, &rounding.iter().zip(&spread).map(|(a, b)| a + b).collect::<Vec<_>>());
    let edge = moduli_times(&r_t, &inner.iter().zip(&spread).map(|(a, b)| a + b).collect::<Vec<_>>());
    let off = middle.iter().zip(&edge).map(|(a, b)| (a + b + underflow(n * n)) * inflate(8)).collect();
    (form, off)
}
