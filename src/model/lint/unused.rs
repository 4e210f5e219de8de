//! A parameter or shorthand that no formula uses.

use super::formulas::{all, names};
use super::scene::Scene;
use crate::diag::{Diagnostic, Location};
use crate::model::{Name, ParameterId, ShorthandId};

/// Warns at the declaration. A scenario's formula counts as a use, its setting a value does not.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let model = scene.model;
    let used: Vec<Name> = all(model).into_iter().flat_map(|formula| names(model, &formula.expr)).collect();
    let parameters = model.parameters.iter().enumerate();
    let parameters = parameters.filter(|(place, _)| !used.contains(&Name::Parameter(ParameterId(*place))));
    let parameters = parameters.map(|(_, parameter)| warning("parameter", &parameter.name, parameter.at));
    let shorthands = model.shorthand.iter().enumerate();
    let shorthands = shorthands.filter(|(place, _)| !used.contains(&Name::Shorthand(ShorthandId(*place))));
    let shorthands = shorthands.map(|(_, shorthand)| warning("shorthand", &shorthand.name, shorthand.at));
    parameters.chain(shorthands).collect()
}

fn warning(kind: &str, name: &str, at: Location) -> Diagnostic {
    Diagnostic::warning(at, format!("no formula uses the {kind} \"{name}\""))
        .help("remove it, or look for the formula that should use it")
}
