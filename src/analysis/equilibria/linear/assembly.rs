//! The equilibria of a large community that no absent species can invade, by complementary pivoting.
//!
//! With w = −(growth + A x) the conditions x ≥ 0, w ≥ 0, x_i w_i = 0 say just that: who is present is in balance, who is
//! absent cannot grow. One pivoting run finds one such state; other covers start it elsewhere, and may find alternative ones.
//! What is found is then proved on its own: the balance by a verified solve, the rates of those absent by their sign.

use super::super::{Budget, Equilibria, Equilibrium, Probably, Problem, Unresolved, order};
use super::{Affine, proved};
use crate::num::complementarity::{Limits, Pivoted, pivot};
use crate::num::interval::Interval;
use crate::num::random::Source;
use crate::num::solve::{equilibrate, solve, unit_of};

/// Pivots for each species before a run is given up; n to 2 n are usual.
const PIVOTS_A_SPECIES: usize = 50;
/// Multiplications that all runs together may take, at n³ a run; the first is always made.
const MOST_WORK: usize = 40_000_000;
/// Runs at most.
const MOST_RUNS: usize = 64;

/// How one pivoting run ended.
#[derive(Clone, Debug, PartialEq)]
pub enum Assembly {
    /// A community in balance.
    Found {
        /// The state; `proven` says whether the balance is.
        equilibrium: Equilibrium,
        /// Whether every absent species is proved to decline when it is rare.
        uninvadable: bool,
    },
    /// Pivoting ran off along a ray; in a community where every species limits itself enough, it cannot.
    Ray,
    /// The bound on pivots was reached.
    TooManyPivots,
    /// The budget said stop.
    Stopped,
    /// Pivoting ended at a community whose balance could not be proved, or one with an abundance of 0.
    NotProved {
        /// Who is present.
        present: Vec<usize>,
    },
}

/// One run of pivoting, with a positive weight for each species: the harder it is pressed into the community at first.
///
/// # Panics
/// If there are not as many weights as species.
pub fn assemble(community: &Affine, weights: &[f64], stop: &dyn Fn() -> bool) -> Assembly {
    let n = community.species();
    assert_eq!(weights.len(), n, "weights");
    let limits = Limits { pivots: PIVOTS_A_SPECIES * n, stop };
    let [rows, columns] = equilibrate(&community.matrix, n);
    let q: Vec<f64> = community.growth.iter().zip(&rows).map(|(growth, unit)| -growth.mid() * unit).collect();
    let size = unit_of(q.iter().fold(0.0, |size, q| q.abs().max(size)));
    let q: Vec<f64> = q.iter().map(|q| q * size).collect();
    let entry = |(k, entry): (usize, &Interval)| -entry.mid() * rows[k / n] * columns[k % n];
    let m: Vec<f64> = community.matrix.iter().enumerate().map(entry).collect();
    // The same pressure on every growth rate, which all have one unit, whatever the units of abundance.
    let cover: Vec<f64> = weights.iter().zip(&rows).map(|(weight, unit)| weight * unit).collect();
    let largest = unit_of(cover.iter().fold(0.0, |largest, d| d.max(largest)));
    let cover: Vec<f64> = cover.iter().map(|d| d * largest).collect();
    match pivot(&q, &m, &cover, &limits) {
        Pivoted::Solution { z, .. } => prove(community, (0..n).filter(|&i| z[i] > 0.0).collect(), stop),
        Pivoted::Ray => Assembly::Ray,
        Pivoted::TooManyPivots => Assembly::TooManyPivots,
        Pivoted::Stopped => Assembly::Stopped,
    }
}

