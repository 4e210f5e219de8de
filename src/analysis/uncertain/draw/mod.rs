//! Draws of the parameters, and of today's stocks: each by its number alone.
//!
//! Start at [`Plan::new`]; [`Plan::draw`] makes a draw without allocating. Points are made in the unit cube and
//! taken through the inverse of each parameter's distribution. To add a distribution, give its law in `marginal`.
//!
//! What stays of the even spread of points: every parameter that is not correlated keeps its strata of a Latin hypercube,
//! and of correlated ones the first in the file; the others are mixtures of several coordinates and do not (to restore
//! them, Iman & Conover 1982 sort all draws at once, which parts of a run cannot). Their distributions, and intervals
//! over the independent randomisations, are right all the same.

mod marginal;
mod points;

use crate::model::correlated::{Correlated, Impossible};
use crate::model::{DrawTable, Model, ParameterId, SpeciesId};
use crate::num::normal;
use crate::num::quantiles::Quantiles;

use super::interval::{self, BATCHES, Counted};
use marginal::Marginal;
use points::{Point, Points};

/// Independent randomisations of a Latin hypercube or of a Sobol' sequence; draw i belongs to number i modulo this.
pub const RANDOMISATIONS: u64 = 16;

/// Draws where nobody says how many.
pub const USUAL_DRAWS: u64 = 10_000;

/// How points are chosen.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sampling {
    /// Independent of each other (Philox: Salmon et al. 2011).
    Random,
    /// Latin hypercubes (McKay, Beckman & Conover 1979): of the n points of each randomisation, one in each n-th of every
    /// coordinate.
    Latin,
    /// Scrambled Sobol' sequences (Owen 1995; Matoušek 1998); above 512 coordinates the others are random.
    Sobol,
}

/// How draws hang together, which decides how sure is what is counted over them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Way {
    /// They do not.
    Independent,
    /// Within each of [`RANDOMISATIONS`] groups, which do not.
    Randomised,
    /// Each may with its neighbours in the order of the file; `effective` as many independent ones would tell as much of
    /// the mean of the worst column.
    InOrder {
        /// No more than there are draws.
        effective: f64,
    },
}

/// Why nothing can be drawn.
#[derive(Clone, Debug, PartialEq)]
pub enum Unplanned {
    /// No parameter and no stock is uncertain.
    NothingUncertain,
    /// The rank correlations cannot hold together.
    Impossible(Impossible),
}

/// A number that is drawn.
#[derive(Clone, Debug)]
struct Drawn {
    what: Slot,
    marginal: Marginal,
    /// Whether it is correlated with another.
    correlated: bool,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Slot {
    Parameter(ParameterId),
    Stock(SpeciesId),
}

/// All draws of a run.
#[derive(Clone, Debug)]
pub struct Plan {
    draws: u64,
    way: Way,
    drawn: Vec<Drawn>,
    correlated: Correlated,
    table: Option<DrawTable>,
    points: Points,
}

impl Plan {
    /// The plan of so many `draws` of a model's parameters, and of its stocks that a survey gives a coefficient of variation.
    ///
    /// Where the model names a file of joint draws, those are its rows in their order: all of them, or so many as are
    /// asked for, evenly spaced; never one twice. What is not a column is then drawn at random, whatever `sampling` says.
    ///
    /// # Errors
    /// Why nothing can be drawn.
    pub fn new(model: &Model, sampling: Sampling, seed: u64, draws: Option<u64>) -> Result<Self, Unplanned> {
        Self::with_copies(model, sampling, seed, draws, 1)
    }

    /// As [`new`](Self::new), with room for so many independent points a draw.
    pub(super) fn with_copies(
        model: &Model,
        sampling: Sampling,
        seed: u64,
        draws: Option<u64>,
        copies: usize,
    ) -> Result<Self, Unplanned> {
        let correlated = Correlated::of(&model.correlations).map_err(Unplanned::Impossible)?;
        let drawn = drawn(model, &correlated);
        let table = model.draws.clone().filter(|table| !table.columns.is_empty());
        if drawn.is_empty() && table.is_none() {
            return Err(Unplanned::NothingUncertain);
        }
        let rows = table.as_ref().map(|table| (table.values.len() / table.columns.len()) as u64);
        let draws = rows.map_or(draws.unwrap_or(USUAL_DRAWS), |rows| draws.unwrap_or(rows).min(rows));
        let sampling = if table.is_some() { Sampling::Random } else { sampling };
        let points = Points::new(sampling, seed, draws, drawn.len() * copies);
        let way = match (&table, sampling) {
            (Some(_), _) => Way::InOrder { effective: draws as f64 },
            (None, Sampling::Random) => Way::Independent,
            (None, Sampling::Latin | Sampling::Sobol) => Way::Randomised,
        };
        let mut plan = Self { draws, way, drawn, correlated, table, points };
        if let Way::InOrder { .. } = way {
            plan.way = Way::InOrder { effective: plan.effective() };
        }
        Ok(plan)
    }

