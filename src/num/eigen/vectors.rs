//! Right and left eigenvectors by substitution in a triangular form, and the condition of each eigenvalue.
//!
//! As in Golub & Van Loan (2013, §7.6): of T − λ_k I the upper left part gives the right vector, the lower right the left
//! one, both with a 1 at place k, so that wᴴ v = 1 before they are brought to length 1 and the condition is the product of
//! their lengths: no cancellation hides a defective eigenvalue. Where two eigenvalues agree to rounding the difference is
//! replaced by that rounding; the vectors of a defective one then come out parallel and its condition huge.

use std::ops::Range;

use nalgebra::{Complex, DMatrix};

use super::Vectors;
use super::scale::{exponent_of, times_power};
use super::triangular::Triangular;

/// A growing vector is brought back to 1 beyond this; far enough from overflow that one step cannot jump over it.
const LARGEST: f64 = 1e100;

/// The vectors, those of the k-th at place k of T's diagonal.
pub(super) fn vectors(form: &Triangular) -> Vectors {
    let n = form.n;
    let zero = Complex::new(0.0, 0.0);
    let mut found = Vectors { right: vec![zero; n * n], left: vec![zero; n * n], condition: vec![0.0; n] };
    let adjoint = form.t.adjoint();
    let mut k = 0;
    while k < n {
        let right = Long::solve(&form.t, form, k, Side::Right);
        let left = Long::solve(&adjoint, form, k, Side::Left);
        let real = form.values[k].im == 0.0;
        let (right, right_length) = right.finish(form, Side::Right, real);
        let (left, left_length) = left.finish(form, Side::Left, real);
        let condition = right_length.product(left_length);
        found.put(n, k, &right, &left, condition);
        k += 1;
        if !real {
            let conjugate = |z: &Vec<Complex<f64>>| z.iter().map(Complex::conj).collect::<Vec<_>>();
            found.put(n, k, &conjugate(&right), &conjugate(&left), condition);
            k += 1;
        }
    }
    found
}

impl Vectors {
    fn put(&mut self, n: usize, k: usize, right: &[Complex<f64>], left: &[Complex<f64>], condition: f64) {
        for i in 0..n {
            self.right[i * n + k] = right[i];
            self.left[i * n + k] = left[i];
        }
        self.condition[k] = condition;
    }
}

/// Which vectors.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Side {
    Right,
    Left,
}

impl Side {
    /// How many entries are to be found beside the k-th.
    fn places(self, n: usize, k: usize) -> usize {
        match self {
            Self::Right => k,
            Self::Left => n - 1 - k,
        }
    }

    /// The `step`-th of them.
    fn place(self, k: usize, step: usize) -> usize {
        match self {
            Self::Right => k - step,
            Self::Left => k + step,
        }
    }

    /// Those that come after the i-th.
    fn beyond(self, n: usize, i: usize) -> Range<usize> {
        match self {
            Self::Right => 0..i,
            Self::Left => i + 1..n,
        }
    }

    /// Units of left vectors are the reciprocals.
    fn sign(self) -> i32 {
        match self {
            Self::Right => 1,
            Self::Left => -1,
        }
    }
}

/// A length as a number times 2^exponent: balancing and defective eigenvalues leave the range of f64.
#[derive(Clone, Copy)]
struct Length {
    number: f64,
    exponent: i32,
}

impl Length {
    /// At least 1, as 1/|wᴴ v| of unit vectors is.
    fn product(self, other: Self) -> f64 {
        times_power(self.number * other.number, self.exponent.saturating_add(other.exponent)).max(1.0)
    }
}

/// A vector times 2^exponent.
struct Long {
    entries: Vec<Complex<f64>>,
    exponent: i32,
}

