//! A response drawn in characters: the control across, a quantity upwards, one curve a branch.
//!
//! [`View`] says what is looked at, [`drawing()`] lays it between its axes as a grid, [`signs()`] says what its signs mean, as far
//! as they occur, [`text()`] is both for a page, [`mark`] is the sign of each of the
//! thresholds that [`marked`] lists, which whoever lists them repeats, [`cut()`] what a vertical rule
//! meets, [`stays`] how far that stays what it is. The stroke of a branch tells its type; it comes from the table of kinds. A part of a branch that is not feasible is
//! not drawn. To draw something more: a `Mark` in `canvas`, its meaning in `signs`.

mod canvas;
mod cut;
mod drawing;
mod signs;
mod text;

pub use cut::{Met, cut, stays};
pub use drawing::{SMALLEST, drawing};
pub use signs::{mark, marked, not_marked, signs};
pub use text::text;

use super::words;
use crate::analysis::response::{Point, Response};
use crate::model::Model;

/// What is drawn upwards.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// The abundance of a species.
    Abundance(usize),
    /// One of the response's takings, by its place.
    Taking(usize),
}

/// What is looked at.
#[derive(Clone, Copy, Debug)]
pub struct View<'v> {
    /// The model, for names and units.
    pub model: &'v Model,
    /// What is drawn.
    pub response: &'v Response,
    /// What is drawn upwards.
    pub quantity: Quantity,
    /// A value of the control that the user has moved to.
    pub rule: Option<f64>,
    /// The branch whose state at that value is selected.
    pub chosen: Option<usize>,
}

impl Quantity {
    /// Its value at a point; `None` where it has none.
    pub fn at(self, point: &Point) -> Option<f64> {
        self.of(&point.state, &point.takings)
    }

    /// Its value in a state with these takings.
    pub(super) fn of(self, state: &[f64], takings: &[Option<f64>]) -> Option<f64> {
        let value = match self {
            Self::Abundance(species) => state.get(species).copied(),
            Self::Taking(place) => takings.get(place).copied().flatten(),
        };
        value.filter(|x| x.is_finite())
    }

    /// Its name and unit, as an axis has them; texts of the file as they are.
    pub fn caption(self, model: &Model, response: &Response) -> String {
        match self {
            Self::Abundance(species) => species_caption(model, species),
            Self::Taking(place) => taking_caption(model, response, place),
        }
    }
}

/// Everything that can be drawn upwards: every species, then what harvests give.
pub fn quantities(model: &Model, response: &Response) -> Vec<Quantity> {
    let species = (0..model.species.len()).map(Quantity::Abundance);
    species.chain((0..response.takings.len()).map(Quantity::Taking)).collect()
}

/// Name and unit of the control, as an axis has them.
pub fn control_caption(model: &Model, response: &Response) -> String {
    let parameter = response.control.parameter;
    with_unit(words::name(model, parameter), words::unit(model, parameter))
}

fn species_caption(model: &Model, species: usize) -> String {
    let Some(species) = model.species.get(species) else { return String::new() };
    let name = if species.name == species.symbol {
        species.symbol.clone()
    } else {
        format!("{} {}", species.symbol, species.name)
    };
    let unit = species.unit.as_ref().map(|unit| unit.value.as_str());
    with_unit(&name, unit.filter(|unit| *unit != "1").unwrap_or_default())
}

fn taking_caption(model: &Model, response: &Response, place: usize) -> String {
    let Some(taking) = response.takings.get(place) else { return String::new() };
    with_unit(&words::taking(model, taking), &words::taking_unit(model, taking.species))
}

fn with_unit(name: &str, unit: &str) -> String {
    if unit.is_empty() { name.to_owned() } else { format!("{name}, {unit}") }
}
