//! `restpoint table`: the equilibria of each scenario, for a reader, a report, a spreadsheet and a program.
//!
//! [`text()`] is for reading: as wide as it is told, in ASCII and without colour if asked. [`markdown()`] and [`latex()`] are
//! for reports, [`csv()`] for spreadsheets and statistics, [`json`] for programs, with the keys of the contract. All only
//! present what a [`Table`] holds, and all go through the one list of [`COLUMNS`]: to show something more of an
//! equilibrium, add a column there. Numbers are rounded for people and exact in files; what is proved is told from what is
//! not by words, in every format; every format carries what is needed to make the table again, and the caution.
//!
//! `identity` names equilibria, `number` rounds, `words` and `scene` have what all formats say, `paths` says where paths
//! go, `provenance` what the table is of, `command` how to make it again, `form` which formats there are, `layout` makes
//! lines, `guide` explains the columns, `glossary` those shown, `facts` has one equilibrium for a screen.
//!
//! The JSON has the contract's keys in the contract's order, and some of its own after them:
//!
//! - in `model`: `tables`, the tables that the model file names, `{"file", "sha256"}` each, where there are any
//! - in `from_now`: `starts`, how many starts the shares rest on; `cycle`, as in `settles`, where one is reached
//! - in an equilibrium: the columns of `columns::own`
//! - in a scenario: `overlay`, what it changes, `{"values": {name: number}, "without": […], "harvest": […], "processes":
//!   […]}`; `names`, sentences on equilibria with a new name that may be old ones, where there are any
//! - at the end: `run`, `{"command", "set": {name: number}, "budget": {"seconds", "boxes"}, "interrupted"}`; `caution`

pub(in crate::report) mod columns;
mod command;
pub(in crate::report) mod csv;
mod data;
mod facts;
mod form;
mod glossary;
mod guide;
mod identity;
pub(in crate::report) mod latex;
pub(in crate::report) mod layout;
pub(in crate::report) mod markdown;
mod number;
pub(in crate::report) mod paths;
pub(in crate::report) mod provenance;
pub(in crate::report) mod scene;
mod selection;
pub(in crate::report) mod sheet;
pub(in crate::report) mod text;
pub(in crate::report) mod words;

pub use columns::{COLUMNS, Column, Shown, Unit, columns};
pub use command::Command;
pub use csv::csv;
pub(super) use csv::line;
pub use data::json;
pub(in crate::report) use data::{failed as failed_as_data, framed};
pub use facts::{Case, Fact};
pub use form::{FORMS, Form, pretty, written};
pub use guide::guide;
pub use identity::Names;
pub(in crate::report) use identity::{percent, why};
pub use latex::latex;
pub use markdown::markdown;
pub use number::{bound, human, human_above, human_below};
pub use selection::{Selection, UnknownColumn};
pub use text::{Page, clean, failed, text};
pub use words::CAUTION;

pub use super::check::Style;

use serde_json::Value;

use crate::analysis::assess::{Assessed, Assessment};
use crate::analysis::equilibria::{Equilibria, Equilibrium};
use crate::analysis::linearise::{Linearisation, Unavailable};
use crate::analysis::measures::Measures;
use crate::diag::Diagnostic;
use crate::model::system::bounds::Bound;
use crate::model::{Harvest, Model, ParameterId, TimeKind};

/// What a table is of, and all that is needed to make it again.
#[derive(Clone, Copy, Debug)]
pub struct Table<'t> {
    /// The model, with all its scenarios.
    pub model: &'t Model,
    /// SHA-256 of the model file, in hexadecimal digits.
    pub sha256: &'t str,
    /// Name and SHA-256 of each table that the model file names.
    pub tables: &'t [(String, String)],
    /// The command that makes the table, without what makes no difference to it.
    pub command: &'t str,
    /// Parameters set from outside.
    pub set: &'t [(ParameterId, f64)],
    /// The search box, one side pair a species.
    pub bounds: &'t [Bound],
    /// How much work each scenario was allowed.
    pub limits: Limits,
    /// The scenarios asked for, in the file's order.
    pub scenes: &'t [Scene],
    /// The names of their equilibria.
    pub names: &'t Names,
    /// Whether the search was broken off from outside.
    pub interrupted: bool,
    /// The columns asked for; without, each format shows what it shows by default.
    pub columns: Option<&'t Selection>,
}

/// How much work the search of one scenario may take.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Seconds.
    pub seconds: f64,
    /// Boxes on each face.
    pub boxes: usize,
}

impl Limits {
    /// Boxes on one face, beyond which the search goes on to the next. A face of a model that can be settled at all takes
    /// tens to thousands.
    pub const BOXES: usize = 50_000;
    /// Seconds that a scenario may take where nothing is said.
    pub const SECONDS: f64 = 10.0;
}

/// One scenario, and what came of it.
#[derive(Clone, Debug)]
pub struct Scene {
    /// Index among the model's scenarios.
    pub scenario: usize,
    /// What was found, or why nothing could be looked for: one problem at least.
    pub outcome: Result<Solved, Vec<Diagnostic>>,
}

/// What was found in one scenario.
#[derive(Clone, Debug)]
pub struct Solved {
    /// The value of every parameter.
    pub values: Vec<f64>,
    /// Its equilibria, and what could not be decided.
    pub equilibria: Equilibria,
    /// What is said of each of them.
    pub assessment: Assessment,
}

