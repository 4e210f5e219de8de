//! One scenario searched and assessed, within a budget.

use crate::analysis::assess::assess;
use crate::analysis::equilibria::{Budget, all};
use crate::analysis::prepare::Prepared;
use crate::model::Model;
use crate::report::table::{Limits, Scene, Solved};

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
