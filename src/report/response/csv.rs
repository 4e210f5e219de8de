//! Responses as CSV (RFC 4180): one rectangle, a row for each written point of each branch, each threshold, best yield and band.
//!
//! The first field says what a row is, so that a spreadsheet's filter makes one list of it; [`FIELDS`](super::FIELDS) has what
//! is in the others, empty where a row has none. Each scenario begins with a row of its own, failed or not, which alone has
//! the last fields, of what the whole is: points are thousands. Numbers read back exactly.

use serde_json::Value;

use crate::analysis::response::{Band, BestYield, Point, Taking, Threshold};

use super::super::kinds;
use super::super::table::csv::{constants, line};
use super::super::table::{Style, exact, optional, scene};
use super::fields::{Chosen, Row};
use super::sheets::{branch_id, passes};
use super::thin::Scales;
use super::words::{criticality, kind, name, taking, taking_unit};
use super::{One, Responses, is_complete, meaning, summary};

/// The responses: a line of names, then the rows; every line ends in CR LF.
pub fn csv(responses: &Responses<'_>, chosen: &Chosen, style: Style) -> String {
    let constants = constants(responses.table);
    let names = chosen.names(&of_kinds(responses));
    let after = LAST.into_iter().chain(constants.iter().map(|(name, _)| *name)).map(str::to_owned);
    let head: Vec<Value> = names.iter().cloned().chain(after).map(Value::from).collect();
    let mut text = line(&head, style);
    let blank = vec![Value::Null; LAST.len() + constants.len()];
    for (scene, one) in responses.each() {
        let base = Row::default().with("scenario", scene::name(responses.table.model, scene));
        let base = base.with("of", name(responses.table.model, responses.control));
        let base = base.with("complete", one.map(|one| is_complete(&one.along.response)));
        let own =
            one.map_or_else(|| base.clone(), |one| base.clone().with("at", exact(one.along.response.control.present)));
        let last = [said(one.as_ref()), failure(responses, scene)].into_iter();
        let last: Vec<Value> = last.chain(constants.iter().map(|(_, value)| value.clone())).collect();
        text.push_str(&line(&[own.with("record", "scenario").values(&names), last].concat(), style));
        for row in one.iter().flat_map(|one| rows(one, &base)) {
            text.push_str(&line(&[row.values(&names), blank.clone()].concat(), style));
        }
    }
    text
}

/// What only the row of a scenario has, before what the whole is of.
const LAST: [&str; 2] = ["summary", "failure"];

fn said(one: Option<&One<'_>>) -> Value {
    let said = |one: &One<'_>| summary(&one.setting(), &one.along.advice, one.along.focus, one.along.band.as_ref());
    one.map_or(Value::Null, |one| said(one).into())
}

fn failure(responses: &Responses<'_>, scene: &super::Scene) -> Value {
    let problems = scene.outcome.as_ref().err();
    problems.map_or(Value::Null, |problems| scene::problems(responses.table.model, problems).join("; ").into())
}

/// The names of the fields that there are for each species, and for what each harvest of any scenario gives.
fn of_kinds(responses: &Responses<'_>) -> Vec<String> {
    let table = responses.table;
    let mut all: Vec<String> = (0..table.model.species.len()).map(|i| state_name(table, i)).collect();
    for taking in responses.along.iter().flatten().flat_map(|along| &along.response.takings) {
        let name = taking_name(table, taking);
        if !all.contains(&name) {
            all.push(name);
        }
    }
    all
}

/// The field of a species' abundance.
pub(super) fn state_name(table: &super::Table<'_>, species: usize) -> String {
    let Some(species) = table.model.species.get(species) else { return String::new() };
    let unit = species.unit.as_ref().map_or_else(String::new, |unit| format!(" ({})", unit.value));
    format!("state {}{unit}", species.symbol)
}

/// The field of what a harvest gives.
pub(super) fn taking_name(table: &super::Table<'_>, one: &Taking) -> String {
    if one.species.is_none() {
        return taking(table.model, one).replacen("value of ", "value ", 1);
    }
    let unit = taking_unit(table.model, one.species);
    let unit = if unit.is_empty() { unit } else { format!(" ({unit})") };
    format!("yield {}{unit}", taking(table.model, one))
}

