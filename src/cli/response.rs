//! `restpoint response`: every equilibrium of each scenario as a parameter varies.

use crate::analysis::equilibria::Budget;
use crate::analysis::prepare::Prepared;
use crate::diag::cleanse::cleanse;
use crate::model::{Original, ParameterId};
use crate::report::response::chart::{self, Charted, Charts};
use crate::report::response::{Along, Chosen, FIELDS, Field, Responses, UnknownField, guide, written};
use crate::report::table::{Limits, Page, Scene, Style, Table};
use crate::shell::models::{Reading, read};
use crate::shell::signal::Interrupt;
use crate::shell::solver::{BOXES, along, charted, scene};
use crate::shell::workers::Threads;

use super::arguments::{BUDGET, Format, Options, Response};
use super::choice::Choice;
use super::model::{remarks, wrong};
use super::solve::{Solver, ended};
use super::table::command;
use super::varied::{ranges, varied};
use super::{Exit, Outcome, Screen};

/// Follows the equilibria of the scenarios asked for.
pub(super) fn response(asked: &Response, options: &Options, screen: Screen) -> Outcome {
    let chosen = match fields(asked, options) {
        Ok(chosen) => chosen,
        Err(outcome) => return outcome,
    };
    let Some(path) = &asked.model else { return Outcome::only(NO_MODEL.to_owned(), Exit::Usage) };
    let original = match read(Some(path)) {
        Reading::Unreadable(reason) => return Outcome::only(format!("error: {reason}\n"), Exit::Fault),
        Reading::Wrong(sources, found) => return wrong(&found, &sources, options, screen.color_remarks),
        Reading::Model(original) => original,
    };
    let model = &original.model;
    let choice = match Choice::new(model, &asked.work).and_then(|choice| varied(model, asked, choice)) {
        Ok(choice) => choice,
        Err(reason) => return Outcome::only(format!("error: {}\n", cleanse(&reason)), Exit::Usage),
    };
    let ranges = ranges(model, &choice);
    let prepared = match Prepared::over(model, &choice.set, &ranges) {
        Ok(prepared) => prepared,
        Err(found) => return wrong(&found, &model.sources, options, screen.color_remarks),
    };
    let run =
        Run { asked, options, screen, original: &original, choice: &choice, prepared: &prepared, chosen: &chosen };
    match ranges[..] {
        [one] => run.one(one),
        [across, upwards] => run.two([across, upwards]),
        _ => Outcome::only(String::new(), Exit::Usage),
    }
}

const NO_MODEL: &str = "\
error: a model is needed

Usage: restpoint response [OPTIONS] --of <NAME> <MODEL>

For more information, try '--help'.
";

/// The fields of CSV asked for; or what there is to be said of them, and nothing else to be done.
fn fields(asked: &Response, options: &Options) -> Result<Chosen, Outcome> {
    let Some(list) = &asked.show.columns else { return Ok(Chosen::all(known(asked))) };
    if asked.show.is_help() {
        return Err(match options.format {
            Format::Text => Outcome { result: guide(), remarks: String::new(), exit: Exit::Done },
            _ => Outcome::only("error: --columns help is text\n".to_owned(), Exit::Usage),
        });
    }
    if options.format != Format::Csv {
        let reason =
            "error: --columns chooses among the fields of --format csv; the other formats have their own tables\n";
        return Err(Outcome::only(reason.to_owned(), Exit::Usage));
    }
    Chosen::read(list, known(asked)).map_err(|unknown| Outcome::only(no_such_field(&unknown), Exit::Usage))
}

/// The fields that there are.
fn known(asked: &Response) -> &'static [Field] {
    if asked.of.len() > 1 { &chart::FIELDS } else { &FIELDS }
}

fn no_such_field(unknown: &UnknownField) -> String {
    let meant = unknown.nearest.map_or_else(String::new, |near| format!("; did you mean \"{near}\"?"));
    format!("error: no field is called \"{}\"{meant}; --columns help lists them\n", cleanse(&unknown.id))
}

/// All that a run is of.
#[derive(Clone, Copy)]
struct Run<'r> {
    asked: &'r Response,
    options: &'r Options,
    screen: Screen,
    original: &'r Original,
    choice: &'r Choice,
    prepared: &'r Prepared,
    chosen: &'r Chosen,
}

