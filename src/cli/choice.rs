//! Scenarios and parameters that were named on the command line, found in the model.

use unicode_normalization::UnicodeNormalization;

use crate::diag::nearest::nearest;
use crate::model::{Model, Name, ParameterId};

use super::arguments::Work;

/// What of a model is to be solved.
pub(super) struct Choice {
    /// Indices of scenarios, in the file's order.
    pub(super) scenarios: Vec<usize>,
    /// New values, one a parameter at most.
    pub(super) set: Vec<(ParameterId, f64)>,
    /// Parameters that are varied, each with its range where that was typed.
    pub(super) varied: Vec<(ParameterId, Option<[f64; 2]>)>,
}

impl Choice {
    /// Finds everything named.
    ///
    /// # Errors
    /// What is not there, with the nearest that is; or a value that the file rules out.
    pub(super) fn new(model: &Model, work: &Work) -> Result<Self, String> {
        let named = work.scenarios.iter().map(|name| scenario(model, name)).collect::<Result<Vec<_>, _>>()?;
        let all = 0..model.scenarios.len();
        let scenarios = all.filter(|scenario| named.is_empty() || named.contains(scenario)).collect();
        let mut set: Vec<(ParameterId, f64)> = Vec::new();
        for (name, value) in &work.set {
            let id = parameter(model, name)?;
            if let Some(reason) = model.parameters.get(id.0).and_then(|parameter| parameter.ruled_out(*value)) {
                return Err(reason);
            }
            set.retain(|(other, _)| *other != id);
            set.push((id, *value));
        }
        Ok(Self { scenarios, set, varied: Vec::new() })
    }
}

fn scenario(model: &Model, name: &str) -> Result<usize, String> {
    let composed: String = name.nfc().collect();
    let found = model.scenario(name).or_else(|| model.scenario(&composed));
    let known = || model.scenarios.iter().map(|scenario| scenario.name.as_str());
    found.ok_or_else(|| unknown("scenario", &composed, known))
}

/// The species with these symbols, across and upwards.
///
/// # Errors
/// Which symbol no species has, with the nearest that one has.
pub(super) fn axes(model: &Model, [x, y]: &[String; 2]) -> Result<[usize; 2], String> {
    if model.species.len() == 1 {
        return Err("the model has one species; its sketch shows the rate against the abundance".to_owned());
    }
    let (x, y) = (species(model, x)?, species(model, y)?);
    if x == y { Err("the axes must be two different species".to_owned()) } else { Ok([x, y]) }
}

fn species(model: &Model, symbol: &str) -> Result<usize, String> {
    let composed: String = symbol.nfc().collect();
    match model.names.get(&composed) {
        Some(Name::Species(id)) => Ok(id.0),
        _ => Err(unknown("species", &composed, || model.species.iter().map(|species| species.symbol.as_str()))),
    }
}

/// The parameter of this name.
///
/// # Errors
/// That there is none, with the nearest that there is.
pub(super) fn parameter(model: &Model, name: &str) -> Result<ParameterId, String> {
    let composed: String = name.nfc().collect();
    match model.names.get(&composed) {
        Some(Name::Parameter(id)) => Ok(*id),
        _ => Err(unknown("parameter", &composed, || model.parameters.iter().map(|parameter| parameter.name.as_str()))),
    }
}

/// That nothing of the kind has the name, and which has the nearest.
fn unknown<'m, I: Iterator<Item = &'m str>>(kind: &str, name: &str, known: impl Fn() -> I) -> String {
    match nearest(name, known()) {
        Some(near) => format!("no {kind} is called \"{name}\"; did you mean \"{near}\"?"),
        None if known().next().is_none() => format!("no {kind} is called \"{name}\"; the model has none"),
        None => format!("no {kind} is called \"{name}\"; there are {}", listed(&known().collect::<Vec<_>>())),
    }
}

/// Names that a message lists; more would bury it.
const MOST_LISTED: usize = 12;

/// Names in quotation marks, the first of them where there are many.
pub(super) fn listed(names: &[&str]) -> String {
    let quoted: Vec<String> = names.iter().take(MOST_LISTED).map(|name| format!("\"{name}\"")).collect();
    match names.len().saturating_sub(MOST_LISTED) {
        0 => quoted.join(", "),
        more => format!("{} and {more} more", quoted.join(", ")),
    }
}
