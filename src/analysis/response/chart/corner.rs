//! Points on curves of thresholds at which two conditions hold at once: cusp, Bogdanov–Takens, generalised Hopf.
//!
//! Each is seen by a change of sign between two points of a curve and located by a system of its own. On a fold, with Fₓ v =
//! 0 and ψ Fₓ = 0: a cusp where ψ·Fₓₓ(v, v) = 0, a double eigenvalue 0 where left and right vector of the Jacobian are at right
//! angles, which for a row divided by x_i is Σ ψ_i v_i/x_i = 0. On a Hopf curve: where ω = 0, and where the first Lyapunov
//! coefficient is 0 (Kuznetsov 2004, ch. 8 and 10).

use crate::analysis::response::ThresholdKind;
use crate::analysis::response::defining::frame::{Sizes, times};
use crate::analysis::response::defining::kernel::kernel;
use crate::analysis::response::defining::newton::{Linear, Newton, Root};
use crate::analysis::response::defining::{Defining, Matrix};
use crate::analysis::response::equations::{Equations, Face};
use crate::analysis::response::locate::describe::Describer;
use crate::analysis::response::locate::judge::{Null, along, kernel_at};

use crate::expr::tape::Tape;

use super::trace::{Place, Tracer};

/// A root further than this many of the step's lengths from it is another point.
const NEARBY: f64 = 3.0;

/// An abundance this share of its size is 0.
const ABSENT: f64 = 1e-6;

/// A point that was located.
#[derive(Clone, Debug)]
pub(super) struct Corner {
    pub(super) kind: ThresholdKind,
    /// Abundances of those who move, then both controls.
    pub(super) free: Vec<f64>,
    pub(super) error: f64,
    /// Of a double eigenvalue 0, every unknown of the pair's system.
    pub(super) pair: Option<Vec<f64>>,
}

/// The systems that points on a fold curve are roots of; none for those that cannot be set up on the face.
pub(super) struct Corners {
    cusp: Defining,
    /// `None` also for maps, where the pair on the circle has no name of ours.
    double: Option<Defining>,
}

/// What changes sign along a fold curve, and the vectors by which signs are kept from one point to the next.
struct Signs {
    bend: f64,
    double: f64,
    right: Vec<f64>,
    left: Vec<f64>,
}

impl Corners {
    pub(super) fn new(equations: &mut Equations, face: &Face) -> Self {
        let is_map = equations.step.is_some();
        let matrix = if is_map { None } else { Matrix::of_rows(equations, face) };
        Self {
            cusp: Defining::cusp(equations, face),
            double: matrix.map(|matrix| Defining::pair(equations, face, &matrix)),
        }
    }

    /// Cusps and double eigenvalues 0 between the points of a fold curve.
    pub(super) fn on_fold(
        &self,
        equations: &Equations,
        face: &Face,
        tracer: &mut Tracer<'_>,
        places: &[Place],
    ) -> Vec<Corner> {
        let (tape, values) = (equations.tape(face), &equations.values);
        let mut found = Vec::new();
        let mut before: Option<(Signs, &Place)> = None;
        for place in places {
            let sizes = tracer.sizes(&place.at);
            let now = signs(&tape, values, face, &sizes, place, before.as_ref().map(|(signs, _)| signs));
            if let (Some(now), Some((then, last))) = (&now, &before) {
                let length = super::trace::length(last, place);
                // As near as the curve itself leads, for these systems have narrow surroundings.
                let mut nearest = |number: &dyn Fn(&Signs) -> f64| {
                    let mut at =
                        |at: &Place| signs(&tape, values, face, &sizes, at, Some(then)).map(|signs| number(&signs));
                    if !changes(number(then), number(now)) {
                        return None;
                    }
                    // A number that is 0 at an end may have no sign to change by when it is worked out again.
                    let end = if number(then).abs() < number(now).abs() { *last } else { place };
                    Some(tracer.between(last, length, &mut at).1.unwrap_or_else(|| end.clone()))
                };
                let (bend, double) = (nearest(&|signs| signs.bend), nearest(&|signs| signs.double));
                found.extend(bend.and_then(|at| self.cusp_at(equations, tracer, &at, [last, place])));
                found.extend(double.and_then(|at| self.double_at(equations, tracer, &at, [last, place])));
            }
            before = now.map(|signs| (signs, place));
        }
        found
    }

