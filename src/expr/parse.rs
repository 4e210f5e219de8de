//! Formula text → syntax tree, with every slip placed and explained.
//!
//! A tree always comes out, with [`ExprKind::Hole`] where nothing sensible stood. Names are not resolved here. The
//! method is precedence climbing (Pratt 1973); `+ -` bind loosest, then `* /`, then unary minus, then `^`, which is
//! right-associative.

use super::ast::{BinaryOp, Builtin, Expr, ExprKind};
use super::lex::{Token, tokens};
use super::slip::{Slip, Words};
use crate::diag::Span;

/// How deep parentheses, calls, signs and exponents may nest.
pub const DEEPEST_NESTING: usize = 64;

/// How high a syntax tree may be; a long sum is as high as it has terms. Keeps every walk over a tree off the end of the
/// stack.
pub const HIGHEST_TREE: usize = 1_000;

/// Reads a formula: its tree, and every slip found on the way.
pub fn parse(text: &str) -> (Expr, Vec<Slip>) {
    let mut parser =
        Parser { tokens: tokens(text), at: 0, end: text.len(), slips: Vec::new(), depth: 0, refused: false };
    if parser.tokens.is_empty() {
        let span = Span::new(0, text.len());
        parser.report(Words::Empty.at(span, &[]));
        return (Expr { kind: ExprKind::Hole, span }, parser.slips);
    }
    let mut tree = parser.sum();
    while !parser.refused && parser.peek().is_some() {
        tree = parser.leftover(tree);
    }
    let Tree { expr, .. } = tree;
    (expr, parser.slips)
}

/// A tree and its height.
struct Tree {
    expr: Expr,
    height: usize,
}

struct Parser {
    tokens: Vec<(Token, Span)>,
    at: usize,
    end: usize,
    slips: Vec<Slip>,
    depth: usize,
    /// Set once a limit is passed: everything left is skipped, with one message.
    refused: bool,
}

impl Parser {
    fn peek(&self) -> Option<&Token> {
        self.tokens.get(self.at).map(|(token, _)| token)
    }

    fn span(&self) -> Span {
        self.tokens.get(self.at).map_or(Span::new(self.end, self.end), |&(_, span)| span)
    }

    fn previous_end(&self) -> usize {
        self.at.checked_sub(1).and_then(|i| self.tokens.get(i)).map_or(0, |(_, span)| span.end)
    }

    fn say(&mut self, words: Words, span: Span) {
        self.report(words.at(span, &[]));
    }

    fn report(&mut self, slip: Slip) {
        if !self.refused {
            self.slips.push(slip);
        }
    }

    /// Says once that a limit is passed, and drops the rest of the formula.
    fn refuse(&mut self, words: Words, span: Span, limit: usize) -> Tree {
        self.report(words.at(span, &[&limit]));
        self.refused = true;
        self.at = self.tokens.len();
        hole(span)
    }

    fn sum(&mut self) -> Tree {
        let mut left = self.product();
        loop {
            let op = match self.peek() {
                Some(Token::Plus) => BinaryOp::Add,
                Some(Token::Minus) => BinaryOp::Sub,
                _ => return left,
            };
            self.at += 1;
            let right = self.product();
            left = self.join(op, left, right);
        }
    }

    fn product(&mut self) -> Tree {
        let mut left = self.signed();
        loop {
            let op = match self.peek() {
                Some(Token::Star) => BinaryOp::Mul,
                Some(Token::Slash) => BinaryOp::Div,
                Some(&Token::Strange(c @ ('×' | '·' | '⋅' | '∗'))) => {
                    self.foreign_operator(c, "*", BinaryOp::Mul)
                }
                Some(&Token::Strange(c @ ('÷' | '∕'))) => self.foreign_operator(c, "/", BinaryOp::Div),
                Some(Token::Name(_) | Token::Number(_) | Token::Open) => {
                    left = self.missing_operator(left);
                    continue;
                }
                _ => return left,
            };
            self.at += 1;
            let right = self.signed();
            left = self.join(op, left, right);
        }
    }

    fn signed(&mut self) -> Tree {
        let start = self.span();
        match self.peek() {
            Some(Token::Minus) => {}
            Some(Token::Strange('−' | '–')) => {
                self.say(Words::Dash, start);
            }
            _ => return self.power(),
        }
        self.at += 1;
        let Some(inner) = self.deeper(start, Self::signed) else { return hole(start) };
        let span = start.to(inner.expr.span);
        let height = inner.height + 1;
        Tree { expr: Expr { kind: ExprKind::Neg(Box::new(inner.expr)), span }, height }
    }

