//! Names of equilibria that stay the same across the scenarios of one run: E1, E2, …
//!
//! An equilibrium is told by who is present and, among those with the same community, by its place. From one scenario to
//! the next, those of a community are paired by nearest state, the nearest pair first; what finds no partner gets a new
//! name, in the order of the list. This does not follow an equilibrium along a path between the scenarios, so that two of
//! one community may change places where they come close.

use std::collections::BTreeMap;

use crate::analysis::equilibria::Equilibrium;

/// The name of every equilibrium of several scenarios, in the order of first appearance.
pub fn identify(lists: &[&[Equilibrium]]) -> Vec<Vec<String>> {
    let mut registry = Registry::default();
    lists.iter().map(|list| registry.name(list)).collect()
}

/// Everything named so far.
#[derive(Default)]
struct Registry<'e> {
    /// By community: number of the name, and the equilibrium that had it last.
    known: BTreeMap<Vec<bool>, Vec<(usize, &'e Equilibrium)>>,
    named: usize,
}

impl<'e> Registry<'e> {
    fn name(&mut self, list: &'e [Equilibrium]) -> Vec<String> {
        let mut communities: BTreeMap<Vec<bool>, Vec<usize>> = BTreeMap::new();
        for (place, equilibrium) in list.iter().enumerate() {
            communities.entry(community(equilibrium)).or_default().push(place);
        }
        let mut numbers: Vec<Option<usize>> = vec![None; list.len()];
        for (community, places) in &communities {
            let known = self.known.entry(community.clone()).or_default();
            for (known_place, place) in pairs(known, list, places) {
                known[known_place].1 = &list[place];
                numbers[place] = Some(known[known_place].0);
            }
        }
        list.iter().zip(numbers).map(|(equilibrium, number)| self.text(equilibrium, number)).collect()
    }

    /// The name of a number; a new one where there is none.
    fn text(&mut self, equilibrium: &'e Equilibrium, number: Option<usize>) -> String {
        let number = number.unwrap_or_else(|| {
            self.named += 1;
            self.known.entry(community(equilibrium)).or_default().push((self.named, equilibrium));
            self.named
        });
        format!("E{number}")
    }
}

/// Who is present.
fn community(equilibrium: &Equilibrium) -> Vec<bool> {
    (0..equilibrium.state.len()).map(|species| equilibrium.has(species)).collect()
}

/// Pairs of places among the known and in the list, the nearest first, each place at most once.
fn pairs(known: &[(usize, &Equilibrium)], list: &[Equilibrium], places: &[usize]) -> Vec<(usize, usize)> {
    let mut all: Vec<(f64, usize, usize)> = Vec::new();
    for (known_place, (_, old)) in known.iter().enumerate() {
        all.extend(places.iter().map(|&place| (distance(&old.state, &list[place].state), known_place, place)));
    }
    all.sort_by(|a, b| a.0.total_cmp(&b.0).then((a.1, a.2).cmp(&(b.1, b.2))));
    let mut old_taken = vec![false; known.len()];
    let mut new_taken = vec![false; list.len()];
    let mut chosen = Vec::new();
    for (_, old, new) in all {
        if !old_taken[old] && !new_taken[new] {
            (old_taken[old], new_taken[new]) = (true, true);
            chosen.push((old, new));
        }
    }
    chosen
}

/// The sum over species of |a − b| / (|a| + |b|), between 0 and 1 each, so that no unit weighs more than another.
fn distance(a: &[f64], b: &[f64]) -> f64 {
    let share = |(a, b): (&f64, &f64)| {
        let size = a.abs() + b.abs();
        if size > 0.0 { (a - b).abs() / size } else { 0.0 }
    };
    a.iter().zip(b).map(share).sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::equilibria::Derivative;
    use crate::num::interval::Interval;

    fn at(state: &[f64]) -> Equilibrium {
        Equilibrium {
            state: state.to_vec(),
            enclosure: state.iter().map(|&x| Interval::point(x)).collect(),
            proven: true,
            derivative: Derivative::Exists,
        }
    }

    fn check(lists: &[&[&[f64]]], expected: &[&[&str]]) {
        let lists: Vec<Vec<Equilibrium>> =
            lists.iter().map(|list| list.iter().map(|state| at(state)).collect()).collect();
        let named = identify(&lists.iter().map(Vec::as_slice).collect::<Vec<_>>());
        assert_eq!(named, expected, "{lists:?}");
    }

    #[test]
    fn names_follow_the_community_and_the_nearest_state() {
        check(&[], &[]);
        // The pair of a fold is gone in the second scenario and back in the third.
        check(
            &[&[&[0.0], &[1.0], &[5.0]], &[&[0.0], &[4.0]], &[&[0.0], &[1.2], &[4.5]]],
            &[&["E1", "E2", "E3"], &["E1", "E3"], &["E1", "E2", "E3"]],
        );
        // Another community is another equilibrium, however near.
        check(&[&[&[1.0, 0.0]], &[&[1.0, 1e-9]]], &[&["E1"], &["E2"]]);
        // Units of abundance make no difference.
        check(&[&[&[1.0, 9e6], &[2.0, 1e6]], &[&[1.1, 8e6], &[2.2, 1.1e6]]], &[&["E1", "E2"], &["E1", "E2"]]);
        // A scenario that failed names nothing and forgets nothing.
        check(&[&[&[2.0]], &[], &[&[3.0]]], &[&["E1"], &[], &["E1"]]);
    }
}
