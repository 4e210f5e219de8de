//! What stands in which cell: a pure function of the response.
//!
//! What matters more is drawn over what matters less: thresholds, states at the rule, branches, rules.

use super::cut::{cut, whose};
use super::{Quantity, View, marked};
use crate::analysis::field::{Frame, Window, nearest, rounded};
use crate::analysis::response::Point;
use crate::report::kinds::{self, Look, STROKES, Stroke};

/// What is drawn in a cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Mark {
    /// Nothing.
    Blank,
    /// The rule at the present value.
    Present,
    /// The rule at the value that the user has moved to.
    Rule,
    /// A branch.
    Branch(Stroke),
    /// A state at the rule, and whether it is selected.
    State(Look, bool),
    /// A threshold, by its place among those that are marked.
    Threshold(usize),
}

/// Cells, row by row from the lowest.
pub(super) struct Canvas {
    pub(super) frame: Frame,
    cells: Vec<Mark>,
    /// Thresholds for which there was no free cell, and those that lie outside.
    pub(super) left_out: Vec<usize>,
}

impl Canvas {
    /// Draws a view in so many cells.
    pub(super) fn new(view: &View<'_>, columns: usize, rows: usize) -> Self {
        let frame = Frame::new(window(view), columns, rows);
        let mut canvas = Self { cells: vec![Mark::Blank; frame.columns * frame.rows], frame, left_out: Vec::new() };
        canvas.rule(view.response.control.present, Mark::Present);
        canvas.branches(view);
        if let Some(at) = view.rule {
            canvas.rule(at, Mark::Rule);
            canvas.states(view, at);
        }
        canvas.thresholds(view);
        canvas
    }

    /// What is in a cell; blank outside.
    pub(super) fn at(&self, column: usize, row: usize) -> Mark {
        let is_inside = column < self.frame.columns && row < self.frame.rows;
        if is_inside { self.cells[row * self.frame.columns + column] } else { Mark::Blank }
    }

    pub(super) fn marks(&self) -> impl Iterator<Item = Mark> + '_ {
        self.cells.iter().copied()
    }

    fn put(&mut self, [column, row]: [usize; 2], mark: Mark) {
        if column < self.frame.columns && row < self.frame.rows {
            self.cells[row * self.frame.columns + column] = mark;
        }
    }

    /// A vertical line behind all branches.
    fn rule(&mut self, at: f64, mark: Mark) {
        let Some([column, _]) = self.frame.cell([at, self.frame.window.y[0]]) else { return };
        for row in 0..self.frame.rows {
            if matches!(self.at(column, row), Mark::Blank | Mark::Present) {
                self.put([column, row], mark);
            }
        }
    }

    /// Every stroke by itself, that of the lowest rank first.
    fn branches(&mut self, view: &View<'_>) {
        for stroke in STROKES.iter().rev() {
            for branch in &view.response.branches {
                for pair in branch.points.windows(2).filter(|pair| is_drawn(&pair[0], &pair[1])) {
                    self.stretch(view.quantity, [&pair[0], &pair[1]], *stroke);
                }
                if let [only] = &branch.points[..]
                    && only.feasible
                {
                    self.stretch(view.quantity, [only, only], *stroke);
                }
            }
        }
    }

    /// What of the way between two points has a stroke: samples half a cell apart, so that cells touch.
    fn stretch(&mut self, quantity: Quantity, [from, to]: [&Point; 2], stroke: Stroke) {
        let (Some(a), Some(b)) = (quantity.at(from), quantity.at(to)) else { return };
        let [start, end] = [[from.at, a], [to.at, b]].map(|point| self.frame.place(point));
        let length = (end[0] - start[0]).abs().max((end[1] - start[1]).abs());
        let count = nearest((2.0 * length).ceil(), 4 * (self.frame.columns + self.frame.rows)).max(1);
        for k in 0..=count {
            let share = k as f64 / count as f64;
            if stroke_of(whose(from, to, share)) == stroke {
                let point = [from.at + (to.at - from.at) * share, a + (b - a) * share];
                if let Some(cell) = self.frame.cell(point) {
                    self.put(cell, Mark::Branch(stroke));
                }
            }
        }
    }

    /// The states at the rule, the selected one last.
    fn states(&mut self, view: &View<'_>, at: f64) {
        let mut met = cut(view.response, at);
        met.sort_by_key(|one| (Some(one.branch) == view.chosen, one.stable));
        for one in met {
            let Some(y) = view.quantity.of(&one.state, &one.takings) else { continue };
            let look = one.kind.map_or(kinds::UNKNOWN, kinds::of);
            if let Some(cell) = self.frame.cell([at, y]) {
                self.put(cell, Mark::State(look, Some(one.branch) == view.chosen));
            }
        }
    }

    /// Each threshold in its cell, or where that has another one or a state in a cell beside it.
    fn thresholds(&mut self, view: &View<'_>) {
        for (rank, place) in marked(view.response).into_iter().enumerate() {
            let cell = threshold_place(view, place).and_then(|point| self.frame.cell(point));
            match cell.and_then(|cell| self.free(cell)) {
                Some(cell) => self.put(cell, Mark::Threshold(rank)),
                None => self.left_out.push(rank),
            }
        }
    }

    fn free(&self, [column, row]: [usize; 2]) -> Option<[usize; 2]> {
        const BESIDE: [[isize; 2]; 9] = [[0, 0], [0, 1], [0, -1], [1, 0], [-1, 0], [1, 1], [-1, 1], [1, -1], [-1, -1]];
        let moved = |[x, y]: [isize; 2]| Some([column.checked_add_signed(x)?, row.checked_add_signed(y)?]);
        let is_inside = |&[x, y]: &[usize; 2]| x < self.frame.columns && y < self.frame.rows;
        let is_free = |&[x, y]: &[usize; 2]| !matches!(self.at(x, y), Mark::Threshold(_) | Mark::State(..));
        BESIDE.into_iter().filter_map(moved).filter(is_inside).find(is_free)
    }
}

