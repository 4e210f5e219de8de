//! What stands beside a threshold in a table: eigenvalues, soft or hard, the quantities at a kink.

use nalgebra::Complex;

use crate::analysis::linearise::{Forced, Lineariser};
use crate::analysis::response::equations::Equations;
use crate::analysis::response::{Criticality, Threshold, ThresholdKind};
use crate::analysis::subject::Subject;
use crate::expr::graph::{NodeId, Variable};
use crate::expr::tape::Tape;
use crate::model::{ParameterId, SpeciesId};
use crate::num::eigen::{Spectrum, eigenvalues};

use super::{Event, Located, compared, pieces};

/// A coefficient smaller than this share of its terms has no sign that a threshold known to some digits could tell.
const CLEAR: f64 = 1e-7;

/// An eigenvalue this near to the border, relative to the largest, is the critical one.
const ON_BORDER: f64 = 1e-6;

/// Quantities this near to each other, as a share of their size around, are equal.
const TIED: f64 = 1e-9;

/// Describes thresholds of one scenario over some controls.
pub struct Describer {
    lineariser: Lineariser,
    controls: Vec<ParameterId>,
    names: Vec<String>,
    symbols: Vec<String>,
    is_map: bool,
}

impl Describer {
    /// Compiles the scenario's linear part for any value of the controls.
    pub fn new(subject: &Subject<'_>, controls: &[ParameterId]) -> Self {
        Self {
            lineariser: Lineariser::open(subject, controls),
            controls: controls.to_vec(),
            names: subject.model.parameters.iter().map(|parameter| parameter.name.clone()).collect(),
            symbols: subject.model.species.iter().map(|species| species.symbol.clone()).collect(),
            is_map: subject.step().is_some(),
        }
    }

    /// A threshold with all that is said of it but its arms.
    pub fn threshold(&mut self, equations: &mut Equations, event: &Event<'_>, located: &Located) -> Threshold {
        let m = located.point.len() - self.controls.len();
        self.set(&located.point[m..]);
        let [eigenvalues, other_side] = match located.kink {
            Some(_) => {
                let sides = self.both_sides(equations, event, located);
                sides.map_or([None, None], |sides| sides.map(Some))
            }
            None => [self.eigenvalues(located), None],
        };
        Threshold {
            kind: located.kind,
            at: located.at,
            state: located.state.clone(),
            eigenvalues: eigenvalues.unwrap_or_default(),
            other_side,
            criticality: self.criticality(located),
            species: located.species.map(SpeciesId),
            arms: Vec::new(),
            kink: located.kink.and_then(|node| self.written(equations, node)),
            error: located.error,
        }
    }

    fn set(&mut self, values: &[f64]) {
        for (&control, &value) in self.controls.iter().zip(values) {
            self.lineariser.set(control, value);
        }
    }

    /// In the contract's order; the critical ones are put on the border, where the threshold's definition has them.
    fn eigenvalues(&self, located: &Located) -> Option<Vec<Complex<f64>>> {
        let values = self.lineariser.eigenvalues(&located.state)?;
        Some(match defined(located.kind, self.is_map) {
            Some(place) => on_border(values, place),
            None => values,
        })
    }

    /// Soft or hard; `None` where no coefficient decides, its sign is not clear, or another eigenvalue repels: then nothing
    /// that is born is stable, and nothing was lost.
    fn criticality(&self, located: &Located) -> Option<Criticality> {
        let which = match located.kind {
            ThresholdKind::Hopf | ThresholdKind::NeimarkSacker => Forced::Pair,
            ThresholdKind::PeriodDoubling => Forced::Flip,
            ThresholdKind::Pitchfork => Forced::Cubic,
            _ => return None,
        };
        let found = self.lineariser.forced(&located.state, which)?;
        if !found.others_attract || found.value.abs() <= CLEAR * found.terms {
            return None;
        }
        let attracts = if which == Forced::Flip { found.value > 0.0 } else { found.value < 0.0 };
        Some(if attracts { Criticality::Soft } else { Criticality::Hard })
    }

