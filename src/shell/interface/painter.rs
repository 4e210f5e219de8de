//! Writes what has changed since the last frame, in as few bytes as a slow line deserves.
//!
//! Changed cells are written in runs: a few cells between two of them that did not change are written again where that is
//! shorter than moving the cursor; an attribute is written where it begins; what is blank to the end of a line is erased. One
//! frame is one write.

use std::io::{self, Write};

use ratatui::buffer::{Buffer, Cell};
use ratatui::style::{Color, Modifier};
use unicode_width::UnicodeWidthStr;

/// Cells that are written again rather than jumped over: a jump takes four bytes.
const BRIDGE: u16 = 3;
/// Blanks at the end of a line that are worth erasing: that takes three bytes.
const ERASED: u16 = 4;

/// What a cell looks like, apart from its character.
type Look = (Color, Modifier);

const PLAIN: Look = (Color::Reset, Modifier::empty());

/// Remembers what is on the terminal.
#[derive(Default)]
pub(super) struct Painter {
    shown: Option<Buffer>,
    out: Vec<u8>,
    look: Option<Look>,
    /// Where the cursor is, if that is known.
    at: Option<(u16, u16)>,
}

impl Painter {
    /// What is on the terminal is unknown: the next frame is written in full.
    pub(super) fn forget(&mut self) {
        self.shown = None;
    }

    /// Writes a frame.
    pub(super) fn paint(&mut self, frame: Buffer, to: &mut dyn Write) -> io::Result<()> {
        self.out.clear();
        self.at = None;
        let before = match self.shown.take().filter(|before| before.area == frame.area) {
            Some(before) => before,
            None => {
                self.look = None;
                self.attribute(PLAIN);
                self.out.extend_from_slice(b"\x1b[2J");
                Buffer::empty(frame.area)
            }
        };
        let mut changes = before.diff(&frame).into_iter().map(|(x, y, _)| (x, y)).peekable();
        while let Some((x, y)) = changes.next() {
            if self.is_blank_from(&frame, x, y) {
                self.go_to(&frame, x, y);
                self.attribute(PLAIN);
                self.out.extend_from_slice(b"\x1b[K");
                while changes.next_if(|&(_, row)| row == y).is_some() {}
                continue;
            }
            self.go_to(&frame, x, y);
            self.put(&frame[(x, y)], x, y, &frame);
        }
        if !self.out.is_empty() {
            self.attribute(PLAIN);
            to.write_all(&self.out)?;
            to.flush()?;
        }
        self.shown = Some(frame);
        Ok(())
    }

    fn is_blank_from(&self, frame: &Buffer, x: u16, y: u16) -> bool {
        frame.area.width - x >= ERASED && (x..frame.area.width).all(|column| is_blank(&frame[(column, y)]))
    }

    /// Moves to a cell: over unchanged cells by writing them, where there are few of them and all look as the last one.
    fn go_to(&mut self, frame: &Buffer, x: u16, y: u16) {
        match self.at {
            Some((column, row)) if (column, row) == (x, y) => return,
            Some((column, row)) if row == y && column < x => {
                let between = || (column..x).map(|column| &frame[(column, y)]);
                let is_alike = |cell: &Cell| Some(look(cell)) == self.look && cell.symbol().width() == 1;
                if x - column <= BRIDGE && between().all(is_alike) {
                    between().for_each(|cell| self.out.extend_from_slice(cell.symbol().as_bytes()));
                } else {
                    self.sequence(format_args!("\x1b[{}C", x - column));
                }
            }
            _ => self.sequence(format_args!("\x1b[{};{}H", y + 1, x + 1)),
        }
        self.at = Some((x, y));
    }

    fn put(&mut self, cell: &Cell, x: u16, y: u16, frame: &Buffer) {
        self.attribute(look(cell));
        self.out.extend_from_slice(cell.symbol().as_bytes());
        let next = x + u16::try_from(cell.symbol().width()).unwrap_or(1).max(1);
        // Terminals differ in where the cursor is after the last column.
        self.at = (next < frame.area.width).then_some((next, y));
    }

    fn attribute(&mut self, wanted: Look) {
        if self.look == Some(wanted) {
            return;
        }
        self.look = Some(wanted);
        if wanted == PLAIN {
            self.out.extend_from_slice(b"\x1b[m");
            return;
        }
        let (colour, modifier) = wanted;
        let mut codes = String::from("0");
        let marks = [(Modifier::BOLD, ";1"), (Modifier::DIM, ";2"), (Modifier::REVERSED, ";7")];
        marks.iter().filter(|(mark, _)| modifier.contains(*mark)).for_each(|(_, code)| codes.push_str(code));
        codes.push_str(&foreground(colour));
        self.sequence(format_args!("\x1b[{codes}m"));
    }

    fn sequence(&mut self, text: std::fmt::Arguments<'_>) {
        // A vector takes everything.
        let _ = self.out.write_fmt(text);
    }
}

fn is_blank(cell: &Cell) -> bool {
    cell.symbol() == " " && !cell.modifier.contains(Modifier::REVERSED)
}

/// A blank looks the same in any ink that is not reversed, so it takes none.
fn look(cell: &Cell) -> Look {
    if is_blank(cell) { PLAIN } else { (cell.fg, cell.modifier) }
}

/// The colour's parameters (ECMA-48, and ITU-T T.416 as terminals write it).
fn foreground(colour: Color) -> String {
    match colour {
        Color::Red => ";31".to_owned(),
        Color::Green => ";32".to_owned(),
        Color::Yellow => ";33".to_owned(),
        Color::Blue => ";34".to_owned(),
        Color::Magenta => ";35".to_owned(),
        Color::Cyan => ";36".to_owned(),
        Color::Indexed(index) => format!(";38;5;{index}"),
        Color::Rgb(red, green, blue) => format!(";38;2;{red};{green};{blue}"),
        _ => String::new(),
    }
}
