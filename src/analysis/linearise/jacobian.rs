//! The Jacobian at an equilibrium, as numbers and enclosed.
//!
//! A row that vanishes with its own species is x g(x), g being the row divided by x. Where the species is absent its row
//! of the Jacobian is g on the diagonal and exactly 0 beside it; where it is present x ∂g/∂x_j, for g is 0 at an
//! equilibrium, and 1 at a map's. Both are sharper than the row's own gradient, and keep zeros exact.
//!
//! All of it runs over bounds, of the f64 parameters or, in `written`, of those that the model file has.

use crate::analysis::equilibria::{Derivative, Equilibrium};
use crate::analysis::subject::Subject;
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;
use crate::expr::tape::number::{Domain, Number};
use crate::expr::tape::written::Written;
use crate::num::double::Double;
use crate::num::interval::Interval;

/// A number type whose values are bounds.
pub(super) trait Bounds: Number {
    fn around(side: Interval) -> Self;
    fn bounds(&self) -> Interval;
}

impl Bounds for Interval {
    fn around(side: Interval) -> Self {
        side
    }

    fn bounds(&self) -> Interval {
        *self
    }
}

impl Bounds for Written {
    fn around(side: Interval) -> Self {
        Self(Double::around(side))
    }

    fn bounds(&self) -> Interval {
        self.0.enclosure()
    }
}

/// Where a Jacobian is enclosed: the parameters, and all that the enclosure of an equilibrium holds.
struct Place<'p, T> {
    parameters: &'p [T],
    state: &'p [T],
    equilibrium: &'p Equilibrium,
}

/// Communities larger than this get no enclosure: proofs take the cube of it, and more.
const MOST_ENCLOSED: usize = 40;

/// The equations of one scenario, compiled.
#[derive(Clone, Debug)]
pub(super) struct Rows {
    /// Rates, or the map.
    pub(super) whole: Tape,
    /// Each row divided by its own species, where it vanishes with it; empty for large communities.
    divided: Option<Tape>,
    is_divided: Vec<bool>,
    /// Each row on a tape of its own, whole and divided, for where only some rows have a derivative; empty for large
    /// communities.
    pub(super) alone: Vec<[Tape; 2]>,
    pub(super) values: Vec<f64>,
    pub(super) exact: Vec<Interval>,
    /// The parameters as the model file has them.
    pub(super) written: Vec<Written>,
    /// What a divided row is at an equilibrium: 0, for a map 1.
    pub(super) balanced: f64,
}

impl Rows {
    pub(super) fn new(subject: &mut Subject<'_>) -> Self {
        let n = subject.species();
        let graph = &mut subject.graph;
        let values = subject.plan.values.clone();
        let rows = graph.with_zeros(&subject.plan.rows, &values);
        let quotients: Vec<Option<NodeId>> =
            rows.iter().enumerate().map(|(i, &row)| graph.divide(row, i).quotient).collect();
        let nodes: Vec<NodeId> = quotients.iter().zip(&rows).map(|(quotient, &row)| quotient.unwrap_or(row)).collect();
        let enclosed = n <= MOST_ENCLOSED;
        let pairs = rows.iter().zip(&nodes).filter(|_| enclosed);
        Self {
            alone: pairs.map(|(&row, &node)| [Tape::new(graph, &[row]), Tape::new(graph, &[node])]).collect(),
            whole: Tape::new(graph, &rows),
            divided: enclosed.then(|| Tape::new(graph, &nodes)),
            is_divided: quotients.iter().map(Option::is_some).collect(),
            exact: values.iter().map(|&value| Interval::point(value)).collect(),
            written: values.iter().map(|&value| Written::of(value)).collect(),
            values,
            balanced: if subject.step().is_some() { 1.0 } else { 0.0 },
        }
    }

    pub(super) fn order(&self) -> usize {
        self.is_divided.len()
    }

    /// Encloses the Jacobian at an equilibrium, row by row; empty for large communities. An error where some row has no
    /// derivative, or none that is bounded.
    pub(super) fn enclosure(&self, equilibrium: &Equilibrium) -> Result<Vec<Interval>, Derivative> {
        self.over(&self.exact, equilibrium)
    }

