//! What the user does with the sketch.

use crate::analysis::field::Window;
use crate::app::action::{Action, Axis, Direction};
use crate::app::wants::{axes, fitting, sketch_size};
use crate::app::{App, Hold, Study};
use crate::report::sketch::Plot;

/// One step closer shows this share of either axis.
const CLOSER: f64 = 0.7;
/// The window moves by this share of itself.
const SHARE: f64 = 0.1;

pub(super) fn act(app: &mut App, action: Action) {
    let Some(mut study) = app.study.take() else { return };
    let plot = Plot::of(sketch_size(app, &study));
    let window = study.sketch.window.unwrap_or_else(|| fitting(&study, axes(&study)));
    match action {
        Action::Closer => study.sketch.window = Some(scaled(window, CLOSER, about(&study, window))),
        Action::Wider => study.sketch.window = Some(scaled(window, 1.0 / CLOSER, about(&study, window))),
        Action::Fit => study.sketch.window = None,
        Action::Centre => study.sketch.window = selected(&study).map(|place| scaled(window, 1.0, place)),
        Action::Drag => toggle(&mut study, Hold::Window),
        Action::Point => {
            toggle(&mut study, Hold::Point);
            if study.sketch.point.is_none() {
                study.sketch.point = Some(today(&study).unwrap_or_else(|| middle(window)));
            }
        }
        Action::NoPoint => {
            study.sketch.point = None;
            study.sketch.backwards = false;
            study.sketch.hold = None;
        }
        Action::Backwards => {
            study.sketch.backwards = !study.sketch.backwards;
            if study.sketch.point.is_none() {
                study.sketch.point = Some(today(&study).unwrap_or_else(|| middle(window)));
            }
        }
        Action::Species(axis) => turn(&mut study, axis),
        Action::Move(direction) => moved(&mut study, window, plot, direction),
        _ => {}
    }
    app.study = Some(study);
}

fn toggle(study: &mut Study, hold: Hold) {
    study.sketch.hold = if study.sketch.hold == Some(hold) { None } else { Some(hold) };
}

/// What the window grows or shrinks about: the point, the selected equilibrium if it is in sight, the middle.
fn about(study: &Study, window: Window) -> [f64; 2] {
    let in_sight = |place: &[f64; 2]| window.holds(*place);
    study.sketch.point.or_else(|| selected(study)).filter(in_sight).unwrap_or_else(|| middle(window))
}

fn middle(window: Window) -> [f64; 2] {
    [window.x, window.y].map(|[low, high]| f64::midpoint(low, high))
}

/// Where the selected equilibrium lies along the axes.
fn selected(study: &Study) -> Option<[f64; 2]> {
    let state = &study.solved()?.equilibria.list.get(study.chosen)?.state;
    Some(axes(study).map(|species| state.get(species).copied().unwrap_or(0.0)))
}

fn today(study: &Study) -> Option<[f64; 2]> {
    let now = study.model().today()?;
    Some(axes(study).map(|species| now.get(species).copied().unwrap_or(0.0)))
}

/// The window so many times as wide, with a place in the middle; within the search box.
fn scaled(window: Window, factor: f64, [x, y]: [f64; 2]) -> Window {
    let along = |[low, high]: [f64; 2], middle: f64| {
        let half = factor * (high - low) / 2.0;
        let low = (middle - half).max(0.0);
        [low, low + 2.0 * half]
    };
    Window { x: along(window.x, x), y: along(window.y, y) }
}

/// Another species along an axis; the other axis gives way.
fn turn(study: &mut Study, axis: Axis) {
    let count = study.model().species.len();
    if count < 3 {
        return;
    }
    let [x, y] = axes(study);
    let next = |species: usize, other: usize| {
        let next = (species + 1) % count;
        if next == other { (next + 1) % count } else { next }
    };
    study.sketch.axes = Some(match axis {
        Axis::Across => [next(x, y), y],
        Axis::Upwards => [x, next(y, x)],
    });
    study.sketch.window = None;
    study.sketch.point = None;
}

/// Moves the point by a cell, or the window by a share of itself.
fn moved(study: &mut Study, window: Window, plot: Plot, direction: Direction) {
    let [right, up] = match direction {
        Direction::Left => [-1.0, 0.0],
        Direction::Right => [1.0, 0.0],
        Direction::Up => [0.0, 1.0],
        Direction::Down => [0.0, -1.0],
    };
    let [width, height] = [window.x, window.y].map(|[low, high]| high - low);
    match (study.sketch.hold, study.sketch.point) {
        (Some(Hold::Point), Some([x, y])) => {
            let step = [width / (plot.columns - 1).max(1) as f64, height / (plot.rows - 1).max(1) as f64];
            study.sketch.point = Some([(x + right * step[0]).max(0.0), (y + up * step[1]).max(0.0)]);
        }
        (Some(Hold::Window), _) => {
            let [x, y] = middle(window);
            study.sketch.window = Some(scaled(window, 1.0, [x + SHARE * right * width, y + SHARE * up * height]));
        }
        _ => {}
    }
}