    /// How many species there are.
    pub(in crate::analysis::response) fn species(&self) -> usize {
        self.symbols.len()
    }

    /// First Lyapunov coefficient at a state, with the sum of the sizes of its terms.
    pub(in crate::analysis::response) fn lyapunov(&mut self, state: &[f64], controls: &[f64]) -> Option<(f64, f64)> {
        self.set(controls);
        let found = self.lineariser.forced(state, Forced::Pair)?;
        Some((found.value, found.terms))
    }

    /// Whether the eigenvalues at a state attract, but for those this near to the border.
    pub(in crate::analysis::response) fn others_attract(&mut self, located: &[f64], controls: &[f64]) -> Option<bool> {
        self.set(controls);
        let values = self.lineariser.eigenvalues(located)?;
        let most = values.iter().fold(0.0f64, |most, z| most.max(z.norm()));
        let excess = |z: &Complex<f64>| if self.is_map { z.norm() - 1.0 } else { z.re };
        Some(values.iter().all(|z| excess(z) <= ON_BORDER * most))
    }

    /// Eigenvalues on either side of a kink, those of the side with the lower control first: with every choice between two
    /// quantities that are equal there as it is made at that one of the event's points.
    fn both_sides(
        &self,
        equations: &mut Equations,
        event: &Event<'_>,
        located: &Located,
    ) -> Option<[Vec<Complex<f64>>; 2]> {
        let m = event.face.moving.len();
        let rises = event.before.get(m) <= event.after.get(m);
        let points = if rises { [event.before, event.after] } else { [event.after, event.before] };
        let mut found = [Vec::new(), Vec::new()];
        for (found, point) in found.iter_mut().zip(points) {
            let changes = choices(equations, event, located, point);
            *found = self.ordered(spectrum_with(equations, located, &changes)?);
        }
        Some(found)
    }

    fn ordered(&self, values: Vec<Complex<f64>>) -> Vec<Complex<f64>> {
        if self.is_map { Spectrum { values, vectors: None }.by_modulus().values } else { values }
    }

    /// The two quantities at a kink as formulas.
    fn written(&self, equations: &mut Equations, node: NodeId) -> Option<[String; 2]> {
        let (a, b) = compared(equations, node)?;
        let (species, controls) = (equations.species, &self.controls);
        let name = |variable: Variable| match variable {
            Variable::State(i) if i < species => self.symbols[i].clone(),
            Variable::State(i) => controls.get(i - species).map_or_else(String::new, |c| self.names[c.0].clone()),
            Variable::Parameter(i) => self.names[i].clone(),
        };
        let [a, b] = [a, b].map(|node| equations.graph.express(node, &name).map(|formula| formula.to_string()));
        Some([a?, b?])
    }
}

/// Where a threshold puts its critical eigenvalue.
#[derive(Clone, Copy)]
enum Place {
    Real(f64),
    Axis,
    Circle,
}

fn defined(kind: ThresholdKind, is_map: bool) -> Option<Place> {
    match kind {
        ThresholdKind::Fold | ThresholdKind::Transcritical | ThresholdKind::Pitchfork => {
            Some(Place::Real(if is_map { 1.0 } else { 0.0 }))
        }
        ThresholdKind::PeriodDoubling => Some(Place::Real(-1.0)),
        ThresholdKind::Hopf => Some(Place::Axis),
        ThresholdKind::NeimarkSacker => Some(Place::Circle),
        _ => None,
    }
}

