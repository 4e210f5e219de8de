//! Trying values: every change makes another tried scenario, and can be taken back.

use crate::app::action::{Action, Step};
use crate::app::study::TriedSet;
use crate::app::{App, Study};
use crate::model::{Parameter, ParameterId};

/// Changes that can be taken back.
const MOST_CHANGES: usize = 1000;

pub(super) fn act(app: &mut App, action: Action) {
    match action {
        Action::Fine(step) => nudge(app, step, 1.0),
        Action::Coarse(step) => nudge(app, step, 10.0),
        Action::Undo => back(app),
        Action::Redo => forth(app),
        Action::Forget => {
            if let Some(study) = &app.study {
                let base = study.tried.now.base;
                change(app, TriedSet { base, values: Vec::new() });
            }
        }
        _ => {}
    }
}

fn nudge(app: &mut App, step: Step, steps: f64) {
    let Some(study) = &app.study else { return };
    let Some(parameter) = study.model().parameters.get(study.parameter) else { return };
    let Some(value) = value(study, study.parameter) else { return };
    let step_size = fine_step(parameter) * steps;
    let signed = if step == Step::Back { -step_size } else { step_size };
    set(app, neat(value + signed, step_size));
}

/// The value of a parameter in the slot that is looked at, tried or not.
pub(super) fn value(study: &Study, parameter: usize) -> Option<f64> {
    let tried = study.tried.now.values.iter().find(|(id, _)| id.0 == parameter).map(|(_, value)| *value);
    let base = base(study);
    let own = || study.model().values(base, &[]).ok()?.get(parameter).copied();
    tried.filter(|_| base == study.tried.now.base).or_else(own)
}

/// The scenario of the file that values are set over.
fn base(study: &Study) -> usize {
    if study.is_tried(study.current) { study.tried.now.base } else { study.slot().map_or(0, |slot| slot.scenario) }
}

/// A hundredth of the range, else of the value, rounded to 1, 2 or 5 times a power of ten.
fn fine_step(parameter: &Parameter) -> f64 {
    let width = parameter.range.as_ref().map_or(parameter.value.abs(), |range| range.value[1] - range.value[0]);
    let wanted = if width > 0.0 && width.is_finite() { width / 100.0 } else { 0.01 };
    let decade = 10f64.powf(wanted.log10().floor());
    let steps = [1.0, 2.0, 5.0, 10.0].map(|step| step * decade);
    steps.into_iter().find(|&step| step >= wanted * 0.999).unwrap_or(decade)
}

/// A value without the digits that adding steps leaves: a thousandth of the step is kept.
fn neat(value: f64, step: f64) -> f64 {
    let decimals = (3.0 - step.log10().floor()).clamp(0.0, 300.0);
    let text = format!("{value:.*}", crate::analysis::field::nearest(decimals, 300));
    text.parse().unwrap_or(value) + 0.0
}

/// Sets the selected parameter to a value; says why not where it is ruled out.
pub(super) fn set(app: &mut App, value: f64) {
    let Some(study) = &app.study else { return };
    let id = ParameterId(study.parameter);
    let Some(parameter) = study.model().parameters.get(id.0) else { return };
    if let Some(reason) = parameter.ruled_out(value) {
        app.complain(reason);
        return;
    }
    let base = base(study);
    let mut values = if base == study.tried.now.base { study.tried.now.values.clone() } else { Vec::new() };
    values.retain(|(other, _)| *other != id);
    let own = study.model().values(base, &[]).ok().and_then(|values| values.get(id.0).copied());
    if own != Some(value) {
        values.push((id, value));
        values.sort_by_key(|(id, _)| *id);
    }
    change(app, TriedSet { base, values });
}

fn change(app: &mut App, to: TriedSet) {
    let Some(study) = &mut app.study else { return };
    if study.tried.now == to {
        return;
    }
    let before = std::mem::replace(&mut study.tried.now, to);
    study.tried.undo.push(before);
    if study.tried.undo.len() > MOST_CHANGES {
        study.tried.undo.remove(0);
    }
    study.tried.redo.clear();
    renew(app);
}

fn back(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    match study.tried.undo.pop() {
        Some(before) => {
            let now = std::mem::replace(&mut study.tried.now, before);
            study.tried.redo.push(now);
            renew(app);
        }
        None => app.say("there is nothing to take back"),
    }
}

fn forth(app: &mut App) {
    let Some(study) = &mut app.study else { return };
    match study.tried.redo.pop() {
        Some(after) => {
            let now = std::mem::replace(&mut study.tried.now, after);
            study.tried.undo.push(now);
            renew(app);
        }
        None => app.say("there is nothing to do again"),
    }
}

/// The tried scenario is another now.
fn renew(app: &mut App) {
    app.edition += 1;
    app.notice = None;
    let edition = app.edition;
    let Some(study) = &mut app.study else { return };
    study.tried.edition = edition;
    if study.tried.now.values.is_empty() {
        let of_file = study.of_file();
        let name = study.name_of_chosen();
        study.slots.truncate(of_file);
        let base = study.tried.now.base;
        if study.current >= of_file {
            study.current = study.slots.iter().position(|slot| slot.scenario == base).unwrap_or(0);
        }
        study.names.truncate(of_file);
        study.choose_named(name.as_deref());
    }
}
