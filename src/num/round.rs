//! Bounds of + − × ÷ √ in ordinary round-to-nearest arithmetic: `*_down` never above the exact result, `*_up` never below.
//!
//! An exact result is returned as it is wherever that is cheaply certain, so that 0·x stays 0 and 1·x stays x; otherwise
//! the rounded result steps one f64 outwards, which is sound because rounding to nearest is off by at most half a step.
//! The processor's rounding mode is never touched and no fused multiply-add is assumed. Ends of intervals may be infinite:
//! an infinite argument stands for "unbounded", 0·∞ is 0 (the limit over bounded factors), and overflow steps back to the
//! largest finite number on the inner side. NaN never comes out unless it goes in. Start at [`add_down`]; whatever is added
//! here needs an exact oracle in `tests/numbers/interval_arithmetic.rs`.

/// Steps `x` one f64 down where `inexact`; `x` is neither 0 nor NaN nor −∞.
///
/// The bits of an f64, read as a sign and a magnitude, are in the order of the numbers; doing it without a branch matters
/// because the sign of a rounding error is a coin toss.
#[inline]
fn lower_if(inexact: bool, x: f64) -> f64 {
    let bits = x.to_bits().cast_signed();
    let step = (bits >> 63) | 1;
    f64::from_bits((bits - (step & -i64::from(inexact))).cast_unsigned())
}

/// Steps `x` one f64 up where `inexact`; `x` is neither 0 nor NaN nor +∞.
#[inline]
fn raise_if(inexact: bool, x: f64) -> f64 {
    let bits = x.to_bits().cast_signed();
    let step = (bits >> 63) | 1;
    f64::from_bits((bits + (step & -i64::from(inexact))).cast_unsigned())
}

/// The rounded sum of two numbers, and what it lacks to the exact one: `TwoSum` (Knuth 1969).
///
/// The error is exact for finite sums, gradual underflow included. It is NaN where the sum overflows or an end is
/// infinite, and in the one case in which an intermediate result overflows though the sum does not (an argument equal to
/// the largest f64; Boldo, Graillat & Muller 2017); callers step outwards on NaN.
#[inline]
pub(crate) fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    let b_seen = sum - a;
    let a_seen = sum - b_seen;
    (sum, (a - a_seen) + (b - b_seen))
}

/// Largest f64 that is not above a + b, or the one below it where an argument is ±`f64::MAX`; neither is +∞.
#[inline]
#[must_use]
pub fn add_down(a: f64, b: f64) -> f64 {
    let (sum, error) = two_sum(a, b);
    lower_if((error < 0.0 || error.is_nan()) && (sum > f64::NEG_INFINITY), sum)
}

/// Smallest f64 that is not below a + b, or the one above it where an argument is ±`f64::MAX`; neither is −∞.
#[inline]
#[must_use]
pub fn add_up(a: f64, b: f64) -> f64 {
    let (sum, error) = two_sum(a, b);
    raise_if((error > 0.0 || error.is_nan()) && (sum < f64::INFINITY), sum)
}

/// φ: |x| φ + η, rounded, takes any finite x at least one step outwards (Rump, Zimmermann, Boldo & Melquiond 2009), and
/// just one where |x| is above 2^−1020, at most two below.
const PHI: f64 = f64::EPSILON / 2.0 * (1.0 + f64::EPSILON);

/// η: the smallest positive number.
const ETA: f64 = 5e-324;

/// [`add_up`] for two sums at once, which is twice as fast: all steps are the same for both, so one instruction does both.
///
/// NaN where an argument is −∞ or a sum overflows below −`f64::MAX`; the caller sees to these.
#[inline]
#[must_use]
pub(crate) fn add_up_pair(a: [f64; 2], b: [f64; 2]) -> [f64; 2] {
    let mut bounds = [0.0; 2];
    for i in 0..2 {
        let (sum, error) = two_sum(a[i], b[i]);
        let inexact = u64::from(error > 0.0 || error.is_nan());
        let step = (sum.abs() * PHI + ETA).to_bits() & inexact.wrapping_neg();
        bounds[i] = sum + f64::from_bits(step);
    }
    bounds
}

/// A lower bound of a − b, as [`add_down`] of a and −b; a is not +∞, b is not −∞.
#[inline]
#[must_use]
pub fn sub_down(a: f64, b: f64) -> f64 {
    add_down(a, -b)
}

/// An upper bound of a − b, as [`add_up`] of a and −b; a is not −∞, b is not +∞.
#[inline]
#[must_use]
pub fn sub_up(a: f64, b: f64) -> f64 {
    add_up(a, -b)
}

/// An upper bound, at most 53, on the significant bits of a finite number that is not 0; exact for normal numbers.
#[inline]
#[must_use]
pub fn significant_bits(x: f64) -> u32 {
    53 - (x.to_bits() | 1 << 52).trailing_zeros()
}

