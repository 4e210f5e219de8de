//! Parameters that are to be varied, and over what, as named on the command line.

use crate::model::{Model, ParameterId};

use super::arguments::Response;
use super::choice::{Choice, listed, parameter};

/// The choice with the parameters to be varied, each with its range where that was typed.
///
/// # Errors
/// What is missing, unknown, empty or ruled out by the model file.
pub(super) fn varied(model: &Model, asked: &Response, mut choice: Choice) -> Result<Choice, String> {
    if asked.of.is_empty() {
        let controls = model.parameters.iter().filter(|parameter| parameter.control);
        let names: Vec<&str> = controls.map(|parameter| parameter.name.as_str()).collect();
        let known =
            if names.is_empty() { String::new() } else { format!("; the model's controls are {}", listed(&names)) };
        return Err(format!("--of NAME is needed: the parameter that is to be varied{known}"));
    }
    for (ends, option) in [(&asked.from, "--from"), (&asked.to, "--to")] {
        if !ends.is_empty() && ends.len() != asked.of.len() {
            let (ends, of) = (ends.len(), asked.of.len());
            return Err(format!(
                "{option} is given {ends} times for {of} parameters; give one for each, in the order of --of"
            ));
        }
    }
    if asked.of.len() > 2 {
        return Err("--of is given more than twice; a chart is of two parameters".to_owned());
    }
    for (place, name) in asked.of.iter().enumerate() {
        let id = parameter(model, name)?;
        if choice.varied.iter().any(|(other, _)| *other == id) {
            return Err(format!("--of {name} is given twice; the chart is of two different parameters"));
        }
        let ends = [asked.from.get(place).copied(), asked.to.get(place).copied()];
        let range = range(model, id, ends)?;
        choice.varied.push((id, Some(range).filter(|_| ends != [None, None])));
    }
    Ok(choice)
}

/// The range of a parameter: what was typed, else what the model says.
fn range(model: &Model, id: ParameterId, [from, to]: [Option<f64>; 2]) -> Result<[f64; 2], String> {
    let Some(parameter) = model.parameters.get(id.0) else { return Err("there is no such parameter".to_owned()) };
    let own = parameter.range.as_ref().map(|range| range.value);
    let name = &parameter.name;
    let ends = [from.or(own.map(|own| own[0])), to.or(own.map(|own| own[1]))];
    let [Some(from), Some(to)] = ends else {
        return Err(format!("{name} has no range in the model; give --from and --to"));
    };
    if from == to {
        return Err(format!("the range of {name} is empty: it begins and ends at {from}"));
    }
    if from > to {
        return Err(format!("the range of {name} is reversed: it begins at {from} and ends at {to}"));
    }
    match [from, to].iter().find_map(|&end| parameter.ruled_out(end)) {
        Some(reason) => Err(reason),
        None => Ok([from, to]),
    }
}

/// Each varied parameter with its range: that typed, else its own.
pub(super) fn ranges(model: &Model, choice: &Choice) -> Vec<(ParameterId, [f64; 2])> {
    let own = |id: ParameterId| Some(model.parameters.get(id.0)?.range.as_ref()?.value);
    choice.varied.iter().filter_map(|&(id, typed)| Some((id, typed.or_else(|| own(id))?))).collect()
}
