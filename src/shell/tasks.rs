//! Does what takes time: from a task to its answer, on whatever thread it is called.
//!
//! To add a task: a variant in `app::task`, an arm in [`perform`].

use std::sync::Arc;

use crate::analysis::equilibria::{Budget, Progress};
use crate::analysis::passage::Ways;
use crate::analysis::paths::{Ended, follow};
use crate::analysis::prepare::Prepared;
use crate::analysis::response::Control;
use crate::app::study::{TriedSet, World};
use crate::app::task::{Compared, Found, Painting, Release};
use crate::app::{Answer, Read, Source, Task};
use crate::model::{Model, Name, Original, ParameterId};
use crate::report::course::{Course, arrival, until_after};
use crate::report::response::Along;
use crate::report::sketch::{Picture, View};
use crate::report::table::{Names, Scene};

use super::clock::Deadline;
use super::files::from_home;
use super::models::{COMPILED, Reading, compiled, read};
use super::solver::{BOXES, along, names, names_over, passages, scene};
use super::workers::Threads;

/// What a task is done with.
pub struct Means<'m> {
    /// Threads that a search may use.
    pub threads: Threads,
    /// Asked often; the task ends soon after it says so.
    pub stop: &'m (dyn Fn() -> bool + Sync),
    /// Told of how far a search has come.
    pub observer: &'m (dyn Fn(Progress) + Sync),
    /// Told of what a task has found so far, where there is more to come.
    pub told: &'m dyn Fn(Answer),
}

/// Does a task.
pub fn perform(task: Task, means: &Means<'_>) -> Answer {
    match task {
        Task::Read(source, set, edition) => Answer::Read(read_source(&source, &set, edition)),
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
        Task::Name { world, scenes, over, budget } => {
            let deadline = Deadline::after(budget);
            let stop = || (means.stop)() || deadline.is_past();
            let mut ways = Ways::new(&world.original.model, &world.prepared);
            let scenes: Vec<&Scene> = scenes.iter().map(|found| &*found.0).collect();
            Answer::Named(Arc::new(match (over, scenes.split_last()) {
                (Some(base), Some((tried, of_file))) => names_over(&mut ways, of_file, base, tried, &stop),
                _ => names(&mut ways, scenes, &stop),
            }))
        }
        Task::Compare { world, scenes, names, budget } => {
            Answer::Compared(Arc::new(compare(world, &scenes, names, budget, means)))
        }
        Task::Paint(painting) => Answer::Painted(paint(&painting)),
        Task::Follow { world, scenario, start, until } => {
            let subject = world.prepared.subject(&world.original.model, scenario).ok();
            Answer::Followed(subject.map(|mut subject| Arc::new(follow(&mut subject, &start, until, &means.stop))))
        }
        Task::Respond { world, scene, control, budget } => {
            Answer::Responded(responded(&world, &scene, &control, budget, means).map(Arc::new))
        }
        Task::Cut { world, scenario, parameter, at, budget } => {
            Answer::Cut(cut(&world, scenario, (parameter, at), budget, means))
        }
        Task::Run(release) => Answer::Ran(run(&release, means).map(Arc::new)),
    }
}

/// Follows what was found in the first of several scenarios to each of the others.
fn compare(world: Arc<World>, scenes: &[Found], ids: Vec<Vec<String>>, budget: f64, means: &Means<'_>) -> Compared {
    let deadline = Deadline::after(budget);
    let mut ways = Ways::new(&world.original.model, &world.prepared);
    let scenes: Vec<Scene> = scenes.iter().map(|found| (*found.0).clone()).collect();
    let stop = || (means.stop)() || deadline.is_past();
    let passages = passages(&mut ways, &scenes, &stop);
    let own_names = names(&mut ways, &scenes, &stop);
    let mut all: Vec<String> = Vec::new();
    for id in ids.iter().flatten() {
        if !all.contains(id) {
            all.push(id.clone());
        }
    }
    let names = Names { unfollowed: vec![Vec::new(); ids.len()], ids };
    Compared { world, scenes, names, own_names, passages, ids: all }
}

