//! Lotka–Volterra communities: every rate is the abundance times an affine function of all abundances.
//!
//! Then the equilibria on a face are the solutions of one linear system, and enumeration is exact. `recognise` reads growth
//! and matrix off the graph, however the rows were written; `enumerate` solves every face while faces are few, `singular`
//! says what a face holds whose matrix is singular, `surface` gives points of it; `assembly` pivots to a community that no absent species invades where
//! faces are too many; `sharpen` takes enclosures to the last digit. All produce [`Equilibria`], as the search for general rates does.

mod assembly;
mod enumerate;
mod recognise;
mod sharpen;
mod singular;
mod surface;

use super::{Budget, Equilibria, Equilibrium, Problem};
use crate::num::interval::Interval;

pub use assembly::{Assembly, assemble};
pub use recognise::recognise;
pub(super) use sharpen::sharpen;

/// Most species that may be absent for every face to be solved: 2^14 linear systems of at most 14 unknowns.
const MOST_FREE: usize = 14;

/// Growth rates per head: growth + matrix · abundances, enclosed at one set of parameters.
#[derive(Clone, Debug, PartialEq)]
pub struct Affine {
    /// Per unit of time, one a species.
    pub growth: Vec<Interval>,
    /// Row by row, per unit of time and abundance of the column's species.
    pub matrix: Vec<Interval>,
}

impl Affine {
    /// How many species.
    pub fn species(&self) -> usize {
        self.growth.len()
    }

    /// The matrix between those present, and what it times their abundances must be: minus their growth.
    fn among(&self, present: &[usize]) -> (Vec<Interval>, Vec<Interval>) {
        let n = self.species();
        let matrix = present.iter().flat_map(|&i| present.iter().map(move |&j| self.matrix[i * n + j]));
        (matrix.collect(), present.iter().map(|&i| -self.growth[i]).collect())
    }

    /// Growth per head of a species among those present, at abundances in an enclosure.
    fn rate(&self, species: usize, present: &[usize], abundances: &[Interval]) -> Interval {
        let row = &self.matrix[species * self.species()..(species + 1) * self.species()];
        present.iter().zip(abundances).fold(self.growth[species], |sum, (&j, &x)| sum + row[j] * x)
    }
}

/// The equilibria of a Lotka–Volterra community in the box: all of them with proof while faces are few, else those that no
/// absent species can invade, as pivoting finds them.
pub fn find(community: &Affine, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let free = problem.sides.iter().filter(|side| side[0] <= 0.0).count();
    if free <= MOST_FREE {
        enumerate::every_face(community, problem, budget)
    } else {
        assembly::uninvadable(community, problem, budget)
    }
}

/// An equilibrium with these species present at abundances in these enclosures, which hold exactly one.
fn proved(n: usize, present: &[usize], enclosure: &[Interval]) -> Equilibrium {
    let mut all = vec![Interval::ZERO; n];
    for (&i, &side) in present.iter().zip(enclosure) {
        all[i] = side;
    }
    let state = all.iter().map(|side| side.mid()).collect();
    // Quadratic rates have a derivative everywhere.
    Equilibrium { state, enclosure: all, proven: true, derivative: super::Derivative::Exists }
}
