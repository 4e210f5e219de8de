//! What text and data say alike.

use crate::analysis::equilibria::{Derivative, Equilibria, Probably, Unresolved};
use crate::model::Species;

use super::number::human;

/// What every table ends with.
pub(super) const CAUTION: &str = "These are local results about a model, no better than its equations and its \
     figures. Limits on catch, bag or control are set by the responsible authority, under local law and in licensed \
     practice.";

/// The contract's word for what an undecided box probably is.
pub(super) fn probably(probably: Probably) -> &'static str {
    match probably {
        Probably::DoubleRoot => "double root",
        Probably::Continuum => "continuum",
        Probably::NoDerivative => "no derivative",
        Probably::Kink => "kink",
        Probably::Budget => "budget",
    }
}

/// The same within a sentence.
pub(super) fn probably_in_words(probably: Probably) -> &'static str {
    match probably {
        Probably::DoubleRoot => "probably a double root",
        Probably::Continuum => "probably a line or surface of equilibria",
        Probably::NoDerivative => "probably where rates have no derivative",
        Probably::Kink => "probably at a kink of the rates",
        Probably::Budget => "the budget ended here",
    }
}

/// What is known of what is undecided: a sentence, and points of a continuum.
pub(super) fn known(open: &Unresolved, species: &[Species]) -> String {
    let state = |state: &Vec<f64>| {
        let parts = species.iter().zip(state).map(|(species, &x)| format!("{} = {}", species.symbol, human(x)));
        parts.collect::<Vec<_>>().join(", ")
    };
    let points = open.witnesses.iter().map(state).collect::<Vec<_>>().join("; ");
    let points = if points.is_empty() { points } else { format!("points on it: {points}") };
    let mut known = String::new();
    for part in [&open.text, &points].into_iter().filter(|part| !part.is_empty()) {
        known.push_str("; ");
        known.push_str(part);
    }
    known
}

/// What is claimed above the box, in the contract's words.
pub(super) fn beyond(equilibria: &Equilibria) -> &'static str {
    if equilibria.none_above { "none" } else { "not claimed" }
}

/// Why an equilibrium has no linearisation.
pub(super) fn why(derivative: Derivative) -> Option<&'static str> {
    match derivative {
        Derivative::Exists => None,
        Derivative::Kink => Some("rates have a kink here"),
        Derivative::Missing => Some("rates have no derivative here"),
    }
}

/// What the search of a scenario came to, and whether that is a proof.
pub(super) fn verdict(equilibria: &Equilibria) -> (bool, String) {
    let count = equilibria.list.len();
    let listed = match count {
        0 => "No equilibrium is in the search box".to_owned(),
        1 => "The search box holds this equilibrium and no other".to_owned(),
        _ => format!("The search box holds these {count} equilibria and no others"),
    };
    match (equilibria.complete, equilibria.none_above) {
        (true, true) => (true, format!("{listed}; none lies above it either.")),
        (true, false) => (true, format!("{listed}; above it nothing is claimed.")),
        (false, _) => (false, unproved(count, equilibria.unresolved.len())),
    }
}

fn unproved(found: usize, unresolved: usize) -> String {
    let found = match found {
        0 => "None was found".to_owned(),
        1 => "One was found".to_owned(),
        _ => format!("{found} were found"),
    };
    match unresolved {
        0 => format!("{found}; the search box may hold others."),
        1 => format!("{found}; there may be others in the one part of the search box that is given below."),
        _ => format!("{found}; there may be others in the {unresolved} parts of the search box that are given below."),
    }
}
