//! Scales and normalisations of a defining system at a point, and where its own unknowns start.
//!
//! Abundances, controls and rows have sizes ([`Sizes`]); vectors over species are measured in those of the species, so that
//! units make no difference. A frame is made anew for every point of a curve.

use super::kernel::{kernel, pairs};
use super::newton::Linear;
use super::{Defining, Shape};

/// How large things are at a point, in their units.
#[derive(Clone, Debug, PartialEq)]
pub(in crate::analysis::response) struct Sizes {
    /// Abundances of those who move.
    pub(in crate::analysis::response) moving: Vec<f64>,
    /// Every control.
    pub(in crate::analysis::response) controls: Vec<f64>,
    /// The species that the matrix is over.
    pub(in crate::analysis::response) vector: Vec<f64>,
}

/// Scales of all unknowns, and linear rows that normalise vectors.
#[derive(Clone, Debug)]
pub(in crate::analysis::response) struct Frame {
    pub(in crate::analysis::response) scale: Vec<f64>,
    pub(in crate::analysis::response) linear: Vec<Linear>,
}

impl Defining {
    /// Unknowns beside those of the system itself: abundances and controls.
    pub(in crate::analysis::response) fn free(&self) -> usize {
        self.counts[0] + self.counts[1]
    }

    /// Its matrix at abundances and controls, in its own units; `None` where it has no value.
    pub(in crate::analysis::response) fn matrix_at(&self, values: &[f64], free: &[f64]) -> Option<Vec<f64>> {
        let mut run = self.matrix.start(values);
        let is_defined = run.at(free).defined;
        let entries: Vec<f64> = run.outputs().copied().collect();
        (is_defined && entries.iter().all(|x| x.is_finite())).then_some(entries)
    }

    /// Full sets of unknowns to start from at abundances and controls: one, or one for each complex pair, the nearest to the
    /// border first.
    pub(in crate::analysis::response) fn starts(&self, values: &[f64], free: &[f64], sizes: &Sizes) -> Vec<Vec<f64>> {
        let n = self.order;
        if self.shape == Shape::Plain {
            return vec![free.to_vec()];
        }
        let Some(matrix) = self.matrix_at(values, free) else { return Vec::new() };
        let whole = |own: &[f64]| free.iter().chain(own).copied().collect::<Vec<f64>>();
        let size = &sizes.vector;
        if self.shape == Shape::Pair {
            let alike: Vec<f64> = (0..n * n).map(|k| matrix[k] * size[k % n] / size[k / n]).collect();
            let start = |pair: super::kernel::Pair| {
                let vector: Vec<f64> = pair.vector.iter().zip(size).map(|(v, size)| v * size).collect();
                let image = times(&matrix, &vector);
                let own = if self.is_map { pair.value.re / pair.value.norm() } else { pair.value.norm_sqr() };
                whole(&[&vector[..], &image[..], &[own]].concat())
            };
            return pairs(&alike, n, self.is_map).into_iter().map(start).collect();
        }
        let rows = row_sizes(&matrix, size);
        let scaled: Vec<f64> = (0..n * n).map(|k| matrix[k] * size[k % n] / rows[k / n]).collect();
        let Some([right, left]) = kernel(&scaled, n) else { return Vec::new() };
        let right: Vec<f64> = right.iter().zip(size).map(|(v, size)| v * size).collect();
        let left: Vec<f64> = left.iter().zip(&rows).map(|(v, rows)| v / rows).collect();
        vec![match self.shape {
            Shape::Crossing => whole(&[&left[..], &[0.0]].concat()),
            Shape::Cusp => whole(&[&right[..], &left[..], &[0.0]].concat()),
            _ => whole(&right),
        }]
    }

