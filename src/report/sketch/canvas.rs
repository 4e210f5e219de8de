//! What stands in which cell: a pure function of the numbers and the style.
//!
//! What matters more is drawn over what matters less: the point and states, today's stocks, paths from the point, straight
//! paths, divides, zero growth, flow.

use super::signs::{Growth, Mark, flow, spacing};
use super::trace::Trace;
use super::{Extras, Picture, Style, View};
use crate::analysis::field::{Frame, Octant, Portrait, Profile, Sight, Straight, nearest};

/// A straight path is drawn over this share of the frame's smaller side to either side, in widths of a column.
const SHARE: f64 = 0.15;
/// Within these.
const REACH: [f64; 2] = [2.0, 14.0];

/// Cells, row by row from the lowest.
#[derive(Clone, Debug, PartialEq)]
pub struct Canvas {
    /// Cells side by side.
    pub columns: usize,
    /// Cells one above the other.
    pub rows: usize,
    cells: Vec<Mark>,
}

impl Canvas {
    fn new(frame: &Frame) -> Self {
        let (columns, rows) = (frame.columns, frame.rows);
        Self { columns, rows, cells: vec![Mark::Blank; columns * rows] }
    }

    /// What is in a cell; blank outside.
    pub fn at(&self, column: usize, row: usize) -> Mark {
        let is_inside = column < self.columns && row < self.rows;
        if is_inside { self.cells[row * self.columns + column] } else { Mark::Blank }
    }

    /// A row from left to right, row 0 lowest.
    pub fn row(&self, row: usize) -> &[Mark] {
        self.cells.get(row * self.columns..(row + 1) * self.columns).unwrap_or_default()
    }

    /// Everything drawn.
    pub fn marks(&self) -> impl Iterator<Item = Mark> + '_ {
        self.cells.iter().copied()
    }

    fn put(&mut self, [column, row]: [usize; 2], mark: Mark) {
        if column < self.columns && row < self.rows {
            self.cells[row * self.columns + column] = mark;
        }
    }
}

/// Draws a picture, and over it what the user asked for.
pub fn draw(view: &View<'_>, picture: &Picture, extras: &Extras<'_>, style: Style) -> Canvas {
    let frame = picture.frame();
    let mut canvas = Canvas::new(frame);
    match picture {
        Picture::Plane(portrait) => plane(&mut canvas, view, portrait),
        Picture::Line(profile) => line(&mut canvas, profile),
    }
    paths(&mut canvas, view, extras, frame);
    states(&mut canvas, view, extras.chosen, frame);
    if let Some(cell) = extras.point.and_then(|point| frame.cell(view.on_axes(point))) {
        canvas.put(cell, Mark::Point);
    }
    // Last, and only where there is room: a sign that something else cuts in two would read as another.
    match picture {
        Picture::Plane(portrait) => flow_in_plane(&mut canvas, portrait, style, extras.most_arrows),
        Picture::Line(profile) => flow_on_line(&mut canvas, profile, style),
    }
    canvas
}

fn plane(canvas: &mut Canvas, view: &View<'_>, portrait: &Portrait) {
    let frame = &portrait.frame;
    zero_growth(canvas, portrait);
    for points in &portrait.divides {
        for cell in course(points.iter().filter_map(|&point| frame.cell(point))) {
            canvas.put(cell, Mark::Divide);
        }
    }
    for (index, line) in &portrait.straight {
        let Some(equilibrium) = view.solved.equilibria.list.get(*index) else { continue };
        straight(canvas, frame, view.slice.project(&equilibrium.state), line);
    }
}

fn flow_in_plane(canvas: &mut Canvas, portrait: &Portrait, style: Style, most: Option<usize>) {
    let frame = &portrait.frame;
    let sight = Sight::new(frame);
    let steps = lattice(frame, style, most);
    directions(canvas, style, (0..frame.rows, steps), |column, row| {
        let cell = row * frame.columns + column;
        Octant::of(sight.at(column, row, [portrait.motion.x[cell], portrait.motion.y[cell]]))
    });
}

/// Columns and rows from one direction to the next: as usual, or the least above it for which the lattice has no more places
/// than are wanted, as square as it was.
fn lattice(frame: &Frame, style: Style, most: Option<usize>) -> [usize; 2] {
    let usual = spacing(style);
    let steps = |across: usize| [across, across / usual];
    let places = |[across, up]: [usize; 2]| frame.columns.div_ceil(across) * frame.rows.div_ceil(up);
    let widest = usual * frame.columns.max(frame.rows).max(1);
    let is_few = |&across: &usize| most.is_none_or(|most| places(steps(across)) <= most);
    steps((usual..widest).find(is_few).unwrap_or(widest))
}

fn zero_growth(canvas: &mut Canvas, portrait: &Portrait) {
    let [across, upwards] = &portrait.zero_growth;
    for (cell, pair) in canvas.cells.iter_mut().zip(across.iter().zip(upwards)) {
        *cell = match pair {
            (true, true) => Mark::Growth(Growth::Both),
            (true, false) => Mark::Growth(Growth::Across),
            (false, true) => Mark::Growth(Growth::Upwards),
            (false, false) => Mark::Blank,
        };
    }
}

