//! From a syntax tree to nodes.

use super::{Graph, NodeId};
use crate::expr::ast::{BinaryOp, Expr, ExprKind};

impl Graph {
    /// The node of a formula; `name` says what each name stands for. A hole counts as 0: a checked formula has none.
    ///
    /// Recursive, which the parser's limit on the height of a tree makes safe.
    pub fn read(&mut self, expr: &Expr, name: &mut dyn FnMut(&mut Self, &str) -> NodeId) -> NodeId {
        match &expr.kind {
            ExprKind::Number(value) => self.constant(*value),
            ExprKind::Name(found) => name(self, found),
            ExprKind::Neg(a) => {
                let a = self.read(a, name);
                self.neg(a)
            }
            ExprKind::Binary(op, a, b) => {
                let (a, b) = (self.read(a, name), self.read(b, name));
                match op {
                    BinaryOp::Add => self.add(a, b),
                    BinaryOp::Sub => self.sub(a, b),
                    BinaryOp::Mul => self.mul(a, b),
                    BinaryOp::Div => self.div(a, b),
                    BinaryOp::Pow => self.pow(a, b),
                }
            }
            ExprKind::Call(builtin, arguments) => {
                let arguments: Vec<NodeId> = arguments.iter().map(|argument| self.read(argument, name)).collect();
                (builtin.row().build)(self, &arguments)
            }
            ExprKind::Hole => self.zero(),
        }
    }
}
