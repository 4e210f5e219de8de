//! The explicit pair of orders 5 and 4 of Dormand & Prince (1980), with continuous output of order 4.
//!
//! [`attempt`] tries one step; whether it is kept, and how long the next one is, [`super::stepper`] decides.

use super::{Flow, Tolerance, error_norm};

/// How many evaluations a step uses; the last is the first of the next step.
pub const STAGES: usize = 7;

/// Row i: weights of the rates before it in the argument of stage i + 1. The last row is the solution of order 5.
pub const A: [&[f64]; 6] = [
    &[1.0 / 5.0],
    &[3.0 / 40.0, 9.0 / 40.0],
    &[44.0 / 45.0, -56.0 / 15.0, 32.0 / 9.0],
    &[19372.0 / 6561.0, -25360.0 / 2187.0, 64448.0 / 6561.0, -212.0 / 729.0],
    &[9017.0 / 3168.0, -355.0 / 33.0, 46732.0 / 5247.0, 49.0 / 176.0, -5103.0 / 18656.0],
    &[35.0 / 384.0, 0.0, 500.0 / 1113.0, 125.0 / 192.0, -2187.0 / 6784.0, 11.0 / 84.0],
];

/// Weights of the error: those of order 5 less those of order 4.
pub const E: [f64; STAGES] =
    [71.0 / 57600.0, 0.0, -71.0 / 16695.0, 71.0 / 1920.0, -17253.0 / 339_200.0, 22.0 / 525.0, -1.0 / 40.0];

/// Weights of the term of degree 4 in the continuous output (Hairer, Nørsett & Wanner 1993, II.6).
pub const D: [f64; STAGES] = [
    -12_715_105_075.0 / 11_282_082_432.0,
    0.0,
    87_487_479_700.0 / 32_700_410_799.0,
    -10_690_763_975.0 / 1_880_347_072.0,
    701_980_252_875.0 / 199_316_789_632.0,
    -1_453_857_185.0 / 822_651_844.0,
    69_997_945.0 / 29_380_423.0,
];

/// Memory of one step.
#[derive(Clone, Debug)]
pub struct Stages {
    /// Rates at each stage, those of the step's start first.
    pub k: [Vec<f64>; STAGES],
    /// The state at the step's end.
    pub end: Vec<f64>,
    /// The argument of the last stage but one, which stands at the same time as the end.
    twin: Vec<f64>,
    error: Vec<f64>,
}

impl Stages {
    /// For n coordinates.
    pub fn new(n: usize) -> Self {
        let zero = || vec![0.0; n];
        Self { k: std::array::from_fn(|_| zero()), end: zero(), twin: zero(), error: zero() }
    }
}

/// What a trial step says of itself.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Trial {
    /// Norm of the error over the tolerance.
    pub error: f64,
    /// h times an estimate of the fastest rate of decay; above about 3.3 the step is held up by stability (Hairer & Wanner
    /// 1996, IV.2).
    pub stiffness: f64,
}

/// Tries a step of length `h` from `y`, `stages.k[0]` being the rates there. `None` where the rates are not defined.
pub fn attempt(flow: &mut dyn Flow, y: &[f64], h: f64, tolerance: &[Tolerance], stages: &mut Stages) -> Option<Trial> {
    for (stage, weights) in A.iter().enumerate() {
        combine(y, h, weights, &stages.k, &mut stages.end);
        if stage == 4 {
            stages.twin.copy_from_slice(&stages.end);
        }
        if !flow.rates(&stages.end, &mut stages.k[stage + 1]) {
            return None;
        }
    }
    for (i, error) in stages.error.iter_mut().enumerate() {
        *error = h * E.iter().zip(&stages.k).map(|(e, k)| e * k[i]).sum::<f64>();
    }
    let error = error_norm(&stages.error, y, &stages.end, tolerance);
    Some(Trial { error, stiffness: h.abs() * steepness(stages) })
}

/// ‖f(y₇) − f(y₆)‖/‖y₇ − y₆‖ of two states at the same time.
fn steepness(stages: &Stages) -> f64 {
    let square = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| (a - b).powi(2)).sum::<f64>();
    let apart = square(&stages.end, &stages.twin);
    if apart > 0.0 { (square(&stages.k[6], &stages.k[5]) / apart).sqrt() } else { 0.0 }
}

fn combine(y: &[f64], h: f64, weights: &[f64], k: &[Vec<f64>; STAGES], out: &mut [f64]) {
    for (i, out) in out.iter_mut().enumerate() {
        *out = y[i] + h * weights.iter().zip(k).map(|(a, k)| a * k[i]).sum::<f64>();
    }
}

/// The continuous output of a step that was kept, as [`super::stepper::Dense`] takes it.
pub fn interpolate(y: &[f64], h: f64, stages: &Stages, out: &mut [Vec<f64>; 5]) {
    for i in 0..y.len() {
        let rise = stages.end[i] - y[i];
        let bend = h * stages.k[0][i] - rise;
        out[0][i] = y[i];
        out[1][i] = rise;
        out[2][i] = bend;
        out[3][i] = rise - h * stages.k[6][i] - bend;
        out[4][i] = h * D.iter().zip(&stages.k).map(|(d, k)| d * k[i]).sum::<f64>();
    }
}
