//! Whether a changed text still means what it meant, and its new scenario what was asked for.
//!
//! Two models are compared without their places: every formula by its text, every number exactly. Start at [`compare`].

use crate::diag::{Location, Sources};
use crate::expr::constant::evaluate;
use crate::model::{
    Block, Entry, Formula, Harvest, Model, Parameter, ParameterId, Placed, Process, Scenario, Species, Term,
};

/// Whether `new` is `old` and one more scenario at its end: the overlay of `base`, with these values set.
pub(super) fn compare(old: &Model, new: &Model, name: &str, base: Option<usize>, set: &[(ParameterId, f64)]) -> bool {
    let (old, mut new) = (without_places(old), without_places(new));
    let Some(added) = new.scenarios.pop() else { return false };
    let base = base.and_then(|index| old.scenarios.get(index)).cloned().unwrap_or_else(|| empty(name));
    let overlay = Scenario { name: name.to_owned(), values: added.values.clone(), ..base.clone() };
    old == new && added == overlay && has_values(&added.values, &base.values, set)
}

fn empty(name: &str) -> Scenario {
    Scenario {
        name: name.to_owned(),
        at: Location::default(),
        values: Vec::new(),
        without: Vec::new(),
        harvest: Vec::new(),
        processes: Vec::new(),
    }
}

/// Whether the values are those of the base, each replaced where it is set, and then the others that are set.
fn has_values(values: &[(ParameterId, Formula)], base: &[(ParameterId, Formula)], set: &[(ParameterId, f64)]) -> bool {
    let wanted = |id: ParameterId| set.iter().find(|(other, _)| *other == id).map(|&(_, value)| value);
    let kept = |id: ParameterId| base.iter().find(|(other, _)| *other == id).map(|(_, formula)| formula);
    let right = |(id, formula): &(ParameterId, Formula)| match (wanted(*id), kept(*id)) {
        (Some(value), _) => evaluate(&formula.expr, &|_| None).is_some_and(|found| found.to_bits() == value.to_bits()),
        (None, Some(kept)) => formula == kept,
        (None, None) => false,
    };
    let has = |id: ParameterId| values.iter().any(|(other, _)| *other == id);
    values.iter().all(right) && set.iter().all(|(id, _)| has(*id)) && base.iter().all(|(id, _)| has(*id))
}

fn without_places(model: &Model) -> Model {
    let mut model = Model { sources: Sources::default(), ..model.clone() };
    lose(&mut model.title);
    lose(&mut model.time_unit);
    model.species.iter_mut().for_each(species);
    model.parameters.iter_mut().for_each(parameter);
    for shorthand in &mut model.shorthand {
        shorthand.at = Location::default();
        formula(&mut shorthand.formula);
    }
    model.processes.iter_mut().for_each(process);
    model.change.iter_mut().chain(&mut model.next).for_each(term);
    model.harvest.iter_mut().for_each(harvest);
    model.block.iter_mut().for_each(block);
    model.now.iter_mut().for_each(|survey| survey.at = Location::default());
    model.scenarios.iter_mut().for_each(scenario);
    model.correlations.iter_mut().for_each(|correlation| correlation.at = Location::default());
    model.draws.iter_mut().for_each(|draws| draws.at = Location::default());
    model
}

fn lose<T>(placed: &mut Placed<T>) {
    placed.at = Location::default();
}

fn formula(formula: &mut Formula) {
    formula.at = Location::default();
    formula.origin = Vec::new();
}

fn term(term: &mut Term) {
    term.key_at = Location::default();
    formula(&mut term.formula);
}

fn species(species: &mut Species) {
    species.at = Location::default();
    species.unit.iter_mut().for_each(lose);
}

fn parameter(parameter: &mut Parameter) {
    parameter.at = Location::default();
    parameter.value_at = Location::default();
    parameter.unit.iter_mut().for_each(lose);
    parameter.range.iter_mut().for_each(lose);
    parameter.draw.iter_mut().for_each(lose);
}

fn process(process: &mut Process) {
    process.at = Location::default();
    formula(&mut process.rate);
    process.effect.iter_mut().for_each(term);
}

fn harvest(harvest: &mut Harvest) {
    harvest.at = Location::default();
    harvest.amounts.iter_mut().chain(&mut harvest.price).for_each(term);
    harvest.cost.iter_mut().for_each(formula);
}

fn block(block: &mut Block) {
    block.at = Location::default();
    for entry in block.growth.iter_mut().chain(&mut block.matrix) {
        if let Entry::Formula(written) = entry {
            formula(written);
        }
    }
}

fn scenario(scenario: &mut Scenario) {
    scenario.at = Location::default();
    scenario.values.iter_mut().for_each(|(_, written)| formula(written));
    scenario.without.iter_mut().for_each(lose);
    scenario.harvest.iter_mut().for_each(harvest);
    scenario.processes.iter_mut().for_each(process);
}