/// The eigenvalue, or pair, nearest to its place is put there: one is there by what the threshold is, and rounding alone
/// keeps it away.
fn on_border(mut values: Vec<Complex<f64>>, place: Place) -> Vec<Complex<f64>> {
    let put = |z: &Complex<f64>| match place {
        Place::Real(x) => Complex::new(x, 0.0),
        Place::Axis => Complex::new(0.0, z.im),
        Place::Circle => z / z.norm(),
    };
    let is_kind = |z: &Complex<f64>| matches!(place, Place::Real(_)) == (z.im == 0.0);
    let distance = |z: &Complex<f64>| (put(z) - z).norm();
    let candidates = (0..values.len()).filter(|&k| is_kind(&values[k]));
    let Some(nearest) = candidates.min_by(|&a, &b| distance(&values[a]).total_cmp(&distance(&values[b]))) else {
        return values;
    };
    let critical = values[nearest];
    for (k, z) in values.iter_mut().enumerate() {
        if k == nearest || (critical.im != 0.0 && *z == critical.conj()) {
            *z = put(z);
        }
    }
    values
}

/// Choices in the rows between quantities that are equal at a threshold, each with what it is on the side of a point.
fn choices(equations: &mut Equations, event: &Event<'_>, located: &Located, point: &[f64]) -> Vec<(NodeId, NodeId)> {
    let inputs: Vec<usize> = (0..equations.species + equations.controls.len()).collect();
    let m = event.face.moving.len();
    let there: Vec<f64> = located.state.iter().chain(&located.point[m..]).copied().collect();
    let mut beside = there.clone();
    event.face.moving.iter().zip(point).for_each(|(&i, &x)| beside[i] = x);
    beside[equations.species..].copy_from_slice(&point[m..]);
    let rows = equations.rows.clone();
    let mut changes = Vec::new();
    for node in equations.graph.reachable(&rows) {
        let (Some((a, b)), Some(pieces)) = (compared(equations, node), pieces(equations, node)) else { continue };
        let tape = Tape::over(&equations.graph, &[a, b], &inputs);
        let mut run = tape.start(&equations.values);
        let mut difference = |at: &[f64]| {
            run.at(at);
            (*run.output(0) - *run.output(1), run.output(0).abs().max(run.output(1).abs()))
        };
        let ((tie, size), (side, beside)) = (difference(&there), difference(&beside));
        if tie.abs() <= TIED * size.max(beside) {
            changes.push((node, pieces[usize::from(side > 0.0)]));
        }
    }
    changes
}

/// Eigenvalues of all rows with some nodes replaced, absent species by their own growth where their rows can be divided.
fn spectrum_with(
    equations: &mut Equations,
    located: &Located,
    changes: &[(NodeId, NodeId)],
) -> Option<Vec<Complex<f64>>> {
    let n = equations.species;
    let rows = equations.rows.clone();
    let rows = equations.graph.replaced(&rows, changes);
    let growth: Vec<Option<NodeId>> =
        rows.iter().enumerate().map(|(i, &row)| equations.graph.divide(row, i).quotient).collect();
    let inputs: Vec<usize> = (0..n + equations.controls.len()).collect();
    let m = located.point.len() - equations.controls.len();
    let at: Vec<f64> = located.state.iter().chain(&located.point[m..]).copied().collect();
    let tape = Tape::over(&equations.graph, &rows, &inputs);
    let mut run = tape.start_gradient(&equations.values);
    run.at(&at);
    let mut entries = Vec::with_capacity(n * n);
    for (i, growth) in growth.iter().enumerate() {
        match growth {
            Some(growth) if located.state[i] == 0.0 => {
                let own = Tape::over(&equations.graph, &[*growth], &inputs);
                let mut own = own.start(&equations.values);
                own.at(&at);
                entries.extend((0..n).map(|j| if i == j { *own.output(0) } else { 0.0 }));
            }
            _ => match run.gradient(i) {
                Some(row) => entries.extend_from_slice(&row[..n]),
                None => entries.extend(std::iter::repeat_n(0.0, n)),
            },
        }
    }
    eigenvalues(&entries, n).ok()
}
