//! Takes the terminal, and gives it back whatever happens: at the end, in a pause, in a panic, on a signal.
//!
//! Whether it is taken is known to the whole process, because a panic and a signal come from anywhere. Nothing here asks the
//! terminal a question: on some lines nobody answers.

use std::fs::File;
use std::io::{self, Write};
use std::os::fd::AsFd;
use std::panic;
use std::process;
use std::sync::Once;
use std::sync::atomic::{AtomicBool, Ordering};

use anyhow::{Context, Result};
use crossterm::terminal::{disable_raw_mode, enable_raw_mode};
use rustix::event::{PollFd, PollFlags, poll};
use rustix::io::Errno;
use rustix::process::{Signal, getpgrp, getsid, kill_current_process_group};
use rustix::termios::tcgetwinsize;
use signal_hook::consts::SIGSTOP;
use signal_hook::low_level::raise;

use super::Abilities;
use super::signals::goes_on;
use crate::app::Size;
use crate::shell::terminal::{COLUMNS, ROWS};

static IS_TAKEN: AtomicBool = AtomicBool::new(false);
static HAS_SECOND: AtomicBool = AtomicBool::new(true);

/// Second screen, pasted texts told apart from typed ones.
const ENTER: &[u8] = b"\x1b[?1049h\x1b[?2004h";
const LEAVE: &[u8] = b"\x1b[m\x1b[?2004l\x1b[?1049l\x1b[?25h";
/// Where there is no second screen, an empty first one.
const LEAVE_EMPTY: &[u8] = b"\x1b[m\x1b[H\x1b[2J\x1b[?25h";
const HIDE_CURSOR: &[u8] = b"\x1b[?25l";

/// Larger terminals are used in part: nothing that a terminal says of itself may cost more memory than this.
const LARGEST: Size = Size { columns: 1000, rows: 400 };

/// What a process that panicked ends with.
const PANICKED: i32 = 101;

/// The terminal while it is ours; dropping it gives it back.
pub(super) struct Taken(());

impl Drop for Taken {
    fn drop(&mut self) {
        give_back();
    }
}

/// Takes the terminal.
///
/// # Errors
/// If there is none, or it is gone.
pub(super) fn take(abilities: Abilities) -> Result<Taken> {
    static HOOK: Once = Once::new();
    HOOK.call_once(end_on_panic);
    HAS_SECOND.store(abilities.has_second_screen, Ordering::SeqCst);
    let taken = Taken(());
    enter().context("the terminal cannot be used; \"restpoint table\" needs none")?;
    Ok(taken)
}

/// A thread that panicked leaves nobody to do its work: what it says is shown where it can be read, and the process ends.
fn end_on_panic() {
    let before = panic::take_hook();
    panic::set_hook(Box::new(move |info| {
        let was_taken = give_back();
        before(info);
        if was_taken {
            process::exit(PANICKED);
        }
    }));
}

fn enter() -> io::Result<()> {
    enable_raw_mode()?;
    IS_TAKEN.store(true, Ordering::SeqCst);
    let mut first = Vec::new();
    if HAS_SECOND.load(Ordering::SeqCst) {
        first.extend_from_slice(ENTER);
    }
    first.extend_from_slice(HIDE_CURSOR);
    output()?.write_all(&first)
}

/// Gives the terminal back, once; whether it was taken. Errors are of no use to anyone: the terminal is gone then.
pub(super) fn give_back() -> bool {
    if !IS_TAKEN.swap(false, Ordering::SeqCst) {
        return false;
    }
    // The modes first: a terminal that takes no bytes still takes those.
    let _ = disable_raw_mode();
    let last = if HAS_SECOND.load(Ordering::SeqCst) { LEAVE } else { LEAVE_EMPTY };
    let _ = output().and_then(|mut output| output.write_all(last));
    true
}

/// Whether it is ours just now.
pub(super) fn is_taken() -> bool {
    IS_TAKEN.load(Ordering::SeqCst)
}

/// Standard output without the lock and the buffer, for whoever panicked or hangs may hold them.
pub(super) fn output() -> io::Result<Output> {
    io::stdout().as_fd().try_clone_to_owned().map(File::from).map(Output)
}

/// Takes everything, even where another program has left the terminal in the mode that never waits.
pub(super) struct Output(File);

impl Write for Output {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        loop {
            match self.0.write(bytes) {
                Err(error) if error.kind() == io::ErrorKind::WouldBlock => {
                    let mut watched = [PollFd::new(&self.0, PollFlags::OUT)];
                    match poll(&mut watched, None) {
                        Ok(_) | Err(Errno::INTR) => {}
                        Err(error) => return Err(error.into()),
                    }
                }
                done => return done,
            }
        }
    }

    fn flush(&mut self) -> io::Result<()> {
        self.0.flush()
    }
}

/// Pauses all processes that were started together with this one, as the terminal would on Ctrl-Z.
///
/// By the signal that nobody can catch: one that we caught ourselves would have us stop a moment later, and a shell that is
/// quick may have told us to go on before.
pub(super) fn ask_for_pause() {
    if has_shell() {
        // Before: as soon as another of them has stopped, the shell takes the terminal, and we may not change it any more.
        give_back();
        let _ = kill_current_process_group(Signal::STOP);
    }
}

/// Gives the terminal back and stops the process, until it is told to go on; nothing where nobody could tell it.
///
/// # Errors
/// If the system does not let us.
pub(super) fn pause() -> io::Result<()> {
    if !has_shell() {
        return Ok(());
    }
    give_back();
    // A shell that is quick may have let us go on before we came to stop.
    if goes_on() { Ok(()) } else { raise(SIGSTOP) }
}

/// Whether a shell with job control started us: it puts each job into a group of its own. Without, as when a login runs the
/// program in the shell's place, the system ignores Ctrl-Z as well.
fn has_shell() -> bool {
    getsid(None).is_ok_and(|session| session != getpgrp())
}

/// Takes the terminal anew, after someone else may have used it.
///
/// # Errors
/// If it is gone.
pub(super) fn take_again() -> io::Result<()> {
    give_back();
    enter()
}

/// Columns and rows of the terminal.
pub(super) fn size() -> Size {
    match tcgetwinsize(io::stdout()) {
        Ok(size) if size.ws_col > 0 && size.ws_row > 0 => {
            Size { columns: size.ws_col.min(LARGEST.columns), rows: size.ws_row.min(LARGEST.rows) }
        }
        _ => Size { columns: COLUMNS as u16, rows: ROWS as u16 },
    }
}
