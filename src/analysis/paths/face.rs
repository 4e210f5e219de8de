//! The equations of those that are there, in the coordinates in which paths are followed.
//!
//! A species whose row vanishes with it is followed as ln x, by the row divided by x: troughs of any depth stay exact and
//! none can become negative. One that immigration, a quota or another stage feeds keeps its abundance as coordinate.

use crate::analysis::subject::Subject;
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::expr::tape::gradient::GradientRun;
use crate::expr::tape::run::Run;
use crate::model::SpeciesId;
use crate::num::elementary;
use crate::num::ode::{Flow, Tolerance};

/// What a coordinate is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Coordinate {
    /// ln x; its rate is the row divided by x.
    Logarithm,
    /// x itself, in the species' unit.
    Plain,
}

/// The equations with some species absent for good.
#[derive(Debug)]
pub(super) struct Face {
    /// The species of each coordinate.
    pub(super) present: Vec<usize>,
    /// What each coordinate is.
    pub(super) kinds: Vec<Coordinate>,
    /// Upper side of the search box of each coordinate's species.
    pub(super) scale: Vec<f64>,
    /// How many species the model has.
    pub(super) species: usize,
    /// One output a coordinate, over those present.
    pub(super) tape: Tape,
    amounts: Tape,
    /// For each harvest, the species that it takes from and the output of `amounts`; none where it has no value here.
    harvests: Vec<Vec<(SpeciesId, Option<usize>)>>,
    pub(super) values: Vec<f64>,
}

impl Face {
    /// The face on which just these species are present; `None` where a rate has no value there.
    pub(super) fn new(subject: &mut Subject<'_>, present: &[bool]) -> Option<Self> {
        let plan = subject.plan;
        let absent: Vec<usize> = (0..present.len()).filter(|&i| !present[i]).collect();
        let present: Vec<usize> = (0..present.len()).filter(|&i| present[i]).collect();
        let rows = subject.graph.with_zeros(&plan.rows, &plan.values);
        let wanted: Vec<NodeId> = present.iter().map(|&i| rows[i]).collect();
        let mut outputs: Vec<NodeId> =
            restricted(&mut subject.graph, &wanted, &absent).into_iter().collect::<Option<_>>()?;
        let mut kinds = vec![Coordinate::Plain; present.len()];
        if subject.step().is_none() {
            for ((kind, output), &i) in kinds.iter_mut().zip(&mut outputs).zip(&present) {
                if let Some(quotient) = subject.graph.divide(*output, i).quotient {
                    (*kind, *output) = (Coordinate::Logarithm, quotient);
                }
            }
        }
        let (amounts, harvests) = harvests(subject, &absent);
        Some(Self {
            kinds,
            scale: present.iter().map(|&i| subject.sides[i][1].max(f64::MIN_POSITIVE)).collect(),
            species: rows.len(),
            tape: Tape::over(&subject.graph, &outputs, &present),
            amounts: Tape::over(&subject.graph, &amounts, &present),
            harvests,
            values: plan.values.clone(),
            present,
        })
    }

    /// How many coordinates there are.
    pub(super) fn len(&self) -> usize {
        self.present.len()
    }

    /// The equations, ready to be evaluated.
    pub(super) fn field(&self) -> Field<'_> {
        let run = self.tape.start(&self.values);
        Field { face: self, run, gradients: None, x: vec![0.0; self.len()] }
    }

    /// The coordinates of a state of all species.
    pub(super) fn coordinates(&self, state: &[f64]) -> Vec<f64> {
        let of = |(&i, kind): (&usize, &Coordinate)| match kind {
            Coordinate::Logarithm => elementary::ln(state[i]),
            Coordinate::Plain => state[i],
        };
        self.present.iter().zip(&self.kinds).map(of).collect()
    }

    /// The abundance that a coordinate stands for, never negative.
    pub(super) fn abundance(&self, coordinate: usize, y: f64) -> f64 {
        match self.kinds[coordinate] {
            Coordinate::Logarithm => elementary::exp(y),
            Coordinate::Plain => y.max(0.0),
        }
    }

    /// The abundances of those present.
    pub(super) fn abundances(&self, y: &[f64], out: &mut [f64]) {
        for (i, out) in out.iter_mut().enumerate() {
            *out = self.abundance(i, y[i]);
        }
    }

    /// The state of all species, 0 for those absent.
    pub(super) fn state(&self, y: &[f64]) -> Vec<f64> {
        let mut state = vec![0.0; self.species];
        for (coordinate, &i) in self.present.iter().enumerate() {
            state[i] = self.abundance(coordinate, y[coordinate]);
        }
        state
    }

    /// Errors of a share `relative` of each abundance; of one that is no logarithm, at least of its box by a millionth of it.
    pub(super) fn tolerance(&self, relative: f64) -> Vec<Tolerance> {
        let of = |(kind, scale): (&Coordinate, &f64)| match kind {
            Coordinate::Logarithm => Tolerance { absolute: relative, relative: 0.0 },
            Coordinate::Plain => Tolerance { absolute: 1e-6 * relative * scale, relative },
        };
        self.kinds.iter().zip(&self.scale).map(of).collect()
    }

    /// What each harvest takes at given abundances of those present; nothing where it has no value.
    pub(super) fn takes(&self) -> Takes<'_> {
        Takes { face: self, run: self.amounts.start(&self.values) }
    }
}

