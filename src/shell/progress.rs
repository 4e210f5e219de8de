//! How far a long search has come, on standard error where that is a terminal; gone when the search is done.

use std::io::{self, IsTerminal, Write};
use std::sync::Mutex;
use std::sync::atomic::{AtomicU64, AtomicUsize, Ordering};
use std::time::{Duration, Instant};

use super::terminal;
use crate::analysis::equilibria::Progress;
use crate::report::progress::done;

/// Work shorter than this is not spoken of.
const PATIENCE: Duration = Duration::from_millis(500);
/// How long a line stays before it is replaced.
const LASTING: Duration = Duration::from_millis(200);
/// Room that the line takes at most.
const ROOM: usize = 72;

/// A line that counts.
pub struct Meter {
    wanted: bool,
    /// Columns; fewer than the terminal has, so that the line never wraps.
    room: usize,
    start: Instant,
    faces: AtomicUsize,
    boxes: AtomicUsize,
    share: AtomicU64,
    /// When the line was last written.
    written: Mutex<Option<Instant>>,
}

impl Meter {
    /// Starts counting.
    pub fn start() -> Self {
        Self {
            wanted: io::stderr().is_terminal(),
            room: ROOM.min(terminal::width_for_remarks().saturating_sub(1)),
            start: Instant::now(),
            faces: AtomicUsize::new(0),
            boxes: AtomicUsize::new(0),
            share: AtomicU64::new(0),
            written: Mutex::new(None),
        }
    }

    /// All work so far.
    fn all(&self) -> Progress {
        Progress {
            faces: self.faces.load(Ordering::Relaxed),
            boxes: self.boxes.load(Ordering::Relaxed),
            share: self.share.load(Ordering::Relaxed),
        }
    }

    /// Takes account of some work, and says so from time to time.
    pub fn add(&self, work: Progress) {
        if !self.wanted {
            return;
        }
        self.faces.fetch_add(work.faces, Ordering::Relaxed);
        self.boxes.fetch_add(work.boxes, Ordering::Relaxed);
        self.share.fetch_add(work.share, Ordering::Relaxed);
        // Another thread that is writing just now writes enough for both.
        let Ok(mut written) = self.written.try_lock() else { return };
        let is_due = match *written {
            None => self.start.elapsed() >= PATIENCE,
            Some(last) => last.elapsed() >= LASTING,
        };
        if is_due {
            *written = Some(Instant::now());
            self.put(&format!("searching: {}, {} s", done(self.all()), self.start.elapsed().as_secs()));
        }
    }

    /// Writes over the line; with spaces rather than an erasing sequence, which not every terminal knows.
    fn put(&self, text: &str) {
        // With standard error gone there is nobody left to tell.
        let _ = io::stderr().lock().write_all(format!("\r{text:0$.0$}", self.room).as_bytes());
    }
}

impl Drop for Meter {
    fn drop(&mut self) {
        if self.written.get_mut().is_ok_and(|written| written.is_some()) {
            self.put("");
            let _ = io::stderr().write_all(b"\r");
        }
    }
}
