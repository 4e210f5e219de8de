//! Takes the terminal, and gives it back whatever happens: at the end, in a pause, in a panic, on a signal.
//!
//! Whether it is taken is known to the whole process, because a panic and a signal come from anywhere.

use std::io::{self, Write};
use std::panic;
use std::sync::Once;
use std::sync::atomic::{AtomicBool, Ordering};

use anyhow::{Context, Result};
use crossterm::terminal::{disable_raw_mode, enable_raw_mode, window_size};
use signal_hook::consts::SIGTSTP;
use signal_hook::low_level::emulate_default_handler;

use super::Abilities;
use crate::app::Size;
use crate::shell::terminal::{COLUMNS, ROWS};

static TAKEN: AtomicBool = AtomicBool::new(false);
static HAS_SECOND: AtomicBool = AtomicBool::new(true);

/// Second screen, no cursor, pasted texts told apart from typed ones.
const ENTER: &[u8] = b"\x1b[?1049h\x1b[?2004h";
const LEAVE: &[u8] = b"\x1b[?2004l\x1b[?1049l";
const HIDE: &[u8] = b"\x1b[?25l\x1b[m\x1b[2J";
const SHOW: &[u8] = b"\x1b[m\x1b[?25h";

/// The terminal while it is ours; dropping it gives it back.
pub(super) struct Taken(());

impl Drop for Taken {
    fn drop(&mut self) {
        give_back();
    }
}

/// Takes the terminal.
pub(super) fn take(abilities: Abilities) -> Result<Taken> {
    static HOOK: Once = Once::new();
    HOOK.call_once(|| {
        let before = panic::take_hook();
        panic::set_hook(Box::new(move |info| {
            give_back();
            before(info);
        }));
    });
    HAS_SECOND.store(abilities.has_second_screen, Ordering::SeqCst);
    enter().context("the terminal cannot be taken; \"restpoint table\" needs none")?;
    Ok(Taken(()))
}

fn enter() -> io::Result<()> {
    enable_raw_mode()?;
    TAKEN.store(true, Ordering::SeqCst);
    let mut out = io::stdout().lock();
    if HAS_SECOND.load(Ordering::SeqCst) {
        out.write_all(ENTER)?;
    }
    out.write_all(HIDE)?;
    out.flush()
}

/// Gives the terminal back, once; nothing where it is not taken. Errors are of no use to anyone: the terminal is gone then.
pub(super) fn give_back() {
    if !TAKEN.swap(false, Ordering::SeqCst) {
        return;
    }
    let mut last = Vec::new();
    if HAS_SECOND.load(Ordering::SeqCst) {
        last.extend_from_slice(LEAVE);
    } else {
        last.extend_from_slice(b"\x1b[2J\x1b[H");
    }
    last.extend_from_slice(SHOW);
    // Not the lock: whoever panicked may hold it.
    let _ = straight(&last);
    let _ = disable_raw_mode();
}

fn straight(bytes: &[u8]) -> io::Result<()> {
    let mut tty = std::fs::OpenOptions::new().write(true).open("/dev/tty")?;
    tty.write_all(bytes)
}

/// Gives the terminal back, stops the process as Ctrl-Z does, and takes the terminal again when it goes on.
pub(super) fn pause() -> io::Result<()> {
    give_back();
    emulate_default_handler(SIGTSTP)?;
    enter()
}

/// Columns and rows of the terminal.
pub(super) fn size() -> Size {
    match window_size() {
        Ok(size) if size.columns > 0 && size.rows > 0 => Size { columns: size.columns, rows: size.rows },
        _ => Size { columns: COLUMNS as u16, rows: ROWS as u16 },
    }
}
