//! Models put together by hand, for tests that are not about reading files.

use std::collections::BTreeMap;

use restpoint::diag::{Location, Sources, Span};
use restpoint::expr::parse::parse;
use restpoint::model::{
    Accounting, Aim, Block, Entry, Formula, Harvest, Model, Name, Parameter, ParameterId, Placed, Process, Role,
    Scenario, Shorthand, ShorthandId, Species, SpeciesId, Term, TimeKind, When,
};

/// A model put together by hand; every formula stands in one text, so that places can be quoted from it.
pub(crate) struct Draft {
    /// The model so far.
    pub(crate) model: Model,
    /// Every text of it, line by line.
    pub(crate) text: String,
}

impl Draft {
    /// A model with these species (symbol, unit) and parameters (name, unit, value); an empty unit is none.
    pub(crate) fn new(time: &str, species: &[(&str, &str)], parameters: &[(&str, &str, f64)]) -> Self {
        let mut draft = Draft { model: empty(), text: String::new() };
        draft.model.time_unit = draft.placed(time);
        for (row, (symbol, unit)) in species.iter().enumerate() {
            let unit = draft.unit(unit);
            draft.model.names.insert((*symbol).to_owned(), Name::Species(SpeciesId(row)));
            draft.model.species.push(Species { unit, ..plain_species(symbol) });
        }
        for (row, (name, unit, value)) in parameters.iter().enumerate() {
            let unit = draft.unit(unit);
            draft.model.names.insert((*name).to_owned(), Name::Parameter(ParameterId(row)));
            draft.model.parameters.push(Parameter { unit, ..plain_parameter(name, *value) });
        }
        draft
    }

    fn unit(&mut self, text: &str) -> Option<Placed<String>> {
        (!text.is_empty()).then(|| self.placed(text))
    }

    fn placed(&mut self, text: &str) -> Placed<String> {
        Placed { value: text.to_owned(), at: self.write(text) }
    }

    fn write(&mut self, text: &str) -> Location {
        let start = self.text.len();
        self.text.push_str(text);
        self.text.push('\n');
        Location { span: Span::new(start, start + text.len()), ..Location::default() }
    }

    fn formula(&mut self, text: &str) -> Formula {
        let (expr, slips) = parse(text);
        assert!(slips.is_empty(), "{text}: {slips:?}");
        let at = self.write(text);
        let origin = (at.span.start..=at.span.end).map(|byte| byte as u32).collect();
        Formula { text: text.to_owned(), expr, at, origin }
    }

    /// The model, with its text as the source that places refer to.
    pub(crate) fn finish(mut self) -> (Model, String) {
        self.model.sources.add("model", self.text.clone());
        (self.model, self.text)
    }

    fn terms(&mut self, terms: &[(&str, &str)]) -> Vec<Term> {
        let term = |(symbol, text): &(&str, &str)| {
            let row = self.model.species.iter().position(|species| species.symbol == *symbol);
            assert!(row.is_some(), "no species {symbol}");
            Term {
                species: SpeciesId(row.unwrap_or_default()),
                key_at: Location::default(),
                formula: self.formula(text),
            }
        };
        terms.iter().map(term).collect()
    }

    /// Adds a named formula.
    pub(crate) fn shorthand(mut self, name: &str, text: &str) -> Self {
        let formula = self.formula(text);
        self.model.names.insert(name.to_owned(), Name::Shorthand(ShorthandId(self.model.shorthand.len())));
        self.model.shorthand.push(Shorthand { name: name.to_owned(), at: Location::default(), formula });
        self
    }

    /// Adds a process.
    pub(crate) fn process(mut self, rate: &str, effect: &[(&str, &str)]) -> Self {
        let process = Process {
            name: "process".to_owned(),
            at: Location::default(),
            rate: self.formula(rate),
            effect: self.terms(effect),
        };
        self.model.processes.push(process);
        self
    }

    /// Sets the rates of change.
    pub(crate) fn change(mut self, terms: &[(&str, &str)]) -> Self {
        self.model.change = self.terms(terms);
        self
    }

    /// Makes it a map.
    pub(crate) fn next(mut self, terms: &[(&str, &str)]) -> Self {
        self.model.time = TimeKind::Discrete { step: 1.0 };
        self.model.next = self.terms(terms);
        self
    }

    /// Adds a harvest; an empty cost is none.
    pub(crate) fn harvest(mut self, amounts: &[(&str, &str)], price: &[(&str, &str)], cost: &str) -> Self {
        let harvest = Harvest {
            name: "harvest".to_owned(),
            at: Location::default(),
            when: When::After,
            accounting: Accounting::Takes,
            amounts: self.terms(amounts),
            price: self.terms(price),
            cost: (!cost.is_empty()).then(|| self.formula(cost)),
        };
        self.model.harvest.push(harvest);
        self
    }

    /// Adds a Lotka-Volterra block.
    pub(crate) fn block(mut self, growth: &[&str], matrix: &[&str]) -> Self {
        let growth = growth.iter().map(|text| Entry::Formula(Box::new(self.formula(text)))).collect();
        let matrix = matrix.iter().map(|text| Entry::Formula(Box::new(self.formula(text)))).collect();
        self.model.block = Some(Block { at: Location::default(), growth, matrix });
        self
    }

    /// Adds a scenario that sets one parameter.
    pub(crate) fn scenario(mut self, parameter: usize, text: &str) -> Self {
        let values = vec![(ParameterId(parameter), self.formula(text))];
        self.model.scenarios.push(Scenario {
            name: "plan".to_owned(),
            at: Location::default(),
            values,
            without: Vec::new(),
            harvest: Vec::new(),
            processes: Vec::new(),
        });
        self
    }
}

fn plain_species(symbol: &str) -> Species {
    Species {
        name: symbol.to_owned(),
        symbol: symbol.to_owned(),
        at: Location::default(),
        unit: None,
        lower: 0.0,
        upper: None,
        population: None,
        role: Role::Population,
        aim: Aim::Keep,
    }
}

fn plain_parameter(name: &str, value: f64) -> Parameter {
    Parameter {
        name: name.to_owned(),
        at: Location::default(),
        value,
        value_at: Location::default(),
        unit: None,
        range: None,
        draw: None,
        min: None,
        max: None,
        note: None,
        control: false,
    }
}

fn empty() -> Model {
    let nowhere = Placed { value: String::new(), at: Location::default() };
    Model {
        title: nowhere.clone(),
        note: None,
        time_unit: nowhere,
        time: TimeKind::Continuous,
        species: Vec::new(),
        parameters: Vec::new(),
        shorthand: Vec::new(),
        processes: Vec::new(),
        change: Vec::new(),
        next: Vec::new(),
        harvest: Vec::new(),
        block: None,
        now: Vec::new(),
        scenarios: Vec::new(),
        correlations: Vec::new(),
        draws: None,
        sketch: None,
        names: BTreeMap::new(),
        sources: Sources::default(),
    }
}
