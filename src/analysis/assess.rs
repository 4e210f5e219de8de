//! All that is said of a scenario's equilibria once they are found.

use super::linearise::{Linearisation, Unavailable};
use super::measures::Measures;
use super::paths::{Destination, FromNow};

/// What is said of one equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Assessed {
    /// Its linear part, or why there is none.
    pub linear: Result<Linearisation, Unavailable>,
    /// What the linear part means.
    pub measures: Measures,
    /// What a path released beside an unstable state of coexistence goes to; `None` for all others.
    pub settles: Option<Destination>,
}

/// What is said of a scenario.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Assessment {
    /// One entry an equilibrium, in the order of the list.
    pub equilibria: Vec<Assessed>,
    /// Where today's stocks lead; `None` where the model file does not say where they stand.
    pub from_now: Option<FromNow>,
}