    fn power(&mut self) -> Tree {
        let base = self.operand();
        match self.peek() {
            Some(Token::Caret) => {}
            Some(Token::DoubleStar) => {
                let span = self.span();
                self.say(Words::DoubleStar, span);
            }
            _ => return base,
        }
        let start = self.span();
        self.at += 1;
        // The exponent may carry a sign, and a^b^c is a^(b^c).
        let Some(exponent) = self.deeper(start, Self::signed) else { return base };
        self.join(BinaryOp::Pow, base, exponent)
    }

    fn operand(&mut self) -> Tree {
        let span = self.span();
        match self.peek().cloned() {
            Some(Token::Number(value)) => self.number(value, span),
            Some(Token::Name(name)) => self.name(name, span),
            Some(Token::Open) => self.group(span),
            Some(Token::Plus) => {
                self.say(Words::PlusSign, span);
                self.at += 1;
                self.deeper(span, Self::operand).unwrap_or_else(|| hole(span))
            }
            other => self.no_operand(other.as_ref(), span),
        }
    }

    fn number(&mut self, value: f64, span: Span) -> Tree {
        self.at += 1;
        if !value.is_finite() {
            self.say(Words::NumberTooLarge, span);
            return hole(span);
        }
        if self.is_decimal_comma(span) {
            let (_, fraction) = self.tokens[self.at + 1];
            let whole = span.to(fraction);
            self.say(Words::DecimalComma, whole);
            self.at += 2;
            return leaf(ExprKind::Number(value), whole);
        }
        leaf(ExprKind::Number(value), span)
    }

    /// A number, a comma and a number with nothing between them, outside any call.
    fn is_decimal_comma(&self, number: Span) -> bool {
        let comma = self.tokens.get(self.at);
        let fraction = self.tokens.get(self.at + 1);
        self.depth == 0
            && comma.is_some_and(|(token, span)| *token == Token::Comma && span.start == number.end)
            && fraction.is_some_and(|(token, span)| matches!(token, Token::Number(_)) && span.start == number.end + 1)
    }

    fn name(&mut self, name: String, span: Span) -> Tree {
        self.at += 1;
        if self.peek() != Some(&Token::Open) {
            return leaf(ExprKind::Name(name), span);
        }
        match Builtin::by_name(&name) {
            Some(builtin) => self.call(builtin, span),
            None => self.not_a_function(&name, span),
        }
    }

    fn call(&mut self, builtin: Builtin, name: Span) -> Tree {
        let open = self.span();
        self.at += 1;
        let arguments = self.deeper(open, Self::arguments).unwrap_or_default();
        let end = self.close(open);
        let span = Span::new(name.start, end);
        let height = arguments.iter().map(|tree| tree.height).max().unwrap_or(0) + 1;
        let arguments: Vec<Expr> = arguments.into_iter().map(|tree| tree.expr).collect();
        if arguments.len() != builtin.row().arguments.len() {
            self.report(Slip::arguments(builtin, arguments.len(), span));
            return hole(span);
        }
        Tree { expr: Expr { kind: ExprKind::Call(builtin, arguments), span }, height }
    }

    fn arguments(&mut self) -> Vec<Tree> {
        let mut found = Vec::new();
        if self.peek() == Some(&Token::Close) {
            return found;
        }
        loop {
            found.push(self.sum());
            while self.is_stray_in_group() {
                let last = found.pop().unwrap_or_else(|| hole(self.span()));
                found.push(self.leftover(last));
            }
            match self.peek() {
                Some(Token::Comma) => {}
                Some(Token::Strange(';')) => self.say(Words::Semicolon, self.span()),
                _ => return found,
            }
            self.at += 1;
        }
    }

    fn group(&mut self, open: Span) -> Tree {
        self.at += 1;
        let Some(mut inner) = self.deeper(open, Self::sum) else { return hole(open) };
        self.depth += 1;
        while !self.refused && !matches!(self.peek(), None | Some(Token::Close)) {
            inner = self.leftover(inner);
        }
        self.depth -= 1;
        let end = self.close(open);
        inner.expr.span = Span::new(open.start, end);
        inner
    }

    /// Takes the closing parenthesis and returns where it ends.
    fn close(&mut self, open: Span) -> usize {
        if self.peek() == Some(&Token::Close) {
            self.at += 1;
        } else {
            self.say(Words::NeverClosed, open);
        }
        self.previous_end()
    }

    /// Something that can neither go on with the sum nor end the group.
    fn is_stray_in_group(&self) -> bool {
        !self.refused && !matches!(self.peek(), None | Some(Token::Close | Token::Comma | Token::Strange(';')))
    }

