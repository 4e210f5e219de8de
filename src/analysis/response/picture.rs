//! The picture so far: branches that were followed, thresholds on them, and starts that are still to be followed.
//!
//! A branch is followed once: a start that lies on one that is known is dropped. A threshold that is come upon on several
//! branches is one, and its arms are all of theirs.

mod note;
mod result;

use std::collections::VecDeque;
use std::rc::Rc;

use super::curve::{Curve, Sample};
use super::equations::Equations;
use super::events;
use super::events::Change;
use super::locate::Locator;
use super::locate::describe::Describer;
use super::piece::{Piece, Pieces};
use super::walk::{End, Ground, Node, Walk, distance};
use super::{Control, Ending, Point, Threshold};

/// Branches and starts that are followed at most.
const MOST_BRANCHES: usize = 400;
/// What lies between two meetings of one threshold is one place with it when it is this share of an abundance, and of the
/// range, off.
const ONE_PLACE: f64 = 1e-3;
/// How far from a threshold a walk sets out, in scaled coordinates,
const ASIDE: f64 = 1.37e-3;
/// in which an abundance is measured by itself, or by this share of the box.
const LEAST_SCALE: f64 = 1e-3;
/// Pieces that one branch runs through at most, each way.
const MOST_LEGS: usize = 60;
/// An abundance this share of the box below 0, or beyond its sides, is there by rounding.
const ROUNDING: f64 = 1e-9;

/// Where a branch is to be followed from.
#[derive(Clone, Debug)]
pub(super) struct Start {
    /// Who is present.
    pub(super) present: Vec<bool>,
    /// The state of all species.
    pub(super) state: Vec<f64>,
    /// The control.
    pub(super) control: f64,
    /// Of a branch that crosses another there: the direction of that one, over all species and the control.
    pub(super) across: Option<Vec<f64>>,
}

pub(super) struct Picture<'e> {
    pub(super) equations: &'e mut Equations,
    pub(super) pieces: Pieces,
    pub(super) control: Control,
    pub(super) branches: Vec<Followed>,
    pub(super) thresholds: Vec<Threshold>,
    pub(super) starts: VecDeque<Start>,
    pub(super) stop: &'e dyn Fn() -> bool,
    values: Rc<[f64]>,
    locator: Locator,
    describer: Describer,
}

/// A branch that was followed.
#[derive(Clone, Debug)]
pub(super) struct Followed {
    pub(super) present: Vec<bool>,
    pub(super) points: Vec<Point>,
    pub(super) ends: [Ending; 2],
    /// The largest that each abundance was.
    pub(super) peaks: Vec<f64>,
}

impl<'e> Picture<'e> {
    pub(super) fn new(
        equations: &'e mut Equations,
        control: &Control,
        describer: Describer,
        stop: &'e dyn Fn() -> bool,
    ) -> Self {
        let values: Rc<[f64]> = equations.values.clone().into();
        Self {
            equations,
            pieces: Pieces::default(),
            control: *control,
            branches: Vec::new(),
            thresholds: Vec::new(),
            starts: VecDeque::new(),
            stop,
            values,
            locator: Locator::new(),
            describer,
        }
    }

    /// Follows everything that is waiting, and what it leads to.
    pub(super) fn follow_all(&mut self) {
        self.follow_first(8 * MOST_BRANCHES);
    }

    /// The same for so many starts, those that waited longest.
    pub(super) fn follow_first(&mut self, count: usize) {
        for _ in 0..count {
            if (self.stop)() || self.branches.len() >= MOST_BRANCHES {
                return;
            }
            let Some(start) = self.starts.pop_front() else { return };
            self.follow(&start);
        }
    }

    /// Follows the branch through a state both ways, unless it is known; whether it now is.
    pub(super) fn follow(&mut self, start: &Start) -> bool {
        let Some(present) = self.pieces.moving(self.equations, &start.present) else { return false };
        if start.across.is_none() && self.passes(&present, &start.state, start.control) {
            return true;
        }
        let Some((piece, sample)) = self.set_out(start, &present) else { return false };
        if start.across.is_some() && self.passes(&present, &self.whole(&piece, &sample.at), sample.control()) {
            return true;
        }
        let sample = self.aside(&piece, &sample).unwrap_or(sample);
        let (mut points, end) = self.go(piece.clone(), sample.clone(), Some(sample.clone()));
        let mut ends = [end, end];
        let mut all = Vec::new();
        if end != Ending::Closed {
            let mut back = sample.clone();
            back.direction.iter_mut().for_each(|part| *part = -*part);
            back.orientation = -back.orientation;
            let (before, end) = self.go(piece.clone(), back, None);
            ends[0] = end;
            all = before;
            all.reverse();
        }
        let first = self.point(&piece, &sample, None);
        all.push(first.clone());
        all.append(&mut points);
        if end == Ending::Closed {
            all.push(first);
        }
        self.gather(&mut all);
        let n = self.equations.species;
        let peaks = (0..n).map(|i| all.iter().fold(0.0f64, |most, point| most.max(point.state[i].abs()))).collect();
        self.branches.push(Followed { present, points: all, ends, peaks });
        true
    }

