//! The quotients and their derivatives in f64, to a few units in the last place.
//!
//! Each integral is done by Gauss's rule where the closed formula would cancel: the integrands of the weights have one
//! sign, so the sum cannot. Elsewhere the formulas of `weight` and `tanh`. These are not bounds; a proof uses
//! [`quotient`](super::quotient). Start at [`quotient_f64`].

use super::{HIGHEST_DERIVATIVE, Quotient, binomial, distance_to_orders, signed_factorial};
use crate::num::elementary::{exp, expm1, log1p, pow, tanh};
use crate::num::round::two_sum;

/// Gauss's rule with 20 nodes on \[0, 1\], exact for polynomials up to degree 39 (Gauss 1814): the nodes below ½ and their
/// weights; the others are their mirror images.
#[expect(clippy::unreadable_literal, reason = "digits to be compared with a table, not to be read")]
const GAUSS: [(f64, f64); 10] = [
    (0.0034357004074525377, 0.008807003569576059),
    (0.018014036361043106, 0.02030071490019347),
    (0.04388278587433705, 0.031336024167054534),
    (0.0804415140888906, 0.04163837078835238),
    (0.1268340467699246, 0.05096505990862022),
    (0.1819731596367425, 0.059097265980759206),
    (0.24456649902458646, 0.06584431922458832),
    (0.3131469556422902, 0.07104805465919102),
    (0.38610707442917747, 0.07458649323630187),
    (0.46173673943325133, 0.07637669356536292),
];

/// The k-th derivative of f(u)/u in f64; p is used by [`Quotient::Powm1`] alone.
///
/// Within 8 · 2^−52 of the exact value, relative (for tanh's derivatives near a sign change, of the size on either side).
/// k ≤ 3; no unit. Outside the domain NaN; at u = −1, where it is unbounded, ±∞; ±∞ also where (1 + u)^p overflows.
///
/// # Panics
/// When k > 3.
#[must_use]
pub fn quotient_f64(q: Quotient, k: u32, u: f64, p: f64) -> f64 {
    assert!(k <= HIGHEST_DERIVATIVE, "derivative {k} of a quotient");
    match q {
        Quotient::Expm1 => exponential(k, u),
        Quotient::Tanh => hyperbolic(k, u),
        Quotient::Log1p => signed_factorial(k) * power(k, u, 0.0),
        Quotient::Powm1 => {
            let factor = falling(k, p);
            if factor == 0.0 && u >= -1.0 { 0.0 } else { factor * power(k, u, p) }
        }
    }
}

fn falling(k: u32, p: f64) -> f64 {
    (1..=k).fold(p, |product, j| product * (p - f64::from(j)))
}

/// ∫₀¹ h(t) dt.
fn integral(h: impl Fn(f64) -> f64) -> f64 {
    GAUSS.iter().rev().map(|&(t, weight)| weight * (h(t) + h(1.0 - t))).sum()
}

/// Jₖ(u) = ∫₀¹ tᵏ e^(t u) dt: series of positive terms within |u| = 3, closed formulas beyond.
fn exponential(k: u32, u: f64) -> f64 {
    let order = f64::from(k);
    if k == 0 && u != 0.0 && u < 700.0 {
        return expm1(u) / u;
    }
    if u.abs() < 3.0 {
        let positive = u >= 0.0;
        let ratio = |j: f64| if positive { (order + 1.0 + j) / (j + 1.0) * u } else { -u };
        let sum = series(1.0 / (order + 1.0), |j| ratio(j) / (order + 2.0 + j));
        return if positive { sum } else { exp(u) * sum };
    }
    let rest = |constant: f64| (0..=k).fold(constant, |value, _| value / u);
    // In two factors, because e^u overflows before e^u/u does; where even one underflows, only the rest is left.
    let half = exp(u / 2.0);
    let (polynomial, constant) = match k {
        0 => (1.0, -1.0),
        1 => (u - 1.0, 1.0),
        2 => ((u - 2.0) * u + 2.0, -2.0),
        _ => (((u - 3.0) * u + 6.0) * u - 6.0, 6.0),
    };
    if half == 0.0 { rest(constant) } else { rest(half * polynomial) * half + rest(constant) }
}

/// Σ of positive terms from the first and their ratios; |ratio(j)| < ½ from some j < 40 on.
fn series(first: f64, ratio: impl Fn(f64) -> f64) -> f64 {
    let (mut sum, mut term) = (0.0, first);
    for j in 0..60 {
        sum += term;
        term *= ratio(f64::from(j));
        if term < sum * (f64::EPSILON / 16.0) {
            break;
        }
    }
    sum
}

