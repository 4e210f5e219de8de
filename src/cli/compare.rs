//! `restpoint compare`: scenarios side by side.

use std::path::Path;

use crate::analysis::passage::Passage;
use crate::analysis::prepare::Prepared;
use crate::diag::cleanse::cleanse;
use crate::model::Original;
use crate::report::compare::{Comparison, written};
use crate::report::table::{Limits, Page, Scene, Style, Table};
use crate::shell::models::{Reading, read};
use crate::shell::signal::Interrupt;
use crate::shell::solver::{BOXES, passages};
use crate::shell::workers::Threads;

use super::arguments::{BUDGET, Options, Work};
use super::choice::Choice;
use super::model::{remarks, wrong};
use super::solve::{Solver, ended};
use super::table::command;
use super::{Exit, Outcome, Screen};

/// Finds the equilibria of all scenarios asked for, and puts them side by side.
pub(super) fn compare(path: &Path, work: &Work, options: &Options, screen: Screen) -> Outcome {
    let original = match read(Some(path)) {
        Reading::Unreadable(reason) => return Outcome::only(format!("error: {reason}\n"), Exit::Fault),
        Reading::Wrong(sources, found) => return wrong(&found, &sources, options, screen.color_remarks),
        Reading::Model(original) => original,
    };
    let model = &original.model;
    let choice = match Choice::new(model, work) {
        Ok(choice) => choice,
        Err(reason) => return Outcome::only(format!("error: {}\n", cleanse(&reason)), Exit::Usage),
    };
    if choice.scenarios.len() < 2 {
        return Outcome::only(ONE_ALONE.to_owned(), Exit::Usage);
    }
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
    let passages = solver.with_ways(|ways, stop| passages(ways, &scenes, stop));
    let command = command(Some(("compare", path)), work, None, options, &choice, model);
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
        columns: None,
    };
    present(&table, &passages, &original, work, options, screen)
}

const ONE_ALONE: &str = "error: two scenarios at least are needed to compare; \"restpoint table\" shows one\n";

fn present(
    table: &Table<'_>,
    passages: &[Option<Passage>],
    original: &Original,
    work: &Work,
    options: &Options,
    screen: Screen,
) -> Outcome {
    let comparison = &Comparison::new(table, passages);
    let style = if options.ascii { Style::Ascii } else { Style::Unicode };
    let page = Page { width: screen.width, style, color: screen.color };
    let result = written(comparison, options.format.into(), page);
    let (failed, exit) = ended(table.scenes, table.interrupted, work.strict);
    Outcome { result, remarks: remarks(&failed, &original.model.sources, screen.color_remarks), exit }
}
