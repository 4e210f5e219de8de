//! What changes from the reference to another scenario, in a few words: for a screen that shows one scenario and its base.

use super::super::kinds;
use super::super::table::human;
use super::super::table::words::proof;
use super::{Change, Comparison, Entry, Identity};
use crate::analysis::passage::Fate;

/// Changes that are spoken of; more would bury what matters.
const MOST: usize = 6;

/// The changes in the scenario at a place, the most important first: what was lost, what was gained, what is of another
/// type, what moved; in each the states of many species first. States are compared as they are shown, to four digits.
pub fn summary(comparison: &Comparison<'_>, scene: usize) -> String {
    let mut changes: Vec<(u8, usize, String)> = comparison
        .rows
        .iter()
        .filter_map(|identity| {
            let (rank, text) = change(comparison, identity, scene)?;
            Some((rank, absent(comparison, identity, scene), text))
        })
        .collect();
    changes.sort_by_key(|(rank, absent, _)| (*rank, *absent));
    let texts: Vec<&str> = changes.iter().take(MOST).map(|(.., text)| text.as_str()).collect();
    let more = changes.len().saturating_sub(MOST);
    match (texts.is_empty(), more) {
        (true, _) => "every equilibrium is where it was, to the digits shown, and of the same type.".to_owned(),
        (false, 0) => format!("{} ({}).", texts.join("; "), proof(false)),
        (false, _) => format!("{}; and {more} more ({}).", texts.join("; "), proof(false)),
    }
}

/// A change and how much it matters, where there is one.
fn change(comparison: &Comparison<'_>, identity: &Identity, scene: usize) -> Option<(u8, String)> {
    let entry = identity.entries.get(scene)?;
    let base = comparison.base(identity)?;
    let id = &identity.id;
    match entry.change {
        Change::Lost => Some((0, gone(comparison, id, entry, scene))),
        // Its other name is a row of its own; said once, from the reference.
        Change::OtherName if base.place.is_some() => {
            Some((1, format!("{id} has another name now{}", named(comparison, entry, scene))))
        }
        Change::Gained => Some((2, format!("{id} is gained: {}", at(comparison, entry, scene)?))),
        Change::Same if entry.type_changed == Some(true) => Some((3, turned(comparison, id, base, entry, scene)?)),
        Change::Same => {
            let (from, to) = (state(comparison, base, comparison.reference?)?, state(comparison, entry, scene)?);
            (from != to).then(|| (4, format!("{id} moved to {to}")))
        }
        Change::OtherName | Change::Reference | Change::InNeither | Change::Failed => None,
    }
}

/// One that is in the reference alone, and through what it went.
fn gone(comparison: &Comparison<'_>, id: &str, entry: &Entry, scene: usize) -> String {
    let reference = comparison.reference.unwrap_or(scene);
    let other = |place: usize| comparison.table.names.of(reference).get(place).cloned().unwrap_or_default();
    let symbol = |species: usize| comparison.table.model.species.get(species).map_or("", |one| &one.symbol);
    match &entry.fate {
        Some(Fate::Fold { with: Some(with), .. }) => format!("{id} is lost in a fold with {}", other(*with)),
        Some(Fate::Fold { with: None, .. }) => format!("{id} is lost in a fold"),
        Some(Fate::Zero { species, with: Some(with), .. }) => {
            format!("{id} is lost where {} reaches 0 and it meets {}", symbol(species.0), other(*with))
        }
        Some(Fate::Zero { species, with: None, .. }) => format!("{id} is lost where {} reaches 0", symbol(species.0)),
        Some(Fate::LeavesBox { species, .. }) => format!("{id} leaves the search box, {} first", symbol(species.0)),
        Some(Fate::Arrives { .. } | Fate::NotFollowed(_)) | None => {
            let complete = comparison.solved(scene).is_some_and(|solved| solved.equilibria.complete);
            let open = if complete { "" } else { ", but the search is not complete" };
            format!("{id} was not found and could not be followed{open}")
        }
    }
}

fn named(comparison: &Comparison<'_>, entry: &Entry, scene: usize) -> String {
    match &entry.fate {
        Some(Fate::Arrives { at, .. }) => {
            comparison.table.names.of(scene).get(*at).map_or_else(String::new, |name| format!(": {name}"))
        }
        _ => String::new(),
    }
}

/// One that is of another type, and where it is now if it moved.
fn turned(comparison: &Comparison<'_>, id: &str, base: &Entry, entry: &Entry, scene: usize) -> Option<String> {
    let reference = comparison.reference?;
    let (from, to) = (state(comparison, base, reference)?, state(comparison, entry, scene)?);
    let at = if from == to { String::new() } else { format!(" at {to}") };
    let [old, new] = [word(comparison, base, reference)?, word(comparison, entry, scene)?];
    Some(format!("{id} is now {new}{at}, not {old}"))
}

fn at(comparison: &Comparison<'_>, entry: &Entry, scene: usize) -> Option<String> {
    Some(format!("{} at {}", word(comparison, entry, scene)?, state(comparison, entry, scene)?))
}

fn state(comparison: &Comparison<'_>, entry: &Entry, scene: usize) -> Option<String> {
    let one = comparison.solved(scene)?.equilibria.list.get(entry.place?)?;
    Some(one.state.iter().map(|&x| human(x)).collect::<Vec<_>>().join(", "))
}

/// Its type with an article.
fn word(comparison: &Comparison<'_>, entry: &Entry, scene: usize) -> Option<String> {
    let assessed = comparison.solved(scene)?.assessment.equilibria.get(entry.place?)?;
    let word = assessed.linear.as_ref().map_or(kinds::UNKNOWN, |linear| kinds::of(linear.kind)).word;
    Some(match word.chars().next() {
        _ if word == kinds::UNKNOWN.word => word.to_owned(),
        Some('a' | 'e' | 'i' | 'o' | 'u') => format!("an {word}"),
        _ => format!("a {word}"),
    })
}

/// Species that are absent from it: where few are, more is at stake.
fn absent(comparison: &Comparison<'_>, identity: &Identity, scene: usize) -> usize {
    let of = |entry: Option<&Entry>, scene: usize| {
        let one = comparison.solved(scene)?.equilibria.list.get(entry?.place?)?;
        Some(one.state.iter().filter(|&&x| x == 0.0).count())
    };
    let here = of(identity.entries.get(scene), scene);
    here.or_else(|| of(comparison.base(identity), comparison.reference?)).unwrap_or(usize::MAX)
}
