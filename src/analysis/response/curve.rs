//! Points of a branch: evaluated, corrected onto it by Newton's method, with the tangent (Keller 1977) and the type there.
//!
//! Coordinates are the abundances of those who move, then the control. Tangents and corrections are in scaled coordinates,
//! in which one is a whole abundance or the whole range of the control. Nothing here allocates once a [`Curve`] is made,
//! but for communities of more than three.

use nalgebra::Complex;

use super::piece::Piece;
use super::types::Types;
use crate::expr::tape::gradient::GradientRun;
use crate::expr::tape::run::Run;

/// Newton steps before a point is given up.
const CORRECTIONS: usize = 10;
/// A correction this small, in scaled coordinates, is the last: what it leaves is of the order of its square.
const CORRECTED: f64 = 1e-7;
/// Corrections must shrink to this share of the one before.
const SHRINKS: f64 = 0.5;

/// A piece's equations, ready to be evaluated.
pub(super) struct Curve<'p> {
    pub(super) piece: &'p Piece,
    run: GradientRun<'p, f64>,
    beside: Run<'p, f64>,
    parameters: &'p [f64],
    /// One a coordinate, that of the control last.
    pub(super) scale: Vec<f64>,
    /// Rows and their slopes where they were last evaluated, unscaled, row by row.
    pub(super) values: Vec<f64>,
    pub(super) slopes: Vec<f64>,
    /// The bordered matrix with two right sides.
    matrix: Vec<f64>,
    solutions: [Vec<f64>; 2],
    types: Types,
}

/// How a point was corrected.
#[derive(Clone, Copy, Debug)]
pub(super) struct Corrected {
    /// Size of the first correction.
    pub(super) first: f64,
    /// Sign of the determinant of slopes and border.
    pub(super) orientation: f64,
}

/// A point of a branch with what is known there.
#[derive(Clone, Debug, Default)]
pub(super) struct Sample {
    /// Abundances of those who move, then the control.
    pub(super) at: Vec<f64>,
    /// Along the walk, in the units of the coordinates.
    pub(super) direction: Vec<f64>,
    /// Sign of the determinant of slopes and direction.
    pub(super) orientation: f64,
    /// What is watched beside it.
    pub(super) beside: Vec<f64>,
    /// The type, where there is one.
    pub(super) typed: Typed,
}

/// What the eigenvalues at a point say.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Typed {
    pub(super) light: Option<super::types::Light>,
    pub(super) leading: Option<Complex<f64>>,
    /// How many of those who move repel; `None` where one of these eigenvalues is too near to the border to say.
    pub(super) unstable: Option<usize>,
    /// Whether one of these is so near to the border that a small error may decide.
    pub(super) is_near: bool,
    /// det(A + 1) of a map among those who move: it changes sign where a multiplier passes −1.
    pub(super) alternating: f64,
    /// Largest real part of the growth of those who are absent together.
    pub(super) together: f64,
}

impl Sample {
    /// The control's value.
    pub(super) fn control(&self) -> f64 {
        self.at.last().copied().unwrap_or_default()
    }
}

impl<'p> Curve<'p> {
    /// Of a piece under these parameters, its control varied over `width`.
    pub(super) fn new(piece: &'p Piece, parameters: &'p [f64], width: f64, is_map: bool) -> Self {
        let m = piece.moving.len();
        let mut scale = vec![1.0; m + 1];
        scale[m] = width;
        Self {
            piece,
            run: piece.tape.start_gradient(parameters),
            beside: piece.beside.start(parameters),
            parameters,
            scale,
            values: vec![0.0; m],
            slopes: vec![0.0; m * (m + 1)],
            matrix: Vec::with_capacity((m + 1) * (m + 3)),
            solutions: [vec![0.0; m + 1], vec![0.0; m + 1]],
            types: Types::new(piece, is_map),
        }
    }

    /// Coordinates, the control included.
    pub(super) fn order(&self) -> usize {
        self.scale.len()
    }

    /// A direction in the units of the coordinates as a unit vector in scaled ones.
    pub(super) fn unit(&self, direction: &[f64]) -> Vec<f64> {
        let mut unit: Vec<f64> = direction.iter().zip(&self.scale).map(|(part, scale)| part / scale).collect();
        normalise(&mut unit);
        unit
    }

    /// Evaluates rows and slopes; whether all are defined and finite.
    pub(super) fn evaluate(&mut self, point: &[f64]) -> bool {
        let n = self.order();
        let domain = self.run.at(point);
        for i in 0..n - 1 {
            self.values[i] = *self.run.output(i);
            let row = &mut self.slopes[i * n..(i + 1) * n];
            match self.run.gradient(i) {
                Some(gradient) => row.copy_from_slice(gradient),
                None => row.fill(0.0),
            }
        }
        domain.defined && self.values.iter().chain(&self.slopes).all(|x| x.is_finite())
    }

    /// Solves the scaled slopes with a border for the correction of the last point, and for the tangent.
    fn bordered(&mut self, border: &[f64]) -> Option<f64> {
        let n = self.order();
        self.matrix.clear();
        for (row, value) in self.slopes.chunks_exact(n).zip(&self.values) {
            self.matrix.extend(row.iter().zip(&self.scale).map(|(slope, scale)| slope * scale));
            self.matrix.extend([-value, 0.0]);
        }
        self.matrix.extend_from_slice(border);
        self.matrix.extend([0.0, 1.0]);
        solve(&mut self.matrix, n, &mut self.solutions)
    }

