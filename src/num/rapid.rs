//! Functions for batches of numbers, fast because they need not be rounded correctly; never for proofs.
//!
//! Plain arithmetic on whole arrays, so that the compiler vectorises it and every processor gives the same bits.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::wide::{self, Loops};

/// Adding it rounds a small number to a whole one, which then stands in the lowest bits.
const ROUNDER: f64 = 1.5 * (1u64 << 52) as f64;
/// ln 2 in two parts: the first has so few bits that its product with an exponent is exact (Cody & Waite 1980).
const LN_2: [f64; 2] = [0.693_147_180_369_123_8, 1.908_214_929_270_587_7e-10];
/// 1/k! from k = 13 down.
const SERIES: [f64; 14] = [
    1.0 / 6_227_020_800.0,
    1.0 / 479_001_600.0,
    1.0 / 39_916_800.0,
    1.0 / 3_628_800.0,
    1.0 / 362_880.0,
    1.0 / 40_320.0,
    1.0 / 5_040.0,
    1.0 / 720.0,
    1.0 / 120.0,
    1.0 / 24.0,
    1.0 / 6.0,
    0.5,
    1.0,
    1.0,
];

/// Replaces each x by e^x, to within 4 ε of it; x is taken into [−708, 709] first. NaN stays NaN.
pub fn exp_all(values: &mut [f64]) {
    wide::execute(Exponentials(values));
}

struct Exponentials<'v>(&'v mut [f64]);

impl Loops for Exponentials<'_> {
    #[inline(always)]
    fn run(self) {
        for value in self.0 {
            exp(value);
        }
    }
}

#[inline(always)]
fn exp(value: &mut f64) {
    let x = value.clamp(-708.0, 709.0);
    let rounded = x * std::f64::consts::LOG2_E + ROUNDER;
    let whole = rounded - ROUNDER;
    let rest = (x - whole * LN_2[0]) - whole * LN_2[1];
    let power = f64::from_bits(rounded.to_bits().wrapping_add(1023) << 52);
    *value = power * SERIES.iter().fold(0.0, |sum, c| sum * rest + c);
}

/// ln x to within 0.07, for x > 0: the exponent, and the fraction taken for its own logarithm.
#[inline(always)]
pub fn ln_roughly(x: f64) -> f64 {
    let bits = x.to_bits() as f64 / (1u64 << 52) as f64;
    (bits - 1023.0) * std::f64::consts::LN_2
}

#[cfg(test)]
mod tests {
    use super::{exp_all, ln_roughly};
    use crate::num::elementary;
    use crate::num::random::Source;

    #[test]
    fn close_to_the_correctly_rounded_functions() {
        let mut source = Source::new(3);
        for _ in 0..20_000 {
            let x = source.between(-700.0, 700.0);
            let mut found = [x];
            exp_all(&mut found);
            let exact = elementary::exp(x);
            assert!((found[0] / exact - 1.0).abs() <= 4.0 * f64::EPSILON, "e^{x} = {exact}, not {}", found[0]);
            assert!((ln_roughly(exact) - x).abs() < 0.07, "ln {exact}");
        }
        let mut edges = [0.0, f64::NEG_INFINITY, f64::INFINITY, f64::NAN];
        exp_all(&mut edges);
        assert!(edges[0] == 1.0 && edges[1] > 0.0 && edges[1] < 1e-307 && edges[2] > 1e307 && edges[3].is_nan());
    }
}
