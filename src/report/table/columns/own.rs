//! What goes beyond the contract's keys, and stands after them.

use serde_json::{Map, Value, json};

use crate::analysis::measures::Group;

use super::super::layout::{Align, Cell, Head, Ink};
use super::super::{Row, Table, exact, optional};
use super::measures::{peak, surge, surge_head};
use super::path::{Get, Path, keyed};
use super::{Cells, Column, Shown, Unit, key, number};

pub(super) static COLUMNS: &[Column] = &[
    Column {
        id: "why",
        unit: Unit::None,
        help: "why there is no linear part, where there is none: no derivative, a kink, eigenvalues that did not come out",
        shown: Shown::Files,
        title: "linear part",
        keys: &[key("why", Get::One(|row| json!(row.why())))],
        cells: Cells::Own {
            heads: |_| vec![Head::new("linear part", Align::Left)],
            cells: |row, _| vec![Cell::inked(row.why().unwrap_or(""), Ink::Undecided)],
        },
    },
    number(
        "reactivity_present",
        "reactivity, present alone",
        Unit::PerTime,
        Shown::Files,
        &[key("reactivity_present", Get::Number(|row| row.measures()?.reactivity_present))],
        "reactivity of those present alone, where others are absent",
    ),
    Column {
        id: "peak_amplification_present",
        unit: Unit::Said("factor: no unit; time: time unit"),
        help: "peak_amplification of those present alone, where others are absent",
        shown: Shown::Files,
        title: "amplification, present alone",
        keys: &[key(
            "peak_amplification_present",
            Get::Other {
                paths: |_| keyed(&["factor", "time"]),
                value: |row| peak(row.measures().and_then(|measures| measures.amplification_present)),
            },
        )],
        cells: Cells::Own {
            heads: |table| surge_head(table, "surge, present alone"),
            cells: |row, _| surge(row.measures().and_then(|measures| measures.amplification_present)),
        },
    },
    number(
        "invariability",
        "invariability",
        Unit::PerTime,
        Shown::Files,
        &[key("invariability", Get::Number(|row| row.measures()?.invariability))],
        "1 over twice the largest stationary variance that any unit white noise gives (Arnoldi, Loreau & Haegeman 2016)",
    ),
    Column {
        id: "populations",
        unit: Unit::Said("total: unit of the stages; invasion: 1/time unit"),
        help: "of each population of several stages: their total, and where it is absent its growth when rare",
        shown: Shown::Everywhere,
        title: "",
        keys: &[key("populations", Get::Other { paths: group_paths, value: groups })],
        cells: Cells::Own { heads: total_heads, cells: totals },
    },
    Column {
        id: "net_effects_condition",
        unit: Unit::None,
        help: "condition number behind net_effects, and whether it leaves fewer than half of their digits",
        shown: Shown::Files,
        title: "net effects",
        keys: &[key(
            "net_effects_condition",
            Get::Other { paths: |_| keyed(&["number", "nearly_singular"]), value: condition },
        )],
        cells: Cells::Own {
            heads: |_| vec![Head::new("net effects", Align::Left)],
            cells: |row, _| vec![net_effects_trust(row)],
        },
    },
];

/// The populations that have several stages, in the order of their first.
fn populations<'t>(table: &Table<'t>) -> Vec<&'t str> {
    let mut names: Vec<&str> = Vec::new();
    for name in table.model.species.iter().filter_map(|species| species.population.as_deref()) {
        if !names.contains(&name) {
            names.push(name);
        }
    }
    names
}

fn group_paths(table: &Table<'_>) -> Vec<Path> {
    let of = |name: &str| ["total", "invasion"].map(|part| Path::default().key(name).key(part));
    populations(table).into_iter().flat_map(of).collect()
}

fn groups(row: &Row<'_>) -> Value {
    let one = |group: &Group| {
        (group.name.clone(), json!({"total": exact(group.total), "invasion": optional(group.invasion)}))
    };
    let all = |found: &[Group]| Value::Object(found.iter().map(one).collect::<Map<_, _>>());
    row.measures().map_or(Value::Null, |measures| all(&measures.groups))
}

fn total_heads(table: &Table<'_>) -> Vec<Head> {
    let head = |name: &str| {
        let stage = table.model.species.iter().position(|species| species.population.as_deref() == Some(name));
        Head { unit: Unit::State.of(table, stage), ..Head::new(&format!("{name}, total"), Align::Point) }
    };
    populations(table).into_iter().map(head).collect()
}

fn totals(row: &Row<'_>, _: super::Glyphs) -> Vec<Cell> {
    let groups = row.measures().map_or(&[][..], |measures| &measures.groups);
    let total = |name: &str| groups.iter().find(|group| group.name == name).map(|group| group.total);
    let cell = |name| Cell::new(total(name).map_or_else(String::new, super::super::human));
    populations(row.table).into_iter().map(cell).collect()
}

fn condition(row: &Row<'_>) -> Value {
    let net = row.measures().and_then(|measures| measures.net_effects.as_ref());
    net.map_or(Value::Null, |net| json!({"number": exact(net.condition), "nearly_singular": net.nearly_singular}))
}

fn net_effects_trust(row: &Row<'_>) -> Cell {
    let net = row.measures().and_then(|measures| measures.net_effects.as_ref());
    match net {
        None => Cell::new(""),
        Some(net) if net.nearly_singular => Cell::inked("few digits hold", Ink::Undecided),
        Some(_) => Cell::new("hold"),
    }
}
