//! The equations of a model, put together from its processes, harvests and blocks.
//!
//! [`equations`] gives one [`Equation`] a species, of the model as the file has it; scenarios are differences from that.
//! For reading only: what is computed is assembled by the model's own graph.

use super::divide::divide;
use super::formula::{Signed, Style, binary, node};
use crate::expr::ast::{BinaryOp, Expr, ExprKind};
use crate::model::{Accounting, Block, Entry, Harvest, Model, Process, SpeciesId, TimeKind, When};

/// What happens to one species.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Equation {
    /// Which species.
    pub(super) species: SpeciesId,
    /// The rate of change, or the next state, as a sum.
    pub(super) terms: Vec<Signed>,
    /// The same sum divided by the species' abundance, where it visibly is a multiple of it.
    pub(super) per_capita: Option<Vec<Signed>>,
    /// What is taken before the step: the species' symbol stands for what is left.
    pub(super) taken_before: Vec<Expr>,
}

/// One equation a species, in the model's order.
pub(super) fn equations(model: &Model) -> Vec<Equation> {
    (0..model.species.len()).map(|row| equation(model, SpeciesId(row))).collect()
}

/// The left side of a species' equation.
pub(super) fn left_side(model: &Model, symbol: &str) -> String {
    match model.time {
        TimeKind::Continuous => format!("d{symbol}/dt"),
        TimeKind::Discrete { .. } => format!("next {symbol}"),
    }
}

/// Most species whose block is written out; beyond, [`community_size`] says what there is.
const MOST_WRITTEN_OUT: usize = 12;
/// Stands for growth and interactions of a species where they are not written out.
const COMMUNITY: &str = "community";

/// How many species a block has that is too large to be written out, and how many of its entries are not zero.
pub(super) fn community_size(model: &Model) -> Option<(usize, usize)> {
    let block = model.block.as_ref().filter(|_| model.species.len() > MOST_WRITTEN_OUT)?;
    let entries = block.growth.iter().chain(&block.matrix).filter(|entry| **entry != Entry::Number(0.0));
    Some((model.species.len(), entries.count()))
}

impl Equation {
    /// Whether it is nothing but a community that is not written out.
    pub(super) fn is_community_alone(&self) -> bool {
        let is_community = |term: &Signed| matches!(&term.expr.kind, ExprKind::Binary(_, _, b) if is_community(b));
        self.taken_before.is_empty() && matches!(self.terms.as_slice(), [term] if is_community(term))
    }

    /// The per-capita form: the abundance times a sum in brackets.
    pub(super) fn per_capita_text(&self, style: Style, symbol: &str) -> Option<String> {
        let terms = self.per_capita.as_ref()?;
        let times = style.times();
        match terms.as_slice() {
            [term] if term.expr.kind == ExprKind::Number(1.0) && !term.is_negative => None,
            [term] if matches!(term.expr.kind, ExprKind::Name(_)) && !term.is_negative => {
                Some(format!("{symbol}{times}{}", style.formula(&term.expr)))
            }
            _ => Some(format!("{symbol}{times}({})", style.sum(terms).join(" "))),
        }
    }
}

fn is_community(expr: &Expr) -> bool {
    matches!(&expr.kind, ExprKind::Name(name) if name == COMMUNITY)
}

fn equation(model: &Model, species: SpeciesId) -> Equation {
    let mut terms: Vec<Signed> = model.processes.iter().flat_map(|process| effects(process, species)).collect();
    let written = model.change.iter().chain(&model.next).filter(|term| term.species == species);
    terms.extend(written.flat_map(|term| split(&term.formula.expr, false)));
    terms.extend(model.block.iter().filter_map(|block| community(model, block, species)));
    let is_map = matches!(model.time, TimeKind::Discrete { .. });
    let mut taken_before = Vec::new();
    for (harvest, expr) in model.harvest.iter().flat_map(|harvest| takes(harvest, species)) {
        if is_map && harvest.when == When::Before {
            taken_before.push(expr);
        } else {
            terms.push(signed(true, expr));
        }
    }
    let per_capita = model.species.get(species.0).filter(|_| !terms.is_empty() && taken_before.is_empty());
    let per_capita = per_capita.and_then(|own| quotients(model, &terms, &own.symbol));
    Equation { species, terms, per_capita, taken_before }
}

