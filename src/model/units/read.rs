//! Unit strings as ecologists write them: `kt`, `t/km2`, `kg*m^-2*d^-1`, `t km-2 yr^-1`, `kg·m⁻²`, `1/(kt*yr)`, `%`, `-`.
//!
//! Products by `*`, `·`, `.` or a space, quotients by `/` or `per`, read from left to right; powers by `^`, by a digit
//! after a known unit, by a sign and digits, or by raised digits. A word that nobody knows is a unit of its own, and a
//! hyphen between letters belongs to the word (`trap-night`). Start at [`read`].

use std::fmt::Display;

use super::known;
use super::message::Words;
use super::unit::{LARGEST_POWER, Unit};
use crate::diag::Span;

/// Longest unit that is read, in bytes; longer ones are some other text in the wrong place.
const LONGEST: usize = 200;
/// Most brackets inside one another.
const DEEPEST: usize = 16;

/// Why a text is not a unit.
#[derive(Clone, Debug, PartialEq)]
pub struct Malformed {
    /// Which bytes of the text.
    pub span: Span,
    /// What is wrong, as one plain sentence.
    pub message: String,
    /// What was expected there.
    pub expected: String,
    /// What to do about it.
    pub help: String,
}

/// The unit that `text` writes.
///
/// # Errors
///
/// [`Malformed`] at the first bytes that cannot be read.
pub fn read(text: &str) -> Result<Unit, Malformed> {
    let whole = Span::new(0, text.len());
    match text.trim() {
        "" => return Err(malformed(Words::Empty, whole, &[])),
        "-" | "–" | "—" => return Ok(Unit::one()),
        _ if text.len() > LONGEST => return Err(malformed(Words::TooLong, whole, &[])),
        _ => {}
    }
    let mut reader = Reader { text, at: 0, depth: 0 };
    let unit = reader.product()?;
    match reader.peek() {
        None => Ok(unit),
        Some(_) => Err(reader.stray()),
    }
}

fn malformed(words: Words, span: Span, values: &[&dyn Display]) -> Malformed {
    let [message, expected, help] = words.with(values);
    Malformed { span, message, expected, help }
}

/// What a power follows, which decides how it may be written.
#[derive(Clone, Copy, PartialEq)]
enum Base {
    /// A unit of known size: digits right after it are a power.
    Known,
    /// Another word: digits right after it belong to it, a sign begins a power.
    Word,
    /// A number or a bracket: only `^` or raised digits.
    Other,
}

struct Reader<'t> {
    text: &'t str,
    at: usize,
    depth: usize,
}

impl<'t> Reader<'t> {
    /// Factors until the end, a closing bracket or something that is no factor.
    fn product(&mut self) -> Result<Unit, Malformed> {
        let mut unit = Unit::one();
        self.skip_spaces();
        let mut power = if matches!(self.peek(), Some('/' | 'p')) { self.operator().unwrap_or(1.0) } else { 1.0 };
        loop {
            unit.multiply(&self.factor()?, power);
            match self.operator() {
                Some(next) => power = next,
                None if self.starts_factor() => power = 1.0,
                None => return Ok(unit),
            }
        }
    }

    /// Takes an operator; gives the power of the factor after it.
    fn operator(&mut self) -> Option<f64> {
        self.skip_spaces();
        let rest = self.rest();
        let is_per =
            rest.strip_prefix("per").is_some_and(|after| after.is_empty() || after.starts_with(char::is_whitespace));
        let (length, power) = match self.peek()? {
            '/' => (1, -1.0),
            c @ ('*' | '·' | '⋅' | '×' | '.') => (c.len_utf8(), 1.0),
            'p' if is_per => (3, -1.0),
            _ => return None,
        };
        self.at += length;
        Some(power)
    }

    /// A bracket, a number or a name, with its power.
    fn factor(&mut self) -> Result<Unit, Malformed> {
        self.skip_spaces();
        let start = self.at;
        let (base, before) = match self.peek() {
            Some('(') => (self.bracket()?, Base::Other),
            Some(c) if c.is_ascii_digit() => (self.factor_number()?, Base::Other),
            Some(c) if is_name(c) => self.name(),
            Some(_) => return Err(self.stray()),
            None => {
                let before = self.text[..start].trim_end();
                let last = before.chars().next_back().map_or(0, char::len_utf8);
                let span = Span::new(before.len() - last, before.len());
                return Err(malformed(Words::BreaksOff, span, &[]));
            }
        };
        let power = self.power(before)?;
        let mut unit = Unit::one();
        unit.multiply(&base, power);
        Ok(unit)
    }

    fn bracket(&mut self) -> Result<Unit, Malformed> {
        let open = Span::new(self.at, self.at + 1);
        self.depth += 1;
        if self.depth > DEEPEST {
            return Err(malformed(Words::TooDeep, open, &[]));
        }
        self.at += 1;
        let inner = self.product()?;
        if self.peek().is_some_and(|c| c != ')') {
            return Err(self.stray());
        }
        if self.peek().is_none() {
            return Err(malformed(Words::NeverClosed, open, &[]));
        }
        self.at += 1;
        self.depth -= 1;
        Ok(inner)
    }

    /// A plain factor: `1`, `1000`, `1e6`.
    fn factor_number(&mut self) -> Result<Unit, Malformed> {
        let (number, span) = self.decimal();
        match number {
            Some(x) if x.is_finite() && x > 0.0 => Ok(Unit { log10: x.log10(), parts: Vec::new() }),
            _ => Err(malformed(Words::NotAFactor, span, &[&self.slice(span)])),
        }
    }

