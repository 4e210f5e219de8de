//! 64 paths at once by the explicit pair of orders 5 and 4, each with its own time and step length.
//!
//! A lane that is done is given another start by the caller, so that all keep working. No stiffness is looked for and no
//! continuous output is made: what is asked here is where paths go, not how.
#![expect(clippy::inline_always, reason = "the loops must end up inside the variant compiled for a processor feature")]

use super::Tolerance;
use super::dormand_prince::{A, E, STAGES};
use crate::num::rapid;
use crate::num::wide::{self, Loops};

/// How many paths.
pub const WIDTH: usize = 64;

/// One number a lane.
pub type Batch = [f64; WIDTH];

/// The right-hand side for all lanes.
pub trait LaneFlow {
    /// Writes the rates: one batch a coordinate. A lane in which they are not defined is left not finite.
    fn rates(&mut self, y: &[Batch], out: &mut [Batch]);
}

/// Shortest step over time before a lane is given up.
const RESOLUTION: f64 = 1e-14;
const SAFETY: f64 = 0.9;

/// Where 64 paths stand.
#[derive(Clone, Debug)]
pub struct LaneStepper {
    /// One batch a coordinate.
    y: Vec<Batch>,
    time: Batch,
    h: Batch,
    k: [Vec<Batch>; STAGES],
    end: Vec<Batch>,
    tolerance: Vec<Tolerance>,
    /// Lanes that cannot go on.
    failed: [bool; WIDTH],
    /// Lanes whose last trial was kept.
    kept: [bool; WIDTH],
    /// Lanes that were set since the rates were last computed.
    fresh: bool,
}

/// The state at which a stage evaluates.
struct Combining<'s>(&'s mut LaneStepper, &'s [f64]);

impl Loops for Combining<'_> {
    #[inline(always)]
    fn run(self) {
        self.0.combine(self.1);
    }
}

/// The end of a trial.
struct Judging<'s>(&'s mut LaneStepper);

impl Loops for Judging<'_> {
    #[inline(always)]
    fn run(self) {
        let error = self.0.error();
        self.0.decide(&error);
    }
}

impl LaneStepper {
    /// For paths of as many coordinates as there are tolerances, all at 0 until they are [set](Self::set).
    pub fn new(tolerance: &[Tolerance]) -> Self {
        let n = tolerance.len();
        let zero = || vec![[0.0; WIDTH]; n];
        Self {
            y: zero(),
            time: [0.0; WIDTH],
            h: [0.0; WIDTH],
            k: std::array::from_fn(|_| zero()),
            end: zero(),
            tolerance: tolerance.to_vec(),
            failed: [false; WIDTH],
            kept: [false; WIDTH],
            fresh: true,
        }
    }

    /// Puts a lane at a start, at time 0, with a first step length.
    ///
    /// # Panics
    /// If the start has another number of coordinates, or the lane is not below [`WIDTH`].
    pub fn set(&mut self, lane: usize, start: &[f64], first: f64) {
        assert_eq!(start.len(), self.y.len(), "coordinates");
        for (batch, &value) in self.y.iter_mut().zip(start) {
            batch[lane] = value;
        }
        (self.time[lane], self.h[lane]) = (0.0, first);
        (self.failed[lane], self.kept[lane]) = (false, false);
        self.fresh = true;
    }

    /// One batch a coordinate.
    pub fn states(&self) -> &[Batch] {
        &self.y
    }

    /// The rates there, after a [step](Self::step).
    pub fn rates(&self) -> &[Batch] {
        &self.k[0]
    }

    /// The time of each lane.
    pub fn times(&self) -> &Batch {
        &self.time
    }

    /// Lanes that cannot go on: rates not defined, or steps too short for time to see.
    pub fn failed(&self) -> &[bool; WIDTH] {
        &self.failed
    }

    /// Lanes that moved in the last step.
    pub fn kept(&self) -> &[bool; WIDTH] {
        &self.kept
    }

    /// Tries one step in every lane.
    pub fn step(&mut self, flow: &mut dyn LaneFlow) {
        if self.fresh {
            flow.rates(&self.y, &mut self.k[0]);
            self.fresh = false;
        }
        for (stage, weights) in A.iter().enumerate() {
            wide::execute(Combining(self, weights));
            flow.rates(&self.end, &mut self.k[stage + 1]);
        }
        wide::execute(Judging(self));
    }

    #[inline(always)]
    fn combine(&mut self, weights: &[f64]) {
        for (i, end) in self.end.iter_mut().enumerate() {
            let mut sum = [0.0; WIDTH];
            for (&a, k) in weights.iter().zip(&self.k) {
                // The scheme's zeros cost as much as its other weights.
                if a != 0.0 {
                    sum.iter_mut().zip(&k[i]).for_each(|(sum, k)| *sum += a * k);
                }
            }
            for l in 0..WIDTH {
                end[l] = self.y[i][l] + self.h[l] * sum[l];
            }
        }
    }

    /// Mean square of the errors over what is allowed.
    #[inline(always)]
    fn error(&self) -> Batch {
        let mut total = [0.0; WIDTH];
        for (i, tolerance) in self.tolerance.iter().enumerate() {
            let mut sum = [0.0; WIDTH];
            for (&e, k) in E.iter().zip(&self.k) {
                if e != 0.0 {
                    sum.iter_mut().zip(&k[i]).for_each(|(sum, k)| *sum += e * k);
                }
            }
            for l in 0..WIDTH {
                let allowed = tolerance.absolute + tolerance.relative * self.y[i][l].abs().max(self.end[i][l].abs());
                let share = self.h[l] * sum[l] / allowed;
                total[l] += share * share;
            }
        }
        total.map(|total| total / self.tolerance.len().max(1) as f64)
    }

    #[inline(always)]
    fn decide(&mut self, error: &Batch) {
        let mut factor = [0.0; WIDTH];
        for l in 0..WIDTH {
            self.kept[l] = error[l] <= 1.0 && !self.failed[l];
            // The error is squared: a tenth of its logarithm is a fifth of that of the norm.
            factor[l] = -0.1 * rapid::ln_roughly(error[l].clamp(1e-12, 1e12));
        }
        rapid::exp_all(&mut factor);
        for l in 0..WIDTH {
            if self.kept[l] {
                self.time[l] += self.h[l];
            }
            // Not a number where the rates are not defined.
            let next = if error[l].is_finite() { (SAFETY * factor[l]).clamp(0.2, 5.0) } else { 0.2 };
            self.h[l] *= next;
            let resolved = self.h[l] > RESOLUTION * self.time[l].abs() && self.time[l].is_finite();
            self.failed[l] |= !resolved;
        }
        let (first, last) = self.k.split_at_mut(STAGES - 1);
        for i in 0..self.y.len() {
            for l in 0..WIDTH {
                let kept = self.kept[l];
                self.y[i][l] = if kept { self.end[i][l] } else { self.y[i][l] };
                first[0][i][l] = if kept { last[0][i][l] } else { first[0][i][l] };
            }
        }
    }
}
