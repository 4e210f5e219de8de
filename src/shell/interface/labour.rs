//! Work beside the loop: one thread for searches and reading, one for what lies between scenarios, one for
//! what is quick.

use std::collections::HashMap;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::sync::{Arc, Mutex};
use std::thread;
use std::time::{Duration, Instant};

use super::{Event, Events};
use crate::analysis::equilibria::Progress;
use crate::app::{JobId, Msg, Task};
use crate::shell::tasks::{Means, perform};
use crate::shell::workers::Threads;

/// How often the loop hears of how far a search has come.
const REPORT: Duration = Duration::from_millis(100);

/// How far searches step back, of 19: a third of the processor where others want it as well.
#[cfg(target_os = "linux")]
const NICENESS: i32 = 5;

/// A task on its way to a thread.
struct Order {
    id: JobId,
    task: Task,
    stop: Arc<AtomicBool>,
}

/// The threads.
pub(super) struct Labour {
    slow: Sender<Order>,
    quick: Sender<Order>,
    between: Sender<Order>,
    flags: HashMap<JobId, Flag>,
}

/// How a job is told to stop, and whether its answer is worth a moment's patience.
struct Flag {
    stop: Arc<AtomicBool>,
    is_quick: bool,
    asked: Instant,
}

impl Labour {
    /// Starts them; `threads` is how many a search may use.
    pub(super) fn start(threads: Threads, events: &Events) -> Self {
        let begin = |name: &str, steps_back: bool| {
            let (sender, orders) = channel();
            let events = events.clone();
            let working = move || {
                if steps_back {
                    step_back();
                }
                work(&orders, threads, &events);
            };
            let _ = thread::Builder::new().name(name.to_owned()).spawn(working);
            sender
        };
        let (slow, between, quick) = (begin("search", true), begin("between", true), begin("quick", false));
        Self { slow, quick, between, flags: HashMap::new() }
    }

    /// Gives a task to a thread.
    pub(super) fn ask(&mut self, id: JobId, task: Task) {
        let stop = Arc::new(AtomicBool::new(false));
        let to = match task {
            Task::Read(..) | Task::Solve { .. } => &self.slow,
            Task::Name { .. } | Task::Compare { .. } | Task::Respond { .. } => &self.between,
            Task::Prepare(..) | Task::Paint(_) | Task::Follow { .. } | Task::Run(_) | Task::Cut { .. } => &self.quick,
        };
        let is_quick = !matches!(task, Task::Read(..) | Task::Solve { .. } | Task::Respond { .. });
        self.flags.insert(id, Flag { stop: Arc::clone(&stop), is_quick, asked: Instant::now() });
        let _ = to.send(Order { id, task, stop });
    }

    /// A job is to end soon.
    pub(super) fn stop(&mut self, id: JobId) {
        if let Some(flag) = self.flags.get(&id) {
            flag.stop.store(true, Ordering::Relaxed);
        }
    }

    /// A job has answered.
    pub(super) fn answered(&mut self, id: JobId) {
        self.flags.remove(&id);
    }

    /// Whether something is under way that may be done in a moment: what is quick, and searches for as long as that, since most
    /// take no longer.
    pub(super) fn awaits(&self, moment: Duration) -> bool {
        let may_come = |flag: &Flag| flag.is_quick || flag.asked.elapsed() < moment;
        self.flags.values().any(|flag| may_come(flag) && !flag.stop.load(Ordering::Relaxed))
    }
}

/// From now on this thread, and those that it starts, let others go first: a search on all processors would keep keys waiting.
/// Only here does that concern a thread rather than the whole process.
#[cfg(target_os = "linux")]
fn step_back() {
    // Where it is refused all are alike, as they were.
    let _ = rustix::process::setpriority_process(None, NICENESS);
}

#[cfg(not(target_os = "linux"))]
fn step_back() {}

fn work(orders: &Receiver<Order>, threads: Threads, events: &Events) {
    while let Ok(Order { id, task, stop }) = orders.recv() {
        let reporter = Reporter { id, events, state: Mutex::new((Progress::default(), Instant::now())) };
        let is_stopped = || stop.load(Ordering::Relaxed);
        let told = |part| {
            let _ = events.send(Event::Msg(Msg::Partly(id, part)));
        };
        let observer = |done| reporter.add(done);
        let answer = perform(task, &Means { threads, stop: &is_stopped, observer: &observer, told: &told });
        if events.send(Event::Msg(Msg::Answered(id, answer))).is_err() {
            return;
        }
    }
}

struct Reporter<'r> {
    id: JobId,
    events: &'r Events,
    state: Mutex<(Progress, Instant)>,
}

impl Reporter<'_> {
    fn add(&self, done: Progress) {
        let Ok(mut state) = self.state.lock() else { return };
        let (all, last) = &mut *state;
        all.faces += done.faces;
        all.boxes += done.boxes;
        all.share += done.share;
        if last.elapsed() >= REPORT {
            *last = Instant::now();
            let _ = self.events.send(Event::Msg(Msg::Advanced(self.id, *all)));
        }
    }
}
