//! What a root of a defining system is, and whether it is what was looked for.

use crate::analysis::response::ThresholdKind;
use crate::analysis::response::defining::frame::{Sizes, row_sizes};
use crate::analysis::response::defining::kernel::kernel;
use crate::analysis::response::defining::newton::Root;
use crate::analysis::response::defining::{Defining, Shape};
use crate::analysis::response::equations::{Equations, Face};
use crate::expr::tape::Tape;
use crate::expr::tape::jet::Jet;

use super::{Event, Located, Sign};

/// A fold's left vector times the derivative by the control is at least this share of what it could be.
const TRANSVERSAL: f64 = 1e-7;

/// How far from 0 the share of rows may be that keeps a crossing from being one: rounding of parameters, and no more.
const IMPERFECT: f64 = 1e-11;

/// A pair nearer to the real axis than this share of its modulus squared is two real eigenvalues, or as good as that.
const REAL: f64 = 1e-12;

/// A quadratic coefficient smaller than this share of its terms is 0, and the crossing a pitchfork.
const SYMMETRIC: f64 = 1e-7;

/// The threshold that a root is; `None` where it is not what the event is about.
pub(super) fn judged(
    equations: &mut Equations,
    system: &Defining,
    event: &Event<'_>,
    sizes: &Sizes,
    root: Root,
) -> Option<Located> {
    let [m, k] = system.counts;
    let is_map = equations.step.is_some();
    let (kind, species) = match &event.sign {
        Sign::Turn => (is_fold(equations, event.face, sizes, &root).then_some(ThresholdKind::Fold)?, None),
        Sign::Abundance(i) => {
            let place = event.face.moving.iter().position(|moving| moving == i)?;
            let divided = event.face.is_divided[place];
            (if divided { ThresholdKind::Transcritical } else { ThresholdKind::Exit }, Some(*i))
        }
        Sign::Side(i, _) => (ThresholdKind::Exit, Some(*i)),
        Sign::Growth(i) => (ThresholdKind::Transcritical, Some(*i)),
        Sign::Block(absent) => (ThresholdKind::Transcritical, absent.first().copied()),
        Sign::Crossing => (crossing(equations, event.face, system, sizes, &root)?, None),
        Sign::Pair(_) => {
            if !is_complex(system, sizes, &root.at) {
                return None;
            }
            (if is_map { ThresholdKind::NeimarkSacker } else { ThresholdKind::Hopf }, None)
        }
        Sign::Flip(_) => (ThresholdKind::PeriodDoubling, None),
        Sign::Kink(_) => (ThresholdKind::BorderCollision, None),
    };
    let mut state = vec![0.0; equations.species];
    for (&i, &x) in event.face.moving.iter().zip(&root.at) {
        state[i] = x;
    }
    if let Sign::Abundance(i) = event.sign {
        state[i] = 0.0;
    }
    let varied = m + event.varied();
    Some(Located {
        kind,
        point: root.at[..m + k].to_vec(),
        at: root.at[varied],
        state,
        error: root.last[varied].abs(),
        species,
        kink: if let Sign::Kink(node) = event.sign { Some(node) } else { None },
        block: match &event.sign {
            Sign::Block(absent) | Sign::Pair(Some(absent)) | Sign::Flip(Some(absent)) => Some(absent.clone()),
            Sign::Growth(i) => Some(vec![*i]),
            _ => None,
        },
        unknowns: root.at,
        system: 0,
    })
}

/// Whether a root of the pair's system is a pair: its last unknown is ω², for a map cos θ.
pub(in crate::analysis::response) fn is_complex(system: &Defining, sizes: &Sizes, unknowns: &[f64]) -> bool {
    let Some(&own) = unknowns.last() else { return false };
    if system.is_map {
        return own.abs() < 1.0 - REAL;
    }
    let (free, n) = (system.free(), system.order);
    let square = |from: usize| -> f64 { (0..n).map(|i| (unknowns[from + i] / sizes.vector[i]).powi(2)).sum() };
    own > REAL * square(free + n) / square(free)
}

/// F's slopes by the moving species and by every control at a point.
fn face_slopes(tape: &Tape, values: &[f64], free: &[f64]) -> Option<(Vec<f64>, Vec<f64>)> {
    let mut run = tape.start_gradient(values);
    if !run.at(free).defined {
        return None;
    }
    let (m, n) = (tape.outputs(), free.len());
    let (mut by_species, mut by_controls) = (Vec::new(), Vec::new());
    for i in 0..m {
        let nothing = vec![0.0; n];
        let row = run.gradient(i).unwrap_or(&nothing);
        by_species.extend_from_slice(&row[..m]);
        by_controls.extend_from_slice(&row[m..]);
    }
    Some((by_species, by_controls))
}