/// Iₖ(u, p) = ∫₀¹ tᵏ (1 + t u)^(p − k − 1) dt, for u ≥ −1.
fn power(k: u32, u: f64, p: f64) -> f64 {
    let border = f64::from(k) + 1.0;
    if u == -1.0 {
        return if p > f64::from(k) { signed_factorial(k).abs() / falling(k, p) } else { f64::INFINITY };
    }
    if u.abs() * (p.abs() + border) < f64::EPSILON / 8.0 {
        return 1.0 / border;
    }
    let log = log1p(u);
    let value = if k > 0 && distance_to_orders(k, p) * log.abs() >= 4.0 {
        power_by_recursion(k, u, p)
    } else if k > 0 && log.abs() < 2.5 {
        power_by_integral(k, u, log, p)
    } else {
        power_by_logarithm(k, u, log, p)
    };
    // Finite arguments in the domain: ∞ − ∞ from an overflow.
    if value.is_nan() && u > -1.0 { f64::INFINITY } else { value }
}

/// With 1 + t u = e^(L s): (L/u)^(k+1) ∫₀¹ ((1 − e^(−L s))/L)ᵏ e^(p L s) ds, whose integrand is entire.
///
/// For p L > 0 from the other end, so that the exponent is small where most of the integral comes from.
fn power_by_integral(k: u32, u: f64, log: f64, p: f64) -> f64 {
    let k = k.cast_signed();
    let z = p * log;
    let rise = |s: f64| (-expm1(-log * s) / log).powi(k);
    let mean = if z > 0.0 {
        plus_one_to_the(u, p) * integral(|s| rise(1.0 - s) * exp(-z * s))
    } else {
        integral(|s| rise(s) * exp(z * s))
    };
    (log / u).powi(k + 1) * mean
}

/// u^−(k+1) Σ C(k, j) (−1)ʲ ∫₀ᴸ e^(s (p − j)) ds: far from u = 0 one term outweighs the rest.
fn power_by_logarithm(k: u32, u: f64, log: f64, p: f64) -> f64 {
    let mut sum = 0.0;
    for j in 0..=k {
        let sign = if j % 2 == 0 { 1.0 } else { -1.0 };
        sum += sign * binomial(k, j) * power_mean(u, log, p - f64::from(j));
    }
    (0..=k).fold(sum, |value, _| value / u)
}

/// ∫₀ᴸ e^(s r) ds = ((1 + u)^r − 1)/r.
fn power_mean(u: f64, log: f64, r: f64) -> f64 {
    let z = r * log;
    if z.abs() >= 1.0 {
        (plus_one_to_the(u, r) - 1.0) / r
    } else if z == 0.0 {
        log
    } else {
        log * (expm1(z) / z)
    }
}

/// By parts, for (p − j) L of size 4 and more, j = 0 … k: u (p − k) Iₖ = (1 + u)^(p − k) − k Iₖ₋₁.
fn power_by_recursion(k: u32, u: f64, p: f64) -> f64 {
    (0..=k).fold(0.0, |last, j| {
        let j = f64::from(j);
        let less = if j == 0.0 { 1.0 } else { j * last };
        (plus_one_to_the(u, p - j) - less) / (u * (p - j))
    })
}

/// (1 + u)^r with the rounding of 1 + u made good, which a large r would magnify.
fn plus_one_to_the(u: f64, r: f64) -> f64 {
    let (sum, lost) = two_sum(1.0, u);
    let value = pow(sum, r);
    if lost == 0.0 { value } else { value + value * expm1(r * (lost / sum)) }
}

/// The k-th derivative of tanh(u)/u: the integral within |u| = 2.5, the recursion u qₖ = f⁽ᵏ⁾ − k qₖ₋₁ beyond.
fn hyperbolic(k: u32, u: f64) -> f64 {
    if u == 0.0 {
        return [1.0, 0.0, -2.0 / 3.0, 0.0][k as usize];
    }
    if k == 0 {
        return tanh(u) / u;
    }
    if u.abs() <= 2.5 {
        return integral(|t| t.powi(k.cast_signed()) * tanh_derivative(k + 1, t * u));
    }
    (1..=k).fold(tanh(u) / u, |last, j| (tanh_derivative(j, u) - f64::from(j) * last) / u)
}

/// f⁽ᵏ⁾ for f = tanh, 1 ≤ k ≤ 4, by T = tanh and S = 1 − T², the latter without cancellation.
fn tanh_derivative(k: u32, u: f64) -> f64 {
    let t = tanh(u);
    let decay = exp(-2.0 * u.abs());
    let s = 4.0 * decay / ((1.0 + decay) * (1.0 + decay));
    match k {
        1 => s,
        2 => -2.0 * t * s,
        3 => s * (6.0 * t * t - 2.0),
        _ => 8.0 * t * s * (2.0 - 3.0 * t * t),
    }
}
