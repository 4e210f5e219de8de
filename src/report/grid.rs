//! Characters in cells, and what each means: what is drawn, before it is known on what.
//!
//! An [`Ink`] is a meaning, not a colour; whoever puts a grid on a page or a terminal chooses how to show it, and may show
//! nothing of it: the characters alone say everything. Texts that may hold wide or combining characters are [`Label`]s, which
//! lie over the cells.

use unicode_width::UnicodeWidthStr;

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

impl Ink {
    /// The parameters of the attribute by which a text on a terminal repeats the meaning; `None` for none.
    ///
    /// What recedes is fainter, what stands out bolder, what is chosen reversed; species have colours in turn, the first two
    /// blue and yellow, which all eyes tell apart.
    pub fn attribute(self) -> Option<&'static str> {
        const SPECIES: [&str; 4] = ["34", "33", "36", "32"];
        match self {
            Ink::Plain | Ink::Proved | Ink::Numerical => None,
            Ink::Faint => Some("2"),
            Ink::Strong | Ink::Changed => Some("1"),
            Ink::Chosen => Some("7"),
            Ink::Species(index) => Some(SPECIES[index % SPECIES.len()]),
            Ink::Now | Ink::Point => Some("35"),
            Ink::Path => Some("36"),
            Ink::Undecided | Ink::Warning => Some("31"),
        }
    }
}

impl Grid {
    /// Writes characters of width 1 one after the other; those outside the grid are left out.
    pub fn write(&mut self, column: usize, row: usize, text: &str, ink: Ink) {
        for (place, glyph) in text.chars().enumerate() {
            self.put(column.saturating_add(place), row, glyph, ink);
        }
    }

    /// The rows as lines of text, labels over the cells, without blanks at their ends; with attributes where `color`.
    pub fn lines(&self, color: bool) -> Vec<String> {
        (0..self.rows).map(|row| self.line(row, color)).collect()
    }

    fn line(&self, row: usize, color: bool) -> String {
        let mut labels: Vec<&Label> = self.labels.iter().filter(|label| label.row == row).collect();
        labels.sort_by_key(|label| label.column);
        let mut pieces: Vec<(String, Ink)> = Vec::new();
        let mut column = 0;
        let cells = |from: usize, to: usize| self.row(row).get(from..to).unwrap_or_default().iter();
        for label in labels.into_iter().filter(|label| label.column < self.columns) {
            if label.column < column {
                continue;
            }
            pieces.extend(cells(column, label.column).map(|&(glyph, ink)| (glyph.to_string(), ink)));
            pieces.push((label.text.clone(), label.ink));
            column = label.column + label.text.width();
        }
        pieces.extend(cells(column.min(self.columns), self.columns).map(|&(glyph, ink)| (glyph.to_string(), ink)));
        joined(&pieces, color)
    }
}

/// Pieces of a line; neighbours of one ink share one run of attributes, and a blank, which shows none, ends no run.
fn joined(pieces: &[(String, Ink)], color: bool) -> String {
    let last = pieces.iter().rposition(|(text, _)| !text.trim_end().is_empty()).map_or(0, |last| last + 1);
    let mut line = String::new();
    let mut current: Option<&str> = None;
    for (text, ink) in &pieces[..last] {
        let attribute = if !color || text == " " { current } else { ink.attribute() };
        if attribute != current {
            line.push_str(if current.is_some() { RESET } else { "" });
            line.push_str(&attribute.map_or(String::new(), |attribute| format!("\u{1b}[{attribute}m")));
            current = attribute;
        }
        line.push_str(text);
    }
    line.push_str(if current.is_some() { RESET } else { "" });
    if color { line } else { line.trim_end().to_owned() }
}

/// Back to no attribute.
const RESET: &str = "\u{1b}[0m";

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

    #[test]
    fn lines_have_labels_over_cells_and_no_blanks_at_the_end() {
        let mut grid = Grid::new(8, 3);
        grid.write(0, 0, "abcdefghij", Ink::Strong);
        grid.label(2, 0, "漢字", Ink::Plain);
        grid.write(1, 1, "x y", Ink::Faint);
        assert_eq!(grid.lines(false), ["ab漢字gh", " x y", ""]);
        let coloured = grid.lines(true);
        assert_eq!(coloured[0], "\u{1b}[1mab\u{1b}[0m漢字\u{1b}[1mgh\u{1b}[0m");
        assert_eq!(coloured[1], " \u{1b}[2mx y\u{1b}[0m");
    }
}
