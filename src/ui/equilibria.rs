//! Which steady states, and what is each like? The list, the sentence, the numbers and the sketch.

use super::paint::Page;
use super::sketch::Shown;
use crate::app::geometry::{self, Area, equilibria};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::table::{Solved, human};

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let parts = equilibria(app.size, study.count());
    let Some(slot) = study.slot() else { return };
    match slot.found.as_ref().map(|(_, scene)| &scene.outcome) {
        None => {
            page.text(parts.sentence, [0, 0], "Not searched yet.", Ink::Faint);
        }
        Some(Err(problems)) => {
            let text: Vec<&str> = problems.iter().map(|problem| problem.message.as_str()).collect();
            page.words(parts.sentence, &text.join("; "), Ink::Warning);
        }
        Some(Ok(solved)) => {
            list(study, solved, page, parts.list);
            if let Some(shown) = Shown::new(app, study, study.current, parts.sketch) {
                shown.draw(page, parts.sketch);
                page.words(parts.sentence, &shown.sentence(page), Ink::Plain);
            }
        }
    }
}

fn list(study: &Study, solved: &Solved, page: &mut Page<'_>, area: Area) {
    let room = geometry::listed(area);
    let ids = study.names(study.current);
    for (row, (place, found)) in solved.equilibria.list.iter().enumerate().skip(study.from).take(room).enumerate() {
        let row = row as u16 + 1;
        let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
        let look = linear.map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind));
        let glyph = page.either(look.glyph, look.ascii);
        let spirals = if look.spirals { kinds::SPIRALS } else { ' ' };
        let id = ids.get(place).map_or("", String::as_str);
        let state: Vec<String> = found.state.iter().map(|&x| human(x)).collect();
        page.text(area, [0, row], &format!("{glyph}{spirals} {id:<3} {}", state.join(" ")), Ink::Plain);
        if place == study.chosen {
            page.row(area, row, Ink::Chosen);
        }
    }
}
