//! Beyond the certified search: Newton's method from many starting points, every root proved, the list not complete.
//!
//! [`find`] is the way in. While there are at most 4096 faces, all are hunted (`face`), first lightly and then in earnest,
//! so that a budget that ends early ends evenly. Where there are more, those are hunted that the community's own course
//! leads to (`survivors`), those with one species fewer, and those that an absent species can invade from there. `descent`
//! is the damped Newton method. The same rows and box give the same list, with however many workers.

mod descent;
mod face;
mod survivors;

use std::collections::{BTreeMap, BTreeSet};
use std::sync::OnceLock;

use super::border;
use super::faces::Faces;
use super::{Budget, Candidate, Equilibria, Equilibrium, Probably, Problem, Progress, Unresolved, order};
use crate::expr::graph::Graph;
use crate::expr::tape::Tape;
use crate::num::interval::Interval;
use crate::num::random::Source;
use face::{Bag, Effort, hunt};

/// More species than this that can be absent, and faces are sampled: 2^12 = 4096.
const MOST_FREE: usize = 12;
/// Starting points a face, for each species.
const STARTS_A_SPECIES: usize = 200;
/// Starting points on each face at first.
const LIGHTLY: usize = 8;
/// Starting points on a sampled face.
const SAMPLED_STARTS: usize = 12;
/// Courses that the community is sent on.
const COURSES: usize = 12;
/// Faces sampled.
const MOST_SAMPLED: usize = 160;

/// A face where those are present that are wanted, and points to start from, in the coordinates of all species.
struct Place {
    wanted: Vec<bool>,
    given: Vec<Vec<f64>>,
}

/// Equilibria in the box as starting points find them; each is proved, the list is not.
///
/// The budget's boxes, over the square of the number of species, are the starting points on each face, 8 at least and 200
/// for each species at most.
///
/// # Panics
/// If rows and sides are not as many as the graph has states.
pub fn find(graph: &mut Graph, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let reaches_zero: Vec<bool> = problem.sides.iter().map(|side| side[0] <= 0.0).collect();
    let faces = Faces::new(graph, problem.rows, reaches_zero.clone());
    let free = faces.free();
    let sampled = free.len() > MOST_FREE;
    let mut all = All { graph, faces, problem, budget, sampled, found: Bag::default(), seen: BTreeSet::new() };
    if sampled {
        all.sample(&reaches_zero);
    } else {
        all.hunt_everywhere(&free);
    }
    all.finish()
}

/// The hunt over all faces.
struct All<'a> {
    graph: &'a mut Graph,
    faces: Faces,
    problem: &'a Problem<'a>,
    budget: &'a Budget<'a>,
    /// Whether there are too many faces for all to be hunted.
    sampled: bool,
    found: Bag,
    /// Faces that were hunted, by who is on them.
    seen: BTreeSet<Vec<usize>>,
}

