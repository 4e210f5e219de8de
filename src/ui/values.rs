//! What if a value were another? The parameters, all about the selected one, and what becomes of the equilibria.

use unicode_width::UnicodeWidthStr;

use super::beside::with;
use super::paint::Page;
use super::sketch::Shown;
use crate::app::action::{Action, Step};
use crate::app::beside::{compared, tried as tried_task};
use crate::app::geometry::{Area, listed, values};
use crate::app::keymap::{Place, key_of};
use crate::app::trial::{COARSE, step};
use crate::app::{App, Screen, Study};
use crate::model::{Parameter, ParameterId};
use crate::report::compare::summary;
use crate::report::grid::Ink;
use crate::report::kinds;
use crate::report::table::{Solved, human};

/// Columns of a value.
const VALUE: u16 = 8;
/// Columns of a name at most.
const NAME: usize = 12;

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let parts = values(app.size, study.count());
    page.words(parts.sentence, &sentence(app, study), Ink::Plain);
    list(study, page, parts.list);
    page.rule(parts.details, 0);
    let (_, details) = parts.details.top(1);
    page.words(details, &about(study), Ink::Plain);
    if let Some(shown) = Shown::new(app, study, study.current, parts.sketch) {
        shown.draw(page, parts.sketch);
    }
    if let Some(solved) = study.solved() {
        found(study, solved, page, parts.found);
    }
}

/// What the tried values change.
fn sentence(app: &App, study: &Study) -> String {
    let base = study.model().scenarios.get(study.base()).map_or("", |scenario| scenario.name.as_str());
    let is_tried = !study.tried.now.values.is_empty() && study.tried.now.base == study.base();
    if !is_tried {
        let keys = |action| key_of(Place::On(Screen::Values), action).unwrap_or_default();
        let (up, down) = (keys(Action::Fine(Step::On)), keys(Action::Fine(Step::Back)));
        return format!(
            "Nothing is tried over \"{base}\" yet. {down} and {up} change the selected value, in a scenario of its own."
        );
    }
    let slot = |slot: Option<usize>| study.slots.get(slot?).filter(|slot| study.is_of_now(slot));
    let Some((old, new)) = slot(study.base_slot()).zip(slot(study.tried_slot())) else {
        let waits = if app.desk.jobs().is_empty() { "not searched" } else { "being searched" };
        return format!("With the tried values \"{base}\" is {waits}; below is what was found before.");
    };
    match (old.solved(), new.solved()) {
        (Some(_), Some(_)) => match tried_task(app, study).and_then(|task| compared(&app.desk, &task)) {
            Some(known) => format!("Against \"{base}\": {}", with(known, |comparison| summary(comparison, 1))),
            None => format!("What changes against \"{base}\" is being followed."),
        },
        (None, _) => format!("\"{base}\" could not be searched, so there is nothing to compare with."),
        (_, None) => {
            let problems = new.found.as_ref().and_then(|(_, scene)| scene.outcome.as_ref().err());
            let reason = problems.and_then(|all| all.first()).map_or("", |first| first.message.as_str());
            format!("With the tried values it cannot be searched: {reason}")
        }
    }
}

/// The parameters, as many as fit, those first that management can set.
fn list(study: &Study, page: &mut Page<'_>, area: Area) {
    let model = study.model();
    let order = study.parameters();
    let longest = order.iter().filter_map(|id| model.parameters.get(id.0)).map(|one| one.name.width()).max();
    let columns = Columns::new(area, longest.unwrap_or(0));
    columns.heading(page, area);
    let room = listed(area);
    for (row, (place, &id)) in order.iter().enumerate().skip(study.parameters_from).take(room).enumerate() {
        let row = row as u16 + 1;
        let Some(parameter) = model.parameters.get(id.0) else { continue };
        columns.line(study, page, area, row, (id, parameter));
        if place == study.parameter {
            page.text(area, [0, row], ">", Ink::Strong);
            page.row(area, row, Ink::Chosen);
        }
    }
    let rest = order.len().saturating_sub(study.parameters_from + room);
    if rest > 0 {
        page.text(area, [2, area.rows.saturating_sub(1)], &format!("{rest} more below"), Ink::Faint);
    }
}

/// Where the columns begin; those that do not fit are left to the details.
struct Columns {
    value: u16,
    tried: u16,
    unit: Option<u16>,
    range: Option<u16>,
    note: Option<u16>,
}

impl Columns {
    fn new(area: Area, longest: usize) -> Self {
        let room = usize::from(area.columns.saturating_sub(2 * VALUE + 5));
        let value = 3 + longest.clamp(4, NAME.min(room.max(4))) as u16;
        let tried = value + VALUE + 1;
        let after = tried + VALUE + 1;
        let place = |from: u16, width: u16| (from + width <= area.columns).then_some(from);
        let unit = place(after, 8);
        let range = unit.and_then(|unit| place(unit + 9, 16));
        let note = range.and_then(|range| place(range + 17, 12));
        Self { value, tried, unit, range, note }
    }

