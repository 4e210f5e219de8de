//! What the system asks for: an end, or a pause.
//!
//! The loop may be in the middle of writing to a terminal that is gone, so the end does not hang on it: after a short while
//! the terminal is given back and the process ended from here.

use std::process;
use std::thread;
use std::time::Duration;

use anyhow::Result;
use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM, SIGTSTP};
use signal_hook::iterator::Signals;

use super::screen::give_back;
use super::{Event, Events};

/// How long the loop has to end by itself: to keep what was tried.
const GRACE: Duration = Duration::from_millis(250);

/// Listens from now on.
pub(super) fn listen(events: Events) -> Result<()> {
    let mut signals = Signals::new([SIGHUP, SIGINT, SIGTERM, SIGTSTP])?;
    thread::Builder::new().name("signals".to_owned()).spawn(move || {
        for signal in signals.forever() {
            if signal == SIGTSTP {
                let _ = events.send(Event::Pause);
                continue;
            }
            let _ = events.send(Event::Signal(signal));
            thread::sleep(GRACE);
            give_back();
            process::exit(128 + signal);
        }
    })?;
    Ok(())
}
