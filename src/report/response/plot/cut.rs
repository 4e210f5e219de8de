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
    for (k, point) in points.iter().enumerate() {
        let is_first = k == 0 || points[k - 1].at != at;
        if point.at == at && is_first && point.feasible {
            all.push(between(place, [point, point], 0.0));
        }
        let Some(next) = points.get(k + 1) else { break };
        let is_between = (point.at < at && at < next.at) || (next.at < at && at < point.at);
        if is_between && is_drawn(point, next) {
            all.push(between(place, [point, next], (at - point.at) / (next.at - point.at)));
        }
    }
    all
}

/// A share of the way from one point to the next.
fn between(branch: usize, [from, to]: [&Point; 2], share: f64) -> Met {
    let mix = |a: f64, b: f64| a + (b - a) * share;
    let state = from.state.iter().zip(&to.state).map(|(&a, &b)| mix(a, b)).collect();
    let takings = from.takings.iter().zip(&to.takings).map(|(a, b)| a.zip(*b).map(|(a, b)| mix(a, b))).collect();
    let like = whose(from, to, share);
    Met { branch, state, kind: like.kind, stable: like.stable, takings }
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
