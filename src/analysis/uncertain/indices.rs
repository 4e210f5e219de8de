//! Which parameter an outcome hangs on: Sobol' indices.
//!
//! The first-order index of a parameter is the share of the outcome's variance that would go if it were known; the total
//! index is the share that would stay if all others were (Sobol' 1993; Homma & Saltelli 1996). Both need parameters that
//! are drawn independently of each other: where some are correlated, or come together from a file, what one of them
//! explains is partly what another does, shares need not add up, and [`Design::new`] refuses.
//!
//! A [`Design`] says at which values the outcome is to be worked out for each draw: at a row of the matrix A, at one of
//! B, and for each parameter at the row of A with that one column from B. [`Tally`] takes the outcomes.

use crate::model::{Model, ParameterId};
use crate::num::student;
use crate::num::sum::Sum;

use super::draw::{Plan, RANDOMISATIONS, Sampling, Unplanned};

/// Groups of draws over which errors are found; independent ones, whatever the sampling.
const GROUPS: usize = RANDOMISATIONS as usize;

/// The values at which an outcome is asked for.
#[derive(Clone, Debug)]
pub struct Design(Plan);

/// Why there are no indices.
#[derive(Clone, Debug, PartialEq)]
pub enum NoIndices {
    /// Nothing can be drawn.
    Unplanned(Unplanned),
    /// Parameters are correlated, or drawn together from a file: indices are not defined in the usual way.
    Joint,
}

/// One of the points of a draw.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Row {
    /// Of the first matrix.
    A,
    /// Of the second matrix, independent of the first.
    B,
    /// Of the first, but this factor from the second.
    Mixed(usize),
}

impl Design {
    /// The design of so many draws; each asks for as many outcomes as there are [factors](Self::factors), and two.
    ///
    /// # Errors
    /// Why there are no indices.
    pub fn new(model: &Model, sampling: Sampling, seed: u64, draws: Option<u64>) -> Result<Self, NoIndices> {
        let plan = Plan::with_copies(model, sampling, seed, draws, 2).map_err(NoIndices::Unplanned)?;
        if plan.is_joint() { Err(NoIndices::Joint) } else { Ok(Self(plan)) }
    }

    /// How many draws there are.
    #[must_use]
    pub fn draws(&self) -> u64 {
        self.0.draws()
    }

    /// What is drawn, each with its parameter; `None` is a stock of today.
    #[must_use]
    pub fn factors(&self) -> Vec<Option<ParameterId>> {
        (0..self.0.dimensions()).map(|factor| self.0.parameter_at(factor)).collect()
    }

    /// Sets what is drawn to the values of a row of draw `index`; as [`Plan::draw`].
    ///
    /// # Panics
    /// If `values` or `now` is not as long as the model says.
    pub fn row(&self, index: u64, row: Row, values: &mut [f64], now: &mut [f64]) {
        let second = self.0.dimensions();
        let from_second = |j: usize| match row {
            Row::A => false,
            Row::B => true,
            Row::Mixed(factor) => j == factor,
        };
        self.0.draw_picked(index, |j| if from_second(j) { second + j } else { j }, values, now);
    }
}

/// An estimate, and half the width of its 95 % interval.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The estimate itself; it may lie a little outside 0 to 1.
    pub value: f64,
    /// Student's, from the sixteen estimates that leave out a group each (jackknife: Tukey 1958).
    pub error: f64,
}

/// The indices of one factor.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Indices {
    /// The share of the variance that would go if this were known.
    pub first: Estimate,
    /// The share that would stay if all others were known.
    pub total: Estimate,
}

/// Sums over the outcomes, without rounding, so that parts add.
#[derive(Clone, Debug, PartialEq)]
pub struct Tally {
    factors: usize,
    groups: Vec<Sums>,
}

/// Sums over the draws of a group.
#[derive(Clone, Debug, PartialEq)]
struct Sums {
    draws: u64,
    /// Of outcomes in A and in B, and of their squares.
    outcomes: Sum,
    squares: Sum,
    factors: Vec<Factor>,
}

/// Of one factor: sums of f(AB) − f(A), of it times f(B), and of its square.
#[derive(Clone, Debug, Default, PartialEq)]
struct Factor {
    change: Sum,
    with_b: Sum,
    square: Sum,
}

