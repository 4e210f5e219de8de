//! What a type must offer so that a tape can run over it.

use crate::expr::function::{Function, Quotient};
use crate::num::{self, elementary, interval};
use interval::Interval;

/// What an evaluation met on its way.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Domain {
    /// Every operation was defined and continuous on all of its operands (the decoration `dac` of IEEE 1788-2015).
    pub defined: bool,
    /// No kink of min, max or abs was met: the derivatives taken are derivatives, not hulls of two branches.
    pub smooth: bool,
}

impl Domain {
    /// Nothing met yet.
    pub const CLEAN: Self = Self { defined: true, smooth: true };
}

/// A number type that tapes run over. Every operation is the f64 one rounded once, an enclosure of it, or exact calculus
/// on it.
pub trait Number: Clone {
    /// An exact number.
    fn constant(value: f64) -> Self;
    /// −a
    #[must_use]
    fn neg(&self) -> Self;
    /// a + b
    #[must_use]
    fn add(&self, other: &Self) -> Self;
    /// a − b
    #[must_use]
    fn sub(&self, other: &Self) -> Self;
    /// a b
    #[must_use]
    fn mul(&self, other: &Self) -> Self;
    /// a / b
    #[must_use]
    fn div(&self, other: &Self, domain: &mut Domain) -> Self;
    /// aⁿ
    #[must_use]
    fn powi(&self, n: i32, domain: &mut Domain) -> Self;
    /// a^b
    #[must_use]
    fn pow(&self, exponent: &Self, domain: &mut Domain) -> Self;
    /// f(a)
    #[must_use]
    fn apply(&self, function: Function, domain: &mut Domain) -> Self;
    /// the smaller
    #[must_use]
    fn min(&self, other: &Self, domain: &mut Domain) -> Self;
    /// the larger
    #[must_use]
    fn max(&self, other: &Self, domain: &mut Domain) -> Self;
    /// x where a ≤ b, y elsewhere; `[a, b, x, y]`
    fn select(operands: [&Self; 4], domain: &mut Domain) -> Self;
    /// s/(v + c s); `[s, c, v]`
    fn saturation(operands: [&Self; 3], domain: &mut Domain) -> Self;
    /// the k-th derivative of f(u)/u
    #[must_use]
    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self;
    /// the k-th derivative in u = self of ((1 + u)^p − 1)/u
    #[must_use]
    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self;
    /// Whether it is 0 and nothing else.
    fn is_zero(&self) -> bool;

    /// aⁿ for any n, 0 and 1 included.
    #[must_use]
    fn whole_power(&self, n: i32, domain: &mut Domain) -> Self {
        match n {
            0 => Self::constant(1.0),
            1 => self.clone(),
            _ => self.powi(n, domain),
        }
    }

    /// Σ_j m_j x_j in the order of j; entries that are 0 take no part.
    #[must_use]
    fn dot(numbers: &[f64], states: &[Self]) -> Self {
        let mut sum = Self::constant(0.0);
        for (&m, x) in numbers.iter().zip(states) {
            if m != 0.0 {
                sum = sum.add(&Self::constant(m).mul(x));
            }
        }
        sum
    }
}

/// Whether an f64 result lies in the function's domain.
fn finite(value: f64, domain: &mut Domain) -> f64 {
    domain.defined &= value.is_finite();
    value
}

/// aⁿ by squaring, the same way for every type that is not an enclosure, so that lanes equal scalars bit for bit.
#[must_use]
pub fn whole_power(a: f64, n: i32) -> f64 {
    let mut power = 1.0;
    let mut square = a;
    let mut left = n.unsigned_abs();
    while left > 0 {
        if left & 1 == 1 {
            power *= square;
        }
        left >>= 1;
        if left > 0 {
            square *= square;
        }
    }
    if n < 0 { 1.0 / power } else { power }
}

/// x^p for x ≥ 0, correctly rounded.
#[must_use]
pub fn real_power(x: f64, p: f64) -> f64 {
    elementary::pow(x, p)
}

