//! One curve of thresholds followed over two controls, in steps by pseudo-arclength (Keller 1977).
//!
//! The unknowns are those of the defining system with both controls free, so every point is a root of it. A step is refused
//! where Newton's method does not converge near the prediction, the direction turns too much, or the step is long in the
//! chart. A curve ends where it closes, at the edge of the chart, where an abundance leaves the search box or becomes
//! negative, and where the pair of a Hopf threshold becomes two real eigenvalues.

use crate::analysis::passage::crossing;
use crate::analysis::response::defining::frame::{Frame, Sizes};
use crate::analysis::response::defining::newton::{Linear, Newton, Root};
use crate::analysis::response::defining::{Defining, Shape};

/// Steps each way.
const MOST_STEPS: usize = 2000;
/// First step, and the shortest before a curve is given up, in scaled unknowns.
const FIRST_STEP: f64 = 1e-3;
const SHORTEST_STEP: f64 = 1e-9;
const LONGEST_STEP: f64 = 0.5;
/// Longest part of the chart's width or height between two points.
const LONGEST_IN_CHART: f64 = 1.0 / 150.0;
/// Cosine of the largest angle between directions at the ends of a step.
const STRAIGHT: f64 = 0.97;
/// A corrected point this share of the step from where it was predicted is too far off.
const OFF: f64 = 0.1;
/// Abundances are measured by themselves, or by this share of the largest that they had on the way.
const LEAST_SIZE: f64 = 0.02;
/// An abundance beyond its box by less than this share of it lies on its side.
const ON_SIDE: f64 = 1e-9;

/// A point of a curve, with its direction.
#[derive(Clone, Debug)]
pub(super) struct Place {
    /// Every unknown: abundances of those who move, both controls, the system's own.
    pub(super) at: Vec<f64>,
    /// Unit tangent in scaled unknowns.
    tangent: Vec<f64>,
    frame: Frame,
    /// The last correction of either control, in its unit.
    pub(super) error: f64,
}

impl Place {
    /// The same point on the way back.
    pub(super) fn reversed(mut self) -> Self {
        for t in &mut self.tangent {
            *t = -*t;
        }
        self
    }
}

/// Why a curve ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum End {
    /// At the edge of the chart, or where an abundance leaves the box.
    Edge,
    /// Where it began.
    Closed,
    /// A pair becomes two real eigenvalues.
    Real,
    /// It could not be followed further.
    Lost,
}

/// Where a curve may go.
#[derive(Clone, Debug)]
pub(super) struct Ground {
    /// Lower and upper end of both controls.
    pub(super) ranges: [[f64; 2]; 2],
    /// Sides of the box of those who move.
    pub(super) sides: Vec<[f64; 2]>,
    /// Sizes of the species that the matrix is over; those who move by their place among them.
    pub(super) over: Vec<Option<usize>>,
    pub(super) far: Vec<f64>,
}

/// Follows one curve.
pub(super) struct Tracer<'t> {
    pub(super) system: &'t Defining,
    values: &'t [f64],
    newton: Newton<'t>,
    ground: Ground,
    peaks: Vec<f64>,
    stop: &'t dyn Fn() -> bool,
}

impl<'t> Tracer<'t> {
    pub(super) fn new(system: &'t Defining, values: &'t [f64], ground: Ground, stop: &'t dyn Fn() -> bool) -> Self {
        let peaks = vec![0.0; system.counts[0]];
        Self { system, values, newton: Newton::new(&system.tape, values), ground, peaks, stop }
    }

    /// Sizes at a point.
    pub(super) fn sizes(&self, at: &[f64]) -> Sizes {
        let size = |i: usize| {
            let most = at[i].abs().max(LEAST_SIZE * self.peaks[i]);
            if most > 0.0 { most } else { self.ground.sides[i][1].abs().max(f64::MIN_POSITIVE) }
        };
        let moving: Vec<f64> = (0..self.system.counts[0]).map(size).collect();
        let over = self.ground.over.iter().zip(&self.ground.far);
        Sizes {
            vector: over.map(|(place, far)| place.map_or(*far, |place| moving[place])).collect(),
            controls: self.ground.ranges.map(|[from, to]| to - from).to_vec(),
            moving,
        }
    }

    /// The point of the curve nearest to one that is nearly on it, one control being held; with either direction. Every
    /// unknown may be given where they are known.
    pub(super) fn begin(&mut self, free: &[f64], unknowns: Option<&[f64]>) -> Option<Place> {
        for (peak, x) in self.peaks.iter_mut().zip(free) {
            *peak = peak.max(x.abs());
        }
        let sizes = self.sizes(free);
        let m = self.system.counts[0];
        let starts = match unknowns {
            Some(unknowns) => vec![unknowns.to_vec()],
            None => self.system.starts(self.values, free, &sizes),
        };
        for start in starts {
            for held in [1, 0] {
                let mut start = start.clone();
                let Some(frame) = self.system.frame(self.values, &mut start, &sizes) else { continue };
                let mut linear = frame.linear.clone();
                let mut row = vec![0.0; start.len()];
                row[m + held] = 1.0;
                linear.push(Linear { row: row.clone(), value: start[m + held] / frame.scale[m + held] });
                let Some(root) = self.newton.root(&start, &frame.scale, &linear) else { continue };
                // Through the held control the curve is seen to go on.
                if let Some(place) = self.placed(root, &row, &frame.scale) {
                    return Some(place);
                }
            }
        }
        None
    }

