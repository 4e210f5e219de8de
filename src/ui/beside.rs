//! What changes from one scenario to another? Sketches and lists side by side, equilibria matched by following them.

use super::paint::{Page, more};
use super::sketch::Shown;
use super::sure::Sure;
use crate::analysis::equilibria::Equilibrium;
use crate::app::beside::{Parts, compared, ids, parts, shown, task};
use crate::app::geometry::Area;
use crate::app::response::{self, Row};
use crate::app::task::Compared;
use crate::app::{App, Study};
use crate::report::compare::{Change, Comparison, Entry, Identity, Measured, difference};
use crate::report::grid::Ink;
use crate::report::kinds::{self, SPIRALS};
use crate::report::table::{Limits, Table, human};

/// The whole screen.
pub(super) fn draw(app: &App, study: &Study, page: &mut Page<'_>) {
    let slots = shown(study, app.size);
    let parts = parts(app.size, slots.len(), ids(study, app.size).len());
    for (&slot, [title, sketch]) in slots.iter().zip(&parts.columns) {
        let mark = if slot == study.current { page.either('▸', '>') } else { ' ' };
        let tried = if study.is_tried(slot) { "tried: " } else { "" };
        let name = study.slots.get(slot).map_or("", |slot| slot.name());
        page.text(*title, [0, 0], &format!("{mark}{tried}{name}"), Ink::Strong);
        if let Some(shown) = Shown::new(app, study, slot, *sketch) {
            shown.draw(page, *sketch);
        }
    }
    if slots.len() < 2 {
        page.words(parts.sentence, "There is one scenario; try a value to have another beside it.", Ink::Plain);
        return;
    }
    match task(app, study).and_then(|task| compared(&app.desk, &task)) {
        Some(known) => with(known, |comparison| lists(app, study, &slots, comparison, page, &parts)),
        None => {
            page.text(parts.sentence, [0, 0], "Scenarios are being searched and followed.", Ink::Faint);
        }
    }
}

