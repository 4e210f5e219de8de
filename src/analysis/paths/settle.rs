//! Follows a path of a flow until it is clear where it goes, or the steps are used up.
//!
//! Steps are coarse until returns begin to repeat, then fine. A path ends in the region of a stable equilibrium
//! ([`super::basin`]), on a turn that repeats ([`super::returns`]), or at rest. Where someone is lost it goes on among the
//! others, from then on without.

use crate::analysis::equilibria::Equilibrium;
use crate::analysis::linearise::Linearisation;
use crate::analysis::subject::Subject;
use crate::expr::graph::Graph;
use crate::model::SpeciesId;

use super::Destination;
use super::basin::{Basin, Motion, basins};
use super::cycle::{self, Ring};
use super::face::{Coordinate, Face};
use super::returns::{Closed, Precision, Returns};
use super::walk::{Event, Walk};

/// Steps of one path, over all faces.
const MOST_STEPS: usize = 40_000;
/// States that a trail keeps in all, so that large communities do not exhaust memory.
const MOST_STATES: usize = 2_000_000;
/// Relative errors of a step.
const COARSE_STEP: f64 = 1e-7;
const FINE_STEP: f64 = 1e-11;
const COARSE: Precision = Precision { close: 1e-5, noise: 1e-6 };
const FINE: Precision = Precision { close: 1e-7, noise: 2e-8 };
/// An abundance so many times above its box has left for good.
const BLOWN_UP: f64 = 1e6;
/// A path whose relative rates are below this share of the largest that it had is at rest.
const REST: f64 = 1e-9;
/// Relative distance at which a resting path counts as being at a listed equilibrium.
const AT_REST_BESIDE: f64 = 0.01;
/// A species below this share of its box may go on dying out while the path counts as resting.
const RARE: f64 = 1e-6;
/// "Within 10 %".
pub(super) const NEAR: f64 = 0.1;
/// How many steps between two questions whether to stop.
const ASK_EVERY: usize = 64;

/// What is known of the equilibria.
#[derive(Clone, Copy)]
pub(super) struct Known<'k> {
    pub(super) list: &'k [Equilibrium],
    pub(super) linear: &'k [Option<&'k Linearisation>],
    pub(super) stop: &'k dyn Fn() -> bool,
}

impl Known<'_> {
    /// Where a path stays from which everybody is gone.
    pub(super) fn nobody(&self) -> Destination {
        let empty = |e: &Equilibrium| (0..e.state.len()).all(|i| !e.has(i));
        self.list.iter().position(empty).map_or(Destination::NotSettled, Destination::Equilibrium)
    }
}

/// How a path ended.
#[derive(Clone, Debug)]
pub(super) struct Ending {
    pub(super) destination: Destination,
    /// Since when it has been within 10 %.
    pub(super) time: Option<f64>,
    /// Lowest abundance of each species.
    pub(super) lowest: Vec<f64>,
    /// Whether the implicit method had to take over.
    pub(super) stiff: bool,
    /// The cycle, where it ended on one.
    pub(super) ring: Option<Ring>,
}

/// Why a leg ended.
enum End {
    Emptied { coordinate: usize },
    Equilibrium(usize),
    Turn(Closed),
    Open,
}

/// A path on one face.
struct Leg<'f> {
    walk: Walk<'f>,
    returns: Returns,
    end: End,
}

/// The species that are there, or that will come: one that is 0 and whose rate vanishes with it is not.
pub(super) fn present(graph: &mut Graph, rows: &[crate::expr::graph::NodeId], state: &[f64]) -> Vec<bool> {
    state.iter().enumerate().map(|(i, &x)| x > 0.0 || !graph.vanishes_at_zero(rows[i], i)).collect()
}

/// Follows the path from a state of all species.
pub(super) fn settle(subject: &mut Subject<'_>, known: Known<'_>, start: &[f64]) -> Ending {
    let rows = subject.graph.with_zeros(&subject.plan.rows, &subject.plan.values);
    let mut present = present(&mut subject.graph, &rows, start);
    let mut ending = Ending::open(start);
    let (mut state, mut clock, mut lost) = (start.to_vec(), 0.0, Vec::new());
    let mut steps = MOST_STEPS.min(MOST_STATES / state.len().max(1));
    // Each leg but the last loses a species.
    while let Some(face) = Face::new(subject, &present) {
        if face.len() == 0 {
            ending.destination = known.nobody();
            ending.time = Some(clock);
            break;
        }
        let Some(leg) = leg(&face, known, &state, &mut steps) else { break };
        ending.note(&face, &leg);
        if let End::Emptied { coordinate } = leg.end {
            let last = leg.walk.trail.len() - 1;
            state = face.state(leg.walk.trail.state(last));
            clock += leg.walk.trail.times()[last];
            let species = face.present[coordinate];
            (state[species], ending.lowest[species], present[species]) = (0.0, 0.0, false);
            lost.push(SpeciesId(species));
            continue;
        }
        ending.conclude(&face, known, leg, &state, clock);
        break;
    }
    ending.with_lost(lost, clock);
    ending
}

