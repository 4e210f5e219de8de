//! What a heap of open boxes around a nearly singular point holds: nothing, one root, two, or what cannot be told.
//!
//! The roots in the heap are the zeros of μ(t) of the [bordered](super::bordered) equations. Where μ' has one sign there is
//! at most one, where μ'' has one sign at most two, where μ‴ has at most three; the signs of μ at the ends and at its
//! turning point decide how many. What stays undecided lies near where the derivative before that is 0, by Taylor's formula.

use super::bordered::{Bordered, Course};
use super::newton::{Equations, Proved, Region};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// What a heap holds.
pub(super) enum Heap {
    /// No root.
    Empty,
    /// These roots, and no others.
    Roots(Vec<Proved>),
    /// Roots too near each other to be told apart, if they are roots.
    Close(Close),
    /// Nothing could be shown.
    Undecided,
}

/// Roots that cannot be told apart: they count with their multiplicity.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Close {
    /// Holds all of them.
    pub(super) within: Region,
    /// So many at least, 0 or 1.
    pub(super) least: usize,
    /// So many at most, 2 or 3.
    pub(super) most: usize,
}

/// How far the tube reaches beyond the heap, in its own size; one after the other is tried.
const REACHES: [f64; 3] = [4.0, 16.0, 128.0];
/// Halvings of the interval of t on the way to the turning point and to each root.
const HALVINGS: usize = 60;

/// Steps towards where a derivative of μ is 0.
const CENTRINGS: usize = 4;

/// Decides what a heap of open boxes, given by its hull, holds.
pub(super) fn decide<'t>(equations: &mut Equations<'t>, tape: &'t Tape, parameters: &[f64], hull: &[Interval]) -> Heap {
    let decided = |reach: f64| decide_within(equations, tape, parameters, hull, reach);
    REACHES.into_iter().find_map(decided).unwrap_or(Heap::Undecided)
}

/// The same with a tube of one reach; `None` where the bordered equations are not regular in it.
pub(super) fn decide_within<'t>(
    equations: &mut Equations<'t>,
    tape: &'t Tape,
    parameters: &[f64],
    hull: &[Interval],
    reach: f64,
) -> Option<Heap> {
    let mut bordered = Bordered::around(equations, tape, parameters, hull, reach)?;
    // Wider than the heap, so that a root at its end lies inside.
    let heap = bordered.along(hull);
    let t = heap + Interval::new(-heap.width(), heap.width());
    if !bordered.is_regular(t) {
        return None;
    }
    let course = bordered.course()?;
    Some(Count { bordered, course }.decide(t))
}

struct Count<'e, 't> {
    bordered: Bordered<'e, 't>,
    course: Course,
}

impl Count<'_, '_> {
    fn decide(mut self, t: Interval) -> Heap {
        let ends = [t.lo(), t.hi()].map(|end| self.sign_at(end));
        let [slope, bend, twist] = self.course.mu.map(|derivative| !derivative.contains_zero());
        match ends {
            [Some(low), Some(high)] if slope && low == high => Heap::Empty,
            [Some(low), Some(_)] if slope => one(self.root(t.lo(), low, t.hi(), t)).unwrap_or(Heap::Undecided),
            _ if slope => Heap::Undecided,
            _ if bend => self.turning(t, ends).unwrap_or_else(|| self.close(t, 2)),
            _ if twist => self.close(t, 3),
            _ => Heap::Undecided,
        }
    }

    /// At most `most` roots, since that derivative of μ has one sign: where they are, as narrowly as Taylor's formula says.
    fn close(&mut self, t: Interval, most: usize) -> Heap {
        let near = self.narrowed(t, most);
        let Some((x, _)) = self.bordered.at(near.mid()) else { return Heap::Undecided };
        let run = near - Interval::point(near.mid());
        let within = x.iter().zip(&self.course.direction).map(|(x, direction)| *x + *direction * run).collect();
        // Of an odd number, counted with multiplicity, one is real; signs that differ prove it.
        let crosses = match [near.lo(), near.hi()].map(|end| self.sign_at(end)) {
            [Some(low), Some(high)] => low != high,
            _ => false,
        };
        Heap::Close(Close { within, least: usize::from(crosses), most })
    }

