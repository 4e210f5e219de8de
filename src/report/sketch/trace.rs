//! A path as it is drawn: the cells that it runs through, and where it is at round times.

use super::View;
use super::canvas::course;
use crate::analysis::field::Frame;
use crate::analysis::paths::Path;
use crate::model::TimeKind;

/// Points of a path are no further apart than this, in columns.
const SPACING: f64 = 0.5;
/// Halvings of a step until they are.
const HALVINGS: u32 = 8;
/// Points of a path that are looked at.
const MOST_POINTS: usize = 100_000;
/// Within so many columns of its end a path is taken to have arrived, as far as an eye can tell.
const ARRIVED: f64 = 1.5;
/// Moments on a path: one digit each.
const MOMENTS: u8 = 9;

/// What is drawn of a path.
#[derive(Clone, Debug, PartialEq)]
pub struct Trace {
    /// Cells, each once in a row, in the order of time.
    pub cells: Vec<[usize; 2]>,
    /// Numbers 1 to 9, and where the path is after so many times [`Trace::every`].
    pub moments: Vec<(u8, [usize; 2])>,
    /// Time units from one moment to the next: 1, 2 or 5 times a power of ten, for a map so many steps. 0 without moments.
    pub every: f64,
}

impl Trace {
    /// A path on the axes of a view, in the cells of a frame. States of species that are held go their own way: what is
    /// drawn is the path's shadow on the plane.
    ///
    /// The path of a map is its states, with nothing between them.
    pub fn new(view: &View<'_>, frame: &Frame, path: &Path) -> Self {
        let mut walk = Walk { view, frame, path, is_map: view.step().is_some(), cells: Vec::new(), left: MOST_POINTS };
        walk.all();
        let cells = if walk.is_map { walk.cells } else { course(walk.cells.into_iter()) };
        let every = every(view, frame, path);
        let moment = |number: u8| {
            let time = f64::from(number) * every;
            let is_reached = every > 0.0 && time <= path.until().abs() * (1.0 + 1e-9);
            let state = path.at(time.copysign(path.until()) * (1.0 + 1e-12), view.step().is_some());
            is_reached.then(|| frame.cell(view.slice.project(&state))).flatten().map(|cell| (number, cell))
        };
        Self { cells, moments: (1..=MOMENTS).filter_map(moment).collect(), every }
    }
}

/// Time from one moment to the next: as many as there are digits until the path is near its end for good.
fn every(view: &View<'_>, frame: &Frame, path: &Path) -> f64 {
    let place = |state: &Vec<f64>| view.slice.project(state);
    let Some(end) = path.states.last().map(place) else { return 0.0 };
    // A path that leaves for 0 of a logarithmic axis never arrives there: how far it is from there is no number.
    let is_away = |state: &Vec<f64>| {
        let apart = frame.apart(place(state), end);
        apart.is_nan() || apart > ARRIVED
    };
    let Some(last) = path.states.iter().rposition(is_away) else { return 0.0 };
    let Some(&arrived) = path.times.get(last + 1).or(path.times.last()) else { return 0.0 };
    let unit = view.step().unwrap_or(1.0);
    let least = arrived.abs() / (unit * f64::from(MOMENTS));
    let steps = if view.step().is_some() { least.ceil() } else { least };
    unit * round_above(steps * (1.0 - 1e-9))
}

/// The smallest number of 1, 2 or 5 times a power of ten that is not below `x`; 0 where that is none.
pub(in crate::report) fn round_above(x: f64) -> f64 {
    if !(x > 0.0 && x.is_finite()) {
        return 0.0;
    }
    let decade = 10f64.powf(x.log10().floor());
    let round = [1.0, 2.0, 5.0, 10.0].into_iter().map(|digit| digit * decade).find(|&round| round >= x);
    round.unwrap_or(0.0)
}

struct Walk<'w, 'v> {
    view: &'w View<'v>,
    frame: &'w Frame,
    path: &'w Path,
    is_map: bool,
    cells: Vec<[usize; 2]>,
    left: usize,
}

impl Walk<'_, '_> {
    fn all(&mut self) {
        let mut before: Option<(f64, [f64; 2])> = None;
        for (&time, state) in self.path.times.iter().zip(&self.path.states) {
            let here = (time, self.view.slice.project(state));
            match before {
                Some(before) if !self.is_map => self.between(before, here, 0),
                _ => self.take(here.1),
            }
            before = Some(here);
        }
    }

    fn between(&mut self, from: (f64, [f64; 2]), to: (f64, [f64; 2]), depth: u32) {
        if self.left == 0 || !self.frame.window.may_touch(from.1, to.1) {
            return;
        }
        if depth == HALVINGS || self.frame.apart(from.1, to.1) <= SPACING {
            self.take(to.1);
            return;
        }
        let time = f64::midpoint(from.0, to.0);
        let middle = (time, self.view.slice.project(&self.path.at(time, false)));
        self.between(from, middle, depth + 1);
        self.between(middle, to, depth + 1);
    }

    fn take(&mut self, point: [f64; 2]) {
        self.left = self.left.saturating_sub(1);
        let Some(cell) = self.frame.cell(point) else { return };
        if self.cells.last() != Some(&cell) {
            self.cells.push(cell);
        }
    }
}

impl View<'_> {
    /// Time units of a step; `None` where time is continuous.
    pub(super) fn step(&self) -> Option<f64> {
        match self.model.time {
            TimeKind::Continuous => None,
            TimeKind::Discrete { step } => Some(step),
        }
    }

    /// A point of the plane as the frame has it: of a single species at the level of 0.
    pub(super) fn on_axes(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        [x, if self.slice.y.is_some() { y } else { 0.0 }]
    }
}

#[cfg(test)]
mod tests {
    use super::round_above;

    #[test]
    fn steps_are_round_and_not_below() {
        for (x, round) in [(0.3, 0.5), (1.0, 1.0), (1.01, 2.0), (2.2, 5.0), (7.0, 10.0), (40.0, 50.0), (0.0, 0.0)] {
            assert!((round_above(x) - round).abs() < 1e-12, "{x}: {}", round_above(x));
        }
        assert_eq!((round_above(f64::NAN), round_above(f64::INFINITY)), (0.0, 0.0));
    }
}
