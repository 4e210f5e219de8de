//! The whole drawing in cells: the canvas between its axes, with round numbers, names and units.

use unicode_width::UnicodeWidthStr;

use super::canvas::{Canvas, draw};
use super::plot::{LABEL, LINES};
use super::ticks::{Tick, across, start, upwards};
use super::{Extras, LARGEST, Picture, Size, Style, View};
use crate::model::{Model, TimeKind};
use crate::report::grid::{Grid, Ink};
use crate::report::table::clean;

/// A picture with its axes, and over it what the user asked for, in just so many columns and rows.
///
/// The picture is to have been made for [`super::Plot::of`] the same size. What does not fit is left out, so that a size below the
/// smallest shows a part; one above the largest is cut to it.
pub fn drawing(view: &View<'_>, picture: &Picture, extras: &Extras<'_>, size: Size, style: Style) -> Grid {
    let size = Size { columns: size.columns.min(LARGEST.columns), rows: size.rows.min(LARGEST.rows) };
    lay(view, picture, &draw(view, picture, extras, style), size, style)
}

/// The column and row of a drawing's grid that show a point of the plane; `None` outside.
pub fn place_in_drawing(picture: &Picture, point: [f64; 2]) -> Option<[usize; 2]> {
    let frame = picture.frame();
    let point = if matches!(picture, Picture::Line(_)) { [point[0], 0.0] } else { point };
    frame.cell(point).map(|[column, row]| [LABEL + 1 + column, frame.rows - row])
}

/// The point of the plane in the middle of a cell of a drawing's grid; `None` on the axes and outside. Upwards of a single
/// species it is 0.
pub fn point_in_drawing(picture: &Picture, [column, row]: [usize; 2]) -> Option<[f64; 2]> {
    let frame = picture.frame();
    let (column, up) = (column.checked_sub(LABEL + 1)?, frame.rows.checked_sub(row)?);
    let is_inside = column < frame.columns && up < frame.rows;
    let y = if matches!(picture, Picture::Line(_)) { 0.0 } else { frame.y(up as f64) };
    is_inside.then(|| [frame.x(column as f64), y])
}

/// The size of the drawing of a canvas.
pub(super) fn size(canvas: &Canvas) -> Size {
    Size { columns: LABEL + 1 + canvas.columns, rows: canvas.rows + LINES }
}

/// Puts a canvas between its axes.
pub(super) fn lay(view: &View<'_>, picture: &Picture, canvas: &Canvas, size: Size, style: Style) -> Grid {
    let mut grid = Grid::new(size.columns, size.rows);
    let frame = picture.frame();
    for row in 0..canvas.rows {
        for (column, mark) in canvas.row(row).iter().enumerate() {
            grid.put(LABEL + 1 + column, canvas.rows - row, mark.glyph(style), mark.ink(view.slice));
        }
    }
    let ups = upwards(frame.window.y, frame.scales[1], canvas.rows, LABEL);
    side(&mut grid, canvas, &ups, style);
    let ticks = across(frame.window.x, frame.scales[0], canvas.columns);
    floor(&mut grid, canvas, &ticks, style);
    captions(&mut grid, view, canvas, style);
    grid
}

/// The vertical axis with its numbers.
fn side(grid: &mut Grid, canvas: &Canvas, ticks: &[Tick], style: Style) {
    let [side, with_tick] = if style == Style::Unicode { ['│', '┤'] } else { ['|', '+'] };
    for row in 0..canvas.rows {
        grid.put(LABEL, canvas.rows - row, side, Ink::Plain);
    }
    for tick in ticks {
        let row = canvas.rows - tick.place;
        grid.put(LABEL, row, with_tick, Ink::Plain);
        grid.write(LABEL - tick.label.len(), row, &tick.label, Ink::Plain);
    }
}

/// The horizontal axis, and the numbers below it; the last may have to move to the left.
fn floor(grid: &mut Grid, canvas: &Canvas, ticks: &[Tick], style: Style) {
    let [corner, level, with_tick] = if style == Style::Unicode { ['└', '─', '┬'] } else { ['+', '-', '+'] };
    let row = canvas.rows + 1;
    grid.put(LABEL, row, corner, Ink::Plain);
    (0..canvas.columns).for_each(|column| grid.put(LABEL + 1 + column, row, level, Ink::Plain));
    let width = LABEL + 1 + canvas.columns;
    let mut free = LABEL + 1;
    for tick in ticks {
        grid.put(LABEL + 1 + tick.place, row, with_tick, Ink::Plain);
        let from = (LABEL + 1 + start(tick)).min(width.saturating_sub(tick.label.len()));
        if from >= free {
            grid.write(from, row + 1, &tick.label, Ink::Plain);
            free = from + tick.label.len();
        }
    }
}

/// What the axes are: the vertical one above it, the horizontal one below its right end.
fn captions(grid: &mut Grid, view: &View<'_>, canvas: &Canvas, style: Style) {
    let width = (LABEL + 1 + canvas.columns).min(grid.columns);
    let above = fitted(&upward_caption(view), width, style);
    grid.label(0, 0, above, Ink::Plain);
    let below = fitted(&caption(view.model, view.slice.x), width, style);
    let row = canvas.rows + 3;
    if row < grid.rows {
        grid.label(width - below.width(), row, below, Ink::Plain);
    }
}

fn upward_caption(view: &View<'_>) -> String {
    match (view.slice.y, &view.model.time) {
        (Some(species), _) => caption(view.model, species),
        (None, TimeKind::Continuous) => "rate of change".to_owned(),
        (None, TimeKind::Discrete { .. }) => "change in one step".to_owned(),
    }
}

/// A species as an axis names it: symbol, name and unit.
fn caption(model: &Model, species: usize) -> String {
    let Some(species) = model.species.get(species) else { return String::new() };
    let name = if species.name == species.symbol { String::new() } else { format!(" {}", species.name) };
    let unit = species.unit.as_ref().map_or(String::new(), |unit| format!(", {}", unit.value));
    format!("{}{name}{unit}", species.symbol)
}

/// As much of a text as fits, harmless, and in ASCII where asked for.
pub(in crate::report) fn fitted(text: &str, width: usize, style: Style) -> String {
    let mut fitting = clean(text, style);
    while fitting.width() > width {
        fitting.pop();
    }
    fitting
}
