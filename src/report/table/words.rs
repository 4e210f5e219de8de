//! What text and data say alike.

use crate::analysis::equilibria::{Derivative, Equilibria, Probably, Unresolved};
use crate::analysis::linearise::{Test, Unavailable, Verdict};
use crate::model::Species;
use crate::num::eigen::Unsolved;

use super::columns::Shown;
use super::number::human;
use super::{Table, glossary};

/// What every table ends with.
pub const CAUTION: &str = "These are local results about a model, no better than its equations and its \
     figures. Limits on catch, bag or control are set by the responsible authority, under local law and in licensed \
     practice.";

/// Said of a table whose search was broken off.
pub(in crate::report) const INTERRUPTED: &str = "INTERRUPTED: the search was broken off; this is a partial result.";

/// Before what is said of a list that may lack equilibria.
pub(in crate::report) const INCOMPLETE: &str = "NOT PROVED COMPLETE";

/// Before what is said of a part of the box that stayed open.
pub(in crate::report) const UNDECIDED: &str = "undecided";

/// The words that tell proofs from numbers, as far as the table has them, with their meanings.
pub(in crate::report) fn meanings(table: &Table<'_>) -> Vec<(&'static str, &'static str)> {
    let solved = || table.scenes.iter().filter_map(|scene| scene.outcome.as_ref().ok());
    let linear =
        || solved().flat_map(|solved| &solved.assessment.equilibria).filter_map(|one| one.linear.as_ref().ok());
    let any_state = |proven| solved().any(|solved| solved.equilibria.list.iter().any(|e| e.proven == proven));
    let any_type = |proven| linear().any(|linear| linear.kind_proven == proven || linear.stable_proven == proven);
    let is_open = solved().any(|solved| !solved.equilibria.unresolved.is_empty());
    let has_types = table.columns(&[Shown::Everywhere]).iter().any(|column| ["type", "stable"].contains(&column.id));
    let follows_paths = solved().any(|solved| solved.assessment.from_now.is_some());
    let proved = if any_type(true) && has_types { PROVED_TYPE } else { PROVED };
    let numerical = if linear().next().is_some() { NUMERICAL_MEASURES } else { NUMERICAL };
    let all = [
        (any_state(true) || any_type(true), proof(true), proved),
        (any_state(false) || linear().next().is_some() || follows_paths, proof(false), numerical),
        (is_open, UNDECIDED, "a part of the search box that may hold equilibria or none."),
    ];
    let words = all.into_iter().filter_map(|(is_used, word, meaning)| is_used.then_some((word, meaning)));
    words.chain(glossary::used(table)).collect()
}

const NUMERICAL: &str = "computed, but nothing is proved about it.";

const NUMERICAL_MEASURES: &str = "computed, but nothing is proved about it; so is every number but those of states that \
     are proved.";

const PROVED: &str = "exactly one equilibrium lies within the error given, relative to each abundance.";

const PROVED_TYPE: &str = "of a state: exactly one equilibrium lies within the error given, relative to each \
     abundance; of a type and of stability: so it is, for the model as written.";

/// The contract's word for what an undecided box probably is.
pub(in crate::report) fn probably(probably: Probably) -> &'static str {
    match probably {
        Probably::DoubleRoot => "double root",
        Probably::Continuum => "continuum",
        Probably::NoDerivative => "no derivative",
        Probably::Kink => "kink",
        Probably::Budget => "budget",
    }
}

/// The same within a sentence.
pub(in crate::report) fn probably_in_words(probably: Probably) -> &'static str {
    match probably {
        Probably::DoubleRoot => "probably a double root",
        Probably::Continuum => "probably a line or surface of equilibria",
        Probably::NoDerivative => "probably where rates have no derivative",
        Probably::Kink => "probably at a kink of the rates",
        Probably::Budget => "the budget ended here",
    }
}

/// What is known of what is undecided: a sentence, and points of a continuum.
pub(in crate::report) fn known(open: &Unresolved, species: &[Species]) -> String {
    let state = |state: &Vec<f64>| {
        let parts = species.iter().zip(state).map(|(species, &x)| format!("{} = {}", species.symbol, human(x)));
        parts.collect::<Vec<_>>().join(", ")
    };
    let points = open.witnesses.iter().map(state).collect::<Vec<_>>().join("; ");
    let points = if points.is_empty() { points } else { format!("points on it: {points}") };
    let mut known = String::new();
    // A full stop follows from whoever shows this.
    let text = open.text.trim_end_matches('.');
    for part in [text, points.as_str()].into_iter().filter(|part| !part.is_empty()) {
        known.push_str("; ");
        known.push_str(part);
    }
    known
}

/// What is claimed above the box, in the contract's words.
pub(in crate::report) fn beyond(equilibria: &Equilibria) -> &'static str {
    if equilibria.none_above { "none" } else { "not claimed" }
}

/// Why an equilibrium has no linearisation.
pub(in crate::report) fn why(derivative: Derivative) -> Option<&'static str> {
    match derivative {
        Derivative::Exists => None,
        Derivative::Kink => Some("rates have a kink here"),
        Derivative::Missing => Some("rates have no derivative here"),
    }
}

/// Why an equilibrium has no linearisation that was looked for.
pub(in crate::report) fn unavailable(reason: Unavailable) -> &'static str {
    match reason {
        Unavailable::NoDerivative(derivative) => why(derivative).unwrap_or("rates have no derivative here"),
        Unavailable::Eigenvalues(Unsolved::NotFinite) => "derivatives are not finite here",
        Unavailable::Eigenvalues(Unsolved::NoConvergence) => "eigenvalues did not come out",
    }
}

/// Whether something is proved, or only computed.
pub(in crate::report) fn proof(proven: bool) -> &'static str {
    if proven { "proved" } else { "numerical" }
}

/// The contract's word for what the nonlinear terms say.
pub(in crate::report) fn verdict_word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Attracts => "attracts",
        Verdict::Repels => "repels",
        Verdict::SemiStable => "semi-stable",
        Verdict::Open => "open",
    }
}

/// The contract's word for the coefficient that decides.
pub(in crate::report) fn test(test: Test) -> &'static str {
    match test {
        Test::Fold => "fold",
        Test::Transcritical => "transcritical",
        Test::Pitchfork => "pitchfork",
        Test::Cusp => "cusp",
        Test::FirstLyapunov => "first Lyapunov coefficient",
        Test::Flip => "flip coefficient",
    }
}

/// What the search of a scenario came to, and whether that is a proof.
pub(in crate::report) fn verdict(equilibria: &Equilibria) -> (bool, String) {
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
