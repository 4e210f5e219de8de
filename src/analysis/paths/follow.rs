//! A path as a list of states, for drawing.

use crate::analysis::subject::Subject;
use crate::model::SpeciesId;
use crate::num::ode::Stopped;

use super::face::Face;
use super::grounds::present;
use super::walk::{Event, Walk};

/// Relative error of a step.
const STEP: f64 = 1e-7;
/// States in a path, at most.
const MOST_STATES: usize = 20_000;
/// States that a step is recorded by.
const PARTS: u32 = 4;
/// States between two questions whether to stop.
const ASK_EVERY: usize = 64;

/// Why a path ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ended {
    /// At the time asked for.
    InTime,
    /// Backwards in time, where a species would have to come out of nothing; or a map, which has no past.
    NoPast,
    /// The rates are not defined, not finite, or change too fast.
    Stopped(Stopped),
    /// The number of states is bounded.
    TooManyStates,
    /// It was told to stop.
    Asked,
}

/// A path.
#[derive(Clone, Debug, PartialEq)]
pub struct Path {
    /// Times, in time units; falling for a path backwards.
    pub times: Vec<f64>,
    /// The state of all species at each.
    pub states: Vec<Vec<f64>>,
    /// Who was lost, and when.
    pub lost: Vec<(SpeciesId, f64)>,
    /// Why it ended.
    pub ended: Ended,
}

/// Follows the path from a state of all species for a time; backwards where that is negative.
///
/// States are a quarter of a step apart; a last one stands at the time itself. A species that reaches 0 while its equation
/// would take it below is lost, and the path goes on without it; backwards the path ends there.
pub fn follow(subject: &mut Subject<'_>, start: &[f64], until: f64, stop: &dyn Fn() -> bool) -> Path {
    let mut path = Path { times: vec![0.0], states: vec![start.to_vec()], lost: Vec::new(), ended: Ended::InTime };
    let rows = subject.graph.with_zeros(&subject.plan.rows, &subject.plan.values);
    let mut there = present(subject, &rows, start);
    // Each leg but the last loses a species.
    while let Some(face) = Face::new(subject, &there) {
        let lost = match subject.step() {
            Some(step) => path.iterate(&face, until, step, stop),
            None => path.walk(&face, until, stop),
        };
        let Some(coordinate) = lost else { return path };
        if until < 0.0 {
            path.ended = Ended::NoPast;
            return path;
        }
        let species = face.present[coordinate];
        there[species] = false;
        path.lost.push((SpeciesId(species), path.time()));
    }
    path.ended = Ended::Stopped(Stopped::Undefined);
    path
}

impl Path {
    fn time(&self) -> f64 {
        self.times.last().copied().unwrap_or(0.0)
    }

    fn last(&self) -> Vec<f64> {
        self.states.last().cloned().unwrap_or_default()
    }

    fn push(&mut self, time: f64, state: Vec<f64>) {
        self.times.push(time);
        self.states.push(state);
    }

    fn is_full(&mut self, stop: &dyn Fn() -> bool) -> bool {
        if self.times.len() >= MOST_STATES {
            self.ended = Ended::TooManyStates;
        } else if self.times.len() % ASK_EVERY < PARTS as usize && stop() {
            self.ended = Ended::Asked;
        } else {
            return false;
        }
        true
    }

    /// Goes on along a flow; the coordinate that was lost, if one was.
    fn walk(&mut self, face: &Face, until: f64, stop: &dyn Fn() -> bool) -> Option<usize> {
        let begun = self.time();
        let mut walk = match Walk::new(face, &self.last(), STEP, until) {
            Ok(walk) => walk,
            Err(stopped) => {
                self.ended = Ended::Stopped(stopped);
                return None;
            }
        };
        while !self.is_full(stop) {
            let left = until - begun - walk.stepper.time();
            if left * until.signum() <= 0.0 {
                return None;
            }
            walk.stepper.limit(left);
            let event = match walk.advance() {
                Ok(event) => event,
                Err(stopped) => {
                    self.ended = Ended::Stopped(stopped);
                    return None;
                }
            };
            let knot = walk.trail.len() - 1;
            self.on_the_way(begun, &walk, walk.trail.times()[knot]);
            let mut state = face.state(walk.trail.state(knot));
            if let Event::Emptied(coordinate) = event {
                state[face.present[coordinate]] = 0.0;
                self.push(begun + walk.trail.times()[knot], state);
                return Some(coordinate);
            }
            self.push(begun + walk.trail.times()[knot], state);
        }
        None
    }

    /// The states between a step's ends, up to a time within it.
    fn on_the_way(&mut self, begun: f64, walk: &Walk<'_>, until: f64) {
        let (start, end) = (walk.stepper.before(), walk.stepper.time());
        let reached = (until - start) / (end - start);
        let mut there = vec![0.0; walk.face.len()];
        for part in 1..PARTS {
            let share = f64::from(part) / f64::from(PARTS);
            walk.stepper.dense().at(share * reached, &mut there);
            self.push(begun + start + share * (until - start), walk.face.state(&there));
        }
    }

    fn iterate(&mut self, face: &Face, until: f64, step: f64, stop: &dyn Fn() -> bool) -> Option<usize> {
        if until < 0.0 {
            self.ended = Ended::NoPast;
            return None;
        }
        let mut field = face.field();
        let mut x = face.coordinates(&self.last());
        let mut next = x.clone();
        // Half a step forgives that times are sums of steps.
        while self.time() + 0.5 * step <= until && !self.is_full(stop) {
            if !field.at(&x, &mut next) {
                self.ended = Ended::Stopped(Stopped::Undefined);
                return None;
            }
            x.copy_from_slice(&next);
            self.push(self.time() + step, face.state(&x));
            if let Some(coordinate) = x.iter().position(|x| *x < 0.0) {
                return Some(coordinate);
            }
        }
        None
    }
}
