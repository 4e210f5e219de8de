//! The one list of what can be shown of an equilibrium: titles, units, meaning, cells for people, keys for programs.
//!
//! Every format goes through [`COLUMNS`] in this order. To add a column, add an entry; its keys in the JSON must stand
//! where the contract has them.

use serde_json::{Map, Value, json};

use super::layout::{Align, Cell, Head, Ink};
use super::number::{bound, human};
use super::{Row, Table, words};
use crate::model::Species;

/// Something to be shown of an equilibrium.
#[derive(Debug)]
pub struct Column {
    /// What options and files call it.
    pub id: &'static str,
    /// Its meaning and unit.
    pub help: &'static str,
    /// The headings of its cells.
    pub(super) heads: fn(&Table<'_>) -> Vec<Head>,
    /// Its cells for people, as many as headings.
    pub(super) cells: fn(&Row<'_>) -> Vec<Cell>,
    /// Its keys and values for programs.
    pub(super) exact: fn(&Row<'_>) -> Vec<(&'static str, Value)>,
}

/// Symbols of those present are listed up to this many characters, then counted.
const SYMBOLS: usize = 18;

/// Every column, in the order of text and JSON alike.
pub static COLUMNS: [Column; 6] = [
    Column {
        id: "id",
        help: "name of the equilibrium, the same in all scenarios of one run",
        heads: |_| vec![Head::new("", Align::Left)],
        cells: |row| vec![Cell::new(row.id)],
        exact: |row| vec![("id", row.id.into())],
    },
    Column {
        id: "state",
        help: "abundance of each species, in the species' unit",
        heads: |table| table.model.species.iter().map(species_head).collect(),
        cells: |row| row.equilibrium.state.iter().map(|&x| Cell::new(human(x))).collect(),
        exact: |row| vec![("state", by_symbol(row, &row.equilibrium.state))],
    },
    Column {
        id: "present",
        help: "symbols of the species that are not absent",
        heads: |_| vec![Head::new("present", Align::Left)],
        cells: |row| vec![Cell::new(present_in_words(&present(row), row.table.model.species.len()))],
        exact: |row| vec![("present", json!(present(row)))],
    },
    Column {
        id: "proven",
        help: "proved: exactly one equilibrium is within the error given; numerical: computed, nothing proved",
        heads: |_| vec![Head::new("", Align::Left)],
        cells: |row| vec![if row.equilibrium.proven { Cell::inked("proved", Ink::Proved) } else { numerical() }],
        exact: |row| vec![("proven", row.equilibrium.proven.into())],
    },
    Column {
        id: "radius",
        help: "bound of the error of each abundance where proved; relative, absolute for an abundance of 0",
        heads: |_| vec![Head::new("error", Align::Left)],
        cells: |row| vec![Cell::new(worst(&row.equilibrium.radius(), row.equilibrium.proven))],
        exact: |row| vec![("radius", by_symbol(row, &row.equilibrium.radius()))],
    },
    Column {
        id: "derivative",
        help: "whether the rates have a derivative there; without one there is no linear part to classify",
        heads: |_| vec![Head::new("rates", Align::Left)],
        cells: |row| vec![Cell::new(words::why(row.equilibrium.derivative).map_or("", short))],
        exact: |row| match words::why(row.equilibrium.derivative) {
            None => Vec::new(),
            Some(why) => {
                vec![("eigenvalues", Value::Null), ("type", Value::Null), ("stable", Value::Null), ("why", why.into())]
            }
        },
    },
];

fn species_head(species: &Species) -> Head {
    let unit = species.unit.as_ref().map_or(String::new(), |unit| unit.value.clone());
    Head { title: species.symbol.clone(), unit, align: Align::Point }
}

fn numerical() -> Cell {
    Cell::inked("numerical", Ink::Numerical)
}

fn short(why: &str) -> &str {
    why.trim_start_matches("rates have ").trim_start_matches("a ").trim_end_matches(" here")
}

fn present<'t>(row: &Row<'t>) -> Vec<&'t str> {
    let species = row.table.model.species.iter().enumerate();
    species.filter(|(i, _)| row.equilibrium.has(*i)).map(|(_, species)| species.symbol.as_str()).collect()
}

fn present_in_words(present: &[&str], all: usize) -> String {
    let listed = present.join(" ");
    match present.len() {
        0 => "none".to_owned(),
        _ if listed.chars().count() <= SYMBOLS => listed,
        count if count == all => format!("all {all}"),
        count => format!("{count} of {all}"),
    }
}

fn worst(radius: &[f64], proven: bool) -> String {
    if proven { bound(radius.iter().copied().fold(0.0, f64::max)) } else { "unknown".to_owned() }
}

/// A map from symbols to numbers; null for what is not finite.
fn by_symbol(row: &Row<'_>, numbers: &[f64]) -> Value {
    let species = row.table.model.species.iter();
    Value::Object(species.zip(numbers).map(|(species, &x)| (species.symbol.clone(), exact(x))).collect::<Map<_, _>>())
}

/// A number that reads back the same; without a minus on zero, null where it is not finite.
pub(super) fn exact(x: f64) -> Value {
    // −0 + 0 = 0.
    (x + 0.0).into()
}
