//! The beta distribution: shares below a value, and the value that a share lies below.
//!
//! Shares come with their logarithms, because far out they are smaller than any f64. `x` is between 0 and 1, both shapes
//! are positive and finite.

use std::f64::consts::{LN_2, PI};

use super::elementary::{exp, expm1, ln, log1p};
use super::gamma::{excess, ln_gamma, stirling_rest};
use super::normal;

/// A fraction takes about √min(a, b) terms; with more than these the shapes are taken for infinitely large.
const TERMS: usize = 4_000;
/// Above this, gamma functions are differences of large numbers, and Stirling's formula is taken out of them.
const LARGE: f64 = 10.0;
/// Newton's steps, each within the bracket that halves at the worst.
const STEPS: usize = 200;
/// A step in the logit that is rounding alone; one this small that is no smaller than the last is, too.
const ROUNDING: f64 = 1e-15;
const NEAR: f64 = 1e-9;
const TINY: f64 = 1e-290;
/// ln of the smallest number above 0.
const LN_SMALLEST: f64 = -745.2;

/// The two sides of a value, as logarithms of the shares below and above.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shares {
    /// ln of the share at or below.
    pub ln_below: f64,
    /// ln of the share above.
    pub ln_above: f64,
}

/// Which share a quantile has.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Side {
    /// ln of the share at or below.
    Below(f64),
    /// ln of the share above.
    Above(f64),
}

/// A beta distribution of two shapes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Beta {
    a: f64,
    b: f64,
    /// ln B(a, b), of use where a shape is small.
    ln_function: f64,
    /// Stirling's rest of a + b less those of a and b.
    rest: f64,
}

impl Beta {
    /// The distribution with these shapes.
    ///
    /// # Panics
    /// If one of them is not positive and finite.
    #[must_use]
    pub fn new(a: f64, b: f64) -> Self {
        assert!(a > 0.0 && b > 0.0 && a.is_finite() && b.is_finite(), "a beta distribution of {a} and {b}");
        let rest = stirling_rest(a + b) - stirling_rest(a) - stirling_rest(b);
        Self { a, b, ln_function: ln_beta_function(a, b), rest }
    }

    /// Both shares at x: the regularised incomplete beta function I_x(a, b) and 1 − I_x, each to a relative error of 1e-12,
    /// mostly 1e-14 (of shapes above 1e6 it grows as their root);
    /// the smaller one to 2e-14 of the larger where that is more, as it is of shapes far below 1.
    ///
    /// By a continued fraction on the side where it converges. Of shapes so large that it does not end, by the normal
    /// distribution of the logit, which errs by some 1e-3 standard deviations there, or 1e-6 of x.
    #[must_use]
    pub fn shares(&self, x: f64) -> Shares {
        if x <= 0.0 || x >= 1.0 {
            let (none, all) = (f64::NEG_INFINITY, 0.0);
            return if x <= 0.0 {
                Shares { ln_below: none, ln_above: all }
            } else {
                Shares { ln_below: all, ln_above: none }
            };
        }
        self.shares_at(x, 1.0 - x).unwrap_or_else(|| {
            let deviation = (ln(x / (1.0 - x)) - ln(self.a / self.b)) / self.logit_sd();
            Shares { ln_below: normal::ln_share(deviation), ln_above: normal::ln_share(-deviation) }
        })
    }

    /// Both shares at x, y = 1 − x; `None` where the fraction does not end.
    fn shares_at(&self, x: f64, y: f64) -> Option<Shares> {
        let (a, b) = (self.a, self.b);
        if x < (a + 1.0) / (a + b + 2.0) {
            let below = self.ln_power(x, y, a, b) + ln(fraction(a, b, x)?);
            Some(Shares { ln_below: below, ln_above: ln_rest(below) })
        } else {
            let above = self.ln_power(y, x, b, a) + ln(fraction(b, a, y)?);
            Some(Shares { ln_below: ln_rest(above), ln_above: above })
        }
    }

    /// The standard deviation of ln(x/(1 − x)), both shapes being large.
    fn logit_sd(&self) -> f64 {
        (1.0 / self.a + 1.0 / self.b).sqrt()
    }

    /// ln(x^a y^b/B(a, b)); symmetric in the two sides.
    fn ln_power(&self, x: f64, y: f64, a: f64, b: f64) -> f64 {
        if a.min(b) < LARGE {
            let (ln_x, ln_y) = if x < y { (ln(x), log1p(-x)) } else { (log1p(-y), ln(y)) };
            return a * ln_x + b * ln_y - self.ln_function;
        }
        // Near the mean both powers and B are huge and nearly cancel (DiDonato & Morris 1992, section 8).
        let (mean, other) = (a / (a + b), b / (a + b));
        let distance = if mean < other { x - mean } else { other - y };
        // Away from it the ratio itself has more digits than its distance from 1.
        let part = |u: f64, ratio: f64| if u.abs() < 0.3 { excess(u) } else { u - ln(ratio) };
        let away = a * part(distance / mean, x / mean) + b * part(-distance / other, y / other);
        0.5 * ln(a * other / (2.0 * PI)) - away + self.rest
    }