fn prove(community: &Affine, present: Vec<usize>, stop: &dyn Fn() -> bool) -> Assembly {
    let n = community.species();
    let (matrix, right) = community.among(&present);
    let enclosure = solve(&matrix, &right, stop);
    match enclosure.filter(|enclosure| enclosure.iter().all(|side| side.lo() > 0.0)) {
        Some(enclosure) => {
            let absent = (0..n).filter(|i| present.binary_search(i).is_err());
            let uninvadable = absent.into_iter().all(|i| community.rate(i, &present, &enclosure).hi() < 0.0);
            Assembly::Found { equilibrium: proved(n, &present, &enclosure), uninvadable }
        }
        None if stop() => Assembly::Stopped,
        None => Assembly::NotProved { present },
    }
}

/// The assemblies that pivoting finds, and the state without anyone; never complete.
pub(super) fn uninvadable(community: &Affine, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let n = community.species();
    let runs = (MOST_WORK / (n * n * n)).clamp(1, MOST_RUNS);
    let mut source = Source::new(n as u64);
    let mut list: Vec<Equilibrium> = Vec::new();
    let mut first = None;
    let mut made = 0;
    let mut all_uninvadable = true;
    for run in 0..runs {
        let weight = |_| if run == 0 { 1.0 } else { source.between(-3.0, 3.0).exp2() };
        let weights: Vec<f64> = (0..n).map(weight).collect();
        let assembly = assemble(community, &weights, &|| (budget.stop)());
        let stopped = assembly == Assembly::Stopped;
        made += 1;
        if let Assembly::Found { equilibrium, uninvadable } = &assembly
            && is_in_box(equilibrium, problem)
            && !list.iter().any(|known| present_alike(known, equilibrium))
        {
            list.push(equilibrium.clone());
            all_uninvadable &= uninvadable;
        }
        first.get_or_insert(assembly);
        if stopped {
            break;
        }
    }
    let text = sentence(n, list.len(), all_uninvadable, first.as_ref());
    let nobody = proved(n, &[], &[]);
    if is_in_box(&nobody, problem) && !list.iter().any(|known| present_alike(known, &nobody)) {
        list.push(nobody);
    }
    list.sort_by(order);
    let region = problem.sides.iter().map(|side| Interval::new(side[0], side[1])).collect();
    let unresolved = vec![Unresolved::new(region, Probably::Budget, text)];
    Equilibria { faces: list.len(), list, unresolved, complete: false, none_above: false, boxes: made }
}

fn is_in_box(equilibrium: &Equilibrium, problem: &Problem<'_>) -> bool {
    let inside = |(side, limits): (&Interval, &[f64; 2])| side.hi() >= limits[0] && side.lo() <= limits[1];
    equilibrium.enclosure.iter().zip(problem.sides).all(inside)
}

fn present_alike(a: &Equilibrium, b: &Equilibrium) -> bool {
    (0..a.state.len()).all(|i| a.has(i) == b.has(i))
}

/// What was looked for and found, for a reader.
fn sentence(n: usize, found: usize, uninvadable: bool, first: Option<&Assembly>) -> String {
    let faces = format!("{n} species can be present or absent in 2^{n} ways, too many to look at");
    let outcome = match (found, first) {
        (0, Some(Assembly::Ray)) => "no community that absent species cannot invade was found: pivoting ended on a ray",
        (0, Some(Assembly::TooManyPivots)) => "pivoting to a community that cannot be invaded took too many steps",
        (0, Some(Assembly::Stopped)) => "the work was stopped before a community that cannot be invaded was found",
        (0, Some(Assembly::NotProved { .. })) => {
            "a community that cannot be invaded was found, but its balance not proved"
        }
        (0, _) => "the community that cannot be invaded lies outside the search box",
        (1, _) if uninvadable => {
            "listed is a community that no absent species can invade, which is proved, \
                                  and the state without anyone"
        }
        (_, _) if uninvadable => {
            "listed are communities that no absent species can invade, which is proved, \
                                  and the state without anyone"
        }
        (_, _) => {
            "listed is what pivoting to a community that cannot be invaded ended at; that some absent species \
                   cannot invade is not proved"
        }
    };
    format!("{faces}; {outcome}. The list is not proved to be complete.")
}
