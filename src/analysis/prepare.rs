//! A model's scenarios made ready to be searched: equations, search box, and what is wrong with those that have none.

use super::subject::Subject;
use crate::diag::Diagnostic;
use crate::model::system::System;
use crate::model::system::bounds::Bound;
use crate::model::{Model, ParameterId};

/// The equations of every scenario that has any.
#[derive(Clone, Debug)]
pub struct Prepared {
    /// Equations of all sound scenarios, in one graph.
    pub system: System,
    /// The search box, one side pair a species.
    pub bounds: Vec<Bound>,
    /// For each scenario of the model, its plan, or why it has none.
    pub plans: Vec<Plan>,
}

/// A plan's index, or what is wrong with the scenario.
pub type Plan = Result<usize, Vec<Diagnostic>>;

impl Prepared {
    /// Assembles all scenarios, with parameters set from outside last of all.
    ///
    /// # Errors
    /// Where the model has no search box, or no scenario could be assembled; each problem with its place.
    pub fn new(model: &Model, set: &[(ParameterId, f64)]) -> Result<Self, Vec<Diagnostic>> {
        Self::over(model, set, &[])
    }

    /// The same, sound as well where parameters are varied over these ranges: rules that simplify formulas hold for the
    /// values that the model gives a parameter, and a range that is asked for may go beyond.
    ///
    /// # Errors
    /// As for [`Prepared::new`].
    pub fn over(
        model: &Model,
        set: &[(ParameterId, f64)],
        ranges: &[(ParameterId, [f64; 2])],
    ) -> Result<Self, Vec<Diagnostic>> {
        // The box is the same whatever scenarios are asked for, so all that can be are assembled.
        if let Ok(system) = System::over(model, set, ranges) {
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
        Self::with_box(model, System::over(model, set, ranges)?, plans)
    }

    fn with_box(model: &Model, mut system: System, plans: Vec<Plan>) -> Result<Self, Vec<Diagnostic>> {
        let bounds = system.bounds(model)?;
        Ok(Self { system, bounds, plans })
    }

    /// The sides of the search box: lower and upper, one pair a species.
    pub fn sides(&self) -> Vec<[f64; 2]> {
        self.bounds.iter().map(|bound| [bound.lower, bound.upper]).collect()
    }

    /// A scenario as analyses take it, with a graph of its own.
    ///
    /// # Errors
    /// What is wrong with the scenario; nothing for one that the model does not have.
    pub fn subject<'s>(&'s self, model: &'s Model, scenario: usize) -> Result<Subject<'s>, &'s [Diagnostic]> {
        match self.plans.get(scenario) {
            Some(Ok(plan)) => {
                let plan = self.system.plans.get(*plan).ok_or(&[][..])?;
                Ok(Subject::new(model, &self.system.graph, plan, self.sides()))
            }
            Some(Err(problems)) => Err(problems),
            None => Err(&[]),
        }
    }
}
