//! The only function that changes the state. Each answers with what is to be done outside.
//!
//! `acts` does what the user wants on every screen, `sketch` what concerns the sketch, `interactions` and `knock` what concerns
//! those, `values` tried values, `entry` what is typed, `arrivals` what comes from outside. [`update()`] restores at its end what always holds: whatever is selected is
//! there and in sight; and asks for what the screen needs.

mod acts;
mod arrivals;
mod entry;
mod interactions;
mod knock;
mod sketch;
mod values;

use super::geometry::{equilibria, listed, scrolled};
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
    settle(app);
    let wanted = wants(app);
    effects.extend(app.desk.demand(&wanted));
    effects
}

/// What is selected is there, and in sight.
fn settle(app: &mut App) {
    let size = app.size;
    app.chooser.chosen = app.chooser.chosen.min(app.chooser.entries.len().saturating_sub(1));
    let room = usize::from(super::geometry::frame(size).body.rows.saturating_sub(1));
    app.chooser.from = scrolled(app.chooser.from, app.chooser.chosen, app.chooser.entries.len(), room);
    let Some(study) = &mut app.study else { return };
    study.current = study.current.min(study.slots.len().saturating_sub(1));
    let count = study.count();
    study.chosen = study.chosen.min(count.saturating_sub(1));
    study.from = scrolled(study.from, study.chosen, count, listed(equilibria(size, count).list));
    let parameters = study.model().parameters.len();
    study.parameter = study.parameter.min(parameters.saturating_sub(1));
    interactions::settle(app);
    knock::settle(app);
}
