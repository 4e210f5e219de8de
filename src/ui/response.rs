//! What becomes of the steady states as a control varies, and where is the edge? The plot with a rule that the user moves, the
//! states at the rule, the thresholds in words, and where there is room the sketch of what is at the rule.

use unicode_width::UnicodeWidthStr;

use super::equilibria::facts;
use super::paint::{Page, more, wrapped};
use super::single::none;
use super::sketch::Shown;
use super::sure::Sure;
use crate::analysis::response::Response;
use crate::app::geometry::Area;
use crate::app::response::{
    Parts, State, at_rule, control, known, listed, painting, parts, place, room, rows, rule, sentence, states, there,
    varied, view,
};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::response::plot::{drawing, signs};
use crate::report::response::words::{setting, taking, taking_unit, with_unit};
use crate::report::table::{Case, human};

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let all = states(app, study);
    let parts = parts(app.size, all.len());
    if study.solved().is_none() {
        none(study, page, parts.sentence);
        return;
    }
    page.words(parts.sentence, &sentence(app, study), Ink::Plain);
    let Some(control) = control(study) else { return };
    let Some((response, _)) = known(app, study) else {
        page.text(parts.plot, [8, parts.plot.rows / 2], "following branches", Ink::Faint);
        here(app, study, &all, page, parts.states);
        sketch(app, study, page, &parts);
        return;
    };
    if let Some(view) = view(app, study, response) {
        page.grid(parts.plot, &drawing(&view, room(parts.plot), page.style));
        items(&signs(&view, room(parts.plot), page.style), page, parts.signs);
    }
    here(app, study, &all, page, parts.states);
    let heading = format!("Thresholds, {}", varied(study.model(), control.parameter, [control.from, control.to]));
    thresholds(study, response, &heading, page, parts.thresholds);
    sketch(app, study, page, &parts);
}

/// The signs, a line or two of them, none broken.
fn items(signs: &[(String, String)], page: &mut Page<'_>, area: Area) {
    let [mut column, mut row] = [0, 0];
    for (sign, meaning) in signs {
        let text = format!("{sign} {meaning}");
        let width = u16::try_from(text.width()).unwrap_or(u16::MAX);
        if column > 0 && column + width > area.columns {
            [column, row] = [0, row + 1];
        }
        column = page.text(area, [column, row], &text, Ink::Faint) + 2;
    }
}

/// Columns for the sign, the mark of proof and the name of a state.
const NAMED: u16 = 8;
/// Columns of an abundance.
const ABUNDANCE: u16 = 8;

/// The states at the rule, one a row, and below them the numbers of the one that is picked.
fn here(app: &App, study: &Study, all: &[State], page: &mut Page<'_>, area: Area) {
    let rows = listed(all.len(), area.rows);
    let (list, rest) = area.top(rows);
    let Some(at) = rule(study).zip(control(study)) else { return };
    let text = setting(study.model(), at.1.parameter, at.0);
    page.text(list, [0, 0], &text, Ink::Strong);
    let shown = usize::from(list.columns.saturating_sub(NAMED) / ABUNDANCE);
    let species = study.model().species.len();
    let count = if species <= shown { species } else { shown.saturating_sub(1) };
    let fits = NAMED + count as u16 * ABUNDANCE <= list.columns && text.width() < usize::from(NAMED);
    for (place, one) in study.model().species.iter().take(count).enumerate().filter(|_| fits) {
        right(page, list, 0, place, &one.symbol, Ink::Faint);
    }
    let chosen = place(study, all);
    let visible = usize::from(rows.saturating_sub(1));
    for (row, (place, state)) in all.iter().enumerate().skip(study.responding.from).take(visible).enumerate() {
        let row = row as u16 + 1;
        line(app, study, state, count, page, list, row);
        if Some(place) == chosen {
            page.row(list, row, Ink::Chosen);
        }
    }
    let hidden = all.len().saturating_sub(visible);
    if hidden > 0 {
        let text = format!("{} {} of {}", more(page.style), visible, all.len());
        page.text(list, [list.columns.saturating_sub(text.width() as u16), 0], &text, Ink::Faint);
    }
    if let Some(state) = chosen.and_then(|place| all.get(place)) {
        numbers(app, study, state, page, rest);
    }
}