fn leg<'f>(face: &'f Face, known: Known<'_>, state: &[f64], steps: &mut usize) -> Option<Leg<'f>> {
    let walk = Walk::new(face, state, COARSE_STEP, 1.0).ok()?;
    let returns = Returns::new(walk.stepper.state(), walk.stepper.rates());
    let mut leg = Leg { walk, returns, end: End::Open };
    let start: Vec<f64> = face.present.iter().map(|&i| state[i]).collect();
    let basins: Vec<(Basin, f64)> = basins(face, known.list, Motion::Flow, known.stop)
        .into_iter()
        .map(|basin| (basin.level_within(NEAR, &start), basin))
        .map(|(level, basin)| (basin, level))
        .collect();
    let (mut x, mut z) = (start, vec![0.0; face.len()]);
    let (mut precision, mut fastest) = (COARSE, 0.0f64);
    loop {
        if let Some((basin, _)) = basins.iter().find(|(basin, level)| basin.value(&x, &mut z) <= *level) {
            leg.end = End::Equilibrium(basin.equilibrium);
            return Some(leg);
        }
        if *steps == 0 || (steps.is_multiple_of(ASK_EVERY) && (known.stop)()) {
            return Some(leg);
        }
        *steps -= 1;
        match leg.walk.advance() {
            Err(_) => return Some(leg),
            Ok(Event::Emptied(coordinate)) => {
                leg.end = End::Emptied { coordinate };
                return Some(leg);
            }
            Ok(Event::Moved) => {}
        }
        face.abundances(leg.walk.stepper.state(), &mut x);
        if x.iter().zip(&face.scale).any(|(x, scale)| *x > BLOWN_UP * scale) {
            return Some(leg);
        }
        let Leg { walk, returns, .. } = &mut leg;
        if let Some(closed) = returns.note(face, &mut walk.field, &walk.stepper, &walk.trail, precision) {
            if precision.close == FINE.close {
                leg.end = End::Turn(closed);
                return Some(leg);
            }
            precision = FINE;
            leg.walk.stepper.set_tolerance(&face.tolerance(FINE_STEP));
            leg.returns.begin_again();
        }
        let speed = speed(face, leg.walk.stepper.state(), leg.walk.stepper.rates(), &x);
        fastest = fastest.max(speed);
        if speed <= REST * fastest {
            leg.end = beside(face, known, &x);
            return Some(leg);
        }
    }
}

/// The largest relative rate, those left out that are rare and become rarer.
fn speed(face: &Face, y: &[f64], rates: &[f64], x: &[f64]) -> f64 {
    let relative = |i: usize| match face.kinds[i] {
        Coordinate::Logarithm if rates[i] < 0.0 && x[i] < RARE * face.scale[i] => 0.0,
        Coordinate::Logarithm => rates[i].abs(),
        Coordinate::Plain => rates[i].abs() / y[i].abs().max(RARE * face.scale[i]),
    };
    (0..face.len()).map(relative).fold(0.0, f64::max)
}

/// The listed equilibrium at which a path rests that no region was found for, because nothing linear holds it.
fn beside(face: &Face, known: Known<'_>, x: &[f64]) -> End {
    let state = |i: usize| face.present.iter().position(|&p| p == i).map_or(0.0, |coordinate| x[coordinate]);
    let near = |e: &Equilibrium| {
        e.state.iter().enumerate().all(|(i, &rest)| {
            let unit = face.present.iter().position(|&p| p == i).map_or(0.0, |c| RARE * face.scale[c]);
            (state(i) - rest).abs() <= AT_REST_BESIDE * rest + unit
        })
    };
    let unstable = |index: usize| known.linear.get(index).copied().flatten().is_some_and(|l| l.stable == Some(false));
    let found = known.list.iter().enumerate().find(|(index, e)| near(e) && !unstable(*index));
    found.map_or(End::Open, |(index, _)| End::Equilibrium(index))
}

impl Ending {
    /// Of a path of which only the start is known.
    pub(super) fn open(start: &[f64]) -> Self {
        Self { destination: Destination::NotSettled, time: None, lowest: start.to_vec(), stiff: false, ring: None }
    }

    /// With those that were lost on the way, the last of them at `clock`: wherever the others go, this is a loss.
    pub(super) fn with_lost(&mut self, mut lost: Vec<SpeciesId>, clock: f64) {
        if lost.is_empty() {
            return;
        }
        let mut time = Some(clock);
        if let Destination::Loss(dying) = &self.destination {
            lost.extend_from_slice(dying);
            time = self.time;
        }
        lost.sort_unstable();
        lost.dedup();
        (self.destination, self.time, self.ring) = (Destination::Loss(lost), time, None);
    }

    fn note(&mut self, face: &Face, leg: &Leg<'_>) {
        self.stiff |= leg.walk.is_stiff();
        for (coordinate, &species) in face.present.iter().enumerate() {
            let [low, _] = leg.walk.trail.extremes(coordinate, 0, leg.walk.trail.len() - 1);
            self.lowest[species] = self.lowest[species].min(face.abundance(coordinate, low));
        }
    }

    fn conclude(&mut self, face: &Face, known: Known<'_>, leg: Leg<'_>, start: &[f64], clock: f64) {
        match leg.end {
            End::Equilibrium(index) => {
                let rest = &known.list[index].state;
                self.destination = Destination::Equilibrium(index);
                self.time = Some(clock + cycle::entry(face, &leg.walk.trail, rest, start));
            }
            End::Turn(closed) if closed.dying.is_empty() => {
                let found = cycle::measure(face, &leg.walk.trail, closed.times);
                self.destination = Destination::Cycle(found);
                self.ring = Some(Ring::new(face, &leg.walk.trail, closed.times));
                self.time = Some(clock + cycle::approached(face, &leg.returns.approach(&closed), closed.peaks));
            }
            End::Turn(closed) => {
                let species: Vec<usize> = closed.dying.iter().map(|&coordinate| face.present[coordinate]).collect();
                self.time = Some(clock + cycle::dwindled(face, &leg.walk.trail, &closed.dying, start));
                self.destination = Destination::Loss(species.into_iter().map(SpeciesId).collect());
            }
            End::Emptied { .. } | End::Open => {}
        }
    }
}
