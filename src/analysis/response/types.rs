//! The type of a point of a branch from the Jacobian of all species.
//!
//! The rows of those who move are at hand from the walk: x ∂g/∂x where the row is x g, else its slopes. Rows of the absent
//! have nothing beside their own block, so the eigenvalues are those of the two blocks. A map's balance is its next state
//! less the state, so its multipliers are these eigenvalues and 1.

use nalgebra::Complex;

use super::curve::Typed;
use super::piece::Piece;
use crate::analysis::linearise::light;
pub(super) use crate::analysis::linearise::light::Light;
use crate::num::eigen::{self, Unsolved};

/// An eigenvalue this near to the border, as a share of the largest, is on neither side.
const ROUNDING: f64 = 1e-9;

/// One nearer than this share is looked at with the best slopes there are.
const NEAR: f64 = 1e-4;

/// Room for one Jacobian.
pub(super) struct Types {
    /// Of those who move, row by row.
    block: Vec<f64>,
    values: Vec<Complex<f64>>,
    is_map: bool,
}

impl Types {
    pub(super) fn new(piece: &Piece, is_map: bool) -> Self {
        let (m, n) = (piece.moving.len(), piece.present.len());
        Self { block: vec![0.0; m * m], values: Vec::with_capacity(n), is_map }
    }

    /// All eigenvalues where the type was last asked for, the leading one first.
    pub(super) fn values(&self) -> &[Complex<f64>] {
        &self.values
    }

    /// The type at a point, of which the slopes of the rows (with the control's last) and what is watched are known.
    pub(super) fn at(
        &mut self,
        piece: &Piece,
        point: &[f64],
        slopes: &[f64],
        beside: &[f64],
        parameters: &[f64],
    ) -> Typed {
        let m = piece.moving.len();
        for i in 0..m {
            let factor = if piece.is_divided[i] { point[i] } else { 1.0 };
            for j in 0..m {
                self.block[i * m + j] = factor * slopes[i * (m + 1) + j];
            }
        }
        self.values.clear();
        if self.gather_moving(m).is_err() {
            self.values.clear();
            return Typed::default();
        }
        let mut typed = self.of_moving();
        let Ok(together) = self.gather_absent(piece, beside) else {
            self.values.clear();
            return typed;
        };
        typed.together = together;
        if !piece.is_typed || self.values.iter().any(|z| !z.is_finite()) {
            self.values.clear();
            return typed;
        }
        self.sort();
        typed.leading = self.values.first().copied();
        let planar: Option<&[f64; 4]> = if piece.present.len() == 2 { self.block[..].try_into().ok() } else { None };
        let shifted = planar.map(|&[a, b, c, d]| [a + self.shift(), b, c, d + self.shift()]);
        typed.light = light::by_eigenvalues(&self.values, shifted.as_ref(), self.is_map)
            .or_else(|| self.slowly(piece, point, parameters));
        typed
    }

    fn shift(&self) -> f64 {
        if self.is_map { 1.0 } else { 0.0 }
    }

    fn gather_moving(&mut self, m: usize) -> Result<(), Unsolved> {
        let shift = self.shift();
        match *self.block {
            [] => {}
            [a] => self.values.push(Complex::new(a, 0.0)),
            [a, b, c, d] => self.values.extend(eigen::two(&[a, b, c, d])?),
            [a, b, c, d, e, f, g, h, i] => self.values.extend(eigen::three(&[a, b, c, d, e, f, g, h, i])?),
            _ => self.values.extend(eigen::eigenvalues(&self.block, m)?),
        }
        self.values.iter_mut().for_each(|z| z.re += shift);
        Ok(())
    }

    /// How many of those who move repel, and the sign of det(A + 1).
    fn of_moving(&self) -> Typed {
        let excess = |z: &Complex<f64>| if self.is_map { z.norm() - 1.0 } else { z.re };
        let largest = self.values.iter().fold(0.0f64, |most, z| most.max(z.norm()));
        let nearest = self.values.iter().fold(f64::INFINITY, |least, z| least.min(excess(z).abs()));
        let is_clear = nearest > ROUNDING * largest;
        let unstable = self.values.iter().filter(|z| excess(z) > 0.0).count();
        let alternating = if self.is_map {
            self.values.iter().fold(Complex::new(1.0, 0.0), |product, z| product * (z + 1.0)).re
        } else {
            1.0
        };
        Typed {
            unstable: is_clear.then_some(unstable),
            is_near: nearest <= NEAR * largest,
            alternating,
            ..Typed::default()
        }
    }

    /// Adds the eigenvalues of the absent; the largest real part of those who grow only together.
    fn gather_absent(&mut self, piece: &Piece, beside: &[f64]) -> Result<f64, Unsolved> {
        let shift = self.shift();
        let alone = piece.alone.len();
        self.values.extend(beside[..alone].iter().map(|&growth| Complex::new(growth + shift, 0.0)));
        let k = piece.together.len();
        if k == 0 {
            return Ok(-1.0);
        }
        let values = eigen::eigenvalues(&beside[alone..alone + k * k], k)?;
        self.values.extend(values.iter().map(|z| Complex::new(z.re + shift, z.im)));
        Ok(values.first().map_or(-1.0, |leading| leading.re))
    }

    fn sort(&mut self) {
        let is_map = self.is_map;
        let key = |z: &Complex<f64>| if is_map { (z.re.hypot(z.im), z.re, z.im) } else { (z.re, z.im, 0.0) };
        self.values.sort_by(|a, b| {
            let (a, b) = (key(a), key(b));
            b.0.total_cmp(&a.0).then(b.1.total_cmp(&a.1)).then(b.2.total_cmp(&a.2))
        });
    }

    /// As an equilibrium is judged, from the whole Jacobian.
    fn slowly(&self, piece: &Piece, point: &[f64], parameters: &[f64]) -> Option<Light> {
        let n = piece.present.len();
        let mut state = vec![0.0; n + 1];
        piece.moving.iter().zip(point).for_each(|(&i, &x)| state[i] = x);
        state[n] = point[piece.moving.len()];
        let mut run = piece.whole.start_gradient(parameters);
        if !run.at(&state).defined {
            return None;
        }
        let mut numbers = Vec::with_capacity(n * n);
        for i in 0..n {
            match run.gradient(i) {
                Some(row) => numbers.extend_from_slice(&row[..n]),
                None => numbers.resize((i + 1) * n, 0.0),
            }
            numbers[i * n + i] += self.shift();
            if piece.alone.contains(&i) {
                (0..n).filter(|&j| j != i).for_each(|j| numbers[i * n + j] = 0.0);
            }
        }
        light::by_jacobian(&numbers, n, self.is_map)
    }
}
