//! The table of effects as rows, for saving: one an effect, so that a program need not know how many species there are.

use serde_json::Value;

use super::{Effects, Interactions, Sign};
use crate::model::Model;
use crate::report::table::exact;

/// What the fields of a row are.
pub fn headings() -> [&'static str; 6] {
    ["effects", "answer of", "press on", "number", "sign", "sign is"]
}

/// One row an effect, row by row of the table. Numbers read back exactly; one that is not finite is null.
pub fn rows(table: &Interactions, model: &Model) -> Vec<[Value; 6]> {
    let n = table.species.len();
    let symbol = |place: usize| {
        let species = table.species.get(place).and_then(|&i| model.species.get(i));
        Value::from(species.map_or("", |species| species.symbol.as_str()))
    };
    let kind = if table.effects == Effects::Direct { "direct" } else { "net" };
    let one = |(k, effect): (usize, &super::Effect)| {
        let (sign, sure) = match (effect.sign, effect.proved) {
            (Sign::Undecided, _) => ("unknown", "undecided"),
            (Sign::Positive, proved) => ("plus", sureness(proved)),
            (Sign::Negative, proved) => ("minus", sureness(proved)),
            (Sign::Zero, proved) => ("zero", sureness(proved)),
        };
        [kind.into(), symbol(k / n), symbol(k % n), exact(effect.number), sign.into(), sure.into()]
    };
    table.entries.iter().enumerate().map(one).collect()
}

fn sureness(proved: bool) -> &'static str {
    if proved { "proved" } else { "numerical" }
}
