//! The comparison as JSON: the table's, with what is matched after its scenarios; see the [module's head](super).

use serde_json::{Map, Value, json};

use super::super::table::{self, exact};
use super::words::{name, sentence, word};
use super::{Change, Comparison, Entry, Identity};
use crate::analysis::passage::Fate;

/// The comparison as a JSON object.
pub fn json(comparison: &Comparison<'_>) -> Value {
    let mut all = table::json(comparison.table);
    let reference = comparison.reference.map(|reference| name(comparison.table, reference));
    let matches: Vec<Value> = comparison.rows.iter().map(|identity| one(comparison, identity)).collect();
    if let Value::Object(keys) = &mut all {
        let after: Vec<(String, Value)> =
            ["run", "caution"].iter().filter_map(|key| keys.shift_remove_entry(*key)).collect();
        keys.insert("reference".to_owned(), json!(reference));
        keys.insert("matches".to_owned(), Value::Array(matches));
        keys.extend(after);
    }
    all
}

fn one(comparison: &Comparison<'_>, identity: &Identity) -> Value {
    let scenario = |(scene, entry): (usize, &Entry)| {
        json!({
            "name": name(comparison.table, scene),
            "place": entry.place,
            "change": change(comparison, identity, scene, entry),
            "differences": differences(comparison, identity, entry),
        })
    };
    json!({"id": identity.id, "scenarios": identity.entries.iter().enumerate().map(scenario).collect::<Vec<_>>()})
}

fn change(comparison: &Comparison<'_>, identity: &Identity, scene: usize, entry: &Entry) -> Value {
    let mut keys = json!({
        "what": word(entry.change),
        "proven": false,
        "text": sentence(comparison, identity, scene),
    });
    if let (Some(fate), Value::Object(keys)) = (&entry.fate, &mut keys) {
        keys.extend(through(comparison, scene, entry, fate));
    }
    if entry.change == Change::Same {
        keys["type_changed"] = json!(entry.type_changed);
    }
    keys
}

fn through(comparison: &Comparison<'_>, scene: usize, entry: &Entry, fate: &Fate) -> Map<String, Value> {
    let own = if entry.is_back() { Some(scene) } else { comparison.reference };
    let other = if entry.is_back() { comparison.reference } else { Some(scene) };
    let id = |scene: Option<usize>, place: Option<usize>| {
        let (Some(scene), Some(place)) = (scene, place) else { return Value::Null };
        comparison.table.names.of(scene).get(place).map_or(Value::Null, |id| id.clone().into())
    };
    let none: &[f64] = &[];
    let (through, at, with, species, turns, kinks) = match fate {
        Fate::Arrives { at, turns, kinks } => ("arrives", None, id(other, Some(*at)), None, &turns[..], &kinks[..]),
        Fate::Fold { at, with } => ("fold", Some(*at), id(own, *with), None, none, none),
        Fate::Zero { at, species, with } => ("zero", Some(*at), id(own, *with), Some(*species), none, none),
        Fate::LeavesBox { at, species } => ("box", Some(*at), Value::Null, Some(*species), none, none),
        Fate::NotFollowed(_) => ("not followed", None, Value::Null, None, none, none),
    };
    let symbol = species.and_then(|id| comparison.table.symbol(id.0));
    let list = |shares: &[f64]| shares.iter().map(|&share| exact(share)).collect::<Vec<_>>();
    Map::from_iter([
        ("through".to_owned(), through.into()),
        ("at".to_owned(), table::optional(at)),
        ("with".to_owned(), with),
        ("species".to_owned(), json!(symbol)),
        ("turns".to_owned(), list(turns).into()),
        ("kinks".to_owned(), list(kinks).into()),
    ])
}

fn differences(comparison: &Comparison<'_>, identity: &Identity, entry: &Entry) -> Map<String, Value> {
    let base = comparison.base(identity).filter(|_| entry.change == Change::Same);
    let Some(base) = base else { return Map::new() };
    let pairs = comparison.quantities.iter().zip(base.values.iter().zip(&entry.values));
    pairs
        .filter_map(|(quantity, (from, to))| {
            let (from, to) = (from.as_ref()?, to.as_ref()?);
            (from != to).then(|| (quantity.name.clone(), json!({"from": exact(*from), "to": exact(*to)})))
        })
        .collect()
}
