//! What every lint looks at: the model, its equations, and points of the search box to try.
//!
//! The points are always the same: corners, the middle, the middles of the sides, and a low-discrepancy set (multiples
//! of square roots of primes, Weyl 1916).

use crate::diag::Diagnostic;
use crate::expr::tape::Tape;
use crate::expr::tape::run::Run;
use crate::model::system::bounds::Bound;
use crate::model::system::{Plan, System};
use crate::model::{Model, SpeciesId};
use crate::num::interval::Interval;

/// Species up to which every corner is tried; beyond, the lowest and the highest.
const MOST_FOR_ALL_CORNERS: usize = 6;
/// Species up to which each is put to its sides alone, the others all low, all high and in the middle.
const MOST_FOR_ALL_SIDES: usize = 64;
/// Points of the low-discrepancy set.
const SPREAD_POINTS: u32 = 64;
/// Operations that one lint may spend on looking for witnesses: a tenth of a second.
const BUDGET: usize = 10_000_000;

/// A model to look at.
pub(super) struct Scene<'m> {
    pub(super) model: &'m Model,
    pub(super) system: &'m System,
    /// The search range of each species.
    pub(super) ranges: Vec<Interval>,
    /// Where witnesses are looked for.
    pub(super) points: Vec<Vec<f64>>,
}

impl<'m> Scene<'m> {
    pub(super) fn new(model: &'m Model, system: &'m System, bounds: &[Bound]) -> Self {
        let ranges: Vec<Interval> =
            bounds.iter().map(|bound| Interval::try_new(bound.lower, bound.upper).unwrap_or(Interval::ZERO)).collect();
        let points = points(&ranges);
        Self { model, system, ranges, points }
    }

    /// Each scenario's equations, with its index.
    pub(super) fn plans(&self) -> impl Iterator<Item = (usize, &'m Plan)> {
        self.system.plans.iter().enumerate()
    }

    /// The symbol of a species.
    pub(super) fn symbol(&self, species: SpeciesId) -> &'m str {
        self.model.species.get(species.0).map_or("", |species| &species.symbol)
    }

    /// ` in scenario "…"` or ` in 2 of 3 scenarios`; nothing where it is all of them.
    pub(super) fn under(&self, scenarios: &[usize]) -> String {
        let count = self.model.scenarios.len();
        match scenarios {
            all if all.len() == count => String::new(),
            [one] => {
                self.model.scenarios.get(*one).map_or_else(String::new, |one| format!(" in scenario \"{}\"", one.name))
            }
            several => format!(" in {} of {count} scenarios", several.len()),
        }
    }

    /// As many of the points as the budget allows for a tape that is one of `searches` alike.
    pub(super) fn points_for(&self, tape: &Tape, searches: usize) -> &[Vec<f64>] {
        let cost = tape.operations() + tape.states() + tape.states() * tape.states() / 4;
        &self.points[..(BUDGET / (cost * searches).max(1)).clamp(1, self.points.len())]
    }
}

/// Warnings that may come up under several scenarios, each kept once.
#[derive(Default)]
pub(super) struct Findings(Vec<(Diagnostic, Vec<usize>)>);

impl Findings {
    /// Adds what was found under a scenario; the same words at the same place are the same finding.
    pub(super) fn add(&mut self, scenario: usize, warning: Diagnostic) {
        let is_same = |other: &Diagnostic| other.at == warning.at && other.message == warning.message;
        match self.0.iter_mut().find(|(other, _)| is_same(other)) {
            Some((_, scenarios)) => scenarios.push(scenario),
            None => self.0.push((warning, vec![scenario])),
        }
    }

    /// The warnings, with the scenarios named where it is not all of them.
    pub(super) fn finish(self, scene: &Scene<'_>) -> Vec<Diagnostic> {
        let named = |(mut warning, scenarios): (Diagnostic, Vec<usize>)| {
            warning.message.push_str(&scene.under(&scenarios));
            warning
        };
        self.0.into_iter().map(named).collect()
    }
}

/// A tape over intervals, at exact values of the parameters.
pub(super) fn start<'t>(tape: &'t Tape, values: &[f64]) -> Run<'t, Interval> {
    let values: Vec<Interval> = values.iter().copied().map(Interval::point).collect();
    tape.start(&values)
}

/// The outputs of a tape over a box; `None` where one may be undefined.
pub(super) fn enclosures(tape: &Tape, values: &[f64], ranges: &[Interval]) -> Option<Vec<Interval>> {
    let mut run = start(tape, values);
    let domain = run.at(ranges);
    domain.defined.then(|| run.outputs().copied().collect())
}

fn points(ranges: &[Interval]) -> Vec<Vec<f64>> {
    let middle: Vec<f64> = ranges.iter().map(|range| range.mid()).collect();
    let ends = [ranges.iter().map(|range| range.lo()).collect(), ranges.iter().map(|range| range.hi()).collect()];
    let mut points = if ranges.len() <= MOST_FOR_ALL_CORNERS { corners(ranges) } else { ends.to_vec() };
    points.push(middle.clone());
    points.extend((1..=SPREAD_POINTS).map(|index| spread(ranges, index)));
    let beside = if ranges.len() <= MOST_FOR_ALL_SIDES { ranges } else { &[] };
    for (place, range) in beside.iter().enumerate() {
        for base in ends.iter().chain([&middle]) {
            points.extend([range.lo(), range.hi()].map(|side| with(base, place, side)));
        }
    }
    points
}

fn with(base: &[f64], place: usize, value: f64) -> Vec<f64> {
    let mut point = base.to_vec();
    point[place] = value;
    point
}

/// Every corner, the lowest first.
fn corners(ranges: &[Interval]) -> Vec<Vec<f64>> {
    let side = |range: &Interval, is_high: bool| if is_high { range.hi() } else { range.lo() };
    let corner =
        |bits: usize| ranges.iter().enumerate().map(|(place, range)| side(range, bits >> place & 1 == 1)).collect();
    (0..1usize << ranges.len()).map(corner).collect()
}

/// Point `index` of the low-discrepancy set, strictly inside the box.
fn spread(ranges: &[Interval], index: u32) -> Vec<f64> {
    let share = |prime: u32| (f64::from(index) * f64::from(prime).sqrt()).fract();
    ranges.iter().zip(primes()).map(|(range, prime)| range.lo() + share(prime) * (range.hi() - range.lo())).collect()
}

fn primes() -> impl Iterator<Item = u32> {
    let is_prime = |n: &u32| (2..*n).take_while(|d| d * d <= *n).all(|d| !n.is_multiple_of(d));
    (2..).filter(is_prime)
}
