//! The comparison as CSV (RFC 4180): one row for each equilibrium and scenario, whether it is there or not.
//!
//! Fields: `id`, `scenario`, `reference`, `change`, `change_in_words`, `place` (from 1), `proven`, `type`, `type_proven`,
//! `type_changed`, then each quantity and its `change of` from the reference; then `complete`, `from_now` and `error` of the
//! scenario, and what the whole is of, as in the table. Numbers read back exactly.

use serde_json::Value;

use super::super::kinds;
use super::super::table::csv::{constants, line};
use super::super::table::{Style, exact, optional, paths, scene};
use super::{Change, Comparison, Entry, Identity, words};

/// The comparison: a line of names, then the rows; every line ends in CR LF.
pub fn csv(comparison: &Comparison<'_>, style: Style) -> String {
    let table = comparison.table;
    let constants = constants(table);
    let mut names: Vec<String> = BEFORE.iter().map(|name| (*name).to_owned()).collect();
    for quantity in &comparison.quantities {
        let unit = if quantity.unit.is_empty() { String::new() } else { format!(" ({})", quantity.unit) };
        names.push(format!("{}{unit}", quantity.name));
        names.push(format!("change of {}{unit}", quantity.name));
    }
    names.extend(AFTER.iter().map(|name| (*name).to_owned()));
    names.extend(constants.iter().map(|(name, _)| (*name).to_owned()));
    let mut text = line(&names.into_iter().map(Value::from).collect::<Vec<_>>(), style);
    for identity in &comparison.rows {
        for (scene, entry) in identity.entries.iter().enumerate() {
            let own = fields(comparison, identity, scene, entry);
            let common = constants.iter().map(|(_, value)| value.clone());
            text.push_str(&line(&own.into_iter().chain(common).collect::<Vec<_>>(), style));
        }
    }
    text
}

const BEFORE: [&str; 10] = [
    "id",
    "scenario",
    "reference",
    "change",
    "change_in_words",
    "place",
    "proven",
    "type",
    "type_proven",
    "type_changed",
];

const AFTER: [&str; 3] = ["complete", "from_now", "error"];

fn fields(comparison: &Comparison<'_>, identity: &Identity, scene: usize, entry: &Entry) -> Vec<Value> {
    let table = comparison.table;
    let solved = comparison.solved(scene);
    let equilibrium = entry.place.and_then(|place| solved?.equilibria.list.get(place));
    let assessed = entry.place.and_then(|place| solved?.assessment.equilibria.get(place));
    let linear = assessed.and_then(|assessed| assessed.linear.as_ref().ok());
    let mut all: Vec<Value> = vec![
        identity.id.clone().into(),
        words::name(table, scene).into(),
        comparison.reference.map_or(Value::Null, |reference| words::name(table, reference).into()),
        words::word(entry.change).into(),
        words::sentence(comparison, identity, scene).map_or(Value::Null, Value::from),
        entry.place.map_or(Value::Null, |place| (place + 1).into()),
        equilibrium.map_or(Value::Null, |equilibrium| equilibrium.proven.into()),
        linear.map_or(Value::Null, |linear| kinds::of(linear.kind).word.into()),
        linear.map_or(Value::Null, |linear| linear.kind_proven.into()),
        entry.type_changed.filter(|_| entry.change == Change::Same).map_or(Value::Null, Value::from),
    ];
    let base = comparison.base(identity).filter(|_| entry.change == Change::Same);
    for (place, value) in entry.values.iter().enumerate() {
        let from = base.and_then(|base| *base.values.get(place)?);
        all.push(optional(*value));
        all.push(from.zip(*value).map_or(Value::Null, |(from, to)| exact(to - from)));
    }
    let from = solved.and_then(|solved| solved.assessment.from_now.as_ref());
    let place = paths::Place { table, scenario: table.scenes[scene].scenario, ids: table.names.of(scene) };
    all.push(solved.map_or(Value::Null, |solved| solved.equilibria.complete.into()));
    all.push(from.map_or(Value::Null, |from| paths::word(place, &from.reaches).into()));
    let problems = table.scenes[scene].outcome.as_ref().err();
    all.push(problems.map_or(Value::Null, |problems| scene::problems(table.model, problems).join("; ").into()));
    all
}
