//! A screen as text: what is written to a file, and what tests compare.

use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use unicode_width::UnicodeWidthStr;

use super::view;
use crate::app::App;

/// The screen as lines, nothing blank at their ends. All that a screen says is in words and signs, so nothing is lost with
/// the colours.
pub fn text(app: &App) -> String {
    let (columns, rows) = (app.size.columns, app.size.rows);
    let mut buffer = Buffer::empty(Rect::new(0, 0, columns, rows));
    view(app, &mut buffer);
    (0..rows).map(|row| line(&buffer, row) + "\n").collect()
}

fn line(buffer: &Buffer, row: u16) -> String {
    let mut line = String::new();
    let mut column = 0;
    while let Some(cell) = (column < buffer.area.width).then(|| buffer.cell((column, row))).flatten() {
        line.push_str(cell.symbol());
        // A wide character covers the cell after its own.
        column += u16::try_from(cell.symbol().width()).unwrap_or(1).max(1);
    }
    line.truncate(line.trim_end().len());
    line
}