    /// Moves a point onto the curve along directions that the border is at right angles to; the tangent is then there too.
    /// `None` where Newton's method does not converge quickly, or something is not defined.
    pub(super) fn correct(&mut self, point: &mut [f64], border: &[f64]) -> Option<Corrected> {
        let mut last = f64::INFINITY;
        let mut first = 0.0;
        for step in 0..CORRECTIONS {
            if !self.evaluate(point) {
                return None;
            }
            let orientation = self.bordered(border)?;
            let size = self.solutions[0].iter().fold(0.0f64, |most, x| most.max(x.abs()));
            if !size.is_finite() || (step > 0 && size > SHRINKS * last && size > CORRECTED) {
                return None;
            }
            point.iter_mut().zip(&self.solutions[0]).zip(&self.scale).for_each(|((x, d), scale)| *x += d * scale);
            if step == 0 {
                first = size;
            }
            if size <= CORRECTED {
                return Some(Corrected { first, orientation });
            }
            last = size;
        }
        None
    }

    /// The unit tangent found by the last correction, on the side of its border.
    pub(super) fn tangent(&self) -> impl Iterator<Item = f64> + '_ {
        let length = self.solutions[1].iter().map(|x| x * x).sum::<f64>().sqrt();
        self.solutions[1].iter().map(move |x| x / length)
    }

    /// Fills in all that is known of a point that has just been corrected along a border.
    pub(super) fn describe(&mut self, sample: &mut Sample, orientation: f64) {
        let length = self.solutions[1].iter().map(|x| x * x).sum::<f64>().sqrt();
        sample.direction.clear();
        sample.direction.extend(self.solutions[1].iter().zip(&self.scale).map(|(x, scale)| x / length * scale));
        sample.orientation = orientation;
        self.look(sample);
        if sample.typed.is_near && self.evaluate(&sample.at) {
            // The slopes were those before the last correction, which near the border is not near enough.
            self.look(sample);
        }
    }

    /// Fills in what is watched and the type at a point that was evaluated last.
    pub(super) fn look(&mut self, sample: &mut Sample) {
        self.beside.at(&sample.at);
        sample.beside.clear();
        sample.beside.extend(self.beside.outputs().copied());
        sample.typed = self.types.at(self.piece, &sample.at, &self.slopes, &sample.beside, self.parameters);
    }

    /// A described point beside a given one, its control unchanged where that can be, along a direction or the other way;
    /// `None` where there is no curve.
    pub(super) fn settled(&mut self, at: &[f64]) -> Option<Sample> {
        let n = self.order();
        // The control first: states that were found at a value of it stay there.
        for k in (0..n).rev() {
            let mut border = vec![0.0; n];
            border[k] = 1.0;
            let mut sample = Sample { at: at.to_vec(), ..Sample::default() };
            let Some(corrected) = self.correct(&mut sample.at, &border) else { continue };
            let tangent: Vec<f64> = self.tangent().collect();
            if tangent[k].abs() < 1e-3 && k > 0 {
                continue;
            }
            self.describe(&mut sample, corrected.orientation);
            return Some(sample);
        }
        None
    }

    /// All eigenvalues of the point last described, the leading one first.
    pub(super) fn eigenvalues(&self) -> &[Complex<f64>] {
        self.types.values()
    }
}

/// Brings a vector that is not 0 to length 1.
pub(super) fn normalise(vector: &mut [f64]) {
    let length = dot(vector, vector).sqrt();
    for x in vector {
        *x /= length;
    }
}

/// Σ a_i b_i
pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// Solves A x = b for two right sides that stand behind A's columns, by elimination with rows scaled and partial pivoting;
/// the sign of det A. `None` where a pivot is 0 or not finite.
fn solve(a: &mut [f64], n: usize, out: &mut [Vec<f64>; 2]) -> Option<f64> {
    let width = n + 2;
    let mut sign = 1.0;
    for row in a.chunks_exact_mut(width) {
        let largest = row[..n].iter().fold(0.0f64, |most, x| most.max(x.abs()));
        for x in row {
            *x /= largest;
        }
    }
    for k in 0..n {
        let mut place = k;
        for i in k + 1..n {
            if a[i * width + k].abs() > a[place * width + k].abs() {
                place = i;
            }
        }
        let pivot = a[place * width + k];
        if !(pivot.abs() > 0.0 && pivot.is_finite()) {
            return None;
        }
        if place != k {
            crate::num::dense::swap_rows(a, width, k, place);
            sign = -sign;
        }
        sign *= pivot.signum();
        let (above, below) = a.split_at_mut((k + 1) * width);
        let pivot_row = &above[k * width..];
        for row in below.chunks_exact_mut(width) {
            let factor = row[k] / pivot;
            if factor != 0.0 {
                row[k..].iter_mut().zip(&pivot_row[k..]).for_each(|(x, p)| *x -= factor * p);
            }
        }
    }
    for (which, out) in out.iter_mut().enumerate() {
        for k in (0..n).rev() {
            let row = &a[k * width..(k + 1) * width];
            let known: f64 = row[k + 1..n].iter().zip(&out[k + 1..]).map(|(a, x)| a * x).sum();
            out[k] = (row[n + which] - known) / row[k];
        }
    }
    Some(sign)
}
