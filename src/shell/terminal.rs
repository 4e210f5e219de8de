//! What is known of the terminal that results go to.

use std::io::{self, IsTerminal};

use crossterm::terminal::window_size;

/// Columns where no terminal says otherwise.
pub const COLUMNS: usize = 80;

/// Rows where no terminal says otherwise.
pub const ROWS: usize = 24;

/// Columns of the terminal that standard output is, or 80 where it is none or does not say.
pub fn width() -> usize {
    if io::stdout().is_terminal() { of_terminal() } else { COLUMNS }
}

/// Rows of the terminal that standard output is; `None` where it is none or does not say.
pub fn height() -> Option<usize> {
    let rows = || window_size().map(|size| usize::from(size.rows)).ok().filter(|&rows| rows > 0);
    io::stdout().is_terminal().then(rows).flatten()
}

/// Columns of the terminal that standard error is, or 80 where it is none or does not say.
pub fn width_for_remarks() -> usize {
    if io::stderr().is_terminal() { of_terminal() } else { COLUMNS }
}

/// The library asks the controlling terminal, which says nothing about a file or a pipe.
fn of_terminal() -> usize {
    window_size().map(|size| usize::from(size.columns)).ok().filter(|&columns| columns > 0).unwrap_or(COLUMNS)
}
