//! Surroundings of singular points in which Taylor's formula says where roots are, so that they need not be halved away.
//!
//! Near a root of multiplicity m a first-order test leaves boxes open as far as the m-th root of its own error reaches:
//! a hundred of them on each side of a triple root, at every size. One look at the [bordered](super::bordered) equations,
//! as far around as they are regular, leaves a region as small as numbers allow, or counts the roots.

use super::cluster::{Heap, decide_within};
use super::newton::{Equations, Region};
use super::search::{Kept, cut_away};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// The largest surroundings tried reach so far to either side, as a share of each variable.
const LARGEST: f64 = 1.0 / 16.0;
/// The next are smaller by this factor.
const SMALLER: f64 = 1.0 / 8.0;
/// So many are tried.
const TRIES: usize = 6;
/// A variable at 0 counts as this share of its size.
const LEAST: f64 = 1e-3;
/// How far the tube reaches beyond, in the size of the surroundings.
const REACH: f64 = 4.0;

/// Surroundings that were settled.
pub(super) struct Zone {
    pub(super) around: Region,
    /// Where in them roots may be that were not found yet.
    pub(super) left: Option<Region>,
}

/// The largest surroundings of a point about which something can be said, and that.
pub(super) fn settle<'t>(
    equations: &mut Equations<'t>,
    tape: &'t Tape,
    parameters: &[f64],
    point: &[f64],
) -> Option<(Region, Heap)> {
    let mut share = LARGEST;
    for _ in 0..TRIES {
        let side = |(&x, &scale): (&f64, &f64)| {
            let reach = share * x.abs().max(LEAST * scale);
            Interval::point(x) + Interval::new(-reach, reach)
        };
        let around: Region = point.iter().zip(&equations.scale).map(side).collect();
        match decide_within(equations, tape, parameters, &around, REACH) {
            None | Some(Heap::Undecided) => share *= SMALLER,
            Some(heap) => return Some((around, heap)),
        }
    }
    None
}

impl Zone {
    pub(super) fn holds(&self, point: &[f64]) -> bool {
        self.around.iter().zip(point).all(|(side, &x)| side.contains(x))
    }

    /// Takes away from a box what is settled.
    pub(super) fn trim(&self, region: &mut Region) -> Kept {
        let Some(left) = &self.left else { return cut_away(region, &self.around) };
        let rest: Region = region.iter().zip(left).map(|(side, left)| side.intersect(*left)).collect();
        if rest.iter().any(|side| side.is_empty()) {
            return cut_away(region, &self.around);
        }
        if region.iter().zip(&self.around).all(|(side, around)| side.subset_of(*around)) {
            *region = rest;
        }
        Kept::Something
    }
}
