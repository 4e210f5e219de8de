//! What is said of a cycle, and since when a path has been close to where it ends.

use crate::num::elementary;

use super::Cycle;
use super::face::{Coordinate, Face};
use super::settle::NEAR;
use super::trail::Trail;

/// Nodes and weights of Gauss's rule with three points on [0, 1].
const GAUSS: [(f64, f64); 3] =
    [(0.112_701_665_379_258_3, 5.0 / 18.0), (0.5, 8.0 / 18.0), (0.887_298_334_620_741_7, 5.0 / 18.0)];
const BISECTIONS: usize = 60;
/// Points that stand for a cycle.
const POINTS: usize = 96;

/// A turn of a path, measured: extremes between its knots by their cubics, mean yields by Gauss's rule on each step.
pub(super) fn measure(face: &Face, trail: &Trail, [from, to]: [f64; 2]) -> Cycle {
    let (first, last) = (trail.interval(from), trail.interval(to));
    let mut cycle = Cycle {
        period: to - from,
        lowest: vec![0.0; face.species],
        highest: vec![0.0; face.species],
        mean_yield: Vec::new(),
    };
    for (coordinate, &species) in face.present.iter().enumerate() {
        let [low, high] = trail.extremes(coordinate, first, last + 1);
        cycle.lowest[species] = face.abundance(coordinate, low);
        cycle.highest[species] = face.abundance(coordinate, high);
    }
    let mut takes = face.takes();
    let mut sums = takes.none();
    let (mut y, mut x) = (vec![0.0; face.len()], vec![0.0; face.len()]);
    let times = trail.times();
    for knot in first..=last {
        let length = times[knot + 1] - times[knot];
        let share = |time: f64| ((time - times[knot]) / length).clamp(0.0, 1.0);
        let (low, high) = (share(from), share(to));
        for (node, weight) in GAUSS {
            trail.at(knot, low + node * (high - low), &mut y);
            face.abundances(&y, &mut x);
            takes.add(&x, weight * (high - low) * length / cycle.period, &mut sums);
        }
    }
    cycle.mean_yield = sums;
    cycle
}

/// When a path that ends at `rest` comes within 10 % of it for the last time: of each abundance that is not 0 there; of
/// one that is, within 10 % of what it was at the start.
pub(super) fn entry(face: &Face, trail: &Trail, rest: &[f64], start: &[f64]) -> f64 {
    last_entry(trail, face.len(), &|y| {
        face.present.iter().enumerate().all(|(coordinate, &i)| {
            let x = face.abundance(coordinate, y[coordinate]);
            if rest[i] > 0.0 { (x - rest[i]).abs() <= NEAR * rest[i] } else { x <= NEAR * start[i] }
        })
    })
}

/// When those that die out fall below a tenth of what they were at the start for the last time.
pub(super) fn dwindled(face: &Face, trail: &Trail, dying: &[usize], start: &[f64]) -> f64 {
    last_entry(trail, face.len(), &|y| dying.iter().all(|&c| face.abundance(c, y[c]) <= NEAR * start[face.present[c]]))
}

/// The last time at which a path begins to be inside, to the precision of its knots' cubics.
fn last_entry(trail: &Trail, n: usize, inside: &dyn Fn(&[f64]) -> bool) -> f64 {
    let Some(outside) = (0..trail.len()).rev().find(|&knot| !inside(trail.state(knot))) else { return 0.0 };
    let times = trail.times();
    if outside + 1 == trail.len() {
        return times[outside];
    }
    let (mut before, mut after) = (0.0, 1.0);
    let mut y = vec![0.0; n];
    for _ in 0..BISECTIONS {
        let middle = 0.5 * (before + after);
        trail.at(outside, middle, &mut y);
        if inside(&y) {
            after = middle;
        } else {
            before = middle;
        }
    }
    times[outside] + after * (times[outside + 1] - times[outside])
}

/// When a path comes within 10 % of a cycle for the last time, judged at its peaks: from then on each is within 10 % of
/// one of the last turn, in every abundance.
pub(super) fn approached(face: &Face, peaks: &[(f64, &[f64])], of_a_turn: usize) -> f64 {
    let ends = &peaks[peaks.len().saturating_sub(of_a_turn)..];
    let near = |a: &[f64], b: &[f64]| {
        face.kinds.iter().zip(a.iter().zip(b)).all(|(kind, (a, b))| match kind {
            Coordinate::Logarithm => elementary::expm1(a - b).abs() <= NEAR,
            Coordinate::Plain => (a - b).abs() <= NEAR * b.abs(),
        })
    };
    let close = |state: &[f64]| ends.iter().any(|(_, end)| near(state, end));
    let far = peaks.iter().rposition(|(_, state)| !close(state));
    peaks.get(far.map_or(0, |far| far + 1)).map_or(0.0, |(time, _)| if far.is_none() { 0.0 } else { *time })
}

/// A cycle as a ring of points, for asking whether another path has come to it.
#[derive(Clone, Debug)]
pub(super) struct Ring {
    /// The species on it.
    pub(super) present: Vec<usize>,
    /// Points in the coordinates of its face, at equal times.
    pub(super) points: Vec<Vec<f64>>,
    /// How far each coordinate goes.
    pub(super) way: Vec<f64>,
}

impl Ring {
    pub(super) fn new(face: &Face, trail: &Trail, [from, to]: [f64; 2]) -> Self {
        let point = |k: usize| {
            let time = from + (to - from) * k as f64 / POINTS as f64;
            let knot = trail.interval(time);
            let times = trail.times();
            let mut y = vec![0.0; face.len()];
            trail.at(knot, (time - times[knot]) / (times[knot + 1] - times[knot]), &mut y);
            y
        };
        let points: Vec<Vec<f64>> = (0..POINTS).map(point).collect();
        let (first, last) = (trail.interval(from), trail.interval(to) + 1);
        let way = |i: usize| trail.extremes(i, first, last);
        let way = (0..face.len()).map(way).map(|[low, high]| (high - low).max(1e-9)).collect();
        Self { present: face.present.clone(), points, way }
    }

    /// The smallest distance from a point of the ring, squared, each coordinate as a share of the way that it goes.
    pub(super) fn distance(&self, y: &[f64]) -> f64 {
        let to = |point: &Vec<f64>| -> f64 {
            point.iter().zip(y).zip(&self.way).map(|((a, b), way)| ((a - b) / way).powi(2)).sum()
        };
        self.points.iter().map(to).fold(f64::INFINITY, f64::min)
    }
}
