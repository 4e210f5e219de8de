//! Lines of text: a grid that goes on below where it is too wide.
//!
//! Widths are those of a terminal (UAX #11). Colour is put on last, so that it takes no room.

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use super::super::layout::wrapped;
use super::text::Page;

/// Columns are this far apart.
const GAP: usize = 2;

/// Headings break between words beyond the width of what is below them, or this.
const NARROW: usize = 8;
/// Longer words of headings are broken, or a name could make a column as wide as a page.
const LONGEST: usize = 24;

/// What a colour repeats; it never says anything alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Ink {
    Plain,
    Proved,
    Numerical,
    Undecided,
}

impl Ink {
    /// Green, yellow and magenta, which differ in lightness as well.
    fn code(self) -> Option<u8> {
        match self {
            Ink::Plain => None,
            Ink::Proved => Some(32),
            Ink::Numerical => Some(33),
            Ink::Undecided => Some(35),
        }
    }

    /// The ink of what is proved, or only computed.
    pub(super) fn of(proven: bool) -> Self {
        if proven { Ink::Proved } else { Ink::Numerical }
    }

    /// The text in this ink, where colour is wanted.
    pub(super) fn paint(self, text: &str, page: &Page) -> String {
        match self.code().filter(|_| page.color) {
            Some(code) => format!("\u{1b}[{code}m{text}\u{1b}[0m"),
            None => text.to_owned(),
        }
    }
}

/// What stands at one place of a grid.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Cell {
    text: String,
    ink: Ink,
}

impl Cell {
    pub(super) fn new(text: impl Into<String>) -> Self {
        Self::inked(text, Ink::Plain)
    }

    pub(super) fn inked(text: impl Into<String>, ink: Ink) -> Self {
        Self { text: text.into(), ink }
    }

    /// What is to be read there.
    pub(super) fn text(&self) -> &str {
        &self.text
    }
}

/// How the cells of a column line up.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    /// Numbers, by their decimal points.
    Point,
}

/// What stands above a column of a grid.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Head {
    pub(super) title: String,
    pub(super) unit: String,
    pub(super) align: Align,
}

impl Head {
    pub(super) fn new(title: &str, align: Align) -> Self {
        Self { title: title.to_owned(), unit: String::new(), align }
    }
}

/// The columns that are not empty in every row.
pub(super) fn filled(heads: &[Head], rows: &[Vec<Cell>]) -> Vec<usize> {
    let is_filled = |column: &usize| rows.iter().any(|row| row.get(*column).is_some_and(|cell| !cell.text.is_empty()));
    (0..heads.len()).filter(is_filled).collect()
}

/// A column whose cells all have the same width: lines of headings first, then a line for each row.
struct Block {
    width: usize,
    cells: Vec<Cell>,
}

/// A grid. Columns that are empty in every row are left out; what does not fit the page goes on below, where the first
/// column is repeated.
pub(super) fn grid(heads: &[Head], rows: &[Vec<Cell>], page: &Page) -> String {
    let columns: Vec<Column> =
        filled(heads, rows).into_iter().map(|place| Column::new(&heads[place], rows, place, page)).collect();
    let most = columns.iter().map(|column| column.title.len()).max().unwrap_or(0);
    let blocks: Vec<Block> = columns.into_iter().map(|column| column.block(most)).collect();
    let mut text = String::new();
    for (place, part) in
        parts(&blocks.iter().map(|block| block.width).collect::<Vec<_>>(), page.width).iter().enumerate()
    {
        if place > 0 {
            text.push('\n');
        }
        text.push_str(&lines(&part.iter().filter_map(|&block| blocks.get(block)).collect::<Vec<_>>(), page));
    }
    text
}

/// Columns of these widths divided among parts that fit a width; the first column is in every part.
///
/// Each part has one more column at least, or one wider than the page would never be shown.
pub(super) fn parts(widths: &[usize], width: usize) -> Vec<Vec<usize>> {
    let Some((first, others)) = widths.split_first() else { return Vec::new() };
    let mut all = vec![vec![0]];
    let mut end = GAP + first;
    for (place, other) in others.iter().enumerate() {
        let is_full = all.last().is_some_and(|part| part.len() > 1) && end + GAP + other > width;
        if is_full {
            all.push(vec![0]);
            end = GAP + first;
        }
        end += GAP + other;
        if let Some(part) = all.last_mut() {
            part.push(place + 1);
        }
    }
    all
}

/// A column before its cells have one width.
struct Column {
    title: Vec<String>,
    unit: String,
    align: Align,
    body: Vec<Cell>,
}

