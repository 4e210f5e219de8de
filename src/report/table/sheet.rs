//! The equilibria of one scenario as people see them: headings and rounded cells, for text, Markdown and LaTeX.

use super::columns::{Glyphs, Shown};
use super::layout::{Cell, Head};
use super::{Row, Table};

/// Headings, and as many cells in each row.
#[derive(Clone, Debug)]
pub(in crate::report) struct Sheet {
    pub(in crate::report) heads: Vec<Head>,
    pub(in crate::report) rows: Vec<Vec<Cell>>,
}

impl Sheet {
    /// The columns asked for, or those that people see by default.
    pub(in crate::report) fn new(table: &Table<'_>, rows: &[Row<'_>], glyphs: Glyphs) -> Self {
        let columns = table.columns(&[Shown::Everywhere]);
        let heads = columns.iter().flat_map(|column| column.heads(table)).collect();
        let cells = |row: &Row<'_>| columns.iter().flat_map(|column| column.cells(row, glyphs)).collect();
        Self { heads, rows: rows.iter().map(cells).collect() }
    }
}
