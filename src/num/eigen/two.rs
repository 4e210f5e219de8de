//! Matrices of order two: eigenvalues in closed form, and how sure the border between node and spiral is.

use nalgebra::Complex;

use super::scale::{exponent_of, largest, times_power};
use crate::num::round::two_sum;

/// Δ = (a − d)²/4 + b c of a matrix \[a b; c d\]: eigenvalues are (a + d)/2 ± √Δ, real for Δ ≥ 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Discriminant {
    /// Δ times a positive power of two that brings the matrix near 1.
    pub value: f64,
    /// (a − d)²/4 + |b c| times the same: what the value is to be measured by.
    pub terms: f64,
}

/// How many units in the last place of its terms a discriminant may be off 0 to be taken for it: entries that come from
/// formulas are rarely more exact.
const BAND: f64 = 8.0;

impl Discriminant {
    /// Of a matrix row by row. Correct to about two units in the last place of the *value*, so that the band is one
    /// around the given entries, not around rounding in here.
    ///
    /// # Panics
    /// In debug builds, if an entry is not finite.
    pub fn of(entries: &[f64; 4]) -> Self {
        debug_assert!(entries.iter().all(|x| x.is_finite()), "a discriminant of {entries:?}");
        Self::of_scaled(&scaled(entries).0)
    }

    /// The terms must neither overflow nor all underflow.
    pub(super) fn of_scaled(&[a, b, c, d]: &[f64; 4]) -> Self {
        let (difference, lost) = two_sum(a, -d);
        let (half, lost) = (difference / 2.0, lost / 2.0);
        let product = b * c;
        let square = half * half;
        // The two large terms can cancel; what rounding took from each is added afterwards (Dekker 1971).
        let (sum, rest) = two_sum(square, product);
        let errors = half.mul_add(half, -square) + b.mul_add(c, -product) + 2.0 * half * lost + rest;
        Self { value: sum + errors, terms: square + product.abs() }
    }

    /// Whether it is within 8 units in the last place of its terms of 0: eigenvalues taken for equal.
    pub fn is_zero(self) -> bool {
        self.value.abs() <= BAND * f64::EPSILON * self.terms
    }
}

/// The matrix near 1, with off-diagonal entries of about the same size, and the exponent that was taken out.
fn scaled(&[a, b, c, d]: &[f64; 4]) -> ([f64; 4], i32) {
    let step = match (exponent_of(b), exponent_of(c)) {
        (Some(b), Some(c)) => (c - b) / 2,
        _ => 0,
    };
    let balanced = [a, times_power(b, step), times_power(c, -step), d];
    let exponent = exponent_of(largest(&balanced)).unwrap_or(0);
    (balanced.map(|x| times_power(x, -exponent)), exponent)
}

/// Eigenvalues of a matrix of order two, in the contract's order; infinite where they overflow.
///
/// A real pair: the one of larger modulus from the sum, the other as determinant over it, so that a small one keeps its
/// digits; a complex pair is exactly conjugate.
pub(super) fn values(entries: &[f64; 4]) -> [Complex<f64>; 2] {
    if is_moderate(entries) {
        return values_near_one(entries);
    }
    let (near, exponent) = scaled(entries);
    values_near_one(&near).map(|z| Complex::new(times_power(z.re, exponent), times_power(z.im, exponent)))
}

/// Whether no product of four entries can leave the range of f64, so that powers of two change nothing.
pub(super) fn is_moderate(entries: &[f64; 4]) -> bool {
    // Without a branch for each entry, and false for what is not finite.
    entries.iter().fold(true, |is, &x| is & ((x == 0.0) | ((x.abs() >= 1e-70) & (x.abs() < 1e70))))
}

