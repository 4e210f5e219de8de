//! Where today's stocks lead: the path from the survey's values, and the shares of a cloud of starts around them.

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::subject::Subject;
use crate::model::SpeciesId;

use super::cycle::Ring;
use super::face::Face;
use super::flock::{self, Ends, Fate};
use super::settle::Ending;
use super::{Cycle, Destination, FromNow, Paths, cloud};

/// Starts in the cloud: as many as speed allows, fewer where a step costs more.
const STARTS: usize = 256;
const STARTS_OF_MANY: usize = 64;
const STARTS_IF_STIFF: usize = 32;
/// More species than this are many.
const MANY: usize = 6;
/// Steps, or iterates, of one path in the batch; of one that has lost a species, to see who else is lost.
const MOST_STEPS: u32 = 2_000;
const STEPS_AFTER_LOSS: u32 = 100;
/// Of the paths that the batch leaves open, so many are followed one by one, and stand for the others.
const FOLLOWED: usize = 12;
/// So close to a cycle, as a share of its extent, squared, a path that was left open counts as being on it.
const BESIDE_CYCLE: f64 = 0.01;

/// As [`Paths::from_now`], for a scenario of which nothing else is asked.
pub fn from_now(
    subject: &mut Subject<'_>,
    list: &[Equilibrium],
    linear: &[Option<&Linearisation>],
    stop: &dyn Fn() -> bool,
) -> Option<FromNow> {
    Paths::new(subject, list, linear, stop).from_now(subject)
}

impl Paths<'_> {
    /// Where today's stocks lead; `None` unless the survey has a value for every species.
    ///
    /// The shares are of starts spread over the survey's 95 % region, see `cloud`. A start counts for an equilibrium once it is
    /// in a region from which no path was seen to leave, for a cycle once it has come close to one that some path was seen to
    /// settle on. Once a species is lost, who else is lost is looked for over a hundred steps. Numerical; the number of steps is bounded, and `stop` is asked now and then.
    pub fn from_now(&mut self, subject: &mut Subject<'_>) -> Option<FromNow> {
        let middle = subject.model.today()?;
        let ending = self.go(subject, &middle);
        let count = match subject.species() {
            _ if ending.stiff => STARTS_IF_STIFF,
            n if n > MANY => STARTS_OF_MANY,
            _ => STARTS,
        };
        let starts = cloud::starts(subject.model, &middle, count);
        let mut tally = Tally::new(self, &ending);
        if ending.stiff {
            for start in &starts {
                tally.follow(subject, start, 1.0);
            }
        } else if !starts.is_empty() {
            let there = tally.paths.grounds.present(subject, &middle);
            tally.together(subject, &starts, &there, &[]);
        }
        let shares = tally.shares(starts.len());
        // Shares of what was reached in the time there was would be another thing, and another one every time.
        let broken_off = (self.grounds.known.stop)();
        Some(FromNow {
            shares: if broken_off { Vec::new() } else { shares },
            starts: if broken_off { 0 } else { starts.len() },
            broken_off,
            reaches: ending.destination,
            time: ending.time,
            lowest: ending.lowest,
        })
    }
}

/// How many starts went where.
struct Tally<'t, 'k> {
    paths: &'t mut Paths<'k>,
    counts: Vec<(Destination, f64)>,
    rings: Vec<Ring>,
    /// What all cycles are counted as.
    cycle: Option<Cycle>,
}

impl<'t, 'k> Tally<'t, 'k> {
    fn new(paths: &'t mut Paths<'k>, first: &Ending) -> Self {
        let mut tally = Self { paths, counts: Vec::new(), rings: Vec::new(), cycle: None };
        tally.learn(first);
        tally
    }

    /// Remembers the cycle that a path ended on.
    fn learn(&mut self, ending: &Ending) {
        self.rings.extend(ending.ring.clone());
        if let (None, Destination::Cycle(cycle)) = (&self.cycle, &ending.destination) {
            self.cycle = Some(cycle.clone());
        }
    }

    fn add(&mut self, destination: Destination, weight: f64) {
        let destination = match (destination, &self.cycle) {
            (Destination::Cycle(_), Some(cycle)) => Destination::Cycle(cycle.clone()),
            (other, _) => other,
        };
        match self.counts.iter_mut().find(|(known, _)| *known == destination) {
            Some((_, count)) => *count += weight,
            None => self.counts.push((destination, weight)),
        }
    }

