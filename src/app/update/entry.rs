//! Texts that are typed: a path, a value, the name of a file or a scenario.

use super::values;
use crate::app::catalogue::Entry as Listed;
use crate::app::{App, Dialog, Effect, Entry, Key, Purpose, Screen, Source};

/// Bytes that a text may have.
const LONGEST: usize = 4096;

/// Begins to type what the screen takes.
pub(super) fn begin(app: &mut App) {
    open(app, if app.screen == Screen::Chooser { Purpose::Open } else { Purpose::Value });
}

/// Begins to type a text.
pub(super) fn open(app: &mut App, purpose: Purpose) {
    app.notice = None;
    let text = String::new();
    app.dialog = Some(Dialog::Entry(Entry { purpose, cursor: text.len(), text, hint: String::new() }));
}

/// Takes what is selected, or what was typed.
pub(super) fn accept(app: &mut App) -> Vec<Effect> {
    match app.dialog.take() {
        Some(Dialog::Entry(entry)) => take(app, entry),
        _ if app.screen == Screen::Chooser => {
            if let Some(Listed { source, .. }) = app.chooser.entries.get(app.chooser.chosen) {
                app.edition += 1;
                app.reading = Some((source.clone(), app.edition));
            }
            Vec::new()
        }
        _ => Vec::new(),
    }
}

fn take(app: &mut App, mut entry: Entry) -> Vec<Effect> {
    let text = entry.text.trim();
    match entry.purpose {
        Purpose::Open if !text.is_empty() => {
            app.edition += 1;
            app.reading = Some((Source::File(text.into()), app.edition));
        }
        Purpose::Value => match text.parse::<f64>() {
            Ok(value) if value.is_finite() => values::set(app, value),
            _ => {
                "a number is needed, for example 0.35".clone_into(&mut entry.hint);
                app.dialog = Some(Dialog::Entry(entry));
            }
        },
        Purpose::Open | Purpose::Write | Purpose::Record => {}
    }
    Vec::new()
}

/// A key that changes the text.
pub(super) fn edit(app: &mut App, key: Key) -> Vec<Effect> {
    let Some(Dialog::Entry(entry)) = &mut app.dialog else { return Vec::new() };
    entry.hint.clear();
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
    for c in text.chars().filter(|c| !c.is_control()) {
        edit(app, Key::Char(c));
    }
    Vec::new()
}
