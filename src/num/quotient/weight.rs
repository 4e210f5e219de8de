//! Enclosures of the two positive weights under the quotients, at one (u, p) and over boxes.
//!
//! ```text
//! Jₖ(u)    = ∫₀¹ tᵏ e^(t u) dt                  grows with u
//! Iₖ(u, p) = ∫₀¹ tᵏ (1 + t u)^(p − k − 1) dt    grows with p for u > 0, falls for u < 0; grows with u where p > k + 1
//! ```
//!
//! At one point: a power series where u is small, with its remainder; elsewhere finite formulas in interval arithmetic,
//! whose cancellation widens the result but cannot make it wrong. Start at [`power_over`].

use super::{binomial, distance_to_orders};
use crate::num::interval::Interval;
use crate::num::round::two_sum;

/// Terms after which a series is given up; those below need at most some 90 at the arguments that they are used for.
const MAX_TERMS: u32 = 150;

/// A series stops where a term falls below this part of the sum: well under the rounding of the sum itself.
const NEGLIGIBLE: f64 = 1e-19;

/// Below this |u| a quotient by u would be coarse, because numbers around it are subnormal or nearly so.
const NO_QUOTIENT: f64 = 1e-290;

/// Every Jₖ(u) over u.
pub(super) fn exponential_over(k: u32, u: Interval) -> Interval {
    if u.is_empty() {
        return u;
    }
    let at_lo = exponential(k, u.lo());
    if u.is_point() { at_lo } else { at_lo.hull(exponential(k, u.hi())) }
}

/// Jₖ(u), or its limit at ±∞.
///
/// Within |u| = 4, Σ uʲ/(j! (k + 1 + j)) for u ≥ 0 and e^u Σ |u|ʲ/((k + 1) … (k + 1 + j)) for u < 0 (from t → 1 − t): all
/// terms are positive.
fn exponential(k: u32, u: f64) -> Interval {
    let order = f64::from(k);
    if u.is_infinite() {
        return if u > 0.0 { unbounded() } else { Interval::ZERO };
    }
    let (x, first) = (Interval::point(u), fraction(1.0, order + 1.0));
    if u == 0.0 {
        return first;
    }
    if k == 0 || u.abs() >= 4.0 {
        return exponential_by_recursion(k, x);
    }
    let later = |n: f64| over(x.abs(), Interval::point(n + 1.0)).hi();
    if u > 0.0 {
        let ratio = |j: f64| x * fraction(order + 1.0 + j, (order + 2.0 + j) * (j + 1.0));
        series(first, ratio, later)
    } else {
        let ratio = |j: f64| over(-x, Interval::point(order + 2.0 + j));
        x.exp() * series(first, ratio, later)
    }
}

/// By parts, u Jₖ = e^u − k Jₖ₋₁, which loses at most a digit beyond |u| = 4.
///
/// For u > 700, where e^u overflows before e^u/u does, the same for e^−u Jₖ, then times e^(u/2) twice.
fn exponential_by_recursion(k: u32, x: Interval) -> Interval {
    let huge = x.lo() > 700.0;
    let (power, start) = if huge { (Interval::ONE, Interval::ONE - (-x).exp()) } else { (x.exp(), x.expm1()) };
    let value = (1..=k).fold(over(start, x), |last, j| over(power - Interval::point(f64::from(j)) * last, x));
    if huge {
        let half = over(x, Interval::point(2.0)).exp();
        return value.intersect(Interval::NONNEGATIVE) * half * half;
    }
    // The integrand lies between tᵏ and tᵏ e^u.
    value.intersect(Interval::ONE.hull(power) * fraction(1.0, f64::from(k) + 1.0))
}

/// Every Iₖ(u, p) over u ≥ −1 and p: by corners, on the two sides of u = 0 apart.
pub(super) fn power_over(k: u32, u: Interval, p: Interval) -> Interval {
    if u.is_point() && p.is_point() {
        return power(k, u.lo(), p.lo());
    }
    let left = u.intersect(Interval::new(-1.0, 0.0));
    let right = u.intersect(Interval::NONNEGATIVE);
    power_on_side(k, left, [p.hi(), p.lo()]).hull(power_on_side(k, right, [p.lo(), p.hi()]))
}

/// Iₖ on one side of u = 0, given the p where it is least and the p where it is greatest.
fn power_on_side(k: u32, u: Interval, [p_least, p_greatest]: [f64; 2]) -> Interval {
    if u.is_empty() {
        return u;
    }
    let border = f64::from(k) + 1.0;
    let at_least = if p_least >= border { u.lo() } else { u.hi() };
    let at_greatest = if p_greatest >= border { u.hi() } else { u.lo() };
    power(k, at_least, p_least).hull(power(k, at_greatest, p_greatest))
}

/// Iₖ(u, p) for u ≥ −1, or its limit where an argument is infinite.
fn power(k: u32, u: f64, p: f64) -> Interval {
    let border = f64::from(k) + 1.0;
    let at_zero = fraction(1.0, border);
    if u == 0.0 || p == border {
        return at_zero;
    }
    if u == -1.0 {
        return power_at_minus_one(k, p);
    }
    if u.is_infinite() || p.is_infinite() {
        return if (u > 0.0) == (p > border) { unbounded() } else { Interval::ZERO };
    }
    let (exponent, log) = (Interval::point(p), Interval::point(u).log1p(&mut true));
    let size = log.mag();
    // The integrand lies between tᵏ and tᵏ (1 + u)^(p − k − 1).
    let bounds = || Interval::ONE.hull(plus_one_to_the(u, exponent - Interval::point(border))) * at_zero;
    if size < NO_QUOTIENT {
        return bounds();
    }
    let value = if distance_to_orders(k, p) * size >= 2.5 {
        power_by_recursion(k, u, exponent)
    } else if k > 0 && size < if p < border { 0.75 } else { 0.35 } {
        power_by_series(k, u, exponent)
    } else {
        power_by_logarithm(k, u, log, exponent)
    };
    if value.is_bounded() { value.intersect(Interval::NONNEGATIVE) } else { value.intersect(bounds()) }
}

