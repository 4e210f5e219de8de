//! Formula text → tokens. Never fails: what it cannot read becomes a `Token::Strange`.

use unicode_ident::{is_xid_continue, is_xid_start};
use unicode_normalization::UnicodeNormalization;

use crate::diag::Span;

/// The smallest pieces of a formula.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Token {
    /// An unsigned decimal literal, as the nearest f64 (infinite where it is too large).
    Number(f64),
    /// An identifier (UAX 31 with the underscore as a further start), in NFC.
    Name(String),
    /// `+`
    Plus,
    /// `-`
    Minus,
    /// `*`
    Star,
    /// `**`, which other languages use for powers.
    DoubleStar,
    /// `/`
    Slash,
    /// `^`
    Caret,
    /// `(`
    Open,
    /// `)`
    Close,
    /// `,`
    Comma,
    /// Anything else.
    Strange(char),
}

impl Token {
    /// Whether it joins two operands.
    pub(super) fn is_operator(&self) -> bool {
        matches!(self, Self::Plus | Self::Minus | Self::Star | Self::DoubleStar | Self::Slash | Self::Caret)
    }
}

/// Splits a formula into tokens with the bytes that they came from.
pub(super) fn tokens(text: &str) -> Vec<(Token, Span)> {
    let mut found = Vec::new();
    let mut at = 0;
    while let Some(c) = text[at..].chars().next() {
        let length = if c.is_whitespace() {
            c.len_utf8()
        } else {
            let (token, length) = token(&text[at..], c);
            found.push((token, Span::new(at, at + length)));
            length
        };
        at += length;
    }
    found
}

/// The token that `rest` starts with, and its length in bytes.
fn token(rest: &str, first: char) -> (Token, usize) {
    if starts_number(rest) {
        let length = number_length(rest.as_bytes());
        return (Token::Number(rest[..length].parse().unwrap_or(f64::INFINITY)), length);
    }
    if first == '_' || is_xid_start(first) {
        let length = rest.find(|c: char| !is_xid_continue(c)).unwrap_or(rest.len());
        return (Token::Name(rest[..length].nfc().collect()), length);
    }
    if rest.starts_with("**") {
        return (Token::DoubleStar, 2);
    }
    let token = match first {
        '+' => Token::Plus,
        '-' => Token::Minus,
        '*' => Token::Star,
        '/' => Token::Slash,
        '^' => Token::Caret,
        '(' => Token::Open,
        ')' => Token::Close,
        ',' => Token::Comma,
        other => Token::Strange(other),
    };
    (token, first.len_utf8())
}

fn starts_number(rest: &str) -> bool {
    let bytes = rest.as_bytes();
    bytes[0].is_ascii_digit() || (bytes[0] == b'.' && bytes.get(1).is_some_and(u8::is_ascii_digit))
}

/// Digits, a point with digits, and an exponent only where digits follow: `2e` is 2 and then a name.
fn number_length(bytes: &[u8]) -> usize {
    let digits = |from: usize| bytes[from..].iter().take_while(|b| b.is_ascii_digit()).count();
    let mut length = digits(0);
    if bytes.get(length) == Some(&b'.') {
        length += 1 + digits(length + 1);
    }
    if matches!(bytes.get(length), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(length + 1), Some(b'+' | b'-')));
        let exponent = digits((length + 1 + sign).min(bytes.len()));
        if exponent > 0 {
            length += 1 + sign + exponent;
        }
    }
    length
}

/// Whether a text is one identifier, as formulas read it.
pub fn is_identifier(text: &str) -> bool {
    let mut characters = text.chars();
    characters.next().is_some_and(|c| c == '_' || is_xid_start(c)) && characters.all(is_xid_continue)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(text: &str, expected: &[Token]) {
        let found: Vec<Token> = tokens(text).into_iter().map(|(token, _)| token).collect();
        assert_eq!(found, expected, "{text}");
    }

    #[test]
    fn splits() {
        use Token::{Caret, Minus, Name, Number, Open, Star};
        let name = |s: &str| Name(s.into());
        check("1.5e-3", &[Number(0.0015)]);
        check("2e", &[Number(2.0), name("e")]);
        check("2e+", &[Number(2.0), name("e"), Token::Plus]);
        check(".5 1.", &[Number(0.5), Number(1.0)]);
        check("2N", &[Number(2.0), name("N")]);
        check("a-β^2*(", &[name("a"), Minus, name("β"), Caret, Number(2.0), Star, Open]);
        check("N**2", &[name("N"), Token::DoubleStar, Number(2.0)]);
        check("1e400", &[Number(f64::INFINITY)]);
        // e followed by a combining acute accent is the same name as the single character.
        check("e\u{301}", &[name("é")]);
        check("a − b", &[name("a"), Token::Strange('−'), name("b")]);
    }
}
