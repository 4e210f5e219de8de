//! Matrices of order two between bounds: the trace–determinant plane, with proofs.
//!
//! λ² − T λ + D = 0, discriminant (a − d)² + 4bc = T² − 4D. Flows: signs of D and T; maps: signs of p(1) = 1 − T + D,
//! p(−1) = 1 + T + D and 1 − D (Jury 1974).

use super::place::{Border, Place, Shape, Side, half, side_of, square, square_root};
use crate::num::interval::Interval;

/// A matrix \[a b; c d\] of order two, somewhere between bounds.
#[derive(Clone, Copy, Debug)]
pub(super) struct Planar {
    pub(super) a: Interval,
    pub(super) b: Interval,
    pub(super) c: Interval,
    pub(super) d: Interval,
}

impl Planar {
    fn trace(&self) -> Interval {
        self.a + self.d
    }

    fn determinant(&self) -> Interval {
        self.a * self.d - self.b * self.c
    }

    /// (a − d)² + 4bc: two real eigenvalues where positive, a pair where negative, equal ones where 0.
    pub(super) fn discriminant(&self) -> Interval {
        square(self.a - self.d) + Interval::point(4.0) * (self.b * self.c)
    }

    /// The sides of both eigenvalues, in no order.
    pub(super) fn sides(&self, border: Border) -> [Side; 2] {
        match border {
            Border::Axis => axis_sides(self.trace(), self.determinant()),
            Border::Circle => self.circle_sides(),
        }
    }

    fn circle_sides(&self) -> [Side; 2] {
        let one = Interval::ONE;
        let product = self.b * self.c;
        let at_one = (one - self.a) * (one - self.d) - product;
        let at_minus_one = (one + self.a) * (one + self.d) - product;
        let determinant = self.determinant();
        let beyond = side_of(determinant.abs() - one);
        match (side_of(at_one), side_of(at_minus_one)) {
            // A pair, or two on one side of both 1 and −1: their product decides for both.
            (Side::Above, Side::Above) if side_of(determinant - one) != Side::Unknown => {
                [side_of(determinant - one); 2]
            }
            (Side::Above, Side::Below) | (Side::Below, Side::Above) => [Side::Above, Side::Below],
            (Side::Below, Side::Below) => [Side::Above; 2],
            // One is 1 or −1, so the other is ±D.
            (Side::Critical, _) | (_, Side::Critical) => [Side::Critical, beyond],
            _ => match beyond {
                Side::Above => [Side::Above, Side::Unknown],
                Side::Below => [Side::Unknown, Side::Below],
                _ => [Side::Unknown; 2],
            },
        }
    }

    /// Where both lie; one place for both where they are a pair or may be.
    pub(super) fn places(&self, border: Border) -> Vec<Place> {
        let middle = half(self.trace());
        let discriminant = self.discriminant();
        let reach = half(square_root(discriminant));
        if discriminant.lo() >= 0.0 {
            return vec![Place::real(middle + reach), Place::real(middle - reach)];
        }
        if discriminant.hi() < 0.0 {
            return vec![self.pair(border, middle, half(square_root(-discriminant)))];
        }
        let spread = half(square_root(discriminant.abs()));
        let around = Interval::new(0.0, spread.hi());
        vec![Place { re: middle + around.hull(-around), im: around, shape: Shape::Unknown }]
    }

    /// A pair; on the border itself its place is known better than by its two parts.
    fn pair(&self, border: Border, re: Interval, im: Interval) -> Place {
        let critical = self.sides(border) == [Side::Critical; 2];
        let im = match border {
            Border::Axis if critical => im.intersect(square_root(self.determinant())),
            Border::Circle if critical => im.intersect(square_root(Interval::ONE - square(re))),
            _ => im,
        };
        Place { re, im, shape: Shape::Pair }
    }
}

/// The sides of the roots of λ² − T λ + D, for flows.
pub(super) fn axis_sides(trace: Interval, determinant: Interval) -> [Side; 2] {
    match (side_of(determinant), side_of(trace)) {
        (Side::Below, _) => [Side::Above, Side::Below],
        (Side::Above, side) => [side; 2],
        (Side::Critical, side) => [Side::Critical, side],
        // The real parts add up to the trace, so one has its sign.
        (Side::Unknown, side @ (Side::Above | Side::Below)) => [Side::Unknown, side],
        (Side::Unknown, _) => [Side::Unknown; 2],
    }
}
