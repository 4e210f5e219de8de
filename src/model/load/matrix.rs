//! Interaction tables: growth and matrix of a Lotka–Volterra block as they stand in CSV files.
//!
//! The first row is a heading, the first column holds symbols. Cells stay unread until all names are known; here only
//! the symbols are matched. Start at [`growth`] and [`matrix`].

use std::collections::{HashMap, HashSet};

use super::desk::Desk;
use super::species::SPECIES_LIMIT;
use super::table::{Cell, Form, Table, open};
use crate::diag::Location;
use crate::model::Placed;
use crate::model::messages::Message;
use crate::model::tree::normal;

/// A table whose rows are species, with columns in the order of the rows.
pub(super) struct SymbolTable {
    pub(super) table: Table,
    /// The symbol of each row.
    pub(super) symbols: Vec<Placed<String>>,
    /// Row by row, the cells behind the symbol, in the order of `columns`.
    pub(super) cells: Vec<Vec<Cell>>,
    /// The symbol of each column of `cells`; one without a meaning for growth.
    pub(super) columns: Vec<Placed<String>>,
}

/// A table of two columns: symbol and growth.
pub(super) fn growth(desk: &mut Desk<'_>, path: &str, at: Location) -> Option<SymbolTable> {
    let advice = "write a symbol and its growth in each row";
    let table = open(desk, path, at, &Form { row: "species", advice })?;
    let [_, heading] = table.heading.as_slice() else {
        let first = Location {
            source: table.source,
            span: table.heading.first().map_or_else(Default::default, |cell| cell.span),
        };
        desk.say(Message::GrowthColumns, first, &[&table.heading.len(), &advice]);
        return None;
    };
    let (text, _) = table.text(desk, *heading);
    if text.parse::<f64>().is_ok() {
        let text = text.into_owned();
        desk.say(
            Message::HeadingIsNumber,
            table.at(*heading),
            &[&text, &"put a heading such as symbol,growth above it"],
        );
        return None;
    }
    rows(desk, table, Vec::new())
}

/// A square table: symbols in the first row and the first column, in any order.
pub(super) fn matrix(desk: &mut Desk<'_>, path: &str, at: Location) -> Option<SymbolTable> {
    let advice = "give each row as many cells as there are columns";
    let table = open(desk, path, at, &Form { row: "species", advice })?;
    if table.heading.len() > SPECIES_LIMIT + 1 {
        let start = table.at(table.heading[0]);
        desk.say(Message::TooManySpecies, start, &[&(table.heading.len() - 1), &SPECIES_LIMIT]);
        return None;
    }
    let columns: Vec<Placed<String>> = table.heading[1..].iter().map(|&cell| placed(desk, &table, cell)).collect();
    let unique = distinct(desk, &columns, Message::ColumnTwice);
    let table = rows(desk, table, columns)?;
    // A row that was left out would be missed by the comparison, although it was reported.
    (table.table.whole && square(desk, &table) && unique).then_some(table)
}

fn placed(desk: &Desk<'_>, table: &Table, cell: Cell) -> Placed<String> {
    Placed { value: normal(&table.text(desk, cell).0), at: table.at(cell) }
}

fn rows(desk: &mut Desk<'_>, mut table: Table, columns: Vec<Placed<String>>) -> Option<SymbolTable> {
    if table.rows.len() > SPECIES_LIMIT {
        let start = table.heading.first().map_or_else(Location::default, |&cell| table.at(cell));
        desk.say(Message::TooManySpecies, start, &[&table.rows.len(), &SPECIES_LIMIT]);
        return None;
    }
    let lines = std::mem::take(&mut table.rows);
    let symbols: Vec<Placed<String>> =
        lines.iter().filter_map(|row| row.first()).map(|&cell| placed(desk, &table, cell)).collect();
    let cells = lines.into_iter().map(|mut row| row.split_off(1.min(row.len()))).collect();
    distinct(desk, &symbols, Message::RowTwice).then_some(SymbolTable { table, symbols, cells, columns })
}

fn distinct(desk: &mut Desk<'_>, symbols: &[Placed<String>], message: Message) -> bool {
    let mut seen: HashMap<&str, Location> = HashMap::with_capacity(symbols.len());
    let mut distinct = true;
    for symbol in symbols {
        if let Some(first) = seen.insert(&symbol.value, symbol.at) {
            desk.say_both(message, symbol.at, &[&symbol.value], (first, "first here"));
            distinct = false;
        }
    }
    distinct
}

/// Whether rows and columns name the same species.
fn square(desk: &mut Desk<'_>, table: &SymbolTable) -> bool {
    let absent = |of: &[Placed<String>], from: &[Placed<String>]| -> Vec<Placed<String>> {
        let known: HashSet<&str> = from.iter().map(|symbol| symbol.value.as_str()).collect();
        of.iter().filter(|symbol| !known.contains(symbol.value.as_str())).cloned().collect()
    };
    let no_row = absent(&table.columns, &table.symbols);
    let no_column = absent(&table.symbols, &table.columns);
    for symbol in &no_row {
        desk.say(Message::RowMissing, symbol.at, &[&symbol.value]);
    }
    for symbol in &no_column {
        desk.say(Message::ColumnMissing, symbol.at, &[&symbol.value]);
    }
    no_row.is_empty() && no_column.is_empty()
}
