//! Where an eigenvalue is proved to lie, and on which side of the border between attracting and repelling.

use crate::num::interval::Interval;
pub(super) use crate::num::verified::Border;
use crate::num::verified::Disc;

/// On which side of the border an eigenvalue lies.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    /// It attracts.
    Below,
    /// It lies on the border itself.
    Critical,
    /// It repels.
    Above,
    /// Not decided.
    Unknown,
}

/// What is known of an eigenvalue's imaginary part.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Shape {
    /// It is 0.
    Real,
    /// It is not 0: one of a complex pair.
    Pair,
    /// Not decided.
    Unknown,
}

/// Holds an eigenvalue, and its conjugate where it is one of a pair.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Place {
    /// Its real part.
    pub(super) re: Interval,
    /// Its imaginary part, that of the one above the real axis.
    pub(super) im: Interval,
    /// What is known of its imaginary part.
    pub(super) shape: Shape,
}

impl Place {
    pub(super) fn real(re: Interval) -> Self {
        Self { re, im: Interval::ZERO, shape: Shape::Real }
    }

    /// Of a cluster of discs, which holds as many eigenvalues as it has discs; the part above the real axis stands for both.
    pub(super) fn cluster(discs: &[Disc]) -> Self {
        let reach = |disc: &Disc| Interval::new(-disc.radius, disc.radius);
        let hull = |part: &dyn Fn(&Disc) -> Interval| discs.iter().map(part).fold(Interval::EMPTY, Interval::hull);
        let re = hull(&|disc| Interval::point(disc.centre.re) + reach(disc));
        let im = hull(&|disc| (Interval::point(disc.centre.im) + reach(disc)).abs());
        match discs {
            // The matrix is real: an eigenvalue without its conjugate in the same disc is its own.
            [alone] if alone.centre.im == 0.0 => Self::real(re),
            _ => Self { re, im, shape: if im.positive() { Shape::Pair } else { Shape::Unknown } },
        }
    }

    /// What eigenvalues are led by: real part, for a map modulus.
    pub(super) fn size(&self, border: Border) -> Interval {
        match border {
            Border::Axis => self.re,
            Border::Circle if self.im == Interval::ZERO => self.re.abs(),
            Border::Circle => square_root(square(self.re) + square(self.im)),
        }
    }

    /// The side that its bounds decide.
    pub(super) fn side(&self, border: Border) -> Side {
        match border {
            Border::Axis => side_of(self.re),
            Border::Circle => side_of(self.size(border) - Interval::ONE),
        }
    }
}

/// The side of what lies below the border by −`excess`.
pub(super) fn side_of(excess: Interval) -> Side {
    if excess.hi() < 0.0 {
        Side::Below
    } else if excess.lo() > 0.0 {
        Side::Above
    } else if excess == Interval::ZERO {
        Side::Critical
    } else {
        Side::Unknown
    }
}

/// x²
pub(super) fn square(x: Interval) -> Interval {
    let x = x.abs();
    x * x
}

/// √x of what is not negative in x.
pub(super) fn square_root(x: Interval) -> Interval {
    x.intersect(Interval::NONNEGATIVE).sqrt(&mut true)
}

/// x/2; exact but for underflow, which rounds outward.
pub(super) fn half(x: Interval) -> Interval {
    x * Interval::point(0.5)
}
