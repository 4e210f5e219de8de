//! What can be wrong in a formula, in words.
//!
//! `Words` is the table; to say something new, add a row and a file of its name, after `formula_`, to
//! `tests/files/errors`. Which row fits what stands in the formula is chosen here where the choice is one of wording, in
//! `parse` where it is one of grammar.

use std::fmt::Display;

use super::ast::{Builtin, ExprKind};
use super::builtin::BUILTINS;
use super::lex::Token;
use crate::diag::wording::{fill, wording};
use crate::diag::{Span, nearest::nearest};

/// A slip in a formula; its span counts bytes of the formula's own text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Slip {
    /// Where.
    pub span: Span,
    /// What is wrong.
    pub message: String,
    /// What was expected there.
    pub expected: String,
    /// What to do.
    pub help: String,
}

wording! {
/// One thing that can be wrong in a formula.
pub(crate) enum Words {
    // The formula as a whole.
    Empty: "the formula is empty", "a formula", "write 0 if nothing is meant";
    TooDeep: "the formula is nested more than {0} deep", "a shorter formula", "split it through shorthand";
    TooLong: "the formula has more than {0} operators in a row", "a shorter formula", "split it through shorthand";
    BreaksOff: "the formula breaks off here", "a number, a name or \"(\"", "something must follow the last operator";
    // Operators and operands.
    Dash: "this dash is not a minus sign", "-", "write the plain hyphen \"-\"";
    DoubleStar: "\"**\" is not an operator", "^", "write a power as a^b";
    ForeignOperator: "\"{0}\" is not an operator here", "{1}", "write \"{1}\"";
    PlusSign: "a sign \"+\" before a term is not needed", "a number, a name or \"(\"", "leave it out";
    OperandMissing: "an operand is missing before this", "a number, a name or \"(\"", "put a number, a name or a parenthesis there";
    OperandMissingBetween: "an operand is missing before this operator", "a number, a name or \"(\"", "put a number, a name or a parenthesis between the two operators";
    OperatorMissing: "an operator is missing between these two", "*", "{0}";
    // Numbers.
    NumberTooLarge: "this number is too large", "a number below 1.8e308", "the largest number is about 1.8e308; choose larger units";
    DecimalComma: "a comma stands where a decimal point belongs", "a decimal point", "write a decimal point: \"1.5\", not \"1,5\"";
    // Parentheses and commas.
    NeverClosed: "this parenthesis is never closed", "a \")\" later on", "add the missing \")\"";
    NoneOpen: "no parenthesis is open here", "an operator or the end", "remove this \")\"";
    StrayComma: "a comma does not belong here", "an operator or the end", "commas stand only between the arguments of a function; a decimal comma must be a point";
    Semicolon: "arguments are separated by commas", ",", "write \",\"; a decimal comma must be a point";
    // Characters that formulas do not have.
    EqualsSign: "\"{0}\" is not part of a formula", "an operator or the end", "write only what stands on its right; for a comparison switch smoothly with ramp(x, lo, hi), min, max or clamp";
    Comparison: "\"{0}\" is not part of a formula", "an operator or the end", "formulas have no comparisons: switch smoothly with ramp(x, lo, hi), min, max or clamp";
    PercentSign: "\"{0}\" is not part of a formula", "an operator or the end", "write 5 % as 0.05";
    Bracket: "\"{0}\" is not part of a formula", "an operator or the end", "use the parentheses ( and )";
    QuotationMark: "the quotation mark {0} is not part of a formula", "an operator or the end", "remove it";
    Strange: "{0} is not part of a formula", "an operator or the end", "formulas hold numbers, names, + - * / ^, parentheses and functions";
    // Functions.
    Log: "\"{0}\" is not a function", "an operator before the parenthesis", "write ln(x) for the natural logarithm, log10(x) for the decimal one";
    Pow: "\"{0}\" is not a function", "an operator before the parenthesis", "write a power as a^b";
    Periodic: "\"{0}\" is not a function", "a formula without time", "a model cannot depend on time: put the average over the season in its place";
    Switch: "\"{0}\" is not a function", "an operator before the parenthesis", "switch smoothly with ramp(x, lo, hi), min, max or clamp";
    FunctionNear: "\"{0}\" is not a function", "an operator before the parenthesis", "did you mean \"{1}\"? For a product write {0}*(…)";
    NotAFunction: "\"{0}\" is not a function", "an operator before the parenthesis", "for a product write {0}*(…)";
    TooFewArguments: "\"{0}\" takes {1}, and {2} here", "{3}", "write {3}: {4}";
    TooManyArguments: "\"{0}\" takes {1}, and {2} here", "{3}", "write {3}: {4}; a decimal comma must be a point";
}
}

