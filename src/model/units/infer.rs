//! The unit of an expression, by its syntax tree.
//!
//! [`Walker::unit_of`] gives every node a [`Quantity`] and equates units where the node's rule asks for it. Numbers
//! typed into a formula are plain, except that zero fits anything and that a bare number fits as a threshold of `min`,
//! `max`, `clamp` and `ramp`. An exponent that is a constant expression of parameters counts with its base value, so that
//! `S^n/(H^n + S^n)` is checked at the model's own n. What each formula of a model must be in is [`places`](super::places).

use super::message::{Piece, Reason, Words};
use super::report::{Report, names_in};
use super::solve::{Solver, Term};
use super::unit::LARGEST_POWER;
use crate::diag::Location;
use crate::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use crate::expr::constant::evaluate;
use crate::model::{Formula, Model, Name};

/// What is known of an expression's unit.
#[derive(Clone, Debug)]
pub(super) enum Quantity {
    /// Fits anything: zero, or what a warning was given for.
    Free,
    /// Made of typed numbers alone.
    Bare,
    /// In this unit.
    Of(Term),
}

/// How a bare number is taken beside a quantity.
#[derive(Clone, Copy, PartialEq)]
enum Bare {
    /// It has no unit.
    Plain,
    /// It is in the unit of its neighbour.
    Threshold,
}

/// Walks formulas, collecting equations and warnings.
pub(super) struct Walker<'m> {
    pub(super) model: &'m Model,
    pub(super) solver: Solver,
    pub(super) time: Quantity,
    pub(super) species: Vec<Quantity>,
    pub(super) parameters: Vec<Quantity>,
    pub(super) shorthand: Vec<Quantity>,
    /// Values of the shorthands that are constant expressions of parameters.
    pub(super) constants: Vec<Option<f64>>,
    pub(super) report: Report,
}

impl<'m> Walker<'m> {
    /// What a whole formula is in.
    pub(super) fn formula(&mut self, formula: &'m Formula) -> Quantity {
        self.unit_of(Piece::whole(formula))
    }

    /// What a piece of a formula is in.
    pub(super) fn unit_of(&mut self, piece: Piece<'m>) -> Quantity {
        match &piece.expr.kind {
            ExprKind::Number(0.0) | ExprKind::Hole => Quantity::Free,
            ExprKind::Number(_) => Quantity::Bare,
            ExprKind::Name(name) => self.named(name),
            ExprKind::Neg(a) => self.unit_of(piece.part(a)),
            ExprKind::Binary(operator, a, b) => self.binary(*operator, piece.part(a), piece.part(b)),
            ExprKind::Call(function, arguments) => {
                let pieces: Vec<Piece<'m>> = arguments.iter().map(|a| piece.part(a)).collect();
                self.call(*function, &pieces)
            }
        }
    }

    /// Equates the unit of `piece`, which is `got`, with `want`; warns where they differ.
    pub(super) fn require(&mut self, piece: Piece<'m>, got: &Term, want: &Term, reason: &Reason<'m>) -> bool {
        let at = piece.formula.locate(piece.expr.span);
        let outcome = self.solver.equate(got, want, at);
        let Err(mismatch) = outcome else { return true };
        let names = names_in(self.model, piece, reason);
        let told: Vec<_> = names.iter().filter_map(|name| self.told(*name)).collect();
        self.report.add(piece, reason, &mismatch, &names, &told);
        for name in names {
            self.doubt(name);
        }
        false
    }

    /// The value of an expression of numbers and parameters, at the base values.
    pub(super) fn constant(&self, expr: &Expr) -> Option<f64> {
        evaluate(expr, &|name| match self.model.names.get(name)? {
            Name::Parameter(id) => self.model.parameters.get(id.0).map(|parameter| parameter.value),
            Name::Shorthand(id) => self.constants.get(id.0).copied().flatten(),
            Name::Species(_) => None,
        })
    }

    fn named(&self, name: &str) -> Quantity {
        let found = match self.model.names.get(name) {
            Some(Name::Species(id)) => self.species.get(id.0),
            Some(Name::Parameter(id)) => self.parameters.get(id.0),
            Some(Name::Shorthand(id)) => self.shorthand.get(id.0),
            None => None,
        };
        found.cloned().unwrap_or(Quantity::Free)
    }