/// Signs of directions wherever they fit between what is drawn already; those of two characters keep away from it.
fn directions(
    canvas: &mut Canvas,
    style: Style,
    (rows, [across, up]): (std::ops::Range<usize>, [usize; 2]),
    direction: impl Fn(usize, usize) -> Option<Octant>,
) {
    let gap = usize::from(style == Style::Ascii);
    for row in rows.step_by(up) {
        for column in (0..canvas.columns).step_by(across) {
            let Some(octant) = direction(column, row) else { continue };
            let length = flow(octant, style).chars().count();
            let around = column.saturating_sub(gap)..column + length + gap;
            let is_free = around.into_iter().all(|c| matches!(canvas.at(c, row), Mark::Blank | Mark::Level));
            if is_free && column + length <= canvas.columns {
                (0..length).for_each(|part| canvas.put([column + part, row], Mark::Flow(octant, part)));
            }
        }
    }
}

/// Both halves of a straight path, each with the tip of its arrow at the end that the state moves to.
fn straight(canvas: &mut Canvas, frame: &Frame, middle: [f64; 2], line: &Straight) {
    let seen = frame.seen(middle, line.along);
    let smaller = frame.columns.min(2 * frame.rows) as f64;
    let reach = (SHARE * smaller).clamp(REACH[0], REACH[1]);
    for sign in [1.0, -1.0] {
        let Some(octant) = Octant::of(seen.map(|part| sign * part)) else { continue };
        let cells = half(frame, middle, line.along.map(|part| sign * part), reach);
        let tip = if line.approaches { 0 } else { cells.len().saturating_sub(1) };
        let towards = if line.approaches { octant.opposite() } else { octant };
        for (place, cell) in cells.into_iter().enumerate() {
            canvas.put(cell, Mark::Straight(towards, place == tip));
        }
    }
}

/// The cells along one half of a straight path, from the equilibrium outwards, without its own. On logarithmic axes it is
/// a curve.
fn half(frame: &Frame, middle: [f64; 2], along: [f64; 2], reach: f64) -> Vec<[usize; 2]> {
    let at = |far: f64| [0, 1].map(|i: usize| middle[i] + far * along[i]);
    let mut far = 0.0;
    let mut points = vec![middle];
    for _ in 0..nearest(2.0 * reach, frame.columns) {
        let [x, y] = frame.seen(at(far), along);
        far += 0.5 / x.hypot(y);
        points.push(at(far));
    }
    let mut cells = course(points.into_iter().filter_map(|point| frame.cell(point)));
    cells.retain(|&cell| Some(cell) != frame.cell(middle));
    cells
}

/// The cells that a line runs through, one to a step: where it goes around a corner by way of a cell between two that
/// touch at their corners, that cell is left out.
pub(super) fn course(cells: impl Iterator<Item = [usize; 2]>) -> Vec<[usize; 2]> {
    let touch = |a: [usize; 2], b: [usize; 2]| a[0].abs_diff(b[0]) <= 1 && a[1].abs_diff(b[1]) <= 1;
    let mut course: Vec<[usize; 2]> = Vec::new();
    for cell in cells {
        if course.last() == Some(&cell) {
            continue;
        }
        if let [.., before, _] = course[..]
            && touch(before, cell)
        {
            course.pop();
        }
        course.push(cell);
    }
    course
}

/// The rate of a single species, and the level of 0.
fn line(canvas: &mut Canvas, profile: &Profile) {
    let frame = &profile.frame;
    let row_of = |rate: f64| frame.cell([frame.window.x[0], rate]).map(|[_, row]| row);
    let level = row_of(0.0);
    let mut before: Option<usize> = None;
    for (column, rate) in profile.rates.iter().enumerate() {
        let row = rate.and_then(row_of);
        if let Some(row) = row {
            // A steep rate fills the rows between, half of them in each column.
            let from = before.map_or(row, |before| (before + row).div_ceil(2));
            (from.min(row)..=from.max(row)).for_each(|row| canvas.put([column, row], Mark::Rate));
            if let Some(before) = before.filter(|&before| before.abs_diff(row) > 1) {
                let to = usize::midpoint(before, row);
                (before.min(to)..=before.max(to)).for_each(|row| canvas.put([column - 1, row], Mark::Rate));
            }
        }
        before = row;
    }
    let Some(level) = level else { return };
    for column in 0..frame.columns {
        canvas.put([column, level], Mark::Level);
    }
}

fn flow_on_line(canvas: &mut Canvas, profile: &Profile, style: Style) {
    let frame = &profile.frame;
    let Some([_, level]) = frame.cell([frame.window.x[0], 0.0]) else { return };
    directions(canvas, style, (level..level + 1, [spacing(style), 1]), |column, _| {
        profile.rates.get(column).copied().flatten().and_then(|rate| Octant::of([rate, 0.0]))
    });
}