fn line(app: &App, study: &Study, state: &State, count: usize, page: &mut Page<'_>, area: Area, row: u16) {
    let look = state.kind.map_or(kinds::UNKNOWN, kinds::of);
    let sign = page.either(look.glyph, look.ascii);
    let winds = if look.spirals { kinds::SPIRALS } else { ' ' };
    page.text(area, [0, row], &format!("{sign}{winds} {}", state.name), Ink::Strong);
    let (mark, ink) = sure(app, study, state).mark(page);
    page.text(area, [NAMED - 2, row], &mark.to_string(), ink);
    for (place, &x) in state.state.iter().take(count).enumerate() {
        let text = if x == 0.0 { page.either('·', '.').to_string() } else { human(x) };
        right(page, area, row, place, &text, Ink::Plain);
    }
}

/// How sure a state is: as the search has it, else only numerical.
fn sure(app: &App, study: &Study, state: &State) -> Sure {
    let found = there(app, study).zip(state.found);
    let solved = found.as_ref().and_then(|((_, scene), place)| Some((scene.outcome.as_ref().ok()?, *place)));
    let Some((solved, place)) = solved else { return Sure::Numerical };
    let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
    Sure::of(solved.equilibria.list.get(place).is_some_and(|one| one.proven), linear)
}

fn right(page: &mut Page<'_>, area: Area, row: u16, place: usize, text: &str, ink: Ink) {
    let end = NAMED + (place as u16 + 1) * ABUNDANCE;
    let width = (text.width() as u16).min(ABUNDANCE - 1);
    page.text(Area { columns: end.min(area.columns), ..area }, [end.saturating_sub(width), row], text, ink);
}

/// The numbers of the state that is picked: as the search has them, else as the branch has them.
fn numbers(app: &App, study: &Study, state: &State, page: &mut Page<'_>, area: Area) {
    let found = there(app, study);
    let searched = found.as_ref().and_then(|(world, scene)| Some((world, scene, scene.outcome.as_ref().ok()?)));
    if let (Some((world, scene, solved)), Some(place)) = (searched, state.found) {
        let ids: Vec<String> = vec![state.name.clone(); solved.equilibria.list.len()];
        let case = Case { model: &world.original.model, bounds: &world.prepared.bounds, scene, solved, ids: &ids };
        facts(&case, place, study.facts_from, page, area);
        return;
    }
    let Some((response, _)) = known(app, study) else { return };
    let takings = state.met.as_ref().map_or(&[][..], |met| &met.takings);
    let mut row = 0;
    for (one, value) in response.takings.iter().zip(takings) {
        let Some(value) = value else { continue };
        let unit = taking_unit(study.model(), one.species);
        let text = format!("{} {}", taking(study.model(), one), with_unit(*value, &unit));
        page.text(area, [0, row], &text, Ink::Numerical);
        row += 1;
    }
    if at_rule(app, study).is_some() {
        page.text(area, [0, row], "searching here", Ink::Faint);
    }
}

/// Each threshold with its mark, in words, the one at the rule first among those that do not fit.
fn thresholds(study: &Study, response: &Response, heading: &str, page: &mut Page<'_>, area: Area) {
    page.text(area, [0, 0], heading, Ink::Strong);
    let (_, area) = area.top(1);
    let all = rows(study, response);
    if all.is_empty() {
        page.text(area, [0, 0], "None was found.", Ink::Plain);
    }
    let mut row = 0;
    for (place, text) in all.iter().enumerate().skip(study.responding.thresholds_from) {
        let lines = wrapped(text, usize::from(area.columns.saturating_sub(2)));
        let is_last = place + 1 == all.len();
        if row + lines.len() as u16 + u16::from(!is_last) > area.rows {
            let text = format!("{} {} more", more(page.style), all.len() - place);
            page.text(area, [0, row.min(area.rows.saturating_sub(1))], &text, Ink::Faint);
            return;
        }
        for (k, line) in lines.iter().enumerate() {
            page.text(area, [if k == 0 { 0 } else { 2 }, row], line, Ink::Plain);
            row += 1;
        }
    }
}

fn sketch(app: &App, study: &Study, page: &mut Page<'_>, parts: &Parts) {
    let Some(area) = parts.sketch else { return };
    let Some(painting) = painting(app, study, area) else {
        page.text(area, [8, area.rows / 2], "searching at the rule", Ink::Faint);
        return;
    };
    let all = states(app, study);
    let chosen = place(study, &all).and_then(|place| all.get(place)).and_then(|state| state.found);
    let mut named: Vec<(usize, String)> = all.into_iter().filter_map(|one| Some((one.found?, one.name))).collect();
    named.sort_by_key(|(place, _)| *place);
    let ids = named.into_iter().map(|(_, name)| name).collect();
    Shown::moving(app, study, painting, ids, chosen, area).draw(page, area);
}
