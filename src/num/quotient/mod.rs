//! Quotients q(u) = f(u)/u of functions that vanish at 0, with q(0) = f'(0), and their first three derivatives.
//!
//! A per-capita rate divides a row by an abundance; for (e^u − 1)/u and its like the plain quotient is 0/0 where the
//! species is absent, though the function is smooth there. With f one of [`Quotient`],
//!
//! ```text
//! qₖ(u) = ∫₀¹ tᵏ f⁽ᵏ⁺¹⁾(t u) dt,      u qₖ(u) + k qₖ₋₁(u) = f⁽ᵏ⁾(u)
//! ```
//!
//! is the k-th derivative. Except for tanh it is a constant times a positive weight, `weight`'s integral, which is monotone
//! in all it depends on: enclosures come from corners. `float` has the f64 values, `tanh` the enclosures of tanh(u)/u.
//! Derivatives beyond the third are not here. To add a function, give its weight, or a form in monotone parts as in `tanh`,
//! and references in `tests/data`.

mod float;
mod tanh;
mod weight;

pub use float::quotient_f64;

use super::interval::Interval;

/// The function f in f(u)/u.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Quotient {
    /// e^u − 1
    Expm1,
    /// ln(1 + u), for u > −1
    Log1p,
    /// tanh u
    Tanh,
    /// (1 + u)^p − 1, for u > −1; also at −1 where that is finite
    Powm1,
}

/// The highest derivative that is provided.
pub const HIGHEST_DERIVATIVE: u32 = 3;

/// Every value of the k-th derivative of f(u)/u, over u and, for [`Quotient::Powm1`] alone, over p.
///
/// k ≤ 3; no unit. Clears `defined` where u leaves the domain: u > −1 for `Log1p` and `Powm1`. At u = −1 `Powm1` is still
/// defined where every p exceeds k (the value is k! there), or where p is one whole number from 0 to k (the derivative is
/// 0 everywhere). The result is that of the part in the domain, empty where there is none.
///
/// At one point its relative width is below 1e-12 (near a sign change of tanh's derivatives, the absolute one). Over boxes
/// it is as sharp for all but tanh in u; there, and in p, it overestimates by a factor that goes to 1 as the box shrinks.
///
/// # Panics
/// When k > 3.
#[must_use]
pub fn quotient(q: Quotient, k: u32, u: Interval, p: Interval, defined: &mut bool) -> Interval {
    assert!(k <= HIGHEST_DERIVATIVE, "derivative {k} of a quotient");
    match q {
        Quotient::Expm1 => weight::exponential_over(k, u),
        Quotient::Tanh => tanh::enclose(k, u),
        Quotient::Log1p => log1p(k, u, defined),
        Quotient::Powm1 => powm1(k, u, p, defined),
    }
}

/// ln(1 + u) is the limit of ((1 + u)^p − 1)/p for p → 0: its weight is that of p = 0, its factor (−1)ᵏ k!.
fn log1p(k: u32, u: Interval, defined: &mut bool) -> Interval {
    *defined &= u.lo() > -1.0;
    if u.is_empty() || u.hi() <= -1.0 {
        return Interval::EMPTY;
    }
    Interval::point(signed_factorial(k)) * weight::power_over(k, from_minus_one(u), Interval::ZERO)
}

/// qₖ = p (p − 1) … (p − k) times its weight.
fn powm1(k: u32, u: Interval, p: Interval, defined: &mut bool) -> Interval {
    if u.is_empty() || p.is_empty() {
        return Interval::EMPTY;
    }
    let factor = falling(k, p);
    let finite_at_end = p.lo() > f64::from(k) || factor == Interval::ZERO;
    *defined &= u.lo() > -1.0 || (u.lo() == -1.0 && finite_at_end);
    let domain = from_minus_one(u);
    if domain.is_empty() {
        return domain;
    }
    if domain.hi() == -1.0 {
        return powm1_at_end(k, p);
    }
    factor * weight::power_over(k, domain, p)
}

/// qₖ(−1) over those p where it is finite: k! for p > k, 0 for p among 0, 1, …, k.
fn powm1_at_end(k: u32, p: Interval) -> Interval {
    let above = if p.hi() > f64::from(k) { Interval::point(signed_factorial(k).abs()) } else { Interval::EMPTY };
    let whole = (0..=k).any(|j| p.contains(f64::from(j)));
    if whole { above.hull(Interval::ZERO) } else { above }
}

/// The part of u that is ≥ −1.
fn from_minus_one(u: Interval) -> Interval {
    u.intersect(Interval::new(-1.0, f64::INFINITY))
}

/// p (p − 1) … (p − k).
fn falling(k: u32, p: Interval) -> Interval {
    (1..=k).fold(p, |product, j| product * (p - Interval::point(f64::from(j))))
}

/// (−1)ᵏ k! for k ≤ 3.
fn signed_factorial(k: u32) -> f64 {
    [1.0, -1.0, 2.0, -6.0][k as usize]
}

/// k!/(j! (k − j)!) for j ≤ k ≤ 3.
fn binomial(k: u32, j: u32) -> f64 {
    const ROWS: [[f64; 4]; 4] =
        [[1.0, 0.0, 0.0, 0.0], [1.0, 1.0, 0.0, 0.0], [1.0, 2.0, 1.0, 0.0], [1.0, 3.0, 3.0, 1.0]];
    ROWS[k as usize][j as usize]
}

/// How near p comes to one of 0, 1, …, k, where integration by parts would divide by 0.
fn distance_to_orders(k: u32, p: f64) -> f64 {
    (0..=k).map(|j| (p - f64::from(j)).abs()).fold(f64::INFINITY, f64::min)
}
