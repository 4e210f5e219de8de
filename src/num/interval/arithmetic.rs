//! + − × ÷ and what else takes two numbers to one without leaving the rationals.
//!
//! Ends come from `round`, so exact results stay exact. The total operations are the operators; division is a method,
//! because it can be undefined.

use std::ops::{Add, AddAssign, Mul, MulAssign, Neg, Sub, SubAssign};

use super::Interval;
use crate::num::round::{add_down, add_up, add_up_pair, div_down, div_up, mul_down, mul_up};

impl Neg for Interval {
    type Output = Self;

    #[inline]
    fn neg(self) -> Self {
        Self { lo: -self.hi, hi: -self.lo }
    }
}

impl Add for Interval {
    type Output = Self;

    #[inline]
    fn add(self, other: Self) -> Self {
        let [minus_lo, hi] = add_up_pair([-self.lo, self.hi], [-other.lo, other.hi]);
        // NaN fails the comparison.
        if -minus_lo <= hi { Self { lo: -minus_lo, hi } } else { add_at_the_edge(self, other) }
    }
}

/// The sum where an argument is empty or an end overflows inwards.
#[cold]
fn add_at_the_edge(a: Interval, b: Interval) -> Interval {
    if a.is_empty() || b.is_empty() {
        return Interval::EMPTY;
    }
    Interval { lo: add_down(a.lo, b.lo), hi: add_up(a.hi, b.hi) }
}

impl Sub for Interval {
    type Output = Self;

    #[inline]
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Mul for Interval {
    type Output = Self;

    #[inline]
    fn mul(self, other: Self) -> Self {
        if self.is_empty() || other.is_empty() {
            return Self::EMPTY;
        }
        if other.lo >= 0.0 {
            times_nonnegative(self, other)
        } else if self.lo >= 0.0 {
            times_nonnegative(other, self)
        } else {
            times_any(self, other)
        }
    }
}

/// a·b for b ≥ 0: each end of a meets the end of b that takes it farthest.
#[inline]
fn times_nonnegative(a: Interval, b: Interval) -> Interval {
    let for_lo = if a.lo >= 0.0 { b.lo } else { b.hi };
    let for_hi = if a.hi >= 0.0 { b.hi } else { b.lo };
    Interval { lo: mul_down(a.lo, for_lo), hi: mul_up(a.hi, for_hi) }
}

/// a·b where neither is known to be ≥ 0.
fn times_any(a: Interval, b: Interval) -> Interval {
    if b.hi <= 0.0 {
        return -times_nonnegative(a, -b);
    }
    if a.hi <= 0.0 {
        return -times_nonnegative(b, -a);
    }
    Interval { lo: mul_down(a.lo, b.hi).min(mul_down(a.hi, b.lo)), hi: mul_up(a.lo, b.lo).max(mul_up(a.hi, b.hi)) }
}

impl AddAssign for Interval {
    #[inline]
    fn add_assign(&mut self, other: Self) {
        *self = *self + other;
    }
}

impl SubAssign for Interval {
    #[inline]
    fn sub_assign(&mut self, other: Self) {
        *self = *self - other;
    }
}

impl MulAssign for Interval {
    #[inline]
    fn mul_assign(&mut self, other: Self) {
        *self = *self * other;
    }
}

impl Interval {
    /// Every |x|.
    #[inline]
    #[must_use]
    pub fn abs(self) -> Self {
        if self.is_empty() { self } else { Self { lo: self.mig(), hi: self.mag() } }
    }

    /// Every smaller one of two.
    #[inline]
    #[must_use]
    pub fn min(self, other: Self) -> Self {
        if self.is_empty() || other.is_empty() {
            return Self::EMPTY;
        }
        Self { lo: self.lo.min(other.lo), hi: self.hi.min(other.hi) }
    }

    /// Every larger one of two.
    #[inline]
    #[must_use]
    pub fn max(self, other: Self) -> Self {
        if self.is_empty() || other.is_empty() {
            return Self::EMPTY;
        }
        Self { lo: self.lo.max(other.lo), hi: self.hi.max(other.hi) }
    }

    /// Every quotient of two with a divisor that is not 0; one interval around them all.
    ///
    /// Clears `defined` where 0 is among the divisors. Unbounded on a side where quotients are; x/\[0, 0\] is empty.
    #[inline]
    #[must_use]
    pub fn div(self, other: Self, defined: &mut bool) -> Self {
        if self.is_empty() || other.is_empty() {
            return Self::EMPTY;
        }
        if other.lo > 0.0 {
            by_positive(self, other)
        } else if other.hi < 0.0 {
            -by_positive(self, -other)
        } else {
            *defined = false;
            by_zero_among_others(self, other)
        }
    }

    /// 1/x; as [`Interval::div`].
    #[inline]
    #[must_use]
    pub fn recip(self, defined: &mut bool) -> Self {
        Self::ONE.div(self, defined)
    }

    /// Every x with x·b = a for some a in `self` and b in `other`, as up to two pieces in rising order.
    ///
    /// The step of an interval Newton method (Hansen & Greenberg 1983). Unlike a quotient, 0·x = 0 lets x be anything:
    /// the whole line where both hold 0. Both pieces are closed; the second is there only where a gap lies between.
    #[must_use]
    pub fn div_pieces(self, other: Self) -> (Self, Option<Self>) {
        if self.is_empty() || other.is_empty() {
            return (Self::EMPTY, None);
        }
        if !other.contains_zero() {
            return (self.div(other, &mut true), None);
        }
        if self.contains_zero() {
            return (Self::ENTIRE, None);
        }
        if self.hi < 0.0 {
            return (-self).div_pieces(-other);
        }
        let below = (other.lo < 0.0).then(|| Self { lo: f64::NEG_INFINITY, hi: div_up(self.lo, other.lo) });
        let above = (other.hi > 0.0).then(|| Self { lo: div_down(self.lo, other.hi), hi: f64::INFINITY });
        match (below, above) {
            (Some(below), above) => (below, above),
            (None, Some(above)) => (above, None),
            (None, None) => (Self::EMPTY, None),
        }
    }
}

/// a/b for b > 0.
#[inline]
fn by_positive(a: Interval, b: Interval) -> Interval {
    let for_lo = if a.lo >= 0.0 { b.hi } else { b.lo };
    let for_hi = if a.hi >= 0.0 { b.lo } else { b.hi };
    Interval { lo: div_down(a.lo, for_lo), hi: div_up(a.hi, for_hi) }
}

/// a/b where 0 is in b.
fn by_zero_among_others(a: Interval, b: Interval) -> Interval {
    if b == Interval::ZERO {
        Interval::EMPTY
    } else if a == Interval::ZERO {
        Interval::ZERO
    } else if b.lo == 0.0 {
        by_positive_or_zero(a, b.hi)
    } else if b.hi == 0.0 {
        -by_positive_or_zero(a, -b.lo)
    } else {
        Interval::ENTIRE
    }
}

/// a/b for b in (0, `upper`].
fn by_positive_or_zero(a: Interval, upper: f64) -> Interval {
    Interval {
        lo: if a.lo >= 0.0 { div_down(a.lo, upper) } else { f64::NEG_INFINITY },
        hi: if a.hi <= 0.0 { div_up(a.hi, upper) } else { f64::INFINITY },
    }
}