impl Words {
    /// The slip at some bytes, with the values in order; long values are clipped.
    pub(super) fn at(self, span: Span, values: &[&dyn Display]) -> Slip {
        let [message, expected, help] = self.row().map(|template| fill(template, values));
        Slip { span, message, expected, help }
    }
}

impl Slip {
    /// A character that formulas do not have.
    pub(super) fn strange(c: char, span: Span) -> Self {
        match c {
            '=' => Words::EqualsSign.at(span, &[&c]),
            '<' | '>' | '!' | '≤' | '≥' => Words::Comparison.at(span, &[&c]),
            '%' => Words::PercentSign.at(span, &[&c]),
            '[' | ']' | '{' | '}' => Words::Bracket.at(span, &[&c]),
            '"' | '\'' => Words::QuotationMark.at(span, &[&c]),
            _ => Words::Strange.at(span, &[&shown(c)]),
        }
    }

    /// Two operands with nothing between them.
    pub(super) fn missing_operator(span: Span, left: &ExprKind, right: Option<&Token>) -> Self {
        let help = match (left, right) {
            (ExprKind::Number(value), Some(Token::Name(name))) => format!("write {value}*{name}"),
            (_, Some(Token::Open)) => "write a * between them".to_owned(),
            _ => "write an operator between them, * for a product".to_owned(),
        };
        Words::OperatorMissing.at(span, &[&help])
    }

    /// A name before a parenthesis that is no function's.
    pub(super) fn not_a_function(name: &str, span: Span) -> Self {
        match (name, nearest(name, BUILTINS.iter().map(|row| row.name))) {
            ("log", _) => Words::Log.at(span, &[&name]),
            ("pow", _) => Words::Pow.at(span, &[&name]),
            ("sin" | "cos" | "tan", _) => Words::Periodic.at(span, &[&name]),
            ("if" | "ifelse" | "where" | "step", _) => Words::Switch.at(span, &[&name]),
            (_, Some(function)) => Words::FunctionNear.at(span, &[&name, &function]),
            (_, None) => Words::NotAFunction.at(span, &[&name]),
        }
    }

    /// A function with too few or too many arguments.
    pub(super) fn arguments(builtin: Builtin, found: usize, span: Span) -> Self {
        let row = builtin.row();
        let wanted = row.arguments.len();
        let wants = if wanted == 1 { "1 argument".to_owned() } else { format!("{wanted} arguments") };
        let stand = if found == 1 { "1 stands".to_owned() } else { format!("{found} stand") };
        let form = format!("{}({})", row.name, row.arguments.join(", "));
        let words = if found > wanted { Words::TooManyArguments } else { Words::TooFewArguments };
        words.at(span, &[&row.name, &wants, &stand, &form, &row.help])
    }
}

/// A character in quotes, or its code point where it cannot be seen.
fn shown(c: char) -> String {
    let visible = !c.is_control() && !c.is_whitespace() && !('\u{200b}'..='\u{206f}').contains(&c) && c != '\u{feff}';
    if visible { format!("\"{c}\"") } else { format!("the invisible character U+{:04X}", u32::from(c)) }
}
