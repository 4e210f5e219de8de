//! The faces that paths of one scenario have come to, each with its equations and regions made once.
//!
//! Many paths start on one face and lose the same species; what a face takes to prepare is more than most paths.

use std::rc::Rc;

use crate::analysis::subject::Subject;
use crate::expr::graph::NodeId;

use super::basin::{Basin, Motion, basins};
use super::face::Face;
use super::settle::Known;

/// Faces kept, at most; fewer for large communities, whose equations take the square of their order.
const MOST_KEPT: usize = 32;
const MOST_ENTRIES: usize = 100_000;

/// A face, and the regions of the equilibria that are stable on it.
pub(super) struct Ground {
    pub(super) face: Face,
    pub(super) basins: Vec<Basin>,
}

/// What the paths of one scenario share.
pub(super) struct Grounds<'k> {
    pub(super) known: Known<'k>,
    rows: Vec<NodeId>,
    /// The latest last.
    kept: Vec<(Vec<bool>, Option<Rc<Ground>>)>,
}

impl<'k> Grounds<'k> {
    pub(super) fn new(subject: &mut Subject<'_>, known: Known<'k>) -> Self {
        let rows = subject.graph.with_zeros(&subject.plan.rows, &subject.plan.values);
        Self { known, rows, kept: Vec::new() }
    }

    /// The species that are there, or that will come: one that is 0 and whose rate vanishes with it is not.
    pub(super) fn present(&self, subject: &mut Subject<'_>, state: &[f64]) -> Vec<bool> {
        present(subject, &self.rows, state)
    }

    /// The face on which just these species are present; `None` where a rate has no value there.
    pub(super) fn on(&mut self, subject: &mut Subject<'_>, present: &[bool]) -> Option<Rc<Ground>> {
        if let Some(place) = self.kept.iter().position(|(known, _)| known == present) {
            let known = self.kept.remove(place);
            self.kept.push(known);
        } else {
            let n = present.len().max(1);
            let most = (MOST_ENTRIES / (n * n)).clamp(1, MOST_KEPT);
            self.kept.drain(..(self.kept.len() + 1).saturating_sub(most));
            let ground = Ground::new(subject, present, self.known).map(Rc::new);
            self.kept.push((present.to_vec(), ground));
        }
        self.kept.last()?.1.clone()
    }
}

/// As [`Grounds::present`], for who needs no ground.
pub(super) fn present(subject: &mut Subject<'_>, rows: &[NodeId], state: &[f64]) -> Vec<bool> {
    let graph = &mut subject.graph;
    state.iter().enumerate().map(|(i, &x)| x > 0.0 || !graph.vanishes_at_zero(rows[i], i)).collect()
}

impl Ground {
    fn new(subject: &mut Subject<'_>, present: &[bool], known: Known<'_>) -> Option<Self> {
        let face = Face::new(subject, present)?;
        let motion = if subject.step().is_some() { Motion::Map } else { Motion::Flow };
        // Where nobody is left there is no path.
        let basins = if face.len() == 0 { Vec::new() } else { basins(&face, known.list, motion, known.stop) };
        Some(Self { face, basins })
    }
}
