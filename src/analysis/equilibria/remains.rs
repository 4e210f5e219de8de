//! What the boxes that stayed open are: settled after all, or said to be open, and what they probably are.

use super::cluster::{Close, Heap, decide};
use super::everywhere;
use super::faces::Face;
use super::newton::{Equations, Proved, Region};
use super::search::Found;
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// What an open region probably is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Probably {
    /// None, one double or two.
    DoubleRoot,
    /// A line or surface of equilibria.
    Continuum,
    /// The rates are not defined, or not differentiable, there.
    NoDerivative,
    /// Two branches of min, max or abs meet at the root.
    Kink,
    /// The work ended before the region was looked at.
    Budget,
}

impl Probably {
    /// The words for it.
    pub fn words(self) -> &'static str {
        match self {
            Self::DoubleRoot => "double root",
            Self::Continuum => "continuum",
            Self::NoDerivative => "no derivative",
            Self::Kink => "kink",
            Self::Budget => "budget",
        }
    }
}

/// A region about which not all was decided.
#[derive(Clone, Debug, PartialEq)]
pub struct Unresolved {
    /// One interval a species.
    pub region: Vec<Interval>,
    /// What it probably is.
    pub probably: Probably,
    /// The same in a sentence.
    pub text: String,
    /// Of a continuum, how many directions lead along it, as far as seen.
    pub dimension: Option<usize>,
    /// Points of a continuum, a few: numerical.
    pub witnesses: Vec<Vec<f64>>,
}

impl Unresolved {
    pub(super) fn new(region: Region, probably: Probably, text: impl Into<String>) -> Self {
        Self { region, probably, text: text.into(), dimension: None, witnesses: Vec::new() }
    }
}

/// What is left of a face's search.
#[derive(Debug, Default)]
pub(super) struct Remains {
    /// Roots that were found in the heaps of open boxes.
    pub(super) roots: Vec<Proved>,
    pub(super) unresolved: Vec<Unresolved>,
}

/// So many points of a continuum are shown.
const SHOWN: usize = 3;

/// Looks once more at what a face's search left open.
pub(super) fn look_again(
    tape: &Tape,
    values: &[f64],
    face: &Face,
    n: usize,
    found: &Found,
    stop: &dyn Fn() -> bool,
) -> Remains {
    let mut remains = Remains::default();
    let mut equations = Equations::new(tape, values, found.scale.clone()).until(stop);
    let out_of_budget =
        |boxes: &[Region], text: String| Unresolved::new(everywhere(&hull_of(boxes), face, n), Probably::Budget, text);
    remains.unresolved.extend(found.close.iter().map(|close| too_close(close, face, n)));
    if found.stopped {
        let text = format!("the budget ended with {} boxes not looked at", found.open.len());
        remains.unresolved.push(out_of_budget(&found.open, text));
        return remains;
    }
    if !found.continuum.is_empty() && found.witnesses.is_continuum() {
        let all: Vec<Region> = found.continuum.iter().chain(&found.open).cloned().collect();
        remains.unresolved.push(continuum(&all, face, n, found));
        return remains;
    }
    let mut left = heaps(found.open.iter().chain(&found.continuum), stop);
    left.reverse();
    while let Some(heap) = left.pop() {
        let decided = decide(&mut equations, tape, values, &heap);
        if stop() {
            left.push(heap);
            let text = "the budget ended before what is degenerate in here was looked at".to_owned();
            remains.unresolved.push(out_of_budget(&left, text));
            break;
        }
        match decided {
            Heap::Empty => {}
            Heap::Roots(mut roots) => {
                for root in &mut roots {
                    equations.sharpen(root);
                }
                remains.roots.extend(roots);
            }
            Heap::Close(mut close) => {
                close.within.iter_mut().zip(&heap).for_each(|(side, heap)| *side = side.intersect(*heap));
                if !close.within.iter().any(|side| side.is_empty()) {
                    remains.unresolved.push(too_close(&close, face, n));
                }
            }
            Heap::Undecided => {
                let (probably, text) = guess(&mut equations, &heap);
                remains.unresolved.push(Unresolved::new(everywhere(&heap, face, n), probably, text));
            }
        }
    }
    remains
}

fn too_close(close: &Close, face: &Face, n: usize) -> Unresolved {
    let count = match (close.least, close.most) {
        (_, 2) => "none, one double or two equilibria",
        (0, _) => "up to three equilibria",
        _ => "one, two or three equilibria",
    };
    let text = format!("{count}: closer together than numbers can tell");
    Unresolved::new(everywhere(&close.within, face, n), Probably::DoubleRoot, text)
}

fn continuum(boxes: &[Region], face: &Face, n: usize, found: &Found) -> Unresolved {
    let dimension = found.witnesses.dimension();
    let shape = match dimension {
        1 => "a line".to_owned(),
        2 => "a surface".to_owned(),
        more => format!("a set of dimension {more}"),
    };
    let at = |point: &Vec<f64>| {
        let mut state = vec![0.0; n];
        face.variables.iter().zip(point).for_each(|(&i, &x)| state[i] = x);
        state
    };
    let witnesses = found.witnesses.seen.iter().take(SHOWN).map(|witness| at(&witness.point)).collect();
    let text = format!("{shape}, as it seems: its points are not isolated");
    let region = everywhere(&hull_of(boxes), face, n);
    Unresolved { witnesses, dimension: Some(dimension), ..Unresolved::new(region, Probably::Continuum, text) }
}

