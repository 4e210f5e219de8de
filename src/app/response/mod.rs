//! The response to a control: which control, where the rule stands, which state at the rule is picked, what is drawn upwards.
//!
//! [`Responding`] is what the user chose; [`control`] and [`rule`] are what that comes to in the slot that is looked at.
//! [`respond`] and [`at_rule`] are the work to be done, [`known`] and [`there`] what came of it, [`parts`] says where things
//! stand. `states` has the states at the rule, `words` what is said, `compared` what scenarios are
//! compared by.

mod compared;
mod states;
mod words;

pub use compared::{Row, compared};
pub use states::{State, chosen_branch, picked, place, states, there};
pub use words::{amounts, rows, sentence, varied};

use std::sync::Arc;

use super::geometry::{Area, Size, frame};
use super::study::Slot;
use super::task::{Answer, Found, Painting, Task};
use super::trial::step;
use super::wants::axes;
use super::{App, Study};
use crate::analysis::field::{LINEAR, Window, around};
use crate::analysis::response::{Control, Response};
use crate::model::{Parameter, ParameterId};
use crate::report::response::Along;
use crate::report::response::plot::{Quantity, View, quantities};
use crate::report::sketch::{self, Plot};

/// What the user chose.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Responding {
    /// The control, among those that can be varied.
    pub control: usize,
    /// Where the rule was moved to: of each slot and control one value.
    pub rules: Vec<((usize, ParameterId), f64)>,
    /// What is drawn upwards, among all that can be.
    pub quantity: usize,
    /// The state at the rule that is picked.
    pub pick: Pick,
    /// The first state that is listed.
    pub from: usize,
}

/// Which state at the rule is picked.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Pick {
    /// The equilibrium that is selected on the other screens.
    #[default]
    Selected,
    /// The one on this part of a branch, wherever the rule is.
    Branch(usize, usize),
    /// The one at this place of the list.
    Place(usize),
}

/// Parameters that can be varied: those with a range, first those that management can set.
pub fn controls(study: &Study) -> Vec<ParameterId> {
    let has_range = |one: &Parameter| one.range.as_ref().is_some_and(|range| range.value[0] < range.value[1]);
    let parameters = &study.model().parameters;
    study.parameters().into_iter().filter(|id| parameters.get(id.0).is_some_and(has_range)).collect()
}

/// The control that is varied.
pub fn parameter(study: &Study) -> Option<(ParameterId, &Parameter)> {
    let id = *controls(study).get(study.responding.control)?;
    Some((id, study.model().parameters.get(id.0)?))
}

/// The control with its range and its present value in the slot that is looked at.
pub fn control(study: &Study) -> Option<Control> {
    control_in(study, study.current)
}

/// The same in a slot.
fn control_in(study: &Study, slot: usize) -> Option<Control> {
    let (id, one) = parameter(study)?;
    let [from, to] = one.range.as_ref()?.value;
    let present = *study.slots.get(slot)?.solved()?.values.get(id.0)?;
    Some(Control { parameter: id, from, to, present })
}

/// Where the rule stands: where it was moved to, else at the present value, or at the end of the range next to that.
pub fn rule(study: &Study) -> Option<f64> {
    let control = control(study)?;
    let key = (study.current, control.parameter);
    let moved = study.responding.rules.iter().find(|(other, _)| *other == key).map(|(_, at)| *at);
    Some(moved.unwrap_or(control.present).max(control.from).min(control.to))
}

/// By how much the rule moves.
pub fn fine_step(study: &Study) -> Option<f64> {
    parameter(study).map(|(_, one)| step(one))
}

/// Following every branch; `None` where nothing is found yet, or nothing can be varied.
pub fn respond(app: &App, study: &Study) -> Option<Task> {
    respond_in(app, study, study.current)
}

/// The same in a slot.
pub fn respond_in(app: &App, study: &Study, slot: usize) -> Option<Task> {
    let (world, scene) = study.slots.get(slot)?.found.clone()?;
    Some(Task::Respond { world, scene: Found(scene), control: control_in(study, slot)?, budget: app.budget })
}

