//! What tried values change, in words: equilibria that moved, changed type, came or went, as far as their names tell.

use super::paint::more;
use crate::analysis::linearise::Kind;
use crate::report::kinds;
use crate::report::sketch::Style;
use crate::report::table::{Solved, human};

/// Equilibria that are spoken of; more would bury what matters.
const MOST: usize = 6;

/// What was found in one scenario.
#[derive(Clone, Copy)]
pub(super) struct Side<'s> {
    pub(super) solved: &'s Solved,
    /// Names of its equilibria.
    pub(super) ids: &'s [String],
}

impl<'s> Side<'s> {
    /// Names and places, the states of many species first: they are what is to be kept.
    fn richest(self) -> impl Iterator<Item = (&'s str, usize)> {
        let mut all: Vec<(&str, usize)> = self.ids.iter().map(String::as_str).zip(0..).collect();
        let absent = |place| self.state(place).iter().filter(|&&x| x == 0.0).count();
        all.sort_by_key(|&(_, place)| absent(place));
        all.into_iter()
    }

    fn find(self, id: &str) -> Option<usize> {
        self.ids.iter().position(|other| other == id)
    }

    fn state(self, place: usize) -> &'s [f64] {
        self.solved.equilibria.list.get(place).map_or(&[], |one| &one.state)
    }

    fn kind(self, place: usize) -> Option<Kind> {
        self.solved.assessment.equilibria.get(place)?.linear.as_ref().ok().map(|linear| linear.kind)
    }
}

/// The changes from one to the other, the most important first: what went, what came, what changed its type, what moved.
///
/// Nothing is called lost or new where the search that would show it is not complete.
pub(super) fn words(before: Side<'_>, now: Side<'_>, style: Style) -> String {
    let gone = if now.solved.equilibria.complete { "is lost" } else { "was not found, but the search is not complete" };
    let came = if before.solved.equilibria.complete { "is new" } else { "was not found before" };
    let lost = before.richest().filter(|(id, _)| now.find(id).is_none()).map(|(id, _)| format!("{id} {gone}"));
    let new = now.richest().filter(|(id, _)| before.find(id).is_none());
    let new = new.map(|(id, place)| format!("{id} {came}: {} at {}", word(now, place), state(now.state(place))));
    let both: Vec<_> = now.richest().filter_map(|(id, place)| Some((id, before.find(id)?, place))).collect();
    let (same, others): (Vec<_>, Vec<_>) = both.iter().partition(|&&(_, old, new)| before.kind(old) == now.kind(new));
    let has_moved = |old, new| state(before.state(old)) != state(now.state(new));
    let turned = others.iter().map(|&&(id, old, new)| {
        let at = if has_moved(old, new) { format!(" at {}", state(now.state(new))) } else { String::new() };
        format!("{id} is now {}{at}, not {}", word(now, new), word(before, old))
    });
    let moved = same.iter().filter(|&&&(_, old, new)| has_moved(old, new));
    let moved = moved.map(|&&(id, _, new)| format!("{id} moved to {}", state(now.state(new))));
    let all: Vec<String> = lost.chain(new).chain(turned).chain(moved).collect();
    match all.len() {
        0 => "every equilibrium is where it was, to the digits shown, and of the same type.".to_owned(),
        count if count > MOST => {
            format!("{}; {} {} more changes.", all[..MOST].join("; "), self::more(style), count - MOST)
        }
        _ => format!("{}.", all.join("; ")),
    }
}

fn state(state: &[f64]) -> String {
    state.iter().map(|&x| human(x)).collect::<Vec<_>>().join(", ")
}

/// The type, with its article.
fn word(side: Side<'_>, place: usize) -> String {
    let word = side.kind(place).map_or(kinds::UNKNOWN, kinds::of).word;
    match word.chars().next() {
        _ if word == kinds::UNKNOWN.word => word.to_owned(),
        Some('a' | 'e' | 'i' | 'o' | 'u') => format!("an {word}"),
        _ => format!("a {word}"),
    }
}