/// Whether the exact product of two finite numbers is sure to need no more than the 53 bits of an f64.
#[inline]
fn product_fits(x: f64, y: f64) -> bool {
    added_bits(x) + added_bits(y) <= 53
}

/// The bits that a factor may add to a product: none where it is a power of two, so that what is multiplied by 1 stays
/// what it is; else [`significant_bits`].
#[inline]
fn added_bits(x: f64) -> u32 {
    let fraction = x.to_bits() & ((1 << 52) - 1);
    53 - (fraction | 1 << 53).trailing_zeros()
}

/// Whether a rounded result lies where f64 has its full 53 bits: strictly inside the normal range.
#[inline]
fn full_precision(result: f64) -> bool {
    let size = result.abs();
    size > f64::MIN_POSITIVE && size <= f64::MAX
}

/// A lower bound of x·y: the exact product where one factor is 0 or 53 bits hold it, else at most one step below the
/// rounded one. Never negative when the factors have one sign. −∞ only for an unbounded factor or on overflow.
#[inline]
#[must_use]
pub fn mul_down(x: f64, y: f64) -> f64 {
    let product = x * y;
    if full_precision(product) {
        lower_if(!product_fits(x, y), product)
    } else if x == 0.0 || y == 0.0 {
        0.0
    } else {
        edge_down(product, (x < 0.0) == (y < 0.0))
    }
}

/// An upper bound of x·y: the exact product where one factor is 0 or 53 bits hold it, else at most one step above the
/// rounded one. Never positive when the factors have opposite signs. +∞ only for an unbounded factor or on overflow.
#[inline]
#[must_use]
pub fn mul_up(x: f64, y: f64) -> f64 {
    let product = x * y;
    if full_precision(product) {
        raise_if(!product_fits(x, y), product)
    } else if x == 0.0 || y == 0.0 {
        0.0
    } else {
        -edge_down(-product, (x < 0.0) != (y < 0.0))
    }
}

/// The lower bound of a result that under- or overflowed, knowing whether the exact one is positive.
fn edge_down(rounded: f64, positive: bool) -> f64 {
    let below = rounded.next_down();
    if positive { below.max(0.0) } else { below }
}

/// Whether a rounded quotient x/y in the normal range is the exact one, as far as that is cheaply certain: multiplied
/// back, in 53 bits and clear of underflow, it gives x.
#[inline]
fn quotient_is_exact(x: f64, y: f64, quotient: f64) -> bool {
    (quotient * y == x) & product_fits(quotient, y) & (x.abs() > f64::MIN_POSITIVE)
}

/// A lower bound of x/y for y ≠ 0: the exact quotient where it is cheaply certain (powers of two, small whole ratios),
/// else at most one step below the rounded one. Never negative when x and y have one sign; x/±∞ is bounded like 0. Not
/// both are infinite.
#[inline]
#[must_use]
pub fn div_down(x: f64, y: f64) -> f64 {
    debug_assert!(y != 0.0, "{x} / 0");
    let quotient = x / y;
    if full_precision(quotient) {
        lower_if(!quotient_is_exact(x, y, quotient), quotient)
    } else if x == 0.0 {
        0.0
    } else {
        edge_down(quotient, (x < 0.0) == (y < 0.0))
    }
}

/// An upper bound of x/y for y ≠ 0, as [`div_down`] is a lower one.
#[inline]
#[must_use]
pub fn div_up(x: f64, y: f64) -> f64 {
    debug_assert!(y != 0.0, "{x} / 0");
    let quotient = x / y;
    if full_precision(quotient) {
        raise_if(!quotient_is_exact(x, y, quotient), quotient)
    } else if x == 0.0 {
        0.0
    } else {
        -edge_down(-quotient, (x < 0.0) != (y < 0.0))
    }
}

/// Whether a rounded square root is the exact one, as far as that is cheaply certain.
fn root_is_exact(x: f64, root: f64) -> bool {
    x == 0.0 || x == f64::INFINITY || (root * root == x && product_fits(root, root) && x > f64::MIN_POSITIVE)
}

/// A lower bound of √x for x ≥ 0, exact for squares of up to 26 bits; never negative.
#[inline]
#[must_use]
pub fn sqrt_down(x: f64) -> f64 {
    let root = x.sqrt();
    if root_is_exact(x, root) { root } else { root.next_down() }
}

/// An upper bound of √x for x ≥ 0, exact for squares of up to 26 bits.
#[inline]
#[must_use]
pub fn sqrt_up(x: f64) -> f64 {
    let root = x.sqrt();
    if root_is_exact(x, root) { root } else { root.next_up() }
}
