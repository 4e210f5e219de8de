//! The interface on a terminal: keys in, frames out, work on threads beside it.
//!
//! [`run`] is the way in. `input` listens to the terminal and `decode` knows what its bytes mean, `signals` listens to the
//! system, `labour` does tasks on threads, `effects` does what `update` asks for, `painter` writes what has changed, `screen`
//! takes the terminal and gives it back, `ending` ends the process where the loop cannot, `abilities` says what the terminal
//! can show. The loop sleeps until something comes: nothing here has a tick.

mod abilities;
mod decode;
mod effects;
mod ending;
mod input;
mod labour;
mod painter;
mod screen;
mod signals;
#[cfg(test)]
mod tests;

use std::io;
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, TryRecvError, channel};
use std::time::{Duration, Instant};

use anyhow::{Context, Result};

use crate::app::{App, Effect, Msg, Size, Source, update};
use crate::shell::memory::Memory;
use crate::shell::workers::Threads;
use crate::ui::{text, view};
use effects::Outside;
use labour::Labour;
use painter::Painter;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use screen::Output;

pub use abilities::{Abilities, Wish};

/// How long a frame waits for quick answers, so that it need not be drawn twice.
const PATIENCE: Duration = Duration::from_millis(8);

/// What the interface starts with.
pub struct Start {
    /// The model to open; without, the chooser.
    pub model: Option<Source>,
    /// What the terminal can show.
    pub abilities: Abilities,
    /// Seconds that the search of one scenario may take.
    pub budget: f64,
    /// Threads that search at once.
    pub threads: Threads,
    /// Parameters that are set for the whole session, by name.
    pub set: Vec<(String, f64)>,
    /// The only scenarios that are shown, by name; all where there are none.
    pub only: Vec<String>,
}

/// How it ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum End {
    /// The user left.
    Left,
    /// The system asked for an end, by the signal of this number.
    Signal(i32),
    /// The terminal is gone.
    Lost,
}

/// The signal that says that a terminal is gone.
const HANGUP: i32 = signal_hook::consts::SIGHUP;

/// What wakes the loop.
enum Event {
    /// Something for the state.
    Msg(Msg),
    /// The system asks for an end.
    Signal(i32),
    /// The system asks for a pause.
    Pause,
    /// The process goes on after it was stopped.
    Resume,
    /// The terminal is gone.
    Gone,
}

/// Runs until the user leaves or the system asks for an end; the terminal is given back in either case.
///
/// # Errors
/// If there is no terminal to be taken.
pub fn run(start: Start) -> Result<End> {
    let (sender, events) = channel();
    // Before the terminal is taken, so that no signal leaves it taken.
    signals::listen(sender.clone()).context("the system's signals cannot be heard")?;
    let screen = screen::take(start.abilities)?;
    input::listen(sender.clone()).context("the terminal cannot be read")?;
    let mut app = App::new(screen::size(), start.abilities.style, start.abilities.depth);
    app.budget = start.budget;
    app.set = start.set;
    app.only = start.only;
    if let Some(source) = start.model {
        app.edition += 1;
        app.reading = Some((source, app.edition));
    }
    let labour = Labour::start(start.threads, &sender);
    let mut interface = Interface {
        app,
        painter: Painter::new(start.abilities.style, start.abilities.depth),
        outside: Outside::new(labour, sender, Memory::open()),
        output: screen::output()?,
    };
    let end = interface.go(&events);
    drop(screen);
    // What is still to be written is written; the user sees the shell meanwhile.
    let whole = ending::Whole::begin();
    drop(interface);
    drop(whole);
    Ok(end)
}

struct Interface {
    app: App,
    painter: Painter,
    outside: Outside,
    output: Output,
}

impl Interface {
    fn go(&mut self, events: &Receiver<Event>) -> End {
        // The first frame needs nothing but the size.
        let mut end = self.tell(Msg::Resized(self.app.size));
        loop {
            end = end.or_else(|| self.drain(events));
            if let Some(end) = end {
                return end;
            }
            if screen::is_taken() && self.draw().is_err() {
                return End::Lost;
            }
            end = match events.recv() {
                Ok(event) => self.take(event),
                Err(_) => Some(End::Lost),
            };
        }
    }

    /// Everything that is there already, and what comes while quick answers are waited for.
    fn drain(&mut self, events: &Receiver<Event>) -> Option<End> {
        let until = Instant::now() + PATIENCE;
        loop {
            let event = if self.outside.awaits_quick() {
                match events.recv_timeout(until.saturating_duration_since(Instant::now())) {
                    Ok(event) => event,
                    Err(RecvTimeoutError::Timeout) => return None,
                    Err(RecvTimeoutError::Disconnected) => return Some(End::Lost),
                }
            } else {
                match events.try_recv() {
                    Ok(event) => event,
                    Err(TryRecvError::Empty) => return None,
                    Err(TryRecvError::Disconnected) => return Some(End::Lost),
                }
            };
            if let Some(end) = self.take(event) {
                return Some(end);
            }
        }
    }

    fn take(&mut self, event: Event) -> Option<End> {
        match event {
            Event::Msg(msg) => self.tell(msg),
            Event::Signal(number) => Some(End::Signal(number)),
            Event::Pause => screen::pause().err().map(|_| End::Lost),
            Event::Resume => self.resume(),
            Event::Gone => Some(End::Lost),
        }
    }

    fn tell(&mut self, msg: Msg) -> Option<End> {
        if let Msg::Answered(id, _) = &msg {
            self.outside.answered(*id);
        }
        let mut end = None;
        for effect in update(&mut self.app, msg) {
            match effect {
                Effect::Leave => end = Some(End::Left),
                Effect::Redraw => self.painter.forget(),
                Effect::Suspend => screen::ask_for_pause(),
                Effect::WriteScreen { path, replace } => {
                    let text = text(&self.app);
                    self.outside.perform(Effect::Write { path, text, replace });
                }
                effect => self.outside.perform(effect),
            }
        }
        end
    }

    /// The process was stopped, by us or by someone else: the terminal may have been used, or have another size.
    fn resume(&mut self) -> Option<End> {
        if screen::take_again().is_err() {
            return Some(End::Lost);
        }
        self.app.size = screen::size();
        self.tell(Msg::Resumed)
    }

    fn draw(&mut self) -> io::Result<()> {
        let Size { columns, rows } = self.app.size;
        let mut buffer = Buffer::empty(Rect::new(0, 0, columns, rows));
        view(&self.app, &mut buffer);
        self.painter.paint(buffer, &mut self.output)
    }
}

/// Where events are sent to.
type Events = Sender<Event>;