    /// The frame at a set of unknowns, whose vectors are brought to length 1 in it.
    pub(in crate::analysis::response) fn frame(&self, values: &[f64], at: &mut [f64], sizes: &Sizes) -> Option<Frame> {
        let (n, free) = (self.order, self.free());
        let mut scale: Vec<f64> = sizes.moving.iter().chain(&sizes.controls).copied().collect();
        let mut linear = Vec::new();
        let total = at.len();
        let row = |from: usize, vector: &[f64], value: f64| {
            let mut row = vec![0.0; total];
            row[from..from + vector.len()].copy_from_slice(vector);
            Linear { row, value }
        };
        match self.shape {
            Shape::Plain => {}
            Shape::Kernel => {
                let [right] = scaled_parts(&at[free..], [&sizes.vector]);
                shrink(&mut at[free..], length(&right))?;
                linear.push(row(free, &unit(&right)?, 1.0));
                scale.extend(&sizes.vector);
            }
            Shape::Pair => {
                let [v, w] = scaled_parts(&at[free..], [&sizes.vector, &sizes.vector]);
                let size = length(&v);
                shrink(&mut at[free..free + 2 * n], size)?;
                let v = unit(&v)?;
                let along: f64 = v.iter().zip(&w).map(|(v, w)| v * w).sum();
                let rest: Vec<f64> = v.iter().zip(&w).map(|(v, w)| w - along * v).collect();
                let rate = if self.is_map { 1.0 } else { length(&w) / size };
                linear.push(row(free, &v, 1.0));
                linear.push(row(free, &unit(&rest)?, 0.0));
                scale.extend(&sizes.vector);
                scale.extend(sizes.vector.iter().map(|size| size * rate));
                scale.push(rate * rate);
            }
            Shape::Crossing | Shape::Cusp => {
                let matrix = self.matrix_at(values, &at[..free])?;
                let inverse: Vec<f64> = row_sizes(&matrix, &sizes.vector).iter().map(|size| 1.0 / size).collect();
                let mut left = free;
                if self.shape == Shape::Cusp {
                    let [right] = scaled_parts(&at[free..], [&sizes.vector]);
                    shrink(&mut at[free..free + n], length(&right))?;
                    linear.push(row(free, &unit(&right)?, 1.0));
                    scale.extend(&sizes.vector);
                    left = free + n;
                }
                let [psi] = scaled_parts(&at[left..], [&inverse]);
                shrink(&mut at[left..left + n], length(&psi))?;
                linear.push(row(left, &unit(&psi)?, 1.0));
                scale.extend(&inverse);
                // β times a left vector is a row's size, g times a right one what a row adds per unit of a species.
                let beside = if self.shape == Shape::Cusp { &at[free..free + n] } else { &at[left..left + n] };
                scale.push(1.0 / beside.iter().map(|x| x * x).sum::<f64>());
            }
        }
        scale.iter().all(|x| x.is_finite() && *x > 0.0).then_some(Frame { scale, linear })
    }
}

/// M v
pub(in crate::analysis::response) fn times(matrix: &[f64], vector: &[f64]) -> Vec<f64> {
    let sum = |row: &[f64]| row.iter().zip(vector).map(|(a, b)| a * b).sum();
    matrix.chunks_exact(vector.len().max(1)).map(sum).collect()
}

/// The largest that an entry of each row of a matrix adds for a change of each species by its size; 1 where all are 0.
pub(in crate::analysis::response) fn row_sizes(matrix: &[f64], size: &[f64]) -> Vec<f64> {
    let largest = |row: &[f64]| {
        let most = row.iter().zip(size).fold(0.0f64, |most, (x, size)| most.max((x * size).abs()));
        if most > 0.0 { most } else { 1.0 }
    };
    matrix.chunks_exact(size.len().max(1)).map(largest).collect()
}

/// Consecutive parts of unknowns, each in its sizes.
fn scaled_parts<const N: usize>(own: &[f64], sizes: [&[f64]; N]) -> [Vec<f64>; N] {
    let mut rest = own;
    sizes.map(|size| {
        let (part, after) = rest.split_at(size.len());
        rest = after;
        part.iter().zip(size).map(|(x, size)| x / size).collect()
    })
}

fn length(vector: &[f64]) -> f64 {
    vector.iter().map(|x| x * x).sum::<f64>().sqrt()
}

fn unit(vector: &[f64]) -> Option<Vec<f64>> {
    let length = length(vector);
    (length.is_finite() && length > 0.0).then(|| vector.iter().map(|x| x / length).collect())
}

fn shrink(vector: &mut [f64], length: f64) -> Option<()> {
    for x in vector {
        *x /= length;
    }
    (length.is_finite() && length > 0.0).then_some(())
}
