//! What the user wants, on every screen.

use super::{entry, interactions, knock, record, response, session, sketch, values};
use crate::app::action::{Action, Step};
use crate::app::beside::ids;
use crate::app::geometry::{equilibria, frame, listed, values as parts_of_values};
use crate::app::keymap::{Place, of};
use crate::app::{App, Dialog, Effect, Hold, Screen};

/// More numbers than an equilibrium has lines of; the screen shows the last where that is passed.
const MOST_NUMBERS: usize = 200;

/// Does it.
pub(super) fn act(app: &mut App, action: Action) -> Vec<Effect> {
    match action {
        Action::Leave => return leave(app),
        Action::Suspend => return vec![Effect::Suspend],
        Action::Redraw => return vec![Effect::Redraw],
        Action::Stop => return stop(app),
        Action::Help => app.dialog = Some(Dialog::Help { from: 0 }),
        Action::Show(screen) => show(app, screen),
        Action::Step(step) => walk(app, step),
        Action::Scenario(step) => scenario(app, step),
        Action::Numbers(step) => {
            if let Some(study) = &mut app.study {
                study.facts_from = stepped(study.facts_from, MOST_NUMBERS, 1, step);
            }
        }
        Action::Accept => return entry::accept(app),
        Action::Type => entry::begin(app),
        Action::Write => entry::begin_write(app),
        Action::Record => return record::begin(app),
        Action::OpenCopy => record::open_copy(app),
        Action::TakeUp => session::take_up(app),
        Action::Complete => return entry::complete(app),
        Action::Reload => reload(app),
        Action::Fine(_)
        | Action::Coarse(_)
        | Action::Fit
        | Action::Species(_)
        | Action::Other
        | Action::Threshold(_)
        | Action::TakeOver
            if app.screen == Screen::Response =>
        {
            response::act(app, action);
        }
        Action::Closer
        | Action::Wider
        | Action::Fit
        | Action::Centre
        | Action::Drag
        | Action::Point
        | Action::NoPoint
        | Action::Backwards
        | Action::Species(_)
        | Action::Logarithmic(_)
        | Action::Move(_) => sketch::act(app, action),
        Action::Fine(_) | Action::Coarse(_) | Action::Undo | Action::Redo | Action::Forget => values::act(app, action),
        Action::Other | Action::Absent | Action::Scroll(_) if app.screen == Screen::Interactions => {
            interactions::act(app, action);
        }
        Action::Other | Action::Knock(_) | Action::Scroll(_) if app.screen == Screen::Knock => knock::act(app, action),
        Action::Other => other(app),
        Action::Knock(_) | Action::Absent | Action::Scroll(_) | Action::Threshold(_) | Action::TakeOver => {}
    }
    Vec::new()
}

fn leave(_: &mut App) -> Vec<Effect> {
    vec![Effect::Leave]
}

/// Closes what is open; else ends what is held; else stops the search, which then answers with what it has.
fn stop(app: &mut App) -> Vec<Effect> {
    app.notice = None;
    if app.dialog.take().is_some() {
        return Vec::new();
    }
    if app.hold().is_some() {
        if let Some(study) = &mut app.study {
            study.sketch.hold = None;
        }
        return Vec::new();
    }
    let is_followed = app.screen == Screen::Response;
    let following = app.desk.following().filter(|_| is_followed).map(|job| (job.id, "stopping: what is known stays"));
    let search = app.desk.search().map(|job| (job.id, "stopping the search"));
    if let Some((id, said)) = following.or(search) {
        app.say(said);
        return vec![Effect::Stop(id)];
    }
    if app.study.is_some() && app.screen != Screen::Equilibria {
        app.screen = Screen::Equilibria;
    }
    Vec::new()
}

/// Another kind of the same screen.
fn other(app: &mut App) {
    if let (Screen::SideBySide, Some(study)) = (app.screen, &mut app.study) {
        study.beside.turn();
    }
}