impl Solved {
    /// Whether everything shown of it is proved: each equilibrium, that there are no others in the box, and what is said
    /// of types, stability and the nonlinear terms. Measures and paths are numbers, with no claim that would be proved.
    pub fn is_proved(&self) -> bool {
        let Equilibria { complete, unresolved, list, .. } = &self.equilibria;
        let is_found = *complete && unresolved.is_empty() && list.iter().all(|equilibrium| equilibrium.proven);
        is_found && self.assessment.equilibria.iter().all(|assessed| is_classified(&assessed.linear))
    }
}

/// Whether what is said of a linear part is proved; that there is none where the rates have no derivative is.
fn is_classified(linear: &Result<Linearisation, Unavailable>) -> bool {
    match linear {
        Ok(linear) => {
            let nonlinear = linear.nonlinear.is_none_or(|nonlinear| nonlinear.proven);
            linear.kind_proven && linear.stable_proven && nonlinear
        }
        Err(Unavailable::NoDerivative(_)) => true,
        Err(Unavailable::Eigenvalues(_)) => false,
    }
}

/// An equilibrium as a row of the table.
#[derive(Clone, Copy, Debug)]
pub struct Row<'t> {
    table: &'t Table<'t>,
    /// Index of the scenario in the model.
    scenario: usize,
    solved: &'t Solved,
    /// The names of all equilibria of the scenario.
    ids: &'t [String],
    /// Place in the scenario's list.
    place: usize,
    equilibrium: &'t Equilibrium,
}

impl<'t> Row<'t> {
    fn id(&self) -> &'t str {
        self.ids.get(self.place).map_or("", String::as_str)
    }

    /// What is said of it, where anything was computed.
    fn assessed(&self) -> Option<&'t Assessed> {
        self.solved.assessment.equilibria.get(self.place)
    }

    fn linear(&self) -> Option<&'t Linearisation> {
        self.assessed()?.linear.as_ref().ok()
    }

    /// Why it has no linear part, where it has none.
    fn why(&self) -> Option<&'static str> {
        match self.assessed().map(|assessed| &assessed.linear) {
            Some(Ok(_)) => None,
            Some(Err(reason)) => Some(words::unavailable(*reason)),
            None => words::why(self.equilibrium.derivative),
        }
    }

    fn measures(&self) -> Option<&'t Measures> {
        self.assessed().map(|assessed| &assessed.measures)
    }

    /// Where paths from it may lead.
    fn place(&self) -> paths::Place<'t> {
        paths::Place { table: self.table, scenario: self.scenario, ids: self.ids }
    }
}

impl<'t> Table<'t> {
    /// Every scenario with the names of its equilibria; none for one that failed.
    pub(in crate::report) fn named(&self) -> impl Iterator<Item = (&'t Scene, &'t [String])> {
        let names = self.names;
        self.scenes.iter().enumerate().map(|(place, scene)| (scene, names.of(place)))
    }

    /// What is to be said of those of a scenario that could not be followed from the one before.
    fn unfollowed(&self, scene: &Scene) -> Vec<String> {
        let place = self.scenes.iter().position(|other| other.scenario == scene.scenario);
        place.map_or_else(Vec::new, |place| self.names.sentences(place))
    }

    pub(in crate::report) fn rows<'a>(&'a self, scene: &Scene, solved: &'a Solved, ids: &'a [String]) -> Vec<Row<'a>> {
        let list = solved.equilibria.list.iter().enumerate();
        list.map(|(place, equilibrium)| Row { table: self, scenario: scene.scenario, solved, ids, place, equilibrium })
            .collect()
    }

    /// One equilibrium of a scenario as a row.
    pub(in crate::report) fn row<'a>(
        &'a self,
        scene: &Scene,
        solved: &'a Solved,
        ids: &'a [String],
        place: usize,
    ) -> Option<Row<'a>> {
        let equilibrium = solved.equilibria.list.get(place)?;
        Some(Row { table: self, scenario: scene.scenario, solved, ids, place, equilibrium })
    }

    pub(in crate::report) fn symbol(&self, species: usize) -> Option<&'t str> {
        self.model.species.get(species).map(|species| species.symbol.as_str())
    }

    fn parameter(&self, id: ParameterId) -> String {
        self.model.parameters.get(id.0).map_or_else(String::new, |parameter| parameter.name.clone())
    }

    /// Whether the model steps.
    pub(in crate::report) fn is_map(&self) -> bool {
        matches!(self.model.time, TimeKind::Discrete { .. })
    }

    /// The harvests of all scenarios shown, one after another.
    fn harvests(&self) -> impl Iterator<Item = &'t Harvest> {
        self.scenes.iter().flat_map(|scene| self.model.harvests_under(scene.scenario))
    }
}

/// A number that reads back the same; without a minus on zero, null where it is not finite.
pub(in crate::report) fn exact(x: f64) -> Value {
    // −0 + 0 = 0.
    (x + 0.0).into()
}

/// The same, and null where there is none.
pub(in crate::report) fn optional(x: Option<f64>) -> Value {
    x.map_or(Value::Null, exact)
}
