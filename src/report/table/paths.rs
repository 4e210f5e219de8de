//! Where paths go, as words, sentences and data: what an unstable state gives way to, where today's stocks lead.
//!
//! All of it is numerical, and every sentence says so.

use serde_json::{Map, Value, json};

use crate::analysis::paths::{Cycle, Destination, FromNow};
use crate::model::SpeciesId;

use super::columns::by_symbol;
use super::number::human;
use super::provenance::plain;
use super::{Table, exact, optional};

/// Species whose abundances are named in a sentence; more would bury it.
const MOST_NAMED: usize = 8;

/// What is needed to name where a path ends.
#[derive(Clone, Copy, Debug)]
pub(in crate::report) struct Place<'t> {
    pub(in crate::report) table: &'t Table<'t>,
    /// Index of the scenario in the model.
    pub(in crate::report) scenario: usize,
    /// The names of its equilibria.
    pub(in crate::report) ids: &'t [String],
}

/// The contract's word for a destination: `E2`, `cycle`, `loss of C`, `not settled`.
pub(in crate::report) fn word(place: Place<'_>, to: &Destination) -> String {
    match to {
        Destination::Equilibrium(index) => place.ids.get(*index).cloned().unwrap_or_else(|| "not settled".to_owned()),
        Destination::Cycle(_) => "cycle".to_owned(),
        Destination::Loss(lost) => {
            let symbols: Vec<&str> = lost.iter().filter_map(|id| place.table.symbol(id.0)).collect();
            format!("loss of {}", symbols.join(", "))
        }
        Destination::NotSettled => "not settled".to_owned(),
    }
}

/// A destination as data, with what is known of a cycle.
pub(super) fn destination(place: Place<'_>, to: &Destination) -> Value {
    let mut keys = Map::from_iter([("to".to_owned(), word(place, to).into())]);
    if let Destination::Cycle(cycle) = to {
        keys.extend(cycle_keys(place, cycle));
    }
    Value::Object(keys)
}

fn cycle_keys(place: Place<'_>, cycle: &Cycle) -> Map<String, Value> {
    let Place { table, .. } = place;
    let harvests = table.model.harvests_under(place.scenario);
    let amounts = |amounts: &[(SpeciesId, f64)]| by_symbol(table, amounts.iter().map(|&(id, x)| (id.0, Some(x))));
    let yields = harvests.iter().zip(&cycle.mean_yield);
    let mean: Map<String, Value> = yields.map(|(harvest, taken)| (harvest.name.clone(), amounts(taken))).collect();
    Map::from_iter([
        ("period".to_owned(), exact(cycle.period)),
        ("lowest".to_owned(), state(table, &cycle.lowest)),
        ("highest".to_owned(), state(table, &cycle.highest)),
        ("mean_yield".to_owned(), Value::Object(mean)),
    ])
}

fn state(table: &Table<'_>, state: &[f64]) -> Value {
    by_symbol(table, state.iter().map(|&x| Some(x)).enumerate())
}

/// Where today's stocks lead, as data.
pub(super) fn from_now(place: Place<'_>, from: &FromNow) -> Value {
    let shares = from.shares.iter().map(|(to, share)| (word(place, to), exact(*share)));
    let mut keys = json!({
        "reaches": word(place, &from.reaches),
        "time": optional(from.time),
        "lowest": state(place.table, &from.lowest),
        "shares": shares.collect::<Map<_, _>>(),
        "starts": from.starts,
        "broken_off": from.broken_off,
    });
    if let (Value::Object(keys), Destination::Cycle(cycle)) = (&mut keys, &from.reaches) {
        keys.insert("cycle".to_owned(), Value::Object(cycle_keys(place, cycle)));
    }
    keys
}

/// Where today's stocks lead, in a sentence or two.
pub(in crate::report) fn from_now_in_words(place: Place<'_>, from: &FromNow) -> String {
    let table = place.table;
    let stock = |species: usize, x: f64| named(table, species, &plain(x));
    let today: Vec<String> = table.model.now.iter().map(|now| stock(now.species.0, now.value)).collect();
    let is_long = table.model.species.len() > MOST_NAMED;
    let start = if today.is_empty() || is_long { "today's stocks".to_owned() } else { today.join(", ") };
    let when = from.time.map_or_else(String::new, |after| when(place, &from.reaches, after));
    let lowest: Vec<String> = from.lowest.iter().enumerate().map(|(i, &x)| amount(table, i, x)).collect();
    let lowest = match lowest.len() {
        0 => String::new(),
        _ if is_long => "; json has the lowest of each species on the way".to_owned(),
        // What was broken off may yet fall lower.
        _ if from.reaches == Destination::NotSettled => format!("; lowest until then {}", lowest.join(", ")),
        _ => format!("; lowest on the way {}", lowest.join(", ")),
    };
    let end = ends(place, &from.reaches);
    format!("From {start}, the path {end}{when}{lowest} (numerical).{}", shares_in_words(place, from))
}

