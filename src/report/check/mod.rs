//! `restpoint check`: what was understood of a model file, for a reader and for a program.
//!
//! [`text()`] is for reading: 80 columns, in ASCII if asked. [`json`] is the same as data. Both only present; whether the
//! model is sound was settled when it was made, and equations are written from its formulas, never from the compiled
//! ones. A new section needs its lines in `tables` and its key in `data`.
//!
//! Keys of the JSON (what does not exist is `null`; texts are as in the file):
//!
//! - `model`: `title`, `note`, `time`: `{"kind": "continuous"|"discrete", "unit", "step"}`
//! - `equations`: one a species, `{"species", "left", "right", "per_capita", "taken_before"}`; `right` is the sum,
//!   `per_capita` the sum divided by the abundance where it visibly is a multiple of it, `taken_before` what is taken
//!   before a map's step
//! - `community`: `{"species", "entries"}` where a Lotka–Volterra block is too large to be written out: its size, and how
//!   many entries are not zero
//! - `shorthand`: `{"name", "formula", "unit"}`
//! - `species`: `{"symbol", "name", "unit", "unit_inferred", "box": [low, high], "chosen",
//!   "population", "role", "aim"}`
//! - `parameters`: `{"name", "value", "unit", "unit_inferred", "range": [low, high], "draw", "min", "max", "control",
//!   "note"}`; `draw` is in words
//! - `processes`: `{"name", "rate", "effect": {symbol: formula}}`
//! - `harvest`: `{"name", "when": "before"|"after"|null, "takes"|"counts": {symbol: formula}, "price": {symbol: formula},
//!   "cost"}`
//! - `scenarios`: `{"name", "values": {name: formula}, "without": […], "harvest": […], "processes": […]}`
//! - `now`: `{"species", "value", "cv"}`; `correlations`: `{"between": [a, b], "rank"}`; `draws`: `{"file", "rows",
//!   "columns": […]}`
//! - `warnings`: `{"file", "line", "column", "message", "help"}`

mod data;
mod divide;
mod equations;
mod formula;
mod layout;
mod tables;
mod text;

pub use data::json;
pub use formula::Style;
pub use text::text;

use crate::diag::Diagnostic;
use crate::model::system::bounds::Bound;
use crate::model::units::Units;
use crate::model::{Draw, Model, Parameter, ParameterId};

/// What the report is made of.
#[derive(Clone, Copy, Debug)]
pub struct Subject<'m> {
    /// The model.
    pub model: &'m Model,
    /// What its units come to.
    pub units: &'m Units,
    /// The search box, where there is one.
    pub bounds: Option<&'m [Bound]>,
    /// Everything that looks wrong.
    pub warnings: &'m [Diagnostic],
}

/// A unit for showing, and whether it was inferred.
fn unit_of(given: Option<&String>, inferred: Option<&Option<String>>) -> Option<(String, bool)> {
    let inferred = inferred.and_then(Clone::clone).map(|unit| (unit, true));
    given.map(|unit| (unit.clone(), false)).or(inferred)
}

/// How a parameter is drawn, in words; a range alone means uniform, but a control is set, not drawn.
fn draw_of(model: &Model, id: ParameterId, parameter: &Parameter) -> Option<String> {
    use formula::number;
    let table = model.draws.as_ref().filter(|table| table.columns.contains(&id));
    Some(match (table, parameter.draw.as_ref().map(|draw| draw.value)) {
        (Some(table), _) => format!("from {}", table.path),
        (None, Some(Draw::Normal { sd })) => format!("normal, sd {}", number(sd)),
        (None, Some(Draw::Lognormal { cv })) => format!("lognormal, cv {}", number(cv)),
        (None, Some(Draw::Uniform)) => "uniform".to_owned(),
        (None, Some(Draw::Triangular)) => "triangular".to_owned(),
        (None, Some(Draw::Beta { a, b })) => format!("beta, {} and {}", number(a), number(b)),
        (None, None) if parameter.range.is_some() && !parameter.control => "uniform".to_owned(),
        (None, None) => return None,
    })
}
