//! What the user does with the response to a control: the rule, the state at it, what is varied and what is drawn.

use super::acts::stepped;
use super::values;
use crate::app::action::{Action, Step};
use crate::app::geometry::scrolled;
use crate::app::response::{
    Pick, Responding, State, control, controls, fine_step, known, parameter, parts, place, rule, states,
};
use crate::app::trial::{COARSE, neat};
use crate::app::{App, Screen, Study};
use crate::report::response::plot::quantities;

pub(super) fn act(app: &mut App, action: Action) {
    match action {
        Action::Fine(way) => nudge(app, way, 1.0),
        Action::Coarse(way) => nudge(app, way, COARSE),
        Action::Threshold(way) => jump(app, way),
        Action::Fit => to_present(app),
        Action::Other => another_control(app),
        Action::Species(_) => another_quantity(app),
        Action::TakeOver => take_over(app),
        _ => {}
    }
}

/// The equilibrium that is selected elsewhere is picked here, where the rule stands at the present value.
pub(super) fn show(study: &mut Study) {
    let is_moved = control(study).map(|control| control.present) != rule(study);
    if !is_moved {
        study.responding.pick = Pick::Selected;
    }
}

/// Through the states at the rule.
pub(super) fn walk(app: &mut App, step: Step) {
    let Some(study) = &app.study else { return };
    let all = states(app, study);
    let page = usize::from(parts(app.size, all.len()).states.rows.saturating_sub(1).max(1));
    let Some(now) = place(app, study, &all) else { return };
    let next = stepped(now, all.len(), page, step);
    let pick = pick(&all, next);
    if let Some(study) = &mut app.study {
        study.responding.pick = pick;
        study.facts_from = 0;
    }
}

/// A state by the part of the branch that it lies on, so that it stays picked as the rule moves.
fn pick(all: &[State], place: usize) -> Pick {
    let met = all.get(place).and_then(|one| one.met.as_ref());
    met.map_or(Pick::Place(place), |met| Pick::Branch(met.branch, met.stretch))
}

/// Moves the rule to a value; whoever was picked stays picked where it is on a branch.
fn move_to(app: &mut App, at: f64) {
    let Some(study) = &app.study else { return };
    let all = states(app, study);
    // Who is on a branch is looked for there at whatever value, also after it was gone for a while.
    let kept = match (study.responding.pick, place(app, study, &all)) {
        (Pick::Selected | Pick::Place(_), Some(place)) => pick(&all, place),
        (kept, _) => kept,
    };
    let (Some(control), current) = (control(study), study.current) else { return };
    let Some(study) = &mut app.study else { return };
    study.responding.pick = kept;
    let key = (current, control.parameter);
    let rules = &mut study.responding.rules;
    rules.retain(|(other, _)| *other != key);
    if at.to_bits() != control.present.to_bits() {
        rules.push((key, at));
    }
    app.notice = None;
}

fn nudge(app: &mut App, way: Step, steps: f64) {
    let Some(study) = &app.study else { return };
    let (Some(at), Some(control), Some(step)) = (rule(study), control(study), fine_step(study)) else { return };
    let size = step * steps;
    let wanted = neat(if way == Step::Back { at - size } else { at + size }, size).max(control.from).min(control.to);
    if wanted.to_bits() == at.to_bits() {
        let end = if way == Step::Back { "lower" } else { "upper" };
        let name = parameter(study).map_or_else(String::new, |(_, one)| one.name.clone());
        app.say(format!("{name} = {at} is the {end} end of its range"));
    } else {
        move_to(app, wanted);
    }
}

/// To the next threshold beyond the rule; round at the ends.
fn jump(app: &mut App, way: Step) {
    let Some(study) = &app.study else { return };
    let (Some(at), Some((response, _))) = (rule(study), known(app, study)) else { return };
    let control = response.control;
    let inside = |value: &f64| (control.from..=control.to).contains(value);
    let all: Vec<f64> = response.thresholds.iter().map(|one| one.at).filter(inside).collect();
    let (lowest, highest) = (all.iter().copied().reduce(f64::min), all.iter().copied().reduce(f64::max));
    let to = match way {
        Step::Back => all.iter().copied().filter(|value| *value < at).reduce(f64::max).or(highest),
        _ => all.iter().copied().filter(|value| *value > at).reduce(f64::min).or(lowest),
    };
    match to {
        Some(to) => move_to(app, to),
        None => app.say("no threshold is known in this range"),
    }
}

fn to_present(app: &mut App) {
    let Some(control) = app.study.as_ref().and_then(control) else { return };
    if (control.from..=control.to).contains(&control.present) {
        move_to(app, control.present);
    } else {
        let name = app.study.as_ref().and_then(parameter).map_or_else(String::new, |(_, one)| one.name.clone());
        app.say(format!("{name} = {} lies outside its range", control.present));
    }
}

fn another_control(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    let count = controls(study).len().max(1);
    // Branches of another control are others.
    study.responding = Responding {
        control: (study.responding.control + 1) % count,
        rules: std::mem::take(&mut study.responding.rules),
        quantity: study.responding.quantity,
        ..Responding::default()
    };
    app.notice = None;
}

fn another_quantity(app: &mut App) {
    let Some(study) = &app.study else { return };
    let Some((response, _)) = known(app, study) else { return };
    let count = quantities(study.model(), response).len().max(1);
    if let Some(study) = &mut app.study {
        study.responding.quantity = (study.responding.quantity + 1) % count;
    }
}

/// The value at the rule as a tried value, which the screen of values has then.
fn take_over(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    let (Some(at), Some((id, one))) = (rule(study), parameter(study)) else { return };
    let name = one.name.clone();
    let Some(place) = study.parameters().iter().position(|other| *other == id) else { return };
    study.parameter = place;
    app.notice = None;
    values::set(app, at);
    if app.notice.is_none() {
        app.say(format!("{name} = {at} is tried; the screen of values can take it back"));
    }
}

/// What is picked is there and in sight.
pub(super) fn settle(app: &mut App) {
    if app.screen != Screen::Response {
        return;
    }
    let Some(study) = &app.study else { return };
    let all = states(app, study);
    let parts = parts(app.size, all.len());
    let chosen = place(app, study, &all).unwrap_or(0);
    let count = controls(study).len();
    let room = usize::from(parts.states.rows.saturating_sub(1));
    let from = scrolled(study.responding.from, chosen, all.len(), room);
    let Some(study) = &mut app.study else { return };
    study.responding.control = study.responding.control.min(count.saturating_sub(1));
    study.responding.from = from;
}
