//! Enclosures of √ exp ln log10 expm1 log1p tanh: monotone functions, so the ends decide.
//!
//! The scalar functions are correctly rounded (`num::elementary`), so the exact value lies within one step of the computed
//! one, subnormal results and results rounded to 0 or ∞ included; each bound is that step, tightened by what is known of
//! the function (e^x ≥ 0, |tanh x| ≤ min(1, |x|), …). The only rational values at rational arguments are those at 0 or 1
//! and at whole powers of ten (Hermite 1873, Lindemann 1882), so no other result is exact and none is tested for it.

use super::Interval;
use crate::num::elementary as scalar;
use crate::num::round::{sqrt_down, sqrt_up};

impl Interval {
    /// Every √x with x ≥ 0. Clears `defined` where a negative number is among the arguments.
    #[must_use]
    pub fn sqrt(self, defined: &mut bool) -> Self {
        *defined &= self.lo >= 0.0;
        let domain = self.intersect(Self::NONNEGATIVE);
        if domain.is_empty() { domain } else { Self { lo: sqrt_down(domain.lo), hi: sqrt_up(domain.hi) } }
    }

    /// Every e^x.
    #[must_use]
    pub fn exp(self) -> Self {
        let exact = |x: f64, bound: f64| if x == 0.0 { 1.0 } else { bound };
        let down = |x, value: f64| exact(x, value.next_down().max(0.0));
        self.monotone(scalar::exp, down, |x, value| exact(x, value.next_up()))
    }

    /// Every e^x − 1: at least x and above −1.
    #[must_use]
    pub fn expm1(self) -> Self {
        let down = |x, value: f64| value.next_down().max(x).max(-1.0);
        self.monotone(scalar::expm1, down, |x, value| zero_at(0.0, x, value.next_up()))
    }

    /// Every tanh x: between 0 and both x and ±1.
    #[must_use]
    pub fn tanh(self) -> Self {
        let down = |x: f64, value: f64| value.next_down().max(if x < 0.0 { x.max(-1.0) } else { 0.0 });
        self.monotone(scalar::tanh, down, |x, value| -down(-x, -value))
    }

    /// Every ln x with x > 0. Clears `defined` where a number ≤ 0 is among the arguments.
    #[must_use]
    pub fn ln(self, defined: &mut bool) -> Self {
        let down = |x, value: f64| zero_at(1.0, x, value.next_down());
        self.above(0.0, defined).monotone(scalar::ln, down, |x, value| zero_at(1.0, x, value.next_up()))
    }

    /// Every decimal logarithm of x > 0. Clears `defined` where a number ≤ 0 is among the arguments.
    #[must_use]
    pub fn log10(self, defined: &mut bool) -> Self {
        let exact = |x: f64, value: f64, bound: f64| if POWERS_OF_TEN.contains(&x) { value } else { bound };
        let down = |x, value: f64| exact(x, value, value.next_down());
        self.above(0.0, defined).monotone(scalar::log10, down, |x, value| exact(x, value, value.next_up()))
    }

    /// Every ln(1 + x) with x > −1: at most x. Clears `defined` where a number ≤ −1 is among the arguments.
    #[must_use]
    pub fn log1p(self, defined: &mut bool) -> Self {
        let down = |x, value: f64| zero_at(0.0, x, value.next_down());
        self.above(-1.0, defined).monotone(scalar::log1p, down, |x, value| value.next_up().min(x))
    }

    /// The image under an increasing function, given how to bound it from an argument and the rounded value there.
    #[inline]
    fn monotone(
        self,
        function: impl Fn(f64) -> f64,
        down: impl Fn(f64, f64) -> f64,
        up: impl Fn(f64, f64) -> f64,
    ) -> Self {
        if self.is_empty() {
            return self;
        }
        let at_lo = function(self.lo);
        let at_hi = if self.is_point() { at_lo } else { function(self.hi) };
        Self { lo: down(self.lo, at_lo), hi: up(self.hi, at_hi) }
    }

    /// The part above an open border, closed by it; clears `defined` where something is cut off.
    fn above(self, border: f64, defined: &mut bool) -> Self {
        *defined &= self.lo > border;
        if self.hi > border { Self { lo: self.lo.max(border), hi: self.hi } } else { Self::EMPTY }
    }
}

/// The bound of a function that is exactly 0 at `root` alone.
fn zero_at(root: f64, x: f64, bound: f64) -> f64 {
    if x == root { 0.0 } else { bound }
}

/// The powers of ten that f64 holds exactly: 5^22 < 2^53 < 5^23. Elsewhere the decimal logarithm is irrational.
const POWERS_OF_TEN: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20,
    1e21, 1e22,
];
