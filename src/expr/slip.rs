//! What can be wrong in a formula, in words.

use super::ast::{Builtin, ExprKind};
use super::builtin::BUILTINS;
use super::lex::Token;
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

impl Slip {
    pub(super) fn new(span: Span, message: &str, expected: &str, help: &str) -> Self {
        Self { span, message: message.into(), expected: expected.into(), help: help.into() }
    }

    /// A character that formulas do not have.
    pub(super) fn strange(c: char, span: Span) -> Self {
        let (what, help) = match c {
            '=' | '<' | '>' | '!' | '≤' | '≥' => {
                (shown(c), "formulas have no comparisons: switch smoothly with ramp(x, lo, hi), min, max or clamp")
            }
            '%' => (shown(c), "write 5 % as 0.05"),
            '[' | ']' | '{' | '}' => (shown(c), "use the parentheses ( and )"),
            '"' | '\'' => (format!("the quotation mark {c}"), "remove it"),
            _ => (shown(c), "formulas hold numbers, names, + - * / ^, parentheses and functions"),
        };
        Self::new(span, &format!("{what} is not part of a formula"), "an operator or the end", help)
    }

    /// Two operands with nothing between them.
    pub(super) fn missing_operator(span: Span, left: &ExprKind, right: Option<&Token>) -> Self {
        let help = match (left, right) {
            (ExprKind::Number(value), Some(Token::Name(name))) => format!("write {value}*{name}"),
            (_, Some(Token::Open)) => "write a * between them".to_owned(),
            _ => "write an operator between them, * for a product".to_owned(),
        };
        Self::new(span, "an operator is missing between these two", "*", &help)
    }

    /// A name before a parenthesis that is no function's.
    pub(super) fn not_a_function(name: &str, span: Span) -> Self {
        let names = BUILTINS.iter().map(|row| row.name);
        let help = match (name, nearest(name, names)) {
            ("log", _) => "write ln(x) for the natural logarithm, log10(x) for the decimal one".to_owned(),
            ("pow", _) => "write a power as a^b".to_owned(),
            (_, Some(function)) => format!("did you mean \"{function}\"? For a product write {name}*(…)"),
            (_, None) => format!("for a product write {name}*(…)"),
        };
        Self::new(span, &format!("\"{name}\" is not a function"), "an operator before the parenthesis", &help)
    }

    /// A function with too few or too many arguments.
    pub(super) fn arguments(builtin: Builtin, found: usize, span: Span) -> Self {
        let row = builtin.row();
        let wanted = row.arguments.len();
        let form = format!("{}({})", row.name, row.arguments.join(", "));
        let plural = if wanted == 1 { "" } else { "s" };
        let verb = if found == 1 { "stands" } else { "stand" };
        let message = format!("\"{}\" takes {wanted} argument{plural}, and {found} {verb} here", row.name);
        let comma = if found > wanted { "; a decimal comma must be a point" } else { "" };
        Self::new(span, &message, &form, &format!("write {form}: {}{comma}", row.help))
    }
}

/// A character in quotes, or its code point where it cannot be seen.
fn shown(c: char) -> String {
    let visible = !c.is_control() && !c.is_whitespace() && !('\u{200b}'..='\u{206f}').contains(&c) && c != '\u{feff}';
    if visible { format!("\"{c}\"") } else { format!("the invisible character U+{:04X}", u32::from(c)) }
}