    /// Holds every t with μ = 0: around any centre c₀ + c₁ h + … + c_k h^k = 0 with c_k from the whole course, and so
    /// |h| ≤ 2 max |c_{k−j} / c_k|^(1/j) (Fujiwara 1916, from memory). Sharpest where c_{k−1} = 0.
    fn narrowed(&mut self, t: Interval, k: usize) -> Interval {
        let leading = self.course.mu[k - 1].mig();
        let (mut near, mut centre) = (t, t.mid());
        for _ in 0..CENTRINGS {
            let Some(c) = self.bordered.taylor_at(centre, k) else { break };
            // The powers are rounded; the margin covers that.
            let reach =
                (1..=k).map(|j| (c[k - j].mag() / leading).powf(1.0 / j as f64)).fold(0.0, f64::max) * 2.000_001;
            if !reach.is_finite() {
                break;
            }
            let around = near.intersect(Interval::point(centre) + Interval::new(-reach, reach));
            // Empty would say that there is no root; that is left to the signs.
            if around.is_empty() {
                break;
            }
            near = around;
            centre = (centre - c[k - 1].mid() / (k as f64 * c[k].mid())).clamp(near.lo(), near.hi());
            if !centre.is_finite() {
                break;
            }
        }
        near
    }

    /// μ turns at most once: it is convex, or concave. `None` where signs do not tell.
    fn turning(&mut self, t: Interval, ends: [Option<bool>; 2]) -> Option<Heap> {
        let outward = self.course.mu[1].lo() > 0.0;
        match ends {
            [Some(low), Some(high)] if low != high => {
                let (start, end) = if low == outward { (t.lo(), t.hi()) } else { (t.hi(), t.lo()) };
                one(self.root(start, outward, end, t))
            }
            // Both ends lie on the side that the curve bends towards: between them it stays there.
            [Some(low), Some(_)] if low != outward => Some(Heap::Empty),
            [Some(_), Some(_)] => self.both_outward(t, outward),
            _ => None,
        }
    }

    /// Both ends lie where the curve opens to: it may dip through 0 twice, once, or not at all.
    fn both_outward(&mut self, t: Interval, outward: bool) -> Option<Heap> {
        let turn = self.turning_point(t);
        let [value, slope, ..] = self.bordered.taylor_at(turn, 1)?;
        if sign(value) == Some(!outward) {
            let sides = [Interval::new(t.lo(), turn), Interval::new(turn, t.hi())];
            let first = self.root(t.lo(), outward, turn, sides[0])?;
            return Some(Heap::Roots(vec![first, self.root(t.hi(), outward, turn, sides[1])?]));
        }
        // μ(t) ≥ μ(t*) − μ'(t*)²/(2 min |μ''|) for a convex μ, the same upside down for a concave one.
        let least = Interval::point(4.0 * self.course.mu[1].mig());
        let dip = slope.square().div(least, &mut true);
        let deepest = if outward { value - dip } else { value + dip };
        (sign(deepest) == Some(outward)).then_some(Heap::Empty)
    }

    fn sign_at(&mut self, t: f64) -> Option<bool> {
        self.bordered.at(t).and_then(|(_, mu)| sign(mu))
    }

    /// Where μ' is nearest to 0, approximately.
    fn turning_point(&mut self, t: Interval) -> f64 {
        let (mut low, mut high) = (t.lo(), t.hi());
        let rising = |taylor: Option<[Interval; 4]>| taylor.map(|[_, slope, ..]| slope.mid() > 0.0);
        let start = rising(self.bordered.taylor_at(low, 1));
        for _ in 0..HALVINGS {
            let middle = low + (high - low) / 2.0;
            match rising(self.bordered.taylor_at(middle, 1)) {
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

fn one(root: Option<Proved>) -> Option<Heap> {
    root.map(|root| Heap::Roots(vec![root]))
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
