//! Eigenvalues of a matrix in Hessenberg form by the double-shift iteration (Francis 1961, 1962), with a bound on its sweeps.
//!
//! Only the block between the last two subdiagonal entries that vanished is touched, for nobody asks for the similarity: that
//! is less than half of the work of a Schur form. Golub & Van Loan (2013, §7.5) tell the whole; exceptional shifts are those
//! of Martin, Peters & Wilkinson (1970).
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::hessenberg::{Columns, Reflection};

/// Sweeps allowed for each eigenvalue; one or two are usual.
const SWEEPS_AN_EIGENVALUE: usize = 30;

/// After so many sweeps without an eigenvalue the shifts are exceptional.
const PATIENCE: usize = 10;

/// One block of the triangular form.
#[derive(Clone, Copy, Debug)]
pub(super) enum Part {
    /// An eigenvalue.
    One(f64),
    /// Row by row; its eigenvalues may be real or not.
    Two([f64; 4]),
}

/// The blocks on the diagonal of the triangular form of a matrix in Hessenberg form, from the last to the first; `None` where
/// the bound on sweeps was reached, or numbers ceased to be finite.
#[inline(always)]
pub(super) fn parts(matrix: &mut Columns) -> Option<Vec<Part>> {
    let mut found = Vec::with_capacity(matrix.n);
    let mut left = SWEEPS_AN_EIGENVALUE * matrix.n;
    let (mut end, mut waited) = (matrix.n, 0);
    while end > 0 {
        let mut block = Block::last(matrix, end);
        match end - block.start {
            1 => found.push(Part::One(block.at(end - 1, end - 1))),
            2 => found.push(Part::Two(block.corner())),
            _ => {
                left = left.checked_sub(1)?;
                waited += 1;
                let exceptional = waited % PATIENCE == 0;
                let shifts = if exceptional { block.exceptional_shifts() } else { block.shifts() };
                if !shifts.is_finite() {
                    return None;
                }
                block.sweep(&shifts);
                continue;
            }
        }
        (end, waited) = (block.start, 0);
    }
    Some(found)
}

/// Two shifts, by what the first column of (H − σ₁)(H − σ₂) needs: conjugate, or both the same real one.
struct Shifts {
    re: f64,
    /// The square of the imaginary part.
    im: f64,
}

impl Shifts {
    fn is_finite(&self) -> bool {
        self.re.is_finite() && self.im.is_finite()
    }
}

/// Rows and columns that are worked at: from `start` to before `end`.
struct Block<'m> {
    matrix: &'m mut Columns,
    start: usize,
    end: usize,
}

impl<'m> Block<'m> {
    /// The block before `end` whose subdiagonal has nothing negligible; what bounds it is made 0.
    ///
    /// Negligible is what is lost beside its two neighbours on the diagonal, or, where these are 0, beside the entries around.
    #[inline(always)]
    fn last(matrix: &'m mut Columns, end: usize) -> Self {
        let mut block = Self { matrix, start: 0, end };
        for k in (1..end).rev() {
            let beside = block.at(k, k).abs() + block.at(k - 1, k - 1).abs();
            let size = if beside > 0.0 { beside } else { block.around(k) };
            if block.at(k, k - 1).abs() <= f64::EPSILON * size {
                block.put(k, k - 1, 0.0);
                block.start = k;
                break;
            }
        }
        block
    }

    /// Moduli of the entries next to the diagonal at k − 1 and k.
    #[inline(always)]
    fn around(&self, k: usize) -> f64 {
        let before = if k >= 2 { self.at(k - 1, k - 2).abs() } else { 0.0 };
        let after = if k + 1 < self.end { self.at(k + 1, k).abs() } else { 0.0 };
        before + after + self.at(k - 1, k).abs()
    }

    #[inline(always)]
    fn at(&self, i: usize, j: usize) -> f64 {
        self.matrix.at(i, j)
    }

    #[inline(always)]
    fn put(&mut self, i: usize, j: usize, entry: f64) {
        self.matrix.put(i, j, entry);
    }

    /// The last two rows and columns.
    #[inline(always)]
    fn corner(&self) -> [f64; 4] {
        let (i, j) = (self.end - 2, self.end - 1);
        [self.at(i, i), self.at(i, j), self.at(j, i), self.at(j, j)]
    }

    /// The eigenvalues of the corner; of two real ones the nearer to the last entry, twice.
    #[inline(always)]
    fn shifts(&self) -> Shifts {
        let [a, b, c, d] = self.corner();
        let half = 0.5 * (a - d);
        let discriminant = half * half + b * c;
        if discriminant < 0.0 {
            return Shifts { re: f64::midpoint(a, d), im: -discriminant };
        }
        let far = half + discriminant.sqrt().copysign(half);
        // d − b c/far, of the two roots about d the smaller shift.
        Shifts { re: if far == 0.0 { d } else { d - b * c / far }, im: 0.0 }
    }

    /// A pair off to the side of where the usual shifts go round in circles.
    #[inline(always)]
    fn exceptional_shifts(&self) -> Shifts {
        let last = self.end - 1;
        let size = self.at(last, last - 1).abs() + self.at(last - 1, last - 2).abs();
        // Sum 1.5 and product 1 in this size, about the last entry.
        Shifts { re: self.at(last, last) + 0.75 * size, im: 0.4375 * size * size }
    }

    /// First column of (H − σ₁)(H − σ₂) of the block from k on.
    #[inline(always)]
    fn first_column(&self, k: usize, shifts: &Shifts) -> [f64; 3] {
        let [a, b, c, d] = [self.at(k, k), self.at(k, k + 1), self.at(k + 1, k), self.at(k + 1, k + 1)];
        let from = a - shifts.re;
        [from * from + shifts.im + b * c, c * (from + (d - shifts.re)), c * self.at(k + 2, k + 1)]
    }

    /// The last place where a sweep may begin: two small entries of the subdiagonal in a row do for one that vanished.
    #[inline(always)]
    fn place_to_begin(&self, shifts: &Shifts) -> (usize, [f64; 3]) {
        for k in (self.start + 1..self.end - 2).rev() {
            let column = self.first_column(k, shifts);
            let lost = self.at(k, k - 1).abs() * (column[1].abs() + column[2].abs());
            let beside = self.at(k - 1, k - 1).abs() + self.at(k, k).abs() + self.at(k + 1, k + 1).abs();
            if lost <= f64::EPSILON * column[0].abs() * beside {
                return (k, column);
            }
        }
        (self.start, self.first_column(self.start, shifts))
    }

    /// Makes a bulge of two shifts at the top and chases it out at the bottom.
    #[inline(always)]
    fn sweep(&mut self, shifts: &Shifts) {
        let (begin, mut x) = self.place_to_begin(shifts);
        for k in begin..self.end - 1 {
            // The last one has two rows; a third entry of 0 leaves the row and column after them as they are.
            let third = k + 2 < self.end;
            if k > begin {
                x = [self.at(k, k - 1), self.at(k + 1, k - 1), if third { self.at(k + 2, k - 1) } else { 0.0 }];
            }
            let (reflection, first) = Reflection::new(x);
            if k > begin {
                self.put(k, k - 1, first);
                self.put(k + 1, k - 1, 0.0);
                if third {
                    self.put(k + 2, k - 1, 0.0);
                }
            } else if k > self.start {
                self.put(k, k - 1, self.at(k, k - 1) * reflection.kept());
            }
            self.matrix.reflect_rows(k, self.end, &reflection);
            self.matrix.reflect_columns(k, self.start, self.end.min(k + 4), &reflection);
        }
    }
}