impl Number for f64 {
    fn constant(value: f64) -> Self {
        value
    }

    fn neg(&self) -> Self {
        -self
    }

    fn add(&self, other: &Self) -> Self {
        self + other
    }

    fn sub(&self, other: &Self) -> Self {
        self - other
    }

    fn mul(&self, other: &Self) -> Self {
        self * other
    }

    fn div(&self, other: &Self, domain: &mut Domain) -> Self {
        domain.defined &= *other != 0.0;
        self / other
    }

    fn powi(&self, n: i32, domain: &mut Domain) -> Self {
        domain.defined &= n >= 0 || *self != 0.0;
        whole_power(*self, n)
    }

    fn pow(&self, exponent: &Self, domain: &mut Domain) -> Self {
        domain.defined &= *self > 0.0 || (*self == 0.0 && *exponent > 0.0);
        real_power(*self, *exponent)
    }

    fn apply(&self, function: Function, domain: &mut Domain) -> Self {
        finite(function.value(*self), domain)
    }

    fn min(&self, other: &Self, _: &mut Domain) -> Self {
        if other < self { *other } else { *self }
    }

    fn max(&self, other: &Self, _: &mut Domain) -> Self {
        if other > self { *other } else { *self }
    }

    fn select([a, b, x, y]: [&Self; 4], domain: &mut Domain) -> Self {
        domain.smooth &= a != b;
        if a <= b { *x } else { *y }
    }

    fn saturation([s, c, v]: [&Self; 3], domain: &mut Domain) -> Self {
        let den = v + c * s;
        domain.defined &= den != 0.0;
        s / den
    }

    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self {
        finite(quotient.value(k, *self), domain)
    }

    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self {
        finite(num::quotient::quotient_f64(num::quotient::Quotient::Powm1, u32::from(k), *self, *p), domain)
    }

    fn is_zero(&self) -> bool {
        *self == 0.0
    }

    fn dot(numbers: &[f64], states: &[Self]) -> Self {
        numbers.iter().zip(states).fold(0.0, |sum, (m, x)| sum + m * x)
    }
}

impl Number for Interval {
    fn constant(value: f64) -> Self {
        Self::point(value)
    }

    fn neg(&self) -> Self {
        -*self
    }

    fn add(&self, other: &Self) -> Self {
        *self + *other
    }

    fn sub(&self, other: &Self) -> Self {
        *self - *other
    }

    fn mul(&self, other: &Self) -> Self {
        *self * *other
    }

    fn div(&self, other: &Self, domain: &mut Domain) -> Self {
        Self::div(*self, *other, &mut domain.defined)
    }

    fn powi(&self, n: i32, domain: &mut Domain) -> Self {
        Self::powi(*self, n, &mut domain.defined)
    }

    fn pow(&self, exponent: &Self, domain: &mut Domain) -> Self {
        Self::pow(*self, *exponent, &mut domain.defined)
    }

    fn apply(&self, function: Function, domain: &mut Domain) -> Self {
        function.interval(*self, &mut domain.defined)
    }

    fn min(&self, other: &Self, _: &mut Domain) -> Self {
        Self::min(*self, *other)
    }

    fn max(&self, other: &Self, _: &mut Domain) -> Self {
        Self::max(*self, *other)
    }

    fn select([a, b, x, y]: [&Self; 4], domain: &mut Domain) -> Self {
        // Where a and b merely touch one branch gives all values, but the kink is among the arguments.
        domain.smooth &= a.intersect(*b).is_empty();
        interval::select(*a, *b, *x, *y, &mut true)
    }

    fn saturation([s, c, v]: [&Self; 3], domain: &mut Domain) -> Self {
        interval::saturation(*s, *c, *v, &mut domain.defined)
    }

    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self {
        quotient.interval(k, *self, &mut domain.defined)
    }

    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self {
        num::quotient::quotient(num::quotient::Quotient::Powm1, u32::from(k), *self, *p, &mut domain.defined)
    }

    fn is_zero(&self) -> bool {
        *self == Self::ZERO
    }
}
