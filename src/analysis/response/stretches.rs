//! The parts of branches along which a state that counts is stable and feasible, and where each ends.
//!
//! What is said of catches, removals and bands is said of these. A stretch that ends at a kink over which a stable state
//! goes on is joined in thought to the one that begins there. Start at [`stretches`].

use super::{Branch, Ending, Point, Response, ThresholdKind};

/// Ends of the range are met to within this share of it.
const AT_RANGE: f64 = 1e-9;

/// Consecutive points of a branch between which it is stable and feasible.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Stretch {
    /// The branch.
    pub(super) branch: usize,
    /// Its points, from the first to the last.
    pub(super) points: [usize; 2],
}

/// Why a stretch ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum StretchEnd {
    /// The range ends.
    Range,
    /// At this threshold the state is lost.
    Lost(usize),
    /// At this threshold, a kink, a stable state goes on.
    GoesOn(usize),
    /// The branch was not followed further, or what lies beyond is not known.
    Unknown,
}

/// Every stretch of a response whose points satisfy `counts`, which is asked of points that are no thresholds.
pub(super) fn stretches(response: &Response, counts: &dyn Fn(&Branch, &Point) -> bool) -> Vec<Stretch> {
    let mut found = Vec::new();
    for (place, branch) in response.branches.iter().enumerate() {
        let is_good = |first: usize| is_stable(response, place, first) && passes(branch, first, counts);
        let mut from = None;
        for first in 0..branch.points.len().saturating_sub(1) {
            match (is_good(first), from) {
                (true, None) => from = Some(first),
                (false, Some(start)) => {
                    found.push(Stretch { branch: place, points: [start, first] });
                    from = None;
                }
                _ => {}
            }
        }
        if let Some(start) = from {
            found.push(Stretch { branch: place, points: [start, branch.points.len() - 1] });
        }
    }
    found
}

/// Whether the state is stable and feasible between a point and the next.
fn is_stable(response: &Response, place: usize, first: usize) -> bool {
    let points = &response.branches[place].points;
    let is_good = |point: &Point| point.stable == Some(true) && point.feasible;
    let ends = [&points[first], &points[first + 1]];
    let mut inside = ends.iter().filter(|point| point.threshold.is_none()).peekable();
    if inside.peek().is_some() {
        return inside.all(|point| is_good(point));
    }
    // Between two thresholds only what is said of their arms tells.
    let said = |from: usize, to: usize| {
        let threshold = &response.thresholds.get(ends[from].threshold?)?;
        let above = ends[to].at > ends[from].at;
        let arm = threshold.arms.iter().find(|arm| arm.branch == Some(place) && arm.above == above)?;
        Some(arm.stable == Some(true) && arm.feasible)
    };
    said(0, 1).or_else(|| said(1, 0)).unwrap_or(false)
}

/// Of two thresholds in a row either may stand for what is between.
fn passes(branch: &Branch, first: usize, counts: &dyn Fn(&Branch, &Point) -> bool) -> bool {
    let ends = [&branch.points[first], &branch.points[first + 1]];
    let mut inside = ends.iter().filter(|point| point.threshold.is_none()).peekable();
    if inside.peek().is_some() {
        return inside.all(|point| counts(branch, point));
    }
    ends.iter().any(|point| counts(branch, point))
}

impl Stretch {
    /// The points of the stretch.
    pub(super) fn points_of<'r>(&self, response: &'r Response) -> &'r [Point] {
        &response.branches[self.branch].points[self.points[0]..=self.points[1]]
    }

    /// The values of the control that it spans, the lower one first.
    pub(super) fn span(&self, response: &Response) -> [f64; 2] {
        let points = self.points_of(response);
        let low = points.iter().fold(f64::INFINITY, |least, point| least.min(point.at));
        let high = points.iter().fold(f64::NEG_INFINITY, |most, point| most.max(point.at));
        [low, high]
    }

    /// What is at its first point (0) or last (1).
    pub(super) fn end(&self, response: &Response, which: usize) -> StretchEnd {
        let branch = &response.branches[self.branch];
        let point = &branch.points[self.points[which]];
        if let Some(threshold) = point.threshold {
            return if self.goes_on(response, threshold) {
                StretchEnd::GoesOn(threshold)
            } else {
                StretchEnd::Lost(threshold)
            };
        }
        let is_last = self.points[which] == if which == 0 { 0 } else { branch.points.len() - 1 };
        let width = response.control.to - response.control.from;
        let limits = [response.control.from, response.control.to];
        let at_limit = limits.iter().any(|limit| (point.at - limit).abs() <= AT_RANGE * width);
        match branch.ends[which] {
            _ if !is_last => StretchEnd::Unknown,
            Ending::Threshold(threshold) => StretchEnd::Lost(threshold),
            Ending::Range => StretchEnd::Range,
            _ if at_limit => StretchEnd::Range,
            _ => StretchEnd::Unknown,
        }
    }

    /// Whether a stable state goes on over a kink: a stable, feasible arm on the side away from the stretch.
    fn goes_on(&self, response: &Response, threshold: usize) -> bool {
        let Some(met) = response.thresholds.get(threshold) else { return false };
        let span = self.span(response);
        let lies_below = 0.5 * (span[0] + span[1]) < met.at;
        let is_next = |arm: &super::Arm| arm.above == lies_below && arm.stable == Some(true) && arm.feasible;
        met.kind == ThresholdKind::BorderCollision && met.arms.iter().any(is_next)
    }

    /// Where the state is lost at last when the control falls (0) or rises (1), over kinks that it goes on at: the way the
    /// last of the stretches ends, and its value of the control.
    pub(super) fn edge(&self, response: &Response, all: &[Self], side: usize) -> (StretchEnd, f64) {
        let mut here = *self;
        // Each stretch is passed once at most.
        for _ in 0..=all.len() {
            let which = here.end_towards(response, side);
            let at = response.branches[here.branch].points[here.points[which]].at;
            let end = here.end(response, which);
            let StretchEnd::GoesOn(threshold) = end else { return (end, at) };
            let begins = |next: &&Self| {
                let near = next.end_towards(response, 1 - side);
                let point = &response.branches[next.branch].points[next.points[near]];
                **next != here && point.threshold == Some(threshold)
            };
            match all.iter().find(begins) {
                Some(next) => here = *next,
                None => return (StretchEnd::Unknown, at),
            }
        }
        (StretchEnd::Unknown, self.span(response)[side])
    }

    /// Which of its ends lies towards lower (0) or higher (1) values of the control.
    fn end_towards(&self, response: &Response, side: usize) -> usize {
        let points = &response.branches[self.branch].points;
        let rises = points[self.points[1]].at >= points[self.points[0]].at;
        if rises { side } else { 1 - side }
    }
}
