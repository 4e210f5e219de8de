//! Enclosures of squares, whole powers and general powers.
//!
//! General powers rest on the correctly rounded `pow`: the exact value lies within one step of the computed one. They are
//! kept exact where the result is certain to fit 53 bits. Low whole powers multiply instead, which is faster.

use super::Interval;
use crate::num::elementary;
use crate::num::round::{mul_down, mul_up, significant_bits};

impl Interval {
    /// Every x².
    #[inline]
    #[must_use]
    pub fn square(self) -> Self {
        if self.is_empty() {
            return self;
        }
        let (mig, mag) = (self.mig(), self.mag());
        Self { lo: mul_down(mig, mig), hi: mul_up(mag, mag) }
    }

    /// Every x^n for a whole n; x⁰ is 1 everywhere. Clears `defined` where n < 0 and 0 is among the arguments.
    #[must_use]
    pub fn powi(self, n: i32, defined: &mut bool) -> Self {
        self.whole_power(f64::from(n), defined)
    }

    /// Every x^p.
    ///
    /// Defined for x > 0 with any p, for x = 0 with p > 0, for x = 0 with p = 0 as 1 (as IEEE 754 has it), and for x < 0
    /// where p is one whole number. Clears `defined` where a negative base meets another p (the result is then that of
    /// the part ≥ 0), and where 0 is among the bases and something ≤ 0 among the exponents, unless the exponent is 0 alone:
    /// x⁰ is 1 everywhere, and continuous.
    #[must_use]
    pub fn pow(self, p: Self, defined: &mut bool) -> Self {
        if self.is_empty() || p.is_empty() {
            return Self::EMPTY;
        }
        if p.is_point() && is_whole(p.lo) {
            return self.whole_power(p.lo, defined);
        }
        *defined &= self.lo > 0.0 || (self.lo == 0.0 && p.lo > 0.0);
        let base = self.intersect(Self::NONNEGATIVE);
        if base == Self::ZERO { zero_to_the(p) } else { nonnegative_power(base, p) }
    }

    /// x^n for whole `n`.
    fn whole_power(self, n: f64, defined: &mut bool) -> Self {
        if self.is_empty() || n == 1.0 {
            return self;
        }
        if n == 0.0 {
            return Self::ONE;
        }
        if n == -1.0 {
            return self.recip(defined);
        }
        *defined &= n > 0.0 || !self.contains_zero();
        if is_even(n) {
            whole_power_of_nonnegative(self.abs(), n)
        } else if self.lo >= 0.0 {
            whole_power_of_nonnegative(self, n)
        } else if self.hi <= 0.0 {
            -whole_power_of_nonnegative(-self, n)
        } else if n < 0.0 {
            Self::ENTIRE
        } else {
            Self { lo: -power_up(-self.lo, n), hi: power_up(self.hi, n) }
        }
    }
}

/// x^n for x ≥ 0 and whole n ≠ 0: rising in x for n > 0, falling for n < 0.
fn whole_power_of_nonnegative(x: Interval, n: f64) -> Interval {
    if n > 0.0 {
        Interval { lo: power_down(x.lo, n), hi: power_up(x.hi, n) }
    } else if x == Interval::ZERO {
        Interval::EMPTY
    } else {
        Interval { lo: power_down(x.hi, n), hi: power_up(x.lo + 0.0, n) }
    }
}

/// 0^p over those p where it is defined: 1 at p = 0, 0 above.
fn zero_to_the(p: Interval) -> Interval {
    let at_zero = if p.contains_zero() { Interval::ONE } else { Interval::EMPTY };
    if p.hi > 0.0 { at_zero.hull(Interval::ZERO) } else { at_zero }
}