    fn cusp_at(&self, equations: &Equations, tracer: &Tracer<'_>, at: &Place, ends: [&Place; 2]) -> Option<Corner> {
        let free = at.at[..self.cusp.free()].to_vec();
        let sizes = tracer.sizes(&free);
        let mut start = self.cusp.starts(&equations.values, &free, &sizes).into_iter().next()?;
        let frame = self.cusp.frame(&equations.values, &mut start, &sizes)?;
        let root = Newton::new(&self.cusp.tape, &equations.values).root(&start, &frame.scale, &frame.linear)?;
        corner(ThresholdKind::Cusp, &self.cusp, &root, ends, &frame.scale)
    }

    /// The double eigenvalue: from v with A v = w and w in the kernel of A.
    fn double_at(&self, equations: &Equations, tracer: &Tracer<'_>, at: &Place, ends: [&Place; 2]) -> Option<Corner> {
        let system = self.double.as_ref()?;
        let free = at.at[..system.free()].to_vec();
        let sizes = tracer.sizes(&free);
        let n = system.order;
        let matrix = system.matrix_at(&equations.values, &free)?;
        let alike: Vec<f64> = (0..n * n).map(|k| matrix[k] * sizes.vector[k % n] / sizes.vector[k / n]).collect();
        let [right, left] = kernel(&alike, n)?;
        let vector = generalised(&alike, &right, &left)?;
        let vector: Vec<f64> = vector.iter().zip(&sizes.vector).map(|(v, size)| v * size).collect();
        let image = times(&matrix, &vector);
        let start: Vec<f64> = free.iter().chain(&vector).chain(&image).copied().chain([0.0]).collect();
        self.double_from(equations, tracer, start, ends)
    }

    /// The double eigenvalue 0 near a full set of unknowns of the pair's system.
    pub(super) fn double_from(
        &self,
        equations: &Equations,
        tracer: &Tracer<'_>,
        mut start: Vec<f64>,
        ends: [&Place; 2],
    ) -> Option<Corner> {
        let system = self.double.as_ref()?;
        let sizes = tracer.sizes(&start);
        let frame = system.frame(&equations.values, &mut start, &sizes)?;
        let mut row = vec![0.0; start.len()];
        *row.last_mut()? = 1.0;
        let linear: Vec<Linear> = frame.linear.iter().cloned().chain([Linear { row, value: 0.0 }]).collect();
        let root = Newton::new(&system.tape, &equations.values).root(&start, &frame.scale, &linear)?;
        // With somebody absent the two eigenvalues are 0 apart from each other, on two curves that meet.
        let absent = |i: usize| root.at[i].abs() <= ABSENT * sizes.moving[i];
        if (0..system.counts[0]).any(absent) {
            return None;
        }
        let unknowns = root.at.clone();
        let corner = corner(ThresholdKind::BogdanovTakens, system, &root, ends, &frame.scale)?;
        Some(Corner { pair: Some(unknowns), ..corner })
    }
}

