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
    Parts, State, at_rule, control, known, painting, parts, place, room, rows, rule, sentence, states, there, varied,
    view,
};
use crate::app::{App, Study};
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::response::plot::{drawing, marked, signs};
use crate::report::response::words::{taking, taking_unit, with_unit};
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
        here(app, study, &all, page, &parts);
        sketch(app, study, page, &parts);
        return;
    };
    if let Some(view) = view(app, study, response) {
        page.grid(parts.plot, &drawing(&view, room(parts.plot), page.style));
        items(&signs(&view, room(parts.plot), page.style), page, parts.signs);
    }
    here(app, study, &all, page, &parts);
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
/// Columns of an abundance, where there is room, and where there is not but the numbers are short.
const ABUNDANCE: [u16; 2] = [10, 8];

/// The states at the rule, one a row, and the numbers of the one that is picked.
fn here(app: &App, study: &Study, all: &[State], page: &mut Page<'_>, parts: &Parts) {
    let list = parts.states;
    let species = &study.model().species;
    let width = width(all, species.len(), list.columns);
    let count = species.len().min(usize::from(list.columns.saturating_sub(NAMED) / width));
    let hidden = species.len() - count;
    let heading = if hidden > 0 { format!("{} {hidden} more", more(page.style)) } else { "at rule".to_owned() };
    page.text(Area { columns: NAMED, ..list }, [0, 0], &heading, Ink::Faint);
    for (place, one) in species.iter().take(count).enumerate() {
        right(page, list, [0, width], place, &one.symbol, Ink::Strong);
    }
    let chosen = place(app, study, all);
    let visible = usize::from(list.rows.saturating_sub(1));
    let from = study.responding.from;
    for (row, (place, state)) in all.iter().enumerate().skip(from).take(visible).enumerate() {
        let row = row as u16 + 1;
        line(app, study, state, [count as u16, width], page, list, row);
        if Some(place) == chosen {
            page.row(list, row, Ink::Chosen);
        }
    }
    if all.is_empty() {
        page.text(list, [0, 1], "no state is known", Ink::Faint);
    }
    if all.len() > visible {
        let text = format!("{} to {} of {}", from + 1, from + visible, all.len());
        let end = NAMED + count as u16 * width + 2;
        page.text(list, [end.max(list.columns.saturating_sub(text.len() as u16)), 0], &text, Ink::Faint);
    }
    if let Some(state) = chosen.and_then(|place| all.get(place)) {
        numbers(app, study, state, page, parts.numbers);
    }
}

/// Columns of an abundance: fewer where only so all species have room, and no number needs more.
fn width(all: &[State], species: usize, columns: u16) -> u16 {
    let [ample, narrow] = ABUNDANCE;
    let fits = |width: u16| NAMED as usize + species * usize::from(width) <= columns.into();
    let is_short = |x: &f64| human(*x).width() < usize::from(narrow);
    let may_be_narrow = fits(narrow) && all.iter().flat_map(|one| &one.state).all(is_short);
    if !fits(ample) && may_be_narrow { narrow } else { ample }
}

