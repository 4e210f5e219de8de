//! What the screen needs that takes time to find out: a pure function of the state.
//!
//! In order of urgency: searches are done one after another in this order. Nothing here remembers what was asked for; that is
//! the desk's.

use std::sync::Arc;

use super::geometry::Area;
use super::study::Slot;
use super::task::{Found, Painting, Task};
use super::{App, Screen, Study};
use super::{beside, geometry, response};
use crate::analysis::field::{Held, Slice, Window};
use crate::report::sketch::{Plot, Size, fit};
use crate::report::table::Solved;

/// Everything that the present screen needs.
pub fn wants(app: &App) -> Vec<Task> {
    let mut tasks = Vec::new();
    if let Some((source, edition)) = &app.reading {
        tasks.push(Task::Read(source.clone(), app.set.clone(), *edition));
    }
    let Some(study) = &app.study else { return tasks };
    tasks.extend(preparing(study));
    tasks.extend(searches(app, study));
    tasks.extend(naming(app, study));
    match app.screen {
        Screen::Equilibria | Screen::Values => {
            if app.screen == Screen::Values {
                tasks.extend(beside::tried(app, study));
            }
            tasks.extend(painting(study, study.current, sketch_size(app, study)).map(Task::Paint));
            tasks.extend(paths(study));
        }
        Screen::SideBySide => tasks.extend(side_by_side(app, study)),
        Screen::Response => tasks.extend(response(app, study)),
        Screen::Chooser | Screen::Interactions | Screen::Knock => {}
    }
    if app.screen == Screen::Knock {
        tasks.extend(super::knock::run(study));
    }
    tasks
}

/// The sketches of the scenarios that are shown, and the comparison.
fn side_by_side(app: &App, study: &Study) -> Vec<Task> {
    let slots = beside::shown(study, app.size);
    let parts = beside::parts(app.size, slots.len(), beside::ids(study, app.size).len());
    let sketches = slots.iter().zip(&parts.columns).filter_map(|(&slot, [_, area])| {
        painting(study, slot, Size { columns: area.columns.into(), rows: area.rows.into() }).map(Task::Paint)
    });
    let responses = slots.iter().filter_map(|&slot| response::respond_in(app, study, slot));
    sketches.chain(paths(study)).chain(beside::task(app, study)).chain(responses).collect()
}

/// The branches, what is at the rule, and its sketch where there is room.
fn response(app: &App, study: &Study) -> Vec<Task> {
    let all = [response::at_rule(app, study), response::respond(app, study)];
    let sketch = response::parts(app.size, 0).sketch.and_then(|area| response::painting(app, study, area));
    all.into_iter().flatten().chain(sketch.map(Task::Paint)).collect()
}

/// The tried values, where they are others than those that are ready.
fn preparing(study: &Study) -> Option<Task> {
    let tried = &study.tried;
    let is_ready = study.slots.last().is_some_and(|slot| slot.world.edition == tried.edition);
    let is_needed = !tried.now.values.is_empty() && !is_ready;
    is_needed.then(|| Task::Prepare(Arc::clone(&study.world), tried.now.clone(), tried.edition))
}

/// What is not searched yet, beginning with what is looked at.
fn searches<'s>(app: &'s App, study: &'s Study) -> impl Iterator<Item = Task> + 's {
    let count = study.slots.len();
    let order = (0..count).map(move |k| (study.current + k) % count);
    order.filter_map(|k| study.slots.get(k)).filter(|slot| !slot.is_fresh()).map(|slot| search(slot, app.budget))
}

/// Names for all that is found.
pub(super) fn naming(app: &App, study: &Study) -> Option<Task> {
    let found = |slot: &Slot| slot.found.as_ref().map(|(_, scene)| Found(Arc::clone(scene)));
    let slots: Vec<&Slot> = study.nameable().iter().filter_map(|&k| study.slots.get(k)).collect();
    let scenes: Vec<Found> = slots.iter().filter_map(|slot| found(slot)).collect();
    // The world of the tried values has the scenarios of the file as well.
    let world = slots.last().map_or(&study.world, |slot| &slot.world);
    let nameable = study.nameable();
    let has_tried = study.tried_slot().is_some_and(|tried| nameable.last() == Some(&tried));
    let base = study.base_slot().filter(|_| has_tried);
    let over = base.and_then(|base| nameable.iter().position(|&slot| slot == base));
    (!scenes.is_empty()).then(|| Task::Name { world: Arc::clone(world), scenes, over, budget: app.budget })
}

fn search(slot: &Slot, budget: f64) -> Task {
    Task::Solve { world: Arc::clone(&slot.world), scenario: slot.scenario, budget }
}