/// Iₖ(−1, p) = ∫ tᵏ (1 − t)^(p − k − 1) dt = k!/(p (p − 1) … (p − k)) for p > k, else unbounded.
fn power_at_minus_one(k: u32, p: f64) -> Interval {
    if p <= f64::from(k) {
        unbounded()
    } else if p.is_infinite() {
        Interval::ZERO
    } else {
        over(Interval::point(super::signed_factorial(k).abs()), super::falling(k, Interval::point(p)))
    }
}

/// Near u = 0, by the binomial series of (1 + x)^r, r = p − k − 1, in the direction in which its first terms are positive.
///
/// For r u ≥ 0, Σ C(r, j) uʲ/(k + 1 + j). Else t → 1 − t gives (1 + u)^r ∫ (1 − t)ᵏ (1 − t w)^r dt, w = u/(1 + u), hence
/// (1 + u)^r Σ C(r, j) (−w)ʲ k! j!/(k + j + 1)!. In both, terms n and later shrink at least by |x| max(1, (|r| + n)/(n + 1)).
fn power_by_series(k: u32, u: f64, p: Interval) -> Interval {
    let order = f64::from(k);
    let r = p - Interval::point(order + 1.0);
    let first = fraction(1.0, order + 1.0);
    let straight = (r.mid() >= 0.0) == (u >= 0.0);
    let at = Interval::point(u);
    let x = if straight { at } else { -over(at, Interval::ONE + at) };
    let later = |n: f64| {
        let growth = over(r.abs() + Interval::point(n), Interval::point(n + 1.0));
        (x.abs() * growth.max(Interval::ONE)).hi()
    };
    let step = |j: f64| x * (r - Interval::point(j));
    if straight {
        let ratio = |j: f64| step(j) * fraction(order + 1.0 + j, (order + 2.0 + j) * (j + 1.0));
        series(first, ratio, later)
    } else {
        let ratio = |j: f64| over(step(j), Interval::point(order + 2.0 + j));
        plus_one_to_the(u, r) * series(first, ratio, later)
    }
}

/// By parts, for (p − j) L of size 2.5 and more with L = ln(1 + u), j = 0 … k: u (p − k) Iₖ = (1 + u)^(p − k) − k Iₖ₋₁.
fn power_by_recursion(k: u32, u: f64, p: Interval) -> Interval {
    let at = Interval::point(u);
    (0..=k).fold(Interval::ZERO, |last, j| {
        let j = Interval::point(f64::from(j));
        let less = if j == Interval::ZERO { Interval::ONE } else { j * last };
        over(plus_one_to_the(u, p - j) - less, at * (p - j))
    })
}

/// With 1 + t u = e^s and L = ln(1 + u): Iₖ = u^−(k+1) ∫₀ᴸ (1 − e^−s)ᵏ e^(s p) ds, a sum over the binomial of
/// ∫₀ᴸ e^(s r) ds = L (e^(r L) − 1)/(r L) at r = p, p − 1, …, p − k. Whole p need no care here.
fn power_by_logarithm(k: u32, u: f64, log: Interval, p: Interval) -> Interval {
    let mut sum = Interval::ZERO;
    for j in 0..=k {
        let r = p - Interval::point(f64::from(j));
        let sign = if j % 2 == 0 { 1.0 } else { -1.0 };
        sum += Interval::point(sign * binomial(k, j)) * exponential_over(0, r * log);
    }
    (0..=k).fold(sum * log, |value, _| over(value, Interval::point(u)))
}

/// (1 + u)^r for u > −1, with what the rounding of 1 + u loses made good: a large r would magnify it.
fn plus_one_to_the(u: f64, r: Interval) -> Interval {
    let (sum, lost) = two_sum(1.0, u);
    let power = Interval::point(sum).pow(r, &mut true);
    if lost == 0.0 {
        return power;
    }
    let share = over(Interval::point(lost), Interval::point(sum));
    power * (r * share.log1p(&mut true)).exp()
}

/// Σ of a series from its first term and the ratios of its terms.
///
/// `ratio(j)` encloses term j + 1 over term j; `later(n)` bounds |ratio(j)| for all j ≥ n. Once that is ≤ ¾ the terms from
/// n on sum to at most four times term n in size: the remainder that is added.
fn series(first: Interval, ratio: impl Fn(f64) -> Interval, later: impl Fn(f64) -> f64) -> Interval {
    let (mut sum, mut term) = (Interval::ZERO, first);
    for n in (0..MAX_TERMS).map(f64::from) {
        if term.mag() <= NEGLIGIBLE * sum.mag() && later(n) <= 0.75 {
            let remainder = 4.0 * term.mag();
            return sum + Interval::new(-remainder, remainder);
        }
        sum += term;
        term *= ratio(n);
    }
    Interval::ENTIRE
}

/// a/b where the divisor is known not to be 0; wide rather than wrong where rounding lets it be.
fn over(a: Interval, b: Interval) -> Interval {
    a.div(b, &mut true)
}

/// a/b of two small whole numbers.
fn fraction(a: f64, b: f64) -> Interval {
    over(Interval::point(a), Interval::point(b))
}

/// Beyond every f64.
fn unbounded() -> Interval {
    Interval::new(f64::MAX, f64::INFINITY)
}
