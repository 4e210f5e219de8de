//! Newton's method from a few places between the two points of an event.

use crate::analysis::response::defining::frame::Sizes;
use crate::analysis::response::defining::kernel::{excess, pairs};
use crate::analysis::response::defining::newton::{Linear, Newton, Root};
use crate::analysis::response::defining::{Defining, Shape};
use crate::analysis::response::equations::Equations;
use crate::num::eigen::eigenvalues;

use super::{Event, Sign};

/// Shares of the way from one point to the other that are tried after the first guess.
const SHARES: [f64; 5] = [0.5, 0.25, 0.75, 0.0, 1.0];

/// A root this many bracket lengths from its middle is another.
const NEARBY: f64 = 2.0;

/// Or this far, relative to the point: brackets may be as short as rounding lets them.
const BESIDE: f64 = 1e-6;

/// An event with what a system needs to be solved there.
pub(super) struct Bracket<'b> {
    equations: &'b Equations,
    system: &'b Defining,
    event: &'b Event<'b>,
    pub(super) sizes: Sizes,
}

impl<'b> Bracket<'b> {
    pub(super) fn new(equations: &'b Equations, system: &'b Defining, over: &[usize], event: &'b Event<'b>) -> Self {
        let sizes = Sizes::between(equations, event.face, over, [event.before, event.after]);
        Self { equations, system, event, sizes }
    }

    /// The root nearest to where it is first looked for.
    pub(super) fn solve(&self) -> Option<Root> {
        let values = &self.equations.values;
        let mut newton = Newton::new(&self.system.tape, values);
        let first = self.guess();
        for share in first.into_iter().chain(SHARES) {
            let free = self.at(share);
            for mut start in self.system.starts(values, &free, &self.sizes) {
                let Some(frame) = self.system.frame(values, &mut start, &self.sizes) else { continue };
                let mut linear = frame.linear.clone();
                linear.extend(self.line(start.len()));
                let found = newton.root(&start, &frame.scale, &linear);
                if let Some(root) = found.filter(|root| self.is_nearby(root)) {
                    return Some(root);
                }
            }
        }
        None
    }

    fn at(&self, share: f64) -> Vec<f64> {
        self.event.before.iter().zip(self.event.after).map(|(a, b)| a + share * (b - a)).collect()
    }

    /// Where a straight line between the two values of what changed its sign is 0; `None` where that is not known.
    fn guess(&self) -> Option<f64> {
        let [a, b] = [self.value(self.event.before)?, self.value(self.event.after)?];
        let share = a / (a - b);
        (share.is_finite() && (0.0..=1.0).contains(&share)).then_some(share)
    }

    fn value(&self, point: &[f64]) -> Option<f64> {
        let values = &self.equations.values;
        match (self.system.shape, &self.event.sign) {
            (Shape::Plain, _) => {
                let mut run = self.system.tape.start(values);
                let is_defined = run.at(point).defined;
                run.outputs().last().copied().filter(|_| is_defined)
            }
            (Shape::Pair, _) => {
                let matrix = self.system.matrix_at(values, point)?;
                let found = pairs(&matrix, self.system.order, self.system.is_map);
                Some(excess(found.first()?.value, self.system.is_map))
            }
            (_, Sign::Block(_) | Sign::Flip(_)) => {
                let matrix = self.system.matrix_at(values, point)?;
                let found = eigenvalues(&matrix, self.system.order).ok()?;
                let real = found.into_iter().filter(|z| z.im == 0.0).map(|z| z.re);
                real.min_by(|a, b| a.abs().total_cmp(&b.abs()))
            }
            _ => None,
        }
    }

    /// Linear rows that keep several controls on the line between the two points.
    fn line(&self, unknowns: usize) -> Vec<Linear> {
        let [m, k] = self.system.counts;
        let change = |j: usize| (self.event.after[m + j] - self.event.before[m + j]) / self.sizes.controls[j];
        let Some(moves) = (0..k).max_by(|&i, &j| change(i).abs().total_cmp(&change(j).abs())) else {
            return Vec::new();
        };
        let along = change(moves);
        let share = |j: usize| if along == 0.0 { 0.0 } else { change(j) / along };
        let held = (0..k).filter(|&j| j != moves).map(|j| {
            let mut row = vec![0.0; unknowns];
            row[m + j] = 1.0;
            row[m + moves] = -share(j);
            let start = |j: usize| self.event.before[m + j] / self.sizes.controls[j];
            Linear { row, value: start(j) - share(j) * start(moves) }
        });
        held.collect()
    }

    fn is_nearby(&self, root: &Root) -> bool {
        let scales = self.sizes.moving.iter().chain(&self.sizes.controls);
        let parts = self.event.before.iter().zip(self.event.after).zip(scales).zip(&root.at);
        let (mut length, mut off) = (0.0f64, 0.0f64);
        for (((a, b), scale), x) in parts {
            length = length.max(((b - a) / scale).abs());
            off = off.max(((x - 0.5 * (a + b)) / scale).abs());
        }
        off <= NEARBY * length + BESIDE
    }
}
