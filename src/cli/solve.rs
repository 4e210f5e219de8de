//! A model's scenarios made ready and searched, for every command that needs their equilibria.

use crate::analysis::assess::assess;
use crate::analysis::equilibria::{Budget, all};
use crate::analysis::subject::Subject;
use crate::diag::Diagnostic;
use crate::model::system::System;
use crate::model::system::bounds::Bound;
use crate::model::{Model, ParameterId};
use crate::report::table::{Limits, Scene, Solved};
use crate::shell::clock::Deadline;
use crate::shell::progress::Meter;
use crate::shell::signal::Interrupt;
use crate::shell::workers::Threads;

/// Boxes on one face, beyond which the search goes on to the next. A face of a model that can be settled at all takes
/// tens to thousands.
pub(super) const BOXES: usize = 50_000;

/// The equations of every scenario that has any.
pub(super) struct Prepared {
    pub(super) system: System,
    pub(super) bounds: Vec<Bound>,
    /// For each scenario of the model, its plan, or why it has none.
    pub(super) plans: Vec<Plan>,
}

/// A plan's index, or what is wrong with the scenario.
pub(super) type Plan = Result<usize, Vec<Diagnostic>>;

impl Prepared {
    pub(super) fn new(model: &Model, set: &[(ParameterId, f64)]) -> Result<Self, Vec<Diagnostic>> {
        // The box is the same whatever scenarios are asked for, so all that can be are assembled.
        if let Ok(system) = System::new(model, set) {
            return Self::with_box(model, system, (0..model.scenarios.len()).map(Ok).collect());
        }
        let mut sound = Vec::new();
        let mut plans = Vec::new();
        for scenario in &model.scenarios {
            let alone = Model { scenarios: vec![scenario.clone()], ..model.clone() };
            plans.push(match System::new(&alone, set) {
                Ok(_) => {
                    sound.push(scenario.clone());
                    Ok(sound.len() - 1)
                }
                Err(problems) => Err(problems),
            });
        }
        let model = &Model { scenarios: sound, ..model.clone() };
        Self::with_box(model, System::new(model, set)?, plans)
    }

    fn with_box(model: &Model, mut system: System, plans: Vec<Plan>) -> Result<Self, Vec<Diagnostic>> {
        let bounds = system.bounds(model)?;
        Ok(Self { system, bounds, plans })
    }
}

/// All that the search of a scenario needs.
pub(super) struct Solver<'s> {
    pub(super) model: &'s Model,
    pub(super) prepared: &'s Prepared,
    pub(super) limits: Limits,
    pub(super) threads: Threads,
    pub(super) interrupt: &'s Interrupt,
}

impl Solver<'_> {
    pub(super) fn scene(&self, scenario: usize) -> Scene {
        let outcome = match &self.prepared.plans[scenario] {
            Ok(plan) => Ok(self.solve(*plan)),
            Err(problem) => Err(problem.clone()),
        };
        Scene { scenario, outcome }
    }

    fn solve(&self, plan: usize) -> Solved {
        let System { graph, plans } = &self.prepared.system;
        let plan = &plans[plan];
        let sides: Vec<[f64; 2]> = self.prepared.bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
        let deadline = Deadline::after(self.limits.seconds);
        let meter = Meter::start();
        let budget = Budget {
            boxes: self.limits.boxes,
            stop: &|| self.interrupt.is_raised() || deadline.is_past(),
            workers: &self.threads,
            observer: Some(&|done| meter.add(done)),
        };
        let mut subject = Subject::new(self.model, graph, plan, sides);
        let (graph, problem) = subject.problem();
        let equilibria = all(graph, &problem, &budget);
        let assessment = assess(&mut subject, &equilibria, budget.stop);
        Solved { values: plan.values.clone(), equilibria, assessment }
    }
}
