//! Words for what a response is made of: the contract's, and pieces of sentences that all forms share.
//!
//! Numbers are rounded for people here, with the unit of what they are; nothing is decided. Whole sentences on a threshold
//! are in `meaning`.

use crate::analysis::response::{Criticality, Ending, GapReason, Taking, ThresholdKind};
use crate::model::{Model, ParameterId, Role, SpeciesId, TimeKind};

use super::super::table::human;

/// The contract's word for what happens at a threshold.
pub fn kind(kind: ThresholdKind) -> &'static str {
    match kind {
        ThresholdKind::Fold => "fold",
        ThresholdKind::Transcritical => "transcritical",
        ThresholdKind::Pitchfork => "pitchfork",
        ThresholdKind::Hopf => "Hopf",
        ThresholdKind::PeriodDoubling => "period doubling",
        ThresholdKind::NeimarkSacker => "Neimark-Sacker",
        ThresholdKind::BorderCollision => "border collision",
        ThresholdKind::Exit => "exit",
        ThresholdKind::Continuum => "continuum",
        ThresholdKind::Cusp => "cusp",
        ThresholdKind::BogdanovTakens => "Bogdanov-Takens",
        ThresholdKind::GeneralisedHopf => "generalised Hopf",
    }
}

/// The contract's word for what is born there.
pub fn criticality(criticality: Criticality) -> &'static str {
    match criticality {
        Criticality::Soft => "soft",
        Criticality::Hard => "hard",
    }
}

/// Why a part of the range is not proved, as it stands after its ends.
pub fn gap(reason: GapReason) -> &'static str {
    match reason {
        GapReason::Meeting => "branches meet there, or nearly so",
        GapReason::Unresolved => "the search left something undecided there",
        GapReason::Unjoined => "a state was found there that could not be joined to a branch",
        GapReason::Undefined => "the model has no value there",
        GapReason::Budget => "the effort allowed for the proof was spent",
    }
}

/// How a branch ends, in a word or two; the threshold at which it does is for whoever knows the list.
pub fn ending(ending: Ending) -> &'static str {
    match ending {
        Ending::Range => "range",
        Ending::Closed => "closed",
        Ending::Threshold(_) => "threshold",
        Ending::Undefined => "undefined",
        Ending::Far => "outside",
        Ending::Lost => "not followed",
        Ending::Stopped => "stopped",
    }
}

/// A parameter's name; empty for one that the model does not have.
pub fn name(model: &Model, parameter: ParameterId) -> &str {
    model.parameters.get(parameter.0).map_or("", |parameter| &parameter.name)
}

/// A parameter's unit; empty where it has none, or is a pure number.
pub fn unit(model: &Model, parameter: ParameterId) -> &str {
    let unit = model.parameters.get(parameter.0).and_then(|parameter| parameter.unit.as_ref());
    unit.map(|unit| unit.value.as_str()).filter(|unit| *unit != "1").unwrap_or("")
}

/// A value of a parameter with its name and unit: `E = 1.830`, `nets = 13.33 net`.
pub fn setting(model: &Model, parameter: ParameterId, x: f64) -> String {
    format!("{} = {}", name(model, parameter), with_unit(x, unit(model, parameter)))
}

/// A number with what it counts.
pub fn with_unit(x: f64, unit: &str) -> String {
    if unit.is_empty() { human(x) } else { format!("{} {unit}", human(x)) }
}

/// The unit of an amount taken: of the species per unit of time, for a map per step; empty where there is none.
pub fn taking_unit(model: &Model, species: Option<SpeciesId>) -> String {
    let of = species.and_then(|id| model.species.get(id.0)?.unit.as_ref());
    let Some(unit) = of.map(|unit| in_brackets(&unit.value)) else { return String::new() };
    match model.time {
        TimeKind::Continuous => format!("{unit}/{}", in_brackets(&model.time_unit.value)),
        TimeKind::Discrete { .. } => format!("{unit}/step"),
    }
}

fn in_brackets(unit: &str) -> String {
    if unit.chars().all(char::is_alphanumeric) { unit.to_owned() } else { format!("({unit})") }
}

/// What a harvest gives, as it is named: `trawl S`, `value of trawl`.
pub fn taking(model: &Model, taking: &Taking) -> String {
    match taking.species.and_then(|id| model.species.get(id.0)) {
        Some(species) => format!("{} {}", taking.harvest, species.symbol),
        None => format!("value of {}", taking.harvest),
    }
}