impl Long {
    /// Solves (M − μ I) x = 0 with x_k = 1, for M triangular with μ = M_kk: above k for right vectors, below for left ones.
    fn solve(matrix: &DMatrix<Complex<f64>>, form: &Triangular, k: usize, side: Side) -> Self {
        let (n, zero) = (form.n, Complex::new(0.0, 0.0));
        let mut x = Self { entries: vec![zero; n], exponent: 0 };
        x.entries[k] = Complex::new(1.0, 0.0);
        let column = |j: usize| &matrix.as_slice()[j * n..(j + 1) * n];
        // What is still missing on the right side, updated column by column.
        let mut right: Vec<Complex<f64>> = column(k).iter().map(|z| -z).collect();
        for step in 1..=side.places(n, k) {
            let i = side.place(k, step);
            if right[i] == zero {
                continue;
            }
            let entry = quotient(right[i], divisor(matrix, form, i, k));
            x.entries[i] = entry;
            let rest = side.beyond(n, i);
            for (r, m) in right[rest.clone()].iter_mut().zip(&column(i)[rest]) {
                *r -= entry * m;
            }
            if entry.norm_sqr() > LARGEST * LARGEST {
                x.shrink(&mut right, entry);
            }
        }
        x
    }

    fn shrink(&mut self, right: &mut [Complex<f64>], entry: Complex<f64>) {
        let by = exponent_of(entry.norm()).unwrap_or(0);
        for z in self.entries.iter_mut().chain(right) {
            *z = Complex::new(times_power(z.re, -by), times_power(z.im, -by));
        }
        self.exponent = self.exponent.saturating_add(by);
    }

    /// In the coordinates of A, at unit length, the largest entry real and positive; and the length that it had.
    fn finish(self, form: &Triangular, side: Side, real: bool) -> (Vec<Complex<f64>>, Length) {
        let column = form.turned(&self.entries);
        let units: Vec<i32> = form.units.iter().map(|unit| side.sign() * unit).collect();
        let size = |k: usize| exponent_of(column[k].re.abs().max(column[k].im.abs())).map(|e| e + units[k]);
        let most = (0..form.n).filter_map(size).max().unwrap_or(0);
        let mut vector = vec![Complex::new(0.0, 0.0); form.n];
        for (k, &place) in form.order.iter().enumerate() {
            let unit = units[k] - most;
            vector[place] = Complex::new(times_power(column[k].re, unit), times_power(column[k].im, unit));
        }
        let number = unit_length(&mut vector, real);
        (vector, Length { number, exponent: most.saturating_add(self.exponent) })
    }
}

/// λ_i − λ_k, or what rounding makes of it where they agree.
fn divisor(matrix: &DMatrix<Complex<f64>>, form: &Triangular, i: usize, k: usize) -> Complex<f64> {
    let difference = matrix[(i, i)] - matrix[(k, k)];
    let least = f64::EPSILON * form.sizes[i].max(form.sizes[k]);
    let least = if least > 0.0 { least } else { f64::EPSILON };
    if difference.norm() < least { Complex::new(least, 0.0) } else { difference }
}

/// x/y without overflow in between.
fn quotient(x: Complex<f64>, y: Complex<f64>) -> Complex<f64> {
    let by = -exponent_of(y.re.abs().max(y.im.abs())).unwrap_or(0);
    let scaled = |z: Complex<f64>| Complex::new(times_power(z.re, by), times_power(z.im, by));
    scaled(x) / scaled(y)
}

/// Brings a vector whose entries are near 1 to unit length and its largest entry to the positive axis; the length before.
fn unit_length(vector: &mut [Complex<f64>], real: bool) -> f64 {
    let largest = vector.iter().copied().max_by(|a, b| a.norm_sqr().total_cmp(&b.norm_sqr())).unwrap_or_default();
    let before = length(vector);
    let turn = largest.conj() / largest.norm();
    for z in vector.iter_mut() {
        *z *= turn;
        if real {
            // Real and imaginary part are eigenvectors both.
            z.im = 0.0;
        }
    }
    let after = length(vector);
    for z in vector.iter_mut() {
        *z /= after;
    }
    before
}

fn length(vector: &[Complex<f64>]) -> f64 {
    vector.iter().map(Complex::norm_sqr).sum::<f64>().sqrt()
}
