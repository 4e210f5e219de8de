//! Follows a map until it is clear where it goes: to an equilibrium, a cycle of up to 64 steps, or a closed curve that it
//! fills (after a Neimark–Sacker bifurcation), whose period is the mean time between peaks. Chaos is not settled.

use crate::analysis::subject::Subject;
use crate::model::SpeciesId;
use crate::num::elementary;

use super::basin::{Basin, Motion, basins};
use super::cycle::Ring;
use super::face::{Face, Field};
use super::settle::{Ending, Known, NEAR, present};
use super::{Cycle, Destination};

/// Iterates of one path, over all faces.
const MOST_ITERATES: usize = 60_000;
/// Numbers that are kept of them, so that large communities do not exhaust memory.
const MOST_KEPT: usize = 2_000_000;
/// Steps of a cycle, at most.
const LONGEST: usize = 64;
/// How many iterates between two looks for a cycle.
const LOOK_EVERY: usize = 128;
/// Relative distance from the limit at which a cycle has been reached.
const CLOSE: f64 = 1e-9;
/// Relative differences that are rounding.
const NOISE: f64 = 1e-13;
/// An abundance so many times above its box has left for good.
const BLOWN_UP: f64 = 1e6;
/// Below this share of its highest so far a species is rare.
const RARE: f64 = 1e-6;
/// Nearby paths on a closed curve part no faster than this (Lyapunov exponent a step); in chaos they do.
const PARTING: f64 = 1e-3;
/// The two halves of what is looked at agree to this share of the way in between.
const STATIONARY: f64 = 0.02;
/// Points that stand for a closed curve.
const CURVE_POINTS: usize = 512;

/// The iterates on one face, one after the other.
struct Orbit<'f> {
    face: &'f Face,
    field: Field<'f>,
    states: Vec<f64>,
}

enum End {
    Emptied { coordinates: Vec<usize> },
    Equilibrium(usize),
    Repeats { length: usize, dying: Vec<usize> },
    Open,
}

/// Follows the map from a state of all species; one application takes `step` time units.
pub(super) fn settle(subject: &mut Subject<'_>, known: Known<'_>, start: &[f64], step: f64) -> Ending {
    let rows = subject.graph.with_zeros(&subject.plan.rows, &subject.plan.values);
    let mut present = present(&mut subject.graph, &rows, start);
    let mut ending = Ending::open(start);
    let (mut state, mut clock, mut lost) = (start.to_vec(), 0.0, Vec::new());
    let mut left = MOST_ITERATES.min(MOST_KEPT / state.len().max(1));
    // Each orbit but the last loses a species.
    while let Some(face) = Face::new(subject, &present) {
        if face.len() == 0 {
            ending.destination = known.nobody();
            ending.time = Some(clock);
            break;
        }
        let mut orbit = Orbit { face: &face, field: face.field(), states: face.coordinates(&state) };
        let end = orbit.follow(known, &mut left);
        ending.see(&orbit);
        let iterates = orbit.len() - 1;
        if let End::Emptied { coordinates } = &end {
            clock += step * iterates as f64;
            state = face.state(orbit.state(iterates));
            for species in coordinates.iter().map(|&coordinate| face.present[coordinate]) {
                present[species] = false;
                lost.push(SpeciesId(species));
            }
            continue;
        }
        orbit.conclude(end, known, &mut ending, step, clock);
        break;
    }
    ending.with_lost(lost, clock);
    ending
}

impl Ending {
    fn see(&mut self, orbit: &Orbit<'_>) {
        for k in 0..orbit.len() {
            for (&species, &x) in orbit.face.present.iter().zip(orbit.state(k)) {
                self.lowest[species] = self.lowest[species].min(x.max(0.0));
            }
        }
    }
}

