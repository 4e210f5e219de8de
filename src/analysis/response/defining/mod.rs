//! Systems of equations whose regular roots are thresholds.
//!
//! Each is square in the abundances of a face, one control and some unknowns of its own (a vector, a frequency), up to the
//! normalisation of vectors, which `frame` adds as linear rows; with two controls free a regular root is a point of a curve.
//! All rows are nodes of [`Equations::graph`] made by exact derivatives, so one tape's gradient run is Newton's matrix.
//! With F the face's rows, A a matrix (see [`Matrix`]) and ' the derivative:
//!
//! - plain: F = 0 and one more node 0;
//! - kernel: F = 0, A v = 0 (fold, an absent population's growth, multiplier −1);
//! - pair: F = 0, A v = w, A w + a w + b v = 0, a = 0 and b = ω² for a pair ±iω, a = −2 cos θ and b = 1 for one e^{±iθ}. So
//!   it goes on smoothly through ω = 0 or θ = 0 to two real eigenvalues of sum 0 or product 1, which are no threshold;
//! - crossing: F + βψ = 0, Fₓᵀψ = 0, ψ·F_c = 0 (Moore 1980); branches cross where β comes out 0;
//! - cusp: F = 0, Fₓ v = 0, Fₓᵀψ = g v, ψ·Fₓₓ(v, v) = 0; g comes out 0.
//!
//! Sources: Seydel 2010; Kuznetsov 2004, ch. 10; Govaerts 2000; all from memory. To add one: its rows here, its unknowns in
//! `frame`, who asks for it in `locate`.

pub(super) mod frame;
pub(super) mod kernel;
pub(super) mod newton;

use crate::analysis::passage::restricted;
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId, Variable};
use crate::expr::tape::Tape;

use super::equations::{Equations, Face};

/// What unknowns a system has beside abundances and controls.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Shape {
    /// None.
    Plain,
    /// v.
    Kernel,
    /// v, w, and ω² or for a map cos θ.
    Pair,
    /// ψ, β.
    Crossing,
    /// v, ψ, g.
    Cusp,
}

impl Shape {
    /// How many, for a matrix of order n.
    pub(super) fn unknowns(self, n: usize) -> usize {
        match self {
            Self::Plain => 0,
            Self::Kernel => n,
            Self::Pair | Self::Cusp => 2 * n + 1,
            Self::Crossing => n + 1,
        }
    }
}

/// A system, compiled.
#[derive(Clone, Debug)]
pub(super) struct Defining {
    /// Over the moving species, every control, and its own unknowns.
    pub(super) tape: Tape,
    /// Entries of its matrix, row by row, over the moving species and every control.
    pub(super) matrix: Tape,
    /// Order of that matrix.
    pub(super) order: usize,
    pub(super) shape: Shape,
    /// How many species move, and how many controls there are.
    pub(super) counts: [usize; 2],
    pub(super) is_map: bool,
}

/// The derivative of some rows with respect to the same species, as nodes over a face.
#[derive(Clone, Debug)]
pub(super) struct Matrix {
    pub(super) entries: Vec<NodeId>,
    pub(super) order: usize,
}

impl Matrix {
    /// Fₓ of a face.
    pub(super) fn of_face(equations: &mut Equations, face: &Face) -> Self {
        let entries = slopes(&mut equations.graph, &face.rows, &face.moving);
        Self { entries, order: face.moving.len() }
    }

    /// Derivatives of the rates or the next state of those who move, at the states of the face; `None` where they have no
    /// value there.
    pub(super) fn of_rows(equations: &mut Equations, face: &Face) -> Option<Self> {
        let rows: Vec<NodeId> = face.moving.iter().map(|&i| equations.rows[i]).collect();
        let rows = at_face(equations, &rows, face)?;
        let entries = slopes(&mut equations.graph, &rows, &face.moving);
        Some(Self { entries, order: face.moving.len() })
    }

    /// Derivatives of the balance of absent species with respect to these species. A row that vanishes with its own species
    /// has its growth on the diagonal and nothing beside it.
    pub(super) fn of_absent(equations: &mut Equations, absent: &[usize], face: &Face) -> Option<Self> {
        let zero = equations.graph.zero();
        let mut entries = Vec::with_capacity(absent.len() * absent.len());
        for (place, &i) in absent.iter().enumerate() {
            if let Some(growth) = equations.divided[i] {
                entries.extend((0..absent.len()).map(|j| if j == place { growth } else { zero }));
            } else {
                let row = equations.balance[i];
                entries.extend(slopes(&mut equations.graph, &[row], absent));
            }
        }
        Some(Self { entries: at_face(equations, &entries, face)?, order: absent.len() })
    }

    /// With a number added to the diagonal.
    pub(super) fn shifted(mut self, graph: &mut Graph, shift: f64) -> Self {
        let shift = graph.constant(shift);
        for k in 0..self.order {
            let place = k * self.order + k;
            self.entries[place] = graph.add(self.entries[place], shift);
        }
        self
    }

    fn transposed(&self) -> Self {
        let n = self.order;
        Self { entries: (0..n * n).map(|k| self.entries[k % n * n + k / n]).collect(), order: n }
    }

    fn times(&self, graph: &mut Graph, vector: &[NodeId]) -> Vec<NodeId> {
        self.entries.chunks_exact(self.order.max(1)).map(|row| dot(graph, row, vector)).collect()
    }
}

impl Defining {
    /// F = 0 and this node 0.
    pub(super) fn plain(equations: &Equations, face: &Face, condition: NodeId) -> Self {
        let mut rows = face.rows.clone();
        rows.push(condition);
        let nothing = Matrix { entries: Vec::new(), order: 0 };
        Self::compiled(equations, face, &rows, &nothing, Shape::Plain)
    }

