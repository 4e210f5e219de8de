//! Ends the process when the loop cannot: it may be writing to a terminal that takes nothing any more, or be stuck.

use std::process;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::mpsc::channel;
use std::thread;
use std::time::{Duration, Instant};

use super::screen::give_back;

/// How long the loop has to end by itself.
const GRACE: Duration = Duration::from_millis(250);
/// How long a file that is being written is waited for.
const FILE: Duration = Duration::from_secs(3);
/// How often it is looked whether the file is written.
const LOOK: Duration = Duration::from_millis(10);

static UNFINISHED: AtomicUsize = AtomicUsize::new(0);

/// Something that is to be done whole, such as writing a file: while it is there, the process does not end by itself.
pub(super) struct Whole(());

impl Whole {
    pub(super) fn begin() -> Self {
        UNFINISHED.fetch_add(1, Ordering::SeqCst);
        Self(())
    }
}

impl Drop for Whole {
    fn drop(&mut self) {
        UNFINISHED.fetch_sub(1, Ordering::SeqCst);
    }
}

/// Ends the process after a while, if it has not ended until then.
pub(super) fn end(code: i32) -> ! {
    thread::sleep(GRACE);
    let until = Instant::now() + FILE;
    while UNFINISHED.load(Ordering::SeqCst) > 0 && Instant::now() < until {
        thread::sleep(LOOK);
    }
    // A terminal that takes nothing would hold this thread up as well.
    let (sender, given_back) = channel();
    let giving = move || {
        give_back();
        let _ = sender.send(());
    };
    if thread::Builder::new().spawn(giving).is_ok() {
        let _ = given_back.recv_timeout(GRACE);
    }
    process::exit(code)
}
