//! What a scenario makes of a model: which processes and harvests there are, and what the parameters are.
//!
//! A scenario is never a second model; these functions look through it. Order of precedence of values: file, draw,
//! scenario, values set on the command line.

#![expect(clippy::result_large_err, reason = "an error ends the run, so its size does not matter")]

use super::messages::Message;
use super::{Formula, Harvest, Model, Name, Parameter, ParameterId, Process, Scenario};
use crate::diag::{Diagnostic, Location, Span};
use crate::expr::ast::{Expr, ExprKind};
use crate::expr::constant::evaluate;

impl Parameter {
    /// Why its own limits do not allow a value.
    pub fn ruled_out(&self, value: f64) -> Option<String> {
        let Self { name, min, max, .. } = self;
        match (min, max) {
            (Some(min), _) if value < *min => {
                Some(format!("{name} = {value}: the model says that {name} is at least {min}"))
            }
            (_, Some(max)) if value > *max => {
                Some(format!("{name} = {value}: the model says that {name} is at most {max}"))
            }
            _ => None,
        }
    }
}

impl Formula {
    /// A finite number that stands nowhere in the file, to be placed where `at` says.
    fn number(value: f64, at: Location) -> Self {
        let text = value.to_string();
        let span = Span::new(0, text.len());
        let size = Expr { kind: ExprKind::Number(value.abs()), span };
        let expr = if value < 0.0 { Expr { kind: ExprKind::Neg(Box::new(size)), span } } else { size };
        Self { text, expr, at, origin: Vec::new() }
    }
}

impl Model {
    /// Index of the scenario of that name.
    pub fn scenario(&self, name: &str) -> Option<usize> {
        self.scenarios.iter().position(|scenario| scenario.name == name)
    }

    /// The model with one more scenario at its end: that of index `base` with some values set over it, under the same name.
    #[must_use]
    pub fn with_values_over(&self, base: usize, values: &[(ParameterId, f64)]) -> Self {
        let mut model = self.clone();
        if let Some(mut scenario) = self.scenarios.get(base).cloned() {
            for &(id, value) in values {
                scenario.values.retain(|(other, _)| *other != id);
                scenario.values.push((id, Formula::number(value, scenario.at)));
            }
            scenario.values.sort_by_key(|(id, _)| *id);
            model.scenarios.push(scenario);
        }
        model
    }

    /// The processes under a scenario: the base ones in their order, replaced in place or left out, then the added ones.
    /// A scenario that does not exist changes nothing.
    pub fn processes_under(&self, scenario: usize) -> Vec<&Process> {
        let added = self.scenarios.get(scenario).map_or(&[][..], |scenario| &scenario.processes);
        overlaid(&self.processes, added, self.scenarios.get(scenario), |process| &process.name)
    }

    /// The harvests under a scenario, in the same order as processes.
    pub fn harvests_under(&self, scenario: usize) -> Vec<&Harvest> {
        let added = self.scenarios.get(scenario).map_or(&[][..], |scenario| &scenario.harvest);
        overlaid(&self.harvest, added, self.scenarios.get(scenario), |harvest| &harvest.name)
    }

    /// Today's stock of every species; `None` unless the file has each.
    pub fn today(&self) -> Option<Vec<f64>> {
        let of = |i: usize| self.now.iter().find(|survey| survey.species.0 == i).map(|survey| survey.value);
        (0..self.species.len()).map(of).collect()
    }

    /// The values that the file gives, in the order of parameters.
    pub fn base_values(&self) -> Vec<f64> {
        self.parameters.iter().map(|parameter| parameter.value).collect()
    }

    /// The parameters' values under a scenario, with `set` on top of all; in the order of parameters, all finite.
    ///
    /// # Errors
    ///
    /// A value that is not finite, with its place.
    pub fn values(&self, scenario: usize, set: &[(ParameterId, f64)]) -> Result<Vec<f64>, Diagnostic> {
        self.values_over(&self.base_values(), scenario, set)
    }

    /// As [`values`](Self::values), over one draw in place of the file's values: the scenario's formulas see the draw.
    ///
    /// # Errors
    ///
    /// A value that is not finite, with its place.
    ///
    /// # Panics
    ///
    /// If `base` has not exactly one value a parameter, or `set` names a parameter of another model.
    pub fn values_over(
        &self,
        base: &[f64],
        scenario: usize,
        set: &[(ParameterId, f64)],
    ) -> Result<Vec<f64>, Diagnostic> {
        assert_eq!(base.len(), self.parameters.len(), "one base value a parameter");
        let mut values = base.to_vec();
        if let Some(scenario) = self.scenarios.get(scenario) {
            self.apply(scenario, base, &mut values)?;
        }
        for &(id, value) in set {
            if !value.is_finite() {
                let parameter = &self.parameters[id.0];
                return Err(Message::SetNotFinite.at(parameter.at, &[&parameter.name]));
            }
            values[id.0] = value;
        }
        Ok(values)
    }

    fn apply(&self, scenario: &Scenario, base: &[f64], values: &mut [f64]) -> Result<(), Diagnostic> {
        let known = |name: &str| match self.names.get(name) {
            Some(Name::Parameter(id)) => base.get(id.0).copied(),
            _ => None,
        };
        for (id, formula) in &scenario.values {
            let value = evaluate(&formula.expr, &known).unwrap_or(f64::NAN);
            if !value.is_finite() {
                let name = &self.parameters[id.0].name;
                return Err(Message::ValueNotFinite.at(formula.at, &[name, &scenario.name, &value]));
            }
            values[id.0] = value;
        }
        Ok(())
    }
}

fn overlaid<'m, T>(
    base: &'m [T],
    added: &'m [T],
    scenario: Option<&Scenario>,
    name: impl Fn(&T) -> &String,
) -> Vec<&'m T> {
    let left_out =
        |one: &T| scenario.is_some_and(|scenario| scenario.without.iter().any(|out| out.value == *name(one)));
    let replacement = |one: &T| added.iter().find(|new| name(new) == name(one));
    let kept = base.iter().filter(|one| !left_out(one)).map(|one| replacement(one).unwrap_or(one));
    let new = added.iter().filter(|new| base.iter().all(|one| name(one) != name(new)));
    kept.chain(new).collect()
}