/// x^p for x ≥ 0, not 0 alone. As x^p = e^(p ln x), and the extremes of a product lie at corners, so do these; the sign of
/// p and the side of 1 on which x lies say at which.
fn nonnegative_power(x: Interval, p: Interval) -> Interval {
    if x.is_empty() {
        return x;
    }
    // IEEE 754 gives 0^p for p < 0 the sign of that zero.
    let (low, high) = (x.lo + 0.0, x.hi);
    if p.lo >= 0.0 {
        let for_lo = if low >= 1.0 { p.lo } else { p.hi };
        let for_hi = if high >= 1.0 { p.hi } else { p.lo };
        between_powers((low, for_lo), (high, for_hi))
    } else if p.hi <= 0.0 {
        let for_lo = if high >= 1.0 { p.lo } else { p.hi };
        let for_hi = if low >= 1.0 { p.hi } else { p.lo };
        between_powers((high, for_lo), (low, for_hi))
    } else {
        let (falling, rising) = (between_powers((high, p.lo), (low, p.lo)), between_powers((low, p.hi), (high, p.hi)));
        falling.hull(rising)
    }
}

/// From the least of some powers to the greatest, each given as base and exponent.
fn between_powers(least: (f64, f64), greatest: (f64, f64)) -> Interval {
    let at_least = elementary::pow(least.0, least.1);
    let at_greatest = if least == greatest { at_least } else { elementary::pow(greatest.0, greatest.1) };
    Interval { lo: power_below(least, at_least), hi: power_above(greatest, at_greatest) }
}

/// Whole exponents up to this are multiplied out: some ten times faster than `pow`, for a bound that is a few steps wider.
const MULTIPLIED_OUT: f64 = 8.0;

/// A lower bound of x^p for x ≥ 0 and whole p; of the limit where x is 0 or infinite.
fn power_down(x: f64, p: f64) -> f64 {
    multiplied_out(x, p, mul_down).unwrap_or_else(|| power_below((x, p), elementary::pow(x, p)))
}

/// An upper bound of x^p for x ≥ 0 and whole p; of the limit where x is 0 or infinite.
fn power_up(x: f64, p: f64) -> f64 {
    multiplied_out(x, p, mul_up).unwrap_or_else(|| power_above((x, p), elementary::pow(x, p)))
}

/// A lower bound of x^p, x ≥ 0, from its rounded value.
fn power_below((x, p): (f64, f64), value: f64) -> f64 {
    if power_is_exact(x, p, value) { value } else { value.next_down().max(0.0) }
}

/// An upper bound of x^p, x ≥ 0, from its rounded value.
fn power_above((x, p): (f64, f64), value: f64) -> f64 {
    if power_is_exact(x, p, value) { value } else { value.next_up() }
}

/// x^p for a low whole p > 1 by squaring; every factor is ≥ 0, so each directed product keeps the direction.
#[inline]
fn multiplied_out(x: f64, p: f64, mul: impl Fn(f64, f64) -> f64) -> Option<f64> {
    if !((2.0..=MULTIPLIED_OUT).contains(&p) && is_whole(p)) {
        return None;
    }
    let mut power = x;
    let digits = (p as i32).cast_unsigned();
    for bit in (0..digits.ilog2()).rev() {
        power = mul(power, power);
        if digits >> bit & 1 == 1 {
            power = mul(power, x);
        }
    }
    Some(power)
}

/// Beyond this every f64 is a whole, even number; below, conversion to i64 is exact and, unlike `fract`, no library call.
const ALL_EVEN: f64 = 9_007_199_254_740_992.0;

fn is_whole(p: f64) -> bool {
    p.abs() >= ALL_EVEN || (p as i64) as f64 == p
}

/// Whether the whole number `n` is even.
fn is_even(n: f64) -> bool {
    n.abs() >= ALL_EVEN || (n as i64) & 1 == 0
}

/// Whether a correctly rounded power is certain to be exact: limits, 1^p, x⁰, x¹, powers of two, whole powers of
/// numbers so short that the result has at most 53 bits, and whole results below 2^53.
fn power_is_exact(x: f64, p: f64, value: f64) -> bool {
    if x == 0.0 || x == 1.0 || x.is_infinite() || p == 0.0 || p == 1.0 || p.is_infinite() {
        return true;
    }
    let bits = f64::from(significant_bits(x));
    let fits = bits == 1.0 || (p > 0.0 && (bits * p <= 53.0 || (is_whole(x) && value < ALL_EVEN)));
    is_whole(p) && fits && value > f64::MIN_POSITIVE && value <= f64::MAX
}
