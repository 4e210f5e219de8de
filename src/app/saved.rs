//! What all that is saved of the selected equilibrium has in common: where it comes from, above every form of it.
//!
//! [`facts`] says which model, scenario and equilibrium it is of, [`text`] puts them above what a screen has to say as text.
//! What the rows are is up to the screens: `knock` and `interactions`.

use super::behind::{path, scene, set};
use super::study::Selected;
use super::{App, Study};
use crate::report::rows::{Exact, Fact, Rows, heading, provenance};
use crate::report::sketch::Style;
use crate::report::table::{CAUTION, Limits, Names, Page, Table, human};

/// Columns of what is saved.
pub const COLUMNS: usize = 80;

/// What texts are put on.
pub const PAGE: Page = Page { width: COLUMNS, style: Style::Unicode, color: false };

/// Model, program, scenario, values over it, equilibrium; `None` where the scenario is being searched, so that what is
/// selected is of another edition of the model than what would be said of it.
pub fn facts(app: &App, study: &Study, selected: &Selected<'_>) -> Option<Vec<Fact>> {
    let scene = scene(study, study.slot()?).ok()?;
    let original = &study.world.original;
    let set = set(study, study.current);
    let table = Table {
        model: &original.model,
        sha256: &original.sha256,
        tables: &original.tables,
        command: "",
        set: &set,
        bounds: &study.world.prepared.bounds,
        limits: Limits { seconds: app.budget, boxes: Limits::BOXES },
        scenes: &[],
        names: &Names::alone(0),
        interrupted: false,
        columns: None,
    };
    let mut facts = provenance(&table, &path(study), &scene, selected.solved);
    let words = selected.in_words(study);
    let id = Exact::Text(selected.id(study).to_owned());
    facts.push(Fact { key: "equilibrium", label: "equilibrium", text: words.clone(), exact: id });
    facts.push(Fact { exact: Exact::Text(words), ..Fact::of_text("equilibrium_in_words", "", "") });
    facts.push(state("state", "state", selected, &selected.equilibrium.state));
    Some(facts)
}

/// A state: one number a species.
pub fn state(key: &'static str, label: &'static str, selected: &Selected<'_>, state: &[f64]) -> Fact {
    let species = || selected.model().species.iter().zip(state);
    let words = species().map(|(one, &x)| {
        let unit = one.unit.as_ref().map_or(String::new(), |unit| format!(" {}", unit.value));
        format!("{} = {}{unit}", one.symbol, human(x))
    });
    let text = words.collect::<Vec<_>>().join(", ");
    Fact { key, label, text, exact: Exact::Each(species().map(|(one, &x)| (one.symbol.clone(), x)).collect()) }
}

/// The facts, what is said, and what else a screen has; the caution at the end.
pub fn text(rows: &Rows, body: impl IntoIterator<Item = String>) -> String {
    let mut lines = heading(rows, PAGE);
    lines.push(String::new());
    lines.extend(rows.said.iter().map(|said| PAGE.paragraph("", said, 0)));
    lines.extend(body);
    lines.extend([String::new(), PAGE.paragraph("", CAUTION, 0)]);
    lines.iter().fold(String::new(), |text, line| text + line.trim_end() + "\n")
}