/// The paths to and from the user's point, with the moments on them.
fn paths(canvas: &mut Canvas, view: &View<'_>, extras: &Extras<'_>, frame: &Frame) {
    for (path, mark) in [(extras.backwards, Mark::Backwards), (extras.forwards, Mark::Forwards)] {
        let Some(path) = path else { continue };
        let trace = Trace::new(view, frame, path);
        trace.cells.iter().for_each(|&cell| canvas.put(cell, mark));
        // Of two paths only the one forwards has moments: digits on both would not say which they belong to.
        if mark == Mark::Backwards && extras.forwards.is_some() {
            continue;
        }
        for (number, cell) in trace.moments {
            if !matches!(canvas.at(cell[0], cell[1]), Mark::Moment(_)) {
                canvas.put(cell, Mark::Moment(number));
            }
        }
    }
}

/// Today's stocks and the equilibria, the stable ones last and the selected one last of all, with their names where there
/// is room.
fn states(canvas: &mut Canvas, view: &View<'_>, chosen: Option<usize>, frame: &Frame) {
    if let Some(cell) = view.now().and_then(|now| frame.cell(now)) {
        canvas.put(cell, Mark::Now);
    }
    let mut shown: Vec<(usize, [usize; 2])> =
        view.in_slice().filter_map(|index| Some((index, frame.cell(view.place(index)?)?))).collect();
    shown.sort_by_key(|&(index, _)| (chosen == Some(index), view.is_stable(index)));
    for &(index, cell) in &shown {
        let look = view.look(index);
        canvas.put(cell, if chosen == Some(index) { Mark::Chosen(look) } else { Mark::State(look) });
    }
    // Names in the other order, so that the state on top of a cell has the first place.
    let mut named: Vec<[usize; 2]> = Vec::new();
    for &(index, cell) in shown.iter().rev() {
        if !named.contains(&cell) {
            named.push(cell);
            let id = view.ids.get(index).map_or("", String::as_str);
            let letters: Vec<Mark> = if chosen == Some(index) {
                format!("[{id}]").chars().map(Mark::ChosenLetter).collect()
            } else {
                id.chars().map(Mark::Letter).collect()
            };
            name(canvas, cell, &letters);
        }
    }
}

/// Writes a name to the right of a cell, else to the left, else above or below; nowhere over a state or another name.
fn name(canvas: &mut Canvas, [column, row]: [usize; 2], letters: &[Mark]) {
    let length = letters.len();
    let beside = [Some(column + 1), column.checked_sub(length)].map(|start| (start, Some(row)));
    // Above and below it may have to move to the left to stay inside.
    let inside = column.min(canvas.columns.saturating_sub(length));
    let over = [row.checked_add(1), row.checked_sub(1)].map(|row| (Some(inside), row));
    let places = beside.into_iter().chain(over).filter_map(|(start, row)| Some([start?, row?]));
    let is_free = |[start, row]: [usize; 2]| {
        let is_taken = |c| {
            let mark = canvas.at(c, row);
            matches!(mark, Mark::State(_) | Mark::Chosen(_) | Mark::Now | Mark::Letter(_) | Mark::ChosenLetter(_))
        };
        start + length <= canvas.columns && row < canvas.rows && !(start..start + length).any(is_taken)
    };
    let is_quiet = |&[start, row]: &[usize; 2]| {
        let loud = |c| {
            let mark = canvas.at(c, row);
            matches!(mark, Mark::Straight(..) | Mark::Divide | Mark::Growth(_) | Mark::Rate | Mark::Forwards)
        };
        !(start..start + length).any(loud)
    };
    let places: Vec<[usize; 2]> = places.filter(|&place| is_free(place)).collect();
    let Some(&[start, row]) = places.iter().find(|place| is_quiet(place)).or(places.first()) else { return };
    for (place, &letter) in letters.iter().enumerate() {
        canvas.put([start + place, row], letter);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::field::{LINEAR, Window};

    /// With as many arrows as there are places nothing changes; with fewer the lattice is the first that is wide enough.
    #[test]
    fn a_larger_sketch_has_a_wider_lattice() {
        for (columns, rows, style, most, expected) in [
            (39, 17, Style::Unicode, None, [2, 1]),
            (39, 17, Style::Unicode, Some(340), [2, 1]),
            (39, 17, Style::Unicode, Some(339), [3, 1]),
            (125, 41, Style::Unicode, None, [2, 1]),
            (125, 41, Style::Unicode, Some(525), [5, 2]),
            (125, 41, Style::Unicode, Some(500), [6, 3]),
            (125, 41, Style::Ascii, Some(500), [8, 2]),
            (2, 1, Style::Unicode, Some(0), [4, 2]),
        ] {
            let frame = Frame::scaled(Window { x: [0.0, 1.0], y: [0.0, 1.0] }, LINEAR, columns, rows);
            assert_eq!(lattice(&frame, style, most), expected, "{columns}x{rows} {style:?} {most:?}");
        }
    }
}
