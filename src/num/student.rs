//! Student's distribution: how far a mean strays whose standard error is itself estimated.

use super::beta::{Beta, Side};
use super::elementary::ln;
use super::normal;

/// With more degrees of freedom the normal distribution is the same to 1e-9.
const MANY: f64 = 1e9;

/// The value that a share lies below, with `freedom` > 0 degrees of freedom, whole or not; 0 < share < 1.
///
/// By the beta distribution of ν/(ν + t²) with shapes ν/2 and ½ (Abramowitz & Stegun 1964, 26.7.1). NaN where a degree of
/// freedom is not positive.
#[must_use]
pub fn quantile(freedom: f64, share: f64) -> f64 {
    if freedom.is_nan() || freedom <= 0.0 {
        return f64::NAN;
    }
    if freedom >= MANY {
        return normal::quantile(share);
    }
    let both_tails = 2.0 * share.min(1.0 - share);
    // 1 − x, the share of t² in ν + t², is the beta variable of the exchanged shapes.
    let x = Beta::new(0.5 * freedom, 0.5).quantile(Side::Below(ln(both_tails)));
    let rest = Beta::new(0.5, 0.5 * freedom).quantile(Side::Above(ln(both_tails)));
    let size = (freedom * rest / x).sqrt();
    if share < 0.5 { -size } else { size }
}