/// What a process does to a species: the rate, or a multiple of it.
fn effects(process: &Process, species: SpeciesId) -> Vec<Signed> {
    let own = process.effect.iter().filter(|term| term.species == species);
    own.flat_map(|term| {
        let effect = signed(false, term.formula.expr.clone());
        match effect.expr.kind {
            ExprKind::Number(0.0) => Vec::new(),
            ExprKind::Number(1.0) => split(&process.rate.expr, effect.is_negative),
            _ => {
                let rate = signed(effect.is_negative, process.rate.expr.clone());
                vec![Signed { expr: product(effect.expr, rate.expr), ..rate }]
            }
        }
    })
    .collect()
}

/// a·(b·c) as (a·b)·c, so that it is written without brackets.
fn product(a: Expr, b: Expr) -> Expr {
    match b.kind {
        ExprKind::Binary(operator @ (BinaryOp::Mul | BinaryOp::Div), left, right) => {
            binary(operator, product(a, *left), *right)
        }
        _ => binary(BinaryOp::Mul, a, b),
    }
}

/// What a harvest takes from a species, with the harvest.
fn takes(harvest: &Harvest, species: SpeciesId) -> impl Iterator<Item = (&Harvest, Expr)> {
    let amounts = harvest.amounts.iter().filter(move |term| term.species == species);
    let amounts = amounts.filter(|_| harvest.accounting == Accounting::Takes);
    amounts.map(move |term| (harvest, term.formula.expr.clone()))
}

/// x (growth + Σ entries × abundances); entries of zero are left out.
fn community(model: &Model, block: &Block, species: SpeciesId) -> Option<Signed> {
    let own = node(ExprKind::Name(model.species.get(species.0)?.symbol.clone()));
    if model.species.len() > MOST_WRITTEN_OUT {
        let community = node(ExprKind::Name(COMMUNITY.to_owned()));
        return Some(Signed { is_negative: false, expr: binary(BinaryOp::Mul, own, community) });
    }
    let count = model.species.len();
    let growth = block.growth.get(species.0).and_then(entry);
    let row = block.matrix.chunks(count.max(1)).nth(species.0).unwrap_or_default();
    let pairs = row.iter().zip(&model.species).filter_map(|(coefficient, other)| {
        let Signed { is_negative, expr } = entry(coefficient)?;
        Some(Signed { is_negative, expr: binary(BinaryOp::Mul, expr, node(ExprKind::Name(other.symbol.clone()))) })
    });
    let sum = growth.into_iter().chain(pairs).fold(None, |sum: Option<Expr>, term| {
        Some(match (sum, term.is_negative) {
            (None, false) => term.expr,
            (None, true) => node(ExprKind::Neg(Box::new(term.expr))),
            (Some(sum), false) => binary(BinaryOp::Add, sum, term.expr),
            (Some(sum), true) => binary(BinaryOp::Sub, sum, term.expr),
        })
    })?;
    Some(Signed { is_negative: false, expr: binary(BinaryOp::Mul, own, sum) })
}

fn entry(entry: &Entry) -> Option<Signed> {
    match entry {
        Entry::Number(0.0) => None,
        Entry::Number(x) => Some(Signed { is_negative: *x < 0.0, expr: node(ExprKind::Number(x.abs())) }),
        Entry::Formula(formula) if formula.expr.kind == ExprKind::Number(0.0) => None,
        Entry::Formula(formula) => Some(signed(false, formula.expr.clone())),
    }
}

/// The outermost sum of a formula, term by term.
fn split(expr: &Expr, is_negative: bool) -> Vec<Signed> {
    match &expr.kind {
        ExprKind::Binary(operator @ (BinaryOp::Add | BinaryOp::Sub), a, b) => {
            let mut terms = split(a, is_negative);
            terms.extend(split(b, is_negative != (*operator == BinaryOp::Sub)));
            terms
        }
        _ => vec![signed(is_negative, expr.clone())],
    }
}

/// A term with the minus signs in front of it counted.
fn signed(is_negative: bool, expr: Expr) -> Signed {
    match expr.kind {
        ExprKind::Neg(inner) => signed(!is_negative, *inner),
        ExprKind::Binary(operator @ (BinaryOp::Mul | BinaryOp::Div), a, b) => {
            let Signed { is_negative, expr: a } = signed(is_negative, *a);
            Signed { is_negative, expr: binary(operator, a, *b) }
        }
        _ => Signed { is_negative, expr },
    }
}

fn quotients(model: &Model, terms: &[Signed], symbol: &str) -> Option<Vec<Signed>> {
    let divided = terms.iter().map(|term| Some(split(&divide(model, &term.expr, symbol)?, term.is_negative)));
    divided.collect::<Option<Vec<_>>>().map(|terms| terms.concat())
}
