//! Mistakes of YAML's grammar in the words of someone who writes models.
//!
//! [`explain`] turns the parser's complaint into advice; [`split`] speaks of what YAML accepts in silence: a comma
//! inside braces always parts two entries, also in the middle of a formula or of a number. To explain another complaint,
//! add a row to [`FAULTS`].

use super::events::{Fault, Style};
use super::messages::Message;
use super::tree::{Entry, Kind, Node};
use crate::diag::{Diagnostic, Location, SourceId, Span};
use crate::expr::lex::is_identifier;

/// Which of the fault's two places a message points to.
enum Point {
    Noticed,
    Began,
}

/// The parser's words, and ours.
const FAULTS: &[(&str, Message, Point)] = &[
    ("mapping values are not allowed", Message::YamlColon, Point::Noticed),
    ("found a tab character", Message::YamlTab, Point::Noticed),
    ("expected ',' or '}'", Message::YamlMapOpen, Point::Began),
    ("expected ',' or ']'", Message::YamlListOpen, Point::Began),
    ("found unexpected end of stream", Message::YamlQuoteOpen, Point::Began),
    ("found unexpected document indicator", Message::YamlQuoteOpen, Point::Began),
    ("found unknown escape character", Message::YamlEscape, Point::Noticed),
    ("did not find expected hexadecimal number", Message::YamlEscape, Point::Noticed),
    ("found invalid Unicode character escape code", Message::YamlEscape, Point::Noticed),
    ("did not find expected key", Message::YamlIndent, Point::Noticed),
    ("did not find expected '-' indicator", Message::YamlItem, Point::Noticed),
    ("could not find expected ':'", Message::YamlKeyColon, Point::Began),
    ("cannot start any token", Message::YamlStart, Point::Noticed),
    ("did not find expected alphabetic or numeric character", Message::YamlAlias, Point::Began),
];

/// The diagnostic for a fault of grammar.
pub(super) fn explain(text: &str, source: SourceId, fault: &Fault) -> Diagnostic {
    let place = |byte: usize| Location { source, span: character(text, byte) };
    let row = FAULTS.iter().find(|(words, ..)| fault.problem.contains(words));
    let byte = match row {
        Some((_, _, Point::Began)) => fault.began,
        _ => fault.at,
    };
    let here = place(byte);
    let word = text.get(here.span.start..here.span.end).unwrap_or_default();
    let line = line_at(text, fault.at);
    if let Some(formula) = formula_with_comma(&text[line.start..line.end]) {
        let span = Span::new(line.start + formula.start, line.start + formula.end);
        return Message::YamlSplitFormula.at(Location { source, span }, &[&&text[span.start..span.end]]);
    }
    let related = |message: Message, what: &str| message.at(here, &[]).related(place(fault.began), what);
    match row.map(|(_, message, _)| *message) {
        None => Message::YamlOther.at(here, &[&fault.problem]),
        // A tab that indents is met as a character that begins nothing.
        Some(Message::YamlStart) if word == "\t" => Message::YamlTab.at(here, &[]),
        Some(Message::YamlColon) => second_colon(text, source, fault),
        Some(Message::YamlKeyColon) => {
            let end = line_at(text, here.span.start).end.max(here.span.end);
            let span = Span::new(here.span.start, end);
            Message::YamlKeyColon.at(Location { source, span }, &[])
        }
        Some(Message::YamlMapOpen) if text.get(fault.at..).is_some_and(|rest| rest.starts_with(':')) => {
            let key = text[line.start..fault.at].rfind([' ', ',', '{']).map_or(line.start, |at| line.start + at + 1);
            Message::YamlComma.at(Location { source, span: Span::new(key, fault.at) }, &[])
        }
        Some(Message::YamlIndent) if word == "-" => related(Message::YamlDash, "the map begins here"),
        Some(Message::YamlIndent) if !text[line.start..here.span.start.max(line.start)].trim().is_empty() => {
            Message::YamlAfterValue.at(here, &[])
        }
        Some(Message::YamlIndent) => related(Message::YamlIndent, "the map begins here"),
        Some(Message::YamlItem) => related(Message::YamlItem, "the list begins here"),
        Some(message) => message.at(here, &[&word]),
    }
}

