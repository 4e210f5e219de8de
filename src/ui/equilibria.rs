//! Which steady states, and what is each like? The list, the sentence, the numbers and the sketch.

use unicode_width::UnicodeWidthStr;

use super::paint::{Page, more};
use super::sketch::Shown;
use super::sure::Sure;
use crate::app::geometry::{Area, equilibria, listed};
use crate::app::{App, Study};
use crate::model::Model;
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::sketch::Style;
use crate::report::table::{Case, Scene, Solved, human};

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let parts = equilibria(app.size, study.count());
    let Some((world, scene)) = study.slot().and_then(|slot| slot.found.as_ref()) else {
        page.text(parts.sentence, [0, 0], "Not searched yet.", Ink::Faint);
        return;
    };
    let solved = match &scene.outcome {
        Ok(solved) => solved,
        Err(problems) => {
            let text: Vec<&str> = problems.iter().map(|problem| problem.message.as_str()).collect();
            page.words(parts.sentence, &text.join("; "), Ink::Warning);
            return;
        }
    };
    let model = &world.original.model;
    let case = case(study, model, scene, solved);
    list(study, &case, page, parts.list);
    numbers(study, &case, page, parts.numbers);
    let shown = Shown::new(app, study, study.current, parts.sketch);
    let path = shown.as_ref().map_or_else(String::new, |shown| shown.sentence(page));
    // The point is what the user is busy with, so its path comes first.
    let sentence = [path, case.sentence(study.chosen), case.overall()];
    page.words(parts.sentence, sentence.join(" ").trim(), Ink::Plain);
    if let Some(shown) = shown {
        shown.draw(page, parts.sketch);
    }
}

/// What a screen shows of the slot that is looked at.
pub(super) fn case<'s>(study: &'s Study, model: &'s Model, scene: &'s Scene, solved: &'s Solved) -> Case<'s> {
    Case { model, bounds: &study.world.prepared.bounds, scene, solved, ids: study.names(study.current) }
}

/// Columns for sign, name and mark of proof.
const NAMED: u16 = 9;
/// Columns for one abundance.
const ABUNDANCE: u16 = 10;
/// Columns for the return time.
const TIME: u16 = 9;

/// The equilibria: sign, name, abundances as far as there is room, return time.
pub(super) fn list(study: &Study, case: &Case<'_>, page: &mut Page<'_>, area: Area) {
    let columns = List::new(case.model, area.columns);
    columns.head(case.model, page, area);
    let room = listed(area);
    let count = case.solved.equilibria.list.len();
    for (row, place) in (study.from..count).take(room).enumerate() {
        let row = row as u16 + 1;
        columns.line(case, place, page, area, row);
        if place == study.chosen {
            page.row(area, row, Ink::Chosen);
        }
    }
    let hidden = count.saturating_sub(study.from + room);
    if hidden > 0 || study.from > 0 {
        let text = format!("  {} {} above, {hidden} below", more(page.style), study.from);
        page.text(area, [0, area.rows - 1], &text, Ink::Faint);
    } else {
        legend(page, area);
    }
}

/// What the marks mean, below the list.
fn legend(page: &mut Page<'_>, area: Area) {
    let mut column = 2;
    for sure in [Sure::Proved, Sure::Numerical, Sure::Open] {
        let (mark, ink) = sure.mark(page);
        column = page.text(area, [column, area.rows - 1], &format!("{mark} "), ink);
        column = page.text(area, [column, area.rows - 1], sure.word(), Ink::Faint) + 1;
    }
}

/// Which columns a list has room for.
struct List {
    species: usize,
    /// Where the return time ends, where there is room for it.
    time: Option<u16>,
}

impl List {
    fn new(model: &Model, columns: u16) -> Self {
        let room = columns.saturating_sub(NAMED);
        let has_time = room >= 2 * ABUNDANCE + TIME;
        let left = if has_time { room - TIME } else { room };
        let species = model.species.len().min(usize::from(left / ABUNDANCE).max(1));
        Self { species, time: has_time.then_some(NAMED + species as u16 * ABUNDANCE + TIME) }
    }