impl Tally {
    /// Nothing yet, of so many factors.
    #[must_use]
    pub fn new(factors: usize) -> Self {
        let none = Sums {
            draws: 0,
            outcomes: Sum::default(),
            squares: Sum::default(),
            factors: vec![Factor::default(); factors],
        };
        Self { factors, groups: vec![none; GROUPS] }
    }

    /// Takes the outcomes of draw `index` at A, at B, and at each mixed row. One of them not finite leaves the draw out.
    ///
    /// # Panics
    /// If there is not one mixed row a factor.
    pub fn push(&mut self, index: u64, a: f64, b: f64, mixed: &[f64]) {
        assert_eq!(mixed.len(), self.factors, "outcomes of mixed rows");
        if !(a.is_finite() && b.is_finite() && mixed.iter().all(|x| x.is_finite())) {
            return;
        }
        let group = &mut self.groups[(index % RANDOMISATIONS) as usize];
        group.draws += 1;
        for outcome in [a, b] {
            group.outcomes.add(outcome);
            group.squares.add(outcome * outcome);
        }
        for (factor, outcome) in group.factors.iter_mut().zip(mixed) {
            let change = outcome - a;
            factor.change.add(change);
            factor.with_b.add(change * b);
            factor.square.add(change * change);
        }
    }

    /// Adds the sums of another part.
    pub fn and(&mut self, other: &Self) {
        for (group, more) in self.groups.iter_mut().zip(&other.groups) {
            group.and(more);
        }
    }

    /// The indices of every factor; `None` where the outcome does not vary, or a group has no draw.
    ///
    /// First-order by formula (b) of table 2 of Saltelli et al. (2010), f(B) taken around the mean, totals by that of
    /// Jansen (1999).
    #[must_use]
    pub fn indices(&self) -> Option<Vec<Indices>> {
        if self.groups.iter().any(|group| group.draws == 0) {
            return None;
        }
        let all = self.shares(None)?;
        let without: Vec<Vec<[f64; 2]>> =
            (0..GROUPS).map(|left_out| self.shares(Some(left_out))).collect::<Option<_>>()?;
        let estimate = |factor: usize, which: usize| {
            let each: Vec<f64> = without.iter().map(|shares| shares[factor][which]).collect();
            Estimate { value: all[factor][which], error: jackknife(&each) }
        };
        Some((0..self.factors).map(|k| Indices { first: estimate(k, 0), total: estimate(k, 1) }).collect())
    }

    /// First-order and total index of every factor, over all groups but one.
    fn shares(&self, left_out: Option<usize>) -> Option<Vec<[f64; 2]>> {
        let mut sums: Option<Sums> = None;
        for (_, group) in self.groups.iter().enumerate().filter(|(k, _)| Some(*k) != left_out) {
            match &mut sums {
                None => sums = Some(group.clone()),
                Some(sums) => sums.and(group),
            }
        }
        let sums = sums?;
        let n = sums.draws as f64;
        let mean = sums.outcomes.value() / (2.0 * n);
        let variance = sums.squares.value() / (2.0 * n) - mean * mean;
        let share = |factor: &Factor| {
            let first = (factor.with_b.value() - mean * factor.change.value()) / n;
            [first / variance, factor.square.value() / (2.0 * n) / variance]
        };
        // What is left of a variance by rounding alone is none.
        (variance > 1e-14 * mean * mean).then(|| sums.factors.iter().map(share).collect())
    }
}

impl Sums {
    fn and(&mut self, other: &Self) {
        self.draws += other.draws;
        self.outcomes.and(&other.outcomes);
        self.squares.and(&other.squares);
        for (factor, more) in self.factors.iter_mut().zip(&other.factors) {
            factor.change.and(&more.change);
            factor.with_b.and(&more.with_b);
            factor.square.and(&more.square);
        }
    }
}

/// Half the width of the 95 % interval from estimates that each leave out one group.
fn jackknife(each: &[f64]) -> f64 {
    let n = each.len() as f64;
    let mean = each.iter().sum::<f64>() / n;
    let squares: f64 = each.iter().map(|x| (x - mean) * (x - mean)).sum();
    student::quantile(n - 1.0, 0.975) * ((n - 1.0) / n * squares).sqrt()
}
