//! The best pairs of yields over two controls: their table, sentences, and JSON.
//!
//! Where a scenario has none, it is said why in one sentence, which every form has.

use serde_json::{Value, json};

use super::One;
use super::sheets::control_heads;
use crate::analysis::response::{Front, FrontPoint, NoFront, Taking, Total};
use crate::report::response::sheets::{head, state_cells, state_heads};
use crate::report::response::words::{setting, taking, taking_unit, with_unit};
use crate::report::table::columns::by_symbol;
use crate::report::table::layout::Cell;
use crate::report::table::sheet::Sheet;
use crate::report::table::{exact, human};

/// What stands above the pairs.
pub(super) const HEADING: &str = "Best yield pairs: neither can be raised without lowering the other (numerical)";

/// Each pair with the controls and the state that give it.
pub(super) fn pairs(one: &One<'_>, front: &Front) -> Sheet {
    let mut heads = control_heads(one).to_vec();
    let model = one.table.model;
    heads.extend(front.takings.iter().map(|one| head(&taking(model, one), &taking_unit(model, one.species))));
    heads.extend(state_heads(one.table));
    let row = |point: &FrontPoint| {
        let numbers = point.at.iter().chain(&point.yields).map(|&x| Cell::new(human(x)));
        numbers.chain(state_cells(&point.state)).collect()
    };
    Sheet { heads, rows: front.points.iter().map(row).collect() }
}

/// What is said below the pairs, or in their place.
pub(super) fn said(one: &One<'_>) -> Vec<String> {
    match one.front {
        Err(reason) => vec![format!("No best yield pairs: {}.", why(reason))],
        Ok(front) => {
            let none = "No best yield pair was found at rest: with all species that are to be kept, no state is stable in \
                        these ranges, or the best is only approached where states are lost.";
            let partly = "The time was up, so best yield pairs may be missing.";
            let none = Some(none.to_owned()).filter(|_| front.points.is_empty() && front.is_whole);
            let partly = Some(partly.to_owned()).filter(|_| !front.is_whole);
            none.into_iter().chain(total(one, front)).chain(partly).collect()
        }
    }
}

/// Why there are no pairs, as it stands after a colon.
pub(super) fn why(reason: &NoFront) -> String {
    match reason {
        NoFront::Harvests(count) => {
            let there = if *count == 1 { "is 1".to_owned() } else { format!("are {count}") };
            format!("they are of two harvests that take a species to be kept, and here there {there}")
        }
        NoFront::SeveralSpecies(harvest) => format!("{harvest} takes more than one species"),
    }
}

/// The largest total in words; nothing where there is no sum, or no pair.
fn total(one: &One<'_>, front: &Front) -> Option<String> {
    let model = one.table.model;
    match &front.total {
        Total::At(point) => {
            let unit = taking_unit(model, front.takings[0].species);
            let [x, y] = [0, 1].map(|k| setting(model, one.chart.controls[k].parameter, point.at[k]));
            let [a, b] = [0, 1].map(|k| format!("{} {}", taking(model, &front.takings[k]), human(point.yields[k])));
            let sum = with_unit(point.yields[0] + point.yields[1], &unit);
            Some(format!("The largest yield of both together, {sum}, is at {x} and {y}: {a}, {b} (numerical)."))
        }
        Total::NotFound if !front.points.is_empty() => Some(
            "The largest yield of both together was not found at rest; it may only be approached where states are lost."
                .to_owned(),
        ),
        Total::NotFound | Total::OfDifferentUnits => None,
    }
}

/// The front as JSON.
pub(super) fn data(one: &One<'_>) -> Value {
    match one.front {
        Err(reason) => json!({"of": null, "points": [], "total": null, "whole": true, "why": why(reason)}),
        Ok(front) => {
            let total = match &front.total {
                Total::At(spot) => {
                    let mut total = point(one, spot);
                    total["sum"] = exact(spot.yields[0] + spot.yields[1]);
                    total
                }
                Total::NotFound | Total::OfDifferentUnits => Value::Null,
            };
            json!({
                "of": front.takings.iter().map(|taking| self::taken(one, taking)).collect::<Vec<_>>(),
                "points": front.points.iter().map(|spot| point(one, spot)).collect::<Vec<_>>(),
                "total": total,
                "whole": front.is_whole,
                "why": null,
            })
        }
    }
}

fn taken(one: &One<'_>, taking: &Taking) -> Value {
    json!({"harvest": taking.harvest, "species": taking.species.and_then(|id| one.table.symbol(id.0))})
}

fn point(one: &One<'_>, point: &FrontPoint) -> Value {
    json!({
        "at": point.at.map(exact),
        "yields": point.yields.map(exact),
        "state": by_symbol(one.table, point.state.iter().map(|&x| Some(x)).enumerate()),
    })
}
