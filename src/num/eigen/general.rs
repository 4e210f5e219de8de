//! Scaled and balanced blocks: eigenvalues alone by [`super::francis`], the real Schur form from the library's iteration with
//! a bound on it.
//!
//! The plain double-shift iteration (Francis 1961) goes round in circles on some orthogonal matrices, rings and cyclic
//! permutations among them; turned by a reflection they are as easy as any. Nothing here is random: the turns are fixed.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use nalgebra::{Complex, DMatrix, Schur};

use super::francis::{Part, parts};
use super::hessenberg::Columns;
use super::{Unsolved, two};
use crate::num::random::Source;
use crate::num::wide::{self, Loops};

/// Steps allowed for each eigenvalue; two or three are usual.
const STEPS_AN_EIGENVALUE: usize = 30;

/// Turns tried after the matrix as it is.
const TURNS: u64 = 3;

/// A = Q T Qᵀ with Q orthogonal and T block triangular with blocks of order one and two.
pub(super) struct RealSchur {
    pub(super) q: DMatrix<f64>,
    pub(super) t: DMatrix<f64>,
}

/// Of a block row by row, of order n ≥ 1, whose largest entry is near 1.
pub(super) fn schur(entries: &[f64], n: usize) -> Result<RealSchur, Unsolved> {
    let matrix = DMatrix::from_row_slice(n, n, entries);
    if let Some(found) = attempt(matrix.clone()) {
        return Ok(found);
    }
    (1..=TURNS).find_map(|turn| turned(&matrix, turn)).ok_or(Unsolved::NoConvergence)
}

/// Eigenvalues of the same, in no order.
pub(super) fn values(entries: &[f64], n: usize) -> Result<Vec<Complex<f64>>, Unsolved> {
    let turned = |turn: u64| {
        let (matrix, _) = turn_of(&DMatrix::from_row_slice(n, n, entries), turn);
        parts_of(Columns::new(matrix.transpose().as_slice(), n))
    };
    let found = parts_of(Columns::new(entries, n)).or_else(|| (1..=TURNS).find_map(turned));
    let mut values = Vec::with_capacity(n);
    for part in found.ok_or(Unsolved::NoConvergence)? {
        match part {
            Part::One(value) => values.push(Complex::new(value, 0.0)),
            Part::Two(block) => values.extend(two::values(&block)),
        }
    }
    Ok(values)
}

fn parts_of(matrix: Columns) -> Option<Vec<Part>> {
    let mut found = None;
    wide::execute(Iteration { matrix, found: &mut found });
    found
}

struct Iteration<'f> {
    matrix: Columns,
    found: &'f mut Option<Vec<Part>>,
}

impl Loops for Iteration<'_> {
    #[inline(always)]
    fn run(mut self) {
        self.matrix.reduce();
        *self.found = parts(&mut self.matrix);
    }
}

fn attempt(matrix: DMatrix<f64>) -> Option<RealSchur> {
    let steps = STEPS_AN_EIGENVALUE * matrix.nrows();
    let (q, t) = Schur::try_new(matrix, f64::EPSILON, steps)?.unpack();
    let finite = q.iter().chain(t.iter()).all(|x| x.is_finite());
    finite.then_some(RealSchur { q, t })
}

/// The same after two reflections: A = H (H A H) H.
fn turned(matrix: &DMatrix<f64>, turn: u64) -> Option<RealSchur> {
    let (matrix, axes) = turn_of(matrix, turn);
    let mut found = attempt(matrix)?;
    axes.iter().rev().for_each(|axis| reflect_rows(&mut found.q, axis));
    Some(found)
}

/// H A H for two reflections H = I − 2 u uᵀ/|u|² after each other, and their u.
fn turn_of(matrix: &DMatrix<f64>, turn: u64) -> (DMatrix<f64>, Vec<Vec<f64>>) {
    let mut source = Source::new(turn);
    let mut turned = matrix.clone();
    let mut axes = Vec::new();
    for _ in 0..2 {
        let axis: Vec<f64> = (0..matrix.nrows()).map(|_| source.between(-1.0, 1.0)).collect();
        reflect_rows(&mut turned, &axis);
        reflect_columns(&mut turned, &axis);
        axes.push(axis);
    }
    (turned, axes)
}

fn length_squared(axis: &[f64]) -> f64 {
    axis.iter().map(|x| x * x).sum()
}

/// H A.
fn reflect_rows(matrix: &mut DMatrix<f64>, axis: &[f64]) {
    let size = length_squared(axis);
    for mut column in matrix.column_iter_mut() {
        let along: f64 = column.iter().zip(axis).map(|(x, u)| x * u).sum();
        column.iter_mut().zip(axis).for_each(|(x, u)| *x -= 2.0 * along / size * u);
    }
}

/// A H.
fn reflect_columns(matrix: &mut DMatrix<f64>, axis: &[f64]) {
    let size = length_squared(axis);
    for i in 0..matrix.nrows() {
        let mut row = matrix.row_mut(i);
        let along: f64 = row.iter().zip(axis).map(|(x, u)| x * u).sum();
        row.iter_mut().zip(axis).for_each(|(x, u)| *x -= 2.0 * along / size * u);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A Q = Q T with Q orthogonal, for the matrix as it is and turned.
    #[test]
    fn recomposes() {
        let mut source = Source::new(3);
        for n in 1..9 {
            let entries: Vec<f64> = (0..n * n).map(|_| source.between(-1.0, 1.0)).collect();
            let matrix = DMatrix::from_row_slice(n, n, &entries);
            for found in [schur(&entries, n).expect("random"), turned(&matrix, 1).expect("random")] {
                let bound = 1e-14 * n as f64;
                assert!((&matrix * &found.q - &found.q * &found.t).amax() < bound, "order {n}");
                assert!((found.q.transpose() * &found.q - DMatrix::identity(n, n)).amax() < bound, "order {n}");
            }
        }
    }
}
