//! How state and leading eigenvalue move with each parameter.
//!
//! dx/dp = −J⁻¹ ∂f/∂p among those present, J the Jacobian of what is 0 at an equilibrium; the absent stay absent. The leading
//! eigenvalue moves with the parameter and with the state: dμ/dp = wᴴ(∂A/∂p + Σ_k ∂A/∂x_k dx_k/dp)v / wᴴv (Caswell 2001).
//! Second derivatives are exact and few: w and v being fixed, wᴴAv is a derivative along v, so one gradient of Taylor series
//! along v has Σ_i w_i ∂²f_i/∂x_k∂v for all k, and one series of each ∂f/∂p along v has ∂A/∂p v.

use nalgebra::Complex;

use super::Elasticity;
use super::press::Press;
use super::setting::Setting;
use crate::analysis::subject::Subject;
use crate::expr::graph::{Graph, NodeId, Operation, Variable};
use crate::expr::tape::Tape;
use crate::expr::tape::jet::Jet;
use crate::expr::tape::number::{Domain, Number};
use crate::model::ParameterId;

/// More derivatives than this, species times parameters, and there are no elasticities.
const MOST_SLOPES: usize = 20_000;

/// Beyond this order second derivatives take more room than they are worth.
const LARGEST: usize = 100;

/// Eigenvalues whose real parts (moduli) are nearer than this, relative to the largest modulus, are not told apart: the
/// larger of two has no derivative where they meet.
const APART: f64 = 1e-8;

/// An eigenvalue of greater condition 1/|wᴴv| has lost half of its digits, and its derivative all of them.
const MOST_CONDITION: f64 = 1e8;

/// The rows of a scenario, and their derivatives with respect to the parameters that they use.
#[derive(Clone, Debug)]
pub(super) struct Slopes {
    /// Every parameter used, in order.
    used: Vec<ParameterId>,
    /// Those of them that are not 0: an elasticity to 0 has no meaning.
    moving: Vec<ParameterId>,
    /// Derivative of row i with respect to the k-th that is moving, at k n + i.
    nodes: Vec<NodeId>,
    /// Of all these nodes.
    joint: Tape,
    rows: Tape,
}

impl Slopes {
    pub(super) fn new(subject: &mut Subject<'_>) -> Self {
        let plan = subject.plan;
        let graph = &mut subject.graph;
        let used = used(graph, &plan.rows);
        let is_moving = |id: &&ParameterId| plan.values[id.0] != 0.0;
        let mut moving: Vec<ParameterId> = used.iter().filter(is_moving).copied().collect();
        if moving.len() * plan.rows.len() > MOST_SLOPES {
            moving.clear();
        }
        let mut nodes = Vec::with_capacity(moving.len() * plan.rows.len());
        for id in &moving {
            nodes.extend(plan.rows.iter().map(|&row| graph.derivative(row, Variable::Parameter(id.0))));
        }
        let (joint, rows) = (Tape::new(graph, &nodes), Tape::new(graph, &plan.rows));
        Self { used, moving, nodes, joint, rows }
    }

    /// For each that is moving, what it does to the rates and to A v; `None` where that has no value.
    fn partials(&self, graph: &Graph, at: At<'_>, v: Option<&[Complex<f64>]>) -> Vec<Option<Partial>> {
        if let Some(all) = partials(&self.joint, at, v) {
            return all.into_iter().map(Some).collect();
        }
        // One that has no value here must not take the others with it, nor its part in A that in the rates.
        let alone = |nodes: &[NodeId]| {
            let tape = Tape::new(graph, nodes);
            partials(&tape, at, v).or_else(|| partials(&tape, at, None))?.pop()
        };
        self.nodes.chunks_exact(at.state.len()).map(alone).collect()
    }
}

/// The parameters that rows use.
fn used(graph: &Graph, rows: &[NodeId]) -> Vec<ParameterId> {
    let parameter = |node| match graph.operation(node) {
        Operation::Parameter(i) => Some(ParameterId(i)),
        _ => None,
    };
    let mut used: Vec<ParameterId> = graph.reachable(rows).into_iter().filter_map(parameter).collect();
    used.sort_unstable();
    used
}

