//! The screens, drawn: a pure function of the state into a buffer of cells. Nothing here changes anything.
//!
//! [`view`] is the way in, [`text()`] the same as text; `page` has what all screens share (heading, status, keys), `paint` writes texts and grids and
//! knows what an ink looks like, and each screen has a file of its own. To add a screen: its file, its arm in [`view`].

mod beside;
mod chooser;
mod dialog;
mod equilibria;
mod interactions;
mod knock;
mod page;
mod paint;
mod response;
mod single;
mod sketch;
mod sure;
mod text;
mod values;

use ratatui::buffer::Buffer;

use crate::app::geometry::{Area, frame};
use crate::app::{App, Dialog, Screen};
use paint::Page;

pub use text::text;

/// Draws the state; the buffer is as large as the terminal, and blank.
pub fn view(app: &App, buffer: &mut Buffer) {
    let mut page = Page::new(buffer, app.style, app.depth);
    if app.size.is_too_small() {
        page::too_small(app, &mut page);
        return;
    }
    let frame = frame(app.size);
    page::heading(app, &mut page, frame.heading);
    body(app, &mut page, frame.body);
    page::status(app, &mut page, frame.status);
    page::keys(app, &mut page, frame.keys);
}

fn body(app: &App, page: &mut Page<'_>, area: Area) {
    match (&app.dialog, app.screen, &app.study) {
        (Some(Dialog::Help { from }), ..) => dialog::help(app, page, area, *from),
        (Some(Dialog::Message { title, lines, from }), ..) => dialog::message(page, area, title, lines, *from),
        (_, Screen::Chooser, _) | (.., None) => chooser::draw(app, page),
        (_, Screen::Values, Some(study)) => values::draw(app, study, page),
        (_, Screen::SideBySide, Some(study)) => beside::draw(app, study, page),
        (_, Screen::Interactions, Some(study)) => interactions::draw(app, study, page),
        (_, Screen::Response, Some(study)) => response::draw(app, study, page),
        (_, Screen::Knock, Some(study)) => knock::draw(app, study, page),
        (_, _, Some(study)) => equilibria::draw(app, study, page),
    }
    if let Some(Dialog::Entry(entry)) = &app.dialog {
        dialog::entry(app, page, area, entry);
    }
}
