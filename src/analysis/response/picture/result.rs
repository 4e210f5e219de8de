//! The picture as a result: branches and thresholds in their order, and which parts of branches meet at a threshold.

use super::Picture;
use crate::analysis::response::{Arm, Branch, Ending, Point, Response, Threshold};

/// A point is clear of a threshold when it is this share of an abundance, or of the control, off.
const CLEAR: f64 = 1e-4;

impl Picture<'_> {
    /// The picture as a result.
    pub(in crate::analysis::response) fn response(&mut self, equilibria: &[Vec<f64>]) -> Response {
        let takings = self.equations.takings.clone();
        let mut order: Vec<usize> = (0..self.branches.len()).collect();
        let key = |b: &usize| {
            let present = &self.branches[*b].present;
            (present.iter().filter(|&&is| is).count(), present.iter().map(|&is| !is).collect::<Vec<_>>())
        };
        order.sort_by_key(key);
        let mut by_value: Vec<usize> = (0..self.thresholds.len()).collect();
        by_value.sort_by(|&a, &b| self.thresholds[a].at.total_cmp(&self.thresholds[b].at));
        let mut place = vec![0; by_value.len()];
        by_value.iter().enumerate().for_each(|(new, &old)| place[old] = new);
        let mut thresholds: Vec<Threshold> = by_value.iter().map(|&old| self.thresholds[old].clone()).collect();
        let mut branches = Vec::with_capacity(order.len());
        for (number, &b) in order.iter().enumerate() {
            let followed = &self.branches[b];
            let mut points = followed.points.clone();
            for point in &mut points {
                point.threshold = point.threshold.map(|old| place[old]);
            }
            add_arms(&mut thresholds, number, &followed.present, &points);
            let ends = followed.ends.map(|end| match end {
                Ending::Threshold(old) => Ending::Threshold(place[old]),
                other => other,
            });
            branches.push(Branch { present: followed.present.clone(), points, ends, equilibria: Vec::new() });
        }
        for (which, state) in equilibria.iter().enumerate() {
            if let Some(b) = self.branch_through(state, self.control.present)
                && let Some(number) = order.iter().position(|&old| old == b)
            {
                branches[number].equilibria.push(which);
            }
        }
        Response {
            control: self.control,
            takings,
            branches,
            thresholds,
            stations: Vec::new(),
            gaps: Vec::new(),
            undefined: Vec::new(),
        }
    }
}

/// The first point of those that follow a threshold that is clear of it, unless another threshold comes before.
fn clear_of<'p>(following: impl Iterator<Item = &'p Point>, threshold: &Point) -> Option<&'p Point> {
    let far = |point: &Point| {
        let moved = |a: f64, b: f64| (a - b).abs() > CLEAR * a.abs().max(b.abs());
        moved(point.at, threshold.at) || point.state.iter().zip(&threshold.state).any(|(&a, &b)| moved(a, b))
    };
    let mut last = None;
    for point in following {
        if point.threshold.is_some() {
            return last;
        }
        last = Some(point);
        if far(point) {
            return last;
        }
    }
    last
}

/// What of a branch begins at its thresholds.
fn add_arms(thresholds: &mut [Threshold], branch: usize, present: &[bool], points: &[Point]) {
    for (place, point) in points.iter().enumerate() {
        let Some(threshold) = point.threshold else { continue };
        let before = clear_of(points[..place].iter().rev(), point);
        let after = clear_of(points[place + 1..].iter(), point);
        for beside in [before, after].into_iter().flatten() {
            let arm = Arm {
                branch: Some(branch),
                above: beside.at > point.at,
                kind: beside.kind,
                stable: beside.stable,
                feasible: beside.feasible,
                present: present.to_vec(),
            };
            if !thresholds[threshold].arms.contains(&arm) {
                thresholds[threshold].arms.push(arm);
            }
        }
    }
}
