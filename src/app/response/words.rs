//! What is said of the response: the state that is picked and how it is lost, and each threshold in a line.

use super::{known, parameter, picked, rule};
use crate::analysis::response::{Criticality, Response, Threshold, ThresholdKind};
use crate::app::{App, Study};
use crate::model::Model;
use crate::report::kinds;
use crate::report::response::plot::{mark, stays};
use crate::report::table::human;

/// Species that a line names.
const MOST_NAMED: usize = 4;

/// The state that is picked, over which part of the range it stays what it is, and what ends that.
pub fn sentence(app: &App, study: &Study) -> String {
    let (Some((_, one)), Some(at)) = (parameter(study), rule(study)) else {
        return "No parameter has a range, so there is nothing to vary; write one into the model file.".to_owned();
    };
    let unit = one.unit.as_ref().filter(|unit| unit.value != "1").map_or(String::new(), |unit| format!(" {}", unit.value));
    let place = format!("{} = {}{unit}", one.name, human(at));
    let Some((response, is_whole)) = known(app, study) else {
        return format!("{place}. Every equilibrium is being followed along {}.", one.name);
    };
    let so_far = if is_whole { "" } else { " Branches are still being followed." };
    let Some(state) = picked(app, study) else {
        return format!("{place}: no equilibrium is known here.{so_far}");
    };
    let look = state.kind.map_or(kinds::UNKNOWN, kinds::of);
    let here = format!("At {place}, {}: {}, {}.", state.name, amounts(study.model(), &state.state), look.word);
    let Some(met) = state.met else { return format!("{here} It lies on no branch that was followed.{so_far}") };
    let word = match met.stable {
        Some(true) => "It persists and is stable",
        Some(false) => "It persists, unstable,",
        None => "It persists",
    };
    let ([low, high], ends) = stays(response, &met);
    let ends = [("below", ends[0]), ("above", ends[1])];
    let lost = ends.iter().filter_map(|(side, end)| Some(format!("{side} {}", brief(response, (*end)?))));
    let lost: Vec<String> = lost.collect();
    let lost = if lost.is_empty() { String::new() } else { format!("; beyond: {}", lost.join(", ")) };
    format!("{here} {word} from {} to {}{unit}{lost} (numerical).{so_far}", human(low), human(high))
}

/// A threshold in a few words: its mark, what it is.
fn brief(response: &Response, place: usize) -> String {
    response.thresholds.get(place).map_or_else(String::new, |one| format!("{} ({})", word(one.kind), mark(place)))
}

/// A threshold in a line: its mark, what it is and where, and the state there.
pub fn row(model: &Model, response: &Response, place: usize) -> String {
    let Some(one) = response.thresholds.get(place) else { return String::new() };
    let soft = match one.criticality {
        Some(Criticality::Soft) => ", soft",
        Some(Criticality::Hard) => ", hard",
        None => "",
    };
    let who = one.species.and_then(|id| model.species.get(id.0)).map_or(String::new(), |one| format!(" of {}", one.name));
    format!("{} {}: {}{who}{soft}; {}", mark(place), human(one.at), word(one.kind), there(model, one))
}

fn there(model: &Model, threshold: &Threshold) -> String {
    amounts(model, &threshold.state)
}

fn amounts(model: &Model, state: &[f64]) -> String {
    let present: Vec<usize> = (0..state.len()).filter(|&i| state[i] != 0.0).collect();
    let one = |&i: &usize| {
        let symbol = model.species.get(i).map_or("", |one| one.symbol.as_str());
        format!("{symbol} {}", human(state[i]))
    };
    match present.len() {
        0 => "nobody is there".to_owned(),
        count if count <= MOST_NAMED => present.iter().map(one).collect::<Vec<_>>().join(", "),
        count => format!("{count} species"),
    }
}

fn word(kind: ThresholdKind) -> &'static str {
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
