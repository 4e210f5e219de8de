//! What lies over a screen: the keys, a message, a text that is typed.

use unicode_width::UnicodeWidthStr;

use super::paint::Page;
use super::sketch::Shown;
use crate::app::geometry::Area;
use crate::app::keymap::{of, place};
use crate::app::wants::sketch_area;
use crate::app::{App, Entry, Purpose, Screen};
use crate::report::grid::Ink;

/// Columns for the keys.
const KEYS: u16 = 18;

/// Every key of the screen below, from the table that binds them, and the signs that the sketch has.
pub(super) fn help(app: &App, page: &mut Page<'_>, area: Area, from: usize) {
    let below = App { dialog: None, ..app.clone() };
    let mut lines: Vec<(String, String)> = of(place(&below))
        .map(|binding| {
            let keys: Vec<String> = binding.keys.iter().map(|key| key.name()).collect();
            (keys.join(" or "), binding.help.to_owned())
        })
        .collect();
    let signs = signs(&below, page);
    if !signs.is_empty() {
        lines.push((String::new(), String::new()));
        lines.extend(signs);
    }
    page.text(area, [0, 0], "Keys and signs here", Ink::Strong);
    let (_, list) = area.top(1);
    let from = scrolled(from, lines.len(), list);
    for (row, (keys, help)) in lines.iter().skip(from).take(list.rows.into()).enumerate() {
        let after = page.text(list, [0, row as u16], keys, Ink::Strong);
        page.text(list, [KEYS.max(after + 2), row as u16], help, Ink::Plain);
    }
    rest(page, area, from, lines.len(), list);
}

/// The signs of the sketch that is below, with their meanings.
fn signs(app: &App, page: &Page<'_>) -> Vec<(String, String)> {
    let Some(study) = app.study.as_ref().filter(|_| has_sketch(app.screen)) else { return Vec::new() };
    Shown::new(app, study, study.current, sketch_area(app, study)).map_or_else(Vec::new, |shown| shown.signs(page))
}

fn has_sketch(screen: Screen) -> bool {
    matches!(screen, Screen::Equilibria | Screen::SideBySide | Screen::Values)
}

/// As many lines as can be passed without leaving the page empty.
fn scrolled(from: usize, lines: usize, list: Area) -> usize {
    from.min(lines.saturating_sub(list.rows.into()))
}

/// At the end of the heading: how much more there is.
fn rest(page: &mut Page<'_>, area: Area, from: usize, lines: usize, list: Area) {
    let below = lines.saturating_sub(from + usize::from(list.rows));
    if from > 0 || below > 0 {
        let text = format!("{from} lines above, {below} below");
        page.text(area, [area.columns.saturating_sub(text.len() as u16), 0], &text, Ink::Faint);
    }
}

/// A message that fills the screen.
pub(super) fn message(page: &mut Page<'_>, area: Area, title: &str, lines: &[String], from: usize) {
    page.text(area, [0, 0], title, Ink::Warning);
    let (_, list) = area.top(2);
    let from = scrolled(from, lines.len(), list);
    for (row, line) in lines.iter().skip(from).take(list.rows.into()).enumerate() {
        page.text(list, [0, row as u16], line, Ink::Plain);
    }
    let (head, _) = area.top(2);
    rest(page, Area { y: head.y + 1, ..head }, from, lines.len(), list);
}

/// A line to type in, above the status.
pub(super) fn entry(app: &App, page: &mut Page<'_>, area: Area, entry: &Entry) {
    let (line, _) = area.bottom(4);
    page.clear(line);
    page.rule(line, 0);
    let after = page.text(line, [0, 1], &asked(app, entry), Ink::Strong);
    // The end of a long text is what matters: it is where the cursor is.
    let room = usize::from(line.columns.saturating_sub(after + 1));
    let before = &entry.text[..entry.cursor];
    let skipped = before.char_indices().map(|(place, _)| place).find(|&place| before[place..].width() < room.max(2));
    let from = skipped.unwrap_or(0);
    // What is only suggested looks selected: typing takes its place.
    let ink = if entry.suggested { Ink::Chosen } else { Ink::Plain };
    let at = page.text(line, [after, 1], &before[from..], ink);
    let under = entry.text[entry.cursor..].chars().next().unwrap_or(' ').to_string();
    let end = page.text(line, [at, 1], &under, Ink::Chosen);
    page.text(line, [end, 1], entry.text[entry.cursor..].strip_prefix(under.as_str()).unwrap_or(""), Ink::Plain);
    let (hint, _) = line.bottom(2);
    page.words(hint, &entry.hint, Ink::Strong);
}

fn asked(app: &App, entry: &Entry) -> String {
    let parameter = || Some(app.study.as_ref()?.parameter()?.1.name.clone());
    match &entry.purpose {
        Purpose::Open => "path of a model: ".to_owned(),
        Purpose::Value => format!("new value of {}: ", parameter().unwrap_or_default()),
        Purpose::Write => "write the table to: ".to_owned(),
        Purpose::WriteScreen => "write the screen to: ".to_owned(),
        Purpose::Record => "name of the new scenario: ".to_owned(),
        Purpose::RecordTo(_) => "write the copy to: ".to_owned(),
    }
}
