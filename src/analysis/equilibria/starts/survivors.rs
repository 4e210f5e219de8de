//! Who is left when a community runs its course: which faces are worth a look where there are too many.
//!
//! Implicit steps of rising length along the rates (pseudo-transient continuation: Kelley & Keyes 1998, from memory) go
//! where the community goes, without its oscillations. Only a guide to faces: nothing is concluded from where it ends.

use super::super::Problem;
use crate::expr::tape::Tape;
use crate::num::dense::inverse_unless;

/// Steps along one course.
const STEPS: usize = 120;
/// The first step, as a share of the time in which the fastest rate acts, and how much longer each is than the last.
const FIRST: f64 = 0.5;
const LONGER: f64 = 1.3;
/// A species that ends below this share of its side of the box is gone.
const GONE: f64 = 1e-9;
/// The most that one step may take of a species.
const MOST_TAKEN: f64 = 0.9;

/// Where a course from `start` ends, in the coordinates of all species: 0 for those that are gone.
pub(super) fn course(tape: &Tape, problem: &Problem<'_>, start: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    let n = tape.states();
    let mut run = tape.start_gradient(problem.values);
    let mut x = start.to_vec();
    let mut length = None;
    for _ in 0..STEPS {
        if stop() {
            return None;
        }
        run.at_unless(&x, stop)?;
        let mut system = vec![0.0; n * n];
        for (i, row) in system.chunks_exact_mut(n).enumerate() {
            if let Some(gradient) = run.gradient(i) {
                row.iter_mut().zip(gradient).for_each(|(entry, slope)| *entry = -slope);
            }
        }
        // 1/step − slopes, with a step that the fastest rate per head sets.
        let fastest = (0..n).map(|i| (run.output(i) / x[i]).abs()).fold(0.0, f64::max);
        let step = length.unwrap_or(FIRST / fastest);
        length = Some(step * LONGER);
        (0..n).for_each(|i| system[i * n + i] += 1.0 / step);
        let inverse = inverse_unless(&system, n, stop)?;
        for (i, row) in inverse.chunks_exact(n).enumerate() {
            let change: f64 = row.iter().enumerate().map(|(j, entry)| entry * run.output(j)).sum();
            let [low, high] = problem.sides[i];
            let least = ((1.0 - MOST_TAKEN) * x[i]).max(GONE * 1e-3 * high);
            x[i] = (x[i] + change).clamp(least.min(high), high).max(low);
        }
        if !x.iter().all(|x| x.is_finite()) {
            return None;
        }
    }
    Some(x.iter().zip(problem.sides).map(|(&x, side)| if x > GONE * side[1] { x } else { 0.0 }).collect())
}