    fn heading(&self, page: &mut Page<'_>, area: Area) {
        let all = [
            (Some(2), "value of"),
            (Some(self.value), "scenario"),
            (Some(self.tried), "tried"),
            (self.unit, "unit"),
            (self.range, "range"),
            (self.note, "note"),
        ];
        for (column, text) in all {
            let is_shown = !(column == Some(2) && self.value < 11);
            if let Some(column) = column.filter(|_| is_shown) {
                page.text(area, [column, 0], text, Ink::Faint);
            }
        }
    }

    fn line(&self, study: &Study, page: &mut Page<'_>, area: Area, row: u16, (id, one): (ParameterId, &Parameter)) {
        let own = study.own_value(study.base(), id);
        let name = Area { columns: self.value.saturating_sub(1).min(area.columns), ..area };
        page.text(name, [2, row], &one.name, Ink::Plain);
        let cell = Area { columns: (self.tried - 1).min(area.columns), ..area };
        page.text(cell, [self.value, row], &own.map_or_else(|| "none".to_owned(), short), Ink::Plain);
        if let Some(tried) = study.tried_value(id) {
            page.text(area, [self.tried, row], &short(tried), Ink::Strong);
        }
        if let Some(column) = self.unit {
            let cell = Area { columns: (column + 8).min(area.columns), ..area };
            page.text(cell, [column, row], one.unit.as_ref().map_or("", |unit| &unit.value), Ink::Plain);
        }
        if let (Some(column), Some(range)) = (self.range, &one.range) {
            let cell = Area { columns: (column + 16).min(area.columns), ..area };
            page.text(cell, [column, row], &between(range.value), Ink::Plain);
        }
        if let Some(column) = self.note {
            let lever = if one.control { "lever; " } else { "" };
            page.text(area, [column, row], &format!("{lever}{}", one.note.as_deref().unwrap_or("")), Ink::Plain);
        }
    }
}

/// A value in as many characters as a column has.
fn short(x: f64) -> String {
    let exact = format!("{}", x + 0.0);
    if exact.len() <= VALUE.into() { exact } else { human(x) }
}

fn between([low, high]: [f64; 2]) -> String {
    format!("{} to {}", short(low), short(high))
}

/// All about the selected parameter.
fn about(study: &Study) -> String {
    let Some((id, one)) = study.parameter() else { return "The model has no parameters.".to_owned() };
    let unit =
        one.unit.as_ref().filter(|unit| unit.value != "1").map_or(String::new(), |unit| format!(" {}", unit.value));
    let lever = if one.control { ", a lever" } else { "" };
    let mut parts = vec![match (study.own_value(study.base(), id), study.tried_value(id)) {
        (Some(own), Some(tried)) => format!("{}{lever}: tried {tried}{unit}, {own} in the scenario.", one.name),
        (Some(own), None) => format!("{}{lever}: {own}{unit}, not tried.", one.name),
        (None, _) => format!("{}{lever}: no finite value in this scenario.", one.name),
    }];
    if let Some(range) = &one.range {
        let is_outside = study.value(id).is_some_and(|x| x < range.value[0] || x > range.value[1]);
        let outside = if is_outside { ", and this is outside" } else { "" };
        parts.push(format!("Range {}{outside}.", between(range.value)));
    }
    parts.extend(one.min.map(|min| format!("At least {min}.")));
    parts.extend(one.max.map(|max| format!("At most {max}.")));
    let fine = step(one);
    parts.push(format!("Steps of {} and {}.", short(fine), short(COARSE * fine)));
    parts.extend(one.note.as_ref().map(|note| format!("Note: {note}")));
    parts.join(" ")
}

/// The equilibria in short: sign, name, state, type.
fn found(study: &Study, solved: &Solved, page: &mut Page<'_>, area: Area) {
    let list = &solved.equilibria.list;
    let symbols: Vec<&str> = study.model().species.iter().map(|species| species.symbol.as_str()).collect();
    let heading = format!("{} of {}", if list.len() == 1 { "equilibrium" } else { "equilibria" }, symbols.join(", "));
    let room = usize::from(area.rows.saturating_sub(1));
    let hidden = list.len().saturating_sub(room);
    let more = if hidden > 0 { format!(", {hidden} more") } else { String::new() };
    let open = if solved.equilibria.complete { "" } else { "; there may be others" };
    page.text(area, [0, 0], &format!("{} {heading}{more}{open}", list.len()), Ink::Faint);
    let from = study.chosen.saturating_sub(room.saturating_sub(1)).min(hidden);
    for (row, (place, one)) in list.iter().enumerate().skip(from).take(room).enumerate() {
        let row = row as u16 + 1;
        let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
        let look = linear.map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind));
        let glyph = page.either(look.glyph, look.ascii);
        let spirals = if look.spirals { kinds::SPIRALS } else { ' ' };
        let id = study.names(study.current).get(place).map_or("", String::as_str);
        let state: Vec<String> = one.state.iter().map(|&x| human(x)).collect();
        let proved = if one.proven && linear.is_some_and(|linear| linear.kind_proven) { "" } else { " (not proved)" };
        let text = format!("{glyph}{spirals}{id:<3} {} {}{proved}", state.join(", "), look.word);
        page.text(area, [0, row], &text, Ink::Plain);
        if place == study.chosen {
            page.row(area, row, Ink::Chosen);
        }
    }
}
