//! Trying values: every change makes another tried scenario, and can be taken back.

use super::session;
use crate::app::action::{Action, Step};
use crate::app::study::TriedSet;
use crate::app::trial::{COARSE, neat, reach, step};
use crate::app::{App, Study};

/// Changes that can be taken back.
const MOST_CHANGES: usize = 1000;

pub(super) fn act(app: &mut App, action: Action) {
    match action {
        Action::Fine(way) => nudge(app, way, 1.0),
        Action::Coarse(way) => nudge(app, way, COARSE),
        Action::Undo => back(app),
        Action::Redo => forth(app),
        Action::Forget => forget(app),
        _ => {}
    }
}

/// The tried values of the scenario that is looked at come into sight together with their screen.
pub(super) fn show(study: &mut Study) {
    let is_of_this = !study.tried.now.values.is_empty() && study.base() == study.tried.now.base;
    if let Some(slot) = study.tried_slot().filter(|_| is_of_this) {
        turn_to(study, slot);
    }
}

/// Looks at another slot; the selected equilibrium stays the same where there is one of its name.
pub(super) fn turn_to(study: &mut Study, slot: usize) {
    let name = study.name_of_chosen();
    study.current = slot;
    study.choose_named(name.as_deref());
}

fn nudge(app: &mut App, way: Step, steps: f64) {
    let Some(study) = &app.study else { return };
    let Some((id, parameter)) = study.parameter() else { return };
    let Some(value) = study.value(id) else { return };
    let size = step(parameter) * steps;
    let wanted = neat(if way == Step::Back { value - size } else { value + size }, size);
    let [low, high] = reach(parameter, value);
    let reached = wanted.max(low).min(high);
    if reached == value {
        let end = if way == Step::Back { "lower" } else { "upper" };
        let name = &parameter.name;
        app.complain(format!("{name} = {value} is the {end} end that steps go to; what is beyond has to be typed"));
    } else {
        set(app, reached);
    }
}

/// Sets the selected parameter to a value; says why not where it is ruled out.
pub(super) fn set(app: &mut App, value: f64) {
    let Some(study) = &app.study else { return };
    let Some((id, parameter)) = study.parameter() else { return };
    if let Some(reason) = parameter.ruled_out(value) {
        app.complain(reason);
        return;
    }
    let base = study.base();
    let mut values = if base == study.tried.now.base { study.tried.now.values.clone() } else { Vec::new() };
    values.retain(|(other, _)| *other != id);
    if study.own_value(base, id) != Some(value) {
        values.push((id, value));
        values.sort_by_key(|(id, _)| *id);
    }
    change(app, TriedSet { base, values });
}

fn forget(app: &mut App) {
    let Some(study) = &app.study else { return };
    let base = study.tried.now.base;
    if study.tried.now.values.is_empty() {
        app.say("no values are tried");
    } else {
        change(app, TriedSet { base, values: Vec::new() });
        app.say("the tried values are given up");
    }
}

pub(super) fn change(app: &mut App, to: TriedSet) {
    let Some(study) = &mut app.study else { return };
    if study.tried.now == to {
        return;
    }
    // What was offered and not taken up can be come back to.
    if let Some(offered) = session::offered(study) {
        study.tried.undo.push(offered);
    }
    let before = std::mem::replace(&mut study.tried.now, to);
    study.tried.undo.push(before);
    if study.tried.undo.len() > MOST_CHANGES {
        study.tried.undo.remove(0);
    }
    study.tried.redo.clear();
    renew(app);
}

fn back(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    match study.tried.undo.pop() {
        Some(before) => {
            let now = std::mem::replace(&mut study.tried.now, before);
            study.tried.redo.push(now);
            renew(app);
        }
        None => app.say("there is nothing to take back"),
    }
}

fn forth(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    match study.tried.redo.pop() {
        Some(after) => {
            let now = std::mem::replace(&mut study.tried.now, after);
            study.tried.undo.push(now);
            renew(app);
        }
        None => app.say("there is nothing to do again"),
    }
}

/// The tried scenario is another now.
fn renew(app: &mut App) {
    app.edition += 1;
    app.notice = None;
    let edition = app.edition;
    let Some(study) = &mut app.study else { return };
    study.tried.edition = edition;
    study.tried.follow = true;
    if study.tried.now.values.is_empty() {
        drop_slot(study);
    }
}

/// Nothing is tried any more: its scenario comes back into sight.
fn drop_slot(study: &mut Study) {
    let of_file = study.of_file();
    let name = study.name_of_chosen();
    let was_in_sight = study.is_tried(study.current);
    study.slots.truncate(of_file);
    if was_in_sight {
        let base = study.tried.now.base;
        study.current = study.slots.iter().position(|slot| slot.scenario == base).unwrap_or(0);
    }
    study.names.truncate(of_file);
    study.choose_named(name.as_deref());
}
