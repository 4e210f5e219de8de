//! Which points of a branch are written to files: enough to draw it by straight lines.
//!
//! Analyses follow a branch in steps far finer than any drawing needs, and files of all of them are many megabytes. Kept are
//! the ends, thresholds, and both points beside each change of type, of feasibility or of what is defined; of the rest
//! those without which a straight line would leave the curve (Ramer 1972; Douglas & Peucker 1973). Screens and sentences
//! use every point. Start at [`Scales::written`].

use crate::analysis::response::{Branch, Point, Response};

/// How far a straight line may be from the curve, as a share of what each number spans on the picture.
const NEAR: f64 = 1.0 / 500.0;

/// What a number spans is at least this share of its size: below is rounding.
const ROUNDING: f64 = 1e-9;

/// What each number of a point spans on a picture: control, abundances, takings.
#[derive(Clone, Debug)]
pub(super) struct Scales(Vec<f64>);

impl Scales {
    /// Over the states that there can be; over all where there are none.
    pub(super) fn of(response: &Response) -> Self {
        let all = || response.branches.iter().flat_map(|branch| &branch.points);
        let spans = spans(all().filter(|point| point.feasible)).or_else(|| spans(all())).unwrap_or_default();
        let mut scales: Vec<f64> =
            spans.iter().map(|[low, high]| (high - low).max(ROUNDING * low.abs().max(high.abs()))).collect();
        if let Some(control) = scales.first_mut() {
            *control = response.control.to - response.control.from;
        }
        Self(scales)
    }

    /// The points of a branch that are written, in their order.
    pub(super) fn written<'b>(&self, branch: &'b Branch) -> Vec<&'b Point> {
        let points = &branch.points;
        let mut is_kept: Vec<bool> = (0..points.len()).map(|place| is_border(points, place)).collect();
        let borders: Vec<usize> = (0..points.len()).filter(|&place| is_kept[place]).collect();
        let mut open: Vec<[usize; 2]> = borders.windows(2).map(|ends| [ends[0], ends[1]]).collect();
        // Each piece is divided at a point that is kept from then on, so there are fewer than twice as many as points.
        while let Some([first, last]) = open.pop() {
            let off = |place: usize| self.off(&points[place], &points[first], &points[last]);
            let furthest = (first + 1..last).map(|place| (place, off(place))).max_by(|a, b| a.1.total_cmp(&b.1));
            if let Some((place, _)) = furthest.filter(|(_, off)| *off > NEAR) {
                is_kept[place] = true;
                open.extend([[first, place], [place, last]]);
            }
        }
        points.iter().zip(is_kept).filter(|(_, is_kept)| *is_kept).map(|(point, _)| point).collect()
    }

    /// How far a point is from the straight line between two others: the largest share in any number at the place of the
    /// line that is nearest to it.
    fn off(&self, point: &Point, from: &Point, to: &Point) -> f64 {
        let sizes = || self.0.iter().map(|&scale| if scale > 0.0 { scale } else { f64::INFINITY });
        let parts: Vec<[f64; 2]> = numbers(from)
            .zip(numbers(to))
            .zip(numbers(point))
            .zip(sizes())
            .filter_map(|(((from, to), at), size)| Some([(to? - from?) / size, (at? - from?) / size]))
            .collect();
        let length: f64 = parts.iter().map(|[along, _]| along * along).sum();
        let share: f64 = parts.iter().map(|[along, at]| along * at).sum::<f64>() / length;
        let share = if share.is_finite() { share.clamp(0.0, 1.0) } else { 0.0 };
        parts.iter().fold(0.0, |most: f64, [along, at]| most.max((at - share * along).abs()))
    }
}

/// The numbers of a point that a reader draws.
fn numbers(point: &Point) -> impl Iterator<Item = Option<f64>> {
    std::iter::once(Some(point.at)).chain(point.state.iter().map(|&x| Some(x))).chain(point.takings.iter().copied())
}

/// The smallest and largest of each number; nothing where there are no points.
fn spans<'p>(points: impl Iterator<Item = &'p Point>) -> Option<Vec<[f64; 2]>> {
    let mut spans: Option<Vec<[f64; 2]>> = None;
    for point in points {
        let spans = spans.get_or_insert_with(|| vec![[f64::INFINITY, f64::NEG_INFINITY]; numbers(point).count()]);
        for (span, x) in spans.iter_mut().zip(numbers(point)) {
            let Some(x) = x else { continue };
            *span = [span[0].min(x), span[1].max(x)];
        }
    }
    spans
}

/// Whether a point is an end or a threshold, or another kind of state lies beside it.
fn is_border(points: &[Point], place: usize) -> bool {
    let point = &points[place];
    let beside = [place.checked_sub(1), Some(place + 1)];
    let is_like =
        |beside: Option<usize>| beside.and_then(|place| points.get(place)).is_some_and(|other| is_like(point, other));
    point.threshold.is_some() || !beside.into_iter().all(is_like)
}

fn is_like(a: &Point, b: &Point) -> bool {
    let is_defined = |point: &Point| point.takings.iter().map(Option::is_some).collect::<Vec<_>>();
    (a.kind, a.stable, a.feasible) == (b.kind, b.stable, b.feasible) && is_defined(a) == is_defined(b)
}