/// As [`values`], of entries whose products neither overflow nor underflow.
pub(super) fn values_near_one(entries: &[f64; 4]) -> [Complex<f64>; 2] {
    let &[a, b, c, d] = entries;
    let real = |x: f64| Complex::new(x, 0.0);
    if b == 0.0 || c == 0.0 {
        return [real(a.max(d)), real(a.min(d))];
    }
    let middle = 0.5 * (a + d);
    let half = 0.5 * (a - d);
    let (square, product) = (half * half, b * c);
    let plain = square + product;
    // Where no digit cancels, plain arithmetic is off by a few units in the last place, and the root by half as many.
    let discriminant =
        if plain.abs() >= 0.5 * (square + product.abs()) { plain } else { Discriminant::of_scaled(entries).value };
    if discriminant < 0.0 {
        let turn = (-discriminant).sqrt();
        return [Complex::new(middle, turn), Complex::new(middle, -turn)];
    }
    let reach = discriminant.sqrt();
    let far = middle + reach.copysign(middle);
    if far == 0.0 {
        return [real(0.0), real(0.0)];
    }
    // (a + d)/2 cancels where the far one does not, and then the near one is as large as it.
    let near = if middle.abs() > reach / 2.0 { determinant(entries) / far } else { middle - reach.copysign(far) };
    if far > near { [real(far), real(near)] } else { [real(near), real(far)] }
}

/// a d − b c to a few units in the last place, by plain arithmetic where no digit cancels (else Kahan's way; Jeannerod,
/// Louvet & Muller 2013).
fn determinant(&[a, b, c, d]: &[f64; 4]) -> f64 {
    let (main, product) = (a * d, b * c);
    let plain = main - product;
    if plain.abs() >= 0.5 * (main.abs() + product.abs()) {
        return plain;
    }
    a.mul_add(d, -product) - b.mul_add(c, -product)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn by_hand() {
        let check = |entries: [f64; 4], expected: [(f64, f64); 2]| {
            assert_eq!(values(&entries).map(|z| (z.re, z.im)), expected, "{entries:?}");
        };
        check([0.0; 4], [(0.0, 0.0); 2]);
        check([2.0, 0.0, 5.0, -1.0], [(2.0, 0.0), (-1.0, 0.0)]);
        check([0.0, 1.0, -1.0, 0.0], [(0.0, 1.0), (0.0, -1.0)]);
        check([1.0, 1.0, 1.0, 1.0], [(2.0, 0.0), (0.0, 0.0)]);
        check([-3.0, 1.0, -1.0, -1.0], [(-2.0, 0.0), (-2.0, 0.0)]);
        check([0.0, 4.0, 9.0, 0.0], [(6.0, 0.0), (-6.0, 0.0)]);
        // Vieta: sum 1 + 2^-50, product 2^-50, roots 1 and 2^-50.
        let tiny = 2f64.powi(-50);
        check([1.0 - tiny, tiny, 1.0 - 2.0 * tiny, 2.0 * tiny], [(1.0, 0.0), (tiny, 0.0)]);
        for e in [-1000, -600, 600, 1000] {
            let unit = 2f64.powi(e);
            check([-3.0, 2.0, -4.0, 1.0].map(|x| x * unit), [(-unit, 2.0 * unit), (-unit, -2.0 * unit)]);
        }
        // The same in units that differ by 2^600.
        let unit = 2f64.powi(600);
        check([-3.0, 2.0 * unit, -4.0 / unit, 1.0], [(-1.0, 2.0), (-1.0, -2.0)]);
    }

    #[test]
    fn the_border_between_node_and_spiral() {
        let check = |entries: [f64; 4], sign: f64, zero: bool| {
            let found = Discriminant::of(&entries);
            assert_eq!(
                (found.value.total_cmp(&0.0) as i32, found.is_zero()),
                (sign as i32, zero),
                "{entries:?} {found:?}"
            );
        };
        check([-3.0, 1.0, -1.0, -1.0], 0.0, true);
        check([-1.0, 0.0, 0.0, -1.0], 0.0, true);
        check([0.0; 4], 0.0, true);
        // One unit in the last place to each side.
        check([-3.0, 1.0f64.next_up(), -1.0, -1.0], -1.0, true);
        check([-3.0, 1.0f64.next_down(), -1.0, -1.0], 1.0, true);
        check([-3.0, 1.0 + 20.0 * f64::EPSILON, -1.0, -1.0], -1.0, false);
        // A difference that is no f64: 1 − 2^-60 squared, against (1 − 2^-60)^2 = 1 − 2^-59 + …, so b c = −1 + 2^-53.
        check([2.0, 1.0 - f64::EPSILON / 2.0, -1.0, 2f64.powi(-59)], 1.0, true);
    }
}
