//! Damped Newton steps from a starting point that may be far from any root.
//!
//! A step is shortened until the next simplified Newton step would be shorter than it (the natural monotonicity test of
//! Deuflhard 1974, from memory), which does not depend on the units of rates or abundances. Abundances on whose being
//! positive the face's equations rest stay positive.

use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;
use crate::num::dense::inverse_unless;

/// Steps from one starting point.
const STEPS: usize = 60;
/// Times that one step is halved.
const HALVINGS: i32 = 7;
/// A step below this share of the state has arrived: Newton's last steps square the error.
const ARRIVED: f64 = 1e-9;
/// Most of the way to 0 that one step may take a positive abundance.
const TOWARDS_ZERO: f64 = 0.9;

/// The equations of a face in plain numbers.
pub(super) struct Descent<'t> {
    run: GradientRun<'t, f64>,
    n: usize,
    /// Whether each abundance must stay positive.
    positive: &'t [bool],
    /// Size of each abundance, for what counts as nothing beside it.
    scale: &'t [f64],
}

impl<'t> Descent<'t> {
    pub(super) fn new(tape: &'t Tape, values: &[f64], positive: &'t [bool], scale: &'t [f64]) -> Self {
        Self { run: tape.start_gradient(values), n: tape.states(), positive, scale }
    }

    /// A point near a root, if the steps from `start` lead to one.
    pub(super) fn root_from(&mut self, start: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
        let mut x = start.to_vec();
        for _ in 0..STEPS {
            if stop() {
                return None;
            }
            let inverse = self.inverse_slopes(&x, stop)?;
            let step = self.step(&inverse);
            let length = self.length(&step, &x);
            if !length.is_finite() {
                return None;
            }
            if length < ARRIVED {
                return Some(moved(&x, &step, 1.0));
            }
            x = self.shortened(&x, &step, length, &inverse, stop)?;
        }
        None
    }

    /// The longest part of the step after which the next would be shorter.
    fn shortened(
        &mut self,
        x: &[f64],
        step: &[f64],
        length: f64,
        inverse: &[f64],
        stop: &dyn Fn() -> bool,
    ) -> Option<Vec<f64>> {
        let longest = self.longest(x, step);
        for halving in 0..=HALVINGS {
            let share = longest * f64::from(-halving).exp2();
            let there = moved(x, step, share);
            self.run.at_unless(&there, stop)?;
            let next = self.step(inverse);
            // NaN fails the comparison.
            if self.length(&next, &there) <= (1.0 - share / 4.0) * length {
                return Some(there);
            }
        }
        None
    }

    fn longest(&self, x: &[f64], step: &[f64]) -> f64 {
        let reaches_zero = (0..self.n).filter(|&i| self.positive[i] && step[i] < 0.0);
        reaches_zero.fold(1.0, |longest: f64, i| longest.min(TOWARDS_ZERO * x[i] / -step[i]))
    }

    fn inverse_slopes(&mut self, x: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
        let n = self.n;
        self.run.at_unless(x, stop)?;
        let mut slopes = vec![0.0; n * n];
        for (i, row) in slopes.chunks_exact_mut(n.max(1)).enumerate() {
            if let Some(gradient) = self.run.gradient(i) {
                row.copy_from_slice(gradient);
            }
        }
        inverse_unless(&slopes, n, stop)
    }

    /// −J⁻¹ f, for the values f where the run last was.
    fn step(&self, inverse: &[f64]) -> Vec<f64> {
        let row = |row: &[f64]| -(0..self.n).map(|j| row[j] * self.run.output(j)).sum::<f64>();
        inverse.chunks_exact(self.n.max(1)).map(row).collect()
    }

    fn length(&self, step: &[f64], x: &[f64]) -> f64 {
        let part = |i: usize| step[i] / x[i].abs().max(1e-6 * self.scale[i]);
        let sum: f64 = (0..self.n).map(|i| part(i) * part(i)).sum();
        sum.sqrt()
    }
}

fn moved(x: &[f64], step: &[f64], share: f64) -> Vec<f64> {
    x.iter().zip(step).map(|(x, step)| x + share * step).collect()
}
