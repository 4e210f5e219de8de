//! What a table is of, and all that is needed to make it again: the same facts in every format.

use crate::model::TimeKind;

use super::Table;
use super::number::human;

/// Something that holds for the whole table.
pub(in crate::report) struct Fact {
    /// The field of CSV.
    pub(in crate::report) key: &'static str,
    /// What people read before it.
    pub(in crate::report) label: &'static str,
    /// One text, or several of a kind.
    pub(in crate::report) texts: Vec<String>,
}

/// Every fact but the title, in the order in which they are shown, with numbers written as told.
pub(in crate::report) fn facts(table: &Table<'_>, number: fn(f64) -> String) -> Vec<Fact> {
    let one = |key, label, text: String| Fact { key, label, texts: vec![text] };
    let tables = table.tables.iter().map(|(name, sha256)| format!("{sha256} {name}")).collect();
    let set = if table.set.is_empty() { Vec::new() } else { vec![set(table)] };
    vec![
        one("program", "program", concat!("restpoint ", env!("CARGO_PKG_VERSION")).to_owned()),
        one("command", "command", table.command.to_owned()),
        one("sha256", "SHA-256", table.sha256.to_owned()),
        Fact { key: "tables", label: "tables", texts: tables },
        Fact { key: "set", label: "set", texts: set },
        one("time", "time", time(table, number)),
        one("searched", "searched", search_box(table, number)),
        one("budget", "budget", budget(table)),
    ]
}

fn time(table: &Table<'_>, number: fn(f64) -> String) -> String {
    let unit = &table.model.time_unit.value;
    match table.model.time {
        TimeKind::Continuous => format!("continuous, in {unit}"),
        TimeKind::Discrete { step } => format!("in steps of {} {unit}", number(step)),
    }
}

fn set(table: &Table<'_>) -> String {
    table.set.iter().map(|&(id, value)| format!("{} = {value}", table.parameter(id))).collect::<Vec<_>>().join(", ")
}

/// The sides of the box; neighbours that share theirs are named together.
fn search_box(table: &Table<'_>, number: fn(f64) -> String) -> String {
    let mut groups: Vec<(Vec<&str>, String)> = Vec::new();
    for (species, bound) in table.model.species.iter().zip(table.bounds) {
        let unit = species.unit.as_ref().map_or(String::new(), |unit| format!(" {}", unit.value));
        let chosen = if bound.chosen { " (chosen)" } else { "" };
        let range = format!("{} to {}{unit}{chosen}", number(bound.lower), number(bound.upper));
        match groups.last_mut() {
            Some((symbols, shared)) if *shared == range => symbols.push(&species.symbol),
            _ => groups.push((vec![&species.symbol], range)),
        }
    }
    groups.iter().map(|(symbols, range)| format!("{} {range}", symbols.join(", "))).collect::<Vec<_>>().join("; ")
}

fn budget(table: &Table<'_>) -> String {
    format!("{} s for each scenario, {} boxes on each face", table.limits.seconds, table.limits.boxes)
}

/// A number that reads back the same; zero has no minus.
pub(in crate::report) fn whole(x: f64) -> String {
    format!("{}", x + 0.0)
}

/// A number as the file may have it, where that is short.
pub(in crate::report) fn plain(x: f64) -> String {
    let exact = whole(x);
    if exact.len() <= 7 { exact } else { human(x) }
}
