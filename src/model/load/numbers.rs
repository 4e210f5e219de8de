//! Why a text is not a number, and how it should have been written.

use crate::expr::lex::is_identifier;
use crate::model::messages::Message;

/// The message for a text that stands where a number should, with the advice that it repeats. `plain` says that no
/// quotation marks stood around it.
pub(super) fn why_not_a_number(text: &str, plain: bool) -> (Message, String) {
    let trimmed = text.trim();
    let is_number =
        |text: &str| text.parse::<f64>().is_ok_and(f64::is_finite) && text.contains(|c: char| c.is_ascii_digit());
    if !plain && is_number(trimmed) {
        return (Message::QuotedNumber, String::new());
    }
    let pointed = trimmed.replacen(',', ".", 1);
    if trimmed.contains(',') && is_number(&pointed) {
        let joined = trimmed.replacen(',', "", 1);
        let thousands = trimmed.split_once(',').is_some_and(|(_, after)| after.len() == 3);
        let advice =
            if thousands { format!("{pointed}, or {joined} where the comma marks thousands") } else { pointed };
        return (Message::DecimalComma, advice);
    }
    let hyphened = trimmed.replace(['−', '–'], "-");
    if hyphened != trimmed && is_number(&hyphened) {
        return (Message::NumberDash, hyphened);
    }
    let joined: String = trimmed.chars().filter(|c| !is_group_mark(*c)).collect();
    if joined.len() < trimmed.len() && is_number(&joined) {
        return (Message::DigitGroups, joined);
    }
    if trimmed.strip_suffix('%').is_some_and(|share| is_number(&share.trim().replacen(',', ".", 1))) {
        return (Message::Percent, String::new());
    }
    if trimmed.parse::<f64>().is_ok_and(f64::is_infinite) && trimmed.contains(|c: char| c.is_ascii_digit()) {
        return (Message::NumberTooLarge, String::new());
    }
    if is_number(trimmed) {
        return (Message::LeadingZero, without_leading_zeros(trimmed));
    }
    if trimmed.parse::<f64>().is_ok() || trimmed.ends_with('∞') {
        return (Message::NotFinite, String::new());
    }
    match behind_number(trimmed) {
        Some((_, exponent)) if is_exponent(exponent) => return (Message::NotANumber, String::new()),
        Some((number, unit)) => {
            return (Message::NumberWithUnit, format!("{{value: {number}, unit: {unit}}}"));
        }
        None => {}
    }
    let operators = ['+', '-', '*', '/', '^', '('];
    if trimmed.contains(operators) && trimmed.contains(|c: char| c.is_alphanumeric()) && !is_identifier(trimmed) {
        return (Message::FormulaForNumber, String::new());
    }
    (Message::NotANumber, String::new())
}

/// A number, and the letters behind it with all that follows them.
fn behind_number(text: &str) -> Option<(&str, &str)> {
    let end = text.find(|c: char| c.is_whitespace() || c.is_alphabetic())?;
    let (number, rest) = (&text[..end], text[end..].trim_start());
    (rest.starts_with(char::is_alphabetic) && number.parse::<f64>().is_ok()).then_some((number, rest))
}

/// Whether letters behind a number are the power of ten of a number that was badly written.
fn is_exponent(text: &str) -> bool {
    text.strip_prefix(['e', 'E'])
        .is_some_and(|power| power.starts_with(|c: char| c.is_ascii_digit() || "+-".contains(c)))
}

fn without_leading_zeros(digits: &str) -> String {
    let (sign, digits) = digits.split_at(digits.len() - digits.trim_start_matches(['+', '-']).len());
    match digits.trim_start_matches('0') {
        "" => "0".to_owned(),
        rest => format!("{sign}{rest}"),
    }
}

/// What people write between groups of digits.
fn is_group_mark(c: char) -> bool {
    c.is_whitespace() || matches!(c, '_' | '\'' | '’' | ',')
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_slip_is_recognised() {
        for (text, plain, message, advice) in [
            ("0.5", false, Message::QuotedNumber, ""),
            ("1,5", true, Message::DecimalComma, "1.5"),
            ("−0.7", true, Message::NumberDash, "-0.7"),
            ("1_000", true, Message::DigitGroups, "1000"),
            ("1 000", true, Message::DigitGroups, "1000"),
            ("1,000,000", true, Message::DigitGroups, "1000000"),
            ("5 %", true, Message::Percent, ""),
            ("1e400", true, Message::NumberTooLarge, ""),
            ("1,000", true, Message::DecimalComma, "1.000, or 1000 where the comma marks thousands"),
            ("017", true, Message::LeadingZero, "17"),
            ("-007", true, Message::LeadingZero, "-7"),
            ("00", true, Message::LeadingZero, "0"),
            ("0.5*r", true, Message::FormulaForNumber, ""),
            ("NA", true, Message::NotANumber, ""),
            ("inf", true, Message::NotFinite, ""),
            ("NaN", true, Message::NotFinite, ""),
            ("100 kt", true, Message::NumberWithUnit, "{value: 100, unit: kt}"),
            ("0.3/yr", true, Message::FormulaForNumber, ""),
            ("1.5kt/yr", true, Message::NumberWithUnit, "{value: 1.5, unit: kt/yr}"),
            ("4e-3.0", true, Message::NotANumber, ""),
            ("-", true, Message::NotANumber, ""),
        ] {
            assert_eq!(why_not_a_number(text, plain), (message, advice.to_owned()), "{text}");
        }
    }
}