fn shares_in_words(place: Place<'_>, from: &FromNow) -> String {
    if from.broken_off {
        return " The budget ended before all paths were followed: a larger --budget may tell more.".to_owned();
    }
    if from.shares.is_empty() {
        return String::new();
    }
    let one = |(to, share): &(Destination, f64)| {
        let end = match to {
            Destination::Equilibrium(_) => format!("reach {}", word(place, to)),
            Destination::Cycle(_) => "settle on a cycle".to_owned(),
            Destination::Loss(_) => format!("lead to the {}", word(place, to)),
            Destination::NotSettled => "do not settle in time".to_owned(),
        };
        format!("{} {end}", percent(*share))
    };
    let all: Vec<String> = from.shares.iter().map(one).collect();
    format!(" Of {} starts as uncertain as the survey, {}.", from.starts, all.join(", "))
}

/// How a path ends, after its subject.
fn ends(place: Place<'_>, to: &Destination) -> String {
    match to {
        Destination::Equilibrium(_) => format!("reaches {}", word(place, to)),
        Destination::Cycle(_) => "settles on a cycle".to_owned(),
        Destination::Loss(_) => format!("leads to the {}", word(place, to)),
        Destination::NotSettled => "has not settled in the time that it was followed".to_owned(),
    }
}

/// When a path has come near its end, after [`ends`].
fn when(place: Place<'_>, to: &Destination, after: f64) -> String {
    let unit = &place.table.model.time_unit.value;
    match to {
        Destination::Loss(_) => format!(", gone or below 10 % of the start after {} {unit}", human(after)),
        _ if after == 0.0 => ", and is within 10 % of it from the start".to_owned(),
        _ => format!(", to within 10 % after {} {unit}", human(after)),
    }
}

/// A share in whole percent, and never all or nothing where it is neither.
fn percent(share: f64) -> String {
    match share {
        x if x > 0.0 && x < 0.01 => "under 1 %".to_owned(),
        x if x > 0.99 && x < 1.0 => "over 99 %".to_owned(),
        x => format!("{:.0} %", 100.0 * x),
    }
}

/// How an unstable state is left.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Leaving {
    /// Winding around it or from side to side, so that all paths leave alike.
    Winding,
    /// To either of two sides, of which only the worse is told.
    Sideways,
}

/// What an unstable state gives way to, in a sentence.
pub(super) fn settles_in_words(place: Place<'_>, id: &str, leaving: Leaving, to: &Destination) -> String {
    let path = match leaving {
        Leaving::Winding => "a path released beside it",
        Leaving::Sideways => "of paths released on its two sides, the one with the poorer end",
    };
    let end = match to {
        Destination::Cycle(cycle) => format!("settles on {}", cycle_in_words(place.table, cycle)),
        other => ends(place, other),
    };
    format!("{id} is unstable: {path} {end} (numerical).")
}

fn cycle_in_words(table: &Table<'_>, cycle: &Cycle) -> String {
    let sides = cycle.lowest.iter().zip(&cycle.highest).enumerate();
    let between = |(i, (&low, &high)): (usize, (&f64, &f64))| {
        let symbol = table.symbol(i).unwrap_or("");
        format!("{symbol} from {} to {}{}", human(low), human(high), unit(table, i))
    };
    let sides: Vec<String> = sides.map(between).collect();
    format!("a cycle of {} {}: {}", human(cycle.period), table.model.time_unit.value, sides.join(", "))
}

fn amount(table: &Table<'_>, species: usize, x: f64) -> String {
    named(table, species, &human(x))
}

fn named(table: &Table<'_>, species: usize, number: &str) -> String {
    format!("{} {number}{}", table.symbol(species).unwrap_or(""), unit(table, species))
}

fn unit(table: &Table<'_>, species: usize) -> String {
    let unit = table.model.species.get(species).and_then(|species| species.unit.as_ref());
    unit.map_or_else(String::new, |unit| format!(" {}", unit.value))
}

#[cfg(test)]
mod tests {
    use super::percent;

    #[test]
    fn shares_are_never_rounded_to_all_or_nothing() {
        for (share, text) in [(0.0, "0 %"), (1e-9, "under 1 %"), (0.07, "7 %"), (0.9999, "over 99 %"), (1.0, "100 %")] {
            assert_eq!(percent(share), text);
        }
    }
}
