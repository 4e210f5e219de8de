//! The standard normal distribution: shares below a value, and the value that a share lies below.
//!
//! Far out a share is smaller than any f64; there [`ln_share`] and [`of_ln_share`] work with its logarithm.

use std::f64::consts::{LN_2, SQRT_2};

use super::elementary::{exp, ln};

/// ln √(2π).
const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;
/// Below this the share is worked out by a continued fraction.
const FAR: f64 = -1.5;
const SERIES: u32 = 100;
const NEWTON: usize = 60;

/// The density at z.
#[must_use]
pub fn density(z: f64) -> f64 {
    exp(-0.5 * z * z - LN_ROOT_TWO_PI)
}

/// The share at or below z, relative error about 1e-15 also where it is tiny; 0 from z = −39 down.
///
/// Beyond ±1.5 by the continued fraction of Laplace (1805), else by the series of Marsaglia (2004).
#[must_use]
pub fn share(z: f64) -> f64 {
    if z < FAR {
        return density(z) / fraction(-z);
    }
    if z > -FAR {
        return 1.0 - density(z) / fraction(z);
    }
    0.5 + density(z) * marsaglia(z)
}

/// The logarithm of the share at or below z: of use where the share itself would be 0. Not for z near +∞, where it is 0.
#[must_use]
pub fn ln_share(z: f64) -> f64 {
    if z < FAR { -0.5 * z * z - LN_ROOT_TWO_PI - ln(fraction(-z)) } else { ln(share(z)) }
}

/// The value below which a share lies, 0 < share < 1: AS 241, PPND16 (Wichura 1988), relative error about 1e-16.
///
/// −∞ for 0, +∞ for 1, NaN outside.
#[inline]
#[must_use]
pub fn quantile(share: f64) -> f64 {
    let q = share - 0.5;
    if q.abs() <= 0.425 {
        let r = 0.180_625 - q * q;
        return q * polynomial(&CENTRE[0], r) / polynomial(&CENTRE[1], r);
    }
    let tail = if q < 0.0 { share } else { 1.0 - share };
    if tail <= 0.0 {
        return if tail < 0.0 { f64::NAN } else { q.signum() * f64::INFINITY };
    }
    let r = (-ln(tail)).sqrt();
    let size = out(r);
    if q < 0.0 { -size } else { size }
}

/// The value z ≤ 0 below which a share of that logarithm lies; for logarithms up to ln ½.
///
/// From AS 241, far out from its first term, by Newton's method on the logarithm, which is concave: it converges from any
/// start, and its steps are bounded. +0 for more than ln ½.
#[must_use]
pub fn of_ln_share(logarithm: f64) -> f64 {
    if logarithm >= -LN_2 {
        return 0.0;
    }
    let r = (-logarithm).sqrt();
    let mut z = if r < 27.0 { -out(r) } else { -SQRT_2 * r };
    for _ in 0..NEWTON {
        // The slope of the logarithm, density over share.
        let slope = if z < FAR { fraction(-z) } else { density(z) / share(z) };
        let step = (ln_share(z) - logarithm) / slope;
        z -= step;
        if step.abs() <= 1e-15 * z.abs() {
            break;
        }
    }
    z.min(0.0)
}

/// density(z)/(share above z) for z > 0: z + 1/(z + 2/(z + 3/(z + …))).
///
/// n terms leave about e^(−2 z √n) of it where z is small, much less where it is not: always less than 1e-17.
#[expect(clippy::cast_sign_loss, reason = "a square is not negative")]
fn fraction(z: f64) -> f64 {
    let terms = 24 + (400.0 / (z * z)) as u32;
    (1..=terms).rev().fold(z, |below, k| z + f64::from(k) / below)
}

/// (share − ½)/density: z + z³/3 + z⁵/(3·5) + …, all of one sign.
fn marsaglia(z: f64) -> f64 {
    let (mut term, mut sum) = (z, z);
    for k in 1..SERIES {
        term *= z * z / f64::from(2 * k + 1);
        sum += term;
        if term.abs() <= 1e-17 * sum.abs() {
            break;
        }
    }
    sum
}

/// |z| where −ln(tail) is r², r from about 1.6 to 27.
fn out(r: f64) -> f64 {
    let ([over, under], r) = if r <= 5.0 { (&MIDDLE, r - 1.6) } else { (&TAIL, r - 5.0) };
    polynomial(over, r) / polynomial(under, r)
}

#[inline]
fn polynomial(coefficients: &[f64; 8], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
}

/// Numerators and denominators of AS 241.
#[expect(clippy::excessive_precision, reason = "digits as published")]
const CENTRE: [[f64; 8]; 2] = [
    [
        3.387_132_872_796_366_608,
        1.331_416_678_917_843_774_5e2,
        1.971_590_950_306_551_442_7e3,
        1.373_169_376_550_946_112_5e4,
        4.592_195_393_154_987_145_7e4,
        6.726_577_092_700_870_085_3e4,
        3.343_057_558_358_812_810_5e4,
        2.509_080_928_730_122_672_7e3,
    ],
    [
        1.0,
        4.231_333_070_160_091_125_2e1,
        6.871_870_074_920_579_083e2,
        5.394_196_021_424_751_107_7e3,
        2.121_379_430_158_659_586_7e4,
        3.930_789_580_009_271_061e4,
        2.872_908_573_572_194_267_4e4,
        5.226_495_278_852_854_561e3,
    ],
];
#[expect(clippy::excessive_precision, reason = "digits as published")]
const MIDDLE: [[f64; 8]; 2] = [
    [
        1.423_437_110_749_683_577_34,
        4.630_337_846_156_545_295_9,
        5.769_497_221_460_691_405_5,
        3.647_848_324_763_204_605_04,
        1.270_458_252_452_368_382_58,
        2.417_807_251_774_506_117_7e-1,
        2.272_384_498_926_918_458_33e-2,
        7.745_450_142_783_414_076_4e-4,
    ],
    [
        1.0,
        2.053_191_626_637_758_821_87,
        1.676_384_830_183_803_849_4,
        6.897_673_349_851_000_045_5e-1,
        1.481_039_764_274_800_745_9e-1,
        1.519_866_656_361_645_719_66e-2,
        5.475_938_084_995_344_946e-4,
        1.050_750_071_644_416_843_24e-9,
    ],
];
#[expect(clippy::excessive_precision, reason = "digits as published")]
const TAIL: [[f64; 8]; 2] = [
    [
        6.657_904_643_501_103_777_2,
        5.463_784_911_164_114_369_9,
        1.784_826_539_917_291_335_8,
        2.965_605_718_285_048_912_3e-1,
        2.653_218_952_657_612_309_3e-2,
        1.242_660_947_388_078_438_6e-3,
        2.711_555_568_743_487_578_15e-5,
        2.010_334_399_292_288_132_65e-7,
    ],
    [
        1.0,
        5.998_322_065_558_879_376_9e-1,
        1.369_298_809_227_358_053_1e-1,
        1.487_536_129_085_061_485_25e-2,
        7.868_691_311_456_132_591e-4,
        1.846_318_317_510_054_681_8e-5,
        1.421_511_758_316_445_888_7e-7,
        2.044_263_103_389_939_785_64e-15,
    ],
];
