//! The linear part of the model as it is written: a decimal number that no f64 equals stands for all that round to it.
//!
//! 0.3 − 0.1 − 0.2 is 0 for whoever wrote it and −2.8e-17 in f64, so a sign that hangs on such digits is a proof about a
//! model that nobody wrote. What is claimed has to hold for the numbers as written as well, and their equilibrium is not
//! quite that of the f64: it is enclosed anew, by Newton's operator over bounds (Krawczyk 1969; Moore 1977).
//!
//! That an eigenvalue is critical *exactly* no bounds can show. It is taken from the f64 numbers, in which an exact 0 has
//! its reason in the formulas: the rounding of decimals does not add up to it.

use super::jacobian::{Bounds, Rows, gathered};
use crate::analysis::equilibria::Equilibrium;
use crate::expr::tape::written::Written;
use crate::num::interval::Interval;
use crate::num::solve::solve;

/// Rounds of widening the enclosure until it holds its image.
const ROUNDS: usize = 4;

/// An equilibrium of the model as written.
pub(super) struct AsWritten {
    /// With an enclosure of its own; elsewhere as that of the f64 numbers.
    pub(super) equilibrium: Equilibrium,
    /// Holds the Jacobian there, row by row.
    pub(super) jacobian: Vec<Interval>,
}

impl Rows {
    /// The equilibrium of the model as written beside a proved one; `None` where it is not proved that there is just one,
    /// and for communities too large for an enclosure.
    pub(super) fn as_written(&self, proved: &Equilibrium) -> Option<AsWritten> {
        let present: Vec<usize> = (0..self.order()).filter(|&i| proved.has(i)).collect();
        let off = self.residual(proved, &present)?;
        let mut equilibrium = proved.clone();
        let mut is_held = off.iter().all(|rate| *rate == Interval::ZERO);
        for _ in 0..ROUNDS {
            if is_held {
                let jacobian = self.over(&self.written, &equilibrium).ok()?;
                return Some(AsWritten { equilibrium, jacobian });
            }
            let steps = solve(&self.slopes(&equilibrium, &present)?, &off, &|| false)?;
            let images: Vec<Interval> =
                present.iter().zip(&steps).map(|(&i, &step)| Interval::point(proved.state[i]) - step).collect();
            let holds = |(&i, image): (&usize, &Interval)| image.subset_of(equilibrium.enclosure[i]);
            is_held = present.iter().zip(&images).all(holds);
            for (&i, &image) in present.iter().zip(&images) {
                let whole = equilibrium.enclosure[i].hull(image);
                let more = Interval::try_new(-whole.width(), whole.width())?;
                equilibrium.enclosure[i] = if is_held { image } else { whole + more };
            }
            if !present.iter().all(|&i| equilibrium.enclosure[i].positive()) {
                return None;
            }
        }
        None
    }

    /// What the rows of those present leave of 0 at the state, a map's less the state.
    fn residual(&self, at: &Equilibrium, present: &[usize]) -> Option<Vec<Interval>> {
        let state: Vec<Written> = at.state.iter().map(|&x| Written::around(Interval::point(x))).collect();
        let own = Interval::point(self.balanced);
        let rate = |&i: &usize| {
            let mut run = self.alone.get(i)?[0].start(&self.written);
            let defined = run.at(&state).defined;
            let less = Written::around(own * Interval::point(at.state[i]));
            defined.then(|| Written(run.output(0).0 - less.0).bounds())
        };
        present.iter().map(rate).collect()
    }

    /// Derivatives of the same with respect to those present, over the whole enclosure.
    fn slopes(&self, over: &Equilibrium, present: &[usize]) -> Option<Vec<Interval>> {
        let state: Vec<Written> = over.enclosure.iter().map(|&side| Written::around(side)).collect();
        let mut entries = Vec::with_capacity(present.len() * present.len());
        for &i in present {
            let mut run = self.alone.get(i)?[0].start_gradient(&self.written);
            if !run.at(&state).defined {
                return None;
            }
            let row = gathered(&run, 1);
            let own = |j: usize| if i == j { Interval::point(self.balanced) } else { Interval::ZERO };
            entries.extend(present.iter().map(|&j| row.get(j).map_or(Interval::ZERO, Bounds::bounds) - own(j)));
        }
        Some(entries)
    }
}
