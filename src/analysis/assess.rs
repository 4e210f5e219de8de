//! All that is said of a scenario's equilibria once they are found.

use super::equilibria::Equilibria;
use super::linearise::{Linearisation, Lineariser, Unavailable};
use super::measures::{Measures, Meter};
use super::paths::{Destination, FromNow, Paths, is_unstable_coexistence};
use super::subject::Subject;

/// What is said of one equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Assessed {
    /// Its linear part, or why there is none.
    pub linear: Result<Linearisation, Unavailable>,
    /// What the linear part means.
    pub measures: Measures,
    /// What a path released beside an unstable state of coexistence goes to; `None` for all others, and where it comes back
    /// because only absent species can upset the state.
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

/// Linearises and measures every equilibrium, and follows the paths that the table tells of. Paths are no longer followed
/// once `stop` says so.
pub fn assess(subject: &mut Subject<'_>, equilibria: &Equilibria, stop: &dyn Fn() -> bool) -> Assessment {
    let list = &equilibria.list;
    let lineariser = Lineariser::new(subject);
    let linear: Vec<_> = list.iter().map(|equilibrium| lineariser.at(equilibrium)).collect();
    let meter = Meter::new(subject);
    let parts: Vec<Option<&Linearisation>> = linear.iter().map(|linear| linear.as_ref().ok()).collect();
    let measures: Vec<Measures> = list
        .iter()
        .zip(&parts)
        .map(|(equilibrium, linear)| meter.measure(subject, equilibrium, *linear, stop))
        .collect();
    let mut paths = Paths::new(subject, list, &parts, stop);
    let mut release = |which: usize| {
        let unstable = parts[which].is_some_and(|linear| is_unstable_coexistence(subject, &list[which], linear));
        let to = unstable.then(|| paths.settles(subject, which))?;
        // It holds among those who are there and only lets others in: no path without them leaves it.
        (to != Destination::Equilibrium(which)).then_some(to)
    };
    let settles: Vec<Option<Destination>> = (0..list.len()).map(&mut release).collect();
    let from_now = paths.from_now(subject);
    let assessed = |((linear, measures), settles)| Assessed { linear, measures, settles };
    Assessment { equilibria: linear.into_iter().zip(measures).zip(settles).map(assessed).collect(), from_now }
}
