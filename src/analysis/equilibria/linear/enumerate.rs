//! Every face of a Lotka–Volterra community: one verified linear solve each.

use std::sync::OnceLock;

use super::super::{Budget, Equilibria, Equilibrium, Probably, Problem, Unresolved, order};
use super::singular::{Held, look_at as look_at_singular};
use super::{Affine, proved, surface};
use crate::num::interval::Interval;
use crate::num::solve::solve;

/// Pieces of work for each worker: a worker that is done takes the next.
const PIECES_A_WORKER: usize = 8;

/// Fewer faces than this are not worth another thread.
const WORTH_SHARING: usize = 256;

/// So many lines and surfaces of equilibria get points.
const MOST_WITNESSED: usize = 64;

/// All equilibria in the box, and what could not be decided.
pub(super) fn every_face(community: &Affine, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let free: Vec<usize> = (0..community.species()).filter(|&i| problem.sides[i][0] <= 0.0).collect();
    let faces = 1usize << free.len();
    let pieces = if faces < WORTH_SHARING { 1 } else { PIECES_A_WORKER * budget.workers.count().max(1) };
    let found: Vec<OnceLock<Faces>> = (0..pieces).map(|_| OnceLock::new()).collect();
    budget.workers.run(pieces, &|piece| {
        let some = piece * faces / pieces..(piece + 1) * faces / pieces;
        // Each piece is done once, so its place is free.
        let _ = found[piece].set(Faces { community, problem, found: Found::new() }.look_at_all(&free, some, budget));
    });
    let found = found.into_iter().filter_map(OnceLock::into_inner).map(|faces| faces.found);
    let mut found = found.fold(Found::new(), Found::and);
    let surfaces = found.unresolved.iter_mut().filter(|open| open.probably == Probably::Continuum);
    surfaces.take(MOST_WITNESSED).for_each(|open| witness(community, open, budget.stop));
    found.finish()
}

/// Gives a line or surface of equilibria some of its points.
fn witness(community: &Affine, open: &mut Unresolved, stop: &dyn Fn() -> bool) {
    let present: Vec<usize> = (0..community.species()).filter(|&i| open.region[i] != Interval::ZERO).collect();
    let (matrix, right) = community.among(&present);
    let sides: Vec<Interval> = present.iter().map(|&i| open.region[i]).collect();
    let points = surface::points(&matrix, &right, &sides, open.dimension.unwrap_or(0), stop);
    let everywhere = |point: Vec<f64>| {
        let mut state = vec![0.0; community.species()];
        present.iter().zip(point).for_each(|(&i, x)| state[i] = x);
        state
    };
    if !points.is_empty() {
        open.text = of_surface(open.dimension.unwrap_or(0), "as it seems");
    }
    open.witnesses = points.into_iter().map(everywhere).collect();
}

fn of_surface(dimension: usize, doubt: &str) -> String {
    let what = if dimension == 1 { "a line" } else { "a surface" };
    format!(
        "those present do not limit each other independently: {what} of equilibria (dimension {dimension}), {doubt}"
    )
}

/// What some faces hold.
struct Found {
    list: Vec<Equilibrium>,
    unresolved: Vec<Unresolved>,
    faces: usize,
    none_above: bool,
}

impl Found {
    fn new() -> Self {
        Self { list: Vec::new(), unresolved: Vec::new(), faces: 0, none_above: true }
    }

    fn and(mut self, other: Self) -> Self {
        self.list.extend(other.list);
        self.unresolved.extend(other.unresolved);
        self.faces += other.faces;
        self.none_above &= other.none_above;
        self
    }

    fn finish(mut self) -> Equilibria {
        self.list.sort_by(order);
        let complete = self.unresolved.is_empty();
        Equilibria {
            list: self.list,
            complete,
            none_above: self.none_above && complete,
            unresolved: self.unresolved,
            boxes: self.faces,
            faces: self.faces,
        }
    }
}

/// Looks at faces.
struct Faces<'f> {
    community: &'f Affine,
    problem: &'f Problem<'f>,
    found: Found,
}

impl Faces<'_> {
    /// Faces by number: bit k says whether the k-th of those that may be absent is present.
    fn look_at_all(mut self, free: &[usize], faces: std::ops::Range<usize>, budget: &Budget<'_>) -> Self {
        for face in faces {
            let absent = |i: usize| free.iter().position(|&f| f == i).is_some_and(|k| face >> k & 1 == 0);
            let present: Vec<usize> = (0..self.community.species()).filter(|&i| !absent(i)).collect();
            if (budget.stop)() || self.look_at(&present, budget.stop).is_none() {
                let region = self.problem.sides.iter().map(|side| Interval::new(side[0], side[1])).collect();
                let text = "the work was stopped before all ways of who is present were looked at";
                self.found.unresolved.push(Unresolved::new(region, Probably::Budget, text));
                break;
            }
            self.found.faces += 1;
        }
        self
    }

    /// `None` where it was stopped.
    fn look_at(&mut self, present: &[usize], stop: &dyn Fn() -> bool) -> Option<()> {
        let (matrix, right) = self.community.among(present);
        if let Some(enclosure) = solve(&matrix, &right, stop) {
            self.judge(present, &enclosure);
        } else {
            let sides: Vec<[f64; 2]> = present.iter().map(|&i| self.problem.sides[i]).collect();
            self.note(present, look_at_singular(&matrix, &right, &sides, stop)?);
        }
        Some(())
    }

    /// The one point at which the rates of those present vanish: is it in the box, with all of them present?
    fn judge(&mut self, present: &[usize], enclosure: &[Interval]) {
        let side = |k: usize| self.problem.sides[present[k]];
        let is_positive = |k: usize| enclosure[k].lo() > 0.0;
        let below = |k: usize| enclosure[k].hi() <= 0.0 || enclosure[k].hi() < side(k)[0];
        let above = |k: usize| enclosure[k].lo() > side(k)[1];
        let all = 0..present.len();
        if all.clone().any(below) {
            return;
        }
        if all.clone().any(above) {
            self.found.none_above = false;
        } else if all.clone().all(is_positive) {
            self.found.list.push(proved(self.community.species(), present, enclosure));
        } else {
            let text = "it cannot be told whether an abundance is 0 here, where another equilibrium lies, or not, which \
                        would make this an equilibrium of its own";
            self.leave_open(present, enclosure, Probably::DoubleRoot, text.to_owned(), None);
        }
    }

    fn note(&mut self, present: &[usize], held: Held) {
        match held {
            Held::Nothing => {}
            Held::NothingInTheBox => self.found.none_above = false,
            Held::Perhaps { region, dimension: 0 } => {
                let text =
                    "those present depend on each other so nearly that no point was proved to be the only one here";
                self.leave_open(present, &region, Probably::DoubleRoot, text.to_owned(), None);
            }
            Held::Perhaps { region, dimension } => {
                let text = of_surface(dimension, "or none");
                self.leave_open(present, &region, Probably::Continuum, text, Some(dimension));
            }
        }
    }

    fn leave_open(
        &mut self,
        present: &[usize],
        among: &[Interval],
        probably: Probably,
        text: String,
        dimension: Option<usize>,
    ) {
        let mut region = vec![Interval::ZERO; self.community.species()];
        for (&i, &side) in present.iter().zip(among) {
            let [low, high] = self.problem.sides[i];
            region[i] = side.intersect(Interval::new(low, high));
        }
        self.found.unresolved.push(Unresolved { dimension, ..Unresolved::new(region, probably, text) });
    }
}
