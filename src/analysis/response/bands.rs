//! The safe band of a control read off a picture: over which values a state persists and is stable.
//!
//! For one control whose response is there; `margins` finds the bands of every parameter with a range by itself.

use super::stretches::{Stretch, StretchEnd, stretches};
use super::{Band, Edge, Point, Response};
use crate::analysis::equilibria::Equilibrium;

/// The band around the control's present value in which an equilibrium, by its place in the scenario's list, persists and is
/// stable; `None` where it is not on the picture, or not stable at present.
pub fn band(response: &Response, list: &[Equilibrium], equilibrium: usize) -> Option<Band> {
    let state = &list.get(equilibrium)?.state;
    let all = stretches(response, &|_, _| true);
    let present = response.control.present;
    let is_of = |stretch: &&Stretch| {
        let [low, high] = stretch.span(response);
        let is_through = response.branches[stretch.branch].equilibria.contains(&equilibrium);
        is_through && low <= present && present <= high
    };
    // A branch may pass through several of the list.
    let off = |stretch: &&Stretch| distance(stretch.points_of(response), present, state);
    let stretch = all.iter().filter(is_of).min_by(|a, b| off(a).total_cmp(&off(b)))?;
    let sides = [0, 1].map(|side| stretch.edge(response, &all, side));
    let edges = sides.map(|(end, _)| match end {
        StretchEnd::Lost(threshold) => Edge::Threshold(threshold),
        StretchEnd::Range => Edge::Range,
        StretchEnd::GoesOn(_) | StretchEnd::Unknown => Edge::NotFollowed,
    });
    let threshold = |edge: Edge| match edge {
        Edge::Threshold(threshold) => response.thresholds.get(threshold).cloned(),
        _ => None,
    };
    Some(Band {
        equilibrium,
        parameter: response.control.parameter,
        present,
        ends: sides.map(|(_, at)| at),
        edges,
        thresholds: edges.map(threshold),
    })
}

/// How far a state is from the nearest of a stretch's points to either side of a value of the control: the largest share of
/// an abundance.
fn distance(points: &[Point], present: f64, state: &[f64]) -> f64 {
    let off = |point: &Point| {
        let share = |(x, y): (&f64, &f64)| if x == y { 0.0 } else { (x - y).abs() / x.abs().max(y.abs()) };
        point.state.iter().zip(state).map(share).fold(0.0, f64::max)
    };
    let around = points.windows(2).filter(|pair| (pair[0].at - present) * (pair[1].at - present) <= 0.0);
    around.map(|pair| off(&pair[0]).min(off(&pair[1]))).fold(f64::INFINITY, f64::min)
}
