//! Characters in cells, and what each means: what is drawn, before it is known on what.
//!
//! An [`Ink`] is a meaning, not a colour; whoever puts a grid on a page or a terminal chooses how to show it, and may show
//! nothing of it: the characters alone say everything. Texts that may hold wide or combining characters are [`Label`]s, which
//! lie over the cells.

/// What a character is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Ink {
    /// Nothing in particular.
    #[default]
    Plain,
    /// What recedes behind all else: directions, frames, hints.
    Faint,
    /// What stands out: headings, states, lines that order the plane.
    Strong,
    /// What is selected.
    Chosen,
    /// Something of the species of this index.
    Species(usize),
    /// Today's stocks.
    Now,
    /// The point that the user moves.
    Point,
    /// The path from it.
    Path,
    /// A claim that is proved.
    Proved,
    /// A number that nothing is proved of.
    Numerical,
    /// A question that stayed open.
    Undecided,
    /// What differs from what it stands beside.
    Changed,
    /// What is wrong, and what to be careful about.
    Warning,
}

/// A text over the cells.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Label {
    /// Where it begins.
    pub column: usize,
    /// Its row, 0 at the top.
    pub row: usize,
    /// The text, harmless, at most as wide as fits.
    pub text: String,
    /// What it is.
    pub ink: Ink,
}

/// Cells, row by row from the top.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Grid {
    /// Cells side by side.
    pub columns: usize,
    /// Cells one above the other.
    pub rows: usize,
    cells: Vec<(char, Ink)>,
    /// Texts over the cells.
    pub labels: Vec<Label>,
}

impl Grid {
    /// Nothing but blanks.
    pub fn new(columns: usize, rows: usize) -> Self {
        Self { columns, rows, cells: vec![(' ', Ink::Plain); columns * rows], labels: Vec::new() }
    }

    /// Writes one character, of width 1; outside the grid nothing happens.
    pub fn put(&mut self, column: usize, row: usize, glyph: char, ink: Ink) {
        if column < self.columns && row < self.rows {
            self.cells[row * self.columns + column] = (glyph, ink);
        }
    }

    /// What is in a cell; a blank outside. Labels are not looked at.
    pub fn at(&self, column: usize, row: usize) -> (char, Ink) {
        let is_inside = column < self.columns && row < self.rows;
        if is_inside { self.cells[row * self.columns + column] } else { (' ', Ink::Plain) }
    }

    /// A row from left to right, without labels; empty outside.
    pub fn row(&self, row: usize) -> &[(char, Ink)] {
        self.cells.get(row * self.columns..(row + 1) * self.columns).unwrap_or_default()
    }

    /// Lays a text over the cells.
    pub fn label(&mut self, column: usize, row: usize, text: impl Into<String>, ink: Ink) {
        self.labels.push(Label { column, row, text: text.into(), ink });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_is_written_outside() {
        let mut grid = Grid::new(2, 1);
        for (column, row) in [(2, 0), (0, 1), (usize::MAX, 0), (1, 0)] {
            grid.put(column, row, 'x', Ink::Strong);
        }
        assert_eq!(grid.row(0), [(' ', Ink::Plain), ('x', Ink::Strong)]);
        assert_eq!((grid.at(1, 0), grid.at(2, 0), grid.row(1)), (('x', Ink::Strong), (' ', Ink::Plain), &[][..]));
        assert_eq!(Grid::default().row(0), []);
    }
}
