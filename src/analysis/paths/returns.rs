//! Whether a path repeats itself: its states at the peaks of one coordinate (a Poincaré section, Poincaré 1881).
//!
//! Each return is compared with the one a few peaks before, relative to how far the path went in between, so that a slow
//! departure from an equilibrium is not taken for a cycle. Near a heteroclinic cycle (May & Leonard 1975) each turn takes
//! longer than the one before, so returns never settle.

use crate::num::ode::Flow;
use crate::num::ode::stepper::Stepper;

use super::face::{Coordinate, Face, Field};
use super::trail::Trail;

/// Peaks of one coordinate on a turn of the cycle, at most.
const MOST_PEAKS: usize = 8;
/// A path that moves less than this (no unit; logarithms) is not taken for a cycle.
const SMALLEST: f64 = 1e-5;
/// Below this share of its highest so far a species is rare: others hardly feel it.
const RARE: f64 = 1e-6;
const REFINEMENTS: usize = 50;

/// How closely returns are to repeat.
#[derive(Clone, Copy, Debug)]
pub(super) struct Precision {
    /// Distance from the limit, as a share of the way in between.
    pub(super) close: f64,
    /// Differences below this are the integrator's.
    pub(super) noise: f64,
}

/// A turn that repeats.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Closed {
    /// When the turn began and ended.
    pub(super) times: [f64; 2],
    /// How many peaks of the section's coordinate it has.
    pub(super) peaks: usize,
    /// Coordinates of species that are rare and become rarer with every turn.
    pub(super) dying: Vec<usize>,
}

/// One peak.
#[derive(Clone, Debug)]
struct Return {
    time: f64,
    state: Vec<f64>,
    /// The knot before it.
    knot: usize,
}

/// The peaks of every coordinate.
#[derive(Debug)]
pub(super) struct Returns {
    peaks: Vec<Vec<Return>>,
    /// How many of them are too old to be compared.
    old: Vec<usize>,
    /// Highest value of each coordinate so far.
    highest: Vec<f64>,
    /// Rates at the last step's start.
    before: Vec<f64>,
}

impl Returns {
    /// Nothing seen yet; the path stands at these coordinates with these rates.
    pub(super) fn new(state: &[f64], rates: &[f64]) -> Self {
        let n = state.len();
        Self { peaks: vec![Vec::new(); n], old: vec![0; n], highest: state.to_vec(), before: rates.to_vec() }
    }

    /// Compares no peak so far with later ones, since the precision of steps has changed.
    pub(super) fn begin_again(&mut self) {
        self.old.iter_mut().zip(&self.peaks).for_each(|(old, peaks)| *old = peaks.len());
    }

    /// Notes the peaks in the step just taken, which the trail ends with; the turn, where one repeats.
    pub(super) fn note(
        &mut self,
        face: &Face,
        field: &mut Field<'_>,
        stepper: &Stepper,
        trail: &Trail,
        precision: Precision,
    ) -> Option<Closed> {
        let mut closed = None;
        for i in 0..face.len() {
            self.highest[i] = self.highest[i].max(stepper.state()[i]);
            if !(self.before[i] > 0.0 && stepper.rates()[i] <= 0.0) {
                continue;
            }
            let Some(peak) = peak(i, self.before[i], field, stepper, trail) else { continue };
            self.peaks[i].push(peak);
            closed = closed.or_else(|| self.closed(i, face, trail, precision));
        }
        self.before.copy_from_slice(stepper.rates());
        closed
    }

    /// For each peak of the coordinate whose turn closed: time and state; the path's approach to the cycle.
    pub(super) fn approach(&self, closed: &Closed) -> Vec<(f64, &[f64])> {
        let own = self.peaks.iter().find(|peaks| peaks.last().is_some_and(|last| last.time == closed.times[1]));
        own.map_or_else(Vec::new, |peaks| peaks.iter().map(|peak| (peak.time, &peak.state[..])).collect())
    }

