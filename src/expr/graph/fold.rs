//! Folding of constants: only where the f64 result is the exact one.

use crate::num::round;

/// a + b, where no rounding is needed.
pub(super) fn exact_sum(a: f64, b: f64) -> Option<f64> {
    agreed(round::add_down(a, b), round::add_up(a, b))
}

/// a b, where it is certain that no rounding is needed.
pub(super) fn exact_product(a: f64, b: f64) -> Option<f64> {
    agreed(round::mul_down(a, b), round::mul_up(a, b))
}

/// a / b, where it is certain that no rounding is needed.
pub(super) fn exact_quotient(a: f64, b: f64) -> Option<f64> {
    if b == 0.0 { None } else { agreed(round::div_down(a, b), round::div_up(a, b)) }
}

/// aⁿ for n ≥ 0, where it is certain that no rounding is needed; a small n, since exactness does not last long.
pub(super) fn exact_power(a: f64, n: i32) -> Option<f64> {
    match n {
        0..=64 => (0..n).try_fold(1.0, |power, _| exact_product(power, a)),
        _ if a == 1.0 => Some(1.0),
        _ => None,
    }
}

/// Both directed roundings are one finite number exactly where the result needs none.
fn agreed(down: f64, up: f64) -> Option<f64> {
    (down == up && down.is_finite()).then_some(down)
}