/// Whether the way between two points is drawn: both feasible. At a threshold rounding may say otherwise, so there the other
/// point decides.
pub(super) fn is_drawn(from: &Point, to: &Point) -> bool {
    match (from.threshold, to.threshold) {
        (Some(_), None) => to.feasible,
        (None, Some(_)) => from.feasible,
        (Some(_), Some(_)) => from.feasible || to.feasible,
        (None, None) => from.feasible && to.feasible,
    }
}

fn stroke_of(point: &Point) -> Stroke {
    point.kind.map_or(kinds::UNKNOWN, kinds::of).stroke
}

/// Where a threshold lies; of what harvests give, as the point of a branch has it.
fn threshold_place(view: &View<'_>, place: usize) -> Option<[f64; 2]> {
    let threshold = view.response.thresholds.get(place)?;
    let points = || view.response.branches.iter().flat_map(|branch| &branch.points);
    let y = match view.quantity {
        Quantity::Abundance(species) => threshold.state.get(species).copied(),
        Quantity::Taking(_) => {
            points().filter(|point| point.threshold == Some(place)).find_map(|point| view.quantity.at(point))
        }
    };
    Some([threshold.at, y?])
}

/// How far above the highest value the drawing reaches, as a share of the way from the lowest.
const ABOVE: f64 = 0.02;

/// The whole range across; upwards from 0, or from below the lowest value, to a little above the highest.
fn window(view: &View<'_>) -> Window {
    let control = &view.response.control;
    let points = view.response.branches.iter().flat_map(|branch| &branch.points).filter(|point| point.feasible);
    let values = points.filter_map(|point| view.quantity.at(point));
    let (low, high) = values.fold((0.0, 0.0), |(low, high): (f64, f64), x| (low.min(x), high.max(x)));
    let size = (high - low) * (1.0 + ABOVE);
    let [low, high] = [-rounded(-low), low + size];
    let high = if low < 0.0 { high } else { rounded(high) };
    let y = if high > low && (high - low).is_finite() { [low, high] } else { [0.0, 1.0] };
    Window { x: [control.from, control.to], y }
}
