//! Listens to the terminal, on a thread of its own.
//!
//! It waits for bytes with `poll`, which also tells when the terminal is gone: a read from one that is gone answers at once,
//! with nothing, for ever. What the bytes mean is in `decode`.

use std::fs::File;
use std::io::{self, IsTerminal, Read};
use std::os::fd::AsFd;
use std::thread;
use std::time::Duration;

use rustix::event::{PollFd, PollFlags, Timespec, poll};
use rustix::io::Errno;

use super::decode::Decoder;
use super::ending::end;
use super::{Event, Events, HANGUP};

/// Reads that may bring nothing, one after another, before the terminal counts as gone.
const MOST_EMPTY: usize = 3;

/// What waiting came to.
enum Heard {
    Bytes,
    Nothing,
    /// A signal came between; nothing is known.
    Again,
    Gone,
}

/// Listens from now on.
///
/// # Errors
/// If there is no terminal to listen to, or no thread to be had.
pub(super) fn listen(events: Events) -> io::Result<()> {
    let terminal = terminal()?;
    let listening = move || {
        follow(terminal, &events);
        let _ = events.send(Event::Gone);
        end(128 + HANGUP);
    };
    thread::Builder::new().name("input".to_owned()).spawn(listening).map(|_| ())
}

/// Standard input, or where that is no terminal the one that the process belongs to.
fn terminal() -> io::Result<File> {
    let input = io::stdin();
    if input.is_terminal() { input.as_fd().try_clone_to_owned().map(File::from) } else { File::open("/dev/tty") }
}

/// Until the terminal is gone, or nobody hears of it any more.
fn follow(mut terminal: File, events: &Events) {
    let mut decoder = Decoder::default();
    let mut bytes = [0; 1024];
    let mut empty = 0;
    while empty < MOST_EMPTY {
        let mut is_heard = true;
        let mut send = |msg| is_heard &= events.send(Event::Msg(msg)).is_ok();
        match wait(&terminal, decoder.patience()) {
            Heard::Gone => return,
            Heard::Again => {}
            Heard::Nothing => decoder.end(&mut send),
            Heard::Bytes => match terminal.read(&mut bytes) {
                Ok(0) => empty += 1,
                Ok(count) => {
                    empty = 0;
                    bytes[..count].iter().for_each(|&byte| decoder.take(byte, &mut send));
                }
                Err(error) if error.kind() == io::ErrorKind::Interrupted => {}
                Err(_) => empty += 1,
            },
        }
        if !is_heard {
            return;
        }
    }
}

fn wait(terminal: &File, patience: Option<Duration>) -> Heard {
    let limit = patience.and_then(|patience| Timespec::try_from(patience).ok());
    let mut watched = [PollFd::new(terminal, PollFlags::IN)];
    match poll(&mut watched, limit.as_ref()) {
        Ok(0) => Heard::Nothing,
        Ok(_) if watched[0].revents().intersects(PollFlags::HUP | PollFlags::ERR | PollFlags::NVAL) => Heard::Gone,
        Ok(_) => Heard::Bytes,
        Err(Errno::INTR) => Heard::Again,
        Err(_) => Heard::Gone,
    }
}
