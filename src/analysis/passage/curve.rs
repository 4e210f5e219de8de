//! The curve of equilibria between two scenarios: where H(x, s) = (1 − s) f(x) + s g(x) = 0, f and g being the rows of the
//! first and of the second, each with its own parameters.
//!
//! A point is x with s after it. Each coordinate has a scale, so that units make no difference; borders, tangents and sizes
//! of corrections are in scaled coordinates. Newton's method on H with one more row, a border, and the tangent as the
//! border's answer (Keller 1977; Allgower & Georg 1990, ch. 2–4, from memory).

use super::face::Face;
use crate::expr::tape::gradient::GradientRun;
use crate::num::dense::swap_rows;

/// Newton steps before a point is given up.
const CORRECTIONS: usize = 8;

/// A correction this small, in scaled coordinates, is the last.
const CORRECTED: f64 = 1e-11;

/// Or this small, where rounding keeps further ones from growing smaller.
const NEARLY: f64 = 1e-8;

/// Corrections must shrink to this share of the one before.
const SHRINKS: f64 = 0.5;

/// The curve on one face, ready to be evaluated.
pub(super) struct Curve<'f> {
    runs: [GradientRun<'f, f64>; 2],
    /// One a coordinate, that of s being 1.
    pub(super) scale: Vec<f64>,
    values: Vec<f64>,
    /// Row by row with respect to the scaled coordinates, s last; room for a border below.
    slopes: Vec<f64>,
    right: Vec<f64>,
    matrix: Vec<f64>,
}

/// How a point was corrected.
#[derive(Clone, Copy, Debug)]
pub(super) struct Corrected {
    /// Size of the first correction.
    pub(super) first: f64,
    /// Largest ratio of a correction to the one before.
    pub(super) ratio: f64,
}

impl<'f> Curve<'f> {
    pub(super) fn new(face: &'f Face, values: [&[f64]; 2]) -> Self {
        let m = face.moving.len();
        let run = |scenario: usize| face.tapes[scenario].start_gradient(values[scenario]);
        Self {
            runs: [run(0), run(1)],
            scale: vec![1.0; m + 1],
            values: vec![0.0; m],
            slopes: vec![0.0; (m + 1) * (m + 1)],
            right: vec![0.0; m + 1],
            matrix: Vec::new(),
        }
    }

    /// Coordinates, s included.
    pub(super) fn order(&self) -> usize {
        self.scale.len()
    }

    /// Evaluates H and its slopes; whether both are defined and finite.
    fn evaluate(&mut self, point: &[f64]) -> bool {
        let n = self.order();
        let m = n - 1;
        let s = point[m];
        let shares = [1.0 - s, s];
        let mut is_defined = true;
        for run in &mut self.runs {
            is_defined &= run.at(&point[..m]).defined;
        }
        for i in 0..m {
            let [first, second] = [0, 1].map(|scenario| *self.runs[scenario].output(i));
            self.values[i] = shares[0] * first + shares[1] * second;
            let row = &mut self.slopes[i * n..(i + 1) * n];
            row.fill(0.0);
            for (run, share) in self.runs.iter().zip(shares) {
                let gradient = run.gradient(i).unwrap_or_default();
                row.iter_mut().zip(gradient).for_each(|(slope, x)| *slope += share * x);
            }
            row[m] = second - first;
            row.iter_mut().zip(&self.scale).for_each(|(slope, scale)| *slope *= scale);
        }
        is_defined && self.values.iter().chain(&self.slopes[..m * n]).all(|x| x.is_finite())
    }

    /// Solves the slopes with a border for a right side of `self.right`; the sign of the determinant.
    fn bordered(&mut self, border: &[f64]) -> Option<f64> {
        let n = self.order();
        self.slopes[(n - 1) * n..].copy_from_slice(border);
        self.matrix.clear();
        self.matrix.extend_from_slice(&self.slopes);
        solve(&mut self.matrix, &mut self.right)
    }

    /// Moves a point onto the curve along directions that the border is at right angles to; `None` where Newton's method
    /// does not converge quickly, or something is not defined.
    pub(super) fn correct(&mut self, point: &mut [f64], border: &[f64]) -> Option<Corrected> {
        let n = self.order();
        let mut last = f64::INFINITY;
        let mut done = Corrected { first: 0.0, ratio: 0.0 };
        for step in 0..CORRECTIONS {
            if !self.evaluate(point) {
                return None;
            }
            self.right[..n - 1].iter_mut().zip(&self.values).for_each(|(right, value)| *right = -value);
            self.right[n - 1] = 0.0;
            self.bordered(border)?;
            let size = self.right.iter().fold(0.0f64, |most, x| most.max(x.abs()));
            if !size.is_finite() {
                return None;
            }
            point.iter_mut().zip(&self.right).zip(&self.scale).for_each(|((x, d), scale)| *x += d * scale);
            match step {
                0 => done.first = size,
                _ if size > SHRINKS * last => return (size <= NEARLY).then_some(done),
                _ => done.ratio = done.ratio.max(if last > NEARLY { size / last } else { 0.0 }),
            }
            if size <= CORRECTED {
                return Some(done);
            }
            last = size;
        }
        None
    }

