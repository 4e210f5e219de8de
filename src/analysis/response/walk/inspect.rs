//! What happens on a step, located between its ends: what changed its sign, where, and whether more than one thing did.
//!
//! A number is brought to 0 along the branch, a count bisected. All that changes within a short stretch around belongs to
//! one event; what is left to either side is looked at again. Thresholds are located better than this by the systems that
//! define them; here they only have to be told apart.

use nalgebra::Complex;

use super::{Change, End, Event, LARGE, Node, Sample, Walk, distance};
use crate::analysis::passage::locate::crossing;
use crate::analysis::response::curve::normalise;
use crate::analysis::response::events;

/// Half the length around an event within which all that changes belongs to it.
pub(super) const TIGHT: f64 = 2e-6;
/// Events within events.
pub(super) const DEEPEST: usize = 12;
/// A state this share of the box outside of it is so by more than rounding.
const OUTSIDE: f64 = 1e-6;
/// Halvings for an event that is only counted.
const HALVINGS: usize = 40;

impl Walk<'_, '_> {
    /// The point of the branch at a share of the way from one point to another.
    pub(super) fn between(&mut self, before: &Sample, after: &Sample, share: f64) -> Option<Sample> {
        let parts = after.at.iter().zip(&before.at).zip(&self.curve.scale);
        let mut border: Vec<f64> = parts.map(|((b, a), s)| (b - a) / s).collect();
        normalise(&mut border);
        let at = after.at.iter().zip(&before.at).map(|(b, a)| a + share * (b - a)).collect();
        let mut sample = Sample { at, ..Sample::default() };
        let corrected = self.curve.correct(&mut sample.at, &border)?;
        self.curve.describe(&mut sample, corrected.orientation);
        Some(sample)
    }

    /// Everything that happens between two points, added to the walk.
    pub(super) fn inspect(&mut self, before: &Sample, after: &Sample, depth: usize) {
        let mut found = Vec::new();
        events::changes(self.curve.piece, self.ground.sides, before, after, &mut found);
        let Some(&change) = found.first() else { return };
        if found.len() == 1 && self.is_of_no_account(before, after) {
            return;
        }
        let length = distance(&before.at, &after.at, &self.curve.scale);
        let is_tight = length <= 4.0 * TIGHT || depth == 0;
        let (share, point) = if is_tight { (0.5, None) } else { self.located(change, before, after) };
        let point = point.or_else(|| self.between(before, after, share));
        let half = (TIGHT / length).min(0.5);
        let mut sides = [None, None];
        if !is_tight {
            if share > half {
                sides[0] = self.between(before, after, share - half);
            }
            if share < 1.0 - half {
                sides[1] = self.between(before, after, share + half);
            }
        }
        let mut point = point.unwrap_or_else(|| straight(before, after, share));
        let [left, right] = sides;
        let mut together = Vec::new();
        let ends = [left.as_ref().unwrap_or(before), right.as_ref().unwrap_or(after)];
        events::changes(self.curve.piece, self.ground.sides, ends[0], ends[1], &mut together);
        if !together.contains(&change) {
            together.push(change);
        }
        let error = (ends[1].at[self.m()] - ends[0].at[self.m()]).abs();
        let bracket = ends.map(|end| end.at.clone());
        if let Some(left) = &left {
            self.inspect(before, left, depth - 1);
        }
        self.part_from_last(&point);
        let eigenvalues = self.eigenvalues_at(&mut point);
        self.nodes.push(Node { sample: point, event: Some(Event { changes: together, eigenvalues, error, bracket }) });
        if let Some(right) = &right {
            self.inspect(right, after, depth - 1);
        }
    }

    /// Whether one change between two points is not worth locating, as no threshold comes of it: none of them is a state that
    /// can be, or in a large community neither is stable. Where several things change a state between them may be.
    fn is_of_no_account(&self, before: &Sample, after: &Sample) -> bool {
        let sides = self.ground.sides;
        let cannot_be = |sample: &Sample| {
            let beyond = |(&x, side): (&f64, &[f64; 2])| {
                let room = OUTSIDE * side[1].abs();
                x < side[0] - room || x > side[1] + room
            };
            sample.at.iter().zip(sides).any(beyond)
        };
        let repels = |sample: &Sample| sample.typed.light.is_some_and(|light| light.stable == Some(false));
        let is_large = self.curve.piece.present.len() > LARGE;
        let ends = [before, after];
        ends.into_iter().all(cannot_be) || (is_large && ends.into_iter().all(repels))
    }

