//! A scenario that changes nothing, and two that are the same.
//!
//! Scenarios are compared by what they come to: the values of all parameters, and the processes and harvests in force,
//! formula by formula. An empty scenario is the file's own state under a name, and meant.

use super::scene::Scene;
use crate::diag::Diagnostic;
use crate::model::{Accounting, Formula, Harvest, Process, Scenario, Term, When};

/// Warns at the name of a scenario that says something and changes nothing.
pub(super) fn find_idle(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let model = scene.model;
    let plain = Outcome {
        values: model.base_values(),
        processes: model.processes.iter().map(process).collect(),
        harvests: model.harvest.iter().map(harvest).collect(),
    };
    let idle = model.scenarios.iter().enumerate().filter(|(_, scenario)| !is_empty(scenario));
    idle.filter(|(place, _)| outcome(scene, *place) == plain)
        .map(|(_, scenario)| {
            Diagnostic::warning(scenario.at, format!("scenario \"{}\" changes nothing", scenario.name))
                .help("write {} for the file as it is, or set what it should change")
        })
        .collect()
}

/// Warns at the name of the later of two scenarios that come to the same.
pub(super) fn find_twins(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let outcomes: Vec<Outcome> = (0..scene.model.scenarios.len()).map(|place| outcome(scene, place)).collect();
    let earlier = |place: usize| outcomes[..place].iter().position(|other| *other == outcomes[place]);
    let twins = scene.model.scenarios.iter().enumerate().filter_map(|(place, scenario)| {
        let first = scene.model.scenarios.get(earlier(place)?)?;
        let message = format!("scenarios \"{}\" and \"{}\" are the same", first.name, scenario.name);
        let warning = Diagnostic::warning(scenario.at, message).related(first.at, "the same as this");
        Some(warning.help("remove one of them, or set what should differ"))
    });
    twins.collect()
}

/// What a scenario comes to; texts are formulas in canonical form.
#[derive(PartialEq)]
struct Outcome {
    values: Vec<f64>,
    processes: Vec<Vec<String>>,
    harvests: Vec<(When, bool, Vec<String>)>,
}

fn outcome(scene: &Scene<'_>, place: usize) -> Outcome {
    let model = scene.model;
    Outcome {
        values: scene.system.plans.get(place).map_or_else(Vec::new, |plan| plan.values.clone()),
        processes: model.processes_under(place).into_iter().map(process).collect(),
        harvests: model.harvests_under(place).into_iter().map(harvest).collect(),
    }
}

fn is_empty(scenario: &Scenario) -> bool {
    let Scenario { values, without, harvest, processes, .. } = scenario;
    values.is_empty() && without.is_empty() && harvest.is_empty() && processes.is_empty()
}

fn process(process: &Process) -> Vec<String> {
    [process.name.clone(), text(&process.rate)].into_iter().chain(process.effect.iter().map(term)).collect()
}

fn harvest(harvest: &Harvest) -> (When, bool, Vec<String>) {
    let amounts = harvest.amounts.iter().map(term);
    let money = harvest.price.iter().map(term).chain(harvest.cost.iter().map(text));
    let texts = [harvest.name.clone()].into_iter().chain(amounts).chain(["worth".to_owned()]).chain(money);
    (harvest.when, harvest.accounting == Accounting::Takes, texts.collect())
}

fn term(term: &Term) -> String {
    format!("{}: {}", term.species.0, text(&term.formula))
}

fn text(formula: &Formula) -> String {
    formula.expr.to_string()
}