pub(super) fn with<T>(known: &Compared, show: impl FnOnce(&Comparison<'_>) -> T) -> T {
    let table = Table {
        model: &known.world.original.model,
        sha256: &known.world.original.sha256,
        tables: &known.world.original.tables,
        command: "",
        set: &known.world.set,
        bounds: &known.world.prepared.bounds,
        limits: Limits { seconds: 0.0, boxes: 0 },
        scenes: &known.scenes,
        names: &known.names,
        interrupted: false,
        columns: None,
    };
    show(&Comparison::new(&table, &known.passages))
}

fn lists(app: &App, study: &Study, slots: &[usize], comparison: &Comparison<'_>, page: &mut Page<'_>, parts: &Parts) {
    let row = study.beside.row.min(comparison.rows.len().saturating_sub(1));
    let Some(chosen) = comparison.rows.get(row) else { return };
    sentence(study, slots, comparison, chosen, page, parts.sentence);
    let room = usize::from(parts.list.rows.saturating_sub(1)).max(1);
    let shown = comparison.rows.iter().enumerate().skip(study.beside.from).take(room);
    for (line, (place, identity)) in shown.enumerate() {
        list_row(comparison, identity, page, parts, line as u16);
        if place == row {
            page.row(Area { columns: parts.labels() - 1, ..parts.list }, line as u16, Ink::Chosen);
        }
    }
    let hidden = comparison.rows.len().saturating_sub(study.beside.from + room);
    if hidden > 0 || study.beside.from > 0 {
        let text = format!("{} {} above, {hidden} below", more(page.style), study.beside.from);
        page.text(parts.list, [0, parts.list.rows - 1], &text, Ink::Faint);
    } else {
        page.rule(parts.list, parts.list.rows - 1);
    }
    let mut responses = response::compared(app, study, slots, &chosen.id);
    if parts.numbers.rows < FULL {
        responses.truncate(1);
    }
    numbers(comparison, chosen, &responses, page, parts);
}

/// Rows for numbers from which on more is said of the response than how near the state is to being lost.
const FULL: u16 = 9;

/// What has become of the selected equilibrium in the scenario that is looked at, else in any.
fn sentence(
    study: &Study,
    slots: &[usize],
    comparison: &Comparison<'_>,
    chosen: &Identity,
    page: &mut Page<'_>,
    area: Area,
) {
    let current = slots.iter().position(|&slot| slot == study.current);
    let order = current.into_iter().chain((0..slots.len()).filter(|&k| Some(k) != current));
    let said: Vec<String> = order.filter_map(|scene| comparison.sentence(chosen, scene)).collect();
    let first = comparison.reference.map_or("", |k| study.slots.get(slots[k]).map_or("", |slot| slot.name()));
    let text = if said.is_empty() {
        format!("{}: the same kind of state in all of these; differences are from {first}.", chosen.id)
    } else {
        said.join(" ")
    };
    page.words(area, &text, Ink::Plain);
}

/// One equilibrium through all scenarios.
fn list_row(comparison: &Comparison<'_>, identity: &Identity, page: &mut Page<'_>, parts: &Parts, line: u16) {
    page.text(Area { columns: parts.labels() - 1, ..parts.list }, [1, line], &identity.id, Ink::Strong);
    for (scene, entry) in identity.entries.iter().enumerate() {
        let [start, width] = parts.cell(scene);
        let cell = Area { x: parts.list.x + start, columns: width, ..parts.list };
        let (text, ink) = entry_text(comparison, scene, entry, page);
        page.text(cell, [0, line], &text, ink);
    }
}

/// A change in a word first, where there is one, then sign and abundances.
fn entry_text(comparison: &Comparison<'_>, scene: usize, entry: &Entry, page: &Page<'_>) -> (String, Ink) {
    let (word, ink) = match (entry.change, entry.type_changed) {
        (Change::Lost, _) => return ("lost".to_owned(), Ink::Changed),
        (Change::OtherName, _) => return ("other name".to_owned(), Ink::Changed),
        (Change::InNeither, _) => return (page.either('·', '.').to_string(), Ink::Faint),
        (Change::Failed, _) => return ("failed".to_owned(), Ink::Warning),
        (Change::Gained, _) => ("gained ", Ink::Changed),
        (Change::Same, Some(true)) => ("other type ", Ink::Changed),
        (Change::Reference | Change::Same, _) => ("", Ink::Plain),
    };
    let Some((place, solved)) = entry.place.zip(comparison.solved(scene)) else { return (String::new(), Ink::Plain) };
    let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
    let look = linear.map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind));
    let sign = page.either(look.glyph, look.ascii);
    let winds = if look.spirals { SPIRALS } else { ' ' };
    let state = solved.equilibria.list.get(place).map_or_else(String::new, |found| abundances(found, page));
    (format!("{sign}{winds} {word}{state}"), ink)
}

fn abundances(found: &Equilibrium, page: &Page<'_>) -> String {
    let absent = page.either('·', '.').to_string();
    let one = |(k, &x): (usize, &f64)| if found.has(k) { human(x) } else { absent.clone() };
    found.state.iter().enumerate().map(one).collect::<Vec<_>>().join(" ")
}

