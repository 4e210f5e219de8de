//! Tapes over numbers of some 32 digits, for residuals at a point. Where a set meets both branches of a choice, or an
//! operation has no sharper form, the value is what intervals give.

use super::number::{Domain, Number};
use crate::expr::function::{Function, Quotient};
use crate::num::double::Double;
use crate::num::interval;

impl Number for Double {
    fn constant(value: f64) -> Self {
        Self::exact(value)
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
        (function.row().double)(*self, &mut domain.defined)
    }

    fn min(&self, other: &Self, domain: &mut Domain) -> Self {
        Self::select([self, other, self, other], domain)
    }

    fn max(&self, other: &Self, domain: &mut Domain) -> Self {
        Self::select([self, other, other, self], domain)
    }

    fn select([a, b, x, y]: [&Self; 4], domain: &mut Domain) -> Self {
        match a.at_most(*b) {
            Some(true) => *x,
            Some(false) => *y,
            None => {
                domain.smooth = false;
                x.either(*y)
            }
        }
    }

    fn saturation([s, c, v]: [&Self; 3], domain: &mut Domain) -> Self {
        let den = *v + *c * *s;
        if !den.enclosure().contains_zero() {
            return Self::div(*s, den, &mut domain.defined);
        }
        let [s, c, v] = [s, c, v].map(|part| part.enclosure());
        Self::around(interval::saturation(s, c, v, &mut domain.defined))
    }

    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self {
        if k == 0 && !self.enclosure().contains_zero() {
            let value = self.apply(quotient.function(), domain);
            return Self::div(value, *self, &mut domain.defined);
        }
        Self::around(quotient.interval(k, self.enclosure(), &mut domain.defined))
    }

    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self {
        let u = self.enclosure();
        if k == 0 && u.lo() > -1.0 && !u.contains_zero() {
            // (1 + u)^p − 1 without cancellation.
            let grown = (*p * self.log1p(&mut domain.defined)).expm1();
            return Self::div(grown, *self, &mut domain.defined);
        }
        Self::around(u.power_quotient(k, &p.enclosure(), domain))
    }

    fn is_zero(&self) -> bool {
        Self::is_zero(*self)
    }
}