    /// As [`Rows::enclosure`], for parameters between bounds.
    pub(super) fn over<T: Bounds>(
        &self,
        parameters: &[T],
        equilibrium: &Equilibrium,
    ) -> Result<Vec<Interval>, Derivative> {
        let there = equilibrium.derivative;
        let Some(divided) = &self.divided else {
            return if there == Derivative::Exists { Ok(Vec::new()) } else { Err(there) };
        };
        let state: Vec<T> = equilibrium.enclosure.iter().map(|&side| T::around(side)).collect();
        let place = &Place { parameters, state: &state, equilibrium };
        if there != Derivative::Exists {
            return self.one_by_one(place);
        }
        let mut run = self.whole.start_gradient(parameters);
        if !run.at(&state).defined {
            return Err(Derivative::Missing);
        }
        let mut entries: Vec<Interval> = gathered(&run, self.order()).iter().map(T::bounds).collect();
        let mut run = divided.start_gradient(parameters);
        if run.at(&state) == Domain::CLEAN {
            self.sharpen(&mut entries, &run, equilibrium);
        }
        if entries.iter().all(|entry| entry.is_bounded()) { Ok(entries) } else { Err(Derivative::Missing) }
    }

    /// As [`Rows::enclosure`], where a formula has no derivative: x g(x) has one at x = 0 all the same, if only g is
    /// continuous there.
    fn one_by_one<T: Bounds>(&self, place: &Place<'_, T>) -> Result<Vec<Interval>, Derivative> {
        let n = self.order();
        let mut entries = Vec::with_capacity(n * n);
        for (i, tapes) in self.alone.iter().enumerate() {
            match self.own_growth(place, i) {
                Some(growth) => entries.extend((0..n).map(|j| if i == j { growth } else { Interval::ZERO })),
                None => entries.extend(gradient(&tapes[0], place)?),
            }
        }
        Ok(entries)
    }

    /// g of an absent species, where it is continuous.
    fn own_growth<T: Bounds>(&self, place: &Place<'_, T>, i: usize) -> Option<Interval> {
        if !self.is_divided[i] || place.equilibrium.has(i) {
            return None;
        }
        let mut run = self.alone[i][1].start(place.parameters);
        // A kink does no harm, and minima and maxima report none here; a choice between two branches may jump, and does.
        let domain = run.at(place.state);
        Some(run.output(0).bounds()).filter(|growth| domain == Domain::CLEAN && growth.is_bounded())
    }

    /// Cuts every row that vanishes with its species to what its divided form allows.
    fn sharpen<T: Bounds>(&self, entries: &mut [Interval], divided: &GradientRun<'_, T>, equilibrium: &Equilibrium) {
        let n = self.order();
        for i in (0..n).filter(|&i| self.is_divided[i]) {
            let x = equilibrium.enclosure[i];
            let at_balance = equilibrium.proven && equilibrium.has(i);
            let own = if at_balance { Interval::point(self.balanced) } else { divided.output(i).bounds() };
            for j in 0..n {
                let slope = divided.gradient(i).map_or(Interval::ZERO, |row| row[j].bounds());
                let through = if x == Interval::ZERO { Interval::ZERO } else { x * slope };
                let sharp = if i == j { own + through } else { through };
                let cut = entries[i * n + j].intersect(sharp);
                entries[i * n + j] = if cut.is_empty() { sharp } else { cut };
            }
        }
    }

    /// The Jacobian at a state, row by row; entries may be infinite or NaN where there is none.
    pub(super) fn numbers(&self, state: &[f64]) -> Vec<f64> {
        let n = self.order();
        let mut run = self.whole.start_gradient(&self.values);
        run.at(state);
        let mut entries = gathered(&run, n);
        for i in (0..n).filter(|&i| self.is_divided[i] && state[i] == 0.0) {
            (0..n).filter(|&j| j != i).for_each(|j| entries[i * n + j] = 0.0);
        }
        entries
    }
}

fn gradient<T: Bounds>(tape: &Tape, place: &Place<'_, T>) -> Result<Vec<Interval>, Derivative> {
    let mut run = tape.start_gradient(place.parameters);
    let domain = run.at(place.state);
    let row: Vec<Interval> = match run.gradient(0) {
        Some(row) => row.iter().map(T::bounds).collect(),
        None => vec![Interval::ZERO; place.state.len()],
    };
    if !domain.defined || !row.iter().all(|slope| slope.is_bounded()) {
        return Err(Derivative::Missing);
    }
    if domain.smooth { Ok(row) } else { Err(Derivative::Kink) }
}

pub(super) fn gathered<T: Number>(run: &GradientRun<'_, T>, n: usize) -> Vec<T> {
    let mut entries = Vec::with_capacity(n * n);
    for i in 0..n {
        match run.gradient(i) {
            Some(row) => entries.extend_from_slice(row),
            None => entries.extend(std::iter::repeat_n(T::constant(0.0), n)),
        }
    }
    entries
}
