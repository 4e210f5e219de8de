//! Texts that are typed: a path, a value, the name of a file or a scenario.

use super::{chooser, record, values};
use crate::app::behind::name;
use crate::app::catalogue::Completion;
use crate::app::{App, Dialog, Effect, Entry, Key, Purpose, Screen};

/// Bytes that a text may have.
const LONGEST: usize = 4096;

/// Begins to type what the screen takes.
pub(super) fn begin(app: &mut App) {
    if app.screen == Screen::Chooser {
        open(app, Purpose::Open, String::new(), "Tab completes it");
    } else {
        open(app, Purpose::Value, String::new(), "a number, for example 0.35 or 1.5e3");
    }
}

/// Begins to type where the screen is written to.
pub(super) fn begin_write(app: &mut App) {
    let text = format!("{}.txt", name(app));
    open(app, Purpose::Write, text, ABOUT_TABLE);
}

const ABOUT_TABLE: &str = "the table behind the screen: .txt .csv .md .json or .tex; Tab: the screen itself instead";
const ABOUT_SCREEN: &str = "this screen as text, as it is; Tab: the table behind it instead";

/// Begins to type a text, from one that is suggested.
pub(super) fn open(app: &mut App, purpose: Purpose, text: String, hint: &str) {
    app.notice = None;
    let hint = hint.to_owned();
    let (cursor, suggested) = (text.len(), !text.is_empty());
    app.dialog = Some(Dialog::Entry(Entry { purpose, text, cursor, hint, suggested, replaces: None }));
}

/// Takes what is selected, or what was typed.
pub(super) fn accept(app: &mut App) -> Vec<Effect> {
    match app.dialog.take() {
        Some(Dialog::Entry(entry)) => take(app, entry),
        _ if app.screen == Screen::Chooser => {
            chooser::open_chosen(app);
            Vec::new()
        }
        other => {
            app.dialog = other;
            Vec::new()
        }
    }
}

fn take(app: &mut App, entry: Entry) -> Vec<Effect> {
    let text = entry.text.trim().to_owned();
    if text.is_empty() {
        again(app, entry, "nothing is typed yet; Esc leaves it");
        return Vec::new();
    }
    match &entry.purpose {
        Purpose::Open => chooser::open_path(app, text.into()),
        Purpose::Value => match text.parse::<f64>() {
            Ok(value) if value.is_finite() => values::set(app, value),
            _ => again(app, entry, "a number is needed, with a point where it has decimals: 0.35"),
        },
        Purpose::Write => return record::write_table(app, entry, text.into()),
        Purpose::WriteScreen => return record::write_screen(app, entry, text.into()),
        Purpose::Record => record::name_taken(app, entry, text),
        Purpose::RecordTo(scenario) => {
            let scenario = scenario.clone();
            return record::record(app, entry, scenario, text.into());
        }
    }
    Vec::new()
}

/// The text is to be typed on, and why.
pub(super) fn again(app: &mut App, mut entry: Entry, hint: &str) {
    hint.clone_into(&mut entry.hint);
    entry.suggested = false;
    app.dialog = Some(Dialog::Entry(entry));
}

/// Completes a path; changes what is written.
pub(super) fn complete(app: &mut App) -> Vec<Effect> {
    let Some(Dialog::Entry(entry)) = &mut app.dialog else { return Vec::new() };
    let (other, hint) = match entry.purpose {
        Purpose::Open | Purpose::RecordTo(_) => return vec![Effect::Complete(entry.text.clone())],
        Purpose::Write => (Purpose::WriteScreen, ABOUT_SCREEN),
        Purpose::WriteScreen => (Purpose::Write, ABOUT_TABLE),
        Purpose::Value | Purpose::Record => return Vec::new(),
    };
    entry.purpose = other;
    hint.clone_into(&mut entry.hint);
    Vec::new()
}

/// What a path could become, unless it has been typed on.
pub(super) fn completed(app: &mut App, asked: &str, completion: Completion) {
    let Some(Dialog::Entry(entry)) = &mut app.dialog else { return };
    if entry.text != asked {
        return;
    }
    entry.hint = match completion.candidates.as_slice() {
        [] => "nothing begins so".to_owned(),
        [_] => String::new(),
        several => several.join(", "),
    };
    entry.suggested = false;
    entry.cursor = completion.text.len();
    entry.text = completion.text;
}

/// A key that changes the text.
pub(super) fn edit(app: &mut App, key: Key) -> Vec<Effect> {
    let Some(Dialog::Entry(entry)) = &mut app.dialog else { return Vec::new() };
    if std::mem::take(&mut entry.suggested) && matches!(key, Key::Char(_)) {
        entry.text.clear();
        entry.cursor = 0;
    }
    let before = entry.text[..entry.cursor].char_indices().next_back().map(|(place, _)| place);
    let after = entry.text[entry.cursor..].chars().next().map(|c| entry.cursor + c.len_utf8());
    match key {
        Key::Char(c) if entry.text.len() < LONGEST => {
            entry.text.insert(entry.cursor, c);
            entry.cursor += c.len_utf8();
        }
        Key::Backspace => {
            if let Some(before) = before {
                entry.text.remove(before);
                entry.cursor = before;
            }
        }
        Key::Delete if after.is_some() => {
            entry.text.remove(entry.cursor);
        }
        Key::Left => entry.cursor = before.unwrap_or(0),
        Key::Right => entry.cursor = after.unwrap_or(entry.cursor),
        Key::Home => entry.cursor = 0,
        Key::End => entry.cursor = entry.text.len(),
        _ => {}
    }
    Vec::new()
}

/// A text that was pasted goes in where the cursor is, without its control characters.
pub(super) fn paste(app: &mut App, text: &str) -> Vec<Effect> {
    for c in text.chars().filter(|c| !c.is_control()).take(LONGEST) {
        edit(app, Key::Char(c));
    }
    Vec::new()
}
