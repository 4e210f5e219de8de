//! Units of measurement: reading them, and checking that a model's formulas are consistent in them.
//!
//! [`read`](read()) reads one unit, [`check_units`] checks a model: every sum, comparison, function and rate, by its
//! syntax tree. A parameter without a unit is an unknown, solved for where the formulas determine it; what they do not
//! determine stays silent. Nothing here changes a value: units never convert, they only warn. A new unit is a row of
//! `known`, a new function needs its rule in `infer`, a new kind of formula its line in `places`.

mod infer;
mod known;
mod message;
mod places;
mod read;
mod report;
mod solve;
mod unit;

#[cfg(test)]
mod tests;

pub use read::{Malformed, read};
pub use unit::{Agreement, Unit, compare};

use crate::diag::{Diagnostic, Location, Sources, Span};
use crate::model::{Model, Placed};
use infer::{Quantity, Walker};
use report::Report;
use solve::Solver;

/// What the units of a model come to.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Units {
    /// One warning for each slip, in the order of the model's parts.
    pub warnings: Vec<Diagnostic>,
    /// Units that the file does not give but its formulas determine.
    pub inferred: Inferred,
}

/// Units as text, where they were inferred: `1` for a plain number, `None` where the file gives a unit or nothing
/// determines it. One entry each in the model's order; all empty where the model gives no unit at all.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Inferred {
    /// One entry a species.
    pub species: Vec<Option<String>>,
    /// One entry a parameter.
    pub parameters: Vec<Option<String>>,
    /// One entry a shorthand.
    pub shorthand: Vec<Option<String>>,
}

/// Checks the units of a model; silent where the model gives none but that of time. A unit that cannot be read, for
/// which [`malformed`] has an error, fits anything.
pub fn check_units(model: &Model) -> Units {
    let has_units = model.species.iter().any(|species| species.unit.is_some())
        || model.parameters.iter().any(|parameter| parameter.unit.is_some());
    if !has_units {
        return Units::default();
    }
    let mut walker = walker(model);
    walker.whole_model();
    let inferred = inferred(&walker);
    Units { warnings: walker.report.into_warnings(), inferred }
}

/// An error for each unit of the model that cannot be read.
pub fn malformed(model: &Model) -> Vec<Diagnostic> {
    let given = model.species.iter().filter_map(|species| species.unit.as_ref());
    let given = given.chain(model.parameters.iter().filter_map(|parameter| parameter.unit.as_ref()));
    let given = given.chain([&model.time_unit]);
    given
        .filter_map(|unit| {
            let slip = read(&unit.value).err()?;
            let at = place_in(&model.sources, unit, slip.span);
            Some(Diagnostic::error(at, slip.message).expected(slip.expected).help(slip.help))
        })
        .collect()
}

/// The place of some bytes of a text; the whole text's where the file spells it otherwise.
fn place_in(sources: &Sources, text: &Placed<String>, span: Span) -> Location {
    let written = sources.get(text.at.source).and_then(|source| source.text.get(text.at.span.start..text.at.span.end));
    let offset = written.filter(|_| span.start < span.end).and_then(|written| written.find(&text.value));
    offset.map_or(text.at, |offset| {
        let start = text.at.span.start + offset;
        Location { source: text.at.source, span: Span::new(start + span.start, start + span.end) }
    })
}

fn walker(model: &Model) -> Walker<'_> {
    let mut solver = Solver::default();
    let mut quantity = |name: &str, unit: Option<&Placed<String>>| match unit.map(|unit| read(&unit.value)) {
        None => Quantity::Of(solver.unknown(name)),
        Some(Ok(unit)) => Quantity::Of(unit.into()),
        Some(Err(_)) => Quantity::Free,
    };
    let time = quantity("time", Some(&model.time_unit));
    let species = model.species.iter().map(|species| quantity(&species.symbol, species.unit.as_ref())).collect();
    let parameters =
        model.parameters.iter().map(|parameter| quantity(&parameter.name, parameter.unit.as_ref())).collect();
    Walker {
        model,
        solver,
        time,
        species,
        parameters,
        shorthand: Vec::new(),
        constants: Vec::new(),
        report: Report::default(),
    }
}

fn inferred(walker: &Walker<'_>) -> Inferred {
    let text = |quantity: &Quantity| match quantity {
        Quantity::Of(term) => walker.solver.unit_of(term).map(|unit| unit.to_string()),
        Quantity::Bare => Some(Unit::one().to_string()),
        Quantity::Free => None,
    };
    let model = walker.model;
    let species = model.species.iter().zip(&walker.species);
    let parameters = model.parameters.iter().zip(&walker.parameters);
    Inferred {
        species: species.map(|(given, found)| if given.unit.is_none() { text(found) } else { None }).collect(),
        parameters: parameters.map(|(given, found)| if given.unit.is_none() { text(found) } else { None }).collect(),
        shorthand: walker.shorthand.iter().map(text).collect(),
    }
}