    fn closed(&self, i: usize, face: &Face, trail: &Trail, precision: Precision) -> Option<Closed> {
        let peaks = &self.peaks[i][self.old[i]..];
        (1..=MOST_PEAKS).take_while(|k| peaks.len() > 2 * k).find_map(|k| {
            let at = |back: usize| &peaks[peaks.len() - 1 - back];
            let [last, one, two] = [at(0), at(k), at(2 * k)];
            let turn = Turn::new(self, face, trail, [one, last]);
            let (late, early) = (turn.apart(last, one), turn.apart(one, two));
            let (now, then) = (last.time - one.time, one.time - two.time);
            let late = late.max((now - then).abs() / now);
            let ratio = late / early.max(f64::MIN_POSITIVE);
            let left = if late <= precision.noise { late } else { late * ratio / (1.0 - ratio) };
            let close = late <= precision.close && left <= precision.close && (late <= precision.noise || ratio < 1.0);
            (turn.size > SMALLEST && close && turn.dies_steadily([two, one, last])).then_some(Closed {
                times: [one.time, last.time],
                peaks: k,
                dying: turn.dying,
            })
        })
    }
}

/// One turn, by which returns are compared.
struct Turn {
    /// How far each coordinate goes.
    way: Vec<f64>,
    /// How far the furthest goes.
    size: f64,
    dying: Vec<usize>,
}

impl Turn {
    fn new(returns: &Returns, face: &Face, trail: &Trail, [from, to]: [&Return; 2]) -> Self {
        let mut turn = Self { way: Vec::new(), size: 0.0, dying: Vec::new() };
        let rare = -crate::num::elementary::ln(RARE);
        for i in 0..face.len() {
            let [low, high] = trail.extremes(i, from.knot, to.knot + 1);
            let logarithm = face.kinds[i] == Coordinate::Logarithm;
            let way = if logarithm { high - low } else { (high - low) / high.abs().max(1e-6 * face.scale[i]) };
            if logarithm && high < returns.highest[i] - rare && to.state[i] < from.state[i] {
                turn.dying.push(i);
                turn.way.push(f64::INFINITY);
            } else {
                turn.size = turn.size.max(way);
                turn.way.push(high - low);
            }
        }
        // What hardly moves is not to be compared with its own noise.
        for (i, way) in turn.way.iter_mut().enumerate() {
            let unit = if face.kinds[i] == Coordinate::Logarithm { 1.0 } else { face.scale[i] };
            *way = way.max(1e-3 * turn.size * unit);
        }
        turn
    }

    /// The largest difference of two returns, as a share of the way in between.
    fn apart(&self, a: &Return, b: &Return) -> f64 {
        let share =
            |i: usize| if self.way[i].is_finite() { (a.state[i] - b.state[i]).abs() / self.way[i] } else { 0.0 };
        (0..self.way.len()).map(share).fold(0.0, f64::max)
    }

    /// Whether those that die out do so by the same factor on each turn.
    fn dies_steadily(&self, [a, b, c]: [&Return; 3]) -> bool {
        self.dying.iter().all(|&i| {
            let (early, late) = (b.state[i] - a.state[i], c.state[i] - b.state[i]);
            late < 0.0 && (late - early).abs() <= 1e-2 * late.abs()
        })
    }
}

/// The peak of coordinate i within the step just taken: its rate falls from `before` through 0. By the Illinois method
/// (Dowell & Jarratt 1971), bounded.
fn peak(i: usize, before: f64, field: &mut Field<'_>, stepper: &Stepper, trail: &Trail) -> Option<Return> {
    let n = stepper.state().len();
    let (mut state, mut rates) = (stepper.state().to_vec(), vec![0.0; n]);
    let (mut low, mut high) = ((0.0, before), (1.0, stepper.rates()[i]));
    let (mut share, mut side) = (1.0, 0.0);
    for _ in 0..REFINEMENTS {
        if high.1 == 0.0 {
            share = high.0;
        } else {
            share = (low.0 * high.1 - high.0 * low.1) / (high.1 - low.1);
        }
        stepper.dense().at(share, &mut state);
        if !field.rates(&state, &mut rates) {
            return None;
        }
        if rates[i].abs() <= 1e-12 * before || high.0 - low.0 <= 1e-13 {
            break;
        }
        // An end that stays twice counts half, so that it does not stay for ever.
        let stays = if side * rates[i] > 0.0 { 0.5 } else { 1.0 };
        side = rates[i].signum();
        if rates[i] > 0.0 {
            (low, high) = ((share, rates[i]), (high.0, stays * high.1));
        } else {
            (low, high) = ((low.0, stays * low.1), (share, rates[i]));
        }
    }
    let time = stepper.before() + share * (stepper.time() - stepper.before());
    Some(Return { time, state, knot: trail.len().saturating_sub(2) })
}