fn read_source(source: &Source, set: &[(String, f64)], edition: u64) -> Read {
    let reading = match source {
        Source::File(path) => read(Some(&from_home(path))),
        Source::Compiled(index) => match COMPILED.get(*index) {
            Some(model) => compiled(model),
            None => return Read::Unreadable("there is no such model".to_owned()),
        },
    };
    match reading {
        Reading::Model(original) => {
            let set = known(&original.model, set);
            match Prepared::new(&original.model, &set) {
                Ok(prepared) => Read::Ready(Arc::new(World { edition, original: *original, prepared, set })),
                Err(found) => Read::Wrong(original.model.sources.clone(), found),
            }
        }
        Reading::Wrong(sources, found) => Read::Wrong(sources, found),
        Reading::Unreadable(reason) => Read::Unreadable(reason),
    }
}

/// The parameters of those names. Another model than the one that they were given for may lack some; the state says so.
fn known(model: &Model, set: &[(String, f64)]) -> Vec<(ParameterId, f64)> {
    let find = |name: &str| match model.names.get(name) {
        Some(Name::Parameter(id)) => Some(*id),
        _ => None,
    };
    let allowed = |id: ParameterId, value| model.parameters.get(id.0).is_some_and(|one| one.ruled_out(value).is_none());
    let mut found: Vec<(ParameterId, f64)> = Vec::new();
    for (id, value) in set.iter().filter_map(|(name, value)| Some((find(name)?, *value))) {
        if allowed(id, value) {
            found.retain(|(other, _)| *other != id);
            found.push((id, value));
        }
    }
    found
}

/// The model with the tried scenario at its end, in the search box of the file.
fn prepare(world: &World, tried: &TriedSet, edition: u64) -> Result<Arc<World>, String> {
    let Original { model, sha256, tables } = &world.original;
    let model = model.with_values_over(tried.base, &tried.values);
    // What is tried goes over what is set for the session, as everything does that comes later.
    let is_tried = |id: ParameterId| tried.values.iter().any(|(other, _)| *other == id);
    let set: Vec<_> = world.set.iter().filter(|(id, _)| !is_tried(*id)).copied().collect();
    match Prepared::new(&model, &set) {
        Ok(mut prepared) => {
            prepared.bounds.clone_from(&world.prepared.bounds);
            let original = Original { model, sha256: sha256.clone(), tables: tables.clone() };
            Ok(Arc::new(World { edition, original, prepared, set }))
        }
        Err(found) => Err(found.first().map_or_else(String::new, |problem| problem.message.clone())),
    }
}

/// Follows every equilibrium over the range of a control, and tells of what it has on the way.
fn responded(world: &World, scene: &Found, control: &Control, budget: f64, means: &Means<'_>) -> Option<Along> {
    let deadline = Deadline::after(budget);
    let budget = Budget {
        boxes: BOXES,
        stop: &|| (means.stop)() || deadline.is_past(),
        workers: &means.threads,
        observer: None,
    };
    let mut told = |part: Along| (means.told)(Answer::Responded(Some(Arc::new(part))));
    let varied = (control.parameter, [control.from, control.to]);
    along(&world.original.model, &world.prepared, &scene.0, varied, &budget, &mut told)
}

/// Searches a scenario with one parameter at another value; the world that has it is for drawing only.
fn cut(
    world: &World,
    scenario: usize,
    (parameter, at): (ParameterId, f64),
    budget: f64,
    means: &Means<'_>,
) -> Option<(Arc<World>, Arc<Scene>)> {
    let mut world = world.clone();
    let plan = *world.prepared.plans.get(scenario)?.as_ref().ok()?;
    *world.prepared.system.plans.get_mut(plan)?.values.get_mut(parameter.0)? = at;
    let deadline = Deadline::after(budget);
    let budget = Budget {
        boxes: BOXES,
        stop: &|| (means.stop)() || deadline.is_past(),
        workers: &means.threads,
        observer: None,
    };
    let scene = scene(&world.original.model, &world.prepared, scenario, &budget);
    Some((Arc::new(world), Arc::new(scene)))
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