/// Drops a region that lies in another of the same kind: one place may stay open on several faces. Each is held against
/// all others; once `stop` says so, the rest stay as they are.
pub(super) fn gathered(all: Vec<Unresolved>, stop: &dyn Fn() -> bool) -> Vec<Unresolved> {
    let mut kept: Vec<Unresolved> = Vec::new();
    let mut all = all.into_iter();
    while let Some(open) = all.next() {
        if stop() {
            kept.push(open);
            kept.extend(all);
            break;
        }
        let within = |inner: &Unresolved, outer: &Unresolved| {
            inner.probably == outer.probably && inner.region.iter().zip(&outer.region).all(|(a, b)| a.subset_of(*b))
        };
        if !kept.iter().any(|other| within(&open, other)) {
            kept.retain(|other| !within(other, &open));
            kept.push(open);
        }
    }
    kept
}

/// What a heap is that the bordered equations could not decide.
fn guess(equations: &mut Equations<'_>, heap: &[Interval]) -> (Probably, String) {
    let domain = equations.linear(heap).domain;
    if !domain.defined {
        (Probably::NoDerivative, "the rates are not defined, or have no derivative, in here".to_owned())
    } else if !domain.smooth {
        (Probably::Kink, "two branches of min, max, abs or ramp meet in here, at or beside a root".to_owned())
    } else {
        (Probably::DoubleRoot, "a degenerate equilibrium, or several, or none: it could not be decided".to_owned())
    }
}

/// The hulls of boxes that touch each other, or nearly so; once `stop` says so the boxes are taken as they are.
fn heaps<'b>(boxes: impl Iterator<Item = &'b Region>, stop: &dyn Fn() -> bool) -> Vec<Region> {
    let mut heaps: Vec<Region> = Vec::new();
    for region in boxes {
        let mut region = region.clone();
        // Joined to one heap, it may come near another: many looks at all heaps for one box.
        while !stop()
            && let Some(position) = heaps.iter().position(|other| nearly_touch(other, &region))
        {
            let other = heaps.swap_remove(position);
            region = region.iter().zip(&other).map(|(a, b)| a.hull(*b)).collect();
        }
        heaps.push(region);
    }
    heaps
}

/// Whether the gap between two boxes is no wider than the wider of them, on every side.
fn nearly_touch(a: &Region, b: &Region) -> bool {
    a.iter().zip(b).all(|(a, b)| {
        let room = a.width().max(b.width()).max(f64::EPSILON * a.mag());
        a.lo() - room <= b.hi() && b.lo() - room <= a.hi()
    })
}

fn hull_of(boxes: &[Region]) -> Region {
    let mut hull = boxes.first().cloned().unwrap_or_default();
    for region in boxes {
        hull.iter_mut().zip(region).for_each(|(hull, side)| *hull = hull.hull(*side));
    }
    hull
}

#[cfg(test)]
mod tests {
    use std::cell::Cell;

    use super::*;

    fn at(x: f64, width: f64) -> Region {
        vec![Interval::new(x, x + width)]
    }

    /// Stopped, what is left to gather or to join stays as it is: nothing is lost, and `stop` is not asked again.
    #[test]
    fn gathering_and_joining_can_be_stopped_anywhere() {
        for asked in [0, 1, 10, 1000] {
            let count = Cell::new(0);
            let stop = || count.replace(count.get() + 1) >= asked;
            let apart = |k: u16| Unresolved::new(at(2.0 * f64::from(k), 1.0), Probably::DoubleRoot, "");
            let all: Vec<Unresolved> = (0..3000).map(apart).collect();
            assert_eq!(gathered(all.clone(), &stop), all);
            assert_eq!(count.get(), asked + 1);
            count.set(0);
            // Each touches the next, so that every one but the first is joined while joining goes on.
            let chain: Vec<Region> = (0..3000u16).map(|k| at(f64::from(k), 1.0)).collect();
            let heaps = heaps(chain.iter(), &stop);
            let hull = hull_of(&heaps);
            assert_eq!((hull, heaps.len() > 1), (at(0.0, 3000.0), asked < 3000));
        }
    }

    #[test]
    fn a_region_within_another_of_its_kind_is_dropped() {
        let open = |x: f64, width: f64, probably| Unresolved::new(at(x, width), probably, "");
        let (double, kink) = (Probably::DoubleRoot, Probably::Kink);
        let all = vec![open(1.0, 1.0, double), open(0.0, 4.0, double), open(1.0, 1.0, kink), open(2.0, 1.0, double)];
        let kept = vec![open(0.0, 4.0, double), open(1.0, 1.0, kink)];
        assert_eq!(gathered(all, &|| false), kept);
    }
}
