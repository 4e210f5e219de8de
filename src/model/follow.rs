//! From a scalar's value back to the bytes of the file that made it.
//!
//! YAML unfolds lines, strips indentation and resolves escapes, so a place in a formula is not a place in the file.
//! [`origin`] walks the raw text by the rules of the scalar's style and keeps, for every byte of the value, the byte of
//! the source it came from. It trusts nothing: where the walk does not end in exactly the value that the parser gave, the
//! answer is empty and the whole scalar is the place.

use super::events::Style;
use crate::diag::Span;

/// For each byte of `value`, and one past the last, the byte of `source` that it came from; empty where it could not be
/// followed. `span` is the scalar's place in `source`, quotes and block header included.
pub(super) fn origin(source: &str, span: Span, style: Style, value: &str) -> Vec<u32> {
    let Some(raw) = source.get(span.start..span.end) else {
        return Vec::new();
    };
    let mut walk = Walk { value: String::with_capacity(value.len()), bytes: Vec::with_capacity(value.len() + 1) };
    let end = match style {
        Style::Plain => walk.flow(raw, 0, raw.len(), style),
        Style::SingleQuoted | Style::DoubleQuoted => walk.flow(raw, 1, raw.len().saturating_sub(1), style),
        Style::Literal | Style::Folded => walk.block(raw, value, style),
    };
    let followed = end.is_some_and(|end| walk.finish(value, end));
    let Ok(base) = u32::try_from(span.start) else {
        return Vec::new();
    };
    if followed { walk.bytes.iter().map(|byte| byte + base).collect() } else { Vec::new() }
}

/// The value as far as it was followed, and the raw byte of each of its bytes.
struct Walk {
    value: String,
    bytes: Vec<u32>,
}

impl Walk {
    fn push(&mut self, c: char, byte: usize) {
        self.value.push(c);
        let within = u32::try_from(byte).unwrap_or(u32::MAX);
        self.bytes.resize(self.value.len(), within);
    }

    /// A literal copy: each byte of the character has its own source byte.
    fn copy(&mut self, c: char, byte: usize) {
        self.value.push(c);
        let within = u32::try_from(byte).unwrap_or(u32::MAX);
        let width = u32::try_from(c.len_utf8()).unwrap_or(1);
        self.bytes.extend(within..within + width);
    }

    /// Whether the walk gave the value; trailing breaks that YAML chomped are dropped first.
    fn finish(&mut self, value: &str, end: usize) -> bool {
        let chomped = self.value.strip_prefix(value).is_some_and(|rest| rest.bytes().all(|b| b == b'\n'));
        let end = if chomped && self.value.len() > value.len() { self.bytes[value.len()] as usize } else { end };
        self.bytes.truncate(value.len());
        self.bytes.push(u32::try_from(end).unwrap_or(u32::MAX));
        chomped
    }

    /// Plain and quoted scalars: lines are trimmed and joined by a space, or by one break less than stood there.
    fn flow(&mut self, raw: &str, start: usize, end: usize, style: Style) -> Option<usize> {
        let body = raw.get(start..end)?;
        let mut at = 0;
        while let Some(c) = body[at..].chars().next() {
            let byte = start + at;
            if is_blank(c) || is_break(c) {
                at = self.white(body, at, start);
            } else if style == Style::DoubleQuoted && c == '\\' {
                at = self.escape(body, at, start)?;
            } else if style == Style::SingleQuoted && body[at..].starts_with("''") {
                self.push(c, byte);
                at += 2;
            } else {
                self.copy(c, byte);
                at += c.len_utf8();
            }
        }
        Some(end)
    }

    /// A run of blanks and breaks: kept as it is within a line, folded where it holds a break.
    fn white(&mut self, body: &str, at: usize, start: usize) -> usize {
        let rest = &body[at..];
        let run = &rest[..rest.find(|c| !is_blank(c) && !is_break(c)).unwrap_or(rest.len())];
        let breaks: Vec<usize> = run.match_indices('\n').map(|(byte, _)| start + at + byte).collect();
        match breaks.as_slice() {
            [] => run.char_indices().for_each(|(byte, c)| self.copy(c, start + at + byte)),
            [only] => self.push(' ', *only),
            [_, others @ ..] => others.iter().for_each(|&byte| self.push('\n', byte)),
        }
        at + run.len()
    }

