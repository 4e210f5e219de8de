//! Where paths go: what an unstable state gives way to, and where today's stocks lead. Numerical results, never proofs.
//!
//! [`Paths`] is the way in, and for single questions [`settles()`] and [`from_now()`]; [`follow()`] records a path for
//! drawing, `between` reads it. `grounds` keeps what paths on one face share, `face` has the equations in the coordinates in which they are
//! followed, `walk` takes steps until someone is lost, `trail` keeps them; `settle` and `maps` go on until it is clear where
//! a path ends: in a `basin`, or on a turn that `returns`, which `cycle` measures. `cloud` draws starts from the survey,
//! `flock` follows them all at once.

mod basin;
mod beside;
mod between;
mod cloud;
mod cycle;
mod face;
mod flock;
mod follow;
mod grounds;
mod maps;
mod now;
mod returns;
mod settle;
mod shells;
mod trail;
mod walk;

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::subject::Subject;
use crate::model::SpeciesId;
use grounds::Grounds;
use settle::{Ending, Known};

pub use beside::{is_unstable_coexistence, settles};
pub use follow::{Ended, Path, follow};
pub use now::from_now;

/// Where a path ends up.
#[derive(Clone, Debug, PartialEq)]
pub enum Destination {
    /// At the equilibrium of this index in the scenario's list.
    Equilibrium(usize),
    /// On a cycle with all species that were there.
    Cycle(Cycle),
    /// One or more species are lost on the way.
    Loss(Vec<SpeciesId>),
    /// None of these within the time that it was followed.
    NotSettled,
}

/// A cycle that a path settles on.
#[derive(Clone, Debug, PartialEq)]
pub struct Cycle {
    /// Time units.
    pub period: f64,
    /// Lowest abundance of each species.
    pub lowest: Vec<f64>,
    /// Highest abundance of each species.
    pub highest: Vec<f64>,
    /// Mean of what each harvest in force takes of each species, per time unit (for a map per step); in the plan's order.
    pub mean_yield: Vec<Vec<(SpeciesId, f64)>>,
}

/// Where today's stocks lead under a scenario.
#[derive(Clone, Debug, PartialEq)]
pub struct FromNow {
    /// Where the path from the survey's values ends.
    pub reaches: Destination,
    /// How long until it stays within 10 % of that; time units. `None` where it does not settle.
    pub time: Option<f64>,
    /// Lowest abundance of each species on the way.
    pub lowest: Vec<f64>,
    /// Shares of starts in the survey's 95 % cloud that reach each destination, by falling share; empty where the survey
    /// gives no spread. Cycles count as one.
    pub shares: Vec<(Destination, f64)>,
    /// How many starts the shares rest on.
    pub starts: usize,
    /// Whether the budget ended before the paths did: there are no shares then, and the destination may be for want of time.
    pub broken_off: bool,
}

/// What paths of one scenario go to. Equations and regions are made when they are first needed, and kept.
pub struct Paths<'k> {
    grounds: Grounds<'k>,
}

impl<'k> Paths<'k> {
    /// Of a scenario's equilibria and their linear parts, one an equilibrium. Paths are no longer followed once `stop` says
    /// so.
    pub fn new(
        subject: &mut Subject<'_>,
        list: &'k [Equilibrium],
        linear: &'k [Option<&'k Linearisation>],
        stop: &'k dyn Fn() -> bool,
    ) -> Self {
        Self { grounds: Grounds::new(subject, Known { list, linear, stop }) }
    }

    /// Follows the path from a state of all species to its end.
    fn go(&mut self, subject: &mut Subject<'_>, start: &[f64]) -> Ending {
        match subject.step() {
            None => settle::settle(subject, &mut self.grounds, start),
            Some(step) => maps::settle(subject, &mut self.grounds, start, step),
        }
    }
}
