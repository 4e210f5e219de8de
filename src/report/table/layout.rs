//! Lines of text: a grid that goes on below where it is too wide.
//!
//! Widths are those of a terminal (UAX #11). Colour is put on last, so that it takes no room.

use std::fmt::Write as _;

use unicode_width::UnicodeWidthStr;

use super::text::Page;

/// Columns are this far apart.
const GAP: usize = 2;

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

/// A column whose cells all have the same width, headings first.
struct Block {
    width: usize,
    cells: Vec<Cell>,
}

/// A grid. Columns that are empty in every row are left out; what does not fit the page goes on below, where the first
/// column is repeated.
pub(super) fn grid(heads: &[Head], rows: &[Vec<Cell>], page: &Page) -> String {
    let blocks: Vec<Block> = (0..heads.len()).filter_map(|column| block(&heads[column], rows, column, page)).collect();
    let Some((first, others)) = blocks.split_first() else { return String::new() };
    let mut text = String::new();
    let mut left = others;
    loop {
        let fitting = fitting(first.width, left, page.width);
        let (here, rest) = left.split_at(fitting);
        let shown: Vec<&Block> = std::iter::once(first).chain(here).collect();
        text.push_str(&lines(&shown, page));
        if rest.is_empty() {
            return text;
        }
        text.push('\n');
        left = rest;
    }
}

/// How many of the blocks fit beside the first; one at least, or a column wider than the page would never be shown.
fn fitting(first: usize, blocks: &[Block], width: usize) -> usize {
    let mut end = GAP + first;
    let beside = blocks.iter().take_while(|block| {
        end += GAP + block.width;
        end <= width
    });
    beside.count().max(1).min(blocks.len())
}

fn block(head: &Head, rows: &[Vec<Cell>], column: usize, page: &Page) -> Option<Block> {
    let clean = |cell: &Cell| Cell { text: page.clean(&cell.text), ink: cell.ink };
    let cells: Vec<Cell> = rows.iter().filter_map(|row| row.get(column)).map(clean).collect();
    if cells.iter().all(|cell| cell.text.is_empty()) {
        return None;
    }
    let heads = [Cell::new(page.clean(&head.title)), Cell::new(page.clean(&head.unit))];
    let body = match head.align {
        Align::Left => cells,
        Align::Point => by_point(cells),
    };
    let mut cells: Vec<Cell> = heads.into_iter().chain(body).collect();
    let width = cells.iter().map(|cell| cell.text.width()).max().unwrap_or(0);
    for cell in &mut cells {
        let room = " ".repeat(width - cell.text.width());
        cell.text =
            if head.align == Align::Left { format!("{}{room}", cell.text) } else { format!("{room}{}", cell.text) };
    }
    Some(Block { width, cells })
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
        // The two lines of headings may be blank; a row never is.
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
