//! The section `draws`: joint draws of parameters from a CSV file, one a row.

use std::collections::HashMap;

use super::desk::{Desk, Fields, is_null};
use super::names::Names;
use super::parameters::limits_in_words;
use super::table::{Cell, Form, Table, open};
use crate::diag::Location;
use crate::model::messages::{Message, digits};
use crate::model::{Draw, DrawTable, Parameter, ParameterId};

/// The table of draws. A parameter that is a column is no longer drawn by its range alone.
pub(super) fn read(
    desk: &mut Desk<'_>,
    fields: &Fields<'_>,
    names: &Names,
    parameters: &mut [Parameter],
) -> Option<DrawTable> {
    let node = fields.get("draws").filter(|node| !is_null(node))?;
    let path = desk.line(node, "\"draws\"", "the name of a CSV file")?;
    let advice = "give each draw a value for every column";
    let table = open(desk, &path.value, path.at, &Form { row: "draw", advice })?;
    let columns = columns(desk, names, &table);
    for &id in columns.iter().flatten() {
        drawn_once(desk, &mut parameters[id.0], &path.value);
    }
    let mut values = Vec::with_capacity(table.rows.len() * columns.len());
    for row in &table.rows {
        for (column, &cell) in columns.iter().zip(row) {
            let value = value(desk, &table, cell);
            if let (Some(id), Some(value)) = (column, value) {
                within(desk, &parameters[id.0], value, table.at(cell));
            }
            values.extend(value);
        }
    }
    let columns: Vec<ParameterId> = columns.into_iter().flatten().collect();
    Some(DrawTable { at: path.at, path: table.path, columns, values })
}

fn columns(desk: &mut Desk<'_>, names: &Names, table: &Table) -> Vec<Option<ParameterId>> {
    let mut seen: HashMap<usize, Location> = HashMap::new();
    let mut found = Vec::with_capacity(table.heading.len());
    for &cell in &table.heading {
        let (name, at) = (table.text(desk, cell).0.into_owned(), table.at(cell));
        if name.is_empty() {
            desk.say(Message::CellEmpty, at, &[&"the name of a parameter"]);
        } else if name.parse::<f64>().is_ok() {
            desk.say(Message::HeadingIsNumber, at, &[&name, &"put the names of the parameters above the values"]);
        } else if let Some(id) = names.parameter(desk, &name, at) {
            if let Some(first) = seen.insert(id.0, at) {
                desk.say_both(Message::ColumnTwice, at, &[&name], (first, "first here"));
            }
            found.push(Some(id));
            continue;
        }
        found.push(None);
    }
    found
}

fn drawn_once(desk: &mut Desk<'_>, parameter: &mut Parameter, path: &str) {
    let Some(draw) = parameter.draw.take() else { return };
    let by_range_alone =
        draw.value == Draw::Uniform && parameter.range.as_ref().is_some_and(|range| range.at == draw.at);
    if !by_range_alone {
        desk.say(Message::DrawnTwice, draw.at, &[&parameter.name, &path]);
    }
}

fn value(desk: &mut Desk<'_>, table: &Table, cell: Cell) -> Option<f64> {
    let (text, at) = (table.text(desk, cell).0, table.at(cell));
    match text.parse::<f64>() {
        Ok(value) if value.is_finite() => return Some(value),
        Ok(_) => {
            let text = text.into_owned();
            desk.say(Message::CellNotFinite, at, &[&text]);
        }
        Err(_) if text.is_empty() => desk.say(Message::CellEmpty, at, &[&"a number"]),
        Err(_) => {
            let text = text.into_owned();
            desk.say(Message::CellNotNumber, at, &[&text]);
        }
    }
    None
}

fn within(desk: &mut Desk<'_>, parameter: &Parameter, value: f64, at: Location) {
    let (min, max) = (parameter.min.unwrap_or(f64::NEG_INFINITY), parameter.max.unwrap_or(f64::INFINITY));
    if !(min..=max).contains(&value) {
        desk.say(Message::DrawOutside, at, &[&digits(value), &parameter.name, &limits_in_words(min, max)]);
    }
}
