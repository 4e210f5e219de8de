//! Model files put together from formulas, and what comes of reading them.
//!
//! [`ModelText`] is what one would type; [`ModelText::read`] takes it through the loader, so that every test with models
//! of its own tests the loader as well.

use std::fmt::Write as _;

use restpoint::diag::render::render;
use restpoint::expr::tape::number::Domain;
use restpoint::model::load::{NoFiles, load};
use restpoint::model::system::System;
use restpoint::model::{Model, TimeKind};
use restpoint::num::interval::Interval;

/// The parts of a model file. Numbers are decimal text, as they are to stand in the file.
#[derive(Clone, Debug, Default)]
pub struct ModelText {
    pub title: String,
    /// Whether the formulas give the next state rather than rates of change.
    pub discrete: bool,
    /// Symbol, lower and upper side of the search box.
    pub species: Vec<(String, String, String)>,
    /// Name and value.
    pub parameters: Vec<(String, String)>,
    /// Name and formula.
    pub shorthand: Vec<(String, String)>,
    /// One formula a species; or none.
    pub rows: Vec<String>,
    /// A Lotka–Volterra block.
    pub block: Option<String>,
    /// Name and formula of yields that the rows contain already, counted on the first species.
    pub counts: Vec<(String, String)>,
    /// Name, and new values. Where there is one, [`ModelText::read`] has the unchanged model first, as `base`.
    pub scenarios: Vec<(String, Vec<(String, String)>)>,
}

/// A point, each coordinate within bounds.
pub type Point = Vec<Interval>;

impl ModelText {
    /// A continuous model of these rows, each species `symbol` with its formula, all within [0, `upper`].
    pub fn new(title: &str, upper: &str, rows: &[(&str, &str)]) -> Self {
        let species = rows.iter().map(|(symbol, _)| ((*symbol).to_owned(), "0".to_owned(), upper.to_owned()));
        Self {
            title: title.to_owned(),
            species: species.collect(),
            rows: rows.iter().map(|(_, formula)| (*formula).to_owned()).collect(),
            ..Self::default()
        }
    }

    /// The same with these parameters.
    pub fn with(mut self, parameters: &[(&str, &str)]) -> Self {
        self.parameters.extend(parameters.iter().map(|(name, value)| ((*name).to_owned(), (*value).to_owned())));
        self
    }

    /// The file.
    pub fn yaml(&self) -> String {
        let mut yaml = format!("title: {}\n", quoted(&self.title));
        yaml += if self.discrete { "time: {unit: step, step: 1}\n" } else { "time: yr\n" };
        yaml += "species:\n";
        for (symbol, lower, upper) in &self.species {
            let _ = writeln!(yaml, "  {symbol}: {{lower: {lower}, upper: {upper}}}");
        }
        section(&mut yaml, "parameters", &self.parameters);
        section(&mut yaml, "shorthand", &self.shorthand);
        let rows: Vec<_> = self.species.iter().map(|(symbol, ..)| symbol.clone()).zip(self.rows.clone()).collect();
        section(&mut yaml, if self.discrete { "next" } else { "change" }, &rows);
        if let Some(block) = &self.block {
            let _ = writeln!(yaml, "lotka_volterra: {block}");
        }
        let counts = |(name, formula): &(String, String)| {
            (name.clone(), format!("{{counts: {{{}: {}}}}}", self.species[0].0, quoted(formula)))
        };
        section(&mut yaml, "harvest", &self.counts.iter().map(counts).collect::<Vec<_>>());
        if !self.scenarios.is_empty() {
            yaml += "scenarios:\n  base: {}\n";
        }
        for (name, values) in &self.scenarios {
            let values: Vec<String> = values.iter().map(|(name, value)| format!("{name}: {value}")).collect();
            let _ = writeln!(yaml, "  {}: {{values: {{{}}}}}", quoted(name), values.join(", "));
        }
        yaml
    }

    /// The model and its equations.
    pub fn read(&self) -> Read {
        let yaml = self.yaml();
        let (model, sources, found) = load("model.yaml", yaml.as_bytes(), &NoFiles);
        let shown = |found: &[_]| found.iter().map(|found| render(found, &sources, false)).collect::<String>();
        let model = model.unwrap_or_else(|| panic!("{}\n{yaml}", shown(&found)));
        let system = System::new(&model, &[]).unwrap_or_else(|found| panic!("{}\n{yaml}", shown(&found)));
        Read { model, system }
    }
}

fn section(yaml: &mut String, name: &str, entries: &[(String, String)]) {
    if !entries.is_empty() {
        let _ = writeln!(yaml, "{name}:");
    }
    for (key, value) in entries {
        let _ = writeln!(yaml, "  {key}: {value}");
    }
}

fn quoted(text: &str) -> String {
    format!("\"{}\"", text.replace('\\', "\\\\").replace('"', "\\\""))
}

/// A model file that was read.
pub struct Read {
    pub model: Model,
    pub system: System,
}

/// What the equations are at a point: what vanishes at an equilibrium, and its derivatives.
pub struct Evaluation {
    pub domain: Domain,
    /// Rates of change; in a discrete model the next state less the present one.
    pub rows: Vec<Interval>,
    /// Row by row the derivatives of the rates, or of the next state.
    pub jacobian: Vec<Vec<Interval>>,
}

impl Read {
    /// Encloses the equations of a scenario over a box.
    pub fn at(&self, scenario: usize, point: &[Interval]) -> Evaluation {
        let plan = &self.system.plans[scenario];
        let tape = plan.tape(&self.system.graph);
        let values: Vec<Interval> = plan.values.iter().map(|&value| Interval::point(value)).collect();
        let mut run = tape.start_gradient(&values);
        let domain = run.at(point);
        let discrete = matches!(self.model.time, TimeKind::Discrete { .. });
        let row = |i: usize| if discrete { *run.output(i) - point[i] } else { *run.output(i) };
        let gradient = |i| run.gradient(i).map_or_else(|| vec![Interval::ZERO; point.len()], <[_]>::to_vec);
        Evaluation {
            domain,
            rows: (0..point.len()).map(row).collect(),
            jacobian: (0..point.len()).map(gradient).collect(),
        }
    }
}
