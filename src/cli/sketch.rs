//! `restpoint sketch`: the direction field of each scenario as text.

use crate::analysis::field::{LINEAR, Slice, Window};
use crate::analysis::prepare::Prepared;
use crate::analysis::subject::Subject;
use crate::diag::cleanse::cleanse;
use crate::model::{Model, Original};
use crate::report::sketch::{Picture, Plot, Size, Style, View, closing, heading, legend_rows, text, window};
use crate::report::table::{Limits, Names, Page, Scene, Solved, failed};
use crate::shell::models::{Reading, read};
use crate::shell::signal::Interrupt;
use crate::shell::solver::BOXES;
use crate::shell::terminal::ROWS;
use crate::shell::workers::Threads;

use super::arguments::{BUDGET, Format, Options, Sketch, Work};
use super::choice::{self, Choice};
use super::model::{remarks, wrong};
use super::solve::{Solver, ended};
use super::{Exit, Outcome, Screen};

/// Rows below which a drawing is not cut to let its legend fit the terminal as well.
const ENOUGH: usize = 16;

/// Draws the scenarios of a model.
pub(super) fn sketch(asked: &Sketch, options: &Options, screen: Screen) -> Outcome {
    if options.format != Format::Text {
        let reason = "error: a sketch has only --format text; \"restpoint table\" has the other formats\n";
        return Outcome::only(reason.to_owned(), Exit::Usage);
    }
    let original = match read(Some(&asked.model)) {
        Reading::Unreadable(reason) => return Outcome::only(format!("error: {reason}\n"), Exit::Fault),
        Reading::Wrong(sources, found) => return wrong(&found, &sources, options, screen.color_remarks),
        Reading::Model(original) => original,
    };
    let model = &original.model;
    let chosen = Choice::new(model, &asked.work).and_then(|choice| {
        let axes = asked.axes.as_ref().map(|axes| choice::axes(model, axes)).transpose()?;
        Ok((choice, axes.unwrap_or_else(|| Slice::axes(model))))
    });
    let (choice, axes) = match chosen {
        Ok(chosen) => chosen,
        Err(reason) => return Outcome::only(format!("error: {}\n", cleanse(&reason)), Exit::Usage),
    };
    let prepared = match Prepared::new(model, &choice.set) {
        Ok(prepared) => prepared,
        Err(found) => return wrong(&found, &model.sources, options, screen.color_remarks),
    };
    let interrupt = Interrupt::listen();
    let limits = Limits { seconds: asked.work.budget.unwrap_or(BUDGET), boxes: BOXES };
    let threads = asked.work.threads.map_or_else(Threads::available, |count| Threads::new(count.into()));
    let solver = Solver { model, prepared: &prepared, limits, threads, interrupt: &interrupt };
    let scenes: Vec<Scene> = choice.scenarios.iter().map(|&scenario| solver.scene(scenario)).collect();
    let drawer = Drawer { model, prepared: &prepared, axes, size: asked.size, options, screen };
    let names = solver.names(&scenes);
    present(
        &drawer.all(&scenes, &names, interrupt.is_raised()),
        &scenes,
        &original,
        asked,
        screen,
        interrupt.is_raised(),
    )
}

fn present(
    result: &str,
    scenes: &[Scene],
    original: &Original,
    Sketch { work: Work { strict, .. }, .. }: &Sketch,
    screen: Screen,
    interrupted: bool,
) -> Outcome {
    let (failed, exit) = ended(scenes, interrupted, *strict);
    let remarks = remarks(&failed, &original.model.sources, screen.color_remarks);
    Outcome { result: result.to_owned(), remarks, exit }
}

/// What all sketches of a run share.
struct Drawer<'d> {
    model: &'d Model,
    prepared: &'d Prepared,
    axes: [usize; 2],
    size: Option<Size>,
    options: &'d Options,
    screen: Screen,
}

impl Drawer<'_> {
    fn all(&self, scenes: &[Scene], names: &Names, interrupted: bool) -> String {
        let solved: Vec<&Solved> = scenes.iter().filter_map(|scene| scene.outcome.as_ref().ok()).collect();
        let sides: Vec<[f64; 2]> = self.prepared.bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
        let window = window(self.model, &self.prepared.bounds, &solved, self.axes);
        let page = self.page();
        let mut out = heading(self.model, page);
        if interrupted {
            out.push_str("INTERRUPTED: the search was broken off; this is a partial result.\n");
        }
        for (place, scene) in scenes.iter().enumerate() {
            out.push('\n');
            out.push_str(&match &scene.outcome {
                Ok(solved) => self.one(scene, solved, names.of(place), window, &sides),
                Err(problems) => failed(self.model, scene, problems, &page),
            });
        }
        out.push('\n');
        out + &closing(page)
    }

    fn page(&self) -> Page {
        let style = if self.options.ascii { Style::Ascii } else { Style::Unicode };
        Page { width: self.size.map_or(self.screen.width, |size| size.columns), style, color: self.screen.color }
    }

    fn one(&self, scene: &Scene, solved: &Solved, ids: &[String], window: Window, sides: &[[f64; 2]]) -> String {
        let Some(Ok(plan)) = self.prepared.plans.get(scene.scenario) else { return String::new() };
        let system = &self.prepared.system;
        let mut subject = Subject::new(self.model, &system.graph, &system.plans[*plan], sides.to_vec());
        let slice = Slice::new(&subject, self.axes, &solved.equilibria, &solved.assessment);
        let scales = LINEAR;
        let view = View { model: self.model, scenario: scene.scenario, solved, ids, slice: &slice, window, scales };
        let plot = Plot::of(self.size.unwrap_or_else(|| self.fitting(&view)));
        let picture = Picture::new(&mut subject, &view, &plot);
        text(&view, &picture, self.page())
    }

    /// A drawing that fills the terminal together with its legend; where there is none, one of the usual size.
    fn fitting(&self, view: &View<'_>) -> Size {
        let rows = match self.screen.height {
            Some(height) => height.saturating_sub(legend_rows(view)).max(ENOUGH),
            None => ROWS,
        };
        Size { columns: self.screen.width, rows }
    }
}
