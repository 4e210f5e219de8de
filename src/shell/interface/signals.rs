//! What the system asks for: an end, a pause, going on, another size.

use std::io;
use std::thread;

use signal_hook::consts::{SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP, SIGWINCH};
use signal_hook::iterator::Signals;

use super::ending::end;
use super::screen::size;
use super::{Event, Events};
use crate::app::Msg;

/// Listens from now on.
///
/// # Errors
/// If the system does not let us.
pub(super) fn listen(events: Events) -> io::Result<()> {
    let mut signals = Signals::new([SIGCONT, SIGHUP, SIGINT, SIGQUIT, SIGTERM, SIGTSTP, SIGWINCH])?;
    let listening = move || {
        for signal in signals.forever() {
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
    };
    thread::Builder::new().name("signals".to_owned()).spawn(listening).map(|_| ())
}