impl Orbit<'_> {
    fn n(&self) -> usize {
        self.face.len()
    }

    fn len(&self) -> usize {
        self.states.len() / self.n().max(1)
    }

    fn state(&self, k: usize) -> &[f64] {
        &self.states[k * self.n()..(k + 1) * self.n()]
    }

    fn follow(&mut self, known: Known<'_>, left: &mut usize) -> End {
        let n = self.n();
        let basins = basins(self.face, known.list, Motion::Map, known.stop);
        let levels: Vec<f64> = basins.iter().map(|basin| basin.level_within(NEAR, &self.states)).collect();
        let (mut x, mut next, mut z) = (self.states.clone(), vec![0.0; n], vec![0.0; n]);
        let mut highest = x.clone();
        loop {
            if let Some(index) = within(&basins, &levels, &x, &mut z) {
                return End::Equilibrium(index);
            }
            let look = self.len().is_multiple_of(LOOK_EVERY);
            if *left == 0 || (look && (known.stop)()) {
                return End::Open;
            }
            *left -= 1;
            if look && let Some((length, dying)) = self.repeats(&highest) {
                return End::Repeats { length, dying };
            }
            if !self.field.at(&x, &mut next) {
                return End::Open;
            }
            let emptied: Vec<usize> = (0..n).filter(|&i| next[i] < 0.0).collect();
            for x in &mut next {
                *x = x.max(0.0);
            }
            self.states.extend_from_slice(&next);
            x.copy_from_slice(&next);
            if !emptied.is_empty() {
                return End::Emptied { coordinates: emptied };
            }
            highest.iter_mut().zip(&x).for_each(|(high, x)| *high = high.max(*x));
            if x.iter().zip(&self.face.scale).any(|(x, scale)| *x > BLOWN_UP * scale) {
                return End::Open;
            }
        }
    }

    /// The length of the cycle that the latest iterates repeat, and who dies out on it.
    fn repeats(&self, highest: &[f64]) -> Option<(usize, Vec<usize>)> {
        let last = self.len() - 1;
        (1..=LONGEST).take_while(|k| last >= 2 * k).find_map(|k| {
            let [new, old, older] = [0, k, 2 * k].map(|back| self.state(last - back));
            let high = |i: usize| (0..k).map(|back| self.state(last - back)[i]).fold(0.0, f64::max);
            let dies = |&i: &usize| high(i) < RARE * highest[i] && new[i] < old[i];
            let dying: Vec<usize> = (0..self.n()).filter(dies).collect();
            let apart = |a: &[f64], b: &[f64]| {
                let apart = |i: usize| (a[i] - b[i]).abs() / a[i].abs().max(f64::MIN_POSITIVE);
                (0..a.len()).filter(|i| !dying.contains(i)).map(apart).fold(0.0, f64::max)
            };
            let (late, early) = (apart(new, old), apart(old, older));
            let ratio = late / early.max(f64::MIN_POSITIVE);
            let closes = late <= NOISE || (late <= CLOSE && ratio < 1.0 && late * ratio / (1.0 - ratio) <= CLOSE);
            closes.then_some((k, dying))
        })
    }

    fn conclude(&mut self, end: End, known: Known<'_>, ending: &mut Ending, step: f64, clock: f64) {
        match end {
            End::Equilibrium(index) => {
                ending.destination = Destination::Equilibrium(index);
                let centre: Vec<f64> = self.face.present.iter().map(|&i| known.list[index].state[i]).collect();
                let start = self.state(0).to_vec();
                let inside = |x: &[f64]| {
                    let near = |i: usize| {
                        if centre[i] > 0.0 {
                            (x[i] - centre[i]).abs() <= NEAR * centre[i]
                        } else {
                            x[i] <= NEAR * start[i]
                        }
                    };
                    (0..x.len()).all(near)
                };
                ending.time = Some(clock + step * self.since(&inside) as f64);
            }
            End::Repeats { length: 1, dying } if dying.is_empty() => {
                // Repeats in one step are an equilibrium: one that is listed, but that nothing linear holds.
                ending.destination = self.at_rest(known).map_or(Destination::NotSettled, Destination::Equilibrium);
            }
            End::Repeats { length, dying } => self.cyclic(length, length as f64, &dying, ending, step, clock),
            End::Open => {
                if let Some((length, period, dying)) = self.curve() {
                    self.cyclic(length, period, &dying, ending, step, clock);
                }
            }
            End::Emptied { .. } => {}
        }
    }

    /// The last `length` iterates are a cycle, or fill a curve, of this period in steps.
    fn cyclic(&mut self, length: usize, period: f64, dying: &[usize], ending: &mut Ending, step: f64, clock: f64) {
        let face = self.face;
        let first = self.len() - length;
        if !dying.is_empty() {
            let start = self.state(0).to_vec();
            let gone = |x: &[f64]| dying.iter().all(|&i| x[i] <= NEAR * start[i]);
            ending.time = Some(clock + step * self.since(&gone) as f64);
            ending.destination = Destination::Loss(dying.iter().map(|&i| SpeciesId(face.present[i])).collect());
            return;
        }
        let mut cycle = Cycle {
            period: period * step,
            lowest: vec![0.0; face.species],
            highest: vec![0.0; face.species],
            mean_yield: Vec::new(),
        };
        let mut takes = face.takes();
        cycle.mean_yield = takes.none();
        let range = |i: usize| {
            let values = (first..self.len()).map(|k| self.state(k)[i]);
            values.fold([f64::INFINITY, 0.0f64], |[low, high], x| [low.min(x), high.max(x)])
        };
        for (i, &species) in face.present.iter().enumerate() {
            [cycle.lowest[species], cycle.highest[species]] = range(i);
        }
        for k in first..self.len() {
            takes.add(self.state(k), 1.0 / length as f64, &mut cycle.mean_yield);
        }
        let ring = Ring {
            present: face.present.clone(),
            points: (first..self.len())
                .step_by(length.div_ceil(CURVE_POINTS))
                .map(|k| self.state(k).to_vec())
                .collect(),
            way: (0..self.n()).map(range).map(|[low, high]| (high - low).max(1e-9 * high)).collect(),
        };
        let close = |x: &[f64]| {
            ring.points.iter().any(|point| x.iter().zip(point).all(|(x, p)| (x - p).abs() <= NEAR * p.abs()))
        };
        ending.time = Some(clock + step * self.since(&close) as f64);
        ending.destination = Destination::Cycle(cycle);
        ending.ring = Some(ring);
    }

    /// The first iterate from which on all are inside.
    fn since(&self, inside: &dyn Fn(&[f64]) -> bool) -> usize {
        (0..self.len()).rev().find(|&k| !inside(self.state(k))).map_or(0, |outside| outside + 1)
    }

    fn at_rest(&self, known: Known<'_>) -> Option<usize> {
        let state = self.face.state(self.state(self.len() - 1));
        known.list.iter().position(|e| e.state.iter().zip(&state).all(|(a, b)| (a - b).abs() <= 1e-6 * a.max(*b)))
    }

    /// Whether the later half of the iterates fills a closed curve: how many they are, their mean time between peaks in
    /// steps, and who dies out. Two halves of it look alike, and nearby paths do not part.
    fn curve(&mut self) -> Option<(usize, f64, Vec<usize>)> {
        let n = self.n();
        let length = self.len() / 2;
        let (first, middle) = (self.len() - length, self.len() - length / 2);
        if length < 4 * LONGEST * LONGEST {
            return None;
        }
        let range = |i: usize, from: usize, to: usize| {
            let values = (from..to).map(|k| self.state(k)[i]);
            values.fold([f64::INFINITY, 0.0f64], |[low, high], x| [low.min(x), high.max(x)])
        };
        let (mut dying, mut widest) = (Vec::new(), (0.0, 0));
        for i in 0..n {
            let ([low, high], [later_low, later_high]) = (range(i, first, middle), range(i, middle, self.len()));
            let [_, ever] = range(i, 0, middle);
            if later_high < RARE * ever && later_high < high {
                dying.push(i);
                continue;
            }
            let apart = (low - later_low).abs().max((high - later_high).abs());
            if apart > STATIONARY * (high - low) {
                return None;
            }
            if (high - low) / high > widest.0 {
                widest = ((high - low) / high, i);
            }
        }
        let i = widest.1;
        let x = |k: usize| self.state(k)[i];
        let peaks: Vec<usize> = (first + 1..self.len() - 1).filter(|&k| x(k) > x(k - 1) && x(k) >= x(k + 1)).collect();
        let (from, to) = (*peaks.first()?, *peaks.last()?);
        let alike = self.parting(first)?.abs() <= PARTING;
        (alike && peaks.len() > 2).then(|| (length, (to - from) as f64 / (peaks.len() - 1) as f64, dying))
    }

    /// Lyapunov exponent over the iterates from `first` on, a step: mean logarithm of how a small deviation grows.
    fn parting(&mut self, first: usize) -> Option<f64> {
        let n = self.n();
        let (mut slopes, mut v, mut w) = (vec![0.0; n * n], vec![1.0; n], vec![0.0; n]);
        let mut sum = 0.0;
        for k in first..self.len() {
            let x = self.states[k * n..(k + 1) * n].to_vec();
            if !self.field.slopes_at(&x, &mut slopes) {
                return None;
            }
            for (row, w) in slopes.chunks_exact(n).zip(&mut w) {
                *w = row.iter().zip(&v).map(|(a, v)| a * v).sum();
            }
            let length = w.iter().map(|w| w * w).sum::<f64>().sqrt();
            if !(length > 0.0 && length.is_finite()) {
                return None;
            }
            // The first deviation is arbitrary: its length says nothing.
            sum += if k == first { 0.0 } else { elementary::ln(length) };
            v.iter_mut().zip(&w).for_each(|(v, w)| *v = w / length);
        }
        Some(sum / (self.len() - first) as f64)
    }
}

fn within(basins: &[Basin], levels: &[f64], x: &[f64], z: &mut [f64]) -> Option<usize> {
    basins.iter().zip(levels).find(|(basin, level)| basin.value(x, z) <= **level).map(|(basin, _)| basin.equilibrium)
}
