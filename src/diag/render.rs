//! Diagnostics as text: what, where, the line with a caret, what was expected, related places, what to do.
//!
//! One line is shown for each place, clipped around the span, so the cost does not grow with the file. Nothing is
//! printed here. Start at [`render`]; [`position`] turns a place into line and column.

use annotate_snippets::renderer::Renderer;
use annotate_snippets::{Annotation, AnnotationKind, Group, Level, Snippet};

use super::cleanse::{cleanse, clip, is_hostile};
use super::{Diagnostic, Location, Severity, Source, Sources, Span};

/// Characters shown on either side of the start of a span; what is longer is cut and marked with `…`.
const MARGIN: usize = 100;

/// Wider than any excerpt made here, so that the renderer does not cut a second time.
const WIDTH: usize = 1000;

/// Characters of a message or label that are shown.
const TEXT_LIMIT: usize = 600;

/// The diagnostic as lines of text, ending in a line break. `colour` adds ANSI escapes. Text from files is cleansed.
#[must_use]
pub fn render(diagnostic: &Diagnostic, sources: &Sources, colour: bool) -> String {
    let level = match diagnostic.severity {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
    };
    let mut group = Group::with_title(level.primary_title(harmless(&diagnostic.message)));
    let excerpts = excerpts(diagnostic, sources);
    for (index, excerpt) in excerpts.iter().enumerate() {
        group = group.element(excerpt.snippet(placeholder(index)));
    }
    if !diagnostic.help.is_empty() {
        group = group.element(Level::HELP.message(harmless(&diagnostic.help)));
    }
    let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
    let text = renderer.term_width(WIDTH).render(&[group]);
    let text = excerpts.iter().enumerate().fold(text, |text, (index, excerpt)| with_header(&text, index, excerpt));
    text + "\n"
}

/// The renderer counts columns in the clipped line, so it is given a name that no cleansed text can hold, and what it
/// makes of it is replaced.
fn placeholder(index: usize) -> String {
    format!("\u{fdd0}{index}:")
}

fn with_header(text: &str, index: usize, excerpt: &Excerpt) -> String {
    let mark = placeholder(index);
    let Some((before, after)) = text.split_once(&mark) else {
        return text.to_owned();
    };
    let after = after.trim_start_matches(|c: char| c.is_ascii_digit() || c == ':');
    format!("{before}{}:{}:{}{after}", excerpt.name, excerpt.number, excerpt.column)
}

/// Name of the source, line and column (in characters) of a place, both from 1. A place outside its source is moved to
/// the nearest character; a source that does not exist is called `?`.
#[must_use]
pub fn position(sources: &Sources, at: Location) -> (String, usize, usize) {
    let Some(source) = sources.get(at.source) else {
        return ("?".to_owned(), 1, 1);
    };
    let (line, span) = line_around(&source.text, at.span);
    let number = source.text[..line.start].matches('\n').count() + 1;
    let column = source.text[line.start..span.start].chars().count() + 1;
    (source.name.clone(), number, column)
}

/// One line of a source with the places on it that are to be marked, the first of them named in the header.
struct Excerpt {
    name: String,
    number: usize,
    column: usize,
    /// The byte of the line that the excerpt is cut around.
    anchor: usize,
    line: Span,
    text: String,
    marks: Vec<Mark>,
}

struct Mark {
    kind: AnnotationKind,
    span: Span,
    label: String,
}

impl Excerpt {
    fn snippet(&self, path: String) -> Snippet<'_, Annotation<'_>> {
        let marks = self.marks.iter().map(|mark| {
            let annotation = mark.kind.span(mark.span.start..mark.span.end);
            if mark.label.is_empty() { annotation } else { annotation.label(mark.label.as_str()) }
        });
        Snippet::source(self.text.as_str()).path(path).line_start(self.number).annotations(marks)
    }
}

