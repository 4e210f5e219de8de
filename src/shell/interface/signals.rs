//! What the system asks for: an end, a pause, going on, another size.

use std::io;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Arc, LazyLock};
use std::thread;

use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP, SIGWINCH};
use signal_hook::flag::register_usize;
use signal_hook::iterator::Signals;

use super::ending::end;
use super::screen::size;
use super::{Event, Events};
use crate::app::Msg;

/// The last of the two signals that concern a pause. It is noted where the signal arrives, not on the thread that listens:
/// when a stopped process goes on, nothing says which of its threads runs first.
static LAST: LazyLock<Arc<AtomicUsize>> = LazyLock::new(Arc::default);

/// Whether the process was told to go on after it was last told to pause: then there is nothing to stop for any more.
pub(super) fn goes_on() -> bool {
    LAST.load(Ordering::SeqCst) == SIGCONT.unsigned_abs() as usize
}

/// Listens from now on.
///
/// # Errors
/// If the system does not let us.
pub(super) fn listen(events: Events) -> io::Result<()> {
    for signal in [SIGCONT, SIGTSTP] {
        register_usize(signal, Arc::clone(&LAST), signal.unsigned_abs() as usize)?;
    }
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
        SIGTSTP => Event::Pause,
        SIGCONT => Event::Resume,
        _ => Event::Signal(signal),
    };
    let is_end = matches!(event, Event::Signal(_));
    let _ = events.send(event);
    if is_end {
        end(128 + signal);
    }
}
