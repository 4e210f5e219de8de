//! Lines that divide the paths of a plane: the stable manifold of a saddle, followed backwards from beside it.
//!
//! Backwards in time paths beside the manifold close in on it, so a path that starts near the eigenvector stays on it, and
//! the error of a step dies out again. It is followed in steps whose error is a small part of a cell, whatever the window,
//! from the saddle itself even where that lies outside: a part that is looked at closely is as good as the whole.

use super::flow::At;
use super::{Flow, Frame, Scale};
use crate::num::elementary;
use crate::num::ode::stepper::Stepper;
use crate::num::ode::{self, Tolerance};

/// Steps along one branch; a path that winds longer than this is left there.
const STEPS: usize = 1000;

/// Error of a step, in cells.
const ERROR: f64 = 1e-3;

/// And at most, as a share of the largest abundance at an equilibrium: cells may be wider than all that happens.
const COARSEST: f64 = 1e-6;

/// The error of a step that rounding still lets us see, relative.
const FINEST: f64 = 1e-13;

/// How far beside the saddle the path begins, in columns.
const BESIDE: f64 = 0.5;

/// And at most, as a share of the saddle's own abundances: near enough for the eigenvector to stand for the manifold.
const NEAR: f64 = 1e-4;

/// How near, in columns, a path comes to an equilibrium that it is said to have reached.
const REACHED: f64 = 0.5;

/// Where an equilibrium is itself within columns of the saddle, this share of the way counts instead.
const CLOSE: f64 = 0.1;

/// How near it comes, in shares of the region, where the window shows so little that a column is nearer.
const ARRIVED: f64 = 1e-9;

/// A path that comes back to its own saddle, to within this share of the farthest that it was, has closed its loop.
const CLOSED: f64 = 0.01;

/// Points of a line are no further apart than this, in columns.
const SPACING: f64 = 0.25;

/// Halvings of a step until its points are near enough.
const HALVINGS: u32 = 48;

/// Points of one branch in the window.
const MOST_POINTS: usize = 20_000;

/// What is known of the plane apart from its flow.
pub(super) struct Plane<'p> {
    /// The equations.
    pub(super) flow: &'p Flow,
    /// What is drawn of it.
    pub(super) frame: &'p Frame,
    /// Where a path is no longer of interest: lower and upper side of each axis, around the window.
    pub(super) region: [[f64; 2]; 2],
    /// The largest abundance at any equilibrium, along each axis.
    pub(super) extent: [f64; 2],
    /// Equilibria at which a branch may end.
    pub(super) others: &'p [[f64; 2]],
}

impl Plane<'_> {
    /// One of the two branches that lead into a saddle, from the saddle outwards: its points inside the window, in the units
    /// of the axes, one list for each time that it comes in.
    ///
    /// `toward` points along the eigenvector that attracts. The branch ends at another equilibrium, where it leaves the
    /// region, where rates are not defined or 0, and after a bounded number of steps.
    pub(super) fn branch(&self, saddle: [f64; 2], toward: [f64; 2]) -> Vec<Vec<[f64; 2]>> {
        let Some(start) = self.beside(saddle, toward) else { return Vec::new() };
        let mut seen = Seen { frame: self.frame, lines: Vec::new(), is_inside: false, left: MOST_POINTS };
        seen.stretch(saddle, start, &|share| [0, 1].map(|i: usize| saddle[i] + share * (start[i] - saddle[i])), 0);
        let mut field = Backwards { at: self.flow.start() };
        let Ok(mut stepper) = Stepper::new(&mut field, &start, &self.tolerance(start), 1.0) else {
            return seen.lines;
        };
        let (mut from, mut farthest) = (start, 0.0f64);
        for _ in 0..STEPS {
            stepper.set_tolerance(&self.tolerance(from));
            if stepper.step(&mut field).is_err() {
                break;
            }
            let to = [stepper.state()[0], stepper.state()[1]];
            let dense = stepper.dense();
            seen.stretch(from, to, &|share| [dense.coordinate(0, share), dense.coordinate(1, share)], 0);
            let away = self.frame.apart(saddle, to);
            farthest = farthest.max(away);
            if !self.is_of_interest(saddle, to) || seen.left == 0 || away < CLOSED * farthest {
                break;
            }
            from = to;
        }
        seen.lines
    }

    /// Where the path begins: on the eigenvector; `None` where that would leave the quadrant.
    fn beside(&self, saddle: [f64; 2], toward: [f64; 2]) -> Option<[f64; 2]> {
        let [across, up] = self.frame.seen(saddle, toward);
        let by_eye = BESIDE / across.hypot(up);
        let by_size = (0..2).filter(|&i| saddle[i] > 0.0 && toward[i] != 0.0);
        let by_size = by_size.map(|i| NEAR * saddle[i] / toward[i].abs()).fold(f64::INFINITY, f64::min);
        let by = [by_eye, by_size].into_iter().filter(|by| by.is_finite() && *by > 0.0).fold(f64::INFINITY, f64::min);
        let start = [0, 1].map(|i: usize| saddle[i] + by * toward[i]);
        start.iter().all(|x| x.is_finite() && *x >= 0.0).then_some(start)
    }

    /// A small part of a cell at a point.
    fn tolerance(&self, point: [f64; 2]) -> [Tolerance; 2] {
        let window = [self.frame.window.x, self.frame.window.y];
        let cells = [self.frame.columns, self.frame.rows];
        [0, 1].map(|i: usize| {
            let [low, high] = window[i];
            let steps = (cells[i] - 1) as f64;
            let cell = match self.frame.scales[i] {
                Scale::Linear => (high - low) / steps,
                Scale::Logarithmic => point[i].clamp(low, high) * elementary::ln(high / low) / steps,
            };
            let finest = (FINEST * point[i].abs()).max(f64::MIN_POSITIVE);
            let absolute = (ERROR * cell).min(COARSEST * self.extent[i]);
            Tolerance { absolute: if absolute > finest { absolute } else { finest }, relative: 0.0 }
        })
    }

    fn is_of_interest(&self, saddle: [f64; 2], point: [f64; 2]) -> bool {
        let is_in = |i: usize| (self.region[i][0]..=self.region[i][1]).contains(&point[i]);
        let size = |i: usize| self.region[i][1] - self.region[i][0];
        let has_reached = |other: &[f64; 2]| {
            let is_there = |i: usize| (point[i] - other[i]).abs() <= ARRIVED * size(i);
            let reached = REACHED.min(CLOSE * self.frame.apart(saddle, *other));
            self.frame.apart(point, *other) < reached || (is_there(0) && is_there(1))
        };
        is_in(0) && is_in(1) && !self.others.iter().any(has_reached)
    }
}

