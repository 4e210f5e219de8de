//! How fast the community returns, and how far a knock can grow first.

use serde_json::{Value, json};

use crate::analysis::measures::Amplification;

use super::super::layout::{Align, Cell, Head};
use super::super::number::human;
use super::super::{Table, exact};
use super::path::{Get, keyed};
use super::{Cells, Column, Shown, Unit, key, number};

pub(super) static COLUMNS: &[Column] = &[
    number(
        "resilience",
        "resilience",
        Unit::PerTime,
        Shown::Files,
        &[key("resilience", Get::Number(|row| row.measures()?.resilience))],
        "rate at which a small knock fades in the long run: -max Re(eigenvalue), in a map -ln|multiplier|/step; \
         negative where it grows (Pimm & Lawton 1977)",
    ),
    number(
        "return_time",
        "return time",
        Unit::Time,
        Shown::Everywhere,
        &[key("return_time", Get::Number(|row| row.measures()?.return_time))],
        "1/resilience: how long until a small knock has faded to 37 %, in the long run; none where it does not fade",
    ),
    number(
        "period",
        "period",
        Unit::Time,
        Shown::Everywhere,
        &[key("period", Get::Number(|row| row.measures()?.period))],
        "length of a swing on the way, 2 pi/|Im| of the leading eigenvalue, in a map 2 pi step/|arg|; none where there is \
         no swing",
    ),
    number(
        "damping_ratio",
        "damping ratio",
        Unit::None,
        Shown::Files,
        &[key("damping_ratio", Get::Number(|row| row.measures()?.damping_ratio))],
        "-Re/modulus of the leading eigenvalue, as engineers define it: 1 without swings, 0 where they go on for ever; \
         not the ratio of the two largest eigenvalues that demographers call by this name",
    ),
    number(
        "reactivity",
        "reactivity",
        Unit::PerTime,
        Shown::Files,
        &[key("reactivity", Get::Number(|row| row.measures()?.reactivity))],
        "fastest growth of a small knock at once, in absolute abundances, so that it hangs on their units; where \
         positive, some knocks grow before they fade (Neubert & Caswell 1997)",
    ),
    number(
        "reactivity_proportional",
        "reactivity, proportional",
        Unit::PerTime,
        Shown::Files,
        &[key("reactivity_proportional", Get::Number(|row| row.measures()?.reactivity_proportional))],
        "the same in shares of the abundances of those present, whatever their units",
    ),
    Column {
        id: "peak_amplification",
        unit: Unit::Said("factor: no unit; time: time unit"),
        help: "how many times larger a small knock can become before it fades, at most, and when (Neubert & Caswell 1997); \
               in absolute abundances, so that it hangs on their units",
        shown: Shown::Everywhere,
        title: "amplification",
        keys: &[key(
            "peak_amplification",
            Get::Other {
                paths: |_| keyed(&["factor", "time"]),
                value: |row| peak(row.measures().and_then(|measures| measures.amplification)),
            },
        )],
        cells: Cells::Own {
            heads: |table| surge_head(table, "surge"),
            cells: |row, _| surge(row.measures().and_then(|measures| measures.amplification)),
        },
    },
];

/// The heading over [`surge`].
pub(super) fn surge_head(table: &Table<'_>, title: &str) -> Vec<Head> {
    let unit = format!("fold, {}", Unit::Time.of(table, None));
    vec![Head { unit, ..Head::new(title, Align::Left) }]
}

/// How far a knock grows, and when, in one cell that no page can break; a word where it never does.
pub(super) fn surge(found: Option<Amplification>) -> Vec<Cell> {
    vec![Cell::new(match found {
        None => String::new(),
        Some(Amplification { time: 0.0, .. }) => "none".to_owned(),
        Some(Amplification { factor, time }) => format!("{} at {}", human(factor), human(time)),
    })]
}

/// An amplification as data.
pub(super) fn peak(found: Option<Amplification>) -> Value {
    found.map_or(Value::Null, |found| json!({"factor": exact(found.factor), "time": exact(found.time)}))
}
