//! Branch and prune on one face: boxes are cut, a root is proved, or the box is halved, until nothing is left open.
//!
//! Breadth first, so that roots are found early and their surroundings fall away. A box is cut by what is known about
//! proved roots, by constraint propagation and by interval Newton steps; then Newton's method from its middle proposes a
//! root. Around a singular point a [`zone`] is settled at once. What is still open when a box is very small stays, and is
//! said to be open.

use std::collections::VecDeque;

use super::cluster::{Close, Heap};
use super::newton::{Cut, Equations, Proved, Region};
use super::witness::Witnesses;
use super::zone::{self, Zone};
use crate::expr::tape::Tape;
use crate::expr::tape::propagate::{Propagation, Sweep};
use crate::num::interval::Interval;

/// When a box goes another round: some side shrank to this share.
const WORTHWHILE: f64 = 0.8;
/// Rounds of cutting before a box is halved.
const ROUNDS: usize = 4;
/// Sweeps of propagation in one round.
const SWEEPS: usize = 3;
/// A box is very small when every side is below this share of its place.
const SMALLEST: f64 = 1e-6;
/// No side may get this many times wider, relatively, than the one that is cut.
const LOPSIDED: f64 = 32.0;
/// A side whose ends differ by this factor spans orders of magnitude. Cut at a quarter of its upper end, random webs take
/// 6 % fewer boxes than cut at an eighth, and hardly more or fewer with another factor from 16 up.
const WIDE_SPAN: f64 = 32.0;

/// Zones that came to nothing before no more are tried: along a continuum none comes to anything.
const MOST_IN_VAIN: usize = 4;

/// What one face holds.
#[derive(Debug, Default)]
pub(super) struct Found {
    pub(super) roots: Vec<Proved>,
    /// Boxes about which nothing was decided.
    pub(super) open: Vec<Region>,
    /// Boxes that lie on a continuum of equilibria.
    pub(super) continuum: Vec<Region>,
    /// Roots that cannot be told apart.
    pub(super) close: Vec<Close>,
    /// Singular points met on the way.
    pub(super) witnesses: Witnesses,
    /// Size of each variable.
    pub(super) scale: Vec<f64>,
    /// Boxes that were looked at.
    pub(super) boxes: usize,
    /// Whether the budget ended before the boxes did; what was left is among the open ones.
    pub(super) stopped: bool,
}

/// How much work one face may take.
pub(super) struct Limits<'l> {
    pub(super) boxes: usize,
    pub(super) stop: &'l dyn Fn() -> bool,
}

/// Everything that is needed on one face.
pub(super) struct Search<'t> {
    equations: Equations<'t>,
    propagation: Propagation<'t>,
    tape: &'t Tape,
    parameters: &'t [f64],
    /// All of the region that was to be searched and is not at once seen to be empty.
    whole: Region,
    zones: Vec<Zone>,
    /// Zones that came to nothing.
    in_vain: usize,
    found: Found,
    queue: VecDeque<Region>,
}

impl<'t> Search<'t> {
    /// Looks for all roots of the tape's outputs in a region.
    pub(super) fn run(tape: &'t Tape, parameters: &'t [f64], region: Region, limits: &Limits<'_>) -> Found {
        let exact: Vec<Interval> = parameters.iter().map(|&p| Interval::point(p)).collect();
        let mut propagation = tape.start_propagation(&exact);
        let mut region = region;
        if propagate(&mut propagation, &mut region) == Kept::Nothing {
            return Found { boxes: 1, ..Found::default() };
        }
        // What is left after the first cut says how large things are; the box as given may be far too wide.
        let scale = region.iter().map(|side| side.mag().clamp(f64::MIN_POSITIVE, f64::MAX)).collect();
        let equations = Equations::new(tape, parameters, scale);
        let queue = VecDeque::from([region.clone()]);
        let (zones, found) = (Vec::new(), Found::default());
        let mut search =
            Search { equations, propagation, tape, parameters, whole: region, zones, in_vain: 0, found, queue };
        while let Some(region) = search.queue.pop_front() {
            if search.found.boxes >= limits.boxes || (limits.stop)() {
                search.found.stopped = true;
                search.found.open.push(region);
                search.found.open.extend(search.queue.drain(..));
                break;
            }
            search.found.boxes += 1;
            search.look_at(region);
        }
        search.found.roots.iter_mut().for_each(|root| search.equations.sharpen(root));
        search.found.scale = search.equations.scale;
        search.found
    }

