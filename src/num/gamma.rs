//! The logarithm of the gamma function, and what of it is left where Stirling's formula is taken out.

use super::elementary::{ln, log1p};

/// From here on Stirling's series is good to the last digit with the terms below.
const LARGE: f64 = 10.0;
/// ln √(2π).
const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;
/// B_2k/(2k(2k − 1)) for k = 1, 2, …, with Bernoulli's numbers B.
const SERIES: [f64; 9] = [
    1.0 / 12.0,
    -1.0 / 360.0,
    1.0 / 1260.0,
    -1.0 / 1680.0,
    1.0 / 1188.0,
    -691.0 / 360_360.0,
    1.0 / 156.0,
    -3617.0 / 122_400.0,
    43867.0 / 244_188.0,
];

/// ln Γ(x) for x > 0, to a few units of the last digit, near its zeros 1 and 2 of 1e-15.
///
/// Stirling's series (Abramowitz & Stegun 1964, 6.1.40) from 10 on; smaller x are first moved there by Γ(x + 1) = x Γ(x).
#[must_use]
#[expect(clippy::cast_sign_loss, reason = "x is below ten")]
pub fn ln_gamma(x: f64) -> f64 {
    debug_assert!(x > 0.0, "ln Γ({x})");
    if x >= LARGE {
        return (x - 0.5) * ln(x) - x + LN_ROOT_TWO_PI + stirling_rest(x);
    }
    let steps = (LARGE - x).ceil() as u32;
    let product: f64 = (0..steps).map(|k| x + f64::from(k)).product();
    ln_gamma(x + f64::from(steps)) - ln(product)
}

/// ln Γ(x) − (x − ½) ln x + x − ln √(2π), x > 0.
#[must_use]
pub fn stirling_rest(x: f64) -> f64 {
    if x < LARGE {
        return ln_gamma(x) - ((x - 0.5) * ln(x) - x + LN_ROOT_TWO_PI);
    }
    let square = 1.0 / (x * x);
    SERIES.iter().rev().fold(0.0, |sum, term| sum * square + term) / x
}

/// u − ln(1 + u) for u > −1, without cancellation near 0; 0 or more.
///
/// Near 0 by ln(1 + u) = 2 artanh(s), s = u/(2 + u): u − 2s = u s, and the rest is a series in s².
#[must_use]
pub fn excess(u: f64) -> f64 {
    if u.abs() > 0.3 {
        return u - log1p(u);
    }
    let s = u / (2.0 + u);
    let square = s * s;
    // |s| ≤ 0.18, so that twelve terms leave less than 1e-18 of the first.
    let series = (1..=12u32).rev().fold(0.0, |sum, k| sum * square + 1.0 / f64::from(2 * k + 1));
    s * (u - 2.0 * square * series)
}
