//! A model that was read again: the place is kept, and the tried values.
//!
//! Scenarios, parameters and equilibria are the same where their names are. What was found before is shown until it is
//! found again.

use std::sync::Arc;

use crate::app::study::{Slot, Study, Tried, TriedSet, World};
use crate::app::{App, Source};
use crate::model::{Model, Name, ParameterId};

/// The model that is open, as it was read again; where none is open, or another, it is opened.
pub(super) fn reread(app: &mut App, source: &Source, world: &Arc<World>) {
    let Some(old) = app.study.take().filter(|study| study.source == *source) else { return };
    app.edition += 1;
    let tried = carried(&old, &world.original.model, app.edition);
    let study = renewed(&old, world, &app.only, tried);
    let lost = old.tried.now.values.len() - study.tried.now.values.len();
    app.study = Some(study);
    match lost {
        0 => app.say("the file has changed and was read again"),
        _ => app.say(format!("the file was read again; {lost} of the tried values have no parameter there any more")),
    }
}

fn renewed(old: &Study, world: &Arc<World>, only: &[String], tried: Tried) -> Study {
    let model = &world.original.model;
    let shown = shown(model, only);
    let mut study = Study::new(old.source.clone(), Arc::clone(world), shown);
    let is_alike = old.model().species == model.species;
    for slot in &mut study.slots {
        let before = old.slots[..old.of_file()].iter().find(|before| before.name() == slot.name());
        slot.found = before.filter(|_| is_alike).and_then(|before| before.found.clone());
    }
    // The tried scenario as it was before the file changed, until it is ready anew.
    if let Some(slot) = old.tried_slot().and_then(|slot| old.slots.get(slot))
        && is_alike
        && !tried.now.values.is_empty()
    {
        study.slots.push(Slot { ..slot.clone() });
    }
    let was_tried = old.is_tried(old.current);
    let name = old.slot().map(|slot| slot.name().to_owned());
    let same = study.slots[..study.of_file()].iter().position(|slot| Some(slot.name()) == name.as_deref());
    study.current = study.tried_slot().filter(|_| was_tried).or(same).unwrap_or(0);
    study.tried = Tried { follow: was_tried, ..tried };
    if is_alike {
        study.sketch = old.sketch.clone();
        study.interacting = old.interacting;
        study.knock = old.knock;
    }
    if let Some((_, parameter)) = old.parameter() {
        let names = study.parameters().iter().position(|id| model.parameters[id.0].name == parameter.name);
        study.parameter = names.unwrap_or(0);
    }
    study.names = study.slots.iter().map(|slot| names_before(old, slot)).collect();
    study.offer.clone_from(&old.offer);
    study.choose_named(old.name_of_chosen().as_deref());
    study
}

/// Names that a scenario's equilibria had before.
fn names_before(old: &Study, slot: &Slot) -> Vec<String> {
    let is_tried = |place: usize| old.is_tried(place);
    let now_tried = slot.world != old.world && old.slots.iter().any(|other| other.world == slot.world);
    let place = (0..old.slots.len()).find(|&k| old.slots[k].name() == slot.name() && is_tried(k) == now_tried);
    place.filter(|_| slot.found.is_some()).map_or_else(Vec::new, |place| old.names(place).to_vec())
}

/// The scenarios that are shown: those named, or all.
pub(super) fn shown(model: &Model, only: &[String]) -> Vec<usize> {
    let is_wanted = |name: &String| only.is_empty() || only.contains(name);
    let shown: Vec<usize> = (0..model.scenarios.len()).filter(|&k| is_wanted(&model.scenarios[k].name)).collect();
    // Names that were given for another model, or are gone from this one, would leave nothing to look at.
    if shown.is_empty() { (0..model.scenarios.len()).collect() } else { shown }
}

/// What was tried, as far as scenario and parameters are there still, under another edition.
fn carried(old: &Study, model: &Model, edition: u64) -> Tried {
    let carry = |set: &TriedSet| carried_set(old.model(), model, set);
    let all = |sets: &[TriedSet]| sets.iter().filter_map(carry).collect();
    let Some(now) = carry(&old.tried.now).filter(|_| old.tried.edition > 0) else { return Tried::default() };
    let recorded = if old.tried.recorded == old.tried.edition { edition } else { 0 };
    let (undo, redo) = (all(&old.tried.undo), all(&old.tried.redo));
    Tried { now, undo, redo, edition, recorded, ..Tried::default() }
}

fn carried_set(from: &Model, to: &Model, set: &TriedSet) -> Option<TriedSet> {
    let base = to.scenario(&from.scenarios.get(set.base)?.name)?;
    let named = |&(id, value): &(ParameterId, f64)| Some((from.parameters.get(id.0)?.name.clone(), value));
    Some(TriedSet { base, values: found(to, set.values.iter().filter_map(named)) })
}

/// The parameters of those names, with values that their limits allow, in the order of parameters.
pub(super) fn found(model: &Model, values: impl Iterator<Item = (String, f64)>) -> Vec<(ParameterId, f64)> {
    let find = |(name, value): (String, f64)| match model.names.get(&name) {
        Some(Name::Parameter(id)) if model.parameters.get(id.0)?.ruled_out(value).is_none() => Some((*id, value)),
        _ => None,
    };
    let mut found: Vec<_> = values.filter_map(find).collect();
    found.sort_by_key(|(id, _)| *id);
    found
}
