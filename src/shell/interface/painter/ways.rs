//! Where the cursor goes next, by the shortest way.

use ratatui::buffer::Cell;

use super::{Cursor, Painter, is_hidden, is_simple};

impl Painter {
    /// Moves the cursor before a cell of a line.
    pub(super) fn go_to(&mut self, line: &[Cell], x: usize, y: u16) {
        let wanted = (x as u16, y);
        let way = match self.cursor {
            Cursor::At(column, row) | Cursor::Likely(column, row) if (column, row) == wanted => return,
            Cursor::At(column, row) => self.relative(line, (column, row), wanted),
            Cursor::Likely(..) | Cursor::Unknown => None,
        };
        let absolute = placed(wanted);
        let way = way.filter(|way| way.len() < absolute.len()).unwrap_or(absolute);
        self.out.extend_from_slice(&way);
        self.cursor = Cursor::At(wanted.0, wanted.1);
    }

    /// From where the cursor is; `None` upwards and leftwards, which nobody needs.
    fn relative(&self, line: &[Cell], (column, row): (u16, u16), (x, y): (u16, u16)) -> Option<Vec<u8>> {
        if row == y {
            let between = self.again(line.get(usize::from(column)..usize::from(x))?);
            return Some(shorter(between, across(column, x)));
        }
        // No line feed can scroll: the line that it goes to is there.
        let down = vec![b'\n'; usize::from(y.checked_sub(row)?)];
        let from_start = [b"\r".to_vec(), shorter(self.again(line.get(..usize::from(x))?), across(0, x))].concat();
        let sideways = if column == x { Vec::new() } else { shorter(Some(from_start), across(column, x)) };
        Some([down, sideways].concat())
    }

    /// Cells as they are on the terminal, written again; `None` where they look otherwise than what is written now.
    fn again(&self, cells: &[Cell]) -> Option<Vec<u8>> {
        let is_alike = |cell: &Cell| self.shows(cell) && is_simple(cell) && !is_hidden(cell);
        cells.iter().all(is_alike).then(|| cells.iter().flat_map(|cell| cell.symbol().bytes()).collect())
    }
}

fn shorter(one: Option<Vec<u8>>, other: Vec<u8>) -> Vec<u8> {
    one.filter(|one| one.len() <= other.len()).unwrap_or(other)
}

/// To another column of the same line.
fn across(from: u16, to: u16) -> Vec<u8> {
    match to.abs_diff(from) {
        0 => Vec::new(),
        1 if to > from => b"\x1b[C".to_vec(),
        n if to > from => format!("\x1b[{n}C").into_bytes(),
        n @ 1..=3 => vec![0x08; n.into()],
        n => format!("\x1b[{n}D").into_bytes(),
    }
}

/// To a cell from anywhere; 1 need not be said.
fn placed((x, y): (u16, u16)) -> Vec<u8> {
    match (x, y) {
        (0, 0) => b"\x1b[H".to_vec(),
        (0, _) => format!("\x1b[{}H", y + 1).into_bytes(),
        (_, 0) => format!("\x1b[;{}H", x + 1).into_bytes(),
        _ => format!("\x1b[{};{}H", y + 1, x + 1).into_bytes(),
    }
}
