//! exp, ln and their like to some 100 bits: series and identities in [`Double`] arithmetic with an enclosed remainder.
//!
//! e^x − 1 is Taylor's series of a small argument, doubled back by t ↦ t (2 + t); logarithms add one first-order correction
//! to the correctly rounded f64, ln a = y + ln(a e^−y), whose argument is so near 1 that an interval is sharp enough.
//! Arguments that are wide, tiny or large fall back on the interval function.

use super::Double;
use crate::num::elementary as scalar;
use crate::num::interval::Interval;

/// Halvings of the argument before the series, and what they leave of it: it is then below ln 2/128 = 0.0055.
const HALVINGS: i32 = 6;
const SHARE: f64 = 1.0 / 64.0;
/// Terms of the series: 0.0055^13/13! is below 2^−128 of the first.
const TERMS: u32 = 12;
/// Arguments beyond which e^x is left to the interval function: far from overflow and underflow.
const FAR: f64 = 300.0;
/// Arguments below this are left to it as well.
const TINY: f64 = 1e-200;
/// A set wider than this, relative to its place, is no point.
const WIDE: f64 = 1e-8;

/// ln 2 as a sum, and what it may lack: ln 2 = 0.693147180559945309417232121458176568…
const LN_2: [f64; 2] = [std::f64::consts::LN_2, 2.319_046_813_846_299_6e-17];
const LN_2_ERROR: f64 = 1e-33;

impl Double {
    /// e^a
    #[must_use]
    pub fn exp(self) -> Self {
        if !self.is_narrow() || self.main.abs() > FAR {
            return Self::around(self.enclosure().exp());
        }
        let [t, scale] = self.reduced();
        (Self::exact(1.0) + t) * scale
    }

    /// e^a − 1, as sharp near 0 as elsewhere.
    #[must_use]
    pub fn expm1(self) -> Self {
        if !self.is_narrow() || self.main.abs() > FAR || self.main.abs() < TINY {
            return Self::around(self.enclosure().expm1());
        }
        let [t, scale] = self.reduced();
        // 2^k (1 + t) − 1 = 2^k t + (2^k − 1)
        t * scale + (scale - Self::exact(1.0))
    }

    /// t and 2^k with e^a = 2^k (1 + t).
    fn reduced(self) -> [Self; 2] {
        let k = (self.main / LN_2[0]).round();
        let ln_2 = Self::of(LN_2[0], Interval::point(LN_2[1]) + Interval::new(-LN_2_ERROR, LN_2_ERROR));
        let reduced = if k == 0.0 { self } else { self - Self::exact(k) * ln_2 };
        let mut t = small_expm1(reduced * Self::exact(SHARE));
        for _ in 0..HALVINGS {
            t = t * (Self::exact(2.0) + t);
        }
        [t, Self::exact(power_of_two(k))]
    }

    /// ln a; clears `defined` where a may be 0 or less.
    #[must_use]
    pub fn ln(self, defined: &mut bool) -> Self {
        let whole = self.enclosure();
        let y = scalar::ln(self.main);
        if whole.lo() <= 0.0 || !self.is_narrow() || y.is_nan() || y.abs() > FAR {
            return Self::around(whole.ln(defined));
        }
        if (self.main - 1.0).abs() < 0.25 {
            return (self - Self::exact(1.0)).log1p(defined);
        }
        let off = self * Self::exact(-y).exp() - Self::exact(1.0);
        Self::of(y, off.enclosure().log1p(defined))
    }

    /// ln(1 + a), as sharp near 0 as elsewhere; clears `defined` where a may be −1 or less.
    #[must_use]
    pub fn log1p(self, defined: &mut bool) -> Self {
        let whole = self.enclosure();
        let y = scalar::log1p(self.main);
        if whole.lo() <= -1.0 || !self.is_narrow() || y.is_nan() || y.abs() > FAR || y.abs() < TINY {
            return Self::around(whole.log1p(defined));
        }
        // (1 + a) e^−y − 1 = a + (e^−y − 1)(1 + a)
        let back = Self::exact(-y).expm1();
        let off = self + back * (Self::exact(1.0) + self);
        Self::of(y, off.enclosure().log1p(defined))
    }

    /// log₁₀ a; clears `defined` where a may be 0 or less.
    #[must_use]
    pub fn log10(self, defined: &mut bool) -> Self {
        let ten = Self::exact(10.0).ln(&mut true);
        self.ln(defined).div(ten, defined)
    }

    /// tanh a = (e^2a − 1)/(e^2a + 1)
    #[must_use]
    pub fn tanh(self) -> Self {
        // Beyond 20 it differs from ±1 by less than half a step.
        if !self.is_narrow() || self.main.abs() > 20.0 || self.main.abs() < TINY {
            return Self::around(self.enclosure().tanh());
        }
        let t = (self + self).expm1();
        t.div(t + Self::exact(2.0), &mut true)
    }

    /// a^b for a real exponent; clears `defined` as the interval's power does.
    #[must_use]
    pub fn pow(self, exponent: Self, defined: &mut bool) -> Self {
        let whole = self.enclosure();
        if whole.lo() <= 0.0 || exponent.is_zero() {
            return Self::around(whole.pow(exponent.enclosure(), defined));
        }
        (exponent * self.ln(defined)).exp()
    }

    fn is_narrow(self) -> bool {
        self.rest.mag() <= WIDE * self.main.abs()
    }
}

/// 2^k for a whole k from −1022 to 1023: exact, which no library promises of its function.
fn power_of_two(k: f64) -> f64 {
    f64::from_bits((1023 + k as i64).cast_unsigned() << 52)
}

/// e^r − 1 for |r| < 0.006 by Taylor's series; the rest is below its next term times 1/(1 − |r|) < 1.1.
fn small_expm1(r: Double) -> Double {
    let size = r.enclosure().mag();
    if size >= 0.006 {
        return Double::around(r.enclosure().expm1());
    }
    // r (1 + r/2 (1 + r/3 (1 + …)))
    let mut sum = Double::exact(1.0);
    for k in (2..=TERMS).rev() {
        let factor = r.div(Double::exact(f64::from(k)), &mut true);
        sum = Double::exact(1.0) + factor * sum;
    }
    // |r|^12/13! < 0.006^12/6e9 < 4e-37, relative to the first term.
    let rest = Interval::new(-1e-36, 1e-36);
    let sum = Double { rest: sum.rest + rest, ..sum };
    r * sum
}
