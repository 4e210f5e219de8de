//! The one list of what can be shown of an equilibrium: its id, unit, meaning, keys for programs, cells for people.
//!
//! Every format goes through [`COLUMNS`]: JSON writes a column's keys, CSV a field for each path into them, text, Markdown
//! and LaTeX the cells, which are the same values rounded unless the column has cells of its own. To add a column, add it
//! to the file of its group; the contract fixes the order of the keys, so that ours stand at the end, in [`own`].

mod compact;
mod identity;
mod linear;
mod measures;
mod own;
mod path;
mod response;

use serde_json::Value;

use super::layout::{Align, Cell, Head};
use super::{Row, Table};
pub(super) use compact::has_sums;
pub(in crate::report) use compact::{sums, total};
pub(in crate::report) use identity::sureness;
pub(in crate::report) use linear::kind;
pub(super) use path::Path;
pub(in crate::report) use path::by_symbol;
use path::{Get, humane};

/// Numbers of one column that people are shown in a row; a square of them grows faster than any page.
const MOST_SHOWN: usize = 150;

/// Every column, by group, in the order of JSON.
pub static COLUMNS: [&[Column]; 5] =
    [identity::COLUMNS, linear::COLUMNS, measures::COLUMNS, response::COLUMNS, own::COLUMNS];

/// Every column, in the order of JSON.
pub fn columns() -> impl Iterator<Item = &'static Column> {
    COLUMNS.iter().copied().flatten()
}

/// Something to be shown of an equilibrium.
#[derive(Debug)]
pub struct Column {
    /// What options and files call it.
    pub id: &'static str,
    /// What its numbers are measured in.
    pub unit: Unit,
    /// Its meaning.
    pub help: &'static str,
    /// Which formats have it where nothing else was asked for.
    pub shown: Shown,
    /// Its heading for people.
    pub(super) title: &'static str,
    /// Its keys in JSON, and the fields of CSV under each.
    pub(super) keys: &'static [Key],
    /// What people see.
    pub(super) cells: Cells,
}

/// Which formats have a column where nothing else was asked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shown {
    /// All of them.
    Everywhere,
    /// CSV and JSON.
    Files,
    /// JSON alone: as fields of a row it would be too many.
    Json,
}

/// What numbers are measured in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unit {
    /// Nothing.
    None,
    /// The model's unit of time.
    Time,
    /// One over the model's unit of time.
    PerTime,
    /// Each species' own.
    State,
    /// Each species' own per unit of time; for a map per step.
    Yield,
    /// Another, said in words.
    Said(&'static str),
}

/// In place of numbers that are too many for a page.
const TOO_MANY: &str = "too many to be shown; csv and json have them";

/// One key of an equilibrium's JSON.
#[derive(Debug)]
pub(super) struct Key {
    pub(super) name: &'static str,
    pub(super) get: Get,
}

/// What people see of a column.
#[derive(Debug)]
pub(super) enum Cells {
    /// The values of its first key, rounded.
    Rounded,
    /// As many cells as headings, made for people.
    Own { heads: fn(&Table<'_>) -> Vec<Head>, cells: fn(&Row<'_>, Glyphs) -> Vec<Cell> },
}

/// Which glyphs stand before the type.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::report) enum Glyphs {
    Unicode,
    Ascii,
    /// None: the font may have none.
    Words,
}

impl Unit {
    /// The unit in words, for any model.
    pub fn meaning(self) -> &'static str {
        match self {
            Unit::None => "no unit",
            Unit::Time => "time unit",
            Unit::PerTime => "1/time unit",
            Unit::State => "unit of the species",
            Unit::Yield => "unit of the species per time unit; in a map, per step",
            Unit::Said(words) => words,
        }
    }

    /// The unit in a model, for what belongs to a species where one is given; empty where there is none to be said.
    pub(in crate::report) fn of(self, table: &Table<'_>, species: Option<usize>) -> String {
        let time = &table.model.time_unit.value;
        let species = species.and_then(|place| table.model.species.get(place)?.unit.as_ref());
        match (self, species) {
            (Unit::Time, _) => time.clone(),
            (Unit::PerTime, _) => format!("1/{}", in_brackets(time)),
            (Unit::State, Some(unit)) => unit.value.clone(),
            (Unit::Yield, Some(unit)) if table.is_map() => format!("{}/step", in_brackets(&unit.value)),
            (Unit::Yield, Some(unit)) => format!("{}/{}", in_brackets(&unit.value), in_brackets(time)),
            _ => String::new(),
        }
    }
}

/// A unit that can be divided, or divided by.
fn in_brackets(unit: &str) -> String {
    if unit.chars().all(char::is_alphanumeric) { unit.to_owned() } else { format!("({unit})") }
}

impl Column {
    /// The headings of its cells.
    pub(super) fn heads(&self, table: &Table<'_>) -> Vec<Head> {
        match self.cells {
            Cells::Own { heads, .. } => heads(table),
            Cells::Rounded if self.is_too_many(table) => vec![Head::new(self.title, Align::Left)],
            Cells::Rounded => self.paths(table).iter().map(|path| self.head(table, path)).collect(),
        }
    }

    fn head(&self, table: &Table<'_>, path: &Path) -> Head {
        let title = format!("{} {}", self.title, path.name()).trim().to_owned();
        Head { title, unit: self.unit.of(table, path.species), align: Align::Point }
    }

    /// Its cells for people, as many as headings.
    pub(super) fn cells(&self, row: &Row<'_>, glyphs: Glyphs) -> Vec<Cell> {
        match self.cells {
            Cells::Own { cells, .. } => cells(row, glyphs),
            Cells::Rounded if self.is_too_many(row.table) => vec![Cell::new(TOO_MANY)],
            Cells::Rounded => {
                let value = self.keys.first().map_or(Value::Null, |key| key.get.value(row));
                self.paths(row.table).iter().map(|path| Cell::new(humane(path.of(&value)))).collect()
            }
        }
    }

    /// Whether its numbers are those of pairs, and of more pairs than can be read.
    fn is_too_many(&self, table: &Table<'_>) -> bool {
        let species = table.model.species.len();
        let pairs = match self.id {
            "elasticities" => (species + 1).saturating_mul(table.model.parameters.len()),
            _ => species.saturating_mul(species),
        };
        self.shown == Shown::Json && pairs > MOST_SHOWN
    }

    fn paths(&self, table: &Table<'_>) -> Vec<Path> {
        self.keys.first().map_or_else(Vec::new, |key| key.get.paths(table))
    }
}

/// A column of one number at most.
const fn number(
    id: &'static str,
    title: &'static str,
    unit: Unit,
    shown: Shown,
    keys: &'static [Key],
    help: &'static str,
) -> Column {
    Column { id, unit, help, shown, title, keys, cells: Cells::Rounded }
}

const fn key(name: &'static str, get: Get) -> Key {
    Key { name, get }
}