/// Where tapes are run.
#[derive(Clone, Copy)]
struct At<'a> {
    parameters: &'a [f64],
    state: &'a [f64],
}

/// What a parameter does.
struct Partial {
    /// ∂f/∂p.
    rates: Vec<f64>,
    /// ∂A/∂p v, where v was given.
    turned: Option<Vec<Complex<f64>>>,
}

/// One elasticity a parameter in use.
pub(super) fn of(
    slopes: &Slopes,
    subject: &Subject<'_>,
    setting: &Setting<'_>,
    stop: &dyn Fn() -> bool,
) -> Vec<Elasticity> {
    let at = At { parameters: &subject.plan.values, state: setting.state };
    let leading = Leading::new(setting, &slopes.rows, at);
    let press = Press::new(setting, &setting.present, stop).filter(|press| !press.is_nearly_singular());
    let v = leading.as_ref().map(|leading| &leading.right[..]);
    let partials = slopes.partials(&subject.graph, at, v);
    let mut moving = slopes.moving.iter().zip(partials).peekable();
    let one = |&parameter: &ParameterId| {
        let mut found = Elasticity { parameter, state: vec![None; setting.n], leading: None };
        let partial = moving.next_if(|(id, _)| **id == parameter).and_then(|(_, partial)| partial);
        let (Some(partial), Some(press)) = (partial, &press) else { return found };
        let shift = shift(setting, press, &partial.rates);
        let value = at.parameters[parameter.0];
        let relative = |i: usize| Some(shift[i] * (value / setting.state[i])).filter(|x| x.is_finite());
        setting.present.iter().for_each(|&i| found.state[i] = relative(i));
        found.leading = leading.as_ref().and_then(|leading| leading.elasticity(&partial, &shift, value, setting));
        found
    };
    slopes.used.iter().map(one).collect()
}

/// dx/dp, 0 for the absent.
fn shift(setting: &Setting<'_>, press: &Press, rates: &[f64]) -> Vec<f64> {
    let present: Vec<f64> = setting.present.iter().map(|&i| rates[i]).collect();
    let mut shift = vec![0.0; setting.n];
    for (&i, answer) in setting.present.iter().zip(press.answer(&present)) {
        shift[i] = answer;
    }
    shift
}

/// The leading eigenvalue, where it has a derivative.
struct Leading {
    value: Complex<f64>,
    right: Vec<Complex<f64>>,
    /// wᴴ/(wᴴv).
    left: Vec<Complex<f64>>,
    /// wᴴ ∂A/∂x_k v/(wᴴv) for each k.
    bent: Vec<Complex<f64>>,
    discrete: bool,
}

impl Leading {
    /// `None` where it is not simple, 0, critical, or the rates have no second derivative.
    fn new(setting: &Setting<'_>, rows: &Tape, at: At<'_>) -> Option<Self> {
        let (n, spectrum) = (setting.n, &setting.linear.spectrum);
        let (&value, vectors) = (spectrum.values.first()?, spectrum.vectors.as_ref()?);
        let discrete = setting.step.is_some();
        if n > LARGEST || !is_alone(&spectrum.values, discrete) || *vectors.condition.first()? > MOST_CONDITION {
            return None;
        }
        let column = |of: &[Complex<f64>]| -> Vec<Complex<f64>> { (0..n).map(|i| of[i * n]).collect() };
        let right = column(&vectors.right);
        let mut left: Vec<Complex<f64>> = column(&vectors.left).iter().map(Complex::conj).collect();
        let overlap: Complex<f64> = left.iter().zip(&right).map(|(w, v)| w * v).sum();
        for w in &mut left {
            *w /= overlap;
        }
        let bends = along(&right, |direction| bends(rows, at, direction))?;
        let bent = (0..n).map(|k| (0..n).map(|i| left[i] * bends[i * n + k]).sum()).collect();
        Some(Self { value, right, left, bent, discrete })
    }

