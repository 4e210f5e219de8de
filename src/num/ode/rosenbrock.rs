//! The stiffly accurate Rosenbrock pair of orders 4 and 3 of Hairer & Wanner (1996, IV.7), L-stable, with continuous
//! output of order 3.
//!
//! One matrix a step, (1/(hγ)) I − J, serves six stages. J is to be the exact derivative.

use super::{Flow, Tolerance, error_norm};
use crate::num::dense::inverse;

/// How many stages a step has.
pub const STAGES: usize = 6;

/// γ, the diagonal of the method.
pub const GAMMA: f64 = 0.25;

/// Row i: weights of the earlier stages in the argument of stage i + 1; the sixth adds the fifth with weight 1.
pub const A: [&[f64]; 4] = [
    &[1.544],
    &[0.946_678_528_081_582_6, 0.255_701_169_898_328_4],
    &[3.314_825_187_068_521, 2.896_124_015_972_201, 0.998_641_913_997_781_7],
    &[1.221_224_509_226_641, 6.019_134_481_288_629, 12.537_083_329_320_87, -0.687_886_036_105_895],
];

/// Row i: weights of the earlier stages over h beside the rates of stage i + 1.
pub const C: [&[f64]; 5] = [
    &[-5.6688],
    &[-2.430_093_356_833_875, -0.206_359_915_709_191_5],
    &[-0.107_352_905_815_137_5, -9.594_562_251_023_355, -20.470_286_148_096_16],
    &[7.496_443_313_967_647, -10.246_804_314_643_52, -33.999_903_528_199_05, 11.708_908_932_061_6],
    &[
        8.083_246_795_921_522,
        -7.981_132_988_064_893,
        -31.521_594_328_743_71,
        16.319_305_431_231_36,
        -6.058_818_238_834_054,
    ],
];

/// Weights of the terms of degree 2 and 3 in the continuous output.
pub const D: [[f64; 5]; 2] = [
    [
        10.126_235_083_445_86,
        -7.487_995_877_610_167,
        -34.800_918_615_557_47,
        -7.992_771_707_568_823,
        1.025_137_723_295_662,
    ],
    [
        -0.676_280_339_280_125_3,
        6.087_714_651_680_015,
        16.430_843_208_924_78,
        24.767_225_114_183_86,
        -6.594_389_125_716_872,
    ],
];

/// Memory of one step.
#[derive(Clone, Debug)]
pub struct Stages {
    /// The stages.
    pub u: [Vec<f64>; STAGES],
    /// The state at the step's end.
    pub end: Vec<f64>,
    rates: Vec<f64>,
    right: Vec<f64>,
    slopes: Vec<f64>,
}

impl Stages {
    /// For n coordinates.
    pub fn new(n: usize) -> Self {
        let zero = || vec![0.0; n];
        let u = std::array::from_fn(|_| zero());
        Self { u, end: zero(), rates: zero(), right: zero(), slopes: vec![0.0; n * n] }
    }
}

/// Tries a step of length `h` from `y`; the norm of its error. `None` where rates or slopes are not defined, or the matrix
/// has no inverse.
pub fn attempt(flow: &mut dyn Flow, y: &[f64], h: f64, tolerance: &[Tolerance], stages: &mut Stages) -> Option<f64> {
    let n = y.len();
    if !flow.slopes(y, &mut stages.slopes) {
        return None;
    }
    stages.slopes.iter_mut().for_each(|slope| *slope = -*slope);
    (0..n).for_each(|i| stages.slopes[i * n + i] += 1.0 / (h * GAMMA));
    let inverse = inverse(&stages.slopes, n)?;
    stages.end.copy_from_slice(y);
    for stage in 0..STAGES {
        match stage {
            0 => {}
            1..=4 => {
                for (i, (end, y)) in stages.end.iter_mut().zip(y).enumerate() {
                    *end = y + weighted(A[stage - 1], &stages.u, i);
                }
            }
            _ => add(&mut stages.end, &stages.u[4]),
        }
        if !flow.rates(&stages.end, &mut stages.rates) {
            return None;
        }
        for i in 0..n {
            let earlier = if stage == 0 { 0.0 } else { weighted(C[stage - 1], &stages.u, i) };
            stages.right[i] = stages.rates[i] + earlier / h;
        }
        for (row, out) in inverse.chunks_exact(n).zip(&mut stages.u[stage]) {
            *out = row.iter().zip(&stages.right).map(|(a, b)| a * b).sum();
        }
    }
    add(&mut stages.end, &stages.u[5]);
    Some(error_norm(&stages.u[5], y, &stages.end, tolerance))
}

/// The continuous output of a step that was kept, as [`super::stepper::Dense`] takes it.
pub fn interpolate(y: &[f64], stages: &Stages, out: &mut [Vec<f64>; 5]) {
    for i in 0..y.len() {
        out[0][i] = y[i];
        out[1][i] = stages.end[i] - y[i];
        out[2][i] = weighted(&D[0], &stages.u, i);
        out[3][i] = weighted(&D[1], &stages.u, i);
        out[4][i] = 0.0;
    }
}

fn weighted(weights: &[f64], u: &[Vec<f64>; STAGES], i: usize) -> f64 {
    weights.iter().zip(u).map(|(w, u)| w * u[i]).sum()
}

fn add(y: &mut [f64], u: &[f64]) {
    y.iter_mut().zip(u).for_each(|(y, u)| *y += u);
}
