//! Does what the state asks for, outside.
//!
//! Tasks go to `labour`; errands with files to a thread of their own, one after another, so that no disk holds up a key.
//! What was tried is kept a second after it changed, and at the end whatever the end is: dropping [`Outside`] waits for it.

use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::thread::{Builder, JoinHandle};
use std::time::{Duration, Instant};

use super::ending::Whole;
use super::labour::Labour;
use super::{Event, Events};
use crate::app::{Effect, JobId, Msg, Source};
use crate::shell::errands::{Errands, file};
use crate::shell::memory::Memory;
use crate::shell::watch::{Seen, Watch};

/// How long what was tried may change before it is kept.
const PATIENCE: Duration = Duration::from_secs(1);

/// All that is outside.
pub(super) struct Outside {
    labour: Labour,
    events: Events,
    memory: Memory,
    /// Gone at the end: the thread then does what is left and ends.
    errands: Option<Sender<Errand>>,
    thread: Option<JoinHandle<()>>,
    watch: Option<Watch>,
}

impl Outside {
    pub(super) fn new(labour: Labour, events: Events, memory: Memory) -> Self {
        let (errands, orders) = channel();
        let (answers, own) = (events.clone(), memory.clone());
        let work = move || run_errands(&orders, Errands::new(own), &answers);
        let thread = Builder::new().name("errands".to_owned()).spawn(work).ok();
        Self { labour, events, memory, errands: Some(errands), thread, watch: None }
    }

    pub(super) fn awaits(&self, moment: Duration) -> bool {
        self.labour.awaits(moment)
    }

    pub(super) fn answered(&mut self, id: JobId) {
        self.labour.answered(id);
    }

    pub(super) fn perform(&mut self, effect: Effect) {
        match effect {
            Effect::Ask(id, task) => self.labour.ask(id, task),
            Effect::Stop(id) => self.labour.stop(id),
            Effect::Watch(source, world) => self.watch(&source, &Seen::from(&world.original)),
            Effect::List(listing, given) => self.list(listing, given),
            // The loop does these itself.
            Effect::Redraw | Effect::Suspend | Effect::Leave | Effect::WriteScreen { .. } => {}
            errand => {
                if let Some(errands) = &self.errands {
                    let _ = errands.send((errand, Whole::begin()));
                }
            }
        }
    }

    fn watch(&mut self, source: &Source, seen: &Seen) {
        // The old watch ends before the new one begins, for it may be on the same folder.
        self.watch = None;
        let Some(path) = file(source) else { return };
        let events = self.events.clone();
        let watch = Watch::start(&path, seen, move || {
            let _ = events.send(Event::Msg(Msg::Changed));
        });
        if let Some(remark) = watch.remark() {
            let _ = self.events.send(Event::Msg(Msg::Remarked(remark.to_owned())));
        }
        self.watch = Some(watch);
    }

    fn list(&self, listing: u64, given: Vec<std::path::PathBuf>) {
        let (events, memory) = (self.events.clone(), self.memory.clone());
        let work = move || {
            let send = |msg| {
                let _ = events.send(Event::Msg(msg));
            };
            Errands::list(&memory, &given, &mut |entry| send(Msg::Listed(listing, entry)));
            send(Msg::AllListed(listing));
        };
        if Builder::new().name("list".to_owned()).spawn(work).is_err() {
            let _ = self.events.send(Event::Msg(Msg::AllListed(listing)));
        }
    }
}

impl Drop for Outside {
    fn drop(&mut self) {
        self.errands = None;
        if let Some(thread) = self.thread.take() {
            let _ = thread.join();
        }
    }
}

/// An errand, and that it is to be done whole: from when it is asked for until it is done.
type Errand = (Effect, Whole);

/// What is to be kept, and until when it may wait.
type Kept = Option<(Errand, Instant)>;

fn run_errands(orders: &Receiver<Errand>, mut errands: Errands, events: &Events) {
    let mut kept: Kept = None;
    loop {
        let wait = kept.as_ref().map(|(_, due)| due.saturating_duration_since(Instant::now()));
        let order = match wait {
            Some(wait) => orders.recv_timeout(wait),
            None => orders.recv().map_err(|_| RecvTimeoutError::Disconnected),
        };
        match order {
            Ok(keep @ (Effect::Keep(..), _)) => put_off(keep, &mut kept, &mut errands),
            Ok((errand, _whole)) => {
                keep_now(&mut kept, &mut errands);
                if let Some(answer) = errands.run(errand) {
                    let _ = events.send(Event::Msg(answer));
                }
            }
            Err(RecvTimeoutError::Timeout) => keep_now(&mut kept, &mut errands),
            Err(RecvTimeoutError::Disconnected) => {
                keep_now(&mut kept, &mut errands);
                return;
            }
        }
    }
}

fn keep_now(kept: &mut Kept, errands: &mut Errands) {
    if let Some(((keep, _whole), _)) = kept.take() {
        errands.run(keep);
    }
}

/// The later takes the place of the earlier where both are of the same model; a change that goes on is kept all the same.
fn put_off(keep: Errand, kept: &mut Kept, errands: &mut Errands) {
    let is_same = |old: &Effect| match (old, &keep.0) {
        (Effect::Keep(old, _), Effect::Keep(new, _)) => old == new,
        _ => false,
    };
    let due = kept.as_ref().filter(|((old, _), _)| is_same(old)).map(|(_, due)| *due);
    if due.is_none() {
        keep_now(kept, errands);
    }
    *kept = Some((keep, due.unwrap_or_else(|| Instant::now() + PATIENCE)));
}
