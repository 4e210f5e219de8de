//! What every formula of a model must be in.
//!
//! Abundance per time for what changes a species, abundance for the next state, money that agrees with itself for prices
//! and costs, the parameter's own unit for a scenario's value. A formula that is one typed number fits its place: the
//! file has no way to give it a unit. To check a new kind of formula, add it to [`Walker::whole_model`].

use super::infer::{Quantity, Walker, times};
use super::message::{Piece, Reason};
use super::solve::Term;
use crate::expr::ast::{BinaryOp, Expr, ExprKind};
use crate::model::{self, Block, Entry, Formula, Harvest, Process, Scenario, SpeciesId, TimeKind};

impl<'m> Walker<'m> {
    /// Checks every formula of the model.
    pub(super) fn whole_model(&mut self) {
        let model = self.model;
        model.shorthand.iter().for_each(|shorthand| self.define(&shorthand.formula));
        model.processes.iter().for_each(|process| self.process(process));
        self.terms(&model.change, "the rate of change of", Self::rate_of_change);
        self.terms(&model.next, "the next state of", Self::abundance);
        model.harvest.iter().for_each(|harvest| self.harvest(harvest));
        if let Some(block) = &model.block {
            self.block(block);
        }
        model.scenarios.iter().for_each(|scenario| self.scenario(scenario));
    }

    fn define(&mut self, formula: &'m Formula) {
        let value = self.constant(&formula.expr);
        self.constants.push(value);
        let quantity = self.formula(formula);
        self.shorthand.push(quantity);
    }

    fn terms(&mut self, terms: &'m [model::Term], place: &str, due: fn(&Self, SpeciesId) -> Quantity) {
        for term in terms {
            let want = due(self, term.species);
            let place = format!("{place} {}", self.symbol(term.species));
            self.expect(&term.formula, &want, &place);
        }
    }

    /// An effect that is a typed number counts units of its species, so the first of them says what the rate is in.
    fn process(&mut self, process: &'m Process) {
        let effects: Vec<Quantity> = process.effect.iter().map(|term| self.formula(&term.formula)).collect();
        let counted = effects.iter().position(|effect| matches!(effect, Quantity::Bare));
        let rate = match counted.and_then(|place| process.effect.get(place)) {
            Some(term) => {
                let want = self.rate_of_change(term.species);
                self.expect(&process.rate, &want, &format!("the rate of change of {}", self.symbol(term.species)))
            }
            None => self.formula(&process.rate),
        };
        for (place, (term, effect)) in process.effect.iter().zip(&effects).enumerate() {
            let want = times(self.rate_of_change(term.species), &rate, -1.0);
            let (Quantity::Of(want), false) = (want, counted == Some(place)) else { continue };
            let one = Term::one();
            let got = match effect {
                Quantity::Of(got) => got,
                Quantity::Bare => &one,
                Quantity::Free => continue,
            };
            let place = format!("what one unit of \"{}\" does to {}", process.name, self.symbol(term.species));
            self.require(Piece::whole(&term.formula), got, &want, &Reason::Place(place));
        }
    }

    fn harvest(&mut self, harvest: &'m Harvest) {
        let amounts: Vec<Quantity> = harvest
            .amounts
            .iter()
            .map(|term| {
                let want = self.rate_of_change(term.species);
                self.expect(&term.formula, &want, &format!("what is taken of {}", self.symbol(term.species)))
            })
            .collect();
        let money = Quantity::Of(self.solver.unknown("money"));
        for price in &harvest.price {
            let amount = harvest.amounts.iter().position(|amount| amount.species == price.species);
            let amount = amount.and_then(|place| amounts.get(place)).cloned().unwrap_or(Quantity::Free);
            let want = times(money.clone(), &amount, -1.0);
            self.expect(&price.formula, &want, &format!("a price per unit of {}", self.symbol(price.species)));
        }
        match (&harvest.cost, &self.model.time) {
            (Some(cost), TimeKind::Continuous) => self.expect(cost, &money, "price times takes"),
            // A cost is per unit of time, takes are per step: nothing can be said without the step's unit.
            (Some(cost), TimeKind::Discrete { .. }) => self.formula(cost),
            (None, _) => Quantity::Free,
        };
    }

    fn block(&mut self, block: &'m Block) {
        let per_time = times(Quantity::Of(Term::one()), &self.time, -1.0);
        let count = self.model.species.len();
        for (row, entry) in block.growth.iter().enumerate() {
            let place = format!("the growth of {}", self.symbol(SpeciesId(row)));
            self.entry(entry, &per_time, &place);
        }
        for (place, entry) in block.matrix.iter().enumerate() {
            let (row, column) = (SpeciesId(place / count.max(1)), SpeciesId(place % count.max(1)));
            let want = times(per_time.clone(), &self.abundance(column), -1.0);
            let place = format!("the effect of {} on {}", self.symbol(column), self.symbol(row));
            self.entry(entry, &want, &place);
        }
    }

    fn entry(&mut self, entry: &'m Entry, want: &Quantity, place: &str) {
        if let Entry::Formula(formula) = entry {
            self.expect(formula, want, place);
        }
    }

    fn scenario(&mut self, scenario: &'m Scenario) {
        for (id, formula) in &scenario.values {
            let want = self.parameters.get(id.0).cloned().unwrap_or(Quantity::Free);
            let name = self.model.parameters.get(id.0).map_or("", |parameter| &parameter.name);
            self.expect(formula, &want, &format!("\"{name}\""));
        }
        scenario.processes.iter().for_each(|process| self.process(process));
        scenario.harvest.iter().for_each(|harvest| self.harvest(harvest));
    }

    /// Requires each term of a formula's outermost sum to be in `want`; gives `want` back where all are.
    fn expect(&mut self, formula: &'m Formula, want: &Quantity, place: &str) -> Quantity {
        let mut terms = Vec::new();
        outermost_terms(&formula.expr, &mut terms);
        let is_alone = terms.len() == 1;
        let mut all_fit = true;
        for expr in terms {
            let piece = Piece { formula, expr };
            let one = Term::one();
            let quantity = self.unit_of(piece);
            let got = match &quantity {
                Quantity::Of(got) => got,
                Quantity::Bare if !is_alone => &one,
                Quantity::Bare | Quantity::Free => continue,
            };
            if let Quantity::Of(want) = want {
                all_fit &= self.require(piece, got, want, &Reason::Place(place.to_owned()));
            }
        }
        if all_fit { want.clone() } else { Quantity::Free }
    }

    fn abundance(&self, species: SpeciesId) -> Quantity {
        self.species.get(species.0).cloned().unwrap_or(Quantity::Free)
    }

    /// Abundance per time; in a map, abundance per step.
    fn rate_of_change(&self, species: SpeciesId) -> Quantity {
        match self.model.time {
            TimeKind::Continuous => times(self.abundance(species), &self.time, -1.0),
            TimeKind::Discrete { .. } => self.abundance(species),
        }
    }

    fn symbol(&self, species: SpeciesId) -> &'m str {
        self.model.species.get(species.0).map_or("", |species| &species.symbol)
    }
}

fn outermost_terms<'e>(expr: &'e Expr, terms: &mut Vec<&'e Expr>) {
    match &expr.kind {
        ExprKind::Binary(BinaryOp::Add | BinaryOp::Sub, a, b) => {
            outermost_terms(a, terms);
            outermost_terms(b, terms);
        }
        ExprKind::Neg(a) => outermost_terms(a, terms),
        _ => terms.push(expr),
    }
}
