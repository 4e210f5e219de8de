//! What comes from outside: answers, files that were written, a model that has changed.

use std::sync::Arc;

use super::acts::reload;
use super::reread::{reread, shown};
use super::{chooser, entry, record, session};
use crate::app::study::{Slot, World};
use crate::app::task::{Answer, Task};
use crate::app::{App, Dialog, Effect, JobId, Msg, Read, Screen, Source, Study};
use crate::diag::render::render;

pub(super) fn arrive(app: &mut App, msg: Msg) -> Vec<Effect> {
    match msg {
        Msg::Answered(id, answer) => return answered(app, id, answer),
        Msg::Partly(id, answer) => app.desk.take_part(id, answer),
        Msg::Advanced(id, progress) => app.desk.advance(id, progress),
        Msg::Written(what) => record::written(app, what),
        Msg::Completed(asked, completion) => entry::completed(app, &asked, completion),
        Msg::Suggested(path) => record::suggestion(app, path),
        Msg::Listed(listing, entry) => chooser::listed(app, listing, entry),
        Msg::AllListed(listing) => chooser::all_listed(app, listing),
        Msg::Recalled(source, session) => session::recalled(app, &source, session),
        Msg::Remarked(text) => app.say(text),
        Msg::Changed => reload(app),
        Msg::Struck(_) | Msg::Pasted(_) | Msg::Resized(_) | Msg::Resumed => {}
    }
    Vec::new()
}

fn answered(app: &mut App, id: JobId, answer: Answer) -> Vec<Effect> {
    match (app.desk.take(id, answer.clone()), answer) {
        (Some(Task::Read(source, ..)), Answer::Read(read)) => return read_model(app, source, read),
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
            // What was wrong with the file has been mended.
            if matches!(app.dialog, Some(Dialog::Message { .. })) {
                app.dialog = None;
            }
            if is_again {
                reread(app, &source, &world);
            } else {
                open(app, source.clone(), &world);
            }
            let watch = Effect::Watch(source.clone(), Arc::clone(&world));
            return if is_again { vec![watch] } else { vec![watch, Effect::Recall(source, world)] };
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
    let model = &world.original.model;
    let mut study = Study::new(source, Arc::clone(world), shown(model, &app.only));
    // The copy that was recorded last is opened for its new scenario.
    let copy = app.copy.as_ref().filter(|(path, _)| study.source == Source::File(path.clone()));
    let place = copy.and_then(|(_, scenario)| study.slots.iter().position(|slot| slot.name() == scenario));
    study.current = place.unwrap_or(0);
    app.study = Some(study);
    app.screen = Screen::Equilibria;
    app.notice = None;
    app.dialog = None;
    let unknown: Vec<&str> =
        app.set.iter().map(|(name, _)| name.as_str()).filter(|name| !model.names.contains_key(*name)).collect();
    if !unknown.is_empty() {
        app.complain(format!("this model has no parameter {}, which was set at the start", unknown.join(", ")));
    }
}

/// The tried scenario has its equations: it takes the last slot. What was found with other values is shown until it is
/// searched.
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
    if std::mem::take(&mut study.tried.follow) {
        study.current = of_file;
    }
    study.choose_named(wanted.as_deref());
}
