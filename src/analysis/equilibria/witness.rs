//! Singular witnesses: points where the equations hold and their Jacobian has no inverse. One is a double root, perhaps;
//! many, well apart, are a continuum of equilibria.

use super::newton::Equations;
use crate::num::interval::Interval;
use crate::num::singular::singular;

/// Steps of Gauss–Newton from one start.
const STEPS: usize = 25;
/// A singular value below this share of the largest, or of 1, which rows are scaled to, counts as 0.
const RANK: f64 = 1e-5;
/// The equations hold when each is below this, in rows scaled to slopes of 1.
const HOLDS: f64 = 1e-9;
/// Witnesses this far apart, in every variable's size, are different points.
const APART: f64 = 1e-3;
/// So many different witnesses are a continuum.
const ENOUGH: usize = 12;
/// A box of a continuum is not halved below this share of the variables' size.
const COARSE: f64 = 1.0 / 16.0;
/// The largest share of the variables' size at which a box is asked for a witness.
const SMALL: f64 = 0.5;

/// How far a point may leave a side that was cut to a point, as a share of the variable's size: rounding moves it.
const ROOM: f64 = 1e-9;

/// A point of a continuum, perhaps.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Witness {
    pub(super) point: Vec<f64>,
    /// How many directions the Jacobian leaves free.
    pub(super) free: usize,
}

/// The witnesses met on one face.
#[derive(Debug, Default)]
pub(super) struct Witnesses {
    pub(super) seen: Vec<Witness>,
    /// So many of them were handed out.
    handed: usize,
}

impl Witnesses {
    /// Asks a box that Newton's method could not settle, with the slopes over it; true where it lies on a continuum and is
    /// small enough to be left.
    pub(super) fn settles(&mut self, equations: &mut Equations<'_>, region: &[Interval], slopes: &[Interval]) -> bool {
        let share = region.iter().zip(&equations.scale).map(|(side, scale)| side.width() / scale).fold(0.0, f64::max);
        if share > SMALL {
            return false;
        }
        let start: Vec<f64> = region.iter().map(|side| side.mid()).collect();
        let Some(witness) = equations.witness(&start, region, slopes) else { return false };
        if self.seen.len() < ENOUGH && self.is_new(&witness, &equations.scale) {
            self.seen.push(witness);
        }
        self.is_continuum() && share < COARSE
    }

    /// One that was not handed out before, where just one direction is free.
    pub(super) fn next_singular(&mut self) -> Option<Vec<f64>> {
        let witness = self.seen.get(self.handed)?;
        self.handed += 1;
        (witness.free == 1).then(|| witness.point.clone())
    }

    /// Whether there are so many that they are a continuum.
    pub(super) fn is_continuum(&self) -> bool {
        self.seen.len() >= ENOUGH
    }

    /// The usual number of free directions.
    pub(super) fn dimension(&self) -> usize {
        let count = |free: usize| self.seen.iter().filter(|witness| witness.free == free).count();
        self.seen.iter().map(|witness| witness.free).max_by_key(|&free| count(free)).unwrap_or(0)
    }

    fn is_new(&self, witness: &Witness, scale: &[f64]) -> bool {
        let far = |other: &Witness| {
            other.point.iter().zip(&witness.point).zip(scale).any(|((a, b), scale)| (a - b).abs() > APART * scale)
        };
        self.seen.iter().all(far)
    }
}

impl Equations<'_> {
    /// A nearby point where the equations hold and the Jacobian is singular, by Gauss–Newton steps that leave directions
    /// of no slope alone (rows and columns scaled; singular values cut off). Rows are scaled by their slopes over the whole
    /// region: by those at the point, a row that is flat there would seem as steep as any.
    fn witness(&mut self, start: &[f64], region: &[Interval], over: &[Interval]) -> Option<Witness> {
        let n = self.n;
        let mut x = start.to_vec();
        let size = |i: usize| (0..n).map(|j| over[i * n + j].mag() * self.scale[j]).fold(f64::MIN_POSITIVE, f64::max);
        let rows: Vec<f64> = (0..n).map(|i| 1.0 / size(i)).collect();
        if rows.contains(&0.0) {
            return None;
        }
        for _ in 0..STEPS {
            let slopes = self.slopes_at(&x);
            let values = self.values();
            let scaled: Vec<f64> = (0..n * n).map(|k| slopes[k] * self.scale[k % n] * rows[k / n]).collect();
            let parts = singular(&scaled, n)?;
            let rank = parts.values.iter().filter(|&&sigma| sigma > RANK * parts.values[0].max(1.0)).count();
            let mut step = vec![0.0; n];
            for k in 0..rank {
                let along: f64 = (0..n).map(|i| parts.left[i * n + k] * values[i] * rows[i]).sum();
                for (j, step) in step.iter_mut().enumerate() {
                    *step -= parts.right[j * n + k] * along / parts.values[k];
                }
            }
            for (j, step) in step.iter().enumerate() {
                x[j] += step * self.scale[j];
            }
            if !x.iter().all(|v| v.is_finite()) || strays(&x, region, &self.scale) {
                return None;
            }
            let moved = step.iter().fold(0.0f64, |m, s| m.max(s.abs()));
            let holds = values.iter().zip(&rows).all(|(value, row)| (value * row).abs() < HOLDS);
            if holds && moved < HOLDS.sqrt() {
                return (rank < n).then_some(Witness { point: x, free: n - rank });
            }
        }
        None
    }
}

/// Whether a point has left the surroundings of a box.
fn strays(x: &[f64], region: &[Interval], scale: &[f64]) -> bool {
    let far =
        |((&x, side), scale): ((&f64, &Interval), &f64)| (x - side.mid()).abs() > 2.0 * side.width() + ROOM * scale;
    x.iter().zip(region).zip(scale).any(far)
}