    /// A name, and which kind of one.
    fn name(&mut self) -> (Unit, Base) {
        let start = self.at;
        loop {
            let rest = self.rest();
            let mut next = rest.chars();
            match (next.next(), next.next()) {
                (Some(c), _) if is_name(c) => self.at += c.len_utf8(),
                (Some(c), _) if c.is_ascii_digit() && !known::is_known(&self.text[start..self.at]) => self.at += 1,
                (Some('-'), Some(c)) if c.is_alphabetic() => self.at += 1,
                _ => break,
            }
        }
        let name = &self.text[start..self.at];
        (Unit::named(name), if known::is_known(name) { Base::Known } else { Base::Word })
    }

    /// The power of what came before; 1 where there is none.
    fn power(&mut self, base: Base) -> Result<f64, Malformed> {
        let start = self.at;
        let rest = self.rest();
        let power = match self.peek() {
            Some('^') => self.raised("^")?,
            Some('*') if rest.starts_with("**") => self.raised("**")?,
            Some('-' | '−' | '+') if base != Base::Other => self.signed().ok_or_else(|| self.stray())?,
            Some(c) if c.is_ascii_digit() && base == Base::Known => self.signed().unwrap_or(1.0),
            Some(c) if raised_digit(c).is_some() || matches!(c, '⁻' | '⁺') => self.superscript(),
            _ => return Ok(1.0),
        };
        if power.abs() > LARGEST_POWER {
            return Err(malformed(Words::LargePower, Span::new(start, self.at), &[&LARGEST_POWER]));
        }
        Ok(power)
    }

    /// The power after `sign`, in brackets or not; a quotient only in brackets.
    fn raised(&mut self, sign: &str) -> Result<f64, Malformed> {
        let span = Span::new(self.at, self.at + sign.len());
        let missing = || malformed(Words::PowerMissing, span, &[&sign]);
        self.at += sign.len();
        self.skip_spaces();
        let open = self.at;
        if self.peek() != Some('(') {
            return self.signed().ok_or_else(missing);
        }
        self.at += 1;
        let mut power = self.signed().ok_or_else(missing)?;
        if self.peek() == Some('/') {
            self.at += 1;
            power /= self.signed().filter(|below| *below != 0.0).ok_or_else(missing)?;
        }
        self.skip_spaces();
        if self.peek() != Some(')') {
            return Err(malformed(Words::NeverClosed, Span::new(open, open + 1), &[]));
        }
        self.at += 1;
        Ok(power)
    }

    /// A decimal number with or without a sign.
    fn signed(&mut self) -> Option<f64> {
        self.skip_spaces();
        let start = self.at;
        let sign = match self.peek() {
            Some('+') => 1.0,
            Some('-' | '−') => -1.0,
            _ => 0.0,
        };
        if sign != 0.0 {
            self.at += self.peek().map_or(0, char::len_utf8);
        }
        match self.decimal().0 {
            Some(x) if sign < 0.0 => Some(-x),
            Some(x) => Some(x),
            None => {
                self.at = start;
                None
            }
        }
    }

    /// Digits with at most one point between digits, and a decimal exponent.
    fn decimal(&mut self) -> (Option<f64>, Span) {
        let start = self.at;
        self.digits();
        if self.at > start && self.rest().starts_with('.') && self.rest()[1..].starts_with(|c: char| c.is_ascii_digit())
        {
            self.at += 1;
            self.digits();
        }
        let before = self.at;
        if self.at > start && self.rest().starts_with(['e', 'E']) {
            self.at += 1;
            if self.rest().starts_with(['-', '+']) {
                self.at += 1;
            }
            let first = self.at;
            self.digits();
            if self.at == first {
                self.at = before;
            }
        }
        let span = Span::new(start, self.at);
        (self.slice(span).parse().ok(), span)
    }

    fn digits(&mut self) {
        self.at += self.rest().bytes().take_while(u8::is_ascii_digit).count();
    }

    fn superscript(&mut self) -> f64 {
        let start = self.at;
        let mut value = 0.0;
        while let Some(c) = self.peek() {
            match raised_digit(c) {
                Some(digit) => value = value * 10.0 + f64::from(digit),
                None if self.at == start && matches!(c, '⁻' | '⁺') => {}
                None => break,
            }
            self.at += c.len_utf8();
        }
        if self.text[start..].starts_with('⁻') { -value } else { value }
    }

    /// Whether another factor follows without an operator.
    fn starts_factor(&self) -> bool {
        self.peek().is_some_and(|c| c == '(' || c.is_ascii_digit() || is_name(c))
    }

    fn stray(&self) -> Malformed {
        let c = self.peek().unwrap_or(' ');
        let span = Span::new(self.at, (self.at + c.len_utf8()).min(self.text.len()));
        malformed(Words::Stray, span, &[&c.escape_debug()])
    }

    fn skip_spaces(&mut self) {
        let rest = self.rest();
        self.at += rest.len() - rest.trim_start().len();
    }

    fn peek(&self) -> Option<char> {
        self.rest().chars().next()
    }

    fn rest(&self) -> &'t str {
        &self.text[self.at..]
    }

    fn slice(&self, span: Span) -> &'t str {
        &self.text[span.start..span.end]
    }
}

fn is_name(c: char) -> bool {
    c.is_alphabetic() || matches!(c, '_' | '%' | '‰' | '€' | '£' | '$' | '¥' | '#' | '°')
}

fn raised_digit(c: char) -> Option<u32> {
    "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().zip(0..).find_map(|(raised, digit)| (raised == c).then_some(digit))
}
