//! What is compared: abundances, return times, yields, values; each a number of an equilibrium, exact as in files.

use super::super::table::columns::{Unit, sums, total};
use super::super::table::{Scene, Table};
use crate::analysis::measures::Measures;

/// A number that an equilibrium may have.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Quantity {
    /// What it is of.
    pub measured: Measured,
    /// What it is called, in files and for people.
    pub name: String,
    /// Its unit, where there is one to be said.
    pub unit: String,
}

/// What a quantity is of.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Measured {
    /// Abundance of a species, by index.
    State(usize),
    /// How long a small knock takes to fade.
    ReturnTime,
    /// What the harvest of this name takes, of all species whose yield is in the quantity's unit.
    Yield(String),
    /// What the harvest of this name is worth.
    Value(String),
}

/// All that is compared in the scenarios of a table.
pub(super) fn quantities(table: &Table<'_>) -> Vec<Quantity> {
    let species = table.model.species.iter().enumerate();
    let mut all: Vec<Quantity> = species
        .map(|(i, species)| Quantity {
            measured: Measured::State(i),
            name: species.symbol.clone(),
            unit: Unit::State.of(table, Some(i)),
        })
        .collect();
    let unit = Unit::Time.of(table, None);
    all.push(Quantity { measured: Measured::ReturnTime, name: "return time".to_owned(), unit });
    for (harvest, unit) in sums(table) {
        all.push(Quantity { name: format!("yield {harvest}"), measured: Measured::Yield(harvest), unit });
    }
    for harvest in priced(table) {
        all.push(Quantity {
            name: format!("value {harvest}"),
            measured: Measured::Value(harvest),
            unit: String::new(),
        });
    }
    all
}

/// Harvests that have a price or a cost in some scenario.
fn priced(table: &Table<'_>) -> Vec<String> {
    let mut names: Vec<String> = Vec::new();
    for scene in table.scenes {
        for harvest in table.model.harvests_under(scene.scenario) {
            let is_priced = harvest.cost.is_some() || !harvest.price.is_empty();
            if is_priced && !names.contains(&harvest.name) {
                names.push(harvest.name.clone());
            }
        }
    }
    names
}

impl Quantity {
    /// Its number at an equilibrium of a scenario, both by place; `None` where there is none that is finite.
    pub(super) fn of(&self, table: &Table<'_>, scene: usize, place: usize) -> Option<f64> {
        let scene: &Scene = table.scenes.get(scene)?;
        let solved = scene.outcome.as_ref().ok()?;
        let measures = || -> Option<&Measures> { Some(&solved.assessment.equilibria.get(place)?.measures) };
        let number = match &self.measured {
            Measured::State(i) => solved.equilibria.list.get(place)?.state.get(*i).copied(),
            Measured::ReturnTime => measures()?.return_time,
            Measured::Yield(name) => total(table, scene.scenario, &measures()?.yields, name, &self.unit),
            Measured::Value(name) => measures()?.yields.iter().find(|one| one.name == *name)?.value,
        };
        number.filter(|x| x.is_finite())
    }
}
