//! Names of equilibria that stay the same across the scenarios of one run: E1, E2, …
//!
//! Which equilibrium is which is found out by following it from one scenario to the next, see `analysis::passage`; here
//! numbers become names, and what could not be followed becomes a sentence. A name is never given for being near.

use crate::analysis::passage::{Fate, Identities, Passage, Reason};

/// The names of the equilibria of some scenarios.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Names {
    /// For each scenario shown, in the order of its list; none for a scenario that failed.
    pub ids: Vec<Vec<String>>,
    /// For each scenario shown, those of a new name that could not be followed back, with the reason.
    pub unfollowed: Vec<Vec<(String, Reason)>>,
}

impl Names {
    /// The names of numbered equilibria.
    pub fn new(identities: &Identities) -> Self {
        let name = |number: &usize| format!("E{number}");
        let ids: Vec<Vec<String>> =
            identities.numbers.iter().map(|numbers| numbers.iter().map(name).collect()).collect();
        let open = identities.unfollowed.iter().zip(&ids).map(|(open, ids)| {
            open.iter().filter_map(|&(place, reason)| Some((ids.get(place)?.clone(), reason))).collect()
        });
        Self { unfollowed: open.collect(), ids }
    }

    /// The names of one scenario alone, of so many equilibria.
    pub fn alone(count: usize) -> Self {
        Self::new(&Identities { numbers: vec![(1..=count).collect()], unfollowed: vec![Vec::new()] })
    }

    /// With those of one more scenario at the end, of so many equilibria: what was followed from the scenario at place `base`
    /// has its name from there, the rest names that none has had.
    #[must_use]
    pub fn with_one_over(mut self, base: usize, passage: &Passage, count: usize) -> Self {
        let number = |name: &String| name.strip_prefix('E').and_then(|digits| digits.parse::<usize>().ok());
        let last = self.ids.iter().flatten().filter_map(number).max().unwrap_or(0);
        let mut names: Vec<Option<String>> = vec![None; count];
        for (first, second) in passage.pairs() {
            if let (Some(name), Some(id)) = (names.get_mut(second), self.of(base).get(first)) {
                *name = Some(id.clone());
            }
        }
        let mut new = (last + 1..).map(|number| format!("E{number}"));
        let ids: Vec<String> = names.into_iter().filter_map(|name| name.or_else(|| new.next())).collect();
        let reason = |place: usize| match passage.backward.get(place) {
            Some(Fate::NotFollowed(reason)) => Some(*reason),
            _ => None,
        };
        self.unfollowed.push((0..count).filter_map(|k| Some((ids.get(k)?.clone(), reason(k)?))).collect());
        self.ids.push(ids);
        self
    }

    /// The names of a scenario's equilibria, by its place among those shown.
    pub fn of(&self, scene: usize) -> &[String] {
        self.ids.get(scene).map_or(&[], Vec::as_slice)
    }

    /// What is to be said of those of a scenario that could not be followed: a sentence for each reason.
    pub(in crate::report) fn sentences(&self, scene: usize) -> Vec<String> {
        let open = self.unfollowed.get(scene).map_or(&[][..], Vec::as_slice);
        let mut groups: Vec<(String, Vec<&str>)> = Vec::new();
        for (id, reason) in open {
            let why = why(*reason, "from the scenario before");
            match groups.iter_mut().find(|(known, _)| *known == why) {
                Some((_, ids)) => ids.push(id),
                None => groups.push((why, vec![id])),
            }
        }
        groups.into_iter().map(|(why, ids)| sentence(&ids, &why)).collect()
    }
}

/// Names that a sentence lists; more would bury it.
const MOST_LISTED: usize = 8;

fn sentence(ids: &[&str], why: &str) -> String {
    let more = ids.len().saturating_sub(MOST_LISTED);
    let listed = ids[..ids.len() - more].join(", ");
    let listed = if more == 0 { listed } else { format!("{listed} and {more} more") };
    let (has, it) = if ids.len() == 1 { ("has a new name", "it") } else { ("have new names", "they") };
    format!("{listed} {has}, but may be among those named before: {it} could not be followed, {why}.")
}

/// Why something could not be followed; `way` says which way the shares are of.
pub(in crate::report) fn why(reason: Reason, way: &str) -> String {
    let at = |share: f64| format!("at {} of the way {way}", percent(share));
    match reason {
        Reason::Singular => "for the state is singular, or nearly so".to_owned(),
        Reason::NoDerivative => "for rates have no value or no derivative there".to_owned(),
        Reason::Rough(share) => format!("for rates have no value, or change too abruptly, {}", at(share)),
        Reason::Crossing(share) => format!("for branches cross, or nearly so, {}", at(share)),
        Reason::Unlisted => "for its branch arrives at a state that was not found, or found twice".to_owned(),
        Reason::Disagrees => "for followed back it does not come to where it began".to_owned(),
        Reason::TooLong(share) => format!("for its branch is too long: it was left {}", at(share)),
        Reason::Stopped => "for the search was told to stop, or its time was up".to_owned(),
    }
}

/// A share of the way in per cent, never all or nothing where it is neither.
pub(in crate::report) fn percent(share: f64) -> String {
    match share {
        x if x <= 0.0 => "0 %".to_owned(),
        x if x >= 1.0 => "100 %".to_owned(),
        x if x < 0.001 => "under 0.1 %".to_owned(),
        x if x > 0.999 => "over 99.9 %".to_owned(),
        x => format!("{:.1} %", 100.0 * x),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shares_of_the_way_are_never_rounded_to_its_ends() {
        for (share, text) in [
            (0.0, "0 %"),
            (1e-9, "under 0.1 %"),
            (0.001, "0.1 %"),
            (0.0712, "7.1 %"),
            (0.374_49, "37.4 %"),
            (0.9995, "over 99.9 %"),
            (1.0, "100 %"),
        ] {
            assert_eq!(percent(share), text);
        }
    }

    #[test]
    fn what_could_not_be_followed_is_said_once_a_reason() {
        let numbers = vec![vec![1, 2], (3..14).chain([1]).collect()];
        let open: Vec<(usize, Reason)> = (0..11).map(|place| (place, Reason::Singular)).collect();
        let names = Names::new(&Identities { numbers, unfollowed: vec![Vec::new(), open] });
        assert_eq!(names.of(0), ["E1", "E2"]);
        assert_eq!(names.of(1)[11], "E1");
        assert_eq!(names.of(2), [] as [String; 0]);
        assert_eq!(names.sentences(0), [] as [String; 0]);
        let expected = "E3, E4, E5, E6, E7, E8, E9, E10 and 3 more have new names, but may be among those named before: they \
                        could not be followed, for the state is singular, or nearly so.";
        assert_eq!(names.sentences(1), [expected]);
    }
}
