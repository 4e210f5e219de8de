//! Truncated Taylor series along a curve: exact directional derivatives up to the third.
//!
//! A [`Jet`] holds f(x(t)) = c₀ + c₁ t + c₂ t² + c₃ t³ + O(t⁴); f's third derivative along a straight line x + t v is
//! 6 c₃. Univariate Taylor arithmetic (Griewank & Walther 2008, ch. 13; from memory). Over intervals the coefficients are
//! enclosures.

use super::number::{Domain, Number};
use crate::expr::function::{Function, Quotient};

/// Four Taylor coefficients.
#[derive(Clone, Debug, PartialEq)]
pub struct Jet<T>(pub [T; 4]);

impl<T: Number> Jet<T> {
    /// The straight line x + t v.
    pub fn line(x: T, v: T) -> Self {
        Self([x, v, T::constant(0.0), T::constant(0.0)])
    }

    fn zip(&self, other: &Self, f: impl Fn(&T, &T) -> T) -> Self {
        Self(std::array::from_fn(|k| f(&self.0[k], &other.0[k])))
    }

    /// f(u(t)) from f's derivatives at u(0): Faà di Bruno's formula up to order 3.
    fn compose(&self, [f0, f1, f2, f3]: [T; 4]) -> Self {
        let [_, u1, u2, u3] = &self.0;
        let square = u1.mul(u1);
        let sixth = |a: T| a.div(&T::constant(6.0), &mut Domain { ..Domain::CLEAN });
        let c1 = f1.mul(u1);
        let c2 = f1.mul(u2).add(&f2.mul(&square).mul(&T::constant(0.5)));
        let c3 = f1.mul(u3).add(&f2.mul(&u1.mul(u2))).add(&sixth(f3.mul(&square.mul(u1))));
        Self([f0, c1, c2, c3])
    }

    fn is_still(&self) -> bool {
        self.0[1..].iter().all(T::is_zero)
    }
}

impl<T: Number> Number for Jet<T> {
    fn constant(value: f64) -> Self {
        Self([T::constant(value), T::constant(0.0), T::constant(0.0), T::constant(0.0)])
    }

    fn neg(&self) -> Self {
        Self(std::array::from_fn(|k| self.0[k].neg()))
    }

    fn add(&self, other: &Self) -> Self {
        self.zip(other, T::add)
    }

    fn sub(&self, other: &Self) -> Self {
        self.zip(other, T::sub)
    }

    fn mul(&self, other: &Self) -> Self {
        Self(std::array::from_fn(|k| {
            let first = self.0[0].mul(&other.0[k]);
            (1..=k).fold(first, |sum, i| sum.add(&self.0[i].mul(&other.0[k - i])))
        }))
    }

    fn div(&self, other: &Self, domain: &mut Domain) -> Self {
        // q b = a, coefficient by coefficient.
        let mut q: Vec<T> = Vec::with_capacity(4);
        for k in 0..4 {
            let rest = (0..k).fold(self.0[k].clone(), |rest, i| rest.sub(&q[i].mul(&other.0[k - i])));
            q.push(rest.div(&other.0[0], domain));
        }
        Self(std::array::from_fn(|k| q[k].clone()))
    }

    fn powi(&self, n: i32, domain: &mut Domain) -> Self {
        let (mut scale, mut power) = (1.0, n + 1);
        let derivatives = std::array::from_fn(|_| {
            power -= 1;
            let value = if scale == 0.0 {
                T::constant(0.0)
            } else {
                T::constant(scale).mul(&self.0[0].whole_power(power, domain))
            };
            scale *= f64::from(power);
            value
        });
        self.compose(derivatives)
    }

    fn pow(&self, exponent: &Self, domain: &mut Domain) -> Self {
        if !exponent.is_still() {
            return self.apply(Function::Ln, domain).mul(exponent).apply(Function::Exp, domain);
        }
        let (x, mut p, mut scale) = (&self.0[0], exponent.0[0].clone(), T::constant(1.0));
        let derivatives = std::array::from_fn(|k| {
            if k > 0 && self.is_still() {
                return T::constant(0.0);
            }
            let value = scale.mul(&x.pow(&p, domain));
            scale = scale.mul(&p);
            p = p.sub(&T::constant(1.0));
            value
        });
        self.compose(derivatives)
    }

    fn apply(&self, function: Function, domain: &mut Domain) -> Self {
        self.compose(function.derivatives(&self.0[0], domain))
    }

    fn min(&self, other: &Self, domain: &mut Domain) -> Self {
        Self::select([self, other, self, other], domain)
    }

    fn max(&self, other: &Self, domain: &mut Domain) -> Self {
        Self::select([self, other, other, self], domain)
    }

    fn select([a, b, x, y]: [&Self; 4], domain: &mut Domain) -> Self {
        Self(std::array::from_fn(|k| T::select([&a.0[0], &b.0[0], &x.0[k], &y.0[k]], domain)))
    }

    fn saturation([s, c, v]: [&Self; 3], domain: &mut Domain) -> Self {
        let mut quotient = s.div(&v.add(&c.mul(s)), domain);
        quotient.0[0] = T::saturation([&s.0[0], &c.0[0], &v.0[0]], domain);
        quotient
    }

    fn quotient(&self, quotient: Quotient, k: u8, domain: &mut Domain) -> Self {
        let derivatives = std::array::from_fn(|j| {
            if j > 0 && self.is_still() {
                return T::constant(0.0);
            }
            self.0[0].quotient(quotient, k + j as u8, domain)
        });
        self.compose(derivatives)
    }

    fn power_quotient(&self, k: u8, p: &Self, domain: &mut Domain) -> Self {
        // No direction that is asked for moves a parameter.
        domain.defined &= p.is_still();
        let derivatives = std::array::from_fn(|j| {
            if j > 0 && self.is_still() {
                return T::constant(0.0);
            }
            self.0[0].power_quotient(k + j as u8, &p.0[0], domain)
        });
        self.compose(derivatives)
    }

    fn is_zero(&self) -> bool {
        self.0.iter().all(T::is_zero)
    }
}
