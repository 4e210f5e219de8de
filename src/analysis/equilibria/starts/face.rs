//! The hunt on one face: starting points, and what Newton's method makes of them, each root proved on its own.

use super::super::border::{Settled, accept, settle};
use super::super::faces::Face;
use super::super::newton::{Equations, Proved, Region};
use super::super::{Candidate, Problem};
use super::descent::Descent;
use crate::analysis::equilibria::Unresolved;
use crate::expr::graph::Graph;
use crate::expr::tape::Tape;
use crate::expr::tape::propagate::Sweep;
use crate::num::interval::Interval;
use crate::num::random::Source;

/// Sweeps of propagation before starting points are drawn.
const SWEEPS: usize = 12;
/// Logarithmic starting points reach from a side's upper end down to this share of it.
const DEPTH: f64 = 1e-7;

/// What a hunt may take.
pub(super) struct Effort<'e> {
    /// Starting points drawn.
    pub(super) starts: usize,
    /// Asked before each starting point and within all that takes long.
    pub(super) stop: &'e dyn Fn() -> bool,
}

/// What a hunt brought.
#[derive(Default)]
pub(super) struct Bag {
    pub(super) roots: Vec<Candidate>,
    /// Roots that may lie outside the orthant, in the coordinates of all species.
    pub(super) open: Vec<Unresolved>,
    /// Starting points used.
    pub(super) starts: usize,
}

/// Looks for roots on a face, from `given` points first and then from drawn ones.
pub(super) fn hunt(
    graph: &mut Graph,
    face: &Face,
    problem: &Problem<'_>,
    given: &[Vec<f64>],
    effort: &Effort<'_>,
) -> Bag {
    let tape = Tape::over(graph, &face.rows, &face.variables);
    let Some(region) = narrowed(&tape, face, problem, effort.stop) else { return Bag::default() };
    let scale: Vec<f64> = region.iter().map(|side| side.mag().clamp(f64::MIN_POSITIVE, f64::MAX)).collect();
    let equations = Equations::new(&tape, problem.values, scale.clone()).until(effort.stop);
    let descent = Descent::new(&tape, problem.values, &face.divided, &scale);
    let mut hunt = Hunt { equations, descent, region, roots: Vec::new(), starts: 0 };
    hunt.run(face, given, effort);
    let mut bag = Bag { starts: hunt.starts, ..Bag::default() };
    let roots = std::mem::take(&mut hunt.roots);
    let mut rates = None;
    for root in &roots {
        match settle(graph, face, root, problem) {
            Some(Settled::Root(candidate)) => {
                let rates = &*rates.get_or_insert_with(|| Tape::new(graph, problem.rows));
                match accept(graph, candidate, rates, problem, effort.stop) {
                    Some(Settled::Root(candidate)) => bag.roots.push(candidate),
                    Some(Settled::Open(open)) => bag.open.push(open),
                    // Stopped: left out, since the list is not complete anyway.
                    None => {}
                }
            }
            Some(Settled::Open(open)) => bag.open.push(open),
            None => {}
        }
    }
    bag
}

/// What propagation leaves of the face's box; `None` where it proves that there is no root, or was stopped.
fn narrowed(tape: &Tape, face: &Face, problem: &Problem<'_>, stop: &dyn Fn() -> bool) -> Option<Region> {
    let exact: Vec<Interval> = problem.values.iter().map(|&value| Interval::point(value)).collect();
    let mut propagation = tape.start_propagation(&exact);
    let side = |&i: &usize| Interval::new(problem.sides[i][0], problem.sides[i][1]);
    let mut region: Region = face.variables.iter().map(side).collect();
    for _ in 0..SWEEPS {
        let before = region.clone();
        if stop() || propagation.sweep(&mut region) == Sweep::Empty {
            return None;
        }
        if region == before {
            break;
        }
    }
    Some(region)
}

struct Hunt<'t> {
    equations: Equations<'t>,
    descent: Descent<'t>,
    region: Region,
    roots: Vec<Proved>,
    starts: usize,
}

impl Hunt<'_> {
    fn run(&mut self, face: &Face, given: &[Vec<f64>], effort: &Effort<'_>) {
        // The seed is the face itself, so that it does not matter in which order faces are looked at.
        let seed = face
            .variables
            .iter()
            .fold(face.variables.len() as u64, |seed, &i| Source::new(seed ^ (i as u64 + 1)).bits());
        let mut source = Source::new(seed);
        let middle: Vec<f64> = self.region.iter().map(|side| side.mid()).collect();
        let corner = (0..middle.len()).map(|k| if face.divided[k] { middle[k] } else { self.region[k].lo() }).collect();
        for start in given.iter().chain([&corner, &middle]) {
            self.try_from(start, effort);
        }
        for k in 0..effort.starts {
            if (effort.stop)() {
                return;
            }
            let start: Vec<f64> = self.region.iter().map(|&side| drawn(side, k, &mut source)).collect();
            self.try_from(&start, effort);
        }
    }

    fn try_from(&mut self, start: &[f64], effort: &Effort<'_>) {
        self.starts += 1;
        let Some(point) = self.descent.root_from(start, effort.stop) else { return };
        let near =
            |(side, &x): (&Interval, &f64)| side.lo() - 1e-6 * side.mag() <= x && x <= side.hi() + 1e-6 * side.mag();
        let known = self.roots.iter().any(|root| root.unique.iter().zip(&point).all(|(side, &x)| side.contains(x)));
        if known || !self.region.iter().zip(&point).all(near) {
            return;
        }
        let polished = self.equations.approximate(&point, None).unwrap_or(point);
        if let Some(mut proved) = self.equations.prove(&polished, &self.region)
            && !self.roots.iter().any(|root| is_same(root, &proved))
        {
            self.equations.sharpen(&mut proved);
            self.roots.push(proved);
        }
    }
}

fn is_same(a: &Proved, b: &Proved) -> bool {
    let inside = |outer: &Region, inner: &Region| inner.iter().zip(outer).all(|(a, b)| a.subset_of(*b));
    inside(&a.unique, &b.enclosure) || inside(&b.unique, &a.enclosure)
}

/// A point of a side: by turns evenly and logarithmically.
fn drawn(side: Interval, k: usize, source: &mut Source) -> f64 {
    let low = side.lo().max(DEPTH * side.hi());
    if k.is_multiple_of(2) && low > 0.0 && low < side.hi() {
        (source.between(low.ln(), side.hi().ln())).exp().clamp(low, side.hi())
    } else {
        source.between(side.lo(), side.hi())
    }
}
