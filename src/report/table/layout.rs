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

/// Beside the name of an equilibrium and the gaps, a cell may take the rest of the page.
const BESIDE: usize = 10;

/// What a colour repeats; it never says anything alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::report) enum Ink {
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
    pub(in crate::report) fn of(proven: bool) -> Self {
        if proven { Ink::Proved } else { Ink::Numerical }
    }

    /// The text in this ink, where colour is wanted.
    pub(in crate::report) fn paint(self, text: &str, page: &Page) -> String {
        match self.code().filter(|_| page.color && !text.is_empty()) {
            Some(code) => format!("\u{1b}[{code}m{text}\u{1b}[0m"),
            None => text.to_owned(),
        }
    }
}

/// What stands at one place of a grid.
#[derive(Clone, Debug, PartialEq)]
pub(in crate::report) struct Cell {
    text: String,
    ink: Ink,
}

impl Cell {
    pub(in crate::report) fn new(text: impl Into<String>) -> Self {
        Self::inked(text, Ink::Plain)
    }

    pub(in crate::report) fn inked(text: impl Into<String>, ink: Ink) -> Self {
        Self { text: text.into(), ink }
    }

    /// The same with more after it.
    pub(in crate::report) fn and(mut self, more: &str) -> Self {
        self.text.push_str(more);
        self
    }

    /// What is to be read there.
    pub(in crate::report) fn text(&self) -> &str {
        &self.text
    }
}

/// How the cells of a column line up.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::report) enum Align {
    Left,
    /// Numbers, by their decimal points.
    Point,
}

/// What stands above a column of a grid.
#[derive(Clone, Debug, PartialEq)]
pub(in crate::report) struct Head {
    pub(in crate::report) title: String,
    pub(in crate::report) unit: String,
    pub(in crate::report) align: Align,
}

impl Head {
    pub(in crate::report) fn new(title: &str, align: Align) -> Self {
        Self { title: title.to_owned(), unit: String::new(), align }
    }
}

/// The columns that are not empty in every row.
pub(in crate::report) fn filled(heads: &[Head], rows: &[Vec<Cell>]) -> Vec<usize> {
    let is_filled = |column: &usize| rows.iter().any(|row| row.get(*column).is_some_and(|cell| !cell.text.is_empty()));
    (0..heads.len()).filter(is_filled).collect()
}

/// A column whose lines all have the same width: those of the headings, then those of each row.
struct Block {
    width: usize,
    heads: Vec<Cell>,
    rows: Vec<Vec<Cell>>,
}

/// A grid. Columns that are empty in every row are left out; what does not fit the page goes on below, where the first
/// column is repeated.
pub(in crate::report) fn grid(heads: &[Head], rows: &[Vec<Cell>], page: &Page) -> String {
    let columns: Vec<Column> =
        filled(heads, rows).into_iter().map(|place| Column::new(&heads[place], rows, place, page)).collect();
    let most = |lines: fn(&Column) -> usize| columns.iter().map(lines).max().unwrap_or(0);
    let (titles, units) = (most(|column| column.title.len()), most(|column| column.unit.len()));
    let blocks: Vec<Block> = columns.into_iter().map(|column| column.block(titles, units)).collect();
    let widths: Vec<usize> = blocks.iter().map(|block| block.width).collect();
    let shown = parts(&widths, page.width).into_iter().map(|part| {
        let part: Vec<&Block> = part.iter().filter_map(|&place| blocks.get(place)).collect();
        lines(&part, rows.len(), page)
    });
    shown.collect::<Vec<_>>().join("\n")
}

