//! What a heap of open boxes around a nearly singular point holds: nothing, one root, two, or what cannot be told.
//!
//! The roots in the heap are the zeros of μ(t) of the [bordered](super::bordered) equations. Where μ' has one sign there is
//! at most one, where μ'' has one sign at most two; the signs of μ at the ends and at its turning point decide how many.

use super::bordered::{Bordered, Course};
use super::newton::{Equations, Proved};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// What a heap holds.
pub(super) enum Heap {
    /// No root.
    Empty,
    /// These roots, and no others.
    Roots(Vec<Proved>),
    /// None, one double root or two.
    DoubleOrTwo,
    /// Nothing could be shown.
    Undecided,
}

/// How far the tube reaches beyond the heap, in its own size; one after the other is tried.
const REACHES: [f64; 3] = [4.0, 16.0, 128.0];
/// Halvings of the interval of t on the way to the turning point and to each root.
const HALVINGS: usize = 60;

/// Decides what a heap of open boxes, given by its hull, holds.
pub(super) fn decide<'t>(equations: &mut Equations<'t>, tape: &'t Tape, parameters: &[f64], hull: &[Interval]) -> Heap {
    for reach in REACHES {
        let Some(mut bordered) = Bordered::around(equations, tape, parameters, hull, reach) else { continue };
        // Wider than the heap, so that a root at its end lies inside.
        let heap = bordered.along(hull);
        let t = heap + Interval::new(-heap.width(), heap.width());
        if !bordered.is_regular(t) {
            continue;
        }
        if let Some(course) = bordered.course() {
            return Count { bordered, course }.decide(t);
        }
    }
    Heap::Undecided
}

struct Count<'e, 't> {
    bordered: Bordered<'e, 't>,
    course: Course,
}

impl Count<'_, '_> {
    fn decide(mut self, t: Interval) -> Heap {
        let ends = [t.lo(), t.hi()].map(|end| self.sign_at(end));
        if !self.course.slope.contains_zero() {
            return match ends {
                [Some(low), Some(high)] if low == high => Heap::Empty,
                [Some(low), Some(_)] => roots([self.root(t.lo(), low, t.hi(), t)]),
                _ => Heap::Undecided,
            };
        }
        if self.course.bend.contains_zero() {
            return Heap::Undecided;
        }
        self.turning(t, ends)
    }

    /// μ turns at most once: it is convex, or concave.
    fn turning(&mut self, t: Interval, ends: [Option<bool>; 2]) -> Heap {
        let outward = self.course.bend.lo() > 0.0;
        match ends {
            [Some(low), Some(high)] if low != high => {
                let (start, end) = if low == outward { (t.lo(), t.hi()) } else { (t.hi(), t.lo()) };
                roots([self.root(start, outward, end, t)])
            }
            // Both ends lie on the side that the curve bends towards: between them it stays there.
            [Some(low), Some(_)] if low != outward => Heap::Empty,
            [Some(_), Some(_)] => self.both_outward(t, outward),
            _ => Heap::DoubleOrTwo,
        }
    }

    /// Both ends lie where the curve opens to: it may dip through 0 twice, once, or not at all.
    fn both_outward(&mut self, t: Interval, outward: bool) -> Heap {
        let turn = self.turning_point(t);
        let (Some((_, value)), Some(slope)) = (self.bordered.at(turn), self.bordered.slope_at(turn)) else {
            return Heap::DoubleOrTwo;
        };
        if sign(value) == Some(!outward) {
            let sides = [Interval::new(t.lo(), turn), Interval::new(turn, t.hi())];
            return roots([self.root(t.lo(), outward, turn, sides[0]), self.root(t.hi(), outward, turn, sides[1])]);
        }
        // μ(t) ≥ μ(t*) − μ'(t*)²/(2 min |μ''|) for a convex μ, the same upside down for a concave one.
        let least = Interval::point(2.0 * self.course.bend.mig());
        let dip = slope.square().div(least, &mut true);
        let deepest = if outward { value - dip } else { value + dip };
        if sign(deepest) == Some(outward) { Heap::Empty } else { Heap::DoubleOrTwo }
    }

    fn sign_at(&mut self, t: f64) -> Option<bool> {
        self.bordered.at(t).and_then(|(_, mu)| sign(mu))
    }

    /// Where μ' is nearest to 0, approximately.
    fn turning_point(&mut self, t: Interval) -> f64 {
        let (mut low, mut high) = (t.lo(), t.hi());
        let rising = |slope: Option<Interval>| slope.map(|slope| slope.mid() > 0.0);
        let start = rising(self.bordered.slope_at(low));
        for _ in 0..HALVINGS {
            let middle = low + (high - low) / 2.0;
            match rising(self.bordered.slope_at(middle)) {
                None => break,
                found if found == start => low = middle,
                _ => high = middle,
            }
        }
        low + (high - low) / 2.0
    }

    /// The root between two t where μ has different signs, `above` 0 or not at `start`. It is the only one with t in
    /// `alone`, so its enclosure must not reach further.
    fn root(&mut self, start: f64, above: bool, end: f64, alone: Interval) -> Option<Proved> {
        let (mut near, mut far) = (start, end);
        for _ in 0..HALVINGS {
            let middle = near + (far - near) / 2.0;
            match self.sign_at(middle) {
                Some(side) if side == above => near = middle,
                Some(_) => far = middle,
                None => break,
            }
        }
        let (x, _) = self.bordered.at(near)?;
        let run = Interval::ZERO.hull(Interval::point(far) - Interval::point(near));
        let enclosure: Vec<Interval> =
            x.iter().zip(&self.course.direction).map(|(x, direction)| *x + *direction * run).collect();
        let point = enclosure.iter().map(|side| side.mid()).collect();
        let is_alone = self.bordered.along(&enclosure).subset_of(alone);
        is_alone.then(|| Proved { point, unique: enclosure.clone(), enclosure, smooth: true })
    }
}

fn roots<const N: usize>(found: [Option<Proved>; N]) -> Heap {
    let found: Option<Vec<Proved>> = found.into_iter().collect();
    found.map_or(Heap::DoubleOrTwo, Heap::Roots)
}

/// Whether an enclosure is proved above or below 0.
fn sign(value: Interval) -> Option<bool> {
    if value.lo() > 0.0 {
        Some(true)
    } else if value.hi() < 0.0 {
        Some(false)
    } else {
        None
    }
}