fn show(app: &mut App, screen: Screen) {
    app.notice = None;
    app.screen = screen;
    let size = app.size;
    // What there is may have changed since it was listed.
    app.chooser.listing = 0;
    if let Some(study) = &mut app.study {
        study.sketch.hold = None;
        // The same equilibrium stays selected from one screen to the other.
        let name = study.name_of_chosen();
        let row = ids(study, size).iter().position(|id| Some(*id) == name.as_deref());
        study.beside.row = row.unwrap_or(study.beside.row);
        match screen {
            Screen::Values => values::show(study),
            Screen::Response => response::show(study),
            _ => {}
        }
    }
}

/// Reads the model again under another number, so that it is another task.
pub(super) fn reload(app: &mut App) {
    if let Some(study) = &app.study {
        app.edition += 1;
        app.reading = Some((study.source.clone(), app.edition));
    }
}

/// Through the list of what is open.
fn walk(app: &mut App, step: Step) {
    let page = usize::from(app.size.rows / 2).max(1);
    // Of a text that fills the screen: what it has room for below its heading, and the lines of help.
    let room = usize::from(frame(app.size).body.rows).saturating_sub(2);
    let help = help_lines(app).saturating_sub(room);
    match (&mut app.dialog, app.screen, &mut app.study) {
        (Some(Dialog::Help { from }), ..) => *from = stepped(*from, help, page, step),
        (Some(Dialog::Message { from, lines, .. }), ..) => {
            *from = stepped(*from, (lines.len() + 1).saturating_sub(room), page, step);
        }
        (None, Screen::Chooser, _) => {
            app.chooser.chosen = stepped(app.chooser.chosen, app.chooser.entries.len(), page, step);
        }
        (None, Screen::Values, Some(study)) => {
            let page = listed(parts_of_values(app.size, study.count()).list);
            study.parameter = stepped(study.parameter, study.model().parameters.len(), page, step);
        }
        (None, Screen::Response, Some(_)) => response::walk(app, step),
        (None, Screen::SideBySide, Some(study)) => {
            let ids = ids(study, app.size);
            let row = stepped(study.beside.row, ids.len(), page, step);
            let id = ids.get(row).map(|id| (*id).to_owned());
            study.beside.row = row;
            study.choose_named(id.as_deref());
        }
        (None, _, Some(study)) => {
            let count = study.count();
            let page = listed(equilibria(app.size, count).list);
            study.chosen = stepped(study.chosen, count, page, step);
            study.facts_from = 0;
        }
        _ => {}
    }
}

/// Signs that a sketch has at most, with the line above them.
const MOST_SIGNS: usize = 14;

/// How many lines the help of the screen has, at most.
fn help_lines(app: &App) -> usize {
    let below = match app.hold() {
        Some(Hold::Point) => Place::Pointing,
        Some(Hold::Window) => Place::Dragging,
        None => Place::On(app.screen),
    };
    of(below).count() + MOST_SIGNS
}

/// A place in a list after a step; what lies behind its end is brought back when the list is known.
pub(super) fn stepped(place: usize, count: usize, page: usize, step: Step) -> usize {
    let last = count.saturating_sub(1);
    match step {
        Step::Back => place.saturating_sub(1),
        Step::On => place.saturating_add(1).min(last),
        Step::PageBack => place.saturating_sub(page),
        Step::PageOn => place.saturating_add(page).min(last),
        Step::First => 0,
        Step::Last => last,
    }
}

/// To another scenario, round at the ends; the selected equilibrium stays the same where it has one there.
fn scenario(app: &mut App, step: Step) {
    let Some(study) = &mut app.study else { return };
    let count = study.slots.len().max(1);
    let slot = match step {
        Step::Back => (study.current + count - 1) % count,
        _ => (study.current + 1) % count,
    };
    values::turn_to(study, slot);
}
