//! The regions of a chart in characters: a letter each, between axes; points by their signs, the present by a plus.

use unicode_width::UnicodeWidthStr;

use super::One;
use crate::analysis::field::Scale;
use crate::model::{Model, ParameterId};
use crate::report::grid::{Grid, Ink};
use crate::report::response::plot::mark;
use crate::report::response::words::{name, unit};
use crate::report::sketch::{Style, across, start, upwards};
use crate::report::table::Page;

/// Rows of cells.
const ROWS: usize = 24;
/// Columns of cells at most.
const COLUMNS: usize = 90;
/// Characters of the numbers along the vertical axis.
const LABEL: usize = 7;

/// Letters of regions in their order; no one is the glyph of a kind.
const LETTERS: &str = "abcdefghijklmnpqrstuvwxyz";
/// The sign of all further ones.
const FURTHER: char = '#';
/// Where the region is not known.
const UNKNOWN: char = '?';

/// The letter of a region, by its place in the list.
pub(super) fn letter(place: usize) -> char {
    LETTERS.chars().nth(place).unwrap_or(FURTHER)
}

/// Lines of the drawing, harmless.
pub(super) fn drawing(one: &One<'_>, page: Page) -> Vec<String> {
    let [x, y] = one.chart.controls;
    let columns = page.width.saturating_sub(LABEL + 1).clamp(1, COLUMNS);
    let mut grid = Grid::new(LABEL + 1 + columns, ROWS + 4);
    for row in 0..ROWS {
        for column in 0..columns {
            grid.put(LABEL + 1 + column, ROWS - row, region(one, [column, row], [columns, ROWS]), Ink::Plain);
        }
    }
    let cell = |at: [f64; 2]| {
        let share = [(at[0] - x.from) / (x.to - x.from), (at[1] - y.from) / (y.to - y.from)];
        let is_inside = share.iter().all(|share| (0.0..=1.0).contains(share));
        is_inside.then(|| [place(share[0], columns), place(share[1], ROWS)])
    };
    let mut put = |at: [f64; 2], sign: char, ink: Ink| {
        if let Some([column, row]) = cell(at) {
            grid.put(LABEL + 1 + column, ROWS - row, sign, ink);
        }
    };
    put([x.present, y.present], '+', Ink::Now);
    one.chart.points.iter().enumerate().for_each(|(k, point)| put(point.at, mark(k), Ink::Strong));
    axes(&mut grid, [[x.from, x.to], [y.from, y.to]], columns, page.style);
    let caption = |id| page.clean(&caption(one.table.model, id));
    grid.label(0, 0, caption(y.parameter), Ink::Plain);
    let below = caption(x.parameter);
    grid.label(grid.columns.saturating_sub(below.width()), grid.rows - 1, below, Ink::Plain);
    let mut lines = grid.lines(page.color);
    let more = if one.chart.points.is_empty() { "" } else { "  1, 2, ... points" };
    lines.push(format!("  a, b, ... regions  + present{more}"));
    lines
}

fn caption(model: &Model, id: ParameterId) -> String {
    match unit(model, id) {
        "" => name(model, id).to_owned(),
        unit => format!("{}, {unit}", name(model, id)),
    }
}

/// The cell, of so many, in which a share of the way lies.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a share between 0 and 1, of a few cells")]
fn place(share: f64, cells: usize) -> usize {
    ((share * cells as f64) as usize).min(cells - 1)
}

/// The sign of the region that the middle of a cell of the drawing is in.
fn region(one: &One<'_>, cell: [usize; 2], of: [usize; 2]) -> char {
    let middle = |axis: usize| (cell[axis] as f64 + 0.5) / of[axis] as f64;
    let [columns, rows] = one.chart.grid;
    if columns == 0 || rows == 0 {
        return UNKNOWN;
    }
    let at = place(middle(1), rows) * columns + place(middle(0), columns);
    one.chart.cells.get(at).copied().flatten().map_or(UNKNOWN, letter)
}

fn axes(grid: &mut Grid, [x, y]: [[f64; 2]; 2], columns: usize, style: Style) {
    let [side, on_side, corner, level, on_level] =
        if style == Style::Unicode { ['│', '┤', '└', '─', '┬'] } else { ['|', '+', '+', '-', '+'] };
    (0..ROWS).for_each(|row| grid.put(LABEL, ROWS - row, side, Ink::Plain));
    for tick in upwards(y, Scale::Linear, ROWS, LABEL) {
        let row = ROWS.saturating_sub(tick.place);
        grid.put(LABEL, row, on_side, Ink::Plain);
        grid.write(LABEL.saturating_sub(tick.label.len()), row, &tick.label, Ink::Plain);
    }
    grid.put(LABEL, ROWS + 1, corner, Ink::Plain);
    (0..columns).for_each(|column| grid.put(LABEL + 1 + column, ROWS + 1, level, Ink::Plain));
    let mut free = 0;
    for tick in across(x, Scale::Linear, columns) {
        grid.put(LABEL + 1 + tick.place, ROWS + 1, on_level, Ink::Plain);
        let from = (LABEL + 1 + start(&tick)).min(grid.columns.saturating_sub(tick.label.len()));
        if from >= free {
            grid.write(from, ROWS + 2, &tick.label, Ink::Plain);
            free = from + tick.label.len() + 1;
        }
    }
}