    /// A root with frame and tangent, on the side of a direction in scaled unknowns.
    fn placed(&mut self, root: Root, along: &[f64], scale: &[f64]) -> Option<Place> {
        let Root { mut at, last } = root;
        let m = self.system.counts[0];
        let error = last[m].abs().max(last[m + 1].abs());
        let sizes = self.sizes(&at);
        let frame = self.system.frame(self.values, &mut at, &sizes)?;
        let along: Vec<f64> = along.iter().zip(scale).zip(&frame.scale).map(|((t, old), new)| t * old / new).collect();
        let (tangent, _) = self.newton.tangent(&at, &frame.scale, &frame.linear, &along)?;
        Some(Place { at, tangent, frame, error })
    }

    /// The curve's points after one, and how it ends.
    pub(super) fn follow(&mut self, start: &Place, forwards: bool) -> (Vec<Place>, End) {
        let mut here = start.clone();
        if !forwards {
            here = here.reversed();
        }
        let first = here.clone();
        let mut step = FIRST_STEP;
        let mut places = Vec::new();
        for count in 0..MOST_STEPS {
            if (self.stop)() {
                return (places, End::Lost);
            }
            let Some((next, taken)) = self.advance(&here, &mut step) else { return (places, End::Lost) };
            if let Some((last, end)) = self.ending(&here, &next, taken) {
                places.extend(last);
                return (places, end);
            }
            if count > 2 && self.closes(&first, &here, &next) {
                places.push(first);
                return (places, End::Closed);
            }
            for (peak, x) in self.peaks.iter_mut().zip(&next.at) {
                *peak = peak.max(x.abs());
            }
            here = next.clone();
            places.push(next);
        }
        (places, End::Lost)
    }

    /// The next point, with the length of the step to it; the step is then as long as the next may be.
    fn advance(&mut self, here: &Place, step: &mut f64) -> Option<(Place, f64)> {
        let m = self.system.counts[0];
        let in_chart = here.tangent[m].abs().max(here.tangent[m + 1].abs());
        *step = step.min(LONGEST_STEP).min(LONGEST_IN_CHART / in_chart.max(f64::MIN_POSITIVE));
        while *step >= SHORTEST_STEP {
            let taken = *step;
            match self.attempt(here, taken) {
                Some((place, off)) => {
                    *step = taken * if off < 0.1 * OFF { 2.0 } else { 1.2 };
                    return Some((place, taken));
                }
                None => *step *= 0.4,
            }
        }
        None
    }

    /// A step on trial, and how far off the prediction was as a share of its length.
    fn attempt(&mut self, here: &Place, step: f64) -> Option<(Place, f64)> {
        let root = self.corrected(here, step)?;
        let free = self.system.free();
        let predicted = |j: usize| here.at[j] + step * here.tangent[j] * here.frame.scale[j];
        let off = (0..free).fold(0.0f64, |most, j| most.max(((root.at[j] - predicted(j)) / here.frame.scale[j]).abs()));
        if off > OFF * step {
            return None;
        }
        let next = self.placed(root, &here.tangent, &here.frame.scale)?;
        (self.straightness(here, &next) > STRAIGHT).then_some((next, off / step))
    }

    /// The point of the curve at a length along the tangent.
    fn corrected(&mut self, here: &Place, step: f64) -> Option<Root> {
        let scale = &here.frame.scale;
        let parts = here.at.iter().zip(&here.tangent).zip(scale);
        let start: Vec<f64> = parts.map(|((x, t), scale)| x + step * t * scale).collect();
        let value: f64 = start.iter().zip(&here.tangent).zip(scale).map(|((x, t), scale)| t * x / scale).sum();
        let mut linear = here.frame.linear.clone();
        linear.push(Linear { row: here.tangent.clone(), value });
        self.newton.root(&start, scale, &linear)
    }

    /// Cosine of the angle between the directions at two points, in the scale of the first, abundances and controls alone.
    fn straightness(&self, a: &Place, b: &Place) -> f64 {
        let free = self.system.free();
        let other = |j: usize| b.tangent[j] * b.frame.scale[j] / a.frame.scale[j];
        let (mut along, mut first, mut second) = (0.0, 0.0, 0.0);
        for j in 0..free {
            along += a.tangent[j] * other(j);
            first += a.tangent[j] * a.tangent[j];
            second += other(j) * other(j);
        }
        along / f64::sqrt(first * second)
    }