    fn head(&self, model: &Model, page: &mut Page<'_>, area: Area) {
        for (place, species) in model.species.iter().take(self.species).enumerate() {
            right(page, area, 0, place, &species.symbol, Ink::Strong);
        }
        let hidden = model.species.len() - self.species;
        if hidden > 0 {
            page.text(area, [0, 0], &format!("{} {hidden} more", more(page.style)), Ink::Faint);
        }
        if let Some(end) = self.time {
            ending_at(page, area, [end, 0], "returns", Ink::Strong);
        }
    }

    fn line(&self, case: &Case<'_>, place: usize, page: &mut Page<'_>, area: Area, row: u16) {
        let Some(found) = case.solved.equilibria.list.get(place) else { return };
        let assessed = case.solved.assessment.equilibria.get(place);
        let linear = assessed.and_then(|one| one.linear.as_ref().ok());
        let look = linear.map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind));
        let sign = page.either(look.glyph, look.ascii);
        let winds = if look.spirals { kinds::SPIRALS } else { ' ' };
        let id = case.ids.get(place).map_or("", String::as_str);
        page.text(area, [0, row], &format!("{sign}{winds} {id}"), Ink::Strong);
        let (mark, ink) = Sure::of(found.proven, linear).mark(page);
        page.text(area, [NAMED - 2, row], &mark.to_string(), ink);
        for (k, &x) in found.state.iter().take(self.species).enumerate() {
            let text = if found.has(k) { human(x) } else { page.either('·', '.').to_string() };
            right(page, area, row, k, &text, Ink::Plain);
        }
        if let (Some(end), Some(time)) = (self.time, assessed.and_then(|one| one.measures.return_time)) {
            ending_at(page, area, [end, row], &human(time), Ink::Plain);
        }
    }
}

/// An abundance's cell.
fn right(page: &mut Page<'_>, area: Area, row: u16, place: usize, text: &str, ink: Ink) {
    ending_at(page, area, [NAMED + (place as u16 + 1) * ABUNDANCE, row], text, ink);
}

fn ending_at(page: &mut Page<'_>, area: Area, [end, row]: [u16; 2], text: &str, ink: Ink) {
    let width = (text.width() as u16).min(ABUNDANCE - 1);
    page.text(Area { columns: end.min(area.columns), ..area }, [end.saturating_sub(width), row], text, ink);
}

/// The numbers of the selected equilibrium: each on a line, or on two where it is too long.
fn numbers(study: &Study, case: &Case<'_>, page: &mut Page<'_>, area: Area) {
    facts(case, study.chosen, study.facts_from, page, area);
}

/// The numbers of an equilibrium, by its place, from the `from`-th on.
pub(super) fn facts(case: &Case<'_>, place: usize, from: usize, page: &mut Page<'_>, area: Area) {
    let ascii = page.style == Style::Ascii;
    let facts = case.facts(place, ascii);
    let from = from.min(facts.len().saturating_sub(1));
    let mut row = 0;
    for (place, fact) in facts.iter().enumerate().skip(from) {
        let is_long = fact.label.width() + 2 + fact.value.width() > usize::from(area.columns);
        let rows = if is_long { 2 } else { 1 };
        let is_last = place + 1 == facts.len();
        if row + rows + u16::from(!is_last) > area.rows {
            let text = format!("{} {} more below", more(page.style), facts.len() - place);
            page.text(area, [0, row], &text, Ink::Faint);
            return;
        }
        page.text(area, [0, row], &fact.label, Ink::Faint);
        let width = (fact.value.width() as u16).min(area.columns);
        let column =
            if is_long { area.columns - width } else { (area.columns - width).min(LABEL.max(area.columns / 3)) };
        let column = column.max(if is_long { 0 } else { fact.label.width() as u16 + 2 }).min(area.columns);
        page.text(area, [column, row + rows - 1], &fact.value, fact.ink);
        row += rows;
    }
}

/// Where values begin, at least.
const LABEL: u16 = 15;
