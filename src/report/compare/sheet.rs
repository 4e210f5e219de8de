//! One equilibrium as people see it: quantities downwards, scenarios across.

use super::super::table::columns::{Glyphs, kind, sureness};
use super::super::table::human;
use super::super::table::layout::{Align, Cell, Head, Ink};
use super::super::table::sheet::Sheet;
use super::words::{difference, name, word};
use super::{Change, Comparison, Entry, Identity};

/// The block of one equilibrium.
pub(super) fn sheet(comparison: &Comparison<'_>, identity: &Identity, glyphs: Glyphs) -> Sheet {
    let table = comparison.table;
    let scenes = 0..table.scenes.len();
    let mut heads = vec![Head::new(&identity.id, Align::Left)];
    heads.extend(scenes.map(|scene| Head::new(name(table, scene), Align::Left)));
    let row = |label: String, cell: &dyn Fn(usize, &Entry) -> Cell| {
        let cells = identity.entries.iter().enumerate().map(|(scene, entry)| cell(scene, entry));
        std::iter::once(Cell::new(label)).chain(cells).collect::<Vec<Cell>>()
    };
    let mut rows = vec![row("change".to_owned(), &|_, entry| changed(entry))];
    rows.push(row("type".to_owned(), &|scene, entry| typed(comparison, scene, entry, glyphs)));
    rows.push(row("state".to_owned(), &|scene, entry| sure(comparison, scene, entry)));
    for (place, quantity) in comparison.quantities.iter().enumerate() {
        let unit = if quantity.unit.is_empty() { String::new() } else { format!(" ({})", quantity.unit) };
        let cell = |_: usize, entry: &Entry| number(comparison, identity, entry, place);
        rows.push(row(format!("{}{unit}", quantity.name), &cell));
    }
    rows.retain(|row| row.iter().skip(1).any(|cell| !cell.text().is_empty()));
    Sheet { heads, rows }
}

fn changed(entry: &Entry) -> Cell {
    match entry.change {
        Change::Reference | Change::Same => Cell::new(word(entry.change)),
        Change::InNeither => Cell::new("-"),
        Change::Gained | Change::Lost | Change::OtherName | Change::Failed => {
            Cell::inked(word(entry.change), Ink::Undecided)
        }
    }
}

fn typed(comparison: &Comparison<'_>, scene: usize, entry: &Entry, glyphs: Glyphs) -> Cell {
    let Some(row) = row(comparison, scene, entry) else { return Cell::new("") };
    let cell = kind(&row, glyphs);
    if entry.change == Change::Same && entry.type_changed == Some(true) { cell.and("; type changed") } else { cell }
}

fn sure(comparison: &Comparison<'_>, scene: usize, entry: &Entry) -> Cell {
    row(comparison, scene, entry).map_or_else(|| Cell::new(""), |row| sureness(&row))
}

fn row<'t>(comparison: &Comparison<'t>, scene: usize, entry: &Entry) -> Option<super::super::table::Row<'t>> {
    let table = comparison.table;
    table.row(table.scenes.get(scene)?, comparison.solved(scene)?, table.names.of(scene), entry.place?)
}

fn number(comparison: &Comparison<'_>, identity: &Identity, entry: &Entry, quantity: usize) -> Cell {
    let Some(&Some(x)) = entry.values.get(quantity) else { return Cell::new("") };
    let base = comparison.base(identity).and_then(|base| *base.values.get(quantity)?);
    match base.filter(|_| entry.change == Change::Same) {
        Some(from) => Cell::new(format!("{}  {}", human(x), difference(from, x))),
        None => Cell::new(human(x)),
    }
}