fn rows(one: &One<'_>, base: &Row) -> Vec<Row> {
    let response = &one.along.response;
    let mut rows: Vec<Row> =
        response.thresholds.iter().map(|threshold| self::threshold(one, threshold, base)).collect();
    rows.extend(one.along.advice.best.iter().map(|best| best_yield(one, best, base)));
    rows.extend(one.along.margins.bands.iter().map(|band| self::band(one, band, base)));
    let scales = Scales::of(response);
    for (place, branch) in response.branches.iter().enumerate() {
        let base = base.clone().with("record", "point").with("branch", branch_id(place));
        let base =
            base.with("equilibrium", passes(one, branch).join(" ")).with("present", symbols(one, &branch.present));
        let points = scales.written(branch).into_iter().enumerate();
        rows.extend(points.map(|(along, point)| self::point(one, point, &base.clone().with("place", along + 1))));
    }
    rows
}

fn symbols(one: &One<'_>, present: &[bool]) -> String {
    let there = present.iter().enumerate().filter(|(_, is_there)| **is_there);
    there.filter_map(|(i, _)| one.table.symbol(i)).collect::<Vec<_>>().join(" ")
}

fn with_state(one: &One<'_>, row: Row, state: &[f64]) -> Row {
    state.iter().enumerate().fold(row, |row, (i, &x)| row.with(&state_name(one.table, i), exact(x)))
}

fn threshold(one: &One<'_>, threshold: &Threshold, base: &Row) -> Row {
    let leading = threshold.eigenvalues.first();
    let row =
        base.clone().with("record", "threshold").with("at", exact(threshold.at)).with("kind", kind(threshold.kind));
    let row = row
        .with("criticality", threshold.criticality.map(criticality))
        .with("meaning", meaning(&one.setting(), threshold))
        .with("error", exact(threshold.error))
        .with("leading_re", optional(leading.map(|z| z.re)))
        .with("leading_im", optional(leading.map(|z| z.im)));
    with_state(one, row, &threshold.state)
}

fn best_yield(one: &One<'_>, best: &BestYield, base: &Row) -> Row {
    let response = &one.along.response;
    let taken = best.taking.and_then(|place| response.takings.get(place));
    let edge = best.edge.and_then(|place| response.thresholds.get(place));
    let row =
        base.clone().with("record", "best yield").with("at", exact(best.at)).with("branch", branch_id(best.branch));
    let row = row
        .with("what", taken.map_or_else(|| "all harvests".to_owned(), |taken| taking(one.table.model, taken)))
        .with("amount", exact(best.amount))
        .with("attained", best.attained)
        .with("kind", edge.map(|edge| kind(edge.kind)));
    with_state(one, row, &best.state)
}

fn band(one: &One<'_>, band: &Band, base: &Row) -> Row {
    let margin = band.margin();
    let lost = margin.and_then(|(_, end)| band.thresholds[end].as_ref()).map(|threshold| kind(threshold.kind));
    let focus = one.along.focus.and_then(|place| one.ids.get(place));
    base.clone()
        .with("record", "band")
        .with("of", name(one.table.model, band.parameter))
        .with("at", exact(band.present))
        .with("equilibrium", focus.cloned())
        .with("from", exact(band.ends[0]))
        .with("to", exact(band.ends[1]))
        .with("amount", optional(margin.map(|(amount, _)| amount)))
        .with("kind", lost)
}

fn point(one: &One<'_>, point: &Point, base: &Row) -> Row {
    let row = base
        .clone()
        .with("at", exact(point.at))
        .with("type", point.kind.map(|kind| kinds::of(kind).word))
        .with("stable", point.stable)
        .with("feasible", point.feasible)
        .with("leading_re", optional(point.leading.map(|z| z.re)))
        .with("leading_im", optional(point.leading.map(|z| z.im)));
    let takings = one.along.response.takings.iter().zip(&point.takings);
    let row = takings.fold(row, |row, (taken, x)| row.with(&taking_name(one.table, taken), optional(*x)));
    with_state(one, row, &point.state)
}