/// Where the first Lyapunov coefficient is 0 between the points of a Hopf curve.
pub(super) fn on_hopf(
    describer: &mut Describer,
    face: &Face,
    tracer: &mut Tracer<'_>,
    places: &[Place],
) -> Vec<Corner> {
    let species = describer.species();
    let [m, _] = tracer.system.counts;
    let mut coefficient = |place: &Place| {
        let mut state = vec![0.0; species];
        face.moving.iter().zip(&place.at).for_each(|(&i, &x)| state[i] = x);
        describer.lyapunov(&state, &place.at[m..m + 2]).map(|(value, _)| value)
    };
    let values: Vec<Option<f64>> = places.iter().map(&mut coefficient).collect();
    let mut found = Vec::new();
    for k in 1..places.len() {
        let (Some(a), Some(b)) = (values[k - 1], values[k]) else { continue };
        if !changes(a, b) {
            continue;
        }
        let length = super::trace::length(&places[k - 1], &places[k]);
        let (_, place) = tracer.between(&places[k - 1], length, &mut coefficient);
        let Some(place) = place else { continue };
        found.push(Corner {
            kind: ThresholdKind::GeneralisedHopf,
            free: place.at[..m + 2].to_vec(),
            error: place.error,
            pair: None,
        });
    }
    found
}

fn signs(
    tape: &Tape,
    values: &[f64],
    face: &Face,
    sizes: &Sizes,
    place: &Place,
    before: Option<&Signs>,
) -> Option<Signs> {
    let free = &place.at[..sizes.moving.len() + sizes.controls.len()];
    let Null { mut right, mut left, rows, .. } = kernel_at(tape, values, sizes, free)?;
    if let Some(before) = before {
        for (vector, last) in [(&mut right, &before.right), (&mut left, &before.left)] {
            let along: f64 = vector.iter().zip(last).map(|(a, b)| a * b).sum();
            if along < 0.0 {
                for x in vector.iter_mut() {
                    *x = -*x;
                }
            }
        }
    }
    let [second, _] = along(tape, values, &right, sizes, free)?;
    let m = rows.len();
    // Multiplied by all the abundances of divided rows: the same sign, and no division where one goes to 0.
    let factor = |i: usize| if face.is_divided[i] { free[i] / sizes.moving[i] } else { 1.0 };
    let unit = |i: usize| if face.is_divided[i] { 1.0 } else { sizes.moving[i] };
    let others = |i: usize| (0..m).filter(|&j| j != i).map(factor).product::<f64>();
    Some(Signs {
        bend: (0..m).map(|i| left[i] * second[i] / rows[i]).sum(),
        double: (0..m).map(|i| left[i] / rows[i] * right[i] * unit(i) * others(i)).sum(),
        right,
        left,
    })
}

/// Whether a sign changes; 0 counts as above, so that a point on the spot is met once.
fn changes(a: f64, b: f64) -> bool {
    (a < 0.0) != (b < 0.0)
}

/// v with A v = the right vector, at right angles to it; by a bordered system.
fn generalised(matrix: &[f64], right: &[f64], left: &[f64]) -> Option<Vec<f64>> {
    let n = right.len();
    let mut entries = Vec::with_capacity((n + 1) * (n + 1));
    for (row, left) in matrix.chunks_exact(n.max(1)).zip(left) {
        entries.extend_from_slice(row);
        entries.push(*left);
    }
    entries.extend_from_slice(right);
    entries.push(0.0);
    let mut vector: Vec<f64> = right.iter().copied().chain([0.0]).collect();
    crate::analysis::passage::solve(&mut entries, &mut vector)?;
    vector.pop();
    vector.iter().all(|x| x.is_finite()).then_some(vector)
}

/// A root as a point, if it is near the step on which it was looked for.
fn corner(kind: ThresholdKind, system: &Defining, root: &Root, [a, b]: [&Place; 2], scale: &[f64]) -> Option<Corner> {
    let [m, _] = system.counts;
    let free = system.free();
    let length = (0..free).fold(0.0f64, |most, j| most.max(((b.at[j] - a.at[j]) / scale[j]).abs()));
    let off = (0..free).fold(0.0f64, |most, j| most.max(((root.at[j] - a.at[j]) / scale[j]).abs()));
    let error = root.last[m].abs().max(root.last[m + 1].abs());
    let found = Corner { kind, free: root.at[..free].to_vec(), error, pair: None };
    (off <= NEARBY * length).then_some(found)
}
