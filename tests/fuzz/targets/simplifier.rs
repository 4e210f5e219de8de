//! Any formula at any point: what the graph makes of it against the formula as it was written.
//!
//! All is enclosed in intervals, and enclosures of one real number must meet. Checked are the simplified row and where it
//! is defined, the row at x = 0, the row divided by x, and the derivatives of both by the mean value theorem: the rise
//! between two points is the distance times some value of the derivative between them.
#![no_main]

mod written;

use libfuzzer_sys::fuzz_target;
use restpoint::expr::ast::Expr;
use restpoint::expr::graph::divide::AtZero;
use restpoint::expr::graph::{Graph, NodeId, Variable};
use restpoint::expr::tape::Tape;
use restpoint::num::interval::Interval;
use written::{Bytes, NAMES, Written};

/// A state at which a formula with a pole or a border has it somewhere else.
const ELSEWHERE: [f64; 2] = [1.371_234, 2.113_571];

/// One formula in a graph, and the numbers to look at it with.
struct Case {
    expr: Expr,
    graph: Graph,
    parameters: [f64; 2],
    y: f64,
}

impl Case {
    /// As written, at this x.
    fn written(&self, [x, y]: [f64; 2]) -> Written {
        Written::of(&self.expr, &[x, y, self.parameters[0], self.parameters[1]].map(Interval::point))
    }

    /// A node's enclosure, where it is defined and continuous over this x.
    fn enclosed(&self, node: NodeId, x: Interval) -> Option<Interval> {
        let tape = Tape::new(&self.graph, &[node]);
        let mut run = tape.start(&self.parameters.map(Interval::point));
        let defined = run.at(&[x, Interval::point(self.y)]).defined;
        defined.then(|| *run.output(0))
    }

    fn meet(&self, what: &str, x: f64, [a, b]: [Interval; 2]) {
        let (y, parameters) = (self.y, self.parameters);
        assert!(!a.intersect(b).is_empty(), "{}: {what} at {x}, {y}, {parameters:?}: {a:?}, {b:?}", self.expr);
    }

    /// The simplified row is the written one, and is defined nowhere else.
    fn same_value(&self, row: NodeId, x: f64) {
        let written = self.written([x, self.y]);
        let simplified = self.enclosed(row, Interval::point(x));
        if let (true, Some(simplified)) = (written.defined, simplified) {
            self.meet("value", x, [written.value, simplified]);
        }
        // What is undefined at every state is the parameters' doing, and a rule may drop it.
        if written.undefined && self.written(ELSEWHERE).defined {
            assert!(simplified.is_none(), "{} is undefined at {x}, {}, {:?}", self.expr, self.y, self.parameters);
        }
    }

    /// The limit at x = 0 is the value there, where there is one.
    fn same_at_zero(&mut self, row: NodeId) {
        let AtZero::Is(start) = self.graph.at_zero(row, 0) else { return };
        let written = self.written([0.0, self.y]);
        if let (true, Some(start)) = (written.defined, self.enclosed(start, Interval::ZERO)) {
            self.meet("value at zero", 0.0, [written.value, start]);
        }
    }

    /// The divided row times x is the row.
    fn same_product(&self, quotient: NodeId, x: f64) {
        let written = self.written([x, self.y]);
        if let (true, Some(quotient)) = (written.defined && x > 0.0, self.enclosed(quotient, Interval::point(x))) {
            self.meet("divided", x, [written.value, quotient * Interval::point(x)]);
        }
    }

    /// The mean value theorem, for a node that is continuous between two points.
    fn mean_value(&mut self, what: &str, node: NodeId, [low, high]: [f64; 2]) {
        let slope = self.graph.derivative(node, Variable::State(0));
        let between = Interval::new(low, high);
        let (Some(_), Some(slope)) = (self.enclosed(node, between), self.enclosed(slope, between)) else { return };
        let ends = [low, high].map(|x| self.enclosed(node, Interval::point(x)));
        if let [Some(begin), Some(end)] = ends {
            let run = Interval::point(high) - Interval::point(low);
            self.meet(what, low, [end - begin, slope * run]);
        }
    }
}

fuzz_target!(|bytes: &[u8]| {
    let mut bytes = Bytes(bytes);
    let [x, other, y, a, b]: [f64; 5] = std::array::from_fn(|_| bytes.number());
    let domains = [a, b].map(|value| bytes.domain(value));
    let expr = bytes.tree(4);
    let mut graph = Graph::new(2, domains.to_vec());
    let row = graph.read(&expr, &mut |graph, name| match NAMES.iter().position(|known| *known == name) {
        Some(i @ (0 | 1)) => graph.state(i),
        i => graph.parameter(i.unwrap_or(2) - 2),
    });
    let mut case = Case { expr, graph, parameters: [a, b], y };
    let ends = [x.min(other), x.max(other)];
    case.same_value(row, x);
    case.mean_value("derivative", row, ends);
    // Limits are taken with every other state positive.
    if y == 0.0 {
        return;
    }
    case.same_at_zero(row);
    if let Some(quotient) = case.graph.divide(row, 0).quotient {
        case.same_product(quotient, x);
        case.mean_value("derivative of the divided row", quotient, ends);
    }
});