/// Names of species that a sentence lists; more would bury it.
const MOST_NAMED: usize = 6;

/// Who is there, by name: `sprat and cod`, `no species`. Fleets and resources are not spoken of where others are there.
pub fn community(model: &Model, present: &[bool]) -> String {
    let there = || model.species.iter().zip(present).filter(|(_, is_there)| **is_there).map(|(species, _)| species);
    let mut names: Vec<&str> =
        there().filter(|species| species.role == Role::Population).map(|species| species.name.as_str()).collect();
    if names.is_empty() {
        names = there().map(|species| species.name.as_str()).collect();
    }
    match names.len() {
        0 => "no species".to_owned(),
        count if count > MOST_NAMED => format!("{count} species"),
        _ => listed(&names),
    }
}

/// Words in a row, the last after `and`.
pub fn listed<S: AsRef<str>>(words: &[S]) -> String {
    let words: Vec<&str> = words.iter().map(AsRef::as_ref).collect();
    match words.split_last() {
        None => String::new(),
        Some((last, [])) => (*last).to_owned(),
        Some((last, others)) => format!("{} and {last}", others.join(", ")),
    }
}

/// A word with its article.
pub fn with_article(word: &str) -> String {
    let vowel = word.starts_with(['a', 'e', 'i', 'o', 'u']);
    format!("{} {word}", if vowel { "an" } else { "a" })
}

/// A share in per cent; never none where it is something.
pub fn share(x: f64) -> String {
    match x.abs() {
        0.0 => "0 %".to_owned(),
        x if x < 0.001 => "under 0.1 %".to_owned(),
        x if x < 0.1 => format!("{:.1} %", 100.0 * x),
        x if x < 10.0 => format!("{:.0} %", 100.0 * x),
        x => format!("{}-fold", human(x)),
    }
}

/// Digits beyond those for people that numbers may need to be told apart.
const MOST_DIGITS: usize = 12;

/// Numbers in rising order for people, each with as many digits as tell it from its neighbours.
pub fn told_apart(values: &[f64]) -> Vec<String> {
    let text = |x: f64, digits: usize| match digits {
        0 => human(x),
        digits => significant(x, digits),
    };
    let differs = |place: usize, digits: usize| {
        let same = |other: usize| {
            values
                .get(other)
                .is_some_and(|&other| other != values[place] && text(other, digits) == text(values[place], digits))
        };
        !same(place + 1) && !place.checked_sub(1).is_some_and(same)
    };
    let one = |place: usize| {
        let digits = std::iter::once(0).chain(5..=MOST_DIGITS).find(|&digits| differs(place, digits));
        text(values[place], digits.unwrap_or(MOST_DIGITS))
    };
    (0..values.len()).map(one).collect()
}

/// A number of so many significant digits, those before the point all kept.
fn significant(x: f64, digits: usize) -> String {
    let scientific = format!("{x:.*e}", digits - 1);
    let exponent: i32 = scientific.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0);
    let decimals = i32::try_from(digits).unwrap_or(0) - 1 - exponent;
    if (-4..=6).contains(&exponent) { format!("{x:.*}", usize::try_from(decimals).unwrap_or(0)) } else { scientific }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn neighbours_are_told_apart() {
        let check = |values: &[f64], expected: &[&str]| assert_eq!(told_apart(values), expected);
        check(&[], &[]);
        check(&[0.0, 1.83], &["0", "1.830"]);
        check(&[1.830_01, 1.830_11], &["1.8300", "1.8301"]);
        check(&[1.0, 2.000_01, 2.000_02, 3.0], &["1.000", "2.00001", "2.00002", "3.000"]);
        check(&[1e-9, 1.000_02e-9], &["1.00000e-9", "1.00002e-9"]);
        check(&[5.0, 5.0], &["5.000", "5.000"]);
    }

    #[test]
    fn shares_and_lists() {
        for (x, text) in [(0.0, "0 %"), (1e-5, "under 0.1 %"), (-0.0437, "4.4 %"), (0.12, "12 %"), (25.0, "25.00-fold")]
        {
            assert_eq!(share(x), text);
        }
        for (words, text) in [(&[][..], ""), (&["a"], "a"), (&["a", "b"], "a and b"), (&["a", "b", "c"], "a, b and c")]
        {
            assert_eq!(listed(words), text);
        }
    }
}
