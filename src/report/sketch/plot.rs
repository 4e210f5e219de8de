//! Where the cells are in a sketch of a given size.

use super::View;

/// Columns and rows of a whole drawing: cells, axes, their numbers and captions; not its legend.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Size {
    /// Characters in a line.
    pub columns: usize,
    /// Lines.
    pub rows: usize,
}

/// The smallest drawing in which anything can be seen.
pub const SMALLEST: Size = Size { columns: 20, rows: 8 };
/// The largest; a million cells.
pub const LARGEST: Size = Size { columns: 1000, rows: 1000 };

/// Characters of the numbers along the vertical axis.
pub(super) const LABEL: usize = 7;
/// The caption above, and below the axis, its numbers and its caption.
pub(super) const LINES: usize = 4;

/// The cells of a drawing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Plot {
    /// Cells side by side.
    pub columns: usize,
    /// Cells one above the other.
    pub rows: usize,
}

impl Plot {
    /// What a drawing of a size has room for; at least that of the smallest.
    pub fn of(size: Size) -> Self {
        let columns = size.columns.clamp(SMALLEST.columns, LARGEST.columns);
        let rows = size.rows.clamp(SMALLEST.rows, LARGEST.rows);
        Self { columns: columns - LABEL - 1, rows: rows - LINES }
    }
}

/// How many lines stand around a view's drawing, about: enough to let all of it fit a terminal.
pub fn legend_rows(view: &View<'_>) -> usize {
    const SIGNS: usize = 5;
    const AROUND: usize = 5;
    view.solved.equilibria.list.len() + SIGNS + AROUND
}
