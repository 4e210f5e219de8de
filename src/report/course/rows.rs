//! A course as numbers, for saving.

use super::Course;
use crate::model::Model;

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