    fn binary(&mut self, operator: BinaryOp, a: Piece<'m>, b: Piece<'m>) -> Quantity {
        if operator == BinaryOp::Pow {
            return self.power(a, b);
        }
        let (left, right) = (self.unit_of(a), self.unit_of(b));
        match operator {
            BinaryOp::Mul => times(left, &right, 1.0),
            BinaryOp::Div => times(left, &right, -1.0),
            _ => self.agree((a, left), (b, right), Bare::Plain),
        }
    }

    /// Two operands that must be in the same unit.
    fn agree(&mut self, left: (Piece<'m>, Quantity), right: (Piece<'m>, Quantity), bare: Bare) -> Quantity {
        let ((a, left), (b, right)) = (left, right);
        match (&left, &right) {
            (Quantity::Free, _) => right,
            (_, Quantity::Free) | (Quantity::Bare, Quantity::Bare) => left,
            (Quantity::Of(unit), Quantity::Of(other)) => {
                let is_same = self.require(b, other, unit, &Reason::Beside(a));
                if is_same { left } else { Quantity::Free }
            }
            (Quantity::Bare, Quantity::Of(_)) if bare == Bare::Threshold => right,
            (Quantity::Of(_), Quantity::Bare) if bare == Bare::Threshold => left,
            (Quantity::Bare, Quantity::Of(unit)) => self.agree_with_number(a, b, unit),
            (Quantity::Of(unit), Quantity::Bare) => self.agree_with_number(b, a, unit),
        }
    }

    /// A typed number beside a quantity: whoever looks wrong is blamed. A 1 is never an amount that lost its unit.
    fn agree_with_number(&mut self, number: Piece<'m>, other: Piece<'m>, unit: &Term) -> Quantity {
        let one = Term::one();
        let is_same = match self.constant(number.expr) {
            Some(1.0) => self.require(other, unit, &one, &Reason::Beside(number)),
            _ => self.require(number, &one, unit, &Reason::Beside(other)),
        };
        if is_same { Quantity::Of(unit.clone()) } else { Quantity::Free }
    }

    fn power(&mut self, base: Piece<'m>, exponent: Piece<'m>) -> Quantity {
        let (below, above) = (self.unit_of(base), self.unit_of(exponent));
        if let Quantity::Of(unit) = &above
            && !self.require(exponent, unit, &Term::one(), &Reason::Exponent)
        {
            return Quantity::Free;
        }
        let value = self.constant(exponent.expr);
        match (below, value) {
            (Quantity::Bare, _) if matches!(above, Quantity::Bare) => Quantity::Bare,
            (Quantity::Bare, _) => Quantity::Of(Term::one()),
            (Quantity::Of(unit), Some(power)) if power.abs() <= LARGEST_POWER => Quantity::Of(unit.to_power(power)),
            (Quantity::Free, _) | (Quantity::Of(_), Some(_)) => Quantity::Free,
            (Quantity::Of(unit), None) => self.plain(base, &unit, &Reason::VaryingPower),
        }
    }

