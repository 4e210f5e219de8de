//! Texts and grids in a buffer, and what each ink looks like on terminals of few and of many colours.

use ratatui::buffer::Buffer;
use ratatui::style::{Color, Modifier, Style as Look};
use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

use crate::app::Depth;
use crate::app::geometry::Area;
use crate::diag::cleanse::cleanse;
use crate::report::grid::{Grid, Ink};
use crate::report::sketch::Style;

/// What is drawn on.
pub(super) struct Page<'b> {
    buffer: &'b mut Buffer,
    /// Which characters may be used.
    pub(super) style: Style,
    depth: Depth,
}

impl<'b> Page<'b> {
    pub(super) fn new(buffer: &'b mut Buffer, style: Style, depth: Depth) -> Self {
        Self { buffer, style, depth }
    }

    /// Either of two characters.
    pub(super) fn either(&self, unicode: char, ascii: char) -> char {
        if self.style == Style::Unicode { unicode } else { ascii }
    }

    /// A text in a row of an area from a column on, cut with a mark where it does not fit; how far it reaches.
    pub(super) fn text(&mut self, area: Area, [column, row]: [u16; 2], text: &str, ink: Ink) -> u16 {
        if row >= area.rows || column >= area.columns {
            return column;
        }
        let text = fitted(&harmless(text, self.style), usize::from(area.columns - column), self.style);
        let look = look(ink, self.depth);
        let (x, y) = (area.x + column, area.y + row);
        let (end, _) = self.buffer.set_stringn(x, y, &text, text.width(), look);
        end - area.x
    }

    /// Words in rows of an area, the last of them cut with a mark where more does not fit; how many rows.
    pub(super) fn words(&mut self, area: Area, text: &str, ink: Ink) -> u16 {
        let lines = wrapped(text, usize::from(area.columns));
        let room = usize::from(area.rows);
        for (row, line) in lines.iter().take(room).enumerate() {
            let is_cut = row + 1 == room && lines.len() > room;
            let line = if is_cut { format!("{line} {}", more(self.style)) } else { line.clone() };
            self.text(area, [0, row as u16], &line, ink);
        }
        lines.len().min(room) as u16
    }

    /// A row of an area in one ink, as far as it has none.
    pub(super) fn row(&mut self, area: Area, row: u16, ink: Ink) {
        let look = look(ink, self.depth);
        for column in 0..area.columns {
            if let Some(cell) = self.buffer.cell_mut((area.x + column, area.y + row)) {
                cell.set_style(look);
            }
        }
    }

    /// A line of one character across an area.
    pub(super) fn rule(&mut self, area: Area, row: u16) {
        let line = self.either('─', '-').to_string().repeat(area.columns.into());
        self.text(area, [0, row], &line, Ink::Faint);
    }

    /// Blanks in all of an area.
    pub(super) fn clear(&mut self, area: Area) {
        for row in 0..area.rows {
            for column in 0..area.columns {
                if let Some(cell) = self.buffer.cell_mut((area.x + column, area.y + row)) {
                    cell.reset();
                }
            }
        }
    }

    /// A grid in an area, as much of it as fits.
    pub(super) fn grid(&mut self, area: Area, grid: &Grid) {
        for row in 0..grid.rows.min(area.rows.into()) {
            for (column, &(glyph, ink)) in grid.row(row).iter().take(area.columns.into()).enumerate() {
                let place = (area.x + column as u16, area.y + row as u16);
                if let Some(cell) = self.buffer.cell_mut(place) {
                    cell.set_char(glyph);
                    // A blank shows no ink; leaving it out spares bytes.
                    cell.set_style(look(if glyph == ' ' && ink != Ink::Chosen { Ink::Plain } else { ink }, self.depth));
                }
            }
        }
        for label in &grid.labels {
            if let (Ok(column), Ok(row)) = (u16::try_from(label.column), u16::try_from(label.row)) {
                self.text(area, [column, row], &label.text, label.ink);
            }
        }
    }
}

/// What stands for what was cut.
pub(super) fn more(style: Style) -> &'static str {
    if style == Style::Unicode { "…" } else { "..." }
}

/// A text from a file, harmless, and in ASCII where that is all there is.
fn harmless(text: &str, style: Style) -> String {
    let text = cleanse(text);
    if style == Style::Unicode || text.is_ascii() {
        return text.into_owned();
    }
    text.chars().map(|c| if c.is_ascii() { c.to_string() } else { c.escape_default().to_string() }).collect()
}

/// As much of a text as fits, with a mark where it was cut.
fn fitted(text: &str, width: usize, style: Style) -> String {
    if text.width() <= width {
        return text.to_owned();
    }
    let mark = more(style);
    let room = width.saturating_sub(mark.width());
    let mut used = 0;
    let kept: String = text
        .chars()
        .take_while(|c| {
            used += c.width().unwrap_or(0);
            used <= room
        })
        .collect();
    kept + if width >= mark.width() { mark } else { "" }
}

/// Words in lines of a width.
pub(super) fn wrapped(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        match lines.last_mut() {
            Some(line) if line.width() + 1 + word.width() <= width => {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}

/// The colours of Okabe & Ito (2008), which all eyes tell apart, in their order without black; for 256 and for eight
/// colours the nearest there are.
const PALETTE: [([u8; 3], u8, Color); 7] = [
    ([230, 159, 0], 214, Color::Yellow),
    ([86, 180, 233], 74, Color::Cyan),
    ([0, 158, 115], 36, Color::Green),
    ([240, 228, 66], 227, Color::Yellow),
    ([0, 114, 178], 25, Color::Blue),
    ([213, 94, 0], 166, Color::Red),
    ([204, 121, 167], 175, Color::Magenta),
];

fn colour(index: usize, depth: Depth) -> Option<Color> {
    let ([red, green, blue], many, eight) = PALETTE[index % PALETTE.len()];
    match depth {
        Depth::None => None,
        Depth::Eight => Some(eight),
        Depth::Many => Some(Color::Indexed(many)),
        Depth::Any => Some(Color::Rgb(red, green, blue)),
    }
}

/// What an ink looks like: an attribute that any terminal has, and where there is colour a colour.
fn look(ink: Ink, depth: Depth) -> Look {
    let plain = Look::default();
    let coloured = |index: usize| colour(index, depth).map_or(plain, |colour| plain.fg(colour));
    match ink {
        Ink::Plain | Ink::Numerical => plain,
        Ink::Faint => plain.add_modifier(Modifier::DIM),
        Ink::Strong | Ink::Changed => plain.add_modifier(Modifier::BOLD),
        Ink::Chosen => plain.add_modifier(Modifier::REVERSED),
        Ink::Species(index) => coloured(index),
        Ink::Now => coloured(6),
        Ink::Proved => coloured(2),
        Ink::Undecided => coloured(0),
        Ink::Point | Ink::Path | Ink::Warning => coloured(5).add_modifier(Modifier::BOLD),
    }
}
