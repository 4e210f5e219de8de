//! Numbers of about 32 digits with a rigorous error: an f64 and an interval that holds what it lacks.
//!
//! [`Double`] stands for one real number known to lie in `main + rest`. Sums, products, quotients and roots keep their
//! rounding errors by error-free transformations (Knuth 1969; Dekker 1971), which `rest` takes up in interval arithmetic; so
//! a value keeps about 106 bits, and the digits that cancellation takes are covered by `rest`. For residuals at a point and
//! such: it is some ten times slower than an [`Interval`], and for wide sets no better. `elementary` has exp, ln and
//! their like. To add an operation, give it here, falling back on [`Double::around`] an interval where precision has no
//! hold, and a line in `tests/numbers/double_arithmetic.rs`.

mod elementary;

use std::ops::{Add, Mul, Neg, Sub};

use super::interval::Interval;
use super::round::two_sum;

/// Products and quotients smaller than this may lose digits of their rounding error to underflow.
const SAFE: f64 = 1e-250;
/// Above this an intermediate result may overflow.
const LARGE: f64 = 1e290;

/// A number in `main + rest`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Double {
    /// Finite.
    main: f64,
    rest: Interval,
}

impl Neg for Double {
    type Output = Self;

    fn neg(self) -> Self {
        Self { main: -self.main, rest: -self.rest }
    }
}

impl Add for Double {
    type Output = Self;

    fn add(self, other: Self) -> Self {
        let (sum, error) = two_sum(self.main, other.main);
        if !(sum.is_finite() && error.is_finite()) {
            return Self::around(self.enclosure() + other.enclosure());
        }
        Self::of(sum, self.rest + other.rest + Interval::point(error))
    }
}

impl Sub for Double {
    type Output = Self;

    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Mul for Double {
    type Output = Self;

    fn mul(self, other: Self) -> Self {
        if self.is_zero() || other.is_zero() {
            return Self::exact(0.0);
        }
        let product = self.main * other.main;
        if !(SAFE..LARGE).contains(&product.abs()) {
            return Self::around(self.enclosure() * other.enclosure());
        }
        let error = self.main.mul_add(other.main, -product);
        let [a, b] = [Interval::point(self.main), Interval::point(other.main)];
        Self::of(product, Interval::point(error) + (a * other.rest + b * self.rest + self.rest * other.rest))
    }
}

impl Double {
    /// An exact number, which must be finite.
    #[must_use]
    pub fn exact(value: f64) -> Self {
        Self { main: value, rest: Interval::ZERO }
    }

    /// A number of which no more is known than that it lies in an interval; empty stands for no number at all.
    #[must_use]
    pub fn around(set: Interval) -> Self {
        let main = set.mid();
        Self { main, rest: set - Interval::point(main) }
    }

    /// An f64 near it.
    #[must_use]
    pub fn main(self) -> f64 {
        self.main
    }

    /// Holds it.
    #[must_use]
    pub fn enclosure(self) -> Interval {
        Interval::point(self.main) + self.rest
    }

    /// `main + rest` with the middle of `rest` moved to `main`, as far as f64 takes it.
    fn of(main: f64, rest: Interval) -> Self {
        let (sum, lost) = two_sum(main, rest.mid());
        if !(sum.is_finite() && lost.is_finite() && rest.is_bounded()) {
            return Self::around(finite(main) + rest);
        }
        // sum + lost = main + mid, so what is left is rest − mid + lost.
        Self { main: sum, rest: (rest - Interval::point(rest.mid())) + Interval::point(lost) }
    }

    /// a / b; clears `defined` where b may be 0.
    ///
    /// a/b = q + (a − q b)/b, with the remainder of the main parts exact.
    #[must_use]
    pub fn div(self, other: Self, defined: &mut bool) -> Self {
        let divisor = other.enclosure();
        let quotient = self.main / other.main;
        let whole = (SAFE..LARGE).contains(&quotient.abs()) && (SAFE..LARGE).contains(&self.main.abs());
        if divisor.contains_zero() || !whole || other.main == 0.0 {
            return Self::around(self.enclosure().div(divisor, defined));
        }
        let remainder = Interval::point((-quotient).mul_add(other.main, self.main));
        let left = remainder + (self.rest - Interval::point(quotient) * other.rest);
        Self::of(quotient, left.div(divisor, defined))
    }

    /// aⁿ; clears `defined` where n < 0 and a may be 0.
    #[must_use]
    pub fn powi(self, n: i32, defined: &mut bool) -> Self {
        let whole = self.enclosure();
        if whole.contains_zero() {
            return Self::around(whole.powi(n, defined));
        }
        let (mut power, mut square) = (Self::exact(1.0), self);
        let mut left = n.unsigned_abs();
        while left > 0 {
            if left & 1 == 1 {
                power = power * square;
            }
            left >>= 1;
            if left > 0 {
                square = square * square;
            }
        }
        if n < 0 { Self::exact(1.0).div(power, defined) } else { power }
    }

    /// √a; clears `defined` where a may be negative.
    ///
    /// √a = s + (a − s²)/(√a + s).
    #[must_use]
    pub fn sqrt(self, defined: &mut bool) -> Self {
        let whole = self.enclosure();
        let root = whole.sqrt(defined);
        let s = self.main.sqrt();
        if whole.lo() <= 0.0 || !(SAFE..LARGE).contains(&self.main) {
            return Self::around(root);
        }
        let left = Interval::point((-s).mul_add(s, self.main)) + self.rest;
        Self::of(s, left.div(root + Interval::point(s), defined))
    }

    /// |a|
    #[must_use]
    pub fn abs(self) -> Self {
        let whole = self.enclosure();
        if whole.lo() >= 0.0 {
            self
        } else if whole.hi() <= 0.0 {
            -self
        } else {
            Self::around(whole.abs())
        }
    }

    /// Whether it is 0 and nothing else.
    #[must_use]
    pub fn is_zero(self) -> bool {
        self.main == 0.0 && self.rest == Interval::ZERO
    }

    /// Whether a ≤ b; `None` where that cannot be told.
    #[must_use]
    pub fn at_most(self, other: Self) -> Option<bool> {
        let apart = (self - other).enclosure();
        if apart.hi() <= 0.0 {
            Some(true)
        } else if apart.lo() > 0.0 {
            Some(false)
        } else {
            None
        }
    }

    /// One that holds both.
    #[must_use]
    pub fn either(self, other: Self) -> Self {
        if self == other { self } else { Self::around(self.enclosure().hull(other.enclosure())) }
    }
}

/// A number that rounding may have taken beyond the finite ones.
fn finite(x: f64) -> Interval {
    Interval::try_new(x, x).unwrap_or(Interval::ENTIRE)
}
