//! A course as numbers, for saving.

use serde_json::Value;

use super::Course;
use crate::model::Model;
use crate::report::sketch::Style;
use crate::report::table::line;

/// What the numbers of a row are: the time, each species, and where there is one what is predicted of each.
pub fn headings(course: &Course, model: &Model) -> Vec<String> {
    let of = |unit: &str, name: &str| if unit.is_empty() { name.to_owned() } else { format!("{name} [{unit}]") };
    let species = |suffix: &'static str| {
        model.species.iter().map(move |species| {
            let unit = species.unit.as_ref().map_or("", |unit| unit.value.as_str());
            of(unit, &format!("{}{suffix}", species.symbol))
        })
    };
    let predicted = species(" predicted").filter(|_| !course.predicted.is_empty());
    std::iter::once(of(&model.time_unit.value, "time")).chain(species("")).chain(predicted).collect()
}

/// One row a time; `None` where the prediction has left the finite numbers.
pub fn rows(course: &Course) -> Vec<Vec<Option<f64>>> {
    let width = if course.predicted.is_empty() { 0 } else { course.equilibrium.len() };
    let row = |(k, (&time, state)): (usize, (&f64, &Vec<f64>))| {
        let predicted = course.predicted.get(k);
        let predicted = (0..width).map(|i| predicted.and_then(|state| state.get(i).copied()));
        std::iter::once(Some(time)).chain(state.iter().copied().map(Some)).chain(predicted).collect()
    };
    course.times.iter().zip(&course.states).enumerate().map(row).collect()
}

/// The same as CSV (RFC 4180): a line of headings, then the rows; numbers read back exactly.
pub fn csv(course: &Course, model: &Model, style: Style) -> String {
    let head: Vec<Value> = headings(course, model).into_iter().map(Value::from).collect();
    let mut text = line(&head, style);
    for row in rows(course) {
        let values: Vec<Value> = row.into_iter().map(|x| x.map_or(Value::Null, Value::from)).collect();
        text.push_str(&line(&values, style));
    }
    text
}
