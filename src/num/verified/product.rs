//! Bounds on all that rounding can have done to the rows of products of matrices in ordinary arithmetic.
//!
//! A computed sum of n products differs from the exact one by at most γ_n = n u/(1 − n u) times the sum of their moduli,
//! in whatever order it is added (Higham 2002, §3.1), but for underflow. Row sums of moduli of products need no product of
//! matrices, only of matrices and vectors.

use crate::num::interval::Interval;

/// A matrix between bounds as middle and radius, row by row.
pub(super) struct Ball {
    pub(super) middle: Vec<f64>,
    pub(super) radius: Vec<f64>,
}

impl Ball {
    pub(super) fn new(entries: &[Interval]) -> Self {
        Self {
            middle: entries.iter().map(|entry| entry.mid()).collect(),
            radius: entries.iter().map(|entry| entry.radius()).collect(),
        }
    }

    /// All entries times a power of two; `None` where one overflows, or is rounded because it is subnormal.
    pub(super) fn times_power_of_two(&self, unit: f64) -> Option<Self> {
        let exact = |x: f64| (x * unit / unit == x && (x * unit).is_finite()).then_some(x * unit);
        let all = |entries: &[f64]| entries.iter().map(|&x| exact(x)).collect::<Option<Vec<f64>>>();
        Some(Self { middle: all(&self.middle)?, radius: all(&self.radius)? })
    }
}

/// A bound on γ for sums of `terms` products, with room for the rounding of the bound itself.
pub(super) fn gamma(terms: usize) -> f64 {
    (terms + 4) as f64 * f64::EPSILON
}

/// A factor that covers the rounding of a sum of `terms` numbers that are not negative, several times over.
pub(super) fn inflate(terms: usize) -> f64 {
    1.0 + 4.0 * (terms + 8) as f64 * f64::EPSILON
}

/// What underflow may take from a sum of `terms` products, all factors being at most 1e50.
pub(super) fn underflow(terms: usize) -> f64 {
    (terms + 1) as f64 * f64::MIN_POSITIVE
}

/// |A| x for x ≥ 0, rounded up.
pub(super) fn moduli_times(a: &[f64], x: &[f64]) -> Vec<f64> {
    let n = x.len();
    let sum = |row: &[f64]| row.iter().zip(x).map(|(a, x)| a.abs() * x).sum::<f64>() * inflate(n) + underflow(n);
    a.chunks_exact(n).map(sum).collect()
}