    /// An escape of a double-quoted scalar; an escaped break joins two lines without a space.
    fn escape(&mut self, body: &str, at: usize, start: usize) -> Option<usize> {
        let code = body[at + 1..].chars().next()?;
        let after = at + 1 + code.len_utf8();
        if is_break(code) {
            let rest = body[at + 1..].trim_start_matches('\r').strip_prefix('\n')?;
            let from = body.len() - rest.len();
            let run = rest.find(|c| !is_blank(c) && !is_break(c)).unwrap_or(rest.len());
            for (byte, _) in rest[..run].match_indices('\n') {
                self.push('\n', start + from + byte);
            }
            return Some(from + run);
        }
        let digits = match code {
            'x' => 2,
            'u' => 4,
            'U' => 8,
            _ => 0,
        };
        let c = if digits == 0 {
            simple_escape(code)?
        } else {
            char::from_u32(u32::from_str_radix(body.get(after..after + digits)?, 16).ok()?)?
        };
        self.push(c, start + at);
        Some(after + digits)
    }

    /// Literal and folded scalars: the header goes, then the indentation of each line; folded lines are joined where
    /// neither begins with a blank.
    fn block(&mut self, raw: &str, value: &str, style: Style) -> Option<usize> {
        let body = raw.find('\n')? + 1;
        let indent = indentation(&raw[body..], value)?;
        let mut pending: Vec<usize> = Vec::new();
        let mut indented = false;
        for (start, line) in lines(raw, body) {
            let blanks = line.bytes().take(indent).take_while(|&b| b == b' ').count();
            let content = line[blanks..].trim_end_matches(['\n', '\r']);
            if !content.is_empty() {
                let deeper = content.starts_with(is_blank);
                self.join(&pending, style == Style::Folded && !indented && !deeper);
                pending.clear();
                indented = deeper;
                content.char_indices().for_each(|(byte, c)| self.copy(c, start + blanks + byte));
            }
            if line.ends_with('\n') {
                pending.push(start + blanks + content.len());
            }
        }
        self.join(&pending, false);
        Some(raw.len())
    }

    /// The breaks between two lines of a block; the first line has none to fold.
    fn join(&mut self, breaks: &[usize], fold: bool) {
        match breaks {
            [only] if fold && !self.value.trim_start_matches('\n').is_empty() => self.push(' ', *only),
            [_, others @ ..] if fold && !self.value.trim_start_matches('\n').is_empty() => {
                for &byte in others {
                    self.push('\n', byte);
                }
            }
            all => all.iter().for_each(|&byte| self.push('\n', byte)),
        }
    }
}

/// Spaces before the block's lines: those before its first line with content, less those that the value kept.
fn indentation(body: &str, value: &str) -> Option<usize> {
    let leading = |text: &str| {
        let line = text.split('\n').find(|line| !line.trim_matches(['\r', ' ']).is_empty())?;
        Some(line.bytes().take_while(|&b| b == b' ').count())
    };
    leading(body)?.checked_sub(leading(value)?)
}

/// Lines with their breaks, each with its first byte.
fn lines(raw: &str, from: usize) -> impl Iterator<Item = (usize, &str)> {
    raw[from..].split_inclusive('\n').scan(from, |next, line| {
        let start = *next;
        *next += line.len();
        Some((start, line))
    })
}

fn is_blank(c: char) -> bool {
    matches!(c, ' ' | '\t')
}

fn is_break(c: char) -> bool {
    matches!(c, '\n' | '\r')
}

fn simple_escape(code: char) -> Option<char> {
    Some(match code {
        '0' => '\0',
        'a' => '\u{7}',
        'b' => '\u{8}',
        't' | '\t' => '\t',
        'n' => '\n',
        'v' => '\u{b}',
        'f' => '\u{c}',
        'r' => '\r',
        'e' => '\u{1b}',
        ' ' | '"' | '/' | '\\' => code,
        'N' => '\u{85}',
        '_' => '\u{a0}',
        'L' => '\u{2028}',
        'P' => '\u{2029}',
        _ => return None,
    })
}

#[cfg(test)]
mod tests;
