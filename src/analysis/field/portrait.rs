//! Everything that a plane shows, for one frame.

use super::divide::Plane;
use super::straight::{Straight, straight};
use super::{Flow, Frame, Motion, Slice};
use crate::analysis::assess::Assessment;
use crate::analysis::equilibria::Equilibria;
use crate::analysis::linearise::{Kind, Linearisation};
use crate::analysis::subject::Subject;

/// A plane's flow and what orders it.
#[derive(Clone, Debug, PartialEq)]
pub struct Portrait {
    /// The cells that all of it is for.
    pub frame: Frame,
    /// Rates in every cell.
    pub motion: Motion,
    /// Cells, row by row, in which the growth of the species across, and of the one upwards, changes sign.
    pub zero_growth: [Vec<bool>; 2],
    /// Straight paths, each with the index of its equilibrium; of those in the slice and in the window.
    pub straight: Vec<(usize, Straight)>,
    /// The lines that lead into a saddle from both sides, as far as they are in the window, as points in the units of the
    /// axes; near enough to each other to be drawn as they are.
    pub divides: Vec<Vec<[f64; 2]>>,
}

/// The portrait of a plane.
pub fn portrait(
    subject: &Subject<'_>,
    flow: &Flow,
    frame: Frame,
    found: &Equilibria,
    assessment: &Assessment,
) -> Portrait {
    let slice = flow.slice();
    let is_map = subject.step().is_some();
    let mut lines = Vec::new();
    let mut divides = Vec::new();
    let linears = assessment.equilibria.iter().map(|one| one.linear.as_ref().ok());
    for (index, (equilibrium, linear)) in found.list.iter().zip(linears).enumerate() {
        let Some(linear) = linear else { continue };
        let place = slice.project(&equilibrium.state);
        if !slice.has(&equilibrium.state) {
            continue;
        }
        let through = straight(linear, slice, is_map);
        if subject.species() == 2 && !is_map && is_simple_saddle(linear) {
            let others = others(flow, found, index);
            let region = region(subject, slice, &frame);
            let extent = extent(&others, place, region);
            let plane = Plane { flow, frame: &frame, region, extent, others: &others };
            let toward = through.iter().filter(|line| line.approaches).filter(|line| divides_any(line, place));
            let both = toward.flat_map(|line| [line.along, line.along.map(|part| -part)]);
            divides.extend(both.flat_map(|toward| plane.branch(place, toward)));
        }
        if frame.window.holds(place) {
            lines.extend(through.into_iter().map(|line| (index, line)));
        }
    }
    let zero_growth = [0, 1].map(|axis| flow.zero_growth(axis, &frame));
    Portrait { motion: flow.motion(&frame), frame, zero_growth, straight: lines, divides }
}

/// A saddle that has a centre direction has no one line that leads into it.
fn is_simple_saddle(linear: &Linearisation) -> bool {
    linear.kind == Kind::Saddle && linear.dimensions.stable == 1 && linear.dimensions.unstable == 1
}

/// Whether a line into a saddle leaves the axis that the saddle is on: along it all is on one side, and nothing divided.
fn divides_any(line: &Straight, place: [f64; 2]) -> bool {
    let [x, y] = line.along;
    let size = x.hypot(y);
    let runs_along = |absent: f64, part: f64| absent == 0.0 && part.abs() <= super::straight::ROUNDING * size;
    !runs_along(place[0], x) && !runs_along(place[1], y)
}

/// How many times the width of the box, or of the window, a line may lead away and still come back.
const AWAY: f64 = 2.0;

/// Where lines are followed: the search box and the window, with room around.
fn region(subject: &Subject<'_>, slice: &Slice, frame: &Frame) -> [[f64; 2]; 2] {
    let around = |species: usize, window: [f64; 2]| {
        let [low, high] = subject.sides.get(species).copied().unwrap_or(window);
        let (low, high) = (low.min(window[0]), high.max(window[1]));
        [0.0f64.min(low), high + AWAY * (high - low)]
    };
    [around(slice.x, frame.window.x), around(slice.y.unwrap_or(slice.x), frame.window.y)]
}

/// The largest abundance at any equilibrium along each axis; where nobody is there, the region's side.
fn extent(others: &[[f64; 2]], saddle: [f64; 2], region: [[f64; 2]; 2]) -> [f64; 2] {
    [0, 1].map(|i: usize| {
        let largest = others.iter().fold(saddle[i], |largest, other| largest.max(other[i]));
        if largest > 0.0 { largest } else { region[i][1] }
    })
}

fn others(flow: &Flow, found: &Equilibria, index: usize) -> Vec<[f64; 2]> {
    let others = found.list.iter().enumerate().filter(|(other, _)| *other != index);
    others.map(|(_, equilibrium)| flow.slice().project(&equilibrium.state)).collect()
}
