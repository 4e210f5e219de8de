//! The parts of a branch between thresholds, for lists that people read.

use crate::analysis::linearise::Kind;
use crate::analysis::response::{Branch, Point};

/// A part of a branch over which stability, and whether the state is feasible, stay the same.
#[derive(Clone, Debug, PartialEq)]
pub struct Segment {
    /// The control where it begins and ends, in the order of the branch: it may fall.
    pub ends: [f64; 2],
    /// Places of its first and last point.
    pub points: [usize; 2],
    /// The types along it, each once, in order.
    pub kinds: Vec<Option<Kind>>,
    /// Whether it is stable.
    pub stable: Option<bool>,
    /// Whether no abundance is negative, and none outside the search box.
    pub feasible: bool,
}

/// The parts of a branch, from its first point on.
///
/// A threshold's point ends one part and begins the next; its own type is of neither. So does a lone critical point, as at
/// an end of the range that happens to be a threshold. Between parts that differ without a threshold the last point of the
/// first is the border.
pub fn segments(branch: &Branch) -> Vec<Segment> {
    let points = &branch.points;
    let mut all: Vec<Segment> = Vec::new();
    let mut is_open = false;
    for (place, point) in points.iter().enumerate() {
        if point.threshold.is_some() || is_border(points, place) {
            if let Some(last) = all.last_mut().filter(|_| is_open) {
                last.extend(place, point, None);
            }
            is_open = false;
            continue;
        }
        if let Some(last) = all.last_mut().filter(|last| is_open && last.is_like(point)) {
            last.extend(place, point, Some(&point.kind));
        } else {
            all.push(Segment::new(points, place));
        }
        is_open = true;
    }
    all
}

/// Whether a point is critical and none beside it is.
fn is_border(points: &[Point], place: usize) -> bool {
    let is_critical = |place: usize| points.get(place).is_some_and(|point| point.kind == Some(Kind::Undecided));
    points.len() > 1 && is_critical(place) && !is_critical(place + 1) && !place.checked_sub(1).is_some_and(is_critical)
}

impl Segment {
    fn is_like(&self, point: &Point) -> bool {
        self.stable == point.stable && self.feasible == point.feasible
    }

    /// A part that a point is of, from the point before it on.
    fn new(points: &[Point], place: usize) -> Self {
        let (start, point) = (place.saturating_sub(1), &points[place]);
        Self {
            ends: [points[start].at, point.at],
            points: [start, place],
            kinds: vec![point.kind],
            stable: point.stable,
            feasible: point.feasible,
        }
    }

    /// With one more point, which need not be of its own type.
    fn extend(&mut self, place: usize, point: &Point, kind: Option<&Option<Kind>>) {
        self.ends[1] = point.at;
        self.points[1] = place;
        self.kinds.extend(kind.filter(|kind| !self.kinds.contains(kind)).copied());
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::response::Ending;

    fn point(at: f64, kind: Kind, threshold: Option<usize>) -> Point {
        let stable = Some(kind != Kind::Saddle).filter(|_| threshold.is_none());
        let (state, takings) = (vec![at], Vec::new());
        Point { at, state, kind: Some(kind), stable, leading: None, feasible: at < 4.5, takings, threshold }
    }

    #[test]
    fn parts_end_at_thresholds_and_where_stability_changes() {
        let (node, spiral, saddle) = (Kind::StableNode, Kind::StableSpiral, Kind::Saddle);
        let points = vec![
            point(1.0, node, None),
            point(2.0, spiral, None),
            point(3.0, Kind::Undecided, Some(0)),
            point(2.5, saddle, None),
            point(4.0, saddle, None),
            point(5.0, saddle, None),
        ];
        let branch = Branch { present: vec![true], points, ends: [Ending::Range; 2], equilibria: Vec::new() };
        let seen: Vec<_> = segments(&branch).into_iter().map(|s| (s.ends, s.kinds, s.feasible)).collect();
        assert_eq!(
            seen,
            [
                ([1.0, 3.0], vec![Some(node), Some(spiral)], true),
                ([3.0, 4.0], vec![Some(saddle)], true),
                ([4.0, 5.0], vec![Some(saddle)], false),
            ]
        );
    }
}
