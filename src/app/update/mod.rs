//! The only function that changes the state. Each answers with what is to be done outside.
//!
//! `acts` does what the user wants on every screen, `sketch` what concerns the sketch, `interactions`, `knock` and `response` what
//! concerns those, `values` tried values, `entry` what is typed, `record` what is written, `chooser` which models there are,
//! `arrivals` what comes from outside, `reread` a file that has changed, `session` what outlives the program. [`update()`]
//! restores at its end what always holds: whatever is selected is
//! there and in sight; and asks for what the screen needs.

mod acts;
mod arrivals;
mod chooser;
mod entry;
mod interactions;
mod knock;
mod record;
mod reread;
mod response;
mod session;
mod sketch;
mod values;

use super::beside::{ids, parts, shown};
use super::geometry::{chooser as chooser_parts, equilibria, listed, scrolled, values as values_parts};
use super::keymap::{Place, lookup, place};
use super::wants::wants;
use super::{App, Effect, Msg};

/// Takes account of something that happened.
pub fn update(app: &mut App, msg: Msg) -> Vec<Effect> {
    let mut effects = match msg {
        Msg::Struck(key) => {
            let place = place(app);
            match lookup(place, key) {
                Some(action) => acts::act(app, action),
                None if place == Place::Typing => entry::edit(app, key),
                None => Vec::new(),
            }
        }
        Msg::Pasted(text) => entry::paste(app, &text),
        Msg::Resized(size) => {
            app.size = size;
            vec![Effect::Redraw]
        }
        Msg::Resumed => vec![Effect::Redraw],
        other => arrivals::arrive(app, other),
    };
    effects.extend(session::keep(app));
    effects.extend(chooser::list(app));
    settle(app);
    let wanted = wants(app);
    effects.extend(app.desk.demand(&wanted));
    effects
}

/// What is selected is there, and in sight.
fn settle(app: &mut App) {
    let size = app.size;
    app.chooser.chosen = app.chooser.chosen.min(app.chooser.entries.len().saturating_sub(1));
    let room = usize::from(chooser_parts(size).list.rows.saturating_sub(1));
    app.chooser.from = scrolled(app.chooser.from, app.chooser.chosen, app.chooser.entries.len(), room);
    let Some(study) = &mut app.study else { return };
    study.current = study.current.min(study.slots.len().saturating_sub(1));
    let count = study.count();
    study.chosen = study.chosen.min(count.saturating_sub(1));
    study.from = scrolled(study.from, study.chosen, count, listed(equilibria(size, count).list));
    let ids = ids(study, size).len();
    study.beside.row = study.beside.row.min(ids.saturating_sub(1));
    let parts = parts(size, shown(study, size).len(), ids);
    study.beside.from = scrolled(study.beside.from, study.beside.row, ids, usize::from(parts.list.rows.max(2)) - 1);
    let parameters = study.model().parameters.len();
    study.parameter = study.parameter.min(parameters.saturating_sub(1));
    let room = listed(values_parts(size, count).list);
    study.parameters_from = scrolled(study.parameters_from, study.parameter, parameters, room);
    interactions::settle(app);
    knock::settle(app);
    response::settle(app);
}