/// Seconds that the search at the rule may take; at a threshold there is no end to it.
const BUDGET: f64 = 2.0;

/// Searching at the rule; `None` where that is the present value, which is searched already.
pub fn at_rule(app: &App, study: &Study) -> Option<Task> {
    let (world, scene) = study.slot().and_then(|slot| slot.found.clone())?;
    let (control, at) = (control(study)?, rule(study)?);
    let task =
        Task::Cut { world, scenario: scene.scenario, parameter: control.parameter, at, budget: app.budget.min(BUDGET) };
    (at.to_bits() != control.present.to_bits()).then_some(task)
}

/// The response as far as it is known, and whether that is all that is to come.
pub fn known<'a>(app: &'a App, study: &Study) -> Option<(&'a Response, bool)> {
    along(app, study).map(|(along, is_whole)| (&along.response, is_whole))
}

/// The same with what it means for catches and margins, which comes last.
pub fn along<'a>(app: &'a App, study: &Study) -> Option<(&'a Arc<Along>, bool)> {
    along_in(app, study, study.current)
}

/// The same in a slot.
fn along_in<'a>(app: &'a App, study: &Study, slot: usize) -> Option<(&'a Arc<Along>, bool)> {
    let task = respond_in(app, study, slot)?;
    let of = |answer: Option<&'a Answer>| match answer? {
        Answer::Responded(along) => along.as_ref(),
        _ => None,
    };
    let whole = of(app.desk.known(&task)).map(|along| (along, true));
    whole.or_else(|| of(app.desk.partly(&task)).map(|along| (along, false)))
}

/// What is drawn upwards.
pub fn quantity(study: &Study, response: &Response) -> Option<Quantity> {
    let all = quantities(study.model(), response);
    all.get(study.responding.quantity).or(all.first()).copied()
}

/// What is drawn.
pub fn view<'v>(app: &App, study: &'v Study, response: &'v Response) -> Option<View<'v>> {
    let quantity = quantity(study, response)?;
    let (rule, chosen) = (rule(study), chosen_branch(app, study));
    Some(View { model: study.model(), response, quantity, rule, chosen })
}

/// The sketch of what was found at the rule; its window holds every state of the response, so that states move in it.
pub fn painting(app: &App, study: &Study, area: Area) -> Option<Painting> {
    let (world, scene) = there(app, study)?;
    let found = Found(scene);
    let solved = found.solved()?;
    let axes = axes(study);
    let chosen = picked(app, study).and_then(|state| state.found).unwrap_or(0);
    let slice = super::wants::slice(study, solved, axes, chosen);
    let window = known(app, study).and_then(|(response, _)| window(study, response, axes));
    let window = window.unwrap_or_else(|| super::wants::fitting(study, axes));
    let plot = Plot::of(sketch::Size { columns: area.columns.into(), rows: area.rows.into() });
    Some(Painting { world, slice, window, scales: LINEAR, plot, scene: found })
}

fn window(study: &Study, response: &Response, axes: [usize; 2]) -> Option<Window> {
    let points = || response.branches.iter().flat_map(|branch| &branch.points).filter(|point| point.feasible);
    let along = |species: usize| {
        let bound = study.world.prepared.bounds.get(species)?;
        Some(around([bound.lower, bound.upper], points().filter_map(|point| point.state.get(species).copied())))
    };
    Some(Window { x: along(axes[0])?, y: along(axes[1])? })
}

/// Where things stand on the screen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Parts {
    /// What is picked and how it is lost, in words.
    pub sentence: Area,
    /// The control against the quantity.
    pub plot: Area,
    /// The plot's signs.
    pub signs: Area,
    /// The states at the rule, one a row below a heading.
    pub states: Area,
    /// The numbers of the one that is picked.
    pub numbers: Area,
    /// The thresholds, in words.
    pub thresholds: Area,
    /// The sketch of what is at the rule, where there is room for it.
    pub sketch: Option<Area>,
}

