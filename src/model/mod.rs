//! The checked model: what a model file says, with every name known and every number finite.
//!
//! A [`Model`] that exists is sound: `load` makes one or says everything that is wrong. It holds formulas as syntax
//! trees with their places; `system` assembles them into rows of the graph. A [`Scenario`] is a small overlay on a model,
//! never a second model; `overlay` looks through it.
//!
//! From the bottom up: `events` (YAML's parser), `tree` (nodes with places, within limits), `yaml` (types of values),
//! `follow` (from a value back to its bytes), `slips` and `messages` (what is said), `findings` (what was said), `load`
//! (a module for each section).

pub mod amend;
pub mod correlated;
mod events;
mod findings;
mod follow;
pub mod lint;
pub mod load;
mod messages;
mod original;
mod overlay;
mod slips;
pub mod system;
mod tree;
pub mod units;
mod yaml;

pub use original::Original;

use std::collections::BTreeMap;

use crate::diag::{Location, Sources, Span};
use crate::expr::ast::Expr;

/// Index of a species; the order in the file is the order of rows everywhere.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct SpeciesId(pub usize);

/// Index of a parameter.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ParameterId(pub usize);

/// Index of a shorthand.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ShorthandId(pub usize);

/// What a name in a formula stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Name {
    /// The abundance of a species.
    Species(SpeciesId),
    /// A parameter's value.
    Parameter(ParameterId),
    /// A named sub-expression.
    Shorthand(ShorthandId),
}

/// A text from a file, with its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed<T> {
    /// The thing itself.
    pub value: T,
    /// Where it stands.
    pub at: Location,
}

/// A formula from a file. Spans inside `expr` count bytes of `text`; [`Formula::locate`] turns them into places.
#[derive(Clone, Debug, PartialEq)]
pub struct Formula {
    /// The formula as the file's scalar holds it, after YAML has unfolded it.
    pub text: String,
    /// Its syntax tree.
    pub expr: Expr,
    /// Where the whole scalar stands.
    pub at: Location,
    /// For each byte of `text`, and one past the last, the byte of the source that it came from; empty where the source
    /// could not be followed byte by byte (then every span is the whole scalar).
    pub origin: Vec<u32>,
}

impl Formula {
    /// The place in the source of a span of this formula's text.
    pub fn locate(&self, span: Span) -> Location {
        match (self.origin.get(span.start), span.end.checked_sub(1).and_then(|last| self.origin.get(last))) {
            (Some(&start), Some(&last)) if span.start < span.end => {
                let end = self.origin.get(span.end).map_or(last + 1, |&end| end.clamp(last + 1, last + 4));
                Location { source: self.at.source, span: Span::new(start as usize, end as usize) }
            }
            (Some(&start), _) => Location { source: self.at.source, span: Span::new(start as usize, start as usize) },
            _ => self.at,
        }
    }
}

/// Whether time runs or steps.
#[derive(Clone, Debug, PartialEq)]
pub enum TimeKind {
    /// Rates of change.
    Continuous,
    /// A map; one application is `step` units of time.
    Discrete {
        /// Units of time per application, positive.
        step: f64,
    },
}

/// What a species is to the community.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Role {
    /// One of the populations that the advice is about.
    #[default]
    Population,
    /// A fishing or hunting fleet; left out of coexistence, extinction and yield wording.
    Fleet,
    /// A resource such as nutrient; left out likewise.
    Resource,
}

/// What management wants of a species.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Aim {
    /// It is to persist.
    #[default]
    Keep,
    /// It is a pest, to be removed.
    Remove,
}

/// One row of the state.
#[derive(Clone, Debug, PartialEq)]
pub struct Species {
    /// The long name: the key in the file.
    pub name: String,
    /// The symbol that formulas use.
    pub symbol: String,
    /// Where it was declared.
    pub at: Location,
    /// Unit of abundance, as written.
    pub unit: Option<Placed<String>>,
    /// Lower side of the search box.
    pub lower: f64,
    /// Upper side of the search box as given; without one, `system` chooses it or reports that it cannot.
    pub upper: Option<f64>,
    /// The group that it belongs to: stages, ages, sexes or patches of one population.
    pub population: Option<String>,
    /// What it is.
    pub role: Role,
    /// What is wanted of it.
    pub aim: Aim,
}

/// A distribution that a parameter is drawn from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Draw {
    /// Mean = value.
    Normal {
        /// Standard deviation, in the parameter's unit, positive.
        sd: f64,
    },
    /// Median = value.
    Lognormal {
        /// Coefficient of variation, no unit, positive.
        cv: f64,
    },
    /// Over the range.
    Uniform,
    /// Over the range, mode = value.
    Triangular,
    /// Over the range.
    Beta {
        /// First shape, positive.
        a: f64,
        /// Second shape, positive.
        b: f64,
    },
}

/// A number with a name.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// The name that formulas use.
    pub name: String,
    /// Where it was declared.
    pub at: Location,
    /// The base value.
    pub value: f64,
    /// Where the value stands.
    pub value_at: Location,
    /// Unit, as written.
    pub unit: Option<Placed<String>>,
    /// What is plausible, low then high.
    pub range: Option<Placed<[f64; 2]>>,
    /// How it is drawn; a range alone means uniform.
    pub draw: Option<Placed<Draw>>,
    /// Hard lower limit.
    pub min: Option<f64>,
    /// Hard upper limit.
    pub max: Option<f64>,
    /// A remark.
    pub note: Option<String>,
    /// Whether management can set it.
    pub control: bool,
}