/// The kernel of Fₓ at a point.
pub(in crate::analysis::response) struct Null {
    /// Right vector, in the sizes of species.
    pub(in crate::analysis::response) right: Vec<f64>,
    /// Left vector, in the sizes of rows.
    pub(in crate::analysis::response) left: Vec<f64>,
    /// Those.
    pub(in crate::analysis::response) rows: Vec<f64>,
    /// F's slopes by every control, row by row.
    by_controls: Vec<f64>,
}

/// The kernel of Fₓ at a point where it is nearly singular.
pub(in crate::analysis::response) fn kernel_at(
    tape: &Tape,
    values: &[f64],
    sizes: &Sizes,
    free: &[f64],
) -> Option<Null> {
    let m = tape.outputs();
    let (by_species, by_controls) = face_slopes(tape, values, free)?;
    let rows = row_sizes(&by_species, &sizes.moving);
    let scaled: Vec<f64> = (0..m * m).map(|k| by_species[k] * sizes.moving[k % m] / rows[k / m]).collect();
    let [right, left] = kernel(&scaled, m)?;
    Some(Null { right, left, rows, by_controls })
}

/// Whether the control's direction does turn: at a crossing the control does not push the state along the left vector.
fn is_fold(equations: &Equations, face: &Face, sizes: &Sizes, root: &Root) -> bool {
    let free = face.moving.len() + equations.controls.len();
    let tape = equations.tape(face);
    let found = kernel_at(&tape, &equations.values, sizes, &root.at[..free]);
    let Some(Null { left, rows, by_controls, .. }) = found else { return false };
    let k = equations.controls.len();
    let push = |control: usize| {
        let push: Vec<f64> = (0..rows.len()).map(|i| by_controls[i * k + control] / rows[i]).collect();
        let along: f64 = push.iter().zip(&left).map(|(a, b)| a * b).sum();
        let most = push.iter().map(|x| x * x).sum::<f64>().sqrt();
        along.abs() > TRANSVERSAL * most
    };
    (0..k).any(push)
}

/// Which crossing it is; `None` where branches only come near each other.
fn crossing(
    equations: &Equations,
    face: &Face,
    system: &Defining,
    sizes: &Sizes,
    root: &Root,
) -> Option<ThresholdKind> {
    debug_assert!(system.shape == Shape::Crossing, "{:?}", system.shape);
    let (m, free) = (face.moving.len(), system.free());
    let (tape, values) = (equations.tape(face), &equations.values);
    let Null { right, left, rows, .. } = kernel_at(&tape, values, sizes, &root.at[..free])?;
    let beta = root.at[free + m];
    if (0..m).any(|i| (beta * root.at[free + i]).abs() > IMPERFECT * rows[i]) {
        return None;
    }
    let [second, third] = along(&tape, values, &right, sizes, &root.at[..free])?;
    let scaled = |terms: &[f64], i: usize| left[i] * terms[i] / rows[i];
    let quadratic: f64 = (0..m).map(|i| scaled(&second, i)).sum();
    let terms: f64 = (0..m).map(|i| scaled(&second, i).abs() + scaled(&third, i).abs()).sum();
    let is_pitchfork = quadratic.abs() <= SYMMETRIC * terms;
    Some(if is_pitchfork { ThresholdKind::Pitchfork } else { ThresholdKind::Transcritical })
}

/// Second and third Taylor coefficients of F along a direction, given in the sizes of species.
pub(in crate::analysis::response) fn along(
    tape: &Tape,
    values: &[f64],
    direction: &[f64],
    sizes: &Sizes,
    free: &[f64],
) -> Option<[Vec<f64>; 2]> {
    let still = |value: &f64| Jet::line(*value, 0.0);
    let mut run = tape.start(&values.iter().map(still).collect::<Vec<_>>());
    let moved = direction.iter().zip(&sizes.moving).map(|(v, size)| v * size);
    let line: Vec<Jet<f64>> =
        free.iter().zip(moved.chain(std::iter::repeat(0.0))).map(|(&x, v)| Jet::line(x, v)).collect();
    let is_defined = run.at(&line).defined;
    let order = |k: usize| run.outputs().map(|jet| jet.0[k]).collect::<Vec<f64>>();
    let found = [order(2), order(3)];
    (is_defined && found.iter().flatten().all(|x| x.is_finite())).then_some(found)
}