impl Column {
    fn new(head: &Head, rows: &[Vec<Cell>], column: usize, page: &Page) -> Self {
        let clean = |cell: &Cell| Cell { text: page.clean(&cell.text), ink: cell.ink };
        let cells: Vec<Cell> = rows.iter().filter_map(|row| row.get(column)).map(clean).collect();
        let body = match head.align {
            Align::Left => cells,
            Align::Point => by_point(cells),
        };
        let unit = page.clean(&head.unit);
        let widest = body.iter().map(|cell| cell.text.width()).chain([unit.width(), NARROW]).max().unwrap_or(0);
        let words: Vec<String> = page.clean(&head.title).split_whitespace().flat_map(pieces).collect();
        let title = wrapped(words.iter().map(String::as_str), 0, 0, widest);
        Self { title: title.lines().map(str::to_owned).collect(), unit, align: head.align, body }
    }

    /// Its lines, with this many for the title, filled from below.
    fn block(self, most: usize) -> Block {
        let above = vec![String::new(); most - self.title.len()];
        let heads = above.into_iter().chain(self.title).chain([self.unit]).map(Cell::new);
        let mut cells: Vec<Cell> = heads.chain(self.body).collect();
        let width = cells.iter().map(|cell| cell.text.width()).max().unwrap_or(0);
        for cell in &mut cells {
            let room = " ".repeat(width - cell.text.width());
            cell.text = match self.align {
                Align::Left => format!("{}{room}", cell.text),
                Align::Point => format!("{room}{}", cell.text),
            };
        }
        Block { width, cells }
    }
}

/// A word in pieces of bearable length.
fn pieces(word: &str) -> Vec<String> {
    let letters: Vec<char> = word.chars().collect();
    letters.chunks(LONGEST).map(|piece| piece.iter().collect()).collect()
}

/// Numbers filled up on the right so that their points are below each other once they end in the same column.
fn by_point(cells: Vec<Cell>) -> Vec<Cell> {
    let after = |text: &str| text.find('.').map_or(0, |point| text.len() - point);
    let most = cells.iter().map(|cell| after(&cell.text)).max().unwrap_or(0);
    let filled = |cell: Cell| {
        let room = " ".repeat(most - after(&cell.text));
        Cell { text: format!("{}{room}", cell.text), ink: cell.ink }
    };
    cells.into_iter().map(filled).collect()
}

fn lines(blocks: &[&Block], page: &Page) -> String {
    let count = blocks.first().map_or(0, |block| block.cells.len());
    let mut text = String::new();
    for line in 0..count {
        let cells: Vec<&Cell> = blocks.iter().filter_map(|block| block.cells.get(line)).collect();
        let is_blank = cells.iter().all(|cell| cell.text.trim().is_empty());
        // Lines of headings may be blank; a row never is.
        if !is_blank {
            text.push_str(&one_line(&cells, page));
        }
    }
    text
}

fn one_line(cells: &[&Cell], page: &Page) -> String {
    let mut line = String::new();
    for cell in cells {
        let (word, room) = cell.text.split_at(cell.text.trim_end().len());
        let _ = write!(line, "{:GAP$}{}{room}", "", cell.ink.paint(word, page));
    }
    format!("{}\n", line.trim_end())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::check::Style;

    fn page(width: usize) -> Page {
        Page { width, style: Style::Unicode, color: false }
    }

    #[test]
    fn points_line_up_and_empty_columns_go() {
        let heads = [
            Head::new("", Align::Left),
            Head { unit: "kt".into(), ..Head::new("S", Align::Point) },
            Head::new("x", Align::Left),
        ];
        let row = |id: &str, number: &str| vec![Cell::new(id), Cell::new(number), Cell::new("")];
        let rows = [row("E1", "0"), row("αβγ", "12.5"), row("E3", "1.235e-9")];
        let expected = "               S\n              kt\n  E1    0\n  αβγ  12.5\n  E3    1.235e-9\n";
        assert_eq!(grid(&heads, &rows, &page(80)), expected);
    }

    #[test]
    fn what_does_not_fit_goes_on_below() {
        let heads: Vec<Head> = ["", "aaaa", "bbbb", "cccc"].iter().map(|title| Head::new(title, Align::Left)).collect();
        let rows = [["E1", "1", "2", "3"].map(Cell::new).to_vec()];
        assert_eq!(grid(&heads, &rows, &page(16)), "      aaaa  bbbb\n  E1  1     2\n\n      cccc\n  E1  3\n");
        assert_eq!(grid(&heads[..2], &rows, &page(0)), "      aaaa\n  E1  1\n");
    }
}