    /// F = 0, A v = 0.
    pub(super) fn kernel(equations: &mut Equations, face: &Face, matrix: &Matrix) -> Self {
        let v = spares(equations, 0, matrix.order);
        let mut rows = face.rows.clone();
        rows.extend(matrix.times(&mut equations.graph, &v));
        Self::compiled(equations, face, &rows, matrix, Shape::Kernel)
    }

    /// F = 0, A v = w, A w + a w + b v = 0.
    pub(super) fn pair(equations: &mut Equations, face: &Face, matrix: &Matrix) -> Self {
        let n = matrix.order;
        let (v, w) = (spares(equations, 0, n), spares(equations, n, n));
        let own = spares(equations, 2 * n, 1)[0];
        let is_map = equations.step.is_some();
        let graph = &mut equations.graph;
        let two = graph.constant(2.0);
        let mut rows = face.rows.clone();
        for (image, &w) in matrix.times(graph, &v).into_iter().zip(&w) {
            rows.push(graph.sub(image, w));
        }
        for (place, image) in matrix.times(graph, &w).into_iter().enumerate() {
            rows.push(if is_map {
                let turned = graph.mul(own, w[place]);
                let turned = graph.mul(two, turned);
                let rest = graph.sub(image, turned);
                graph.add(rest, v[place])
            } else {
                let back = graph.mul(own, v[place]);
                graph.add(image, back)
            });
        }
        Self::compiled(equations, face, &rows, matrix, Shape::Pair)
    }

    /// F + βψ = 0, Fₓᵀψ = 0, ψ·F_c = 0 for the control at this place.
    pub(super) fn crossing(equations: &mut Equations, face: &Face, control: usize) -> Self {
        let matrix = Matrix::of_face(equations, face);
        let n = matrix.order;
        let psi = spares(equations, 0, n);
        let beta = spares(equations, n, 1)[0];
        let control = equations.control(control);
        let graph = &mut equations.graph;
        let mut rows = Vec::with_capacity(2 * n + 1);
        for (&row, &psi) in face.rows.iter().zip(&psi) {
            let off = graph.mul(beta, psi);
            rows.push(graph.add(row, off));
        }
        rows.extend(matrix.transposed().times(graph, &psi));
        let by_control = slopes(graph, &face.rows, &[control]);
        rows.push(dot(graph, &by_control, &psi));
        Self::compiled(equations, face, &rows, &matrix, Shape::Crossing)
    }

    /// F = 0, Fₓ v = 0, Fₓᵀψ = g v, ψ·Fₓₓ(v, v) = 0.
    pub(super) fn cusp(equations: &mut Equations, face: &Face) -> Self {
        let matrix = Matrix::of_face(equations, face);
        let n = matrix.order;
        let (v, psi) = (spares(equations, 0, n), spares(equations, n, n));
        let g = spares(equations, 2 * n, 1)[0];
        let graph = &mut equations.graph;
        let along = matrix.times(graph, &v);
        let mut rows = face.rows.clone();
        for (place, image) in matrix.transposed().times(graph, &psi).into_iter().enumerate() {
            let off = graph.mul(g, v[place]);
            rows.push(graph.sub(image, off));
        }
        let second = Matrix { entries: slopes(graph, &along, &face.moving), order: n };
        let bend = second.times(graph, &v);
        rows.push(dot(graph, &bend, &psi));
        rows.extend(along);
        Self::compiled(equations, face, &rows, &matrix, Shape::Cusp)
    }

    fn compiled(equations: &Equations, face: &Face, rows: &[NodeId], matrix: &Matrix, shape: Shape) -> Self {
        let free = equations.inputs(face);
        let own = (0..shape.unknowns(matrix.order)).map(|place| equations.spare(place));
        let inputs: Vec<usize> = free.iter().copied().chain(own).collect();
        Self {
            tape: Tape::over(&equations.graph, rows, &inputs),
            matrix: Tape::over(&equations.graph, &matrix.entries, &free),
            order: matrix.order,
            shape,
            counts: [face.moving.len(), equations.controls.len()],
            is_map: equations.step.is_some(),
        }
    }
}

/// Nodes at the states of a face, all others being 0; `None` where one has no value there.
pub(super) fn at_face(equations: &mut Equations, nodes: &[NodeId], face: &Face) -> Option<Vec<NodeId>> {
    let mut moves = vec![false; equations.species];
    face.moving.iter().for_each(|&i| moves[i] = true);
    let known = restricted(&mut equations.graph, nodes, &moves);
    known.into_iter().map(|known| if let AtZero::Is(node) = known { Some(node) } else { None }).collect()
}

/// Row by row the derivatives with respect to some inputs.
fn slopes(graph: &mut Graph, rows: &[NodeId], inputs: &[usize]) -> Vec<NodeId> {
    let mut entries = Vec::with_capacity(rows.len() * inputs.len());
    for &row in rows {
        entries.extend(inputs.iter().map(|&input| graph.derivative(row, Variable::State(input))));
    }
    entries
}

fn spares(equations: &mut Equations, from: usize, count: usize) -> Vec<NodeId> {
    let inputs: Vec<usize> = (from..from + count).map(|place| equations.spare(place)).collect();
    inputs.into_iter().map(|input| equations.graph.state(input)).collect()
}

fn dot(graph: &mut Graph, a: &[NodeId], b: &[NodeId]) -> NodeId {
    let mut sum = graph.zero();
    for (&a, &b) in a.iter().zip(b) {
        let product = graph.mul(a, b);
        sum = graph.add(sum, product);
    }
    sum
}