    /// The unit tangent at a point, on the side of `before`, and the sign of the determinant with it as border. `None`
    /// where there is none, or it is at right angles to `before`.
    pub(super) fn tangent(&mut self, point: &[f64], before: &[f64]) -> Option<(Vec<f64>, f64)> {
        let n = self.order();
        if !self.evaluate(point) {
            return None;
        }
        self.right.fill(0.0);
        self.right[n - 1] = 1.0;
        let sign = self.bordered(before)?;
        let length = dot(&self.right, &self.right).sqrt();
        let tangent: Vec<f64> = self.right.iter().map(|x| x / length).collect();
        tangent.iter().all(|x| x.is_finite()).then_some((tangent, sign))
    }

    /// Whether H and its slopes are defined and finite at x and s.
    pub(super) fn is_defined(&mut self, x: &[f64], s: f64) -> bool {
        self.evaluate(&x.iter().copied().chain([s]).collect::<Vec<f64>>())
    }

    /// How near to singular H's slopes with respect to x are at a point: the smallest pivot of rows scaled to 1. 0 where
    /// they are singular or not defined.
    pub(super) fn regularity(&mut self, point: &[f64]) -> f64 {
        let n = self.order();
        if !self.evaluate(point) {
            return 0.0;
        }
        let mut upright = vec![0.0; n];
        upright[n - 1] = 1.0;
        self.slopes[(n - 1) * n..].copy_from_slice(&upright);
        self.matrix.clear();
        self.matrix.extend_from_slice(&self.slopes);
        for i in 0..n {
            self.matrix[i * n + n - 1] = if i == n - 1 { 1.0 } else { 0.0 };
        }
        smallest_pivot(&mut self.matrix, n)
    }
}

pub(in crate::analysis) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// Solves A x = b in place, by elimination with rows scaled and partial pivoting; the sign of det A. `None` where a pivot
/// is 0 or not finite.
pub(in crate::analysis) fn solve(a: &mut [f64], b: &mut [f64]) -> Option<f64> {
    let n = b.len();
    let mut sign = 1.0;
    for (row, b) in a.chunks_exact_mut(n).zip(b.iter_mut()) {
        let scale = 1.0 / largest(row);
        scaled(row, scale);
        *b *= scale;
    }
    for k in 0..n {
        let place = pivot(a, n, k)?;
        if place != k {
            swap_rows(a, n, k, place);
            b.swap(k, place);
            sign = -sign;
        }
        sign *= a[k * n + k].signum();
        eliminate(a, n, k, &mut |i, factor, k| b[i] -= factor * b[k]);
    }
    for k in (0..n).rev() {
        let known: f64 = (k + 1..n).map(|j| a[k * n + j] * b[j]).sum();
        b[k] = (b[k] - known) / a[k * n + k];
    }
    Some(sign)
}

fn smallest_pivot(a: &mut [f64], n: usize) -> f64 {
    for row in a.chunks_exact_mut(n) {
        let scale = 1.0 / largest(row);
        scaled(row, scale);
    }
    let mut least = f64::INFINITY;
    for k in 0..n {
        let Some(place) = pivot(a, n, k) else { return 0.0 };
        swap_rows(a, n, k, place);
        least = least.min(a[k * n + k].abs());
        eliminate(a, n, k, &mut |_, _, _| ());
    }
    least
}

fn scaled(row: &mut [f64], scale: f64) {
    for x in row {
        *x *= scale;
    }
}

fn largest(row: &[f64]) -> f64 {
    row.iter().fold(0.0, |most, x| most.max(x.abs()))
}

/// The row with the largest entry of column k, from k on.
fn pivot(a: &[f64], n: usize, k: usize) -> Option<usize> {
    let place = (k..n).max_by(|&i, &j| a[i * n + k].abs().total_cmp(&a[j * n + k].abs()))?;
    let size = a[place * n + k].abs();
    (size.is_finite() && size > 0.0).then_some(place)
}

fn eliminate(a: &mut [f64], n: usize, k: usize, also: &mut dyn FnMut(usize, f64, usize)) {
    let (above, below) = a.split_at_mut((k + 1) * n);
    let pivot_row = &above[k * n..];
    for (i, row) in below.chunks_exact_mut(n).enumerate() {
        let factor = row[k] / pivot_row[k];
        if factor != 0.0 {
            row[k..].iter_mut().zip(&pivot_row[k..]).for_each(|(x, p)| *x -= factor * p);
            also(k + 1 + i, factor, k);
        }
    }
}
