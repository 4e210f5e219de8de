//! Which model? Those that can be chosen, one a line; all about the selected one below.

use unicode_width::UnicodeWidthStr;

use super::paint::Page;
use crate::app::action::Action;
use crate::app::catalogue::{Entry, Origin};
use crate::app::geometry::{Area, chooser};
use crate::app::keymap::{Place, key_of};
use crate::app::{App, Screen};
use crate::report::grid::Ink;

/// Columns of the origin.
const ORIGIN: u16 = 12;
/// Columns of the number of scenarios.
const COUNT: u16 = 10;
/// Columns of the species at least, else they are left out.
const SPECIES: u16 = 16;

/// The whole screen.
pub(super) fn draw(app: &App, page: &mut Page<'_>) {
    let parts = chooser(app.size);
    if app.chooser.entries.is_empty() {
        page.words(parts.list, &empty(app), Ink::Plain);
        return;
    }
    list(app, page, parts.list);
    page.rule(parts.details, 0);
    let (_, details) = parts.details.top(1);
    if let Some(entry) = app.chooser.entries.get(app.chooser.chosen) {
        about(entry, page, details);
    }
}

fn empty(app: &App) -> String {
    if app.chooser.is_listing {
        return "Looking for models.".to_owned();
    }
    let key = key_of(Place::On(Screen::Chooser), Action::Type).unwrap_or_default();
    format!(
        "No model was found. Models are looked for in the folder \"scenarios\" and among those opened before; press {key} to \
         type the path of one."
    )
}

fn list(app: &App, page: &mut Page<'_>, area: Area) {
    let shown = &app.chooser;
    let columns = Columns::new(area);
    for (column, text) in
        [(2, "model"), (columns.species, "species"), (columns.count, "scenarios"), (columns.origin, "")]
    {
        let is_shown = text != "species" || columns.has_species;
        if is_shown {
            page.text(area, [column, 0], text, Ink::Faint);
        }
    }
    let room = usize::from(area.rows.saturating_sub(1));
    for (row, (place, entry)) in shown.entries.iter().enumerate().skip(shown.from).take(room).enumerate() {
        let row = row as u16 + 1;
        let is_twin = shown.entries.iter().filter(|other| other.title == entry.title).count() > 1;
        let title = if is_twin { format!("{}: {}", entry.name, entry.title) } else { entry.title.clone() };
        columns.line(entry, &title, page, area, row);
        if place == shown.chosen {
            page.text(area, [0, row], ">", Ink::Strong);
            page.row(area, row, Ink::Chosen);
        }
    }
}

struct Columns {
    species: u16,
    count: u16,
    origin: u16,
    has_species: bool,
}

impl Columns {
    fn new(area: Area) -> Self {
        let origin = area.columns.saturating_sub(ORIGIN);
        let count = origin.saturating_sub(COUNT);
        // Title and species share the rest; the title tells more.
        let species = count - (count * 2 / 5).min(48);
        let has_species = count - species >= SPECIES;
        Self { species: if has_species { species } else { count }, count, origin, has_species }
    }

    fn line(&self, entry: &Entry, title: &str, page: &mut Page<'_>, area: Area, row: u16) {
        let until = |column: u16| Area { columns: column.saturating_sub(1), ..area };
        if let Some(problem) = &entry.problem {
            let text = format!("! {}: {problem}", entry.name);
            page.text(until(self.origin), [2, row], &text, Ink::Warning);
        } else {
            page.text(until(self.species), [2, row], title, Ink::Plain);
            if self.has_species {
                page.text(until(self.count), [self.species, row], &entry.species.join(", "), Ink::Plain);
            }
            page.text(until(self.origin), [self.count, row], &format!("{:>6}", entry.scenarios), Ink::Plain);
        }
        page.text(area, [self.origin, row], origin(entry.origin), Ink::Faint);
    }
}

/// Why a model is listed.
fn origin(origin: Origin) -> &'static str {
    match origin {
        Origin::Given => "open now",
        Origin::Folder => "in scenarios",
        Origin::Recent => "before",
        Origin::Compiled => "built in",
    }
}

/// The selected one in full.
fn about(entry: &Entry, page: &mut Page<'_>, area: Area) {
    let name = match entry.origin {
        Origin::Compiled => format!("{}, as it comes with the program", entry.name),
        _ => entry.name.clone(),
    };
    let used = page.words(area, &name, Ink::Strong);
    let (_, rest) = area.top(used);
    let text = match &entry.problem {
        Some(problem) => format!("It cannot be used: {problem}"),
        None if entry.title.width() + 8 > usize::from(area.columns) / 2 => {
            format!("{}. Species: {}.", entry.title, entry.species.join(", "))
        }
        None => format!("Species: {}.", entry.species.join(", ")),
    };
    page.words(rest, &text, Ink::Plain);
}
