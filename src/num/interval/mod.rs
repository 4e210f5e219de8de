//! Closed intervals of real numbers with ends in f64, and operations that never lose a possible value.
//!
//! An operation's result holds every value that the operation takes on numbers of the arguments; where it is nowhere
//! defined the result is [`Interval::EMPTY`]. Ends may be infinite, meaning unbounded (the set-based flavour of IEEE
//! 1788-2015); no end is ever NaN. Operations that are not defined everywhere take a flag and clear it unless they are
//! defined *and continuous* on the whole argument box: what a proof of existence needs. On an empty argument nothing is
//! undefined, the flag stays. Here are construction and sets; siblings do the work: `arithmetic` has `+ − × ÷`,
//! `elementary`, `powers`, and `special` for saturation and choice. No operation here knows of formulas. To add one, put
//! its bounds in the sibling that fits and its references in `tests/data`.

mod arithmetic;
mod elementary;
mod powers;
mod special;

pub use special::{saturation, select};

use super::round;

/// A closed interval, possibly unbounded, or the empty set.
///
/// Never NaN; lo ≤ hi, lo < ∞ and hi > −∞, or the one empty interval (lo = ∞, hi = −∞). Equality is equality of sets.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    lo: f64,
    hi: f64,
}

impl Interval {
    /// No number at all.
    pub const EMPTY: Self = Self { lo: f64::INFINITY, hi: f64::NEG_INFINITY };
    /// Every real number.
    pub const ENTIRE: Self = Self { lo: f64::NEG_INFINITY, hi: f64::INFINITY };
    /// 0 alone.
    pub const ZERO: Self = Self { lo: 0.0, hi: 0.0 };
    /// 1 alone.
    pub const ONE: Self = Self { lo: 1.0, hi: 1.0 };
    /// Every number that is not negative.
    pub const NONNEGATIVE: Self = Self { lo: 0.0, hi: f64::INFINITY };

    /// One finite number.
    #[inline]
    #[must_use]
    pub fn point(x: f64) -> Self {
        debug_assert!(x.is_finite(), "an interval of {x} alone");
        Self { lo: x, hi: x }
    }

    /// From `lo` to `hi`, which must be in order; for ends that come from outside use [`Interval::try_new`].
    #[inline]
    #[must_use]
    pub fn new(lo: f64, hi: f64) -> Self {
        debug_assert!(Self::in_order(lo, hi), "an interval from {lo} to {hi}");
        Self { lo, hi }
    }

    /// From `lo` to `hi`; `None` where an end is NaN, the order is wrong, or no real number lies between.
    #[must_use]
    pub fn try_new(lo: f64, hi: f64) -> Option<Self> {
        Self::in_order(lo, hi).then_some(Self { lo, hi })
    }

    fn in_order(lo: f64, hi: f64) -> bool {
        lo <= hi && lo < f64::INFINITY && hi > f64::NEG_INFINITY
    }

    /// Lower end; ∞ when empty.
    #[inline]
    #[must_use]
    pub fn lo(self) -> f64 {
        self.lo
    }

    /// Upper end; −∞ when empty.
    #[inline]
    #[must_use]
    pub fn hi(self) -> f64 {
        self.hi
    }

    /// A finite number inside, the middle where both ends are finite; 0 for the whole line and for the empty set, the
    /// largest finite number of its sign for a half-line.
    #[must_use]
    pub fn mid(self) -> f64 {
        if self.is_empty() || self == Self::ENTIRE {
            return 0.0;
        }
        let sum = self.lo + self.hi;
        if sum.is_finite() { sum / 2.0 } else { (self.lo / 2.0 + self.hi / 2.0).clamp(f64::MIN, f64::MAX) }
    }

    /// hi − lo, rounded up; 0 when empty.
    #[must_use]
    pub fn width(self) -> f64 {
        if self.is_empty() { 0.0 } else { round::sub_up(self.hi, self.lo) }
    }

    /// The distance from [`Interval::mid`] to the farther end, rounded up; 0 when empty.
    #[must_use]
    pub fn radius(self) -> f64 {
        if self.is_empty() {
            return 0.0;
        }
        let mid = self.mid();
        round::sub_up(self.hi, mid).max(round::sub_up(mid, self.lo))
    }

    /// Largest absolute value; −∞ when empty.
    #[inline]
    #[must_use]
    pub fn mag(self) -> f64 {
        self.hi.max(-self.lo)
    }

    /// Smallest absolute value; ∞ when empty.
    #[inline]
    #[must_use]
    pub fn mig(self) -> f64 {
        if self.is_empty() { f64::INFINITY } else { self.lo.max(-self.hi).max(0.0) }
    }

    /// Whether there is no number in it.
    #[inline]
    #[must_use]
    pub fn is_empty(self) -> bool {
        self.lo > self.hi
    }

    /// Whether there is exactly one number in it.
    #[inline]
    #[must_use]
    pub fn is_point(self) -> bool {
        self.lo == self.hi
    }

    /// Whether both ends are finite; the empty set is not bounded in this sense.
    #[inline]
    #[must_use]
    pub fn is_bounded(self) -> bool {
        self.lo.is_finite() && self.hi.is_finite()
    }

    /// Whether the finite number `x` is in it.
    #[inline]
    #[must_use]
    pub fn contains(self, x: f64) -> bool {
        self.lo <= x && x <= self.hi && x.is_finite()
    }

    /// Whether 0 is in it.
    #[inline]
    #[must_use]
    pub fn contains_zero(self) -> bool {
        self.lo <= 0.0 && 0.0 <= self.hi
    }

    /// Whether every number in it is ≥ 0; true of the empty set.
    #[inline]
    #[must_use]
    pub fn nonnegative(self) -> bool {
        self.lo >= 0.0
    }

    /// Whether every number in it is > 0; true of the empty set.
    #[inline]
    #[must_use]
    pub fn positive(self) -> bool {
        self.lo > 0.0
    }

    /// Whether every number in it is in `other`.
    #[inline]
    #[must_use]
    pub fn subset_of(self, other: Self) -> bool {
        self.is_empty() || (other.lo <= self.lo && self.hi <= other.hi)
    }

    /// Whether it lies strictly inside `other`, in the topology of the real line: the whole line is inside itself.
    #[inline]
    #[must_use]
    pub fn interior_of(self, other: Self) -> bool {
        self.is_empty()
            || ((other.lo < self.lo || other.lo == f64::NEG_INFINITY)
                && (self.hi < other.hi || other.hi == f64::INFINITY)
                && !other.is_empty())
    }

    /// What both have in common.
    #[inline]
    #[must_use]
    pub fn intersect(self, other: Self) -> Self {
        let (lo, hi) = (self.lo.max(other.lo), self.hi.min(other.hi));
        if lo <= hi { Self { lo, hi } } else { Self::EMPTY }
    }

    /// The smallest interval that holds both.
    #[inline]
    #[must_use]
    pub fn hull(self, other: Self) -> Self {
        Self { lo: self.lo.min(other.lo), hi: self.hi.max(other.hi) }
    }
}
