//! What is proved of the eigenvalues of every matrix between bounds: on which side of the imaginary axis or of the unit
//! circle how many lie, and in which discs.
//!
//! [`half_plane`], [`unit_circle`] and [`discs()`] are the ways in. The matrix is divided along entries that are exactly 0;
//! a block of order one to three is judged by its characteristic polynomial (`small`), any block by discs around approximate
//! eigenvalues, and what is defective or nearly so by the inertia of a quadratic form (`inertia`). Nothing here says
//! "critical": a proof that an eigenvalue lies *on* the border cannot come from bounds.

mod discs;
mod inertia;
mod product;
mod small;

use std::ops::Add;

use nalgebra::Complex;

use super::dense::block;
use super::eigen::strongly_connected;
use super::interval::Interval;
pub use discs::Disc;

/// How many eigenvalues of every matrix are proved on each side of a border, counted with multiplicity.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counts {
    /// Left of the imaginary axis, or inside the unit circle.
    pub below: usize,
    /// Right of the axis, or outside the circle.
    pub above: usize,
}

impl Add for Counts {
    type Output = Self;

    fn add(self, other: Self) -> Self {
        Self { below: self.below + other.below, above: self.above + other.above }
    }
}

/// Which border divides eigenvalues that attract from those that repel.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Border {
    /// The imaginary axis, for rates of change; the leading eigenvalue has the largest real part.
    Axis,
    /// The unit circle, for maps; the leading eigenvalue has the largest modulus.
    Circle,
}

impl Border {
    /// Bounds of what orders eigenvalues: of the real part, or of the modulus, over a disc.
    fn rank(self, disc: &Disc) -> Interval {
        match self {
            Self::Axis => Interval::point(disc.centre.re) + disc.reach(),
            Self::Circle => (modulus(disc.centre) + disc.reach()).intersect(Interval::NONNEGATIVE),
        }
    }

    /// Where the border is, in the same measure.
    fn level(self) -> f64 {
        match self {
            Self::Axis => 0.0,
            Self::Circle => 1.0,
        }
    }
}

fn modulus(z: Complex<f64>) -> Interval {
    let square = |x: f64| Interval::point(x) * Interval::point(x);
    (square(z.re) + square(z.im)).sqrt(&mut true)
}

/// Eigenvalues of every matrix of order `n` in `matrix` (row by row), left and right of the imaginary axis; `None` where an
/// entry is empty or unbounded.
///
/// All is decided where the two add up to n. Costs some n³; orders above a hundred take long.
///
/// # Panics
/// If there are not n² entries.
pub fn half_plane(matrix: &[Interval], n: usize) -> Option<Counts> {
    counts(matrix, n, Border::Axis)
}

/// As [`half_plane`], inside and outside the unit circle.
///
/// # Panics
/// If there are not n² entries.
pub fn unit_circle(matrix: &[Interval], n: usize) -> Option<Counts> {
    counts(matrix, n, Border::Circle)
}

fn counts(matrix: &[Interval], n: usize, border: Border) -> Option<Counts> {
    let blocks = blocks(matrix, n)?;
    Some(blocks.iter().map(|block| of_block(block, border)).fold(Counts::default(), Add::add))
}

/// By the cheapest method that decides all; else what the discs say.
fn of_block(block: &Block, border: Border) -> Counts {
    if let Some(counts) = small::counts(&block.entries, border) {
        return counts;
    }
    let counts = discs::of(block).map_or_else(Counts::default, |discs| discs::count(&discs, border));
    if counts.below + counts.above == block.n {
        return counts;
    }
    inertia::counts(block, border).unwrap_or(counts)
}

/// Discs that together hold all eigenvalues of every matrix in `matrix` (row by row, of order `n`), by block and cluster;
/// `None` where an entry is empty or unbounded or a block cannot be diagonalised closely enough.
///
/// # Panics
/// If there are not n² entries.
pub fn discs(matrix: &[Interval], n: usize) -> Option<Vec<Disc>> {
    let mut all: Vec<Disc> = Vec::with_capacity(n);
    for block in blocks(matrix, n)? {
        let clusters = all.iter().map(|disc| disc.cluster + 1).max().unwrap_or(0);
        all.extend(discs::of(&block)?.into_iter().map(|disc| Disc { cluster: disc.cluster + clusters, ..disc }));
    }
    Some(all)
}

/// An irreducible diagonal block of a matrix between bounds.
struct Block {
    /// Row by row.
    entries: Vec<Interval>,
    n: usize,
}

fn blocks(matrix: &[Interval], n: usize) -> Option<Vec<Block>> {
    assert_eq!(matrix.len(), n * n, "entries of a matrix of order {n}");
    if !matrix.iter().all(|entry| !entry.is_empty() && entry.is_bounded()) {
        return None;
    }
    let parts = strongly_connected(n, |i, j| matrix[i * n + j] != Interval::ZERO);
    let block = |part: &Vec<usize>| Block { entries: block(matrix, n, part), n: part.len() };
    Some(parts.iter().map(block).collect())
}

#[cfg(test)]
mod tests;
