//! Charts as CSV (RFC 4180): a row for each point of each curve, each point at which curves meet, each region, and each best
//! pair of yields.
//!
//! As for one control: the first field says what a row is, and each scenario begins with a row of its own, which alone has
//! the last fields. Numbers read back exactly.

use serde_json::Value;

use super::map::letter;
use super::{Charts, One, front, is_complete, sheets};
use crate::analysis::response::{Front, FrontPoint, Total};
use crate::report::response::csv::taking_name;
use crate::report::response::fields::{Field, Row, each, field};
use crate::report::response::words::{kind, name, unit};
use crate::report::table::columns::Glyphs;
use crate::report::table::csv::{constants, line};
use crate::report::table::{Style, Table, exact, scene};

/// Every field in its order.
pub const FIELDS: [Field; 14] = [
    field(
        "record",
        "what the row is: scenario, region, point at which curves meet, or place on a curve, best yield pair, or the largest total of such",
    ),
    field("scenario", "the scenario's name"),
    field("kind", "of a curve and a point what happens there"),
    field("curve", "of a place on a curve the curve's number, from 1"),
    field("place", "its place along the curve, from 1"),
    each("at", "each parameter's value: on a curve, at a point, inside a region; of a scenario the present one"),
    each("state", "abundance of each species on a curve, at a point and of a pair of yields, in its unit"),
    each("yield", "of a pair of yields and of the largest total: what each harvest takes, per time unit or step"),
    field("bounds_stable", "of a place on a curve whether a stable state is lost there"),
    field("region", "of a region its letter in the drawing"),
    field("equilibria", "of a region how many there are"),
    field("which", "of a region their types and who is present, those that are stable first"),
    field(
        "complete",
        "whether it is proved that none is missing at the place inside a region; of a scenario, inside any",
    ),
    field("no_pairs", "of a scenario why it has no best pairs of yields"),
];

/// The charts: a line of names, then the rows; every line ends in CR LF.
pub fn csv(charts: &Charts<'_>, style: Style) -> String {
    let table = charts.table;
    let constants = constants(table);
    let names = charts.chosen.names(&of_each(charts));
    let after = std::iter::once("failure").chain(constants.iter().map(|(name, _)| *name)).map(str::to_owned);
    let head: Vec<Value> = names.iter().cloned().chain(after).map(Value::from).collect();
    let mut text = line(&head, style);
    let blank = vec![Value::Null; 1 + constants.len()];
    for (scene, one) in charts.each() {
        let base = Row::default().with("scenario", scene::name(table.model, scene));
        let own = base.clone().with("record", "scenario").with("complete", one.map(|one| is_complete(one.chart)));
        let own = one.map_or_else(|| own.clone(), |one| at(&one, own.clone(), one.chart.controls.map(|c| c.present)));
        let own = own.with("no_pairs", one.and_then(|one| one.front.as_ref().err()).map(front::why));
        let problems = scene.outcome.as_ref().err().map(|problems| scene::problems(table.model, problems).join("; "));
        let last = std::iter::once(problems.into()).chain(constants.iter().map(|(_, value)| value.clone()));
        text.push_str(&line(&own.values(&names).into_iter().chain(last).collect::<Vec<_>>(), style));
        for row in one.iter().flat_map(|one| rows(one, &base)) {
            text.push_str(&line(&[row.values(&names), blank.clone()].concat(), style));
        }
    }
    text
}

fn of_each(charts: &Charts<'_>) -> Vec<String> {
    let table = charts.table;
    let controls = charts.controls.map(|control| at_name(table, control));
    let states = (0..table.model.species.len()).map(|i| state_name(table, i));
    let mut all: Vec<String> = controls.into_iter().chain(states).collect();
    let fronts = charts.charts.iter().flatten().flat_map(|found| &found.front);
    for name in fronts.flat_map(|front| &front.takings).map(|taking| taking_name(table, taking)) {
        if !all.contains(&name) {
            all.push(name);
        }
    }
    all
}

fn at_name(table: &Table<'_>, control: crate::model::ParameterId) -> String {
    let unit = unit(table.model, control);
    let unit = if unit.is_empty() { String::new() } else { format!(" ({unit})") };
    format!("at {}{unit}", name(table.model, control))
}

fn state_name(table: &Table<'_>, species: usize) -> String {
    super::super::csv::state_name(table, species)
}

fn at(one: &One<'_>, row: Row, at: [f64; 2]) -> Row {
    let controls = one.chart.controls.iter().zip(at);
    controls.fold(row, |row, (control, x)| row.with(&at_name(one.table, control.parameter), exact(x)))
}

fn with_state(one: &One<'_>, row: Row, state: &[f64]) -> Row {
    state.iter().enumerate().fold(row, |row, (i, &x)| row.with(&state_name(one.table, i), exact(x)))
}

fn rows(one: &One<'_>, base: &Row) -> Vec<Row> {
    let mut rows = Vec::new();
    for (place, region) in one.chart.regions.iter().enumerate() {
        let row = base.clone().with("record", "region").with("region", letter(place).to_string());
        let row = row
            .with("equilibria", region.equilibria.len())
            .with("which", sheets::states(one, region, Glyphs::Words))
            .with("complete", region.complete);
        rows.push(at(one, row, region.inside));
    }
    for point in &one.chart.points {
        let row = base.clone().with("record", "point").with("kind", kind(point.kind));
        rows.push(with_state(one, at(one, row, point.at), &point.state));
    }
    for (number, curve) in one.chart.curves.iter().enumerate() {
        let row = base.clone().with("record", "curve").with("kind", kind(curve.kind)).with("curve", number + 1);
        let bounds = curve.bounds_stable.iter().map(|bounds| Some(*bounds)).chain(std::iter::repeat(None));
        for (place, ((place_at, state), bounds)) in curve.points.iter().zip(&curve.states).zip(bounds).enumerate() {
            let row = row.clone().with("place", place + 1).with("bounds_stable", bounds);
            rows.push(with_state(one, at(one, row, *place_at), state));
        }
    }
    rows.extend(one.front.iter().flat_map(|front| pairs(one, front, base)));
    rows
}

/// Rows of the best pairs of yields, and of the largest total.
fn pairs(one: &One<'_>, front: &Front, base: &Row) -> Vec<Row> {
    let row = |record: &str, point: &FrontPoint| {
        let row = with_state(one, at(one, base.clone().with("record", record), point.at), &point.state);
        let yields = front.takings.iter().zip(point.yields);
        yields.fold(row, |row, (taking, x)| row.with(&taking_name(one.table, taking), exact(x)))
    };
    let mut rows: Vec<Row> = front.points.iter().map(|point| row("best yield pair", point)).collect();
    if let Total::At(point) = &front.total {
        rows.push(row("largest total", point));
    }
    rows
}