    /// (p/μ) dμ/dp for μ = Re λ, for a map |λ|.
    fn elasticity(&self, partial: &Partial, shift: &[f64], parameter: f64, setting: &Setting<'_>) -> Option<f64> {
        let turned = partial.turned.as_ref()?;
        let direct: Complex<f64> = self.left.iter().zip(turned).map(|(w, x)| w * x).sum();
        let through: Complex<f64> = self.bent.iter().zip(shift).map(|(bent, dx)| bent * dx).sum();
        let slope = direct + through;
        let dimensions = setting.linear.dimensions;
        let is_critical = dimensions.unstable == 0 && dimensions.centre > 0;
        let relative = if self.discrete {
            (slope / self.value).re * parameter
        } else if is_critical {
            return None;
        } else {
            slope.re / self.value.re * parameter
        };
        relative.is_finite().then_some(relative)
    }
}

/// Whether no other eigenvalue but the first one's conjugate leads as much.
fn is_alone(values: &[Complex<f64>], discrete: bool) -> bool {
    let size = |value: &Complex<f64>| if discrete { value.norm() } else { value.re };
    let largest = values.iter().fold(0.0f64, |largest, value| largest.max(value.norm()));
    let [first, rest @ ..] = values else { return false };
    let others = rest.iter().skip(usize::from(first.im != 0.0));
    others.into_iter().all(|value| size(first) - size(value) > APART * largest)
}

/// Something linear in a direction, along a complex one.
fn along(direction: &[Complex<f64>], of: impl Fn(&[f64]) -> Option<Vec<f64>>) -> Option<Vec<Complex<f64>>> {
    let part = |take: fn(&Complex<f64>) -> f64| -> Vec<f64> { direction.iter().map(take).collect() };
    let real = of(&part(|v| v.re))?;
    if direction.iter().all(|v| v.im == 0.0) {
        return Some(real.into_iter().map(Complex::from).collect());
    }
    let imaginary = of(&part(|v| v.im))?;
    Some(real.into_iter().zip(imaginary).map(|(re, im)| Complex::new(re, im)).collect())
}

/// Row i, column k: the second derivative of f_i with respect to x_k and along the direction.
fn bends(rows: &Tape, at: At<'_>, direction: &[f64]) -> Option<Vec<f64>> {
    let n = at.state.len();
    let mut run = rows.start_gradient(&still(at.parameters));
    let domain = run.at(&line(at.state, direction));
    let row = |i: usize| match run.gradient(i) {
        Some(slopes) => slopes.iter().map(|slope| slope.0[1]).collect(),
        None => vec![0.0; n],
    };
    usable(domain, (0..n).flat_map(row).collect())
}

/// Of each n outputs of the tape, see [`Partial`].
fn partials(tape: &Tape, at: At<'_>, v: Option<&[Complex<f64>]>) -> Option<Vec<Partial>> {
    let n = at.state.len();
    let mut run = tape.start(at.parameters);
    let domain = run.at(at.state);
    let rates = usable(domain, run.outputs().copied().collect())?;
    let turned = v.map(|v| along(v, |direction| moved(tape, at, direction)));
    let turned = match turned {
        Some(turned) => Some(turned?),
        None => None,
    };
    let rates = rates.chunks_exact(n).map(<[f64]>::to_vec);
    let turned = |k: usize| turned.as_ref().map(|turned| turned[k * n..(k + 1) * n].to_vec());
    Some(rates.enumerate().map(|(k, rates)| Partial { rates, turned: turned(k) }).collect())
}

/// The derivative of each output along the direction.
fn moved(tape: &Tape, at: At<'_>, direction: &[f64]) -> Option<Vec<f64>> {
    let mut run = tape.start(&still(at.parameters));
    let domain = run.at(&line(at.state, direction));
    usable(domain, run.outputs().map(|output| output.0[1]).collect())
}

fn still(parameters: &[f64]) -> Vec<Jet<f64>> {
    parameters.iter().map(|&p| Jet::constant(p)).collect()
}

fn line(state: &[f64], direction: &[f64]) -> Vec<Jet<f64>> {
    state.iter().zip(direction).map(|(&x, &v)| Jet::line(x, v)).collect()
}

fn usable(domain: Domain, values: Vec<f64>) -> Option<Vec<f64>> {
    (domain.defined && domain.smooth && values.iter().all(|x| x.is_finite())).then_some(values)
}
