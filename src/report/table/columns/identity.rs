//! Which equilibrium it is, where, and what is proved of it.

use serde_json::json;

use super::super::layout::{Align, Cell, Head, Ink};
use super::super::number::bound;
use super::super::{Row, Table, words};
use super::path::Get;
use super::{Cells, Column, Shown, Unit, key};

/// Symbols of those present are listed up to this many characters, then counted.
const SYMBOLS: usize = 18;

pub(super) static COLUMNS: &[Column] = &[
    Column {
        id: "id",
        unit: Unit::None,
        help: "name of the equilibrium, the same in all scenarios of one run",
        shown: Shown::Everywhere,
        title: "",
        keys: &[key("id", Get::One(|row| row.id().into()))],
        cells: Cells::Own { heads: |_| vec![Head::new("", Align::Left)], cells: |row, _| vec![Cell::new(row.id())] },
    },
    Column {
        id: "state",
        unit: Unit::State,
        help: "abundance of each species; exactly 0 for those absent",
        shown: Shown::Everywhere,
        title: "",
        keys: &[key("state", Get::Species(|row| Some(every(&row.equilibrium.state))))],
        cells: Cells::Rounded,
    },
    Column {
        id: "present",
        unit: Unit::None,
        help: "symbols of the species that are not absent",
        shown: Shown::Files,
        title: "present",
        keys: &[key("present", Get::One(|row| json!(present(row))))],
        cells: Cells::Own {
            heads: |_| vec![Head::new("present", Align::Left)],
            cells: |row, _| vec![Cell::new(counted(&present(row), row.table.model.species.len()))],
        },
    },
    Column {
        id: "proven",
        unit: Unit::None,
        help: "proved: exactly one equilibrium is within the error given, for people the worst of radius; numerical: computed, \
               nothing proved",
        shown: Shown::Everywhere,
        title: "state",
        keys: &[key("proven", Get::One(|row| row.equilibrium.proven.into()))],
        cells: Cells::Own {
            heads: |_| vec![Head { unit: "error".to_owned(), ..Head::new("state", Align::Left) }],
            cells: |row, _| vec![sureness(row)],
        },
    },
    Column {
        id: "radius",
        unit: Unit::Said("no unit: relative; unit of the species for an abundance of 0"),
        help: "bound of the error of each abundance, where the state is proved",
        shown: Shown::Files,
        title: "error",
        keys: &[key("radius", Get::Species(|row| Some(every(&row.equilibrium.radius()))))],
        cells: Cells::Own {
            heads: |_: &Table<'_>| vec![Head::new("error", Align::Left)],
            cells: |row, _| vec![Cell::new(worst(&row.equilibrium.radius(), row.equilibrium.proven))],
        },
    },
];

/// A number for each species.
fn every(numbers: &[f64]) -> Vec<(usize, Option<f64>)> {
    numbers.iter().map(|&x| Some(x)).enumerate().collect()
}

fn present<'t>(row: &Row<'t>) -> Vec<&'t str> {
    let species = row.table.model.species.iter().enumerate();
    species.filter(|(i, _)| row.equilibrium.has(*i)).map(|(_, species)| species.symbol.as_str()).collect()
}

pub(super) fn counted(present: &[&str], all: usize) -> String {
    let listed = present.join(" ");
    match present.len() {
        0 => "none".to_owned(),
        _ if listed.chars().count() <= SYMBOLS => listed,
        count if count == all => format!("all {all}"),
        count => format!("{count} of {all}"),
    }
}

/// What is proved of a state, with the error: apart, either would need the other to be understood.
pub(in crate::report) fn sureness(row: &Row<'_>) -> Cell {
    let word = words::proof(row.equilibrium.proven);
    let text = match worst(&row.equilibrium.radius(), row.equilibrium.proven).as_str() {
        _ if !row.equilibrium.proven => word.to_owned(),
        "0" => format!("{word}, exact"),
        error => format!("{word}, {error}"),
    };
    Cell::inked(text, Ink::of(row.equilibrium.proven))
}

fn worst(radius: &[f64], proven: bool) -> String {
    if proven { bound(radius.iter().copied().fold(0.0, f64::max)) } else { "unknown".to_owned() }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn those_present_are_listed_while_they_are_few() {
        let many: Vec<String> = (0..30).map(|i| format!("x{i}")).collect();
        let symbols = |count: usize| many.iter().take(count).map(String::as_str).collect::<Vec<_>>();
        for (count, all, text) in
            [(0, 3, "none"), (2, 3, "x0 x1"), (3, 3, "x0 x1 x2"), (12, 30, "12 of 30"), (30, 30, "all 30")]
        {
            assert_eq!(counted(&symbols(count), all), text);
        }
        assert_eq!(worst(&[0.0, 2.01e-16], true), "3e-16");
        assert_eq!(worst(&[0.0], false), "unknown");
    }
}
