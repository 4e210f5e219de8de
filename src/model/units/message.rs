//! The words about units: what cannot be read as one, and where two differ.
//!
//! [`Words`] is the table; to say something new, add a row and a file of its name to `tests/files/units`. A warning is
//! put together of a row for the rule that is broken (one [`Reason`] each) and, where it helps, of a remark.

use std::fmt::Display;

use super::solve::Mismatch;
use super::unit::{Agreement, Unit, plain};
use crate::diag::Diagnostic;
use crate::diag::wording::{fill, wording};
use crate::expr::ast::Expr;
use crate::model::Formula;

/// Longest piece of a formula that is quoted, in characters: longer ones would push the units out of sight.
const LONGEST_QUOTE: usize = 40;

wording! {
/// One thing to say about units.
pub(super) enum Words {
    // What cannot be read as a unit.
    Empty: "the unit is empty", "a unit such as kt/yr", "write 1 for a plain number";
    TooLong: "the unit is too long to be one", "a unit such as kt/yr", "write the unit alone; a remark belongs into \"note\"";
    BreaksOff: "nothing follows here in the unit", "a unit such as kt/yr", "write the unit that is meant";
    TooDeep: "brackets are nested too deeply in the unit", "a unit such as kt/yr", "write powers in place of brackets, such as kg*m^-2";
    NeverClosed: "this bracket is never closed", "a unit such as kt/yr", "add a \")\"";
    NotAFactor: "\"{0}\" cannot be a factor of a unit", "a unit such as kt/yr", "write a number above 0";
    LargePower: "the power is too large for a unit", "a unit such as kt/yr", "write a power of at most {0}";
    PowerMissing: "\"{0}\" wants a number after it", "a unit such as kt/yr", "write a power such as ^2 or ^-1";
    Stray: "\"{0}\" cannot stand here in a unit", "a unit such as kt/yr", "join units by * or /, as in kg/(m2*d)";
    // Where two units should have agreed. Last comes the remark, where there is one.
    Beside: "{0} {1}, but {2} beside it {3}{4}", "{5}", "{6}";
    Plain: "{0} {1}, but {2} takes plain numbers{3}", "{4}", "{5}";
    Exponent: "{0} {1}, but an exponent is a plain number{2}", "{3}", "{4}";
    VaryingPower: "{0} {1}, but a power that varies needs a plain number as its base{2}", "{3}", "{4}";
    Argument: "{0} {1}, but {2} needs {3} here{4}", "{3}", "{5}";
    Place: "{0} {1}, but {2} {3}{4}", "{5}", "{6}";
    // Remarks on it: the end of the message, and what to do.
    OneUnit: "; the two differ by a factor {0}", "", "use one unit, or multiply by a parameter in {1}";
    ReferenceLevel: "", "", "divide it by a reference level in {0}";
    NameTheNumber: "", "", "give the number a name and a unit in \"parameters\"";
    // Further places.
    ThisIs: "this {0}", "", "";
    SameDifference: "the same difference here", "", "";
    FollowsFromHere: "the unit of \"{0}\" follows from here", "", "";
}
}

impl Words {
    /// The row with the values in order; long values are clipped.
    pub(super) fn with(self, values: &[&dyn Display]) -> [String; 3] {
        self.row().map(|template| fill(template, values))
    }

    /// What is said of a further place.
    pub(super) fn remark(self, values: &[&dyn Display]) -> String {
        let [remark, ..] = self.with(values);
        remark
    }
}

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
    let (got, want) = (is_in(&mismatch.got), &mismatch.want);
    let (due, noun) = (is_in(want), noun(want));
    let [end, _, help] = remark(reason, mismatch);
    let what = quote(piece);
    let [message, expected, help] = match reason {
        Reason::Beside(other) => Words::Beside.with(&[&what, &got, &quote(*other), &due, &end, &noun, &help]),
        Reason::Plain(function) => Words::Plain.with(&[&what, &got, function, &end, &noun, &help]),
        Reason::Exponent => Words::Exponent.with(&[&what, &got, &end, &noun, &help]),
        Reason::VaryingPower => Words::VaryingPower.with(&[&what, &got, &end, &noun, &help]),
        Reason::Argument(function) => Words::Argument.with(&[&what, &got, function, &noun, &end, &help]),
        Reason::Place(place) => Words::Place.with(&[&what, &got, place, &due, &end, &noun, &help]),
    };
    let warning = Diagnostic::warning(piece.formula.locate(piece.expr.span), message).expected(expected).help(help);
    match reason {
        Reason::Beside(other) => {
            warning.related(other.formula.locate(other.expr.span), Words::ThisIs.remark(&[&is_in(want)]))
        }
        _ => warning,
    }
}

/// What to add to a warning, and what to do; empty where nothing is known to help.
fn remark(reason: &Reason<'_>, mismatch: &Mismatch) -> [String; 3] {
    let (got, want) = (&mismatch.got, &mismatch.want);
    match (reason, mismatch.agreement) {
        (_, Agreement::Factor(factor)) => {
            let mut ratio = want.clone();
            ratio.multiply(got, -1.0);
            Words::OneUnit.with(&[&plain(factor), &ratio])
        }
        (Reason::Plain(_) | Reason::VaryingPower, _) => Words::ReferenceLevel.with(&[got]),
        (_, _) if is_plain(got) && !is_plain(want) => Words::NameTheNumber.with(&[]),
        _ => Default::default(),
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