/// Columns of these widths divided among parts that fit a width; the first column is in every part.
///
/// Each part has one more column at least, or one wider than the page would never be shown.
pub(in crate::report) fn parts(widths: &[usize], width: usize) -> Vec<Vec<usize>> {
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

/// A column before its lines have one width.
struct Column {
    title: Vec<String>,
    unit: Vec<String>,
    align: Align,
    /// The lines of each row.
    body: Vec<Vec<Cell>>,
}

impl Column {
    fn new(head: &Head, rows: &[Vec<Cell>], column: usize, page: &Page) -> Self {
        let cells = rows.iter().filter_map(|row| row.get(column));
        let cells = cells.map(|cell| Cell { text: page.clean(&cell.text), ink: cell.ink });
        let room = page.width.saturating_sub(BESIDE);
        let body: Vec<Vec<Cell>> = match head.align {
            Align::Left => cells.map(|cell| broken_cell(&cell, room)).collect(),
            Align::Point => by_point(cells.collect()).into_iter().map(|cell| vec![cell]).collect(),
        };
        let widest = body.iter().flatten().map(|cell| cell.text.width()).chain([NARROW]).max().unwrap_or(0);
        let head_lines = |text: &str| broken(&page.clean(text), widest);
        Self { title: head_lines(&head.title), unit: head_lines(&head.unit), align: head.align, body }
    }

    /// Its lines, with so many for the title, filled from below, and for the unit.
    fn block(self, titles: usize, units: usize) -> Block {
        let blank = |count: usize| vec![String::new(); count];
        let above = blank(titles.saturating_sub(self.title.len()));
        let below = blank(units.saturating_sub(self.unit.len()));
        let heads = above.into_iter().chain(self.title).chain(self.unit).chain(below).map(Cell::new);
        let mut block = Block { width: 0, heads: heads.collect(), rows: self.body };
        let cells = || block.heads.iter().chain(block.rows.iter().flatten());
        block.width = cells().map(|cell| cell.text.width()).max().unwrap_or(0);
        for cell in block.heads.iter_mut().chain(block.rows.iter_mut().flatten()) {
            let room = " ".repeat(block.width - cell.text.width());
            cell.text = match self.align {
                Align::Left => format!("{}{room}", cell.text),
                Align::Point => format!("{room}{}", cell.text),
            };
        }
        block
    }
}

/// The lines of a text in a column.
fn broken(text: &str, width: usize) -> Vec<String> {
    let words: Vec<String> = text.split_whitespace().flat_map(pieces).collect();
    wrapped(words.iter().map(String::as_str), 0, 0, width).lines().map(str::to_owned).collect()
}

/// A cell in as many lines as the page needs; blanks within a line stay where one is enough.
fn broken_cell(cell: &Cell, room: usize) -> Vec<Cell> {
    if cell.text.width() <= room {
        return vec![cell.clone()];
    }
    broken(&cell.text, room).into_iter().map(|text| Cell { text, ink: cell.ink }).collect()
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

fn lines(blocks: &[&Block], rows: usize, page: &Page) -> String {
    let heads = blocks.iter().map(|block| block.heads.len()).max().unwrap_or(0);
    let heads = (0..heads).map(|line| one_line(blocks, |block| block.heads.get(line), page));
    // Lines of headings may be blank; a row never is.
    let mut text: String = heads.filter(|line| !line.trim().is_empty()).collect();
    for row in 0..rows {
        let count = blocks.iter().filter_map(|block| block.rows.get(row)).map(Vec::len).max().unwrap_or(0);
        for line in 0..count {
            text.push_str(&one_line(blocks, |block| block.rows.get(row)?.get(line), page));
        }
    }
    text
}

fn one_line<'b>(blocks: &[&'b Block], cell: impl Fn(&'b Block) -> Option<&'b Cell>, page: &Page) -> String {
    let mut line = String::new();
    for block in blocks {
        match cell(block) {
            Some(cell) => {
                let (word, room) = cell.text.split_at(cell.text.trim_end().len());
                let _ = write!(line, "{:GAP$}{}{room}", "", cell.ink.paint(word, page));
            }
            None => line.push_str(&" ".repeat(GAP + block.width)),
        }
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

    #[test]
    fn what_is_too_wide_alone_is_broken() {
        let heads = [Head::new("", Align::Left), Head { unit: "u".into(), ..Head::new("long title x", Align::Left) }];
        let rows = [["E1", "aaaa bbbb cccc dddd"].map(Cell::new).to_vec(), ["E2", "e"].map(Cell::new).to_vec()];
        let expected = "      long\n      title x\n      u\n  E1  aaaa bbbb\n      cccc dddd\n  E2  e\n";
        assert_eq!(grid(&heads, &rows, &page(20)), expected);
    }
}
