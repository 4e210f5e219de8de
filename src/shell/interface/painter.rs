//! Writes what has changed since the last frame, in as few bytes as a slow line deserves. One frame is one write.
//!
//! [`Painter::paint`] compares cell by cell and writes what differs: an attribute where it begins, a blank in whatever is set,
//! as it looks the same in all of them; what is blank to the end of a line is erased. Between two places the cursor takes the
//! shortest way, which may be to write again what stands there (`ways`). Only sequences of the VT100 are used, and of
//! ECMA-48 (1991) the colours.
//!
//! It is also the last guard: of whatever a frame holds, no control character, no colour where there is none and nothing
//! but ASCII where there is only that gets through.

mod ways;

#[cfg(test)]
mod tests;

use std::fmt::Write as _;
use std::io::{self, Write};

use ratatui::buffer::{Buffer, Cell};
use ratatui::style::{Color, Modifier};
use unicode_width::UnicodeWidthStr;

use crate::app::Depth;
use crate::report::sketch::Style;

/// What a cell looks like, apart from its character.
type Look = (Color, Modifier);

const PLAIN: Look = (Color::Reset, Modifier::empty());
/// The attributes that are used, with their parameters.
const ATTRIBUTES: [(Modifier, u8); 3] = [(Modifier::BOLD, 1), (Modifier::DIM, 2), (Modifier::REVERSED, 7)];
const SHOWN: Modifier = Modifier::BOLD.union(Modifier::DIM).union(Modifier::REVERSED);

const ERASE_LINE: &[u8] = b"\x1b[K";
const ERASE_ALL: &[u8] = b"\x1b[m\x1b[H\x1b[2J";

/// Remembers what is on the terminal.
pub(super) struct Painter {
    style: Style,
    depth: Depth,
    shown: Option<Buffer>,
    out: Vec<u8>,
    look: Look,
    cursor: Cursor,
}

/// Where the terminal's cursor is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Cursor {
    /// Terminals differ in that after the last column; and others may have written.
    Unknown,
    /// Before this cell.
    At(u16, u16),
    /// Before this cell, unless the terminal holds what was written for wider or narrower than we do.
    Likely(u16, u16),
}

impl Painter {
    pub(super) fn new(style: Style, depth: Depth) -> Self {
        Self { style, depth, shown: None, out: Vec::new(), look: PLAIN, cursor: Cursor::Unknown }
    }

    /// What is on the terminal is unknown: the next frame is written in full.
    pub(super) fn forget(&mut self) {
        self.shown = None;
    }

    /// Writes a frame.
    pub(super) fn paint(&mut self, mut frame: Buffer, to: &mut dyn Write) -> io::Result<()> {
        self.out.clear();
        self.look = PLAIN;
        self.cursor = Cursor::Unknown;
        let columns = usize::from(frame.area.width).max(1);
        self.tame(&mut frame, columns);
        let known = self.shown.take().filter(|before| before.area == frame.area);
        let before = known.unwrap_or_else(|| self.erase_all(&frame));
        let lines = before.content.chunks(columns).zip(frame.content.chunks(columns));
        for (y, (old, new)) in (0..).zip(lines) {
            if old != new {
                self.line(old, new, y);
            }
        }
        self.wear(PLAIN);
        self.shown = Some(frame);
        if self.out.is_empty() {
            return Ok(());
        }
        to.write_all(&self.out)?;
        to.flush()
    }

    /// Takes everything away; what is shown then.
    fn erase_all(&mut self, frame: &Buffer) -> Buffer {
        self.out.extend_from_slice(ERASE_ALL);
        self.cursor = Cursor::At(0, 0);
        Buffer::empty(frame.area)
    }

    fn line(&mut self, old: &[Cell], new: &[Cell], y: u16) {
        let differs = |x: &usize| old[*x] != new[*x];
        let content = new.iter().rposition(|cell| !is_blank(cell)).map_or(0, |last| last + 1);
        let last = (0..new.len()).rfind(differs).unwrap_or(0);
        for x in (0..new.len()).filter(differs) {
            if is_hidden(&new[x]) {
                continue;
            }
            self.go_to(new, x, y);
            if x >= content && last - x >= ERASE_LINE.len() {
                if self.look.1.contains(Modifier::REVERSED) {
                    self.wear(PLAIN);
                }
                self.out.extend_from_slice(ERASE_LINE);
                return;
            }
            self.put(new, x, y);
        }
    }