fn line(app: &App, study: &Study, state: &State, [count, width]: [u16; 2], page: &mut Page<'_>, area: Area, row: u16) {
    let look = state.kind.map_or(kinds::UNKNOWN, kinds::of);
    let sign = page.either(look.glyph, look.ascii);
    let winds = if look.spirals { kinds::SPIRALS } else { ' ' };
    page.text(area, [0, row], &format!("{sign}{winds} {}", state.name), Ink::Strong);
    let (mark, ink) = sure(app, study, state).mark(page);
    page.text(area, [NAMED - 2, row], &mark.to_string(), ink);
    for (place, &x) in state.state.iter().take(count.into()).enumerate() {
        let text = if x == 0.0 { page.either('·', '.').to_string() } else { human(x) };
        right(page, area, [row, width], place, &text, Ink::Plain);
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

fn right(page: &mut Page<'_>, area: Area, [row, columns]: [u16; 2], place: usize, text: &str, ink: Ink) {
    let end = NAMED + (place as u16 + 1) * columns;
    let width = (text.width() as u16).min(columns - 1);
    page.text(Area { columns: end.min(area.columns), ..area }, [end.saturating_sub(width), row], text, ink);
}

/// The numbers of the state that is picked: as the search has them, else as the branch has them.
fn numbers(app: &App, study: &Study, state: &State, page: &mut Page<'_>, area: Area) {
    let found = there(app, study);
    let searched = found.as_ref().and_then(|(world, scene)| Some((world, scene, scene.outcome.as_ref().ok()?)));
    if let (Some((world, scene, solved)), Some(place)) = (searched, state.found) {
        let ids: Vec<String> = vec![state.name.clone(); solved.equilibria.list.len()];
        let case = Case { model: &world.original.model, bounds: &world.prepared.bounds, scene, solved, ids: &ids };
        // Type and proof are in the list above.
        let from = case.facts(place, false).iter().take_while(|fact| SAID.contains(&fact.label.as_str())).count();
        facts(&case, place, from + study.facts_from, page, area);
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

/// What a list of facts begins with that the row of the state says too.
const SAID: [&str; 2] = ["type", "state (error)"];

/// Each threshold with its mark, in words; where not all fit, from the one at the rule on.
fn thresholds(study: &Study, response: &Response, heading: &str, page: &mut Page<'_>, area: Area) {
    let heading = if heading.width() <= area.columns.into() { heading } else { "Thresholds" };
    page.text(area, [0, 0], heading, Ink::Strong);
    let (_, area) = area.top(1);
    let width = usize::from(area.columns.saturating_sub(2));
    let all: Vec<Vec<String>> = rows(study, response).iter().map(|text| wrapped(text, width)).collect();
    if all.is_empty() {
        page.text(area, [0, 0], "None was found.", Ink::Plain);
    }
    let marked = marked(response);
    let here = rule(study).and_then(|at| marked.iter().position(|&place| response.thresholds[place].at == at));
    let from = first_shown(&all, nearest(study, response, &marked), usize::from(area.rows));
    let lines: Vec<(usize, String)> = entries(&all, from);
    let room = usize::from(area.rows);
    let is_cut = lines.len() > room || from > 0;
    let shown = if is_cut { room.saturating_sub(1) } else { room };
    for (row, (place, line)) in lines.iter().take(shown).enumerate() {
        page.text(area, [0, row as u16], line, Ink::Plain);
        if Some(*place) == here {
            page.row(area, row as u16, Ink::Chosen);
        }
    }
    if is_cut {
        let below = lines.get(shown).map_or(0, |(place, _)| all.len() - place);
        let text = format!("{} {from} above, {below} below", more(page.style));
        page.text(area, [0, shown.min(lines.len()) as u16], &text, Ink::Faint);
    }
}

/// The lines of entries from one on, each with the place of its entry; all but the first of an entry are indented.
fn entries(all: &[Vec<String>], from: usize) -> Vec<(usize, String)> {
    let lines = |(place, lines): (usize, &Vec<String>)| {
        let indented = |(k, line): (usize, &String)| (place, if k == 0 { line.clone() } else { format!("  {line}") });
        lines.iter().enumerate().map(indented).collect::<Vec<_>>()
    };
    all.iter().enumerate().skip(from).flat_map(lines).collect()
}

/// The threshold next to the rule, among those that are marked.
fn nearest(study: &Study, response: &Response, marked: &[usize]) -> usize {
    let Some(at) = rule(study) else { return 0 };
    let apart = |place: usize| (response.thresholds[place].at - at).abs();
    (0..marked.len()).min_by(|&a, &b| apart(marked[a]).total_cmp(&apart(marked[b]))).unwrap_or(0)
}

/// The first entry to be shown so that the wanted one is in sight, and as many before it as fit with all that follow.
fn first_shown(entries: &[Vec<String>], wanted: usize, rows: usize) -> usize {
    let after: usize = entries.iter().skip(wanted).map(Vec::len).sum();
    let mut used = after;
    let mut first = wanted;
    while first > 0 && used + entries[first - 1].len() <= rows {
        first -= 1;
        used += entries[first].len();
    }
    first
}

fn sketch(app: &App, study: &Study, page: &mut Page<'_>, parts: &Parts) {
    let Some(area) = parts.sketch else { return };
    let Some(painting) = painting(app, study, area) else {
        page.text(area, [8, area.rows / 2], "searching at the rule", Ink::Faint);
        return;
    };
    let all = states(app, study);
    let chosen = place(app, study, &all).and_then(|place| all.get(place)).and_then(|state| state.found);
    let mut named: Vec<(usize, String)> = all.into_iter().filter_map(|one| Some((one.found?, one.name))).collect();
    named.sort_by_key(|(place, _)| *place);
    let ids = named.into_iter().map(|(_, name)| name).collect();
    Shown::moving(app, study, painting, ids, chosen, area).draw(page, area);
}
