//! What the boxes that stayed open are: settled after all, or said to be open, and what they probably are.

use super::cluster::{Heap, decide};
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
            Heap::DoubleOrTwo => {
                let text = "none, one double or two equilibria: closer together than numbers can tell".to_owned();
                remains.unresolved.push(Unresolved::new(everywhere(&heap, face, n), Probably::DoubleRoot, text));
            }
            Heap::Undecided => {
                let (probably, text) = guess(&mut equations, &heap);
                remains.unresolved.push(Unresolved::new(everywhere(&heap, face, n), probably, text));
            }
        }
    }
    remains
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

/// Drops a region that lies in another of the same kind: one place may stay open on several faces.
pub(super) fn gathered(all: Vec<Unresolved>) -> Vec<Unresolved> {
    let mut kept: Vec<Unresolved> = Vec::new();
    for open in all {
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
        let stopped = stop();
        while !stopped && let Some(position) = heaps.iter().position(|other| nearly_touch(other, &region)) {
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
