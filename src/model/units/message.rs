//! The words for a mismatch of units.
//!
//! One [`Reason`] for each rule that can be broken; a new rule needs its words here.

use super::solve::Mismatch;
use super::unit::{Agreement, Unit, plain};
use crate::diag::Diagnostic;
use crate::expr::ast::Expr;
use crate::model::Formula;

/// Longest piece of a formula that is quoted, in characters: longer ones would push the units out of sight.
const LONGEST_QUOTE: usize = 40;

/// A piece of a formula.
#[derive(Clone, Copy)]
pub(super) struct Piece<'m> {
    /// The formula that it is part of.
    pub(super) formula: &'m Formula,
    /// The part.
    pub(super) expr: &'m Expr,
}

impl<'m> Piece<'m> {
    /// All of a formula.
    pub(super) fn whole(formula: &'m Formula) -> Self {
        Self { formula, expr: &formula.expr }
    }

    /// A part of this piece.
    pub(super) fn part(self, expr: &'m Expr) -> Self {
        Self { expr, ..self }
    }
}

/// Why two units should have agreed.
pub(super) enum Reason<'m> {
    /// They are added, subtracted or compared.
    Beside(Piece<'m>),
    /// A function of plain numbers.
    Plain(&'static str),
    /// The exponent of a power.
    Exponent,
    /// The base of a power whose exponent varies with the state.
    VaryingPower,
    /// The argument of a function whose other arguments say what it is in.
    Argument(&'static str),
    /// The place where the formula stands says what it is in, such as `the rate of change of S`.
    Place(String),
}

/// The warning for a piece that is in one unit where another is due.
pub(super) fn warning(piece: Piece<'_>, reason: &Reason<'_>, mismatch: &Mismatch) -> Diagnostic {
    let want = &mismatch.want;
    let due = match reason {
        Reason::Beside(other) => format!("{} beside it {}", quote(*other), is_in(want)),
        Reason::Plain(function) => format!("{function} takes plain numbers"),
        Reason::Exponent => "an exponent is a plain number".to_owned(),
        Reason::VaryingPower => "a power that varies needs a plain number as its base".to_owned(),
        Reason::Argument(function) => format!("{function} needs {} here", noun(want)),
        Reason::Place(what) => format!("{what} {}", is_in(want)),
    };
    let factor = match mismatch.agreement {
        Agreement::Factor(factor) => format!("; the two differ by a factor {}", plain(factor)),
        Agreement::Same | Agreement::Different => String::new(),
    };
    let message = format!("{} {}, but {due}{factor}", quote(piece), is_in(&mismatch.got));
    let warning = Diagnostic::warning(piece.formula.locate(piece.expr.span), message)
        .expected(noun(want))
        .help(help(reason, mismatch));
    match reason {
        Reason::Beside(other) => {
            warning.related(other.formula.locate(other.expr.span), format!("this {}", is_in(want)))
        }
        _ => warning,
    }
}

fn help(reason: &Reason<'_>, mismatch: &Mismatch) -> String {
    match (reason, mismatch.agreement) {
        (_, Agreement::Factor(_)) => {
            let (got, want) = (&mismatch.got, &mismatch.want);
            let mut ratio = want.clone();
            ratio.multiply(got, -1.0);
            format!("use one unit, or multiply by a parameter in {ratio}")
        }
        (Reason::Plain(_) | Reason::VaryingPower, _) => {
            format!("divide it by a reference level in {}", mismatch.got)
        }
        (_, _) if is_plain(&mismatch.got) && !is_plain(&mismatch.want) => {
            "give the number a name and a unit in \"parameters\"".to_owned()
        }
        _ => String::new(),
    }
}

/// A piece of a formula in quotes, shortened in the middle where it is long.
pub(super) fn quote(piece: Piece<'_>) -> String {
    let span = piece.expr.span;
    let text = piece.formula.text.get(span.start..span.end).unwrap_or(&piece.formula.text);
    let words: Vec<char> = text.split_whitespace().collect::<Vec<_>>().join(" ").chars().collect();
    if words.len() <= LONGEST_QUOTE {
        return format!("\"{}\"", words.iter().collect::<String>());
    }
    let half = LONGEST_QUOTE / 2;
    let (head, tail) = (&words[..half], &words[words.len() - half + 1..]);
    format!("\"{}…{}\"", head.iter().collect::<String>(), tail.iter().collect::<String>())
}

fn is_in(unit: &Unit) -> String {
    if is_plain(unit) { "has no unit".to_owned() } else { format!("is in {unit}") }
}

fn noun(unit: &Unit) -> String {
    if is_plain(unit) { "a plain number".to_owned() } else { unit.to_string() }
}

fn is_plain(unit: &Unit) -> bool {
    *unit == Unit::one()
}