    /// What to make of a token that no rule wants: says so, steps over it, and goes on.
    fn leftover(&mut self, left: Tree) -> Tree {
        let span = self.span();
        match self.peek().cloned() {
            Some(Token::Close) => self.say(Words::NoneOpen, span),
            Some(Token::Strange('−' | '–')) => {
                self.say(Words::Dash, span);
                self.at += 1;
                let right = self.product();
                return self.join(BinaryOp::Sub, left, right);
            }
            Some(Token::Strange('=')) => {
                self.report(Slip::strange('=', span));
                while self.peek() == Some(&Token::Strange('=')) {
                    self.at += 1;
                }
                // What stands on the left, most often dN/dt, need not be told off as well.
                return self.sum();
            }
            Some(Token::Strange(c)) => self.report(Slip::strange(c, span)),
            // Nothing but a comma is left: what begins or joins operands was taken before.
            _ => self.say(Words::StrayComma, span),
        }
        self.at += 1;
        // Read on, so that slips in the rest are found too.
        if self.peek().is_some_and(Token::is_operator) {
            self.at += 1;
        }
        if !matches!(self.peek(), None | Some(Token::Close | Token::Comma | Token::Strange(_))) {
            let _ = self.sum();
        }
        left
    }

    /// An operand stands directly behind another: reads it as a product, and says so.
    fn missing_operator(&mut self, left: Tree) -> Tree {
        let span = Span::new(left.expr.span.start, self.span().end);
        // Behind a slip, what is missing is most likely part of it.
        if left.expr.kind != ExprKind::Hole {
            self.report(Slip::missing_operator(span, &left.expr.kind, self.peek()));
        }
        let right = self.power();
        self.join(BinaryOp::Mul, left, right)
    }

    fn not_a_function(&mut self, name: &str, span: Span) -> Tree {
        self.report(Slip::not_a_function(name, span));
        let open = self.span();
        self.at += 1;
        // The arguments are read for the slips in them.
        let _ = self.deeper(open, Self::arguments);
        let end = self.close(open);
        hole(Span::new(span.start, end))
    }

    fn no_operand(&mut self, found: Option<&Token>, span: Span) -> Tree {
        let here = Span::new(self.previous_end().min(span.start), span.end);
        match found {
            None => self.say(Words::BreaksOff, Span::new(self.previous_end(), self.end)),
            Some(&Token::Strange(c @ ('[' | '{'))) => {
                self.report(Slip::strange(c, span));
                self.at += 1;
                let inner = self.deeper(span, Self::sum).unwrap_or_else(|| hole(here));
                self.at += usize::from(matches!(self.peek(), Some(Token::Strange(']' | '}'))));
                return inner;
            }
            Some(&Token::Strange(c)) => {
                self.report(Slip::strange(c, span));
                self.at += 1;
            }
            Some(Token::Close | Token::Comma) => self.say(Words::OperandMissing, span),
            Some(_) => {
                self.say(Words::OperandMissingBetween, span);
                self.at += 1;
                return self.deeper(span, Self::signed).unwrap_or_else(|| hole(here));
            }
        }
        hole(here)
    }

    fn foreign_operator(&mut self, found: char, ours: &str, op: BinaryOp) -> BinaryOp {
        self.report(Words::ForeignOperator.at(self.span(), &[&found, &ours]));
        op
    }

    fn join(&mut self, op: BinaryOp, left: Tree, right: Tree) -> Tree {
        let span = left.expr.span.to(right.expr.span);
        let height = left.height.max(right.height) + 1;
        if height > HIGHEST_TREE {
            return self.refuse(Words::TooLong, span, HIGHEST_TREE);
        }
        let kind = ExprKind::Binary(op, Box::new(left.expr), Box::new(right.expr));
        Tree { expr: Expr { kind, span }, height }
    }

    /// Runs a rule one level deeper, unless that is too deep.
    fn deeper<T>(&mut self, at: Span, rule: impl FnOnce(&mut Self) -> T) -> Option<T> {
        if self.depth >= DEEPEST_NESTING {
            let _ = self.refuse(Words::TooDeep, at, DEEPEST_NESTING);
            return None;
        }
        self.depth += 1;
        let found = rule(self);
        self.depth -= 1;
        Some(found)
    }
}

fn leaf(kind: ExprKind, span: Span) -> Tree {
    Tree { expr: Expr { kind, span }, height: 1 }
}

fn hole(span: Span) -> Tree {
    leaf(ExprKind::Hole, span)
}