impl Run<'_> {
    /// Along one parameter.
    fn one(self, (id, range): (ParameterId, [f64; 2])) -> Outcome {
        self.solved(
            |solver, scene, budget| along(solver.model, solver.prepared, scene, (id, range), budget, &mut |_| {}),
            |table, along: &[Option<Along>]| {
                let responses = Responses { table, control: id, range, chosen: self.chosen, along };
                let result = written(&responses, self.options.format.into(), self.page());
                (result, Whole { complete: responses.is_complete(), undefined: responses.undefined() })
            },
        )
    }

    /// The chart of two parameters.
    fn two(self, both: [(ParameterId, [f64; 2]); 2]) -> Outcome {
        self.solved(
            |solver, scene, budget| charted(solver.model, solver.prepared, scene, both, budget),
            |table, charts: &[Option<Charted>]| {
                let (controls, ranges) = (both.map(|(id, _)| id), both.map(|(_, range)| range));
                let charts = Charts { table, controls, ranges, chosen: self.chosen, charts };
                let result = chart::written(&charts, self.options.format.into(), self.page());
                (result, Whole { complete: charts.is_complete(), undefined: Vec::new() })
            },
        )
    }

    fn page(&self) -> Page {
        let style = if self.options.ascii { Style::Ascii } else { Style::Unicode };
        Page { width: self.screen.width, style, color: self.screen.color }
    }

    /// Searches each scenario and does something with it, within its time; then shows it all.
    fn solved<T>(
        self,
        work: impl Fn(&Solver<'_>, &Scene, &Budget<'_>) -> Option<T>,
        show: impl FnOnce(&Table<'_>, &[Option<T>]) -> (String, Whole),
    ) -> Outcome {
        let (model, asked) = (&self.original.model, self.asked);
        let interrupt = Interrupt::listen();
        let limits = Limits { seconds: asked.work.budget.unwrap_or(BUDGET), boxes: BOXES };
        let threads = asked.work.threads.map_or_else(Threads::available, |count| Threads::new(count.into()));
        let solver = Solver { model, prepared: self.prepared, limits, threads, interrupt: &interrupt };
        let one = |&scenario: &usize| {
            solver.within(|budget| {
                let scene = scene(model, self.prepared, scenario, budget);
                let found = work(&solver, &scene, budget);
                (scene, found)
            })
        };
        let (scenes, found): (Vec<Scene>, Vec<Option<T>>) = self.choice.scenarios.iter().map(one).unzip();
        let names = solver.names(&scenes);
        let what = asked.model.as_deref().map(|path| ("response", path));
        let command = command(what, &asked.work, asked.show.columns.as_deref(), self.options, self.choice, model);
        let table = Table {
            model,
            sha256: &self.original.sha256,
            tables: &self.original.tables,
            command: &command,
            set: &self.choice.set,
            bounds: &self.prepared.bounds,
            limits,
            scenes: &scenes,
            names: &names,
            interrupted: interrupt.is_raised(),
            columns: None,
        };
        let (result, whole) = show(&table, &found);
        self.ended(&table, result, &whole)
    }

    fn ended(self, table: &Table<'_>, result: String, whole: &Whole) -> Outcome {
        let (failed, exit) = ended(table.scenes, table.interrupted, self.asked.work.strict);
        let mut remarks = remarks(&failed, &self.original.model.sources, self.screen.color_remarks);
        for said in &whole.undefined {
            remarks += &["error: ", cleanse(said).as_ref(), "\n"].concat();
        }
        let exit = match exit {
            Exit::Done | Exit::Unproved if !whole.undefined.is_empty() => Exit::Fault,
            Exit::Done if self.asked.work.strict && !whole.complete => Exit::Unproved,
            exit => exit,
        };
        Outcome { result, remarks, exit }
    }
}

/// What the exit status hangs on beside the scenarios themselves.
struct Whole {
    /// Whether it is proved that nothing is missing.
    complete: bool,
    /// Where the model has no value, a sentence each.
    undefined: Vec<String>,
}
