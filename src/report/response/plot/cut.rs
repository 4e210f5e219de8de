//! What a vertical rule through a response meets.

use super::canvas::is_drawn;
use crate::analysis::linearise::Kind;
use crate::analysis::response::{Branch, Point, Response};

/// States that are listed at most: a rule along a line of equilibria meets it everywhere.
const MOST: usize = 64;

/// A branch met by a rule: between two points in proportion, so good enough for a drawing and no better.
#[derive(Clone, Debug, PartialEq)]
pub struct Met {
    /// The branch.
    pub branch: usize,
    /// Which part of it, as the control rises or falls along it: one more at every turn.
    pub stretch: usize,
    /// The point of the branch before it, or at it.
    pub point: usize,
    /// The state of all species.
    pub state: Vec<f64>,
    /// Its type; `None` where it has no linear part.
    pub kind: Option<Kind>,
    /// Whether it is stable.
    pub stable: Option<bool>,
    /// One number for each of the response's takings.
    pub takings: Vec<Option<f64>>,
}

/// All feasible states at a value of the control, branch by branch, each branch in its own order.
pub fn cut(response: &Response, at: f64) -> Vec<Met> {
    let met = |(place, branch): (usize, &Branch)| of_branch(branch, place, at);
    response.branches.iter().enumerate().flat_map(met).take(MOST).collect()
}

fn of_branch(branch: &Branch, place: usize, at: f64) -> Vec<Met> {
    let points = &branch.points;
    let mut all = Vec::new();
    let mut stretch = 0;
    for (k, point) in points.iter().enumerate() {
        let is_first = k == 0 || points[k - 1].at != at;
        if point.at == at && is_first && point.feasible {
            all.push(between([place, stretch, k], [point, point], 0.0));
        }
        let Some(next) = points.get(k + 1) else { break };
        if k > 0 && (point.at - points[k - 1].at) * (next.at - point.at) < 0.0 {
            stretch += 1;
        }
        let is_between = (point.at < at && at < next.at) || (next.at < at && at < point.at);
        if is_between && is_drawn(point, next) {
            all.push(between([place, stretch, k], [point, next], (at - point.at) / (next.at - point.at)));
        }
    }
    all
}

/// Between which values of the control a state that was met stays what it is: feasible, and as stable as it is there, along
/// its own part of the branch; and the thresholds at which that ends, `None` where the branch ends or the range does.
pub fn stays(response: &Response, met: &Met) -> ([f64; 2], [Option<usize>; 2]) {
    let points = response.branches.get(met.branch).map_or(&[][..], |branch| &branch.points);
    let Some(here) = points.get(met.point) else { return ([f64::NAN; 2], [None; 2]) };
    let after = points.get(met.point + 1..).unwrap_or_default();
    let is_up = after.first().map_or_else(|| here.at > points[0].at, |next| next.at > here.at);
    let before = points[..=met.point].iter().rev();
    let [back, on] = [until(before, met.stable, !is_up), until(after.iter(), met.stable, is_up)];
    let fallback = |end: Option<(f64, Option<usize>)>| end.unwrap_or((here.at, here.threshold));
    let (back, on) = (fallback(back), fallback(on));
    let [low, high] = if is_up { [back, on] } else { [on, back] };
    ([low.0, high.0], [low.1, high.1])
}

/// The last point up to which nothing changes, and the threshold that it is.
fn until<'p>(
    points: impl Iterator<Item = &'p Point>,
    stable: Option<bool>,
    is_up: bool,
) -> Option<(f64, Option<usize>)> {
    let mut last: Option<&Point> = None;
    for point in points {
        let turns = last.is_some_and(|last| if is_up { point.at < last.at } else { point.at > last.at });
        let is_other = point.threshold.is_none() && (!point.feasible || point.stable != stable);
        if turns || is_other {
            break;
        }
        last = Some(point);
    }
    last.map(|point| (point.at, point.threshold))
}

/// A share of the way from one point to the next.
fn between([branch, stretch, point]: [usize; 3], [from, to]: [&Point; 2], share: f64) -> Met {
    let mix = |a: f64, b: f64| a + (b - a) * share;
    let state = from.state.iter().zip(&to.state).map(|(&a, &b)| mix(a, b)).collect();
    let takings = from.takings.iter().zip(&to.takings).map(|(a, b)| a.zip(*b).map(|(a, b)| mix(a, b))).collect();
    let like = whose(from, to, share);
    Met { branch, stretch, point, state, kind: like.kind, stable: like.stable, takings }
}

/// The point whose type holds between two: the nearer one, but at a threshold the type is that of a moment.
pub(super) fn whose<'p>(from: &'p Point, to: &'p Point, share: f64) -> &'p Point {
    match (from.threshold, to.threshold) {
        (Some(_), None) => to,
        (None, Some(_)) => from,
        _ if share < 0.5 => from,
        _ => to,
    }
}
