//! What comes from outside: answers, files that were written, a model that has changed.

use std::sync::Arc;

use super::acts::reload;
use crate::app::study::{Slot, World};
use crate::app::task::{Answer, Task};
use crate::app::{App, Dialog, Effect, JobId, Msg, Read, Screen, Source, Study};
use crate::diag::render::render;

pub(super) fn arrive(app: &mut App, msg: Msg) -> Vec<Effect> {
    match msg {
        Msg::Answered(id, answer) => return answered(app, id, answer),
        Msg::Advanced(id, progress) => app.desk.advance(id, progress),
        Msg::Written(Ok(path)) => app.say(format!("written to {}", path.display())),
        Msg::Written(Err(reason)) => app.complain(reason),
        Msg::Changed => reload(app),
        Msg::Struck(_) | Msg::Pasted(_) | Msg::Resized(_) | Msg::Resumed => {}
    }
    Vec::new()
}

fn answered(app: &mut App, id: JobId, answer: Answer) -> Vec<Effect> {
    match (app.desk.take(id, answer.clone()), answer) {
        (Some(Task::Read(source, _)), Answer::Read(read)) => return read_model(app, source, read),
        (Some(Task::Solve { world, .. }), Answer::Solved(scene)) => {
            if let Some(study) = &mut app.study {
                study.take(&world, *scene);
            }
        }
        (Some(Task::Name { .. }), Answer::Named(names)) => {
            if let Some(study) = &mut app.study {
                // It was asked for just these: whoever is found since then asks anew.
                let slots = study.nameable();
                study.name(slots, &names);
            }
        }
        (Some(Task::Prepare(..)), Answer::Prepared(Ok(world))) => prepared(app, world),
        (Some(Task::Prepare(..)), Answer::Prepared(Err(reason))) => app.complain(reason),
        _ => {}
    }
    Vec::new()
}

/// A model was read: it is opened, or takes the place of what it was before the file changed.
fn read_model(app: &mut App, source: Source, read: Read) -> Vec<Effect> {
    app.reading = None;
    let is_again = app.study.as_ref().is_some_and(|study| study.source == source);
    match read {
        Read::Ready(world) => {
            let tables = world.original.tables.iter().map(|(name, _)| name.clone()).collect();
            if is_again {
                again(app, &world);
                app.say("the file was read again");
            } else {
                open(app, source.clone(), &world);
            }
            return vec![Effect::Watch(source, tables)];
        }
        Read::Wrong(sources, found) => {
            let lines = found.iter().flat_map(|one| {
                let text = render(one, &sources, false);
                text.lines().map(str::to_owned).collect::<Vec<_>>()
            });
            let title = if is_again {
                "The file has changed and cannot be used; below is what it was"
            } else {
                "The model cannot be used"
            };
            app.dialog = Some(Dialog::Message { title: title.to_owned(), lines: lines.collect(), from: 0 });
        }
        Read::Unreadable(reason) => app.complain(reason),
    }
    Vec::new()
}

fn open(app: &mut App, source: Source, world: &Arc<World>) {
    let scenarios = &world.original.model.scenarios;
    let is_wanted = |name: &String| app.only.is_empty() || app.only.contains(name);
    let shown: Vec<usize> = (0..scenarios.len()).filter(|&k| is_wanted(&scenarios[k].name)).collect();
    app.study = Some(Study::new(source, Arc::clone(world), shown));
    app.screen = Screen::Equilibria;
    app.notice = None;
}

/// Keeps the place: scenarios by name, the equilibrium by name, the sketch as it is; what was found is shown until it is
/// found again.
fn again(app: &mut App, world: &Arc<World>) {
    let Some(old) = app.study.take() else { return };
    let model = &world.original.model;
    let current = old.slot().map(|slot| slot.name().to_owned());
    let chosen = old.name_of_chosen();
    let mut study = Study::new(old.source.clone(), Arc::clone(world), 0..model.scenarios.len());
    let is_alike = old.model().species == model.species;
    for slot in &mut study.slots {
        let before = old.slots.iter().find(|before| before.name() == slot.name());
        slot.found = before.filter(|_| is_alike).and_then(|before| before.found.clone());
    }
    study.current = study.slots.iter().position(|slot| Some(slot.name()) == current.as_deref()).unwrap_or(0);
    if is_alike {
        study.sketch = old.sketch.clone();
        study.interacting = old.interacting;
        study.knock = old.knock;
    }
    study.names = study.slots.iter().map(|slot| names_before(&old, slot.name())).collect();
    study.choose_named(chosen.as_deref());
    app.study = Some(study);
}

/// The tried scenario has its equations: it takes the last slot.
fn prepared(app: &mut App, world: Arc<World>) {
    let Some(study) = &mut app.study else { return };
    if world.edition != study.tried.edition {
        return;
    }
    let scenario = world.original.model.scenarios.len().saturating_sub(1);
    let of_file = study.of_file();
    let base = study.tried.now.base;
    // What is shown until it is searched: what was tried before, else what its base has.
    let before =
        if study.slots.len() > of_file { Some(of_file) } else { study.slots.iter().position(|s| s.scenario == base) };
    let found = before.and_then(|place| study.slots[place].found.clone());
    let names = before.map_or_else(Vec::new, |place| study.names(place).to_vec());
    let wanted = study.name_of_chosen().or(study.wanted.take());
    study.slots.truncate(of_file);
    study.slots.push(Slot { world, scenario, found });
    study.names.resize(of_file + 1, Vec::new());
    study.names[of_file] = names;
    study.current = of_file;
    study.choose_named(wanted.as_deref());
}

/// Names that a scenario's equilibria had before the file changed.
fn names_before(old: &Study, scenario: &str) -> Vec<String> {
    let place = old.slots.iter().position(|slot| slot.name() == scenario);
    place.map_or_else(Vec::new, |place| old.names(place).to_vec())
}