    /// Whether the step goes past where the curve began, in the same direction.
    fn closes(&self, first: &Place, here: &Place, next: &Place) -> bool {
        let free = self.system.free();
        let scale = &next.frame.scale;
        let part = |a: &Place, b: &Place, j: usize| (b.at[j] - a.at[j]) / scale[j];
        let along = |a: &Place, b: &Place| -> f64 {
            (0..free).map(|j| part(a, b, j) * first.tangent[j] * first.frame.scale[j] / scale[j]).sum()
        };
        let distance = |a: &Place, b: &Place| (0..free).map(|j| part(a, b, j).powi(2)).sum::<f64>().sqrt();
        let length = distance(here, next);
        let passes = along(first, here) < 0.0 && along(first, next) >= 0.0;
        passes && distance(first, here) <= 1.5 * length && self.straightness(first, next) > 0.5
    }

    /// Whether a curve goes on at a point: how far it is inside, negative beyond, by what it crosses first.
    fn limits(&self) -> Vec<(usize, f64, f64)> {
        let m = self.system.counts[0];
        let mut limits = Vec::new();
        for (k, [from, to]) in self.ground.ranges.iter().enumerate() {
            limits.extend([(m + k, 1.0, *from), (m + k, -1.0, *to)]);
        }
        for (i, [low, high]) in self.ground.sides.iter().enumerate() {
            let slack = ON_SIDE * (high - low).abs();
            limits.extend([(i, 1.0, low - slack), (i, -1.0, high + slack)]);
        }
        limits
    }

    /// Whether a point is in the chart, no abundance beyond its box.
    pub(super) fn is_inside(&self, place: &Place) -> bool {
        let slack = |j: usize| ON_SIDE * place.frame.scale[j];
        self.limits().into_iter().all(|(j, sign, side)| sign * (place.at[j] - side) >= -slack(j))
    }

    /// The last point of a curve, where it ends on a step.
    fn ending(&mut self, here: &Place, next: &Place, step: f64) -> Option<(Option<Place>, End)> {
        let inside = |at: &[f64], (j, sign, side): (usize, f64, f64)| sign * (at[j] - side);
        let crossed = |limit: &(usize, f64, f64)| inside(&next.at, *limit) < 0.0;
        let crossed: Vec<(usize, f64, f64)> = self.limits().into_iter().filter(crossed).collect();
        let mut ends: Vec<(f64, Option<Place>, End)> = Vec::new();
        for mut limit in crossed {
            if inside(&here.at, limit) < 0.0 {
                return Some((None, End::Edge));
            }
            // Within the slack lie curves along a side; one that comes from inside ends on it.
            if let Some(side) = self.side(limit)
                && inside(&here.at, (limit.0, limit.1, side)) > 0.0
            {
                limit.2 = side;
            }
            let (length, place) = self.between(here, step, &mut |place| Some(inside(&place.at, limit)));
            ends.push((length, place, End::Edge));
        }
        if self.system.shape == Shape::Pair && self.realness(next) < 0.0 {
            let system = self.system;
            let (length, place) = self.between(here, step, &mut |place| Some(realness(system, place)));
            ends.push((length, place, End::Real));
        }
        ends.into_iter().min_by(|a, b| a.0.total_cmp(&b.0)).map(|(_, place, end)| (place, end))
    }

    /// Of a limit of an abundance the side of the box without the slack.
    fn side(&self, (j, sign, _): (usize, f64, f64)) -> Option<f64> {
        self.ground.sides.get(j).map(|side| if sign > 0.0 { side[0] } else { side[1] })
    }

    fn realness(&self, place: &Place) -> f64 {
        realness(self.system, place)
    }

    /// The point within a step at which a number is 0, and the length to it; the whole step and no point where it cannot be
    /// found.
    pub(super) fn between(
        &mut self,
        here: &Place,
        step: f64,
        number: &mut dyn FnMut(&Place) -> Option<f64>,
    ) -> (f64, Option<Place>) {
        let mut found = None;
        let Some(first) = number(here) else { return (step, None) };
        let mut at = |length: f64| {
            let root = self.corrected(here, length)?;
            let place = self.placed(root, &here.tangent, &here.frame.scale)?;
            let value = number(&place)?;
            found = Some(place);
            Some(value)
        };
        match crossing(&mut at, first, step) {
            Some(length) => (length, found),
            None => (step, None),
        }
    }
}

/// The length along the tangent of one point to another.
pub(super) fn length(here: &Place, next: &Place) -> f64 {
    let parts = here.at.iter().zip(&next.at).zip(&here.frame.scale).zip(&here.tangent);
    parts.map(|(((a, b), scale), t)| t * (b - a) / scale).sum()
}

/// Above 0 where a pair's system has a pair: ω², for a map 1 − cos² θ.
fn realness(system: &Defining, place: &Place) -> f64 {
    let own = place.at.last().copied().unwrap_or_default();
    if system.is_map { 1.0 - own * own } else { own }
}