    /// The x that a share lies below, or above; in [0, 1], relative error about 1e-12, or what the
    /// error of [`shares`](Self::shares) is worth in x: of shapes far below 1 that is 2e-14 divided by the shape. Where x is too near 0 or 1 to be told
    /// from it, it is 0 or 1.
    ///
    /// Newton's method on the logarithm of the smaller share over the logit of x, kept within a bracket.
    #[must_use]
    pub fn quantile(&self, side: Side) -> f64 {
        let mirrored = Self { a: self.b, b: self.a, ..*self };
        match side {
            Side::Below(share) if share <= -LN_2 => self.solve(share).0,
            Side::Above(share) if share <= -LN_2 => mirrored.solve(share).1,
            Side::Below(share) => mirrored.solve(ln_rest(share)).1,
            Side::Above(share) => self.solve(ln_rest(share)).0,
        }
    }

    /// The x, and 1 − x, with at most half of the distribution below it, ln share given.
    fn solve(&self, share: f64) -> (f64, f64) {
        // Below the smallest f64 the power law of the lower end is exact.
        let end = self.lower_end(share);
        if end.is_nan() || end < LN_SMALLEST {
            return (0.0, 1.0);
        }
        let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
        let (mut at, mut last) = (self.start(share), f64::INFINITY);
        for _ in 0..STEPS {
            let (x, y) = sides(at);
            let Some(found) = self.shares_at(x, y) else {
                return sides(self.of_normal(share));
            };
            let error = found.ln_below - share;
            if error > 0.0 {
                high = at;
            } else {
                low = at;
            }
            // d ln I/d logit x = x^a y^b/(B I).
            let slope = exp(self.ln_power(x, y, self.a, self.b) - found.ln_below);
            let proposed = at - error / slope;
            let step = (proposed - at).abs();
            // Before the bracket is asked, for one of its ends is already as good.
            if step <= ROUNDING * at.abs().max(1.0) || (step < NEAR && step >= last) {
                break;
            }
            at = within(proposed, at, low, high);
            last = step;
        }
        sides(at)
    }

    /// The logit below which a share lies, both shapes being large.
    fn of_normal(&self, share: f64) -> f64 {
        ln(self.a / self.b) + normal::of_ln_share(share) * self.logit_sd()
    }

    /// ln x by the power law of the lower end, I_x = x^a/(a B).
    fn lower_end(&self, share: f64) -> f64 {
        (share + ln(self.a) + self.ln_function) / self.a
    }

    /// A logit to begin at: the power law of the lower end, or the normal distribution around the mean.
    fn start(&self, share: f64) -> f64 {
        let (a, b) = (self.a, self.b);
        let end = self.lower_end(share);
        if end < -1.0 && a.min(b) < LARGE {
            return end;
        }
        self.of_normal(share)
    }
}

/// ln B(a, b); made for shapes of which at most one is large.
fn ln_beta_function(a: f64, b: f64) -> f64 {
    let (small, large) = (a.min(b), a.max(b));
    if large < LARGE {
        return ln_gamma(a) + ln_gamma(b) - ln_gamma(a + b);
    }
    // The two gamma functions of large arguments by their ratio, in Stirling's form.
    let rests = stirling_rest(large) - stirling_rest(small + large);
    ln_gamma(small) - (large - 0.5) * log1p(small / large) - small * ln(small + large) + small + rests
}

/// ln(1 − e^l) for l ≤ 0.
fn ln_rest(l: f64) -> f64 {
    if l > -LN_2 { ln(-expm1(l)) } else { log1p(-exp(l)) }
}

/// x and 1 − x from ln(x/(1 − x)), neither cancelled.
fn sides(logit: f64) -> (f64, f64) {
    let e = exp(-logit.abs());
    let (small, large) = (e / (1.0 + e), 1.0 / (1.0 + e));
    if logit < 0.0 { (small, large) } else { (large, small) }
}

/// The next place: the one proposed if it is within the bracket, else half way, or twice as far out where it is open.
fn within(proposed: f64, at: f64, low: f64, high: f64) -> f64 {
    if proposed > low && proposed < high {
        // The logarithm of a share is concave in the logit: from above, a first step may be far too long.
        let most = 1.0 + 2.0 * at.abs();
        return proposed.clamp(at - most, at + most);
    }
    match (low.is_finite(), high.is_finite()) {
        (true, true) => f64::midpoint(low, high),
        (true, false) => at + 1.0 + at.abs(),
        _ => at - 1.0 - at.abs(),
    }
}

/// The continued fraction that I_x = x^a y^b/B × it; `None` where it does not end in time.
///
/// 1/(a (1 + d₁/(1 + d₂/(1 + …)))), which converges fast for x < (a + 1)/(a + b + 2) (Abramowitz & Stegun 1964, 26.5.8), by
/// Lentz's method (Thompson & Barnett 1986).
fn fraction(a: f64, b: f64, x: f64) -> Option<f64> {
    let (mut value, mut c, mut d) = (1.0, 1.0, 0.0);
    for k in 1..=TERMS {
        let m = (k / 2) as f64;
        let place = a + k as f64;
        let odd = if k % 2 == 0 { m * (b - m) } else { -(a + m) * (a + b + m) };
        let term = odd / (place - 1.0) * (x / place);
        d = 1.0 / away_from_zero(1.0 + term * d);
        c = away_from_zero(1.0 + term / c);
        value *= c * d;
        if (c * d - 1.0).abs() <= f64::EPSILON {
            return Some(1.0 / (a * value));
        }
    }
    None
}

fn away_from_zero(x: f64) -> f64 {
    if x.abs() < TINY { TINY } else { x }
}