impl All<'_> {
    fn hunt_everywhere(&mut self, free: &[usize]) {
        let n = self.problem.rows.len();
        let mut places = Vec::new();
        for face in 0..1usize << free.len() {
            // Those that can be absent only once others are: with them and without.
            for others in [true, false] {
                let mut wanted = vec![others; n];
                free.iter().enumerate().for_each(|(k, &i)| wanted[i] = face >> k & 1 == 1);
                places.push(Place { wanted, given: Vec::new() });
                if free.len() == n {
                    break;
                }
            }
        }
        let places = self.distinct(places);
        let earnest = self.budget.boxes / (n * n).max(1);
        self.hunt_at(&places, LIGHTLY);
        self.hunt_at(&places, earnest.clamp(LIGHTLY, STARTS_A_SPECIES * n));
    }

    fn sample(&mut self, reaches_zero: &[bool]) {
        let mut places = self.courses();
        let mut waves = 0;
        while !places.is_empty() && self.seen.len() < MOST_SAMPLED && !(self.budget.stop)() {
            places.truncate(MOST_SAMPLED - self.seen.len());
            let before = self.found.roots.len();
            let new = self.distinct(places);
            self.hunt_at(&new, SAMPLED_STARTS);
            let new: Vec<Equilibrium> = self.found.roots[before..].iter().map(|c| c.equilibrium.clone()).collect();
            places = self.invasions(&new);
            if waves == 0 {
                places.extend(new.iter().flat_map(|equilibrium| removals(equilibrium, reaches_zero)));
            }
            waves += 1;
        }
    }

    /// The full face, and where courses from points drawn in the box end.
    fn courses(&self) -> Vec<Place> {
        let n = self.problem.rows.len();
        let tape = Tape::new(self.graph, self.problem.rows);
        let ends = self.each(COURSES, |_, k| {
            let mut source = Source::new(k as u64);
            let draw = |side: &[f64; 2]| side[0] + (side[1] - side[0]) * source.between(-6.0, 0.0).exp2();
            let start: Vec<f64> = self.problem.sides.iter().map(draw).collect();
            survivors::course(&tape, self.problem, &start, &|| (self.budget.stop)())
        });
        let mut places = vec![Place { wanted: vec![true; n], given: Vec::new() }];
        for end in ends.into_iter().flatten() {
            let wanted = end.iter().map(|&x| x > 0.0).collect();
            places.push(Place { wanted, given: vec![end] });
        }
        places
    }

    /// Where absent species can grow from a state: each such state with the fastest of them, and with all of them.
    fn invasions(&self, states: &[Equilibrium]) -> Vec<Place> {
        let tape = Tape::new(self.graph, self.problem.rows);
        let mut run = tape.start_gradient(self.problem.values);
        let mut places = Vec::new();
        for equilibrium in states {
            let state = &equilibrium.state;
            if run.at_unless(state, &|| (self.budget.stop)()).is_none() {
                break;
            }
            let rate = |i: usize| run.gradient(i).map_or(0.0, |row| row[i]);
            let invaders: Vec<usize> = (0..state.len()).filter(|&i| state[i] == 0.0 && rate(i) > 0.0).collect();
            let fastest = invaders.iter().copied().max_by(|&i, &j| rate(i).total_cmp(&rate(j)));
            for group in [fastest.into_iter().collect(), invaders].into_iter().filter(|group| !group.is_empty()) {
                let wanted = (0..state.len()).map(|i| state[i] != 0.0 || group.contains(&i)).collect();
                places.push(Place { wanted, given: Vec::new() });
            }
        }
        places
    }

    /// The places whose faces were not seen yet, each once, with the starting points of all that lead to it.
    fn distinct(&mut self, places: Vec<Place>) -> Vec<Place> {
        let faces =
            self.each(places.len(), |graph, k| self.faces.leaf(graph, &places[k].wanted, &|| (self.budget.stop)()));
        let mut distinct: Vec<Place> = Vec::new();
        let mut position: BTreeMap<Vec<usize>, usize> = BTreeMap::new();
        for (face, place) in faces.into_iter().zip(places) {
            let Some(variables) = face.map(|face| face.variables) else { continue };
            if let Some(&known) = position.get(&variables) {
                distinct[known].given.extend(place.given);
            } else if self.seen.insert(variables.clone()) {
                position.insert(variables, distinct.len());
                distinct.push(place);
            }
        }
        distinct
    }

    fn hunt_at(&mut self, places: &[Place], starts: usize) {
        let bags = self.each(places.len(), |graph, k| {
            let face = self.faces.leaf(graph, &places[k].wanted, &|| (self.budget.stop)())?;
            let on_face = |state: &Vec<f64>| face.variables.iter().map(|&i| state[i]).collect();
            let given: Vec<Vec<f64>> = places[k].given.iter().map(on_face).collect();
            let effort = Effort { starts, stop: &|| (self.budget.stop)() };
            let bag = hunt(graph, &face, self.problem, &given, &effort);
            // All others are hunted twice, and may have been searched before.
            if self.sampled {
                self.budget.tell(Progress { faces: 1, ..Progress::default() });
            }
            Some(bag)
        });
        for bag in bags.into_iter().flatten() {
            self.found.roots.extend(bag.roots);
            self.found.open.extend(bag.open);
            self.found.starts += bag.starts;
        }
        border::merge(&mut self.found.roots);
    }

    /// What each of some jobs returns, in their order, however they are shared; `None` for those that were stopped. Each
    /// has a graph of its own, because a face leaves many nodes behind that no other needs.
    fn each<T: Send + Sync>(&self, jobs: usize, job: impl Fn(&mut Graph, usize) -> Option<T> + Sync) -> Vec<Option<T>> {
        let done: Vec<OnceLock<Option<T>>> = (0..jobs).map(|_| OnceLock::new()).collect();
        let graph = &*self.graph;
        self.budget.workers.run(jobs, &|k| {
            if !(self.budget.stop)() {
                // Each job runs once, so its place is free.
                let _ = done[k].set(job(&mut graph.clone(), k));
            }
        });
        done.into_iter().map(|done| done.into_inner().flatten()).collect()
    }

    fn finish(self) -> Equilibria {
        let mut unresolved = self.found.open;
        unresolved.push(not_complete(self.problem, self.found.starts, self.seen.len(), self.sampled));
        let mut list: Vec<Equilibrium> = self.found.roots.into_iter().map(|root: Candidate| root.equilibrium).collect();
        list.sort_by(order);
        Equilibria {
            list,
            unresolved,
            complete: false,
            none_above: false,
            boxes: self.found.starts,
            faces: self.seen.len(),
        }
    }
}

/// Each state without one of its species.
fn removals(equilibrium: &Equilibrium, reaches_zero: &[bool]) -> Vec<Place> {
    let present = |i: usize| equilibrium.state[i] != 0.0;
    let n = reaches_zero.len();
    let without = |k: usize| Place { wanted: (0..n).map(|i| i != k && present(i)).collect(), given: Vec::new() };
    (0..n).filter(|&k| reaches_zero[k] && present(k)).map(without).collect()
}

fn not_complete(problem: &Problem<'_>, starts: usize, faces: usize, sampled: bool) -> Unresolved {
    let region = problem.sides.iter().map(|side| Interval::new(side[0], side[1])).collect();
    let which = if sampled { "of the very many ways of who is present" } else { "ways of who is present" };
    let text = format!(
        "the equilibria were looked for from {starts} starting points, in {faces} {which}; each one listed is proved, but \
         the list is not proved to be complete"
    );
    Unresolved::new(region, Probably::Budget, text)
}
