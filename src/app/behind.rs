//! The table behind a screen: what `restpoint table` prints, made by the same code and to the same bytes, with the command
//! that makes it again. Of a knock and of interactions, which no command prints, the rows that the screen shows.
//!
//! To give a screen a table of its own: an arm in [`behind`].

use super::saved::PAGE;
use super::study::Slot;
use super::wants::naming;
use super::{Answer, App, Screen, Source, Study, beside, interactions, knock, response};
use crate::analysis::response::Ending;
use crate::diag::SourceId;
use crate::model::ParameterId;
use crate::report::compare::{self, Comparison};
use crate::report::response::{Along, Chosen, FIELDS, Responses};
use crate::report::table::{Command, Form, Limits, Names, Scene, Table, written};
use crate::report::{self, rows};

/// Said where what is shown is not known yet.
const WAIT: &str = "it is still being worked out; write it when that is done";

/// The table behind the present screen; of a knock and of interactions, in whichever form, what the screen shows.
///
/// # Errors
///
/// Why there is none just now.
pub fn behind(app: &App, form: Form) -> Result<String, String> {
    match (app.screen, &app.study) {
        (Screen::Chooser, _) | (_, None) => Err("no model is open".to_owned()),
        (Screen::SideBySide, Some(study)) => side_by_side(app, study, form),
        (Screen::Interactions | Screen::Knock, Some(study)) => of_selected(app, study, form),
        (Screen::Response, Some(study)) => responses(app, study, form),
        // What these screens say of equilibria, the table says in more columns.
        (Screen::Equilibria | Screen::Values, Some(study)) => table(app, study, form),
    }
}

/// What a file of it would be called, without an ending.
pub fn name(app: &App) -> String {
    let Some(study) = &app.study else { return "restpoint".to_owned() };
    let path = path(study);
    let file = path.rsplit(['/', '\\']).next().unwrap_or("");
    let stem = file.rsplit_once('.').map_or(file, |(stem, _)| stem);
    let screen = match app.screen {
        Screen::Chooser => "models",
        Screen::Equilibria => "equilibria",
        Screen::SideBySide => "side-by-side",
        Screen::Interactions => "interactions",
        Screen::Knock => "knock",
        Screen::Values => "values",
        Screen::Response => "response",
    };
    format!("{stem}-{screen}")
}

/// The model's path as it was given; that of a model that is compiled in where it lies in the program's own folder.
pub fn path(study: &Study) -> String {
    match &study.source {
        Source::File(path) => path.to_string_lossy().into_owned(),
        Source::Compiled(_) => {
            study.model().sources.get(SourceId(0)).map_or_else(String::new, |source| source.name.clone())
        }
    }
}

/// The values that hold over the file's scenario in a slot: those set for the session, and where values are tried, those.
pub fn set(study: &Study, slot: usize) -> Vec<(ParameterId, f64)> {
    let tried = if study.is_tried(slot) { &study.tried.now.values[..] } else { &[] };
    let is_tried = |id: ParameterId| tried.iter().any(|(other, _)| *other == id);
    let kept = study.world.set.iter().filter(|(id, _)| !is_tried(*id));
    kept.chain(tried).copied().collect()
}

/// What a screen shows of the selected equilibrium.
fn of_selected(app: &App, study: &Study, form: Form) -> Result<String, String> {
    let is_knock = app.screen == Screen::Knock;
    let made = match form {
        Form::Text if is_knock => knock::text(app),
        Form::Text => interactions::text(app),
        _ => {
            let made = if is_knock { knock::rows(app) } else { interactions::rows(app) };
            made.map(|made| rows::written(&made, form, PAGE))
        }
    };
    let is_searched = study.slot().is_some_and(Slot::is_fresh);
    let why = if is_searched && study.selected().is_none() { "there is no equilibrium here" } else { WAIT };
    made.ok_or_else(|| why.to_owned())
}

fn table(app: &App, study: &Study, form: Form) -> Result<String, String> {
    // A command says all scenarios of the file, or one with values set over it; never both.
    let slots = if study.tried_slot().is_none() { 0..study.slots.len() } else { study.current..study.current + 1 };
    let shown = study.slots.get(slots).unwrap_or(&[]);
    let scenes = shown.iter().map(|slot| scene(study, slot)).collect::<Result<Vec<Scene>, String>>()?;
    let set = set(study, study.current);
    let scenarios: Vec<usize> = scenes.iter().map(|scene| scene.scenario).collect();
    let is_all = scenarios.len() == study.model().scenarios.len();
    let names = match &scenes[..] {
        // A command that is for one scenario knows no other to name it after.
        [Scene { outcome: Ok(alone), .. }] => Names::alone(alone.equilibria.list.len()),
        _ => names(app, study)?,
    };
    let command = Command {
        word: "table",
        path: Some(&path(study)),
        model: study.model(),
        varied: &[],
        scenarios: if is_all { &[] } else { &scenarios },
        set: &set,
        budget: (app.budget != Limits::SECONDS).then_some(app.budget),
        columns: None,
        form,
    }
    .to_string();
    let original = &study.world.original;
    let table = Table {
        model: &original.model,
        sha256: &original.sha256,
        tables: &original.tables,
        command: &command,
        set: &set,
        bounds: &study.world.prepared.bounds,
        limits: Limits { seconds: app.budget, boxes: Limits::BOXES },
        scenes: &scenes,
        names: &names,
        interrupted: false,
        columns: None,
    };
    Ok(written(&table, form, PAGE))
}

