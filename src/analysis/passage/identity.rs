//! Numbers that stay with an equilibrium through several scenarios, in their order.
//!
//! A scenario's equilibria take the numbers of those of the scenario before that they are followed from; others are looked
//! for in the scenarios before that one, the latest first, among those whose number is free, so that one that was lost in
//! between has its old number back where it is followed directly. Whatever is left has a new number: no two are called the
//! same because they are near each other. Those that are left because they could not be followed are named, for they may
//! be old all the same.

use super::{Fate, Found, Passage, Reason, Ways};

/// Numbers of the equilibria of some scenarios.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Identities {
    /// For each scenario and each equilibrium of its list, from 1.
    pub numbers: Vec<Vec<usize>>,
    /// For each scenario the places of those with a new number that could not be followed back, with the reason.
    pub unfollowed: Vec<Vec<(usize, Reason)>>,
}

/// Numbers the equilibria of scenarios in their order; `None` stands for one without a list. Once `stop` says so the rest
/// is not followed.
pub fn identify(ways: &mut Ways, scenarios: &[Option<Found<'_>>], stop: &dyn Fn() -> bool) -> Identities {
    let mut register = Register { ways, stop, known: Vec::new(), last: 0 };
    let mut found = Identities::default();
    for scenario in scenarios {
        let (numbers, unfollowed) = scenario.map_or_else(Default::default, |scenario| register.number(scenario));
        found.numbers.push(numbers);
        found.unfollowed.push(unfollowed);
    }
    found
}

struct Register<'r, 'e> {
    ways: &'r mut Ways,
    stop: &'r dyn Fn() -> bool,
    known: Vec<(Found<'e>, Vec<usize>)>,
    /// The largest number so far.
    last: usize,
}

impl<'e> Register<'_, 'e> {
    fn number(&mut self, scenario: Found<'e>) -> (Vec<usize>, Vec<(usize, Reason)>) {
        let mut own: Vec<Option<usize>> = vec![None; scenario.list.len()];
        let mut reasons: Vec<Option<Reason>> = vec![None; own.len()];
        for place in (0..self.known.len()).rev() {
            let Some(passage) = self.passage(place, scenario, &own) else { continue };
            let (_, numbers) = &self.known[place];
            for (old, new) in passage.pairs().filter(|&(_, new)| own[new].is_none()).collect::<Vec<_>>() {
                own[new] = Some(numbers[old]);
            }
            // Why it was not followed from the scenario before says more than from one further back.
            if place + 1 == self.known.len() {
                reasons = passage.backward.iter().map(reason).collect();
            }
        }
        let left = own.iter().zip(reasons).enumerate();
        let unfollowed =
            left.filter_map(|(place, (number, reason))| Some((place, reason.filter(|_| number.is_none())?)));
        let unfollowed = unfollowed.collect();
        let numbers: Vec<usize> = own.into_iter().map(|number| number.unwrap_or_else(|| self.new_number())).collect();
        self.known.push((scenario, numbers.clone()));
        (numbers, unfollowed)
    }

    /// From an earlier scenario, between what has no number yet and what has one that is free; `None` where there is none.
    fn passage(&mut self, place: usize, scenario: Found<'e>, own: &[Option<usize>]) -> Option<Passage> {
        let (earlier, numbers) = self.known.get(place)?;
        let later = &self.known[place + 1..];
        // One that was there later too has been followed from there.
        let is_lost = |old: usize| !later.iter().any(|(_, later)| later.contains(&numbers[old]));
        let is_wanted = |old: usize| !own.contains(&Some(numbers[old])) && is_lost(old);
        let arrived = |new: usize, forward: &[Fate]| {
            forward.iter().any(|fate| matches!(fate, Fate::Arrives { at, .. } if *at == new))
        };
        let is_next = later.is_empty();
        let back = |new: usize, forward: &[Fate]| own[new].is_none() && (is_next || arrived(new, forward));
        let is_open = own.iter().any(Option::is_none) && (is_next || (0..numbers.len()).any(is_wanted));
        is_open.then(|| self.ways.passage_of([*earlier, scenario], &is_wanted, &back, self.stop))
    }

    fn new_number(&mut self) -> usize {
        self.last += 1;
        self.last
    }
}

fn reason(fate: &Fate) -> Option<Reason> {
    match fate {
        Fate::NotFollowed(reason) => Some(*reason),
        _ => None,
    }
}
