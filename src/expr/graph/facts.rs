//! What is known of a node for all states ≥ 0 and all parameters in their domains.
//!
//! Rules ask here before they drop a factor, cancel a quotient or take a zero for a zero; a fact that is not certain is
//! simply not claimed. Facts are about states: a parameter that leaves the model undefined (a divisor of 0) does so at every
//! state alike, and no rule minds it. Ranges are rigorous (interval arithmetic); signs refine them where all states are *strictly*
//! positive, which is how a face of the orthant is looked at from inside.

use super::{Graph, NodeId, Operation};
use crate::expr::function::Function;
use crate::num::interval::{self, Interval};
use crate::num::quotient;

/// Which signs a quantity may take.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Signs {
    /// It may be < 0.
    pub negative: bool,
    /// It may be 0.
    pub zero: bool,
    /// It may be > 0.
    pub positive: bool,
}

impl Signs {
    const ANY: Self = Self { negative: true, zero: true, positive: true };
    const POSITIVE: Self = Self { negative: false, zero: false, positive: true };

    /// Whether it is never 0.
    pub fn nonzero(self) -> bool {
        !self.zero
    }

    /// Whether it is always > 0.
    pub fn strictly_positive(self) -> bool {
        !self.zero && !self.negative
    }

    fn of(range: Interval) -> Self {
        Self { negative: range.lo() < 0.0, zero: range.contains(0.0), positive: range.hi() > 0.0 }
    }

    fn and(self, other: Self) -> Self {
        Self {
            negative: self.negative && other.negative,
            zero: self.zero && other.zero,
            positive: self.positive && other.positive,
        }
    }

    fn or(self, other: Self) -> Self {
        Self {
            negative: self.negative || other.negative,
            zero: self.zero || other.zero,
            positive: self.positive || other.positive,
        }
    }

    fn negated(self) -> Self {
        Self { negative: self.positive, zero: self.zero, positive: self.negative }
    }

    fn plus(self, other: Self) -> Self {
        let opposed = (self.negative && other.positive) || (self.positive && other.negative);
        Self {
            negative: self.negative || other.negative,
            zero: (self.zero && other.zero) || opposed,
            positive: self.positive || other.positive,
        }
    }

    fn times(self, other: Self) -> Self {
        Self {
            negative: (self.negative && other.positive) || (self.positive && other.negative),
            zero: self.zero || other.zero,
            positive: (self.positive && other.positive) || (self.negative && other.negative),
        }
    }
}

/// What is known of one node.
#[derive(Clone, Copy, Debug, PartialEq)]
#[expect(clippy::struct_excessive_bools, reason = "facts that hold or not, each by itself")]
pub struct Facts {
    /// Its values lie in here, wherever it is defined.
    pub range: Interval,
    /// It is defined, finite and continuous at every state ≥ 0, if at any.
    pub total: bool,
    /// The same at every state > 0.
    pub total_inside: bool,
    /// The signs that it may take at states > 0.
    pub inside: Signs,
    /// Whether it depends on a state.
    pub state_dependent: bool,
    /// Whether it depends on an abundance, and not just on parameters that move as states do.
    abundance_dependent: bool,
    /// Bit i mod 64 is set where it depends on state i.
    states: u64,
}

impl Facts {
    /// Whether it may depend on this state.
    pub fn may_depend_on(&self, state: usize) -> bool {
        self.states & (1 << (state % 64)) != 0
    }

    /// Whether it is never 0 where it is defined, for states ≥ 0.
    pub fn nonzero(&self) -> bool {
        !self.range.contains(0.0)
    }
}

/// The facts of an operation on nodes whose facts are known.
pub(super) fn of(graph: &Graph, operation: &Operation<NodeId>) -> Facts {
    let mut defined = true;
    let range = range(graph, operation, &mut defined);
    let operands: Vec<Facts> = operation.operands().into_iter().flatten().map(|node| *graph.facts(node)).collect();
    let mut defined_inside = defined;
    let inside = if operands.is_empty() {
        leaf_signs(graph, operation, range)
    } else {
        signs(operation, &operands, &mut defined_inside).and(Signs::of(range))
    };
    let state_dependent = matches!(operation, Operation::State(_) | Operation::Interaction { .. })
        || operands.iter().any(|f| f.state_dependent);
    let abundance_dependent = match operation {
        Operation::State(i) => graph.domain_beyond(*i).is_none(),
        Operation::Interaction { .. } => true,
        _ => operands.iter().any(|f| f.abundance_dependent),
    };
    // Where it depends on parameters alone whether this is defined, it is so at every state or at none.
    let by_parameters = !abundance_dependent || divides_by_fixed(operation, &operands);
    Facts {
        range,
        total: (defined || by_parameters) && operands.iter().all(|f| f.total),
        total_inside: (defined_inside || by_parameters) && operands.iter().all(|f| f.total_inside),
        inside,
        state_dependent,
        abundance_dependent,
        states: leaf_states(operation) | operands.iter().fold(0, |all, f| all | f.states),
    }
}

