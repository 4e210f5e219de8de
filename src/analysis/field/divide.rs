//! Lines that divide the paths of a plane: the stable manifold of a saddle, followed backwards from beside it.
//!
//! Backwards in time paths beside the manifold close in on it, so a path that starts near the eigenvector stays on it. Only
//! the course counts here, not the time: the path is followed at unit speed as it is seen, in steps of half a column, by
//! the classical method of fourth order (Kutta 1901).

use super::flow::At;
use super::{Flow, Frame};

/// Length of a step, in columns.
const STEP: f64 = 0.5;

/// Steps to a column or row of the frame; a path that winds longer than this is left there.
const STEPS: usize = 8;

/// How near, in columns, a path comes to an equilibrium that it is said to have reached.
const REACHED: f64 = 0.5;

/// One of the two branches that lead into a saddle, from the saddle outwards, in the units of the axes.
///
/// `toward` points along the eigenvector that attracts; `others` are the equilibria at which a branch ends. It ends as well
/// at the window's side, where rates are not defined or 0, and after a bounded number of steps.
pub(super) fn branch(
    flow: &Flow,
    frame: &Frame,
    saddle: [f64; 2],
    toward: [f64; 2],
    others: &[[f64; 2]],
) -> Vec<[f64; 2]> {
    let mut course = Course { at: flow.start(), frame };
    let mut points = vec![saddle];
    let seen = frame.seen(toward);
    let length = seen[0].hypot(seen[1]);
    if !(length.is_finite() && length > 0.0) {
        return points;
    }
    let mut point = ahead(saddle, frame.unseen(seen.map(|part| part / length)), STEP);
    for _ in 0..STEPS * (frame.columns + frame.rows) {
        if !frame.window.holds(point) {
            break;
        }
        points.push(point);
        let near = |other: &[f64; 2]| {
            let [x, y] = frame.seen([point[0] - other[0], point[1] - other[1]]);
            x.hypot(y) < REACHED
        };
        let Some(next) = course.back(point).filter(|_| !others.iter().any(near)) else { break };
        point = next;
    }
    points
}

fn ahead([x, y]: [f64; 2], [across, up]: [f64; 2], by: f64) -> [f64; 2] {
    [x + by * across, y + by * up]
}

struct Course<'f> {
    at: At<'f>,
    frame: &'f Frame,
}

impl Course<'_> {
    /// Against the flow, one column long as it is seen.
    fn against(&mut self, point: [f64; 2]) -> Option<[f64; 2]> {
        // A step that began inside may look beyond an axis, where rates need not exist.
        let inside = [point[0].max(self.frame.window.x[0]), point[1].max(self.frame.window.y[0])];
        let [x, y] = self.frame.seen(self.at.rates(inside)?);
        let speed = x.hypot(y);
        (speed.is_finite() && speed > 0.0).then(|| self.frame.unseen([-x / speed, -y / speed]))
    }

    fn back(&mut self, point: [f64; 2]) -> Option<[f64; 2]> {
        let first = self.against(point)?;
        let second = self.against(ahead(point, first, STEP / 2.0))?;
        let third = self.against(ahead(point, second, STEP / 2.0))?;
        let fourth = self.against(ahead(point, third, STEP))?;
        let mean = |i: usize| (first[i] + 2.0 * second[i] + 2.0 * third[i] + fourth[i]) / 6.0;
        let next = ahead(point, [mean(0), mean(1)], STEP);
        next.iter().all(|x| x.is_finite()).then_some(next)
    }
}
