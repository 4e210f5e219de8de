//! What changed, in words: the one place where a fate and a difference become a text.

use super::super::table::words::proof;
use super::super::table::{Table, human, percent, why};
use super::{Change, Comparison, Entry, Identity};
use crate::analysis::passage::Fate;

/// Numbers that differ by this share, or less, differ by rounding.
const ROUNDING: f64 = 1e-12;

/// How a number differs from that of the reference: a sign, and the share where both are positive, else the amount.
pub fn difference(from: f64, to: f64) -> String {
    if (to - from).abs() <= ROUNDING * from.abs().max(to.abs()) {
        return "=".to_owned();
    }
    let sign = if to > from { "+" } else { "-" };
    if from > 0.0 && to > 0.0 {
        let share = (to / from - 1.0).abs();
        return match share {
            x if x < 5e-4 => format!("{sign}under 0.1 %"),
            x if x < 10.0 => format!("{sign}{:.1} %", 100.0 * x),
            _ => format!("{} times", human(to / from)),
        };
    }
    format!("{sign}{}", human((to - from).abs()))
}

/// The word for a change, as it stands in a cell.
pub(super) fn word(change: Change) -> &'static str {
    match change {
        Change::Reference => "reference",
        Change::Same => "same",
        Change::Gained => "gained",
        Change::Lost => "lost",
        Change::OtherName => "other name",
        Change::InNeither => "in neither",
        Change::Failed => "failed",
    }
}

/// A sentence on what became of an equilibrium in a scenario, where there is anything to be said.
pub(super) fn sentence(comparison: &Comparison<'_>, identity: &Identity, scene: usize) -> Option<String> {
    let entry = identity.entries.get(scene)?;
    let said = match (entry.change, &entry.fate) {
        (Change::Reference | Change::InNeither | Change::Failed, _) => return None,
        (Change::Same, fate) => same(comparison, entry, fate.as_ref(), scene)?,
        (change, None) => format!("{}; it was not followed", word(change)),
        (change, Some(fate)) => format!("{}: {}", word(change), through(comparison, entry.is_back(), fate, scene)),
    };
    let numerical = proof(false);
    Some(format!("{} in {}: {said} ({numerical}).", identity.id, name(comparison.table, scene)))
}

/// What is to be said of one that is in both: another type, or a way that is not straight.
fn same(comparison: &Comparison<'_>, entry: &Entry, fate: Option<&Fate>, scene: usize) -> Option<String> {
    let mut parts: Vec<String> = Vec::new();
    if entry.type_changed == Some(true) {
        parts.push("type changed".to_owned());
    }
    match fate {
        Some(Fate::Arrives { at, turns, .. }) if Some(*at) == entry.place => {
            let places: Vec<String> = turns.iter().map(|&at| percent(at)).collect();
            if !places.is_empty() {
                parts.push(format!("its branch turns back on the way, in folds at {}", places.join(" and ")));
            }
        }
        Some(fate) => {
            parts.push(format!("followed from the scenario before; directly from the reference, {}", {
                through(comparison, false, fate, scene)
            }));
        }
        None => {}
    }
    if parts.is_empty() { None } else { Some(parts.join("; ")) }
}

/// Through what it was lost or gained. A fate names equilibria of the end that it was followed from:
/// of the scenario where it was followed back, else of the reference.
fn through(comparison: &Comparison<'_>, is_back: bool, fate: &Fate, scene: usize) -> String {
    let reference = comparison.reference.unwrap_or(scene);
    let [own, other] = if is_back { [scene, reference] } else { [reference, scene] };
    let id = |scene: usize, place: usize| comparison.table.names.of(scene).get(place).cloned().unwrap_or_default();
    let base = comparison.reference.map_or("", |reference| name(comparison.table, reference));
    let from = format!("from {base}");
    let at = |share: f64| format!("at {} of the way {from}", percent(share));
    let meets = if is_back { "parts from" } else { "meets" };
    match fate {
        Fate::Fold { at: share, with: Some(with) } => format!("{meets} {} in a fold {}", id(own, *with), at(*share)),
        Fate::Fold { at: share, with: None } => format!("its branch turns back in a fold {}", at(*share)),
        Fate::Zero { at: share, species, with } => {
            let symbol = comparison.table.symbol(species.0).unwrap_or("");
            let reaches = if is_back { "comes up from 0" } else { "reaches 0" };
            let with = with.map_or_else(String::new, |with| format!(", where it {meets} {}", id(own, with)));
            format!("{symbol} {reaches} {}{with}", at(*share))
        }
        Fate::LeavesBox { at: share, species } => {
            let symbol = comparison.table.symbol(species.0).unwrap_or("");
            let passes = if is_back { "comes into" } else { "leaves" };
            format!("{symbol} {passes} the search box {}", at(*share))
        }
        Fate::Arrives { at: place, .. } => {
            format!(
                "followed directly between here and {base} it is {}, which has its name by way of other scenarios",
                id(other, *place)
            )
        }
        Fate::NotFollowed(reason) => format!("not followed, {}", why(*reason, &from)),
    }
}

/// A scenario's name.
pub(super) fn name<'t>(table: &Table<'t>, scene: usize) -> &'t str {
    let scenario = table.scenes.get(scene).and_then(|scene| table.model.scenarios.get(scene.scenario));
    scenario.map_or("", |scenario| &scenario.name)
}

#[cfg(test)]
mod tests {
    use super::difference;

    #[test]
    fn differences_have_a_sign_and_are_never_rounded_to_none() {
        for (from, to, text) in [
            (80.0, 80.0, "="),
            (24.0, 24.000_000_000_000_004, "="),
            (80.0, 100.0, "+25.0 %"),
            (80.0, 20.0, "-75.0 %"),
            (1.0, 1.000_000_1, "+under 0.1 %"),
            (1.0, 0.9999, "-under 0.1 %"),
            (2.0, 90.0, "45.00 times"),
            (0.0, 41.2, "+41.20"),
            (41.2, 0.0, "-41.20"),
            (-2.0, 1.0, "+3.000"),
        ] {
            assert_eq!(difference(from, to), text);
        }
    }
}
