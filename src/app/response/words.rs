//! What is said of the response: the state that is picked and how it is lost, and each threshold in a line.

use super::{along, parameter, picked, rule};
use crate::analysis::response::Response;
use crate::app::{App, Study};
use crate::model::{Model, ParameterId};
use crate::report::kinds;
use crate::report::response::plot::{mark, marked, stays};
use crate::report::response::words::{kind, setting, unit, with_unit};
use crate::report::response::{Reach, Setting, advised, meaning};
use crate::report::table::human;

/// Species that a line names.
const MOST_NAMED: usize = 4;

/// The state that is picked, over which part of the range it stays what it is, and how it is lost.
pub fn sentence(app: &App, study: &Study) -> String {
    let (Some((id, one)), Some(at)) = (parameter(study), rule(study)) else {
        return "No parameter has a range, so there is nothing to vary: give one a range in the model file.".to_owned();
    };
    let place = setting(study.model(), id, at);
    let Some((along, is_whole)) = along(app, study) else {
        return format!("{place}. Every equilibrium is being followed as {} varies.", one.name);
    };
    let response = &along.response;
    // Nothing that is said here waits for margins.
    let is_there = is_whole || along.reach >= Reach::Advised;
    let so_far = if is_there { "" } else { "Branches are still being followed. " };
    let Some(state) = picked(app, study) else {
        return format!("{so_far}At {place} no equilibrium is known.");
    };
    let look = state.kind.map_or(kinds::UNKNOWN, kinds::of);
    let name = if state.name.is_empty() { "a state" } else { &state.name };
    let here = format!("{so_far}At {place} {name}: {}, {}.", amounts(study.model(), &state.state), look.word);
    let Some(met) = state.met else { return format!("{here} It lies on no branch that was followed.") };
    let lasts = match met.stable {
        Some(true) => "persists and is stable",
        Some(false) => "is there, not stable,",
        None => "is there, its stability undecided,",
    };
    let (ends, edges) = stays(response, &met);
    let from_to = format!("from {} to {}", human(ends[0]), with_unit(ends[1], unit(study.model(), id)));
    let advised = advised(&setting_of(study, response), &along.advice).join(" ");
    let lost = lost(study, response, at, ends, edges);
    format!("{here} It {lasts} {from_to} (numerical).{lost} {advised}")
}

fn setting_of<'s>(study: &'s Study, response: &'s Response) -> Setting<'s> {
    Setting { model: study.model(), response, ids: study.names(study.current) }
}

/// What happens at the ends, the nearer one first.
fn lost(study: &Study, response: &Response, at: f64, ends: [f64; 2], edges: [Option<usize>; 2]) -> String {
    let mut order = [0, 1];
    order.sort_by(|&a, &b| (ends[a] - at).abs().total_cmp(&(ends[b] - at).abs()));
    let setting = setting_of(study, response);
    let one = |end: usize| {
        let threshold = response.thresholds.get(edges[end]?)?;
        let rank = marked(response).iter().position(|&place| Some(place) == edges[end]);
        let sign = rank.map_or(String::new(), |rank| format!("{}: ", mark(rank)));
        Some(format!(" {sign}{} ({}).", meaning(&setting, threshold), kind(threshold.kind)))
    };
    order.into_iter().filter_map(one).collect()
}

/// The thresholds in words, in the order of their marks: each its mark, its kind, where it is and what it means.
pub fn rows(study: &Study, response: &Response) -> Vec<String> {
    let setting = setting_of(study, response);
    let row = |(rank, place): (usize, usize)| {
        let one = response.thresholds.get(place)?;
        Some(format!("{} {} {}: {}", mark(rank), human(one.at), kind(one.kind), meaning(&setting, one)))
    };
    marked(response).into_iter().enumerate().filter_map(row).collect()
}

/// Control and range, as a heading has them.
pub fn varied(model: &Model, id: ParameterId, [from, to]: [f64; 2]) -> String {
    let name = model.parameters.get(id.0).map_or("", |one| one.name.as_str());
    format!("{name} from {} to {}", human(from), with_unit(to, unit(model, id)))
}

/// Who is there, and how many.
pub fn amounts(model: &Model, state: &[f64]) -> String {
    let present: Vec<usize> = (0..state.len()).filter(|&i| state[i] != 0.0).collect();
    let one = |&i: &usize| {
        let symbol = model.species.get(i).map_or("", |one| one.symbol.as_str());
        format!("{symbol} {}", human(state[i]))
    };
    match present.len() {
        0 => "nobody".to_owned(),
        count if count <= MOST_NAMED => present.iter().map(one).collect::<Vec<_>>().join(", "),
        count => format!("{count} species"),
    }
}