/// The selected equilibrium's quantities, with how each differs from the first scenario.
fn numbers(comparison: &Comparison<'_>, chosen: &Identity, responses: &[Row], page: &mut Page<'_>, parts: &Parts) {
    let labels = Area { columns: parts.labels() - 1, ..parts.numbers };
    page.text(labels, [0, 0], &format!("{} type", chosen.id), Ink::Faint);
    for (scene, entry) in chosen.entries.iter().enumerate() {
        let (text, ink) = kind(comparison, scene, entry, page);
        put(page, parts, scene, 0, &text, ink);
    }
    let mut row = 1 + leads(comparison, page, parts);
    for Row { label, cells } in responses {
        page.text(labels, [0, row], label, Ink::Faint);
        let base = comparison.reference.and_then(|reference| cells.get(reference));
        for (scene, text) in cells.iter().enumerate() {
            put(page, parts, scene, row, text, if Some(text) == base { Ink::Plain } else { Ink::Changed });
        }
        row += 1;
    }
    // Abundances stand in the list already.
    let is_state = |k: &usize| matches!(comparison.quantities[*k].measured, Measured::State(_));
    let (states, others): (Vec<usize>, Vec<usize>) = (0..comparison.quantities.len()).partition(is_state);
    for k in others.into_iter().chain(states) {
        let values: Vec<Option<f64>> =
            chosen.entries.iter().map(|entry| entry.values.get(k).copied().flatten()).collect();
        if row < parts.numbers.rows && values.iter().any(Option::is_some) {
            quantity(comparison, k, &values, page, parts, row);
            row += 1;
        }
    }
}

/// Where today's stocks lead in each scenario; how many rows that takes.
fn leads(comparison: &Comparison<'_>, page: &mut Page<'_>, parts: &Parts) -> u16 {
    let leads: Vec<Option<String>> = (0..parts.columns.len()).map(|scene| comparison.leads(scene)).collect();
    if leads.iter().all(Option::is_none) {
        return 0;
    }
    page.text(Area { columns: parts.labels() - 1, ..parts.numbers }, [0, 1], "today leads to", Ink::Faint);
    let base = comparison.reference.and_then(|reference| leads.get(reference).cloned().flatten());
    for (scene, to) in leads.into_iter().enumerate() {
        let ink = if to == base { Ink::Plain } else { Ink::Changed };
        put(page, parts, scene, 1, &to.unwrap_or_default(), ink);
    }
    1
}

/// One quantity of the selected equilibrium in each scenario, and how it differs.
fn quantity(
    comparison: &Comparison<'_>,
    k: usize,
    values: &[Option<f64>],
    page: &mut Page<'_>,
    parts: &Parts,
    row: u16,
) {
    let quantity = &comparison.quantities[k];
    let unit = if quantity.unit.is_empty() { String::new() } else { format!(", {}", quantity.unit) };
    let labels = Area { columns: parts.labels() - 1, ..parts.numbers };
    page.text(labels, [0, row], &format!("{}{unit}", quantity.name), Ink::Faint);
    let base = comparison.reference.and_then(|reference| values.get(reference).copied().flatten());
    for (scene, value) in values.iter().enumerate() {
        let Some(value) = *value else { continue };
        let differs = base.filter(|_| comparison.reference != Some(scene)).map(|base| difference(base, value));
        let (text, ink) = match differs {
            None => (human(value), Ink::Plain),
            Some(same) if same == "=" => (format!("{}  =", human(value)), Ink::Plain),
            Some(other) => (format!("{}  {other}", human(value)), Ink::Changed),
        };
        put(page, parts, scene, row, &text, ink);
    }
}

fn kind(comparison: &Comparison<'_>, scene: usize, entry: &Entry, page: &Page<'_>) -> (String, Ink) {
    let Some((place, solved)) = entry.place.zip(comparison.solved(scene)) else { return (String::new(), Ink::Plain) };
    let linear = solved.assessment.equilibria.get(place).and_then(|one| one.linear.as_ref().ok());
    let Some(linear) = linear else { return ("no linear part".to_owned(), Ink::Plain) };
    let is_there = solved.equilibria.list.get(place).is_some_and(|found| found.proven);
    let (sure, _) = Sure::of(is_there, Some(linear)).mark(page);
    let ink = if entry.type_changed == Some(true) { Ink::Changed } else { Ink::Plain };
    (format!("{} {sure}", kinds::of(linear.kind).word), ink)
}

fn put(page: &mut Page<'_>, parts: &Parts, scene: usize, row: u16, text: &str, ink: Ink) {
    let [start, width] = parts.cell(scene);
    let cell = Area { x: parts.numbers.x + start, columns: width, ..parts.numbers };
    page.text(cell, [0, row], text, ink);
}