/// Columns and rows of the sketch on the present screen.
pub fn sketch_size(app: &App, study: &Study) -> Size {
    let area = sketch_area(app, study);
    Size { columns: area.columns.into(), rows: area.rows.into() }
}

/// Where the sketch of the slot that is looked at stands on the present screen.
pub fn sketch_area(app: &App, study: &Study) -> Area {
    match app.screen {
        Screen::SideBySide => {
            let slots = beside::shown(study, app.size);
            let parts = beside::parts(app.size, slots.len(), beside::ids(study, app.size).len());
            let place = slots.iter().position(|&slot| slot == study.current).unwrap_or(0);
            parts.columns.get(place).map_or_else(Default::default, |[_, sketch]| *sketch)
        }
        Screen::Values => geometry::values(app.size, study.count()).sketch,
        _ => geometry::equilibria(app.size, study.count()).sketch,
    }
}

/// What the sketch of a slot is; `None` before anything is found.
pub fn painting(study: &Study, slot: usize, size: Size) -> Option<Painting> {
    let (world, scene) = study.slots.get(slot)?.found.clone()?;
    let found = Found(scene);
    let solved = found.solved()?;
    let axes = axes(study);
    let chosen = if slot == study.current { study.chosen } else { 0 };
    let slice = slice(study, solved, axes, chosen);
    let window = study.sketch.window.unwrap_or_else(|| fitting(study, axes));
    let scales = study.sketch.scales;
    Some(Painting { world, slice, window, scales, plot: Plot::of(size), scene: found })
}

/// The species along the axes.
pub fn axes(study: &Study) -> [usize; 2] {
    study.sketch.axes.unwrap_or_else(|| Slice::axes(study.model()))
}

/// The part of the plane that holds the equilibria of all scenarios, and today's stocks.
pub fn fitting(study: &Study, axes: [usize; 2]) -> Window {
    let solved: Vec<&Solved> = study.slots.iter().filter_map(Slot::solved).collect();
    fit(study.model(), &study.world.prepared.bounds, &solved, axes, study.sketch.scales)
}

/// The plane through the selected equilibrium.
pub fn slice(study: &Study, solved: &Solved, [x, y]: [usize; 2], chosen: usize) -> Slice {
    let species = study.model().species.len();
    let lower = || study.world.prepared.bounds.iter().map(|bound| bound.lower).collect();
    let (held, from) = match solved.equilibria.list.get(chosen) {
        _ if species <= 2 => (lower(), Held::Nothing),
        Some(equilibrium) => (equilibrium.state.clone(), Held::Equilibrium(chosen)),
        None => study.model().today().map_or_else(|| (lower(), Held::Lower), |now| (now, Held::Now)),
    };
    Slice { x, y: (species > 1).then_some(y), held, from }
}

/// The paths from the point, and to it.
fn paths(study: &Study) -> Vec<Task> {
    let Some(task) = path(study, false) else { return Vec::new() };
    let back = study.sketch.backwards.then(|| path(study, true)).flatten();
    std::iter::once(task).chain(back).collect()
}

/// The path from the point, or to it.
pub fn path(study: &Study, backwards: bool) -> Option<Task> {
    let start = start(study)?;
    let (world, scene) = study.slot()?.found.clone()?;
    let horizon = horizon(scene.outcome.as_ref().ok()?);
    Some(Task::Follow { world, scenario: scene.scenario, start, until: if backwards { -horizon } else { horizon } })
}

/// The state of all species at the point; `None` where there is none.
pub fn start(study: &Study) -> Option<Vec<f64>> {
    let point = study.sketch.point?;
    let solved = study.solved()?;
    let slice = slice(study, solved, axes(study), study.chosen);
    let mut start = slice.held.clone();
    *start.get_mut(slice.x)? = point[0];
    if let Some(y) = slice.y {
        *start.get_mut(y)? = point[1];
    }
    Some(start)
}

/// Return times that a path is followed for: by then what fades has faded to e⁻²⁰.
const RETURN_TIMES: f64 = 20.0;
/// Time units that a path is followed for where nothing returns.
const LONG: f64 = 100.0;

/// How long paths are followed, in time units: long enough for the slowest return among the stable states.
pub fn horizon(solved: &Solved) -> f64 {
    let times = solved.assessment.equilibria.iter().filter_map(|one| one.measures.return_time);
    let longest = times.filter(|time| time.is_finite()).fold(0.0, f64::max);
    if longest > 0.0 { RETURN_TIMES * longest } else { LONG }
}
