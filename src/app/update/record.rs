//! What is written to files: the table behind a screen, the screen, the tried values as a new scenario of a copy.
//!
//! A file that is there already is left alone; the text that was typed comes back and says so, and taken once more as it is
//! it replaces the file. What could not be written comes back likewise.

use std::path::PathBuf;

use super::entry::{again, open};
use crate::app::behind::{behind, set};
use crate::app::{App, Dialog, Effect, Entry, Purpose, Source, Study, Written};
use crate::model::amend::{Addition, NAME_LIMIT};
use crate::report::table::Form;

/// Tried values that a suggested name lists.
const MOST_LISTED: usize = 3;

/// Begins to name the new scenario.
pub(super) fn begin(app: &mut App) -> Vec<Effect> {
    let Some(study) = &app.study else { return Vec::new() };
    if study.tried.now.values.is_empty() {
        app.complain("no values are tried; there is nothing to be written as a scenario");
        return Vec::new();
    }
    let source = study.source.clone();
    let text = suggested(study);
    app.suggestion = None;
    open(app, Purpose::Record, text, "it is written to a copy; the model file stays as it is");
    vec![Effect::Suggest(source)]
}

/// The name of the base and what is tried, as long as a name may be; numbered where there is one of that name.
fn suggested(study: &Study) -> String {
    let base = study.model().scenarios.get(study.tried.now.base).map_or("", |scenario| scenario.name.as_str());
    let values = tried_in_words(study, MOST_LISTED);
    let name: String = format!("{base}, {values}").chars().take(NAME_LIMIT - 4).collect();
    let free = |name: &String| study.model().scenario(name).is_none();
    let numbered = (2..100).map(|number| format!("{name} {number}"));
    std::iter::once(name.clone()).chain(numbered).find(free).unwrap_or(name)
}

/// The tried values, some of them by name.
pub(super) fn tried_in_words(study: &Study, most: usize) -> String {
    let tried = &study.tried.now.values;
    let one = |&(id, value): &(crate::model::ParameterId, f64)| {
        Some(format!("{} = {value}", study.model().parameters.get(id.0)?.name))
    };
    let mut words: Vec<String> = tried.iter().take(most).filter_map(one).collect();
    if tried.len() > most {
        words.push(format!("{} more", tried.len() - most));
    }
    words.join(", ")
}

/// The scenario has its name; now the file.
pub(super) fn name_taken(app: &mut App, entry: Entry, name: String) {
    let Some(study) = &app.study else { return };
    if study.model().scenario(&name).is_some() {
        again(app, entry, "there is a scenario of that name already");
        return;
    }
    let path = app.suggestion.as_ref().map_or_else(String::new, |path| path.to_string_lossy().into_owned());
    open(app, Purpose::RecordTo(name), path, "a copy of the model file, with the new scenario at its end");
}

/// A free name for the copy, which is there from the beginning where it is asked for slowly enough.
pub(super) fn suggestion(app: &mut App, path: PathBuf) {
    if let Some(Dialog::Entry(entry)) = &mut app.dialog
        && matches!(entry.purpose, Purpose::RecordTo(_))
        && entry.text.is_empty()
    {
        entry.text = path.to_string_lossy().into_owned();
        entry.cursor = entry.text.len();
        entry.suggested = true;
    }
    app.suggestion = Some(path);
}

/// Has the copy written.
pub(super) fn record(app: &mut App, entry: Entry, name: String, path: PathBuf) -> Vec<Effect> {
    let Some(study) = &app.study else { return Vec::new() };
    let model = study.model();
    // What is set for the session was looked at as well, so it belongs to what is kept.
    let slot = study.tried_slot().unwrap_or(study.current);
    let values = set(study, slot).into_iter();
    let named = values.filter_map(|(id, value)| Some((model.parameters.get(id.0)?.name.clone(), value)));
    let addition = Addition {
        name,
        base: model.scenarios.get(study.tried.now.base).map(|scenario| scenario.name.clone()),
        values: named.collect(),
    };
    let (source, world) = (study.source.clone(), std::sync::Arc::clone(&study.world));
    let replace = sent(app, entry);
    vec![Effect::Record { source, world, addition, path, replace }]
}

/// Has the table behind the screen written, in the form that the file's name says.
pub(super) fn write_table(app: &mut App, entry: Entry, path: PathBuf) -> Vec<Effect> {
    let ending = path.extension().and_then(|ending| ending.to_str());
    let Some(form) = ending.and_then(Form::of_ending) else {
        again(app, entry, "end the name in .txt .csv .md .json or .tex; or Tab, to write the screen as text");
        return Vec::new();
    };
    match behind(app, form) {
        Ok(text) => {
            let replace = sent(app, entry);
            vec![Effect::Write { path, text, replace }]
        }
        Err(reason) => {
            again(app, entry, &reason);
            Vec::new()
        }
    }
}

/// Has the screen written as text.
pub(super) fn write_screen(app: &mut App, entry: Entry, path: PathBuf) -> Vec<Effect> {
    let replace = sent(app, entry);
    vec![Effect::WriteScreen { path, replace }]
}

/// Remembers what is under way; whether a file that is there is to be replaced.
fn sent(app: &mut App, entry: Entry) -> bool {
    let replace = entry.replaces.as_ref() == Some(&entry.text);
    app.sent = Some(entry);
    replace
}

/// What came of it.
pub(super) fn written(app: &mut App, written: Written) {
    let entry = app.sent.take();
    match written {
        Written::Done(path) => app.say(format!("written to {}", path.display())),
        Written::Recorded { path, scenario, needs_tables } => recorded(app, path, scenario, needs_tables),
        Written::Taken(path) => {
            let hint = format!("{} is there already; Enter again replaces it, another name leaves it", path.display());
            back(app, entry.map(|entry| Entry { replaces: Some(entry.text.clone()), ..entry }), hint);
        }
        Written::Failed(reason) => back(app, entry, reason),
    }
}

/// The text comes back with what is to be said of it; where something else is open, that is said below.
fn back(app: &mut App, entry: Option<Entry>, hint: String) {
    match entry.filter(|_| app.dialog.is_none()) {
        Some(entry) => app.dialog = Some(Dialog::Entry(Entry { hint, suggested: false, ..entry })),
        None => app.complain(hint),
    }
}

fn recorded(app: &mut App, path: PathBuf, scenario: String, needs_tables: bool) {
    let tables = if needs_tables { "; it needs the model's tables beside it" } else { "" };
    app.say(format!("O opens the copy: \"{scenario}\" is in {}{tables}", path.display()));
    app.copy = Some((path, scenario));
    if let Some(study) = &mut app.study {
        study.tried.recorded = study.tried.edition;
    }
}

/// Opens the copy that was recorded last, at its new scenario.
pub(super) fn open_copy(app: &mut App) {
    let Some((path, _)) = &app.copy else {
        app.complain("no copy was written yet; N does it where values are tried");
        return;
    };
    app.edition += 1;
    app.reading = Some((Source::File(path.clone()), app.edition));
}
