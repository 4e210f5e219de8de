//! What every quantity takes: the Jacobian, the state, who is present, and how time goes.

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::num::dense;
use crate::num::eigen::{Unsolved, eigenvalues};
use nalgebra::Complex;

/// An equilibrium with its linear part.
pub(super) struct Setting<'s> {
    /// How many species there are.
    pub(super) n: usize,
    /// A, row by row.
    pub(super) jacobian: &'s [f64],
    /// Abundances.
    pub(super) state: &'s [f64],
    /// Those present, in order.
    pub(super) present: Vec<usize>,
    /// Time units that a map's step takes; `None` where time is continuous.
    pub(super) step: Option<f64>,
    /// Eigenvalues, and whether they are said to attract.
    pub(super) linear: &'s Linearisation,
}

impl<'s> Setting<'s> {
    /// # Panics
    /// If the Jacobian is not of the state's order.
    pub(super) fn new(equilibrium: &'s Equilibrium, linear: &'s Linearisation, step: Option<f64>) -> Self {
        let n = equilibrium.state.len();
        assert_eq!(linear.jacobian.len(), n * n, "Jacobian of {n} species");
        let present = (0..n).filter(|&i| equilibrium.has(i)).collect();
        Self { n, jacobian: &linear.jacobian, state: &equilibrium.state, present, step, linear }
    }

    /// A among some species.
    pub(super) fn block(&self, indices: &[usize]) -> Vec<f64> {
        dense::block(self.jacobian, self.n, indices)
    }

    /// Whether someone is absent and someone present.
    pub(super) fn is_border(&self) -> bool {
        !self.present.is_empty() && self.present.len() < self.n
    }

    /// Whether all eigenvalues attract, as the linearisation says.
    pub(super) fn is_stable(&self) -> bool {
        self.linear.stable == Some(true)
    }

    /// A number per step as one per time unit.
    pub(super) fn per_time(&self, per_step: f64) -> f64 {
        per_step / self.step.unwrap_or(1.0)
    }
}

/// Rate of growth along the leading eigenvalue of a block: max Re λ, for a map ln max|λ|/T. Per time unit; `None` where the
/// eigenvalues could not be computed, or the map's are 0.
pub(super) fn leading_rate(block: &[f64], n: usize, step: Option<f64>) -> Option<f64> {
    let values: Result<Vec<Complex<f64>>, Unsolved> = eigenvalues(block, n);
    let size = |value: &Complex<f64>| if step.is_some() { value.norm() } else { value.re };
    let leading = values.ok()?.iter().map(size).max_by(f64::total_cmp)?;
    let Some(step) = step else { return Some(leading) };
    let rate = leading.ln() / step;
    rate.is_finite().then_some(rate)
}