fn divides_by_fixed(operation: &Operation<NodeId>, operands: &[Facts]) -> bool {
    matches!(operation, Operation::Div(..)) && !operands[1].abundance_dependent
}

fn leaf_states(operation: &Operation<NodeId>) -> u64 {
    match operation {
        Operation::State(i) => 1 << (i % 64),
        Operation::Interaction { .. } => u64::MAX,
        _ => 0,
    }
}

fn leaf_signs(graph: &Graph, operation: &Operation<NodeId>, range: Interval) -> Signs {
    match operation {
        Operation::State(i) if graph.domain_beyond(*i).is_none() => Signs::POSITIVE,
        _ => Signs::of(range),
    }
}

impl Graph {
    /// The domain of a state that is no abundance.
    fn domain_beyond(&self, state: usize) -> Option<Interval> {
        let abundances = self.states - self.beyond.len();
        self.beyond.get(state.checked_sub(abundances)?).copied()
    }
}

/// Enclosure over the whole domain; clears `defined` where the operation itself is not defined and continuous there.
fn range(graph: &Graph, operation: &Operation<NodeId>, defined: &mut bool) -> Interval {
    let r = |node: NodeId| graph.facts(node).range;
    match *operation {
        Operation::Constant(value) => Interval::point(value.get()),
        Operation::State(i) => graph.domain_beyond(i).unwrap_or(Interval::new(0.0, f64::INFINITY)),
        Operation::Parameter(i) => graph.parameters[i],
        Operation::Neg(a) => -r(a),
        Operation::Add(a, b) => r(a) + r(b),
        Operation::Sub(a, b) => r(a) - r(b),
        Operation::Mul(a, b) => r(a) * r(b),
        Operation::Div(a, b) => r(a).div(r(b), defined),
        Operation::PowInt(a, n) => r(a).powi(n, defined),
        Operation::Pow(a, b) => r(a).pow(r(b), defined),
        Operation::Apply(function, a) => function.interval(r(a), defined),
        Operation::Min(a, b) => r(a).min(r(b)),
        Operation::Max(a, b) => r(a).max(r(b)),
        Operation::Select([a, b, x, y]) => interval::select(r(a), r(b), r(x), r(y), defined),
        Operation::Saturation([s, c, v]) => interval::saturation(r(s), r(c), r(v), defined),
        Operation::Quotient(quotient, k, u) => quotient.interval(k, r(u), defined),
        Operation::PowerQuotient(k, u, p) => {
            quotient::quotient(quotient::Quotient::Powm1, u32::from(k), r(u), r(p), defined)
        }
        Operation::Interaction { .. } => Interval::ENTIRE,
    }
}

/// Signs at states > 0. Sets `defined` where strict signs prove what the closed range could not.
fn signs(operation: &Operation<NodeId>, f: &[Facts], defined: &mut bool) -> Signs {
    match operation {
        Operation::Neg(_) => f[0].inside.negated(),
        Operation::Add(..) => f[0].inside.plus(f[1].inside),
        Operation::Sub(..) => f[0].inside.plus(f[1].inside.negated()),
        Operation::Mul(..) => f[0].inside.times(f[1].inside),
        Operation::Div(..) => {
            *defined |= f[1].inside.nonzero();
            f[0].inside.times(Signs { zero: false, ..f[1].inside })
        }
        Operation::PowInt(_, n) => {
            *defined |= f[0].inside.nonzero();
            if n % 2 == 0 { f[0].inside.times(f[0].inside) } else { f[0].inside }
        }
        Operation::Pow(..) => {
            *defined |= f[0].inside.strictly_positive();
            Signs { negative: false, ..f[0].inside }
        }
        Operation::Apply(function, _) => {
            *defined |=
                matches!(function, Function::Ln | Function::Log10 | Function::Sqrt) && f[0].inside.strictly_positive();
            match function {
                Function::Exp => Signs::POSITIVE,
                _ if function.keeps_sign() => f[0].inside,
                _ => Signs::ANY,
            }
        }
        Operation::Quotient(_, 0, _) => Signs::POSITIVE,
        Operation::Min(..) => Signs {
            negative: f[0].inside.negative || f[1].inside.negative,
            zero: f[0].inside.zero || f[1].inside.zero,
            positive: f[0].inside.positive && f[1].inside.positive,
        },
        Operation::Max(..) => Signs {
            negative: f[0].inside.negative && f[1].inside.negative,
            zero: f[0].inside.zero || f[1].inside.zero,
            positive: f[0].inside.positive || f[1].inside.positive,
        },
        Operation::Select(_) => f[2].inside.or(f[3].inside),
        Operation::Saturation(_) => {
            let denominator = f[2].inside.plus(f[1].inside.times(f[0].inside));
            *defined |= denominator.nonzero();
            f[0].inside.times(Signs { zero: false, ..denominator })
        }
        _ => Signs::ANY,
    }
}