    fn look_at(&mut self, mut region: Region) {
        let Some(slopes) = self.cut(&mut region) else { return };
        let middle: Vec<f64> = region.iter().map(|side| side.mid()).collect();
        let mut proved = false;
        if let Some(point) = self.equations.approximate(&middle, Some(&region)) {
            proved = self.try_to_prove(&point, &region);
            if self.trim(&mut region) == Kept::Nothing {
                return;
            }
        }
        let on_continuum = !proved && self.found.witnesses.settles(&mut self.equations, &region, &slopes);
        if !on_continuum && self.settle_a_zone() && self.trim(&mut region) == Kept::Nothing {
            return;
        }
        if on_continuum {
            self.found.continuum.push(region);
        } else if self.is_smallest(&region) {
            self.last_look(region);
        } else {
            self.halve(region, &slopes);
        }
    }

    /// Cuts a box until it no longer pays; `None` where nothing is left, or what is left is settled.
    fn cut(&mut self, region: &mut Region) -> Option<Vec<Interval>> {
        let mut slopes = Vec::new();
        for _ in 0..ROUNDS {
            let before = region.clone();
            if self.trim(region) == Kept::Nothing || propagate(&mut self.propagation, region) == Kept::Nothing {
                return None;
            }
            match self.equations.cut(region) {
                Cut::Empty => return None,
                Cut::Left { unique: true, .. } if self.settle(region) => return None,
                Cut::Left { slopes: found, .. } => slopes = found,
            }
            if !shrank(&before, region, WORTHWHILE) {
                break;
            }
        }
        Some(slopes)
    }

    /// Takes away what is settled: all of the box, or what one side leaves.
    fn trim(&self, region: &mut Region) -> Kept {
        let by_root = self.found.roots.iter().any(|root| cut_away(region, &root.unique) == Kept::Nothing);
        if by_root || self.zones.iter().any(|zone| zone.trim(region) == Kept::Nothing) {
            Kept::Nothing
        } else {
            Kept::Something
        }
    }

    /// Settles the surroundings of a singular point met on the way, if there is a new one; whether that did anything.
    fn settle_a_zone(&mut self) -> bool {
        let Some(point) = self.found.witnesses.next_singular() else { return false };
        if self.in_vain >= MOST_IN_VAIN || self.zones.iter().any(|zone| zone.holds(&point)) {
            return false;
        }
        let settled = zone::settle(&mut self.equations, self.tape, self.parameters, &point);
        let Some((around, heap)) = settled else {
            self.in_vain += 1;
            return false;
        };
        let left = match heap {
            Heap::Undecided => return false,
            Heap::Empty => None,
            Heap::Roots(roots) => {
                for root in roots {
                    self.keep(root);
                }
                None
            }
            Heap::Close(close) if !self.is_smallest(&close.within) => Some(close.within),
            Heap::Close(mut close) => {
                close.within.iter_mut().zip(&self.whole).for_each(|(side, whole)| *side = side.intersect(*whole));
                if !close.within.iter().any(|side| side.is_empty()) {
                    self.found.close.push(close);
                }
                None
            }
        };
        self.zones.push(Zone { around, left });
        true
    }

    /// A box that is proved to hold exactly one root: finds and keeps it.
    fn settle(&mut self, region: &Region) -> bool {
        let middle: Vec<f64> = region.iter().map(|side| side.mid()).collect();
        let Some(point) = self.equations.approximate(&middle, None) else { return false };
        let Some(proved) = self.equations.prove(&point, region) else { return false };
        // The root that Newton ran to must be the one in the box.
        if !proved.enclosure.iter().zip(region).all(|(root, side)| root.subset_of(*side)) {
            return false;
        }
        self.keep(proved);
        true
    }

    /// Whether there is a proved root at the point, new or known.
    fn try_to_prove(&mut self, point: &[f64], around: &Region) -> bool {
        let inside = |root: &Proved| root.unique.iter().zip(point).all(|(side, &x)| side.contains(x));
        if self.found.roots.iter().any(inside) {
            return true;
        }
        let proved = self.equations.prove(point, around);
        let found = proved.is_some();
        if let Some(proved) = proved {
            self.keep(proved);
        }
        found
    }