    /// How many draws there are.
    #[must_use]
    pub fn draws(&self) -> u64 {
        self.draws
    }

    /// How they hang together.
    #[must_use]
    pub fn way(&self) -> Way {
        self.way
    }

    /// The parameters that are drawn, in the order of the file.
    #[must_use]
    pub fn parameters(&self) -> Vec<ParameterId> {
        let columns = self.table.iter().flat_map(|table| table.columns.iter().copied());
        let drawn = self.drawn.iter().filter_map(|drawn| match drawn.what {
            Slot::Parameter(id) => Some(id),
            Slot::Stock(_) => None,
        });
        let mut all: Vec<ParameterId> = columns.chain(drawn).collect();
        all.sort_unstable();
        all
    }

    /// Whether some parameters are correlated, or drawn together from a file.
    #[must_use]
    pub fn is_joint(&self) -> bool {
        self.table.is_some() || !self.correlated.parameters.is_empty()
    }

    /// How many groups draws fall into, over which intervals are found.
    #[must_use]
    pub fn groups(&self) -> usize {
        match self.way {
            Way::Independent => 1,
            Way::Randomised => RANDOMISATIONS as usize,
            Way::InOrder { .. } => BATCHES.min(self.draws.max(1)) as usize,
        }
    }

    /// The group of a draw.
    #[must_use]
    pub fn group(&self, index: u64) -> usize {
        match self.way {
            Way::Independent => 0,
            Way::Randomised => (index % RANDOMISATIONS) as usize,
            Way::InOrder { .. } => scaled(index, self.groups() as u64, self.draws) as usize,
        }
    }

    /// The draw of that number: sets those of `values`, one a parameter, and of `now`, one a species, that are drawn, and
    /// leaves the others. It depends on nothing but the plan, `index` and `attempt`.
    ///
    /// A later `attempt`, for a draw that leaves the model undefined, is a random point in place of the planned one. The
    /// columns of a file are the same in every attempt.
    ///
    /// # Panics
    /// If `values` or `now` is not as long as the model says.
    pub fn draw(&self, index: u64, attempt: u64, values: &mut [f64], now: &mut [f64]) {
        if let Some(table) = &self.table {
            self.row(table, index, values);
        }
        self.place(self.points.point(index, attempt), |j| j, values, now);
    }

    /// As [`draw`](Self::draw) without a file, coordinate j being number `pick(j)` of the point.
    pub(super) fn draw_picked(&self, index: u64, pick: impl Fn(usize) -> usize, values: &mut [f64], now: &mut [f64]) {
        self.place(self.points.point(index, 0), pick, values, now);
    }

    fn place(&self, mut point: Point<'_>, pick: impl Fn(usize) -> usize, values: &mut [f64], now: &mut [f64]) {
        for (j, drawn) in self.drawn.iter().enumerate() {
            let below = point.at(pick(j));
            let slot = match drawn.what {
                Slot::Parameter(id) => &mut values[id.0],
                Slot::Stock(id) => &mut now[id.0],
            };
            // Of correlated ones, first the normal numbers that are mixed below.
            *slot = if drawn.correlated { normal::quantile(below) } else { drawn.marginal.at(below, 1.0 - below) };
        }
        self.correlate(values);
    }

    /// How many numbers are drawn by distributions of their own.
    pub(super) fn dimensions(&self) -> usize {
        self.drawn.len()
    }

    /// Which of these is a parameter, and which.
    pub(super) fn parameter_at(&self, dimension: usize) -> Option<ParameterId> {
        match self.drawn.get(dimension)?.what {
            Slot::Parameter(id) => Some(id),
            Slot::Stock(_) => None,
        }
    }