    /// A point a little further on, where one lies on a threshold: what happens there is seen on the way back over it.
    fn aside(&mut self, piece: &Piece, sample: &Sample) -> Option<Sample> {
        if sample.typed.unstable.is_some() {
            return None;
        }
        let values = self.values.clone();
        let mut curve = self.curve(piece, &values, &sample.at);
        let unit = curve.unit(&sample.direction);
        [ASIDE, -ASIDE].into_iter().find_map(|step| {
            let mut at: Vec<f64> =
                sample.at.iter().zip(&unit).zip(&curve.scale).map(|((x, t), s)| x + step * t * s).collect();
            let corrected = curve.correct(&mut at, &unit)?;
            let mut beside = Sample { at, ..Sample::default() };
            curve.describe(&mut beside, corrected.orientation);
            let is_inside = (self.control.from..=self.control.to).contains(&beside.control());
            let is_clear = beside.typed.unstable.is_some() && events::kinks(piece, &beside).next().is_none();
            (is_inside && is_clear).then_some(beside)
        })
    }

    /// A piece's curve, scaled for a point.
    pub(super) fn curve<'p>(&self, piece: &'p Piece, values: &'p [f64], at: &[f64]) -> Curve<'p> {
        let mut curve = Curve::new(piece, values, self.width(), self.is_map());
        for (place, &i) in piece.moving.iter().enumerate() {
            curve.scale[place] = at[place].abs().max(LEAST_SCALE * self.equations.sides[i][1].abs());
        }
        curve
    }

    /// Leaves of a threshold that was met several times in one place, as where branches cross, one point: what lies between
    /// is too near to it to be told from it.
    fn gather(&self, points: &mut Vec<Point>) {
        let sides = &self.equations.sides;
        let is_one = |a: &Point, b: &Point| {
            let near = |i: usize| {
                (a.state[i] - b.state[i]).abs() <= ONE_PLACE * a.state[i].abs().max(1e-3 * sides[i][1].abs())
            };
            (a.at - b.at).abs() <= ONE_PLACE * self.width() && (0..a.state.len()).all(near)
        };
        let mut kept: Vec<Point> = Vec::with_capacity(points.len());
        for point in points.drain(..) {
            let last = kept.iter().rposition(|known| known.threshold.is_some());
            if let Some(last) = last
                && point.threshold.is_some()
                && kept[last].threshold == point.threshold
                && kept[last..].iter().all(|between| is_one(between, &point))
            {
                kept.truncate(last);
            }
            kept.push(point);
        }
        *points = kept;
    }

    fn width(&self) -> f64 {
        self.control.to - self.control.from
    }

    fn is_map(&self) -> bool {
        self.equations.step.is_some()
    }

    /// The state of all species at a point of a piece.
    fn whole(&self, piece: &Piece, at: &[f64]) -> Vec<f64> {
        let mut state = vec![0.0; self.equations.species];
        // Without the sign of a 0.
        piece.moving.iter().zip(at).for_each(|(&i, &x)| state[i] = x + 0.0);
        state
    }

    fn sides_of(&self, piece: &Piece) -> Vec<[f64; 2]> {
        piece.moving.iter().map(|&i| self.equations.sides[i]).collect()
    }