fn excerpts(diagnostic: &Diagnostic, sources: &Sources) -> Vec<Excerpt> {
    let expected = match diagnostic.expected.as_str() {
        "" => String::new(),
        text => harmless(&format!("expected {text}")),
    };
    let first = (diagnostic.at, AnnotationKind::Primary, expected);
    let others = diagnostic.related.iter().map(|(at, text)| (*at, AnnotationKind::Context, harmless(text)));
    let mut excerpts: Vec<Excerpt> = Vec::new();
    for (at, kind, label) in std::iter::once(first).chain(others) {
        let Some(source) = sources.get(at.source) else { continue };
        let (line, span) = line_around(&source.text, at.span);
        let name = harmless(&source.name);
        let known = excerpts.iter_mut().find(|known| known.name == name && known.line == line);
        let Some(known) = known else {
            excerpts.push(excerpt(source, line, span, kind, label));
            continue;
        };
        // A place that the clipped line no longer shows is left to the text of its label.
        let cut = Cut::around(&source.text[line.start..line.end], known.anchor);
        if let Some(span) = cut.shown(shifted(span, line.start)) {
            known.marks.push(Mark { kind, span, label });
        }
    }
    excerpts
}

fn excerpt(source: &Source, line: Span, span: Span, kind: AnnotationKind, label: String) -> Excerpt {
    let text = &source.text[line.start..line.end];
    let column = text[..span.start - line.start].chars().count() + 1;
    let anchor = span.start - line.start;
    let cut = Cut::around(text, anchor);
    let shown = cut.shown(shifted(span, line.start)).unwrap_or_default();
    Excerpt {
        name: harmless(&source.name),
        number: source.text[..line.start].matches('\n').count() + 1,
        column,
        anchor,
        line,
        text: cut.text,
        marks: vec![Mark { kind, span: shown, label }],
    }
}

fn shifted(span: Span, by: usize) -> Span {
    Span::new(span.start - by, span.end - by)
}

/// The part of a line around a column, harmless, with the byte of the line that each byte of it came from.
struct Cut {
    text: String,
    /// For each character kept, and the end: its byte in the line, its byte in `text`.
    bytes: Vec<(usize, usize)>,
}

impl Cut {
    /// `byte` is the place in the line that is to be seen; it begins a character.
    fn around(line: &str, byte: usize) -> Self {
        let start = line[..byte].char_indices().rev().nth(MARGIN).map_or(0, |(byte, _)| byte);
        let mut cut = Self { text: if start > 0 { "…".to_owned() } else { String::new() }, bytes: Vec::new() };
        let mut rest = line[start..].char_indices().map(|(byte, c)| (start + byte, c));
        for (byte, c) in rest.by_ref().take(2 * MARGIN) {
            cut.bytes.push((byte, cut.text.len()));
            cut.text.push(if c != '\t' && is_hostile(c) { char::REPLACEMENT_CHARACTER } else { c });
        }
        let next = rest.next();
        cut.bytes.push((next.map_or(line.len(), |(byte, _)| byte), cut.text.len()));
        if next.is_some() {
            cut.text.push('…');
        }
        cut
    }

    /// Where a span of the line stands in the cut; `None` where it begins outside.
    fn shown(&self, span: Span) -> Option<Span> {
        let start = self.bytes.binary_search_by_key(&span.start, |&(byte, _)| byte).ok()?;
        let end = self.bytes.partition_point(|&(byte, _)| byte < span.end);
        let last = self.bytes.len() - 1;
        let (_, start) = self.bytes[start];
        let (_, end) = self.bytes[end.min(last)];
        Some(Span::new(start, end.max(start)))
    }
}

/// The line that a span begins on, without its break, and the span moved into that line and onto whole characters.
fn line_around(text: &str, span: Span) -> (Span, Span) {
    let start = floor(text, span.start);
    let line_start = text[..start].rfind('\n').map_or(0, |newline| newline + 1);
    let line_end = text[start..].find('\n').map_or(text.len(), |newline| start + newline);
    let trimmed = text[line_start..line_end].trim_end_matches('\r').len() + line_start;
    let start = start.min(trimmed);
    let end = floor(text, span.end).clamp(start, trimmed.max(start));
    (Span::new(line_start, trimmed), Span::new(start, end))
}

fn floor(text: &str, byte: usize) -> usize {
    let mut byte = byte.min(text.len());
    while !text.is_char_boundary(byte) {
        byte -= 1;
    }
    byte
}

fn harmless(text: &str) -> String {
    clip(&cleanse(text), TEXT_LIMIT).into_owned()
}

#[cfg(test)]
mod tests;
