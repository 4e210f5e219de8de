//! The chart of two controls: regions of the same states, the curves of thresholds between them, and points on these.
//!
//! [`Charts`] has it all; `map` draws the regions in characters, `sheets` makes the tables, `front` has the best pairs of yields, `csv` and `data` are for
//! spreadsheets and programs. All of it is numerical, but whether the search at the place inside a region was complete.
//!
//! The JSON of a scenario has the contract's keys, and after them `name`'s like of one control: `range`, a pair for each
//! control; `present`; in a curve `states`, `bounds_stable` (point by point) and `closed`; in a point `meaning` and `error`; in
//! a region `complete`; `cells`, the region of each cell of a grid over both ranges, row by row from the lowest, and `grid`,
//! how many columns and rows it has; `front`, the best pairs of yields: `of`, two of `{"harvest", "species"}`; `points`, each
//! `{"at", "yields", "state"}`, a pair of controls and one of yields in the order of `of`; `total`, the same of the largest
//! sum with `sum`, or null; `whole`, false where the time was up; and `why` there are none, or null.

mod csv;
mod data;
mod front;
mod map;
mod sheets;

pub use csv::{FIELDS, csv};
pub use data::json;

use super::super::table::layout::Ink;
use super::super::table::provenance::plain;
use super::super::table::words::{INCOMPLETE, proof};
use super::super::table::{Form, Page, Scene, Solved, Table, pretty, scene};
use super::paper::{self, Part};
use super::words::{name, unit};
use super::{Chosen, glyphs};
use crate::analysis::response::{Chart, Front, NoFront};
use crate::model::ParameterId;

/// Charts of some scenarios.
#[derive(Clone, Copy, Debug)]
pub struct Charts<'r> {
    /// The scenarios, with the names of their equilibria.
    pub table: &'r Table<'r>,
    /// What was varied: across, and upwards.
    pub controls: [ParameterId; 2],
    /// Over which values.
    pub ranges: [[f64; 2]; 2],
    /// The fields of CSV.
    pub chosen: &'r Chosen,
    /// One a scenario shown; `None` for one that failed.
    pub charts: &'r [Option<Charted>],
}

/// What was found of one scenario over both controls.
#[derive(Clone, Debug, PartialEq)]
pub struct Charted {
    /// Curves and regions.
    pub chart: Chart,
    /// Best pairs of yields, or why there are none.
    pub front: Result<Front, NoFront>,
}

/// One scenario that did not fail.
#[derive(Clone, Copy, Debug)]
struct One<'r> {
    table: &'r Table<'r>,
    scene: &'r Scene,
    solved: &'r Solved,
    chart: &'r Chart,
    front: &'r Result<Front, NoFront>,
}

impl<'r> Charts<'r> {
    fn each(&self) -> impl Iterator<Item = (&'r Scene, Option<One<'r>>)> {
        let (table, charts) = (self.table, self.charts);
        table.scenes.iter().enumerate().map(move |(place, scene)| {
            let found = scene.outcome.as_ref().ok().zip(charts.get(place).and_then(Option::as_ref));
            (scene, found.map(|(solved, Charted { chart, front })| One { table, scene, solved, chart, front }))
        })
    }

    /// Whether at the place inside every region of every chart it is proved that no equilibrium is missing there.
    pub fn is_complete(&self) -> bool {
        self.each().all(|(_, one)| one.is_some_and(|one| is_complete(one.chart)))
    }
}

/// Whether at the place inside every region it is proved that no equilibrium is missing, and every cell has a region.
fn is_complete(chart: &Chart) -> bool {
    chart.regions.iter().all(|region| region.complete) && chart.cells.iter().all(Option::is_some)
}

/// Charts in a form.
pub fn written(charts: &Charts<'_>, form: Form, page: Page) -> String {
    match form {
        Form::Csv => csv(charts, page.style),
        Form::Json => pretty(&json(charts), page.style),
        Form::Text | Form::Markdown | Form::Latex => {
            paper::written(charts.table, &parts(charts, form, page), form, page)
        }
    }
}

const MEANINGS: [(&str, &str); 2] = [
    ("proved", "of the place inside a region: that no equilibrium is missing there."),
    ("numerical", "computed, but nothing is proved about it: curves, points, and how far each region reaches."),
];

fn parts<'r>(charts: &Charts<'r>, form: Form, page: Page) -> Vec<Part<'r>> {
    let mut parts = Vec::new();
    for (scene, one) in charts.each() {
        match one {
            Some(one) => parts.extend(scenario(&one, form, page)),
            None => parts.push(Part::Failed(scene)),
        }
    }
    parts.extend(MEANINGS.map(|(word, meaning)| Part::Meaning(word, meaning)));
    parts
}

fn scenario<'r>(one: &One<'r>, form: Form, page: Page) -> Vec<Part<'r>> {
    let ranges = one.chart.controls.map(|control| {
        let [from, to, present] = [control.from, control.to, control.present].map(plain);
        let model = one.table.model;
        format!(
            "{} from {from} to {to} {}, now {present}",
            name(model, control.parameter),
            unit(model, control.parameter)
        )
        .replace(" ,", ",")
    });
    let changes = scene::changes(one.table, one.scene, one.solved, plain);
    let mut parts =
        vec![Part::Scenario(one.scene), Part::Said(format!("{changes}; {}.", ranges.join("; "))), complete(one.chart)];
    if form == Form::Text {
        parts.push(Part::Drawing(map::drawing(one, page)));
    }
    let regions = sheets::regions(one, glyphs(form, page));
    parts.extend(match form {
        // Lists of states are too long for a column beside others.
        Form::Text => sheets::regions_said(one, glyphs(form, page)).into_iter().map(Part::Said).collect(),
        _ => headed("Regions, and the states at a place inside each", regions),
    });
    parts.extend(headed("Points at which curves meet or change (numerical)", sheets::points(one)));
    parts.extend(sheets::points_said(one).into_iter().map(Part::Said));
    parts.extend(headed("Curves of thresholds between regions (numerical)", sheets::curves(one)));
    parts.extend(one.front.iter().flat_map(|front| headed(front::HEADING, front::pairs(one, front))));
    parts.extend(front::said(one).into_iter().map(Part::Said));
    parts
}

fn headed<'p>(heading: &str, sheet: super::super::table::sheet::Sheet) -> Vec<Part<'p>> {
    if sheet.rows.is_empty() { Vec::new() } else { vec![Part::Heading(heading.to_owned()), Part::Grid(sheet)] }
}

fn complete<'p>(chart: &Chart) -> Part<'p> {
    let open = chart.regions.iter().filter(|region| !region.complete).count();
    let unknown = chart.cells.iter().filter(|cell| cell.is_none()).count();
    let count = chart.regions.len();
    if open == 0 && unknown == 0 {
        let said = "the place inside each region has the states given below and no others; how far a region reaches is \
                    numerical.";
        return Part::Marked(proof(true), Ink::Proved, said.to_owned());
    }
    let unknown = match unknown {
        0 => String::new(),
        _ => format!("; of {unknown} of {} cells the region is not known", chart.cells.len()),
    };
    let said = format!("states may be missing in {open} of {count} regions{unknown}.");
    Part::Marked(INCOMPLETE, Ink::Undecided, said)
}
