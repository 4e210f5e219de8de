//! The whole drawing in cells: the canvas between its axes, with round numbers, names and units.

use unicode_width::UnicodeWidthStr;

use super::canvas::Canvas;
use super::{View, control_caption};
use crate::analysis::field::Scale;
use crate::report::grid::{Grid, Ink};
use crate::report::sketch::{LARGEST, Size, Style, across, fitted, start, upwards};
use crate::report::table::clean;

/// The smallest drawing in which anything can be seen.
pub const SMALLEST: Size = Size { columns: 16, rows: 7 };

/// Characters of the numbers along the vertical axis.
const LABEL: usize = 7;
/// The caption above, and below the axis, its numbers and its caption.
const LINES: usize = 4;

/// Columns and rows of cells in a drawing of a size; `None` where nothing could be seen.
pub(super) fn cells(size: Size) -> Option<[usize; 2]> {
    let (columns, rows) = (size.columns.min(LARGEST.columns), size.rows.min(LARGEST.rows));
    let has_room = columns >= SMALLEST.columns && rows >= SMALLEST.rows;
    has_room.then(|| [columns - LABEL - 1, rows - LINES])
}

/// A response in just so many columns and rows; blank where it is smaller than [`SMALLEST`], at most [`LARGEST`].
pub fn drawing(view: &View<'_>, size: Size, style: Style) -> Grid {
    let (columns, rows) = (size.columns.min(LARGEST.columns), size.rows.min(LARGEST.rows));
    let mut grid = Grid::new(columns, rows);
    let Some([columns, rows]) = cells(size) else { return grid };
    let canvas = Canvas::new(view, columns, rows);
    for row in 0..rows {
        for column in 0..columns {
            let mark = canvas.at(column, row);
            grid.put(LABEL + 1 + column, rows - row, mark.glyph(style), mark.ink());
        }
    }
    side(&mut grid, &canvas, style);
    floor(&mut grid, &canvas, style);
    let above = cut_to(&view.quantity.caption(view.model, view.response), grid.columns, style);
    grid.label(0, 0, above, Ink::Plain);
    let below = cut_to(&control_caption(view.model, view.response), grid.columns, style);
    grid.label(grid.columns - below.width(), grid.rows - 1, below, Ink::Plain);
    grid
}

/// The vertical axis with its numbers.
fn side(grid: &mut Grid, canvas: &Canvas, style: Style) {
    let [side, with_tick] = if style == Style::Unicode { ['│', '┤'] } else { ['|', '+'] };
    let rows = canvas.frame.rows;
    (0..rows).for_each(|row| grid.put(LABEL, rows - row, side, Ink::Plain));
    for tick in upwards(canvas.frame.window.y, Scale::Linear, rows, LABEL) {
        let row = rows - tick.place;
        grid.put(LABEL, row, with_tick, Ink::Plain);
        grid.write(LABEL - tick.label.len(), row, &tick.label, Ink::Plain);
    }
}

/// The horizontal axis, and the numbers below it; the last may have to move to the left.
fn floor(grid: &mut Grid, canvas: &Canvas, style: Style) {
    let [corner, level, with_tick] = if style == Style::Unicode { ['└', '─', '┬'] } else { ['+', '-', '+'] };
    let (columns, row) = (canvas.frame.columns, canvas.frame.rows + 1);
    grid.put(LABEL, row, corner, Ink::Plain);
    (0..columns).for_each(|column| grid.put(LABEL + 1 + column, row, level, Ink::Plain));
    let mut free = 0;
    for tick in across(canvas.frame.window.x, Scale::Linear, columns) {
        grid.put(LABEL + 1 + tick.place, row, with_tick, Ink::Plain);
        let from = (LABEL + 1 + start(&tick)).min(grid.columns.saturating_sub(tick.label.len()));
        if from >= free {
            grid.write(from, row + 1, &tick.label, Ink::Plain);
            free = from + tick.label.len() + 1;
        }
    }
}

/// As much of a text as fits, with a mark where it is cut.
fn cut_to(text: &str, width: usize, style: Style) -> String {
    if clean(text, style).width() <= width {
        return clean(text, style);
    }
    let mark = if style == Style::Unicode { "…" } else { "..." };
    fitted(text, width.saturating_sub(mark.width()), style) + mark
}
