//! Collects the warnings of one model, one for each slip.
//!
//! A parameter in the wrong unit makes the same difference wherever it is used: such repeats become further places of
//! the first warning. Where the unit of a parameter was itself concluded, the place that told it is named too.

use super::message::{Piece, Reason, Words, warning};
use super::solve::Mismatch;
use super::unit::{Agreement, Unit, compare};
use crate::diag::{Diagnostic, Location};
use crate::expr::ast::{Expr, ExprKind};
use crate::model::{Model, Name};

/// Most warnings: a model with more has one cause for most of them.
const MOST_WARNINGS: usize = 100;
/// Most further places that one warning names.
const MOST_REPEATS: usize = 3;

/// The warnings so far.
#[derive(Default)]
pub(super) struct Report {
    findings: Vec<Finding>,
}

struct Finding {
    warning: Diagnostic,
    /// By how much the units differ.
    ratio: Unit,
    /// What the pieces that disagree are made of, species apart.
    names: Vec<Name>,
    repeats: usize,
}

impl Report {
    /// Adds a warning, or a further place to an earlier one.
    pub(super) fn add(
        &mut self,
        piece: Piece<'_>,
        reason: &Reason<'_>,
        mismatch: &Mismatch,
        names: &[Name],
        told: &[(Location, String)],
    ) {
        let mut ratio = mismatch.got.clone();
        ratio.multiply(&mismatch.want, -1.0);
        let shared: Vec<Name> = names.iter().copied().filter(|name| !matches!(name, Name::Species(_))).collect();
        if let Some(earlier) = self.findings.iter_mut().find(|finding| finding.is_same_slip(&ratio, &shared)) {
            earlier.repeat(piece.formula.locate(piece.expr.span));
            return;
        }
        if self.findings.len() == MOST_WARNINGS {
            return;
        }
        let mut warning = warning(piece, reason, mismatch);
        warning.related.extend(told.iter().cloned());
        self.findings.push(Finding { warning, ratio, names: shared, repeats: 0 });
    }

    /// The warnings, in the order in which they were found.
    pub(super) fn into_warnings(self) -> Vec<Diagnostic> {
        self.findings.into_iter().map(|finding| finding.warning).collect()
    }
}

impl Finding {
    fn is_same_slip(&self, ratio: &Unit, names: &[Name]) -> bool {
        let mut inverse = Unit::one();
        inverse.multiply(ratio, -1.0);
        let is_same_ratio = [ratio, &inverse].iter().any(|other| compare(&self.ratio, other) == Agreement::Same);
        is_same_ratio && names.iter().any(|name| self.names.contains(name))
    }

    fn repeat(&mut self, at: Location) {
        let is_known = self.warning.at == at || self.warning.related.iter().any(|(other, _)| *other == at);
        if !is_known && self.repeats < MOST_REPEATS {
            self.warning.related.push((at, Words::SameDifference.remark(&[])));
            self.repeats += 1;
        }
    }
}

/// The names in a piece, and in the piece beside it; each once.
pub(super) fn names_in(model: &Model, piece: Piece<'_>, reason: &Reason<'_>) -> Vec<Name> {
    let mut names = Vec::new();
    let mut visit = |expr: &Expr| {
        if let ExprKind::Name(text) = &expr.kind
            && let Some(name) = model.names.get(text)
            && !names.contains(name)
        {
            names.push(*name);
        }
    };
    piece.expr.walk(&mut visit);
    if let Reason::Beside(other) = reason {
        other.expr.walk(&mut visit);
    }
    names
}
