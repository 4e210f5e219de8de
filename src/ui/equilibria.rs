//! Which steady states, and what is each like? The list, the sentence, the numbers and the sketch.

use super::paint::Page;
use crate::app::geometry::{self, Area, equilibria};
use crate::app::task::{Answer, Task};
use crate::app::wants::{painting, sketch_size};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::sketch::{View, draw as draw_sketch};
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
            sketch(app, study, solved, page, parts.sketch);
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

fn sketch(app: &App, study: &Study, solved: &Solved, page: &mut Page<'_>, area: Area) {
    let Some(painting) = painting(app, study, study.current, sketch_size(app, study)) else { return };
    let (slice, window) = (painting.slice.clone(), painting.window);
    let scenario = painting.scene.0.scenario;
    let world = painting.world.clone();
    let Some(Answer::Painted(Some(picture))) = app.desk.known(&Task::Paint(painting)) else { return };
    let view =
        View { model: &world.original.model, scenario, solved, ids: study.names(study.current), slice: &slice, window };
    let canvas = draw_sketch(&view, picture, page.style);
    for row in 0..canvas.rows {
        let line: String = canvas.row(canvas.rows - 1 - row).iter().map(|mark| mark.glyph(page.style)).collect();
        page.text(area, [0, row as u16], &line, Ink::Plain);
    }
}
