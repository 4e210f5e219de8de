//! One scenario searched and assessed, within a budget; and names for what was found in several.

use crate::analysis::assess::assess;
use crate::analysis::equilibria::{Budget, all};
use crate::analysis::passage::{Found, Passage, Ways, identify};
use crate::analysis::prepare::Prepared;
use crate::model::Model;
use crate::report::table::{Limits, Names, Scene, Solved};

/// Boxes on one face.
pub const BOXES: usize = Limits::BOXES;

/// Finds a scenario's equilibria and says everything of them.
pub fn scene(model: &Model, prepared: &Prepared, scenario: usize, budget: &Budget<'_>) -> Scene {
    let outcome = match prepared.subject(model, scenario) {
        Ok(mut subject) => {
            let (graph, problem) = subject.problem();
            let equilibria = all(graph, &problem, budget);
            let assessment = assess(&mut subject, &equilibria, budget.stop);
            Ok(Solved { values: subject.plan.values.clone(), equilibria, assessment })
        }
        Err(problems) => Err(problems.to_vec()),
    };
    Scene { scenario, outcome }
}

/// Names the equilibria of scenarios in the order given, by following them from one to the next until `stop` says so.
pub fn names<'s>(ways: &mut Ways, scenes: impl IntoIterator<Item = &'s Scene>, stop: &dyn Fn() -> bool) -> Names {
    let all_found: Vec<Option<Found<'_>>> = scenes.into_iter().map(found).collect();
    Names::new(&identify(ways, &all_found, stop))
}

/// The same for scenarios and one more, whose values are set over that at place `base`: what can be followed from there
/// keeps its name, and no name of the others depends on what is tried.
pub fn names_over(ways: &mut Ways, scenes: &[&Scene], base: usize, tried: &Scene, stop: &dyn Fn() -> bool) -> Names {
    let named = names(ways, scenes.iter().copied(), stop);
    let ends = scenes.get(base).and_then(|base| found(base)).zip(found(tried));
    let passage = ends.map(|(base, tried)| ways.passage([base, tried], stop)).unwrap_or_default();
    named.with_one_over(base, &passage, found(tried).map_or(0, |tried| tried.list.len()))
}

/// From the first scenario with a list to each other one that has a list; `None` for the rest.
pub fn passages(ways: &mut Ways, scenes: &[Scene], stop: &dyn Fn() -> bool) -> Vec<Option<Passage>> {
    let all_found: Vec<Option<Found<'_>>> = scenes.iter().map(found).collect();
    let first = all_found.iter().position(Option::is_some);
    let passage = |(place, second): (usize, &Option<Found<'_>>)| {
        let reference = first.filter(|&first| first != place)?;
        Some(ways.passage([all_found[reference]?, (*second)?], stop))
    };
    all_found.iter().enumerate().map(passage).collect()
}

fn found(scene: &Scene) -> Option<Found<'_>> {
    let solved = scene.outcome.as_ref().ok()?;
    Some(Found { scenario: scene.scenario, list: &solved.equilibria.list })
}
