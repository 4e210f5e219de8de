//! What the boxes that stayed open probably are, in words.

use super::newton::Region;
use super::{Candidate, Problem};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// What an open region probably is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Probably {
    /// None, one double or two.
    DoubleRoot,
    /// A line or surface of equilibria.
    Continuum,
    /// The rates are not defined there: 0/0.
    NoDerivative,
    /// Two branches of min, max or abs meet at the root.
    Kink,
    /// The work ended before the region was looked at.
    Budget,
}

/// A region about which nothing was decided.
#[derive(Clone, Debug, PartialEq)]
pub struct Unresolved {
    /// One interval a species.
    pub region: Vec<Interval>,
    /// What it probably is.
    pub probably: Probably,
    /// The same in a sentence.
    pub text: String,
}

/// Gathers open boxes that touch, and says what each heap probably is.
pub(super) fn explain(
    tape: &Tape,
    problem: &Problem<'_>,
    candidates: &[Candidate],
    open: Vec<(Region, bool)>,
) -> Vec<Unresolved> {
    let _ = candidates;
    let exact: Vec<Interval> = problem.values.iter().map(|&value| Interval::point(value)).collect();
    let mut run = tape.start_gradient(&exact);
    let heap = |(region, stopped): (Region, bool)| {
        let domain = run.at(&region);
        let probably = if stopped {
            Probably::Budget
        } else if !domain.defined {
            Probably::NoDerivative
        } else if !domain.smooth {
            Probably::Kink
        } else {
            Probably::DoubleRoot
        };
        Unresolved { text: String::new(), region, probably }
    };
    heaps(open).into_iter().map(heap).collect()
}

/// The hulls of boxes that touch each other.
fn heaps(open: Vec<(Region, bool)>) -> Vec<(Region, bool)> {
    let mut heaps: Vec<(Region, bool)> = Vec::new();
    for (mut region, mut stopped) in open {
        while let Some(position) = heaps.iter().position(|(other, _)| touch(other, &region)) {
            let (other, other_stopped) = heaps.swap_remove(position);
            region = region.iter().zip(&other).map(|(a, b)| a.hull(*b)).collect();
            stopped |= other_stopped;
        }
        heaps.push((region, stopped));
    }
    heaps
}

fn touch(a: &Region, b: &Region) -> bool {
    a.iter().zip(b).all(|(a, b)| !a.intersect(*b).is_empty())
}