    fn call(&mut self, function: Builtin, arguments: &[Piece<'m>]) -> Quantity {
        let quantities: Vec<Quantity> = arguments.iter().map(|piece| self.unit_of(*piece)).collect();
        let all: Vec<(Piece<'m>, Quantity)> = arguments.iter().copied().zip(quantities).collect();
        match (function, all.as_slice()) {
            (Builtin::Abs, [(_, x)]) => x.clone(),
            (Builtin::Sqrt, [(_, x)]) => match x {
                Quantity::Of(unit) => Quantity::Of(unit.to_power(0.5)),
                other => other.clone(),
            },
            (_, [(piece, x)]) => match x {
                Quantity::Of(unit) => self.plain(*piece, unit, &Reason::Plain(function.row().name)),
                other => other.clone(),
            },
            (Builtin::Min | Builtin::Max | Builtin::Clamp, all) => self.all_agree(all),
            (Builtin::Ramp, all) => {
                self.all_agree(all);
                Quantity::Of(Term::one())
            }
            (Builtin::Logistic, [n, r, k]) => {
                self.argument(k, Some(n.1.clone()), function);
                times(n.1.clone(), &r.1, 1.0)
            }
            (Builtin::Holling1, [n, a]) => times(n.1.clone(), &a.1, 1.0),
            (Builtin::Holling2, [n, a, h]) => self.saturating(n, a, h, 1.0, function),
            (Builtin::Holling3, [n, a, h]) => self.saturating(n, a, h, 2.0, function),
            _ => Quantity::Free,
        }
    }

    /// a Nᵖ / (1 + a h Nᵖ): the handling time must undo the rest of its product.
    fn saturating(
        &mut self,
        n: &(Piece<'m>, Quantity),
        a: &(Piece<'m>, Quantity),
        h: &(Piece<'m>, Quantity),
        power: f64,
        function: Builtin,
    ) -> Quantity {
        let rate = match &n.1 {
            Quantity::Of(unit) => times(a.1.clone(), &Quantity::Of(unit.to_power(power)), 1.0),
            other => times(a.1.clone(), other, 1.0),
        };
        let undone = times(Quantity::Of(Term::one()), &rate, -1.0);
        self.argument(h, Some(undone), function);
        rate
    }

    /// An argument whose unit follows from the other arguments.
    fn argument(&mut self, argument: &(Piece<'m>, Quantity), want: Option<Quantity>, function: Builtin) {
        let want = match want {
            Some(Quantity::Of(want)) => want,
            Some(Quantity::Bare) => Term::one(),
            _ => return,
        };
        let one = Term::one();
        let got = match &argument.1 {
            Quantity::Of(got) => got,
            Quantity::Bare => &one,
            Quantity::Free => return,
        };
        self.require(argument.0, got, &want, &Reason::Argument(function.row().name));
    }

    fn all_agree(&mut self, arguments: &[(Piece<'m>, Quantity)]) -> Quantity {
        let mut arguments = arguments.iter().cloned();
        let Some(first) = arguments.next() else { return Quantity::Free };
        arguments
            .fold(first, |all, next| {
                let piece = all.0;
                (piece, self.agree(all, next, Bare::Threshold))
            })
            .1
    }

    /// A plain number, or a warning.
    fn plain(&mut self, piece: Piece<'m>, unit: &Term, reason: &Reason<'m>) -> Quantity {
        let is_plain = self.require(piece, unit, &Term::one(), reason);
        if is_plain { Quantity::Of(Term::one()) } else { Quantity::Free }
    }

    /// The place that told the unit of a name that has none in the file.
    fn told(&self, name: Name) -> Option<(Location, String)> {
        let (quantity, text) = match name {
            Name::Species(id) => (self.species.get(id.0)?, &self.model.species.get(id.0)?.symbol),
            Name::Parameter(id) => (self.parameters.get(id.0)?, &self.model.parameters.get(id.0)?.name),
            Name::Shorthand(_) => return None,
        };
        let Quantity::Of(term) = quantity else { return None };
        Some((self.solver.told_at(term)?, Words::FollowsFromHere.remark(&[text])))
    }

    /// Forgets what was concluded about a name that a warning is about, so that one slip is told once.
    fn doubt(&mut self, name: Name) {
        let quantity = match name {
            Name::Species(id) => self.species.get_mut(id.0),
            Name::Parameter(id) => self.parameters.get_mut(id.0),
            Name::Shorthand(_) => None,
        };
        if let Some(quantity) = quantity
            && matches!(quantity, Quantity::Of(term) if self.solver.told_at(term).is_some())
        {
            *quantity = Quantity::Free;
        }
    }
}

/// `a` times `b` to the power `power`.
pub(super) fn times(a: Quantity, b: &Quantity, power: f64) -> Quantity {
    match (a, b) {
        (Quantity::Free, _) | (_, Quantity::Free) => Quantity::Free,
        (a, Quantity::Bare) => a,
        (Quantity::Bare, Quantity::Of(b)) => Quantity::Of(b.to_power(power)),
        (Quantity::Of(a), Quantity::Of(b)) => Quantity::Of(a.times(b, power)),
    }
}
