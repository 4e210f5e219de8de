//! One scenario searched and assessed, within a budget; and names for what was found in several.

use crate::analysis::assess::assess;
use crate::analysis::equilibria::{Budget, all};
use crate::analysis::passage::{Found, Passage, Ways, identify};
use crate::analysis::prepare::Prepared;
use crate::analysis::response::{Advice, Control, Margins, Response, advise, band, chart, front, margins, respond};
use crate::model::{Model, ParameterId};
use crate::report::response::chart::Charted;
use crate::report::response::{Along, Reach, focus};
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

/// Follows what was found in a scenario as a parameter varies over a range, and says what that means for catches and
/// margins; `None` for a scenario that failed. `told` gets what is there before the rest, whose end is margins.
pub fn along(
    model: &Model,
    prepared: &Prepared,
    scene: &Scene,
    (parameter, [from, to]): (ParameterId, [f64; 2]),
    budget: &Budget<'_>,
    told: &mut dyn FnMut(Along),
) -> Option<Along> {
    let solved = scene.outcome.as_ref().ok()?;
    let mut subject = prepared.subject(model, scene.scenario).ok()?;
    let control = Control { parameter, from, to, present: *solved.values.get(parameter.0)? };
    let list = &solved.equilibria.list;
    let focus = focus(model, solved);
    let response = respond(&mut subject, &control, list, budget, &mut |response| told(begun(response)));
    let advice = advise(&mut subject, &response, budget.stop);
    let band = focus.and_then(|place| band(&response, list, place));
    let advised = Along { reach: Reach::Advised, response, advice, focus, band, margins: Margins::default() };
    told(advised.clone());
    let margins = focus.map(|place| margins(&mut subject, list, place, budget)).unwrap_or_default();
    Some(Along { reach: Reach::Whole, margins, ..advised })
}

/// Branches alone.
fn begun(response: &Response) -> Along {
    Along {
        reach: Reach::Branches,
        response: response.clone(),
        advice: Advice::default(),
        focus: None,
        band: None,
        margins: Margins::default(),
    }
}

/// The chart of two parameters over their ranges, across and upwards, and the best pairs of yields; `None` for a scenario that failed.
pub fn charted(
    model: &Model,
    prepared: &Prepared,
    scene: &Scene,
    varied: [(ParameterId, [f64; 2]); 2],
    budget: &Budget<'_>,
) -> Option<Charted> {
    let solved = scene.outcome.as_ref().ok()?;
    let mut subject = prepared.subject(model, scene.scenario).ok()?;
    let [Some(across), Some(upwards)] = varied.map(|(parameter, [from, to])| {
        Some(Control { parameter, from, to, present: *solved.values.get(parameter.0)? })
    }) else {
        return None;
    };
    let (controls, list) = ([across, upwards], &solved.equilibria.list);
    let chart = chart(&subject, controls, list, budget);
    Some(Charted { chart, front: front(&mut subject, controls, list, budget) })
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