/// The nodes with those species absent; `None` for one that has no value there.
fn restricted(graph: &mut Graph, nodes: &[NodeId], absent: &[usize]) -> Vec<Option<NodeId>> {
    let mut nodes: Vec<Option<NodeId>> = nodes.iter().copied().map(Some).collect();
    for &i in absent {
        let known: Vec<NodeId> = nodes.iter().copied().flatten().collect();
        let mut there = graph.restrict(&known, i).into_iter();
        for node in nodes.iter_mut().filter(|node| node.is_some()) {
            *node = match there.next() {
                Some(AtZero::Is(node)) => Some(node),
                _ => None,
            };
        }
    }
    nodes
}

type Outputs = Vec<Vec<(SpeciesId, Option<usize>)>>;

fn harvests(subject: &mut Subject<'_>, absent: &[usize]) -> (Vec<NodeId>, Outputs) {
    let mut outputs = Vec::new();
    let mut harvests = Vec::new();
    for harvest in &subject.plan.harvests {
        let nodes: Vec<NodeId> = harvest.amounts.iter().map(|&(_, node)| node).collect();
        let there = restricted(&mut subject.graph, &nodes, absent);
        let place = |(&(species, _), node): (&(SpeciesId, NodeId), Option<NodeId>)| {
            // Nothing is taken of those that are not there, whatever the plan would like to take.
            let node = node.filter(|_| !absent.contains(&species.0));
            (species, node.map(|node| (outputs.push(node), outputs.len() - 1).1))
        };
        harvests.push(harvest.amounts.iter().zip(there).map(place).collect());
    }
    (outputs, harvests)
}

/// The equations of a face, evaluated.
pub(super) struct Field<'f> {
    face: &'f Face,
    run: Run<'f, f64>,
    gradients: Option<GradientRun<'f, f64>>,
    x: Vec<f64>,
}

impl Field<'_> {
    /// Rates of change of the abundances (for a map, the next abundances) at given abundances. `false` where undefined.
    pub(super) fn at(&mut self, x: &[f64], out: &mut [f64]) -> bool {
        let defined = self.run.at(x).defined;
        for (i, out) in out.iter_mut().enumerate() {
            let rate = *self.run.output(i);
            *out = if self.face.kinds[i] == Coordinate::Logarithm { rate * x[i] } else { rate };
        }
        defined && out.iter().all(|rate| rate.is_finite())
    }

    /// Derivatives of [`Field::at`], row by row; `false` where there are none.
    pub(super) fn slopes_at(&mut self, x: &[f64], out: &mut [f64]) -> bool {
        let n = x.len();
        let face = self.face;
        let run = self.gradients.get_or_insert_with(|| face.tape.start_gradient(&face.values));
        let domain = run.at(x);
        for (i, row) in out.chunks_exact_mut(n.max(1)).enumerate() {
            let factor = if face.kinds[i] == Coordinate::Logarithm { x[i] } else { 1.0 };
            match run.gradient(i) {
                Some(gradient) => row.iter_mut().zip(gradient).for_each(|(out, slope)| *out = factor * slope),
                None => row.fill(0.0),
            }
            if face.kinds[i] == Coordinate::Logarithm {
                row[i] += run.output(i);
            }
        }
        domain.defined && out.iter().all(|slope| slope.is_finite())
    }
}

impl Flow for Field<'_> {
    fn rates(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        self.face.abundances(y, &mut self.x);
        let defined = self.run.at(&self.x).defined;
        out.iter_mut().zip(self.run.outputs()).for_each(|(out, rate)| *out = *rate);
        defined && out.iter().all(|rate| rate.is_finite())
    }

    fn slopes(&mut self, y: &[f64], out: &mut [f64]) -> bool {
        self.face.abundances(y, &mut self.x);
        let n = y.len();
        let face = self.face;
        let run = self.gradients.get_or_insert_with(|| face.tape.start_gradient(&face.values));
        let domain = run.at(&self.x);
        for (i, row) in out.chunks_exact_mut(n.max(1)).enumerate() {
            match run.gradient(i) {
                Some(gradient) => row.copy_from_slice(gradient),
                None => row.fill(0.0),
            }
            for (j, slope) in row.iter_mut().enumerate() {
                *slope *= if face.kinds[j] == Coordinate::Logarithm { self.x[j] } else { 1.0 };
            }
        }
        domain.defined && out.iter().all(|slope| slope.is_finite())
    }
}

/// What harvests take, evaluated.
pub(super) struct Takes<'f> {
    face: &'f Face,
    run: Run<'f, f64>,
}

impl Takes<'_> {
    /// Adds `weight` times what each harvest takes at these abundances of those present.
    pub(super) fn add(&mut self, x: &[f64], weight: f64, sums: &mut [Vec<(SpeciesId, f64)>]) {
        self.run.at(x);
        for (sums, outputs) in sums.iter_mut().zip(&self.face.harvests) {
            for (sum, (_, output)) in sums.iter_mut().zip(outputs) {
                sum.1 += weight * output.map_or(0.0, |output| *self.run.output(output));
            }
        }
    }

    /// Nothing taken yet.
    pub(super) fn none(&self) -> Vec<Vec<(SpeciesId, f64)>> {
        let zeros =
            |outputs: &Vec<(SpeciesId, Option<usize>)>| outputs.iter().map(|&(species, _)| (species, 0.0)).collect();
        self.face.harvests.iter().map(zeros).collect()
    }
}
