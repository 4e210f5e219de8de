//! Which two harvests a front is of; or why there is none.
//!
//! A front weighs one amount against another, so each harvest must take one species, and one that is to be kept: of a pest
//! nobody wants the largest catch. Start at [`Harvested::of`].

use super::equations::Equations;
use super::{NoFront, Taking};
use crate::expr::graph::Operation;
use crate::model::{Aim, Model};

/// Two harvests.
pub(super) struct Harvested {
    /// What either takes.
    pub(super) takings: [Taking; 2],
    /// Places of its amounts in the list of takings.
    pub(super) parts: [Vec<usize>; 2],
}

impl Harvested {
    /// The two harvests of these equations, or of more than two those that a control is in.
    pub(super) fn of(equations: &Equations, model: &Model) -> Result<Self, NoFront> {
        let takings = &equations.takings;
        let is_kept = |taking: &Taking| taking.species.is_some_and(|id| model.species[id.0].aim == Aim::Keep);
        let mut harvests: Vec<Vec<usize>> = Vec::new();
        for (place, taking) in takings.iter().enumerate().filter(|(_, taking)| is_kept(taking)) {
            match harvests.iter_mut().find(|parts| takings[parts[0]].harvest == taking.harvest) {
                Some(parts) => parts.push(place),
                None => harvests.push(vec![place]),
            }
        }
        if harvests.len() > 2 {
            harvests.retain(|parts| parts.iter().any(|&place| is_controlled(equations, place)));
        }
        let is_mixed = |parts: &&Vec<usize>| parts.iter().any(|&k| takings[k].species != takings[parts[0]].species);
        let count = harvests.len();
        if let Some(mixed) = harvests.iter().find(is_mixed).filter(|_| count == 2) {
            return Err(NoFront::SeveralSpecies(takings[mixed[0]].harvest.clone()));
        }
        match <[Vec<usize>; 2]>::try_from(harvests) {
            Ok(parts) => Ok(Self { takings: [0, 1].map(|i| takings[parts[i][0]].clone()), parts }),
            Err(_) => Err(NoFront::Harvests(count)),
        }
    }
}

/// Whether a control stands in what a taking is.
fn is_controlled(equations: &Equations, place: usize) -> bool {
    let controls = equations.control(0)..=equations.control(1);
    let nodes = equations.graph.reachable(&[equations.given[place]]);
    nodes.iter().any(|&node| matches!(equations.graph.operation(node), Operation::State(i) if controls.contains(&i)))
}

/// Whether all amounts taken may be added.
pub(super) fn are_of_one_unit<'t>(model: &Model, takings: impl IntoIterator<Item = &'t Taking>) -> bool {
    let unit = |taking: &Taking| {
        let species = &model.species[taking.species?.0];
        Some(species.unit.as_ref().map(|unit| unit.value.split_whitespace().collect::<String>()))
    };
    let mut units = takings.into_iter().filter_map(unit);
    let first = units.next();
    units.all(|unit| Some(unit) == first)
}
