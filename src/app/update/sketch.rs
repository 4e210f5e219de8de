//! What the user does with the sketch.

use crate::analysis::field::{Frame, Scale, Window, moved, zoomed};
use crate::app::action::{Action, Axis, Direction};
use crate::app::wants::{axes, fitting, sketch_size};
use crate::app::{App, Hold, Study};
use crate::report::sketch::{Plot, limit};

/// One step closer shows this share of either axis.
const CLOSER: f64 = 0.7;
/// The window moves by this share of itself.
const SHARE: f64 = 0.1;

pub(super) fn act(app: &mut App, action: Action) {
    let Some(mut study) = app.study.take() else { return };
    let plot = Plot::of(sketch_size(app, &study));
    let desk = Desk::new(&study, plot);
    match action {
        Action::Closer => desk.zoom(&mut study, CLOSER),
        Action::Wider => desk.zoom(&mut study, 1.0 / CLOSER),
        Action::Fit => study.sketch.window = None,
        Action::Centre => desk.centre(&mut study),
        Action::Drag => toggle(&mut study, Hold::Window),
        Action::Point => {
            toggle(&mut study, Hold::Point);
            desk.place_point(&mut study);
        }
        Action::NoPoint => {
            study.sketch.point = None;
            study.sketch.backwards = false;
            study.sketch.hold = None;
        }
        Action::Backwards => {
            study.sketch.backwards = !study.sketch.backwards;
            desk.place_point(&mut study);
        }
        Action::Species(axis) => turn(&mut study, axis),
        Action::Logarithmic(axis) => logarithmic(&mut study, axis),
        Action::Move(direction) => desk.shift(&mut study, direction),
        _ => {}
    }
    app.study = Some(study);
}

fn toggle(study: &mut Study, hold: Hold) {
    study.sketch.hold = if study.sketch.hold == Some(hold) { None } else { Some(hold) };
}

/// What the sketch shows just now.
struct Desk {
    frame: Frame,
    limit: Window,
}

impl Desk {
    fn new(study: &Study, plot: Plot) -> Self {
        let axes = axes(study);
        let window = study.sketch.window.unwrap_or_else(|| fitting(study, axes));
        let frame = Frame::scaled(window, study.sketch.scales, plot.columns, plot.rows);
        Self { frame, limit: limit(&study.world.prepared.bounds, axes) }
    }

    fn middle(&self) -> [f64; 2] {
        let [columns, rows] = [self.frame.columns, self.frame.rows].map(|count| (count - 1) as f64 / 2.0);
        [self.frame.x(columns), self.frame.y(rows)]
    }

    /// About the point, the selected equilibrium where it is in sight, else the middle.
    fn zoom(&self, study: &mut Study, factor: f64) {
        let in_sight = |place: &[f64; 2]| self.frame.window.holds(*place);
        let about = study.sketch.point.or_else(|| selected(study)).filter(in_sight).unwrap_or_else(|| self.middle());
        study.sketch.window = Some(zoomed(self.frame.window, self.frame.scales, self.limit, factor, about));
    }

    /// Moves the window so that the selected equilibrium is in the middle, as far as the search box lets it.
    fn centre(&self, study: &mut Study) {
        let Some([column, row]) = selected(study).map(|place| self.frame.place(place)) else { return };
        let [columns, rows] = [self.frame.columns, self.frame.rows].map(|count| (count - 1) as f64);
        let by = [column / columns - 0.5, row / rows - 0.5];
        // An absent species is nowhere on a logarithmic axis.
        if by.iter().all(|by| by.is_finite()) {
            study.sketch.window = Some(moved(self.frame.window, self.frame.scales, self.limit, by));
        }
    }

    fn place_point(&self, study: &mut Study) {
        if study.sketch.point.is_none() {
            let today = today(study).filter(|now| !self.frame.is_beyond_logarithms(*now));
            study.sketch.point = Some(today.unwrap_or_else(|| self.middle()));
        }
    }

    /// Moves the point by a cell, or the window by a share of itself.
    fn shift(&self, study: &mut Study, direction: Direction) {
        let by = match direction {
            Direction::Left => [-1.0, 0.0],
            Direction::Right => [1.0, 0.0],
            Direction::Up => [0.0, 1.0],
            Direction::Down => [0.0, -1.0],
        };
        match (study.sketch.hold, study.sketch.point) {
            (Some(Hold::Point), Some(point)) => {
                let [column, row] = self.frame.place(point);
                let next = [self.frame.x(column + by[0]), self.frame.y(row + by[1])];
                // A point beside the window comes back to its side.
                study.sketch.point = Some(next.map(|x| x.max(0.0)));
            }
            (Some(Hold::Window), _) => {
                let by = by.map(|by| SHARE * by);
                study.sketch.window = Some(moved(self.frame.window, self.frame.scales, self.limit, by));
            }
            _ => {}
        }
    }
}

/// Where the selected equilibrium lies along the axes.
fn selected(study: &Study) -> Option<[f64; 2]> {
    let state = &study.solved()?.equilibria.list.get(study.chosen)?.state;
    Some(along(study, state))
}

fn today(study: &Study) -> Option<[f64; 2]> {
    study.model().today().map(|now| along(study, &now))
}

fn along(study: &Study, state: &[f64]) -> [f64; 2] {
    let [x, y] = axes(study);
    let of = |species: usize| state.get(species).copied().unwrap_or(0.0);
    [of(x), if state.len() > 1 { of(y) } else { 0.0 }]
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

fn logarithmic(study: &mut Study, axis: Axis) {
    let place = usize::from(axis == Axis::Upwards);
    let scale = &mut study.sketch.scales[place];
    *scale = if *scale == Scale::Linear { Scale::Logarithmic } else { Scale::Linear };
    // What a window shows of one scale says little on the other.
    study.sketch.window = None;
}