/// Columns from which on there is room for a sketch.
const WIDE: u16 = 120;
/// Columns of the lists beside the plot, at least and at most.
const LISTS: [u16; 2] = [25, 44];

/// Rows for the numbers of the state that is picked, where thresholds stand below them.
const NUMBERS: u16 = 4;

/// Where things stand, with so many states at the rule.
pub fn parts(size: Size, states: usize) -> Parts {
    let body = frame(size).body;
    if size.columns < WIDE {
        let (sentence, rest) = body.top(3);
        let (signs, rest) = rest.bottom(if size.columns < 76 { 2 } else { 1 });
        let lists = (rest.columns * 2 / 5).clamp(LISTS[0], LISTS[1]);
        let (plot, right) = beside(rest, rest.columns.saturating_sub(lists));
        let (states, rest) = right.top(listed(states, right.rows));
        let (numbers, thresholds) = rest.top(NUMBERS.min(right.rows / 4));
        return Parts { sentence, plot, signs, states, numbers, thresholds, sketch: None };
    }
    let (sentence, rest) = body.top(2);
    let (left, right) = beside(rest, rest.columns / 2);
    let (upper, thresholds) = left.top(left.rows * 2 / 3);
    let (signs, plot) = upper.bottom(1);
    let (sketch, right) = right.top(right.rows * 3 / 5);
    let (states, numbers) = right.top(listed(states, right.rows));
    Parts { sentence, plot, signs, states, numbers, thresholds, sketch: Some(sketch) }
}

/// Two parts, of which the left has so many columns, with a blank one between them.
fn beside(area: Area, columns: u16) -> (Area, Area) {
    let (left, right) = area.left(columns);
    let right = Area { x: right.x + 1, columns: right.columns.saturating_sub(1), ..right };
    (left, right)
}

/// Rows for the list of states with its heading; at most a third of what there is.
pub fn listed(states: usize, rows: u16) -> u16 {
    u16::try_from(states.max(1)).unwrap_or(u16::MAX).saturating_add(1).min((rows / 3).max(2))
}

/// Columns and rows of the plot.
pub fn room(area: Area) -> sketch::Size {
    sketch::Size { columns: area.columns.into(), rows: area.rows.into() }
}

/// Whether what is shown was found with the values of now.
pub fn is_fresh(study: &Study) -> bool {
    study.slot().is_some_and(Slot::is_fresh)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_fit_and_do_not_overlap() {
        for columns in [0, 1, 59, 60, 75, 76, 80, 119, 120, 200, 500] {
            for rows in [0, 1, 5, 19, 20, 24, 50, 200] {
                for states in [0, 1, 4, 70] {
                    let size = Size { columns, rows };
                    let parts = parts(size, states);
                    let Parts { sentence, plot, signs, states, numbers, thresholds, sketch } = parts;
                    let all = [sentence, plot, signs, states, numbers, thresholds];
                    let all: Vec<Area> = all.into_iter().chain(sketch).filter(|one| one.rows > 0).collect();
                    for (k, one) in all.iter().enumerate() {
                        assert!(
                            one.x + one.columns <= columns.max(one.x) && one.y + one.rows <= rows,
                            "{size:?}: {one:?}"
                        );
                        let is_apart = |other: &Area| {
                            let across = one.x + one.columns <= other.x || other.x + other.columns <= one.x;
                            across || one.y + one.rows <= other.y || other.y + other.rows <= one.y
                        };
                        assert!(size.is_too_small() || all[..k].iter().all(is_apart), "{size:?}: {parts:?}");
                    }
                    if !size.is_too_small() {
                        assert!(plot.columns >= 30 && plot.rows >= 8 && parts.states.rows >= 2, "{size:?}: {parts:?}");
                        assert!(parts.numbers.rows >= 3 && parts.thresholds.rows >= 4, "{size:?}: {parts:?}");
                    }
                }
            }
        }
    }
}
