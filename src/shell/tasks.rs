//! Does what takes time: from a task to its answer, on whatever thread it is called.
//!
//! To add a task: a variant in `app::task`, an arm in [`perform`].

use std::sync::Arc;

use crate::analysis::equilibria::{Budget, Progress};
use crate::analysis::passage::Ways;
use crate::analysis::paths::{Ended, follow};
use crate::analysis::prepare::Prepared;
use crate::app::study::{TriedSet, World};
use crate::app::task::{Painting, Release};
use crate::app::{Answer, Read, Source, Task};
use crate::model::Original;
use crate::report::course::{Course, arrival, until_after};
use crate::report::sketch::{Picture, View};

use super::clock::Deadline;
use super::models::{COMPILED, Reading, compiled, read};
use super::solver::{BOXES, names, scene};
use super::workers::Threads;

/// What a task is done with.
pub struct Means<'m> {
    /// Threads that a search may use.
    pub threads: Threads,
    /// Asked often; the task ends soon after it says so.
    pub stop: &'m (dyn Fn() -> bool + Sync),
    /// Told of how far a search has come.
    pub observer: &'m (dyn Fn(Progress) + Sync),
}

/// Does a task.
pub fn perform(task: Task, means: &Means<'_>) -> Answer {
    match task {
        Task::Read(source, edition) => Answer::Read(read_source(&source, edition)),
        Task::Prepare(world, tried, edition) => Answer::Prepared(prepare(&world, &tried, edition)),
        Task::Solve { world, scenario, budget } => {
            let deadline = Deadline::after(budget);
            let budget = Budget {
                boxes: BOXES,
                stop: &|| (means.stop)() || deadline.is_past(),
                workers: &means.threads,
                observer: Some(means.observer),
            };
            Answer::Solved(Box::new(scene(&world.original.model, &world.prepared, scenario, &budget)))
        }
        Task::Name { world, scenes, budget } => {
            let deadline = Deadline::after(budget);
            let mut ways = Ways::new(&world.original.model, &world.prepared);
            let scenes = scenes.iter().map(|found| &*found.0);
            Answer::Named(Arc::new(names(&mut ways, scenes, &|| (means.stop)() || deadline.is_past())))
        }
        Task::Paint(painting) => Answer::Painted(paint(&painting)),
        Task::Follow { world, scenario, start, until } => {
            let subject = world.prepared.subject(&world.original.model, scenario).ok();
            Answer::Followed(subject.map(|mut subject| Arc::new(follow(&mut subject, &start, until, &means.stop))))
        }
        Task::Run(release) => Answer::Ran(run(&release, means).map(Arc::new)),
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

/// How many times as long a path is followed to see where it goes to.
const PATIENCE: f64 = 8.0;

fn run(release: &Release, means: &Means<'_>) -> Option<Course> {
    let Release { world, scene, equilibrium, start, until } = release;
    let solved = scene.solved()?;
    let state = &solved.equilibria.list.get(*equilibrium)?.state;
    let linear = solved.assessment.equilibria.get(*equilibrium).and_then(|assessed| assessed.linear.as_ref().ok());
    let mut subject = world.prepared.subject(&world.original.model, scene.0.scenario).ok()?;
    let step = subject.step();
    let list = &solved.equilibria.list;
    let mut path = follow(&mut subject, start, *until, &means.stop);
    let mut there = arrival(&path, list, step.is_some());
    if there.is_none() && path.ended == Ended::InTime {
        let long = follow(&mut subject, start, PATIENCE * until, &means.stop);
        there = arrival(&long, list, step.is_some());
        // Where it goes nowhere in that time either, a short path is seen better.
        path = if there.is_some() { long } else { path };
    }
    let path = until_after(path, there.unwrap_or(0.0));
    Some(Course::new(&path, state, linear, step))
}

fn paint(painting: &Painting) -> Option<Arc<Picture>> {
    let Painting { world, scene, slice, window, scales, plot } = painting;
    let (model, scenario) = (&world.original.model, scene.0.scenario);
    let solved = scene.solved()?;
    let mut subject = world.prepared.subject(model, scenario).ok()?;
    let view = View { model, scenario, solved, ids: &[], slice, window: *window, scales: *scales };
    Some(Arc::new(Picture::new(&mut subject, &view, plot)))
}