    fn keep(&mut self, proved: Proved) {
        let same = |root: &Proved| {
            let inside = |outer: &Region, inner: &Region| inner.iter().zip(outer).all(|(a, b)| a.subset_of(*b));
            inside(&root.unique, &proved.enclosure) || inside(&proved.unique, &root.enclosure)
        };
        if !self.found.roots.iter().any(same) {
            self.found.roots.push(proved);
        }
    }

    fn is_smallest(&self, region: &Region) -> bool {
        region.iter().zip(&self.equations.scale).all(|(side, &scale)| relative(*side, scale) < SMALLEST)
    }

    /// Cutting may have brought a box down to a point before Newton got a chance.
    fn last_look(&mut self, mut region: Region) {
        let middle: Vec<f64> = region.iter().map(|side| side.mid()).collect();
        if let Some(point) = self.equations.approximate(&middle, None) {
            self.try_to_prove(&point, &region);
        }
        if self.trim(&mut region) != Kept::Nothing {
            self.found.open.push(region);
        }
    }

    fn halve(&mut self, region: Region, slopes: &[Interval]) {
        let side = self.side_to_halve(&region, slopes);
        let cut = place_to_halve(region[side]);
        let mut low = region.clone();
        let mut high = region;
        low[side] = Interval::new(low[side].lo(), cut);
        high[side] = Interval::new(cut, high[side].hi());
        self.queue.extend([low, high]);
    }

    /// The side with the largest summed relative smear (Kearfott & Novoa 1990), unless that leaves another lopsided.
    fn side_to_halve(&self, region: &Region, slopes: &[Interval]) -> usize {
        let n = self.equations.n;
        let width: Vec<f64> = region.iter().map(|side| side.width()).collect();
        let relative: Vec<f64> =
            region.iter().zip(&self.equations.scale).map(|(side, &scale)| relative(*side, scale)).collect();
        let widest = largest(&relative);
        let mut smear = vec![0.0; n];
        for row in slopes.chunks(n) {
            let parts: Vec<f64> = row.iter().zip(&width).map(|(slope, w)| slope.mag() * w).collect();
            let whole: f64 = parts.iter().sum();
            if whole > 0.0 && whole.is_finite() {
                smear.iter_mut().zip(&parts).for_each(|(sum, part)| *sum += part / whole);
            }
        }
        let chosen = largest(&smear);
        let splittable = width[chosen] > 0.0 && smear[chosen] > 0.0;
        if splittable && relative[widest] <= LOPSIDED * relative[chosen] { chosen } else { widest }
    }
}

/// Whether anything is left of a box.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Kept {
    Something,
    Nothing,
}

fn propagate(propagation: &mut Propagation<'_>, region: &mut Region) -> Kept {
    for _ in 0..SWEEPS {
        let before = region.clone();
        if propagation.sweep(region) == Sweep::Empty {
            return Kept::Nothing;
        }
        if !shrank(&before, region, WORTHWHILE) {
            break;
        }
    }
    Kept::Something
}

/// Cuts off what is covered: all of the box, or what one side leaves.
pub(super) fn cut_away(region: &mut Region, covered: &[Interval]) -> Kept {
    let mut uncovered = (0..region.len()).filter(|&i| !region[i].subset_of(covered[i]));
    match (uncovered.next(), uncovered.next()) {
        (None, _) => return Kept::Nothing,
        (Some(i), None) => region[i] = left_of(region[i], covered[i]),
        _ => {}
    }
    Kept::Something
}

/// What is left of a side when an interval that reaches over one of its ends is taken away.
fn left_of(side: Interval, covered: Interval) -> Interval {
    if covered.contains(side.lo()) {
        Interval::new(covered.hi(), side.hi())
    } else if covered.contains(side.hi()) {
        Interval::new(side.lo(), covered.lo())
    } else {
        side
    }
}

fn shrank(before: &Region, after: &Region, share: f64) -> bool {
    before.iter().zip(after).any(|(before, after)| after.width() < share * before.width())
}

fn relative(side: Interval, scale: f64) -> f64 {
    side.width() / side.mag().max(1e-10 * scale)
}

fn largest(values: &[f64]) -> usize {
    let mut best = 0;
    for (i, value) in values.iter().enumerate() {
        if *value > values[best] {
            best = i;
        }
    }
    best
}

/// The middle, or for a side that spans orders of magnitude a quarter of its upper end.
fn place_to_halve(side: Interval) -> f64 {
    if side.lo() >= 0.0 && side.lo() < side.hi() / WIDE_SPAN { side.hi() / 4.0 } else { side.mid() }
}
