//! Where paths go: what an unstable state gives way to, and where today's stocks lead. Numerical results, never proofs.

use crate::model::SpeciesId;

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
}