/// The flow, against time.
struct Backwards<'f> {
    at: At<'f>,
}

impl ode::Flow for Backwards<'_> {
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        // A step that began inside may look beyond an axis, where rates need not exist.
        let Some([x, y]) = self.at.rates([y[0].max(0.0), y[1].max(0.0)]) else { return false };
        out.copy_from_slice(&[-x, -y]);
        true
    }

    /// By differences: they steer the implicit method alone, whose error is measured all the same.
    fn slopes(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        let mut here = [0.0; 2];
        let mut there = [0.0; 2];
        if !self.rates(y, &mut here) {
            return false;
        }
        for j in 0..2 {
            let mut beside = [y[0], y[1]];
            beside[j] += f64::EPSILON.sqrt() * y[j].abs().max(f64::EPSILON);
            let by = beside[j] - y[j];
            if !self.rates(&beside, &mut there) {
                return false;
            }
            (0..2).for_each(|i| out[2 * i + j] = (there[i] - here[i]) / by);
        }
        out.iter().all(|slope| slope.is_finite())
    }
}

/// The points that lie in the window.
struct Seen<'f> {
    frame: &'f Frame,
    lines: Vec<Vec<[f64; 2]>>,
    is_inside: bool,
    left: usize,
}

impl Seen<'_> {
    /// Takes the points of a stretch of the line, near enough to each other; parts that cannot touch the window cost
    /// nothing.
    fn stretch(&mut self, from: [f64; 2], to: [f64; 2], at: &dyn Fn(f64) -> [f64; 2], depth: u32) {
        self.between((0.0, from), (1.0, to), at, depth);
    }

    fn between(
        &mut self,
        (start, from): (f64, [f64; 2]),
        (end, to): (f64, [f64; 2]),
        at: &dyn Fn(f64) -> [f64; 2],
        depth: u32,
    ) {
        if self.left == 0 || !self.frame.window.may_touch(from, to) {
            self.is_inside = false;
            return;
        }
        let is_near = self.frame.apart(from, to) <= SPACING;
        if is_near || depth == HALVINGS {
            self.take(to);
            return;
        }
        let middle = f64::midpoint(start, end);
        let there = at(middle);
        self.between((start, from), (middle, there), at, depth + 1);
        self.between((middle, there), (end, to), at, depth + 1);
    }

    fn take(&mut self, point: [f64; 2]) {
        if !self.frame.window.holds(point) {
            self.is_inside = false;
            return;
        }
        if !self.is_inside {
            self.lines.push(Vec::new());
        }
        self.is_inside = true;
        self.left = self.left.saturating_sub(1);
        if let Some(line) = self.lines.last_mut() {
            line.push(point);
        }
    }
}
