//! Tapes over the model as it is written: a decimal number that no f64 equals stands for all that round to the same one.
//!
//! Where two equilibria are so close that the last digit of a parameter decides whether there are any, an answer for the
//! f64 parameters alone would be a proof about a model that nobody wrote.

use super::number::{Domain, Number};
use crate::expr::function::{Function, Quotient};
use crate::num::double::Double;
use crate::num::interval::Interval;

/// A number of some 32 digits that depends on constants and parameters as written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Written(pub Double);

impl Written {
    /// All real numbers whose nearest f64 is this, unless it is a decimal number of few digits: then that number alone.
    pub fn of(value: f64) -> Self {
        if is_short(value) {
            return Self(Double::exact(value));
        }
        let half = (value.abs().next_up() - value.abs()) / 2.0;
        Self(Double::exact(value) + Double::around(Interval::new(-half, half)))
    }
}

/// Whether the exact value of an f64 has at most 15 decimal digits: then it is what was written, since no two numbers of so
/// few digits round to the same f64.
fn is_short(value: f64) -> bool {
    // value = whole/2^k is whole · 5^k in units of 10^−k.
    let (mut whole, mut fives) = (value.abs(), 1.0);
    for _ in 0..=MOST_PLACES {
        if whole == whole.trunc() {
            return whole * fives < 1e15;
        }
        whole *= 2.0;
        fives *= 5.0;
    }
    false
}

/// Binary places of a number of up to 15 decimal digits: 5^22 has 16.
const MOST_PLACES: u32 = 21;

impl Number for Written {
    fn constant(value: f64) -> Self {
        Self::of(value)
    }

    fn neg(&self) -> Self {
        Self(-self.0)
    }

    fn add(&self, other: &Self) -> Self {
        Self(self.0 + other.0)
    }

    fn sub(&self, other: &Self) -> Self {
        Self(self.0 - other.0)
    }

    fn mul(&self, other: &Self) -> Self {
        Self(self.0 * other.0)
    }

    fn div(&self, other: &Self, domain: &mut Domain) -> Self {
        Self(Number::div(&self.0, &other.0, domain))
    }

    fn powi(&self, n: i32, domain: &mut Domain) -> Self {
        Self(Number::powi(&self.0, n, domain))
    }

    fn pow(&self, exponent: &Self, domain: &mut Domain) -> Self {
        Self(Number::pow(&self.0, &exponent.0, domain))
    }

    fn apply(&self, function: Function, domain: &mut Domain) -> Self {
        Self(self.0.apply(function, domain))
    }

    fn min(&self, other: &Self, domain: &mut Domain) -> Self {
        Self(self.0.min(&other.0, domain))
    }

    fn max(&self, other: &Self, domain: &mut Domain) -> Self {
        Self(self.0.max(&other.0, domain))
    }

    fn select(operands: [&Self; 4], domain: &mut Domain) -> Self {
        Self(Double::select(operands.map(|operand| &operand.0), domain))
    }

    fn saturation(operands: [&Self; 3], domain: &mut Domain) -> Self {
        Self(Double::saturation(operands.map(|operand| &operand.0), domain))
    }

    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self {
        Self(self.0.quotient(quotient, k, domain))
    }

    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self {
        Self(self.0.power_quotient(k, &p.0, domain))
    }

    fn is_zero(&self) -> bool {
        self.0.is_zero()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_was_written_is_among_what_it_stands_for() {
        let check = |value: f64, exact: bool| assert_eq!(Written::of(value).0.enclosure().is_point(), exact, "{value}");
        for exact in [0.0, 1.0, -2.0, 0.5, 0.1875, 400_000.0, -1e14, 0.000_030_517_578_125] {
            check(exact, true);
        }
        for rounded in [0.1, -0.3, 1e-20, 2.5e-21, 0.999_999_999_999_999_4, 1.0 / 3.0, 1e300] {
            check(rounded, false);
        }
        // Ten tenths are 1; ten times the f64 beside a tenth are not.
        let ten = (Written::of(0.1).0 * Double::exact(10.0) - Double::exact(1.0)).enclosure();
        assert!(ten.contains_zero() && ten.width() < 3e-16, "{ten:?}");
        let f64_alone = (Double::exact(0.1) * Double::exact(10.0) - Double::exact(1.0)).enclosure();
        assert!(!f64_alone.contains_zero(), "{f64_alone:?}");
    }
}
