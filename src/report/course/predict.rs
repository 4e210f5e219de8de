//! What the linear part predicts: x* + exp(At) (x₀ − x*), for a map x* + Aᵏ (x₀ − x*).

use crate::analysis::linearise::Linearisation;
use crate::num::exponential::{Flow, doubled, with_identity};

/// Species beyond which nothing is predicted: the exponential takes the cube of their number.
const MOST_SPECIES: usize = 120;
/// Doublings from a short time to the time between two samples.
const DOUBLINGS: u32 = 60;

/// Predicted states.
pub(super) struct Prediction {
    /// At each time, as long as they are finite.
    pub(super) states: Vec<Vec<f64>>,
}

impl Prediction {
    /// At evenly spaced times from 0 on; for a map at its steps. `None` for a community too large, and where the sizes do
    /// not agree.
    pub(super) fn new(
        linear: &Linearisation,
        equilibrium: &[f64],
        start: &[f64],
        times: &[f64],
        is_map: bool,
    ) -> Option<Self> {
        let n = equilibrium.len();
        if n == 0 || n > MOST_SPECIES || start.len() != n || linear.jacobian.len() != n * n {
            return None;
        }
        let step = if is_map { linear.jacobian.clone() } else { over(&linear.jacobian, n, *times.get(1)?)? };
        let mut off: Vec<f64> = start.iter().zip(equilibrium).map(|(x, there)| x - there).collect();
        let mut states = Vec::with_capacity(times.len());
        for _ in times {
            let state: Vec<f64> = equilibrium.iter().zip(&off).map(|(there, off)| there + off).collect();
            if state.iter().any(|x| !x.is_finite()) {
                break;
            }
            states.push(state);
            off = step.chunks_exact(n).map(|row| row.iter().zip(&off).map(|(a, x)| a * x).sum()).collect();
        }
        Some(Self { states })
    }
}

/// exp(At), by doubling from a time that is short enough for the series; `None` where it is not finite.
fn over(a: &[f64], n: usize, time: f64) -> Option<Vec<f64>> {
    let flow = Flow::new(a, n)?;
    let (mut short, mut doublings) = (time, 0);
    while short > flow.short() {
        if doublings == DOUBLINGS {
            return None;
        }
        short /= 2.0;
        doublings += 1;
    }
    let mut z = flow.beyond_identity(short);
    for _ in 0..doublings {
        z = doubled(&z, n);
    }
    let whole = flow.unscaled(&with_identity(&z, n));
    whole.iter().all(|x| x.is_finite()).then_some(whole)
}