    /// The piece and the point that a branch is followed from.
    fn set_out(&mut self, start: &Start, present: &[bool]) -> Option<(Rc<Piece>, Sample)> {
        // Beside a kink at absence the side is that of those who are there.
        let inside = |(i, &x): (usize, &f64)| {
            if x == 0.0 && present[i] { 1e-9 * self.equations.sides[i][1].abs() } else { x }
        };
        let beside: Vec<f64> = start.state.iter().enumerate().map(inside).collect();
        let piece = self.pieces.at(self.equations, present, &beside, start.control)?;
        let at: Vec<f64> = piece.moving.iter().map(|&i| start.state[i]).chain([start.control]).collect();
        let values = self.values.clone();
        let mut curve = self.curve(&piece, &values, &at);
        let sample = match &start.across {
            None => {
                let sample = curve.settled(&at)?;
                (distance(&sample.at, &at, &curve.scale) < 1e-2).then_some(sample)?
            }
            Some(direction) => {
                let known: Vec<f64> =
                    piece.moving.iter().map(|&i| direction[i]).chain([direction[self.equations.species]]).collect();
                super::switch::across(&mut curve, &at, &known)?
            }
        };
        Some((piece, sample))
    }

    /// Goes along a branch from a point of it, over kinks, to its end.
    fn go(&mut self, piece: Rc<Piece>, start: Sample, mut home: Option<Sample>) -> (Vec<Point>, Ending) {
        let mut piece = piece;
        let mut start = start;
        let mut points = Vec::new();
        let values = self.values.clone();
        for _ in 0..MOST_LEGS {
            let sides = self.sides_of(&piece);
            let current = piece.clone();
            let mut curve = Curve::new(&current, &values, self.width(), self.is_map());
            let ground = Ground { sides: &sides, range: [self.control.from, self.control.to], stop: self.stop };
            let (nodes, end) = Walk::new(&mut curve, ground, start, home.take()).run();
            let last = nodes.last().map(|node| node.sample.clone());
            let k = match end {
                End::Kink(k) => Some(k),
                _ => None,
            };
            let beyond = match (k, &last) {
                (Some(k), Some(last)) => super::switch::over_kink(self, &current, k, last),
                _ => None,
            };
            let is_smooth = beyond.as_ref().is_some_and(|(next, _)| next.is_like(&current));
            self.keep(&current, nodes, is_smooth, beyond.as_ref(), &mut points);
            if k.is_none() {
                return (points, ending(end));
            }
            let at_kink = points.last().and_then(|point: &Point| point.threshold);
            match beyond {
                Some((next, sample)) => (piece, start) = (next, sample),
                None => return (points, at_kink.map_or(Ending::Lost, Ending::Threshold)),
            }
        }
        (points, Ending::Lost)
    }

    /// Points and thresholds of a leg.
    fn keep(
        &mut self,
        piece: &Rc<Piece>,
        nodes: Vec<Node>,
        is_smooth: bool,
        beyond: Option<&(Rc<Piece>, Sample)>,
        points: &mut Vec<Point>,
    ) {
        for node in nodes {
            let threshold = node.event.as_ref().and_then(|event| {
                if is_smooth && matches!(event.changes[..], [Change::Kink(_)]) {
                    return None;
                }
                self.note(piece, &node.sample, event, beyond)
            });
            let mut point = self.point(piece, &node.sample, threshold);
            if let Some(threshold) = threshold {
                point.at = self.thresholds[threshold].at;
                point.state.clone_from(&self.thresholds[threshold].state);
            }
            points.push(point);
        }
    }

    /// A point as the result has it.
    fn point(&self, piece: &Piece, sample: &Sample, threshold: Option<usize>) -> Point {
        let state = self.whole(piece, &sample.at);
        let taking =
            |place: &Option<usize>| place.map(|place| sample.beside[place]).filter(|amount| amount.is_finite());
        Point {
            at: sample.control(),
            kind: sample.typed.light.map(|light| light.kind),
            stable: sample.typed.light.and_then(|light| light.stable),
            leading: sample.typed.leading,
            feasible: self.is_feasible(&state),
            takings: piece.takings.iter().map(taking).collect(),
            threshold,
            state,
        }
    }

    pub(super) fn is_feasible(&self, state: &[f64]) -> bool {
        state.iter().zip(&self.equations.sides).all(|(&x, side)| {
            let room = ROUNDING * side[1].abs();
            x >= side[0].min(0.0).max(-room) - room && x >= side[0] - room && x <= side[1] + room
        })
    }
}

fn ending(end: End) -> Ending {
    match end {
        End::Range => Ending::Range,
        End::Closed => Ending::Closed,
        End::Undefined => Ending::Undefined,
        End::Far => Ending::Far,
        End::Stopped => Ending::Stopped,
        End::Lost | End::Kink(_) => Ending::Lost,
    }
}