    /// Between two events there is a point, to tell what the branch is like there.
    fn part_from_last(&mut self, point: &Sample) {
        let last = self.nodes.last().filter(|node| node.event.is_some()).map(|node| node.sample.clone());
        if let Some(middle) = last.and_then(|last| self.between(&last, point, 0.5)) {
            self.nodes.push(Node { sample: middle, event: None });
        }
    }

    fn eigenvalues_at(&mut self, point: &mut Sample) -> Vec<Complex<f64>> {
        if !self.curve.evaluate(&point.at) {
            return Vec::new();
        }
        self.curve.look(point);
        self.curve.eigenvalues().to_vec()
    }

    /// The share of the way at which a change happens, and the point there.
    fn located(&mut self, change: Change, before: &Sample, after: &Sample) -> (f64, Option<Sample>) {
        let (piece, sides) = (self.curve.piece, self.ground.sides);
        let number = |at: &Sample| events::number(change, piece, sides, before, at);
        if let Some(first) = number(before) {
            let mut found = None;
            let mut at = |share: f64| {
                let sample = if share == 0.0 { before.clone() } else { self.between(before, after, share)? };
                let value = number(&sample);
                found = Some(sample);
                value
            };
            if let Some(share) = crossing(&mut at, first, 1.0) {
                return (share, found);
            }
            let second = number(after).unwrap_or(first);
            let share = if first == second { 0.5 } else { first / (first - second) };
            return (share.clamp(0.0, 1.0), None);
        }
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..HALVINGS {
            let middle = f64::midpoint(low, high);
            match self.between(before, after, middle) {
                Some(sample) if !events::has_happened(change, before, &sample) => low = middle,
                Some(_) => high = middle,
                // Where branches cross nothing can be corrected.
                None => break,
            }
        }
        (f64::midpoint(low, high), None)
    }

    pub(super) fn is_over_a_kink(&self, next: &Sample) -> bool {
        !self.curve.piece.kinks.is_empty() && events::kinks(self.curve.piece, next).next().is_some()
    }

    /// Walks up to the first kink between two points.
    pub(super) fn stop_at_kink(&mut self, here: &Sample, next: &Sample) -> Option<End> {
        let mut first: Option<(f64, usize, Option<Sample>)> = None;
        for k in events::kinks(self.curve.piece, next) {
            let place = self.curve.piece.differences + k;
            let was = here.beside[place];
            let is_beyond_already = (was < 0.0) == self.curve.piece.sides[k] && was != 0.0;
            let (share, point) = if is_beyond_already || was == 0.0 {
                (0.0, Some(here.clone()))
            } else {
                self.located(Change::Kink(k), here, next)
            };
            if first.as_ref().is_none_or(|(known, ..)| share < *known) {
                first = Some((share, k, point));
            }
        }
        let (share, k, point) = first?;
        let point = point.or_else(|| self.between(here, next, share)).unwrap_or_else(|| straight(here, next, share));
        if share > 0.0 {
            self.inspect(here, &point, DEEPEST);
        }
        let mut point = point;
        self.part_from_last(&point);
        let eigenvalues = self.eigenvalues_at(&mut point);
        let error = 1e-12 * self.curve.scale[self.m()];
        let bracket = [here.at.clone(), next.at.clone()];
        let event = Event { changes: vec![Change::Kink(k)], eigenvalues, error, bracket };
        self.nodes.push(Node { sample: point, event: Some(event) });
        Some(End::Kink(k))
    }
}

/// The point of the straight line between two, where nothing better is known.
fn straight(before: &Sample, after: &Sample, share: f64) -> Sample {
    let at = before.at.iter().zip(&after.at).map(|(a, b)| a + share * (b - a)).collect();
    Sample { at, ..before.clone() }
}
