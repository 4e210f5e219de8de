//! Formulas → nodes, with every name's meaning.

use crate::diag::Diagnostic;
use crate::expr::ast::Expr;
use crate::expr::graph::{Graph, NodeId};
use crate::model::{Entry, Formula, Model, Name, SpeciesId, Term};

use super::MOST_NODES;

/// Translates the formulas of one model into one graph.
pub(super) struct Translator<'g> {
    model: &'g Model,
    pub(super) graph: &'g mut Graph,
    /// What each species' symbol means: its state, or what a harvest taken before leaves of it.
    states: Vec<NodeId>,
    /// In the model's order, in which each uses only earlier ones.
    shorthand: Vec<NodeId>,
}

impl<'g> Translator<'g> {
    pub(super) fn new(model: &'g Model, graph: &'g mut Graph) -> Self {
        let states = (0..model.species.len()).map(|i| graph.state(i)).collect();
        let mut translator = Self { model, graph, states, shorthand: Vec::new() };
        translator.expand_shorthand();
        translator
    }

    fn expand_shorthand(&mut self) {
        self.shorthand.clear();
        for shorthand in &self.model.shorthand {
            let node = self.expr(&shorthand.formula.expr);
            self.shorthand.push(node);
        }
    }

    /// From here on a species' symbol means what is left after `amount` is taken.
    pub(super) fn take_before(&mut self, species: SpeciesId, amount: NodeId) {
        self.states[species.0] = self.graph.sub(self.states[species.0], amount);
        self.expand_shorthand();
    }

    /// The node of a formula.
    pub(super) fn formula(&mut self, formula: &Formula) -> Result<NodeId, Vec<Diagnostic>> {
        let node = self.expr(&formula.expr);
        if self.graph.len() > MOST_NODES {
            let message = format!("the model's formulas have more than {MOST_NODES} different parts");
            return Err(vec![
                Diagnostic::error(formula.at, message)
                    .expected("fewer or simpler formulas")
                    .help("use a lotka_volterra block for a large community, or shorthand for what repeats"),
            ]);
        }
        Ok(node)
    }

    /// The nodes of a formula for each of some species.
    pub(super) fn terms(&mut self, terms: &[Term]) -> Result<Vec<(SpeciesId, NodeId)>, Vec<Diagnostic>> {
        terms.iter().map(|term| Ok((term.species, self.formula(&term.formula)?))).collect()
    }

    /// The node of a block's entry.
    pub(super) fn entry(&mut self, entry: &Entry) -> Result<NodeId, Vec<Diagnostic>> {
        match entry {
            Entry::Number(value) => Ok(self.graph.constant(*value)),
            Entry::Formula(formula) => self.formula(formula),
        }
    }

    fn expr(&mut self, expr: &Expr) -> NodeId {
        let (model, states, shorthand) = (self.model, &self.states, &self.shorthand);
        self.graph.read(expr, &mut |graph, name| match model.names.get(name) {
            Some(Name::Species(species)) => states[species.0],
            Some(Name::Parameter(parameter)) => graph.parameter(parameter.0),
            Some(Name::Shorthand(id)) => shorthand[id.0],
            // A checked model has no unknown names.
            None => graph.zero(),
        })
    }
}
