//! `restpoint table`: the equilibria of each scenario, for a reader and for a program.
//!
//! [`text()`] is for reading: as wide as it is told, in ASCII and without colour if asked, what is proved told from what is
//! not by a word on every line. [`json`] is the same as data, in the keys of the contract. Both only present what a
//! [`Table`] holds, and both go through the one list of [`COLUMNS`]: to show something more of an equilibrium, add a
//! column there. `identity` names equilibria, `number` rounds, `words` has what both formats say, `layout` makes lines.
//!
//! The JSON has the contract's keys in the contract's order, and some of its own after them:
//!
//! - in `model`: `tables`, the tables that the model file names, `{"file", "sha256"}` each, where there are any
//! - in a scenario: `overlay`, what it changes, `{"values": {name: number}, "without": […], "harvest": […], "processes":
//!   […]}`
//! - at the end: `run`, `{"command", "set": {name: number}, "budget": {"seconds", "boxes"}, "interrupted"}`; `caution`

mod columns;
mod data;
mod identity;
mod layout;
mod number;
mod text;
mod words;

pub use columns::{COLUMNS, Column};
pub use data::json;
pub use identity::identify;
pub use number::{bound, human, human_above, human_below};
pub use text::{Page, failed, text};
pub(super) use words::CAUTION;

pub use super::check::Style;

use crate::analysis::assess::Assessment;
use crate::analysis::equilibria::{Equilibria, Equilibrium};
use crate::diag::Diagnostic;
use crate::model::system::bounds::Bound;
use crate::model::{Model, ParameterId};

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
    /// Whether the search was broken off from outside.
    pub interrupted: bool,
}

/// How much work the search of one scenario may take.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Seconds.
    pub seconds: f64,
    /// Boxes on each face.
    pub boxes: usize,
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
    /// Whether everything shown of it is proved: each equilibrium, and that there are no others in the box.
    pub fn is_proved(&self) -> bool {
        let Equilibria { complete, unresolved, list, .. } = &self.equilibria;
        *complete && unresolved.is_empty() && list.iter().all(|equilibrium| equilibrium.proven)
    }
}

/// An equilibrium as a row of the table.
#[derive(Clone, Copy, Debug)]
pub struct Row<'t> {
    table: &'t Table<'t>,
    id: &'t str,
    equilibrium: &'t Equilibrium,
}

impl<'t> Table<'t> {
    /// The names of all equilibria, scenario by scenario; none for a scenario that failed.
    fn ids(&self) -> Vec<Vec<String>> {
        let list = |scene: &'t Scene| scene.outcome.as_ref().map_or(&[][..], |solved| &solved.equilibria.list);
        identify(&self.scenes.iter().map(list).collect::<Vec<_>>())
    }

    fn rows<'a>(&'a self, solved: &'a Solved, ids: &'a [String]) -> Vec<Row<'a>> {
        let row = |(equilibrium, id): (&'a Equilibrium, &'a String)| Row { table: self, id, equilibrium };
        solved.equilibria.list.iter().zip(ids).map(row).collect()
    }
}
