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
        domain.monotone(sqrt_down, sqrt_up)
    }

    /// Every e^x.
    #[must_use]
    pub fn exp(self) -> Self {
        self.monotone(exp_down, exp_up)
    }

    /// Every e^x − 1.
    #[must_use]
    pub fn expm1(self) -> Self {
        self.monotone(expm1_down, expm1_up)
    }

    /// Every tanh x.
    #[must_use]
    pub fn tanh(self) -> Self {
        self.monotone(tanh_down, |x| -tanh_down(-x))
    }

    /// Every ln x with x > 0. Clears `defined` where a number ≤ 0 is among the arguments.
    #[must_use]
    pub fn ln(self, defined: &mut bool) -> Self {
        self.above(0.0, defined).monotone(ln_down, ln_up)
    }

    /// Every decimal logarithm of x > 0. Clears `defined` where a number ≤ 0 is among the arguments.
    #[must_use]
    pub fn log10(self, defined: &mut bool) -> Self {
        self.above(0.0, defined).monotone(log10_down, log10_up)
    }

    /// Every ln(1 + x) with x > −1. Clears `defined` where a number ≤ −1 is among the arguments.
    #[must_use]
    pub fn log1p(self, defined: &mut bool) -> Self {
        self.above(-1.0, defined).monotone(log1p_down, log1p_up)
    }

    /// The image under an increasing function with these bounds.
    fn monotone(self, down: impl Fn(f64) -> f64, up: impl Fn(f64) -> f64) -> Self {
        if self.is_empty() { self } else { Self { lo: down(self.lo), hi: up(self.hi) } }
    }

    /// The part above an open border, closed by it; clears `defined` where something is cut off.
    fn above(self, border: f64, defined: &mut bool) -> Self {
        *defined &= self.lo > border;
        if self.hi > border { Self { lo: self.lo.max(border), hi: self.hi } } else { Self::EMPTY }
    }
}

fn exp_down(x: f64) -> f64 {
    if x == 0.0 { 1.0 } else { scalar::exp(x).next_down().max(0.0) }
}

fn exp_up(x: f64) -> f64 {
    if x == 0.0 { 1.0 } else { scalar::exp(x).next_up() }
}

/// e^x − 1 is at least x and above −1.
fn expm1_down(x: f64) -> f64 {
    scalar::expm1(x).next_down().max(x).max(-1.0)
}

fn expm1_up(x: f64) -> f64 {
    if x == 0.0 { 0.0 } else { scalar::expm1(x).next_up() }
}

/// tanh x lies between 0 and both x and ±1; the upper bound is the lower one mirrored, since tanh is odd.
fn tanh_down(x: f64) -> f64 {
    scalar::tanh(x).next_down().max(if x < 0.0 { x.max(-1.0) } else { 0.0 })
}

fn ln_down(x: f64) -> f64 {
    if x == 1.0 { 0.0 } else { scalar::ln(x).next_down() }
}

fn ln_up(x: f64) -> f64 {
    if x == 1.0 { 0.0 } else { scalar::ln(x).next_up() }
}

/// The powers of ten that f64 holds exactly: 5^22 < 2^53 < 5^23.
const POWERS_OF_TEN: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20,
    1e21, 1e22,
];

/// A correctly rounded decimal logarithm is exact just at these powers: elsewhere the exact value is irrational.
fn log10_is_exact(x: f64) -> bool {
    POWERS_OF_TEN.contains(&x)
}

fn log10_down(x: f64) -> f64 {
    let value = scalar::log10(x);
    if log10_is_exact(x) { value } else { value.next_down() }
}

fn log10_up(x: f64) -> f64 {
    let value = scalar::log10(x);
    if log10_is_exact(x) { value } else { value.next_up() }
}

fn log1p_down(x: f64) -> f64 {
    if x == 0.0 { 0.0 } else { scalar::log1p(x).next_down() }
}

/// ln(1 + x) is at most x.
fn log1p_up(x: f64) -> f64 {
    scalar::log1p(x).next_up().min(x)
}