/// A colon where a value goes on: of a text that has one, of a map without braces, or of a line whose key was not seen
/// as one, because the line before it is not ended or not as far to the right.
fn second_colon(text: &str, source: SourceId, fault: &Fault) -> Diagnostic {
    let line = line_at(text, fault.at);
    let before_colon = &text[line.start..fault.at.clamp(line.start, line.end)];
    let is_key = |head: &str| !head.trim().is_empty() && !head.contains(": ");
    let begin = |line: Span| line.end - text[line.start..line.end].trim_start().len();
    if let Some((head, _)) = before_colon.split_once('{').filter(|(head, _)| is_key(head)) {
        let span = Span::new(begin(line), line.start + head.trim_end().len());
        return Message::YamlKeyColon.at(Location { source, span }, &[]);
    }
    if before_colon.contains(": ") {
        let here = Location { source, span: character(text, fault.at) };
        let value = value_of(&text[line.start..line.end]);
        let is_map = value.split_once(": ").is_some_and(|(key, rest)| is_identifier(key) && rest.contains(": "));
        let message = if is_map { Message::YamlBraces } else { Message::YamlColon };
        return message.at(here, &[&value]);
    }
    let before = line_at(text, text[..line.start].trim_end().len().saturating_sub(1));
    if text[before.start..before.end].contains(": ") {
        let span = Span::new(begin(line), fault.at.max(begin(line)));
        return Message::YamlDeeper.at(Location { source, span }, &[]);
    }
    Message::YamlKeyColon.at(Location { source, span: Span::new(begin(before), before.end) }, &[])
}

/// Whether a map's entry is a key to which no colon was written.
pub(super) fn stands_alone(text: &str, key: &Node, value: &Node) -> bool {
    let (Kind::Scalar(_), Kind::Scalar(value)) = (&key.kind, &value.kind) else {
        return false;
    };
    let after = text.get(key.at.span.end..).unwrap_or_default().trim_start();
    value.value.is_empty() && value.style == Style::Plain && !after.starts_with(':')
}

/// The diagnostic for a key that is the second half of the formula or number before it; `None` where it is not.
pub(super) fn split(text: &str, previous: Option<&Entry>, key: &Node, word: &str) -> Option<Diagnostic> {
    let value = &previous?.value;
    let (span, before) = match &value.kind {
        Kind::Scalar(scalar) if scalar.style == Style::Plain => (value.at.span, scalar.value.as_str()),
        _ => return None,
    };
    let place = |span| Location { source: key.at.source, span };
    let whole = Span::new(span.start, key.at.span.end);
    let joined = text.get(whole.start..whole.end).unwrap_or_default();
    let digits = is_digits(before.trim_start_matches(['+', '-'])) && word.starts_with(|c: char| c.is_ascii_digit());
    if digits && !joined.contains(char::is_whitespace) {
        return Some(Message::SplitNumber.at(place(whole), &[&joined, &format!("{before}.{word}")]));
    }
    if before.matches('(').count() <= before.matches(')').count() {
        return None;
    }
    let formula = balanced(text.get(span.start..).unwrap_or_default());
    let whole = Span::new(span.start, span.start + formula.len());
    Some(Message::SplitFormula.at(place(whole), &[&formula]))
}

/// A key, its colon and its value that were taken for one key, because no space follows the colon.
pub(super) fn joined(key: &Node) -> Option<(&str, &str)> {
    let Kind::Scalar(scalar) = &key.kind else { return None };
    let (name, value) = scalar.value.split_once(':').filter(|_| scalar.style == Style::Plain)?;
    let is_value = !value.is_empty() && !value.contains(|c: char| c == ':' || c.is_whitespace());
    (is_identifier(name) && is_value).then_some((name, value))
}

fn is_digits(text: &str) -> bool {
    !text.is_empty() && text.bytes().all(|b| b.is_ascii_digit())
}

/// From the start of a formula to the comma or brace after its last parenthesis has closed.
fn balanced(text: &str) -> &str {
    let line = text.lines().next().unwrap_or_default();
    let mut depth = 0_usize;
    for (byte, c) in line.char_indices() {
        match c {
            '(' => depth += 1,
            ')' => depth = depth.saturating_sub(1),
            ',' | '}' if depth == 0 => return line[..byte].trim_end(),
            _ => {}
        }
    }
    line.trim_end()
}

/// On a line with braces, the first unquoted value that has a comma inside parentheses.
fn formula_with_comma(line: &str) -> Option<Span> {
    let open = line.find('{')?;
    for (colon, _) in line[open..].match_indices(": ") {
        let value = line[open + colon + 2..].trim_start();
        let formula = balanced(value);
        if !value.starts_with(['"', '\'', '{', '[']) && formula.contains(',') {
            let start = line.len() - value.len();
            return Some(Span::new(start, start + formula.len()));
        }
    }
    None
}

/// What follows the first colon of a line.
fn value_of(line: &str) -> &str {
    line.split_once(": ").map_or(line, |(_, value)| value).trim()
}

/// The line that holds a byte, without its break.
fn line_at(text: &str, byte: usize) -> Span {
    let byte = character(text, byte).start;
    let start = text[..byte].rfind('\n').map_or(0, |newline| newline + 1);
    let line = text[start..].lines().next().unwrap_or_default();
    Span::new(start, start + line.len())
}

/// The character that holds a byte; the empty end where the text is over.
fn character(text: &str, byte: usize) -> Span {
    let mut start = byte.min(text.len());
    while !text.is_char_boundary(start) {
        start -= 1;
    }
    let width = text[start..].chars().next().filter(|&c| c != '\n' && c != '\r').map_or(0, char::len_utf8);
    Span::new(start, start + width)
}