    /// Counts a path for a destination, or for the loss of those that were lost before.
    fn count(&mut self, destination: Destination, lost: &[SpeciesId]) {
        self.weigh(destination, lost, 1.0);
    }

    fn weigh(&mut self, destination: Destination, lost: &[SpeciesId], weight: f64) {
        let mut all = lost.to_vec();
        if let Destination::Loss(more) = &destination {
            all.extend_from_slice(more);
            all.sort_unstable();
        }
        self.add(if all.is_empty() { destination } else { Destination::Loss(all) }, weight);
    }

    /// Follows one path to its end.
    fn follow(&mut self, subject: &mut Subject<'_>, start: &[f64], weight: f64) {
        let ending = self.paths.go(subject, start);
        self.learn(&ending);
        self.weigh(ending.destination, &[], weight);
    }

    /// Follows many paths at once that start on one face; those that lose a species go on together without it.
    fn together(&mut self, subject: &mut Subject<'_>, starts: &[Vec<f64>], present: &[bool], lost: &[SpeciesId]) {
        let Some(ground) = self.paths.grounds.on(subject, present) else {
            return starts.iter().for_each(|_| self.count(Destination::NotSettled, lost));
        };
        let (face, known) = (&ground.face, self.paths.grounds.known);
        if face.len() == 0 {
            return starts.iter().for_each(|_| self.count(known.nobody(), lost));
        }
        let most = if lost.is_empty() { MOST_STEPS } else { STEPS_AFTER_LOSS };
        let ends = Ends { basins: &ground.basins, rings: &self.rings, most, stop: known.stop };
        let fates = match subject.step() {
            None => flock::flow(face, starts, &ends),
            Some(_) => flock::map(face, starts, &ends),
        };
        let mut emptied: Vec<Vec<Vec<f64>>> = vec![Vec::new(); face.len()];
        let mut open = Vec::new();
        for (start, fate) in starts.iter().zip(fates) {
            match fate {
                Fate::Equilibrium(index) => self.count(Destination::Equilibrium(index), lost),
                Fate::Ring(_) => self.count_cycle(lost),
                Fate::Emptied(coordinate, state) => emptied[coordinate].push(state),
                Fate::Open(y) => open.push((start, y)),
            }
        }
        if lost.is_empty() {
            self.left_open(subject, face, &open);
        } else {
            // Wherever the others go, these are losses.
            for _ in &open {
                self.count(Destination::NotSettled, lost);
            }
        }
        for (coordinate, states) in emptied.into_iter().enumerate().filter(|(_, states)| !states.is_empty()) {
            let species = face.present[coordinate];
            let mut without = present.to_vec();
            without[species] = false;
            let mut lost = lost.to_vec();
            lost.push(SpeciesId(species));
            lost.sort_unstable();
            self.together(subject, &states, &without, &lost);
        }
    }

    /// Follows some of those left open to their ends, evenly chosen, each for as many as it stands for; those that stand
    /// close to a known cycle count for it at once.
    fn left_open(&mut self, subject: &mut Subject<'_>, face: &Face, open: &[(&Vec<f64>, Vec<f64>)]) {
        let ends = Ends { basins: &[], rings: &self.rings, most: 0, stop: self.paths.grounds.known.stop };
        let on_cycle = |y: &[f64]| !y.is_empty() && ends.ring(face, y, BESIDE_CYCLE).is_some();
        let (cycling, rest): (Vec<_>, Vec<_>) = open.iter().partition(|(_, y)| on_cycle(y));
        for _ in cycling {
            self.count_cycle(&[]);
        }
        let followed = rest.len().min(FOLLOWED);
        for k in 0..followed {
            self.follow(subject, rest[k * rest.len() / followed].0, rest.len() as f64 / followed as f64);
        }
    }

    fn count_cycle(&mut self, lost: &[SpeciesId]) {
        let destination = self.cycle.clone().map_or(Destination::NotSettled, Destination::Cycle);
        self.count(destination, lost);
    }

    /// By falling share.
    fn shares(mut self, starts: usize) -> Vec<(Destination, f64)> {
        self.counts.sort_by(|(_, a), (_, b)| b.total_cmp(a));
        self.counts.into_iter().map(|(destination, count)| (destination, count / starts as f64)).collect()
    }
}