/// The names of all that is shown.
fn names(app: &App, study: &Study) -> Result<Names, String> {
    match naming(app, study).as_ref().and_then(|task| app.desk.known(task)) {
        Some(Answer::Named(names)) => Ok(Names::clone(names)),
        _ => {
            Err("equilibria are being followed from one scenario to the next; write them when that is done".to_owned())
        }
    }
}

/// The scenarios that stand side by side, compared.
fn side_by_side(app: &App, study: &Study, form: Form) -> Result<String, String> {
    let slots = beside::shown(study, app.size);
    if slots.iter().any(|&slot| study.is_tried(slot)) {
        return Err(
            "tried values stand beside: write them as a new scenario first, so that it can be made again".to_owned()
        );
    }
    let known = beside::task(app, study);
    let known = known.as_ref().and_then(|task| beside::compared(&app.desk, task));
    let known = known.ok_or("the scenarios are being searched and followed; write them when that is done")?;
    let scenarios: Vec<usize> = known.scenes.iter().map(|scene| scene.scenario).collect();
    let original = &study.world.original;
    let command = Command {
        word: "compare",
        path: Some(&path(study)),
        model: &original.model,
        varied: &[],
        scenarios: if scenarios.len() == original.model.scenarios.len() { &[] } else { &scenarios },
        set: &study.world.set,
        budget: (app.budget != Limits::SECONDS).then_some(app.budget),
        columns: None,
        form,
    }
    .to_string();
    let table = Table {
        model: &original.model,
        sha256: &original.sha256,
        tables: &original.tables,
        command: &command,
        set: &study.world.set,
        bounds: &study.world.prepared.bounds,
        limits: Limits { seconds: app.budget, boxes: Limits::BOXES },
        scenes: &known.scenes,
        names: &known.own_names,
        interrupted: false,
        columns: None,
    };
    Ok(compare::written(&Comparison::new(&table, &known.passages), form, PAGE))
}

/// The response of the scenario that is looked at, as the command for it alone has it.
fn responses(app: &App, study: &Study, form: Form) -> Result<String, String> {
    let slot = study.slot().ok_or(WAIT)?;
    let scene = scene(study, slot)?;
    let control = response::control(study).ok_or("nothing can be varied here")?;
    let (along, is_whole) = response::along(app, study).ok_or(WAIT)?;
    if !is_whole {
        return Err(WAIT.to_owned());
    }
    let set = set(study, study.current);
    let original = &study.world.original;
    let scenarios = [scene.scenario];
    let command = Command {
        word: "response",
        path: Some(&path(study)),
        model: &original.model,
        varied: &[(control.parameter, None)],
        scenarios: if original.model.scenarios.len() == 1 { &[] } else { &scenarios },
        set: &set,
        budget: (app.budget != Limits::SECONDS).then_some(app.budget),
        columns: None,
        form,
    }
    .to_string();
    let count = scene.outcome.as_ref().map_or(0, |solved| solved.equilibria.list.len());
    let table = Table {
        model: &original.model,
        sha256: &original.sha256,
        tables: &original.tables,
        command: &command,
        set: &set,
        bounds: &study.world.prepared.bounds,
        limits: Limits { seconds: app.budget, boxes: Limits::BOXES },
        scenes: std::slice::from_ref(&scene),
        names: &Names::alone(count),
        interrupted: along.response.branches.iter().any(|branch| branch.ends.contains(&Ending::Stopped)),
        columns: None,
    };
    let responses = Responses {
        table: &table,
        control: control.parameter,
        range: [control.from, control.to],
        chosen: &Chosen::all(&FIELDS),
        along: &[Some(Along::clone(along))],
    };
    Ok(report::response::written(&responses, form, PAGE))
}

/// What was found in a slot, as of the scenario of the file that it shows.
///
/// # Errors
///
/// That it is being searched.
pub fn scene(study: &Study, slot: &Slot) -> Result<Scene, String> {
    let found = slot.found.as_ref().filter(|_| study.is_of_now(slot));
    let (_, scene) =
        found.ok_or_else(|| format!("\"{}\" is being searched; write it when that is done", slot.name()))?;
    let scenario = if slot.world == study.world { slot.scenario } else { study.tried.now.base };
    Ok(Scene { scenario, ..Scene::clone(scene) })
}
