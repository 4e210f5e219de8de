//! Which plane through the states is shown: the species along the axes, and where all others are held.

use crate::analysis::assess::Assessment;
use crate::analysis::equilibria::{Equilibria, Equilibrium};
use crate::analysis::subject::Subject;
use crate::model::{Model, Role};

/// How far a species that is held may be off and the state still be in the plane; relative, no unit. Far above the error
/// of any proved state, far below what an eye could see.
const SAME: f64 = 1e-6;

/// What the species that are not along an axis are held at.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Held {
    /// No species is left to be held.
    Nothing,
    /// At the equilibrium of this index.
    Equilibrium(usize),
    /// At today's stocks: there is no equilibrium.
    Now,
    /// At the lower sides of the search box: there is neither.
    Lower,
}

/// A plane through the states, or for one species a line.
#[derive(Clone, Debug, PartialEq)]
pub struct Slice {
    /// The species along the horizontal axis.
    pub x: usize,
    /// The species along the vertical axis; `None` where there is only one.
    pub y: Option<usize>,
    /// Abundance of every species; those of the axes are of no account.
    pub held: Vec<f64>,
    /// Where that comes from.
    pub from: Held,
}

impl Slice {
    /// The plane along two species; the others are held at the first stable state with all populations, else at the first
    /// of the states with most species.
    pub fn new(subject: &Subject<'_>, [x, y]: [usize; 2], found: &Equilibria, assessment: &Assessment) -> Self {
        let y = (subject.species() > 1).then_some(y);
        let lower: Vec<f64> = subject.sides.iter().map(|side| side[0]).collect();
        let (held, from) = match selected(subject.model, found, assessment) {
            _ if subject.species() <= 2 => (lower, Held::Nothing),
            Some(index) => (found.list[index].state.clone(), Held::Equilibrium(index)),
            None => subject.model.today().map_or((lower, Held::Lower), |now| (now, Held::Now)),
        };
        Self { x, y, held, from }
    }

    /// The default axes: those that the model names, else its first two species.
    pub fn axes(model: &Model) -> [usize; 2] {
        model.sketch.map_or([0, 1], |axes| axes.map(|species| species.0))
    }

    /// Whether a species is held.
    pub fn holds(&self, species: usize) -> bool {
        species != self.x && Some(species) != self.y
    }

    /// Whether a state lies in the plane.
    pub fn has(&self, state: &[f64]) -> bool {
        let is_there =
            |(i, (&a, &b)): (usize, (&f64, &f64))| !self.holds(i) || (a - b).abs() <= SAME * a.abs().max(b.abs());
        state.iter().zip(&self.held).enumerate().all(is_there)
    }

    /// Where a state lies along the axes; 0 upwards for a single species.
    pub fn project(&self, state: &[f64]) -> [f64; 2] {
        let of = |species: usize| state.get(species).copied().unwrap_or(0.0);
        [of(self.x), self.y.map_or(0.0, of)]
    }
}

fn selected(model: &Model, found: &Equilibria, assessment: &Assessment) -> Option<usize> {
    let is_population = |i: usize| model.species.get(i).is_some_and(|species| species.role == Role::Population);
    let coexist = |e: &Equilibrium| (0..e.state.len()).all(|i| e.has(i) || !is_population(i));
    let is_stable = |index: usize| {
        let linear = assessment.equilibria.get(index).and_then(|one| one.linear.as_ref().ok());
        linear.is_some_and(|linear| linear.stable == Some(true))
    };
    let stable = found.list.iter().enumerate().position(|(k, e)| coexist(e) && is_stable(k));
    stable.or_else(|| {
        let count = |e: &Equilibrium| (0..e.state.len()).filter(|&i| e.has(i)).count();
        let most = found.list.iter().map(count).max()?;
        found.list.iter().position(|e| count(e) == most)
    })
}
