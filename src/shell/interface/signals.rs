//! What the system asks for: an end, a pause, going on, another size.

use std::io;
use std::sync::atomic::{AtomicBool, Ordering};
use std::thread;

use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP, SIGWINCH};
use signal_hook::iterator::Signals;

use super::ending::end;
use super::screen::size;
use super::{Event, Events};
use crate::app::Msg;

/// Whether the process was told to go on after it was last told to pause.
static GOES_ON: AtomicBool = AtomicBool::new(false);

/// Whether the process was told to go on after it was last told to pause: then there is nothing to stop for any more.
pub(super) fn goes_on() -> bool {
    GOES_ON.load(Ordering::SeqCst)
}

/// Listens from now on.
///
/// # Errors
/// If the system does not let us.
pub(super) fn listen(events: Events) -> io::Result<()> {
    let mut signals = Signals::new([SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP, SIGWINCH])?;
    let listening = move || {
        loop {
            // Those that came together come in no order. Going on is then taken for the last: a process that stops too
            // rarely is less of a nuisance than one that stops for ever.
            let mut came: Vec<i32> = signals.wait().collect();
            came.sort_by_key(|&signal| signal == SIGCONT);
            for signal in came {
                tell(signal, &events);
            }
        }
    };
    thread::Builder::new().name("signals".to_owned()).spawn(listening).map(|_| ())
}

fn tell(signal: i32, events: &Events) {
    let event = match signal {
        SIGWINCH => Event::Msg(Msg::Resized(size())),
        SIGTSTP => {
            GOES_ON.store(false, Ordering::SeqCst);
            Event::Pause
        }
        SIGCONT => {
            GOES_ON.store(true, Ordering::SeqCst);
            Event::Resume
        }
        _ => Event::Signal(signal),
    };
    let is_end = matches!(event, Event::Signal(_));
    let _ = events.send(event);
    if is_end {
        end(128 + signal);
    }
}
