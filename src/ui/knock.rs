//! What happens after a knock? What came of it in words, and the path of every species with its linear prediction.

use unicode_width::UnicodeWidthStr;

use super::paint::Page;
use super::single::{below, heading, none};
use crate::app::geometry::Area;
use crate::app::interactions::said;
use crate::app::knock::{blow, known, parts, room, words};
use crate::app::{App, Study};
use crate::report::course::{bands, drawing, signs};
use crate::report::grid::Ink;

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let parts = parts(app.size);
    let (Some(selected), Some(blow)) = (study.selected(), blow(study)) else {
        let body = Area { rows: parts.heading.rows + parts.sentence.rows, ..parts.heading };
        none(study, page, body);
        return;
    };
    let label = selected.label(study, page.style);
    let long = blow.at_length();
    // Only in numbers what the words say too: it goes before a word of the equilibrium does.
    let fits = label.width() + 2 + long.width() <= parts.heading.columns.into();
    heading(&label, if fits { &long } else { &blow.words }, page, parts.heading);
    let Some(course) = known(app, study) else {
        page.text(parts.sentence, [0, 0], "Following the path.", Ink::Faint);
        return;
    };
    page.words(parts.sentence, &words(study, course, page.style).join(" "), Ink::Plain);
    page.grid(parts.drawing, &drawing(course, selected.model(), study.knock.from, room(app.size), page.style));
    let [seen, all] = bands(course, room(app.size));
    let from = study.knock.from;
    let place = if seen < all { format!("{} to {} of {all}   ", from + 1, from + seen) } else { String::new() };
    below(&(place + &said(&signs(course, page.style))), page, parts.legend);
}
