//! The scalar elementary functions that every number type shares, so that a value and its enclosure agree.
//!
//! All are correctly rounded (CORE-MATH; Sibidanov, Zimmermann & Glondu 2022): the result is the f64 nearest to the exact
//! value, so the exact value lies between its two neighbours. The interval functions rest on exactly this. The standard
//! library's functions promise nothing, and its `tanh` is off by more than one step. Edges are those of IEEE 754:
//! `ln(0)` is −∞, `ln(−1)` NaN, `pow(0, 0)` 1. To add a function, take it from the same library.

/// e^x.
#[inline]
#[must_use]
pub fn exp(x: f64) -> f64 {
    core_math::exp(x)
}

/// e^x − 1, without cancellation near 0.
#[inline]
#[must_use]
pub fn expm1(x: f64) -> f64 {
    core_math::expm1(x)
}

/// Natural logarithm.
#[inline]
#[must_use]
pub fn ln(x: f64) -> f64 {
    core_math::log(x)
}

/// Decimal logarithm.
#[inline]
#[must_use]
pub fn log10(x: f64) -> f64 {
    core_math::log10(x)
}

/// ln(1 + x), without cancellation near 0.
#[inline]
#[must_use]
pub fn log1p(x: f64) -> f64 {
    core_math::log1p(x)
}

/// Hyperbolic tangent.
#[inline]
#[must_use]
pub fn tanh(x: f64) -> f64 {
    core_math::tanh(x)
}

/// x^p, as IEEE 754 defines it: pow(x, 0) = 1 for every x, NaN for a negative base with a p that is not whole.
#[inline]
#[must_use]
pub fn pow(x: f64, p: f64) -> f64 {
    core_math::pow(x, p)
}