    fn put(&mut self, line: &[Cell], x: usize, y: u16) {
        let cell = &line[x];
        if !self.shows(cell) {
            self.wear(look(cell));
        }
        self.out.extend_from_slice(cell.symbol().as_bytes());
        let next = (x + cell.symbol().width().max(1)) as u16;
        let is_certain = self.cursor == Cursor::At(x as u16, y) && is_simple(cell);
        self.cursor = match is_certain {
            _ if usize::from(next) >= line.len() => Cursor::Unknown,
            true => Cursor::At(next, y),
            false => Cursor::Likely(next, y),
        };
    }

    /// Whether a cell looks as it should when it is written now.
    fn shows(&self, cell: &Cell) -> bool {
        if is_blank(cell) { !self.look.1.contains(Modifier::REVERSED) } else { look(cell) == self.look }
    }

    fn wear(&mut self, wanted: Look) {
        let (colour, modifier) = wanted;
        let now = std::mem::replace(&mut self.look, wanted);
        if wanted == now {
            return;
        }
        if wanted == PLAIN {
            self.out.extend_from_slice(b"\x1b[m");
            return;
        }
        // Attributes can be taken away on every terminal only all at once.
        let is_more = modifier.contains(now.1) && (colour != Color::Reset || now.0 == Color::Reset);
        let mut codes = String::new();
        if !is_more {
            codes.push_str(";0");
        }
        for (mark, code) in ATTRIBUTES {
            if modifier.contains(mark) && !(is_more && now.1.contains(mark)) {
                // A string takes everything.
                let _ = write!(codes, ";{code}");
            }
        }
        if !(is_more && now.0 == colour) {
            codes.push_str(&foreground(colour));
        }
        self.out.extend_from_slice(b"\x1b[");
        self.out.extend_from_slice(codes.trim_start_matches(';').as_bytes());
        self.out.push(b'm');
    }

    /// Makes of a frame what may be written; a cell that a wide character covers becomes empty.
    fn tame(&self, frame: &mut Buffer, columns: usize) {
        for line in frame.content.chunks_mut(columns) {
            let mut covered = 0;
            for (x, cell) in line.iter_mut().enumerate() {
                if covered > 0 {
                    covered -= 1;
                    *cell = Cell::new("");
                    continue;
                }
                self.tame_cell(cell, columns - x);
                covered = cell.symbol().width().max(1) - 1;
            }
        }
    }

    fn tame_cell(&self, cell: &mut Cell, room: usize) {
        let symbol = cell.symbol();
        if symbol.is_empty() || symbol.width() > room {
            cell.set_symbol(" ");
        } else if symbol.width() == 0
            || symbol.contains(char::is_control)
            || self.style == Style::Ascii && !symbol.is_ascii()
        {
            cell.set_symbol("?");
        }
        let colour = if self.depth == Depth::None { Color::Reset } else { cell.fg };
        let look = if is_blank(cell) { PLAIN } else { (colour, cell.modifier.intersection(SHOWN)) };
        let symbol = cell.symbol().to_owned();
        *cell = Cell::default();
        cell.set_symbol(&symbol);
        (cell.fg, cell.modifier) = look;
    }
}

/// A blank that is not reversed looks the same in all colours.
fn is_blank(cell: &Cell) -> bool {
    cell.symbol() == " " && !cell.modifier.contains(Modifier::REVERSED)
}

/// Whether a wide character covers it.
fn is_hidden(cell: &Cell) -> bool {
    cell.symbol().is_empty()
}

/// One character in one column, of which terminals hardly disagree.
fn is_simple(cell: &Cell) -> bool {
    cell.symbol().chars().count() == 1 && cell.symbol().width() == 1
}

fn look(cell: &Cell) -> Look {
    (cell.fg, cell.modifier)
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
