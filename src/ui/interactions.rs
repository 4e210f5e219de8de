//! Who acts on whom? What is telling in words, and the table of direct or of net effects, or both.

use super::paint::Page;
use super::single::{below, heading, none};
use crate::app::geometry::Area;
use crate::app::interactions::{parts_of, room, said, table, words};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::interactions::{Effects, Who, drawing, signs};

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let parts = parts_of(app.size, study);
    let Some(selected) = study.selected() else {
        let body = Area { rows: parts.heading.rows + parts.sentence.rows, ..parts.heading };
        none(study, page, body);
        return;
    };
    let who = match study.interacting.who {
        Who::Present => "those present",
        Who::All => "all species",
    };
    heading(&selected.label(study, page.style), who, page, parts.heading);
    page.words(parts.sentence, &words(&selected, page.style).join(" "), Ink::Plain);
    let mut shown = Vec::new();
    let first = if parts.beside.is_some() { Effects::Direct } else { study.interacting.effects };
    for (area, effects) in [(Some(parts.table), first), (parts.beside, Effects::Net)] {
        let (Some(area), Some(table)) = (area, table(study, effects)) else { continue };
        match table {
            Ok(table) => {
                let from = study.interacting.from;
                page.grid(area, &drawing(&table, selected.model(), from, room(area), page.style));
                shown.push(table);
            }
            Err(reason) => {
                page.words(area, reason, Ink::Undecided);
            }
        }
    }
    below(&said(&signs(&shown.iter().collect::<Vec<_>>())), page, parts.legend);
}