    /// From independent normal numbers to correlated values; from the last, as each row needs those before it.
    fn correlate(&self, values: &mut [f64]) {
        let ids = &self.correlated.parameters;
        let marginals = self.drawn.iter().filter(|drawn| drawn.correlated).rev();
        for (k, drawn) in (0..ids.len()).rev().zip(marginals) {
            let row = &self.correlated.factor[k * ids.len()..=k * ids.len() + k];
            let z = row.iter().zip(ids).map(|(factor, id)| factor * values[id.0]).sum();
            values[ids[k].0] = drawn.marginal.of_normal(z);
        }
    }

    /// The values that part a parameter's distribution into `parts` equal shares; `None` if it is not drawn.
    #[must_use]
    pub fn edges(&self, id: ParameterId, parts: usize) -> Option<Vec<f64>> {
        if let Some(column) = self.column(id) {
            let mut quantiles = Quantiles::new(0);
            column.for_each(|value| quantiles.push(value));
            return Some(quantiles.sorted().edges(parts));
        }
        let drawn = self.drawn.iter().find(|drawn| drawn.what == Slot::Parameter(id))?;
        let edge = |k: usize| drawn.marginal.at(k as f64 / parts as f64, (parts - k) as f64 / parts as f64);
        let mut edges: Vec<f64> = (1..parts).map(edge).collect();
        edges.dedup();
        Some(edges)
    }

    fn row(&self, table: &DrawTable, index: u64, values: &mut [f64]) {
        let width = table.columns.len();
        let rows = (table.values.len() / width) as u64;
        let row = scaled(index, rows, self.draws) as usize;
        for (id, value) in table.columns.iter().zip(&table.values[row * width..]) {
            values[id.0] = *value;
        }
    }

    /// The rows' values of a parameter that is a column.
    fn column(&self, id: ParameterId) -> Option<impl Iterator<Item = f64>> {
        let table = self.table.as_ref()?;
        let place = table.columns.iter().position(|column| *column == id)?;
        Some(table.values.iter().skip(place).step_by(table.columns.len()).copied())
    }

    /// As many independent draws as tell as much of the mean of the file's worst column.
    fn effective(&self) -> f64 {
        let columns = self.table.iter().flat_map(|table| table.columns.iter().copied());
        let of_column = |id| {
            let mut groups = vec![interval::Moments::default(); self.groups()];
            let mut values: Vec<f64> = self.column(id).into_iter().flatten().collect();
            let rows = values.len() as u64;
            values = (0..self.draws).map(|i| values[scaled(i, rows, self.draws) as usize]).collect();
            for (i, value) in values.into_iter().enumerate() {
                groups[self.group(i as u64)].push(value);
            }
            let way = Way::InOrder { effective: self.draws as f64 };
            interval::of_mean(way, &groups).map_or(self.draws as f64, |interval| interval.effective)
        };
        columns.map(of_column).fold(self.draws as f64, f64::min)
    }

    /// Room for what is counted over the draws, a place for each group.
    #[must_use]
    pub fn counted(&self) -> Vec<Counted> {
        vec![Counted::default(); self.groups()]
    }
}

/// index × to/from, rounded down, for index < from.
fn scaled(index: u64, to: u64, from: u64) -> u64 {
    (u128::from(index) * u128::from(to) / u128::from(from.max(1))).min(u128::from(to.saturating_sub(1))) as u64
}

fn drawn(model: &Model, correlated: &Correlated) -> Vec<Drawn> {
    let column = |id| model.draws.as_ref().is_some_and(|table| table.columns.contains(&id));
    let parameters = model.parameters.iter().enumerate().filter_map(|(i, parameter)| {
        let id = ParameterId(i);
        let marginal = Marginal::of(parameter).filter(|_| !column(id))?;
        Some(Drawn { what: Slot::Parameter(id), marginal, correlated: correlated.parameters.contains(&id) })
    });
    let stocks = model.now.iter().filter_map(|survey| {
        let cv = survey.cv.filter(|cv| *cv > 0.0 && survey.value > 0.0)?;
        let marginal = Marginal::of_stock(survey.value, cv);
        Some(Drawn { what: Slot::Stock(survey.species), marginal, correlated: false })
    });
    parameters.chain(stocks).collect()
}
