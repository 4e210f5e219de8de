//! Work beside the loop: one thread for searches and reading, one for what is quick.

use std::collections::HashMap;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, Sender, channel};
use std::thread;
use std::time::{Duration, Instant};

use super::{Event, Events};
use crate::analysis::equilibria::{Budget, Progress};
use crate::analysis::paths::follow;
use crate::analysis::prepare::Prepared;
use crate::app::study::{TriedSet, World};
use crate::app::task::Painting;
use crate::app::{Answer, JobId, Msg, Read, Source, Task};
use crate::model::Original;
use crate::report::sketch::{Picture, View};
use crate::report::table::Scene;
use crate::shell::clock::Deadline;
use crate::shell::models::{COMPILED, Reading, compiled, read};
use crate::shell::solver::{BOXES, scene};
use crate::shell::workers::Threads;

/// How often the loop hears of how far a search has come.
const REPORT: Duration = Duration::from_millis(100);

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
    flags: HashMap<JobId, (Arc<AtomicBool>, bool)>,
}

impl Labour {
    /// Starts them; `threads` is how many a search may use.
    pub(super) fn start(threads: Threads, events: Events) -> Self {
        let begin = |name: &str| {
            let (sender, orders) = channel();
            let events = events.clone();
            let _ = thread::Builder::new().name(name.to_owned()).spawn(move || work(&orders, threads, &events));
            sender
        };
        Self { slow: begin("search"), quick: begin("quick"), flags: HashMap::new() }
    }

    /// Gives a task to a thread.
    pub(super) fn ask(&mut self, id: JobId, task: Task) {
        let stop = Arc::new(AtomicBool::new(false));
        let is_quick = matches!(task, Task::Paint(_) | Task::Follow { .. } | Task::Prepare(..));
        self.flags.insert(id, (Arc::clone(&stop), is_quick));
        let to = if is_quick { &self.quick } else { &self.slow };
        let _ = to.send(Order { id, task, stop });
    }

    /// A job is to end soon.
    pub(super) fn stop(&mut self, id: JobId) {
        if let Some((flag, _)) = self.flags.get(&id) {
            flag.store(true, Ordering::Relaxed);
        }
    }

    /// A job has answered.
    pub(super) fn answered(&mut self, id: JobId) {
        self.flags.remove(&id);
    }

    /// Whether something quick is under way.
    pub(super) fn awaits_quick(&self) -> bool {
        self.flags.values().any(|(stop, is_quick)| *is_quick && !stop.load(Ordering::Relaxed))
    }
}

fn work(orders: &Receiver<Order>, threads: Threads, events: &Events) {
    while let Ok(Order { id, task, stop }) = orders.recv() {
        let answer = perform(id, task, threads, &stop, events);
        if events.send(Event::Msg(Msg::Answered(id, answer))).is_err() {
            return;
        }
    }
}

fn perform(id: JobId, task: Task, threads: Threads, stop: &AtomicBool, events: &Events) -> Answer {
    let is_stopped = || stop.load(Ordering::Relaxed);
    match task {
        Task::Read(source, edition) => Answer::Read(read_source(&source, edition)),
        Task::Prepare(world, tried, edition) => Answer::Prepared(prepare(&world, &tried, edition)),
        Task::Solve { world, scenario, budget } => {
            let deadline = Deadline::after(budget);
            let reporter = Reporter { id, events, state: std::sync::Mutex::new((Progress::default(), Instant::now())) };
            let budget = Budget {
                boxes: BOXES,
                stop: &|| is_stopped() || deadline.is_past(),
                workers: &threads,
                observer: Some(&|done| reporter.add(done)),
            };
            let found: Scene = scene(&world.original.model, &world.prepared, scenario, &budget);
            Answer::Solved(Box::new(found))
        }
        Task::Paint(painting) => Answer::Painted(paint(&painting)),
        Task::Follow { world, scenario, start, until } => {
            let subject = world.prepared.subject(&world.original.model, scenario).ok();
            Answer::Followed(subject.map(|mut subject| Arc::new(follow(&mut subject, &start, until, &is_stopped))))
        }
    }
}

struct Reporter<'r> {
    id: JobId,
    events: &'r Events,
    state: std::sync::Mutex<(Progress, Instant)>,
}

impl Reporter<'_> {
    fn add(&self, done: Progress) {
        let Ok(mut state) = self.state.lock() else { return };
        let (all, last) = &mut *state;
        all.faces += done.faces;
        all.boxes += done.boxes;
        if last.elapsed() >= REPORT {
            *last = Instant::now();
            let _ = self.events.send(Event::Msg(Msg::Advanced(self.id, *all)));
        }
    }
}

fn read_source(source: &Source, edition: u64) -> Read {
    let reading = match source {
        Source::File(path) => read(Some(path)),
        Source::Compiled(index) => match COMPILED.get(*index) {
            Some(model) => compiled(model),
            None => return Read::Unreadable("there is no such model".to_owned()),
        },
    };
    match reading {
        Reading::Model(original) => match Prepared::new(&original.model, &[]) {
            Ok(prepared) => Read::Ready(Arc::new(World { edition, original: *original, prepared })),
            Err(found) => Read::Wrong(original.model.sources.clone(), found),
        },
        Reading::Wrong(sources, found) => Read::Wrong(sources, found),
        Reading::Unreadable(reason) => Read::Unreadable(reason),
    }
}

/// The model with the tried scenario at its end, in the search box of the file.
fn prepare(world: &World, tried: &TriedSet, edition: u64) -> Result<Arc<World>, String> {
    let Original { model, sha256, tables } = &world.original;
    let model = model.with_values_over(tried.base, &tried.values);
    match Prepared::new(&model, &[]) {
        Ok(mut prepared) => {
            prepared.bounds.clone_from(&world.prepared.bounds);
            let original = Original { model, sha256: sha256.clone(), tables: tables.clone() };
            Ok(Arc::new(World { edition, original, prepared }))
        }
        Err(found) => Err(found.first().map_or_else(String::new, |problem| problem.message.clone())),
    }
}

fn paint(painting: &Painting) -> Option<Arc<Picture>> {
    let Painting { world, scene, slice, window, plot } = painting;
    let solved = scene.solved()?;
    let mut subject = world.prepared.subject(&world.original.model, scene.0.scenario).ok()?;
    let view =
        View { model: &world.original.model, scenario: scene.0.scenario, solved, ids: &[], slice, window: *window };
    Some(Arc::new(Picture::new(&mut subject, &view, plot)))
}