/// A named sub-expression.
#[derive(Clone, Debug, PartialEq)]
pub struct Shorthand {
    /// The name that formulas use.
    pub name: String,
    /// Where it was declared.
    pub at: Location,
    /// What it stands for.
    pub formula: Formula,
}

/// A formula for one species.
#[derive(Clone, Debug, PartialEq)]
pub struct Term {
    /// Which species.
    pub species: SpeciesId,
    /// Where the species' key stands.
    pub key_at: Location,
    /// The formula.
    pub formula: Formula,
}

/// Something that goes on in the community: a rate, and what one unit of it does to each species.
#[derive(Clone, Debug, PartialEq)]
pub struct Process {
    /// Its name: the key in the file.
    pub name: String,
    /// Where the name stands.
    pub at: Location,
    /// How fast it goes.
    pub rate: Formula,
    /// What one unit of it does.
    pub effect: Vec<Term>,
}

/// When a discrete model's harvest is taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum When {
    /// Each harvested x in `next` is replaced by x − takes.
    Before,
    /// Subtracted from next.
    #[default]
    After,
}

/// Whether a harvest changes the equations.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Accounting {
    /// `takes`: subtracted from the species.
    Takes,
    /// `counts`: records a yield that the equations already contain.
    Counts,
}

/// Something that takes from one or more species; what yield sums.
#[derive(Clone, Debug, PartialEq)]
pub struct Harvest {
    /// Its name: the key in the file.
    pub name: String,
    /// Where the name stands.
    pub at: Location,
    /// When it is taken; of account in discrete models only.
    pub when: When,
    /// Whether the equations change.
    pub accounting: Accounting,
    /// How much of each species, per unit of time or per step.
    pub amounts: Vec<Term>,
    /// Worth of one unit of each species.
    pub price: Vec<Term>,
    /// Cost per unit of time.
    pub cost: Option<Formula>,
}

/// One entry of a Lotka–Volterra block.
#[derive(Clone, Debug, PartialEq)]
pub enum Entry {
    /// A plain number.
    Number(f64),
    /// A formula of parameters; boxed, because a table of a thousand species has a million entries, nearly all numbers.
    Formula(Box<Formula>),
}

/// A Lotka–Volterra block: adds `x_i (growth_i + Σ_j matrix_ij x_j)` to row i.
#[derive(Clone, Debug, PartialEq)]
pub struct Block {
    /// Where the block stands.
    pub at: Location,
    /// One entry a species, in species order.
    pub growth: Vec<Entry>,
    /// Row by row: row = who is affected; species × species entries.
    pub matrix: Vec<Entry>,
}

/// Where a stock stands today.
#[derive(Clone, Debug, PartialEq)]
pub struct Survey {
    /// Which species.
    pub species: SpeciesId,
    /// Where it is said.
    pub at: Location,
    /// Estimated abundance.
    pub value: f64,
    /// Coefficient of variation of the estimate, no unit.
    pub cv: Option<f64>,
}

/// A rank correlation between two parameters.
#[derive(Clone, Debug, PartialEq)]
pub struct Correlation {
    /// Which two.
    pub between: [ParameterId; 2],
    /// Spearman's rank correlation, between −1 and 1.
    pub rank: f64,
    /// Where it is said.
    pub at: Location,
}

/// Joint draws from a file: one a row.
#[derive(Clone, Debug, PartialEq)]
pub struct DrawTable {
    /// Where the file is named.
    pub at: Location,
    /// The file, as named.
    pub path: String,
    /// Which parameter each column is.
    pub columns: Vec<ParameterId>,
    /// Row after row.
    pub values: Vec<f64>,
}

/// An overlay on the model: what one plan changes.
#[derive(Clone, Debug, PartialEq)]
pub struct Scenario {
    /// Its name: the key in the file, or `base` where the file has none.
    pub name: String,
    /// Where the name stands; the title where the file has no scenarios.
    pub at: Location,
    /// New values: a number or a formula of the base values.
    pub values: Vec<(ParameterId, Formula)>,
    /// Processes or harvests left out.
    pub without: Vec<Placed<String>>,
    /// Harvests added, or replacing the like-named ones wholly.
    pub harvest: Vec<Harvest>,
    /// Processes added, or replacing the like-named ones.
    pub processes: Vec<Process>,
}

/// A checked model.
#[derive(Clone, Debug, PartialEq)]
pub struct Model {
    /// One line.
    pub title: Placed<String>,
    /// A remark.
    pub note: Option<String>,
    /// Unit of time, as written.
    pub time_unit: Placed<String>,
    /// Whether time runs or steps.
    pub time: TimeKind,
    /// At least one.
    pub species: Vec<Species>,
    /// In the file's order.
    pub parameters: Vec<Parameter>,
    /// In an order in which each uses only earlier ones.
    pub shorthand: Vec<Shorthand>,
    /// In the file's order.
    pub processes: Vec<Process>,
    /// Added to rates of change.
    pub change: Vec<Term>,
    /// The next state; every species exactly once in a discrete model, else empty.
    pub next: Vec<Term>,
    /// In the file's order.
    pub harvest: Vec<Harvest>,
    /// The Lotka–Volterra block.
    pub block: Option<Block>,
    /// Where the stocks stand today.
    pub now: Vec<Survey>,
    /// At least one.
    pub scenarios: Vec<Scenario>,
    /// Rank correlations of the draws.
    pub correlations: Vec<Correlation>,
    /// Joint draws from a file.
    pub draws: Option<DrawTable>,
    /// Default axes of the sketch.
    pub sketch: Option<[SpeciesId; 2]>,
    /// What every name in a formula stands for.
    pub names: BTreeMap<String, Name>,
    /// The texts that all places refer to.
    pub sources: Sources,
}
