//! `restpoint table`: the equilibria of each scenario.

use std::path::Path;

use crate::analysis::prepare::Prepared;
use crate::diag::cleanse::cleanse;
use crate::model::{Model, Original};
use crate::report::table::{Command, Limits, Page, Scene, Selection, Style, Table, UnknownColumn, guide, written};
use crate::shell::models::{Reading, read};
use crate::shell::signal::Interrupt;
use crate::shell::solver::BOXES;
use crate::shell::workers::Threads;

use super::arguments::{BUDGET, Format, Options, Show, Work};
use super::choice::Choice;
use super::model::{remarks, wrong};
use super::solve::{Solver, ended};
use super::{Exit, Outcome, Screen};

/// Says what columns there are.
pub(super) fn columns(options: &Options) -> Outcome {
    if options.format == Format::Text {
        Outcome { result: guide(), remarks: String::new(), exit: Exit::Done }
    } else {
        Outcome::only("error: --columns help is text\n".to_owned(), Exit::Usage)
    }
}

/// Finds and shows the equilibria of the model at `path`, or of the one compiled in.
pub(super) fn table(path: Option<&Path>, work: &Work, show: &Show, options: &Options, screen: Screen) -> Outcome {
    let selection = match show.columns.as_deref().map(Selection::read).transpose() {
        Ok(selection) => selection,
        Err(unknown) => return Outcome::only(no_such_column(&unknown), Exit::Usage),
    };
    let original = match read(path) {
        Reading::Unreadable(reason) => return Outcome::only(format!("error: {reason}\n"), Exit::Fault),
        Reading::Wrong(sources, found) => return wrong(&found, &sources, options, screen.color_remarks),
        Reading::Model(original) => original,
    };
    let model = &original.model;
    let choice = match Choice::new(model, work) {
        Ok(choice) => choice,
        Err(reason) => return Outcome::only(format!("error: {}\n", cleanse(&reason)), Exit::Usage),
    };
    let prepared = match Prepared::new(model, &choice.set) {
        Ok(prepared) => prepared,
        Err(found) => return wrong(&found, &model.sources, options, screen.color_remarks),
    };
    let interrupt = Interrupt::listen();
    let limits = Limits { seconds: work.budget.unwrap_or(BUDGET), boxes: BOXES };
    let threads = work.threads.map_or_else(Threads::available, |count| Threads::new(count.into()));
    let solver = Solver { model, prepared: &prepared, limits, threads, interrupt: &interrupt };
    let scenes: Vec<Scene> = choice.scenarios.iter().map(|&scenario| solver.scene(scenario)).collect();
    let names = solver.names(&scenes);
    let word = path.map(|path| ("table", path));
    let command = command(word, work, show.columns.as_deref(), options, &choice, model);
    let table = Table {
        model,
        sha256: &original.sha256,
        tables: &original.tables,
        command: &command,
        set: &choice.set,
        bounds: &prepared.bounds,
        limits,
        scenes: &scenes,
        names: &names,
        interrupted: interrupt.is_raised(),
        columns: selection.as_ref(),
    };
    present(&table, &original, work, options, screen)
}

fn present(table: &Table<'_>, original: &Original, work: &Work, options: &Options, screen: Screen) -> Outcome {
    let style = if options.ascii { Style::Ascii } else { Style::Unicode };
    let page = Page { width: screen.width, style, color: screen.color };
    let result = written(table, options.format.into(), page);
    let (failed, exit) = ended(table.scenes, table.interrupted, work.strict);
    Outcome { result, remarks: remarks(&failed, &original.model.sources, screen.color_remarks), exit }
}

fn no_such_column(unknown: &UnknownColumn) -> String {
    let meant = unknown.nearest.map_or_else(
        || "; --columns help lists them".to_owned(),
        |near| format!("; did you mean \"{near}\"? --columns help lists them"),
    );
    format!("error: no column is called \"{}\"{meant}\n", cleanse(&unknown.id))
}

/// The command that makes what is shown, by its word and model.
pub(super) fn command(
    what: Option<(&str, &Path)>,
    work: &Work,
    columns: Option<&str>,
    options: &Options,
    choice: &Choice,
    model: &Model,
) -> String {
    let path = what.map(|(_, path)| path.to_string_lossy());
    let command = Command {
        word: what.map_or("table", |(word, _)| word),
        path: path.as_deref(),
        model,
        varied: &choice.varied,
        scenarios: if work.scenarios.is_empty() { &[] } else { &choice.scenarios },
        set: &choice.set,
        budget: work.budget,
        columns,
        form: options.format.into(),
    };
    command.to_string()
}
