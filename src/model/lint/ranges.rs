//! A value outside its own range: the file's, or a scenario's.

use super::scene::Scene;
use crate::diag::{Diagnostic, Location};
use crate::model::Parameter;

/// Warns at the value; a scenario's value is looked at only where the scenario sets it.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let model = scene.model;
    let base =
        model.parameters.iter().filter_map(|parameter| outside(parameter, parameter.value, parameter.value_at, ""));
    let planned = scene.plans().flat_map(|(scenario, plan)| {
        let set = model.scenarios.get(scenario).map_or(&[][..], |scenario| &scenario.values);
        set.iter().filter_map(move |(id, formula)| {
            let (parameter, value) = (model.parameters.get(id.0)?, *plan.values.get(id.0)?);
            outside(parameter, value, formula.at, &scene.under(&[scenario]))
        })
    });
    base.chain(planned).collect()
}

fn outside(parameter: &Parameter, value: f64, at: Location, scenario: &str) -> Option<Diagnostic> {
    let range = parameter.range.as_ref()?;
    let [low, high] = range.value;
    let name = &parameter.name;
    (value < low || value > high).then(|| {
        Diagnostic::warning(at, format!("\"{name}\" is {value}{scenario}, outside its range from {low} to {high}"))
            .help("widen the range, or correct the value")
            .related(range.at, "the range")
    })
}
