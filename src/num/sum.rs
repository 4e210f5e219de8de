//! Sums without rounding, so that parts of a sum can be put together in any order.

/// Bits of a number below the point and above it: from 2^−1074 to 2^1024, and room for 2^62 terms.
const LOWEST: i32 = -1074;
const LIMBS: usize = 46;
/// Bits that one limb stands for; its other bits hold what is carried later.
const LIMB: i32 = 48;
/// Each term adds less than 2^48 to three limbs, and a limb holds less than 2^63.
const MOST_UNCARRIED: u32 = 1 << 14;

/// An exact sum of finite numbers (Kulisch 1971: a fixed-point number as wide as the range of f64).
///
/// Adding in any order, and adding sums, gives the same bits. About 400 bytes.
#[derive(Clone, Debug)]
pub struct Sum {
    limbs: [i64; LIMBS],
    uncarried: u32,
    /// The sum of all that was not finite: an infinity or NaN, else 0.
    beyond: f64,
}

impl Default for Sum {
    fn default() -> Self {
        Self { limbs: [0; LIMBS], uncarried: 0, beyond: 0.0 }
    }
}

impl PartialEq for Sum {
    fn eq(&self, other: &Self) -> bool {
        let (mut a, mut b) = (self.clone(), other.clone());
        a.carry();
        b.carry();
        a.limbs == b.limbs && a.beyond.to_bits() == b.beyond.to_bits()
    }
}

impl Sum {
    /// Adds a number. What is not finite makes the value infinite or NaN, as in plain arithmetic.
    #[expect(clippy::cast_sign_loss, reason = "exponents are counted from 0")]
    pub fn add(&mut self, x: f64) {
        if !x.is_finite() {
            self.beyond += x;
            return;
        }
        let bits = x.to_bits();
        let power = (bits >> 52 & 0x7ff) as i32;
        let fraction = bits & ((1 << 52) - 1);
        let (mantissa, exponent) = if power == 0 { (fraction, 0) } else { (fraction | 1 << 52, power - 1) };
        let (limb, shift) = ((exponent / LIMB) as usize, exponent % LIMB);
        let wide = u128::from(mantissa) << shift;
        let part = |k: i32| (wide >> (k * LIMB) & ((1 << LIMB) - 1)) as i64;
        let sign = if x < 0.0 { -1 } else { 1 };
        for (limb, k) in self.limbs[limb..].iter_mut().zip(0..3) {
            *limb += sign * part(k);
        }
        self.uncarried += 1;
        if self.uncarried >= MOST_UNCARRIED {
            self.carry();
        }
    }

    /// Adds another sum.
    pub fn and(&mut self, other: &Self) {
        let mut other = other.clone();
        other.carry();
        self.carry();
        for (limb, more) in self.limbs.iter_mut().zip(other.limbs) {
            *limb += more;
        }
        self.carry();
        self.beyond += other.beyond;
    }

    /// The sum, within an ulp; the same for the same terms in any order.
    #[must_use]
    pub fn value(&self) -> f64 {
        if self.beyond != 0.0 {
            return self.beyond;
        }
        let mut carried = self.clone();
        carried.carry();
        let negative = carried.limbs[LIMBS - 1] < 0;
        if negative {
            carried.limbs.iter_mut().for_each(|limb| *limb = -*limb);
            carried.carry();
        }
        let size = carried.size();
        if negative { -size } else { size }
    }

    /// The value of limbs that are all 0 or more: the highest three hold 97 bits or more.
    #[expect(clippy::cast_possible_wrap, reason = "there are 46 limbs")]
    fn size(&self) -> f64 {
        let Some(highest) = self.limbs.iter().rposition(|limb| *limb != 0) else { return 0.0 };
        let lowest = highest.saturating_sub(2);
        let part = |k: usize| {
            let exponent = LOWEST + LIMB * k as i32;
            scaled(self.limbs[k] as f64, exponent)
        };
        (lowest..=highest).map(part).sum()
    }

    /// Brings all limbs but the highest into 0 … 2^48 − 1.
    fn carry(&mut self) {
        let mut carried = 0;
        for limb in &mut self.limbs[..LIMBS - 1] {
            let whole = *limb + carried;
            carried = whole >> LIMB;
            *limb = whole & ((1 << LIMB) - 1);
        }
        self.limbs[LIMBS - 1] += carried;
        self.uncarried = 0;
    }
}

/// x 2^exponent, in two steps so that neither power is out of range.
fn scaled(x: f64, exponent: i32) -> f64 {
    let half = exponent / 2;
    x * 2f64.powi(half) * 2f64.powi(exponent - half)
}
