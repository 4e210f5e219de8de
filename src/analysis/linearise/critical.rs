//! Which eigenvalues are taken for critical: by proof where there is one, else by how much they may be off.

use nalgebra::Complex;

use super::place::{Border, Side};
use super::proof::Proof;
use crate::num::eigen::Spectrum;
use crate::num::interval::Interval;

/// The backward error of computed eigenvalues, in units of the last place of the balanced matrix's largest entry, for
/// each row: several times what orthogonal iterations show (Higham 2002, ch. 19 and 21, speaks of a modest multiple).
const BACKWARD: f64 = 4.0;

/// Rounds of balancing; each brings rows and columns nearer to one size.
const BALANCINGS: usize = 4;

/// What an eigenvalue may be off by, to first order: |w|ᵀ E |v| / |wᴴ v| with E what the entries may be off and the backward
/// error (Wilkinson 1965, ch. 2). Independent of the units of the species.
///
/// A defective eigenvalue has no such bound; none is taken larger than the square root that a double one has.
pub(super) fn errors(numbers: &[f64], enclosure: &[Interval], spectrum: &Spectrum) -> Vec<f64> {
    let n = spectrum.values.len();
    // Of the model as written, of which the numbers need not be the middle.
    let radius = |k: usize| enclosure.get(k).map_or(0.0, |&entry| (entry - Interval::point(numbers[k])).mag());
    let scale = balanced(numbers, n);
    let rounding = Rounding::new(numbers, &scale);
    let uncertain = (0..n * n).map(|k| radius(k) * scale[k % n] / scale[k / n]).fold(0.0, f64::max);
    let most = rounding.most(uncertain);
    let error = |k: usize| {
        let Some(vectors) = &spectrum.vectors else { return most };
        let size = |of: &[Complex<f64>], i: usize| modulus(of[i * n + k]);
        // Rounding is of rank one, so its part of the double sum is a product of two.
        let left: f64 = (0..n).map(|i| size(&vectors.left, i) * scale[i]).sum();
        let right: f64 = (0..n).map(|j| size(&vectors.right, j) / scale[j]).sum();
        let through = |i: usize| -> f64 { (0..n).map(|j| radius(i * n + j) * size(&vectors.right, j)).sum() };
        let spread: f64 =
            if enclosure.is_empty() { 0.0 } else { (0..n).map(|i| size(&vectors.left, i) * through(i)).sum() };
        let bound = vectors.condition[k] * (spread + rounding.share * rounding.largest * (left * right));
        // An infinite condition may have met a sum of 0.
        if bound.is_nan() { most } else { bound.min(most) }
    };
    (0..n).map(error).collect()
}

/// What rounding does to a balanced matrix.
pub(super) struct Rounding {
    n: usize,
    /// The largest entry.
    pub(super) largest: f64,
    /// Of it, what all entries together may be off.
    pub(super) share: f64,
}

impl Rounding {
    pub(super) fn new(numbers: &[f64], scale: &[f64]) -> Self {
        let n = scale.len();
        let size = |k: usize| numbers[k].abs() * scale[k % n] / scale[k / n];
        Self { n, largest: (0..n * n).map(size).fold(0.0, f64::max), share: BACKWARD * n as f64 * f64::EPSILON }
    }

    /// What no eigenvalue is taken to be off by more than: the square root that a double one has, for entries that are
    /// `uncertain` besides.
    pub(super) fn most(&self, uncertain: f64) -> f64 {
        // The roots apart, for their product may overflow.
        (self.n as f64 * (self.share * self.largest + uncertain)).sqrt() * self.largest.sqrt()
    }
}

/// |z|, the slow way only where squares may be too small.
fn modulus(z: Complex<f64>) -> f64 {
    let square = z.norm_sqr();
    if square > 1e-280 { square.sqrt() } else { z.norm() }
}

/// Sizes of the species by which rows and columns come to like norms (Parlett & Reinsch 1969), powers of two.
pub(super) fn balanced(numbers: &[f64], n: usize) -> Vec<f64> {
    let mut scale = vec![1.0f64; n];
    for _ in 0..BALANCINGS {
        for i in 0..n {
            let others = (0..n).filter(|&j| j != i);
            let [row, column] = others.fold([0.0f64; 2], |[row, column], j| {
                let [to, from] = [numbers[i * n + j], numbers[j * n + i]];
                [row.max(to.abs() * scale[j]), column.max(from.abs() / scale[j])]
            });
            if row > 0.0 && column > 0.0 {
                // row/s = column·s for the new size s.
                scale[i] = (row.log2() / 2.0 - column.log2() / 2.0).round().clamp(-500.0, 500.0).exp2();
            }
        }
    }
    scale
}

/// How far above the border an eigenvalue lies.
pub(super) fn excess(value: Complex<f64>, border: Border) -> f64 {
    match border {
        Border::Axis => value.re,
        Border::Circle => value.norm() - 1.0,
    }
}

/// The side of each eigenvalue, in the order of the spectrum: leading ones first.
///
/// A proof says how many lie above and below; those are the first and the last. Of the others as many as are proved to be
/// critical are those nearest to the border; the rest are critical where their distance is within their error.
pub(super) fn sides(spectrum: &Spectrum, errors: &[f64], proof: &Proof, border: Border) -> Vec<Side> {
    let n = spectrum.values.len();
    let excess: Vec<f64> = spectrum.values.iter().map(|&value| excess(value, border)).collect();
    let mut sides = vec![Side::Unknown; n];
    sides[..proof.above].fill(Side::Above);
    sides[n - proof.below..].fill(Side::Below);
    let mut open: Vec<usize> = (0..n).filter(|&k| sides[k] == Side::Unknown).collect();
    open.sort_by(|&a, &b| excess[a].abs().total_cmp(&excess[b].abs()));
    for (place, k) in open.into_iter().enumerate() {
        sides[k] = if place < proof.critical || excess[k].abs() <= errors[k] {
            Side::Critical
        } else if excess[k] > 0.0 {
            Side::Above
        } else {
            Side::Below
        };
    }
    sides
}
