//! A path on one face, step by step, until someone is lost.

use crate::num::ode::stepper::{Method, Stepper};
use crate::num::ode::{Flow, Stopped};

use super::face::{Coordinate, Face, Field};
use super::trail::Trail;

/// Below this share of its box, with a rate that grows beyond what steps can follow, an abundance has run out.
const RUN_OUT: f64 = 1e-12;
const BISECTIONS: usize = 60;

/// A path under way.
pub(super) struct Walk<'f> {
    pub(super) face: &'f Face,
    pub(super) field: Field<'f>,
    pub(super) stepper: Stepper,
    pub(super) trail: Trail,
    direction: f64,
}

/// What a step came to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Event {
    /// The path goes on.
    Moved,
    /// The abundance of this coordinate has reached 0, and its equation would take it below.
    Emptied(usize),
}

impl<'f> Walk<'f> {
    /// Starts at a state of all species, at time 0; backwards where `direction` is negative.
    pub(super) fn new(face: &'f Face, state: &[f64], relative: f64, direction: f64) -> Result<Self, Stopped> {
        let mut field = face.field();
        let stepper = Stepper::new(&mut field, &face.coordinates(state), &face.tolerance(relative), direction)?;
        let mut trail = Trail::new(face.len());
        trail.push(0.0, stepper.state(), stepper.rates());
        Ok(Self { face, field, stepper, trail, direction })
    }

    /// Takes one step.
    pub(super) fn advance(&mut self) -> Result<Event, Stopped> {
        if let Err(stopped) = self.stepper.step(&mut self.field) {
            return self.run_out().map(Event::Emptied).ok_or(stopped);
        }
        if let Some((coordinate, share)) = self.emptied() {
            let length = self.stepper.time() - self.stepper.before();
            let mut there = vec![0.0; self.face.len()];
            self.stepper.dense().at(share, &mut there);
            there[coordinate] = 0.0;
            let mut rates = vec![0.0; self.face.len()];
            if !self.field.rates(&there, &mut rates) {
                return Err(Stopped::Undefined);
            }
            self.trail.push(self.stepper.before() + share * length, &there, &rates);
            return Ok(Event::Emptied(coordinate));
        }
        self.trail.push(self.stepper.time(), self.stepper.state(), self.stepper.rates());
        Ok(Event::Moved)
    }

    /// Whether the implicit method had to take over.
    pub(super) fn is_stiff(&self) -> bool {
        self.stepper.method() == Method::Implicit
    }

    /// The first coordinate that the last step took through 0 and that its equation would take further, and when.
    fn emptied(&self) -> Option<(usize, f64)> {
        let (end, rates) = (self.stepper.state(), self.stepper.rates());
        // Rates below 0 are those at 0; one that is not negative there was overshot, and is brought back.
        let through =
            |&i: &usize| self.face.kinds[i] == Coordinate::Plain && end[i] <= 0.0 && self.direction * rates[i] < 0.0;
        let when = |i: usize| (i, self.crossing(i));
        (0..end.len()).filter(through).map(when).min_by(|a, b| a.1.total_cmp(&b.1))
    }

    fn crossing(&self, i: usize) -> f64 {
        let (mut before, mut after) = (0.0, 1.0);
        for _ in 0..BISECTIONS {
            let middle = 0.5 * (before + after);
            if self.stepper.dense().coordinate(i, middle) > 0.0 {
                before = middle;
            } else {
                after = middle;
            }
        }
        after
    }

    /// A rate such as −√x takes an abundance to 0 in finite time, and its logarithm to −∞.
    fn run_out(&self) -> Option<usize> {
        let (y, rates) = (self.stepper.state(), self.stepper.rates());
        (0..y.len()).find(|&i| {
            let falls = self.face.kinds[i] == Coordinate::Logarithm && self.direction * rates[i] < 0.0;
            falls && self.face.abundance(i, y[i]) < RUN_OUT * self.face.scale[i]
        })
    }
}
